"""What makes a problem ill-posed: it has no solution, or several that differ by more than a constant.

Three flaws are known here, and the data of an ill-posed problem must have one of them:

- *flux that does not balance*: with n . K grad u = g on the whole boundary there is a solution only if the
  integral of g vanishes (divergence theorem);
- *a negative Robin coefficient*: the form int grad u . K grad u dx + int alpha u^2 ds is then no longer
  positive, and where it has a kernel (alpha at an eigenvalue of Steklov's problem) the homogeneous problem
  has solutions other than 0, so that there is no solution or a whole line of them;
- *a piece without a condition*: nothing chooses among the solutions that the other conditions allow.

That alpha < 0 lies at an eigenvalue is for the author to know; it is not computed here.

References
----------
Kellogg 1929, Foundations of Potential Theory, ch. XI (Neumann's problem); Stekloff 1902, Ann. Sci. ENS 19,
191-259 (both from memory, unchecked).
"""

from __future__ import annotations

from laplace_verify.errors import ProblemError
from laplace_verify.geometry import Shape
from laplace_verify.problems.compatibility import check_balance, is_pure_neumann
from laplace_verify.problems.coordinates import AXIS, Coordinates
from laplace_verify.problems.pieces import Pieces

__all__ = ["check_flaw"]

SAMPLED = 64  # points of a piece at which alpha is looked at


def check_flaw(shape: Shape, pieces: Pieces, coordinates: Coordinates, why: str) -> None:
    """Refuse the claim that a problem is ill-posed if its data have none of the three flaws.

    Raises
    ------
    ProblemError
        If there is no flaw, no reason in words, or the shape is unbounded.
    """
    if not isinstance(why, str) or not why.strip():
        raise ProblemError(f"ill_posed must say in words why the problem is ill-posed, got {why!r}")
    if not shape.bounded:
        raise ProblemError(f"ill-posed problems are posed on bounded shapes, {shape!r} is none")
    missing = set(shape.pieces.names) - set(pieces.names)
    if not (missing or _negative(pieces) or _unbalanced(shape, pieces, coordinates)):
        raise ProblemError(
            f"the problem is said to be ill-posed ({why}), but every piece has a condition, no Robin "
            "coefficient is negative and the flux balances where nothing fixes u; leave ill_posed out or "
            "correct the data"
        )


def _negative(pieces: Pieces) -> bool:
    """Return whether a Robin coefficient is negative somewhere."""
    return any(
        bool((piece.alpha(piece.sample(SAMPLED)[0]) < 0.0).any()) for piece in pieces if piece.kind == "robin"
    )


def _unbalanced(shape: Shape, pieces: Pieces, coordinates: Coordinates) -> bool:
    """Return whether only fluxes are given, and their integral does not vanish."""
    if not is_pure_neumann(piece for piece in pieces if piece.kind != AXIS):
        return False
    try:
        check_balance(shape, pieces, coordinates)
    except ProblemError:
        return True
    return False
