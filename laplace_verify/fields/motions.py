"""Rigid motions and enlargements: the Laplacian does not see them (up to a constant factor).

The moved field is u(M^{-1} x). Singular points and cuts move along; a motion of the plane keeps left and
right, so the sides of a cut keep their meaning.
"""

from __future__ import annotations

import math
from abc import abstractmethod
from dataclasses import dataclass
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import FLOAT
from laplace_verify.errors import FieldError
from laplace_verify.fields._precision import working
from laplace_verify.fields.base import Field
from laplace_verify.fields.edges import Edge, Line, Ring
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, show
from laplace_verify.fields.sheets import Fan, Sheet
from laplace_verify.fields.singular import Basis, Cut, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["Moved", "Rotated", "Scaled", "Shifted"]

PLACE_DIGITS = 60  # of a precise point that is moved back


class Moved(Field):
    """What shifted, turned, enlarged and stretched fields share: u(M^{-1} x) with M linear plus a shift.

    A subclass has a dataclass field `field`, gives the preimage of coordinates in `_back`, turns a gradient
    in `_forward`, and says in `_map` where points go: x -> matrix @ x + vector. Coordinates are rounded on
    the way back, which costs |grad u| |x| eps: near a singular point of a turned and shifted field more than
    the field itself would lose.
    """

    __slots__ = ()

    field: Field

    @abstractmethod
    def _back(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, ...]:
        """Return M^{-1} x."""

    @abstractmethod
    def _forward(self, ctx: Any, gradient: tuple[Any, ...]) -> tuple[Any, ...]:
        """Return the gradient of u(M^{-1} x) from that of u."""

    @abstractmethod
    def _map(self) -> tuple[Array, Array]:
        """Return the matrix (d, d) and the vector (d,) of M in float64."""

    @abstractmethod
    def _with(self, field: Field) -> Field:
        """Return another field moved in the same way."""

    @property
    def dim(self) -> int:
        """As the field that is moved."""
        return self.field.dim

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The moved singular points."""
        matrix, vector = self._map()
        return tuple(
            Singularity(point=_image(matrix, vector, s.point), exponent=s.exponent, kind=s.kind)
            for s in self.field.singularities
        )

    @property
    def cuts(self) -> tuple[Cut, ...]:
        """The moved cuts."""
        matrix, vector = self._map()
        moved = []
        for cut in self.field.cuts:
            direction = matrix @ np.asarray(cut.direction)
            stretch = float(np.hypot(*direction))
            dx, dy = (direction / stretch).tolist()
            start_x, start_y = _image(matrix, vector, cut.start)
            moved.append(Cut(start=(start_x, start_y), direction=(dx, dy), length=cut.length * stretch))
        return tuple(moved)

    @property
    def edges(self) -> tuple[Edge | Line | Ring, ...]:
        """The moved edges."""
        matrix, vector = self._map()
        return tuple(edge.moved(matrix, vector) for edge in self.field.edges)

    @property
    def sheets(self) -> tuple[Fan | Sheet, ...]:
        """The moved sheets."""
        matrix, vector = self._map()
        return tuple(sheet.moved(matrix, vector) for sheet in self.field.sheets)

    @property
    def basis(self) -> Basis:
        """As the field that is moved."""
        return self.field.basis

    @property
    def fit_error(self) -> float:
        """As the field that is moved."""
        return self.field.fit_error

    @property
    def most_digits(self) -> int:
        """As the field that is moved."""
        return self.field.most_digits

    @property
    def opaque(self) -> bool:
        """As the field that is moved."""
        return self.field.opaque

    @property
    def degree(self) -> int | None:
        """As the field that is moved."""
        return self.field.degree

    @property
    def regions(self) -> tuple[str, ...]:
        """As the field that is moved."""
        return self.field.regions

    def restricted(self, region: str) -> Field:
        """Return the restricted field, moved in the same way."""
        return self._with(self.field.restricted(region))

    def on_interface(self, points: Array, place: tuple[Any, ...] | None = None) -> BoolArray:
        """Return which points come from an interface."""
        if place is not None:
            ctx = working(PLACE_DIGITS)
            place = self._back(ctx, tuple(ctx.number(c) for c in place))
        return self.field.on_interface(np.stack(self._back(FLOAT, tuple(points.T)), axis=1), place)

    @property
    def growth(self) -> float:
        """As the field that is moved."""
        return self.field.growth

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        return self.field._value(ctx, self._back(ctx, x), side)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        return self._forward(ctx, self.field._gradient(ctx, self._back(ctx, x), side))

    def _valid(self, points: Array) -> BoolArray:
        return self.field._valid(np.stack(self._back(FLOAT, tuple(points.T)), axis=1))

    def conjugate(self) -> Field:
        """Return the conjugate moved in the same way (a motion of the plane keeps Cauchy-Riemann)."""
        return self._with(self.field.conjugate())


@registered("shifted")
@dataclass(frozen=True, slots=True, kw_only=True)
class Shifted(Moved):
    """u(x - vector)."""

    field: Field
    vector: tuple[Exact, ...]

    def __post_init__(self) -> None:
        """Check that the vector fits the field."""
        check_field(self.field)
        object.__setattr__(self, "vector", exact_point(self.vector, "vector", (self.field.dim,)))

    @property
    def formula(self) -> str:
        """Such as ``[x^2 - y^2](x - (1, 0))``."""
        return f"[{self.field.formula}](x - {show_point(self.vector)})"

    def _back(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, ...]:
        return tuple(offset(ctx, c, v) for c, v in zip(x, self.vector, strict=True))

    def _forward(self, ctx: Any, gradient: tuple[Any, ...]) -> tuple[Any, ...]:  # noqa: ARG002
        return gradient

    def _map(self) -> tuple[Array, Array]:
        return np.eye(self.dim), np.array([float(v) for v in self.vector])

    def _with(self, field: Field) -> Field:
        return Shifted(field=field, vector=self.vector)


@registered("scaled")
@dataclass(frozen=True, slots=True, kw_only=True)
class Scaled(Moved):
    """u(x / factor), factor > 0."""

    field: Field
    factor: Exact

    def __post_init__(self) -> None:
        """Check that the factor is positive."""
        check_field(self.field)
        object.__setattr__(self, "factor", exact(self.factor, "factor"))
        if not self.factor > 0:
            raise FieldError(f"factor must be positive, got {self.factor}; to mirror a field, rotate it")

    @property
    def formula(self) -> str:
        """Such as ``[x^2 - y^2](x / 3)``."""
        return f"[{self.field.formula}](x / {show(self.factor)})"

    def _back(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, ...]:
        factor = ctx.number(self.factor)
        return tuple(c / factor for c in x)

    def _forward(self, ctx: Any, gradient: tuple[Any, ...]) -> tuple[Any, ...]:
        factor = ctx.number(self.factor)
        return tuple(g / factor for g in gradient)

    def _map(self) -> tuple[Array, Array]:
        return float(self.factor) * np.eye(self.dim), np.zeros(self.dim)

    def _with(self, field: Field) -> Field:
        return Scaled(field=field, factor=self.factor)


@registered("rotated")
@dataclass(frozen=True, slots=True, kw_only=True)
class Rotated(Moved):
    """u(R^T x), R the rotation by `angle` radians about the origin (2-D) or about `axis` (3-D, right-handed).

    An angle within rounding of a multiple of pi/2 is taken to be that multiple in every number of digits.
    """

    field: Field
    angle: Exact
    axis: tuple[Exact, ...] | None = None

    def __post_init__(self) -> None:
        """Check angle and axis."""
        check_field(self.field)
        object.__setattr__(self, "angle", exact(self.angle, "angle"))
        dim = self.field.dim
        if dim == 1:
            raise FieldError("a field of one coordinate cannot be rotated")
        if (self.axis is None) != (dim == 2):
            raise FieldError(f"axis must be {'left out in 2-D' if dim == 2 else 'three numbers in 3-D'}")
        if self.axis is not None:
            object.__setattr__(self, "axis", exact_point(self.axis, "axis", (3,)))
            if not any(self.axis):
                raise FieldError("axis must not be the zero vector")

    @property
    def formula(self) -> str:
        """Such as ``[x^2 - y^2](x turned by -0.5)``."""
        about = "" if self.axis is None else f" about {show_point(self.axis)}"
        return f"[{self.field.formula}](x turned back by {show(self.angle)}{about})"

    def _matrix(self, ctx: Any) -> list[list[Any]]:
        """Return R; in 3-D by the formula of Rodrigues R = c I + s [n]_x + (1 - c) n n^T."""
        c, s = turn(ctx, self.angle)
        if self.axis is None:
            return [[c, -s], [s, c]]
        a = [ctx.number(v) for v in self.axis]
        length = ctx.sqrt(a[0] * a[0] + a[1] * a[1] + a[2] * a[2])
        n = [v / length for v in a]
        cross = [[0, -n[2], n[1]], [n[2], 0, -n[0]], [-n[1], n[0], 0]]
        return [
            [(1 - c) * n[i] * n[j] + s * cross[i][j] + (c if i == j else 0) for j in range(3)]
            for i in range(3)
        ]

    def _back(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, ...]:
        return tuple(_dot(column, x) for column in zip(*self._matrix(ctx), strict=True))

    def _forward(self, ctx: Any, gradient: tuple[Any, ...]) -> tuple[Any, ...]:
        return tuple(_dot(row, gradient) for row in self._matrix(ctx))

    def _map(self) -> tuple[Array, Array]:
        return np.array(self._matrix(FLOAT), dtype=np.float64), np.zeros(self.dim)

    def _with(self, field: Field) -> Field:
        return Rotated(field=field, angle=self.angle, axis=self.axis)


def check_field(field: Any) -> None:
    """Refuse what is no field."""
    if not isinstance(field, Field):
        raise FieldError(f"a field was expected, got {type(field).__name__}; make one with fields.field(f)")


def turn(ctx: Any, angle: Exact) -> tuple[Any, Any]:
    """Return cos and sin of an angle, exact at the multiples of pi/2 that a float can only come near to.

    >>> turn(FLOAT, math.pi / 2)
    (0, 1)
    """
    quarters = round(float(angle) / (math.pi / 2))
    if quarters and abs(float(angle) - quarters * (math.pi / 2)) <= 4e-16 * abs(quarters):
        return ((1, 0), (0, 1), (-1, 0), (0, -1))[quarters % 4]
    number = ctx.number(angle)
    return ctx.cos(number), ctx.sin(number)


def show_point(point: tuple[Exact, ...]) -> str:
    """Return ``(1, 2/3)``."""
    return "(" + ", ".join(show(c) for c in point) + ")"


def _dot(a: Any, b: Any) -> Any:
    """Return a . b for short sequences of arrays or numbers."""
    return sum((p * q for p, q in zip(a[1:], b[1:], strict=True)), a[0] * b[0])


def _image(matrix: Array, vector: Array, point: tuple[float, ...]) -> tuple[float, ...]:
    """Return matrix @ point + vector as a tuple."""
    return tuple((matrix @ np.asarray(point) + vector).tolist())
