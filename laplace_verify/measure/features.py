"""What is special about a case, in words, so that failing cases can be compared with passing ones."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.measure.results import Feature

if TYPE_CHECKING:
    from laplace_verify.measure.exact import Exact
    from laplace_verify.problems import Case, Piece, Problem

__all__ = ["features", "ill_posed_features"]

SAMPLED = 16  # points of a piece
SMALL = 1e-9
LARGE_JUMP = 10.0
CLOSE = 0.1  # of the shape's extent
STEP = 1e-3  # of the extent: step of the second derivative along the normal


def features(case: Case, exact: Exact) -> dict[str, Feature]:
    """Return name -> True, False, a number or a word."""
    problem, shape, regularity = case.problem, case.problem.shape, case.regularity
    kinds = {piece.name: piece.kind for piece in problem.pieces}
    used = set(kinds.values()) - {"axis", "periodic"}
    smooth = math.isinf(regularity.solution)
    lower, upper = shape.bounding_box
    tensor = isinstance(problem.conductivity, np.ndarray)
    found: dict[str, Feature] = {
        "dimension": float(shape.dim),
        "shape": shape.kind,
        "Dirichlet condition": "dirichlet" in kinds.values(),
        "Neumann condition": "neumann" in kinds.values(),
        "Robin condition": "robin" in kinds.values(),
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
        "interface off the axes": regularity.interface in ("oblique", "curved"),
        "interface that meets the boundary": any(len(piece.parts) > 1 for piece in problem.pieces),
        "conductivity jump of ten or more": _jump(problem) >= LARGE_JUMP,
        "curved boundary": any(piece.curved for piece in problem.pieces),
        "sides off the axes": any(_oblique(piece) for piece in problem.pieces),
        "unequal extents": not np.allclose(upper - lower, (upper - lower)[0], rtol=SMALL, atol=0.0),
        "corner of the box not at the origin": bool(np.any(np.abs(lower) > SMALL * shape.extent)),
        "re-entrant corner": any(j.opening > math.pi + SMALL for j in shape.junctions),
        "change of condition inside a side": any(
            abs(j.opening - math.pi) < SMALL and kinds[j.pieces[0]] != kinds[j.pieces[1]]
            for j in shape.junctions
        ),
        "jump in the boundary data": bool(len(regularity.jumps)),
        "singular solution": not smooth,
        "source close to the boundary": smooth and regularity.scale < CLOSE * shape.extent,
        "harmonic polynomial": None if exact.field.degree is None else float(exact.field.degree),
    }
    found |= _data_features(case, exact)
    found |= {f"{piece.kind} on {piece.name}": True for piece in problem.pieces if piece.kind != "axis"}
    found |= {f"tag {tag}": True for tag in sorted(case.tags)}
    return found


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


def _data_features(case: Case, exact: Exact) -> dict[str, Feature]:
    """Return what Neumann and Robin data do on their pieces."""
    flowing, bending, scaled = False, False, False
    for piece in case.problem.pieces:
        if piece.kind == "dirichlet" or not piece.has_data:
            continue
        points, normals, _ = piece.sample(SAMPLED)
        if piece.kind == "neumann":
            flowing |= bool(np.any(np.abs(piece.data(points)) > SMALL))
            bending |= _bends(points, normals, exact, case.problem.shape.extent)
        elif piece.kind == "robin":
            scaled |= bool(np.any(np.abs(piece.alpha(points) - 1.0) > SMALL))
    return {
        "nonzero Neumann data": flowing,
        "second normal derivative on a Neumann piece": bending,
        "Robin coefficient other than 1": scaled,
    }


def _bends(points: Array, normals: Array, exact: Exact, extent: float) -> bool:
    """Return whether d^2 u/dn^2 differs from zero: where it is zero a one-sided closure cannot be seen."""
    step = STEP * extent
    slopes = [
        (exact.gradients(points - k * step * normals) * normals).sum(axis=1) for k in (1.0, 2.0)
    ]  # inside, where the field holds
    change = np.abs(slopes[1] - slopes[0]) / STEP
    size = float(np.nanmax(np.abs(exact.gradients(points - step * normals)), initial=0.0))
    return bool(np.nanmax(change, initial=0.0) > 1e-6 * size)


def _other_than_one(problem: Problem) -> bool:
    """Return whether the conductivity is anything but 1 everywhere."""
    if problem.interfaces:
        return True
    return not np.allclose(problem.tensor, np.eye(problem.dim), rtol=SMALL, atol=0.0)


def _jump(problem: Problem) -> float:
    """Return the largest over the smallest conductivity of the regions; 1 if there is only one."""
    values = [float(region.conductivity) for region in problem.regions if np.ndim(region.conductivity) == 0]
    return max(values) / min(values) if len(values) > 1 else 1.0


def _oblique(piece: Piece) -> bool:
    """Return whether a flat piece is parallel to no coordinate plane."""
    if piece.curved:
        return False
    _, normals, _ = piece.sample(1)
    return bool(np.abs(normals[0]).max() < 1 - SMALL)
