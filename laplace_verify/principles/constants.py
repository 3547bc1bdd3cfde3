"""Constants reproduced.

If u = c on every Dirichlet piece, n . K grad u = 0 on Neumann and n . K grad u + alpha u = alpha c on
Robin pieces, the solution is u = c (it solves the problem, which has one solution: maximum principle,
Gilbarg & Trudinger, Elliptic Partial Differential Equations of Second Order, 2nd edition, theorem 3.3;
Hopf's lemma, lemma 3.4, for derivative conditions; from memory, unchecked).

Conditions of validity: any bounded shape, any K, at least one Dirichlet or Robin piece; with Neumann
conditions alone the level is free and u - mean(u) must vanish.

Tolerance: a difference scheme that is consistent, finite volumes and finite elements whose functions
contain the constants, and collocation with polynomials have no discretisation error here, so for these
kinds the violation max |u_h - c| / c must be round-off (`limits`, *exactly*). Boundary elements,
stochastic and other methods need not contain the constants and are judged *in the limit*, unless they
declare ``reproduces_degree``. So is every kind where a curved piece has a Robin condition: alpha u and the
data may be integrated by different rules, which agree to round-off on flat pieces only.
"""

from __future__ import annotations

from hypothesis import strategies as st

from laplace_verify.principles.law import Finding, Law, Trial
from laplace_verify.principles.limits import exactly, in_the_limit, rate_of
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reproduction import inapplicable, misses, problems
from laplace_verify.solvers import Adapter

__all__ = ["CONSTANTS"]

CONTAIN_CONSTANTS = ("finite difference", "finite volume", "finite element", "spectral")


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    return problems(solver, degree=0)


def _judge(trial: Trial) -> Finding:
    solver = trial.solver
    contained = solver.kind in CONTAIN_CONSTANTS or solver.reproduces_degree is not None
    if contained and not any(piece.curved and piece.kind == "robin" for piece in trial.problem.pieces):
        return exactly(trial, misses)
    return in_the_limit(trial, misses, rate_of(trial))


CONSTANTS = Law(
    name="constants reproduced",
    statement="where the data are those of a constant, the solution is that constant",
    inapplicable=inapplicable,
    problems=_problems,
    judge=_judge,
)
