"""Answers to several problems on one shape, looked at in the same points."""

from __future__ import annotations

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.principles.law import Trial
from laplace_verify.principles.limits import Measurement
from laplace_verify.principles.reading import deep_points, places, values_at

__all__ = ["largest", "together"]


def together(trial: Trial, size: int) -> tuple[Array, Array, dict[str, Array]]:
    """Return points (m, d), the values of a trial there, and those of the trials beside it by name.

    If all have values at the same nodes these are the points, else points well inside the shape.
    """
    inside = deep_points(trial.problem.shape, trial.seed)
    answer = trial.answer(size, inside)
    others = {name: other.answer(size, inside) for name, other in trial.companions.items()}
    if answer.values is not None:
        nodes = places(answer)
        values = {
            name: other.values
            for name, other in others.items()
            if other.values is not None and np.array_equal(places(other), nodes)
        }
        if len(values) == len(others):
            return nodes, answer.values, values
    beside = {name: values_at(other, size, inside) for name, other in trial.companions.items()}
    return inside, values_at(trial, size, inside), beside


def largest(
    points: Array, gap: Array, unit: float, says: str, code: str, data: dict[str, Array]
) -> Measurement:
    """Return the largest of the gaps (m,) as a measurement.

    `says` is a format for the words, with the place and every entry of `data` (m,) at the worst point;
    `code` an expression for the gap in which `x` is that point.
    """
    worst = int(np.argmax(gap))
    place = tuple(round(c, 6) for c in points[worst].tolist())
    numbers = {name: f"{values[worst]:.6g}" for name, values in data.items()}
    return Measurement(
        violation=max(float(gap[worst]), 0.0) / unit,
        points=points[worst : worst + 1],
        words=says.format(place=place, **numbers),
        body=(f"x = {[tuple(points[worst].tolist())]}", f"({code}) / {unit!r}"),
    )
