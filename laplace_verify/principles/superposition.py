"""Superposition and scaling.

div(K grad u) = 0 and its conditions are linear: if u and v solve the problems with data f and g, then
2 u - 3 v solves the one with data 2 f - 3 g, and c u the one with data c f (Gilbarg & Trudinger, Elliptic
Partial Differential Equations of Second Order, 2nd edition, section 2.4 on the Dirichlet problem, from
memory, unchecked). Either two problems are combined, or one is scaled by c = 1000 or 1/1000. It shows
limiters, clipping, thresholds and tolerances that are absolute where they should be relative.

Conditions of validity: any bounded shape, conditions, K; both problems have the same shape, conditions and
K. Pure Neumann answers are linear if their level is.

Tolerance: |w_h - (2 u_h - 3 v_h)|, divided by 2 max|u| + 3 max|v| on the boundary, or |w_h - c u_h| / (c
max|u|), must be round-off if the solver declares "superposition" among its ``discrete_laws`` (a linear scheme
on a mesh that does not depend on the data), and vanish *in the limit* otherwise, at the declared order (see
`limits`).
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from hypothesis import strategies as st

from laplace_verify.principles import strategies
from laplace_verify.principles.law import Finding, Law, Trial
from laplace_verify.principles.limits import Measurement, declared_or_in_the_limit, rate_of
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.side_by_side import largest, together
from laplace_verify.solvers import Adapter

__all__ = ["SUPERPOSITION"]

FIRST, SECOND = 2, -3
SCALES = st.sampled_from((1000.0, 0.001))
DEGREE = 3


def _combined(pair: tuple[Posed, Posed]) -> Posed:
    first, second = pair
    if first.field is None or second.field is None:
        raise TypeError("a field is needed to combine")
    both = replace(first, field=FIRST * first.field + SECOND * second.field)
    note = f"; second: {second.words()}; both: {FIRST} times the first and {SECOND} times the second"
    return replace(first, beside={"second": second, "both": both}, note=note)


def _scaled(posed: Posed, factor: float) -> Posed:
    if posed.field is None:
        raise TypeError("a field is needed to scale")
    both = replace(posed, field=factor * posed.field)
    return replace(posed, beside={"both": both}, note=f"; and {factor:g} times its data", drawn=factor)


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    drawn = strategies.posed_for(solver, degree=DEGREE)
    return strategies.pairs(drawn, degree=DEGREE).map(_combined) | st.builds(_scaled, drawn, SCALES)


def _measure(trial: Trial, size: int) -> Measurement:
    points, first, beside = together(trial, size)
    both, factor = beside["both"], trial.posed.drawn
    if factor is not None:
        return largest(
            points,
            np.abs(both - factor * first),
            factor * trial.posed.size,
            "at {place} the answer to " + f"{factor:g}" + " times the data is {both}, for the data {first}",
            f"abs(both.value_at(x) - {factor!r} * answer.value_at(x))[0]",
            {"both": both, "first": first},
        )
    second = beside["second"]
    expected = FIRST * first + SECOND * second
    unit = abs(FIRST) * trial.posed.size + abs(SECOND) * trial.companions["second"].posed.size
    return largest(
        points,
        np.abs(both - expected),
        unit,
        "at {place} the answer to the combined data is {both}, the combined answers are {expected}",
        f"abs(both.value_at(x) - ({FIRST} * answer.value_at(x) + {SECOND} * second.value_at(x)))[0]",
        {"both": both, "expected": expected},
    )


def _judge(trial: Trial) -> Finding:
    return declared_or_in_the_limit(SUPERPOSITION.name, trial, _measure, rate_of(trial))


SUPERPOSITION = Law(
    name="superposition",
    statement="the solution for combined data is the same combination of the solutions",
    inapplicable=strategies.beyond,
    problems=_problems,
    judge=_judge,
)
