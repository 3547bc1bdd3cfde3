"""Coding mistakes in finite differences, each a change of one small function of the five-point scheme."""

from __future__ import annotations

from dataclasses import dataclass, fields, replace

import numpy as np
import scipy.sparse as sp

from laplace_verify.arrays import Array, IntArray
from laplace_verify.problems import Problem
from laplace_verify.problems.coordinates import metric
from laplace_verify.solvers.samples.fault import Effect, Fault
from laplace_verify.solvers.samples.finite_difference import (
    SCHEME,
    Equations,
    Scheme,
    Side,
    box_stencil,
    carried_load,
    five_point,
    five_point_with,
)
from laplace_verify.solvers.samples.rectilinear import Grid, corners_on
from laplace_verify.solvers.samples.seams import facing_nodes

__all__ = ["GRID_FAULTS"]


def conductivity_at(side: Side, axis: int) -> Array:
    """Return K_na in the cells of a side, shape (cells,): how a slope along `axis` drives flux across it."""
    if side.tensor.ndim == 1:  # a number for every cell
        return side.tensor[side.patch.cells] * (1.0 if axis == side.patch.axis else 0.0)
    return np.full(len(side.patch.cells), side.tensor[side.patch.axis, axis])


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


def reversed_flux(equations: Equations, side: Side) -> None:
    """Subtract the prescribed flux."""
    nodes, areas = side.grid.shares(side.patch)
    equations.load[nodes] -= areas * side.piece.data(side.grid.points[nodes])


def flux_for_gradient(equations: Equations, side: Side) -> None:
    """Take g for the normal derivative and multiply by the conductivity once more."""
    grid, patch = side.grid, side.patch
    conductivity = conductivity_at(side, patch.axis)
    for corner in corners_on(grid.dim, patch.axis, patch.side):
        own = grid.corners[patch.cells, corner]
        data = side.piece.data(grid.points[own])
        np.add.at(equations.load, own, grid.face(patch, corner) * conductivity * data)


def whole_cell_flux(equations: Equations, side: Side) -> None:
    """Let the flux in through whole instead of half cells: the factor of ghost-point formulas, lost."""
    nodes, areas = side.grid.shares(side.patch)
    equations.load[nodes] += 2.0 * areas * side.piece.data(side.grid.points[nodes])


def halved_transfer(equations: Equations, side: Side) -> None:
    """Take half of alpha, as when a ghost point's factor of two reaches the data only."""
    nodes, areas = side.grid.shares(side.patch)
    points = side.grid.points[nodes]
    equations.add_transfer(nodes, 0.5 * areas * side.piece.alpha(points))
    equations.load[nodes] += areas * side.piece.data(points)


def load_without_last_side(equations: Equations, sides: list[Side]) -> Array:
    """End the loop over the Dirichlet sides one too early when their values go to the right-hand side."""
    held = [side for side in sides if side.piece.kind == "dirichlet"]
    carried = replace(equations, values=equations.values.copy())
    for side in held[-1:]:
        nodes, _ = side.grid.shares(side.patch)
        carried.values[nodes] = 0.0
    return carried_load(carried, sides)


def smeared_stencil(grid: Grid, tensor: Array) -> sp.csr_array:
    """Take the arithmetic mean of K at nodes and again over each cell: interfaces are smeared.

    Across layers resistances add up, so that the flux through a face belongs to the harmonic mean.
    """
    if tensor.ndim == 2:
        return box_stencil(grid, tensor)
    corners = grid.corners.shape[1]
    shares = np.stack([grid.owned(corner) * tensor for corner in range(corners)], axis=1)
    owned = np.bincount(grid.corners.ravel(), shares.ravel(), len(grid.points))
    at_nodes = owned / grid.node_volumes()
    return box_stencil(grid, at_nodes[grid.corners].mean(axis=1))


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class _OuterRadius(Grid):
    """A grid that takes the area of the face between two nodes at the radius of the outer node."""

    def conducting(self, corner: int, axis: int) -> Array:
        """Return the misplaced area times half the edge length along r; along z what is right."""
        if axis > 0 or self.coordinates == "cartesian":
            return Grid.conducting(self, corner, axis)
        plane: Array = np.prod(self.widths, axis=1) / 2**self.dim
        return plane * metric(self.coordinates, self.radii(1)[:, np.newaxis])


def outer_radius_stencil(grid: Grid, tensor: Array) -> sp.csr_array:
    """Multiply the flux along r by the r of the outer node instead of that of the face half-way."""
    values = {f.name: getattr(grid, f.name) for f in fields(grid)}
    return box_stencil(_OuterRadius(**values), tensor)


def facing_the_neighbour(side: Side, partner: Side) -> tuple[IntArray, IntArray]:
    """Count the nodes of one periodic side from the wrong end by one."""
    kept, copies = facing_nodes(side, partner)
    return np.roll(kept, 1), copies


def accept_everything(problem: Problem) -> None:
    """Take whatever comes."""
    del problem


def _fault(
    name: str,
    description: str,
    scheme: Scheme,
    *,
    kind: str,
    suspects: tuple[str, ...],
    shown_by: tuple[str, ...],
    effect: Effect = "order",
) -> tuple[str, Fault]:
    """Return an entry of `GRID_FAULTS`."""
    return name, Fault(
        description=description,
        adapter=five_point_with(scheme, f"{five_point.name}, fault: {name}"),
        sample=five_point.name,
        kind=kind,
        effect=effect,
        suspects=suspects,
        shown_by=shown_by,
    )


WITH_FLUX = ("plate-flux-top", "plate-flux-left", "wall-mixed-conditions", "rod-fixed-and-flux")
ILL_POSED = ("rod-unbalanced-flux", "plate-unbalanced-flux", "plate-amplifying-top")
PERIODIC = ("plate-periodic-sides", "plate-periodic-convection", "plate-periodic-layers")
FLUX_SUSPECTS = ("Neumann condition", "Neumann data", "neumann on")

GRID_FAULTS: dict[str, Fault] = dict(
    [
        _fault(
            "first-order flux",
            "Neumann condition by a one-sided difference along the normal, (u_b - u_in)/h = g/K",
            replace(SCHEME, neumann=one_sided_flux),
            kind="low-order closure",
            suspects=(*FLUX_SUSPECTS, "normal derivative"),
            shown_by=("plate-flux-top", "plate-flux-left", "wall-mixed-conditions", "plate-pure-flux"),
        ),
        _fault(
            "flux sign",
            "prescribed flux enters with the wrong sign",
            replace(SCHEME, neumann=reversed_flux),
            kind="flux sign",
            suspects=FLUX_SUSPECTS,
            shown_by=WITH_FLUX,
        ),
        _fault(
            "flux for gradient",
            "flux condition multiplied by the conductivity once more; invisible where K = 1",
            replace(SCHEME, neumann=flux_for_gradient),
            kind="flux or gradient",
            suspects=("conductivity other than 1", *FLUX_SUSPECTS),
            shown_by=("wall-mixed-conditions", "plate-tensor-diagonal", "plate-layers-across"),
        ),
        _fault(
            "half-cell factor",
            "flux enters a whole cell where the boundary node owns half a one",
            replace(SCHEME, neumann=whole_cell_flux),
            kind="half-cell factor",
            suspects=FLUX_SUSPECTS,
            shown_by=WITH_FLUX,
        ),
        _fault(
            "robin coefficient",
            "alpha enters at half its size",
            replace(SCHEME, robin=halved_transfer),
            kind="Robin coefficient",
            suspects=("Robin condition", "Robin coefficient", "robin on"),
            shown_by=("plate-convection-all-round", "wall-mixed-conditions", "rod-both-convection"),
        ),
        _fault(
            "dirichlet side not carried",
            "values of the last Dirichlet side do not reach the right-hand side",
            replace(SCHEME, load=load_without_last_side),
            kind="Dirichlet enforcement",
            suspects=("Dirichlet",),
            shown_by=("plate-saddle", "plate-cubic", "plate-wave", "rod-two-temperatures"),
        ),
        _fault(
            "arithmetic mean of conductivities",
            "arithmetic mean of K across interfaces where the harmonic one belongs; invisible elsewhere",
            replace(SCHEME, stencil=smeared_stencil),
            kind="material average",
            suspects=("interface", "conductivity jump"),
            shown_by=("plate-layers-across", "plate-two-layers-wave", "rod-two-layers"),
        ),
        _fault(
            "seam shifted",
            "nodes of a periodic side are joined to neighbours of those that face them; invisible elsewhere",
            replace(SCHEME, facing=facing_the_neighbour),
            kind="off by one",
            suspects=("periodic",),
            shown_by=PERIODIC,
        ),
        _fault(
            "ill-posed input accepted",
            "ill-posed problems are answered, for the checks of the input are left out; invisible elsewhere",
            replace(SCHEME, accept=accept_everything),
            kind="null space",
            suspects=("ill-posed",),
            shown_by=ILL_POSED,
        ),
        _fault(
            "radius of the outer node",
            "the metric factor of the flux along r taken at the outer node, not at the face; invisible in "
            "Cartesian coordinates",
            replace(SCHEME, stencil=outer_radius_stencil),
            kind="curvilinear factor",
            suspects=("coordinates with a symmetry", "axis"),
            shown_by=("pillar-section", "pipe-wall-two-temperatures", "tank-wall-two-temperatures"),
        ),
    ]
)
