"""Coding mistakes put into the five-point solver, each a change of one small function.

A verification is worth what it catches. `FAULTS` maps a name to what is wrong and to an adapter that declares
itself as sound as `five_point` does.
"""

from __future__ import annotations

from dataclasses import replace
from typing import NamedTuple

import numpy as np
import scipy.sparse as sp

from laplace_verify.arrays import Array
from laplace_verify.solvers.adapter import Adapter
from laplace_verify.solvers.samples.finite_difference import (
    SCHEME,
    Equations,
    Scheme,
    Side,
    carried_load,
    five_point_with,
)
from laplace_verify.solvers.samples.rectilinear import corners_on

__all__ = ["FAULTS", "Fault"]


class Fault(NamedTuple):
    """A mistake in words and the solver that makes it."""

    description: str
    adapter: Adapter


def one_sided_flux(equations: Equations, side: Side) -> None:
    """Put n . K G u = g, with one-sided differences along the normal, in place of the half-cell balance.

    For K = 1 this is (u_boundary - u_inner) / h = g: order one where the second normal derivative is not
    zero.
    """
    grid, patch, count = side.grid, side.patch, len(equations.load)
    nodes, areas = grid.shares(patch)
    corners = corners_on(grid.dim, patch.axis, patch.side)
    across = np.delete(grid.widths[patch.cells], patch.axis, axis=1)
    share = np.prod(across, axis=1) / len(corners) * (1.0 if patch.side else -1.0)
    rows = sp.csr_array((count, count))
    for corner in corners:
        own = grid.corners[patch.cells, corner]
        to_node = sp.csr_array((share, (own, patch.cells)), shape=(count, len(grid.corners)))
        for axis, gradient in enumerate(grid.gradients(corner)):
            rows = rows + side.tensor[patch.axis, axis] * (to_node @ gradient)
    load = np.zeros(count)
    load[nodes] = areas * side.piece.data(grid.points[nodes])
    equations.overwrite(nodes, rows, load)


def reversed_flux(equations: Equations, side: Side) -> None:
    """Subtract the prescribed flux."""
    nodes, areas = side.grid.shares(side.patch)
    equations.load[nodes] -= areas * side.piece.data(side.grid.points[nodes])


def flux_for_gradient(equations: Equations, side: Side) -> None:
    """Take g for the normal derivative and multiply by the conductivity once more."""
    nodes, areas = side.grid.shares(side.patch)
    conductivity = side.tensor[side.patch.axis, side.patch.axis]
    equations.load[nodes] += areas * conductivity * side.piece.data(side.grid.points[nodes])


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


def _fault(name: str, description: str, scheme: Scheme) -> tuple[str, Fault]:
    """Return an entry of `FAULTS`."""
    return name, Fault(description, five_point_with(scheme, f"five-point finite differences, fault: {name}"))


FAULTS: dict[str, Fault] = dict(
    [
        _fault(
            "first-order flux",
            "Neumann condition by a one-sided difference along the normal, (u_b - u_in)/h = g/K",
            replace(SCHEME, neumann=one_sided_flux),
        ),
        _fault(
            "flux sign", "prescribed flux enters with the wrong sign", replace(SCHEME, neumann=reversed_flux)
        ),
        _fault(
            "flux for gradient",
            "flux condition multiplied by the conductivity once more; invisible where K = 1",
            replace(SCHEME, neumann=flux_for_gradient),
        ),
        _fault(
            "half-cell factor",
            "flux enters a whole cell where the boundary node owns half a one",
            replace(SCHEME, neumann=whole_cell_flux),
        ),
        _fault("robin coefficient", "alpha enters at half its size", replace(SCHEME, robin=halved_transfer)),
        _fault(
            "dirichlet side not carried",
            "values of the last Dirichlet side do not reach the right-hand side",
            replace(SCHEME, load=load_without_last_side),
        ),
    ]
)
