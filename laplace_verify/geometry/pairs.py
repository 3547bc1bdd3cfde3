"""A ball less two equal balls inside it: the window around two spheres.

Each half, z > 0 or z < 0, is star-shaped about the centre of its inner ball, from which the outer sphere or
the plane half-way lies at the distance (t the angle from the axis, away from the other ball, h the height
of the centre)

    r(t) = sqrt(A^2 - h^2 sin^2 t) - h cos t   up to tan(pi - t) = A/h,   then   r(t) = -h/cos t,

so that x = c + (R + s (r - R)) e(t, p) maps the patch 0 < s < 1 with the Jacobian (r - R) |x - c|^2 sin t
(derived here).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.base import Shape
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.checks import THINNEST, coordinates, positive
from laplace_verify.geometry.patches import Chart, boxes
from laplace_verify.geometry.surfaces import QUARTERS, Sphere, spherical

__all__ = ["PairShell"]


@dataclass(frozen=True, slots=True, repr=False)
class PairShell(Shape):
    """The ball of radius `outer` less two balls of a radius, a gap apart along z; pieces outer, upper, lower.

    >>> PairShell((0, 0, 0), 1.0, 0.5, 4.0).pieces.names
    ('outer', 'upper', 'lower')
    """

    centre: Sequence[float]
    radius: float
    gap: float
    outer: float

    kind: ClassVar[str] = "pair-shell"
    dim: ClassVar[int] = 3

    def __post_init__(self) -> None:
        """Refuse balls that touch each other or the outer sphere."""
        object.__setattr__(self, "centre", coordinates(self.centre, 3, "centre"))
        for name in ("radius", "gap", "outer"):
            object.__setattr__(self, name, positive(getattr(self, name), name))
        room = self.outer - 2.0 * self.radius - self.gap / 2.0
        if not min(room, self.gap) >= THINNEST * self.outer:
            raise GeometryError(
                f"outer must exceed 2 radius + gap/2 = {self.outer - room:g}, got {self.outer!r}"
            )
        self._check()

    @property
    def height(self) -> float:
        """Height of the centre of the upper ball."""
        return self.radius + self.gap / 2.0

    @property
    def measure(self) -> float:
        """Volume."""
        return 4.0 / 3.0 * math.pi * (self.outer**3 - 2.0 * self.radius**3)

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (3,)."""
        return np.array(self.centre) - self.outer, np.array(self.centre) + self.outer

    def _middles(self) -> tuple[tuple[float, ...], tuple[float, ...]]:
        x, y, z = self.centre
        return (x, y, z + self.height), (x, y, z - self.height)

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        outer = Sphere(name="outer", centre=tuple(self.centre), radius=self.outer)
        upper, lower = (
            Sphere(name=name, centre=middle, radius=self.radius, hole=True)
            for name, middle in zip(("upper", "lower"), self._middles(), strict=True)
        )
        return ((outer, upper, lower),)

    def _inside(self, points: Array) -> BoolArray:
        inside: BoolArray = _away(points, self.centre) <= self.outer
        for middle in self._middles():
            inside &= _away(points, middle) >= self.radius
        return inside

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        direction = generator.standard_normal((n, 3))
        direction /= np.sqrt((direction**2).sum(axis=1, keepdims=True))
        return np.array(self.centre) + self.outer * direction * np.cbrt(generator.random((n, 1)))

    def _chart(self) -> Chart:
        h, edge = self.height, math.pi - math.atan(self.outer / self.height)
        t = [0.0, edge / 2.0, edge, (edge + math.pi) / 2.0, math.pi]
        low, high = boxes([0.0, 1.0], t, QUARTERS)
        half = len(low)

        def place(parameters: Array, box: IntArray) -> tuple[Array, Array]:
            s, polar = parameters[:, 0], parameters[:, 1]
            sine, cosine = np.sin(polar), np.cos(polar)
            to_sphere = np.sqrt(np.maximum(self.outer**2 - (h * sine) ** 2, 0.0)) - h * cosine
            beyond = low[box % half, 1] >= edge - 1e-12  # faces the other ball
            reach = np.where(beyond, -h / np.where(beyond, cosine, -1.0), to_sphere)
            r = self.radius + s * (reach - self.radius)
            offset = r[:, None] * spherical(parameters[:, 1:])
            offset[:, 2] += h
            offset[:, 2] *= np.where(box < half, 1.0, -1.0)
            return np.array(self.centre) + offset, r**2 * sine * (reach - self.radius)

        return Chart(
            lower=np.concatenate([low, low]),
            upper=np.concatenate([high, high]),
            place=place,
            angles=(False, True, True),
            extra=(2, 16, 0),
        )


def _away(points: Array, centre: Sequence[float]) -> Array:
    """Return the distances (n,) from a point."""
    distance: Array = np.sqrt(((points - np.array(centre)) ** 2).sum(axis=1))
    return distance
