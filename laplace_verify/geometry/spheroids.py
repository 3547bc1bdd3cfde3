"""Spheroids about the z direction, and the rings and shells between two concentric ellipses or spheroids.

A ring between the ellipses with semi-axes (a_0, b_0) and (a_1, b_1) is mapped by x = a(s) cos t, y = b(s)
sin t with a, b linear in s; the Jacobian is ``a' b cos^2 t + a b' sin^2 t``. The inner ellipse may be flat
(b_0 = 0: a slit), which the map bears as elliptic coordinates do: nothing is singular at the tips. Shells
between spheroids take the same map in their meridian planes, times the distance from the axis (derived
here).

The area of a spheroid between the equator and the height c s is ``2 pi a int sqrt(c^2 + (a^2 - c^2) s^2)
ds``, which is elementary; fractions of area are turned into heights by bisection.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any, ClassVar, Self

import numpy as np

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.arcs import TURN, Arc
from laplace_verify.geometry.base import Shape
from laplace_verify.geometry.boundary import Boundary, Surface
from laplace_verify.geometry.checks import coordinates, positive
from laplace_verify.geometry.patches import Chart, boxes
from laplace_verify.geometry.surfaces import QUARTERS, around, spherical
from laplace_verify.geometry.thin import two_faces, two_sides

__all__ = ["EllipticRing", "Spheroid", "SpheroidSurface", "SpheroidalShell", "spheroid_axes"]

FLATTEST = 1e-3  # least ratio of semi-axes: patches grow as its inverse


def spheroid_axes(value: Any, name: str) -> tuple[float, float, float]:
    """Return (a, a, c) from (a, c) or (a, a, c), all >= 0."""
    if np.ndim(value) == 1 and len(value) == 2:
        value = (value[0], value[0], value[1])
    a, b, c = coordinates(value, 3, name)
    if a != b:
        raise GeometryError(
            f"{name} must be (equatorial, polar) or (a, a, c): a spheroid is round about the z direction, "
            f"got {value!r}"
        )
    return a, b, c


def _positive(axes: Sequence[float], name: str) -> None:
    """Refuse semi-axes that are not positive or too different."""
    if not min(axes) > 0.0:
        raise GeometryError(f"{name} must be > 0, got {tuple(axes)!r}")
    if not min(axes) >= FLATTEST * max(axes):
        raise GeometryError(f"{name} must differ by less than a factor {1 / FLATTEST:g}, got {tuple(axes)!r}")


def _nested(inner: Sequence[float], outer: Sequence[float]) -> None:
    """Refuse an inner ellipse or spheroid that is not inside the outer one; it may be flat."""
    _positive(outer, "outer")
    if not (min(inner) >= 0.0 and max(inner) > 0.0):
        raise GeometryError(f"inner must be >= 0 and not all zero, got {tuple(inner)!r}")
    if min(inner) > 0.0:
        _positive(inner, "inner")
    gap = min(b - a for a, b in zip(inner, outer, strict=True))
    if not gap >= FLATTEST * max(outer):
        raise GeometryError(
            f"every outer semi-axis must exceed the inner one by {FLATTEST:g} of the largest, got inner "
            f"{tuple(inner)!r} and outer {tuple(outer)!r}"
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class SpheroidSurface(Surface):
    """The spheroid ``((x^2 + y^2)/a^2 + z^2/c^2 = 1)`` about `centre`; `hole`: the region lies outside it."""

    centre: tuple[float, ...]
    semi_axes: tuple[float, ...]
    hole: bool = False

    @property
    def curved(self) -> bool:
        """Whether the piece is not flat."""
        return True

    @property
    def measure(self) -> float:
        """Area."""
        return float(2.0 * self._area(np.array([1.0]))[0])

    def _area(self, s: Array) -> Array:
        """Return the area between the equator and the height c s, 0 <= s <= 1."""
        a, _, c = self.semi_axes
        q = (a - c) * (a + c)
        root = np.sqrt(c * c + q * s * s)
        if abs(q) < 1e-10 * a * a:
            part = c * s
        elif q > 0.0:
            part = (s * root + c * c / math.sqrt(q) * np.arcsinh(math.sqrt(q) * s / c)) / 2.0
        else:
            part = (s * root + c * c / math.sqrt(-q) * np.arcsin(math.sqrt(-q) * s / c)) / 2.0
        area: Array = TURN * a * part
        return area

    def _meridian(self) -> Arc:
        a, _, c = self.semi_axes
        return Arc(name="", centre=(0.0, 0.0), semi_axes=(a, c), first=-math.pi / 2.0, last=math.pi / 2.0)

    def _split(self, points: Array) -> tuple[Array, Array]:
        """Return unit vectors (n, 2) away from the axis and points (n, 2) of the meridian plane."""
        offset = points - np.array(self.centre)
        reach = np.hypot(offset[:, 0], offset[:, 1])
        off = (reach > 0.0)[:, None]
        unit = np.where(off, offset[:, :2] / np.where(off, reach[:, None], 1.0), [1.0, 0.0])
        return unit, np.column_stack([reach, offset[:, 2]])

    def _project(self, points: Array) -> Array:
        unit, flat = self._split(points)
        nearest = self._meridian()._project(flat)
        return np.array(self.centre) + np.column_stack([nearest[:, :1] * unit, nearest[:, 1]])

    def _normals(self, points: Array) -> Array:
        unit, flat = self._split(points)
        normal = self._meridian()._normals(flat)
        normals: Array = np.column_stack([normal[:, :1] * unit, normal[:, 1]])
        return -normals if self.hole else normals

    def _at(self, u: Array, v: Array) -> Array:
        a, _, c = self.semi_axes
        wanted = np.abs(1.0 - 2.0 * u) * self._area(np.array([1.0]))[0]
        low, high = np.zeros(len(u)), np.ones(len(u))
        for _ in range(54):
            middle = (low + high) / 2.0
            below = self._area(middle) < wanted
            low, high = np.where(below, middle, low), np.where(below, high, middle)
        s = np.where(u <= 0.5, 1.0, -1.0) * np.where(np.abs(1.0 - 2.0 * u) >= 1.0, 1.0, (low + high) / 2.0)
        flat = a * np.sqrt((1.0 - s) * (1.0 + s))[:, None] * around(TURN * v)
        return np.array(self.centre) + np.column_stack([flat, c * s])

    def _chart(self) -> Chart:
        a, _, c = self.semi_axes

        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            polar = parameters[:, 0]
            points = np.array(self.centre) + np.array(self.semi_axes) * spherical(parameters)
            return points, a * np.sin(polar) * np.hypot(a * np.cos(polar), c * np.sin(polar))

        count = 2 * max(1, math.ceil(math.pi / 2.0 / max(min(a, c) / max(a, c), 0.05)))
        lower, upper = boxes(np.linspace(0.0, math.pi, count + 1), QUARTERS)
        return Chart(lower=lower, upper=upper, place=place, angles=(True, True), extra=(22, 0))


@dataclass(frozen=True, slots=True, repr=False)
class Spheroid(Shape):
    """The spheroid with semi-axes (a, a, c) along x, y, z, or (a, c) in short; piece surface.

    >>> print(round(Spheroid((0, 0, 0), (1.0, 2.0)).measure, 12))
    8.377580409573
    """

    centre: Sequence[float]
    semi_axes: Sequence[float]

    kind: ClassVar[str] = "spheroid"
    dim: ClassVar[int] = 3

    def __post_init__(self) -> None:
        """Refuse semi-axes that are not positive, too different, or not round about z."""
        object.__setattr__(self, "centre", coordinates(self.centre, 3, "centre"))
        object.__setattr__(self, "semi_axes", spheroid_axes(self.semi_axes, "semi_axes"))
        _positive(self.semi_axes, "semi_axes")
        self._check()

    @property
    def measure(self) -> float:
        """Volume, 4/3 pi a^2 c."""
        return 4.0 / 3.0 * math.pi * math.prod(self.semi_axes)

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (3,)."""
        return np.array(self.centre) - self.semi_axes, np.array(self.centre) + self.semi_axes

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        centre, axes = tuple(self.centre), tuple(self.semi_axes)
        return ((SpheroidSurface(name="surface", centre=centre, semi_axes=axes),),)

    def _inside(self, points: Array) -> BoolArray:
        return _within(points, self.centre, self.semi_axes)

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        return np.array(self.centre) + np.array(self.semi_axes) * _draw_ball(generator, n, 3)

    def _chart(self) -> Chart:
        return _shell_chart(self.centre, (0.0, 0.0, 0.0), self.semi_axes)


@dataclass(frozen=True, slots=True, repr=False)
class EllipticRing(Shape):
    """The region between two concentric ellipses with axes along x and y; pieces inner, outer.

    An inner semi-axis may be 0: the ring around a screen, whose two sides are front (above or to the left)
    and back.

    >>> ring = EllipticRing((0, 0), (1.0, 0.0), (2.0, 1.5))
    >>> ring.pieces.names, round(ring.measure / 3.141592653589793, 12)
    (('outer', 'front', 'back'), 3.0)
    """

    centre: Sequence[float]
    inner: Sequence[float]
    outer: Sequence[float]

    kind: ClassVar[str] = "elliptic-ring"
    dim: ClassVar[int] = 2

    def __post_init__(self) -> None:
        """Refuse ellipses that are not inside one another."""
        object.__setattr__(self, "centre", coordinates(self.centre, 2, "centre"))
        object.__setattr__(self, "inner", coordinates(self.inner, 2, "inner"))
        object.__setattr__(self, "outer", coordinates(self.outer, 2, "outer"))
        _nested(self.inner, self.outer)
        self._check()

    @classmethod
    def confocal(cls, centre: Sequence[float], inner: Sequence[float], longest: float) -> Self:
        """Return the ring out to the ellipse with the same foci whose longer semi-axis is `longest`.

        With the foci at distance c from the centre, the shorter semi-axis is sqrt(longest^2 - c^2); two
        circles have their foci in the centre.

        >>> EllipticRing.confocal((0, 0), (1.0, 0.0), 1.25)
        EllipticRing((0.0, 0.0), (1.0, 0.0), (1.25, 0.75))

        Raises
        ------
        GeometryError
            If the outer ellipse does not enclose the inner one by a thousandth of its size.
        """
        a, b = coordinates(inner, 2, "inner")
        long, short = max(a, b), min(a, b)
        longest = positive(longest, "longest")
        if not longest > long:
            raise GeometryError(f"longest must be > {long!r}, the longer inner semi-axis, got {longest!r}")
        shortest = math.sqrt((longest - long) * (longest + long) + short**2)
        return cls(centre, inner, (longest, shortest) if a >= b else (shortest, longest))

    @property
    def measure(self) -> float:
        """Area."""
        return math.pi * (math.prod(self.outer) - math.prod(self.inner))

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (2,)."""
        return np.array(self.centre) - self.outer, np.array(self.centre) + self.outer

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        middle = tuple(self.centre)
        outer = Arc(name="outer", centre=middle, semi_axes=tuple(self.outer), first=0.0, last=TURN)
        if min(self.inner) > 0.0:
            inner = Arc(
                name="inner", centre=middle, semi_axes=tuple(self.inner), first=0.0, last=TURN, hole=True
            )
            return (outer,), (inner,)
        left, right = (tuple((np.array(middle) + sign * np.array(self.inner)).tolist()) for sign in (-1, 1))
        return (outer,), two_sides(left, right)

    def _inside(self, points: Array) -> BoolArray:
        return _within(points, self.centre, self.outer) & ~_strictly_within(points, self.centre, self.inner)

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        return np.array(self.centre) + np.array(self.outer) * _draw_ball(generator, n, 2)

    def _chart(self) -> Chart:
        origin, start, stop = np.array(self.centre), np.array(self.inner), np.array(self.outer)
        growth = stop - start

        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            s, t = parameters.T
            unit = around(t)
            axes = start + s[:, None] * growth
            jacobian = growth[0] * axes[:, 1] * unit[:, 0] ** 2 + growth[1] * axes[:, 0] * unit[:, 1] ** 2
            return origin + axes * unit, jacobian

        lower, upper = boxes([0.0, 1.0], np.linspace(0.0, TURN, 9))
        return Chart(lower=lower, upper=upper, place=place, angles=(False, True), extra=(1, 2))


@dataclass(frozen=True, slots=True, repr=False)
class SpheroidalShell(Shape):
    """The region between two concentric spheroids with semi-axes (a, a, c) or (a, c); pieces inner, outer.

    The inner polar semi-axis may be 0: the shell around a round plate, whose two sides are top and bottom.

    >>> SpheroidalShell((0, 0, 0), (1.0, 0.5), (2.0, 2.0)).pieces.names
    ('outer', 'inner')
    """

    centre: Sequence[float]
    inner: Sequence[float]
    outer: Sequence[float]

    kind: ClassVar[str] = "spheroidal-shell"
    dim: ClassVar[int] = 3

    def __post_init__(self) -> None:
        """Refuse spheroids that are not inside one another."""
        object.__setattr__(self, "centre", coordinates(self.centre, 3, "centre"))
        object.__setattr__(self, "inner", spheroid_axes(self.inner, "inner"))
        object.__setattr__(self, "outer", spheroid_axes(self.outer, "outer"))
        _nested(self.inner, self.outer)
        if not self.inner[0] > 0.0:
            raise GeometryError(f"the inner equatorial semi-axis must be > 0, got {self.inner!r}")
        self._check()

    @property
    def measure(self) -> float:
        """Volume."""
        return 4.0 / 3.0 * math.pi * (math.prod(self.outer) - math.prod(self.inner))

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (3,)."""
        return np.array(self.centre) - self.outer, np.array(self.centre) + self.outer

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        middle = tuple(self.centre)
        outer = SpheroidSurface(name="outer", centre=middle, semi_axes=tuple(self.outer))
        if self.inner[2] > 0.0:
            inner = SpheroidSurface(name="inner", centre=middle, semi_axes=tuple(self.inner), hole=True)
            return ((outer, inner),)
        return ((outer, *two_faces(middle, self.inner[0])),)

    def _inside(self, points: Array) -> BoolArray:
        return _within(points, self.centre, self.outer) & ~_strictly_within(points, self.centre, self.inner)

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        return np.array(self.centre) + np.array(self.outer) * _draw_ball(generator, n, 3)

    def _chart(self) -> Chart:
        return _shell_chart(self.centre, self.inner, self.outer)


def _within(points: Array, centre: Sequence[float], axes: Sequence[float]) -> BoolArray:
    scaled = (points - np.array(centre)) / np.array(axes)
    inside: BoolArray = np.sqrt((scaled**2).sum(axis=1)) <= 1.0
    return inside


def _strictly_within(points: Array, centre: Sequence[float], axes: Sequence[float]) -> BoolArray:
    """Return which points lie inside the ellipse or spheroid and not on it; nothing is inside a flat one."""
    if not min(axes) > 0.0:
        return np.zeros(len(points), dtype=bool)
    scaled = (points - np.array(centre)) / np.array(axes)
    inside: BoolArray = np.sqrt((scaled**2).sum(axis=1)) < 1.0
    return inside


def _draw_ball(generator: np.random.Generator, n: int, dim: int) -> Array:
    """Return n points uniform in the unit disc or ball."""
    direction = generator.standard_normal((n, dim))
    direction /= np.sqrt((direction**2).sum(axis=1, keepdims=True))
    points: Array = direction * generator.random((n, 1)) ** (1.0 / dim)
    return points


def _shell_chart(centre: Sequence[float], inner: Sequence[float], outer: Sequence[float]) -> Chart:
    """Return patches of the shell, t polar angle; Jacobian ``a sin t (a' c sin^2 t + a c' cos^2 t)``."""
    origin, start, stop = np.array(centre), np.array(inner), np.array(outer)
    growth = stop - start

    def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
        s, polar = parameters[:, 0], parameters[:, 1]
        axes = start + s[:, None] * growth
        a, c = axes[:, 0], axes[:, 2]
        sine, cosine = np.sin(polar), np.cos(polar)
        jacobian = a * sine * (growth[0] * c * sine**2 + a * growth[2] * cosine**2)
        return origin + axes * spherical(parameters[:, 1:]), jacobian

    lower, upper = boxes([0.0, 1.0], [0.0, math.pi / 2.0, math.pi], QUARTERS)
    return Chart(lower=lower, upper=upper, place=place, angles=(False, True, True), extra=(2, 3, 0))
