"""Offsets to the two ends of an edge, and the potential of a line of charge between them.

With the distances R_0, R_1 of the ends, their sum s and the length L it is ln((s + L)/(s - L)), finite beyond
the ends. Near the line s^2 - L^2 = 2 (h^2 + R_0 R_1 + Z_0 Z_1), h the distance from it, would cancel: there

    R_0 R_1 + Z_0 Z_1 = h^2 (h^2 + Z_0^2 + Z_1^2)/(R_0 R_1 - Z_0 Z_1)        (Z_0 < 0 < Z_1)

(derived here).
"""

from __future__ import annotations

from fractions import Fraction
from typing import Any, NamedTuple

import numpy as np

from laplace_verify.contexts import FLOAT
from laplace_verify.fields.exact import Exact, offset

__all__ = ["TINY", "Gaps", "ellipse_gap", "gaps_to", "logarithm_between"]

TINY = 1e-150
FLAT = 0.5


class Gaps(NamedTuple):
    """Offsets from a point to a lower and an upper end, and the length, which is lost in them far away."""

    low: Any
    high: Any
    length: Any


def gaps_to(ctx: Any, x: Any, lower: Exact, upper: Exact) -> Gaps:
    """Return the offsets from a coordinate to two ends."""
    return Gaps(
        low=-offset(ctx, x, lower),
        high=-offset(ctx, x, upper),
        length=ctx.number(Fraction(upper) - Fraction(lower)),
    )


def logarithm_between(ctx: Any, across: Any, z: Any, ends: Gaps, r: list[Any]) -> Any:
    """Return ln((s + L)/(s - L)), on the edge something finite: there its factor makes the term vanish."""
    s, gap = r[0] + r[1], ellipse_gap(ctx, across * across + z * z, ends, r)
    if ctx is not FLOAT:
        return ctx.log((s + ends.length) ** 2 / gap) if gap else ctx.mpf(0)
    flat = np.minimum(ends.length / s, FLAT)  # far away the ratio is almost 1
    near = np.log((s + ends.length) ** 2 / np.maximum(gap, TINY))
    return np.where(flat < FLAT, 2.0 * np.arctanh(flat), near)


def ellipse_gap(ctx: Any, h2: Any, ends: Gaps, r: list[Any]) -> Any:
    """Return s^2 - L^2, four times the square of the short semi-axis of the ellipse about the two ends."""
    product = ends.low * ends.high
    between = product < 0
    rest = h2 * (h2 + ends.low**2 + ends.high**2) / ctx.where(between, r[0] * r[1] - product, 1)
    return 2 * (h2 + ctx.where(between, rest, r[0] * r[1] + product))
