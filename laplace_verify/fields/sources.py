"""Point sources and dipoles: the fundamental solutions and their first derivatives.

    2-D   log r,   d . x/r^2            3-D   1/r,   d . x/r^3            (x from the point, r = |x|)

The flux out of the point through a circle of K = 1 is 2 pi for log r, -4 pi for 1/r and 0 for a dipole.
Between two circles about the point log r is the radial solution, between two spheres 1/r.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any

from laplace_verify.contexts import Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, show
from laplace_verify.fields.motions import show_point
from laplace_verify.fields.singular import Singularity
from laplace_verify.fields.specs import registered

__all__ = ["Dipole", "LogSource", "PointSource", "dipole", "log_source", "point_source"]


@registered("log-source")
@dataclass(frozen=True, slots=True, kw_only=True)
class LogSource(Field):
    """u = strength * log |x - point| in the plane; `log_source` makes one."""

    point: tuple[Exact, ...]
    strength: Exact = 1

    def __post_init__(self) -> None:
        """Make the parameters exact."""
        object.__setattr__(self, "point", exact_point(self.point, "point", (2,)))
        object.__setattr__(self, "strength", exact(self.strength, "strength"))

    @property
    def dim(self) -> int:
        """Two."""
        return 2

    @property
    def growth(self) -> float:
        """Logarithmic."""
        return 0.0

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The point."""
        return (Singularity(point=_floats(self.point), exponent=0.0, kind="log"),)

    @property
    def formula(self) -> str:
        """Such as ``2 log |x - (0, 0)|``."""
        return f"{_factor(self.strength)}log |x - {show_point(self.point)}|"

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        _, r = _offsets(ctx, x, self.point)
        return ctx.number(self.strength) * ctx.log(r)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002
        d, r = _offsets(ctx, x, self.point)
        return tuple(ctx.number(self.strength) * (c / r) / r for c in d)

    def _why_no_conjugate(self) -> str:
        return f": it would be the angle about {show_point(self.point)}, which grows by 2 pi with every turn"


@registered("point-source")
@dataclass(frozen=True, slots=True, kw_only=True)
class PointSource(Field):
    """u = strength/|x - point| in space; `point_source` makes one."""

    point: tuple[Exact, ...]
    strength: Exact = 1

    def __post_init__(self) -> None:
        """Make the parameters exact."""
        object.__setattr__(self, "point", exact_point(self.point, "point", (3,)))
        object.__setattr__(self, "strength", exact(self.strength, "strength"))

    @property
    def dim(self) -> int:
        """Three."""
        return 3

    @property
    def growth(self) -> float:
        """Decays like 1/r."""
        return -1.0

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The point."""
        return (Singularity(point=_floats(self.point), exponent=-1.0, kind="pole"),)

    @property
    def formula(self) -> str:
        """Such as ``1/|x - (0, 0, 0)|``."""
        return f"{show(self.strength)}/|x - {show_point(self.point)}|"

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        _, r = _offsets(ctx, x, self.point)
        return ctx.number(self.strength) / r

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002
        d, r = _offsets(ctx, x, self.point)
        return tuple(-ctx.number(self.strength) * (c / r) / r / r for c in d)


@registered("dipole")
@dataclass(frozen=True, slots=True, kw_only=True)
class Dipole(Field):
    """u = direction . (x - point)/|x - point|^dim; `dipole` makes one."""

    point: tuple[Exact, ...]
    direction: tuple[Exact, ...]

    def __post_init__(self) -> None:
        """Check that point and direction belong to the same space."""
        object.__setattr__(self, "point", exact_point(self.point, "point", (2, 3)))
        object.__setattr__(self, "direction", exact_point(self.direction, "direction", (len(self.point),)))

    @property
    def dim(self) -> int:
        """Number of coordinates of the point."""
        return len(self.point)

    @property
    def growth(self) -> float:
        """Decays like r^(1 - dim)."""
        return 1.0 - self.dim

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The point."""
        return (Singularity(point=_floats(self.point), exponent=1.0 - self.dim, kind="pole"),)

    @property
    def formula(self) -> str:
        """Such as ``(1, 0).d/|d|^2, d = x - (0, 0)``."""
        return f"[{show_point(self.direction)}.d/|d|^{self.dim}, d = x - {show_point(self.point)}]"

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        d, r = _offsets(ctx, x, self.point)
        total = self._along(ctx, d, r) / r
        return total if self.dim == 2 else total / r

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002
        """Return (p - dim (p . n) n)/r^dim, n = d/r."""
        d, r = _offsets(ctx, x, self.point)
        along = self.dim * self._along(ctx, d, r)
        parts = [(ctx.number(p) - along * (c / r)) / r / r for p, c in zip(self.direction, d, strict=True)]
        return tuple(parts) if self.dim == 2 else tuple(part / r for part in parts)

    def _along(self, ctx: Any, d: tuple[Any, ...], r: Any) -> Any:
        """Return direction . d/r."""
        terms = [ctx.number(p) * (c / r) for p, c in zip(self.direction, d, strict=True)]
        return sum(terms[1:], terms[0])

    def conjugate(self) -> Field:
        """Return the dipole turned by -90 degrees: d . x/r^2 = Re (D/z) with D = d_x + i d_y."""
        if self.dim != 2:
            raise FieldError(f"conjugates belong to the plane, {self.formula} is 3-D")
        a, b = self.direction
        return Dipole(point=self.point, direction=(b, -a))


def log_source(point: Iterable[Number], strength: Number = 1) -> LogSource:
    """Return u = strength * log |x - point| in the plane, harmonic off the point.

    >>> log_source((0, 0), 2).gradient([[0.5, 0.0]]).tolist()
    [[4.0, 0.0]]

    Raises
    ------
    FieldError
        If the point does not have two coordinates.
    """
    return LogSource(point=point, strength=strength)  # type: ignore[arg-type]  # made exact


def point_source(point: Iterable[Number], strength: Number = 1) -> PointSource:
    """Return u = strength/|x - point| in space, harmonic off the point.

    >>> point_source((0, 0, 0)).value([[0.0, 3.0, 4.0]]).tolist()
    [0.2]

    Raises
    ------
    FieldError
        If the point does not have three coordinates.
    """
    return PointSource(point=point, strength=strength)  # type: ignore[arg-type]  # made exact


def dipole(point: Iterable[Number], direction: Iterable[Number]) -> Dipole:
    """Return u = direction . (x - point)/|x - point|^d, d = 2 or 3 from the point, harmonic off the point.

    In the plane it is the derivative of log r along `direction`, in space minus that of 1/r.

    >>> dipole((0, 0), (1, 0)).value([[2.0, 0.0], [0.0, 1.0], [0.5, 0.0]]).tolist()
    [0.5, 0.0, 2.0]

    Raises
    ------
    FieldError
        If point and direction do not both have two or three coordinates.
    """
    return Dipole(point=point, direction=direction)  # type: ignore[arg-type]  # made exact


def _offsets(ctx: Any, x: tuple[Any, ...], point: tuple[Exact, ...]) -> tuple[tuple[Any, ...], Any]:
    """Return x - point and its length, without overflow or underflow."""
    d = tuple(offset(ctx, c, p) for c, p in zip(x, point, strict=True))
    r = ctx.hypot(d[0], d[1])
    return d, r if len(d) == 2 else ctx.hypot(r, d[2])


def _floats(point: tuple[Exact, ...]) -> tuple[float, ...]:
    """Return a point in float64."""
    return tuple(float(c) for c in point)


def _factor(strength: Exact) -> str:
    """Return ``2 `` in front of a function, nothing for 1."""
    return "" if strength == 1 else f"{show(strength)} "
