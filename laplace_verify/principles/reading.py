"""Where an answer is looked at, and with what values."""

from __future__ import annotations

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.errors import AnswerError
from laplace_verify.geometry import Shape
from laplace_verify.principles.law import NoValuesError, Trial
from laplace_verify.solvers import Answer

__all__ = ["deep_points", "gradients_at", "inside_points", "places", "seen", "told", "values_at"]

INSIDE, ON_PIECE = 300, 40  # points at which a function is asked
WANTED, DEEP = 200, 100


def inside_points(shape: Shape, seed: int) -> Array:
    """Return 200 seeded points (m, d) inside a shape, to be asked for before a solver begins."""
    return shape.sample(INSIDE, seed=seed)[:WANTED]


def deep_points(shape: Shape, seed: int) -> Array:
    """Return 100 points (m, d) well inside a shape: the deepest of 300 seeded ones."""
    drawn = shape.sample(INSIDE, seed=seed)
    deepest: Array = drawn[np.argsort(-shape.distance(drawn), kind="stable")[:DEEP]]
    return deepest


def places(answer: Answer) -> Array:
    """Return the points (n, d) of an answer's values (n,): nodes, or the centres of its cells.

    Raises
    ------
    NoValuesError
        If the answer is a function.
    """
    if answer.mesh is not None and answer.location == "cell":
        return answer.mesh.centroids()
    if answer.points is None:
        raise NoValuesError("a function has no nodes")
    return answer.points


def seen(trial: Trial, size: int) -> tuple[Array, Array]:
    """Return points (m, d) and values (m,) that speak for the whole answer of one size.

    Nodes, with `cells` also a random point in each, or centres of cells; of a function seeded points inside
    and on every piece. Points nearer to the boundary than the declared clearance are left out, and so is NaN
    within h of a curved piece, which means "outside my mesh".

    Raises
    ------
    AnswerError
        If a function returns NaN anywhere else.
    """
    shape = trial.problem.shape
    inside = shape.sample(INSIDE, seed=trial.seed)
    answer = trial.answer(size, inside_points(shape, trial.seed))
    if answer.kind == "callable":
        points = np.concatenate([inside, *(piece.sample(ON_PIECE)[0] for piece in trial.problem.pieces)])
        values = answer.value_at(points)
        points, values = _without_outside(trial, size, points, values)
    else:
        points, values = places(answer), np.asarray(answer.values)
        if answer.kind == "cells" and answer.location == "point":
            sample = answer.random_points(trial.seed)
            points, values = np.concatenate([points, sample.points]), np.concatenate([values, sample.values])
    if trial.solver.clearance > 0.0:
        clear = shape.distance(points) >= trial.solver.clearance * shape.extent
        points, values = points[clear], values[clear]
    if not len(values):
        raise AnswerError(
            "no value is left to look at: every point is nearer to the boundary than the clearance"
        )
    return points, values


def told(point: Array) -> tuple[float, ...]:
    """Return a point (d,) as it is told in a sentence: six decimals, no minus before a zero.

    >>> told(np.array([1 / 3, -1e-9]))
    (0.333333, 0.0)
    """
    place: tuple[float, ...] = tuple((np.round(point, 6) + 0.0).tolist())
    return place


def values_at(trial: Trial, size: int, points: Array) -> Array:
    """Return the values of one answer at points (m, d) well inside the shape.

    Raises
    ------
    NoValuesError
        If the answer is a bare cloud without these points.
    AnswerError
        If a function or the cells give NaN there.
    """
    answer = trial.answer(size, points)
    values = answer.value_at(points)
    missing = np.flatnonzero(np.isnan(values))
    if len(missing):
        if answer.kind == "cloud":
            raise NoValuesError("values between nodes are not available")
        raise AnswerError(f"the value at {tuple(points[missing[0]].tolist())}, inside the shape, is NaN")
    return values


def gradients_at(trial: Trial, size: int, points: Array) -> Array:
    """Return the gradients (m, d) of one answer at points (m, d) well inside the shape.

    Raises
    ------
    NoValuesError
        If the answer has no gradient.
    AnswerError
        If it is NaN there.
    """
    gradients = trial.answer(size, points).gradient_at(points)
    if gradients is None:
        raise NoValuesError("the answer has no gradient")
    missing = np.flatnonzero(np.isnan(gradients).any(axis=1))
    if len(missing):
        raise AnswerError(f"the gradient at {tuple(points[missing[0]].tolist())}, inside the shape, is NaN")
    return gradients


def _without_outside(trial: Trial, size: int, points: Array, values: Array) -> tuple[Array, Array]:
    """Drop NaN within h of a curved piece; refuse it elsewhere."""
    missing = np.isnan(values)
    if missing.any():
        h = trial.spacing(size)
        distance = np.full(len(points), np.inf)
        for piece in trial.problem.pieces:
            if piece.curved:
                offset = points - piece.project(points)
                distance = np.minimum(distance, np.sqrt((offset**2).sum(axis=1)))
        wrong = np.flatnonzero(missing & ~(distance <= h))
        if len(wrong):
            raise AnswerError(
                f"evaluate returned NaN at {tuple(points[wrong[0]].tolist())}, which is inside the shape; "
                f"NaN is for points within h of a curved piece"
            )
    return points[~missing], values[~missing]
