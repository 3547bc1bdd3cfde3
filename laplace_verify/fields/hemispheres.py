"""Ball whose two halves of the surface are held at different constant values: elliptic integrals.

On the unit ball with u = 1 on the upper half and 0 on the lower, write rho for the distance from the centre,
s for that from the axis, c = z / rho, n = s / rho, D^2 = 1 + rho^2 - 2 s cos(f) and g = n cos(f). For z >= 0
(else u(-z) = 1 - u(z)), integrating over 0 < f < 2 pi,

    u = (1 + rho)/(2 rho) - c (1 - rho^2)/(4 pi rho) int df / (D (1 - g^2)),
    du/d rho = c/(2 pi) int df / D^3 + c/(4 pi rho^2) int (1 - rho g)/(D (1 - g^2)) df - 1/(2 rho^2),
    du/d theta = -(1 - rho^2)/(4 pi) int cos(f) df / D^3.

The first reduces Poisson's integral over the cap to its rim (the kernel is the surface divergence of a field
that points away from x / rho). The last is Poisson's integral of the derivative of the data, a ring; the
second follows from it by Laplace's equation, integrated along the radius with (1 - rho^2)/D^3 = (1 + 2 rho
d/d rho)(1/D) and by parts in f (all derived here). With partial fractions in g every integral is one of
Bulirsch's, of complementary modulus

    k^2 = ((1 - s)^2 + z^2) / ((1 + s)^2 + z^2)   and   p = (1 - n)/(1 + n), 1/p or k^2,
    1 - n = c^2/(1 + n).

1 - s and 1 - rho^2 are formed without cancellation (`rim`). In float64, rho < 0.7 is left to
tables in s^2 and |z|, made from these integrals and, for rho < 0.6, from the sum of zonal harmonics,
u = 1/2 + sum_{l odd} a_l rho^l P_l(c), a_l = (P_{l-1}(0) - P_{l+1}(0))/2.

References
----------
Jackson, Classical Electrodynamics, section 2.7 and eq. 3.36, for the series (from memory, unchecked).
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.chebyshev_cells import ChebyshevCells, chebyshev_cells
from laplace_verify.fields.complete_elliptic import cels
from laplace_verify.fields.edges import Ring
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, rational, show
from laplace_verify.fields.rim import rim_gap
from laplace_verify.fields.specs import registered
from laplace_verify.fields.zonal import zonal_sum

__all__ = ["Hemispheres", "hemispheres"]

INSIDE = 0.6  # of the radius: up to here the series serves
DEGREE = 77  # 0.6^79 = 3e-18
MIDDLE = 0.7  # of the radius: up to here tables in s and z serve
ACROSS = (0.0, 0.22, MIDDLE**2)  # cells in s^2
ALONG = (0.0, 0.2, 0.43, MIDDLE)  # and in z
MOST = 30  # polynomials in either
FLAT = 1e-100  # of the radius: so near to z = 0 that c^2 could underflow, u is 1/2 to rounding
OUTSIDE = 1e-9  # of the radius: how far outside a point may be put by rounding


@registered("hemispheres")
@dataclass(frozen=True, slots=True, kw_only=True)
class Hemispheres(Field):
    """Values `upper` and `lower` on the halves z > 0 and z < 0 of a sphere; `hemispheres` makes one."""

    centre: tuple[Exact, ...]
    radius: Exact
    upper: Exact = 1
    lower: Exact = 0

    def __post_init__(self) -> None:
        """Make numbers exact.

        Raises
        ------
        FieldError
            If the radius is not positive or a number is not finite.
        """
        object.__setattr__(self, "centre", exact_point(self.centre, "centre", (3,)))
        for name in ("radius", "upper", "lower"):
            object.__setattr__(self, name, exact(getattr(self, name), name))
        if not self.radius > 0:
            raise FieldError(f"radius must be positive, got {show(self.radius)}")

    @property
    def dim(self) -> int:
        """3."""
        return 3

    @property
    def edges(self) -> tuple[Ring, ...]:
        """The equator."""
        if rational(self.upper) == rational(self.lower):
            return ()
        x, y, z = (float(c) for c in self.centre)
        return (Ring(centre=(x, y, z), axis=(0.0, 0.0, 1.0), radius=float(self.radius)),)

    @property
    def formula(self) -> str:
        """The problem in one line."""
        centre = ", ".join(show(c) for c in self.centre)
        return (
            f"[ball of radius {show(self.radius)} about ({centre}): {show(self.upper)} on the upper half, "
            f"{show(self.lower)} on the lower]"
        )

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        step = ctx.number(exact(rational(self.upper) - rational(self.lower), "step"))
        if ctx is not FLOAT:
            return ctx.number(self.lower) + step * _upper_half(ctx, self._place(ctx, x))
        u, left_out = _middle_value(*self._in_radii(ctx, x))
        u[left_out] = _upper_half(ctx, self._place(ctx, tuple(c[left_out] for c in x)))
        u *= step
        u += float(self.lower)
        return u

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002  # no cut
        step = ctx.number(exact(rational(self.upper) - rational(self.lower), "step")) / ctx.number(
            self.radius
        )
        if ctx is not FLOAT:
            return tuple(step * g for g in _upper_half_slopes(ctx, self._place(ctx, x)))
        slopes, left_out = _middle_slopes(*self._in_radii(ctx, x))
        slopes[:, left_out] = _upper_half_slopes(ctx, self._place(ctx, tuple(c[left_out] for c in x)))
        slopes *= step
        return tuple(slopes)

    def _in_radii(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, ...]:
        """Return coordinates from the centre in units of the radius."""
        at = tuple(offset(ctx, c, m) for c, m in zip(x, self.centre, strict=True))
        return at if self.radius == 1 else tuple(c / ctx.number(self.radius) for c in at)

    def _place(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, ...]:
        """Return x, y, z in units of the radius and 1 - s, s the distance from the axis in that unit."""
        across = tuple(offset(ctx, c, m) for c, m in zip(x[:2], self.centre, strict=False))
        _, gap = rim_gap(ctx, across[0], across[1], self.radius)
        return (*self._in_radii(ctx, x), gap / ctx.number(self.radius))

    def _valid(self, points: Array) -> BoolArray:
        """Return which points lie in the closed ball, to rounding."""
        x, y, z = (column - float(c) for column, c in zip(points.T, self.centre, strict=True))
        inside: BoolArray = np.sqrt(x * x + y * y + z * z) <= float(self.radius) * (1 + OUTSIDE)
        return inside


def hemispheres(
    centre: Iterable[Number], radius: Number, upper: Number = 1, lower: Number = 0
) -> Hemispheres:
    """Return the harmonic u in a ball with u = upper on the upper half of its surface, lower on the other.

    Parameters
    ----------
    centre, radius
        Of the ball.
    upper, lower : numbers
        The two values; u has no value on the equator if they differ.

    Examples
    --------
    >>> u = hemispheres((0, 0, 0), 1, 1, -1)
    >>> bool(abs(u.value([[0.0, 0.0, 0.5]])[0] - 0.658359213500126182) < 1e-15)
    True

    Raises
    ------
    FieldError
        If the radius is not positive or a number is not finite.
    """
    return Hemispheres(centre=tuple(centre), radius=radius, upper=upper, lower=lower)  # type: ignore[arg-type]  # made exact there


def _middle_value(x: Array, y: Array, z: Array) -> tuple[Array, IntArray]:
    """Return u for the values 1 and 0 at rho < MIDDLE, and the other points."""
    (odd,), left_out = _in_middle(x, y, z, (0,))
    np.copysign(odd, z, out=odd)
    odd += 0.5
    return odd, left_out


def _middle_slopes(x: Array, y: Array, z: Array) -> tuple[Array, IntArray]:
    """Return the gradient of `_middle_value`, and the other points."""
    (across, along), left_out = _in_middle(x, y, z, (1, 2))
    np.copysign(across, across * z, out=across)
    return np.stack([across * x, across * y, along]), left_out


def _in_middle(x: Array, y: Array, z: Array, wanted: tuple[int, ...]) -> tuple[Array, IntArray]:
    """Return functions of `_middle_cells` at x, y and |z|, and the points beyond."""
    square = x * x
    square += y * y
    inside = z * z
    inside += square
    return _middle_cells().values(square, np.abs(z), wanted, inside < MIDDLE**2)


@lru_cache(maxsize=1)
def _middle_cells() -> ChebyshevCells:
    """Return u - 1/2, (du/ds) / s and du/dz as functions of s^2 and z >= 0."""

    def functions(square: Array, z: Array) -> list[Array]:
        s = np.sqrt(square)
        near = square + z * z < INSIDE**2
        found = np.empty((3, len(s)))
        inner, outer = (s[near], 0 * s[near], z[near]), (s[~near], 0 * s[~near], z[~near], 1 - s[~near])
        u, across, along = zonal_sum(FLOAT, _legendre(), inner, 1)
        found[:, near] = u - 0.5, across, along
        out, _, along = _upper_half_slopes(FLOAT, outer)
        found[:, ~near] = _upper_half(FLOAT, outer) - 0.5, out / outer[0], along
        return list(found)

    return chebyshev_cells(functions, ACROSS, ALONG, MOST)


@lru_cache(maxsize=1)
def _legendre() -> list[Fraction]:
    """Return the coefficients of the step: 1/2 and (P_{l-1}(0) - P_{l+1}(0))/2 for odd l."""
    at_zero = [Fraction(1), Fraction(0)]
    for n in range(2, DEGREE + 2):
        at_zero.append(Fraction(-(n - 1), n) * at_zero[n - 2])
    return [Fraction(1, 2)] + [(at_zero[n - 1] - at_zero[n + 1]) / 2 for n in range(1, DEGREE + 1)]


def _upper_half(ctx: Any, place: tuple[Any, ...]) -> Any:
    """Return u for the values 1 and 0."""
    x, y, z, gap = place
    s, height = ctx.sqrt(x * x + y * y), ctx.fabs(z)
    if ctx is not FLOAT and z == 0:
        return ctx.mpf(1) / 2 if gap > 0 else ctx.nan
    rho = ctx.sqrt(s * s + height * height)
    shell = gap * (1 + s) - height * height  # 1 - rho^2
    shell = ctx.where(shell > 0, shell, 0 * shell)
    third = _integrals(ctx, s, height, gap, rho)
    u = (1 + rho) / (2 * rho) - shell / (4 * ctx.pi * rho) * (third[0] + third[1])
    u = ctx.where(z < 0, 1 - u, u)
    return np.where(height < FLAT, 0.5, u) if ctx is FLOAT else u


def _integrals(ctx: Any, s: Any, height: Any, gap: Any, rho: Any, *, cubes: bool = False) -> list[Any]:
    """Return c/2 times the integrals of 1 / (D (1 - g)) and 1 / (D (1 + g)), nothing of use on z = 0.

    With `cubes` those of 1 / D^3 and of cos(f) / D^3 follow.
    """
    flat = height < FLAT if ctx is FLOAT else height == 0
    c = ctx.where(flat, 1 + 0 * height, height / rho)
    n = s / rho
    low, high = c * c / (1 + n), 1 + n  # 1 - n and 1 + n
    square = (1 + s) * (1 + s) + height * height
    size = ctx.sqrt(square)
    k = ctx.sqrt(gap * gap + height * height) / size
    parameters = [(low / high, 1, 1), (high / low, 1, 1)]
    factors = [2 / size * c / high, 2 / size * c / low]
    if cubes:
        parameters += [(k * k, 1, 1), (k * k, -1, 1)]
        factors += [4 / (size * square)] * 2
    return [f * integral for f, integral in zip(factors, cels(ctx, k, parameters), strict=True)]


def _upper_half_slopes(ctx: Any, place: tuple[Any, ...]) -> tuple[Any, Any, Any]:
    """Return the gradient of `_upper_half`."""
    x, y, z, gap = place
    s, height = ctx.sqrt(x * x + y * y), ctx.fabs(z)
    rho = ctx.sqrt(s * s + height * height)
    if ctx is not FLOAT and rho == 0:
        return rho, rho, ctx.mpf(3) / 4
    shell = gap * (1 + s) - height * height
    shell = ctx.where(shell > 0, shell, 0 * shell)
    c, n = height / rho, s / rho
    minus, plus, ring, turned = _integrals(ctx, s, height, gap, rho, cubes=True)
    steep = c / (2 * ctx.pi) * ring + (((1 - rho) * minus + (1 + rho) * plus) / (4 * ctx.pi) - 0.5) / (
        rho * rho
    )
    steep = ctx.where(height < FLAT if ctx is FLOAT else height == 0, 0 * steep, steep)
    turn = -shell / (4 * ctx.pi) * turned / rho  # (du / d theta) / rho
    out, up = n * steep + c * turn, c * steep - n * turn
    axis = s == 0
    out = ctx.where(z < 0, -out, out) / ctx.where(axis, 1 + 0 * s, s)
    return out * x, out * y, up
