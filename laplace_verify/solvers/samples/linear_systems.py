"""Sparse symmetric systems, solved directly or by conjugate gradients.

A problem with derivative conditions only leaves the constant free: the matrix maps constants to zero, and
data that balance only up to the discretisation error have no solution. With w the measure that each unknown
owns, the bordered system

    A u + w m = b,    w' u = 0

has one: u has mean zero, and m spreads what the data lack evenly over the domain.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import TypeAlias

import numpy as np
import scipy.sparse as sp
from scipy.sparse.linalg import cg, splu

from laplace_verify.arrays import Array
from laplace_verify.errors import AnswerError

__all__ = ["LinearSolver", "conjugate_gradients", "direct"]

LinearSolver: TypeAlias = Callable[[sp.csc_array, Array, Array | None], tuple[Array, int | None]]

RTOL = 1e-12  # of the residual; the discretisation error stays far above it
MOST = 10_000


def direct(matrix: sp.csc_array, load: Array, weights: Array | None) -> tuple[Array, int | None]:
    """Return the solution by LU factors; with `weights` the one of mean zero of the bordered system."""
    if not len(load):
        return load, None
    if weights is None:
        return splu(matrix).solve(load), None
    column = sp.csc_array(weights[:, np.newaxis])
    bordered = sp.block_array([[matrix, column], [column.T, None]], format="csc")
    return splu(bordered).solve(np.append(load, 0.0))[:-1], None


def conjugate_gradients(matrix: sp.csc_array, load: Array, weights: Array | None) -> tuple[Array, int | None]:
    """Return the solution by conjugate gradients, scaled by the diagonal, and the number of iterations.

    With `weights` the load is first brought into balance; the iteration then stays orthogonal to constants.

    Raises
    ------
    AnswerError
        If the iteration does not converge.
    """
    if not len(load):
        return load, 0
    if weights is not None:
        load = load - weights * (np.sum(load) / np.sum(weights))
    steps: list[None] = []
    scaling = sp.diags_array(1.0 / matrix.diagonal())
    solution, failed = cg(
        matrix, load, rtol=RTOL, atol=0.0, maxiter=MOST, M=scaling, callback=lambda _: steps.append(None)
    )
    if failed:
        raise AnswerError(f"conjugate gradients did not reach the relative residual {RTOL} in {MOST} steps")
    if weights is not None:
        solution = solution - (weights @ solution) / np.sum(weights)
    return solution, len(steps)
