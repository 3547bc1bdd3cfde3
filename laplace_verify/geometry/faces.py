"""Flat faces of solids with plane edges: polygons across an axis, and upright walls over a straight side."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from laplace_verify.arrays import Array, IntArray
from laplace_verify.geometry.boundary import Surface
from laplace_verify.geometry.patches import Chart, boxes
from laplace_verify.geometry.polygons import LShape, Polygon, in_trapezoids, trapezoids
from laplace_verify.geometry.segments import Segment

__all__ = ["PolygonFace", "Wall"]


@dataclass(frozen=True, slots=True, kw_only=True)
class PolygonFace(Surface):
    """A polygon at ``level`` across the coordinate `axis`; `outward` is -1 or +1.

    The coordinates of the polygon are the other two of space, in their order.
    """

    polygon: Polygon | LShape
    axis: int
    level: float
    outward: float

    @property
    def curved(self) -> bool:
        """Whether the piece is not flat."""
        return False

    @property
    def measure(self) -> float:
        """Area."""
        return self.polygon.measure

    def _placed(self, flat: Array) -> Array:
        return np.insert(flat, self.axis, self.level, axis=1)

    def _project(self, points: Array) -> Array:
        flat = np.delete(points, self.axis, axis=1)
        outside = np.flatnonzero(~self.polygon._inside(flat))
        if len(outside):
            feet = np.stack([side.project(flat[outside]) for side in self.polygon.pieces])
            away = ((feet - flat[outside]) ** 2).sum(axis=2)
            flat[outside] = feet[np.argmin(away, axis=0), np.arange(len(outside))]
        return self._placed(flat)

    def _normals(self, points: Array) -> Array:
        normals = np.zeros_like(points)
        normals[:, self.axis] = self.outward
        return normals

    def _at(self, u: Array, v: Array) -> Array:
        """Take u for the share of area below, which names a trapezoid and a height in it, v from left."""
        corners, areas = trapezoids(self.polygon._rings())
        ends = np.cumsum(areas) / areas.sum()
        chosen = np.minimum(np.searchsorted(ends, u, side="right"), len(areas) - 1)
        share = np.clip(1.0 - (ends[chosen] - u) * areas.sum() / areas[chosen], 0.0, 1.0)
        return self._placed(in_trapezoids(corners[chosen], v, share))

    def _chart(self) -> Chart:
        flat = self.polygon._chart()

        def place(parameters: Array, box: IntArray) -> tuple[Array, Array]:
            points, jacobian = flat.place(parameters, box)
            return self._placed(points), jacobian

        return Chart(lower=flat.lower, upper=flat.upper, place=place, angles=flat.angles, extra=flat.extra)


@dataclass(frozen=True, slots=True, kw_only=True)
class Wall(Surface):
    """The rectangle over a straight side in the plane, z0 < z < z1, with the outward normal of the side."""

    side: Segment
    z0: float
    z1: float

    @property
    def curved(self) -> bool:
        """Whether the piece is not flat."""
        return False

    @property
    def measure(self) -> float:
        """Area."""
        return self.side.measure * (self.z1 - self.z0)

    def _project(self, points: Array) -> Array:
        return np.column_stack([self.side._project(points[:, :2]), np.clip(points[:, 2], self.z0, self.z1)])

    def _normals(self, points: Array) -> Array:
        return np.column_stack([self.side._normals(points[:, :2]), np.zeros(len(points))])

    def _at(self, u: Array, v: Array) -> Array:
        # measured from the nearer end: exact at both
        z = np.where(v <= 0.5, self.z0 + v * (self.z1 - self.z0), self.z1 + (v - 1.0) * (self.z1 - self.z0))
        return np.column_stack([self.side._at(u), z])

    def _chart(self) -> Chart:
        area = self.measure

        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            return self._at(parameters[:, 0], parameters[:, 1]), np.full(len(parameters), area)

        lower, upper = boxes([0.0, 1.0], [0.0, 1.0])
        return Chart(lower=lower, upper=upper, place=place, angles=(False, False), extra=(0, 0))
