"""Polylogarithms Li_s(e^{-w}) of whole order s >= 0, and power series in one complex exponential.

Close to |z| = 1 the series sum z^n / n^s is useless; there, with w = p - i q and H the harmonic numbers,

    Li_s(e^{-w})  = sum_{k != s-1} zeta(s-k) (-w)^k / k! + (-w)^{s-1} / (s-1)! (H_{s-1} - log w),  |w| < 2 pi,
    Li_s(-e^{-v}) = - sum_k eta(s-k) (-v)^k / k!,   eta(s) = (1 - 2^{1-s}) zeta(s),                |v| < pi,

are used about the nearer of z = 1 and z = -1: zeta and eta vanish at the negative even numbers, so beyond k =
s both are series in w^2 with ratios (|w| / 2 pi)^2 and (|v| / pi)^2. Li_1 and Li_0 are elementary. The number
of terms follows from these ratios, for float64 as for any number of digits.

References
----------
Lewin (1981), Polylogarithms and associated functions, and NIST DLMF, section 25.12 (from memory, checked
against mpmath); the second expansion is the first of Li_s(z) + Li_s(-z) = 2^{1-s} Li_s(z^2), derived here.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from functools import lru_cache
from typing import Any

import numpy as np

from laplace_verify.contexts import FLOAT, Precise

__all__ = ["NEAR", "accuracy", "by_index", "horner", "polylog", "power_series", "rounded", "source", "unit"]

NEAR = 1.0  # p >= NEAR: the direct series takes at most accuracy(ctx) / NEAR terms
SPLIT = 2.0  # angle up to which the expansion is about z = 1; both then converge like 0.13^n ... 0.23^n
FLOAT_ACCURACY = 40.0  # exp(-40) = 4e-18


def accuracy(ctx: Any) -> float:
    """Return -log of the truncation error a sum over `ctx` may make, relative to its first term."""
    return FLOAT_ACCURACY if ctx is FLOAT else float((ctx.dps + 3) * math.log(10))


def by_index(index: Any, function: Callable[..., Any], *arguments: Any) -> Any:
    """Return function(k, *arguments) for the points with index k; single numbers are passed through.

    The loop runs over the few values of the index, not over the points.
    """
    if not isinstance(index, np.ndarray):
        return function(int(index), *arguments)
    low, high = int(index.min(initial=0)), int(index.max(initial=0))
    if low == high and index.size:
        return function(low, *arguments)
    result: Any = None
    for k in np.flatnonzero(np.bincount(index - low)) + low:
        here = np.flatnonzero(index == k)
        part = function(int(k), *(a[here] for a in arguments))
        if result is None:
            result = np.zeros(index.shape, dtype=part.dtype)
        result[here] = part
    return np.zeros(index.shape) if result is None else result


def horner(coefficients: Sequence[Any], z: Any) -> Any:
    """Return sum_k coefficients[k] z^k."""
    if not isinstance(z, np.ndarray):
        total = coefficients[-1]
        for c in reversed(coefficients[:-1]):
            total = total * z + c
        return total
    result = np.full(z.shape, coefficients[-1], dtype=z.dtype)
    for c in coefficients[-2::-1]:
        result *= z
        result += c
    return result


def power_series(ctx: Any, coefficients: Sequence[Any], p: Any, z: Any) -> Any:
    """Return sum_{m >= 1} coefficients[m-1] z^m where |z| <= e^{-p}, with the terms that can be seen.

    The coefficients must not grow; what is left out is below e^{-accuracy} / (1 - e^{-p}) times |z|.
    """
    slowest = float(p.min(initial=np.inf)) if isinstance(p, np.ndarray) else float(p)
    count = min(len(coefficients), 1 + math.ceil(accuracy(ctx) / max(slowest, 1e-300)))
    return z * horner(coefficients[:count], z)


def unit(ctx: Any, q: Any, r: Any) -> Any:
    """Return e^{iq} for 0 <= q <= pi and r = pi - q, its imaginary part relatively accurate at both ends."""
    if ctx is FLOAT:
        closer = np.minimum(q, r)
        result = np.empty(closer.shape, dtype=np.complex128)
        result.real, result.imag = np.copysign(np.cos(closer), r - q), np.sin(closer)
        return result
    closer = ctx.where(q < r, q, r)
    cosine, sine = ctx.cos(closer), ctx.sin(closer)
    return _complex(ctx, ctx.where(q < r, cosine, -cosine), sine)


def polylog(ctx: Any, order: int, p: Any, q: Any, r: Any) -> Any:
    """Return Li_order(e^{-p + iq}) for p >= 0, 0 <= q <= pi, r = pi - q; order 0, 1, 2, ...

    `r` is passed so that points with q next to pi keep the digits of their distance from it.

    >>> import numpy as np
    >>> from laplace_verify.contexts import FLOAT
    >>> at_one = polylog(FLOAT, 2, np.array([0.0]), np.array([0.0]), np.array([np.pi]))
    >>> bool(abs(at_one[0] - np.pi**2 / 6) < 1e-15)
    True
    """
    if order == 0:
        return _order_zero(ctx, p, q, r)
    if order == 1:
        return _order_one(ctx, p, q, r)
    zone = ctx.where(p >= NEAR, 0, ctx.where(q <= SPLIT, 1, 2))
    return by_index(zone, lambda k, *place: _ZONES[k](ctx, order, *place), p, q, r)


def _direct(ctx: Any, order: int, p: Any, q: Any, r: Any) -> Any:
    """Return sum z^n / n^s."""
    return power_series(ctx, _inverse_powers(ctx, order), p, ctx.exp(-p) * unit(ctx, q, r))


def _about_plus_one(ctx: Any, order: int, p: Any, q: Any, r: Any) -> Any:  # noqa: ARG001  # one signature for all zones
    """Return the expansion in w, with its logarithm."""
    head, tail, harmonic, factor = _zeta_coefficients(ctx, order)
    w = _complex(ctx, p, -q)
    size, angle = p * p + q * q, ctx.atan2(q, p)
    zero = size == 0
    logarithm = _complex(
        ctx, ctx.log(ctx.where(zero, size + 1, size)) / 2, -angle
    )  # at w = 0 times w^(s-1) = 0
    power = factor * w ** (order - 1)
    return horner(head, w) + power * (harmonic - logarithm) + w ** (order + 1) * horner(tail, w * w)


def _about_minus_one(ctx: Any, order: int, p: Any, q: Any, r: Any) -> Any:  # noqa: ARG001  # one signature for all zones
    """Return the expansion in v = p + i r, e^{-p + iq} = -e^{-v}."""
    head, tail = _eta_coefficients(ctx, order)
    v = _complex(ctx, p, r)
    return horner(head, v) + v ** (order + 1) * horner(tail, v * v)


_ZONES = (_direct, _about_plus_one, _about_minus_one)


def _order_zero(ctx: Any, p: Any, q: Any, r: Any) -> Any:
    """Return z / (1 - z) = 1 / (e^w - 1), relatively accurate next to z = 1; infinite at z = 1."""
    real, imaginary = _one_minus(ctx, p, q, r)
    decay, size = ctx.exp(-p), real * real + imaginary * imaginary
    half = ctx.where(q < r, ctx.sin(q / 2), ctx.cos(r / 2))
    top = -ctx.expm1(-p) - 2 * half * half  # cos q - e^{-p}
    size = _or_nan(ctx, size)
    return _complex(ctx, decay * top / size, imaginary / size)


def _order_one(ctx: Any, p: Any, q: Any, r: Any) -> Any:
    """Return -log(1 - z); at z = 1 the imaginary part depends on the way in and is no number."""
    real, imaginary = _one_minus(ctx, p, q, r)
    size = real * real + imaginary * imaginary
    angle = ctx.atan2(imaginary, real)
    size = _or_nan(ctx, size)
    return _complex(ctx, -ctx.log(size) / 2, angle + 0 * size)


def _one_minus(ctx: Any, p: Any, q: Any, r: Any) -> tuple[Any, Any]:
    """Return 1 - e^{-p} cos q and e^{-p} sin q, both without cancellation."""
    decay = ctx.exp(-p)
    half = ctx.where(q < r, ctx.sin(q / 2), ctx.cos(r / 2))
    return -ctx.expm1(-p) + 2 * decay * half * half, decay * ctx.sin(ctx.where(q < r, q, r))


def _or_nan(ctx: Any, size: Any) -> Any:
    """Return `size` with zeros replaced by NaN: nothing computed from them can pass as a value."""
    return ctx.where(size == 0, math.nan if ctx is FLOAT else ctx.nan, size)


def _complex(ctx: Any, real: Any, imaginary: Any) -> Any:
    """Return real + i imaginary, without a product that would turn an infinite part into NaN."""
    if ctx is not FLOAT:
        return ctx.mpc(real, imaginary)
    result = np.empty(np.broadcast(real, imaginary).shape, dtype=np.complex128)
    result.real, result.imag = real, imaginary
    return result


def rounded(ctx: Any, numbers: list[Any]) -> list[Any]:
    """Return precise numbers as float64 if that is the context."""
    return [float(n) for n in numbers] if ctx is FLOAT else numbers


def source(ctx: Any) -> Any:
    """Return the precise context that constants for `ctx` are computed in."""
    return _CONSTANTS if ctx is FLOAT else ctx


_CONSTANTS = Precise(30)


@lru_cache(maxsize=256)
def _inverse_powers(ctx: Any, order: int) -> list[Any]:
    """Return 1 / n^order for n = 1, ..., as many as the direct series can need."""
    count = 2 + math.ceil(accuracy(ctx) / NEAR)
    high = source(ctx)
    return rounded(ctx, [1 / high.mpf(n) ** order for n in range(1, count + 1)])


@lru_cache(maxsize=256)
def _zeta_coefficients(ctx: Any, order: int) -> tuple[list[Any], list[Any], Any, Any]:
    """Return head (powers 0..s), tail (powers s+1, s+3, ...), H_{s-1} and (-1)^{s-1} / (s-1)!."""
    high = source(ctx)
    sign = [(-1) ** k for k in range(order + 2)]
    head = [
        high.mpf(0) if k == order - 1 else sign[k] * high.zeta(order - k) / high.factorial(k)
        for k in range(order + 1)
    ]
    ratio = (NEAR**2 + SPLIT**2) / (2 * math.pi) ** 2
    count = 2 + math.ceil(accuracy(ctx) / -math.log(ratio))
    tail = [sign[order + 1] * high.zeta(-1 - 2 * j) / high.factorial(order + 1 + 2 * j) for j in range(count)]
    harmonic = sum((high.mpf(1) / k for k in range(1, order)), high.mpf(0))
    factor = sign[order - 1] / high.factorial(order - 1)
    harmonic, factor = rounded(ctx, [harmonic, factor])
    return rounded(ctx, head), rounded(ctx, tail), harmonic, factor


@lru_cache(maxsize=256)
def _eta_coefficients(ctx: Any, order: int) -> tuple[list[Any], list[Any]]:
    """Return head (powers 0..s) and tail (powers s+1, s+3, ...) of the expansion about z = -1."""
    high = source(ctx)
    ratio = (NEAR**2 + (math.pi - SPLIT) ** 2) / math.pi**2
    count = 2 + math.ceil(accuracy(ctx) / -math.log(ratio))

    def coefficient(k: int) -> Any:
        return -((-1) ** k) * high.altzeta(order - k) / high.factorial(k)

    head = [coefficient(k) for k in range(order + 1)]
    tail = [coefficient(order + 1 + 2 * j) for j in range(count)]
    return rounded(ctx, head), rounded(ctx, tail)
