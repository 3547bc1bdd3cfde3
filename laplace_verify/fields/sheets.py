"""Flat sheets in space across which a field or its gradient jumps: discs, as at plates, and fans.

A sheet is to a field of space what a branch cut is to a plane one: points on it need a side, +1 is where the
normal points. Often the value is the same on both sides, and only the gradient asks for one.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from laplace_verify.arrays import Array, BoolArray

__all__ = ["Fan", "Sheet"]

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


@dataclass(frozen=True, slots=True, kw_only=True)
class Fan:
    """A plane sector that the ray from `start` along `first` sweeps, turning by `opening` towards `second`.

    `first` and `second` are orthogonal unit vectors, 0 < opening <= pi; a half-plane if it is pi. Values on
    both sides differ; side +1 is where ``first x second`` points.

    >>> fan = Fan(start=(0, 0, 0), first=(0, 0, 1), second=(1, 0, 0), opening=math.pi)
    >>> fan.meets(np.array([[2.0, 0.0, -5.0], [-2.0, 0.0, 0.0], [0.0, 0.0, 1.0]])).tolist()
    [True, False, False]
    """

    start: tuple[float, ...]
    first: tuple[float, ...]
    second: tuple[float, ...]
    opening: float
    jump: bool = True

    @property
    def normal(self) -> tuple[float, ...]:
        """The unit normal on whose side +1 is."""
        return tuple((np.cross(self.first, self.second) + 0.0).tolist())

    def meets(self, points: Array) -> BoolArray:
        """Return which points (n, 3) lie on the sector, to rounding; its first ray does not count."""
        offset = np.asarray(points, dtype=np.float64) - self.start
        along, across, height = (offset @ np.asarray(e) for e in (self.first, self.second, self.normal))
        reach = ROUNDING * (np.abs(offset).max(axis=1) + float(np.abs(self.start).max()))
        on: BoolArray = (np.abs(height) <= reach) & (across > reach)
        on &= np.arctan2(across, along) <= self.opening
        return on

    def at(self, reach: Array, angle: Array) -> Array:
        """Return the points (n, 3) at distances from the start and angles from the first ray."""
        flat = (reach * np.cos(angle))[:, None] * self.first + (reach * np.sin(angle))[:, None] * self.second
        points: Array = np.asarray(self.start) + flat
        return points

    def moved(self, matrix: Array, vector: Array) -> Fan:
        """Return the image under x -> matrix x + vector."""
        first, plane = matrix @ np.asarray(self.first), matrix @ np.asarray(self.second)
        last = math.cos(self.opening) * first + math.sin(self.opening) * plane  # the ray where it ends
        first = first / math.sqrt(float(first @ first))
        second = plane - (plane @ first) * first
        second = second / math.sqrt(float(second @ second))
        turned = math.atan2(float(last @ second), float(last @ first))
        return Fan(
            start=tuple((matrix @ np.asarray(self.start) + vector).tolist()),
            first=tuple(first.tolist()),
            second=tuple(second.tolist()),
            opening=turned if self.opening < math.pi else math.pi,
            jump=self.jump,
        )
