"""Second order in corners and along edges where two derivative conditions meet under a mixed conductivity.

In a corner at (0, 0), cells of hx x hy to the upper right, the balance of the quarter cell takes the mixed
term of its inner faces at (hx/2, hy/2), while data and direct terms are taken on the sides. Taylor expansion
leaves

    balance - load = -K_xy / 4 (hx^2 u_xx + hy^2 u_yy) + O(h^3),

an error of h^2 log(1/h) at the corner itself. Second differences along the two sides take it away. At a
re-entrant corner the missing quarter counts with the opposite sign; along an edge of a box the same holds per
length. Derived here.
"""

from __future__ import annotations

from itertools import combinations

import numpy as np
import scipy.sparse as sp

from laplace_verify.arrays import Array, IntArray
from laplace_verify.solvers.samples.rectilinear import Grid, Patch

__all__ = ["corner_rows"]


def corner_rows(grid: Grid, tensor: Array, patches: list[Patch]) -> sp.csr_array:
    """Return what to add to the balance where two of the given patches meet."""
    count = len(grid.points)
    total = sp.csr_array((count, count))
    for first, second in combinations(patches, 2):
        if first.axis == second.axis or tensor[first.axis, second.axis] == 0.0:
            continue
        nodes = np.intersect1d(grid.shares(first)[0], grid.shares(second)[0])
        steps = [steps_along(grid, first, second.axis, nodes), steps_along(grid, second, first.axis, nodes)]
        reached = np.all([(step >= 0).all(axis=1) for step in steps], axis=0)  # else too coarse
        nodes, steps = nodes[reached], [step[reached] for step in steps]
        strength = (
            0.25 * tensor[first.axis, second.axis] * owned_length(grid, first, second.axis, nodes, steps[0])
        )
        strength *= np.where(cells_around(grid, nodes) > 2 ** (grid.dim - 2), -1.0, 1.0)
        for step, axis in zip(steps, (second.axis, first.axis), strict=True):
            strength *= np.sign(grid.points[step[:, 1], axis] - grid.points[nodes, axis])
        for step in steps:
            entries = strength[:, np.newaxis] * second_difference(grid.points[step])
            where = (np.repeat(nodes, 3), step.ravel())
            total = total + sp.csr_array((entries.ravel(), where), shape=(count, count))
    return total


def steps_along(grid: Grid, patch: Patch, axis: int, nodes: IntArray) -> IntArray:
    """Return, for nodes at the end of a patch, themselves and the next two on it along an axis (-1: none)."""
    number = np.full([len(line) + 4 for line in grid.axes], -1)
    on_patch = grid.shares(patch)[0]
    number[tuple((grid.place[on_patch] + 2).T)] = on_patch
    start = grid.place[nodes] + 2
    rows = []
    for sign in (1, -1):
        shift = sign * np.eye(grid.dim, dtype=np.int64)[axis]
        rows.append(np.stack([number[tuple((start + k * shift).T)] for k in range(3)], axis=1))
    forward, backward = rows
    return np.where((forward[:, 1] >= 0)[:, np.newaxis], forward, backward)


def owned_length(grid: Grid, patch: Patch, axis: int, nodes: IntArray, steps: IntArray) -> Array:
    """Return the length of edge each node owns (1 in the plane): its area of a patch over half a step."""
    found, areas = grid.shares(patch)
    near = np.abs(grid.points[steps[:, 1], axis] - grid.points[nodes, axis])
    length: Array = areas[np.searchsorted(found, nodes)] / (near / 2.0)
    return length


def cells_around(grid: Grid, nodes: IntArray) -> IntArray:
    """Return the number of cells that meet at each node."""
    return np.bincount(grid.corners.ravel(), minlength=len(grid.points))[nodes]


def second_difference(points: Array) -> Array:
    """Return weights (n, 3) at three points in a row (n, 3, d) that give h^2 u'', h the first distance."""
    near, far = np.moveaxis(np.linalg.norm(np.diff(points, axis=1), axis=2), 1, 0)
    scale = 2.0 * near**2 / (near + far)
    weights: Array = scale[:, np.newaxis] * np.stack([1.0 / near, -1.0 / near - 1.0 / far, 1.0 / far], axis=1)
    return weights
