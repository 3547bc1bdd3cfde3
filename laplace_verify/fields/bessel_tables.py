"""Bessel functions over a number context: J_0, J_1, quotients of I_0 and I_1, and the zeros of J_0.

Quotients I_v(k r)/I_0(k), r <= 1, are formed from scaled functions: nothing overflows. For large k they have
an expansion

    I_v(k r)/I_0(k) = r^{-1/2} e^{-k (1 - r)} sum_j b_j(r) k^{-j},

whose coefficients follow from I_v(x) ~ e^x (2 pi x)^{-1/2} sum_m a_m(v) x^{-m}, a_m(v) = prod_{i<=m}
((2i-1)^2 - 4 v^2) / (m! 8^m) (NIST DLMF 10.40.1, from memory, unchecked).
"""

from __future__ import annotations

from fractions import Fraction
from functools import lru_cache
from typing import Any

import numpy as np
from scipy import special

from laplace_verify.contexts import FLOAT

__all__ = ["bessel_j", "expansion", "quotient", "zero"]

MOST_ZEROS = 20000


def bessel_j(ctx: Any, order: int, x: Any) -> Any:
    """Return J_0 or J_1."""
    if ctx is FLOAT:
        return special.j1(x) if order else special.j0(x)
    return ctx.besselj(order, x)


def quotient(ctx: Any, order: int, k: Any, r: Any, gap: Any) -> Any:
    """Return I_order(k r) / I_0(k) for order 0 or 1, gap = 1 - r."""
    if ctx is FLOAT:
        scaled = special.i1e(k * r) if order else special.i0e(k * r)
        return scaled / special.i0e(k) * np.exp(-k * gap)
    return ctx.besseli(order, k * r) / _below(ctx, k)


@lru_cache(maxsize=4096)
def _below(ctx: Any, k: Any) -> Any:
    """Return I_0(k)."""
    return ctx.besseli(0, k)


@lru_cache(maxsize=65536)
def zero(ctx: Any, n: int) -> tuple[Any, Any]:
    """Return the n-th positive zero j of J_0 and J_1(j), n = 1, 2, ..."""
    first = _float_zeros(1 << n.bit_length())[n - 1]
    if ctx is FLOAT:
        return float(first), float(special.j1(first))
    j = ctx.mpf(float(first))
    for _ in range(8):  # Newton: the digits double
        slope = ctx.besselj(1, j)
        step = ctx.besselj(0, j) / slope
        j += step
        if abs(step) < ctx.mpf(10) ** -(ctx.dps // 2 + 3):
            break
    return j, ctx.besselj(1, j)


@lru_cache(maxsize=16)
def _float_zeros(count: int) -> Any:
    """Return the first zeros in float64."""
    return special.jn_zeros(0, count)


@lru_cache(maxsize=512)
def _large_argument(order: int, count: int) -> tuple[Fraction, ...]:
    """Return a_0(v) ... a_{count-1}(v)."""
    terms = [Fraction(1)]
    for m in range(1, count):
        terms.append(terms[-1] * ((2 * m - 1) ** 2 - 4 * order * order) / (8 * m))
    return tuple(terms)


@lru_cache(maxsize=64)
def _numbers(ctx: Any, order: int, count: int) -> list[Any]:
    return [ctx.number(a) for a in _large_argument(order, count)]


def expansion(ctx: Any, order: int, r: Any, count: int) -> list[Any]:
    """Return b_0(r) ... b_{count-1}(r) of I_order(k r)/I_0(k)."""
    top, below = _numbers(ctx, order, count), _numbers(ctx, 0, count)
    found: list[Any] = []
    power = 1 + 0 * r
    for j in range(count):
        term = top[j] * power
        for i in range(j):
            term = term - found[i] * below[j - i]
        found.append(term)
        power = power / r
    return found
