"""Potentials of an edge, a face and a prism of unit density in closed form, and their attraction.

See `prism` for the formulas.
"""

from __future__ import annotations

from itertools import product
from typing import Any, TypeAlias

from laplace_verify.fields._end_gaps import Gaps, logarithm_between

__all__ = ["Distances", "Pull", "distances", "face", "face_slopes", "solid", "solid_angle"]

Pull: TypeAlias = tuple[Any, tuple[Any, ...]]  # u and its derivatives
Distances: TypeAlias = dict[tuple[int, int], Any]  # of the corners, by the ends along both axes
ENDS = (0, 1)
OTHERS = ((1, 2), (0, 2), (0, 1))


def solid(ctx: Any, gaps: list[Gaps]) -> Pull:
    """Return u and grad u of a prism."""
    total, slopes = 0, []
    for axis, (first, second) in enumerate(OTHERS):
        own = gaps[axis]
        low, high = (face(ctx, gaps[first], gaps[second], gap) for gap in (own.low, own.high))
        total = total + own.high * high - own.low * low
        slopes.append(low - high)
    return total / 2, tuple(slopes)


def face(ctx: Any, xs: Gaps, ys: Gaps, h: Any) -> Any:
    """Return the potential of a uniform layer on a rectangle at the offset h along its normal."""
    r = distances(ctx, xs, ys, h)
    total = -abs(h) * solid_angle(ctx, xs, ys, h, r)
    for ends, lines in zip((xs, ys), _lines(ctx, xs, ys, h, r), strict=True):
        total = total + ends.high * lines[1] - ends.low * lines[0]
    return total


def face_slopes(ctx: Any, xs: Gaps, ys: Gaps, h: Any, r: Distances) -> tuple[Any, Any]:
    """Return the derivatives of the potential of a rectangle in its plane."""
    first, second = _lines(ctx, xs, ys, h, r)
    return first[0] - first[1], second[0] - second[1]


def _lines(ctx: Any, xs: Gaps, ys: Gaps, h: Any, r: Distances) -> tuple[list[Any], list[Any]]:
    """Return the potentials of the sides at the ends along x, and along y."""
    return (
        [logarithm_between(ctx, xs[i], h, ys, [r[i, 0], r[i, 1]]) for i in ENDS],
        [logarithm_between(ctx, ys[j], h, xs, [r[0, j], r[1, j]]) for j in ENDS],
    )


def solid_angle(ctx: Any, xs: Gaps, ys: Gaps, h: Any, r: Distances) -> Any:
    """Return the solid angle, >= 0, of a rectangle.

    The two terms of a side at Y = const, atan(X_1 Y/(h R_1)) - atan(X_0 Y/(h R_0)), are one arctangent, whose
    T = X_1 R_0 - X_0 R_1 = L (X_0 + X_1) (h^2 + Y^2)/(X_1 R_0 + X_0 R_1) does not cancel.
    """
    height, total = abs(h), 0
    beside = xs.low * xs.high > 0
    for k, sign in zip(ENDS, (-1, 1), strict=True):
        y, (near, far) = ys[k], (r[0, k], r[1, k])
        along = xs.high * near + xs.low * far
        along = xs.length * (xs.low + xs.high) * (h * h + y * y) / ctx.where(beside, along, 1)
        along = ctx.where(beside, along, xs.high * near - xs.low * far)
        angle = ctx.atan2(height * abs(y) * along, height * height * near * far + xs.low * xs.high * y * y)
        total = total + sign * ctx.where(y < 0, -angle, angle)
    return total


def distances(ctx: Any, xs: Gaps, ys: Gaps, h: Any) -> Distances:
    """Return the distances of the corners of a rectangle."""
    return {(i, j): ctx.hypot(ctx.hypot(xs[i], ys[j]), h) for i, j in product(ENDS, ENDS)}
