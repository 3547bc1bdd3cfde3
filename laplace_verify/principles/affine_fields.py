"""Affine fields reproduced.

u = a . x + c satisfies div(K grad u) = 0 for every constant K, with the constant flux K a. Given its
boundary data the solution is u itself (uniqueness as for constants). On flat sides every standard scheme
has no discretisation error for it: differences of degree one are exact, the flux through a face is exact,
and linear finite elements contain u (the "patch test": Strang & Fix, An Analysis of the Finite Element
Method, 1973, section 4.2, from memory, unchecked).

Conditions of validity: any bounded shape, any constant K.

Tolerance: *exactly* (see `limits`) if the solver declares ``reproduces_degree >= 1`` or is of kind finite
difference, finite volume or finite element, the shape has flat sides only, K is a number and no piece has
a Robin condition. There the data alpha u + g vary along the side, and a sound scheme may integrate them
by a rule that is not exact; tensors have cross derivatives, which some sound schemes close to second
order only. ``reproduces_degree >= 1`` waives these two exceptions, not that of curved sides. Everything
else is judged *in the limit*.
"""

from __future__ import annotations

from hypothesis import strategies as st

from laplace_verify.principles.law import Finding, Law, Trial
from laplace_verify.principles.limits import exactly, in_the_limit, rate_of
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reproduction import inapplicable, misses, problems
from laplace_verify.solvers import Adapter

__all__ = ["AFFINE_FIELDS"]

FIRST_DEGREE = ("finite difference", "finite volume", "finite element")


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    return problems(solver, degree=1)


def _exact(trial: Trial) -> bool:
    """Whether the solver must have no error beyond round-off on this problem."""
    problem = trial.problem
    if any(piece.curved for piece in problem.pieces):
        return False
    if (trial.solver.reproduces_degree or 0) >= 1:
        return True
    plain = isinstance(problem.conductivity, float) and all(piece.kind != "robin" for piece in problem.pieces)
    return plain and trial.solver.kind in FIRST_DEGREE


def _judge(trial: Trial) -> Finding:
    return exactly(trial, misses) if _exact(trial) else in_the_limit(trial, misses, rate_of(trial))


AFFINE_FIELDS = Law(
    name="affine fields reproduced",
    statement="where the data are those of an affine field, the solution is that field",
    inapplicable=inapplicable,
    problems=_problems,
    judge=_judge,
)
