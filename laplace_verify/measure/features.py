"""What is special about a case, in words, so that failing cases can be compared with passing ones."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.geometry import Windowed
from laplace_verify.measure.data_features import data_features
from laplace_verify.measure.results import Feature

if TYPE_CHECKING:
    from laplace_verify.measure.exact import Exact
    from laplace_verify.problems import Case, Piece, Problem

__all__ = ["features", "ill_posed_features", "problem_features"]

SMALL = 1e-9
LARGE_JUMP = 10.0
CLOSE = 0.1  # of the shape's extent
STRETCHED = (2.0, 5.0)  # ratios of the extents that are told apart


def features(case: Case, exact: Exact) -> dict[str, Feature]:
    """Return name -> True, False, a number or a word."""
    problem, regularity = case.problem, case.regularity
    smooth = math.isinf(regularity.solution)
    found = problem_features(problem)
    found |= {
        "interface off the axes": regularity.interface in ("oblique", "curved"),
        "jump in the boundary data": bool(len(regularity.jumps)),
        "singular solution": not smooth,
        "source close to the boundary": smooth and regularity.scale < CLOSE * problem.shape.extent,
        "harmonic polynomial": None if exact.field.degree is None else float(exact.field.degree),
    }
    found |= data_features(case, exact)
    for piece in problem.pieces:
        found |= dict.fromkeys(_places(piece), True)
    found |= {f"{piece.kind} on {piece.name}": True for piece in problem.pieces if piece.kind != "axis"}
    found |= {f"tag {tag}": True for tag in sorted(case.tags)}
    return found


def problem_features(problem: Problem) -> dict[str, Feature]:
    """Return what can be said of a problem without its solution: shape, conditions and materials."""
    shape, infinity = problem.shape, problem.at_infinity
    kinds = {piece.name: piece.kind for piece in problem.pieces}
    used = set(kinds.values()) - {"axis", "periodic"}
    lower, upper = shape.bounding_box
    tensor = isinstance(problem.conductivity, np.ndarray)
    return {
        "dimension": float(shape.dim),
        "shape": (shape.whole if isinstance(shape, Windowed) else shape).kind,
        "unbounded domain": not shape.bounded or isinstance(shape, Windowed),
        "behaviour at infinity": infinity[0] if isinstance(infinity, tuple) else infinity,
        "Dirichlet condition": "dirichlet" in kinds.values(),
        "Neumann condition": "neumann" in kinds.values(),
        "Robin condition": "robin" in kinds.values(),
        "Neumann or Robin condition": bool(used & {"neumann", "robin"}),
        "periodic pieces": "periodic" in kinds.values(),
        "only Dirichlet conditions": used == {"dirichlet"},
        "pure Neumann problem": problem.constant is not None,
        "several kinds of condition": len(used) > 1,
        "tensor conductivity": tensor,
        "conductivity other than 1": _other_than_one(problem),
        "off-diagonal conductivity": tensor
        and bool(np.any(problem.tensor != np.diag(np.diag(problem.tensor)))),
        "interface": bool(problem.interfaces),
        "coordinates with a symmetry": problem.coordinates != "cartesian",
        "axis of symmetry": "axis" in kinds.values(),
        "interface that meets the boundary": any(len(piece.parts) > 1 for piece in problem.pieces),
        "conductivity jump of ten or more": _jump(problem) >= LARGE_JUMP,
        "curved boundary": any(piece.curved for piece in problem.pieces),
        "sides off the axes": any(_oblique(piece) for piece in problem.pieces),
        "boundary across the lines of a rectangular grid": any(
            piece.curved or _oblique(piece) for piece in problem.pieces
        ),
        "inner boundary": any(name == "inner" or name.startswith("hole-") for name in kinds),
        "slit": any(j.opening > 2 * math.pi - SMALL for j in shape.junctions),
        "corner": any(abs(j.opening - math.pi) > SMALL for j in shape.junctions),
        "unequal extents": not np.allclose(upper - lower, (upper - lower)[0], rtol=SMALL, atol=0.0),
        "aspect ratio": _aspect(upper - lower),
        "corner of the box not at the origin": bool(np.any(np.abs(lower) > SMALL * shape.extent)),
        "re-entrant corner": any(j.opening > math.pi + SMALL for j in shape.junctions),
        "change of condition inside a side": any(
            abs(j.opening - math.pi) < SMALL and kinds[j.pieces[0]] != kinds[j.pieces[1]]
            for j in shape.junctions
        ),
    }


def ill_posed_features(case: Case) -> dict[str, Feature]:
    """Return what can be said of a case without a solution."""
    problem = case.problem
    kinds = {piece.kind for piece in problem.pieces}
    return {
        "dimension": float(problem.dim),
        "shape": problem.shape.kind,
        "ill-posed problem": True,
        "Dirichlet condition": "dirichlet" in kinds,
        "Neumann condition": "neumann" in kinds,
        "Robin condition": "robin" in kinds,
        "piece without a condition": len(problem.pieces) < len(problem.shape.pieces),
    }


def _other_than_one(problem: Problem) -> bool:
    """Return whether the conductivity is anything but 1 everywhere."""
    if problem.interfaces:
        return True
    return not np.allclose(problem.tensor, np.eye(problem.dim), rtol=SMALL, atol=0.0)


def _jump(problem: Problem) -> float:
    """Return the largest over the smallest conductivity of the regions; 1 if there is only one."""
    values = [float(region.conductivity) for region in problem.regions if np.ndim(region.conductivity) == 0]
    return max(values) / min(values) if len(values) > 1 else 1.0


def _aspect(extents: Array) -> str | None:
    """Return the ratio of the extents in words; None in one dimension and for what has no end."""
    if len(extents) == 1 or not np.isfinite(extents).all():
        return None
    ratio = float(extents.max() / extents.min())
    if ratio < 1 + SMALL:
        return "1"
    below, above = STRETCHED
    if ratio < below:
        return f"below {below:g}"
    return f"{below:g} to {above:g}" if ratio < above else f"{above:g} or more"


def _places(piece: Piece) -> list[str]:
    """Return how a piece with data lies: curved, or at which end of an axis."""
    if not piece.has_data:
        return []
    words = f"{piece.kind.capitalize()} condition"
    if piece.curved:
        return [f"{words} on a curved piece"]
    _, normals, _ = piece.sample(1)
    along = normals[0][np.abs(normals[0]).argmax()]
    if abs(along) < 1 - SMALL:
        return [f"{words} on a side off the axes"]
    end = "high end of an axis (right, top)" if along > 0 else "low end of an axis (left, bottom)"
    return [f"{words} at the {end}"]


def _oblique(piece: Piece) -> bool:
    """Return whether a flat piece is parallel to no coordinate plane."""
    if piece.curved:
        return False
    _, normals, _ = piece.sample(1)
    return bool(np.abs(normals[0]).max() < 1 - SMALL)
