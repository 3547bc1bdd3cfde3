"""Cylinder with a hot lid: u = 1 on the end at d = 0, 0 on the other end and on the side; radius 1, height H.

Three forms, with r the distance from the axis, gap = 1 - r, d + h = H, and q = pi d / H:

    (1)  u = sum_n 2 J_0(j_n r)/(j_n J_1(j_n)) Z_H(j_n),
         Z_H(j) = e^{-j d} (1 - e^{-2 j h})/(1 - e^{-2 j H}),
    (2)  u = h/H - w,   w = sum_n 2/(n pi) sin(n q) I_0(k_n r)/I_0(k_n),   k_n = n pi / H,
    (3)  (2) with the large-argument expansion of the quotients (`bessel_tables`), which sums to
         polylogarithms,
             w ~ 2/(pi sqrt r) sum_j b_j(r) (H/pi)^j Im Li_{j+1}(e^{-pi gap/H + i q}),
         while the first N modes, whose arguments are too small for it, are corrected one by one.

(1) decays with the distance from the lid and serves for d >= 0.3, (2) with that from the side and serves for
gap >= H/4, (3) is left for the neighbourhood of the rim and of the upper side. A tall cylinder is cut there:
for d < 0.3 the height H_0 = 1 replaces H in (2) and (3), and the difference is (1) with Z_H - Z_{H_0}, which
decays like e^{-j (2 H_0 - d)}.

Error. The terms of (1) and (2) are below 2 e^{-j_n d} and e^{-k_n gap}; sums end where these are e^{-L}. In
(3), I_0(x) = (e^x/pi) int_0^2 e^{-xs} (s (2 - s))^{-1/2} ds shows that J terms miss at most twice the next
one plus pi e^{-x} relative; k_N r >= L and the first a_J / L^J below e^{-L} make both e^{-L} in precise
numbers, and in float64 N = 24, J = 9 leave 1e-16 (measured).

References
----------
Carslaw & Jaeger (1959), Conduction of heat in solids, 2nd ed., section 8.3, for (1) and (2) (from memory,
unchecked); (3) and the cut are derived here.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.contexts import FLOAT
from laplace_verify.fields._precision import working
from laplace_verify.fields.bessel_tables import bessel_j, expansion, quotient, zero
from laplace_verify.fields.cylinder_tables import axial_sum, radial_sum
from laplace_verify.fields.polylog import accuracy, polylog

__all__ = ["lid_slopes", "lid_value"]

DEEP = 0.3  # d from which (1) serves
AWAY = 0.25  # gap / H from which (2) serves
FLOAT_MODES, FLOAT_ORDERS = 24, 9
LOWEST = 4  # powers of two in which distances are told apart

Place = tuple[Any, Any, Any]  # r, gap, d


def lid_value(ctx: Any, r: Any, gap: Any, d: Any, height: Any) -> Any:
    """Return u at r = 1 - gap and d, for H = `height`."""
    return _chosen(ctx, (r, gap, d), height, 0)[0]


def lid_slopes(ctx: Any, r: Any, gap: Any, d: Any, height: Any) -> tuple[Any, Any]:
    """Return the derivatives of `lid_value` in r and in d."""
    _, across, along = _chosen(ctx, (r, gap, d), height, 1)
    return across, along


def _chosen(ctx: Any, place: Place, height: Any, weight: int) -> list[Any]:
    """Return u and its derivatives (if `weight` is 1) by the form that serves at each point."""
    cut = height if height < 1 else 0 * height + 1
    if ctx is not FLOAT:
        return _form(ctx, _zone(place, cut), place, height, cut, weight)
    r, gap, d = place
    zones = np.where(d >= DEEP, 0, np.where(gap >= AWAY * cut, 20, 40))
    decay = np.where(zones == 0, d, np.where(zones == 20, gap / cut, 1.0))
    # Points within a factor of two share their number of terms.
    zones = zones - np.clip(np.frexp(decay)[1], -LOWEST, LOWEST)
    result = [np.zeros(len(d)) for _ in range(3)]
    for zone in np.flatnonzero(np.bincount(zones + LOWEST)) - LOWEST:
        rows = np.flatnonzero(zones == zone)
        form, band = divmod(int(zone) + LOWEST, 20)
        at = (r[rows], gap[rows], d[rows])
        parts: Any = _tabled(form, 2.0 ** (LOWEST - 1 - band), at, height, cut, weight)
        if parts is None:
            parts = _form(ctx, form, at, height, cut, weight)
        for total, part in zip(result, parts, strict=True):
            total[rows] = part
    return result


def _tabled(form: int, least: float, place: Place, height: float, cut: float, weight: int) -> Array | None:
    """Return float64's `_form` by tables, None if there are none; decay is at least `least`."""
    r, _, d = place
    if form == 0:
        return radial_sum(r, d, lambda j, d: _profile(FLOAT, j, d, height), max(DEEP, least), weight)
    if form == 2:
        return None
    parts = axial_sum(r, d, cut, min(DEEP, cut), cut * max(AWAY, least), weight)
    if parts is None or cut == height:
        return parts
    extra = radial_sum(r, d, lambda j, d: _difference(FLOAT, j, d, height, cut), 2 * cut - DEEP, weight)
    return None if extra is None else parts + extra


def _zone(place: Place, cut: Any) -> int:
    """Return which form serves at a precise point."""
    _, gap, d = place
    return 0 if d >= DEEP else 1 if gap >= AWAY * cut else 2


def _form(ctx: Any, zone: int, place: Place, height: Any, cut: Any, weight: int) -> list[Any]:
    """Return u and derivatives by one form."""
    if zone == 0:
        return _radial_modes(ctx, place, lambda j, d: _profile(ctx, j, d, height), _least(place[2]), weight)
    parts = (_axial_modes if zone == 1 else _rim)(ctx, place, cut, weight)
    if cut < height:
        reach = float(2 * cut - DEEP)
        extra = _radial_modes(ctx, place, lambda j, d: _difference(ctx, j, d, height, cut), reach, weight)
        parts = [a + b for a, b in zip(parts, extra, strict=True)]
    return parts


def _least(x: Any) -> float:
    """Return the least of an array, or a number as float."""
    return float(np.min(x)) if isinstance(x, np.ndarray) else float(x)


def _profile(ctx: Any, j: Any, d: Any, height: Any) -> list[Any]:
    """Return Z_H and its derivative in d."""
    h = height - d
    below = -ctx.expm1(-2 * j * height)
    decay = ctx.exp(-j * d)
    return [decay * -ctx.expm1(-2 * j * h) / below, -j * decay * (1 + ctx.exp(-2 * j * h)) / below]


def _difference(ctx: Any, j: Any, d: Any, height: Any, cut: Any) -> list[Any]:
    """Return Z of the whole cylinder less that of the cut one, and its derivative."""
    whole, part = _profile(ctx, j, d, height), _profile(ctx, j, d, cut)
    return [a - b for a, b in zip(whole, part, strict=True)]


def _radial_modes(
    ctx: Any, place: Place, profile: Callable[[Any, Any], list[Any]], reach: float, weight: int
) -> list[Any]:
    """Return the sum (1), whose terms decay like e^{-j reach}."""
    r, _, d = place
    count = 2 + math.ceil((accuracy(ctx) + 3) / (math.pi * reach))
    total = [0 * d, 0 * d, 0 * d]
    for n in range(1, count + 1):
        j, steep = zero(ctx, n)
        factor = 2 / (j * steep)
        z, dz = profile(j, d)
        wave = bessel_j(ctx, 0, j * r)
        total[0] = total[0] + factor * wave * z
        if weight:
            total[1] = total[1] - factor * j * bessel_j(ctx, 1, j * r) * z
            total[2] = total[2] + factor * wave * dz
    return total


def _axial_modes(ctx: Any, place: Place, height: Any, weight: int) -> list[Any]:
    """Return the sum (2)."""
    r, gap, d = place
    base = ctx.pi / height
    count = 2 + math.ceil((accuracy(ctx) + 3) / (float(base) * _least(gap)))
    total = [(height - d) / height, 0 * d, -1 / height + 0 * d]
    for n in range(1, count + 1):
        k = n * base
        sine, cosine = ctx.sin(k * d), ctx.cos(k * d)
        even = quotient(ctx, 0, k, r, gap)
        total[0] = total[0] - 2 / (n * ctx.pi) * sine * even
        if weight:
            total[1] = total[1] - 2 / height * sine * quotient(ctx, 1, k, r, gap)
            total[2] = total[2] - 2 / height * cosine * even
    return total


def _rim(ctx: Any, place: Place, height: Any, weight: int) -> list[Any]:
    """Return the sum (3)."""
    orders, modes, lost = _orders(ctx, place[0], ctx.pi / height)
    if lost:  # terms that grow before they fall are taken off again mode by mode
        inner = working(ctx.digits + lost)
        parts = _rim_sum(
            inner, tuple(inner.convert(c) for c in place), inner.convert(height), weight, orders, modes
        )
        return [ctx.convert(part) for part in parts]
    return _rim_sum(ctx, place, height, weight, orders, modes)


def _rim_sum(ctx: Any, place: Place, height: Any, weight: int, orders: int, modes: int) -> list[Any]:
    """Return (3) with a given number of orders and of corrected modes."""
    r, gap, d = place
    base = ctx.pi / height
    p, q = base * gap, base * d
    rest = ctx.pi - q
    logs = [polylog(ctx, s, p, q, rest) for s in range(1 - weight, orders + 1)]
    even = expansion(ctx, 0, r, orders)
    root = 1 / ctx.sqrt(r)
    powers = [base**-j for j in range(orders)]
    total = [(height - d) / height, 0 * d, -1 / height + 0 * d]
    odd = expansion(ctx, 1, r, orders) if weight else []
    for j in range(orders):
        total[0] = total[0] - 2 / ctx.pi * root * powers[j] * even[j] * logs[j + weight].imag
        if weight:
            total[1] = total[1] - 2 / height * root * powers[j] * odd[j] * logs[j].imag
            total[2] = total[2] - 2 / height * root * powers[j] * even[j] * logs[j].real
    for n in range(1, modes + 1):
        k = n * base
        sine, cosine, scale = ctx.sin(n * q), ctx.cos(n * q), root * ctx.exp(-n * p)
        miss = quotient(ctx, 0, k, r, gap) - scale * _series(even, 1 / k)
        total[0] = total[0] - 2 / (n * ctx.pi) * sine * miss
        if weight:
            miss_odd = quotient(ctx, 1, k, r, gap) - scale * _series(odd, 1 / k)
            total[1] = total[1] - 2 / height * sine * miss_odd
            total[2] = total[2] - 2 / height * cosine * miss
    return total


def _series(coefficients: list[Any], x: Any) -> Any:
    """Return sum coefficients[j] x^j."""
    total = coefficients[-1]
    for c in reversed(coefficients[:-1]):
        total = total * x + c
    return total


def _orders(ctx: Any, r: Any, base: Any) -> tuple[int, int, int]:
    """Return how many orders to take, how many modes to correct, and how many digits cancellation costs."""
    if ctx is FLOAT:
        return FLOAT_ORDERS, max(2, math.ceil(FLOAT_MODES * math.pi / float(base))), 0
    limit, first = accuracy(ctx) + 5, float(base) * float(r)
    orders, size, largest, highest = 1, 0.0, 0.0, 0.0  # log of a_J / L^J, and of a_J / (k_1 r)^J
    while size > -limit:
        step = (2 * orders - 1) ** 2 / (8.0 * orders)
        size += math.log(step / limit)
        largest += math.log(step / first)
        highest = max(highest, largest)
        orders += 1
    return orders, math.ceil(limit / first), 3 + math.ceil(highest / math.log(10))
