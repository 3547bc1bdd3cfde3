"""Second order in corners where two derivative conditions meet and the conductivity has a mixed term.

The balance of the quarter cell in a corner at (0, 0), cells of hx x hy to the upper right, replaces the mixed
term at its face centres (hx/2, hy/4) and (hx/4, hy/2) by differences centred at (hx/2, hy/2), while data and
direct terms are taken on the sides. Taylor expansion leaves

    balance - load = -K_xy / 4 (hx^2 u_xx + hy^2 u_yy) + O(h^3),

an error of h^2 log(1/h) at the corner itself. Second differences along the two sides take it away. At a
re-entrant corner the missing quarter counts with the opposite sign. Derived here.
"""

from __future__ import annotations

from itertools import combinations

import numpy as np
import scipy.sparse as sp

from laplace_verify.arrays import Array, IntArray
from laplace_verify.solvers.samples.rectilinear import Grid, Patch

__all__ = ["corner_rows"]


def corner_rows(grid: Grid, tensor: Array, patches: list[Patch]) -> sp.csr_array:
    """Return what to add to the balance where two of the given patches (2-D) meet in a corner."""
    count = len(grid.points)
    rows, columns, entries = [], [], []
    for first, second in combinations(patches, 2):
        if first.axis == second.axis or tensor[0, 1] == 0.0:
            continue
        on_first, on_second = grid.shares(first)[0], grid.shares(second)[0]
        for corner in np.intersect1d(on_first, on_second):
            strength = 0.25 * tensor[0, 1] * (1.0 if np.count_nonzero(grid.corners == corner) == 1 else -1.0)
            steps = [steps_along(grid, nodes, corner) for nodes in (on_first, on_second)]
            if min(map(len, steps)) < 3:
                continue  # too coarse for a second difference
            for step in steps:
                strength *= np.sign(np.sum(grid.points[step[1]] - grid.points[corner]))
            for step in steps:
                rows += [corner] * 3
                columns += step.tolist()
                entries += (strength * second_difference(grid.points[step])).tolist()
    return sp.csr_array((entries, (rows, columns)), shape=(count, count))


def steps_along(grid: Grid, nodes: IntArray, corner: int) -> IntArray:
    """Return the corner and the two nodes next to it on a patch."""
    distance = np.linalg.norm(grid.points[nodes] - grid.points[corner], axis=1)
    nearest: IntArray = nodes[np.argsort(distance)[:3]]
    return nearest


def second_difference(points: Array) -> Array:
    """Return weights at three points in a row that give h^2 u'', h the first distance."""
    near, far = np.linalg.norm(np.diff(points, axis=0), axis=1)
    scale = 2.0 * near**2 / (near + far)
    weights: Array = scale * np.array([1.0 / near, -1.0 / near - 1.0 / far, 1.0 / far])
    return weights
