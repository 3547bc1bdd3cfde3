"""Balls, spherical shells and finite cylinders."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.base import Junction, Shape
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.checks import THINNEST, coordinates, number, positive
from laplace_verify.geometry.patches import Chart, boxes
from laplace_verify.geometry.surfaces import QUARTERS, TURN, RoundFace, Sphere, Tube, around, spherical

__all__ = ["Ball", "Cylinder", "SphericalShell"]


def _radial_chart(centre: Sequence[float], inner: float, outer: float) -> Chart:
    """Return patches ``centre + r e(t, p)``, t polar angle, p azimuth; Jacobian ``r^2 sin t``."""
    origin = np.array(centre)

    def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
        r, polar = parameters[:, 0], parameters[:, 1]
        return origin + r[:, None] * spherical(parameters[:, 1:]), r**2 * np.sin(polar)

    lower, upper = boxes([inner, outer], [0.0, math.pi / 2.0, math.pi], QUARTERS)
    return Chart(lower=lower, upper=upper, place=place, angles=(False, True, True), extra=(2, 1, 0))


def _draw_shell(generator: np.random.Generator, n: int, inner: float, outer: float) -> Array:
    """Return n points (n, 3) uniform in a spherical shell around the origin."""
    share = (inner / outer) ** 3
    r = outer * np.cbrt(share + (1.0 - share) * generator.random(n))
    z = 1.0 - 2.0 * generator.random(n)
    flat = np.sqrt((1.0 - z) * (1.0 + z))[:, None] * around(TURN * generator.random(n))
    return r[:, None] * np.column_stack([flat, z])


@dataclass(frozen=True, slots=True, repr=False)
class Ball(Shape):
    """The ball of a centre and radius; piece surface.

    >>> print(round(Ball((0, 0, 0), 1.0).measure, 12))
    4.188790204786
    """

    centre: Sequence[float]
    radius: float

    kind: ClassVar[str] = "ball"
    dim: ClassVar[int] = 3

    def __post_init__(self) -> None:
        """Refuse radius <= 0."""
        object.__setattr__(self, "centre", coordinates(self.centre, 3, "centre"))
        object.__setattr__(self, "radius", positive(self.radius, "radius"))
        self._check()

    @property
    def measure(self) -> float:
        """Volume, 4/3 pi R^3."""
        return 4.0 / 3.0 * math.pi * self.radius**3

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (3,)."""
        return np.array(self.centre) - self.radius, np.array(self.centre) + self.radius

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        return ((Sphere(name="surface", centre=tuple(self.centre), radius=self.radius),),)

    def _inside(self, points: Array) -> BoolArray:
        inside: BoolArray = np.sqrt(((points - np.array(self.centre)) ** 2).sum(axis=1)) <= self.radius
        return inside

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        return np.array(self.centre) + _draw_shell(generator, n, 0.0, self.radius)

    def _chart(self) -> Chart:
        return _radial_chart(self.centre, 0.0, self.radius)


@dataclass(frozen=True, slots=True, repr=False)
class SphericalShell(Shape):
    """The region between two concentric spheres; pieces inner, outer.

    >>> SphericalShell((0, 0, 0), 1.0, 2.0).pieces.names
    ('inner', 'outer')
    """

    centre: Sequence[float]
    inner: float
    outer: float

    kind: ClassVar[str] = "spherical-shell"
    dim: ClassVar[int] = 3

    def __post_init__(self) -> None:
        """Refuse inner >= outer."""
        object.__setattr__(self, "centre", coordinates(self.centre, 3, "centre"))
        object.__setattr__(self, "inner", positive(self.inner, "inner"))
        object.__setattr__(self, "outer", positive(self.outer, "outer"))
        if not self.outer - self.inner >= THINNEST * self.outer:
            raise GeometryError(f"inner must be smaller than outer, got {self.inner!r} and {self.outer!r}")
        self._check()

    @property
    def measure(self) -> float:
        """Volume, 4/3 pi (outer^3 - inner^3)."""
        a, b = self.inner, self.outer
        return 4.0 / 3.0 * math.pi * (b - a) * (a * a + a * b + b * b)

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (3,)."""
        return np.array(self.centre) - self.outer, np.array(self.centre) + self.outer

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        centre = tuple(self.centre)
        inner = Sphere(name="inner", centre=centre, radius=self.inner, hole=True)
        return ((inner, Sphere(name="outer", centre=centre, radius=self.outer)),)

    def _inside(self, points: Array) -> BoolArray:
        r = np.sqrt(((points - np.array(self.centre)) ** 2).sum(axis=1))
        inside: BoolArray = (r >= self.inner) & (r <= self.outer)
        return inside

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        return np.array(self.centre) + _draw_shell(generator, n, self.inner, self.outer)

    def _chart(self) -> Chart:
        return _radial_chart(self.centre, self.inner, self.outer)


@dataclass(frozen=True, slots=True, repr=False)
class Cylinder(Shape):
    """The cylinder r < radius, z0 < z < z1 around the z axis; pieces bottom, top, side.

    >>> Cylinder(1.0, 0.0, 2.0).pieces.names
    ('bottom', 'top', 'side')
    """

    radius: float
    z0: float
    z1: float

    kind: ClassVar[str] = "cylinder"
    dim: ClassVar[int] = 3

    def __post_init__(self) -> None:
        """Refuse radius <= 0 and z1 <= z0."""
        object.__setattr__(self, "radius", positive(self.radius, "radius"))
        object.__setattr__(self, "z0", number(self.z0, "z0"))
        object.__setattr__(self, "z1", number(self.z1, "z1"))
        if not self.z1 > self.z0:
            raise GeometryError(f"z1 must exceed z0, got z0={self.z0!r} and z1={self.z1!r}")
        self._check()

    @property
    def measure(self) -> float:
        """Volume, pi R^2 (z1 - z0)."""
        return math.pi * self.radius**2 * (self.z1 - self.z0)

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (3,)."""
        r = self.radius
        return np.array([-r, -r, self.z0]), np.array([r, r, self.z1])

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        bottom = RoundFace(name="bottom", radius=self.radius, z=self.z0, outward=-1.0)
        top = RoundFace(name="top", radius=self.radius, z=self.z1, outward=1.0)
        return ((bottom, top, Tube(name="side", radius=self.radius, z0=self.z0, z1=self.z1)),)

    def _solid_junctions(self) -> tuple[Junction, ...]:
        circle = self.radius * around(np.linspace(0.0, TURN, 16, endpoint=False))
        return tuple(
            Junction(
                points=np.column_stack([circle, np.full(len(circle), z)]),
                opening=math.pi / 2.0,
                pieces=(name, "side"),
            )
            for name, z in (("bottom", self.z0), ("top", self.z1))
        )

    def _inside(self, points: Array) -> BoolArray:
        inside: BoolArray = (
            (np.hypot(points[:, 0], points[:, 1]) <= self.radius)
            & (points[:, 2] >= self.z0)
            & (points[:, 2] <= self.z1)
        )
        return inside

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        r = self.radius * np.sqrt(generator.random(n))
        flat = r[:, None] * around(TURN * generator.random(n))
        return np.column_stack([flat, self.z0 + (self.z1 - self.z0) * generator.random(n)])

    def _chart(self) -> Chart:
        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            r, angle, z = parameters.T
            return np.column_stack([r[:, None] * around(angle), z]), r

        lower, upper = boxes([0.0, self.radius], QUARTERS, [self.z0, self.z1])
        return Chart(lower=lower, upper=upper, place=place, angles=(False, True, False), extra=(1, 0, 0))
