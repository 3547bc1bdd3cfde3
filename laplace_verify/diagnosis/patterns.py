"""How the failing cases fail: a limit that is wrong, whole orders lost, or the gradient alone.

The loss of a norm is its expected order less the observed one. A consistent scheme with a closure one order
too low loses one; a wrong sign, coefficient or constant leaves an error that does not shrink at all
(observed order near 0). Score: share of the failing cases that show the pattern, times 0.45: it says how a
solver fails, and what says where comes first. Two patterns have their share unabated. Gradients or fluxes
that alone fall short say where: after the solution. Errors that fall and grow again are those of a system
solved less and less well, since its condition number grows under refinement and consistent schemes converge;
where four in five show it, the others may be too easy to solve.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from statistics import median

from laplace_verify.diagnosis.finding import Finding, case_list, counted
from laplace_verify.measure.results import Order, Study
from laplace_verify.measure.series import FLOOR_MARGIN, ROUND_OFF, differences
from laplace_verify.measure.verdict import Verdict

__all__ = ["patterns", "short_norms"]

_WEIGHT = 0.45  # below a feature that both of two failing cases have and none of two passing ones
_SHARE = 0.6
_NEAR = 0.3
_CLEAR = 0.8  # share of the failing cases from which growing errors count in full
_SMALL = 0.05  # relative error: a solution that is about right
_GROWN = 1.5
_VALUES = ("max", "L1", "L2")


def short_norms(study: Study) -> dict[str, Order]:
    """Return the deciding norms in which a study falls short, those whose order between levels is known."""
    return {
        norm: order
        for norm, order in study.orders.items()
        if order.decides and order.verdict is Verdict.FAIL and _observed(order) is not None
    }


def patterns(failing: Sequence[Study]) -> list[Finding]:
    """Return the manners of failing that most failing cases share."""
    found: list[Finding | None] = [
        _pattern(
            failing,
            _solved_worse,
            "get better on coarse grids and worse on finer ones, where equations are harder to solve: the "
            "iteration stops early (its tolerance, its norm or its number of steps), or round-off grows",
            1.0 / _CLEAR,
        ),
        _pattern(
            failing,
            _without_limit,
            "do not get smaller errors by refinement: they converge to a wrong limit, or stop at a floor. "
            "Typical of a wrong sign, coefficient, normal or constant, or of an iteration that stops early",
        ),
        _pattern(
            failing,
            lambda study: any(_lost(order, 1.0) for order in short_norms(study).values()),
            "lose one order. Typical of one-sided differences, of data or values taken half a cell or a node "
            "away, of a spacing with n - 1 or n + 1 in place of n, of a closure one order lower at the "
            "boundary, or of straight edges in place of curves",
        ),
        _pattern(
            failing,
            lambda study: any(_algebraic(order) for order in short_norms(study).values()),
            "converge like a power of h only, where exponential convergence is declared. Typical of "
            "interpolation of low order between points, of one condition by a formula of low order, or of "
            "data that are not smooth",
        ),
        _pattern(
            failing,
            _behind_the_values,
            "fall short in gradient or flux only, or in quantities taken from the answer; the values "
            "converge as expected: look at how gradients, fluxes and the level are recovered",
            1.0,
        ),
    ]
    return [finding for finding in found if finding is not None]


def _pattern(
    failing: Sequence[Study], shows: Callable[[Study], bool], text: str, weight: float = _WEIGHT
) -> Finding | None:
    """Return a finding if enough failing studies show the pattern."""
    showing = [study for study in failing if shows(study)]
    if not showing or len(showing) < _SHARE * len(failing):
        return None
    orders = [
        seen for study in showing for o in short_norms(study).values() if (seen := _observed(o)) is not None
    ]
    who = counted(len(showing), len(failing), "failing cases")
    said = f"median {median(orders):.2f}, from {min(orders):.2f} to {max(orders):.2f}" if orders else "none"
    evidence = f"observed orders: {said}; "
    return Finding(
        text=f"{who[0].upper()}{who[1:]} {_agree(text, len(showing), len(failing))}",
        evidence=evidence + f"cases: {case_list(showing)}",
        score=min(1.0, weight * len(showing) / len(failing)),
        studies=tuple(showing),
    )


def _agree(text: str, count: int, whole: int) -> str:
    """Put the verb into the singular where one case is spoken of."""
    if count > 1 and whole > 1:
        return text
    first, _, rest = text.partition(" ")
    return f"{'does' if first == 'do' else first + 's'} {rest}".replace(
        "they converge", "it converges"
    ).replace("or stop at", "or stops at")


def _solved_worse(study: Study) -> bool:
    """Return whether the error has been small and grows again by half or more down to the finest size."""
    errors = [
        error for level in study.levels
        if (error := level.relative.get("L2", level.relative.get("max"))) is not None
    ]  # fmt: skip
    least = min(errors, default=math.inf)
    return least < _SMALL and errors[-1] > max(_GROWN * least, ROUND_OFF * FLOOR_MARGIN)


def _without_limit(study: Study) -> bool:
    return bool(short_norms(study)) and all(_flat(order) for order in short_norms(study).values())


def _observed(order: Order) -> float | None:
    """Return the observed order, between the last levels where a rate and no order was looked for."""
    if order.expected != "exponential":
        return order.observed
    known = [pair for pair in order.pairs if pair is not None][-2:]
    return sum(known) / len(known) if known else None


def _flat(order: Order) -> bool:
    observed = _observed(order)
    return observed is not None and observed < _NEAR


def _algebraic(order: Order) -> bool:
    return order.expected == "exponential" and not _flat(order)


def _lost(order: Order, loss: float) -> bool:
    if order.observed is None or not isinstance(order.expected, float | int) or _flat(order):
        return False
    return abs(order.expected - order.observed - loss) < _NEAR


def _behind_the_values(study: Study) -> bool:
    """Return whether values pass in some norm and fall short in none, though something else does."""
    short = short_norms(study)
    passed = any(norm in _VALUES and order.verdict is Verdict.PASS for norm, order in study.orders.items())
    alone = bool(short) and all(differences(norm) for norm in short)
    return alone or (passed and bool(short) and not any(norm in _VALUES for norm in short))
