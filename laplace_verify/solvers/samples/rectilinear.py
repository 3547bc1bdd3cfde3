"""Rectilinear grids in one, two and three dimensions, and the balance of fluxes on them.

Every node owns the nearest half (quarter, eighth) of each cell it belongs to. At corner k of a cell the
gradient is taken from the cell's own edges that meet there, G_k u, and the discrete energy is

    E(u) = 1/2 sum_cells sum_corners |cell| / 2^d  (G_k u)' K (G_k u).

Its derivative is the balance of fluxes over the boxes owned by the nodes. For a scalar K this is the three-,
five- or seven-point formula inside and the balance of half cells (quarter cells in corners) on the boundary;
a mixed derivative adds the four-corner difference (u_NE - u_NW - u_SE + u_SW) / (4 hx hy). The matrix is
symmetric and semi-definite for every symmetric positive definite K.

In coordinates (r, z) or r (`problems.coordinates`) every box is a ring or shell, with its exact volume, the
integral of c r^p over its part of a cell, and exact faces: c r_m^p at the middle r_m of the cell for the flux
along r, the volume's share for the flux along z (c r^p = 2 pi r or 4 pi r^2). For K = diag(K_r, K_z) the
balance is exact but for the differences along edges, hence of second order up to the axis, where the face has
no area.

References
----------
R. S. Varga, Matrix Iterative Analysis, 1962, section 6.3 (box integration; from memory,
unchecked). The form by cell corners is derived here.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
import scipy.sparse as sp

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.geometry import Boundary, Shape
from laplace_verify.geometry.meshes import subdivide
from laplace_verify.problems.coordinates import Coordinates, metric

__all__ = ["Grid", "Patch", "axis_balances", "cells_along", "grid_on"]

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
    coordinates: Coordinates = "cartesian"

    @property
    def dim(self) -> int:
        """The dimension d."""
        return len(self.axes)

    @property
    def widths(self) -> Array:
        """Edge lengths of the cells, shape (cells, d)."""
        return np.stack([np.diff(axis)[self.index[:, a]] for a, axis in enumerate(self.axes)], axis=1)

    def owned(self, corner: int) -> Array:
        """Return the volume that the node in a corner of each cell owns of it, shape (cells,)."""
        volumes: Array = np.prod(self.widths, axis=1) / 2**self.dim
        if self.coordinates == "cartesian":
            return volumes
        low, high = self.radii(0), self.radii(1)
        near, middle = (high if corner & 1 else low), (low + high) / 2.0
        # the mean of c r^p over the half cell: Simpson's rule is exact for p <= 2
        ends = self._stretch(near) + self._stretch(middle) + 4.0 * self._stretch((near + middle) / 2.0)
        return volumes * ends / 6.0

    def conducting(self, corner: int, axis: int) -> Array:
        """Return face area times half the edge length, for the flux along an axis through a corner's box."""
        if axis > 0 or self.coordinates == "cartesian":
            return self.owned(corner)
        plane: Array = np.prod(self.widths, axis=1) / 2**self.dim
        return plane * self._stretch((self.radii(0) + self.radii(1)) / 2.0)

    def radii(self, side: int) -> Array:
        """Return the first coordinate at the low (0) or high (1) end of each cell, shape (cells,)."""
        ends: Array = self.axes[0][self.index[:, 0] + side]
        return ends

    def _stretch(self, r: Array) -> Array:
        """Return 1, 2 pi r or 4 pi r^2."""
        return metric(self.coordinates, r[:, np.newaxis])

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
        owned = np.stack([self.owned(corner) for corner in range(2**self.dim)], axis=1).ravel()
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
        areas = np.stack([self.face(patch, corner) for corner in columns], axis=1)
        nodes = self.corners[patch.cells][:, columns]
        area = np.bincount(nodes.ravel(), areas.ravel(), len(self.points)).astype(np.float64)
        found = np.unique(nodes)
        return found, area[found]

    def face(self, patch: Patch, corner: int) -> Array:
        """Return the area that a corner of each of a patch's cells owns of its face, shape (cells,)."""
        if patch.axis == 0 and self.coordinates != "cartesian":
            across = np.delete(self.widths[patch.cells], 0, axis=1)
            plane: Array = np.prod(across, axis=1) / 2 ** (self.dim - 1)
            return plane * self._stretch(self.radii(patch.side)[patch.cells])
        areas: Array = self.owned(corner)[patch.cells] / (self.widths[patch.cells, patch.axis] / 2.0)
        return areas

    def centres(self) -> Array:
        """Return the middle of every cell, shape (cells, d)."""
        middles: Array = self.points[self.corners].mean(axis=1)
        return middles

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


def grid_on(
    shape: Shape,
    n: int,
    lines: Sequence[Sequence[float]] = (),
    coordinates: Coordinates = "cartesian",
) -> Grid:
    """Return the grid with n cells along every side; ends of boundary pieces lie on grid lines.

    An L-shape is three squares of n x n cells each, a cube without an octant seven cubes, see `cells_along`.
    `lines` are further grid lines wanted, for each axis.
    """
    ends = np.concatenate([*shape.bounding_box, *(piece.ends.ravel() for piece in shape.pieces)])
    ends = ends.reshape(-1, shape.dim)
    count, wanted = cells_along(shape, n), lines or [()] * shape.dim
    inner = [[0.0] if shape.dim == 3 and count[a] > n else [] for a in range(shape.dim)]  # where a notch ends
    axes = tuple(subdivide([*ends[:, a], *wanted[a], *inner[a]], count[a]) for a in range(shape.dim))
    middles = np.meshgrid(*((axis[1:] + axis[:-1]) / 2 for axis in axes), indexing="ij")
    inside = shape.contains(np.stack([middle.ravel() for middle in middles], axis=1))
    index = np.stack(np.unravel_index(np.flatnonzero(inside), middles[0].shape), axis=1)
    return _with_nodes(axes, index, coordinates)


def cells_along(shape: Shape, n: int) -> list[int]:
    """Return the cells along every axis: 2 n where the shape has a notch from its middle on, else n.

    >>> from laplace_verify.geometry import LShape, Prism
    >>> cells_along(Prism(LShape(1.0), 0.0, 1.0), 8)
    [16, 16, 8]
    """
    notched = {"l-shape": 2, "prism-l-shape": 2, "notched-cube": 3}
    axes = max((count for kind, count in notched.items() if shape.is_a(kind)), default=0)
    return [2 * n if axis < axes else n for axis in range(shape.dim)]


def _with_nodes(axes: tuple[Array, ...], index: IntArray, coordinates: Coordinates) -> Grid:
    """Return the grid of the given cells, with the nodes that belong to them."""
    dim, full = len(axes), tuple(len(axis) for axis in axes)
    bits = (np.arange(2**dim)[:, np.newaxis] >> np.arange(dim)) & 1
    flat = np.ravel_multi_index(tuple(np.moveaxis(index[:, np.newaxis] + bits, 2, 0)), full)
    used, corners = np.unique(flat, return_inverse=True)
    place = np.stack(np.unravel_index(used, full), axis=1)
    points = np.stack([axis[place[:, a]] for a, axis in enumerate(axes)], axis=1)
    corners = corners.reshape(flat.shape)
    return Grid(axes=axes, points=points, place=place, corners=corners, index=index, coordinates=coordinates)


def corners_on(dim: int, axis: int, side: int) -> list[int]:
    """Return the corners of a cell that lie on one of its faces.

    >>> corners_on(2, axis=0, side=1)
    [1, 3]
    """
    return [corner for corner in range(2**dim) if (corner >> axis) & 1 == side]


def axis_balances(grid: Grid, tensor: Array) -> list[sp.csr_array]:
    """Return for each axis a matrix: what must enter the box of every node from outside, along that axis.

    `tensor` is K as a matrix (d, d), or a number for every cell: then the flux along an edge is that of the
    cells around it side by side, and through two cells in a row that of one after the other.

    Their sum, the stencil A, is the derivative of the discrete energy: A u is zero at inner nodes and the
    integral of n . K grad u over the owned part of the boundary at the others.
    """
    count = len(grid.points)
    balances = [sp.csr_array((count, count)) for _ in range(grid.dim)]
    for corner in range(2**grid.dim):
        gradient = grid.gradients(corner)
        weights = [sp.diags_array(grid.conducting(corner, axis)) for axis in range(grid.dim)]
        if tensor.ndim == 1:
            by_cell = sp.diags_array(tensor)
            balances = [
                balance + g.T @ (by_cell @ weight) @ g
                for balance, g, weight in zip(balances, gradient, weights, strict=True)
            ]
            continue
        for a, b in zip(*np.nonzero(tensor), strict=True):
            balances[a] = balances[a] + gradient[a].T @ (weights[a] * tensor[a, b]) @ gradient[b]
    return balances
