"""Checks of an answer against the problem it answers: dimension, number and place of points, cover, names.

On flat pieces a point may miss the shape by 1e-6 of its size. On curved pieces it may miss by h, as the cells
and grids that approximate a curve do, but only where a curved piece is the nearest one.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.errors import AnswerError, nearest_names
from laplace_verify.solvers.spacing import spacing

if TYPE_CHECKING:
    from laplace_verify.problems import Problem
    from laplace_verify.solvers.answer import Answer

FLAT_MISS = 1e-6  # of the shape's size
COVER = (0.4, 1.6)  # cells' volume / measure: outside this range they fill another shape
COVER_REMARK = 1e-6  # on flat shapes cells fill the shape exactly
WEIGHT_REMARK = 0.1


def check(answer: Answer, problem: Problem) -> None:
    """Raise AnswerError if the answer cannot belong to the problem."""
    dim = problem.dim
    if answer.points is not None:
        given = answer.points.shape[1]
        if given != dim:
            raise AnswerError(f"points must have {dim} coordinates each for this problem, got {given}")
        least = dim + 2
        number = len(answer.points)
        # A mesh of one cell is poor but complete; a cloud or a grid of so few points shows nothing.
        if number < least:
            raise AnswerError(
                f"points: too few points, at least {least} are needed in {dim}-D, got {number}; is n a "
                f"resolution "
                "number?"
            )
        missing = outside(answer, problem)
        if missing.any():
            row = int(np.flatnonzero(missing)[0])
            raise AnswerError(
                f"points must lie in the shape, but {int(missing.sum())} of {number} lie outside; "
                f"the first is points[{row}] = {answer.points[row].tolist()}"
            )
        _cover(answer, problem)
    names = [piece.name for piece in problem.pieces]
    for name in answer.fluxes or {}:
        if name not in names:
            raise AnswerError(
                f"fluxes: no piece of this problem is named {name!r}; {nearest_names(name, names)}"
            )


def outside(answer: Answer, problem: Problem) -> BoolArray:
    """Return which points lie outside the shape by more than they may."""
    if answer.points is None:
        raise AnswerError("points: this answer has none")
    shape = problem.shape
    missing: BoolArray = ~shape.contains(answer.points, FLAT_MISS)
    curved = [piece.curved for piece in shape.pieces]
    if missing.any() and any(curved):
        rows = np.flatnonzero(missing)
        far = answer.points[rows]
        reach = spacing(answer, problem).h
        distances = np.stack([_distance(far, piece.project(far)) for piece in shape.pieces])
        nearest = distances.argmin(axis=0)
        missing[rows] = ~(np.array(curved)[nearest] & (distances.min(axis=0) <= reach))
    return missing


def remarks(answer: Answer, problem: Problem) -> tuple[str, ...]:
    """Return what is odd about the answer without spoiling it."""
    found = []
    mesh = answer.mesh
    if mesh is not None:
        if mesh.unused:
            found.append(f"{mesh.unused} of {len(mesh.nodes)} nodes belong to no cell and are not judged")
        flat = not any(piece.curved for piece in problem.shape.pieces)
        cover = _ratio(float(mesh.volumes().sum()), problem)
        if flat and not abs(cover - 1) <= COVER_REMARK:
            found.append(f"the cells cover {cover:.6g} of the shape's measure")
        if answer.weights is not None:
            found.append("weights are not used: the cells integrate")
    elif answer.weights is not None:
        share = _ratio(float(answer.weights.sum()), problem)
        if problem.coordinates != "cartesian":  # weights are then measures of space
            points, weights = problem.shape.quadrature(4)
            share = float(answer.weights.sum()) / float(weights @ problem.metric(points))
        if not abs(share - 1) <= WEIGHT_REMARK:
            found.append(f"the weights add up to {share:.3g} of the shape's measure")
    return tuple(found)


def _cover(answer: Answer, problem: Problem) -> None:
    """Refuse cells that fill far too little or too much of the shape."""
    if answer.mesh is None or not np.isfinite(problem.shape.measure):
        return
    cover = _ratio(float(answer.mesh.volumes().sum()), problem)
    if not COVER[0] <= cover <= COVER[1]:
        raise AnswerError(f"cells must fill the shape once, but they cover {cover:.3g} of its measure")


def _ratio(total: float, problem: Problem) -> float:
    """Return total / measure, 1 for unbounded shapes."""
    measure = problem.shape.measure
    return total / measure if np.isfinite(measure) else 1.0


def _distance(a: Array, b: Array) -> Array:
    """Return the distances between matching points."""
    return np.asarray(np.linalg.norm(a - b, axis=1))
