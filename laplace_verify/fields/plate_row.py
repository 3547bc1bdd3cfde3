"""Piecewise polynomial data on one side of a rectangle that is deeper than wide, in closed form next to it.

With gamma = pi / a, a the length of the side, and jumps J of the p-th derivative at the places c of one
period of the continuation, the half-strip d > 0 has the solution (sum of the Fourier coefficients of
`piecewise`)

    F_0 + Re sum_c sum_p i^{-(p+1)} J a^p / pi^{p+1} Li_{p+1}(e^{-gamma (d - i (s - c))}).

In the rectangle of depth b the mode n has e^{-kd} replaced by sinh(k (b - d)) / sinh(k b), that is by

    e^{-kd} + (e^{-k (2b + d)} - e^{-k (2b - d)}) / (1 - e^{-2kb}),

whose second part converges like e^{-n pi (2b - d) / a}: a few modes. Beyond the reach of the closed form all
modes are summed directly. (Derived here.)
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any

import numpy as np

from laplace_verify.contexts import FLOAT
from laplace_verify.fields.exact import offset
from laplace_verify.fields.mode_sums import Decay, mode_slopes, mode_value, side_angles
from laplace_verify.fields.piecewise import Continuation
from laplace_verify.fields.plate_box import Depth
from laplace_verify.fields.polylog import NEAR, accuracy, by_index, polylog, rounded, source

__all__ = ["fourier_coefficients", "row_gradient", "row_value"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class _Table:
    """What the sums need, as numbers of one context; see `_table`."""

    gamma: Any
    length: Any
    height: Any
    even: bool
    ends: tuple[Fraction, Fraction]
    mean: Any
    places: list[tuple[Fraction, list[Any]]]  # over one period, with J a^p / pi^{p+1}
    modes: tuple[list[Any], list[Any]]  # A_n / (1 - e^{-2kb}), and n times that
    decay: Decay


def row_value(ctx: Any, data: Continuation, depth: Depth, x: Any, d: Any, h: Any) -> Any:
    """Return u at coordinate x along the side, distances d from it and h from the opposite side."""
    table = _table(ctx, data, depth.width)
    parts = (_far_value, _near_value)
    total = table.mean * depth.linear(ctx, h)
    for near, far, _ in depth.images(ctx, d, h):
        total = total + by_index(
            _nearness(ctx, table, near), lambda k, *at: parts[k](ctx, table, *at), x, near, far
        )
    return total


def row_gradient(ctx: Any, data: Continuation, depth: Depth, x: Any, d: Any, h: Any) -> tuple[Any, Any]:
    """Return the derivatives of u along the side and with respect to d."""
    table = _table(ctx, data, depth.width)
    parts = (_far_gradient, _near_gradient)

    def both(k: int, *at: Any) -> Any:  # packed as along + i depth, so that masks are applied once
        pair = parts[k](ctx, table, *at)
        return pair[0] + 1j * pair[1] if ctx is FLOAT else ctx.mpc(*pair)

    along, across = 0 * x, 0 * x
    for near, far, sign in depth.images(ctx, d, h):
        packed = by_index(_nearness(ctx, table, near), both, x, near, far)
        along, across = along + packed.real, across + sign * packed.imag
    return along, across + table.mean * depth.slope(ctx)


def _nearness(ctx: Any, table: _Table, d: Any) -> Any:
    """Return 1 where the closed form is used, 0 elsewhere."""
    return ctx.where(table.gamma * d < NEAR, 1, 0)


def _modes_place(ctx: Any, table: _Table, x: Any, distance: Any, gap: Any) -> tuple[Any, Any, Any, Any]:
    """Return the place that the mode sums take."""
    q, r = side_angles(ctx, table.gamma, x, table.ends)
    return table.gamma * distance, q, r, 2 * table.gamma * gap


def _far_value(ctx: Any, table: _Table, x: Any, d: Any, h: Any) -> Any:
    """Return the sum over all modes n >= 1."""
    place = _modes_place(ctx, table, x, d, h)
    return mode_value(ctx, table.even, lambda n: table.modes[0][:n], table.decay, place)


def _far_gradient(ctx: Any, table: _Table, x: Any, d: Any, h: Any) -> tuple[Any, Any]:
    """Return the derivatives of `_far_value` along the side and in d."""
    place = _modes_place(ctx, table, x, d, h)
    along, depth = mode_slopes(ctx, table.even, lambda n: table.modes[1][:n], table.decay, place)
    return table.gamma * along, table.gamma * depth


def _near_value(ctx: Any, table: _Table, x: Any, d: Any, h: Any) -> Any:
    """Return polylogarithms plus the remainder of the modes, e^{-k (2b + d)} - e^{-k (2b - d)}."""
    place = _modes_place(ctx, table, x, table.height + h, d)
    modes = mode_value(ctx, table.even, lambda n: table.modes[0][:n], table.decay, place)
    return _row_sum(ctx, table, x, d, 0).real - modes


def _near_gradient(ctx: Any, table: _Table, x: Any, d: Any, h: Any) -> tuple[Any, Any]:
    """Return the derivatives of `_near_value` along the side and in d."""
    place = _modes_place(ctx, table, x, table.height + h, d)
    along, depth = mode_slopes(ctx, table.even, lambda n: table.modes[1][:n], table.decay, place)
    total = _row_sum(ctx, table, x, d, 1)
    # The modes are subtracted, but d runs against their distance.
    return -table.gamma * (total.imag + along), table.gamma * (depth - total.real)


def _row_sum(ctx: Any, table: _Table, x: Any, d: Any, lowered: int) -> Any:
    """Return sum_c sum_p i^{-(p+1)} J a^p / pi^{p+1} Li_{p+1-lowered}."""
    pi = table.gamma * table.length
    total: Any = 0
    for place, factors in table.places:
        t, around = offset(ctx, x, place), offset(ctx, x, place + 2 * (table.ends[1] - table.ends[0]))
        t = ctx.where(t > table.length, around, t)
        q = table.gamma * abs(t)
        q = ctx.where(q < pi, q, 0 * q + pi)
        p = table.gamma * d
        for order, factor in enumerate(factors):
            if factor == 0:
                continue
            z = polylog(ctx, order + 1 - lowered, p, q, pi - q)
            z = _signed(ctx, z, t)
            total = total + factor * _divided_by_i(ctx, z, order + 1)
    return total if len(table.places) else _signed(ctx, 0 * x + 0j if ctx is FLOAT else ctx.mpc(0), x)


def _signed(ctx: Any, z: Any, t: Any) -> Any:
    """Return z, conjugated where t < 0."""
    if ctx is not FLOAT:
        return ctx.conj(z) if t < 0 else z
    result = z.copy()
    np.negative(result.imag, out=result.imag, where=t < 0)
    return result


def _divided_by_i(ctx: Any, z: Any, power: int) -> Any:
    """Return z / i^power without products that would mix an infinite part into the other."""
    power %= 4
    if power in (0, 2):
        return z if power == 0 else -z
    sign = 1 if power == 1 else -1  # z / i = Im z - i Re z
    if ctx is not FLOAT:
        return ctx.mpc(sign * z.imag, -sign * z.real)
    result = np.empty_like(z)
    result.real, result.imag = sign * z.imag, -sign * z.real
    return result


@lru_cache(maxsize=64)
def _table(ctx: Any, data: Continuation, height: Fraction) -> _Table:
    """Return the numbers of one context: everything is exact up to here and rounded once."""
    ends = (data.breaks[0], data.breaks[-1])
    length = ends[1] - ends[0]
    high = source(ctx)
    scaled = _scaled_jumps(high, data)
    deep = math.pi * float(height / length)
    count = 2 + math.ceil(
        accuracy(ctx) / min(NEAR, 2 * deep - min(NEAR, deep))
    )  # far off, or the remainder next to it
    modes = fourier_coefficients(high, data, count)
    base = high.expm1(-2 * high.pi * high.number(height / length))
    divided = []
    for n, mode in enumerate(modes, start=1):
        divided.append(
            -mode / (base if n == 1 else high.expm1(-2 * n * high.pi * high.number(height / length)))
        )
    weighted = [n * mode for n, mode in enumerate(divided, start=1)]
    return _Table(
        gamma=ctx.pi / ctx.number(length), length=ctx.number(length), height=ctx.number(height),
        even=data.even,
        ends=ends, mean=ctx.number(data.mean),
        places=[(place, rounded(ctx, factors)) for place, factors in scaled],
        modes=(rounded(ctx, divided), rounded(ctx, weighted)), decay=Decay(last=count),
    )  # fmt: skip


def _scaled_jumps(high: Any, data: Continuation) -> list[tuple[Fraction, list[Any]]]:
    """Return the places of one period of the continuation with J a^p / pi^{p+1}."""
    start, length = data.breaks[0], data.breaks[-1] - data.breaks[0]
    images = data.images(start - length, start + length)
    return [
        (place, [high.number(jump * length**p) / high.pi ** (p + 1) for p, jump in enumerate(jumps)])
        for place, jumps in images
        if place > start - length
    ]


def fourier_coefficients(high: Any, data: Continuation, count: int) -> list[Any]:
    """Return the coefficients A_1 ... A_count of cosines if even, of sines if odd: 2 Re F_n or -2 Im F_n.

    With theta = n pi (c - start) / a, F_n = 1/2 sum J a^p / pi^{p+1} e^{-i theta} (i n)^{-(p+1)}; `high` is a
    precise context.
    """
    places, start = _scaled_jumps(high, data), data.breaks[0]
    length = data.breaks[-1] - start
    modes = []
    for n in range(1, count + 1):
        total = high.mpf(0)
        for place, factors in places:
            turns = n * (place - start) / length % 2  # exact reduction of the angle to one period
            wave = high.expjpi(-high.number(turns))
            # Re or -Im of wave / i^p for p = 0, 1, 2, 3
            first, second = (wave.real, wave.imag) if data.even else (-wave.imag, wave.real)
            parts = (first, second, -first, -second)
            weight = high.mpf(1)
            for p, factor in enumerate(factors, start=1):
                weight = weight / n
                if factor:
                    total += weight * factor * parts[p % 4]
        modes.append(total)
    return modes
