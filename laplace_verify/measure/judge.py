"""The verdict: the observed order of every deciding norm against the expected one, three-valued.

With tol half of the smallest loss of order to be seen and se the standard error of the fit over K >= 4
levels:

    PASS if p >= p_exp - tol + 2 se and the last pair slope >= p_exp - tol - 2 sqrt(2) sigma / ln(ratio),
    FAIL if p <= p_exp - tol - 2 se and the last pair slope < p_exp - tol,
    otherwise INCONCLUSIVE: another level may settle it.

The rule is one-sided: convergence faster than expected passes. Simulated over sequences with noise of 2 to 5
%, next-order terms of -50 to 100 % on the coarsest grid and p = 2, sound and one-order-low methods are told
apart without an error in 60000 (below 5e-5 at 95 %); the tests repeat a part of that simulation. An order
study cannot see a defect whose error is still below the method's own on the finest level.

References
----------
The rule and its rates are derived here. Roache 1994, J. Fluids Eng. 116, 405-413, for observed orders.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import replace
from itertools import pairwise

from laplace_verify.measure.expected import Expectation, smallest_loss
from laplace_verify.measure.floors import floor_kind, named_floor, rises
from laplace_verify.measure.orders import OrderFit, fit_order, noise_level, pair_orders
from laplace_verify.measure.rates import Finding, judge_decrease, judge_exponential, stagnation
from laplace_verify.measure.results import Level, Order
from laplace_verify.measure.series import MINIMUM_LEVELS, TOO_COARSE, Series, series_of
from laplace_verify.measure.smoothness import is_functional
from laplace_verify.measure.verdict import Verdict

__all__ = ["combine", "judge", "judge_norm"]

GRADIENT_NORMS = ("H1-semi", "energy")


def judge(
    levels: Sequence[Level],
    expectations: Mapping[str, Expectation],
    *,
    kind: str = "other",
    error_floor: float | None = None,
    mixed_signs: Mapping[str, str] | None = None,
) -> dict[str, Order]:
    """Return norm -> Order for every norm that was measured, from plain numbers alone.

    Parameters
    ----------
    levels : sequence of Level
        Coarsest first.
    expectations : mapping
        norm -> Expectation, fixed before the run.
    kind : str
        The kind of method (it sets the scatter to assume).
    error_floor : float, optional
        The declared relative floor.
    mixed_signs : mapping, optional
        Functionals that cannot be judged and why (their signed error passes through zero).
    """
    judged = [level for level in levels if level.judged]
    noise = noise_level(kind, [level.size for level in judged], [level.h for level in judged])
    orders: dict[str, Order] = {}
    for norm, expectation in expectations.items():
        if not any(norm in level.errors for level in levels):
            continue
        series = series_of(norm, levels, error_floor)
        order = judge_norm(series, expectation, noise)
        if mixed_signs and norm in mixed_signs and not series.exact:
            order = replace(order, verdict=None, floor=None, note=f"{norm}: {mixed_signs[norm]}")
        pairs = pair_orders(
            [level.h for level in levels], [level.errors.get(norm, math.nan) for level in levels]
        )
        orders[norm] = replace(order, pairs=pairs)
    return orders


def judge_norm(series: Series, expectation: Expectation, noise: float) -> Order:
    """Return the order and verdict of one norm (`pairs` is left to the caller)."""
    expected = expectation.expected
    if series.exact:
        return _order(series, expectation, None, Finding(Verdict.PASS, "exact to round-off at every size"))
    if expected == "exponential":
        observed, finding = judge_exponential(series)
        return replace(_order(series, expectation, None, finding), observed=observed)
    if expected == "decrease":
        return _order(series, expectation, _fit(series, None, noise), judge_decrease(series))
    if not isinstance(expected, float | int):
        return _order(series, expectation, _fit(series, None, noise), None)
    fit = _fit(series, float(expected), noise)
    return _order(series, expectation, fit, _algebraic(series, float(expected), fit, noise))


def combine(orders: Mapping[str, Order]) -> tuple[Verdict, list[str], list[str]]:
    """Return verdict, reasons and remarks: every deciding norm must pass and none may fail.

    A functional (flux, quantity) may fail a study but not leave it open: its signed error can pass through
    zero. Nor does a gradient norm that is on course where L2 passes: with a mesh of size h and an
    interpolant I, ||grad(u_h - u)|| <= ||grad(u - I u)|| + (C/h) ||u_h - I u|| by the inverse inequality
    (Ciarlet 1978, theorem 3.2.6; from memory), so the order in L2 less one bounds it from below.
    """
    deciding = {norm: order for norm, order in orders.items() if order.decides and order.verdict is not None}
    remarks = [
        order.note for norm, order in orders.items()
        if norm not in deciding and (order.verdict is Verdict.FAIL or (order.decides and order.note))
    ]  # fmt: skip
    for norm in [norm for norm in deciding if is_functional(norm) or _held_by_l2(norm, deciding)]:
        if deciding[norm].verdict is Verdict.INCONCLUSIVE:
            remarks.append(deciding.pop(norm).note)
    if not deciding:
        return Verdict.INCONCLUSIVE, ["theory promises no rate in any norm that could be measured"], remarks
    verdicts = [order.verdict for order in deciding.values()]
    reasons = [order.note for order in deciding.values()]
    if Verdict.FAIL in verdicts:
        return Verdict.FAIL, reasons, remarks
    if Verdict.INCONCLUSIVE in verdicts:
        return Verdict.INCONCLUSIVE, reasons, remarks
    return Verdict.PASS, reasons, remarks


def _held_by_l2(norm: str, orders: Mapping[str, Order]) -> bool:
    """Return whether a gradient norm is on course by its fit, and bounded by a pass in L2."""
    order, l2 = orders[norm], orders.get("L2")
    if norm not in GRADIENT_NORMS or l2 is None or l2.verdict is not Verdict.PASS:
        return False
    if order.observed is None or not isinstance(order.expected, float | int):
        return False
    return order.observed >= order.expected - smallest_loss(float(order.expected)) / 2


def _fit(series: Series, expected: float | None, noise: float) -> OrderFit | None:
    """Return the fit over the levels above the floor, None if fewer than three.

    A functional can be hit exactly by chance: such levels have no logarithm and are left out.
    """
    pairs = zip(series.h[: series.above], series.errors[: series.above], strict=True)
    known = [(h, error) for h, error in pairs if error > 0.0 or not math.isfinite(error)]
    if len(known) < 3:
        return None
    h, errors = zip(*known, strict=True)
    return fit_order(h, errors, expected, noise)


def _algebraic(series: Series, expected: float, fit: OrderFit | None, noise: float) -> Finding:
    """Return the finding for an expected number."""
    stuck = stagnation(series, expected)
    if stuck is not None:
        return stuck
    least = expected - smallest_loss(expected) / 2
    if series.at_floor and series.above < MINIMUM_LEVELS:
        return _down_to_floor(series, least, noise)
    if fit is None:
        coarse = ", ".join(size for size, why in series.left_out.items() if why.startswith(TOO_COARSE))
        without = f" (without {coarse}: {TOO_COARSE})" if coarse else ""
        words = f"{series.above} levels can be judged, too few for an order{without}; {_advice(series)}"
        return Finding(Verdict.INCONCLUSIVE, words, finer=True)
    if series.above < MINIMUM_LEVELS:
        words = f"three levels give an order but no verdict; {_advice(series)}"
        return Finding(Verdict.INCONCLUSIVE, words, finer=True)
    slopes = pair_orders(series.h[: series.above], series.errors[: series.above])
    last = slopes[-1]
    margin = 2 * math.sqrt(2) * noise / math.log(series.h[series.above - 2] / series.h[series.above - 1])
    holds = last is not None and last >= least - margin
    if fit.low >= least and holds:
        return Finding(Verdict.PASS)
    stalled = not holds and all(slope is not None and slope >= least for slope in slopes[:-1])
    if stalled or fit.low >= least:
        relative = series.relative[series.above - 1]
        words = (
            f"stalled: the error falls as expected up to size {series.sizes[series.above - 2]} but only at "
            f"order {last:.2f} to size {series.sizes[series.above - 1]}, at a relative error of "
            f"{relative:.1e}: {named_floor(relative)}. If a solver tolerance or a reduced precision stops "
            f"it, declare error_floor; if not, {_advice(series)}"
        )
        return Finding(Verdict.INCONCLUSIVE, words, finer=True, floor=floor_kind(relative))
    if fit.high <= least and last is not None and last < least:
        return Finding(Verdict.FAIL, rises(series))
    if last is not None and last >= least and _rising(slopes):
        words = (
            f"not in the asymptotic range yet: the order between levels rises from {slopes[0]:.2f} to "
            f"{last:.2f}; {_advice(series)}"
        )
        return Finding(Verdict.INCONCLUSIVE, words, finer=True)
    words = f"{rises(series) or 'too few or too rough levels to tell'}; {_advice(series)}"
    return Finding(Verdict.INCONCLUSIVE, words, finer=True)


def _rising(slopes: Sequence[float | None]) -> bool:
    """Return whether the order between levels rises from level to level."""
    return all(a is not None and b is not None and b > a for a, b in pairwise(slopes))


def _down_to_floor(series: Series, least: float, noise: float) -> Finding:
    """Return the finding where fewer than four levels lie above the floor.

    The slope into the first level at the floor is a lower bound of the order: the floor only adds to the
    error.
    """
    top = series.above
    h, errors = series.h[: top + 1], series.errors[: top + 1]
    slopes = [slope for slope in pair_orders(h, errors) if slope is not None]
    best = max(slopes[-2:], default=math.inf)  # no slope: the error vanishes at the floor
    if top >= 3:
        best = max(best, math.log(errors[0] / errors[2]) / math.log(h[0] / h[2]))
    if best >= least:
        return Finding(Verdict.PASS, f"falls to the floor, at order {best:.2f} or more before it")
    margin = 2 * math.sqrt(2) * noise / math.log(h[0] / h[1])
    if top >= 3 and best < least - margin:
        return Finding(Verdict.FAIL, f"falls to the floor, but only at order {best:.2f}")
    return Finding(Verdict.INCONCLUSIVE, f"{top} levels lie above the floor, too few; run coarser sizes")


def _advice(series: Series) -> str:
    """Return which sizes to run next: as many as a verdict lacks, one at least."""
    if not series.sizes:
        return "run finer sizes"
    ratio = series.sizes[-1] / series.sizes[-2] if len(series.sizes) > 1 else 2.0
    lacking = max(1, MINIMUM_LEVELS - len(series.sizes))
    sizes = [str(round(series.sizes[-1] * ratio**k)) for k in range(1, lacking + 1)]
    return f"run {'a finer size' if lacking == 1 else 'finer sizes'}, {', '.join(sizes)}"


def _order(series: Series, expectation: Expectation, fit: OrderFit | None, finding: Finding | None) -> Order:
    """Assemble an Order and its sentence."""
    expected = expectation.expected
    if (
        finding
        and finding.verdict is Verdict.PASS
        and len(series.sizes) < MINIMUM_LEVELS
        and not series.exact
    ):
        words = f"{finding.words}; {_few(series)}" if finding.words else _few(series)
        finding = Finding(Verdict.INCONCLUSIVE, words, finer=True)
    return Order(
        observed=fit.order if fit else None,
        low=fit.low if fit else None,
        high=fit.high if fit else None,
        formal=expectation.formal,
        expected=expected,
        decides=expectation.decides,
        tolerance=smallest_loss(float(expected)) / 2 if isinstance(expected, float | int) else None,
        basis=expectation.basis,
        verdict=finding.verdict if finding else None,
        finer=bool(finding and finding.finer),
        floor=finding.floor if finding else None,
        left_out=series.left_out,
        note=_sentence(series, expectation, fit, finding),
    )


def _few(series: Series) -> str:
    """Return why a good order over few levels is no PASS."""
    return f"{len(series.sizes)} levels can be judged, a verdict needs {MINIMUM_LEVELS}; {_advice(series)}"


def _sentence(series: Series, expectation: Expectation, fit: OrderFit | None, finding: Finding | None) -> str:
    """Return, say, "max: formal order 2, observed 1.02 [0.95, 1.09] over 4 levels: FAIL".

    The expected order is named where it differs from the formal one.
    """
    parts = []
    formal, expected = expectation.formal, expectation.expected
    if formal is not None:
        parts.append(f"formal order {formal if isinstance(formal, str) else format(formal, '.3g')}")
    if expected is not None and (expected != formal or expectation.claimed):
        whose = " (claimed by its author)" if expectation.claimed else ""
        parts.append(f"expected {expected if isinstance(expected, str) else format(expected, '.3g')}{whose}")
    if fit is not None:
        parts.append(f"observed {fit.order:.2f} [{fit.low:.2f}, {fit.high:.2f}] over {series.above} levels")
    text = f"{series.norm}: {', '.join(parts)}" if parts else f"{series.norm}:"
    if finding is None:
        return f"{text}; no rate is expected, it does not decide ({expectation.basis})"
    text += f": {finding.verdict}" if expectation.decides else " (does not decide)"
    if finding.words:
        text += f"; {finding.words}"
    if expectation.decides and fit is not None and isinstance(expected, float | int):
        loss = smallest_loss(float(expected))
        text += f" (tolerance {loss / 2:.3g}: a loss of {loss:.3g} or more is to be seen)"
    return text
