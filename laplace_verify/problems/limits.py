"""A field on the boundary: which lip of a cut, and the limit along a piece where the field is singular.

Value and flux on a piece are meant from inside the shape and along that piece. On a cut that runs along the
piece (a slit: two pieces in one place) the inward side -n picks the lip. At a singular point p, usually an
end of the piece, f(p) is the limit of f along the piece, extrapolated from two points on it at distances
delta and 2 delta:

    f(p) = 2 f(delta) - f(2 delta) + O(delta^2 f''),   delta = 1e-7 of the shape's size

so that the error is of the size of round-off wherever f is smooth along the piece. Where f is not (a flux
that grows like r^(e-1)), the two values differ by far more than delta and there is no limit to return.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.fields import Cut, Edge, Field, Line, Ring, Singularity
from laplace_verify.geometry import Boundary

__all__ = ["bounded_at_edge", "bounded_limit", "directions_along", "limits_at_edge", "near", "sides_on"]

AT_POINT = 1e-12  # of the shape's size: closer than this is "at the point"
OFFSET = 1e-7  # delta
SMOOTH = 1e-5  # largest change between delta and 2 delta, relative to the function's size, if it has a limit


def near(points: Array, place: Sequence[float], size: float) -> BoolArray:
    """Return which points (n, d) are the given place, to 1e-12 of `size`."""
    offset: Array = points - np.asarray(place)
    close: BoolArray = np.sqrt((offset**2).sum(axis=1)) <= AT_POINT * size
    return close


def directions_along(boundary: Boundary, place: Array, size: float) -> list[Array]:
    """Return the unit tangents at a place on a plane curve that lead along it and not off its end."""
    if boundary.dim != 2:
        return []
    normal = boundary.normals(place[None, :])[0]
    found = []
    for tangent in (np.array([-normal[1], normal[0]]), np.array([normal[1], -normal[0]])):
        step = boundary.project((place + OFFSET * size * tangent)[None, :])[0] - place
        if float(np.hypot(*step)) > OFFSET * size / 2.0:
            found.append(tangent)
    return found


def sides_on(field: Field, boundary: Boundary, points: Array, size: float) -> Array | None:
    """Return the side (n,) of the field's cuts on which the shape lies at points of a piece.

    None if no point is on a cut; +1 is the left of a cut's direction, 0 stands for points that are on no cut.
    """
    if not (field.cuts or field.sheets):
        return None
    sides = np.zeros(len(points))
    for sheet in field.sheets:
        on = sheet.meets(points)
        sides[on] = np.where(boundary.normals(points[on]) @ np.array(sheet.normal) < 0.0, 1.0, -1.0)
    for cut in field.cuts:
        on = (cut.distance(points) <= AT_POINT * size) & (points != cut.start).any(axis=1)
        if on.any():
            sides[on] = _lips(cut, boundary, points[on], size)
    return sides if sides.any() else None


def _lips(cut: Cut, boundary: Boundary, points: Array, size: float) -> Array:
    """Return +1 or -1 for points of a piece on a cut."""
    left = np.array([-cut.direction[1], cut.direction[0]])
    inward = -(boundary.normals(points) @ left)
    for row in np.flatnonzero(np.abs(inward) < 0.5):
        # the piece ends on the cut or crosses its end: the lip is where the piece comes from
        ways = directions_along(boundary, points[row], size)
        inward[row] = sum(float(way @ left) for way in ways) or inward[row]
    return np.where(inward >= 0.0, 1.0, -1.0)


def bounded_limit(
    function: Callable[[Array], Array],
    magnitude: Callable[[Array], Array],
    boundary: Boundary,
    singularity: Singularity,
    size: float,
) -> float | None:
    """Return the limit of `function` along a piece at a singular point, None if there is none.

    In the middle of a piece the limits from both sides may differ; their mean is the limit along the normal,
    because the jump of a harmonic function is spread evenly over the angle.

    Parameters
    ----------
    function
        Points on the piece (n, d) -> values (n,).
    magnitude
        The same for a size that values are compared with, such as size |grad u| for u.
    boundary, singularity, size
        The piece, the singular point on it, the shape's size.
    """
    place = boundary.project(np.array([singularity.point]))[0]
    limits = []
    for way in directions_along(boundary, place, size):
        far = min(0.1 * size, 0.25 * boundary.measure)
        steps = np.array([OFFSET * size, 2.0 * OFFSET * size, far])
        points = boundary.project(place + steps[:, None] * way)
        first, second, third = function(points).tolist()
        scale = abs(third) + float(magnitude(points[2:])[0])
        if not abs(first - second) <= SMOOTH * scale:
            return None
        limits.append(2.0 * first - second)
    return sum(limits) / len(limits) if limits else None


def bounded_at_edge(
    function: Callable[[Array], Array],
    magnitude: Callable[[Array], Array],
    boundary: Boundary,
    points: Array,
    size: float,
) -> Array | None:
    """Return the limits (n,) of `function` on the way to a surface piece's middle, None if it has none.

    As `bounded_limit` at points (n, 3) of an edge of the piece along which u is singular.
    """
    middle = boundary.point(np.array([[0.5, 0.5]]))[0] - points
    away = np.sqrt((middle**2).sum(axis=1, keepdims=True))
    steps = (OFFSET * size, 2.0 * OFFSET * size, min(0.1 * size, 0.25 * boundary.size))
    places = [boundary.project(points + step * middle / away) for step in steps]
    first, second, third = (function(place) for place in places)
    settled = np.abs(first - second) <= SMOOTH * (np.abs(third) + magnitude(places[2]))
    return 2.0 * first - second if settled.all() else None


def limits_at_edge(
    function: Callable[[Array], Array],
    boundary: Boundary,
    edge: Edge | Line | Ring,
    points: Array,
    size: float,
) -> Array:
    """Return the limits (n,) of `function` along a surface piece at points (n, 3) on an edge where u jumps.

    Where the edge bounds the piece, the limit is taken on the way to the piece's middle, which leads off
    every other edge at a vertex too. Where it runs through the piece (the equator of a sphere), it is the
    mean of the limits from both sides, which is the limit along the normal.
    """
    delta = OFFSET * size
    across = np.cross(boundary.normals(points), edge.tangents(points))
    ways = [_on_piece(boundary, points, sign * across, delta) for sign in (1.0, -1.0)]
    inside = ways[0] & ways[1]
    middle = boundary.point(np.array([[0.5, 0.5]]))[0] - points
    middle /= np.sqrt((middle**2).sum(axis=1, keepdims=True))
    limits = np.zeros(len(points))
    for sign in (1.0, -1.0):
        way = np.where(inside[:, None], sign * across, middle)
        first, second = (function(boundary.project(points + k * delta * way)) for k in (1.0, 2.0))
        limits += first - second / 2.0
    return limits


def _on_piece(boundary: Boundary, points: Array, ways: Array, delta: float) -> BoolArray:
    """Return from which points a step along a unit tangent stays on the piece."""
    steps = boundary.project(points + delta * ways) - points
    stays: BoolArray = np.sqrt((steps**2).sum(axis=1)) > delta / 2.0
    return stays
