"""A mesh of Lagrange cells: geometry, quadrature, random points, and the values of a nodal function on it.

A cell is the image of its reference cell under x(xi) = sum_i phi_i(xi) x_i (isoparametric), and a nodal
function is u(xi) = sum_i phi_i(xi) u_i, so that grad u = J^-T grad_xi u with J = dx/dxi. The measure of a
cell is the integral of |det J|; a cell in which det J changes sign or vanishes is folded and is refused.
Cells that run clockwise throughout are as good as the others.

References
----------
Derived here from the chain rule; see also Zienkiewicz & Taylor, The Finite Element Method, on isoparametric
elements (from memory, unchecked).
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import BLOCK, Array, IntArray, blocks
from laplace_verify.errors import AnswerError
from laplace_verify.solvers.elements import ELEMENTS, Element, element

__all__ = ["CellBlock", "CellMesh", "Samples", "connectivity"]

FOLDED = 1e-12  # of the product of a cell's extents: thinner than any mesh generator makes them


class Samples(NamedTuple):
    """Points inside cells with the answer there; `gradients` is None for piecewise constants."""

    points: Array  # (n, d)
    weights: Array  # (n,): quadrature weights; for random points the volume each one stands for
    values: Array  # (n,)
    gradients: Array | None  # (n, d)
    cells: IntArray  # (n,): number of the cell, in the order given


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class CellBlock:
    """All cells of one kind: `nodes` (m, k) indices, `corners` (m, k, d) coordinates, `first` cell number."""

    element: Element
    nodes: IntArray
    corners: Array
    first: int

    def points(self, at: Array) -> Array:
        """Return x at reference points (q, d), the same in every cell, or (m, q, d): shape (m, q, d)."""
        result: Array = self.element.shape(at) @ self.corners
        return result

    def jacobian(self, at: Array) -> Array:
        """Return J_ij = dx_i/dxi_j, shape (m, q, d, d), at reference points as in `points`."""
        return _contract(np.swapaxes(self.corners, 1, 2), self.element.shape_gradient(at))

    def values(self, at: Array, nodal: Array) -> Array:
        """Return u, shape (m, q), for nodal values (all nodes of the mesh,)."""
        result: Array = (self.element.shape(at) @ nodal[self.nodes][..., np.newaxis])[..., 0]
        return result

    def gradients(self, at: Array, nodal: Array, jacobian: Array | None = None) -> Array:
        """Return grad u = J^-T grad_xi u, shape (m, q, d)."""
        slopes = _contract(nodal[self.nodes][:, np.newaxis], self.element.shape_gradient(at))[:, :, 0]
        inverted = inverse(self.jacobian(at) if jacobian is None else jacobian)
        result: Array = np.einsum("mqi,mqij->mqj", slopes, inverted)
        return result

    def portions(self, points: int) -> Iterator[tuple[slice, CellBlock]]:
        """Yield the block in parts of so many cells that `points` in each stay in the processor's cache."""
        for part in blocks(len(self.nodes), max(1, BLOCK // points)):
            yield (
                part,
                CellBlock(
                    element=self.element,
                    nodes=self.nodes[part],
                    corners=self.corners[part],
                    first=self.first + part.start,
                ),
            )

    def pick(self, rows: IntArray) -> CellBlock:
        """Return a block of the chosen cells, one per entry of `rows` (cells may repeat)."""
        return CellBlock(
            element=self.element, nodes=self.nodes[rows], corners=self.corners[rows], first=self.first
        )

    def boxes(self) -> tuple[Array, Array]:
        """Return corners (m, d) of boxes that contain the cells, bulging edges included.

        The straight cell with the same corners lies in the box of its corners; the curved one differs by the
        sum of (node - its place in the straight cell) * phi, and |phi| <= 1 for every node that is no corner.
        """
        vertices = self.corners[:, : self.element.corners]
        low, high = vertices.min(axis=1), vertices.max(axis=1)
        if self.element.degree > 1:
            straight = _parent(self.element).shape(self.element.nodes) @ vertices
            bulge = np.abs(self.corners - straight).sum(axis=1)
            low, high = low - bulge, high + bulge
        return low, high


class CellMesh:
    """Cells of one or several kinds over shared nodes.

    Parameters
    ----------
    points : (n, d) nodes
    cells : meshio's names and (m, k) node numbers, as returned by `connectivity`

    Raises
    ------
    AnswerError
        If a cell is folded, degenerate, or of another dimension than the points.
    """

    __slots__ = ("blocks", "count", "dim", "nodes", "unused")

    def __init__(self, points: Array, cells: Mapping[str, IntArray]) -> None:
        self.dim = points.shape[1]
        self.nodes = points
        self.blocks: list[CellBlock] = []
        self.count = 0
        for name, nodes in cells.items():
            kind = element(name)
            if kind.dim != self.dim:
                raise AnswerError(
                    f"cells: {name!r} has dimension {kind.dim} but the points have {self.dim} coordinates; "
                    f"give "
                    "only the cells that fill the shape, not those of its boundary"
                )
            block = CellBlock(element=kind, nodes=nodes, corners=points[nodes], first=self.count)
            _refuse_folded(block)
            self.blocks.append(block)
            self.count += len(nodes)
        used = np.unique(np.concatenate([block.nodes.ravel() for block in self.blocks]))
        self.unused = len(points) - len(used)

    def volumes(self) -> Array:
        """Return the measure of every cell, shape (count,)."""
        parts = []
        for block in self.blocks:
            at, weights = block.element.quadrature(_jacobian_degree(block.element))
            parts += [np.abs(determinant(b.jacobian(at))) @ weights for _, b in block.portions(len(at))]
        return np.concatenate(parts)

    def centroids(self) -> Array:
        """Return the image of every reference cell's centre, shape (count, d)."""
        parts = []
        for block in self.blocks:
            centre = block.element.nodes[: block.element.corners].mean(axis=0, keepdims=True)
            parts.append(block.points(centre)[:, 0])
        return np.concatenate(parts)

    def quadrature(self, order: int, values: Array, *, per_cell: bool = False) -> Samples:
        """Integrate cell by cell: exact for degree `order` in the reference coordinates times det J.

        On affine cells that is degree `order` in x. `values` are nodal, or one per cell if `per_cell`.
        """
        parts = []
        for block in self.blocks:
            at, weights = block.element.quadrature(order + _jacobian_degree(block.element))
            parts += [_sample(b, at, weights, values, per_cell) for _, b in block.portions(len(at))]
        return _join(parts)

    def random(self, seed: int, count: int, values: Array, *, per_cell: bool = False) -> Samples:
        """Return `count` seeded random points in every cell, uniform in the reference cell."""
        generator = np.random.default_rng(seed)
        parts = []
        for block in self.blocks:
            at = block.element.random(generator, (len(block.nodes), count))
            weights = np.full(count, block.element.volume / count)
            parts += [_sample(b, at[part], weights, values, per_cell) for part, b in block.portions(count)]
        return _join(parts)


def connectivity(cells: object, count: int) -> dict[str, IntArray]:
    """Check the `cells` of an answer over `count` nodes and return them as int64 arrays.

    Raises
    ------
    AnswerError
        If `cells` is no mapping from meshio's names to (m, k) node numbers in range.
    """
    if not isinstance(cells, Mapping) or not cells:
        given = f"{type(cells).__name__}{'' if cells else ' (empty)'}"
        raise AnswerError(
            "cells must be a dict from meshio's cell names to node numbers, such as "
            f'{{"triangle": array of shape (m, 3)}}, got {given}'
        )
    return {str(name): _block_nodes(element(name), array, count) for name, array in cells.items()}


def _block_nodes(kind: Element, array: npt.ArrayLike, count: int) -> IntArray:
    """Check the node numbers of one kind of cell."""
    try:
        nodes = np.asarray(array)
    except ValueError as cause:
        raise AnswerError(
            f"cells[{kind.name!r}] must be a rectangular array of node numbers: {cause}"
        ) from cause
    k = len(kind.nodes)
    if nodes.dtype.kind not in "iu":
        raise AnswerError(f"cells[{kind.name!r}] must hold whole numbers (nodes), got {nodes.dtype}")
    if nodes.ndim != 2 or nodes.shape[1] != k or not len(nodes):
        turned = nodes.ndim == 2 and nodes.shape[0] == k
        mend = "; it looks transposed, pass its .T" if turned else ""
        raise AnswerError(
            f"cells[{kind.name!r}] must have shape (m, {k}), one row per cell, got {nodes.shape}{mend}"
        )
    low, high = int(nodes.min()), int(nodes.max())
    if low < 0 or high >= count:
        mend = "; they look counted from 1, subtract 1" if low >= 1 and high == count else ""
        raise AnswerError(
            f"cells[{kind.name!r}] must hold node numbers from 0 to {count - 1}, got {low} to {high}{mend}"
        )
    result = np.array(nodes, dtype=np.int64, order="C")
    result.flags.writeable = False
    return result


def _contract(nodal: Array, slopes: Array) -> Array:
    """Return sum_k nodal[m, i, k] slopes[(m,) q, k, j], shape (m, q, i, j).

    Not by matrix products: so small, they cost more in the library's threads than in arithmetic.
    """
    pattern = "mik,mqkj->mqij" if slopes.ndim == 4 else "mik,qkj->mqij"
    result: Array = np.einsum(pattern, nodal, slopes)
    return result


def determinant(jacobian: Array) -> Array:
    """Return det J for matrices (..., d, d), d = 1, 2, 3."""
    j = jacobian
    if j.shape[-1] == 1:
        return j[..., 0, 0]
    if j.shape[-1] == 2:
        planar: Array = j[..., 0, 0] * j[..., 1, 1] - j[..., 0, 1] * j[..., 1, 0]
        return planar
    result: Array = np.einsum("...i,...i->...", j[..., 0, :], _cross(j[..., 1, :], j[..., 2, :]))
    return result


def _cross(a: Array, b: Array) -> Array:
    """Return a x b along the last axis."""
    result = np.empty(np.broadcast_shapes(a.shape, b.shape))
    for i in range(3):
        k, m = (i + 1) % 3, (i + 2) % 3
        result[..., i] = a[..., k] * b[..., m] - a[..., m] * b[..., k]
    return result


def inverse(jacobian: Array) -> Array:
    """Return J^-1 for matrices (..., d, d), d = 1, 2, 3, by cofactors; singular ones give inf or NaN."""
    j = jacobian
    dim = j.shape[-1]
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        if dim == 1:
            return 1 / j
        det = determinant(j)
        adjugate = np.empty_like(j)
        if dim == 2:
            adjugate[..., 0, 0], adjugate[..., 1, 1] = j[..., 1, 1], j[..., 0, 0]
            adjugate[..., 0, 1], adjugate[..., 1, 0] = -j[..., 0, 1], -j[..., 1, 0]
        else:
            for i in range(3):
                adjugate[..., :, i] = _cross(j[..., (i + 1) % 3, :], j[..., (i + 2) % 3, :])
        result: Array = adjugate / det[..., np.newaxis, np.newaxis]
        return result


def _parent(kind: Element) -> Element:
    """Return the linear cell with the same corners."""
    name = {"line3": "line", "triangle6": "triangle", "tetra10": "tetra", "quad8": "quad", "quad9": "quad"}
    return ELEMENTS[name.get(kind.name, kind.name)]


def _jacobian_degree(kind: Element) -> int:
    """Return the degree of det J: total on simplices, per variable on cubes."""
    return kind.dim * (kind.degree - 1) if kind.simplex else kind.dim * kind.degree - 1


def _refuse_folded(block: CellBlock) -> None:
    """Raise AnswerError if det J changes sign in a cell or vanishes."""
    kind = block.element
    low, high = block.boxes()
    least = FOLDED * np.prod(high - low, axis=1)
    # At the nodes themselves det J may vanish: quarter-point cells at the tip of a crack are made so.
    smallest, largest = _extreme_determinants(block, kind.quadrature(2 * kind.degree)[0])
    smallest_at_nodes, largest_at_nodes = _extreme_determinants(block, kind.nodes)
    positive = (smallest > least) & (smallest_at_nodes >= -least)
    negative = (largest < -least) & (largest_at_nodes <= least)  # clockwise: as good as the other
    bad = ~(positive | negative)
    if bad.any():
        row = int(np.flatnonzero(bad)[0])
        nodes, places = block.nodes[row].tolist(), block.corners[row].tolist()
        raise AnswerError(
            f"cells[{kind.name!r}]: {int(bad.sum())} of {len(bad)} cells are folded or have no volume; "
            f"the first is row {row}, nodes {nodes} at {places}. List the nodes in meshio's order "
            "(round the cell, corners before edge nodes)"
        )


def _extreme_determinants(block: CellBlock, at: Array) -> tuple[Array, Array]:
    """Return the least and the largest det J of every cell at reference points (q, d)."""
    dets = [determinant(part.jacobian(at)) for _, part in block.portions(len(at))]
    return np.concatenate([d.min(axis=1) for d in dets]), np.concatenate([d.max(axis=1) for d in dets])


def _sample(block: CellBlock, at: Array, weights: Array, values: Array, per_cell: bool) -> Samples:
    """Evaluate one block at reference points."""
    points = block.points(at)
    jacobian = block.jacobian(at)
    volume = np.abs(determinant(jacobian)) * weights
    rows = np.arange(len(block.nodes)) + block.first
    numbers = np.repeat(rows, points.shape[1])
    flat = points.reshape(-1, points.shape[-1])
    if per_cell:
        return Samples(flat, volume.ravel(), values[numbers], None, numbers)
    gradients = block.gradients(at, values, jacobian).reshape(-1, points.shape[-1])
    return Samples(flat, volume.ravel(), block.values(at, values).ravel(), gradients, numbers)


def _join(parts: list[Samples]) -> Samples:
    """Concatenate the samples of several blocks."""
    if len(parts) == 1:
        return parts[0]
    slopes = [part.gradients for part in parts if part.gradients is not None]
    return Samples(
        np.concatenate([part.points for part in parts]),
        np.concatenate([part.weights for part in parts]),
        np.concatenate([part.values for part in parts]),
        np.concatenate(slopes) if slopes else None,
        np.concatenate([part.cells for part in parts]),
    )
