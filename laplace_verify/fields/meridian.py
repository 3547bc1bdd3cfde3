"""Axially symmetric fields of space as functions of (r, z), r the distance from the z axis.

A field U of space that does not change when turned about the z axis is known from its meridian plane:

    u(r, z) = U(r, 0, z),    u_r = U_x(r, 0, z),    u_z = U_z(r, 0, z),

and div(K grad U) = 0 becomes (1/r) d/dr(r K u_r) + d/dz(K u_z) = 0. The even continuation to r < 0 is U in
the opposite half-plane. On the axis u_r = 0. Singular points of U on the axis are singular points of u; a
circle about the axis along which U jumps is one too. Derived here. What depends on r alone, a + b log r, is
singular along the whole axis; a cone's field along the half of it outside the cone.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.edges import Line, Ring
from laplace_verify.fields.radial import Radial
from laplace_verify.fields.singular import Basis, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["Coaxial", "Meridian", "axisymmetric"]

SEED = 60217
REACHES = (0.03, 0.2, 1.0, 4.0)  # radii at which the symmetry is looked at, times a random factor up to 1
PER_REACH = 4
SYMMETRIC = 1e-9  # largest change under a turn, relative to the values met
ON_AXIS = 1e-12  # of singular points, relative to their distance from the origin


@registered("axisymmetric")
@dataclass(frozen=True, slots=True, kw_only=True)
class Meridian(Field):
    """u(r, z) = field(r, 0, z); `axisymmetric` makes one."""

    field: Field

    def __post_init__(self) -> None:
        """Refuse fields that are not of space or not symmetric about the z axis."""
        if not isinstance(self.field, Field):
            raise FieldError(f"a field of space was expected, got {type(self.field).__name__}")
        if self.field.dim != 3:
            raise FieldError(
                f"axisymmetric needs a field of space (x, y, z), {self.field.formula} is {self.field.dim}-D"
            )
        if self.field.regions:
            raise FieldError(
                "restrict to one region first: piece fields of (r, z) together by by_region instead"
            )
        _check_places(self.field)
        _check_turns(self.field)

    @property
    def dim(self) -> int:
        """Two: r and z."""
        return 2

    @property
    def formula(self) -> str:
        """The formula in space, and that it is meant in a meridian plane."""
        return f"[{self.field.formula} at x = r, y = 0]"

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """Those on the axis, and the traces of circles about it along which boundary values jump."""
        points = [
            Singularity(point=(0.0, s.point[2]), exponent=s.exponent, kind=s.kind)
            for s in self.field.singularities
        ]
        points += [
            Singularity(point=(e.radius, e.centre[2]), exponent=e.exponent, kind="jump")
            for e in self.field.edges
            if isinstance(e, Ring)
        ]
        return tuple(points)

    @property
    def basis(self) -> Basis:
        """As in space."""
        return self.field.basis

    @property
    def fit_error(self) -> float:
        """As in space."""
        return self.field.fit_error

    @property
    def most_digits(self) -> int:
        """As in space."""
        return self.field.most_digits

    def gradient_error(self, place: tuple[Any, ...]) -> float:
        """As in space."""
        return self.field.gradient_error((place[0], 0, place[1]))

    @property
    def opaque(self) -> bool:
        """As in space."""
        return self.field.opaque

    @property
    def degree(self) -> int | None:
        """The total degree in r and z, as in space."""
        return self.field.degree

    @property
    def growth(self) -> float:
        """As in space."""
        return self.field.growth

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        return self.field._value(ctx, (x[0], 0 * x[0], x[1]), side)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        along_r, _, along_z = self.field._gradient(ctx, (x[0], 0 * x[0], x[1]), side)
        return along_r, along_z

    def _valid(self, points: Array) -> BoolArray:
        return self.field._valid(np.stack([points[:, 0], np.zeros(len(points)), points[:, 1]], axis=1))


@registered("coaxial")
@dataclass(frozen=True, slots=True, kw_only=True)
class Coaxial(Field):
    """u(r, z) = radial(r) = a + b log r; `axisymmetric` makes one of a radial field of the cylinder."""

    radial: Field

    def __post_init__(self) -> None:
        """Refuse all but radial fields of the cylinder."""
        if not isinstance(self.radial, Radial) or self.radial.about != "cylinder":
            raise FieldError(
                "a field of r alone must be radial('cylinder', a, b); in space radial('sphere', a, b) is "
                "b times point_source((0, 0, 0)) plus a constant"
            )

    @property
    def dim(self) -> int:
        """Two: r and z."""
        return 2

    @property
    def formula(self) -> str:
        """Such as ``3 + 2 log r``."""
        return self.radial.formula

    @property
    def degree(self) -> int | None:
        """Zero for a constant."""
        return self.radial.degree

    @property
    def growth(self) -> float:
        """Logarithmic, or bounded."""
        return self.radial.growth

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        return self.radial._value(ctx, (abs(x[0]),), side)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        return self.radial._gradient(ctx, (x[0],), side)[0], 0 * x[1]

    def _valid(self, points: Array) -> BoolArray:
        """Everywhere off the axis."""
        valid: BoolArray = (points[:, 0] != 0.0) | (self.radial.degree == 0)
        return valid


def axisymmetric(field: Field) -> Meridian | Coaxial:
    """Return an axially symmetric field of space as a function of (r, z).

    Parameters
    ----------
    field
        A field of space that turning about the z axis leaves as it is: solid harmonics (l, 0), point sources
        and dipoles on and along the axis, sums of them. The symmetry is checked at seeded points; singular
        points must lie on the axis. Or ``radial("cylinder", a, b)``, for a + b log r in hollow cylinders.

    Raises
    ------
    FieldError
        If the field is not of space, or not symmetric about the z axis (the message says where it changes).

    Examples
    --------
    >>> from laplace_verify import fields
    >>> u = axisymmetric(fields.solid(2, 0))  # z^2 - r^2/2
    >>> u.value([[2.0, 1.0]]).tolist(), u.gradient([[2.0, 1.0]]).tolist()
    ([-1.0], [[-2.0, 2.0]])
    """
    if isinstance(field, Radial):
        return Coaxial(radial=field)
    return Meridian(field=field)


def _check_places(field: Field) -> None:
    """Refuse singular points off the axis, cuts, and edges that are no circles about the axis."""
    for s in field.singularities:
        off = math.hypot(s.point[0], s.point[1])
        if off > ON_AXIS * (off + abs(s.point[2])):
            raise FieldError(
                f"{field.formula} is not symmetric about the z axis: its singular point {s.point} lies off it"
            )
    for edge in field.edges:
        if isinstance(edge, Line) and not any(edge.point[:2]) and not any(edge.direction[:2]):
            continue  # the axis or half of it, where the field is not valid
        about = isinstance(edge, Ring) and math.hypot(*edge.axis[:2], *edge.centre[:2]) <= ON_AXIS
        if not about:
            raise FieldError(f"{field.formula} is not symmetric about the z axis: it jumps along {edge}")


def _check_turns(field: Field) -> None:
    """Refuse a field that changes under a turn about the axis, at seeded points where it is defined."""
    generator = np.random.default_rng(SEED)
    centres = [s.point[2] for s in field.singularities] or [0.0]
    centres += [e.centre[2] for e in field.edges if isinstance(e, Ring)]
    looked = 0
    for reach in REACHES:
        for centre in centres[:4]:
            for _ in range(PER_REACH):
                r, z = reach * generator.uniform(0.1, 1.0), centre + reach * generator.uniform(-1.0, 1.0)
                angles = np.array([0.0, *generator.uniform(0.0, 2.0 * math.pi, 3)])
                points = np.stack([r * np.cos(angles), r * np.sin(angles), np.full(4, z)], axis=1)
                try:
                    values = field.value(points)
                    steep = float(np.abs(field.gradient(points)).max())
                except FieldError:
                    continue  # beyond its validity, or on a singular point
                looked += 1
                scale = float(np.abs(values).max()) + reach * steep
                if not np.ptp(values) <= SYMMETRIC * scale:
                    raise FieldError(
                        f"{field.formula} is not symmetric about the z axis: at r = {r:.4g}, z = {z:.4g} it "
                        f"takes values from {values.min():.6g} to {values.max():.6g}"
                    )
    if not looked:
        raise FieldError(
            f"{field.formula} cannot be evaluated near the z axis, so that its symmetry cannot be checked"
        )
