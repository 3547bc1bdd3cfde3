"""Rates that are no number: geometric convergence, plain decrease, and errors that do not fall at all.

An error C exp(-b n) has the local order ln(e_1/e_2)/ln(n_2/n_1) = b (n_2 - n_1)/ln(n_2/n_1), which grows like n; for
root-exponential convergence exp(-c sqrt n) it grows like sqrt n; for an algebraic method it stays. A growth of the local
order by the fourth root of the growth of n therefore tells them apart (derived here).
"""

from __future__ import annotations

import math

import numpy as np

from laplace_verify.measure.orders import pair_orders
from laplace_verify.measure.series import Series
from laplace_verify.measure.verdict import Verdict

__all__ = ["judge_decrease", "judge_exponential", "stagnation"]

STEEP = 6.0  # a fall to the floor in one step counts as geometric from this local order on
FLAT = 0.9  # last error over first: nothing was gained
TINY = 1e-6  # relative errors below it that do not fall look like a tolerance or a precision, not a wrong limit
HALVED = 0.5


def stagnation(series: Series, expected: float = 1.0) -> tuple[Verdict, str] | None:
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
    if max(series.relative) <= TINY:
        words = (
            f"the error stays near {last:.1e} (relative {series.relative[-1]:.1e}): small, but neither falling nor at "
            f"round-off. If a solver tolerance or a reduced precision stops it, declare error_floor"
        )
        return Verdict.INCONCLUSIVE, words
    if last > 2 * first:
        return Verdict.FAIL, f"diverges: the error grows from {first:.2e} to {last:.2e}"
    return Verdict.FAIL, f"does not converge: the error stays at {last:.2e} (relative {series.relative[-1]:.1e})"


def judge_exponential(series: Series) -> tuple[float | None, Verdict, str]:
    """Return b of e ~ exp(-b n), verdict and words for a method that declares exponential convergence."""
    stuck = stagnation(series)
    if stuck is not None:
        return None, *stuck
    top = series.above
    stop = top + 1 if series.at_floor else top
    n, errors = [float(size) for size in series.sizes[:stop]], series.errors[:stop]
    inverse = [1 / size for size in n]
    orders = [order for order in pair_orders(inverse, errors) if order is not None]
    if len(n) < 2 or not all(error > 0 for error in errors):
        if series.at_floor:
            return None, Verdict.PASS, "falls to zero"
        return None, Verdict.INCONCLUSIVE, "too few levels; run more sizes"
    rate = -float(np.polyfit(n, np.log(errors), 1)[0])
    said = f"error falls like exp(-{rate:.3g} n)"
    if min(orders) <= 0:
        return rate, Verdict.INCONCLUSIVE, "the error rises between levels above the floor; declare error_floor if it is one"
    if series.at_floor and orders[-1] >= STEEP:
        return rate, Verdict.PASS, f"{said} and reaches the floor by size {series.sizes[top]}"
    if len(orders) < 2:
        return rate, Verdict.INCONCLUSIVE, f"{said}; too few levels to tell it from a power; run more sizes"
    growth = orders[-1] / orders[0]
    reach = math.sqrt(n[-1] * n[-2] / (n[1] * n[0]))
    if growth >= reach**0.25:
        return rate, Verdict.PASS, f"{said}: the local order grows from {orders[0]:.1f} to {orders[-1]:.1f}"
    if growth <= reach**0.125 and not series.at_floor:
        words = f"the local order stays near {orders[-1]:.2f}: algebraic, not exponential convergence"
        return rate, Verdict.FAIL, words
    return rate, Verdict.INCONCLUSIVE, f"{said}, but too roughly to tell it from a power; run sizes in between"


def judge_decrease(series: Series) -> tuple[Verdict, str]:
    """Return verdict and words where theory promises convergence without a rate: the error must halve."""
    stuck = stagnation(series)
    if stuck is not None:
        return stuck
    said = "theory claims convergence and no rate"
    if series.at_floor and series.above:
        return Verdict.PASS, f"falls to the floor; {said}"
    if len(series.errors) < 3:
        return Verdict.INCONCLUSIVE, "fewer than three levels can be judged; run finer sizes"
    first, last = series.errors[0], series.errors[-1]
    if last <= HALVED * first and last <= 1.1 * series.errors[-2]:
        return Verdict.PASS, f"falls from {first:.2e} to {last:.2e}; {said}"
    return Verdict.INCONCLUSIVE, f"falls only from {first:.2e} to {last:.2e}; {said}; run finer sizes"
