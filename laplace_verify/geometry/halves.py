"""Right halves of discs and annuli: meridian planes of balls and spherical shells.

Turned about its straight side a half-disc sweeps a ball, a half-annulus a spherical shell. Patches are polar
about the centre, with the angle from -pi/2 to pi/2.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.arcs import Arc
from laplace_verify.geometry.base import Shape
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.checks import THINNEST, coordinates, positive
from laplace_verify.geometry.patches import Chart, boxes
from laplace_verify.geometry.segments import Segment

__all__ = ["HalfAnnulus", "HalfDisc"]

QUARTER = math.pi / 2.0


def _chart(centre: Sequence[float], inner: float, outer: float) -> Chart:
    """Return patches of ``centre + s (cos t, sin t)``, inner < s < outer, |t| < pi/2; Jacobian ``s``."""
    origin = np.array(centre)

    def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
        s, t = parameters.T
        return origin + s[:, None] * np.stack([np.cos(t), np.sin(t)], axis=1), s

    lower, upper = boxes([inner, outer], np.linspace(-QUARTER, QUARTER, 5))
    return Chart(lower=lower, upper=upper, place=place, angles=(False, True), extra=(1, 0))


def _draw(
    generator: np.random.Generator, n: int, centre: Sequence[float], inner: float, outer: float
) -> Array:
    """Return n points (n, 2) uniform between two half-circles."""
    share = (inner / outer) ** 2
    s = outer * np.sqrt(share + (1.0 - share) * generator.random(n))
    t = math.pi * generator.random(n) - QUARTER
    return np.array(centre) + np.stack([s * np.cos(t), s * np.sin(t)], axis=1)


@dataclass(frozen=True, slots=True, repr=False)
class HalfDisc(Shape):
    """The half x > centre of a disc; pieces side (straight, on x = centre) and rim.

    >>> HalfDisc((0, 0), 1.0).pieces.names
    ('side', 'rim')
    """

    centre: Sequence[float]
    radius: float

    kind: ClassVar[str] = "half-disc"
    dim: ClassVar[int] = 2

    def __post_init__(self) -> None:
        """Refuse radius <= 0."""
        object.__setattr__(self, "centre", coordinates(self.centre, 2, "centre"))
        object.__setattr__(self, "radius", positive(self.radius, "radius"))
        self._check()

    @property
    def measure(self) -> float:
        """Area, pi R^2/2."""
        return math.pi * self.radius**2 / 2.0

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (2,)."""
        (x, y), r = self.centre, self.radius
        return np.array([x, y - r]), np.array([x + r, y + r])

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        (x, y), r = self.centre, self.radius
        side = Segment(name="side", start=(x, y + r), stop=(x, y - r))
        rim = Arc(name="rim", centre=(x, y), semi_axes=(r, r), first=-QUARTER, last=QUARTER)
        return ((side, rim),)

    def _inside(self, points: Array) -> BoolArray:
        offset = points - np.array(self.centre)
        inside: BoolArray = (np.hypot(offset[:, 0], offset[:, 1]) <= self.radius) & (offset[:, 0] >= 0.0)
        return inside

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        return _draw(generator, n, self.centre, 0.0, self.radius)

    def _chart(self) -> Chart:
        return _chart(self.centre, 0.0, self.radius)


@dataclass(frozen=True, slots=True, repr=False)
class HalfAnnulus(Shape):
    """The half x > centre of the region between two circles; pieces lower and upper (straight), inner, outer.

    >>> HalfAnnulus((0, 0), 1.0, 2.0).pieces.names
    ('lower', 'upper', 'inner', 'outer')
    """

    centre: Sequence[float]
    inner: float
    outer: float

    kind: ClassVar[str] = "half-annulus"
    dim: ClassVar[int] = 2

    def __post_init__(self) -> None:
        """Refuse circles that leave no room between them."""
        object.__setattr__(self, "centre", coordinates(self.centre, 2, "centre"))
        object.__setattr__(self, "inner", positive(self.inner, "inner"))
        object.__setattr__(self, "outer", positive(self.outer, "outer"))
        if not self.outer - self.inner >= THINNEST * self.outer:
            raise GeometryError(f"inner must be smaller than outer, got {self.inner!r} and {self.outer!r}")
        self._check()

    @property
    def measure(self) -> float:
        """Area, pi (outer^2 - inner^2)/2."""
        return math.pi * (self.outer - self.inner) * (self.outer + self.inner) / 2.0

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (2,)."""
        (x, y), r = self.centre, self.outer
        return np.array([x, y - r]), np.array([x + r, y + r])

    def _order(self, names: tuple[str, ...]) -> tuple[str, ...]:  # noqa: ARG002 - straight pieces first
        return ("lower", "upper", "inner", "outer")

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        (x, y), a, b = self.centre, self.inner, self.outer
        first, last = -QUARTER, QUARTER
        return (
            (
                Segment(name="lower", start=(x, y - a), stop=(x, y - b)),
                Arc(name="outer", centre=(x, y), semi_axes=(b, b), first=first, last=last),
                Segment(name="upper", start=(x, y + b), stop=(x, y + a)),
                Arc(name="inner", centre=(x, y), semi_axes=(a, a), first=first, last=last, hole=True),
            ),
        )

    def _inside(self, points: Array) -> BoolArray:
        offset = points - np.array(self.centre)
        s = np.hypot(offset[:, 0], offset[:, 1])
        inside: BoolArray = (s >= self.inner) & (s <= self.outer) & (offset[:, 0] >= 0.0)
        return inside

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        return _draw(generator, n, self.centre, self.inner, self.outer)

    def _chart(self) -> Chart:
        return _chart(self.centre, self.inner, self.outer)
