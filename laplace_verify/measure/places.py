"""Where the error of one level sits: the largest near every piece and corner, and a map of signed errors.

"Near" means within two mesh widths; "interior" is what is further from every piece.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.measure.results import ErrorMap

if TYPE_CHECKING:
    from laplace_verify.geometry import Shape

__all__ = ["error_map", "local_errors"]

MAPPED = 4000
LOCATED = 20000
WIDTHS = 2.0


def local_errors(
    shape: Shape, points: Array, signed: Array, h: float, generator: np.random.Generator
) -> dict[str, float | None]:
    """Return place -> max |e| there, None where no point lies, from at most 20000 of the points."""
    chosen = _chosen(len(points), LOCATED, generator)
    points, size = points[chosen], np.abs(signed[chosen])
    found: dict[str, float | None] = {}
    inside = np.ones(len(points), dtype=bool)
    for piece in shape.pieces:
        near = _distance(points, piece.project(points)) <= WIDTHS * h
        inside &= ~near
        found[piece.name] = _largest(size[near])
    if shape.dim == 2:
        for junction in shape.junctions:
            near = _distance(points, junction.points[:1]) <= WIDTHS * h
            found[f"corner {'/'.join(junction.pieces)}"] = _largest(size[near])
    found["interior"] = _largest(size[inside])
    return found


def error_map(size: int, points: Array, signed: Array, generator: np.random.Generator) -> ErrorMap:
    """Return at most 4000 of the points with their signed errors; the largest error is among them."""
    chosen = _chosen(len(points), MAPPED, generator)
    worst = int(np.argmax(np.abs(signed)))
    if worst not in chosen:
        chosen[-1] = worst
    return ErrorMap(size=size, points=points[chosen].tolist(), errors=signed[chosen].tolist())


def _chosen(
    count: int, most: int, generator: np.random.Generator
) -> np.ndarray[tuple[int], np.dtype[np.int64]]:
    """Return up to `most` of range(count), in order."""
    if count <= most:
        return np.arange(count)
    return np.sort(generator.choice(count, most, replace=False))


def _distance(points: Array, others: Array) -> Array:
    """Return the distances (n,) of points to others, row by row."""
    distances: Array = np.sqrt(((points - others) ** 2).sum(axis=1))
    return distances


def _largest(size: Array) -> float | None:
    """Return the maximum, None of nothing."""
    return float(np.max(size)) if len(size) else None
