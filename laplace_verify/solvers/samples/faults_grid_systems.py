"""Coding mistakes in solving the equations of finite differences: free constant, iteration, precision."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import scipy.sparse as sp
from scipy.sparse.linalg import cg, splu

from laplace_verify.arrays import Array
from laplace_verify.problems import Problem
from laplace_verify.solvers.samples.finite_difference import SCHEME, five_point, solve_on_grid
from laplace_verify.solvers.samples.linear_systems import conjugate_gradients, direct
from laplace_verify.solvers.samples.seeding import Seeds

__all__ = ["SYSTEM_FAULTS"]

SEEDS = Seeds(sample=five_point, solve=solve_on_grid, scheme=SCHEME)
SYSTEM_FAULTS = SEEDS.faults

FIXED = ("plate-saddle", "plate-cubic", "plate-wave")
PURE_FLUX = ("plate-pure-flux", "plate-periodic-pure-flux")
LEVEL_FREE = ("pure Neumann problem",)
STOPPED = ("do not get smaller errors", "does not get smaller errors", "iteration")

LOOSE = 1e-3
SETTLED = 1e-5
CAP = 40
SHIFT = 1e-2
SWEEPS = 100_000


# ---- the free constant ---------------------------------------------------------------------------


@SEEDS.into(
    "solve",
    "pinned twice",
    "the free constant of pure flux problems removed by holding two nodes at zero instead of one",
    kind="null space",
    suspects=LEVEL_FREE,
    shown_by=("rod-pure-flux", *PURE_FLUX, "pipe-pure-flux"),
)
def pinned_twice(matrix: sp.csc_array, load: Array, weights: Array | None) -> tuple[Array, int | None]:
    """Hold the first and the last unknown at zero."""
    if weights is None:
        return direct(matrix, load, None)
    values = np.zeros(len(load))
    values[1:-1], _ = direct(matrix[1:-1][:, 1:-1], load[1:-1], None)
    return values, None


@SEEDS.into(
    "solve",
    "pinned with unbalanced data",
    "one node held at zero in pure flux problems; what the data lack, O(h^2), all enters there",
    kind="null space",
    suspects=(),
    shown_by=("rod-pure-flux", *PURE_FLUX, "pipe-pure-flux"),
    effect="harmless",
)
def pinned_once(matrix: sp.csc_array, load: Array, weights: Array | None) -> tuple[Array, int | None]:
    """Hold the first unknown at zero."""
    if weights is None:
        return direct(matrix, load, None)
    values = np.zeros(len(load))
    values[1:], _ = direct(matrix[1:][:, 1:], load[1:], None)
    return values, None


@SEEDS.into(
    "solve",
    "regularised",
    f"pure flux problems made solvable by the term {SHIFT:g} u, which stays in",
    kind="null space",
    suspects=LEVEL_FREE,
    shown_by=("rod-pure-flux", "plate-pure-flux", "pipe-pure-flux"),
    effect="accuracy",
)
def regularised(matrix: sp.csc_array, load: Array, weights: Array | None) -> tuple[Array, int | None]:
    """Add a small multiple of the unit operator."""
    if weights is None:
        return direct(matrix, load, None)
    return direct((matrix + SHIFT * sp.diags_array(weights)).tocsc(), load, None)


@SEEDS.into(
    "level",
    "level not restored",
    "answers of pure flux problems stay at mean zero, whatever level is asked for",
    kind="null space",
    suspects=LEVEL_FREE,
    shown_by=("rod-pure-flux", *PURE_FLUX),
)
def no_level(problem: Problem, mean: float, value_at: Callable[[Array], Array]) -> float:
    """Return the shift to mean zero."""
    del problem, value_at
    return -mean


@SEEDS.into(
    "solve",
    "balanced, then pinned",
    "data of pure flux problems brought into balance, then one node held: the constant removed another way",
    kind="null space",
    suspects=(),
    shown_by=("rod-pure-flux", *PURE_FLUX, "pipe-pure-flux"),
    effect="harmless",
)
def balanced_then_pinned(
    matrix: sp.csc_array, load: Array, weights: Array | None
) -> tuple[Array, int | None]:
    """Spread what the data lack evenly, hold the first unknown, and shift to mean zero."""
    if weights is None:
        return direct(matrix, load, None)
    load = load - weights * (np.sum(load) / np.sum(weights))
    values, _ = pinned_once(matrix, load, weights)
    return values - float(np.average(values, weights=weights)), None


# ---- iterations ----------------------------------------------------------------------------------


@SEEDS.into(
    "solve",
    "loose tolerance",
    f"conjugate gradients stop at a relative residual of {LOOSE:g}, whatever the grid",
    kind="early stopping",
    suspects=STOPPED,
    shown_by=("plate-saddle", "plate-wave", "plate-flux-top", "wall-mixed-conditions"),
    effect="accuracy",
)
def loose(matrix: sp.csc_array, load: Array, weights: Array | None) -> tuple[Array, int | None]:
    """Iterate until the residual has fallen by the same factor on every grid."""
    if weights is not None or not len(load):
        return direct(matrix, load, weights)
    return cg(matrix, load, rtol=LOOSE, atol=0.0)[0], None


@SEEDS.into(
    "solve",
    "increment instead of residual",
    f"Jacobi's iteration stops when values change by less than {SETTLED:g}, far from the solution",
    kind="early stopping",
    suspects=STOPPED,
    shown_by=("plate-saddle", "plate-wave", "plate-flux-top", "wall-mixed-conditions"),
    effect="accuracy",
)
def settled(matrix: sp.csc_array, load: Array, weights: Array | None) -> tuple[Array, int | None]:
    """Judge convergence by the increment, which is smaller than the error by the factor 1 - rho = O(h^2)."""
    if weights is not None or not len(load):
        return direct(matrix, load, weights)
    step, values = 0.8 / matrix.diagonal(), np.zeros(len(load))
    sweeps = 0
    while sweeps < SWEEPS:
        sweeps += 1
        increment = step * (load - matrix @ values)
        values = values + increment
        if np.max(np.abs(increment)) <= SETTLED * np.max(np.abs(values)):
            break
    return values, sweeps


@SEEDS.into(
    "solve",
    "cap on iterations",
    f"conjugate gradients end after {CAP} steps without a word",
    kind="early stopping",
    suspects=STOPPED,
    shown_by=("plate-saddle", "plate-wave", "plate-flux-top", "plate-degree-eleven"),
)
def capped(matrix: sp.csc_array, load: Array, weights: Array | None) -> tuple[Array, int | None]:
    """Ignore that the iteration has not converged."""
    if weights is not None or not len(load):
        return direct(matrix, load, weights)
    return cg(matrix, load, rtol=1e-12, atol=0.0, maxiter=CAP)[0], CAP


@SEEDS.into(
    "solve",
    "conjugate gradients in the plane",
    "the system solved by conjugate gradients to a relative residual of 1e-12 instead of LU factors",
    kind="linear solver",
    suspects=(),
    shown_by=("plate-saddle", "plate-pure-flux", "wall-mixed-conditions", "plate-layers-across"),
    effect="harmless",
)
def iterated(matrix: sp.csc_array, load: Array, weights: Array | None) -> tuple[Array, int | None]:
    """Iterate where the matrix is symmetric (corner rows of skew tensors are not), else factorise."""
    skew = abs(matrix - matrix.T).max() > 1e-12 * abs(matrix).max() if len(load) else True
    return direct(matrix, load, weights) if skew else conjugate_gradients(matrix, load, weights)


@SEEDS.into(
    "solve",
    "red and black unknowns",
    "unknowns numbered odd ones first, then even ones",
    kind="linear solver",
    suspects=(),
    shown_by=("plate-saddle", "plate-pure-flux", "wall-mixed-conditions"),
    effect="harmless",
)
def red_black(matrix: sp.csc_array, load: Array, weights: Array | None) -> tuple[Array, int | None]:
    """Solve in another order and put the unknowns back into place."""
    order = np.concatenate([np.arange(1, len(load), 2), np.arange(0, len(load), 2)])
    values = np.empty(len(load))
    values[order], _ = direct(
        matrix[order][:, order], load[order], None if weights is None else weights[order]
    )
    return values, None


@SEEDS.into(
    "solve",
    "equations scaled",
    "every equation divided by its diagonal entry",
    kind="linear solver",
    suspects=(),
    shown_by=("plate-saddle", "plate-tensor-oblique", "wall-mixed-conditions"),
    effect="harmless",
)
def scaled(matrix: sp.csc_array, load: Array, weights: Array | None) -> tuple[Array, int | None]:
    """Scale rows; the bordered system of a free constant keeps its own."""
    if weights is not None:
        return direct(matrix, load, weights)
    inverse = 1.0 / matrix.diagonal()
    return direct((sp.diags_array(inverse) @ matrix).tocsc(), inverse * load, None)


# ---- precision -----------------------------------------------------------------------------------


@SEEDS.into(
    "solve",
    "factors in single precision",
    "matrix and right-hand side stored in 32 bits before they are factorised",
    kind="reduced precision",
    suspects=("single precision", "harmonic polynomial", "exactness"),
    shown_by=("plate-affine", "rod-two-temperatures", "plate-layers-across", "rod-pure-flux"),
    effect="accuracy",
)
def in_single_precision(matrix: sp.csc_array, load: Array, weights: Array | None) -> tuple[Array, int | None]:
    """Factorise numbers of 32 bits."""
    if weights is not None or not len(load):
        values, _ = direct(matrix, load, weights)
        return values.astype(np.float32).astype(np.float64), None
    return splu(matrix.astype(np.float32)).solve(load.astype(np.float32)).astype(np.float64), None
