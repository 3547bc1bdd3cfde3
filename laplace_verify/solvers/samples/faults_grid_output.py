"""Coding mistakes in what finite differences hand back: values between nodes, gradients, fluxes."""

from __future__ import annotations

from typing import Any

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.samples.faults_grid_fluxes import conductivity_at, neighbours
from laplace_verify.solvers.samples.finite_difference import (
    SCHEME,
    Side,
    balanced_fluxes,
    five_point,
    nodal_answer,
    solve_on_grid,
)
from laplace_verify.solvers.samples.rectilinear import Grid
from laplace_verify.solvers.samples.seeding import Seeds

__all__ = ["OUTPUT_FAULTS"]

SEEDS = Seeds(sample=five_point, solve=solve_on_grid, scheme=SCHEME)
OUTPUT_FAULTS = SEEDS.faults

FIXED = ("plate-saddle", "plate-cubic", "plate-wave")
EVERYWHERE = ("dimension", "shape", "lose one order", "loses one order", "Dirichlet")
WRONG_LIMIT = ("dimension", "shape", "do not get smaller errors", "does not get smaller errors")
IN_FLUX = ("fall short in gradient or flux only", "falls short in gradient or flux only", "flux")
ABOUT_PI = 3.1416


@SEEDS.into(
    "answer",
    "value of the nearest node",
    "values between nodes are those of the nearest node; the nodal values are right",
    kind="evaluation",
    suspects=EVERYWHERE,
    shown_by=(*FIXED, "plate-flux-top"),
)
def nearest_answer(grid: Grid, values: Array, **facts: Any) -> Answer:
    """Evaluate by rounding to the nearest node."""
    nodal = nodal_answer(grid, values, **facts)

    def nearest(points: Array) -> Array:
        rounded = np.empty_like(points)
        for axis, line in enumerate(grid.axes):
            upper = np.clip(np.searchsorted(line, points[:, axis]), 1, len(line) - 1)
            near = points[:, axis] - line[upper - 1] < line[upper] - points[:, axis]
            rounded[:, axis] = np.where(near, line[upper - 1], line[upper])
        return nodal.value_at(rounded)

    return Answer(grid.points, values, evaluate=nearest, **facts)


@SEEDS.into(
    "answer",
    "constant next to the boundary",
    "values between the boundary and the first inner nodes are those of the inner nodes: the stencil of the "
    "interpolation is not shifted there",
    kind="evaluation",
    suspects=(*EVERYWHERE, "boundary"),
    shown_by=(*FIXED, "plate-flux-top"),
)
def clamped_answer(grid: Grid, values: Array, **facts: Any) -> Answer:
    """Evaluate at points moved away from the boundary by a cell."""
    low = np.array([line[1] for line in grid.axes])
    high = np.array([line[-2] for line in grid.axes])
    nodal = nodal_answer(grid, values, **facts)

    def clamped(points: Array) -> Array:
        return nodal.value_at(np.clip(points, low, high))

    return Answer(grid.points, values, evaluate=clamped, **facts)


@SEEDS.into(
    "answer",
    "output exchanged",
    "the array of values written with x and y exchanged; hidden by solutions that are symmetric on a square",
    kind="exchanged axes",
    suspects=WRONG_LIMIT,
    shown_by=(*FIXED, "plate-flux-top"),
)
def transposed_answer(grid: Grid, values: Array, **facts: Any) -> Answer:
    """Transpose the array of values where it is square."""
    lengths = [len(line) for line in grid.axes]
    if grid.dim == 2 and lengths[0] == lengths[1] and len(values) == lengths[0] ** 2:
        values = values.reshape(lengths).T.ravel()
    return nodal_answer(grid, values, **facts)


@SEEDS.into(
    "answer",
    "corners filled by means",
    "corner nodes, which no five-point equation needs, handed back as the mean of their two neighbours",
    kind="corner node",
    suspects=(*EVERYWHERE, "corner"),
    shown_by=("plate-cubic", "plate-wave", "plate-flux-top", "wall-mixed-conditions"),
)
def filled_corners(grid: Grid, values: Array, **facts: Any) -> Answer:
    """Fill the corners of a plate."""
    if grid.dim != 2:
        return nodal_answer(grid, values, **facts)
    values = values.copy()
    meeting = np.bincount(grid.corners.ravel(), minlength=len(values))
    for corner in np.flatnonzero(meeting == 1):
        cell = grid.corners[(grid.corners == corner).any(axis=1)][0]
        place = int(np.flatnonzero(cell == corner)[0])
        values[corner] = (values[cell[place ^ 1]] + values[cell[place ^ 2]]) / 2.0
    return nodal_answer(grid, values, **facts)


@SEEDS.into(
    "answer",
    "coordinates off by one",
    "coordinates of the nodes written as i L / (n + 1), by the number of nodes instead of cells",
    kind="off by one",
    suspects=EVERYWHERE,
    shown_by=(*FIXED, "rod-two-temperatures"),
)
def shrunk_answer(grid: Grid, values: Array, **facts: Any) -> Answer:
    """Hand back coordinates that end a little before the far sides; evaluated at those, constant beyond."""
    lower = np.array([line[0] for line in grid.axes])
    scale = np.array([1.0 + 1.0 / (len(line) - 1) for line in grid.axes])
    upper = np.array([line[-1] for line in grid.axes])
    nodal = nodal_answer(grid, values, **facts)

    def misplaced(points: Array) -> Array:
        moved = nodal.value_at(np.minimum(lower + (points - lower) * scale, upper))
        return np.where(np.isnan(moved), nodal.value_at(points), moved)  # in a notch there is nothing

    return Answer(grid.points, values, evaluate=misplaced, **facts)


@SEEDS.into(
    "answer",
    "gradient halved",
    "reported gradient divided by 2 h where the difference spans h",
    kind="gradient recovery",
    suspects=IN_FLUX,
    shown_by=("plate-flux-top", "plate-saddle"),
)
def halved_gradient(grid: Grid, values: Array, **facts: Any) -> Answer:
    """Report half the gradient of the interpolant."""
    nodal = nodal_answer(grid, values, **facts)

    def halved(points: Array) -> Array:
        found: Array = 0.5 * np.asarray(nodal.gradient_at(points))
        return found

    return nodal_answer(grid, values, gradient=halved, **facts)


@SEEDS.into(
    "answer",
    "gradient exchanged",
    "components of the reported gradient exchanged",
    kind="exchanged axes",
    suspects=IN_FLUX,
    shown_by=("plate-flux-top", "half-of-a-dam"),
)
def exchanged_gradient(grid: Grid, values: Array, **facts: Any) -> Answer:
    """Report (u_y, u_x)."""
    nodal = nodal_answer(grid, values, **facts)

    def exchanged(points: Array) -> Array:
        return np.asarray(nodal.gradient_at(points))[:, ::-1]

    return nodal_answer(grid, values, gradient=exchanged, **facts)


@SEEDS.into(
    "answer",
    "values in single precision",
    "values kept in an array of 32 bits before they are handed back",
    kind="reduced precision",
    suspects=("single precision", "harmonic polynomial", "exactness"),
    shown_by=("plate-affine", "rod-two-temperatures", "plate-layers-across"),
    effect="accuracy",
)
def single_answer(grid: Grid, values: Array, **facts: Any) -> Answer:
    """Round to 32 bits."""
    return nodal_answer(grid, values.astype(np.float32).astype(np.float64), **facts)


# ---- fluxes --------------------------------------------------------------------------------------


@SEEDS.into(
    "fluxes",
    "reported fluxes of low sides",
    "fluxes through left and bottom reported along +x and +y instead of the outward normal",
    kind="normal orientation",
    suspects=IN_FLUX,
    shown_by=("plate-flux-top", "plate-wave", "rod-two-temperatures"),
)
def fluxes_along_axes(grid: Grid, sides: list[Side], values: Array) -> dict[str, float]:
    """Change the sign on the low sides."""
    found = balanced_fluxes(grid, sides, values)
    low = {side.name for side in sides if side.patch.side == 0}
    return {name: -flux if name in low else flux for name, flux in found.items()}


@SEEDS.into(
    "fluxes",
    "reported fluxes one-sided",
    "fluxes reported by one-sided differences, one order below the balance of the boundary cells",
    kind="gradient recovery",
    suspects=IN_FLUX,
    shown_by=("plate-flux-top", "plate-wave", "plate-saddle"),
)
def one_sided_fluxes(grid: Grid, sides: list[Side], values: Array) -> dict[str, float]:
    """Sum K (u_b - u_in) / h over the boundary nodes."""
    found = balanced_fluxes(grid, sides, values)
    for side in sides:
        if side.name in found:
            found[side.name] = steep(grid, side, values)
    return found


def steep(grid: Grid, side: Side, values: Array) -> float:
    """Return the flux through a side by differences along the normal."""
    nodes, areas = grid.shares(side.patch)
    inner = neighbours(side, nodes, side.patch.axis, -1 if side.patch.side else 1)
    width = np.abs(grid.points[nodes, side.patch.axis] - grid.points[inner, side.patch.axis])
    conductivity = float(np.mean(conductivity_at(side, side.patch.axis)))
    return float(np.sum(areas * conductivity * (values[nodes] - values[inner]) / width))


@SEEDS.into(
    "fluxes",
    "reported fluxes without conductivity",
    "reported fluxes are those of the gradient; invisible where K = 1",
    kind="flux or gradient",
    suspects=(*IN_FLUX, "conductivity other than 1"),
    shown_by=("plate-flux-top", "plate-wave", "rod-two-temperatures"),
)
def fluxes_of_the_gradient(grid: Grid, sides: list[Side], values: Array) -> dict[str, float]:
    """Divide by the conductivity."""
    found = balanced_fluxes(grid, sides, values)
    for side in sides:
        if side.name in found:
            found[side.name] /= float(np.mean(conductivity_at(side, side.patch.axis)))
    return found


@SEEDS.into(
    "fluxes",
    "pi with four decimals",
    "the constant 3.1416 in the area of rings and shells: fluxes stop converging at 2e-6",
    kind="reduced precision",
    suspects=(*IN_FLUX, "coordinates with a symmetry"),
    shown_by=(
        "pipe-thick-wall-flux",
        "tank-wall-flux-and-convection",
        "pipe-pure-flux",
        "sleeve-section-mixed",
    ),
    effect="accuracy",
)
def fluxes_with_short_pi(grid: Grid, sides: list[Side], values: Array) -> dict[str, float]:
    """Multiply by 3.1416 / pi in coordinates with a symmetry."""
    found = balanced_fluxes(grid, sides, values)
    scale = 1.0 if grid.coordinates == "cartesian" else ABOUT_PI / np.pi
    return {name: scale * flux for name, flux in found.items()}
