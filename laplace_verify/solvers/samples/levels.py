"""The constant that a pure flux problem leaves free, as the problem asks for it."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.problems import Problem

__all__ = ["level_shift"]


def level_shift(problem: Problem, mean: float, value_at: Callable[[Array], Array]) -> float:
    """Return what to add to a solution with this mean to give it the level of ``problem.constant``.

    ("mean", v): mean v over the shape; ("point", x, v): value v at x; None: mean zero.
    """
    asked = problem.constant
    if asked is None:
        return -mean
    if asked[0] == "mean":
        return float(asked[1]) - mean
    point = np.asarray(asked[1], dtype=np.float64).reshape(1, problem.dim)
    return float(asked[2]) - float(value_at(point)[0])
