"""What a picture of a problem needs: boundary pieces by name and condition, as polylines."""

from __future__ import annotations

from dataclasses import dataclass

from laplace_verify.problems.problem import Problem

__all__ = ["PieceInfo", "drawn_pieces"]

OUTLINE_POINTS = 65  # per piece; a picture needs no more


@dataclass(frozen=True, slots=True, kw_only=True)
class PieceInfo:
    """A boundary piece: name, condition ("missing" if an ill-posed problem has none) and a polyline.

    `outline` has shape (n, d): the two-dimensional pieces as polylines, others empty or a few points.
    """

    name: str
    condition: str
    outline: tuple[tuple[float, ...], ...] = ()


def drawn_pieces(problem: Problem) -> tuple[PieceInfo, ...]:
    """Return the pieces of a problem, in the plane with their polylines.

    >>> from laplace_verify.geometry import Rectangle
    >>> from laplace_verify.problems import dirichlet, problem
    >>> sides = ("left", "right", "bottom", "top")
    >>> plate = problem(Rectangle((0, 0), (2, 1)), dict.fromkeys(sides, dirichlet(1)))
    >>> left = drawn_pieces(plate)[0]
    >>> left.name, left.condition, left.outline[0]
    ('left', 'dirichlet', (0.0, 1.0))
    """
    shape = problem.shape
    outline = shape.outline(OUTLINE_POINTS) if shape.dim == 2 else {}
    kinds = {piece.name: piece.kind for piece in problem.pieces}
    return tuple(
        PieceInfo(
            name=piece.name,
            condition=kinds.get(piece.name, "missing"),
            outline=tuple(tuple(row) for row in outline[piece.name].tolist()) if outline else (),
        )
        for piece in shape.pieces
    )
