"""Coding mistakes in finite differences in space: what a third axis adds to those in the plane."""

from __future__ import annotations

import numpy as np

from laplace_verify.arrays import Array, IntArray
from laplace_verify.problems import Problem
from laplace_verify.solvers.samples.finite_difference import (
    IN_SPACE,
    Equations,
    Side,
    cell_material,
    seven_point,
    solve_on_grid,
)
from laplace_verify.solvers.samples.rectilinear import Grid
from laplace_verify.solvers.samples.seeding import Seeds

__all__ = ["SPACE_FAULTS"]

SEEDS = Seeds(sample=seven_point, solve=solve_on_grid, scheme=IN_SPACE)
SPACE_FAULTS = SEEDS.faults

WITH_FLUX = ("box-flux", "box-metered-top")
FLUX = ("Neumann condition", "Neumann data", "neumann on", "Neumann piece")
FRONT = ("neumann on front", "Neumann condition at the low end", "nonzero data on the first Neumann piece")


@SEEDS.into(
    "neumann",
    "space: edge for face",
    "flux multiplied by the length of an edge instead of the area of a face",
    kind="half-cell factor",
    suspects=FLUX,
    shown_by=WITH_FLUX,
)
def flux_through_edges(equations: Equations, side: Side) -> None:
    """Keep the formula of the plane: the cells' size along one axis of the side only."""
    nodes, _ = side.grid.shares(side.patch)
    across = 0 if side.patch.axis else 1
    equations.load[nodes] += side.inflow() / side.grid.widths[side.patch.cells[0], across]


@SEEDS.into(
    "neumann",
    "space: normal of the front",
    "the front takes the flux along +y for that along its outward normal -y",
    kind="normal orientation",
    suspects=(*FRONT, *FLUX),
    shown_by=("box-flux", "box-pure-flux"),
)
def front_reversed(equations: Equations, side: Side) -> None:
    """Handle the pair of sides that the plane does not have without the sign of its first one."""
    nodes, _ = side.grid.shares(side.patch)
    front = side.patch.axis == 1 and side.patch.side == 0
    equations.load[nodes] += side.inflow() * (-1.0 if front else 1.0)


@SEEDS.into(
    "material",
    "space: conductivities along y and z exchanged",
    "K_yy and K_zz exchanged when the tensor is read; invisible for equal ones",
    kind="exchanged axes",
    suspects=("tensor conductivity", "off-diagonal conductivity"),
    shown_by=("box-tensor-diagonal", "box-tensor-oblique"),
)
def exchanged_material(problem: Problem, grid: Grid) -> tuple[Array, dict[str, IntArray]]:
    """Read rows and columns in the order x, z, y."""
    tensor, regions = cell_material(problem, grid)
    order = np.array([0, 2, 1])
    return (tensor if tensor.ndim == 1 else tensor[np.ix_(order, order)]), regions
