"""Coding mistakes in the difference formula of the interior: spacings, conductivities, coordinates."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, fields, replace
from functools import partial

import numpy as np
import scipy.sparse as sp

from laplace_verify.arrays import Array, IntArray
from laplace_verify.problems import Problem
from laplace_verify.problems.coordinates import metric
from laplace_verify.solvers.samples.finite_difference import (
    SCHEME,
    box_stencil,
    cell_material,
    five_point,
    solve_on_grid,
)
from laplace_verify.solvers.samples.rectilinear import Grid
from laplace_verify.solvers.samples.seeding import Seeds

__all__ = ["INTERIOR_FAULTS"]

SEEDS = Seeds(sample=five_point, solve=solve_on_grid, scheme=SCHEME)
INTERIOR_FAULTS = SEEDS.faults

FIXED = ("plate-saddle", "plate-cubic", "plate-wave")
LAYERED = ("plate-layers-across", "plate-two-layers-wave", "rod-two-layers")
OBLIQUE = ("plate-tensor-oblique", "plate-tensor-oblique-fixed")
PIPES = ("pipe-wall-two-temperatures", "pipe-wall-convection")
SHELLS = ("tank-wall-two-temperatures", "tank-wall-flux-and-convection")
TENSOR = ("tensor conductivity", "off-diagonal conductivity")
LAYERS = ("interface", "conductivity jump")
SYMMETRY = ("coordinates with a symmetry", "axis")


# ---- spacings ------------------------------------------------------------------------------------


@SEEDS.into(
    "stencil",
    "spacings exchanged",
    "h_x and h_y exchanged in the difference formula; invisible on square cells",
    kind="exchanged axes",
    suspects=("unequal extents", "ratio of the sides", "dimension", "do not get smaller errors"),
    shown_by=(*FIXED, "plate-flux-top"),
)
def crosswise_stencil(grid: Grid, tensor: Array) -> sp.csr_array:
    """Divide differences along x by h_y^2 and those along y by h_x^2."""
    if grid.dim < 2 or tensor.ndim == 1:
        return box_stencil(grid, tensor)
    ratio = grid.widths[0, 0] / grid.widths[0, 1]
    return box_stencil(grid, tensor * np.array([[ratio**2, 1.0], [1.0, ratio**-2]]))


@SEEDS.into(
    "stencil",
    "spacing along x from the number of nodes",
    "h_x computed as width / (n + 1), by the number of nodes instead of cells",
    kind="off by one",
    suspects=("dimension", "shape"),
    shown_by=(*FIXED, "wall-mixed-conditions"),
)
def stencil_by_number_of_nodes(grid: Grid, tensor: Array) -> sp.csr_array:
    """Divide differences along x by a spacing n / (n + 1) times too small."""
    cells = len(grid.axes[0]) - 1.0
    scale = np.ones((grid.dim, grid.dim))
    scale[0] *= (cells + 1.0) / cells
    scale[:, 0] *= (cells + 1.0) / cells
    return box_stencil(grid, tensor * (scale if tensor.ndim == 2 else scale[0, 0]))


@SEEDS.into(
    "stencil",
    "equal spacings taken for granted",
    "weights of equal spacings where grid lines on interfaces make them unequal; invisible elsewhere",
    kind="interior weights",
    suspects=LAYERS,
    shown_by=("plate-layers-across", "plate-two-layers-wave"),
)
def evenly_spaced_stencil(grid: Grid, tensor: Array) -> sp.csr_array:
    """Take the mean spacing along every axis for all spacings."""
    even = tuple(np.linspace(axis[0], axis[-1], len(axis)) for axis in grid.axes)
    return box_stencil(replace(grid, axes=even), tensor)


@SEEDS.into(
    "stencil",
    "interior weight",
    "differences along y weighted 1.01 times: a mistyped constant in the formula",
    kind="interior weights",
    suspects=("dimension", "shape", "do not get smaller errors"),
    shown_by=(*FIXED, "plate-flux-top"),
)
def mistyped_stencil(grid: Grid, tensor: Array) -> sp.csr_array:
    """Stretch the conductivity along the last axis a little."""
    if grid.dim < 2 or tensor.ndim == 1:
        return box_stencil(grid, tensor)
    return box_stencil(grid, tensor * np.array([[1.0, 1.0], [1.0, 1.01]]))


# ---- conductivities ------------------------------------------------------------------------------


@SEEDS.into(
    "stencil",
    "arithmetic mean of conductivities",
    "arithmetic mean of K across interfaces where the harmonic one belongs; invisible elsewhere",
    kind="material average",
    suspects=LAYERS,
    shown_by=LAYERED,
)
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


@SEEDS.into(
    "stencil",
    "conductivity of the lower neighbour",
    "conductivity of a cell taken from its neighbour to the left and below: interfaces lie one cell off",
    kind="material average",
    suspects=LAYERS,
    shown_by=LAYERED,
)
def lagging_stencil(grid: Grid, tensor: Array) -> sp.csr_array:
    """Read K one cell too low along every axis (the first cells read their own)."""
    if tensor.ndim == 2:
        return box_stencil(grid, tensor)
    number = np.zeros([len(axis) - 1 for axis in grid.axes], dtype=np.int64)
    number[tuple(grid.index.T)] = np.arange(len(grid.index))
    return box_stencil(grid, tensor[number[tuple(np.maximum(grid.index - 1, 0).T)]])


@SEEDS.into(
    "stencil",
    "mixed derivative missing",
    "off-diagonal conductivities left out of the difference formula",
    kind="tensor",
    suspects=TENSOR,
    shown_by=OBLIQUE,
)
def diagonal_stencil(grid: Grid, tensor: Array) -> sp.csr_array:
    """Take the diagonal of K."""
    return box_stencil(grid, tensor if tensor.ndim == 1 else np.diag(np.diag(tensor)))


@SEEDS.into(
    "stencil",
    "mixed derivative sign",
    "the four-corner difference enters with the wrong sign",
    kind="tensor",
    suspects=TENSOR,
    shown_by=OBLIQUE,
)
def mirrored_stencil(grid: Grid, tensor: Array) -> sp.csr_array:
    """Change the sign of K_xy."""
    return box_stencil(grid, tensor if tensor.ndim == 1 else 2.0 * np.diag(np.diag(tensor)) - tensor)


@SEEDS.into(
    "material",
    "tensor exchanged",
    "K_xx and K_yy exchanged when the tensor is read; invisible for equal ones",
    kind="exchanged axes",
    suspects=TENSOR,
    shown_by=("plate-tensor-diagonal", *OBLIQUE),
)
def exchanged_material(problem: Problem, grid: Grid) -> tuple[Array, dict[str, IntArray]]:
    """Read the tensor from its last row and column."""
    tensor, regions = cell_material(problem, grid)
    return (tensor if tensor.ndim == 1 else tensor[::-1, ::-1]), regions


@SEEDS.into(
    "corners",
    "corner rows missing",
    "corners between flux sides are not corrected for a mixed derivative: an error of h^2 log(1/h) there",
    kind="corner node",
    suspects=(),
    shown_by=("plate-tensor-oblique", "plate-tensor-oblique-fixed"),
    effect="harmless",
)
def no_corner_rows(grid: Grid, tensor: Array, patches: list[object]) -> sp.csr_array:
    """Add nothing in corners."""
    del tensor, patches
    return sp.csr_array((len(grid.points), len(grid.points)))


# ---- coordinates with a symmetry -----------------------------------------------------------------


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class _WrongFaces(Grid):
    """A grid with another area of the faces across r; along z it is right."""

    area: Callable[[Grid], Array]  # per plane area, in the middle of every cell

    def conducting(self, corner: int, axis: int) -> Array:
        """Return the wrong area times half the edge length along r."""
        if axis > 0 or self.coordinates == "cartesian":
            return Grid.conducting(self, corner, axis)
        plane: Array = np.prod(self.widths, axis=1) / 2**self.dim
        return plane * self.area(self)


def wrong_faces(grid: Grid, tensor: Array, area: Callable[[Grid], Array]) -> sp.csr_array:
    """Write the balance with another area of the faces across r."""
    values = {f.name: getattr(grid, f.name) for f in fields(grid)}
    return box_stencil(_WrongFaces(**values, area=area), tensor)


def stretch(grid: Grid, r: Array) -> Array:
    """Return 2 pi r or 4 pi r^2."""
    return metric(grid.coordinates, r[:, np.newaxis])


def outer_area(grid: Grid) -> Array:
    """Take the area at the outer node."""
    return stretch(grid, grid.radii(1))


def plane_area(grid: Grid) -> Array:
    """Take an area that does not grow with r, as on a plane wall at the mean radius."""
    return np.full(len(grid.corners), float(np.mean(stretch(grid, (grid.radii(0) + grid.radii(1)) / 2.0))))


def doubled_area(grid: Grid) -> Array:
    """Multiply by r once more."""
    middle = (grid.radii(0) + grid.radii(1)) / 2.0
    return stretch(grid, middle) * middle


def reciprocal_area(grid: Grid) -> Array:
    """Divide by r^2 where r^2 belongs (by r where r does)."""
    middle = (grid.radii(0) + grid.radii(1)) / 2.0
    return 1.0 / np.maximum(stretch(grid, middle), 1e-30)


SEEDS.into(
    "stencil",
    "radius of the outer node",
    "the metric factor of the flux along r taken at the outer node, not at the face; invisible in Cartesian "
    "coordinates",
    kind="curvilinear factor",
    suspects=SYMMETRY,
    shown_by=("pillar-section", *PIPES, "tank-wall-two-temperatures"),
)(partial(wrong_faces, area=outer_area))

SEEDS.into(
    "stencil",
    "metric factor missing",
    "u_rr without u_r / r: faces across r do not grow with r; invisible in Cartesian coordinates",
    kind="curvilinear factor",
    suspects=SYMMETRY,
    shown_by=(*PIPES, *SHELLS),
)(partial(wrong_faces, area=plane_area))

SEEDS.into(
    "stencil",
    "metric factor doubled",
    "faces across r multiplied by r once more; invisible in Cartesian coordinates",
    kind="curvilinear factor",
    suspects=SYMMETRY,
    shown_by=("pillar-section", *PIPES, *SHELLS),
)(partial(wrong_faces, area=doubled_area))

SEEDS.into(
    "stencil",
    "reciprocal metric factor",
    "1/r^2 for r^2 in shells and 1/r for r in rings; invisible in Cartesian coordinates",
    kind="curvilinear factor",
    suspects=SYMMETRY,
    shown_by=(*PIPES, *SHELLS),
)(partial(wrong_faces, area=reciprocal_area))
