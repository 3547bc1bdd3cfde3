"""Cases without a solution: ill-posed problems, which a solver that checks its input must refuse.

Such a case has words, shape and data like any other, but its exact field says on every evaluation that there
is none, its solution exponent is NaN, and it has no quantities. A study of it asks one thing: does the solver
raise `Refused`?
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any, NoReturn

import numpy as np

from laplace_verify.errors import FieldError, ProblemError
from laplace_verify.fields import Field
from laplace_verify.fields.singular import Basis
from laplace_verify.problems.case import Case, check_id
from laplace_verify.problems.conditions import Condition, Data
from laplace_verify.problems.data import PointFunction
from laplace_verify.problems.problem import Problem
from laplace_verify.problems.regularity import Regularity

__all__ = ["NoSolution", "as_case", "ill_posed_case"]


@dataclass(frozen=True, slots=True)
class NoSolution(Field):
    """What stands in the place of the exact field of an ill-posed problem: it has no value anywhere.

    Attributes
    ----------
    dimension
        Number of coordinates.
    why
        Why there is no solution, or no single one.
    """

    dimension: int
    why: str

    @property
    def dim(self) -> int:
        """Number of coordinates."""
        return self.dimension

    @property
    def formula(self) -> str:
        """Say that there is none."""
        return "none, for the problem is ill-posed"

    @property
    def basis(self) -> Basis:
        """There are no digits to certify."""
        return "uncertified"

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> NoReturn:  # noqa: ARG002
        """Refuse.

        Raises
        ------
        FieldError
            Always.
        """
        raise FieldError(
            f"there is no exact solution to evaluate: the problem is ill-posed, for {self.why}; "
            "cases with a solution have problem.ill_posed None"
        )

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> NoReturn:
        """Refuse."""
        self._value(ctx, x, side)


def ill_posed_case(
    problem: Problem,
    *,
    title: str = "",
    statement: str = "",
    reading: str = "",
    tags: Iterable[str] = (),
    sources: Iterable[str] = (),
) -> Case:
    """Return an ill-posed problem as a case, whose id is the problem's name.

    Raises
    ------
    ProblemError
        If the problem is not said to be ill-posed, or its name is no id.

    Examples
    --------
    >>> from laplace_verify.geometry import Interval
    >>> from laplace_verify.problems import neumann, problem
    >>> fluxes = {"left": neumann(1), "right": neumann(1)}
    >>> rod = ill_posed_case(problem(Interval(0, 1), fluxes, ill_posed="the flux piles up"))
    >>> rod.id, rod.exact.formula
    ('problem', 'none, for the problem is ill-posed')
    """
    if problem.ill_posed is None:
        raise ProblemError(
            f"problem {problem.name!r} is well posed and comes without its exact solution, so there is "
            "nothing to judge an answer by; make a case of it with lv.case(shape, conditions, field)"
        )
    check_id(problem.name)
    nowhere = np.zeros((0, problem.dim))
    lower, upper = problem.shape.bounding_box
    return Case(
        id=problem.name,
        title=title or problem.name,
        statement=statement,
        reading=reading,
        tags=frozenset(tags),
        sources=tuple(sources),
        problem=problem,
        exact=NoSolution(problem.dim, problem.ill_posed),
        regularity=Regularity(
            solution=math.nan,
            domain=math.nan,
            singular_points=nowhere,
            scale=float((upper - lower).min()),
            jumps=nowhere,
        ),
        quantities={},
        _conditions=_conditions(problem),
    )


def as_case(given: object) -> Case:
    """Return a case as it is, and the case of an ill-posed problem.

    Raises
    ------
    ProblemError
        If it is neither.
    """
    if isinstance(given, Case):
        return given
    if isinstance(given, Problem):
        return ill_posed_case(given)
    raise ProblemError(
        f"case must be a Case, got {given!r}; take one from lv.catalogue or make one with lv.case"
    )


def _source(function: object) -> Data | None:
    """Return what the data of a piece were made of."""
    return function.source if isinstance(function, PointFunction) else None


def _conditions(problem: Problem) -> dict[str, Condition]:
    """Return kind, data and coefficient of every piece as they were given."""
    return {
        piece.name: Condition(kind=piece.kind, data=_source(piece._data), alpha=_source(piece._alpha))
        for piece in problem.pieces
        if piece.kind != "axis"
    }
