"""a^2 - |x - c|^2 in float64 without cancellation: points next to a circle know how far from it they are.

The rounding errors of differences and products are recovered exactly (Dekker 1971, A floating-point
technique for extending the available precision, Numer. Math. 18, 224-242) and added at the end, so that the
result is good to a few units in its own last place as long as it is more than about 1e-30 a^2.
"""

from __future__ import annotations

from fractions import Fraction
from typing import Any

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.contexts import FLOAT
from laplace_verify.fields.exact import Exact

__all__ = ["square_gap"]

SPLITTER = 134217729.0  # 2^27 + 1


def square_gap(ctx: Any, a: Exact | Any, x: tuple[Any, ...], centre: tuple[Exact, ...]) -> Any:
    """Return a^2 - sum (x - centre)^2; `a` is an exact number, in a precise context a number of it will do.

    >>> square_gap(FLOAT, 1, (np.array([0.6]), np.array([0.8])), (0, 0)).tolist()  # 0.6, 0.8 are rounded
    [-4.4408920985006264e-17]
    """
    if ctx is not FLOAT:
        number = a if hasattr(a, "_mpf_") else ctx.number(a)
        return number**2 - sum((c - ctx.number(m)) ** 2 for c, m in zip(x, centre, strict=True))
    high, low = _parts(a)
    total, rest = _squared(np.full(np.shape(x[0]), high), low)
    for c, m in zip(x, centre, strict=True):
        middle, fine = _parts(m)
        d, error = _two_sum(c, -middle)
        square, small = _squared(d, error - fine)
        total, error = _two_sum(total, -square)
        rest = rest + (error - small)
    return total + rest


def _parts(number: Exact) -> tuple[float, float]:
    """Return the nearest float and what it lacks."""
    high = float(number)
    return high, 0.0 if isinstance(number, float) else float(Fraction(number) - Fraction(high))


def _two_sum(a: Any, b: Any) -> tuple[Array, Array]:
    """Return fl(a + b) and its error."""
    total = a + b
    part = total - a
    return total, (a - (total - part)) + (b - part)


def _squared(high: Array, low: Any) -> tuple[Array, Array]:
    """Return fl(high^2) and (high + low)^2 minus it."""
    square = high * high
    big = SPLITTER * high
    head = big - (big - high)
    tail = high - head
    error = ((head * head - square) + 2.0 * head * tail) + tail * tail
    return square, error + (2.0 * high + low) * low
