"""Sums that stand for one field, each near its own point: for float64, where one long sum would cancel.

Every part serves in a sector or disc about its apex, inside the region. There its terms fall at least like
2^-n, so that none is much larger than u. A point is given to the part whose sector holds it and to whose apex
it is nearest, in units of the part's reach.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, IntArray
from laplace_verify.contexts import FLOAT
from laplace_verify.fields._corner_sums import expansion_gradient, expansion_value, on_lip
from laplace_verify.fields.corner_series import CornerSeries, LocalSum
from laplace_verify.fields.exact import offset

__all__ = ["gradient_by_parts", "value_by_parts"]

OUTSIDE = 1e-12  # of the reach: a point may be put that far out of its sector by rounding
APART = 1e-6  # of the distance from the tip, by which points of a lip are moved inwards to choose a part

Corners = tuple[CornerSeries, ...]
Coordinates = tuple[Any, ...]


def value_by_parts(parts: tuple[LocalSum, ...], corners: Corners, x: Coordinates, side: Any) -> Array:
    """Return u at coordinates x, shape (n,); `corners` have the slits whose lips `side` tells apart."""
    values = np.empty(len(x[0]))

    def evaluate(rows: IntArray, part: LocalSum, place: Coordinates, lip: Any) -> None:
        values[rows] = expansion_value(FLOAT, place, lip, part.series)

    _each(parts, corners, x, side, evaluate)
    return values


def gradient_by_parts(
    parts: tuple[LocalSum, ...], corners: Corners, x: Coordinates, side: Any
) -> tuple[Array, Array]:
    """Return the two components of grad u, as `value_by_parts` does."""
    slopes = np.empty((2, len(x[0])))

    def evaluate(rows: IntArray, part: LocalSum, place: Coordinates, lip: Any) -> None:
        slopes[:, rows] = expansion_gradient(FLOAT, place, lip, part.series)

    _each(parts, corners, x, side, evaluate)
    return slopes[0], slopes[1]


def _each(
    parts: tuple[LocalSum, ...],
    corners: Corners,
    x: Coordinates,
    side: Any,
    evaluate: Callable[[IntArray, LocalSum, Coordinates, Any], None],
) -> None:
    """Call `evaluate` for every part with its points."""
    choice = _nearest(parts, _off_lips(corners, x, side))
    for k in np.unique(choice):
        rows = np.flatnonzero(choice == k)
        evaluate(rows, parts[k], tuple(c[rows] for c in x), None if side is None else side[rows])


def _off_lips(corners: Corners, x: Coordinates, side: Any) -> Coordinates:
    """Return points with those on the lips of a slit moved a little to the side that is meant."""
    if side is None:
        return x
    across, along = x
    for corner in corners:
        if corner.start == corner.stop:
            dx, dy = offset(FLOAT, across, corner.apex[0]), offset(FLOAT, along, corner.apex[1])
            ex, ey = corner.bisector
            step = np.where(on_lip(dx, dy, side, corner), APART * side * (np.abs(dx) + np.abs(dy)), 0.0)
            across, along = across - step * ey, along + step * ex
    return across, along


def _nearest(parts: tuple[LocalSum, ...], x: Coordinates) -> IntArray:
    """Return the number of the part that serves at each point."""
    least = np.full(len(x[0]), np.inf)
    choice = np.zeros(len(x[0]), dtype=np.int64)
    for k, part in enumerate(parts):
        reach = float(part.reach)
        dx, dy = (offset(FLOAT, c, a) / reach for c, a in zip(x, part.apex, strict=True))
        score = np.sqrt(dx * dx + dy * dy)
        if part.start != part.stop:
            # the second term tells the two lips of a slit apart, the third keeps to the sector
            out = _outside(part, dx, dy)
            score = score + 1e3 * out + 3.0 * (out > OUTSIDE)
        nearer = score < least
        least[nearer] = score[nearer]
        choice[nearer] = k
    return choice


def _outside(part: LocalSum, dx: Array, dy: Array) -> Array:
    """Return the depth of offsets outside of the sector of a part, measured from its two sides."""
    (a, b), (c, d) = (np.array([float(v) for v in way]) for way in (part.start, part.stop))
    right = -(a * dy - b * dx) / np.hypot(a, b)  # beyond the first side
    left = -(dx * d - dy * c) / np.hypot(c, d)  # beyond the second
    wide = a * d - b * c < 0  # over half a turn: outside is beyond both
    depth: Array = np.minimum(right, left) if wide else np.maximum(right, left)
    return np.maximum(depth, 0.0)
