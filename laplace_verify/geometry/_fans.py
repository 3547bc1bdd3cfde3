"""Triangles in rings about a centre, for discs, ellipses, sectors and half-discs."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, IntArray

__all__ = ["Fan", "edges_of", "fan_of", "unit"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Fan:
    """Triangles about a centre: ring i carries wedges * i steps, of which each node is one."""

    ring: IntArray
    share: Array  # the part of the ring's angle behind each node, 0 to 1
    triangles: IntArray
    start: IntArray  # nodes on the first ray, outwards
    end: IntArray  # nodes on the last ray, inwards
    rim: IntArray  # nodes on the last ring, the first one repeated if closed


def fan_of(wedges: int, n: int, *, closed: bool) -> Fan:
    """Cut `wedges` triangles that share the centre into n * n each."""
    rings = np.arange(n + 1)
    counts = np.maximum(wedges * rings + (0 if closed else 1), 1)
    first = np.cumsum(counts) - counts

    def node(ring: int, step: npt.NDArray[np.int64]) -> IntArray:
        place: IntArray = first[ring] + (step % counts[ring] if closed else step)
        return place

    triangles = []
    for i in range(n):
        wedge, t = (
            index.ravel() for index in np.meshgrid(np.arange(wedges), np.arange(i + 1), indexing="ij")
        )
        inner, outer = wedge * i + t, wedge * (i + 1) + t
        triangles.append(np.stack([node(i, inner), node(i + 1, outer), node(i + 1, outer + 1)], axis=1))
        inner, outer = inner[t < i], outer[t < i]
        triangles.append(np.stack([node(i, inner), node(i + 1, outer + 1), node(i, inner + 1)], axis=1))
    ring = np.repeat(rings, counts)
    step = np.arange(len(ring)) - first[ring]
    return Fan(
        ring=ring,
        share=step / np.maximum(wedges * ring, 1),
        triangles=np.concatenate(triangles),
        start=first,
        end=(first + counts - 1)[::-1],
        rim=node(n, np.arange(wedges * n + 1)),
    )


def unit(angle: Array) -> Array:
    """Return the unit vectors (n, 2) at the given angles."""
    return np.stack([np.cos(angle), np.sin(angle)], axis=-1)


def edges_of(nodes: IntArray) -> IntArray:
    """Return the edges (k, 2) of a chain of nodes."""
    return np.stack([nodes[:-1], nodes[1:]], axis=1)
