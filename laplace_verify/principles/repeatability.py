"""Repeatability.

One problem has one solution (maximum principle; Gilbarg & Trudinger, Elliptic Partial Differential Equations
of Second Order, 2nd edition, theorem 3.3, from memory, unchecked), so the same question gets the same answer:
asked again after another problem was solved, and, if the solve function has the keyword ``initial``, begun
from another first guess. A first guess is handed over as a function of points (n, d) that returns values
(n,). It shows matrices and factors kept from an earlier problem, random numbers without a seed, and
iterations that stop too early.

Conditions of validity: any solver and problem.

Tolerance: the largest difference of values at the same nodes (of a function: at points well inside), relative
to the largest boundary value, is judged *exactly* (see `limits`).
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from hypothesis import strategies as st

from laplace_verify.arrays import Array
from laplace_verify.errors import AnswerError
from laplace_verify.principles import strategies
from laplace_verify.principles.law import Finding, Law, Trial
from laplace_verify.principles.limits import Measurement, exactly
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reading import deep_points, places
from laplace_verify.solvers import Adapter, Answer

__all__ = ["REPEATABILITY"]

DEGREE = 3


def _with_other(pair: tuple[Posed, Posed]) -> Posed:
    first, other = pair
    return replace(first, beside={"other": other}, note=f"; solved before and after: {other.words()}")


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    return strategies.pairs(strategies.posed_for(solver, degree=DEGREE), degree=DEGREE).map(_with_other)


def _rough(points: Array) -> Array:
    """Return a first guess that is far from every solution."""
    guess: Array = 100.0 * np.sin(17.0 * points.sum(axis=1))
    return guess


def _compared(answer: Answer, again: Answer, points: Array) -> tuple[Array, Array, Array]:
    """Return points, and the values of both answers there."""
    if answer.values is None:
        return points, answer.value_at(points), again.value_at(points)
    if again.values is None or again.values.shape != answer.values.shape:
        raise AnswerError("solved again, the same problem has another number of values")
    return places(answer), answer.values, again.values


def _measure(trial: Trial, size: int) -> Measurement:
    inside = deep_points(trial.problem.shape, trial.seed)
    answer = trial.answer(size, inside)
    trial.companions["other"].answer(size, inside)
    found = [_difference(trial, answer, trial.fresh_answer(size, inside), "")]
    if trial.solver.takes("initial"):
        guessed = trial.fresh_answer(size, inside, initial=_rough)
        found.append(_difference(trial, answer, guessed, ", initial=rough"))
    return max(found, key=lambda measured: measured.violation)


def _difference(trial: Trial, answer: Answer, again: Answer, keyword: str) -> Measurement:
    """Return the largest difference between two answers to one problem."""
    points, first, second = _compared(answer, again, deep_points(trial.problem.shape, trial.seed))
    gap = np.abs(second - first)
    worst, unit = int(np.argmax(gap)), trial.posed.size
    place = tuple(points[worst].tolist())
    guess = ("rough = lambda points: 100 * np.sin(17 * points.sum(axis=1))",) if keyword else ()
    how = "with another first guess" if keyword else "solved again"
    return Measurement(
        violation=float(gap[worst]) / unit,
        points=points[worst : worst + 1],
        words=f"at {tuple(round(c, 6) for c in place)} the answer is {first[worst]:.6g}, and "
        f"{second[worst]:.6g} {how}",
        body=(
            *guess,
            f"again = {trial.call(more=keyword)}",
            f"abs(again.value_at([{place}]) - answer.value_at([{place}]))[0] / {unit!r}",
        ),
    )


def _judge(trial: Trial) -> Finding:
    return exactly(trial, _measure)


REPEATABILITY = Law(
    name="repeatability",
    statement="the same problem has the same solution, whatever was solved before or guessed first",
    inapplicable=strategies.beyond,
    problems=_problems,
    judge=_judge,
)
