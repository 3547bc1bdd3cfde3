"""Balls and spherical shells with axisymmetric data: finite sums of zonal solid harmonics.

With r the distance from the centre, c = z / r the cosine of the polar angle and Legendre's polynomials P_l,

    u = sum_l ( A_l r^l + B_l r^{-l-1} ) P_l(c).

A ball of radius b with u = sum g_l P_l(c) on it has A_l = g_l / b^l, B_l = 0. A shell a < r < b with u = sum
f_l P_l on r = a as well has

    A_l = (g_l b^{l+1} - f_l a^{l+1}) / (b^{2l+1} - a^{2l+1}),
    B_l = a^{l+1} b^{l+1} (f_l b^l - g_l a^l) / (b^{2l+1} - a^{2l+1}).

In Cartesian coordinates Z_l = r^l P_l(c) follows from l Z_l = (2l - 1) z Z_{l-1} - (l - 1) r^2 Z_{l-2},
without an angle; dZ_l/dz = l Z_{l-1}, and D_l = (dZ_l/ds) / s, s the distance from the axis, from the
derivative of the recurrence, l D_l = (2l - 1) z D_{l-1} - (l - 1) (r^2 D_{l-2} + 2 Z_{l-2}). Lengths are
measured in b inside the sum and in a for the decaying part, so that nothing overflows at any degree.

References
----------
Kellogg (1929), Foundations of Potential Theory, ch. V; Jackson, Classical Electrodynamics, section 3.3 (from
memory, unchecked).
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, rational, show
from laplace_verify.fields.singular import Singularity
from laplace_verify.fields.specs import registered

__all__ = ["Zonal", "ball_zonal", "shell_zonal", "zonal_sum"]

HIGHEST = 500  # degree


@registered("zonal")
@dataclass(frozen=True, slots=True, kw_only=True)
class Zonal(Field):
    """Legendre data on a sphere, or on two concentric ones; `ball_zonal` and `shell_zonal` make one."""

    centre: tuple[Exact, ...]
    outer: Exact
    outside: tuple[Exact, ...]
    inner: Exact = 0
    inside: tuple[Exact, ...] = ()

    def __post_init__(self) -> None:
        """Make numbers exact and check radii and degrees.

        Raises
        ------
        FieldError
            If the radii do not rise, there is no coefficient or there are too many.
        """
        set_ = object.__setattr__
        set_(self, "centre", exact_point(self.centre, "centre", (3,)))
        for name in ("inner", "outer"):
            set_(self, name, exact(getattr(self, name), name))
        for name in ("inside", "outside"):
            given = getattr(self, name)
            if isinstance(given, str) or not isinstance(given, Iterable):
                raise FieldError(f"{name} must be a list of Legendre coefficients, got {given!r}")
            set_(self, name, tuple(exact(c, f"{name}[{i}]") for i, c in enumerate(given)))
        if not 0 <= rational(self.inner) < rational(self.outer):
            raise FieldError(
                f"radii must satisfy 0 < inner < outer, got {show(self.inner)} and {show(self.outer)}"
            )
        if not 1 <= max(len(self.inside), len(self.outside)) <= HIGHEST + 1:
            raise FieldError(f"there must be 1 to {HIGHEST + 1} Legendre coefficients, degree 0 first")

    @property
    def dim(self) -> int:
        """3."""
        return 3

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The centre of a shell."""
        falling = [n for n, (_, b) in enumerate(self._factors()) if b]
        if not falling:
            return ()
        point = tuple(float(c) for c in self.centre)
        return (Singularity(point=point, exponent=-float(falling[-1] + 1), kind="pole"),)

    @property
    def formula(self) -> str:
        """The data in one line."""
        text = f"[sum {_listed(self.outside)} P_l(cos t) on r = {show(self.outer)}"
        if self.inner:
            text += f", sum {_listed(self.inside)} P_l(cos t) on r = {show(self.inner)}"
        return f"{text}, about ({', '.join(show(c) for c in self.centre)})]"

    @property
    def growth(self) -> float:
        """The largest degree with a rising part."""
        return float(max((n for n, (a, _) in enumerate(self._factors()) if a), default=-1))

    def _factors(self) -> list[tuple[Fraction, Fraction]]:
        """Return for each l the factors of (r/outer)^l P_l and (inner/r)^{l+1} P_l."""
        a, b = rational(self.inner), rational(self.outer)
        count = max(len(self.inside), len(self.outside))
        f, g = (
            [rational(c) for c in given] + [Fraction(0)] * (count - len(given))
            for given in (self.inside, self.outside)
        )
        if not a:
            return [(c, Fraction(0)) for c in g]
        q = a / b
        pairs = []
        for n in range(count):
            apart = 1 - q ** (2 * n + 1)
            pairs.append(((g[n] - f[n] * q ** (n + 1)) / apart, (f[n] - g[n] * q**n) / apart))
        return pairs

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        at = self._from_centre(ctx, x)
        factors = self._factors()
        u = zonal_sum(ctx, [a for a, _ in factors], at, self.outer)[0]
        if self.inner:
            square = at[0] * at[0] + at[1] * at[1] + at[2] * at[2]
            image = tuple(c * (ctx.number(self.inner) ** 2 / square) for c in at)
            inverse = ctx.number(self.inner) / ctx.sqrt(square)
            u = u + inverse * zonal_sum(ctx, [b for _, b in factors], image, self.inner)[0]
        return u

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002  # no cut
        at = self._from_centre(ctx, x)
        factors = self._factors()
        _, across, along = zonal_sum(ctx, [a for a, _ in factors], at, self.outer)
        slopes = [across * at[0], across * at[1], along]
        if not self.inner:
            return tuple(slopes)
        # Kelvin: w(x) = (a/r) v(a^2 x/r^2), grad w = (a/r)^3 [g - 2 (g.x) x/r^2] - (a/r) v x/r^2
        a = ctx.number(self.inner)
        square = at[0] * at[0] + at[1] * at[1] + at[2] * at[2]
        inverse = a / ctx.sqrt(square)
        image = tuple(c * (a * a / square) for c in at)
        v, across, along = zonal_sum(ctx, [b for _, b in factors], image, self.inner)
        g = (across * image[0], across * image[1], along)
        radial = 2 * (g[0] * at[0] + g[1] * at[1] + g[2] * at[2]) / square
        cube = inverse**3
        return tuple(
            s + cube * (gi - radial * c) - inverse * v * c / square
            for s, gi, c in zip(slopes, g, at, strict=True)
        )

    def _from_centre(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, ...]:
        """Return the coordinates less those of the centre."""
        return tuple(offset(ctx, c, m) for c, m in zip(x, self.centre, strict=True))

    def _valid(self, points: Array) -> BoolArray:
        """Every point but those so far from the spheres that powers overflow; there the value is refused."""
        return np.ones(len(points), dtype=bool)


def ball_zonal(centre: Iterable[Number], radius: Number, coefficients: Iterable[Number]) -> Zonal:
    """Return the harmonic u with u = sum_l coefficients[l] P_l(cos t) on a sphere, regular inside.

    t is the angle from the z axis through the centre.

    >>> u = ball_zonal((0, 0, 0), 2, (0, 0, 1))  # r^2 P_2 / 4
    >>> u.value([[0.0, 0.0, 2.0], [2.0, 0.0, 0.0], [0.0, 0.0, 1.0]]).tolist()
    [1.0, -0.5, 0.25]

    Raises
    ------
    FieldError
        If the radius is not positive, or there is no coefficient or more than 501.
    """
    return Zonal(centre=tuple(centre), outer=radius, outside=tuple(coefficients))  # type: ignore[arg-type]  # made exact there


def shell_zonal(
    centre: Iterable[Number],
    inner: Number,
    outer: Number,
    inside: Iterable[Number],
    outside: Iterable[Number],
) -> Zonal:
    """Return the harmonic u with Legendre data on two concentric spheres.

    Parameters
    ----------
    centre, inner, outer
        Centre and radii, 0 < inner < outer.
    inside, outside
        Coefficients of P_0(cos t), P_1(cos t), ... on the inner and on the outer sphere.

    Examples
    --------
    >>> u = shell_zonal((0, 0, 0), 1, 2, (1,), (0,))  # 2/r - 1
    >>> bool(abs(u.value([[0.0, 1.5, 0.0]])[0] - 1/3) < 1e-15)
    True

    Raises
    ------
    FieldError
        If the radii do not rise, or there is no coefficient or more than 501.
    """
    if not rational(exact(inner, "inner")) > 0:
        raise FieldError(f"inner must be positive, got {inner!r}; for a full ball use ball_zonal")
    numbers: dict[str, Any] = {"inner": inner, "outer": outer}  # made exact there
    data: dict[str, Any] = {"inside": tuple(inside), "outside": tuple(outside)}
    middle: Any = tuple(centre)
    return Zonal(centre=middle, **numbers, **data)


def zonal_sum(ctx: Any, factors: list[Fraction], at: tuple[Any, ...], unit: Exact) -> tuple[Any, Any, Any]:
    """Return v = sum factors[l] Z_l(at / unit), (dv/ds) / s and dv/dz, Z_l as in the module."""
    scale = ctx.number(unit)
    x, y, z = (c / scale for c in at)
    square = x * x + y * y + z * z
    value, across, along = 0 * square, 0 * square, 0 * square
    before, now = 0 * square, 0 * square + 1  # Z_{l-1}, Z_l
    d_before, d_now = 0 * square, 0 * square
    for n, factor in enumerate(factors):
        if n:
            down = (2 * n - 1) * z
            d_next = (down * d_now - (n - 1) * (square * d_before + 2 * before)) / n
            before, now = now, (down * now - (n - 1) * square * before) / n
            d_before, d_now = d_now, d_next
        if factor:
            number = ctx.number(factor)
            value = value + number * now
            across = across + number * d_now
            along = along + number * n * before
    return value, across / (scale * scale), along / scale


def _listed(coefficients: tuple[Exact, ...]) -> str:
    """Return (1, 0, 1/2)."""
    shown = ", ".join(show(c) for c in coefficients[:8])
    return f"({shown}{', ...' if len(coefficients) > 8 else ''})"
