"""R^2 - x^2 - y^2 next to a circle of radius R, without cancellation, and the distance from the circle.

In float64 each square is split into two floats (Dekker 1971, Numer. Math. 18, 224-242, from memory,
unchecked), so that the difference keeps its relative accuracy down to the rounding of the coordinates
themselves.
"""

from __future__ import annotations

from typing import Any

from laplace_verify.contexts import FLOAT
from laplace_verify.fields._two_floats import product_loss, two_floats
from laplace_verify.fields.exact import Exact, rational

__all__ = ["rim_gap"]


def rim_gap(ctx: Any, x: Any, y: Any, radius: Exact) -> tuple[Any, Any]:
    """Return R^2 - x^2 - y^2 and R - sqrt(x^2 + y^2), with their signs.

    >>> import numpy as np
    >>> square, gap = rim_gap(FLOAT, np.array([1.0 - 2.0**-40]), np.array([0.0]), 1)
    >>> bool(gap[0] == 2.0**-40)
    True
    """
    if ctx is not FLOAT:
        r = ctx.number(radius)
        square = r * r - x * x - y * y
        return square, square / (r + ctx.sqrt(x * x + y * y))
    high, low = two_floats(rational(radius) ** 2)
    (a, a_low), (b, b_low) = _square(x), _square(y)
    large, small = _larger_first(a, b)
    square = ((high - large) - small) + (low - a_low - b_low)
    return square, square / (float(radius) + ctx.sqrt(x * x + y * y))


def _larger_first(a: Any, b: Any) -> tuple[Any, Any]:
    """Return the larger of two arrays and the smaller: R^2 less the larger is exact where it is over half."""
    return FLOAT.where(a > b, a, b), FLOAT.where(a > b, b, a)


def _square(x: Any) -> tuple[Any, Any]:
    """Return x^2 as a sum of two floats, exactly."""
    product = x * x
    return product, product_loss(x, x, product)
