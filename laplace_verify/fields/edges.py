"""Curves in space along which a field is not smooth: straight edges, lines, rays and circles.

Where two faces of a solid carry different boundary values, the data jump along the whole edge they share.
Near such an edge u depends on the angle about it, as a plane field does near a jump point, and |grad u| grows
like 1 / distance; on the edge u has no value. Edges are to solids what singular points are to plates: the
exponent is that of u - smooth ~ r**e, r the distance from the curve, 0 for a jump.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from laplace_verify.arrays import Array, BoolArray, between
from laplace_verify.errors import FieldError

__all__ = ["Edge", "Line", "Ring"]

ROUNDING = 4 * float(
    np.finfo(np.float64).eps
)  # of coordinates of a point that was computed to lie on a curve
IN_BOX = 1e-9  # of a box's size: a line this near to it is one of its edges


@dataclass(frozen=True, slots=True, kw_only=True)
class Edge:
    """A straight segment along which boundary data jump (exponent 0).

    >>> edge = Edge(start=(0, 0, 0), end=(2, 0, 0))
    >>> edge.distance(np.array([[1.0, 3.0, 4.0], [3.0, 0.0, 0.0]])).tolist()
    [5.0, 1.0]
    """

    start: tuple[float, float, float]
    end: tuple[float, float, float]
    exponent: float = 0.0

    def distance(self, points: Array) -> Array:
        """Return the distance of points (n, 3) from the segment, shape (n,)."""
        offset = np.asarray(points, dtype=np.float64) - self.start
        way = np.subtract(self.end, self.start)
        along = np.clip(offset @ way / float(way @ way), 0.0, 1.0)
        away: Array = np.sqrt(((offset - along[:, None] * way) ** 2).sum(axis=1))
        return away

    def meets(self, points: Array) -> BoolArray:
        """Return which points lie on the segment, to rounding of its direction; exactly if along an axis."""
        points, way = np.asarray(points, dtype=np.float64), np.subtract(self.end, self.start)
        length = math.sqrt(float(way @ way))
        if np.count_nonzero(way) == 1:
            end = self.end + ROUNDING * way
            return between(points, np.minimum(self.start, end), np.maximum(self.start, end))
        reach = ROUNDING * float(np.abs([self.start, self.end]).max())
        offset = points - self.start
        across, along = np.cross(offset, way / length), offset @ (way / length)
        on: BoolArray = np.sqrt((across**2).sum(axis=1)) <= reach
        return on & (along >= -reach) & (along <= length * (1 + ROUNDING) + reach)

    def tangents(self, points: Array) -> Array:
        """Return the unit tangents (n, 3) at points of the segment."""
        way = np.subtract(self.end, self.start)
        tangents: Array = np.broadcast_to(way / math.sqrt(float(way @ way)), points.shape)
        return tangents

    def sample(self, count: int) -> Array:
        """Return `count` evenly spaced points (count, 3), both ends among them."""
        s = np.linspace(0.0, 1.0, count)[:, None]
        points: Array = (1.0 - s) * np.asarray(self.start) + s * np.asarray(self.end)
        return points

    def within(self, lower: Array, upper: Array) -> Edge:  # noqa: ARG002  # it is finite
        """Return the edge: boxes cut lines only."""
        return self

    def moved(self, matrix: Array, vector: Array) -> Edge:
        """Return the image under x -> matrix x + vector."""
        start, end = (tuple((matrix @ np.asarray(p) + vector).tolist()) for p in (self.start, self.end))
        return Edge(start=start, end=end, exponent=self.exponent)


@dataclass(frozen=True, slots=True, kw_only=True)
class Line:
    """An infinite straight line through `point` along the unit vector `direction`; `ray`: only forwards.

    The part of it that matters is what a shape holds: `within` its bounding box it is an `Edge`.

    >>> line = Line(point=(0, 0, 1), direction=(1, 0, 0), exponent=0.5, ray=True)
    >>> line.distance(np.array([[5.0, 3.0, 5.0], [-3.0, 0.0, 1.0]])).tolist()
    [5.0, 3.0]
    >>> line.within(np.array([-1.0, -1.0, 0.0]), np.array([2.0, 1.0, 1.0])).end
    (2.0, 0.0, 1.0)
    """

    point: tuple[float, float, float]
    direction: tuple[float, float, float]
    exponent: float
    ray: bool = False

    def _along(self, points: Array) -> tuple[Array, Array]:
        """Return the way to the nearest point of the line, and the offset (n, 3) from it."""
        offset = np.asarray(points, dtype=np.float64) - self.point
        along = offset @ np.asarray(self.direction)
        along = np.maximum(along, 0.0) if self.ray else along
        return along, offset - along[:, None] * self.direction

    def distance(self, points: Array) -> Array:
        """Return the distance of points (n, 3) from the line, shape (n,)."""
        away: Array = np.sqrt((self._along(points)[1] ** 2).sum(axis=1))
        return away

    def meets(self, points: Array) -> BoolArray:
        """Return which points lie on the line, to rounding of its direction; exactly if along an axis."""
        along, away = self._along(points)
        slanted = np.count_nonzero(self.direction) > 1
        reach = ROUNDING * (np.abs(along) + float(np.abs(self.point).max())) if slanted else 0.0
        on: BoolArray = np.sqrt((away**2).sum(axis=1)) <= reach
        return on

    def tangents(self, points: Array) -> Array:
        """Return the unit tangents (n, 3) at points of the line."""
        return np.tile(np.asarray(self.direction), (len(points), 1))

    def within(self, lower: Array, upper: Array) -> Edge | None:
        """Return the part inside a box, None if the line passes it by."""
        size = float((upper - lower).max())
        low, high = (0.0 if self.ray else -math.inf), math.inf
        for a, b, place, way in zip(lower, upper, self.point, self.direction, strict=True):
            if abs(way) > ROUNDING:
                ends = sorted(((a - place) / way, (b - place) / way))
                low, high = max(low, ends[0]), min(high, ends[1])
            elif not a - IN_BOX * size <= place <= b + IN_BOX * size:
                return None
        if not low < high:
            return None
        (x, y, z), (u, v, w) = self.point, self.direction
        start, end = ((x + t * u + 0.0, y + t * v + 0.0, z + t * w + 0.0) for t in (float(low), float(high)))
        return Edge(start=start, end=end, exponent=self.exponent)

    def moved(self, matrix: Array, vector: Array) -> Line:
        """Return the image under x -> matrix x + vector."""
        way = matrix @ np.asarray(self.direction)
        x, y, z = (matrix @ np.asarray(self.point) + vector).tolist()
        dx, dy, dz = (way / math.sqrt(float(way @ way))).tolist()
        return Line(point=(x, y, z), direction=(dx, dy, dz), exponent=self.exponent, ray=self.ray)


@dataclass(frozen=True, slots=True, kw_only=True)
class Ring:
    """A circle about `centre` in the plane normal to the unit vector `axis`, along which data jump.

    >>> ring = Ring(centre=(0, 0, 1), axis=(0, 0, 1), radius=2)
    >>> ring.distance(np.array([[0.0, 5.0, 5.0], [0.0, 0.0, 1.0]])).tolist()
    [5.0, 2.0]
    """

    centre: tuple[float, float, float]
    axis: tuple[float, float, float]
    radius: float
    exponent: float = 0.0

    def _parts(self, points: Array) -> tuple[Array, Array]:
        """Return the distance from the circle within its plane and the height above it."""
        offset = np.asarray(points, dtype=np.float64) - self.centre
        height = offset @ np.asarray(self.axis)
        radial = np.sqrt(((offset - height[:, None] * self.axis) ** 2).sum(axis=1))
        return radial - self.radius, height

    def distance(self, points: Array) -> Array:
        """Return the distance of points (n, 3) from the circle, shape (n,)."""
        return np.hypot(*self._parts(points))

    def meets(self, points: Array) -> BoolArray:
        """Return which points lie on the circle, to rounding."""
        reach = ROUNDING * (self.radius + float(np.abs(self.centre).max()))
        near: BoolArray = np.abs((points - self.centre) @ np.asarray(self.axis)) <= reach
        if near.any():  # rare: most blocks are done after the height
            near[near] = self.distance(points[near]) <= reach
        return near

    def tangents(self, points: Array) -> Array:
        """Return the unit tangents (n, 3) at points of the circle."""
        tangents = np.cross(self.axis, points - self.centre)
        unit: Array = tangents / np.sqrt((tangents**2).sum(axis=1, keepdims=True))
        return unit

    def sample(self, count: int) -> Array:
        """Return `count` evenly spaced points (count, 3)."""
        axis = np.asarray(self.axis)
        first = np.cross(axis, np.eye(3)[int(np.argmin(np.abs(axis)))])
        first /= math.sqrt(float(first @ first))
        second = np.cross(axis, first)
        angle = 2.0 * math.pi * np.arange(count)[:, None] / count
        points: Array = np.asarray(self.centre) + self.radius * (
            np.cos(angle) * first + np.sin(angle) * second
        )
        return points

    def within(self, lower: Array, upper: Array) -> Ring:  # noqa: ARG002  # it is finite
        """Return the circle: boxes cut lines only."""
        return self

    def moved(self, matrix: Array, vector: Array) -> Ring:
        """Return the image under x -> matrix x + vector, matrix a rotation times a positive number.

        Raises
        ------
        FieldError
            If the image is an ellipse.
        """
        square = matrix.T @ matrix
        scale = math.sqrt(float(square[0, 0]))
        if not np.allclose(square, scale**2 * np.eye(3), rtol=0.0, atol=1e-12 * scale**2):
            raise FieldError(
                "a circle along which data jump would become an ellipse; stretch a field without such a one"
            )
        centre = tuple((matrix @ np.asarray(self.centre) + vector).tolist())
        axis = tuple((matrix @ np.asarray(self.axis) / scale).tolist())
        return Ring(centre=centre, axis=axis, radius=scale * self.radius, exponent=self.exponent)
