"""What a case derives from its exact field: conditions of all pieces, their data, that it is a solution."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.errors import ProblemError
from laplace_verify.fields import Field
from laplace_verify.geometry import Shape, Windowed
from laplace_verify.problems.assembly import Conductivity, alpha_of, as_tensor, by_piece
from laplace_verify.problems.boundary_values import BoundaryField, ExactData
from laplace_verify.problems.conditions import PERIODIC, Condition
from laplace_verify.problems.coordinates import Coordinates, axis_names
from laplace_verify.problems.materials import Materials
from laplace_verify.problems.periodic import joins_of
from laplace_verify.problems.pieces import Piece, Pieces
from laplace_verify.problems.problem import bare_piece, piece_parts
from laplace_verify.problems.region_checks import check_regions
from laplace_verify.problems.singular_checks import check_axis, check_singularities
from laplace_verify.problems.solution_checks import check_equation, check_green

__all__ = ["check_solution", "derived_conditions", "derived_pieces"]


def derived_conditions(
    shape: Shape, conditions: Mapping[str, str | Condition], axis: frozenset[str]
) -> dict[str, Condition]:
    """Return the condition of every piece off the axis, refusing data."""
    given = by_piece(shape, conditions, axis)
    for name, condition in given.items():
        if condition.data is not None:
            raise ProblemError(
                f"piece {name!r}: data of a case are derived from its exact field; give the kind alone "
                f"({'robin(alpha)' if condition.kind == 'robin' else repr(condition.kind)}), or use problem()"
            )
    return {
        piece.name: given.get(piece.name, Condition(kind="dirichlet"))
        for piece in shape.pieces
        if piece.name not in axis
    }


def check_solution(shape: Shape, field: Field, tensor: Array | Materials, coordinates: Coordinates) -> None:
    """Refuse a field that is no solution of div(K grad u) = 0 in the shape."""
    check_axis(shape, field, axis_names(shape, coordinates))
    if isinstance(tensor, Materials):
        check_regions(shape, field, tensor, coordinates)
        check_singularities(shape, field, tensor.partition.meeting)
        return
    if field.regions:
        raise ProblemError(
            f"the field is pieced together from the regions {', '.join(field.regions)}; give a conductivity "
            "with the same regions"
        )
    check_singularities(shape, field)
    check_equation(shape, field, tensor, coordinates)
    if field.opaque:  # a closed form declares its singular points; of a user's function nothing is known
        singular = np.array([s.point for s in field.singularities]).reshape(-1, shape.dim)
        closed = shape.window if isinstance(shape, Windowed) else shape
        check_green(closed, field, tensor, singular, coordinates)


def derived_pieces(
    shape: Shape, conditions: Mapping[str, Condition], field: Field, conductivity: Conductivity
) -> Pieces:
    """Return the pieces with data derived from the field."""
    pieces = []
    tensor = conductivity if isinstance(conductivity, Materials) else as_tensor(conductivity, shape.dim)
    joins = joins_of(shape, [name for name, c in conditions.items() if c.kind == PERIODIC])
    for boundary in shape.pieces:
        if boundary.name not in conditions or boundary.name in joins:
            pieces.append(bare_piece(shape, boundary.name, joins.get(boundary.name)))
            continue
        condition = conditions[boundary.name]
        alpha = alpha_of(boundary.name, condition, shape.dim)
        seen = BoundaryField(field, boundary, tensor, shape.size)
        pieces.append(
            Piece(
                boundary=boundary,
                kind=condition.kind,
                shape_size=shape.size,
                parts=piece_parts(shape, boundary.name, conductivity),
                _data=ExactData(seen, condition.kind, alpha),
                _alpha=alpha,
            )
        )
    return Pieces(pieces)
