"""Quantities of a case: single numbers an engineer asks for, with an error radius.

    flux     integral over a piece of n . K grad u ds (outward; a heat flow or discharge out is its negative)
    value    u at a point
    energy   integral over the shape of grad u . K grad u dx = integral over the boundary of u n . K grad u ds

and, in the words of seepage, where u is the head (`seepage_quantities` has what asks for them):

    uplift          integral over a piece of u ds: times the unit weight of water the force of the head
    discharge       - integral of n . K grad u ds over a straight section, n to the right of start -> stop
    exit gradient   - n . grad u at a point of a piece, positive where water leaves

With coordinates (r, z) or r the integrals are those of space, with the weight `coordinates.metric`; in
"radial-cylinder" they are per unit length of the cylinder.

Integrals over the boundary are graded towards singular points and done at two orders; the radius is their
difference plus rounding plus, at a singular point r**e, what the innermost panel of the grading can hold. A
value given in closed form is checked against the integral and then replaces it.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from decimal import ROUND_CEILING, Decimal
from fractions import Fraction
from typing import Literal, TypeAlias

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.errors import FieldError, ProblemError, nearest_names
from laplace_verify.fields import Field, Singularity
from laplace_verify.geometry import Boundary, Shape
from laplace_verify.problems.boundary_values import BoundaryField
from laplace_verify.problems.coordinates import Coordinates, axis_names, metric
from laplace_verify.problems.limits import near
from laplace_verify.problems.materials import Materials
from laplace_verify.problems.regions import parts_of
from laplace_verify.problems.regularity import Regularity
from laplace_verify.problems.sections import exit_gradient, section

__all__ = [
    "CLOSED_FORM",
    "Quantity",
    "QuantityKind",
    "QuantitySpec",
    "Where",
    "as_place",
    "energy_of_solution",
    "evaluate",
    "flux_through",
    "value_at",
]

QuantityKind: TypeAlias = Literal["flux", "value", "energy", "uplift", "discharge", "exit gradient"]
Where: TypeAlias = str | tuple[float, ...] | None
Exact: TypeAlias = float | int | str | Fraction

EPS = float(np.finfo(np.float64).eps)
ORDERS = (15, 23)
CLOSED_FORM = 1e-9  # largest disagreement of a closed form with the integral, relative to the integral of |.|


@dataclass(frozen=True, slots=True, kw_only=True)
class Quantity:
    """An exact quantity: |true value - value| <= radius.

    Attributes
    ----------
    value, radius
        The number and its error radius, in `unit`.
    unit
        "" if dimensionless.
    kind
        "flux", "value", "energy", "uplift", "discharge" or "exit gradient", see the tables of the module.
    where
        The piece of a flux, uplift or exit gradient, the point of a value, start and stop of the section of a
        discharge as (x, y, x, y), None for the energy.
    place
        The point of an exit gradient, else None.
    """

    value: float
    unit: str
    radius: float
    kind: QuantityKind
    where: Where
    place: tuple[float, ...] | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class QuantitySpec:
    """Which quantity is wanted, for the argument `quantities` of `case`."""

    kind: QuantityKind
    where: Where
    unit: str = ""
    exact: Exact | None = None
    place: tuple[float, ...] | None = None


def flux_through(piece: str, *, unit: str = "", exact: Exact | None = None) -> QuantitySpec:
    """Ask for the flux through a piece, the integral of n . K grad u with the outward normal n.

    Parameters
    ----------
    piece
        Name of the piece.
    unit
        Its unit, "" if dimensionless.
    exact
        The value in closed form, a number or a fraction such as "1/4"; it is checked against quadrature.
    """
    return QuantitySpec(kind="flux", where=piece, unit=unit, exact=exact)


def value_at(point: float | Sequence[float], *, unit: str = "", exact: Exact | None = None) -> QuantitySpec:
    """Ask for u at a point of the closed shape; arguments as in `flux_through`.

    >>> value_at((0.5, 0.25)).where
    (0.5, 0.25)
    """
    return QuantitySpec(kind="value", where=as_place("value_at", point), unit=unit, exact=exact)


def as_place(asked: str, point: float | Sequence[float]) -> tuple[float, ...]:
    """Return the coordinates of a point, as floats."""
    try:
        return tuple(float(c) for c in np.atleast_1d(np.asarray(point, dtype=np.float64)))
    except (TypeError, ValueError) as cause:
        raise ProblemError(f"{asked} needs the coordinates of a point, got {point!r}") from cause


def energy_of_solution(*, unit: str = "", exact: Exact | None = None) -> QuantitySpec:
    """Ask for the integral over the shape of grad u . K grad u; arguments as in `flux_through`."""
    return QuantitySpec(kind="energy", where=None, unit=unit, exact=exact)


def evaluate(
    specs: Mapping[str, QuantitySpec],
    shape: Shape,
    field: Field,
    tensor: Array | Materials,
    regularity: Regularity,
    coordinates: Coordinates = "cartesian",
) -> dict[str, Quantity]:
    """Return the wanted quantities of an exact field.

    Raises
    ------
    ProblemError
        If a piece is unknown, a point lies outside, an integral is infinite, or a closed form disagrees.
    """
    return {
        str(name): _evaluated(str(name), spec, shape, field, tensor, regularity, coordinates)
        for name, spec in specs.items()
    }


def _evaluated(
    name: str,
    spec: QuantitySpec,
    shape: Shape,
    field: Field,
    tensor: Array | Materials,
    regularity: Regularity,
    coordinates: Coordinates,
) -> Quantity:
    """Return one quantity."""
    if not isinstance(spec, QuantitySpec):
        raise ProblemError(f"quantity {name!r} must be flux_through(...) or value_at(...), got {spec!r}")
    if spec.kind == "value":
        value, radius, scale = _value(name, spec, shape, field)
    elif spec.kind == "exit gradient":
        piece, place = _named_piece(name, spec, shape), spec.place or ()
        value, radius, scale = exit_gradient(name, piece, place, field, shape.size)
    else:
        value, radius, scale = _integral(name, spec, shape, field, tensor, regularity, coordinates)
    if spec.exact is not None:
        exact = _number(name, spec.exact)
        if not abs(exact - value) <= CLOSED_FORM * scale + radius:
            raise ProblemError(
                f"quantity {name!r}: the closed form {spec.exact} disagrees with the field's {value!r}"
            )
        value, radius = exact, 4 * EPS * abs(exact)
    else:
        value, radius = _rounded(value, radius)
    return Quantity(
        value=value, unit=spec.unit, radius=radius, kind=spec.kind, where=spec.where, place=spec.place
    )


def _rounded(value: float, radius: float) -> tuple[float, float]:
    """Return the value without digits far below the radius, and the radius rounded up to one digit.

    What is dropped differs from machine to machine; the radius has room for it.
    """
    if not radius > 0.0:
        return value, radius
    wide = Decimal(1.2 * radius)
    unit = Decimal(10) ** wide.adjusted()
    enlarged = (wide / unit).to_integral_value(rounding=ROUND_CEILING) * unit
    digits = unit / 10
    return float((Decimal(value) / digits).to_integral_value() * digits), float(enlarged)


def _value(name: str, spec: QuantitySpec, shape: Shape, field: Field) -> tuple[float, float, float]:
    """Return u at a point of the shape, its radius, and the size it is relative to."""
    point = spec.where
    if not isinstance(point, tuple) or len(point) != shape.dim:
        raise ProblemError(f"quantity {name!r}: the point must have {shape.dim} coordinates, got {point}")
    if not shape.contains([point]).all():
        raise ProblemError(f"quantity {name!r}: the point {point} lies outside {shape!r}")
    try:
        if field.opaque:
            value = float(field.value([point])[0])
            return value, 64 * EPS * abs(value), abs(value) + 1.0
        enclosure = field.enclosure(point, digits=min(25, field.most_digits))
    except FieldError as cause:
        raise ProblemError(f"quantity {name!r}: {cause}") from cause
    value = float(enclosure.value)
    return value, float(enclosure.radius) + EPS * abs(value), abs(value) + 1.0


def _integral(
    name: str,
    spec: QuantitySpec,
    shape: Shape,
    field: Field,
    tensor: Array | Materials,
    regularity: Regularity,
    coordinates: Coordinates,
) -> tuple[float, float, float]:
    """Return a boundary integral, its radius, and the integral of the absolute value."""
    if spec.kind in ("flux", "uplift"):
        pieces = [_named_piece(name, spec, shape)]
    elif spec.kind == "discharge":
        pieces = [section(name, spec.where, shape)]
    else:
        pieces = [piece for piece in shape.pieces if piece.name not in axis_names(shape, coordinates)]
    if isinstance(tensor, Materials):
        pieces = [part for piece in pieces for part in parts_of(piece, tensor.partition)]
    value = radius = total = 0.0
    for piece in pieces:
        seen = BoundaryField(field, piece, tensor, shape.size)
        radius += _hidden(name, spec.kind, piece, seen, field, shape.size)
        low, high = (
            _quadrature(spec.kind, piece, seen, order, regularity, shape, coordinates) for order in ORDERS
        )
        value += high[0]
        total += high[1]
        radius += _spread(piece, field) * abs(high[0] - low[0]) + 16 * EPS * high[1]
    return value, radius, total


def _named_piece(name: str, spec: QuantitySpec, shape: Shape) -> Boundary:
    """Return the piece that a quantity belongs to."""
    if spec.where not in shape.pieces.names:
        known = nearest_names(str(spec.where), shape.pieces.names)
        raise ProblemError(f"quantity {name!r}: no piece is named {spec.where!r}; {known}")
    return shape.pieces[str(spec.where)]


def _quadrature(
    kind: str,
    piece: Boundary,
    seen: BoundaryField,
    order: int,
    regularity: Regularity,
    shape: Shape,
    coordinates: Coordinates,
) -> tuple[float, float]:
    """Return the integrals of the density and of its absolute value over a piece."""
    cell = min(shape.size / 4.0, max(regularity.scale, shape.size / 64.0))
    points, _, weights = piece.quadrature(order, singular=regularity.singular_points, cell=cell)
    weights = weights * metric(coordinates, points)
    value, flux = seen.densities(points)
    density = {"energy": value * flux, "uplift": value, "discharge": -flux}.get(kind, flux)
    return math.fsum(weights * density), math.fsum(weights * np.abs(density))


def _spread(piece: Boundary, field: Field) -> float:
    """Return how much the error may exceed the difference of two orders.

    Along an edge where the flux grows like r**(-1/2) Gauss rules of n points err like 1/n: with 8 and 12
    points by twice their difference.
    """
    steep = any(0.0 < e.exponent < 1.0 and piece.contains(e.sample(5)).any() for e in field.edges)
    return 5.0 if steep else 1.0


def _hidden(name: str, kind: str, piece: Boundary, seen: BoundaryField, field: Field, size: float) -> float:
    """Return how much of an integral the innermost panels at singular points may hide."""
    if kind == "uplift":
        return 0.0  # u is bounded, and a panel is 1e-13 of the piece
    hidden = 0.0
    for edge in field.edges:
        along = edge.sample(5)
        if edge.exponent <= 0.0 and piece.contains(along).any():
            what = "energy at" if kind == "energy" else f"{kind} through"
            raise ProblemError(
                f"quantity {name!r}: the {what} piece {piece.name!r} is infinite, because boundary data "
                f"jump along its edge through {tuple(along[piece.contains(along)][0].tolist())}"
            )
    for singularity in field.singularities:
        place = np.array([singularity.point])
        if not near(piece.project(place), singularity.point, size).all():
            continue
        if seen.flux_limit(singularity) is not None:
            continue
        if singularity.exponent <= 0.0:
            what = "energy at" if kind == "energy" else f"{kind} through"
            raise ProblemError(
                f"quantity {name!r}: the {what} piece {piece.name!r} is infinite, because boundary data "
                f"jump at "
                f"{singularity.point}"
            )
        if piece.dim == 2:
            hidden += _tail(piece, seen, singularity, size)
    return hidden


def _tail(piece: Boundary, seen: BoundaryField, singularity: Singularity, size: float) -> float:
    """Return a bound for the quadrature error on the innermost panel at r**e.

    There the flux is at most C r**(e-1), whose integral up to R is C R**e / e; C is measured at 1e-6 size. A
    Gauss rule of n points misses a share O(n**(-2 e)) of it (Davis and Rabinowitz 1984, Methods of Numerical
    Integration, section 2.12, from memory, unchecked); twice 12**(-2 e) is taken. Panels end where float64
    no longer tells points from the singular one.
    """
    normal = piece.normals(np.array([singularity.point]))[0]
    place = np.array(singularity.point)
    r = 1e-6 * size
    tangents = np.array([[-normal[1], normal[0]], [normal[1], -normal[0]]])
    points = piece.project(place + r * tangents)
    points = points[np.hypot(*(points - place).T) > r / 2.0]
    largest = float(np.abs(seen.flux(points)).max())
    e = singularity.exponent
    panel = 2.0**11 * EPS * max(size, float(np.abs(place).max()))
    return 2.0 * math.pow(12.0, -2.0 * e) * largest * r * math.pow(panel / r, e) / e


def _number(name: str, exact: Exact) -> float:
    """Return a closed form as float64."""
    try:
        number = float(Fraction(exact)) if isinstance(exact, str) else float(exact)
    except (TypeError, ValueError, ZeroDivisionError) as cause:
        raise ProblemError(
            f"quantity {name!r}: exact must be a number or a fraction, got {exact!r}"
        ) from cause
    if not math.isfinite(number):
        raise ProblemError(f"quantity {name!r}: exact must be finite, got {exact!r}")
    return number
