"""Tightening the solver's tolerance changes nothing.

The solution does not depend on how its equations are solved. An iteration that ends at a tolerance leaves an
error of its own; it must be lost in that of the discretisation, else orders and answers are those of the
stopping rule (common practice, no source).

Conditions of validity: the solve function has a parameter ``tolerance`` with a positive number for its
default; K a number, in the plane or in space; values between nodes. Data of e^y cos x and the like, so that
there is a discretisation error. A stochastic solver is not judged.

Tolerance: the largest change, when the tolerance is a hundredth of its default, against the discretisation
error of the same size (see `keyword_changes`), or round-off and the declared error floor if that is more.
"""

from __future__ import annotations

from laplace_verify.principles.keyword_changes import changed_by, curved_problems, no_curved_problems
from laplace_verify.principles.law import Finding, Law, Trial
from laplace_verify.solvers import Adapter

__all__ = ["TIGHTER_TOLERANCE"]

TIGHTER = 0.01


def _inapplicable(solver: Adapter) -> str | None:
    if solver.default("tolerance") is None:
        return f"{solver.name} has no parameter tolerance with a number for its default"
    return no_curved_problems(solver)


def _judge(trial: Trial) -> Finding:
    default = trial.solver.default("tolerance") or 0.0
    tighter = TIGHTER * default
    return changed_by(
        trial, "tolerance", tighter, f"with the tolerance {tighter:.3g} in place of {default:.3g}"
    )


TIGHTER_TOLERANCE = Law(
    name="tighter tolerance",
    statement="a tighter tolerance of the iteration changes less than the discretisation error",
    inapplicable=_inapplicable,
    problems=curved_problems,
    judge=_judge,
)
