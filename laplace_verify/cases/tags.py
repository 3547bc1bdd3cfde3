"""Tags that follow from the mathematics of a case, so that they cannot contradict it."""

from __future__ import annotations

import math

import numpy as np

from laplace_verify.geometry import Shape
from laplace_verify.problems import Case

__all__ = ["derived_tags"]

NEAR = 0.1  # a source nearer than this share of the shape's extent is near
SLENDER = 8.0  # ratio of the extents from which a shape is slender
STRAIGHT = 1e-9


def derived_tags(case: Case) -> frozenset[str]:
    """Return the tags that are facts about a case.

    "smooth" or "singular", "jump"; "dirichlet" ... for each kind of condition, "mixed" for several,
    "pure-neumann"; "axisymmetric" (in r, z), "radial" (in r), "regions", "tensor", "curved", "re-entrant",
    "condition-change" (inside a smooth piece), "slit", "hole", "near-source", "high-aspect", "unbounded". An
    "ill-posed" case has the tags of its shape and conditions only.

    >>> from laplace_verify import fields
    >>> from laplace_verify.geometry import LShape
    >>> from laplace_verify.problems import case
    >>> sorted(derived_tags(case(LShape(1), {}, fields.wedge("2/3"))))
    ['dirichlet', 're-entrant', 'singular']
    """
    regularity, kinds = case.regularity, case.conditions
    shape = case.problem.shape
    if case.problem.ill_posed is not None:
        return frozenset(kinds) | shape_tags(shape) | {"ill-posed"}
    smooth = math.isinf(regularity.solution)
    facts = {
        "smooth": smooth,
        "singular": not smooth,
        "jump": len(regularity.jumps) > 0,
        "mixed": len(kinds - {"periodic"}) > 1,
        "pure-neumann": case.problem.constant is not None,
        "axisymmetric": case.problem.coordinates == "axisymmetric",
        "radial": case.problem.coordinates in ("radial-cylinder", "radial-sphere"),
        "regions": bool(case.problem.interfaces),
        "tensor": isinstance(case.problem.conductivity, np.ndarray),
        "curved": any(piece.curved for piece in case.problem.pieces),
        "condition-change": _changes(case),
        "near-source": _near_source(case),
        "unbounded": not shape.bounded,
    }
    return frozenset(kinds) | shape_tags(shape) | {tag for tag, true in facts.items() if true}


def shape_tags(shape: Shape) -> frozenset[str]:
    """Return the tags that are facts about a shape alone."""
    lower, upper = shape.bounding_box
    extents = upper - lower if shape.bounded else np.ones(shape.dim)
    openings = [junction.opening for junction in shape.junctions]
    facts = {
        "re-entrant": any(opening > math.pi + STRAIGHT for opening in openings),
        "slit": any(opening > 2 * math.pi - STRAIGHT for opening in openings),
        "hole": any(name == "inner" or name.startswith("hole-") for name in shape.pieces.names),
        "high-aspect": shape.bounded and bool(extents.max() > SLENDER * extents.min()),
    }
    return frozenset(tag for tag, true in facts.items() if true)


def _changes(case: Case) -> bool:
    """Return whether the kind of condition changes where the boundary is smooth."""
    kinds = {piece.name: piece.kind for piece in case.problem.pieces}
    return any(
        abs(junction.opening - math.pi) < STRAIGHT and kinds[junction.pieces[0]] != kinds[junction.pieces[1]]
        for junction in case.problem.shape.junctions
    )


def _near_source(case: Case) -> bool:
    """Return whether the solution is singular outside the shape but near it."""
    shape = case.problem.shape
    outside = [s.point for s in case.exact.singularities if s.kind in ("log", "pole")]
    if not outside:
        return False
    return bool(shape.distance(np.array(outside)).min() < NEAR * shape.extent)
