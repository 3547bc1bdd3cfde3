"""What seepage asks for: a straight section that water crosses, and the gradient with which it leaves.

An exit gradient is compared with the critical one of the soil, about 1 (common practice, no source); it is
infinite at the toe of a flat dam and finite beside a sheet pile.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from laplace_verify.errors import ProblemError
from laplace_verify.fields import Field
from laplace_verify.geometry import Boundary, Shape
from laplace_verify.geometry.segments import Segment
from laplace_verify.problems.boundary_values import BoundaryField

__all__ = ["exit_gradient", "section"]

EPS = float(np.finfo(np.float64).eps)
ALONG = 33  # points of a section that must lie in the shape
ON_PIECE = 1e-9


def section(name: str, where: Any, shape: Shape) -> Segment:
    """Return the straight section (x, y, x, y) of a plane shape, its normal to the right.

    Raises
    ------
    ProblemError
        If the shape is not plane, or the section is a point or leaves the shape.
    """
    if shape.dim != 2 or not isinstance(where, tuple) or len(where) != 4:
        raise ProblemError(
            f"quantity {name!r}: a discharge is taken across a section between two points of a plane shape, "
            f"got {where!r} in {shape!r}"
        )
    if where[:2] == where[2:]:
        raise ProblemError(f"quantity {name!r}: the section from {where[:2]} to itself has no length")
    segment = Segment(name=name, start=where[:2], stop=where[2:])
    if not shape.contains(segment.outline(ALONG)).all():
        raise ProblemError(f"quantity {name!r}: the section from {where[:2]} to {where[2:]} leaves {shape!r}")
    return segment


def exit_gradient(
    name: str, piece: Boundary, place: tuple[float, ...], field: Field, size: float
) -> tuple[float, float, float]:
    """Return -n . grad u at a point of a piece, its radius, and the size it is relative to.

    Raises
    ------
    ProblemError
        If the point is not on the piece, or the gradient is infinite there.
    """
    if len(place) != piece.dim or not piece.contains([place], ON_PIECE).all():
        raise ProblemError(f"quantity {name!r}: the point {place} does not lie on piece {piece.name!r}")
    seen = BoundaryField(field, piece, np.eye(piece.dim), size)
    try:
        value = -float(seen.flux(np.array([place]))[0])
    except ProblemError as cause:
        raise ProblemError(f"quantity {name!r}: {cause}") from cause
    return value, 64 * EPS * abs(value), abs(value)
