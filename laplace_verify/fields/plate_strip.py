"""Piecewise polynomial data on one side of a rectangle that is not deeper than wide, in closed form.

Let f be the periodic continuation of the data, d the distance from the hot side, h = b - d, beta = pi / b. In
the strip 0 < d < b, zero at d = b, polynomial data f have the polynomial solution

    P = sum_k f^(2k)(s) b^{2k} Q_k(h / b),   Q_0 = x,  Q_k'' = -Q_{k-1},  Q_k(0) = Q_k(1) = 0.

A jump J of the p-th derivative at c adds on either side of c what makes the whole smooth across s = c, a sum
of sines of d that decays away from c (matched at p = 0, then integrated p times in s; derived here):

    s < c:  + J b^p / pi^{p+1} Im Li_{p+1}(e^{-beta (c - s) + i beta d}),
    s > c:  - (-1)^p J b^p / pi^{p+1} Im Li_{p+1}(e^{-beta (s - c) + i beta d}).

If the opposite side is insulated, Q_0 = 1 and Q_k'(0) = 0 in P, b is doubled in the terms with Li, and these
are taken at d and at 2b - d. u is P of the piece that s lies in plus these terms for all places of the
continuation. Places within 1 / beta are summed by `polylog`; all farther ones on one side form a single power
series in the exponential of the first of them. On the hot side every imaginary part is exactly zero and u is
exactly f.
"""

from __future__ import annotations

import itertools
import math
from bisect import bisect_left, bisect_right
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any

import numpy as np

from laplace_verify.contexts import FLOAT
from laplace_verify.fields.exact import offset
from laplace_verify.fields.piecewise import Continuation
from laplace_verify.fields.plate_box import Depth
from laplace_verify.fields.polylog import NEAR, accuracy, by_index, horner, polylog, power_series, unit

__all__ = ["data_on_side", "strip_gradient", "strip_value"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class _Table:
    """What the sums need, as numbers of one context; see `_table`."""

    beta: Any  # pi / width
    height: Any  # b
    mirrored: bool
    breaks: tuple[Fraction, ...]
    derivatives: list[list[list[Any]]]  # [piece][m]: coefficients of the m-th derivative of f
    profiles: list[tuple[list[Any], list[Any]]]  # see `_profiles`
    places: list[Fraction]
    sorted_places: Any  # the same as numbers of the context
    ranks: list[int]  # a place is on the left of a point in piece i if its rank is at most i
    left: list[list[Any]]  # per place the factors of Li_1, Li_2, ... for points on its right
    right: list[list[Any]]
    series_left: list[
        Any
    ]  # per place: coefficients of the power series of it and all farther ones on its left
    series_right: list[Any]


def strip_value(ctx: Any, data: Continuation, depth: Depth, x: Any, d: Any, h: Any) -> Any:
    """Return u at coordinate x along the side, distances d from it and h from the opposite side."""
    table = _table(ctx, data, depth)
    piece = _piece(ctx, table.breaks, x)
    total = by_index(piece, lambda i, *at: _polynomial(ctx, table, i, 0, *at), x, d, h)
    for near, far, _ in depth.images(ctx, d, h):
        left, right = _sums(ctx, table, x, near, far, piece, lowered=0)
        total = total + (left + right).imag
    return total


def strip_gradient(ctx: Any, data: Continuation, depth: Depth, x: Any, d: Any, h: Any) -> tuple[Any, Any]:
    """Return the derivatives of u along the side and with respect to d."""
    table = _table(ctx, data, depth)
    piece = _piece(ctx, table.breaks, x)
    along = by_index(piece, lambda i, *at: _polynomial(ctx, table, i, 1, *at), x, d, h)
    across = by_index(piece, lambda i, *at: _polynomial_depth(ctx, table, i, *at), x, h)
    for near, far, sign in depth.images(ctx, d, h):
        left, right = _sums(ctx, table, x, near, far, piece, lowered=1)
        along, across = (
            along + table.beta * (right - left).imag,
            across + sign * table.beta * (right + left).real,
        )
    return along, across


def data_on_side(ctx: Any, data: Continuation, x: Any) -> Any:
    """Return the data f at coordinate x along the side."""
    rows = [[ctx.number(c) for c in row] for row in data.rows]
    piece = _piece(ctx, data.breaks, x)
    return by_index(piece, lambda i, x: horner(rows[i], offset(ctx, x, data.breaks[i])), x)


def _piece(ctx: Any, breaks: tuple[Fraction, ...], x: Any) -> Any:
    """Return the index of the piece each point lies in; a break belongs to the piece on its right."""
    inner = [offset(ctx, x, place) >= 0 for place in breaks[1:-1]]
    if isinstance(x, np.ndarray):
        return np.sum(inner, axis=0, dtype=np.int64) if inner else np.zeros(x.shape, dtype=np.int64)
    return sum(inner)


def _polynomial(ctx: Any, table: _Table, i: int, order: int, x: Any, d: Any, h: Any) -> Any:
    """Return P, or with order = 1 its derivative along the side, for points of piece i."""
    t, depth, rest = offset(ctx, x, table.breaks[i]), d / table.height, h / table.height
    lowest = 1 if table.mirrored else rest
    derivatives = table.derivatives[i][order:]
    total = horner(derivatives[0], t) * lowest if derivatives else 0 * t
    for k in range(1, (len(derivatives) + 1) // 2):
        total = total + horner(derivatives[2 * k], t) * (lowest * depth * horner(table.profiles[k][0], rest))
    return total


def _polynomial_depth(ctx: Any, table: _Table, i: int, x: Any, h: Any) -> Any:
    """Return the derivative of P with respect to d, for points of piece i."""
    t, rest = offset(ctx, x, table.breaks[i]), h / table.height
    lowest = rest if table.mirrored else 1
    total = 0 * t
    for k in range((len(table.derivatives[i]) + 1) // 2):
        slope = lowest * horner(table.profiles[k][1], rest * rest)
        total = total - horner(table.derivatives[i][2 * k], t) * slope / table.height
    return total


def _sums(ctx: Any, table: _Table, x: Any, d: Any, h: Any, piece: Any, *, lowered: int) -> tuple[Any, Any]:
    """Return the sums over the places on the left and on the right, orders lowered by 0 or 1."""
    q, r = table.beta * d, table.beta * h
    turn = unit(ctx, q, r)
    reach, count = NEAR / table.beta, len(table.places)
    if isinstance(x, np.ndarray):
        first = np.searchsorted(table.sorted_places, x - reach, side="right")
        last = np.searchsorted(table.sorted_places, x + reach, side="left")
    else:
        first = bisect_right(table.sorted_places, x - reach)
        last = bisect_left(table.sorted_places, x + reach)

    def far_left(k: int, x: Any, turn: Any) -> Any:
        if k == 0:
            return 0 * turn
        p = table.beta * offset(ctx, x, table.places[k - 1])
        return power_series(ctx, table.series_left[k - 1][lowered], p, ctx.exp(-p) * turn)

    def far_right(k: int, x: Any, turn: Any) -> Any:
        if k == count:
            return 0 * turn
        p = -table.beta * offset(ctx, x, table.places[k])
        return power_series(ctx, table.series_right[k][lowered], p, ctx.exp(-p) * turn)

    left, right = by_index(first, far_left, x, turn), by_index(last, far_right, x, turn)
    return _near(ctx, table, (x, q, r, piece), (first, last), (left, right), lowered)


def _near(
    ctx: Any,
    table: _Table,
    place: tuple[Any, ...],
    bounds: tuple[Any, Any],
    sums: tuple[Any, Any],
    lowered: int,
) -> tuple[Any, Any]:
    """Add the places number first ... last - 1 of each point by polylogarithms."""
    (x, q, r, piece), (first, last), (left, right) = place, bounds, sums

    def term(j: int, factors: list[Any], sign: int, x: Any, q: Any, r: Any) -> Any:
        p = sign * table.beta * offset(ctx, x, table.places[j])
        p = ctx.where(p > 0, p, 0 * p)  # a corner that float64 puts outside by its rounding
        return sum(f * polylog(ctx, s + 1 - lowered, p, q, r) for s, f in enumerate(factors) if f != 0)

    if not isinstance(x, np.ndarray):
        for j in range(first, last):
            if table.ranks[j] <= piece:
                left = left + term(j, table.left[j], 1, x, q, r)
            else:
                right = right + term(j, table.right[j], -1, x, q, r)
        return left, right
    for j in range(int(first.min(initial=0)), int(last.max(initial=0))):
        near = (first <= j) & (j < last)
        for total, factors, sign, side in (
            (left, table.left, 1, piece >= table.ranks[j]), (right, table.right, -1, piece < table.ranks[j]),
        ):  # fmt: skip
            here = np.flatnonzero(near & side)
            if here.size:
                total[here] += term(j, factors[j], sign, x[here], q[here], r[here])
    return left, right


@lru_cache(maxsize=64)
def _table(ctx: Any, data: Continuation, depth: Depth) -> _Table:
    """Return the numbers of one context: everything is exact up to here and rounded once."""
    width, pi = depth.width, +ctx.pi
    reach = Fraction(math.ceil(1 + accuracy(ctx) / math.pi)) * width
    images = data.images(data.breaks[0] - reach, data.breaks[-1] + reach)
    places = [place for place, _ in images]
    left, right = [], []
    for _, jumps in images:
        scaled = [ctx.number(jump * width**p) / pi ** (p + 1) for p, jump in enumerate(jumps)]
        left.append([-((-1) ** p) * f for p, f in enumerate(scaled)])
        right.append(scaled)
    gaps = [ctx.exp(-pi * ctx.number((b - a) / width)) for a, b in itertools.pairwise(places)]
    derivatives = [
        [[ctx.number(c * math.perm(k, m)) for k, c in enumerate(row) if k >= m] for m in range(len(row))]
        for row in data.rows
    ]
    numbers = [ctx.number(place) for place in places]
    return _Table(
        beta=pi / ctx.number(width), height=ctx.number(depth.extent), mirrored=depth.mirrored,
        breaks=data.breaks, derivatives=derivatives,
        profiles=_profiles(ctx, max(len(row) for row in data.rows) // 2, depth), places=places,
        sorted_places=np.array(numbers) if ctx is FLOAT else numbers,
        ranks=[_rank(data.breaks, place) for place in places], left=left, right=right,
        series_left=_series(ctx, left, gaps), series_right=_series(ctx, right[::-1], gaps[::-1])[::-1],
    )  # fmt: skip


def _rank(breaks: tuple[Fraction, ...], place: Fraction) -> int:
    """Return the first piece that has `place` on its left."""
    return bisect_left(breaks, place) if place > breaks[0] else 0


def _series(ctx: Any, factors: list[list[Any]], gaps: list[Any]) -> list[tuple[list[Any], list[Any]]]:
    """Return per place the coefficients of its power series and of the one with orders lowered.

    The series of a place is its own, f_p / m^{p+1}, plus that of the place before times e^{-m beta gap}.
    """
    count = 2 + math.ceil(accuracy(ctx) / NEAR)
    result: list[tuple[list[Any], list[Any]]] = []
    previous = [ctx.number(0)] * count
    for j, own in enumerate(factors):
        gap = gaps[j - 1] if j else ctx.number(0)
        power = ctx.number(1)
        current = []
        for m in range(1, count + 1):
            power = power * gap
            term = sum((f / ctx.number(m) ** (p + 1) for p, f in enumerate(own) if f != 0), ctx.number(0))
            current.append(term + power * previous[m - 1])
        result.append((current, [m * c for m, c in enumerate(current, start=1)]))
        previous = current
    return result


def _profiles(ctx: Any, highest: int, depth: Depth) -> list[tuple[list[Any], list[Any]]]:
    """Return for k = 0 ... highest b^{2k} times Q_k less its factors, and Q_k' less its lowest power.

    Zero opposite: Q_k = sum_i c_i x^{2i+1}, with the factors x (1 - x). Mirror opposite: Q_k = sum_i c_i
    x^{2i}, Q_k'(0) = 0 in place of Q_k(0) = 0, with the factor 1 - x. What is left is in powers of x, the
    derivative in powers of x^2 after x^0 or x^1. (k = 0 has no factor 1 - x; its first entry is not used.)
    """
    lowest = 0 if depth.mirrored else 1
    c = [Fraction(1)]
    profiles: list[tuple[list[Any], list[Any]]] = []
    for k in range(highest + 1):
        if k:
            c = [Fraction(0)] + [-a / ((2 * i + lowest + 1) * (2 * i + lowest + 2)) for i, a in enumerate(c)]
            c[0] = -sum(c[1:], Fraction(0))
        dense = [Fraction(0)] * (2 * len(c) - 1)
        dense[::2] = c
        quotient = [sum(dense[: i + 1], Fraction(0)) for i in range(len(dense) - 1)]  # by 1 - x: partial sums
        slope = [(2 * i + lowest) * a for i, a in enumerate(c)][1 - lowest :] or [Fraction(0)]
        scale = depth.extent ** (2 * k)
        profiles.append(([ctx.number(a * scale) for a in quotient], [ctx.number(a * scale) for a in slope]))
    return profiles
