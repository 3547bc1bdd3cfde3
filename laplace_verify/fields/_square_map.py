"""The Schwarz-Christoffel map of the exterior of a square, inverted by power series.

For the square |x|, |y| < 1 the map z(w) of |w| > 1 onto the exterior has

    dz/dw = c sqrt(1 + w^-4),     c = sqrt(2) Gamma(5/4) / (Gamma(3/4) Gamma(3/2)) = 1.18034...,

because the corners, where the exterior opens by 3 pi/2, lie at w^4 = -1; c is the logarithmic capacity of the
square. With t = 1 + w^-4, which vanishes at the corners, and the offset d from the corner 1 + i,

    zeta = d e^{-i pi/4} = (c/6) t^(3/2) 2F1(3/2, 5/4; 5/2; t),

so that t is an analytic function of q = (6 zeta/c)^(2/3), and dw/dz = 1/(c sqrt(t)). By symmetry only the
octant 0 <= y <= x needs to be mapped. There t(q) is a power series near the square, and w c/z one in z^-4
farther out, where 1 - t is small; both are summed by Horner's rule, the first from the offset from the
corner, so that r^(2/3) keeps its digits at any distance from it.

*Coefficients.* t = q T(q) obeys dt/dq = T^(-1/2) (1 - t)^(5/4), and w = (z/c) W(p), p = 4/z^4, obeys
W - 4 p W' = (1 + (c^4/4) p W^-4)^(-1/2): recurrences, with powers of series by Euler's rule (Henrici 1974,
Applied and Computational Complex Analysis, vol. 1, section 1.6, from memory, unchecked).

*Tails.* Continued by reflection across the sides, t(q) is analytic for |zeta| < 2, where the next corners
lie, and |1/w| <= |z| <= 2 + sqrt(2) there, because the unit disc lies in the square (its Green's function
is the greater one): |t| < 138. W is analytic for |p| < 1, and |W| <= c for the same reason. Cauchy's
estimates then bound what is left out by 138 r^N/(1 - r), r = (|zeta|/2)^(2/3), and c |p|^N/(1 - |p|).

References
----------
Schwarz-Christoffel maps of exteriors: Nehari 1952, Conformal Mapping, ch. V (from memory, unchecked). The
series are derived here.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from fractions import Fraction
from functools import lru_cache
from typing import Any, NamedTuple

import numpy as np

from laplace_verify.contexts import FLOAT, Precise
from laplace_verify.fields.exact import power
from laplace_verify.fields.polylog import accuracy, horner

__all__ = ["octant", "unit_capacity"]

FAR = 1.6  # half sides: from this distance on the series about infinity is summed, which loses no digits
NEAR = math.hypot(FAR - 1, 1)  # the largest distance from the corner at which its own series is summed
SMALLEST = 2.0**-20  # ratio below which points are not told apart
SOURCE = 40  # digits of the coefficients that float64 uses


@lru_cache(maxsize=64)
def unit_capacity(ctx: Any) -> Any:
    """Return c, the capacity of the square of side 2.

    >>> unit_capacity(FLOAT)
    1.1803405990160962
    """
    if ctx is FLOAT:
        return float(unit_capacity(_source()))
    fraction = ctx.mpf(1) / 4
    return ctx.sqrt(2) * ctx.gamma(5 * fraction) / (ctx.gamma(3 * fraction) * ctx.gamma(6 * fraction))


def octant(ctx: Any, place: tuple[Any, Any], beyond: tuple[Any, Any]) -> tuple[Any, Any]:
    """Return w and s = w/(dw/dz) at places 0 <= y <= x outside |x|, |y| < 1.

    Parameters
    ----------
    place, beyond
        Coordinates, and those of the offset from the corner 1 + i.
    """
    if ctx is not FLOAT:
        close = ctx.hypot(*place) < FAR
        return _by_corner(ctx, *beyond) if close else _far_out(ctx, *place)
    w, s = (np.empty(place[0].shape, dtype=np.complex128) for _ in range(2))
    close = np.hypot(*place) < FAR
    for here, function, given in ((close, _by_corner, beyond), (~close, _far_out, place)):
        if here.any():
            w[here], s[here] = function(ctx, given[0][here], given[1][here])
    return w, s


def _by_corner(ctx: Any, dx: Any, dy: Any) -> tuple[Any, Any]:
    """Return w and s by the series about the corner."""
    c, r = unit_capacity(ctx), ctx.hypot(dx, dy)
    ratio = power(ctx, r / 2, Fraction(2, 3))  # |q| over the radius of convergence
    angle = (ctx.atan2(dy, dx) - ctx.pi / 4) * 2 / 3
    q = _complex(ctx, ratio * ctx.cos(angle), ratio * ctx.sin(angle))
    t = q * CORNER.summed(ctx, q, ratio)
    # 1 - t lies in the upper half of the unit disc; rounding must not put it below the cut of the root
    v = 1 - t
    v = _complex(ctx, v.real, ctx.where(v.imag > 0, v.imag, 0 * v.imag))
    w = ctx.sqrt(_complex(ctx, 0 * r, 1 + 0 * r)) / ctx.sqrt(ctx.sqrt(v))
    return w, w * c * ctx.sqrt(t)


def _far_out(ctx: Any, x: Any, y: Any) -> tuple[Any, Any]:
    """Return w and s by the series about infinity."""
    c, z = unit_capacity(ctx), _complex(ctx, x, y)
    inverse = 1 / (z * z)
    p = 4 * inverse * inverse
    w = z / c * INFINITY.summed(ctx, p, abs(p))
    power = 1 / (w * w)
    return w, w * c * ctx.sqrt(1 + power * power)


def _complex(ctx: Any, re: Any, im: Any) -> Any:
    """Return re + i im."""
    return re + 1j * im if ctx is FLOAT else ctx.mpc(re, im)


class Series(NamedTuple):
    """A power series: its coefficients by context and number, the largest |z| asked for, |a_n| <= bound."""

    coefficients: Callable[[Any, int], list[Any]]
    largest: float
    bound: float

    def terms(self, ctx: Any, ratio: float) -> int:
        """Return the least N with bound ratio^N/(1 - ratio) <= e^-accuracy."""
        if not ratio > 0:
            return 1
        allowed = math.log(self.bound / (1 - ratio)) + accuracy(ctx)
        return max(1, math.ceil(allowed / -math.log(ratio)))

    def table(self, ctx: Any) -> list[Any]:
        """Return as many coefficients as are ever needed; those of float64 are rounded precise ones."""
        return _table(self, ctx, self.terms(ctx, self.largest))

    def summed(self, ctx: Any, z: Any, ratio: Any) -> Any:
        """Return sum a_n z^n, |z| = ratio; points with like ratios share their number of terms."""
        table = self.table(ctx)
        if ctx is not FLOAT:
            return horner(table[: self.terms(ctx, float(ratio))], z)
        total = np.empty(z.shape, dtype=np.complex128)
        band = np.ceil(4 * np.log2(np.maximum(ratio, SMALLEST)))
        for k in np.unique(band):
            here = band == k
            total[here] = horner(table[: self.terms(ctx, float(ratio[here].max()))], z[here])
        return total


@lru_cache(maxsize=32)
def _table(series: Series, ctx: Any, size: int) -> list[Any]:
    if ctx is FLOAT:
        return [float(a) for a in series.coefficients(_source(), size)]
    return series.coefficients(ctx, size)


@lru_cache(maxsize=1)
def _source() -> Precise:
    return Precise(SOURCE)


def _corner_coefficients(ctx: Any, size: int) -> list[Any]:
    """Return the coefficients of t/q in q over its radius of convergence, times that radius.

    With q = R rho: (n + 1) T_n = [T^(-1/2) (1 - R rho T)^(5/4)]_n, where T_n enters the right side as -T_n/2.
    """
    radius = (12 / unit_capacity(ctx)) ** ctx.number("2/3")
    half, fives = -ctx.number("1/2"), ctx.number("5/4")
    t, root, base, power = [ctx.mpf(1)], [ctx.mpf(1)], [ctx.mpf(1)], [ctx.mpf(1)]
    for n in range(1, size):
        base.append(-radius * t[n - 1])
        power.append(_next_of_power(ctx, base, power, fives))
        known = _next_of_power(ctx, [*t, ctx.mpf(0)], root, half)  # with T_n = 0
        rest = known + ctx.fdot(zip(root[1:], power[n - 1 : 0 : -1], strict=True)) + power[n]
        t.append(rest / (n + ctx.mpf(3) / 2))
        root.append(known + half * t[n])
    return [radius * a for a in t]


def _infinity_coefficients(ctx: Any, size: int) -> list[Any]:
    """Return the coefficients of w c/z in 4/z^4: (1 - 4 n) W_n = [(1 + k p W^-4)^(-1/2)]_n, k = c^4/4."""
    k, half = unit_capacity(ctx) ** 4 / 4, -ctx.number("1/2")
    w, fourth, base, root = [ctx.mpf(1)], [ctx.mpf(1)], [ctx.mpf(1)], [ctx.mpf(1)]
    for n in range(1, size):
        base.append(k * fourth[n - 1])
        root.append(_next_of_power(ctx, base, root, half))
        w.append(root[n] / (1 - 4 * n))
        fourth.append(_next_of_power(ctx, w, fourth, ctx.mpf(-4)))
    return w


def _next_of_power(ctx: Any, base: list[Any], power: list[Any], exponent: Any) -> Any:
    """Return the next coefficient of base^exponent, base[0] = 1, from those before it.

    With A = B^e, A' B = e A B': n A_n = sum_k ((e + 1) k - n) B_k A_(n-k), k = 1 to n.
    """
    n = len(power)
    back = power[::-1]
    weighted = ctx.fdot((k * b, a) for k, (b, a) in enumerate(zip(base[1:], back, strict=True), start=1))
    return (exponent + 1) * weighted / n - ctx.fdot(zip(base[1:], back, strict=True))


CORNER = Series(_corner_coefficients, (NEAR / 2) ** (2 / 3), 138.0)
INFINITY = Series(_infinity_coefficients, 4 / FAR**4, 1.2)
