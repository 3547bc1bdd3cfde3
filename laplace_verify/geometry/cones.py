"""Meridian plane of a ball cut by a cone: what lies within a half-angle of the upper axis.

Turned about its straight side on r = 0 the section sweeps the part of a ball about the origin with polar
angle below `half_angle`; beyond pi/2 that is a ball with a conical notch.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.arcs import Arc
from laplace_verify.geometry.base import Shape
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.checks import positive
from laplace_verify.geometry.patches import Chart, boxes
from laplace_verify.geometry.segments import Segment

__all__ = ["ConeSection"]

QUARTER = math.pi / 2.0


@dataclass(frozen=True, slots=True, repr=False)
class ConeSection(Shape):
    """The points (r, z), r > 0, within `radius` of the origin and `half_angle` of the direction of z.

    Pieces side (straight, from the tip outwards), cap (the arc) and straight (on r = 0, called axis in
    axisymmetric problems). The half-angle is in radians, between 0 and pi.

    >>> section = ConeSection(2.0, math.pi / 4)
    >>> section.pieces.names, round(section.measure, 12)
    (('side', 'cap', 'straight'), 1.570796326795)
    """

    radius: float
    half_angle: float

    kind: ClassVar[str] = "cone-section"
    dim: ClassVar[int] = 2

    def __post_init__(self) -> None:
        """Refuse radius <= 0 and a half-angle that is not between 0 and pi."""
        object.__setattr__(self, "radius", positive(self.radius, "radius"))
        object.__setattr__(self, "half_angle", positive(self.half_angle, "half_angle"))
        if not self.half_angle < math.pi * (1.0 - 1e-9):
            raise GeometryError(f"half_angle must be less than pi, got {self.half_angle!r}")
        self._check()

    @property
    def measure(self) -> float:
        """Area, a R^2/2."""
        return self.half_angle * self.radius**2 / 2.0

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (2,)."""
        reach = math.sin(min(self.half_angle, QUARTER))
        return (
            self.radius * np.array([0.0, min(0.0, math.cos(self.half_angle))]),
            self.radius * np.array([reach, 1.0]),
        )

    def _rim(self) -> Arc:
        first = QUARTER - self.half_angle
        return Arc(
            name="cap", centre=(0.0, 0.0), semi_axes=(self.radius, self.radius), first=first, last=QUARTER
        )

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        rim, top = self._rim(), (0.0, self.radius)
        foot = tuple(rim.ends[0].tolist())
        side = Segment(name="side", start=(0.0, 0.0), stop=foot)
        return ((side, rim, Segment(name="straight", start=top, stop=(0.0, 0.0))),)

    def _inside(self, points: Array) -> BoolArray:
        r, z = points.T
        inside: BoolArray = (
            (np.hypot(r, z) <= self.radius) & (r >= 0.0) & (np.arctan2(r, z) <= self.half_angle)
        )
        return inside

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        s = self.radius * np.sqrt(generator.random(n))
        t = self.half_angle * generator.random(n)
        points: Array = s[:, None] * np.stack([np.sin(t), np.cos(t)], axis=1)
        return points

    def _chart(self) -> Chart:
        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            s, t = parameters.T
            return s[:, None] * np.stack([np.sin(t), np.cos(t)], axis=1), s

        parts = max(1, math.ceil(self.half_angle / (math.pi / 4.0)))
        lower, upper = boxes([0.0, self.radius], np.linspace(0.0, self.half_angle, parts + 1))
        return Chart(lower=lower, upper=upper, place=place, angles=(False, True), extra=(1, 0))
