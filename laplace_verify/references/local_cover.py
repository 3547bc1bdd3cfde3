"""Sectors and discs that cover a polygon, inside of which a solution has rapidly convergent local sums.

A solution with polynomial data continues by reflection in a side. About an inner point or a point of a side
it is therefore analytic up to the nearest vertex; about a vertex up to the next one, and to the mirror images
of the vertex in the other sides, twice as far as those. With a reach of half that distance the terms of the
local sum fall like 2^-n. A sector about a vertex or a half-disc about a point of a side must lie in the
polygon, and so must a disc about an inner point.

The choice is greedy: the vertices first, then points of sides, then inner points of a grid, each time the one
that covers most of what is left.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.geometry import Polygon

__all__ = ["Spot", "clear", "cover", "opening", "vertex_reach"]

HALF = 0.5  # reach in units of the distance to the next singular point
ALONG = 48  # points of a side that must be covered
GRID = 64  # points of the longest extent of the polygon, on the grid that must be covered
LENS = 0.8  # part of the reach that counts on a side: neighbours then overlap in depth
SLACK = 1.0 + 1e-9

Exact2 = tuple[Fraction, Fraction]


@dataclass(frozen=True, slots=True, kw_only=True)
class Spot:
    """Apex and reach of a local sum, and the two sides that bound its sector; None if it is a disc.

    A walk about the region leaves the apex along the first side and comes in along the second.
    """

    apex: Exact2
    reach: Fraction
    sides: tuple[int, int] | None = None


def cover(vertices: tuple[Exact2, ...]) -> list[Spot]:
    """Return spots whose sectors and discs cover the polygon; every machine finds the same ones.

    >>> square = tuple((Fraction(x), Fraction(y)) for x, y in ((0, 0), (1, 0), (1, 1), (0, 1)))
    >>> spots = cover(square)
    >>> [float(spot.reach) for spot in spots[:4]], len(spots) < 20
    ([0.5, 0.5, 0.5, 0.5], True)
    """
    count = len(vertices)
    corners = np.array([[float(x), float(y)] for x, y in vertices])
    unit = Fraction(10) ** math.floor(math.log10(np.ptp(corners, axis=0).max()) - 4)
    spots = []
    for k in range(count):
        reach = vertex_reach(corners, k)
        spots.append(Spot(apex=vertices[k], reach=_rounded(reach, unit), sides=(k, (k - 1) % count)))
    for side in range(count):
        spots += _along(vertices, corners, side, unit, spots)
    return spots + _inside(corners, unit, spots)


def vertex_reach(corners: Array, k: int) -> float:
    """Return half the distance from a vertex to the next one, less if its sector would leave the polygon."""
    return min(HALF * float(_next_vertex(corners, corners[k : k + 1])[0]), clear(corners, k, corners[k]))


def _along(
    vertices: tuple[Exact2, ...], corners: Array, side: int, unit: Fraction, spots: list[Spot]
) -> list[Spot]:
    """Return half-discs that cover what the sectors at its ends leave of a side."""
    count = len(vertices)
    (a, b), (c, d) = vertices[side], vertices[(side + 1) % count]
    exact = [(a + (c - a) * i / ALONG, b + (d - b) * i / ALONG) for i in range(1, ALONG)]
    points = np.array([[float(x), float(y)] for x, y in exact])
    near = HALF * _next_vertex(corners, points)
    reaches = [_rounded(min(n, clear(corners, side, p)), unit) for n, p in zip(near, points, strict=True)]
    left = np.ones(len(points), dtype=bool)
    for end in (side, (side + 1) % count):
        left &= _distance(points, corners[end]) > LENS * float(spots[end].reach)
    found = []
    for k in _greedy(points, left, LENS * np.array([float(r) for r in reaches])):
        found.append(Spot(apex=exact[k], reach=reaches[k], sides=(side, side)))
    return found


def _inside(corners: Array, unit: Fraction, spots: list[Spot]) -> list[Spot]:
    """Return discs that cover what the sectors leave of the inside."""
    polygon = Polygon([tuple(corner) for corner in corners.tolist()])
    low, high = corners.min(axis=0), corners.max(axis=0)
    step = _rounded(float((high - low).max()) / GRID, unit)
    origin = [Fraction(math.floor(c / float(unit))) * unit for c in low]
    counts = [int((h - float(o)) / float(step)) + 1 for h, o in zip(high, origin, strict=True)]
    exact = [(origin[0] + i * step, origin[1] + j * step) for i in range(counts[0]) for j in range(counts[1])]
    points = np.array([[float(x), float(y)] for x, y in exact])
    depth = np.where(polygon.contains(points), polygon.distance(points), 0.0)
    reach = [_rounded(r, unit) for r in np.minimum(HALF * _next_vertex(corners, points), depth)]
    left = depth > float(step) / 2
    for spot in spots:
        if spot.sides is not None:
            left &= ~_within(corners, spot, spot.sides, points)
    sizes = np.array([float(r) for r in reach])
    return [Spot(apex=exact[k], reach=reach[k]) for k in _greedy(points, left, sizes)]


def _greedy(points: Array, left: BoolArray, reach: Array) -> list[int]:
    """Return numbers of points whose discs cover all that are left."""
    chosen = []
    rows = np.flatnonzero(left)
    mutual = [_distance(points[rows], points[k]) <= reach[k] for k in rows]
    covers = np.array(mutual).reshape(len(rows), len(rows))
    open_ = np.ones(len(rows), dtype=bool)
    while open_.any():
        best = int(np.argmax((covers & open_).sum(axis=1)))
        chosen.append(int(rows[best]))
        open_ &= ~covers[best]
        open_[best] = False
    return chosen


def _within(corners: Array, spot: Spot, sides: tuple[int, int], points: Array) -> BoolArray:
    """Return which points the sector of a spot between two sides holds."""
    apex = np.array([float(c) for c in spot.apex])
    heights = [_heights(corners, side, points) for side in sides]
    turn = opening(corners, *sides)
    if turn > math.pi * SLACK:
        inside = (heights[0] > 0) | (heights[1] > 0)
    else:
        inside = (heights[0] > 0) & (heights[1] > 0)
    if turn > 2 * math.pi - 1e-9:
        inside[:] = True
    within: BoolArray = inside & (_distance(points, apex) <= float(spot.reach))
    return within


def opening(corners: Array, first: int, second: int) -> float:
    """Return the opening of a sector."""
    if first == second:
        return math.pi
    a = corners[(first + 1) % len(corners)] - corners[first]
    b = corners[second] - corners[(second + 1) % len(corners)]
    angle = math.atan2(a[0] * b[1] - a[1] * b[0], a @ b)
    return angle if angle > 0 else angle + 2 * math.pi


def _heights(corners: Array, side: int, points: Array) -> Array:
    """Return the heights of points above a side, positive on the inner side; nothing less than rounding."""
    start = corners[side]
    along = corners[(side + 1) % len(corners)] - start
    cross = along[0] * (points[:, 1] - start[1]) - along[1] * (points[:, 0] - start[0])
    heights: Array = cross / math.hypot(*along)
    return np.where(np.abs(heights) <= 1e-12 * np.abs(corners).max(), 0.0, heights)


def _next_vertex(corners: Array, points: Array) -> Array:
    """Return the distance from each point to the nearest vertex that is not the point itself."""
    away = np.sqrt(((points[:, None, :] - corners) ** 2).sum(axis=2))
    nearest: Array = np.where(away == 0, np.inf, away).min(axis=1)
    return nearest


def clear(corners: Array, side: int, apex: Array) -> float:
    """Return the distance from a point of a side (or its start) to what other sides have above that side.

    What lies below the side cannot cut a half-disc on it; at a vertex that is not convex every side counts.
    """
    count = len(corners)
    vertex = bool((apex == corners[side]).all())
    own = {side, (side - 1) % count} if vertex else {side}
    bounds = own
    if vertex and opening(corners, side, (side - 1) % count) > math.pi * SLACK:
        bounds = set()
    least = math.inf
    for k in set(range(count)) - own:
        segment = corners[[k, (k + 1) % count]]
        for bound in bounds:
            clipped = _above(segment, _heights(corners, bound, segment))
            if clipped is None:
                break
            segment = clipped
        else:
            least = min(least, _segment_distance(segment, apex))
    return least


def _above(segment: Array, heights: Array) -> Array | None:
    """Return the part of a segment that lies above a line, None if there is none."""
    if (heights <= 0).all():
        return None
    if (heights >= 0).all():
        return segment
    t = heights[0] / (heights[0] - heights[1])
    cut = segment[0] + t * (segment[1] - segment[0])
    return np.array([segment[0], cut] if heights[0] > 0 else [cut, segment[1]])


def _segment_distance(segment: Array, point: Array) -> float:
    """Return the distance of a point from a segment."""
    along = segment[1] - segment[0]
    t = min(1.0, max(0.0, float((point - segment[0]) @ along / (along @ along))))
    return math.hypot(*(point - segment[0] - t * along))


def _distance(points: Array, centre: Array) -> Array:
    """Return the distances of points from one of them."""
    away: Array = np.sqrt(((points - centre) ** 2).sum(axis=1))
    return away


def _rounded(length: float, unit: Fraction) -> Fraction:
    """Return a length in whole units, not above it by more than rounding."""
    return math.floor(length / float(unit) * SLACK) * unit
