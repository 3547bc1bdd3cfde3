"""Exponents of solutions at points where interfaces meet each other or the boundary.

About such a point u = r^lambda m(theta) with m'' + lambda^2 m = 0 in every sector, m and K m' continuous.
Over a sector of opening w and conductivity k the pair (m, K m'/lambda) is multiplied by

    M = [[cos lambda w, sin(lambda w)/k], [-k sin lambda w, cos lambda w]],    det M = 1,

so that lambda is a root of an entry of the product P of all sectors' matrices:

    Dirichlet on both ends P_12 = 0;  flux on both ends P_21 = 0;  Dirichlet then flux P_22 = 0, flux then
    Dirichlet P_11 = 0;  all round: trace P = 2.

Reference: Kellogg 1974, Applicable Analysis 4, 101-129 ("On the Poisson equation with intersecting
interfaces"), from memory, unchecked; the form by matrices is derived here.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from itertools import pairwise

import numpy as np
from scipy.optimize import brentq, minimize_scalar

from laplace_verify.arrays import Array
from laplace_verify.contexts import FLOAT
from laplace_verify.geometry import Shape
from laplace_verify.geometry.cutting import crossings
from laplace_verify.problems.conditions import PERIODIC, PieceKind
from laplace_verify.problems.materials import Materials

__all__ = ["interface_exponent", "transmission_exponent"]

TURN = 2.0 * math.pi
MOST = 4.0  # exponents beyond it limit no method
SCAN = 4001
TOUCH = 1e-9  # of the trace from 2, where it only touches
NEAR = 1e-9  # of the shape's extent

Sector = tuple[float, float]  # opening, conductivity


def transmission_exponent(sectors: Sequence[Sector], ends: tuple[bool, bool] | None = None) -> float:
    """Return the smallest lambda > 0 of r^lambda m(theta) over sectors in counter-clockwise order.

    Parameters
    ----------
    sectors
        (opening in radians, conductivity) of each.
    ends
        Whether each end carries a Dirichlet condition (else a flux condition); None: the sectors close.

    Returns
    -------
    float
        The exponent, inf if it exceeds 4.

    Examples
    --------
    >>> round(transmission_exponent([(1.5 * math.pi, 1.0)], (True, True)), 12)  # the L-shape
    0.666666666667
    """

    def product(exponent: float) -> Array:
        total = np.eye(2)
        for opening, k in sectors:
            c, s = math.cos(exponent * opening), math.sin(exponent * opening)
            total = np.array([[c, s / k], [-k * s, c]]) @ total
        return total

    if ends is None:
        return _first_root(lambda e: float(np.trace(product(e))) - 2.0, touching=True)
    row, column = (0 if ends[1] else 1), (1 if ends[0] else 0)
    return _first_root(lambda e: float(product(e)[row, column]), touching=False)


def _first_root(function: Callable[[float], float], *, touching: bool) -> float:
    """Return the first root in (0, 4], where the function may merely touch zero from below."""
    grid = np.linspace(0.0, MOST, SCAN)[1:]
    values = np.array([function(float(e)) for e in grid])
    for k in range(len(grid) - 1):
        if values[k] * values[k + 1] <= 0.0:
            return float(brentq(function, grid[k], grid[k + 1], xtol=1e-14))
        if touching and k and values[k] > values[k - 1] and values[k] >= values[k + 1] and values[k] > -1e-3:
            top = minimize_scalar(
                lambda e: -function(e), bounds=(grid[k - 1], grid[k + 1]), method="bounded",
                options={"xatol": 1e-12},
            )  # fmt: skip
            if -top.fun > -TOUCH:
                return float(top.x)
    return math.inf


def interface_exponent(shape: Shape, materials: Materials, kinds: Mapping[str, PieceKind]) -> float:
    """Return the smallest exponent over the points where interfaces meet each other or the boundary.

    In the plane; inf in one and three dimensions, where interfaces have no such points here (edges of layers
    on the faces of a box follow the plane's rule and are left out: layers that end at right angles have 1).
    """
    if shape.dim != 2:
        return math.inf
    found = [math.inf]
    meeting = materials.partition.meeting
    if meeting is not None:
        place = np.array(meeting)
        if shape.contains(place[None, :]).all() and shape.distance(place[None, :])[0] > NEAR * shape.extent:
            openings = _sectors_at(place, materials, 0.0, TURN, shape.extent)
            found.append(transmission_exponent(openings))
    for place, start, opening, ends in _on_boundary(shape, materials, kinds):
        found.append(transmission_exponent(_sectors_at(place, materials, start, opening, shape.extent), ends))
    return min(found)


def _on_boundary(
    shape: Shape, materials: Materials, kinds: Mapping[str, PieceKind]
) -> list[tuple[Array, float, float, tuple[bool, bool]]]:
    """Return where interfaces end: place, angle of the boundary ahead, opening, Dirichlet at its ends."""
    found = []
    corners = [junction.points[0] for junction in shape.junctions]
    for wall in materials.partition.walls:
        for piece in shape.pieces:
            if kinds[piece.name] == PERIODIC:
                continue  # the interface goes on where the partner lies
            fractions = crossings(piece, lambda points, wall=wall: wall.level(FLOAT, tuple(points.T)))  # type: ignore[misc]
            for place in piece.point(fractions):
                if wall.distance(place[None, :])[0] <= NEAR * shape.extent:
                    nx, ny = piece.normals(place[None, :])[0].tolist()
                    fixed = kinds[piece.name] == "dirichlet"
                    found.append((place, math.atan2(nx, -ny), math.pi, (fixed, fixed)))
    for place, junction in zip(corners, shape.junctions, strict=True):
        if any(wall.distance(place[None, :])[0] <= NEAR * shape.extent for wall in materials.partition.walls):
            first, second = (shape.pieces[name] for name in junction.pieces)
            for before, after in ((first, second), (second, first)):
                nx, ny = after.normals(place[None, :])[0].tolist()
                angle = math.atan2(nx, -ny)
                inside = place + 1e-6 * shape.extent * np.array(
                    [math.cos(angle + junction.opening / 2), math.sin(angle + junction.opening / 2)]
                )
                if shape.contains(inside[None, :]).all():
                    ends = (kinds[after.name] == "dirichlet", kinds[before.name] == "dirichlet")
                    found.append((place, angle, junction.opening, ends))
                    break
    return found


def _sectors_at(
    place: Array, materials: Materials, start: float, opening: float, extent: float
) -> list[Sector]:
    """Return opening and conductivity of the sectors about a point, counter-clockwise from an angle."""
    angles = [
        (math.atan2(way[1], way[0]) - start) % TURN
        for wall in materials.partition.walls
        if wall.distance(place[None, :])[0] <= NEAR * extent
        for way in wall.ways(place)
    ]
    if opening > TURN - 1e-9:  # all round: start on an interface
        first, *inner = sorted({round(a, 12) % TURN for a in angles})
        start, inner = start + first, [a - first for a in inner if a - first < TURN - 1e-9]
    else:
        inner = sorted({round(a, 12) for a in angles if 1e-9 < a < opening - 1e-9})
    sectors = []
    for a, b in pairwise([0.0, *inner, opening]):
        middle = start + (a + b) / 2.0
        probe = place + 1e-4 * extent * np.array([math.cos(middle), math.sin(middle)])
        sectors.append((b - a, float(materials.at(probe[None, :])[0])))
    return sectors
