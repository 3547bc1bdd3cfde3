"""Triangulation of a polygon, holes and slits allowed, without new points.

A ring is a closed walk with the domain on its left. Holes are joined to the outer ring by the shortest bridge
that crosses nothing, walked there and back; then ears (corners whose opposite diagonal lies inside) are cut
off one by one, best shaped first; then diagonals are flipped until each is locally Delaunay. Corners of the
walk, not places, are compared, so the two lips of a slit stay apart. Cost is cubic in the number of corners:
meant for tens of them.

References
----------
G. H. Meisters, Polygons have ears, Amer. Math. Monthly 82 (1975) 648-651; C. L. Lawson,
Software for C1 surface interpolation, 1977 (flips; both from memory, unchecked).
"""

from __future__ import annotations

import math

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.errors import GeometryError

__all__ = ["clip_ears", "flip_to_delaunay", "join_holes"]

ANGLE = 1e-9  # radians; smaller openings count as none
Triangle = tuple[int, int, int]


def join_holes(points: Array, rings: list[list[int]]) -> list[int]:
    """Return one walk through all rings; the first is the outer one, the others are holes (clockwise).

    Raises
    ------
    GeometryError
        If a hole cannot be reached, which means that rings cross.
    """
    walk, holes = list(rings[0]), [list(ring) for ring in rings[1:]]
    while holes:
        bridges = sorted(
            (math.dist(points[a], points[b]), k, i, j)
            for k, hole in enumerate(holes)
            for i, a in enumerate(walk)
            for j, b in enumerate(hole)
        )
        for _, k, i, j in bridges:
            if _sees(points, [walk, *holes], (0, i), (k + 1, j)):
                hole = holes.pop(k)
                walk = [*walk[: i + 1], *hole[j:], *hole[: j + 1], *walk[i:]]
                break
        else:
            raise GeometryError(
                "a hole cannot be joined to the outer boundary: do the sides cross each other?"
            )
    return walk


def clip_ears(points: Array, walk: list[int]) -> list[Triangle]:
    """Return triangles (counter-clockwise) that fill the ring `walk`.

    Raises
    ------
    GeometryError
        If no ear is left, which means that the ring crosses itself.
    """
    walk, triangles = list(walk), []
    while len(walk) > 3:
        ears = [
            (_smallest_angle(points, _corner(walk, i)), i)
            for i in range(len(walk))
            if _is_ear(points, walk, i)
        ]
        if not ears:
            raise GeometryError("the polygon has no ear left to cut: do its sides cross each other?")
        _, best = max(ears)
        triangles.append(_corner(walk, best))
        del walk[best]
    triangles.append((walk[0], walk[1], walk[2]))
    return triangles


def flip_to_delaunay(points: Array, triangles: list[Triangle], sides: set[tuple[int, int]]) -> list[Triangle]:
    """Flip diagonals until the angles opposite each sum to at most pi; directed `sides` stay."""
    found = {_turned(*triangle) for triangle in triangles}
    flipped = True
    while flipped:
        flipped = False
        opposite = {edge: corner for t in found for edge, corner in _edges(t)}
        for (a, b), c in opposite.items():
            d = opposite.get((b, a))
            if d is None or (a, b) in sides or (b, a) in sides:
                continue
            if _angle(points, a, c, b) + _angle(points, b, d, a) > math.pi + ANGLE:
                found -= {_turned(a, b, c), _turned(b, a, d)}
                found |= {_turned(a, d, c), _turned(b, c, d)}
                flipped = True
                break
    return sorted(found)


def _edges(triangle: Triangle) -> list[tuple[tuple[int, int], int]]:
    """Return the directed edges of a triangle, each with the corner opposite."""
    a, b, c = triangle
    return [((a, b), c), ((b, c), a), ((c, a), b)]


def _turned(a: int, b: int, c: int) -> Triangle:
    """Name a triangle by its smallest corner first."""
    return min((a, b, c), (b, c, a), (c, a, b))


def _corner(walk: list[int], i: int) -> Triangle:
    """Return the corner i of a ring between its neighbours."""
    return walk[i - 1], walk[i], walk[(i + 1) % len(walk)]


def _angle(points: Array, a: int, corner: int, b: int) -> float:
    """Return the angle in [0, pi] between the rays from `corner` to a and to b."""
    p, q = points[a] - points[corner], points[b] - points[corner]
    return abs(math.atan2(p[0] * q[1] - p[1] * q[0], p[0] * q[0] + p[1] * q[1]))


def _smallest_angle(points: Array, triangle: Triangle) -> float:
    """Return the smallest angle of a triangle."""
    a, b, c = triangle
    return min(_angle(points, a, b, c), _angle(points, b, c, a), _angle(points, c, a, b))


def _opening(points: Array, corner: Triangle) -> float:
    """Return the interior angle of a corner of a ring, in (0, 2 pi]; 2 pi at the tip of a slit."""
    before, here, after = points[list(corner)]
    opening = _turn(after - here, before - here)
    return opening if opening > ANGLE else 2 * math.pi


def _turn(start: Array, end: Array) -> float:
    """Return the counter-clockwise angle from one direction to another, in [0, 2 pi)."""
    turn = math.atan2(start[0] * end[1] - start[1] * end[0], start[0] * end[0] + start[1] * end[1])
    return turn if turn > -ANGLE / 2 else turn + 2 * math.pi


def _opens_towards(points: Array, corner: Triangle, target: int) -> bool:
    """Tell whether the ray from a corner of a ring towards another point starts inside the domain."""
    here, after = points[corner[1]], points[corner[2]]
    turn = _turn(after - here, points[target] - here)
    return ANGLE < turn < _opening(points, corner) - ANGLE


def _sees(points: Array, rings: list[list[int]], first: tuple[int, int], second: tuple[int, int]) -> bool:
    """Tell whether the segment between two corners, each (ring, place on it), lies inside the domain."""
    one = _corner(rings[first[0]], first[1])
    two = _corner(rings[second[0]], second[1])
    if np.array_equal(points[one[1]], points[two[1]]):
        return False
    if not (_opens_towards(points, one, two[1]) and _opens_towards(points, two, one[1])):
        return False
    starts = points[[corner for ring in rings for corner in ring]]
    ends = points[[corner for ring in rings for corner in ring[1:] + ring[:1]]]
    return not _blocked(points[one[1]], points[two[1]], starts, ends).any()


def _blocked(p: Array, q: Array, starts: Array, ends: Array) -> BoolArray:
    """Tell which sides cross the open segment pq, or start on it."""
    along = q - p
    room = 1e-12 * float(along @ along)
    of_start, of_end = _cross(along, starts - p), _cross(along, ends - p)
    of_p, of_q = _cross(ends - starts, p - starts), _cross(ends - starts, q - starts)
    scale = room * np.maximum(1.0, np.linalg.norm(ends - starts, axis=1) / np.linalg.norm(along))
    crosses = (of_start * of_end < 0) & (np.minimum(abs(of_start), abs(of_end)) > room)
    crosses &= (of_p * of_q < 0) & (np.minimum(abs(of_p), abs(of_q)) > scale)
    way = (starts - p) @ along
    touches: BoolArray = (abs(of_start) <= room) & (way > room) & (way < float(along @ along) - room)
    return crosses | touches


def _cross(a: Array, b: Array) -> Array:
    """Return the third component of a x b, row by row."""
    product: Array = a[..., 0] * b[..., 1] - a[..., 1] * b[..., 0]
    return product


def _is_ear(points: Array, walk: list[int], i: int) -> bool:
    """Tell whether corner i can be cut off: convex, its diagonal inside, no other corner in its triangle."""
    before, here, after = _corner(walk, i)
    if not _opening(points, (before, here, after)) < math.pi - ANGLE:
        return False
    count = len(walk)
    if not _sees(points, [walk], (0, (i - 1) % count), (0, (i + 1) % count)):
        return False
    a, b, c = points[before], points[here], points[after]
    others = points[walk]
    return not bool(
        np.any(
            (_cross(b - a, others - a) > 0)
            & (_cross(c - b, others - b) > 0)
            & (_cross(a - c, others - c) > 0)
        )
    )
