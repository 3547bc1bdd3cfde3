"""The upper half of the region between two confocal parabolas, one open to the left, one to the right.

With the focus as origin and z = w^2, w = xi + i eta, the lines xi = a and eta = c become the parabolas

    x = p - y^2/(4 p), p = a^2    and    x = -(q - y^2/(4 q)), q = c^2,

which meet at right angles in (p - q, 2 sqrt(p q)), and the rectangle 0 < xi < a, 0 < eta < c the region
between them above their axis. Kozeny's basic parabola, the free surface of seepage to a horizontal drain,
and the line of equal head at which the region begins are such a pair (Harr 1962, Groundwater and Seepage,
section 3.3, from memory, unchecked).

Along a parabola y = 2 p sinh(t/2) gives the element of length p cosh^2(t/2) dt, which is entire, and the
length p (v sqrt(1 + v^2) + asinh v), v = y/(2 p). The nearest point solves the cubic y^3/(8 p^2) + A y = Y,
A = (x + p)/(2 p), whose left side rises from its turning point on; beside that root only the lower end of
the curve can be nearest (derived here).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import ClassVar

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.base import Shape
from laplace_verify.geometry.boundary import Boundary, Curve
from laplace_verify.geometry.checks import coordinates, positive
from laplace_verify.geometry.patches import Chart, boxes
from laplace_verify.geometry.segments import Segment

__all__ = ["ConfocalParabolas", "Parabola"]

HALVINGS = 60  # of a bracket, down to the spacing of float64
UNEQUAL = 1e3  # largest ratio of the two focal distances
ON_CURVE = 1e-14


@dataclass(frozen=True, slots=True, kw_only=True)
class Parabola(Curve):
    """The curve ``focus + (sign (p - y^2/(4 p)), y)`` for y from `first` to `last` >= `first` >= 0.

    The region lies on the side of the focus, so that travel rises if sign = 1 and falls if sign = -1.
    """

    focus: tuple[float, ...]
    p: float
    sign: float
    first: float
    last: float

    @property
    def curved(self) -> bool:
        """Whether the piece is not flat."""
        return True

    @property
    def rising(self) -> bool:
        """Whether travel is counter-clockwise, which it is with the focus on the left."""
        return True

    @property
    def measure(self) -> float:
        """Length."""
        start, stop = self._length(np.array([self.first, self.last]))
        return float(stop - start)

    @property
    def ends(self) -> Array:
        """End points (2, 2) in order of travel."""
        return self._at(np.array([0.0, 1.0]))

    def _length(self, y: Array) -> Array:
        """Return the length from the vertex up to y."""
        v = y / (2.0 * self.p)
        length: Array = self.p * (v * np.sqrt(1.0 + v * v) + np.arcsinh(v))
        return length

    def _on(self, y: Array) -> Array:
        across = self.sign * (self.p - y * y / (4.0 * self.p))
        points: Array = np.array(self.focus) + np.stack([across, y], axis=1)
        return points

    def _height_at(self, fractions: Array) -> Array:
        """Return y at fractions of length, in order of travel."""
        t = fractions if self.sign > 0.0 else 1.0 - fractions
        start, stop = self._length(np.array([self.first, self.last]))
        wanted = start + t * (stop - start)
        low: Array = np.full(len(t), self.first)
        high: Array = np.full(len(t), self.last)
        for _ in range(HALVINGS):
            middle = (low + high) / 2.0
            below = self._length(middle) < wanted
            low, high = np.where(below, middle, low), np.where(below, high, middle)
        return np.where(t <= 0.0, self.first, np.where(t >= 1.0, self.last, (low + high) / 2.0))

    def _at(self, fractions: Array) -> Array:
        return self._on(self._height_at(fractions))

    def _height(self, points: Array) -> Array:
        """Return y of the nearest point of the curve."""
        offset = points - np.array(self.focus)
        x, wanted = self.sign * offset[:, 0], offset[:, 1]
        y: Array = np.clip(wanted, self.first, self.last)
        size = self.p + np.abs(x) + np.abs(wanted)
        off = (np.abs(x - self.p + y * y / (4.0 * self.p)) > ON_CURVE * size) | (y != wanted)
        y[off] = self._searched(x[off], wanted[off])
        return y

    def _searched(self, x: Array, wanted: Array) -> Array:
        p = self.p
        slope = (x + p) / (2.0 * p)
        turn = p * np.sqrt(np.maximum(0.0, -8.0 * slope / 3.0))
        low: Array = np.clip(turn, self.first, self.last)
        high: Array = np.full(len(x), self.last)
        for _ in range(HALVINGS):
            middle = (low + high) / 2.0
            short = middle * (middle * middle / (8.0 * p * p) + slope) < wanted
            low, high = np.where(short, middle, low), np.where(short, high, middle)
        # bisection stops just short of an end it converges to
        root = np.where(self.last - low <= 1e-15 * self.last, self.last, low)
        root = np.where(root - self.first <= 1e-15 * self.last, self.first, root)

        def square(y: Array | float) -> Array:
            return (x - p + y * y / (4.0 * p)) ** 2 + (wanted - y) ** 2

        return np.where(square(self.first) < square(root), self.first, root)

    def _parameter(self, points: Array) -> Array:
        parameter: Array = 2.0 * np.arcsinh(self._height(points) / (2.0 * self.p))
        return parameter

    def _project(self, points: Array) -> Array:
        return self._on(self._height(points))

    def _normals(self, points: Array) -> Array:
        v = self._height(points) / (2.0 * self.p)
        normal: Array = np.stack([np.full(len(v), self.sign), v], axis=1) / np.hypot(1.0, v)[:, None]
        return normal

    def tangents(self, t: npt.ArrayLike) -> Array:
        """Return unit tangents (n, 2) in the direction of travel at fractions t (n,) of length."""
        v = self._height_at(np.atleast_1d(np.asarray(t, dtype=np.float64))) / (2.0 * self.p)
        tangent: Array = np.stack([-v, np.full(len(v), self.sign)], axis=1) / np.hypot(1.0, v)[:, None]
        return tangent

    def part(self, start: float, stop: float, name: str) -> Parabola:
        """Return the part between two fractions of length, in order of travel."""
        heights = self._height_at(np.array([start, stop]))
        return replace(self, name=name, first=float(heights.min()), last=float(heights.max()))

    def _chart(self) -> Chart:
        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            half = parameters[:, 0] / 2.0
            return self._on(2.0 * self.p * np.sinh(half)), self.p * np.cosh(half) ** 2

        low, high = (2.0 * math.asinh(y / (2.0 * self.p)) for y in (self.first, self.last))
        # a polynomial of degree n in x, y is one of exp(t), as it is one of cos t and sin t on a circle
        lower, upper = boxes(np.linspace(low, high, max(1, math.ceil((high - low) / 0.5)) + 1))
        return Chart(lower=lower, upper=upper, place=place, angles=(True,), extra=(1,))


@dataclass(frozen=True, slots=True, repr=False)
class ConfocalParabolas(Shape):
    """The region above the common axis of two parabolas about one focus; opposite openings.

    Pieces axis-left (from the left vertex to the focus), axis-right (from the focus to the right vertex),
    right and left (the parabolas with these vertices).

    >>> shape = ConfocalParabolas((0, 0), 1.0, 4.0)
    >>> shape.pieces.names, shape.pieces["right"].ends.tolist()
    (('axis-left', 'axis-right', 'right', 'left'), [[1.0, 0.0], [-3.0, 4.0]])

    Parameters
    ----------
    focus
        The common focus.
    right, left
        Distances of the vertices from the focus, to its right and to its left.
    """

    focus: Sequence[float]
    right: float
    left: float

    kind: ClassVar[str] = "confocal-parabolas"
    dim: ClassVar[int] = 2

    def __post_init__(self) -> None:
        """Refuse distances that are not positive or too different."""
        object.__setattr__(self, "focus", coordinates(self.focus, 2, "focus"))
        object.__setattr__(self, "right", positive(self.right, "right"))
        object.__setattr__(self, "left", positive(self.left, "left"))
        if not max(self.right, self.left) <= UNEQUAL * min(self.right, self.left):
            raise GeometryError(
                f"right and left must differ by less than a factor {UNEQUAL:g}, got {self.right!r} and "
                f"{self.left!r}"
            )
        self._check()

    @property
    def height(self) -> float:
        """Height of the upper corner above the axis, 2 sqrt(right left)."""
        return 2.0 * math.sqrt(self.right * self.left)

    @property
    def measure(self) -> float:
        """Area, 2/3 height (right + left)."""
        return 2.0 / 3.0 * self.height * (self.right + self.left)

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (2,)."""
        x, y = self.focus
        return np.array([x - self.left, y]), np.array([x + self.right, y + self.height])

    def reach(self, angle: Array) -> Array:
        """Return the distance (n,) of the boundary from the focus in directions 0 to pi (n,)."""
        with np.errstate(divide="ignore"):
            to_right, to_left = 1.0 + np.cos(angle), 1.0 - np.cos(angle)
            reach: Array = np.minimum(2.0 * self.right / to_right, 2.0 * self.left / to_left)
        return reach

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        x, y = self.focus
        span = {"focus": (x, y), "first": 0.0, "last": self.height}
        return (
            (
                Segment(name="axis-left", start=(x - self.left, y), stop=(x, y)),
                Segment(name="axis-right", start=(x, y), stop=(x + self.right, y)),
                Parabola(name="right", p=self.right, sign=1.0, **span),  # type: ignore[arg-type]
                Parabola(name="left", p=self.left, sign=-1.0, **span),  # type: ignore[arg-type]
            ),
        )

    def _inside(self, points: Array) -> BoolArray:
        x, y = (points - np.array(self.focus)).T
        r = np.hypot(x, y)
        inside: BoolArray = (y >= 0.0) & (r + x <= 2.0 * self.right) & (r - x <= 2.0 * self.left)
        return inside

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        """Keep points of the rectangle in w in proportion to the Jacobian."""
        a2, c2 = self.right, self.left
        w = generator.random((n, 2)) * [math.sqrt(a2), math.sqrt(c2)]
        return self._mapped(w[generator.random(n) * (a2 + c2) < (w**2).sum(axis=1)])

    def _mapped(self, w: Array) -> Array:
        xi, eta = w.T
        points: Array = np.array(self.focus) + np.stack([(xi - eta) * (xi + eta), 2.0 * xi * eta], axis=1)
        return points

    def _chart(self) -> Chart:
        """Take the rectangle in w; the Jacobian is 4 |w|^2."""

        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            return self._mapped(parameters), 4.0 * (parameters**2).sum(axis=1)

        lower, upper = boxes([0.0, math.sqrt(self.right)], [0.0, math.sqrt(self.left)])
        return Chart(lower=lower, upper=upper, place=place, angles=(False, False), extra=(2, 2), power=2)
