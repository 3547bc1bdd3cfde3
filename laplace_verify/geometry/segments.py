"""Straight pieces: end points of an interval, sides of polygons, rectangular faces."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, IntArray
from laplace_verify.geometry.boundary import Boundary, Curve, Surface
from laplace_verify.geometry.patches import Chart, boxes

__all__ = ["EndPoint", "Face", "Segment"]


@dataclass(frozen=True, slots=True, kw_only=True)
class EndPoint(Boundary):
    """An end of an interval; `outward` is the normal, -1 or +1; measure 1."""

    place: float
    outward: float
    length: float  # of the interval: what tolerances are relative to

    @property
    def dim(self) -> int:
        """Dimension of the space around the piece."""
        return 1

    @property
    def curved(self) -> bool:
        """Whether the piece is not flat."""
        return False

    @property
    def measure(self) -> float:
        """Counting measure."""
        return 1.0

    @property
    def size(self) -> float:
        """Length of the interval."""
        return self.length

    @property
    def ends(self) -> Array:
        """The point itself, shape (1, 1)."""
        return np.array([[self.place]])

    def _project(self, points: Array) -> Array:
        return np.full_like(points, self.place)

    def _normals(self, points: Array) -> Array:
        return np.full_like(points, self.outward)

    def point(self, t: npt.ArrayLike) -> Array:
        """Return the end point once for every t, shape (n, 1)."""
        return np.full((np.asarray(t).size, 1), self.place)

    def outline(self, n: int) -> Array:  # noqa: ARG002 - there is one point to draw
        """Return the end point, shape (1, 1)."""
        return self.ends

    def sample(self, n: int) -> tuple[Array, Array, Array]:  # noqa: ARG002 - there is one point
        """Return the end point, its normal and the weight 1."""
        return self.ends, np.array([[self.outward]]), np.ones(1)

    def quadrature(
        self,
        order: int,  # noqa: ARG002 - a point value is exact to any order
        singular: npt.ArrayLike = (),  # noqa: ARG002
        cell: float | None = None,  # noqa: ARG002
    ) -> tuple[Array, Array, Array]:
        """Return the end point, its normal and the weight 1."""
        return self.sample(1)


@dataclass(frozen=True, slots=True, kw_only=True)
class Segment(Curve):
    """A straight side from `start` to `stop`, region on the left; the outward normal is to the right."""

    start: tuple[float, ...]
    stop: tuple[float, ...]

    @property
    def curved(self) -> bool:
        """Whether the piece is not flat."""
        return False

    @property
    def measure(self) -> float:
        """Length."""
        return math.dist(self.start, self.stop)

    @property
    def ends(self) -> Array:
        """Start and stop, shape (2, 2)."""
        return np.array([self.start, self.stop])

    @property
    def rising(self) -> bool:
        """Whether travel rises in x, or in y if x does not change."""
        dx, dy = self.stop[0] - self.start[0], self.stop[1] - self.start[1]
        return dx > 0.0 if abs(dx) > 1e-12 * abs(dy) else dy > 0.0

    def _direction(self) -> Array:
        a, b = self.ends
        unit: Array = (b - a) / self.measure
        return unit

    def _at(self, fractions: Array) -> Array:
        a, b = self.ends
        t = fractions[:, None]
        # measured from the nearer end: exact at both, and a horizontal side stays exactly horizontal
        points: Array = np.where(t <= 0.5, a + t * (b - a), b + (t - 1.0) * (b - a))
        return points

    def _parameter(self, points: Array) -> Array:
        t = (points - self.ends[0]) @ self._direction() / self.measure
        clipped: Array = np.clip(t, 0.0, 1.0)
        return clipped

    def _project(self, points: Array) -> Array:
        return self._at(self._parameter(points))

    def _normals(self, points: Array) -> Array:
        dx, dy = self._direction()
        # adding 0.0 turns -0.0 into 0.0
        return np.tile(np.array([dy, -dx]) + 0.0, (len(points), 1))

    def tangents(self, t: npt.ArrayLike) -> Array:
        """Return the unit direction, shape (n, 2)."""
        return np.tile(self._direction(), (np.asarray(t).size, 1))

    def part(self, start: float, stop: float, name: str) -> Segment:
        """Return the part between two fractions of length, in order of travel."""
        a, b = self._at(np.array([start, stop])).tolist()
        return replace(self, name=name, start=tuple(a), stop=tuple(b))

    def _chart(self) -> Chart:
        length = self.measure

        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            return self._at(parameters[:, 0]), np.full(len(parameters), length)

        lower, upper = boxes([0.0, 1.0])
        return Chart(lower=lower, upper=upper, place=place, angles=(False,), extra=(0,))


@dataclass(frozen=True, slots=True, kw_only=True)
class Face(Surface):
    """A rectangular face normal to a coordinate axis.

    `lower` and `upper` agree in the coordinate `axis`; `outward` is -1 or +1.
    """

    lower: tuple[float, ...]
    upper: tuple[float, ...]
    axis: int
    outward: float

    @property
    def curved(self) -> bool:
        """Whether the piece is not flat."""
        return False

    def _free(self) -> list[int]:
        return [k for k in range(3) if k != self.axis]

    @property
    def measure(self) -> float:
        """Area."""
        return math.prod(self.upper[k] - self.lower[k] for k in self._free())

    def _project(self, points: Array) -> Array:
        return np.clip(points, np.array(self.lower), np.array(self.upper))

    def _normals(self, points: Array) -> Array:
        normals = np.zeros_like(points)
        normals[:, self.axis] = self.outward
        return normals

    def _at(self, u: Array, v: Array) -> Array:
        points = np.empty((len(u), 3))
        points[:, self.axis] = self.lower[self.axis]
        for k, t in zip(self._free(), (u, v), strict=True):
            points[:, k] = self.lower[k] + t * (self.upper[k] - self.lower[k])
        return points

    def _chart(self) -> Chart:
        area = self.measure

        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            return self._at(parameters[:, 0], parameters[:, 1]), np.full(len(parameters), area)

        lower, upper = boxes([0.0, 1.0], [0.0, 1.0])
        return Chart(lower=lower, upper=upper, place=place, angles=(False, False), extra=(0, 0))
