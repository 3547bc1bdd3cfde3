"""The mesh size h in which an observed order is taken.

h is what the solver reports. If it reports none, h = (measure / unknowns)^(1/d) for volume methods on
quasi-uniform meshes and h = (measure of the boundary / unknowns)^(1/(d - 1)) for boundary elements. A solver
that reports neither h nor unknowns is taken at its word on the resolution number n: h = size of the shape /
n.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from laplace_verify.errors import AnswerError

if TYPE_CHECKING:
    from laplace_verify.problems import Problem
    from laplace_verify.solvers.answer import Answer

__all__ = ["Spacing", "spacing"]


class Spacing(NamedTuple):
    """A mesh size and how it was found, in words."""

    h: float
    basis: str


def spacing(answer: Answer, problem: Problem, kind: str = "other", size: int | None = None) -> Spacing:
    """Return the mesh size of an answer.

    Parameters
    ----------
    answer : the answer of one solve
    problem : the problem solved; its shape gives the measure
    kind : the adapter's kind; "boundary element" counts unknowns on the boundary
    size : the resolution number, used if the answer reports neither h nor unknowns

    Raises
    ------
    AnswerError
        If h cannot be found: say what to report.
    """
    if answer.h is not None:
        return Spacing(answer.h, "reported by the solver")
    dim = problem.dim
    unknowns = answer.degrees_of_freedom
    if unknowns is not None:
        if kind == "boundary element" and dim >= 2:
            total = float(sum(piece.measure for piece in problem.pieces))
            power, phrase = dim - 1, "boundary measure / unknowns"
        else:
            total, power, phrase = problem.shape.measure, dim, "measure / unknowns"
        if np.isfinite(total):
            exponent = f"^(1/{power})" if power > 1 else ""
            return Spacing((total / unknowns) ** (1 / power), f"({phrase}){exponent}" if exponent else phrase)
    if size is not None and problem.shape.bounded:
        return Spacing(problem.shape.size / size, "size of the shape / n")
    raise AnswerError("h must be reported: Answer(..., h=...), since nothing else tells the mesh size here")
