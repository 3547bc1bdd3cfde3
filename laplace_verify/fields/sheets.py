"""Round sheets in space across which a field or its gradient jumps, as at the two faces of a plate.

A sheet is to a field of space what a branch cut is to a plane one: points on it need a side, +1 is where the
normal points. Often the value is the same on both sides, and only the gradient asks for one.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from laplace_verify.arrays import Array, BoolArray

__all__ = ["Sheet"]

ROUNDING = 4 * float(np.finfo(np.float64).eps)


@dataclass(frozen=True, slots=True, kw_only=True)
class Sheet:
    """The disc of a centre and radius, across the unit vector `normal`; `jump`: the value jumps there too.

    >>> sheet = Sheet(centre=(0, 0, 1), normal=(0, 0, 1), radius=2)
    >>> sheet.meets(np.array([[1.0, 1.0, 1.0], [1.0, 1.0, 1.1], [3.0, 0.0, 1.0]])).tolist()
    [True, False, False]
    """

    centre: tuple[float, ...]
    normal: tuple[float, ...]
    radius: float
    jump: bool = False

    def meets(self, points: Array) -> BoolArray:
        """Return which points (n, 3) lie on the sheet, to rounding; its rim does not count."""
        offset = np.asarray(points, dtype=np.float64) - self.centre
        height = offset @ np.asarray(self.normal)
        flat = offset - height[:, None] * self.normal
        size = float(np.abs(self.centre).max())
        exact = sum(1 for n in self.normal if n) == 1 and size == 0.0
        reach = 0.0 if exact else ROUNDING * (self.radius + size)
        on: BoolArray = (np.abs(height) <= reach) & (np.sqrt((flat**2).sum(axis=1)) < self.radius)
        return on

    def moved(self, matrix: Array, vector: Array) -> Sheet:
        """Return the image under x -> matrix x + vector, matrix a rotation times a positive number."""
        across = matrix @ np.asarray(self.normal)
        stretch = math.sqrt(float(across @ across))
        centre = tuple((matrix @ np.asarray(self.centre) + vector).tolist())
        normal, radius = tuple((across / stretch).tolist()), self.radius * stretch
        return Sheet(centre=centre, normal=normal, radius=radius, jump=self.jump)
