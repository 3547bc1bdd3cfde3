"""Solids with re-entrant edges: prisms over polygons, and a cube without one of its octants.

A prism carries the corners of its base along its height as edges. The cube without an octant has three
re-entrant edges of opening 3 pi/2 that meet in one vertex; under Dirichlet conditions solutions behave there
like r**lambda with the exponent `VERTEX_EXPONENT`, which is smaller than the 2/3 of the edges.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from itertools import combinations
from typing import ClassVar

import numpy as np

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.base import Junction, Shape, Vertex
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.checks import number, positive
from laplace_verify.geometry.faces import PolygonFace, Wall
from laplace_verify.geometry.patches import Chart, boxes
from laplace_verify.geometry.polygons import LShape, Polygon
from laplace_verify.geometry.segments import Face, Segment

__all__ = ["VERTEX_EXPONENT", "NotchedCube", "Prism"]

RIGHT = math.pi / 2.0
PAIRS = (("left", "right"), ("front", "back"), ("bottom", "top"))  # faces across x, y, z
# Dirichlet exponent of space without an octant. Fichera 1975, Comportamento asintotico del campo elettrico
# (bounds), and Schmitz, Volk & Wendland 1993, Three-dimensional singularities of elastic fields near vertices
# (0.4541737), both from memory, unchecked; the further digits by two spectral computations that agree to 13.
VERTEX_EXPONENT = 0.454173734301


@dataclass(frozen=True, slots=True, repr=False)
class Prism(Shape):
    """The points over a polygon with z0 < z < z1; pieces bottom, top and those of the polygon.

    >>> block = Prism(LShape(1.0), 0.0, 0.5)
    >>> block.measure, block.pieces.names[:3]
    (1.5, ('bottom', 'top', 'side-1'))
    """

    base: Polygon | LShape
    z0: float
    z1: float

    kind: ClassVar[str] = "prism"
    dim: ClassVar[int] = 3

    def __post_init__(self) -> None:
        """Refuse bases that are no polygons, or have slits, and z1 <= z0."""
        if not isinstance(self.base, Polygon | LShape):
            raise GeometryError(
                f"the base of a prism must be a Polygon or an LShape, got {self.base!r}; over a rectangle it "
                "is a Box, over a disc a Cylinder"
            )
        taken = {"bottom", "top"} & set(self.base.pieces.names)
        if taken:
            raise GeometryError(
                f"no side of the base may be called {min(taken)!r}, as an end of the prism is"
            )
        if any(junction.opening > 2.0 * math.pi - 1e-9 for junction in self.base.junctions):
            raise GeometryError("the base of a prism must not have a slit")
        object.__setattr__(self, "z0", number(self.z0, "z0"))
        object.__setattr__(self, "z1", number(self.z1, "z1"))
        if not self.z1 > self.z0:
            raise GeometryError(f"z1 must exceed z0, got z0={self.z0!r} and z1={self.z1!r}")
        self._check()

    def is_a(self, kind: str) -> bool:
        """Whether the shape is of this kind: "prism", or "prism-l-shape" and the like by its base."""
        return kind in (self.kind, f"prism-{self.base.kind}")

    @property
    def measure(self) -> float:
        """Volume."""
        return self.base.measure * (self.z1 - self.z0)

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (3,)."""
        lower, upper = self.base.bounding_box
        return np.append(lower, self.z0), np.append(upper, self.z1)

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        ends = (("bottom", self.z0, -1.0), ("top", self.z1, 1.0))
        faces: list[Boundary] = [
            PolygonFace(name=name, polygon=self.base, axis=2, level=z, outward=outward)
            for name, z, outward in ends
        ]
        for side in self.base.pieces:
            if isinstance(side, Segment):
                faces.append(Wall(name=side.name, side=side, z0=self.z0, z1=self.z1))
        return (tuple(faces),)

    def _solid_junctions(self) -> tuple[Junction, ...]:
        upright = [
            Junction(
                points=np.column_stack([np.repeat(corner.points, 2, axis=0), [self.z0, self.z1]]),
                opening=corner.opening,
                pieces=(self._new_name(corner.pieces[0]), self._new_name(corner.pieces[1])),
            )
            for corner in self.base.junctions
        ]
        level = [
            Junction(
                points=np.column_stack([side.ends, np.full(2, z)]),
                opening=RIGHT,
                pieces=(self._new_name(end), self._new_name(side.name)),
            )
            for end, z in (("bottom", self.z0), ("top", self.z1))
            for side in self.base.pieces
        ]
        return (*upright, *level)

    def _inside(self, points: Array) -> BoolArray:
        inside: BoolArray = (
            self.base._inside(points[:, :2]) & (points[:, 2] >= self.z0) & (points[:, 2] <= self.z1)
        )
        return inside

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        flat = self.base._draw(generator, n)
        return np.column_stack([flat, self.z0 + (self.z1 - self.z0) * generator.random(n)])

    def _chart(self) -> Chart:
        flat, count = self.base._chart(), len(self.base._chart().lower)

        def place(parameters: Array, box: IntArray) -> tuple[Array, Array]:
            points, jacobian = flat.place(parameters[:, :2], box)
            return np.column_stack([points, parameters[:, 2]]), jacobian

        return Chart(
            lower=np.column_stack([flat.lower, np.full(count, self.z0)]),
            upper=np.column_stack([flat.upper, np.full(count, self.z1)]),
            place=place,
            angles=(*flat.angles, False),
            extra=(*flat.extra, 0),
        )


@dataclass(frozen=True, slots=True, repr=False)
class NotchedCube(Shape):
    """The cube (-size, size)^3 without its octant x, y, z > 0; re-entrant vertex at the origin.

    Pieces left, right (x), front, back (y), bottom, top (z) as of a box, and the square faces of the notch
    notch-x, notch-y, notch-z, on which that coordinate is 0.

    >>> NotchedCube(1.0).measure
    7.0
    """

    size: float = field()  # overrides the extent that other shapes have under this name

    kind: ClassVar[str] = "notched-cube"
    dim: ClassVar[int] = 3

    def __post_init__(self) -> None:
        """Refuse size <= 0."""
        object.__setattr__(self, "size", positive(self.size, "size"))
        self._check()

    @property
    def measure(self) -> float:
        """Volume, seven octants."""
        return 7.0 * self.size**3

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (3,)."""
        return np.full(3, -self.size), np.full(3, self.size)

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        s = self.size
        bent = Polygon([(-s, -s), (s, -s), (s, 0.0), (0.0, 0.0), (0.0, s), (-s, s)])
        faces: list[Boundary] = []
        for axis, (low_name, high_name) in enumerate(PAIRS):
            low, high = np.full(3, -s), np.full(3, s)
            high[axis] = -s
            faces.append(_square(low_name, low, high, axis, -1.0))
            faces.append(PolygonFace(name=high_name, polygon=bent, axis=axis, level=s, outward=1.0))
        for axis, letter in enumerate("xyz"):
            high = np.full(3, s)
            high[axis] = 0.0
            faces.append(_square(f"notch-{letter}", np.zeros(3), high, axis, 1.0))
        return (tuple(faces),)

    def _solid_junctions(self) -> tuple[Junction, ...]:
        s, names = self.size, PAIRS
        found = []
        for i, j in combinations(range(3), 2):
            k = 3 - i - j
            for a, b in ((0, 0), (0, 1), (1, 0), (1, 1)):
                start, stop = np.empty(3), np.empty(3)
                start[[i, j]] = stop[[i, j]] = (s * (2 * a - 1), s * (2 * b - 1))
                start[k], stop[k] = -s, 0.0 if a and b else s
                found.append((start, stop, RIGHT, names[i][a], names[j][b]))
            notch = np.zeros(3)
            notch[k] = s
            found.append((np.zeros(3), notch, 3.0 * RIGHT, f"notch-{'xyz'[i]}", f"notch-{'xyz'[j]}"))
            for one, other in ((i, j), (j, i)):  # the face across `one` ends at the outer face across `other`
                start = np.zeros(3)
                start[other] = s
                found.append((start, start + notch, RIGHT, f"notch-{'xyz'[one]}", names[other][1]))
        return tuple(
            Junction(
                points=np.stack([start, stop]),
                opening=opening,
                pieces=(self._new_name(first), self._new_name(second)),
            )
            for start, stop, opening, first, second in found
        )

    @property
    def sharp_vertices(self) -> tuple[Vertex, ...]:
        """The re-entrant vertex."""
        notch = tuple(self._new_name(f"notch-{letter}") for letter in "xyz")
        return (Vertex(point=(0.0, 0.0, 0.0), pieces=notch, exponent=VERTEX_EXPONENT),)

    def _inside(self, points: Array) -> BoolArray:
        inside: BoolArray = np.asarray((np.abs(points) <= self.size).all(axis=1))
        inside &= np.asarray((points <= 0.0).any(axis=1))
        return inside

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        return self.size * (2.0 * generator.random((n, 3)) - 1.0)

    def _chart(self) -> Chart:
        halves = [-self.size, 0.0, self.size]
        lower, upper = boxes(halves, halves, halves)
        kept = np.asarray((upper <= 0.0).any(axis=1))

        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            return parameters.copy(), np.ones(len(parameters))

        return Chart(lower=lower[kept], upper=upper[kept], place=place, angles=(False,) * 3, extra=(0,) * 3)


def _square(name: str, low: Array, high: Array, axis: int, outward: float) -> Face:
    """Return a square face between two of its corners."""
    return Face(name=name, lower=tuple(low.tolist()), upper=tuple(high.tolist()), axis=axis, outward=outward)
