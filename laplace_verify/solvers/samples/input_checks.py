"""What a careful solver looks at before it solves: whether there is exactly one solution.

Three checks of the input, none of which needs the matrix:

- every piece of the boundary has a condition;
- no Robin coefficient is negative: with alpha >= 0 the form int grad u . K grad u dx + int alpha u^2 ds is
  positive, which makes the solution unique; with alpha < 0 it may be an eigenvalue, and a passive surface has
  none, so that the solver asks its user instead of guessing;
- fluxes on the whole boundary add up to zero.
"""

from __future__ import annotations

from laplace_verify.errors import ProblemError
from laplace_verify.problems import Problem
from laplace_verify.problems.compatibility import check_balance
from laplace_verify.solvers.adapter import Refused

__all__ = ["refuse_ill_posed"]

SAMPLED = 64  # points of a piece at which alpha is looked at


def refuse_ill_posed(problem: Problem) -> None:
    """Refuse a problem that has no solution or several.

    Raises
    ------
    Refused
        Saying which of the three checks it does not pass.
    """
    missing = [name for name in problem.shape.pieces.names if name not in problem.pieces.names]
    if missing:
        raise Refused(f"nothing is prescribed on {', '.join(missing)}")
    for piece in problem.pieces:
        if piece.kind == "robin" and (piece.alpha(piece.sample(SAMPLED)[0]) < 0.0).any():
            raise Refused(f"the Robin coefficient of piece {piece.name!r} is negative: no passive surface")
    if problem.constant is not None:
        try:
            check_balance(problem.shape, problem.pieces, problem.coordinates)
        except ProblemError as cause:
            raise Refused(str(cause)) from cause
