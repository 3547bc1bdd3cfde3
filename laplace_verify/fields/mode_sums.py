"""Sums of modes sin or cos(n pi s/a) sinh(n pi h/a) / sinh(n pi b/a) without overflow or cancellation.

With d + h = b, p = pi d / a, theta = pi s / a, z = e^{-p + i theta} and y = e^{-2 pi h / a} z,

    sum_n A_n trig(n theta) sinh(n pi h/a) / sinh(n pi b/a) = part sum_n G_n (z^n - y^n),
    G_n = A_n / (1 - e^{-2 n pi b / a}),

part = Im for sines, Re for cosines. In a thin rectangle z and y nearly agree and G_n is large; the difference
is therefore formed once, as (z - y) times the divided difference of the polynomial G, which Horner's scheme
gives along with G itself. Both factors are accurate to rounding for every a / b.

The number of terms follows from a bound of the coefficients; points are sorted by distance so that only those
next to the hot side pay for many terms.

References
----------
Divided differences by Horner's scheme: de Boor (1978), A practical guide to splines (from memory, unchecked);
the rest is derived here.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any, TypeAlias

import numpy as np

from laplace_verify.contexts import FLOAT
from laplace_verify.errors import FieldError
from laplace_verify.fields.exact import Exact, offset
from laplace_verify.fields.polylog import accuracy, unit

__all__ = ["MOST_TERMS", "Decay", "mode_slopes", "mode_value", "side_angles", "terms_needed"]

MOST_TERMS = 20000
FEW = 12  # terms that cost no more than sorting the points by the number they need

Place: TypeAlias = tuple[Any, Any, Any, Any]  # (p, q, r, gap), see `_difference_sum`


@dataclass(frozen=True, slots=True, kw_only=True)
class Decay:
    """The statement |A_n| <= bound * ratio**n * n**-power * scale for all n >= 1; A_n = 0 for n > last.

    `scale` is the size of u the truncation error is to be compared with; it need not be known here.
    """

    bound: float = 1.0
    ratio: float = 1.0
    power: float = 0.0
    last: int | None = None

    def tail(self, count: int, p: float, weight: int) -> float:
        """Return a bound of sum_{n > count} n**weight |A_n| rho**(n - 1) / scale with rho = e^{-p} * ratio.

        Dividing by rho keeps the first mode's relative accuracy far from the side. Two bounds are known and
        the smaller counts: a geometric series of ratio rho (1 + 1/(count + 1))**(weight - power), and, with
        e = power - weight > 1, the integral of x**-e.
        """
        if self.last is not None and count >= self.last:
            return 0.0
        rho, exponent = self.ratio * math.exp(-p), self.power - weight
        growth = rho * (1 + 1 / (count + 1)) ** max(-exponent, 0)
        bounds = [math.inf]
        decayed = math.exp(count * math.log(rho)) if rho > 0 else 0.0
        if growth < 1:
            bounds.append(decayed * float(count + 1) ** -exponent / (1 - growth))
        if exponent > 1:
            bounds.append(decayed * float(count) ** (1 - exponent) / (exponent - 1))
        return self.bound * min(bounds)


def terms_needed(decay: Decay, p: float, weight: int, digits: float) -> int:
    """Return the least count (to 5 %) whose tail bound is below e^{-digits}.

    >>> terms_needed(Decay(ratio=0.5), 0.0, 0, 40.0)
    61
    >>> terms_needed(Decay(last=3), 0.0, 0, 40.0)
    3

    Raises
    ------
    FieldError
        If more than `MOST_TERMS` terms are needed.
    """
    count = 1
    while not decay.tail(count, p, weight) <= math.exp(-digits):
        if decay.last is not None and count * 1.05 + 1 >= decay.last:
            return decay.last
        count = int(count * 1.05) + 1
        if count > MOST_TERMS:
            raise FieldError(
                f"the series needs more than {MOST_TERMS} terms at distance {p / math.pi:.3g} side lengths "
                f"from the "
                "side with data, by the stated decay bound: state a faster decay, keep away from that side, "
                "or "
                "give the data as polynomial pieces, which are summed in closed form"
            )
    return count


def side_angles(ctx: Any, gamma: Any, x: Any, ends: tuple[Exact, Exact]) -> tuple[Any, Any]:
    """Return gamma s and pi - gamma s for the coordinate x along the side, from distances to its two ends."""
    s, rest = offset(ctx, x, ends[0]), -offset(ctx, x, ends[1])
    if ctx is FLOAT:
        return gamma * np.maximum(s, 0.0), gamma * np.maximum(rest, 0.0)
    return gamma * ctx.where(s > 0, s, 0 * s), gamma * ctx.where(rest > 0, rest, 0 * rest)


def mode_value(ctx: Any, even: bool, coefficients: Callable[[int], Any], decay: Decay, place: Place) -> Any:
    """Return part sum G_n (z^n - y^n), see `_difference_sum`; coefficients(N) gives G_1 ... G_N."""
    _, modes = _difference_sum(ctx, coefficients, decay, place, 0)
    return modes.real if even else modes.imag


def mode_slopes(
    ctx: Any, even: bool, coefficients: Callable[[int], Any], decay: Decay, place: Place
) -> tuple[Any, Any]:
    """Return the derivatives of `mode_value` in q and in p with p + gap / 2 fixed; coefficients(N): n G_n."""
    total, modes = _difference_sum(ctx, coefficients, decay, place, 1)
    both = 2 * total - modes  # z^n + y^n
    return (-modes.imag, -both.real) if even else (modes.real, -both.imag)


def _difference_sum(
    ctx: Any,
    coefficients: Callable[[int], Any],
    decay: Decay,
    place: Place,
    weight: int,
) -> tuple[Any, Any]:
    """Return S = sum G_n z^n and D = sum G_n (z^n - y^n), z = e^{-p + iq}, y = e^{-gap} z.

    Parameters
    ----------
    coefficients : callable
        coefficients(N) returns the real G_1 ... G_N, already multiplied by n**weight, N at most decay.last.
    decay : Decay
        Bound of |G_n| / n**weight times (1 - e^{-n gap}), that is of the coefficients A_n.
    place : (p, q, r, gap)
        p >= 0, 0 <= q <= pi, r = pi - q, gap >= 0: arrays (n,) or precise numbers.
    weight : int
        0 for values, 1 for gradients.
    """
    p, digits = place[0], accuracy(ctx)
    if not isinstance(p, np.ndarray):
        return _horner_pair(ctx, coefficients(terms_needed(decay, float(p), weight, digits)), *place)
    most = terms_needed(decay, float(p.min()), weight, digits) if p.size else 1
    if most <= FEW:
        return _horner_pair(ctx, coefficients(most), *place)
    total = np.empty(p.shape, dtype=np.complex128)
    difference = np.empty(p.shape, dtype=np.complex128)
    band = np.clip(
        np.frexp(p)[1], -1000, 12
    )  # points within a factor of two in p share their number of terms
    for k in np.unique(band):
        here = np.flatnonzero(band == k)
        count = terms_needed(decay, float(p[here].min()), weight, digits)
        total[here], difference[here] = _horner_pair(ctx, coefficients(count), *(a[here] for a in place))
    return total, difference


def _horner_pair(ctx: Any, coefficients: Any, p: Any, q: Any, r: Any, gap: Any) -> tuple[Any, Any]:
    """Return G(z) and G(z) - G(y) = (z - y) G[z, y] for the polynomial G without constant term."""
    z = ctx.exp(-p) * unit(ctx, q, r)
    shrink = ctx.expm1(-gap)
    y, apart = z + z * shrink, -z * shrink
    total, divided = z * 0, z * 0
    for c in reversed(
        coefficients
    ):  # both recurrences are updated in place: blocks are large, terms are many
        divided *= y
        divided += total
        total *= z
        total += c
    divided = divided * y + total  # the last step of Horner's scheme multiplies by z and adds G_0 = 0
    return total * z, apart * divided
