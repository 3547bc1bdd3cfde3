"""How `plate_cells` covers a rectangle: ten cells across, and along it cells that grow away from the places.

Intervals are half as long at both ends of an axis, so that the centres of cells at a side lie on it, where
the polynomials of functions that are zero or insulated there have real or imaginary coefficients.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction

import numpy as np

from laplace_verify.arrays import Array, IntArray
from laplace_verify.fields.plate_cells import REACH

__all__ = ["Intervals", "intervals_across", "intervals_along"]

ACROSS = 10
MOST_STEPS = 2**16  # of the fine grid: rectangles up to 1 to 4000


@dataclass(frozen=True, slots=True, eq=False)
class Intervals:
    """Intervals of [0, length]: exact centres, reach on both sides of them, and the fine grid."""

    length: Fraction
    centre: tuple[Fraction, ...]
    low: Array  # distances of the centres from both ends
    high: Array
    below: Array
    above: Array
    interval: IntArray
    unwanted: int | None = None  # the one that need not be served


def intervals_across(length: Fraction) -> Intervals:
    """Return the intervals of the shorter extent."""
    return _intervals(length, 2 * ACROSS, [(2 * i, 1) for i in range(ACROSS + 1)])


def intervals_along(
    length: Fraction,
    across: Fraction,
    places: list[Fraction],
    widest: float,
    *,
    wanted: Fraction,
    backward: bool,
) -> Intervals | None:
    """Return the intervals of the longer extent, None if it is too long.

    The half width of an interval is a power of 2, so that many have the same shape, as large as keeps it
    `REACH` radii away from all `places`, and at most `widest`. Nothing is wanted farther than `wanted` from
    the lower end, or from the upper one if `backward`.
    """
    steps = 2 * round(ACROSS * length / across)
    if steps > MOST_STEPS:
        return None
    step = float(length / steps)
    at = np.unique([float(length - p if backward else p) / step for p in places])
    aside = float(across) / (2 * ACROSS) / step
    last = min(steps - 1, math.ceil(wanted / length * steps) | 1)
    found = [(0, 1)]
    edge, half = 1, 1
    while edge < last:
        half *= 2
        most = min(widest / step, (steps - 1 - edge) // 2)
        while half > 1 and (
            half > most or math.hypot(half, aside) * REACH > np.abs(at - (edge + half)).min(initial=math.inf)
        ):
            half //= 2
        found.append((edge + half, half))
        edge += 2 * half
    unwanted = None
    if edge < steps - 1:
        unwanted = len(found)
        found.append((edge + (steps - 1 - edge) // 2, (steps - 1 - edge) // 2))
    found.append((steps, 1))
    if backward:
        found = [(steps - centre, half) for centre, half in reversed(found)]
        unwanted = None if unwanted is None else len(found) - 1 - unwanted
    return _intervals(length, steps, found, unwanted)


def _intervals(
    length: Fraction, steps: int, found: list[tuple[int, int]], unwanted: int | None = None
) -> Intervals:
    """Return intervals given by centre and half width in steps; inner centres become short floats."""
    step = length / steps
    grain = Fraction(2) ** (math.frexp(float(step))[1] - 20)
    interval = np.zeros(steps, dtype=np.int64)
    for k, (centre, half) in enumerate(found):
        interval[max(centre - half, 0) : centre + half] = k
    width = np.array([float(half * step) for _, half in found])
    below, above = width.copy(), width.copy()
    below[0] = above[-1] = 0.0
    centres = tuple(
        length * c / steps if c in (0, steps) else round(c * step / grain) * grain for c, _ in found
    )
    return Intervals(
        length=length, centre=centres, low=np.array([float(c) for c in centres]),
        high=np.array([float(length - c) for c in centres]), below=below, above=above, interval=interval,
        unwanted=unwanted,
    )  # fmt: skip
