"""Where the error of one level sits: the largest near every piece, corner and interface, and a map.

"Near" means within two mesh widths; "interior" is what is further from every piece and interface. The order
of these errors from level to level tells a mistake in a boundary closure, whose error is largest and falls
slowest next to its piece, from one in the equation inside.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.measure.results import ErrorMap

if TYPE_CHECKING:
    from laplace_verify.problems import Problem

__all__ = ["error_map", "local_errors"]

MAPPED = 1000  # enough to see where errors sit; a record holds a map for every study
DIGITS = 6  # of coordinates and errors in a map, which nothing is computed from but shades and shares
LOCATED = 20000
WIDTHS = 2.0


def local_errors(
    problem: Problem, points: Array, signed: Array, h: float, generator: np.random.Generator
) -> dict[str, float | None]:
    """Return place -> max |e| there, None where no point lies, from at most 20000 of the points.

    Places are the pieces by name (the axis of symmetry among them), in the plane "corner NAME/NAME",
    "interface NAME/NAME", and "interior".
    """
    shape = problem.shape
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
    for interface in problem.interfaces:
        near = _distance(points, interface.wall.project(points)) <= WIDTHS * h
        inside &= ~near
        found[f"interface {interface.name}"] = _largest(size[near])
    found["interior"] = _largest(size[inside])
    return found


def error_map(size: int, points: Array, signed: Array, generator: np.random.Generator) -> ErrorMap:
    """Return at most 1000 of the points with their signed errors, to six significant digits.

    The largest error is among them.
    """
    chosen = _chosen(len(points), MAPPED, generator)
    worst = int(np.argmax(np.abs(signed)))
    if worst not in chosen:
        chosen[-1] = worst
    return ErrorMap(
        size=size,
        points=[[_short(x) for x in point] for point in points[chosen].tolist()],
        errors=[_short(error) for error in signed[chosen].tolist()],
    )


def _short(value: float) -> float:
    """Return `value` to `DIGITS` significant digits."""
    return float(f"{value:.{DIGITS}g}")


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
