"""Coding mistakes in the Dirichlet and periodic conditions of finite differences, and in what is accepted."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import scipy.sparse as sp

from laplace_verify.arrays import Array, IntArray
from laplace_verify.problems import Problem
from laplace_verify.solvers.samples.finite_difference import (
    SCHEME,
    Equations,
    Side,
    carried_load,
    five_point,
    held_values,
    solve_on_grid,
)
from laplace_verify.solvers.samples.seams import facing_nodes
from laplace_verify.solvers.samples.seeding import Seeds

__all__ = ["FIXED_FAULTS"]

SEEDS = Seeds(sample=five_point, solve=solve_on_grid, scheme=SCHEME)
FIXED_FAULTS = SEEDS.faults

FIXED = ("plate-saddle", "plate-cubic", "plate-wave")
HELD = ("Dirichlet", "dirichlet on")
STIFFNESS = 3e3  # a penalty chosen by rule of thumb


@SEEDS.into(
    "load",
    "dirichlet side not carried",
    "values of the last Dirichlet side do not reach the right-hand side",
    kind="Dirichlet enforcement",
    suspects=HELD,
    shown_by=(*FIXED, "rod-two-temperatures"),
)
def load_without_last_side(equations: Equations, sides: list[Side]) -> Array:
    """End the loop over the Dirichlet sides one too early when their values go to the right-hand side."""
    held = [side for side in sides if side.piece.kind == "dirichlet"]
    carried = replace(equations, values=equations.values.copy())
    for side in held[-1:]:
        nodes, _ = side.grid.shares(side.patch)
        carried.values[nodes] = 0.0
    return carried_load(carried, sides)


@SEEDS.into(
    "load",
    "dirichlet carried with the wrong sign",
    "prescribed values are added to the right-hand side with the sign of the matrix entries",
    kind="Dirichlet enforcement",
    suspects=HELD,
    shown_by=(*FIXED, "rod-two-temperatures"),
)
def load_of_opposite_values(equations: Equations, sides: list[Side]) -> Array:
    """Carry the values over without changing their sign."""
    return carried_load(replace(equations, values=-equations.values), sides)


@SEEDS.into(
    "dirichlet",
    "dirichlet data of the next node",
    "prescribed values sampled one node further along the side: indices from 1 where they start at 0",
    kind="shifted data",
    suspects=HELD,
    shown_by=(*FIXED, "plate-four-sides-fitting"),
)
def values_of_the_next_node(equations: Equations, side: Side) -> None:
    """Hold every node of a piece at the value of the next one; the last keeps its own."""
    nodes, _ = side.grid.shares(side.patch)
    held_values(equations, side)
    equations.values[nodes[:-1]] = equations.values[nodes[1:]]


@SEEDS.into(
    "dirichlet",
    "data of top and left reversed",
    "data of top and left read against the direction of their sides, as after a walk round the boundary; "
    "hidden by symmetric data",
    kind="exchanged axes",
    suspects=(*HELD, "dirichlet on top", "dirichlet on left"),
    shown_by=("plate-saddle", "plate-cubic", "plate-wave", "plate-four-sides-fitting"),
)
def values_round_the_boundary(equations: Equations, side: Side) -> None:
    """Reverse the values of top and left."""
    nodes, _ = side.grid.shares(side.patch)
    held_values(equations, side)
    if side.patch.side != side.patch.axis:
        return
    equations.values[nodes] = equations.values[nodes[::-1]]


@SEEDS.into(
    "dirichlet",
    "corners left to the flux",
    "rows of bottom and top run without their end nodes: a corner with a flux side is closed by that side "
    "alone",
    kind="Dirichlet enforcement",
    suspects=(
        "several kinds of condition",
        "Neumann condition",
        "neumann on",
        "Neumann piece",
        "corner",
        "lose one order",
    ),
    shown_by=("plate-flux-left", "plate-flux-right", "plate-degree-seven"),
)
def values_without_ends(equations: Equations, side: Side) -> None:
    """Hold the inner nodes of bottom and top and all nodes of left and right."""
    nodes, _ = side.grid.shares(side.patch)
    before = equations.held.copy()
    held_values(equations, side)
    if side.patch.axis == 1:
        ends = nodes[[0, -1]]
        equations.held[ends] = before[ends]


@SEEDS.into(
    "dirichlet",
    "dirichlet by a weak penalty",
    f"prescribed values enforced as a Robin condition with the fixed coefficient {STIFFNESS:g}",
    kind="Dirichlet enforcement",
    suspects=HELD,
    shown_by=("plate-cubic", "plate-saddle", "rod-two-temperatures", "plate-wave"),
    effect="accuracy",
)
def penalised_values(equations: Equations, side: Side) -> None:
    """Let the flux K * STIFFNESS * (g - u) in."""
    nodes, areas = side.grid.shares(side.patch)
    strength = STIFFNESS * areas
    equations.add_transfer(nodes, strength)
    equations.load[nodes] += strength * side.piece.data(side.grid.points[nodes])


@SEEDS.into(
    "dirichlet",
    "dirichlet by rows of the unit matrix",
    "prescribed values kept as unknowns with the equation u = g instead of being eliminated",
    kind="Dirichlet enforcement",
    suspects=(),
    shown_by=("plate-saddle", "rod-two-temperatures", "wall-mixed-conditions", "plate-flux-left"),
    effect="harmless",
)
def values_as_unknowns(equations: Equations, side: Side) -> None:
    """Overwrite the rows of the piece's nodes."""
    nodes, _ = side.grid.shares(side.patch)
    count = len(equations.load)
    unit, load = np.zeros(count), np.zeros(count)
    unit[nodes], load[nodes] = 1.0, side.piece.data(side.grid.points[nodes])
    equations.overwrite(nodes, sp.csr_array(sp.diags_array(unit)), load)
    equations.level_is_free = False


@SEEDS.into(
    "dirichlet",
    "other corner owner",
    "where two Dirichlet sides meet, the earlier one gives the corner its value",
    kind="corner node",
    suspects=(),
    shown_by=("plate-saddle", "plate-wave", "plate-four-sides-fitting", "plate-four-sides-jumping"),
    effect="harmless",
)
def values_of_the_first(equations: Equations, side: Side) -> None:
    """Keep the values of nodes that are held already."""
    held, values = equations.held.copy(), equations.values.copy()
    held_values(equations, side)
    equations.values[held] = values[held]


PERIODIC = ("plate-periodic-sides", "plate-periodic-convection", "plate-periodic-layers")


@SEEDS.into(
    "facing",
    "seam shifted",
    "nodes of a periodic side are joined to neighbours of those that face them; invisible elsewhere",
    kind="off by one",
    suspects=("periodic",),
    shown_by=PERIODIC,
)
def facing_the_neighbour(side: Side, partner: Side) -> tuple[IntArray, IntArray]:
    """Count the nodes of one periodic side from the wrong end by one."""
    kept, copies = facing_nodes(side, partner)
    return np.roll(kept, 1), copies


@SEEDS.into(
    "facing",
    "seam reversed",
    "nodes of a periodic side are joined to those that face them in reverse order; invisible elsewhere",
    kind="exchanged axes",
    suspects=("periodic",),
    shown_by=PERIODIC,
)
def facing_in_reverse(side: Side, partner: Side) -> tuple[IntArray, IntArray]:
    """Count the nodes of one periodic side from the other end."""
    kept, copies = facing_nodes(side, partner)
    return kept[::-1], copies


@SEEDS.into(
    "accept",
    "ill-posed input accepted",
    "ill-posed problems are answered, for the checks of the input are left out; invisible elsewhere",
    kind="null space",
    suspects=("ill-posed",),
    shown_by=("rod-unbalanced-flux", "plate-unbalanced-flux", "plate-amplifying-top"),
)
def accept_everything(problem: Problem) -> None:
    """Take whatever comes."""
    del problem
