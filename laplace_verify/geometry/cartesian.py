"""Intervals, rectangles and boxes with sides along the axes."""

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
from laplace_verify.geometry.checks import coordinates, number
from laplace_verify.geometry.patches import Chart
from laplace_verify.geometry.segments import EndPoint, Face, Segment

__all__ = ["Box", "Interval", "Rectangle"]


def _ordered(lower: Sequence[float], upper: Sequence[float], names: tuple[str, str]) -> None:
    """Refuse a box whose upper corner is not above its lower one in every coordinate."""
    for axis, (a, b) in enumerate(zip(lower, upper, strict=True)):
        if not b > a:
            raise GeometryError(
                f"{names[1]} must exceed {names[0]} in every coordinate, "
                f"got {a!r} and {b!r} in coordinate {axis}"
            )


@dataclass(frozen=True, slots=True, repr=False)
class _Cartesian(Shape):
    """What intervals, rectangles and boxes share (abstract)."""

    @property
    def measure(self) -> float:
        """Length, area or volume."""
        lower, upper = self.bounding_box
        return float(np.prod(upper - lower))

    def _inside(self, points: Array) -> BoolArray:
        lower, upper = self.bounding_box
        inside: BoolArray = np.all((points >= lower) & (points <= upper), axis=1)
        return inside

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        lower, upper = self.bounding_box
        return lower + (upper - lower) * generator.random((n, self.dim))

    def _chart(self) -> Chart:
        lower, upper = self.bounding_box

        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            return parameters, np.ones(len(parameters))

        d = self.dim
        return Chart(
            lower=lower[None, :], upper=upper[None, :], place=place, angles=(False,) * d, extra=(0,) * d
        )


@dataclass(frozen=True, slots=True, repr=False)
class Interval(_Cartesian):
    """The interval [a, b]; pieces left (normal -1) and right (normal +1).

    >>> Interval(0.0, 2.0).pieces.names
    ('left', 'right')
    """

    a: float
    b: float

    kind: ClassVar[str] = "interval"
    dim: ClassVar[int] = 1

    def __post_init__(self) -> None:
        """Refuse b <= a."""
        object.__setattr__(self, "a", number(self.a, "a"))
        object.__setattr__(self, "b", number(self.b, "b"))
        _ordered((self.a,), (self.b,), ("a", "b"))
        self._check()

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Its ends, each of shape (1,)."""
        return np.array([self.a]), np.array([self.b])

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        length = self.b - self.a
        left = EndPoint(name="left", place=self.a, outward=-1.0, length=length)
        return ((left, EndPoint(name="right", place=self.b, outward=1.0, length=length)),)


@dataclass(frozen=True, slots=True, repr=False)
class Rectangle(_Cartesian):
    """The rectangle between two corners; pieces left, right, bottom, top.

    >>> Rectangle((0, 0), (2, 1)).measure
    2.0
    """

    lower: Sequence[float]
    upper: Sequence[float]

    kind: ClassVar[str] = "rectangle"
    dim: ClassVar[int] = 2
    kinds: ClassVar[frozenset[str]] = frozenset({"polygon"})

    def __post_init__(self) -> None:
        """Refuse upper <= lower in any coordinate."""
        object.__setattr__(self, "lower", coordinates(self.lower, 2, "lower"))
        object.__setattr__(self, "upper", coordinates(self.upper, 2, "upper"))
        _ordered(self.lower, self.upper, ("lower", "upper"))
        self._check()

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Its corners, each of shape (2,)."""
        return np.array(self.lower), np.array(self.upper)

    def _order(self, names: tuple[str, ...]) -> tuple[str, ...]:  # noqa: ARG002 - the order is pinned
        return ("left", "right", "bottom", "top")

    @property
    def vertices(self) -> tuple[tuple[float, float], ...]:
        """Corners, counter-clockwise from `lower`: a rectangle is a polygon."""
        (x0, y0), (x1, y1) = self.lower, self.upper
        return ((x0, y0), (x1, y0), (x1, y1), (x0, y1))

    @property
    def holes(self) -> tuple[tuple[tuple[float, float], ...], ...]:
        """No holes."""
        return ()

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        corners = self.vertices
        names = ("bottom", "right", "top", "left")
        return (
            tuple(
                Segment(name=name, start=corners[k], stop=corners[(k + 1) % 4])
                for k, name in enumerate(names)
            ),
        )


@dataclass(frozen=True, slots=True, repr=False)
class Box(_Cartesian):
    """The box between two corners; pieces left, right (x), front, back (y), bottom, top (z).

    >>> Box((0, 0, 0), (1, 2, 3)).pieces["top"].measure
    2.0
    """

    lower: Sequence[float]
    upper: Sequence[float]

    kind: ClassVar[str] = "box"
    dim: ClassVar[int] = 3

    def __post_init__(self) -> None:
        """Refuse upper <= lower in any coordinate."""
        object.__setattr__(self, "lower", coordinates(self.lower, 3, "lower"))
        object.__setattr__(self, "upper", coordinates(self.upper, 3, "upper"))
        _ordered(self.lower, self.upper, ("lower", "upper"))
        self._check()

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Its corners, each of shape (3,)."""
        return np.array(self.lower), np.array(self.upper)

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        faces = []
        for axis, pair in enumerate((("left", "right"), ("front", "back"), ("bottom", "top"))):
            for name, outward, level in zip(pair, (-1.0, 1.0), (self.lower, self.upper), strict=True):
                low, high = list(self.lower), list(self.upper)
                low[axis] = high[axis] = level[axis]
                faces.append(Face(name=name, lower=tuple(low), upper=tuple(high), axis=axis, outward=outward))
        return (tuple(faces),)

    def _solid_junctions(self) -> tuple[Junction, ...]:
        faces = [face for face in self._loops()[0] if isinstance(face, Face)]
        edges = []
        for i, first in enumerate(faces):
            for second in faces[i + 1 :]:
                if first.axis == second.axis:
                    continue
                low = np.maximum(first.lower, second.lower)
                high = np.minimum(first.upper, second.upper)
                names = (first.name, second.name)
                edges.append(Junction(points=np.stack([low, high]), opening=math.pi / 2.0, pieces=names))
        return tuple(edges)
