"""Curves in space along which a field is not smooth: straight edges and circles.

Where two faces of a solid carry different boundary values, the data jump along the whole edge they share.
Near such an edge u depends on the angle about it, as a plane field does near a jump point, and |grad u| grows
like 1 / distance; on the edge u has no value. Edges are to solids what singular points are to plates: the
exponent is that of u - smooth ~ r**e, r the distance from the curve, 0 for a jump.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.errors import FieldError

__all__ = ["Edge", "Ring"]

ROUNDING = 4 * float(
    np.finfo(np.float64).eps
)  # of coordinates of a point that was computed to lie on a curve


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
        offset, way = np.asarray(points, dtype=np.float64) - self.start, np.subtract(self.end, self.start)
        length = math.sqrt(float(way @ way))
        slanted = np.count_nonzero(way) > 1
        reach = ROUNDING * float(np.abs([self.start, self.end]).max()) if slanted else 0.0
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

    def moved(self, matrix: Array, vector: Array) -> Edge:
        """Return the image under x -> matrix x + vector."""
        start, end = (tuple((matrix @ np.asarray(p) + vector).tolist()) for p in (self.start, self.end))
        return Edge(start=start, end=end, exponent=self.exponent)


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
        size = self.radius + float(np.abs(self.centre).max())
        on: BoolArray = self.distance(points) <= ROUNDING * size
        return on

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
