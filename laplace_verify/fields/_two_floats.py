"""Numbers as sums of two floats: what a float64 operation loses, exactly or to twice its digits.

Products are split after Dekker, differences after Knuth (Dekker 1971, Numer. Math. 18, 224-242; from memory,
unchecked).
"""

from __future__ import annotations

from fractions import Fraction
from typing import Any, TypeAlias

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.fields.exact import Exact, rational

__all__ = ["accurate_power", "product_loss", "scaled_offset", "split", "two_floats"]

SPLITTER = 2.0**27 + 1.0

Complex: TypeAlias = tuple[Array, Array, Array, Array]  # real and imaginary part, and what both lack


def two_floats(number: Fraction) -> tuple[float, float]:
    """Return the nearest float64 and the rest."""
    high = float(number)
    return high, float(number - Fraction(high))


def split(x: Any) -> tuple[Any, Any]:
    """Return x as a sum of two numbers of half the digits."""
    upper = SPLITTER * x
    upper = upper - (upper - x)
    return upper, x - upper


def product_loss(x: Any, y: Any, product: Any) -> Any:
    """Return x y - product, exactly, if `product` is x y rounded."""
    (a, b), (c, d) = split(x), split(y)
    return ((a * c - product) + a * d + b * c) + b * d


def scaled_offset(x: Any, place: Exact, scale: Exact) -> tuple[Any, Any]:
    """Return (x - place)/scale as a float64 and what it lacks.

    >>> import numpy as np
    >>> high, low = scaled_offset(np.array([0.3]), Fraction(1, 10), 3)
    >>> exact = (Fraction(0.3) - Fraction(1, 10)) / 3
    >>> bool(abs(Fraction(high[0]) + Fraction(low[0]) - exact) < Fraction(1, 10**32))
    True
    """
    high, low = two_floats(rational(place))
    difference = x - high
    back = x - difference
    lost = (x - (difference + back)) + (back - high) - low
    if scale == 1:
        return difference, lost
    unit, rest = two_floats(rational(scale))
    quotient = difference / unit
    product = quotient * unit
    lost = ((difference - product) - product_loss(quotient, unit, product)) + lost - quotient * rest
    return quotient, lost / unit


def accurate_power(z: Complex, n: int) -> tuple[Array, Array]:
    """Return real and imaginary part of z^n, n >= 0, to a rounding or two of |z|^n.

    >>> import numpy as np
    >>> (third, lost), none = two_floats(Fraction(1, 3)), np.zeros(1)
    >>> re, im = accurate_power((none + third, none, none + lost, none), 200)
    >>> bool(abs(re[0] * 3.0**200 - 1) < 5e-16)
    True
    """
    none = np.zeros_like(z[0])
    power: Complex = (none + 1.0, none, none, none)
    while n:
        if n & 1:
            power = _times(power, z)
        n >>= 1
        if n:
            z = _times(z, z)
    re, im, more_re, more_im = power
    # next to the range of float64 the split overflows: there the plain product serves
    return re + np.where(np.isfinite(more_re), more_re, 0.0), im + np.where(
        np.isfinite(more_im), more_im, 0.0
    )


def _times(z: Complex, w: Complex) -> Complex:
    """Return a product with what it lacks, to first order."""
    (a, b, da, db), (c, d, dc, dd) = z, w
    ac, bd, ad, bc = a * c, b * d, a * d, b * c
    re, im = ac - bd, ad + bc
    lost_re = _sum_loss(ac, -bd, re) + (product_loss(a, c, ac) - product_loss(b, d, bd))
    lost_im = _sum_loss(ad, bc, im) + (product_loss(a, d, ad) + product_loss(b, c, bc))
    lost_re += (a * dc - b * dd) + (c * da - d * db)
    lost_im += (a * dd + b * dc) + (d * da + c * db)
    return re, im, lost_re, lost_im


def _sum_loss(x: Any, y: Any, total: Any) -> Any:
    """Return x + y - total, exactly, if `total` is x + y rounded."""
    part = total - x
    return (x - (total - part)) + (y - part)
