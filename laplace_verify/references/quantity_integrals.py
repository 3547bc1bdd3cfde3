"""Quantities that are integrals over the boundary, to 50 digits by quadrature at two levels that agree.

The densities are those of `problems.driving.boundary_density`, evaluated in exact numbers: K as the decimals
it is written with, the field with 60 digits. Basis "confirmed"; the radius is ten times the change between
the two levels. At the ends of an interval there is nothing to integrate, and the field's own basis holds.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import mpmath
import numpy as np

from laplace_verify.contexts import Precise, precise
from laplace_verify.fields import Field
from laplace_verify.geometry import Boundary
from laplace_verify.problems import Case, Quantity, StoredNumber
from laplace_verify.problems.closed_forms import DIGITS, in_digits
from laplace_verify.problems.driving import OF_VALUES, RATIOS, boundary_density, ratio, stream
from laplace_verify.problems.limits import sides_on
from laplace_verify.problems.materials import Materials
from laplace_verify.references.exact_pieces import ExactPiece, exact_piece, number, written
from laplace_verify.references.refined_quadrature import Integral, Tolerance, along, around, over

__all__ = ["integral_digits"]

ASKED = DIGITS + 10
WORKING = DIGITS + 30
SETTLED = mpmath.mpf(10) ** -(DIGITS + 3)
UNSURE = 10  # radius over the change between two levels
SLOW = frozenset({"box-faces"})  # a second a gradient


def integral_digits(case: Case, quantity: Quantity) -> StoredNumber | None:
    """Return the digits of a quantity that is an integral over pieces of the boundary.

    None if a piece or a number of the problem is not known exactly, the field is a fit or too slow, or the
    rules do not settle better than those in float64.

    Raises
    ------
    FieldError
        If the field has no value or gradient at a point of a piece.
    """
    if case.exact.fit_error or case.exact.kind in SLOW:
        return None
    with mpmath.workdps(WORKING):
        facts = _facts(case, quantity)
        if facts is None:
            return None
        total = Integral(mpmath.mpf(0), mpmath.mpf(0), mpmath.mpf(0))
        for boundary in _boundaries(case, quantity):
            part = _at_end(facts, boundary) if boundary.dim == 1 else _over(facts, boundary)
            if part is None:
                return None
            total += part
        proven = case.dim == 1
        radius = (1 if proven else UNSURE) * total.change + total.size * mpmath.mpf(10) ** (2 - ASKED)
        value, radius = (_converted(facts, amount) for amount in (total.value, radius))
        if not abs(radius) < quantity.radius:
            return None
        return in_digits(value, abs(radius), case.exact.basis if proven else "confirmed")


@dataclass(frozen=True, slots=True)
class _Facts:
    """A case in exact numbers, and the quantity asked for."""

    case: Case
    quantity: Quantity
    drive: tuple[Any, ...]
    at_infinity: Any
    conductivity: dict[str | None, list[list[Any]]]  # by region, None if there are none

    @property
    def field(self) -> Field:
        """The exact field."""
        return self.case.exact

    def region(self, place: tuple[float, ...]) -> str | None:
        """Return the name of the region at a place, None if there are none."""
        k = self.case.problem.conductivity
        if not isinstance(k, Materials):
            return None
        return k.names[int(k.partition.locate(np.array([place]))[0])]

    def metric(self, point: tuple[Any, ...]) -> Any:
        """Return the measure of space per measure of the boundary."""
        coordinates = self.case.problem.coordinates
        if coordinates == "cartesian":
            return 1
        r = number(point[0])
        return 4 * mpmath.pi * r * r if coordinates == "radial-sphere" else 2 * mpmath.pi * r


def _facts(case: Case, quantity: Quantity) -> _Facts | None:
    """Return the numbers of a problem as the decimals that they are written with, None if one is none."""
    k, far = case.problem.conductivity, case.problem.at_infinity
    tensors: dict[str | None, Any]
    if isinstance(k, Materials):
        tensors = {name: np.diag([k.of(name)] * case.dim) for name in k.names}
    else:
        tensors = {None: np.diag([k] * case.dim) if isinstance(k, float) else np.asarray(k)}
    entries = {
        name: [[written(c) for c in row] for row in tensor.tolist()] for name, tensor in tensors.items()
    }
    drive = [written(c) for c in quantity.drive]
    flow = [written(c) for c in far[1]] if isinstance(far, tuple) and far[0] == "flow" else []
    if None in (*drive, *flow, *(c for tensor in entries.values() for row in tensor for c in row)):
        return None
    return _Facts(
        case=case,
        quantity=quantity,
        drive=tuple(number(c) for c in drive),
        at_infinity=("flow", tuple(number(c) for c in flow)) if flow else None,
        conductivity={name: [[number(c) for c in row] for row in tensor] for name, tensor in entries.items()},
    )


def _boundaries(case: Case, quantity: Quantity) -> Iterator[Boundary]:
    """Yield the pieces that are integrated over, cut where interfaces cross them."""
    pieces, where = case.problem.pieces, quantity.where
    name = where[0] if isinstance(where, tuple) else where
    for piece in pieces:
        if piece.name == name or (name is None and piece.kind != "axis"):
            yield from piece.parts or (piece.boundary,)


def _at_end(facts: _Facts, end: Boundary) -> Integral | None:
    """Return the density at an end of an interval."""
    place = written(float(end.ends[0, 0]))
    if place is None:
        return None
    normal = (mpmath.mpf(float(end.normals(end.ends)[0, 0])),)
    value = _density(facts, end, (place,), normal) * facts.metric((place,))
    return Integral(value, mpmath.mpf(0), abs(value))


def _over(facts: _Facts, boundary: Boundary) -> Integral | None:
    """Return the integral over a curve or surface."""
    piece = exact_piece(boundary)
    if piece is None or not _cut_exactly(facts, boundary):
        return None

    def density(*parameters: Any) -> Any:
        point, normal, weight = piece.at(*parameters)
        return _density(facts, boundary, point, normal) * weight * facts.metric(point)

    tolerance = Tolerance(SETTLED, abs(mpmath.mpf(facts.quantity.value)))
    if len(piece.turns) == 2:
        return over(density, piece.turns[1], tolerance)
    if piece.turns[0]:
        return around(density, tolerance)
    return along(density, _breaks(facts.case, piece), tolerance)


def _breaks(case: Case, piece: ExactPiece) -> list[tuple[Fraction, bool]]:
    """Return the ends of a curve and the singular points on it, and which of these are singular."""
    places = [tuple(s.point) for s in case.exact.singularities]
    found = {Fraction(0): False, Fraction(1): False}
    for t in (piece.parameter(place) for place in places):
        if t is not None:
            found[t] = True
    return sorted(found.items())


def _cut_exactly(facts: _Facts, boundary: Boundary) -> bool:
    """Return whether the ends of a piece that interfaces cut lie on them in exact numbers."""
    k = facts.case.problem.conductivity
    if not isinstance(k, Materials):
        return True
    whole = facts.case.problem.pieces[boundary.name].ends
    context = precise(DIGITS)
    for end in boundary.ends:
        if len(whole) and np.abs(whole - end).max(axis=1).min() == 0.0:
            continue
        x = tuple(context.number(c) for c in (written(float(c)) for c in end) if c is not None)
        if len(x) < len(end) or not _on_wall(k, context, x):
            return False
    return True


def _on_wall(materials: Materials, context: Precise, x: tuple[Any, ...]) -> bool:
    """Return whether a point lies on an interface."""
    levels = [abs(wall.level(context, x)) for wall in materials.partition.walls]
    return bool(min(levels) <= context.mpf(10) ** -DIGITS)


def _density(facts: _Facts, boundary: Boundary, point: tuple[Any, ...], normal: tuple[Any, ...]) -> Any:
    """Return what is integrated at a point of a piece."""
    kind, field, case = facts.quantity.kind, facts.field, facts.case
    place = tuple(float(c) for c in point)
    lips = sides_on(field, boundary, np.array([place]), case.problem.shape.size)
    side = None if lips is None else int(lips[0])
    points, value, flux = np.array([point], dtype=object), mpmath.mpf(0), mpmath.mpf(0)
    if kind == "energy" or kind in OF_VALUES:
        value = field.at(point, ASKED, side=side)
    if kind == "added mass":
        value -= stream(facts.at_infinity, points)[0]
    if kind not in OF_VALUES:
        region = facts.region(place)
        gradient = field.gradient_at(point, ASKED, side=side, region=region)
        flux = mpmath.fsum(
            n * k * g
            for n, row in zip(normal, facts.conductivity[region], strict=True)
            for k, g in zip(row, gradient, strict=True)
        )
    asked = "flux" if kind in RATIOS else kind
    normals = np.array([normal], dtype=object)
    values, fluxes = np.array([value], dtype=object), np.array([flux], dtype=object)
    return boundary_density(asked, points, normals, values, fluxes, facts.drive)[0]


def _converted(facts: _Facts, amount: Any) -> Any:
    """Return the quantity that an integral stands for."""
    kind, k = facts.quantity.kind, next(iter(facts.conductivity.values()))[0][0]
    if kind == "added mass":
        return k * amount
    return ratio(kind, amount, facts.drive, k) if kind in RATIOS else amount
