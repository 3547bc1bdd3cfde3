"""The potential of a prism in float64: in closed form along near axes, by Gauss's rule along far ones.

A rule of n nodes on an axis errs like rho^(-2 n) if the integrand is analytic within the ellipse about its
ends whose semi-axes add up to rho half lengths (Davis and Rabinowitz 1984, Methods of Numerical Integration,
section 4.6; from memory, unchecked). 1/R is singular where (xi - x)^2 + d^2 = 0, d the distance to the other
extents of the prism; so with half the length a and the middle m

    rho = |w + sqrt(w^2 - 1)|,     w = (m - x + i d)/a

A point is far from an axis if sixteen nodes suffice, but along at least one axis the integral is closed: the
potential of a line never cancels, nor do its slopes

    across: 2 L s X/(R_0 R_1 (s^2 - L^2)),     along: L (Z_0 + Z_1)/(R_0 R_1 s),     s = R_0 + R_1

(derived here).
"""

from __future__ import annotations

from functools import lru_cache
from itertools import combinations
from typing import Any

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.contexts import FLOAT
from laplace_verify.fields._end_gaps import Gaps, ellipse_gap, logarithm_between
from laplace_verify.fields._prism_near import Pull, distances, face, face_slopes, solid, solid_angle

__all__ = ["by_distance"]

# Nodes and the least rho for an error of 10^-17.
RULES = ((16, 3.4), (12, 5.2), (10, 7.2), (8, 11.6), (6, 26.0), (4, 134.0))
ALL = (0, 1, 2)
BLOCK = 2**19  # numbers at a time


def by_distance(gaps: list[Gaps]) -> Pull:
    """Return u and grad u, each (n,), from gaps of shape (n,)."""
    ellipses = np.stack([_ellipse(gaps, axis) for axis in ALL])
    steps = np.searchsorted([least for _, least in RULES], ellipses, side="right")  # 0: near
    nearest = np.argmin(ellipses, axis=0)
    steps[nearest, np.arange(steps.shape[1])] = 0
    value, slopes = np.empty(steps.shape[1]), np.empty((3, steps.shape[1]))
    fewest = np.where(steps > 0, steps, len(RULES)).min(axis=0) - 1
    for far in (far for number in range(3) for far in combinations(ALL, number)):
        these = ((steps > 0) == np.isin(ALL, far)[:, None]).all(axis=0)
        for step, (nodes, _) in enumerate(RULES):
            chosen = np.flatnonzero(these & (fewest == step))
            if len(chosen):
                for rows in np.array_split(chosen, 1 + len(chosen) * nodes ** len(far) // BLOCK):
                    own = [Gaps(low[rows], high[rows], length) for low, high, length in gaps]
                    value[rows], slopes[:, rows] = _summed(own, far, nodes)
    return value, tuple(slopes)


def _ellipse(gaps: list[Gaps], axis: int) -> Array:
    """Return rho of an axis."""
    own, others = gaps[axis], [gaps[k] for k in ALL if k != axis]
    aside = np.hypot(*(np.maximum(np.maximum(gap.low, -gap.high), 0.0) for gap in others))
    w = (own.low + own.high + 2j * aside) / own.length
    root = np.sqrt(w * w - 1.0)
    rho: Array = np.maximum(np.abs(w + root), np.abs(w - root))
    return rho


def _summed(gaps: list[Gaps], far: tuple[int, ...], nodes: int) -> Pull:
    """Return u and grad u by Gauss's rule along the far axes, closed along the others."""
    if not far:
        return solid(FLOAT, gaps)
    places, weights = _rule(nodes, len(far))
    spread: list[Any] = [Gaps(low[:, None], high[:, None], length) for low, high, length in gaps]
    for axis, place in zip(far, places, strict=True):
        low, high, length = spread[axis]
        spread[axis] = (high + low) / 2.0 + length / 2.0 * place
        weights = weights * (length / 2.0)
    value, slopes = _line(spread, far) if len(far) == 2 else _face(spread, far[0])
    return (weights * value).sum(axis=1), tuple((weights * slope).sum(axis=1) for slope in slopes)


@lru_cache
def _rule(nodes: int, count: int) -> tuple[list[Array], Array]:
    """Return the coordinates and weights of the product of `count` Gauss rules on (-1, 1)."""
    at, share = np.polynomial.legendre.leggauss(nodes)
    weights = np.prod(np.meshgrid(*[share] * count), axis=0)
    return [place.ravel() for place in np.meshgrid(*[at] * count)], weights.ravel()


def _line(gaps: list[Any], far: tuple[int, ...]) -> Pull:
    """Return u and grad u of lines along the axis that is not far, at offsets along the far ones."""
    (axis,) = set(ALL) - set(far)
    ends, (x, y) = gaps[axis], (gaps[k] for k in far)
    aside = np.hypot(x, y)
    r = [np.hypot(ends.low, aside), np.hypot(ends.high, aside)]
    total = r[0] + r[1]
    along = ends.length * (ends.low + ends.high) / (r[0] * r[1] * total)
    across = 2.0 * ends.length * total / (r[0] * r[1] * ellipse_gap(FLOAT, aside * aside, ends, r))
    slopes = {axis: along, far[0]: across * x, far[1]: across * y}
    return logarithm_between(FLOAT, x, y, ends, r), tuple(slopes[k] for k in ALL)


def _face(gaps: list[Any], axis: int) -> Pull:
    """Return u and grad u of rectangles across an axis, at offsets along it."""
    first, second = (k for k in ALL if k != axis)
    xs, ys, h = gaps[first], gaps[second], gaps[axis]
    r = distances(FLOAT, xs, ys, h)
    across = np.sign(h) * solid_angle(FLOAT, xs, ys, h, r)
    slopes = dict(zip((first, second, axis), (*face_slopes(FLOAT, xs, ys, h, r), across), strict=True))
    return face(FLOAT, xs, ys, h), tuple(slopes[k] for k in ALL)
