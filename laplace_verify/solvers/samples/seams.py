"""Periodic sides on a grid: the nodes of two facing sides are one row of unknowns, the seam.

A node on one side and the node that faces it own half a box each; joined they own a whole one, whose balance
is the sum of both. With P the matrix that gives every node the value of its master, the system

    P' A P u = P' b

is that sum: rows of copies are added to those of their masters, columns are moved there.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import TYPE_CHECKING

import numpy as np
import scipy.sparse as sp

from laplace_verify.arrays import IntArray

if TYPE_CHECKING:
    from laplace_verify.solvers.samples.finite_difference import Side

__all__ = ["facing_nodes", "masters", "spread"]


def facing_nodes(side: Side, partner: Side) -> tuple[IntArray, IntArray]:
    """Return the nodes of a side and, in the same order, those that face them on its partner."""
    rows = []
    for one in (side, partner):
        nodes, _ = one.grid.shares(one.patch)
        along = np.delete(one.grid.place[nodes], one.patch.axis, axis=1)
        rows.append(nodes[np.lexsort(along.T)] if along.size else nodes)
    return rows[0], rows[1]


def masters(
    sides: Sequence[Side], facing: Callable[[Side, Side], tuple[IntArray, IntArray]], count: int
) -> IntArray:
    """Return the master of every node: itself but on the later side of each pair of periodic sides."""
    master = np.arange(count)
    done: set[str] = set()
    for side in sides:
        if side.piece.partner is None or side.name in done:
            continue
        partner = next(other for other in sides if other.name == side.piece.partner)
        done |= {side.name, partner.name}
        kept, copies = facing(side, partner)
        master[copies] = kept
    while (master[master] != master).any():  # along an edge where two seams cross
        master = master[master]
    return master


def spread(master: IntArray) -> sp.csr_array:
    """Return P (nodes, nodes): the value of every node from those of the masters."""
    count = len(master)
    return sp.csr_array((np.ones(count), (np.arange(count), master)), shape=(count, count))
