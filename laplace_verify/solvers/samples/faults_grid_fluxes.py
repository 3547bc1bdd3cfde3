"""Coding mistakes in the Neumann and Robin conditions of finite differences."""

from __future__ import annotations

import numpy as np
import scipy.sparse as sp

from laplace_verify.arrays import Array, IntArray
from laplace_verify.solvers.samples.finite_difference import (
    SCHEME,
    Equations,
    Side,
    five_point,
    half_cell_flux,
    solve_on_grid,
)
from laplace_verify.solvers.samples.rectilinear import Patch, corners_on
from laplace_verify.solvers.samples.seeding import Seeds

__all__ = ["FLUX_FAULTS"]

SEEDS = Seeds(sample=five_point, solve=solve_on_grid, scheme=SCHEME)
FLUX_FAULTS = SEEDS.faults

WITH_FLUX = ("plate-flux-top", "plate-flux-left", "wall-mixed-conditions", "rod-fixed-and-flux")
WITH_TRANSFER = ("plate-convection-all-round", "wall-mixed-conditions", "rod-both-convection")
FLUX = ("Neumann condition", "Neumann data", "neumann on", "Neumann piece")
ONE_LOST = ("lose one order", "loses one order")
TRANSFER = ("Robin condition", "Robin coefficient", "robin on")


def conductivity_at(side: Side, axis: int) -> Array:
    """Return K_na in the cells of a side, shape (cells,): how a slope along `axis` drives flux across it."""
    if side.tensor.ndim == 1:  # a number for every cell
        return side.tensor[side.patch.cells] * (1.0 if axis == side.patch.axis else 0.0)
    return np.full(len(side.patch.cells), side.tensor[side.patch.axis, axis])


def neighbours(side: Side, nodes: IntArray, axis: int, step: int) -> IntArray:
    """Return the nodes next to some of a side's along an axis; the node itself where there is none."""
    grid = side.grid
    number = np.full([len(line) + 2 for line in grid.axes], -1)
    number[tuple((grid.place + 1).T)] = np.arange(len(grid.points))
    place = grid.place[nodes] + 1
    place[:, axis] += step
    found = number[tuple(place.T)]
    return np.where(found >= 0, found, nodes)


# ---- Neumann -------------------------------------------------------------------------------------


@SEEDS.into(
    "neumann",
    "first-order flux",
    "Neumann condition by a one-sided difference along the normal, (u_b - u_in)/h = g/K",
    kind="low-order closure",
    suspects=(*FLUX, "normal derivative"),
    shown_by=("plate-flux-top", "plate-flux-left", "wall-mixed-conditions", "plate-pure-flux"),
)
def one_sided_flux(equations: Equations, side: Side) -> None:
    """Put n . K G u = g, with one-sided differences along the normal, in place of the half-cell balance.

    For K = 1 this is (u_boundary - u_inner) / h = g: order one where the second normal derivative is not
    zero.
    """
    grid, patch, count = side.grid, side.patch, len(equations.load)
    nodes, areas = grid.shares(patch)
    corners = corners_on(grid.dim, patch.axis, patch.side)
    sign = 1.0 if patch.side else -1.0
    rows = sp.csr_array((count, count))
    for corner in corners:
        own = grid.corners[patch.cells, corner]
        share = sign * grid.face(patch, corner)
        for axis, gradient in enumerate(grid.gradients(corner)):
            driven = share * conductivity_at(side, axis)
            to_node = sp.csr_array((driven, (own, patch.cells)), shape=(count, len(grid.corners)))
            rows = rows + to_node @ gradient
    load = np.zeros(count)
    load[nodes] = areas * side.piece.data(grid.points[nodes])
    equations.overwrite(nodes, rows, load)


@SEEDS.into(
    "neumann",
    "flux sign",
    "prescribed flux enters with the wrong sign",
    kind="flux sign",
    suspects=FLUX,
    shown_by=WITH_FLUX,
)
def reversed_flux(equations: Equations, side: Side) -> None:
    """Subtract the prescribed flux."""
    nodes, _ = side.grid.shares(side.patch)
    equations.load[nodes] -= side.inflow()


@SEEDS.into(
    "neumann",
    "normal of the low sides",
    "left and bottom take the flux along +x and +y for that along their outward normal",
    kind="normal orientation",
    suspects=("neumann on left", "neumann on bottom", *FLUX),
    shown_by=("plate-flux-left", "plate-flux-bottom", "plate-degree-seven", "long-duct"),
)
def flux_along_axes(equations: Equations, side: Side) -> None:
    """Subtract the prescribed flux on the low sides, where the outward normal is -x or -y."""
    nodes, _ = side.grid.shares(side.patch)
    equations.load[nodes] += side.inflow() * (1.0 if side.patch.side else -1.0)


@SEEDS.into(
    "neumann",
    "flux for gradient",
    "flux condition multiplied by the conductivity once more; invisible where K = 1",
    kind="flux or gradient",
    suspects=("conductivity other than 1", *FLUX),
    shown_by=("wall-mixed-conditions", "plate-flux-top", "plate-flux-left"),
)
def flux_for_gradient(equations: Equations, side: Side) -> None:
    """Take g for the normal derivative and multiply by the conductivity once more."""
    grid, patch = side.grid, side.patch
    conductivity = conductivity_at(side, patch.axis)
    for corner in corners_on(grid.dim, patch.axis, patch.side):
        own = grid.corners[patch.cells, corner]
        data = side.piece.data(grid.points[own])
        np.add.at(equations.load, own, grid.face(patch, corner) * conductivity * data)


@SEEDS.into(
    "neumann",
    "gradient for flux",
    "prescribed flux divided by the conductivity before it enters the balance; invisible where K = 1",
    kind="flux or gradient",
    suspects=("conductivity other than 1", *FLUX),
    shown_by=("wall-mixed-conditions", "plate-flux-right", "plate-flux-left"),
)
def divided_flux(equations: Equations, side: Side) -> None:
    """Divide the flux by the conductivity, as equations for the gradient would have it."""
    grid, patch = side.grid, side.patch
    conductivity = conductivity_at(side, patch.axis)
    for corner in corners_on(grid.dim, patch.axis, patch.side):
        own = grid.corners[patch.cells, corner]
        data = side.piece.data(grid.points[own])
        np.add.at(equations.load, own, grid.face(patch, corner) / conductivity * data)


@SEEDS.into(
    "neumann",
    "half-cell factor",
    "flux enters a whole cell where the boundary node owns half a one",
    kind="half-cell factor",
    suspects=FLUX,
    shown_by=WITH_FLUX,
)
def whole_cell_flux(equations: Equations, side: Side) -> None:
    """Let the flux in through whole instead of half cells: the factor of ghost-point formulas, lost."""
    nodes, _ = side.grid.shares(side.patch)
    equations.load[nodes] += 2.0 * side.inflow()


@SEEDS.into(
    "neumann",
    "whole edge in corners",
    "the corner node takes the flux of a whole edge where it owns half a one",
    kind="half-cell factor",
    suspects=(*FLUX, "corner", *ONE_LOST),
    shown_by=("plate-degree-eleven", "wall-mixed-conditions"),
)
def whole_edge_in_corners(equations: Equations, side: Side) -> None:
    """Count the edge of every node of the side as long as that of a node in its middle."""
    nodes, areas = side.grid.shares(side.patch)
    equations.load[nodes] += np.max(areas) / areas * side.inflow()


@SEEDS.into(
    "neumann",
    "edge length of the other axis",
    "flux multiplied by the spacing across the side instead of that along it; invisible on square cells",
    kind="half-cell factor",
    suspects=("unequal extents", *FLUX),
    shown_by=("plate-flux-top", "plate-flux-left", "wall-mixed-conditions"),
)
def flux_through_crosswise_edges(equations: Equations, side: Side) -> None:
    """Multiply the flux density by the cell's size across the side."""
    nodes, _ = side.grid.shares(side.patch)
    widths = side.grid.widths[side.patch.cells[0]]
    ratio = widths[side.patch.axis] / widths[1 - side.patch.axis] if side.grid.dim == 2 else 1.0
    equations.load[nodes] += ratio * side.inflow()


@SEEDS.into(
    "neumann",
    "flux spacing from the number of nodes",
    "edge length of the flux computed as length / (n + 1), by the number of nodes instead of cells",
    kind="off by one",
    suspects=FLUX,
    shown_by=("plate-flux-top", "plate-flux-left", "wall-mixed-conditions", "plate-degree-eleven"),
)
def flux_by_number_of_nodes(equations: Equations, side: Side) -> None:
    """Let n / (n + 1) of the flux in."""
    nodes, _ = side.grid.shares(side.patch)
    cells = len(side.patch.cells) if side.grid.dim > 1 else len(side.grid.corners)
    equations.load[nodes] += cells / (cells + 1.0) * side.inflow()


@SEEDS.into(
    "neumann",
    "flux of cell centres",
    "flux data sampled half a cell further along the side than the nodes lie",
    kind="shifted data",
    suspects=FLUX,
    shown_by=("plate-flux-top", "plate-flux-left", "wall-mixed-conditions", "plate-degree-eleven"),
)
def flux_of_cell_centres(equations: Equations, side: Side) -> None:
    """Take the data half way to the next node along the side (the last node has none)."""
    nodes, areas = side.grid.shares(side.patch)
    points = side.grid.points
    for axis in range(side.grid.dim):
        if axis != side.patch.axis:
            following = neighbours(side, nodes, axis, 1)
            following = np.where(np.isin(following, nodes), following, nodes)
            middles = (points[nodes] + points[following]) / 2.0
            equations.load[nodes] += areas * side.piece.data(middles)
            return
    equations.load[nodes] += side.inflow()


@SEEDS.into(
    "neumann",
    "flux on the opposite side",
    "prescribed flux enters at the opposite side, index 0 and -1 mixed up",
    kind="wrong side",
    suspects=FLUX,
    shown_by=WITH_FLUX,
)
def flux_on_the_opposite_side(equations: Equations, side: Side) -> None:
    """Add the flux to the nodes of the side that faces the piece."""
    grid, patch = side.grid, side.patch
    place = grid.index[:, patch.axis]
    last = place.max() if patch.side == 0 else place.min()
    facing = Patch(axis=patch.axis, side=1 - patch.side, cells=np.flatnonzero(place == last))
    nodes, _ = grid.shares(facing)
    inflow = side.inflow()
    equations.load[nodes[: len(inflow)]] += inflow[: len(nodes)]


@SEEDS.into(
    "neumann",
    "flux lost",
    "every derivative condition without alpha is taken for insulation: flux data are never read",
    kind="wrong side",
    suspects=FLUX,
    shown_by=WITH_FLUX,
)
def insulated(equations: Equations, side: Side) -> None:
    """Leave the half cells closed."""
    del equations, side


@SEEDS.into(
    "neumann",
    "second-order one-sided flux",
    "Neumann condition by the one-sided difference (3 u_0 - 4 u_1 + u_2) / (2 h) = g/K: as good a closure",
    kind="low-order closure",
    suspects=(),
    shown_by=("plate-flux-top", "plate-flux-left", "wall-mixed-conditions", "rod-fixed-and-flux"),
    effect="harmless",
)
def three_point_flux(equations: Equations, side: Side) -> None:
    """Overwrite the rows by three-point differences where the flux is that along the normal alone."""
    grid, patch, count = side.grid, side.patch, len(equations.load)
    skew = side.tensor.ndim == 1 or np.count_nonzero(side.tensor[patch.axis]) > 1
    if skew or grid.coordinates != "cartesian" or np.ptp(np.diff(grid.axes[patch.axis])) > 1e-9:
        half_cell_flux(equations, side)
        return
    nodes, areas = grid.shares(patch)
    inward = -1 if patch.side else 1
    first = neighbours(side, nodes, patch.axis, inward)
    second = neighbours(side, first, patch.axis, inward)
    width = grid.widths[patch.cells[0], patch.axis]
    slope = areas * side.tensor[patch.axis, patch.axis] / (2.0 * width)
    entries = np.concatenate([3.0 * slope, -4.0 * slope, slope])
    where = (np.tile(nodes, 3), np.concatenate([nodes, first, second]))
    load = np.zeros(count)
    load[nodes] = side.inflow()
    equations.overwrite(nodes, sp.csr_array((entries, where), shape=(count, count)), load)


# ---- Robin ---------------------------------------------------------------------------------------


@SEEDS.into(
    "robin",
    "robin coefficient",
    "alpha enters at half its size",
    kind="Robin coefficient",
    suspects=TRANSFER,
    shown_by=WITH_TRANSFER,
)
def halved_transfer(equations: Equations, side: Side) -> None:
    """Take half of alpha, as when a ghost point's factor of two reaches the data only."""
    nodes, areas = side.grid.shares(side.patch)
    equations.add_transfer(nodes, 0.5 * areas * side.piece.alpha(side.grid.points[nodes]))
    equations.load[nodes] += side.inflow()


@SEEDS.into(
    "robin",
    "robin sign",
    "alpha enters with the wrong sign",
    kind="Robin coefficient",
    suspects=TRANSFER,
    shown_by=WITH_TRANSFER,
)
def reversed_transfer(equations: Equations, side: Side) -> None:
    """Let the surface amplify."""
    nodes, areas = side.grid.shares(side.patch)
    strength = areas * side.piece.alpha(side.grid.points[nodes])
    equations.add_transfer(nodes, strength)
    equations.add_transfer(nodes, -2.0 * strength)
    equations.load[nodes] += side.inflow()


@SEEDS.into(
    "robin",
    "robin coefficient times conductivity",
    "alpha multiplied by the conductivity, as if K du/dn + K alpha u = g; invisible where K = 1",
    kind="Robin coefficient",
    suspects=(*TRANSFER, "conductivity other than 1"),
    shown_by=WITH_TRANSFER,
)
def transfer_times_conductivity(equations: Equations, side: Side) -> None:
    """Multiply alpha by K."""
    nodes, areas = side.grid.shares(side.patch)
    conductivity = float(np.mean(conductivity_at(side, side.patch.axis)))
    equations.add_transfer(nodes, conductivity * areas * side.piece.alpha(side.grid.points[nodes]))
    equations.load[nodes] += side.inflow()


@SEEDS.into(
    "robin",
    "robin edge length lost",
    "alpha enters without the edge length that its data have",
    kind="half-cell factor",
    suspects=TRANSFER,
    shown_by=("plate-convection-all-round", "wall-mixed-conditions", "plate-degree-nine"),
)
def transfer_without_area(equations: Equations, side: Side) -> None:
    """Forget to multiply alpha by the area."""
    nodes, _ = side.grid.shares(side.patch)
    equations.add_transfer(nodes, side.piece.alpha(side.grid.points[nodes]))
    equations.load[nodes] += side.inflow()


@SEEDS.into(
    "robin",
    "robin at the inner neighbour",
    "alpha multiplies the value one node inside instead of that on the boundary",
    kind="Robin coefficient",
    suspects=TRANSFER,
    shown_by=("plate-convection-all-round", "wall-mixed-conditions", "plate-degree-nine"),
)
def transfer_at_the_neighbour(equations: Equations, side: Side) -> None:
    """Put the entry into the column of the inner neighbour."""
    nodes, areas = side.grid.shares(side.patch)
    strength = areas * side.piece.alpha(side.grid.points[nodes])
    inner = neighbours(side, nodes, side.patch.axis, -1 if side.patch.side else 1)
    moved = sp.csr_array((strength, (nodes, inner)), shape=equations.matrix.shape)
    equations.add_transfer(nodes, strength)
    equations.matrix = equations.matrix - sp.diags_array(moved.sum(axis=1)) + moved
    equations.load[nodes] += side.inflow()


@SEEDS.into(
    "robin",
    "robin only on high sides",
    "alpha is forgotten on left and bottom, which are treated by another branch",
    kind="wrong side",
    suspects=("robin on left", "robin on bottom", *TRANSFER),
    shown_by=("plate-convection-all-round", "rod-both-convection", "rod-fixed-and-convection"),
)
def transfer_on_high_sides(equations: Equations, side: Side) -> None:
    """Take alpha on right and top only."""
    nodes, areas = side.grid.shares(side.patch)
    strength = areas * side.piece.alpha(side.grid.points[nodes])
    equations.add_transfer(nodes, strength if side.patch.side else 0.0 * strength)
    equations.load[nodes] += side.inflow()
