"""Declared singular points and cuts against a shape: none strictly inside, no pole on its boundary.

A cut is followed exactly, not by sampling: an interval of it whose middle lies outside the shape and
farther from the boundary than half its length lies outside altogether (the distance is 1-Lipschitz); other
intervals are halved until one shows a point strictly inside, or they are as short as the tolerance.
"""

from __future__ import annotations

import math
from collections.abc import Collection

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.errors import FieldError, ProblemError
from laplace_verify.fields import Cut, Edge, Fan, Field, Line, Ring, Singularity
from laplace_verify.geometry import Shape

__all__ = ["check_axis", "check_singularities", "edge_points", "on_shape"]

ON_BOUNDARY = 1e-9  # of the shape's size
ALONG = 33  # points at which an edge is looked at
SHORTEST = 1e-4  # of the shape's size: intervals of a cut that are not halved further
SMALLEST = 5e-3  # the same for patches of a plane across which a field of space jumps


def on_shape(shape: Shape, field: Field) -> tuple[Singularity, ...]:
    """Return the field's singular points that lie in the closed shape."""
    return tuple(s for s in field.singularities if shape.contains(np.array([s.point]), tol=ON_BOUNDARY).all())


def edge_points(shape: Shape, edge: Edge | Line | Ring, count: int = ALONG) -> Array:
    """Return those of evenly spaced points (n, 3) of an edge that lie in the closed shape."""
    part = edge.within(*shape.bounding_box)
    points = part.sample(count) if part is not None else np.zeros((0, 3))
    inside: Array = points[shape.contains(points, tol=ON_BOUNDARY)]
    return inside


def check_singularities(shape: Shape, field: Field, meeting: tuple[float, ...] | None = None) -> None:
    """Refuse a field that is singular strictly inside the shape, or infinite on its boundary.

    Where several regions meet, at `meeting`, the value may be singular as a power of the distance.

    Raises
    ------
    ProblemError
        If a declared singular point lies inside, a log or pole on the boundary, or a cut or an edge
        crosses the interior.
    """
    for singularity in on_shape(shape, field):
        if meeting is not None and singularity.kind == "power" and singularity.point == meeting:
            continue
        inside = bool(shape.distance(np.array([singularity.point]))[0] > ON_BOUNDARY * shape.size)
        if inside or singularity.kind in ("log", "pole"):
            raise ProblemError(
                f"{field.formula} is no solution in {shape!r}: it has a singular point ({singularity.kind}) "
                f"{'inside' if inside else 'on the boundary'} at {singularity.point}; move the point outside"
            )
    for edge in field.edges:
        along = edge_points(shape, edge)
        within = along[shape.distance(along) > ON_BOUNDARY * shape.size] if len(along) else along
        if len(within):
            what = "is singular" if edge.exponent > 0.0 else "jumps"
            raise ProblemError(
                f"{field.formula} is no solution in {shape!r}: it {what} along an edge inside, as at "
                f"{tuple(within[0].tolist())}; the edge must lie on the boundary or outside"
            )
    for sheet in field.sheets:
        crossing = _fan_inside(shape, sheet) if isinstance(sheet, Fan) else None
        if crossing is not None:
            raise ProblemError(
                f"{field.formula} is no solution in {shape!r}: it jumps across a plane inside, as at "
                f"{crossing}; turn its branch cut away"
            )
    for cut in field.cuts:
        crossing = _point_inside(shape, cut)
        if crossing is not None:
            raise ProblemError(
                f"{field.formula} is no solution in {shape!r}: its branch cut from {cut.start} along "
                f"{cut.direction} crosses the interior, for example at {crossing}; turn the cut away"
            )


def check_axis(shape: Shape, field: Field, axis: Collection[str]) -> None:
    """Refuse a field that is singular on the axis inside the body: only its tips belong to the boundary.

    Raises
    ------
    ProblemError
        With the singular point.
    """
    for name in axis:
        piece = shape.pieces[name]
        for s in on_shape(shape, field):
            place = np.array([s.point])
            if not piece.contains(place, ON_BOUNDARY).all():
                continue
            tip = np.sqrt(((piece.ends - place) ** 2).sum(axis=1)).min() <= ON_BOUNDARY * shape.size
            if shape.dim == 1 or not tip:
                raise ProblemError(
                    f"{field.formula} is no solution in {shape!r}: it has a singular point ({s.kind}) on the "
                    f"axis, inside the body, at {s.point}; move it outside or keep away from the axis"
                )
        try:
            field.value(piece.point([0.21, 0.5, 0.79]))  # away from the tips
        except FieldError as cause:
            raise ProblemError(
                f"{field.formula} is no solution in {shape!r}: it has no value on the axis, which is inside "
                f"the body ({cause}); keep away from the axis"
            ) from cause


def _point_inside(shape: Shape, cut: Cut) -> tuple[float, ...] | None:
    """Return a point of the cut strictly inside the shape, None if there is none."""
    start, direction = np.array(cut.start), np.array(cut.direction)
    lower, upper = shape.bounding_box
    reach = float(np.sqrt((np.maximum(np.abs(start - lower), np.abs(start - upper)) ** 2).sum()))
    edges = np.linspace(0.0, min(cut.length, reach), 65)
    low, high = edges[:-1], edges[1:]
    while len(low):
        middle, half = (low + high) / 2.0, (high - low) / 2.0
        points: Array = start + middle[:, None] * direction
        within, distance = shape.contains(points), shape.distance(points)
        inside = within & (distance > ON_BOUNDARY * shape.size)
        if inside.any():
            return tuple(points[int(np.argmax(np.where(inside, distance, -math.inf)))].tolist())
        again = (distance < half) & (half > SHORTEST * shape.size / 2.0)
        low, middle, high = low[again], middle[again], high[again]
        low, high = np.concatenate([low, middle]), np.concatenate([middle, high])
    return None


def _fan_inside(shape: Shape, fan: Fan) -> tuple[float, ...] | None:
    """Return a point of the plane sector strictly inside the shape, None if there is none.

    As along cuts: a patch whose middle lies outside, farther from the boundary than the patch reaches, lies
    outside; other patches are cut in four.
    """
    lower, upper = shape.bounding_box
    start = np.array(fan.start)
    reach = float(np.sqrt((np.maximum(np.abs(start - lower), np.abs(start - upper)) ** 2).sum()))
    edges, turns = np.linspace(0.0, reach, 17), np.linspace(0.0, fan.opening, 17)
    s, t = (grid.ravel() for grid in np.meshgrid(edges[1:] - reach / 32.0, turns[1:] - fan.opening / 32.0))
    step, turn = reach / 32.0, fan.opening / 32.0
    while len(s):
        points = fan.at(s, t)
        within, distance = shape.contains(points), shape.distance(points)
        inside = within & (distance > ON_BOUNDARY * shape.size)
        if inside.any():
            return tuple(points[int(np.argmax(np.where(inside, distance, -math.inf)))].tolist())
        again = (distance < step + (s + step) * turn) & (step > SMALLEST * shape.size / 2.0)
        step, turn = step / 2.0, turn / 2.0
        s = np.concatenate([s[again] + i * step for i in (-1, 1, -1, 1)])
        t = np.concatenate([t[again] + j * turn for j in (-1, -1, 1, 1)])
    return None
