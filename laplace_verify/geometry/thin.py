"""Bodies without thickness, which bound an exterior: an open screen in the plane, a round plate in space.

Their two sides share a place and have opposite normals, as the lips of a slit do.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from typing import ClassVar, NoReturn

import numpy as np

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.base import Junction, Shape
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.checks import coordinates, positive
from laplace_verify.geometry.patches import Chart
from laplace_verify.geometry.segments import Segment
from laplace_verify.geometry.splitting import check_fractions, check_names
from laplace_verify.geometry.surfaces import RoundFace

__all__ = ["RoundPlate", "Screen", "ShiftedFace", "Thin", "two_faces", "two_sides"]


@dataclass(frozen=True, slots=True, repr=False)
class Thin(Shape):
    """A body without inside: it bounds an exterior and is no region of its own (abstract)."""

    def _thin(self) -> NoReturn:
        raise GeometryError(f"{self!r} has no inside; use it as the body of an Exterior")

    @property
    def measure(self) -> float:
        """Zero."""
        return 0.0

    def _inside(self, points: Array) -> BoolArray:
        return np.zeros(len(points), dtype=bool)

    def _draw(self, generator: np.random.Generator, n: int) -> Array:  # noqa: ARG002
        self._thin()

    def _chart(self) -> Chart:
        self._thin()

    def _check(self) -> None:
        whole = {piece.name: piece for loop in self._loops() for piece in loop}
        object.__setattr__(self, "splits", check_fractions(dict(self.splits), whole))
        object.__setattr__(self, "names", check_names(dict(self.names), whole))


@dataclass(frozen=True, slots=True, repr=False)
class Screen(Thin):
    """An open screen in the plane, the segment from `start` to `stop`; pieces front (on its left) and back.

    >>> from laplace_verify.geometry import Exterior, Screen
    >>> Exterior(Screen((-1, 0), (1, 0))).pieces.names
    ('front', 'back')
    """

    start: Sequence[float]
    stop: Sequence[float]

    kind: ClassVar[str] = "screen"
    dim: ClassVar[int] = 2

    def __post_init__(self) -> None:
        """Refuse a screen without length."""
        object.__setattr__(self, "start", coordinates(self.start, 2, "start"))
        object.__setattr__(self, "stop", coordinates(self.stop, 2, "stop"))
        if not math.dist(self.start, self.stop) > 0.0:
            raise GeometryError(f"a screen needs two different ends, got {self.start!r} twice")
        self._check()

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (2,)."""
        ends = np.array([self.start, self.stop])
        return ends.min(axis=0), ends.max(axis=0)

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        return (two_sides(tuple(self.start), tuple(self.stop)),)


@dataclass(frozen=True, slots=True, repr=False)
class RoundPlate(Thin):
    """A round plate without thickness, normal to z; pieces top and bottom.

    >>> from laplace_verify.geometry import Exterior, RoundPlate
    >>> Exterior(RoundPlate((0, 0, 0), 1.5)).junctions[0].opening / 3.141592653589793
    2.0
    """

    centre: Sequence[float]
    radius: float

    kind: ClassVar[str] = "round-plate"
    dim: ClassVar[int] = 3

    def __post_init__(self) -> None:
        """Refuse radius <= 0."""
        object.__setattr__(self, "centre", coordinates(self.centre, 3, "centre"))
        object.__setattr__(self, "radius", positive(self.radius, "radius"))
        self._check()

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (3,)."""
        reach = np.array([self.radius, self.radius, 0.0])
        return np.array(self.centre) - reach, np.array(self.centre) + reach

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        return (two_faces(tuple(self.centre), self.radius),)

    def _solid_junctions(self) -> tuple[Junction, ...]:
        t = np.arange(8) * math.pi / 4.0
        ring = np.array(self.centre) + self.radius * np.column_stack([np.cos(t), np.sin(t), np.zeros(8)])
        return (Junction(points=ring, opening=2.0 * math.pi, pieces=("top", "bottom")),)


@dataclass(frozen=True, slots=True, kw_only=True)
class ShiftedFace(RoundFace):
    """A round face normal to z about `centre`, anywhere."""

    centre: tuple[float, ...] = field(default=(0.0, 0.0, 0.0))

    def _project(self, points: Array) -> Array:
        projected: Array = RoundFace._project(self, points - np.array(self.centre)) + np.array(self.centre)
        return projected

    def _at(self, u: Array, v: Array) -> Array:
        points: Array = RoundFace._at(self, u, v) + np.array(self.centre)
        return points

    def _chart(self) -> Chart:
        plain = RoundFace._chart(self)

        def place(parameters: Array, box: IntArray) -> tuple[Array, Array]:
            points, jacobian = plain.place(parameters, box)
            return points + np.array(self.centre), jacobian

        return replace(plain, place=place)


def two_sides(start: tuple[float, ...], stop: tuple[float, ...]) -> tuple[Segment, Segment]:
    """Return the sides of a screen as seen by the fluid around it: front lies to the left of start -> stop.

    Travel has the fluid on its left, so the front is walked from start to stop.
    """
    return Segment(name="front", start=start, stop=stop), Segment(name="back", start=stop, stop=start)


def two_faces(centre: tuple[float, ...], radius: float) -> tuple[ShiftedFace, ShiftedFace]:
    """Return the faces of a round plate as seen by the fluid around it: normals point into the plate."""
    return (
        ShiftedFace(name="top", centre=centre, radius=radius, z=0.0, outward=-1.0),
        ShiftedFace(name="bottom", centre=centre, radius=radius, z=0.0, outward=1.0),
    )
