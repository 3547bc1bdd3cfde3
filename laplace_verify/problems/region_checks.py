"""Checks that a field is a solution with a conductivity per region.

In every region the field must be one smooth field with div(K grad u) = 0; across every interface the value
and the normal flux K n . grad u must be continuous. Both are looked at in seeded points: of the regions,
away from interfaces and boundary, and of the interfaces inside the shape. For a user's own functions there
are more points, but no integral identity as in a homogeneous shape: a singular point that they do not
declare may go unseen.
"""

from __future__ import annotations

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.errors import FieldError, ProblemError
from laplace_verify.fields import Field
from laplace_verify.geometry import Shape
from laplace_verify.problems.coordinates import Coordinates
from laplace_verify.problems.materials import Materials
from laplace_verify.problems.regions import Interface, interfaces_of, regions_of
from laplace_verify.problems.solution_checks import check_at

__all__ = ["check_regions"]

SEED = 33107
DRAWN = 4000  # points of the shape among which those of a region are looked for
POINTS, OPAQUE_POINTS = 4, 24  # in a region
ON_INTERFACE = 24
CONTINUITY = 1e-10  # of the field's size, or of its flux


def check_regions(
    shape: Shape, field: Field, materials: Materials, coordinates: Coordinates = "cartesian"
) -> None:
    """Refuse a field that is no solution with these materials.

    Raises
    ------
    ProblemError
        If the regions do not fit the shape or the field; or with point and residual of the equation, of the
        continuity of the value or of that of the normal flux.
    """
    parts = {}
    for region in regions_of(shape, materials):
        try:
            parts[region.name] = field.restricted(region.name)
        except FieldError as cause:
            raise ProblemError(f"{field.formula} has no part in region {region.name!r}: {cause}") from cause
    _check_inside(shape, field, materials, parts, coordinates)
    for interface in interfaces_of(shape, materials.partition):
        _check_across(shape, interface, materials, parts)


def _check_inside(
    shape: Shape, field: Field, materials: Materials, parts: dict[str, Field], coordinates: Coordinates
) -> None:
    """Check the equation in every region, and that the field is the region's part there."""
    drawn = shape.sample(DRAWN if shape.dim > 1 else 256, SEED)
    numbers = materials.partition.locate(drawn)
    depth = np.minimum(shape.distance(drawn), materials.partition.distance(drawn))
    for number, (name, part) in enumerate(parts.items()):
        mine = numbers == number
        order = np.argsort(-depth[mine], kind="stable")
        points = drawn[mine][order[:: max(1, len(order) // 40)]]
        if not len(points):
            raise ProblemError(f"region {name!r} is too thin to be checked in {shape!r}; make it wider")
        for point in points[: OPAQUE_POINTS if field.opaque else POINTS]:
            try:
                _check_point(field, part, name, materials, point, shape.size, coordinates)
            except FieldError as cause:
                raise ProblemError(
                    f"{part.formula} cannot be evaluated in region {name!r}: {cause}"
                ) from cause


def _check_point(
    field: Field,
    part: Field,
    name: str,
    materials: Materials,
    point: Array,
    size: float,
    coordinates: Coordinates,
) -> None:
    """Check one point of a region."""
    identity = np.eye(len(point))
    k = materials.of(name)
    check_at(part, point, k * identity, (np.full(len(point), k), identity), size, coordinates)
    own, whole = part.value(point[None])[0], field.value(point[None])[0]
    if not abs(own - whole) <= CONTINUITY * (abs(own) + abs(whole)):
        raise ProblemError(
            f"the field and the conductivity differ about region {name!r}: at {tuple(point.tolist())} the "
            f"field is {whole:.6g}, its part for that region {own:.6g}; use the same regions for both"
        )


def _check_across(shape: Shape, interface: Interface, materials: Materials, parts: dict[str, Field]) -> None:
    """Check value and normal flux on one interface."""
    points, normals = interface.sample(ON_INTERFACE, SEED)
    if not len(points):
        return  # outside the shape
    first, second = (parts[name] for name in interface.between)
    try:
        values = [part.value(points) for part in (first, second)]
        gradients = [part.gradient(points) for part in (first, second)]
    except FieldError as cause:
        raise ProblemError(
            f"the field cannot be evaluated on interface {interface.name!r}: {cause}"
        ) from cause
    ks = [materials.of(name) for name in interface.between]
    fluxes = [k * (gradient * normals).sum(axis=1) for k, gradient in zip(ks, gradients, strict=True)]
    flow = max(float(k * np.abs(g).max()) for k, g in zip(ks, gradients, strict=True))
    steep = max(float(np.abs(g).max()) for g in gradients) * shape.size
    size = max(float(np.abs(np.array(values)).max()), steep)
    for what, (one, two), scale in (("value", values, size), ("flux K n . grad u", fluxes, flow)):
        jump = np.abs(one - two)
        row = int(np.argmax(jump))
        if not jump[row] <= CONTINUITY * scale:
            a, b = interface.between
            raise ProblemError(
                f"no solution: the {what} jumps by {jump[row]:.6g} across the interface {interface.name!r} "
                f"at {tuple(points[row].tolist())}, from {one[row]:.6g} in {a!r} (K = {ks[0]:g}) to "
                f"{two[row]:.6g} in {b!r} (K = {ks[1]:g})"
            )
