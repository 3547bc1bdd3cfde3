"""What makes a list of vertices the boundary of a connected polygon.

Sides may meet only at common vertices. A side walked there and back is a slit and counts once. The walk
around a loop is a connected plane graph, so by Euler's formula it has ``E - V + 1`` bounded faces, V
different vertices and E different sides: exactly one if the inside hangs together (no pinch, no slit from
boundary to boundary).
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence

import numpy as np

from laplace_verify.arrays import Array, BoolArray, blocks
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.checks import ROUNDING, THINNEST

__all__ = ["check_holes", "check_loop", "enclosed", "signed_area"]

Loop = Sequence[tuple[float, float]]


def signed_area(loop: Loop) -> float:
    """Return the area inside a loop, positive if it runs counter-clockwise (shoelace formula).

    >>> signed_area([(0, 0), (1, 0), (1, 1)])
    0.5
    """
    array = np.array(loop)
    array = array - array[0]  # far from the origin the products would cancel
    x, y = array.T
    return float(np.sum(x * np.roll(y, -1) - np.roll(x, -1) * y) / 2.0)


def check_loop(loop: Loop, name: str, *, hole: bool = False) -> None:
    """Refuse sides of no length, sides that cross or touch, outward spikes, loops without area."""
    starts = np.array(loop)
    stops = np.roll(starts, -1, axis=0)
    extent = _extent(starts)
    short = np.flatnonzero(np.sqrt(((stops - starts) ** 2).sum(axis=1)) <= THINNEST * extent)
    if len(short):
        k = int(short[0])
        raise GeometryError(f"side {k + 1} of {name} has no length: it starts and stops at {loop[k]}")
    slits = _slit_sides(loop, name)
    found = _conflict(starts, stops, starts, stops, ROUNDING * extent)
    if found is not None:
        raise GeometryError(
            f"sides {found[0] + 1} and {found[1] + 1} of {name} cross or touch; a boundary may meet itself "
            "only in a slit, a side walked there and back between the same two vertices"
        )
    if not abs(signed_area(loop)) > THINNEST * extent**2:
        raise GeometryError(f"{name} enclose no area")
    sides = {frozenset((loop[k], loop[(k + 1) % len(loop)])) for k in range(len(loop))}
    if len(sides) != len(set(loop)):
        raise GeometryError(f"{name} enclose more than one region: a pinch, or a slit that cuts through")
    if len(slits):
        middles = (starts[slits] + stops[slits]) / 2.0
        if (enclosed(middles, starts) == hole).any():
            raise GeometryError(f"{name} have a spike outside the region: a slit must lie inside it")


def check_holes(outer: Loop, holes: Sequence[Loop]) -> None:
    """Refuse holes that are not inside the outer loop or that meet it or one another."""
    loops = [np.array(loop) for loop in (outer, *holes)]
    tol = ROUNDING * _extent(loops[0])
    for k, hole in enumerate(loops[1:], start=1):
        if not enclosed(hole[:1], loops[0])[0] or _meet(hole, loops[0], tol):
            raise GeometryError(f"hole {k} is not inside the outer boundary")
        for other in range(1, k):
            inside = enclosed(hole[:1], loops[other])[0] or enclosed(loops[other][:1], hole)[0]
            if inside or _meet(hole, loops[other], tol):
                raise GeometryError(f"holes {other} and {k} overlap or touch; make them one hole")


def _extent(points: Array) -> float:
    return float((points.max(axis=0) - points.min(axis=0)).max())


def _slit_sides(loop: Loop, name: str) -> list[int]:
    """Return the sides that are walked back too; refuse any walked twice in one direction."""
    directed = [(loop[k], loop[(k + 1) % len(loop)]) for k in range(len(loop))]
    count = Counter(directed)
    for k, side in enumerate(directed):
        if count[side] > 1:
            raise GeometryError(f"side {k + 1} of {name} is walked twice in the same direction")
    return [k for k, (a, b) in enumerate(directed) if (b, a) in count]


def _meet(first: Array, second: Array, tol: float) -> bool:
    """Whether any side of one loop touches one of another."""
    ends = np.roll(first, -1, axis=0), np.roll(second, -1, axis=0)
    corners = {tuple(p) for p in first.tolist()} & {tuple(p) for p in second.tolist()}
    return bool(corners) or _conflict(first, ends[0], second, ends[1], tol) is not None


def _conflict(a: Array, b: Array, c: Array, d: Array, tol: float) -> tuple[int, int] | None:
    """Return the first sides i (a to b) and j (c to d) that cross or touch other than at common ends."""
    for rows in blocks(len(a), max(1, 500_000 // len(c))):
        p, q = a[rows, None, :], b[rows, None, :]
        same = [(s == t).all(axis=2) for s in (p, q) for t in (c[None], d[None])]
        touching = _ends_on(p, c, d, tol) & ~(same[0] | same[1])
        touching |= _ends_on(q, c, d, tol) & ~(same[2] | same[3])
        touching |= _ends_on(c[None], p, q, tol) & ~(same[0] | same[2])
        touching |= _ends_on(d[None], p, q, tol) & ~(same[1] | same[3])
        crossing = (_side(p, q, c[None]) * _side(p, q, d[None]) < 0) & (
            _side(c[None], d[None], p) * _side(c[None], d[None], q) < 0
        )
        crossing &= ~(same[0] | same[1] | same[2] | same[3])
        hit = np.argwhere(touching | crossing)
        if len(hit):
            return int(hit[0, 0]) + rows.start, int(hit[0, 1])
    return None


def _ends_on(p: Array, a: Array, b: Array, tol: float) -> BoolArray:
    """Whether p lies within `tol` of the segment a-b (broadcast over all)."""
    along, offset = b - a, p - a
    t = np.clip((offset * along).sum(axis=-1) / (along**2).sum(axis=-1), 0.0, 1.0)
    near: BoolArray = ((offset - t[..., None] * along) ** 2).sum(axis=-1) <= tol**2
    return near


def _side(a: Array, b: Array, p: Array) -> Array:
    """Return the sign of the turn a -> b -> p."""
    u, v = b - a, p - a
    turn: Array = np.sign(u[..., 0] * v[..., 1] - u[..., 1] * v[..., 0])
    return turn


def enclosed(points: Array, starts: Array, stops: Array | None = None) -> BoolArray:
    """Return which points have an odd number of sides to their right; slits count twice and drop out."""
    if stops is None:
        stops = np.roll(starts, -1, axis=0)
    # both walks of a slit are evaluated from its lower end, so that round-off treats them alike
    swap = (stops[:, 1] < starts[:, 1])[:, None]
    low, high = np.where(swap, stops, starts), np.where(swap, starts, stops)
    x, y = points[:, :1], points[:, 1:]
    crossing = (low[:, 1] <= y) & (y < high[:, 1])
    rise = np.where(crossing, high[:, 1] - low[:, 1], 1.0)
    at = low[:, 0] + (y - low[:, 1]) / rise * (high[:, 0] - low[:, 0])
    odd: BoolArray = (crossing & (x < at)).sum(axis=1) % 2 == 1
    return odd
