"""A manufactured case: an exact field, and the problem whose boundary data are derived from it."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from dataclasses import field as dataclass_field
from typing import Any

import numpy.typing as npt

from laplace_verify.arrays import Array
from laplace_verify.errors import ProblemError
from laplace_verify.fields import Field
from laplace_verify.geometry import Shape, Windowed
from laplace_verify.problems.assembly import (
    as_conductivity,
    as_tensor,
    is_shape,
)
from laplace_verify.problems.boundary_values import BoundaryField
from laplace_verify.problems.compatibility import (
    Constant,
    as_constant,
    check_constant,
    default_constant,
    is_pure_neumann,
)
from laplace_verify.problems.conditions import PERIODIC, Condition, PieceKind
from laplace_verify.problems.coordinates import AXIS, Coordinates, axis_names, in_coordinates
from laplace_verify.problems.derivation import check_solution, derived_conditions, derived_pieces
from laplace_verify.problems.driving import Setting
from laplace_verify.problems.infinity import (
    AtInfinity,
    as_at_infinity,
    as_window,
    check_far,
    check_infinite_quantities,
    fixes_constant,
    one_region,
    point_constant,
    scaled_at_infinity,
)
from laplace_verify.problems.materials import Materials
from laplace_verify.problems.periodic import check_continued, check_materials, joins_of
from laplace_verify.problems.pieces import Pieces
from laplace_verify.problems.problem import Problem, no_constant
from laplace_verify.problems.quantities import Quantity, QuantitySpec
from laplace_verify.problems.quantity_values import evaluate
from laplace_verify.problems.regularity import Regularity, derive
from laplace_verify.problems.scaling import (
    Scale,
    as_scale,
    scaled_condition,
    scaled_conductivity,
    scaled_constant,
    scaled_quantity,
    scaled_regularity,
    scaled_shape,
)
from laplace_verify.problems.stored import StoredValue
from laplace_verify.problems.units import Units

__all__ = ["Case", "case", "check_id"]

ID = re.compile(r"[a-z0-9]+(-[a-z0-9]+)*")


@dataclass(frozen=True, slots=True, kw_only=True, eq=False, repr=False)
class Case:
    """A problem with its exact solution and what is known about it.

    Attributes
    ----------
    id, title, statement, reading
        Plain words: a permanent name, a headline, the mathematics, and a physical reading.
    tags, sources
        Words to select by; where problem or solution are described.
    problem
        What a solver is handed; it holds no exact solution in reach.
    exact
        The exact field; of an ill-posed case one that says on every evaluation that there is none.
    regularity
        Exponents, singular points, smallest length.
    quantities
        Name -> exact quantity.
    units
        Of lengths, values and conductivity; "" in dimensionless cases.
    stored
        High-precision reference values, if some are kept in a file.
    window
        Of an unbounded shape the bounded region over which norms are taken; else None: the whole shape.
    """

    id: str
    title: str
    statement: str
    reading: str
    tags: frozenset[str]
    sources: tuple[str, ...]
    problem: Problem
    exact: Field
    regularity: Regularity
    quantities: Mapping[str, Quantity]
    units: Units = dataclass_field(default_factory=Units)
    stored: tuple[StoredValue, ...] = ()
    window: Shape | None = None
    _conditions: Mapping[str, Condition] = dataclass_field(default_factory=dict)

    @property
    def dim(self) -> int:
        """Number of space dimensions."""
        return self.problem.dim

    @property
    def conditions(self) -> frozenset[str]:
        """The kinds of condition in use; the axis of symmetry has none."""
        return frozenset(piece.kind for piece in self.problem.pieces) - {AXIS}

    def scaled(self, length: Scale = None, value: Scale = None, conductivity: Scale = None) -> Case:
        """Return the dimensional twin: x = length x', u = value u', K = conductivity K'.

        Parameters
        ----------
        length, value, conductivity
            Positive numbers, or (number, unit) such as ``(0.2, "m")``; None leaves one as it is.

        Raises
        ------
        ProblemError
            If a number is not positive, a unit cannot be read, or the case is ill-posed: there is no value to
            scale.

        Examples
        --------
        >>> from laplace_verify import fields
        >>> from laplace_verify.geometry import Rectangle
        >>> from laplace_verify.problems import flux_through
        >>> plate = case(Rectangle((0, 0), (1, 1)), {}, fields.affine((0, 1)),
        ...              quantities={"heat in through the top": flux_through("top", exact=1)})
        >>> twin = plate.scaled(length=(2, "m"), value=(50, "K"), conductivity=(0.5, "W/(m K)"))
        >>> twin.quantities["heat in through the top"].value, twin.quantities["heat in through the top"].unit
        (25.0, 'W/m')
        """
        if self.problem.ill_posed is not None:
            raise ProblemError(f"case {self.id!r} is ill-posed; pose the dimensional problem itself instead")
        big, length_unit = as_scale(length, "length", self.units.length)
        high, value_unit = as_scale(value, "value", self.units.value)
        good, conductivity_unit = as_scale(conductivity, "conductivity", self.units.conductivity)
        units = Units(length=length_unit, value=value_unit, conductivity=conductivity_unit)
        shape = scaled_shape(self.problem.shape, big)
        exact = high * self.exact.scaled(big)
        k = scaled_conductivity(self.problem.conductivity, big, good)
        conditions = {
            name: scaled_condition(name, condition, self.dim, big, good)
            for name, condition in self._conditions.items()
        }
        return replace(
            self,
            problem=Problem(
                name=self.id,
                shape=shape,
                pieces=derived_pieces(shape, conditions, exact, k),
                conductivity=k,
                constant=scaled_constant(self.problem.constant, big, high),
                coordinates=self.problem.coordinates,
                at_infinity=scaled_at_infinity(self.problem.at_infinity, big, high),
            ),
            window=None if self.window is None else scaled_shape(self.window, big),
            exact=exact,
            regularity=scaled_regularity(self.regularity, big),
            quantities={
                name: scaled_quantity(quantity, self.problem.space_dim, big, high, good, units)
                for name, quantity in self.quantities.items()
            },
            units=units,
            stored=(),  # they are values of the dimensionless case
            _conditions=conditions,
        )

    def __repr__(self) -> str:
        """Show id, shape and field."""
        return f"Case({self.id!r}, {self.problem.shape!r}, u = {self.exact.formula})"


def case(
    shape: Shape,
    conditions: Mapping[str, str | Condition],
    field: Field,
    conductivity: float | npt.ArrayLike | Materials = 1.0,
    *,
    id: str = "case",  # noqa: A002  # the public name of the attribute
    title: str = "",
    statement: str = "",
    tags: Iterable[str] = (),
    sources: Iterable[str] = (),
    reading: str = "",
    quantities: Mapping[str, QuantitySpec] | None = None,
    constant: Any = None,
    coordinates: Coordinates = "cartesian",
    at_infinity: Any = None,
    window: Shape | None = None,
) -> Case:
    """Return the case whose exact solution is `field`; boundary data are derived from it.

    Parameters
    ----------
    shape
        The region.
    conditions
        Piece name -> "dirichlet", "neumann", ``robin(alpha)``, or "periodic" for both pieces of an opposite
        pair, onto which the field must continue. Pieces not named are Dirichlet; the name of a split piece
        stands for its parts.
    field
        The exact solution, with div(K grad field) = 0 in the shape; this is checked.
    conductivity
        K: a positive number, a symmetric positive definite matrix (d, d), or one number per region: what
        `layers`, `inclusion` or `sectors` made. Value and normal flux must then be continuous across every
        interface; this is checked.
    id, title, statement, tags, sources, reading
        Words, see `Case`. The id consists of lower-case words joined by hyphens.
    quantities
        Name -> `flux_through`, `value_at`, `conductance_between` or another of `quantities`, evaluated from
        the exact field.
    constant
        Pure Neumann only: ("mean", v) or ("point", x, v); by default the mean of the exact field.
    coordinates
        "cartesian", "axisymmetric", "radial-cylinder" or "radial-sphere", see `coordinates`. Pieces on r = 0
        are called "axis" and take no condition; `field` is a function of (r, z) or of r, such as
        `fields.axisymmetric` or `fields.radial` makes.
    at_infinity
        Unbounded shapes only: "decay", "bounded", ("log", charge) or ("flow", vector, circulation), see
        `infinity`; that the field behaves so is checked.
    window
        Unbounded shapes only: the bounded region over which norms are taken, which begins at the boundary; by
        default a ring, shell, rectangle or box next to it.

    Raises
    ------
    ProblemError
        If the field is no solution in the shape (the message gives point and residual), data are given
        although they are derived, names are unknown or conflict, or the conductivity is not positive
        definite.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> from laplace_verify.geometry import Rectangle
    >>> plate = case(Rectangle((0, 0), (1, 1)), {"left": "neumann"}, fields.polynomial(2))
    >>> plate.problem.pieces["left"].kind, plate.regularity.solution
    ('neumann', inf)
    """
    shape = in_coordinates(is_shape(shape), coordinates)
    infinity, view = as_at_infinity(at_infinity, shape), as_window(window, shape)
    seen = shape if view is None else Windowed(shape, view)
    axis = axis_names(shape, coordinates)
    check_id(id)
    if not isinstance(field, Field):
        raise ProblemError(
            f"the exact solution must be a field, got {type(field).__name__}; "
            "wrap a function or a formula with laplace_verify.field"
        )
    if field.dim != shape.dim:
        hint = (
            f"; say dim={shape.dim} where the field is made" if field.opaque and field.dim < shape.dim else ""
        )
        raise ProblemError(
            f"the field has dimension {field.dim}, the shape {shape!r} has dimension {shape.dim}{hint}"
        )
    k = as_conductivity(conductivity, shape.dim, coordinates)
    one_region(shape, k)
    tensor = k if isinstance(k, Materials) else as_tensor(k, shape.dim)
    complete = derived_conditions(shape, conditions, axis)
    check_solution(seen, field, tensor, coordinates)
    if isinstance(seen, Windowed):
        check_far(field, infinity, seen)
        check_infinite_quantities(quantities or {}, shape, infinity)
    kinds: dict[str, PieceKind] = {name: condition.kind for name, condition in complete.items()}
    for name in axis:
        kinds[name] = "axis"
    joins = joins_of(shape, [name for name, kind in kinds.items() if kind == PERIODIC], coordinates)
    check_materials(shape, joins, k)
    check_continued(
        joins, {name: BoundaryField(field, shape.pieces[name], tensor, shape.size) for name in joins}, shape
    )
    regularity = derive(seen, field, kinds, tensor, coordinates, joins)
    pieces, singular = derived_pieces(shape, complete, field, k), regularity.singular_points
    for piece in pieces:  # a field that is not defined on the boundary shows here, by the piece's name
        if piece.has_data:
            piece.probe(seen.pieces[piece.name])
    setting = Setting(
        shape=seen, field=field, tensor=tensor, regularity=regularity, coordinates=coordinates,
        at_infinity=infinity,
    )  # fmt: skip
    return Case(
        id=id,
        title=title,
        statement=statement,
        reading=reading,
        tags=frozenset(tags),
        sources=tuple(sources),
        problem=Problem(
            name=id,
            shape=shape,
            pieces=pieces,
            conductivity=k,
            constant=_constant(constant, seen, pieces, field, singular, coordinates, infinity),
            coordinates=coordinates,
            at_infinity=infinity,
        ),
        exact=field,
        regularity=regularity,
        quantities=evaluate(quantities or {}, setting),
        window=view,
        _conditions=complete,
    )


def check_id(id_: str) -> None:
    """Refuse an id that is no plain name.

    Raises
    ------
    ProblemError
        Showing what was given.
    """
    if not isinstance(id_, str) or not ID.fullmatch(id_):
        raise ProblemError(
            f"id must be lower-case words joined by hyphens, such as 'warm-plate', got {id_!r}"
        )


def _constant(
    given: Any, shape: Shape, pieces: Pieces, field: Field, singular: Array, coordinates: Coordinates,
    at_infinity: AtInfinity,
) -> Constant | None:  # fmt: skip
    """Return the constant of a pure Neumann case, by default the mean of the exact field.

    An unbounded shape has no mean: the default is the value at a point of the window.
    """
    if not is_pure_neumann(pieces) or fixes_constant(at_infinity):
        no_constant(given)
        return None
    if isinstance(shape, Windowed):
        given = point_constant(given, shape, field)
    if given is None:
        return default_constant(shape, field, singular, coordinates)
    constant = as_constant(given, shape)
    check_constant(constant, shape, field, singular, coordinates)
    return constant
