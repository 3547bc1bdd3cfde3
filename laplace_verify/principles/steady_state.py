"""Steady state reached.

A solution of u_t = div(K grad u) with data that do not change in time tends to that of div(K grad u) = 0 like
exp(-K lambda t), lambda > 0 the least eigenvalue of -Laplace with these conditions (Evans, Partial
Differential Equations, 2nd edition, section 7.1, from memory, unchecked). A solver that marches there must
march on until what is left is lost in the discretisation error: marching as long again shows it.

Conditions of validity: the solve function has a parameter ``duration``, the time to march for, with a
positive number for its default: that is how a solver declares that it marches. K a number, in the plane or
in space; values between nodes. Data of e^y cos x and the like, so that there is a discretisation error. A
stochastic solver is not judged.

Tolerance: the largest change, when the duration is twice its default, against the discretisation error of the
same size (see `keyword_changes`), or round-off and the declared error floor if that is more.
"""

from __future__ import annotations

from laplace_verify.principles.keyword_changes import changed_by, curved_problems, no_curved_problems
from laplace_verify.principles.law import Finding, Law, Trial
from laplace_verify.solvers import Adapter

__all__ = ["STEADY_STATE"]

LONGER = 2.0


def _inapplicable(solver: Adapter) -> str | None:
    if solver.default("duration") is None:
        return f"{solver.name} has no parameter duration with a number for its default: no marching"
    return no_curved_problems(solver)


def _judge(trial: Trial) -> Finding:
    default = trial.solver.default("duration") or 0.0
    longer = LONGER * default
    return changed_by(trial, "duration", longer, f"after the time {longer:.3g} in place of {default:.3g}")


STEADY_STATE = Law(
    name="steady state",
    statement="marching on changes less than the discretisation error",
    inapplicable=_inapplicable,
    problems=curved_problems,
    judge=_judge,
)
