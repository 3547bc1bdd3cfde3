"""Where a harmonic function stops being smooth: singular points, branch cuts, and certified digits.

Near a singular point p, with r = |x - p|, a field behaves like a smooth function plus one of

    r^e  (e > 0, no whole number)   "power"      the value has a limit, high derivatives have none
    log r                           "log"        e = 0
    r^e  (e < 0)                    "pole"
    an angle                        "jump"       e = 0: boundary values jump, the value depends on the way in

A plane field with a power or an angle in it needs a branch cut: a straight segment or ray that its points
must not lie on, unless the caller says from which side they are meant.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal, NamedTuple, TypeAlias

import mpmath
import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.errors import FieldError

__all__ = ["Basis", "Cut", "Enclosure", "Singularity", "weakest_basis"]

Basis: TypeAlias = Literal["closed form", "tail bound", "maximum-principle bound", "confirmed", "uncertified"]
KINDS = ("power", "log", "pole", "jump")
STRENGTH: tuple[Basis, ...] = (
    "closed form", "tail bound", "maximum-principle bound", "confirmed", "uncertified"
)  # fmt: skip

ROUNDING = 16 * np.finfo(np.float64).eps  # of a point that was computed to lie on a cut


def weakest_basis(*bases: Basis) -> Basis:
    """Return the weakest of several bases: a sum is known no better than its worst term.

    >>> weakest_basis("closed form", "tail bound")
    'tail bound'
    """
    return max(bases, key=STRENGTH.index, default="closed form")


class Enclosure(NamedTuple):
    """A number with an error radius and the reason to believe it: |u - value| <= radius.

    `basis` is "closed form" (only rounding is left, and was compared at two precisions), "tail bound" (a
    series with a proven bound for what was left out), "maximum-principle bound" (a fit whose boundary
    residual bounds its error), "confirmed" (independent routes agree, which is no proof) or "uncertified" (a
    user's function whose inside is unknown).
    """

    value: mpmath.mpf
    radius: mpmath.mpf
    basis: Basis


@dataclass(frozen=True, slots=True, kw_only=True)
class Singularity:
    """A point where a field is not smooth; `exponent` and `kind` as in the table of the module.

    >>> Singularity(point=(0, 0), exponent=2/3, kind="power").point
    (0.0, 0.0)
    """

    point: tuple[float, ...]
    exponent: float
    kind: Literal["power", "log", "pole", "jump"]

    def __post_init__(self) -> None:
        """Check the kind and turn the point into floats.

        Raises
        ------
        FieldError
            If the kind is unknown, or a coordinate or the exponent is no finite number.
        """
        if self.kind not in KINDS:
            raise FieldError(f"kind of a singularity must be one of {', '.join(KINDS)}, got {self.kind!r}")
        try:
            point = tuple(float(c) for c in self.point)
            exponent = float(self.exponent)
        except (TypeError, ValueError) as cause:
            raise FieldError(f"a singular point must be a tuple of numbers, got {self.point!r}") from cause
        if not all(math.isfinite(c) for c in point) or math.isnan(exponent):
            raise FieldError(f"a singular point must be finite, got {self.point!r}, exponent {exponent}")
        object.__setattr__(self, "point", point)
        object.__setattr__(self, "exponent", exponent)


@dataclass(frozen=True, slots=True, kw_only=True)
class Cut:
    """A straight branch cut in the plane: from `start` along the unit vector `direction`, `length` long.

    Side +1 is the left of the direction, side -1 its right.

    >>> Cut(start=(0, 0), direction=(1, 0)).distance([[2.0, 3.0], [-3.0, 4.0]]).tolist()
    [3.0, 5.0]
    """

    start: tuple[float, float]
    direction: tuple[float, float]
    length: float = math.inf

    def distance(self, points: Array) -> Array:
        """Return the distance of each of the points (n, 2) from the cut, shape (n,)."""
        offsets = np.asarray(points, dtype=np.float64) - self.start
        along = np.clip(offsets @ np.asarray(self.direction), 0.0, self.length)
        away = offsets - along[:, np.newaxis] * self.direction
        distances: Array = np.hypot(away[:, 0], away[:, 1])
        return distances

    def meets(self, points: Array) -> BoolArray:
        """Return which points lie on the cut, to rounding; its own start does not count."""
        x, y = points[:, 0], points[:, 1]
        (start_x, start_y), (ex, ey) = self.start, self.direction
        dx, dy = x - start_x, y - start_y
        rounding = ROUNDING * (np.abs(x) + np.abs(y) + (abs(start_x) + abs(start_y)))
        on: BoolArray = np.abs(ex * dy - ey * dx) <= rounding
        if on.any():
            along = ex * dx + ey * dy
            on &= (along > (rounding if start_x or start_y else 0.0)) & (along <= self.length + rounding)
        return on

    def meets_exactly(self, x: mpmath.mpf, y: mpmath.mpf) -> bool:
        """Return whether one precise point lies on the cut: exactly if the cut is parallel to an axis.

        Within rounding of the start of another cut a point is not on it: there the start itself is meant.
        """
        dx, dy = x - self.start[0], y - self.start[1]
        along = dx * self.direction[0] + dy * self.direction[1]
        across = abs(self.direction[0] * dy - self.direction[1] * dx)
        exact = 0.0 in self.direction
        tolerance = 0.0 if exact else ROUNDING * (abs(x) + abs(y) + abs(self.start[0]) + abs(self.start[1]))
        return bool(tolerance < along <= self.length and across <= tolerance)
