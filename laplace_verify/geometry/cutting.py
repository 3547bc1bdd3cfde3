"""Parts of shapes for quadrature: polygons cut by straight lines, and what is left around a disc or ball.

A polygon cut by half-planes is a set of convex polygons (each of its trapezoids clipped by each half-plane;
Sutherland & Hodgman 1974, Comm. ACM 17, from memory, unchecked), fanned into triangles

    x = a + s (b - a) + s t (c - b),    Jacobian s |(b - a) x (c - a)|.

What is left of a star-shaped polygon or a box around a disc or ball of radius R about c, cone by cone over
its flat pieces: with y on the piece and H the distance of its plane from c,

    x = c + w (y - c),   w from R/|y - c| to 1,    dx = w^(d-1) H dw dy    (derived here).
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from itertools import pairwise

import numpy as np
from scipy.optimize import brentq

from laplace_verify.arrays import Array, IntArray
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.base import Shape
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.cartesian import Box
from laplace_verify.geometry.checks import ROUNDING
from laplace_verify.geometry.patches import Chart
from laplace_verify.geometry.polygons import trapezoids
from laplace_verify.geometry.segments import Face, Segment

__all__ = ["around_chart", "convex_parts", "crossings", "cut_face", "triangle_chart"]

SLIVER = 1e-14  # of the shape's area: what rounding leaves along a cut
SCANNED = 512  # points of a curve between which a crossing is looked for


def convex_parts(shape: Shape) -> list[Array]:
    """Return convex polygons (m, 2) that make up a polygon, counter-clockwise.

    Raises
    ------
    GeometryError
        If the shape is no polygon.
    """
    if not shape.is_a("polygon"):
        raise GeometryError(f"{shape!r} is no polygon, so straight lines cannot cut it here")
    outline: list[tuple[tuple[float, float], ...]] = [
        tuple((float(x), float(y)) for x, y in ring)
        for ring in (shape.vertices, *shape.holes)  # type: ignore[attr-defined]  # of every polygon
    ]
    corners, _ = trapezoids(tuple(outline))
    parts = []
    for (y0, left0, right0), (y1, left1, right1) in corners.tolist():
        ring = [(left0, y0), (right0, y0), (right1, y1), (left1, y1)]
        parts.append(np.array([p for p, q in zip(ring, ring[1:] + ring[:1], strict=True) if p != q]))
    return parts


def clipped(polygon: Array, normal: Array, offset: float) -> Array:
    """Return the part of a convex polygon with normal . x <= offset; (0, 2) if there is none.

    >>> clipped(np.array([[0.0, 0], [2, 0], [2, 1]]), np.array([1.0, 0]), 1.0).tolist()
    [[0.0, 0.0], [1.0, 0.0], [1.0, 0.5]]
    """
    if not len(polygon):
        return polygon
    level = polygon @ normal - offset
    kept: list[Array] = []
    for k, (p, a) in enumerate(zip(polygon, level, strict=True)):
        q, b = polygon[(k + 1) % len(polygon)], level[(k + 1) % len(polygon)]
        if a <= 0.0:
            kept.append(p)
        if a * b < 0.0:
            kept.append(p + a / (a - b) * (q - p))
    return np.array(kept).reshape(-1, 2)


def triangle_chart(polygons: Sequence[Array], half_planes: Sequence[tuple[Array, float]]) -> Chart | None:
    """Return patches of the parts of convex polygons inside all half-planes normal . x <= offset.

    None if nothing is left but slivers.
    """
    corners, whole = [], sum(_area(polygon) for polygon in polygons)
    for polygon in polygons:
        part = polygon
        for normal, offset in half_planes:
            part = clipped(part, normal, offset)
        for second, third in pairwise(part[1:]):
            corners.append(np.array([part[0], second, third]))
    corners = [corner for corner in corners if _area(corner) > SLIVER * whole]
    if not corners:
        return None
    a, b, c = np.moveaxis(np.array(corners), 1, 0)
    area = np.abs((b - a)[:, 0] * (c - a)[:, 1] - (b - a)[:, 1] * (c - a)[:, 0])

    def place(parameters: Array, box: IntArray) -> tuple[Array, Array]:
        s, t = parameters[:, :1], parameters[:, 1:]
        points = a[box] + s * (b - a)[box] + s * t * (c - b)[box]
        return points, s[:, 0] * area[box]

    count = len(corners)
    return Chart(
        lower=np.zeros((count, 2)),
        upper=np.ones((count, 2)),
        place=place,
        angles=(False, False),
        extra=(1, 0),
    )


def around_chart(shape: Shape, centre: Array, radius: float) -> Chart:
    """Return patches of a polygon or box less the disc or ball of a centre and radius inside it.

    Raises
    ------
    GeometryError
        If the shape is neither, is not star-shaped about the centre, or the disc or ball does not fit.
    """
    pieces: list[Boundary] = list(shape.pieces)
    flat = all(isinstance(piece, Segment | Face) for piece in pieces)
    if not (flat and (shape.is_a("polygon") or isinstance(shape, Box))):
        raise GeometryError(f"{shape!r} is neither a polygon nor a box")
    d = shape.dim
    inside = bool(shape.contains(centre[None, :]).all())
    if not (inside and float(shape.distance(centre[None, :])[0]) > radius):
        raise GeometryError(
            f"the circle or sphere of radius {radius:g} about {tuple(centre.tolist())} does not lie inside "
            f"{shape!r}"
        )
    middles = np.concatenate([piece.point(np.full((1, d - 1), 0.5)[:, 0 if d == 2 else slice(None)])
                              for piece in pieces])  # fmt: skip
    normals = np.concatenate([piece.normals(m[None, :]) for piece, m in zip(pieces, middles, strict=True)])
    heights = ((middles - centre) * normals).sum(axis=1)
    if not (heights > 0.0).all():
        raise GeometryError(f"{shape!r} cannot be seen whole from {tuple(centre.tolist())}")
    measures = np.array([piece.measure for piece in pieces])

    def place(parameters: Array, box: IntArray) -> tuple[Array, Array]:
        y = np.empty((len(parameters), d))
        for k, piece in enumerate(pieces):
            mine = box == k
            if mine.any():
                # nothing but rounding can put a parameter beyond the ends
                t = np.clip(parameters[mine, 1:], 0.0, 1.0)
                y[mine] = piece.point(t[:, 0] if d == 2 else t)
        away = y - centre
        least = radius / np.sqrt((away**2).sum(axis=1))
        w = least + parameters[:, 0] * (1.0 - least)
        jacobian = w ** (d - 1) * (1.0 - least) * heights[box] * measures[box]
        return centre + w[:, None] * away, jacobian

    count = len(pieces)
    # R/|y - c| is no polynomial along the piece: six more degrees, and the patches halve it further
    return Chart(
        lower=np.zeros((count, d)),
        upper=np.ones((count, d)),
        place=place,
        angles=(False,) * d,
        extra=(d, *(8,) * (d - 1)),
    )


def crossings(curve: Boundary, level: Callable[[Array], Array]) -> list[float]:
    """Return the fractions of length in (0, 1) at which a level function of points changes sign.

    Two crossings less than 1/512 of the length apart may be missed.

    >>> crossings(Segment(name="side", start=(0.0, 0.0), stop=(2.0, 0.0)), lambda x: x[:, 0] - 0.5)
    [0.25]
    """
    t = np.linspace(0.0, 1.0, SCANNED + 1)
    values = level(curve.point(t))
    scale = float(np.abs(values).max())
    values[np.abs(values) <= ROUNDING * scale] = 0.0

    def at(s: float) -> float:
        return float(level(curve.point([s]))[0])

    found = []
    for k in range(SCANNED):
        if values[k] * values[k + 1] < 0.0:
            found.append(float(brentq(at, t[k], t[k + 1], xtol=1e-15)))
        elif k and values[k] == 0.0 and values[k - 1] * values[k + 1] < 0.0:
            found.append(float(t[k]))
    return found


def cut_face(face: Face, axis: int, positions: Sequence[float]) -> list[Face]:
    """Return a rectangular face cut at positions along an axis."""
    if axis == face.axis:
        return [face]
    inner = [p for p in positions if face.lower[axis] < p < face.upper[axis]]
    ends = [face.lower[axis], *inner, face.upper[axis]]
    parts = []
    for low, high in pairwise(ends):
        lower, upper = list(face.lower), list(face.upper)
        lower[axis], upper[axis] = low, high
        parts.append(
            Face(name=face.name, lower=tuple(lower), upper=tuple(upper), axis=face.axis, outward=face.outward)
        )
    return parts


def _area(polygon: Array) -> float:
    """Return the area of a polygon (m, 2)."""
    if len(polygon) < 3:
        return 0.0
    x, y = polygon.T
    return abs(math.fsum(x * np.roll(y, -1) - np.roll(x, -1) * y)) / 2.0
