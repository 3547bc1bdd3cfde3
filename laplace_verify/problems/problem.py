"""A boundary value problem as a solver is handed it: div(K grad u) = 0, a condition on every piece.

A problem holds no exact solution in reach: data come out of ``piece.data(points)`` and nothing else does.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Any, Literal

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, BoolArray, as_points
from laplace_verify.errors import ProblemError, nearest_names
from laplace_verify.geometry import Shape
from laplace_verify.problems.assembly import alpha_of, as_conductivity, as_tensor, by_piece, is_shape
from laplace_verify.problems.compatibility import Constant, as_constant, check_balance, is_pure_neumann
from laplace_verify.problems.conditions import Condition
from laplace_verify.problems.data import PointFunction
from laplace_verify.problems.pieces import MoveLog, Piece, Pieces

__all__ = ["Problem", "Region", "problem"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Region:
    """A part of the shape with its own conductivity; a homogeneous problem has one, the whole shape.

    Attributes
    ----------
    name
        Its name.
    shape
        The part.
    conductivity
        A positive number, or a symmetric positive definite matrix (d, d).
    """

    name: str
    shape: Shape
    conductivity: float | Array

    def contains(self, points: npt.ArrayLike) -> BoolArray:
        """Return which points (n, d) lie in the closed region."""
        return self.shape.contains(points)

    def outline(self, n: int) -> dict[str, Array]:
        """Return about n points along each piece of the region's boundary: {name: (n, d)}."""
        return self.shape.outline(n)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False, repr=False)
class Problem:
    """div(K grad u) = 0 in `shape`, with a condition on every piece of its boundary.

    Attributes
    ----------
    name
        Id of the case it belongs to, or the name given.
    shape
        The region, with `shape.dim` space dimensions.
    pieces
        The pieces of the boundary with kind and data, by name or position.
    conductivity
        K: a positive number, or a symmetric positive definite matrix (d, d).
    constant
        For pure Neumann problems ("mean", v) or ("point", x, v), which of the solutions is meant; else None.
    coordinates
        "cartesian".
    at_infinity
        None: the shape is bounded.
    """

    name: str
    shape: Shape
    pieces: Pieces
    conductivity: float | Array
    constant: Constant | None = None
    coordinates: Literal["cartesian"] = "cartesian"
    at_infinity: None = None

    @property
    def dim(self) -> int:
        """Number of space dimensions."""
        return self.shape.dim

    @property
    def tensor(self) -> Array:
        """The conductivity as a matrix (d, d), whatever its form."""
        return as_tensor(self.conductivity, self.dim)

    @property
    def regions(self) -> tuple[Region, ...]:
        """The regions of constant conductivity: one, called "body"."""
        return (Region(name="body", shape=self.shape, conductivity=self.conductivity),)

    def conductivity_at(self, points: npt.ArrayLike, region: str | None = None) -> Array:
        """Return K at points (n, d): shape (n,) if it is a number, (n, d, d) if it is a matrix.

        Parameters
        ----------
        points
            Points of the shape, shape (n, d).
        region
            Name of the region a point on an interface is meant to belong to.

        Raises
        ------
        ProblemError
            If the region is unknown or the points have the wrong shape.
        """
        names = [known.name for known in self.regions]
        if region is not None and region not in names:
            raise ProblemError(f"no region is named {region!r}; {nearest_names(region, names)}")
        count = len(as_points(points, self.dim, error=ProblemError))
        if isinstance(self.conductivity, float):
            return np.full(count, self.conductivity)
        return np.tile(self.conductivity, (count, 1, 1))

    def watched(self) -> tuple[Problem, MoveLog]:
        """Return the same problem with a log of the largest move of points onto each piece."""
        log = MoveLog()
        return replace(self, pieces=Pieces(piece.watched(log) for piece in self.pieces)), log

    def __repr__(self) -> str:
        """Show name, shape, conditions and conductivity."""
        kinds = {piece.name: piece.kind for piece in self.pieces}
        k = self.conductivity if isinstance(self.conductivity, float) else self.conductivity.tolist()
        return f"Problem({self.name!r}, {self.shape!r}, {kinds}, conductivity={k})"


def problem(
    shape: Shape,
    conditions: Mapping[str, Condition],
    conductivity: float | npt.ArrayLike = 1.0,
    *,
    constant: Any = None,
    name: str = "problem",
) -> Problem:
    """Return the problem div(K grad u) = 0 with given data on every piece.

    Parameters
    ----------
    shape
        The region.
    conditions
        A condition with data for every piece; the name of a split piece stands for its parts.
    conductivity
        A positive number or a symmetric positive definite matrix (d, d).
    constant
        Pure Neumann only: ("mean", v) or ("point", x, v); the default is ("mean", 0).
    name
        A name for messages.

    Raises
    ------
    ProblemError
        If a piece has no condition or no data, names are unknown or conflict, the conductivity is not
        positive definite, pure Neumann data do not balance, or `constant` is given where u is fixed by the
        conditions.

    Examples
    --------
    >>> from laplace_verify.geometry import Interval
    >>> from laplace_verify.problems import dirichlet, neumann
    >>> duct = problem(Interval(0, 2), {"left": dirichlet(20), "right": neumann(-3)}, conductivity=0.5)
    >>> duct.pieces["right"].data([2.0]).tolist()
    [-3.0]
    """
    is_shape(shape)
    k = as_conductivity(conductivity, shape.dim)
    given = by_piece(shape, conditions)
    missing = [piece.name for piece in shape.pieces if piece.name not in given]
    if missing:
        raise ProblemError(f"every piece needs a condition; missing: {', '.join(missing)}")
    pieces = Pieces(_piece(shape, name, condition) for name, condition in given.items())
    for piece in pieces:
        piece.probe()
    if is_pure_neumann(pieces):
        check_balance(shape, pieces)
        fixed: Constant | None = as_constant(("mean", 0.0) if constant is None else constant, shape)
    else:
        no_constant(constant)
        fixed = None
    return Problem(name=name, shape=shape, pieces=pieces, conductivity=k, constant=fixed)


def no_constant(constant: Any) -> None:
    """Refuse a constant where the conditions fix u.

    Raises
    ------
    ProblemError
        If `constant` is not None.
    """
    if constant is not None:
        raise ProblemError(
            f"constant={constant!r} is for pure Neumann problems only; here the conditions already fix u"
        )


def _piece(shape: Shape, name: str, condition: Condition) -> Piece:
    """Return the piece with its given data."""
    if condition.data is None:
        raise ProblemError(
            f"the {condition.kind} condition of piece {name!r} has no data: give "
            f"{'robin(alpha, g)' if condition.kind == 'robin' else condition.kind + '(data)'}"
        )
    return Piece(
        boundary=shape.pieces[name],
        kind=condition.kind,
        shape_size=shape.size,
        _data=PointFunction(condition.data, shape.dim, f"data of piece {name!r}"),
        _alpha=alpha_of(name, condition, shape.dim),
    )
