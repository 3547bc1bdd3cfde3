"""What a change of one of the solver's own settings does to its answer, beside the discretisation error.

A setting that only ends the work earlier or later (a tolerance, a time to march for) must not show: what it
changes must be less than what is wrong anyway. Without an exact solution that is known from two sizes: if the
error is C h^q, then

    error with h  =  |u_h - u_H| / ((H/h)^q - 1)

(Richardson 1911, from memory, unchecked). The largest difference over the 100 deepest of 300 seeded points is
taken, so that a place where the error happens to vanish does not decide.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from hypothesis import strategies as st

from laplace_verify import fields
from laplace_verify.principles import strategies
from laplace_verify.principles.law import Finding, NoValuesError, Trial, round_off
from laplace_verify.principles.limits import rate_of
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reading import deep_points, told, values_at
from laplace_verify.solvers import Adapter

__all__ = ["changed_by", "curved_problems", "no_curved_problems"]


def no_curved_problems(solver: Adapter) -> str | None:
    """Return why `curved_problems` draws nothing for a solver, or None."""
    if solver.kind == "stochastic":
        return f"{solver.name} is stochastic: chance hides what a setting does"
    if not strategies.drawable(solver.dims - {1}, solver.shapes):
        return f"{solver.name} solves on a line only, where there is no discretisation error to compare with"
    return strategies.beyond_numbers(solver)


def curved_problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    """Return a strategy for problems with e^y cos x and the like, which no grid method solves exactly."""
    flat = strategies.posed(
        solver.dims - {1}, solver.shapes, strategies.conditions_of(solver), {"scalar"}, degree=2
    )
    return st.builds(_with_wave, flat, st.integers(1, 2), st.sampled_from(("cos", "sin")))


def _with_wave(posed: Posed, k: int, part: str) -> Posed:
    """Return a problem with the data of a wave."""
    if posed.shape.dim == 2:
        return replace(posed, field=fields.exp_trig(k, part))
    return replace(posed, field=fields.exp_trig((k, 1), (part, part)))


def changed_by(trial: Trial, keyword: str, value: float, says: str) -> Finding:
    """Judge the change at the third size against the discretisation error there.

    Parameters
    ----------
    trial : its solver takes the keyword
    keyword, value : what is handed to `Adapter.solve` the second time
    says : how the second answer was made, in words

    Raises
    ------
    NoValuesError
        If the answer has no values between nodes.
    """
    coarse, fine = trial.sizes[-2:]
    points = deep_points(trial.problem.shape, trial.seed)
    before, now = values_at(trial, coarse, points), values_at(trial, fine, points)
    again = trial.fresh_answer(fine, points, **{keyword: value}).value_at(points)
    ratio = trial.spacing(coarse) / trial.spacing(fine)
    if not ratio > 1.0:
        raise NoValuesError(f"h does not fall from size {coarse} to size {fine}")
    unit = trial.posed.size
    error = float(np.max(np.abs(now - before))) / (ratio ** rate_of(trial) - 1.0) / unit
    gap = np.abs(again - now)
    worst = int(np.argmax(gap))
    place = points[worst].tolist()
    violation = float(gap[worst]) / unit
    return Finding(
        violation=violation,
        tolerance=max(round_off(trial.solver), error),
        sizes=(fine,),
        history=(violation,),
        points=points[worst : worst + 1],
        words=f"at {told(points[worst])} the answer is {now[worst]:.6g}, and {again[worst]:.6g} {says}",
        rule="it must be less than the discretisation error as two sizes show it",
        body=(
            f"again = {trial.call(more=f', {keyword}={value!r}')}",
            f"abs(again.value_at([{place}]) - answer.value_at([{place}]))[0] / {unit!r}",
        ),
    )
