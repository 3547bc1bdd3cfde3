"""A boundary value problem as a solver is handed it: div(K grad u) = 0, a condition on every piece.

A problem holds no exact solution in reach: data come out of ``piece.data(points)`` and nothing else does.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Any

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, as_points
from laplace_verify.errors import ProblemError, nearest_names
from laplace_verify.geometry import Boundary, Shape
from laplace_verify.problems.assembly import (
    Conductivity,
    alpha_of,
    as_conductivity,
    as_tensor,
    by_piece,
    is_shape,
)
from laplace_verify.problems.compatibility import Constant, as_constant, check_balance, is_pure_neumann
from laplace_verify.problems.conditions import PERIODIC, Condition
from laplace_verify.problems.coordinates import (
    Coordinates,
    axis_names,
    in_coordinates,
    metric,
    space_dim,
)
from laplace_verify.problems.data import PointFunction
from laplace_verify.problems.flaws import check_flaw
from laplace_verify.problems.infinity import (
    AtInfinity,
    as_at_infinity,
    check_net_flux,
    fixes_constant,
    one_region,
)
from laplace_verify.problems.materials import Materials
from laplace_verify.problems.periodic import Join, check_materials, joins_of
from laplace_verify.problems.pieces import MoveLog, Piece, Pieces, no_data
from laplace_verify.problems.regions import Interface, Region, interfaces_of, parts_of, regions_of

__all__ = ["Problem", "Region", "problem"]


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
        K: a positive number, a symmetric positive definite matrix (d, d), or `Materials`: one number per
        region.
    constant
        For pure Neumann problems ("mean", v) or ("point", x, v), which of the solutions is meant; else None.
    coordinates
        "cartesian", "axisymmetric" (points are (r, z)), "radial-cylinder" or "radial-sphere" (points are r).
        Weights of `quadrature` and of pieces are those of the shape; times `metric` they are those of space.
    at_infinity
        None on bounded shapes, else "decay", "bounded", ("log", charge) or ("flow", vector, circulation), see
        `infinity`.
    ill_posed
        Why the problem has no solution or several, see `ill_posed`; None if it has exactly one (but for the
        constant).
    """

    name: str
    shape: Shape
    pieces: Pieces
    conductivity: Conductivity
    constant: Constant | None = None
    coordinates: Coordinates = "cartesian"
    at_infinity: AtInfinity = None
    ill_posed: str | None = None

    @property
    def dim(self) -> int:
        """Number of coordinates of a point."""
        return self.shape.dim

    @property
    def space_dim(self) -> int:
        """Number of dimensions of space: 3 for points (r, z), 2 or 3 for points r."""
        return space_dim(self.coordinates, self.dim)

    def metric(self, points: npt.ArrayLike) -> Array:
        """Return the measure of space per measure of the shape at points (n, d): 1, 2 pi r or 4 pi r^2."""
        return metric(self.coordinates, as_points(points, self.dim, error=ProblemError))

    @property
    def tensor(self) -> Array:
        """The conductivity as a matrix (d, d), number or matrix; ProblemError if it differs by region."""
        return as_tensor(self.conductivity, self.dim)

    @property
    def regions(self) -> tuple[Region, ...]:
        """The regions of constant conductivity, which tile the shape: if there is only one, it is "body"."""
        if isinstance(self.conductivity, Materials):
            return regions_of(self.shape, self.conductivity)
        return (Region(name="body", shape=self.shape, conductivity=self.conductivity),)

    @property
    def interfaces(self) -> tuple[Interface, ...]:
        """Where regions meet; () if the problem is homogeneous."""
        if isinstance(self.conductivity, Materials):
            return interfaces_of(self.shape, self.conductivity.partition)
        return ()

    def quadrature(
        self, order: int, singular: npt.ArrayLike = (), cell: float | None = None
    ) -> tuple[Array, Array]:
        """Return points (n, d) and weights (n,) over the shape, with no patch across an interface.

        Arguments as in `geometry.Shape.quadrature`.
        """
        rules = [region.quadrature(order, singular, cell) for region in self.regions]
        return np.concatenate([points for points, _ in rules]), np.concatenate([w for _, w in rules])

    def conductivity_at(self, points: npt.ArrayLike, region: str | None = None) -> Array:
        """Return K at points (n, d): shape (n,) if it is a number, (n, d, d) if it is a matrix.

        Parameters
        ----------
        points
            Points of the shape, shape (n, d).
        region
            Name of the region a point on an interface is meant to belong to; without it, one of the two.

        Raises
        ------
        ProblemError
            If the region is unknown, a point does not lie in it, or the points have the wrong shape.
        """
        if isinstance(self.conductivity, Materials):
            return self.conductivity.at(points, region)
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
        k: Any = self.conductivity
        if isinstance(k, Materials):
            k = dict(zip(k.names, k.conductivities, strict=True))
        elif not isinstance(k, float):
            k = k.tolist()
        return f"Problem({self.name!r}, {self.shape!r}, {kinds}, conductivity={k})"


def problem(
    shape: Shape,
    conditions: Mapping[str, str | Condition],
    conductivity: float | npt.ArrayLike | Materials = 1.0,
    *,
    constant: Any = None,
    coordinates: Coordinates = "cartesian",
    at_infinity: Any = None,
    name: str = "problem",
    ill_posed: str | None = None,
) -> Problem:
    """Return the problem div(K grad u) = 0 with given data on every piece.

    Parameters
    ----------
    shape
        The region.
    conditions
        A condition with data for every piece, or "periodic" for both pieces of an opposite pair; the name of
        a split piece stands for its parts.
    conductivity
        A positive number, a symmetric positive definite matrix (d, d), or one number per region: what
        `layers`, `inclusion` or `sectors` made.
    constant
        Pure Neumann only: ("mean", v) or ("point", x, v); the default is ("mean", 0).
    coordinates
        "cartesian", "axisymmetric", "radial-cylinder" or "radial-sphere", see `coordinates`. Pieces on r = 0
        are called "axis" and take no condition.
    at_infinity
        Unbounded shapes only: "decay", "bounded", ("log", charge) or ("flow", vector, circulation), see
        `Problem`.
    name
        A name for messages.
    ill_posed
        Why the problem has no solution or several. It lets pass one of the flaws that are refused otherwise:
        flux data that do not balance, a Robin coefficient below 0, a piece without a condition; see
        `ill_posed`.

    Raises
    ------
    ProblemError
        If a piece has no condition or no data, names are unknown or conflict, the conductivity is not
        positive definite, pure Neumann data do not balance, `constant` is given where u is fixed by the
        conditions, or a problem is said to be ill-posed that has none of the flaws above.

    Examples
    --------
    >>> from laplace_verify.geometry import Interval
    >>> from laplace_verify.problems import dirichlet, neumann
    >>> duct = problem(Interval(0, 2), {"left": dirichlet(20), "right": neumann(-3)}, conductivity=0.5)
    >>> duct.pieces["right"].data([2.0]).tolist()
    [-3.0]
    """
    shape = in_coordinates(is_shape(shape), coordinates)
    axis = axis_names(shape, coordinates)
    k = as_conductivity(conductivity, shape.dim, coordinates)
    one_region(shape, k)
    given = by_piece(shape, conditions, axis)
    joins = joins_of(shape, [name for name, c in given.items() if c.kind == PERIODIC], coordinates)
    check_materials(shape, joins, k)
    missing = [piece.name for piece in shape.pieces if piece.name not in given and piece.name not in axis]
    if missing and ill_posed is None:
        raise ProblemError(f"every piece needs a condition; missing: {', '.join(missing)}")
    pieces = Pieces(
        bare_piece(shape, name, joins.get(name))
        if name in axis or name in joins
        else _piece(shape, name, given[name], k, ill_posed)
        for name in shape.pieces.names
        if name not in missing
    )
    for piece in pieces:
        if piece.has_data and math.isfinite(piece.measure):
            piece.probe()
    if isinstance(k, Materials):
        regions_of(shape, k)  # refuses regions that do not fit
    infinity = as_at_infinity(at_infinity, shape)
    if ill_posed is not None:
        check_flaw(shape, pieces, coordinates, ill_posed)
    elif is_pure_neumann(pieces) and shape.bounded:
        check_balance(shape, pieces, coordinates)
    fixed = _fixed(shape, pieces, k, constant, infinity)
    return Problem(
        name=name, shape=shape, pieces=pieces, conductivity=k, constant=fixed, coordinates=coordinates,
        at_infinity=infinity, ill_posed=ill_posed,
    )  # fmt: skip


def _fixed(
    shape: Shape,
    pieces: Pieces,
    conductivity: Conductivity,
    constant: Any,
    at_infinity: AtInfinity,
) -> Constant | None:
    """Return the constant that flux conditions leave free, after checking the flux of unbounded shapes."""
    if not is_pure_neumann(pieces):
        no_constant(constant)
        return None
    if shape.bounded:
        return as_constant(("mean", 0.0) if constant is None else constant, shape)
    check_net_flux(shape, pieces, at_infinity, as_tensor(conductivity, shape.dim))
    if fixes_constant(at_infinity):
        no_constant(constant)
        return None
    if constant is None or constant[0] == "mean":
        raise ProblemError(
            "flux conditions leave a constant free and an unbounded shape has no mean: give "
            f'constant=("point", x, value), got {constant!r}'
        )
    return as_constant(constant, shape)


def bare_piece(shape: Shape, name: str, join: Join | None) -> Piece:
    """Return a piece without data: periodic if it is joined to another, else on r = 0."""
    partner, shift = join or (None, None)
    return Piece(
        boundary=shape.pieces[name],
        kind="axis" if join is None else PERIODIC,
        shape_size=shape.size,
        partner=partner,
        shift=shift,
        _data=no_data,
    )


def piece_parts(shape: Shape, name: str, conductivity: Conductivity) -> tuple[Boundary, ...]:
    """Return the parts of a piece between the interfaces that cross it; () if none does."""
    if not isinstance(conductivity, Materials):
        return ()
    parts = parts_of(shape.pieces[name], conductivity.partition)
    return tuple(parts) if len(parts) > 1 else ()


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


def _piece(
    shape: Shape, name: str, condition: Condition, conductivity: Conductivity, ill_posed: str | None
) -> Piece:
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
        parts=piece_parts(shape, name, conductivity),
        _data=PointFunction(condition.data, shape.dim, f"data of piece {name!r}"),
        _alpha=alpha_of(name, condition, shape.dim),
        _alpha_may_be_negative=ill_posed is not None,
    )
