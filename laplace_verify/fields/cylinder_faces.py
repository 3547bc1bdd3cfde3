"""Finite cylinder whose lid, bottom and side are held at constant values.

u = side + (top - side) v(distance from the top) + (bottom - side) v(distance from the bottom), v the solution
with one hot lid (`cylinder_kernel`); a hot side alone is 1 less two hot lids. On a rim where two values meet
that differ, u has no value, and |grad u| grows like 1 / distance.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.cylinder_kernel import lid_slopes, lid_value
from laplace_verify.fields.edges import Ring
from laplace_verify.fields.exact import Exact, exact, offset, rational, show
from laplace_verify.fields.rim import rim_gap
from laplace_verify.fields.singular import Basis
from laplace_verify.fields.specs import registered

__all__ = ["CylinderFaces", "cylinder_faces"]

OUTSIDE = 1e-9  # of the size: how far outside a point may be put by rounding


@registered("cylinder-faces")
@dataclass(frozen=True, slots=True, kw_only=True)
class CylinderFaces(Field):
    """Constant values on the faces of x^2 + y^2 < radius^2, z0 < z < z1; see `cylinder_faces`."""

    radius: Exact
    z0: Exact
    z1: Exact
    bottom: Exact = 0
    side: Exact = 0
    top: Exact = 0

    def __post_init__(self) -> None:
        """Make numbers exact.

        Raises
        ------
        FieldError
            If the radius is not positive or the ends do not rise.
        """
        for name in ("radius", "z0", "z1", "bottom", "side", "top"):
            object.__setattr__(self, name, exact(getattr(self, name), name))
        if not self.radius > 0:
            raise FieldError(f"radius must be positive, got {show(self.radius)}")
        if not rational(self.z0) < rational(self.z1):
            raise FieldError(f"z0 must be below z1, got {show(self.z0)} and {show(self.z1)}")

    @property
    def dim(self) -> int:
        """3."""
        return 3

    @property
    def edges(self) -> tuple[Ring, ...]:
        """The rims where the values of two faces differ."""
        return tuple(
            Ring(centre=(0.0, 0.0, float(z)), axis=(0.0, 0.0, 1.0), radius=float(self.radius))
            for z, value in ((self.z0, self.bottom), (self.z1, self.top))
            if rational(value) != rational(self.side)
        )

    @property
    def basis(self) -> Basis:
        """Series with proven bounds."""
        return "tail bound"

    @property
    def formula(self) -> str:
        """The problem in one line."""
        return (
            f"[cylinder of radius {show(self.radius)}, {show(self.z0)} < z < {show(self.z1)}: "
            f"{show(self.bottom)} on bottom, {show(self.side)} on side, {show(self.top)} on top]"
        )

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        r, gap, ends, height = self._place(ctx, x)
        u = ctx.number(self.side) + 0 * r
        for d, weight in zip(ends, self._weights(), strict=True):
            if weight:
                u = u + ctx.number(weight) * self._masked(ctx, lid_value, r, gap, d, height)
        return ctx.where((gap == 0) & (ends[0] > 0) & (ends[1] > 0), ctx.number(self.side) + 0 * u, u)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002  # no cut
        r, gap, ends, height = self._place(ctx, x)
        across, along = 0 * r, 0 * r
        for d, weight, sign in zip(ends, self._weights(), (1, -1), strict=True):
            if weight:
                out, down = self._masked(ctx, lid_slopes, r, gap, d, height)
                across = across + ctx.number(weight) * out
                along = along + sign * ctx.number(weight) * down
        on_side = (gap == 0) & (ends[0] > 0) & (ends[1] > 0)
        along = ctx.where(on_side, 0 * along, along)  # exactly: u is constant on the side
        unit = ctx.number(self.radius)
        beside = ctx.where(r == 0, 1 + 0 * r, r) * unit
        return across * x[0] / beside / unit, across * x[1] / beside / unit, along / unit

    def _weights(self) -> tuple[Fraction, Fraction]:
        """Return bottom and top less the side."""
        return rational(self.bottom) - rational(self.side), rational(self.top) - rational(self.side)

    def _place(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, Any, tuple[Any, Any], Any]:
        """Return r, 1 - r, the distances from bottom and top, and the height, in units of the radius."""
        unit = ctx.number(self.radius)
        _, gap = rim_gap(ctx, x[0], x[1], self.radius)
        gap = ctx.where(gap > 0, gap, 0 * gap) / unit
        ends = tuple(
            ctx.where(d > 0, d, 0 * d) / unit
            for d in (offset(ctx, x[2], self.z0), -offset(ctx, x[2], self.z1))
        )
        height = ctx.number(exact((rational(self.z1) - rational(self.z0)) / rational(self.radius), "height"))
        r = ctx.sqrt(x[0] * x[0] + x[1] * x[1]) / unit
        return ctx.where(r < 1, r, 1 + 0 * r), gap, (ends[0], ends[1]), height

    def _masked(self, ctx: Any, function: Any, r: Any, gap: Any, d: Any, height: Any) -> Any:
        """Return the function, NaN on the rim."""
        rim = (gap == 0) & (d == 0)
        nan = math.nan if ctx is FLOAT else ctx.nan
        if ctx is not FLOAT and rim:
            return nan if function is lid_value else (nan, nan)
        found = function(ctx, r, gap, ctx.where(rim, height + 0 * d, d), height)
        if function is lid_value:
            return ctx.where(rim, nan, found)
        return tuple(ctx.where(rim, nan, part) for part in found)

    def _jumps_at(self, place: tuple[Exact, ...]) -> bool:
        """Return whether a point lies on a rim where two values meet."""
        x, y, z = (rational(c) for c in place)
        on_end = any(
            z == rational(end) and weight
            for end, weight in zip((self.z0, self.z1), self._weights(), strict=True)
        )
        return on_end and x * x + y * y == rational(self.radius) ** 2

    def _valid(self, points: Array) -> BoolArray:
        """Return which points lie in the closed cylinder, to rounding."""
        low, high, radius = float(self.z0), float(self.z1), float(self.radius)
        slack = OUTSIDE * max(high - low, radius)
        x, y, z = points.T
        r = np.sqrt(x * x + y * y)
        inside: BoolArray = (r <= radius + slack) & (z >= low - slack) & (z <= high + slack)
        return inside


def cylinder_faces(
    radius: Number, z0: Number, z1: Number, *, bottom: Number = 0, side: Number = 0, top: Number = 0
) -> CylinderFaces:
    """Return the harmonic u in a cylinder about the z axis whose faces are held at constant values.

    Parameters
    ----------
    radius, z0, z1
        The cylinder x^2 + y^2 < radius^2, z0 < z < z1, of any proportions.
    bottom, side, top : numbers
        The values.

    Examples
    --------
    >>> lid, mantle = cylinder_faces(1, 0, 1, top=1), cylinder_faces(1, 0, 1, side=1)
    >>> middle = [[0.0, 0.0, 0.5]]
    >>> bool(abs(2 * lid.value(middle)[0] + mantle.value(middle)[0] - 1) < 1e-15)
    True

    Raises
    ------
    FieldError
        If the radius is not positive, the ends do not rise or a number is not finite.
    """
    return CylinderFaces(radius=radius, z0=z0, z1=z1, bottom=bottom, side=side, top=top)  # type: ignore[arg-type]  # made exact there
