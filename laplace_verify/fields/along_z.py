"""Plane fields carried along z, straight or growing linearly: (a + b z) v(x, y).

v harmonic in the plane makes v and z v harmonic in space. A singular point r^e of v becomes a singular line
along z, as at the edge of a prism, and a branch cut a half-plane. Derived here.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.edges import Line
from laplace_verify.fields.exact import Exact, exact, show
from laplace_verify.fields.sheets import Fan
from laplace_verify.fields.singular import Basis, Cut, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["AlongZ", "along_z", "half_planes", "lines_along_z"]

UP = (0.0, 0.0, 1.0)


@registered("along-z")
@dataclass(frozen=True, slots=True, kw_only=True)
class AlongZ(Field):
    """u = (level + slope z) field(x, y); `along_z` makes one."""

    field: Field
    level: Exact = 1
    slope: Exact = 0

    def __post_init__(self) -> None:
        """Refuse what is no plane field, poles, and parts that have no meaning in space."""
        if not isinstance(self.field, Field):
            raise FieldError(f"a plane field was expected, got {type(self.field).__name__}")
        if self.field.dim != 2:
            raise FieldError(f"a field of the plane was expected, {self.field.formula} is {self.field.dim}-D")
        if self.field.regions or self.field.fit_error:
            raise FieldError(f"along_z needs an exact field without regions, not {self.field.formula}")
        if any(s.kind in ("log", "pole") for s in self.field.singularities):
            raise FieldError(
                f"{self.field.formula} is infinite at a point of the plane, which would be a charged line; "
                "along_z takes fields that stay finite"
            )
        if any(math.isfinite(cut.length) for cut in self.field.cuts):
            raise FieldError(f"branch cuts must go to infinity; those of {self.field.formula} end")
        for name in ("level", "slope"):
            object.__setattr__(self, name, exact(getattr(self, name), name))
        if not (self.level or self.slope):
            raise FieldError("level and slope must not both be 0")

    @property
    def dim(self) -> int:
        """Three."""
        return 3

    @property
    def formula(self) -> str:
        """Such as ``(1 + 2 z) [r^(2/3) sin(2/3 theta)]``."""
        parts = [show(self.level)] if self.level else []
        parts += [f"{show(self.slope)} z"] if self.slope else []
        return f"({' + '.join(parts)}) [{self.field.formula}]"

    @property
    def edges(self) -> tuple[Line, ...]:
        """A line along z through every singular point of the plane field."""
        return lines_along_z(self.field.singularities)

    @property
    def sheets(self) -> tuple[Fan, ...]:
        """The half-planes over its branch cuts."""
        return half_planes(self.field.cuts)

    @property
    def basis(self) -> Basis:
        """As in the plane."""
        return self.field.basis

    @property
    def opaque(self) -> bool:
        """As in the plane."""
        return self.field.opaque

    @property
    def most_digits(self) -> int:
        """As in the plane."""
        return self.field.most_digits

    @property
    def degree(self) -> int | None:
        """One more than in the plane if u grows along z."""
        return None if self.field.degree is None else self.field.degree + bool(self.slope)

    @property
    def growth(self) -> float:
        """One more than in the plane if u grows along z."""
        return self.field.growth + bool(self.slope)

    def _profile(self, ctx: Any, z: Any) -> Any:
        return ctx.number(self.level) + ctx.number(self.slope) * z

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        return self._profile(ctx, x[2]) * self.field._value(ctx, x[:2], side)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        profile = self._profile(ctx, x[2])
        along = [profile * g for g in self.field._gradient(ctx, x[:2], side)]
        return (*along, ctx.number(self.slope) * self.field._value(ctx, x[:2], side))

    def _valid(self, points: Array) -> BoolArray:
        return self.field._valid(points[:, :2])


def lines_along_z(singularities: tuple[Singularity, ...]) -> tuple[Line, ...]:
    """Return the lines along z through singular points of the plane."""
    return tuple(
        Line(point=(s.point[0], s.point[1], 0.0), direction=UP, exponent=s.exponent) for s in singularities
    )


def half_planes(cuts: tuple[Cut, ...]) -> tuple[Fan, ...]:
    """Return the half-planes over branch cuts of the plane; side +1 stays the left of the cut."""
    return tuple(
        Fan(start=(*cut.start, 0.0), first=UP, second=(*cut.direction, 0.0), opening=math.pi) for cut in cuts
    )


def along_z(field: Field, level: Number = 1, slope: Number = 0) -> AlongZ:
    """Return u(x, y, z) = (level + slope z) field(x, y).

    Parameters
    ----------
    field
        A plane field that stays finite, such as `wedge`: r^(2/3) sin(2 theta/3) about the edge of a prism.
    level, slope
        Numbers, not both 0.

    Raises
    ------
    FieldError
        If the field is not of the plane, has poles, regions or finite cuts, or was fitted.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> u = along_z(fields.polynomial(2), slope=1)  # (1 + z) (x^2 - y^2)
    >>> u.value([[2.0, 1.0, 3.0]]).tolist(), u.gradient([[2.0, 1.0, 3.0]]).tolist()
    ([12.0], [[16.0, -8.0, 3.0]])
    """
    return AlongZ(field=field, level=level, slope=slope)  # type: ignore[arg-type]  # made exact there
