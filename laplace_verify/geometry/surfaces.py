"""Curved surfaces and round faces: spheres, the lateral surface of a cylinder, its flat ends.

`_at(u, v)` keeps ratios of area: on a sphere ``z = 1 - 2 u`` (Archimedes), on a disc ``r = sqrt(u)``.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from laplace_verify.arrays import Array, IntArray
from laplace_verify.geometry.boundary import Surface
from laplace_verify.geometry.patches import Chart, boxes

__all__ = ["RoundFace", "Sphere", "Tube"]

TURN = 2.0 * math.pi
QUARTERS = np.linspace(0.0, TURN, 5)


def around(angle: Array) -> Array:
    """Return the unit vectors (n, 2) at an angle."""
    return np.stack([np.cos(angle), np.sin(angle)], axis=1)


def outwards(offset: Array, fallback: tuple[float, ...]) -> Array:
    """Return offset (n, d) divided by its length; `fallback` where that vanishes."""
    length = np.sqrt((offset**2).sum(axis=1))
    at_centre = length == 0.0
    unit: Array = offset / np.where(at_centre, 1.0, length)[:, None]
    unit[at_centre] = fallback
    return unit


def spherical(parameters: Array) -> Array:
    """Return unit vectors (n, 3) at polar angle and azimuth, columns of (n, 2)."""
    polar, azimuth = parameters.T
    return np.column_stack([np.sin(polar)[:, None] * around(azimuth), np.cos(polar)])


@dataclass(frozen=True, slots=True, kw_only=True)
class Sphere(Surface):
    """The sphere of a centre and radius; `hole` says that the region lies outside it."""

    centre: tuple[float, ...]
    radius: float
    hole: bool = False

    @property
    def curved(self) -> bool:
        """Whether the piece is not flat."""
        return True

    @property
    def measure(self) -> float:
        """Area, 4 pi R^2."""
        return 4.0 * math.pi * self.radius**2

    def _unit(self, points: Array) -> Array:
        return outwards(points - np.array(self.centre), (0.0, 0.0, 1.0))

    def _project(self, points: Array) -> Array:
        return np.array(self.centre) + self.radius * self._unit(points)

    def _normals(self, points: Array) -> Array:
        return -self._unit(points) if self.hole else self._unit(points)

    def _at(self, u: Array, v: Array) -> Array:
        z = 1.0 - 2.0 * u
        unit = np.column_stack([np.sqrt((1.0 - z) * (1.0 + z))[:, None] * around(TURN * v), z])
        return np.array(self.centre) + self.radius * unit

    def _chart(self) -> Chart:
        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            points = np.array(self.centre) + self.radius * spherical(parameters)
            return points, self.radius**2 * np.sin(parameters[:, 0])

        lower, upper = boxes([0.0, math.pi / 2.0, math.pi], QUARTERS)
        return Chart(lower=lower, upper=upper, place=place, angles=(True, True), extra=(1, 0))


@dataclass(frozen=True, slots=True, kw_only=True)
class Tube(Surface):
    """The lateral surface ``r = radius, z0 < z < z1`` of a cylinder around the z axis."""

    radius: float
    z0: float
    z1: float

    @property
    def curved(self) -> bool:
        """Whether the piece is not flat."""
        return True

    @property
    def measure(self) -> float:
        """Area, 2 pi R (z1 - z0)."""
        return TURN * self.radius * (self.z1 - self.z0)

    def _project(self, points: Array) -> Array:
        unit = outwards(points[:, :2], (1.0, 0.0))
        return np.column_stack([self.radius * unit, np.clip(points[:, 2], self.z0, self.z1)])

    def _normals(self, points: Array) -> Array:
        return np.column_stack([outwards(points[:, :2], (1.0, 0.0)), np.zeros(len(points))])

    def _at(self, u: Array, v: Array) -> Array:
        return np.column_stack([self.radius * around(TURN * u), self.z0 + v * (self.z1 - self.z0)])

    def _chart(self) -> Chart:
        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            points = np.column_stack([self.radius * around(parameters[:, 0]), parameters[:, 1]])
            return points, np.full(len(points), self.radius)

        lower, upper = boxes(QUARTERS, [self.z0, self.z1])
        return Chart(lower=lower, upper=upper, place=place, angles=(True, False), extra=(0, 0))


@dataclass(frozen=True, slots=True, kw_only=True)
class RoundFace(Surface):
    """The disc ``r < radius`` at height z; `outward` is -1 or +1."""

    radius: float
    z: float
    outward: float

    @property
    def curved(self) -> bool:
        """Whether the piece is not flat."""
        return False

    @property
    def measure(self) -> float:
        """Area, pi R^2."""
        return math.pi * self.radius**2

    def _project(self, points: Array) -> Array:
        reach = np.hypot(points[:, 0], points[:, 1])
        shrink = np.where(reach > self.radius, self.radius / np.maximum(reach, self.radius), 1.0)
        return np.column_stack([points[:, :2] * shrink[:, None], np.full(len(points), self.z)])

    def _normals(self, points: Array) -> Array:
        return np.tile([0.0, 0.0, self.outward], (len(points), 1))

    def _at(self, u: Array, v: Array) -> Array:
        return np.column_stack(
            [self.radius * np.sqrt(u)[:, None] * around(TURN * v), np.full(len(u), self.z)]
        )

    def _chart(self) -> Chart:
        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            r, angle = parameters.T
            points = np.column_stack([r[:, None] * around(angle), np.full(len(r), self.z)])
            return points, r

        lower, upper = boxes([0.0, self.radius], QUARTERS)
        return Chart(lower=lower, upper=upper, place=place, angles=(False, True), extra=(1, 0))
