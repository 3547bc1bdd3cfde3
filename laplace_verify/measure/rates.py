"""Rates that are no number: geometric convergence, plain decrease, and errors that do not fall at all.

An error C exp(-b n) has the local order ln(e_1/e_2)/ln(n_2/n_1) = b (n_2 - n_1)/ln(n_2/n_1), which grows like
n; for root-exponential convergence exp(-c sqrt n) it grows like sqrt n; for an algebraic method it stays. A
growth of the local order by the fourth root of the growth of n therefore tells them apart (derived here).
"""

from __future__ import annotations

import math
from typing import NamedTuple

import numpy as np

from laplace_verify.measure.floors import floor_kind, named_floor
from laplace_verify.measure.orders import pair_orders
from laplace_verify.measure.series import MINIMUM_LEVELS, Series, differences
from laplace_verify.measure.signs import FloorKind
from laplace_verify.measure.smoothness import is_functional
from laplace_verify.measure.verdict import Verdict

__all__ = ["Finding", "judge_decrease", "judge_exponential", "stagnation"]

STEEP = 6.0  # a fall to the floor in one step counts as geometric from this local order on
UNLIKELY = 0.1  # relative error of a functional that no coarse grid meets by chance and keeps
FLAT = 0.9  # last error over first: nothing was gained
STILL_FALLING = 0.3  # order between the last levels above which nothing is said to have stopped
# Relative errors below it that do not fall look like a tolerance or a precision, not like a wrong limit;
# gradients take ten times as much, since single precision divided by h comes to that on affordable grids.
TINY, TINY_GRADIENT = 1e-5, 1e-4
CLEARLY = 0.7  # last errors over first ones: a fall that is no scatter


class Finding(NamedTuple):
    """A verdict, why in words, whether a finer level may settle what is open, and a floor if there is one."""

    verdict: Verdict
    words: str = ""
    finer: bool = False
    floor: FloorKind | None = None


def stagnation(series: Series, expected: float = 1.0) -> Finding | None:
    """Return a verdict if the error does not fall over three levels or more, None if it falls.

    `expected` is the order that should have shown: over a range of h in which it means less than a factor
    1.8 nothing is concluded.
    """
    if series.above < 3 or series.at_floor:
        return None
    first, last = series.errors[0], series.errors[series.above - 1]
    due = (series.h[0] / series.h[series.above - 1]) ** expected
    if not (last >= FLAT * first and due >= 1.8):
        return None
    if max(series.relative) <= (TINY_GRADIENT if differences(series.norm) else TINY):
        words = (
            f"the error stays near {last:.1e} (relative {series.relative[-1]:.1e}): small, but "
            f"neither falling nor at round-off: {named_floor(series.relative[-1])}. If a solver tolerance or "
            "a reduced precision stops it, declare error_floor"
        )
        return Finding(Verdict.INCONCLUSIVE, words, floor=floor_kind(series.relative[-1]))
    slope = pair_orders(series.h[: series.above], series.errors[: series.above])[-1]
    if slope is not None and slope > STILL_FALLING:
        words = (
            f"the error is no smaller at size {series.sizes[series.above - 1]} than at size "
            f"{series.sizes[0]}, but falls at the end; run finer sizes"
        )
        return Finding(Verdict.INCONCLUSIVE, words, finer=True)
    if last > 2 * first:
        return Finding(Verdict.FAIL, f"diverges: the error grows from {first:.2e} to {last:.2e}")
    words = f"does not converge: the error stays at {last:.2e} (relative {series.relative[-1]:.1e})"
    return Finding(Verdict.FAIL, words)


def judge_exponential(series: Series) -> tuple[float | None, Finding]:
    """Return b of e ~ exp(-b n) and the finding for a method that declares exponential convergence."""
    stuck = stagnation(series)
    if stuck is not None:
        return None, stuck
    stop = series.above + 1 if series.at_floor else series.above
    n, errors = [float(size) for size in series.sizes[:stop]], series.errors[:stop]
    if series.at_floor and not all(error > 0 for error in errors):
        return None, Finding(Verdict.PASS, "falls to zero")
    if len(n) < 2:
        return None, Finding(Verdict.INCONCLUSIVE, "too few levels; run more sizes", finer=True)
    rate = -float(np.polyfit(n, np.log(errors), 1)[0])
    return rate, _geometric(series, n, errors, f"error falls like exp(-{rate:.3g} n)")


def _geometric(series: Series, n: list[float], errors: list[float], said: str) -> Finding:
    """Tell geometric convergence from a power by the growth of the local order."""
    orders = [order for order in pair_orders([1 / size for size in n], errors) if order is not None]
    if min(orders) <= 0:
        words = "the error rises between levels above the floor; declare error_floor if it is one"
        fell = errors[-1] <= CLEARLY * errors[0] or series.relative[-1] <= TINY
        floor = floor_kind(series.relative[-1]) if fell else None
        return Finding(Verdict.INCONCLUSIVE, words, floor=floor)
    if series.at_floor and orders[-1] >= STEEP:
        return Finding(Verdict.PASS, f"{said} and reaches the floor by size {series.sizes[series.above]}")
    if len(orders) < 2:
        return Finding(Verdict.INCONCLUSIVE, f"{said}; too few levels to tell it from a power", finer=True)
    growth = orders[-1] / orders[0]
    reach = math.sqrt(n[-1] * n[-2] / (n[1] * n[0]))
    if growth >= reach**0.25:
        words = f"{said}: the local order grows from {orders[0]:.1f} to {orders[-1]:.1f}"
        return Finding(Verdict.PASS, words)
    if growth <= reach**0.125 and not series.at_floor:
        words = f"the local order stays near {orders[-1]:.2f}: algebraic, not exponential convergence"
        return Finding(Verdict.FAIL, words)
    words = f"{said}, but too roughly to tell it from a power; run sizes in between"
    return Finding(Verdict.INCONCLUSIVE, words, finer=True)


def _by_chance(series: Series) -> bool:
    """Return whether a functional that stays may have been close at first by chance: its errors are small."""
    return is_functional(series.norm) and min(series.relative) < UNLIKELY


def judge_decrease(series: Series) -> Finding:
    """Return the finding where theory promises convergence without a rate: the error must clearly fall.

    Such errors may fall unevenly: the last two must lie below the first two, their geometric mean by 30 %. A
    failure needs every error to stay up.
    """
    said = "theory claims convergence and no rate"
    if series.at_floor and series.above:
        return Finding(Verdict.PASS, f"falls to the floor; {said}")
    if len(series.errors) < MINIMUM_LEVELS:
        words = "fewer than four levels can be judged; run finer sizes"
        return Finding(Verdict.INCONCLUSIVE, words, finer=True)
    stuck = stagnation(series)
    if stuck is not None and min(series.errors) >= FLAT * series.errors[0] and not _by_chance(series):
        return stuck
    first, last = (math.sqrt(a * b) for a, b in (series.errors[:2], series.errors[-2:]))
    if last <= CLEARLY * first and max(series.errors[-2:]) <= min(series.errors[:2]):
        return Finding(Verdict.PASS, f"falls from {series.errors[0]:.2e} to {series.errors[-1]:.2e}; {said}")
    words = f"falls too little or unevenly ({series.errors[0]:.2e} to {series.errors[-1]:.2e}); {said}"
    return Finding(Verdict.INCONCLUSIVE, f"{words}; run finer sizes", finer=True)
