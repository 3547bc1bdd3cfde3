"""Find the cell that holds a point, and the point's reference coordinates in it.

A uniform grid of bins over the mesh lists, bin by bin, the cells whose bounding box touches it; a point's
candidates are the cells of its bin whose box holds the point. The map x(xi) = x is inverted for all
candidates at once: one linear solve for affine cells, Newton's method from the centre of the reference cell
for the others. Points in no cell get the number -1.

References
----------
Derived here.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from laplace_verify.arrays import Array, IntArray
from laplace_verify.solvers.cells import CellBlock, CellMesh, inverse

__all__ = ["Locator"]

TOLERANCE = 1e-8  # reference coordinates: points on the rim of the mesh, moved by rounding, still count
NEWTON_STEPS = 30
CONVERGED = 1e-11  # last Newton step in reference coordinates; the error after it is its square
PAIRS = 500_000  # candidate pairs handled at once


class Locator:
    """Search structure over a `CellMesh`; build once, ask often."""

    __slots__ = ("bin_size", "blocks", "cells", "counts", "first", "low", "lower", "mesh", "upper")

    def __init__(self, mesh: CellMesh) -> None:
        self.mesh = mesh
        self.blocks = mesh.blocks
        boxes = [block.boxes() for block in mesh.blocks]
        self.lower = np.concatenate([low for low, _ in boxes])
        self.upper = np.concatenate([high for _, high in boxes])
        slack = TOLERANCE * (self.upper - self.lower).max(axis=1, keepdims=True)
        self.lower, self.upper = self.lower - slack, self.upper + slack
        self.low = self.lower.min(axis=0)
        extent = self.upper.max(axis=0) - self.low
        # As many bins as cells, so that a typical bin lists a handful of cells.
        per_axis = max(1, int(np.ceil(mesh.count ** (1 / mesh.dim))))
        self.counts = np.full(mesh.dim, per_axis, dtype=np.int64)
        self.bin_size = extent / self.counts
        self._register()

    def _register(self) -> None:
        """List the cells of every bin (compressed rows: `first` and `cells`)."""
        low, high = self._bins(self.lower), self._bins(self.upper)
        spans = high - low + 1
        totals = spans.prod(axis=1)
        owner = np.repeat(np.arange(self.mesh.count), totals)
        local = np.arange(len(owner)) - np.repeat(np.cumsum(totals) - totals, totals)
        flat = np.zeros(len(owner), dtype=np.int64)
        for axis in range(self.mesh.dim):
            span = spans[owner, axis]
            flat = flat * self.counts[axis] + low[owner, axis] + local % span
            local = local // span
        order = np.argsort(flat, kind="stable")
        self.cells = owner[order]
        self.first = np.searchsorted(flat[order], np.arange(int(self.counts.prod()) + 1))

    def _bins(self, points: Array) -> IntArray:
        """Return the bin numbers per axis, clipped to the grid."""
        index = np.clip(np.floor((points - self.low) / self.bin_size), 0, self.counts - 1)
        whole: IntArray = index.astype(np.int64)
        return whole

    def find(self, points: Array) -> tuple[IntArray, Array]:
        """Return cell numbers (n,), -1 where no cell holds the point, and reference coordinates (n, d)."""
        cells = np.full(len(points), -1, dtype=np.int64)
        at = np.full(points.shape, np.nan)
        worst = np.full(len(points), np.inf)
        for who, candidates in self._candidates(points):
            where, outside = self._invert(candidates, points[who])
            keep = outside <= TOLERANCE
            who, candidates, where, outside = who[keep], candidates[keep], where[keep], outside[keep]
            # The cell that holds the point most safely; ties go to the lower number.
            order = np.lexsort((candidates, outside, who))
            best = order[np.unique(who[order], return_index=True)[1]]
            chosen = who[best]
            better = outside[best] < worst[chosen]
            best, chosen = best[better], chosen[better]
            cells[chosen], at[chosen], worst[chosen] = candidates[best], where[best], outside[best]
        return cells, at

    def _candidates(self, points: Array) -> Iterator[tuple[IntArray, IntArray]]:
        """Yield (row of point, number of cell) for the boxes that hold the points, in portions."""
        index = self._bins(points)
        flat = np.zeros(len(points), dtype=np.int64)
        for axis in range(self.mesh.dim):
            flat = flat * self.counts[axis] + index[:, axis]
        start, stop = self.first[flat], self.first[flat + 1]
        ends = np.cumsum(stop - start)
        row = 0
        while row < len(points):
            before = ends[row - 1] if row else 0
            last = max(row + 1, int(np.searchsorted(ends, before + PAIRS, side="right")))
            rows = np.arange(row, last)
            totals = stop[rows] - start[rows]
            who = np.repeat(rows, totals)
            offset = np.arange(len(who)) - np.repeat(np.cumsum(totals) - totals, totals)
            cells = self.cells[start[who] + offset]
            inside = ((points[who] >= self.lower[cells]) & (points[who] <= self.upper[cells])).all(axis=1)
            yield who[inside], cells[inside]
            row = last

    def _invert(self, cells: IntArray, points: Array) -> tuple[Array, Array]:
        """Return reference coordinates of points in given cells, and how far outside each lies."""
        at = np.full(points.shape, np.nan)
        outside = np.full(len(points), np.inf)
        for block in self.blocks:
            mine = np.flatnonzero((cells >= block.first) & (cells < block.first + len(block.nodes)))
            if len(mine):
                part = block.pick(cells[mine] - block.first)
                at[mine], outside[mine] = _newton(part, points[mine])
        return at, outside


def _newton(block: CellBlock, points: Array) -> tuple[Array, Array]:
    """Solve x(xi) = point, one point per cell of the block; outside = inf where the iteration fails."""
    kind = block.element
    centre = kind.nodes[: kind.corners].mean(axis=0)
    at = np.tile(centre, (len(points), 1))
    extent = np.ptp(block.corners, axis=1).max(axis=1)
    # Coordinates far from the origin carry a rounding error that no iteration can undercut.
    rounding = 16 * np.finfo(np.float64).eps * np.abs(points).max(axis=1) / extent
    active = np.arange(len(points))
    done = np.zeros(len(points), dtype=bool)
    for _ in range(NEWTON_STEPS):
        part = block.pick(active)
        here = at[active][:, np.newaxis]
        residual = points[active] - part.points(here)[:, 0]
        step = np.einsum("nij,nj->ni", inverse(part.jacobian(here))[:, 0], residual)
        step[~np.isfinite(step).all(axis=1)] = 0.0
        moved = at[active] + step
        if not kind.affine:
            # Points of a cell stay within 1 of its centre; the clip keeps the others from running away.
            moved = np.clip(moved, centre - 2, centre + 2)
        at[active] = moved
        small = np.abs(step).max(axis=1) <= CONVERGED + rounding[active]
        done[active] = small | kind.affine
        active = active[~done[active]]
        if not len(active):
            break
    outside = kind.outside(at)
    # A zero step at a singular point is no solution: the image must meet the point.
    miss = np.abs(points - block.points(at[:, np.newaxis])[:, 0]).max(axis=1)
    outside[~(done & (miss <= (1e-9 + rounding) * extent))] = np.inf
    return at, outside
