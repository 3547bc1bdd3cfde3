"""Discs, ellipses, annuli and sectors, in polar patches with the exact Jacobian."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.arcs import TURN, Arc
from laplace_verify.geometry.base import Shape
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.checks import THINNEST, coordinates, number, positive
from laplace_verify.geometry.patches import Chart, boxes
from laplace_verify.geometry.segments import Segment

__all__ = ["Annulus", "Disc", "Ellipse", "Sector"]

FLATTEST = 1e-3  # least ratio of semi-axes: patches of the rim grow as its inverse


def polar_chart(centre: Sequence[float], semi_axes: Sequence[float], opening: float = TURN) -> Chart:
    """Return patches of ``centre + s (a cos t, b sin t)``, 0 < s < 1, 0 < t < opening; Jacobian ``a b s``."""
    origin, axes = np.array(centre), np.array(semi_axes)

    def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
        s, t = parameters.T
        unit = np.stack([np.cos(t), np.sin(t)], axis=1)
        return origin + s[:, None] * unit * axes, axes[0] * axes[1] * s

    lower, upper = boxes([0.0, 1.0], np.linspace(0.0, opening, math.ceil(opening / (math.pi / 4) - 1e-9) + 1))
    return Chart(lower=lower, upper=upper, place=place, angles=(False, True), extra=(1, 0))


def draw_disc(generator: np.random.Generator, n: int, opening: float = TURN) -> Array:
    """Return n points (n, 2) uniform over the sector of the unit disc."""
    r, t = np.sqrt(generator.random(n)), opening * generator.random(n)
    return np.stack([r * np.cos(t), r * np.sin(t)], axis=1)


@dataclass(frozen=True, slots=True, repr=False)
class Disc(Shape):
    """The disc of a centre and radius; piece rim.

    >>> Disc((0, 0), 1.0).pieces["rim"].point([0.25]).round(12).tolist()
    [[0.0, 1.0]]
    """

    centre: Sequence[float]
    radius: float

    kind: ClassVar[str] = "disc"
    dim: ClassVar[int] = 2
    kinds: ClassVar[frozenset[str]] = frozenset({"ellipse"})

    def __post_init__(self) -> None:
        """Refuse radius <= 0."""
        object.__setattr__(self, "centre", coordinates(self.centre, 2, "centre"))
        object.__setattr__(self, "radius", positive(self.radius, "radius"))
        self._check()

    @property
    def semi_axes(self) -> tuple[float, float]:
        """The radius twice: a disc is an ellipse."""
        return (self.radius, self.radius)

    @property
    def measure(self) -> float:
        """Area, pi R^2."""
        return math.pi * self.radius**2

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (2,)."""
        return np.array(self.centre) - self.radius, np.array(self.centre) + self.radius

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        rim = Arc(name="rim", centre=tuple(self.centre), semi_axes=self.semi_axes, first=0.0, last=TURN)
        return ((rim,),)

    def _inside(self, points: Array) -> BoolArray:
        offset = points - np.array(self.centre)
        inside: BoolArray = np.hypot(offset[:, 0], offset[:, 1]) <= self.radius
        return inside

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        return np.array(self.centre) + self.radius * draw_disc(generator, n)

    def _chart(self) -> Chart:
        return polar_chart(self.centre, self.semi_axes)


@dataclass(frozen=True, slots=True, repr=False)
class Ellipse(Shape):
    """The ellipse with semi-axes along x and y; piece rim, from the positive x axis counter-clockwise.

    >>> print(round(Ellipse((0, 0), (2, 1)).pieces["rim"].measure, 12))
    9.688448220548
    """

    centre: Sequence[float]
    semi_axes: Sequence[float]

    kind: ClassVar[str] = "ellipse"
    dim: ClassVar[int] = 2

    def __post_init__(self) -> None:
        """Refuse semi-axes that are not positive or too different."""
        object.__setattr__(self, "centre", coordinates(self.centre, 2, "centre"))
        object.__setattr__(self, "semi_axes", coordinates(self.semi_axes, 2, "semi_axes"))
        if not min(self.semi_axes) > 0.0:
            raise GeometryError(f"semi_axes must be > 0, got {self.semi_axes!r}")
        if not min(self.semi_axes) >= FLATTEST * max(self.semi_axes):
            raise GeometryError(
                f"semi_axes must differ by less than a factor {1 / FLATTEST:g}, got {self.semi_axes!r}"
            )
        self._check()

    @property
    def measure(self) -> float:
        """Area, pi a b."""
        return math.pi * self.semi_axes[0] * self.semi_axes[1]

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (2,)."""
        return np.array(self.centre) - np.array(self.semi_axes), np.array(self.centre) + np.array(
            self.semi_axes
        )

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        axes = tuple(self.semi_axes)
        return ((Arc(name="rim", centre=tuple(self.centre), semi_axes=axes, first=0.0, last=TURN),),)

    def _inside(self, points: Array) -> BoolArray:
        scaled = (points - np.array(self.centre)) / np.array(self.semi_axes)
        inside: BoolArray = np.hypot(scaled[:, 0], scaled[:, 1]) <= 1.0
        return inside

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        return np.array(self.centre) + np.array(self.semi_axes) * draw_disc(generator, n)

    def _chart(self) -> Chart:
        return polar_chart(self.centre, self.semi_axes)


@dataclass(frozen=True, slots=True, repr=False)
class Annulus(Shape):
    """The region between two circles, concentric unless `inner_centre` is given; pieces inner, outer.

    >>> Annulus((0, 0), 1.0, 2.0).pieces.names
    ('inner', 'outer')
    """

    centre: Sequence[float]
    inner: float
    outer: float
    inner_centre: Sequence[float] | None = None

    kind: ClassVar[str] = "annulus"
    dim: ClassVar[int] = 2

    def __post_init__(self) -> None:
        """Refuse an inner circle that is not inside the outer one."""
        object.__setattr__(self, "centre", coordinates(self.centre, 2, "centre"))
        object.__setattr__(self, "inner", positive(self.inner, "inner"))
        object.__setattr__(self, "outer", positive(self.outer, "outer"))
        if self.inner_centre is not None:
            object.__setattr__(self, "inner_centre", coordinates(self.inner_centre, 2, "inner_centre"))
        if not self.inner < self.outer:
            raise GeometryError(f"inner must be smaller than outer, got {self.inner!r} and {self.outer!r}")
        gap = self.outer - self.inner - math.dist(self.centre, self.hole_centre)
        if not gap >= THINNEST * self.outer:
            raise GeometryError(
                f"the inner circle must lie inside the outer one, but the gap between them is {gap:g}"
            )
        self._check()

    @property
    def hole_centre(self) -> tuple[float, ...]:
        """Centre of the inner circle."""
        return tuple(self.centre if self.inner_centre is None else self.inner_centre)

    @property
    def measure(self) -> float:
        """Area, pi (outer^2 - inner^2)."""
        return math.pi * (self.outer - self.inner) * (self.outer + self.inner)

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (2,)."""
        return np.array(self.centre) - self.outer, np.array(self.centre) + self.outer

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        radii = (self.inner, self.inner), (self.outer, self.outer)
        inner = Arc(
            name="inner", centre=self.hole_centre, semi_axes=radii[0], first=0.0, last=TURN, hole=True
        )
        outer = Arc(name="outer", centre=tuple(self.centre), semi_axes=radii[1], first=0.0, last=TURN)
        return (inner,), (outer,)

    def _inside(self, points: Array) -> BoolArray:
        from_hole, from_centre = points - np.array(self.hole_centre), points - np.array(self.centre)
        inside: BoolArray = (np.hypot(from_hole[:, 0], from_hole[:, 1]) >= self.inner) & (
            np.hypot(from_centre[:, 0], from_centre[:, 1]) <= self.outer
        )
        return inside

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        if self.inner_centre is not None:  # in the chart, a quarter kept, in proportion to its Jacobian
            parameters = generator.random((n, 2)) * [1.0, TURN]
            points, jacobian = self._chart().place(parameters, np.zeros(n, dtype=np.int64))
            slope = self.outer - self.inner + math.dist(self.centre, self.inner_centre)
            return points[generator.random(n) * self.outer * slope < jacobian]
        share = (self.inner / self.outer) ** 2
        r = self.outer * np.sqrt(share + (1.0 - share) * generator.random(n))
        t = TURN * generator.random(n)
        return np.array(self.centre) + np.stack([r * np.cos(t), r * np.sin(t)], axis=1)

    def _chart(self) -> Chart:
        """Blend the circles: ``x = c(s) + R(s) e(t)`` with c, R linear in s; Jacobian ``R (R' + c' . e)``."""
        start, stop = np.array(self.hole_centre), np.array(self.centre)
        shift, growth = stop - start, self.outer - self.inner

        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            s, t = parameters.T
            unit = np.stack([np.cos(t), np.sin(t)], axis=1)
            radius = self.inner + s * growth
            points = start + s[:, None] * shift + radius[:, None] * unit
            return points, radius * (growth + unit @ shift)

        lower, upper = boxes([0.0, 1.0], np.linspace(0.0, TURN, 9))
        return Chart(lower=lower, upper=upper, place=place, angles=(False, True), extra=(1, 1))


@dataclass(frozen=True, slots=True, repr=False)
class Sector(Shape):
    """The sector 0 < r < radius, 0 < angle < opening, apex at the origin; pieces start, end, arc.

    `start` lies on angle 0, `end` on angle `opening`. At an opening of 2 pi it is a slit disc: start and
    end share a place and have opposite normals.

    >>> Sector(1.0, 6.283185307179586).junctions[0].pieces
    ('start', 'arc')
    """

    radius: float
    opening: float

    kind: ClassVar[str] = "sector"
    dim: ClassVar[int] = 2

    def __post_init__(self) -> None:
        """Refuse an opening outside (0, 2 pi]."""
        object.__setattr__(self, "radius", positive(self.radius, "radius"))
        opening = number(self.opening, "opening")
        if not 0.0 < opening <= TURN * (1.0 + 1e-15):
            raise GeometryError(f"opening must lie in (0, 2 pi], in radians, got {self.opening!r}")
        object.__setattr__(self, "opening", min(opening, TURN))
        self._check()

    @property
    def measure(self) -> float:
        """Area, R^2 opening / 2."""
        return self.radius**2 * self.opening / 2.0

    def _tip(self) -> tuple[float, float]:
        """Where `end` meets the arc; exactly on the axis for openings that are quarter turns."""
        quarters = self.opening / (math.pi / 2.0)
        if abs(quarters - round(quarters)) < 1e-15:
            x, y = ((1.0, 0.0), (0.0, 1.0), (-1.0, 0.0), (0.0, -1.0))[round(quarters) % 4]
        else:
            x, y = math.cos(self.opening), math.sin(self.opening)
        return self.radius * x, self.radius * y

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (2,)."""
        corners = [(0.0, 0.0), (self.radius, 0.0), self._tip()]
        for k, (x, y) in enumerate(((0.0, 1.0), (-1.0, 0.0), (0.0, -1.0)), start=1):
            if self.opening >= k * math.pi / 2.0:
                corners.append((self.radius * x, self.radius * y))
        array = np.array(corners)
        return array.min(axis=0), array.max(axis=0)

    def _order(self, names: tuple[str, ...]) -> tuple[str, ...]:  # noqa: ARG002 - the order is pinned
        return ("start", "end", "arc")

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        apex, radii = (0.0, 0.0), (self.radius, self.radius)
        start = Segment(name="start", start=apex, stop=(self.radius, 0.0))
        arc = Arc(name="arc", centre=apex, semi_axes=radii, first=0.0, last=self.opening)
        return ((start, arc, Segment(name="end", start=self._tip(), stop=apex)),)

    def _inside(self, points: Array) -> BoolArray:
        angle = np.mod(np.arctan2(points[:, 1], points[:, 0]), TURN)
        inside: BoolArray = (np.hypot(points[:, 0], points[:, 1]) <= self.radius) & (angle <= self.opening)
        return inside

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        return self.radius * draw_disc(generator, n, self.opening)

    def _chart(self) -> Chart:
        return polar_chart((0.0, 0.0), (self.radius, self.radius), self.opening)
