"""Rectilinear grids in one, two and three dimensions, and the balance of fluxes on them.

Every node owns the nearest half (quarter, eighth) of each cell it belongs to. At corner k of a cell the
gradient is taken from the cell's own edges that meet there, G_k u, and the discrete energy is

    E(u) = 1/2 sum_cells sum_corners |cell| / 2^d  (G_k u)' K (G_k u).

Its derivative is the balance of fluxes over the boxes owned by the nodes. For a scalar K this is the three-,
five- or seven-point formula inside and the balance of half cells (quarter cells in corners) on the boundary;
a mixed derivative adds the four-corner difference (u_NE - u_NW - u_SE + u_SW) / (4 hx hy). The matrix is
symmetric and semi-definite for every symmetric positive definite K.

References ---------- R. S. Varga, Matrix Iterative Analysis, 1962, section 6.3 (box integration; from memory,
unchecked). The form by cell corners is derived here.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import scipy.sparse as sp

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.geometry import Boundary, Shape
from laplace_verify.geometry.meshes import subdivide

__all__ = ["Grid", "Patch", "axis_balances", "grid_on"]

MESH_FILE_ORDER = {
    1: ("line", [0, 1]),
    2: ("quad", [0, 1, 3, 2]),
    3: ("hexahedron", [0, 1, 3, 2, 4, 5, 7, 6]),
}


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Patch:
    """The cell faces on one flat piece of the boundary, at side 0 (low) or 1 (high) of an axis."""

    axis: int
    side: int
    cells: IntArray  # the cells whose faces lie on the piece


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Grid:
    """Nodes and cells of a rectilinear grid; only the cells inside the shape exist.

    Corner k of a cell lies at its high end along axis a if bit a of k is set, else at its low end.
    """

    axes: tuple[Array, ...]
    points: Array  # (nodes, d)
    place: IntArray  # (nodes, d) position of each node along the axes
    corners: IntArray  # (cells, 2^d) node numbers
    index: IntArray  # (cells, d) position of each cell along the axes

    @property
    def dim(self) -> int:
        """The dimension d."""
        return len(self.axes)

    @property
    def widths(self) -> Array:
        """Edge lengths of the cells, shape (cells, d)."""
        return np.stack([np.diff(axis)[self.index[:, a]] for a, axis in enumerate(self.axes)], axis=1)

    def gradients(self, corner: int) -> list[sp.csr_array]:
        """Return d matrices (cells, nodes): differences along the edges that meet in a corner of a cell."""
        rows = np.arange(len(self.corners))
        differences = []
        for axis in range(self.dim):
            low, high = corner & ~(1 << axis), corner | (1 << axis)
            slope = 1.0 / self.widths[:, axis]
            columns = np.concatenate([self.corners[:, high], self.corners[:, low]])
            where = (np.concatenate([rows, rows]), columns)
            entries = np.concatenate([slope, -slope])
            differences.append(sp.csr_array((entries, where), shape=(len(rows), len(self.points))))
        return differences

    def node_volumes(self) -> Array:
        """Return the measure of the box that every node owns, shape (nodes,)."""
        share = np.prod(self.widths, axis=1) / 2**self.dim
        owned = np.repeat(share, 2**self.dim)
        return np.bincount(self.corners.ravel(), owned, len(self.points)).astype(np.float64)

    def patch(self, piece: Boundary) -> Patch:
        """Return the cell faces that lie on `piece`."""
        patches = []
        for axis in range(self.dim):
            for side in (0, 1):
                cells = np.flatnonzero(self._exposed(axis, side))
                centres = self.points[self.corners[cells]].mean(axis=1)
                centres[:, axis] = self.axes[axis][self.index[cells, axis] + side]
                cells = cells[piece.contains(centres)]
                patches.append(Patch(axis=axis, side=side, cells=cells))
        return max(patches, key=lambda patch: len(patch.cells))

    def shares(self, patch: Patch) -> tuple[IntArray, Array]:
        """Return the nodes on a patch and the area of the patch that each of them owns."""
        columns = corners_on(self.dim, patch.axis, patch.side)
        across = np.delete(self.widths[patch.cells], patch.axis, axis=1)
        share = np.prod(across, axis=1) / len(columns)
        nodes = self.corners[patch.cells][:, columns]
        area = np.bincount(nodes.ravel(), np.repeat(share, len(columns)), len(self.points)).astype(np.float64)
        found = np.unique(nodes)
        return found, area[found]

    def cells_by_name(self) -> dict[str, IntArray]:
        """Return the cells in the corner order of mesh files (counter-clockwise, bottom before top)."""
        name, order = MESH_FILE_ORDER[self.dim]
        return {name: self.corners[:, order]}

    def _exposed(self, axis: int, side: int) -> BoolArray:
        """Tell which cells have no neighbour on the given side."""
        there = np.zeros(
            [len(axis) + 1 for axis in self.axes], np.bool_
        )  # with a layer of absent cells around
        there[tuple((self.index + 1).T)] = True
        neighbour = self.index + 1
        neighbour[:, axis] += 2 * side - 1
        alone: BoolArray = ~there[tuple(neighbour.T)]
        return alone


def grid_on(shape: Shape, n: int) -> Grid:
    """Return the grid with n cells along every side; ends of boundary pieces lie on grid lines.

    An L-shape is three squares of n x n cells each.
    """
    ends = np.concatenate([*shape.bounding_box, *(piece.ends.ravel() for piece in shape.pieces)])
    count = 2 * n if shape.is_a("l-shape") else n
    axes = tuple(subdivide(ends.reshape(-1, shape.dim)[:, a], count) for a in range(shape.dim))
    middles = np.meshgrid(*((axis[1:] + axis[:-1]) / 2 for axis in axes), indexing="ij")
    inside = shape.contains(np.stack([middle.ravel() for middle in middles], axis=1))
    index = np.stack(np.unravel_index(np.flatnonzero(inside), middles[0].shape), axis=1)
    return _with_nodes(axes, index)


def _with_nodes(axes: tuple[Array, ...], index: IntArray) -> Grid:
    """Return the grid of the given cells, with the nodes that belong to them."""
    dim, full = len(axes), tuple(len(axis) for axis in axes)
    bits = (np.arange(2**dim)[:, np.newaxis] >> np.arange(dim)) & 1
    flat = np.ravel_multi_index(tuple(np.moveaxis(index[:, np.newaxis] + bits, 2, 0)), full)
    used, corners = np.unique(flat, return_inverse=True)
    place = np.stack(np.unravel_index(used, full), axis=1)
    points = np.stack([axis[place[:, a]] for a, axis in enumerate(axes)], axis=1)
    return Grid(axes=axes, points=points, place=place, corners=corners.reshape(flat.shape), index=index)


def corners_on(dim: int, axis: int, side: int) -> list[int]:
    """Return the corners of a cell that lie on one of its faces.

    >>> corners_on(2, axis=0, side=1)
    [1, 3]
    """
    return [corner for corner in range(2**dim) if (corner >> axis) & 1 == side]


def axis_balances(grid: Grid, tensor: Array) -> list[sp.csr_array]:
    """Return for each axis a matrix: what must enter the box of every node from outside, along that axis.

    Their sum, the stencil A, is the derivative of the discrete energy: A u is zero at inner nodes and the
    integral of n . K grad u over the owned part of the boundary at the others.
    """
    count = len(grid.points)
    weight = sp.diags_array(np.prod(grid.widths, axis=1) / 2**grid.dim)
    balances = [sp.csr_array((count, count)) for _ in range(grid.dim)]
    for corner in range(2**grid.dim):
        gradient = grid.gradients(corner)
        for a, b in zip(*np.nonzero(tensor), strict=True):
            balances[a] = balances[a] + gradient[a].T @ (weight * tensor[a, b]) @ gradient[b]
    return balances
