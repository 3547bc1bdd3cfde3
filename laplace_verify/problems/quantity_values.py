"""Exact quantities from the exact field: values at points, and integrals over the boundary with a radius.

Integrals are graded towards singular points and done at two orders; the radius is their difference plus
rounding plus, at a singular point r**e, what the innermost panel of the grading can hold. A value given in
closed form is checked against that and then replaces it.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from decimal import ROUND_CEILING, Decimal

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.errors import FieldError, ProblemError, nearest_names
from laplace_verify.fields import Edge, Line, Ring, Singularity
from laplace_verify.geometry import Boundary
from laplace_verify.problems.boundary_values import BoundaryField
from laplace_verify.problems.closed_forms import closed_form
from laplace_verify.problems.coordinates import metric
from laplace_verify.problems.driving import (
    OF_VALUES,
    RATIOS,
    Setting,
    boundary_density,
    drive_of,
    ratio,
    scalar,
    stream,
)
from laplace_verify.problems.limits import near
from laplace_verify.problems.materials import Materials
from laplace_verify.problems.quantities import Quantity, QuantitySpec
from laplace_verify.problems.regions import parts_of
from laplace_verify.problems.sections import exit_gradient, section
from laplace_verify.problems.singular_checks import edge_points

__all__ = ["CLOSED_FORM", "evaluate"]

EPS = float(np.finfo(np.float64).eps)
ORDERS = (15, 23)
CLOSED_FORM = 1e-9  # largest disagreement of a closed form with the integral, relative to the integral of |.|
INFINITE = {"energy": "energy at", "discharge": "discharge through"}


def evaluate(specs: Mapping[str, QuantitySpec], setting: Setting) -> dict[str, Quantity]:
    """Return the wanted quantities of an exact field.

    Raises
    ------
    ProblemError
        If a piece is unknown, a point lies outside, an integral is infinite, the field is not driven as the
        quantity supposes, or a closed form disagrees.
    """
    return {str(name): _evaluated(str(name), spec, setting) for name, spec in specs.items()}


def _evaluated(name: str, spec: QuantitySpec, setting: Setting) -> Quantity:
    """Return one quantity."""
    if not isinstance(spec, QuantitySpec):
        raise ProblemError(f"quantity {name!r} must be flux_through(...) or value_at(...), got {spec!r}")
    drive, digits = drive_of(name, spec, setting), None
    direction: tuple[float, ...] = ()
    if spec.kind == "value":
        value, radius, scale = _value(name, spec, setting)
    elif spec.kind == "flux density":
        direction = _direction(name, spec, setting)
        value, radius, scale = _flux_density(name, spec, direction, setting)
    elif spec.kind == "exit gradient":
        piece, place = _named_piece(name, spec, setting), spec.place or ()
        value, radius, scale = exit_gradient(name, piece, place, setting.field, setting.shape.size)
    else:
        value, radius, scale = _converted(name, spec, drive, setting)
    if spec.exact is not None:
        exact, digits = closed_form(name, spec.exact)
        if not abs(exact - value) <= CLOSED_FORM * scale + radius:
            raise ProblemError(
                f"quantity {name!r}: the closed form {spec.exact} disagrees with the field's {value!r}"
            )
        value, radius = exact, 4 * EPS * abs(exact)
    else:
        value, radius = _rounded(value, radius)
    return Quantity(
        value=value, unit=spec.unit, radius=radius, kind=spec.kind, where=spec.where, place=spec.place,
        direction=direction, drive=drive, digits=digits,
    )  # fmt: skip


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


def _point(name: str, spec: QuantitySpec, setting: Setting) -> tuple[float, ...]:
    """Return the point of a value or flux density, which must lie in the shape."""
    point, shape = spec.where, setting.shape
    if not isinstance(point, tuple) or len(point) != shape.dim or any(isinstance(c, str) for c in point):
        raise ProblemError(f"quantity {name!r}: the point must have {shape.dim} coordinates, got {point}")
    if not shape.contains([point]).all():
        raise ProblemError(f"quantity {name!r}: the point {point} lies outside {shape!r}")
    return tuple(float(c) for c in point)


def _value(name: str, spec: QuantitySpec, setting: Setting) -> tuple[float, float, float]:
    """Return u at a point of the shape, its radius, and the size it is relative to."""
    point, field = _point(name, spec, setting), setting.field
    try:
        if field.opaque:
            value = float(field.value([point])[0])
            return value, 64 * EPS * abs(value), abs(value) + 1.0
        enclosure = field.enclosure(point, digits=min(25, field.most_digits))
    except FieldError as cause:
        raise ProblemError(f"quantity {name!r}: {cause}") from cause
    value = float(enclosure.value)
    return value, float(enclosure.radius) + EPS * abs(value), abs(value) + 1.0


def _direction(name: str, spec: QuantitySpec, setting: Setting) -> tuple[float, ...]:
    """Return the unit vector of a flux density, perhaps the normal of a piece at its point."""
    point, given = _point(name, spec, setting), spec.direction
    if not isinstance(given, str):
        if len(given) != len(point) or not abs(math.hypot(*given) - 1.0) <= 4 * EPS:
            raise ProblemError(
                f"quantity {name!r}: the direction must be a unit vector of {len(point)} components, "
                f"got {given}"
            )
        return given
    if given not in setting.pieces:
        raise ProblemError(
            f"quantity {name!r}: no piece is named {given!r}; {nearest_names(given, setting.pieces)}"
        )
    piece = setting.shape.pieces[given]
    if not piece.contains([point]).all():
        raise ProblemError(f"quantity {name!r}: the point {point} does not lie on the piece {given!r}")
    return tuple(float(c) for c in piece.normals([point])[0])


def _flux_density(
    name: str, spec: QuantitySpec, direction: tuple[float, ...], setting: Setting
) -> tuple[float, float, float]:
    """Return e . K grad u at a point, its radius, and the size it is relative to."""
    point, tensor = _point(name, spec, setting), setting.tensor
    try:
        if isinstance(tensor, Materials):
            region = tensor.names[int(tensor.partition.locate(np.array([point]))[0])]
            gradient = setting.field.gradient([point], region=region)[0]
            current = tensor.of(region) * gradient
        else:
            current = tensor @ setting.field.gradient([point])[0]
    except FieldError as cause:
        raise ProblemError(f"quantity {name!r}: {cause}") from cause
    value, size = float(np.dot(direction, current)), float(np.abs(current).max())
    return value, 256 * EPS * size, size + abs(value)


def _converted(
    name: str, spec: QuantitySpec, drive: tuple[float, ...], setting: Setting
) -> tuple[float, float, float]:
    """Return what is an integral over the boundary or follows from one, its radius, and its scale."""
    value, radius, total = _integral(name, spec, drive, setting)
    if spec.kind == "added mass":
        k = scalar(name, spec.kind, setting.tensor)
        return k * value, k * radius, k * total
    if spec.kind not in RATIOS:
        return value, radius, total
    k = scalar(name, spec.kind, setting.tensor) if spec.kind == "shape factor" else 1.0
    if not abs(value) > radius and spec.kind == "resistance":
        raise ProblemError(f"quantity {name!r}: no flux passes, so the resistance is infinite")
    found = ratio(spec.kind, value, drive, k)
    relative = 16 * EPS + (radius / abs(value) if value else 0.0)  # 16 for the rounding of the levels
    spread = abs(found) * relative if value else abs(ratio("conductance", radius, drive, 1.0)) / k
    scale = abs(found) * total / abs(value) if value else abs(ratio("conductance", total, drive, 1.0)) / k
    return found, spread, scale


def _integral(
    name: str, spec: QuantitySpec, drive: tuple[float, ...], setting: Setting
) -> tuple[float, float, float]:
    """Return a boundary integral, its radius, and the integral of the absolute value."""
    shape = setting.shape
    pieces = _pieces(name, spec, setting)
    if isinstance(setting.tensor, Materials):
        pieces = [part for piece in pieces for part in parts_of(piece, setting.tensor.partition)]
    value = radius = total = 0.0
    for piece in pieces:
        seen = BoundaryField(setting.field, piece, setting.tensor, shape.size)
        if spec.kind not in OF_VALUES:
            radius += _hidden(name, spec.kind, piece, seen, setting)
        low, high = (_quadrature(spec, drive, piece, seen, order, setting) for order in ORDERS)
        value += high[0]
        total += high[1]
        radius += _spread(piece, setting) * abs(high[0] - low[0]) + 16 * EPS * high[1]
    return value, radius, total


def _pieces(name: str, spec: QuantitySpec, setting: Setting) -> list[Boundary]:
    """Return what a quantity is integrated over: a piece, a section inside, or the whole boundary."""
    if spec.kind == "discharge":
        return [section(name, spec.where, setting.shape)]
    if spec.kind in ("flux", "uplift", *RATIOS):
        return [_named_piece(name, spec, setting)]
    return [setting.shape.pieces[piece] for piece in setting.pieces]


def _named_piece(name: str, spec: QuantitySpec, setting: Setting) -> Boundary:
    """Return the piece that a quantity belongs to, the first of two."""
    where = spec.where[0] if isinstance(spec.where, tuple) and spec.where else spec.where
    if where not in setting.shape.pieces.names:
        known = nearest_names(str(where), setting.shape.pieces.names)
        raise ProblemError(f"quantity {name!r}: no piece is named {where!r}; {known}")
    return setting.shape.pieces[str(where)]


def _quadrature(
    spec: QuantitySpec,
    drive: tuple[float, ...],
    piece: Boundary,
    seen: BoundaryField,
    order: int,
    setting: Setting,
) -> tuple[float, float]:
    """Return the integrals of the density and of its absolute value over a piece."""
    size, regularity = setting.shape.size, setting.regularity
    cell = min(size / 4.0, max(regularity.scale, size / 64.0))
    points, normals, weights = piece.quadrature(order, singular=regularity.singular_points, cell=cell)
    weights = weights * metric(setting.coordinates, points)
    value, flux = seen.densities(points)
    if spec.kind == "added mass":
        value = value - stream(setting.at_infinity, points)
    density = boundary_density(spec.kind, points, normals, value, flux, drive)
    return math.fsum(weights * density), math.fsum(weights * np.abs(density))


def _spread(piece: Boundary, setting: Setting) -> float:
    """Return how much the error may exceed the difference of two orders.

    Along an edge where the flux grows like r**(-1/2) Gauss rules of n points err like 1/n: with 8 and 12
    points by twice their difference.
    """
    steep = any(0.0 < e.exponent < 1.0 and len(_along(piece, e, setting)) for e in setting.field.edges)
    return 5.0 if steep else 1.0


def _along(piece: Boundary, edge: Edge | Line | Ring, setting: Setting) -> Array:
    """Return points (n, 3) of an edge that lie on a piece; none if it keeps off it."""
    points = edge_points(setting.shape, edge, 5)
    return points[piece.contains(points)] if len(points) else points


def _hidden(name: str, kind: str, piece: Boundary, seen: BoundaryField, setting: Setting) -> float:
    """Return how much of an integral the innermost panels at singular points may hide."""
    hidden, field, size = 0.0, setting.field, setting.shape.size
    for edge in field.edges:
        along = _along(piece, edge, setting)
        if edge.exponent <= 0.0 and len(along):
            what = (
                "energy at"
                if kind == "energy"
                else "discharge through"
                if kind == "discharge"
                else "flux through"
            )
            raise ProblemError(
                f"quantity {name!r}: the {what} piece {piece.name!r} is infinite, because boundary data "
                f"jump along its edge through {tuple(along[0].tolist())}"
            )
    for singularity in field.singularities:
        place = np.array([singularity.point])
        if not near(piece.project(place), singularity.point, size).all():
            continue
        if seen.flux_limit(singularity) is not None:
            continue
        if singularity.exponent <= 0.0:
            what = (
                "energy at"
                if kind == "energy"
                else "discharge through"
                if kind == "discharge"
                else "flux through"
            )
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
