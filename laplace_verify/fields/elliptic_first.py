"""Carlson's elliptic integral of the first kind, given the square roots of its arguments.

    RF(a, b, c) = 1/2 int_0^inf dt / sqrt((t + a^2)(t + b^2)(t + c^2))

for complex a, b, c in the closed right half plane, at most one of them 0. With the roots in hand no branch
has to be chosen: duplication, which replaces a by sqrt((a + b)(a + c))/2 and so on, keeps them in the right
half plane, and each step brings the squares four times nearer to one another. What is left is a series
about equal arguments.

References
----------
Carlson (1995), Numerical computation of real or complex elliptic integrals, Numer. Algorithms 10, 13-26,
equations (2.2) and (2.9) (from memory; checked against ball arithmetic in tests).
"""

from __future__ import annotations

from typing import Any

import numpy as np

from laplace_verify.contexts import FLOAT

__all__ = ["first_kind"]

MOST_STEPS = 2000  # 1.7 digits a step, and a dozen to bring squares of very different sizes together


def first_kind(ctx: Any, a: Any, b: Any, c: Any) -> Any:
    """Return the integral for complex arrays of one shape, or precise complex numbers.

    >>> root = np.array([0.0, 0.6]) + 0j
    >>> first_kind(FLOAT, root, 1 + 0 * root, 1 + 0 * root).round(12).real.tolist()  # pi/2, acos(0.6)/0.8
    [1.570796326795, 1.159119022502]
    """
    for _ in range(MOST_STEPS):
        p, q, r = ctx.sqrt(a + b), ctx.sqrt(a + c), ctx.sqrt(b + c)
        a, b, c = p * q / 2, p * r / 2, q * r / 2
        mean = (a * a + b * b + c * c) / 3  # 0 before the first step for i, 0, 1, not after it
        x, y = 1 - a * a / mean, 1 - b * b / mean
        if _close(ctx, x, y):
            break
    z = -x - y
    second, third = x * y - z * z, x * y * z
    series = 1 - second / 10 + third / 14 + second * second / 24 - 3 * second * third / 44
    return series / ctx.sqrt(mean)


def _close(ctx: Any, x: Any, y: Any) -> bool:
    """Return whether the first term left out of the series, of sixth order, is below the rounding."""
    if ctx is FLOAT:
        size = np.maximum(np.maximum(abs(x), abs(y)), abs(x + y))
        return not np.any(size > 2e-3)  # a point that is not finite must not hold up the others
    return bool(max(abs(x), abs(y), abs(x + y)) <= ctx.mpf(10) ** -(ctx.dps // 6 + 1))
