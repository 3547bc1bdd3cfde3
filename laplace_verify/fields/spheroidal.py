"""Potentials around a spheroid with semi-axes (a, a, c): charge, dipole data, flow past it; the round plate.

The confocal spheroid through a point has the semi-axes p (equatorial) and t (polar),

    p^2 = t^2 + s f^2,    f^2 = |a^2 - c^2|,    s = +1 oblate, -1 prolate, 0 sphere,

and nu = z/t is the sine of the eccentric latitude. With D = t^2 + s f^2 nu^2 = p^2 nu^2 + t^2 (1 - nu^2),

    grad t = (p^2/D) (x t/p^2, y t/p^2, nu).

Legendre functions of the second kind, in closed form, as integrals over t (Kellogg 1929, ch. VII; Lamb 1932,
art. 103-114, both from memory, unchecked; normalised and derived here):

    charge     U = int_t^oo dt/p^2        = atan(f/t)/f,  artanh(f/t)/f = asinh(f/p)/f,  1/t
    along z    Z = int_t^oo 3 dt/(t^2 p^2) = (3/(s f^2)) (1/t - U),          z Z ~ z/r^3
    across z   X = int_t^oo 3 dt/p^4       = (3/(2 s f^2)) (U - t/p^2),      x X ~ x/r^3

Fields: U/U_0 is 1 on the spheroid, its charge is the capacity 1/U_0. z Z/Z_0 and x X/X_0 are z and x on it.
The flow along z is z + z Z/(2 X_0), that along x is x + x X/(X_0 + Z_0), with no flux through the spheroid
(added mass per displaced mass: Z_0/(2 X_0) and X_0/(X_0 + Z_0)). c = 0 is a round plate: t and p then have
their focal ring at its rim, where u ~ sqrt(r).

In float64 t or p is the larger root of its quadratic, the other follows without cancellation; near infinity
Z and X are power series in f/t.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields._square_gaps import square_gap
from laplace_verify.fields.base import Field
from laplace_verify.fields.edges import Ring
from laplace_verify.fields.exact import Exact, exact_point, offset, rational
from laplace_verify.fields.joukowski import _distance, focus
from laplace_verify.fields.motions import show_point
from laplace_verify.fields.sheets import Sheet
from laplace_verify.fields.specs import registered

__all__ = ["SpheroidField", "spheroid_data", "spheroid_flow", "spheroid_potential"]

SHORT = 0.5  # largest f/t for which series are used
TERMS = 30  # 0.25^30 = 1e-18
INSIDE = 0.999  # points this deep inside the spheroid are refused


@dataclass(frozen=True, slots=True, eq=False)
class _Place:
    """Spheroidal coordinates of a point: offsets, semi-axes t and p, nu, D, and f."""

    x: Any
    y: Any
    z: Any
    t: Any
    p: Any
    nu: Any
    d: Any
    f: Any
    sign: int


@registered("spheroid")
@dataclass(frozen=True, slots=True, kw_only=True)
class SpheroidField(Field):
    """A potential around a spheroid; made by `spheroid_potential`, `spheroid_data` and `spheroid_flow`.

    `what` is "charge", "x", "y", "z" (equal to that coordinate on the spheroid, decaying) or "flow-x",
    "flow-y", "flow-z" (that coordinate far away, no flux through the spheroid).
    """

    semi_axes: tuple[Exact, ...]
    what: str
    centre: tuple[Exact, ...] = (0, 0, 0)

    def __post_init__(self) -> None:
        """Check body and kind."""
        axes = exact_point(self.semi_axes, "semi_axes", (2, 3))
        axes = axes if len(axes) == 3 else (axes[0], axes[0], axes[1])
        if axes[0] != axes[1] or not (axes[0] > 0 and axes[2] >= 0):
            raise FieldError(
                f"semi_axes must be (a, c) or (a, a, c) with a > 0, c >= 0, got {show_point(axes)}"
            )
        object.__setattr__(self, "semi_axes", axes)
        object.__setattr__(self, "centre", exact_point(self.centre, "centre", (3,)))
        if self.what not in ("charge", "x", "y", "z", "flow-x", "flow-y", "flow-z"):
            raise FieldError(f"what must be charge, x, y, z, flow-x, flow-y or flow-z, got {self.what!r}")
        if axes[2] == 0 and self.what in ("z", "flow-x", "flow-y"):
            raise FieldError(
                f"a plate without thickness does not feel {self.what!r}: z is 0 on it, and the flow along it "
                "passes undisturbed"
            )

    @property
    def dim(self) -> int:
        """Three."""
        return 3

    @property
    def growth(self) -> float:
        """Exponent far away: -1 for the charge, -2 for data, 1 for flows."""
        return {"c": -1.0, "f": 1.0}.get(self.what[0], -2.0)

    @property
    def formula(self) -> str:
        """The field in words."""
        body = f"the spheroid {show_point(self.semi_axes)} about {show_point(self.centre)}"
        if self.what == "charge":
            return f"[potential 1 on {body}]"
        if self.what.startswith("flow"):
            return f"[potential of the flow along {self.what[-1]} past {body}]"
        return f"[potential {self.what} on {body}]"

    @property
    def thin(self) -> bool:
        """Whether the spheroid is a plate."""
        return self.semi_axes[2] == 0

    @property
    def shape_sign(self) -> int:
        """+1 oblate, -1 prolate, 0 sphere."""
        a, c = rational(self.semi_axes[0]), rational(self.semi_axes[2])
        return (a > c) - (a < c)

    @property
    def edges(self) -> tuple[Ring, ...]:
        """The rim of a plate, where u ~ sqrt(r)."""
        if not self.thin:
            return ()
        return (
            Ring(centre=self._middle(), axis=(0.0, 0.0, 1.0), radius=float(self.semi_axes[0]), exponent=0.5),
        )

    @property
    def sheets(self) -> tuple[Sheet, ...]:
        """The focal disc of an oblate spheroid, a plate itself."""
        if self.shape_sign <= 0:
            return ()
        f = float(focus(self.semi_axes[0], self.semi_axes[2]))
        jump = self.what.endswith("z")
        return (Sheet(centre=self._middle(), normal=(0.0, 0.0, 1.0), radius=f, jump=jump),)

    def _middle(self) -> tuple[float, float, float]:
        x, y, z = (float(p) for p in self.centre)
        return x, y, z

    def _valid(self, points: Array) -> BoolArray:
        """Return which points are not inside the spheroid."""
        axes = np.array([float(axis) for axis in self.semi_axes])
        scaled = (points - self._middle()) / np.where(axes > 0.0, axes, 1.0)
        outside: BoolArray = (scaled**2).sum(axis=1) >= INSIDE**2
        return outside | self.thin

    # -- coordinates and integrals ------------------------------------------------------------------------

    def _place(self, ctx: Any, x: tuple[Any, ...], side: Any) -> _Place:
        """Return the spheroidal coordinates."""
        dx, dy, dz = (offset(ctx, c, m) for c, m in zip(x, self.centre, strict=True))
        a, c, sign = self.semi_axes[0], self.semi_axes[2], self.shape_sign
        rho = ctx.hypot(dx, dy)
        if sign == 0:
            t = ctx.hypot(rho, dz)
            return _Place(dx, dy, dz, t, t, dz / t, t * t, 0 * t, 0)
        f = _distance(ctx, a, c)
        high = float(f) if ctx is FLOAT else f
        if sign > 0:  # the focal ring is in the equatorial plane
            b = dz * dz - square_gap(ctx, f, x[:2], self.centre[:2])
            e = ctx.hypot(b, 2 * high * dz)
            t, nu = _smaller(ctx, b, e, dz, high, side)
            p = ctx.hypot(t, high)
            return _Place(dx, dy, dz, t, p, nu, e, high, 1)
        near, far = (ctx.hypot(rho, offset(ctx, dz, q) if ctx is FLOAT else dz - q) for q in (f, -f))
        t = (near + far) / 2
        p = _equatorial(ctx, rho, dz, high)
        return _Place(dx, dy, dz, t, p, dz / t, near * far, high, -1)

    def _surface(self, ctx: Any) -> _Place:
        """Return t, p and f of the spheroid itself."""
        a, c = (ctx.number(v) for v in (self.semi_axes[0], self.semi_axes[2]))
        f = ctx.number(0) if self.shape_sign == 0 else _distance(ctx, self.semi_axes[0], self.semi_axes[2])
        f = float(f) if ctx is FLOAT else f
        if ctx is FLOAT:
            a, c, f = np.float64(a), np.float64(c), np.float64(f)
        return _Place(0, 0, 0, c, a, 0, 0, f, self.shape_sign)

    def _factor(self, ctx: Any) -> Any:
        """Return the coefficient of U, x X or z Z in the field."""
        at = self._surface(ctx)
        if self.what == "charge":
            return 1 / charge(ctx, at)
        if self.what == "flow-z":
            return 1 / (2 * across(ctx, at))
        if self.what in ("flow-x", "flow-y"):
            return 1 / (across(ctx, at) + along(ctx, at))
        return 1 / (along(ctx, at) if self.what == "z" else across(ctx, at))

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        at, k = self._place(ctx, x, side), self._factor(ctx)
        if self.what == "charge":
            return k * charge(ctx, at)
        name = self.what[-1]
        lead = {"x": at.x, "y": at.y, "z": at.z}[name]
        total = k * (z_along(ctx, at) if name == "z" else lead * across(ctx, at))
        return lead + total if self.what.startswith("flow") else total

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        at, k = self._place(ctx, x, side), self._factor(ctx)
        d, square = at.d, at.p * at.p
        fx, fy = at.x * at.t / square, at.y * at.t / square
        if self.what == "charge":
            return tuple(-k * part / d for part in (fx, fy, at.nu))
        name = self.what[-1]
        flow = 1 if self.what.startswith("flow") else 0
        if name == "z":
            bend = -3 * k * at.nu / (square * d)
            return bend * at.x, bend * at.y, flow + k * z_slope(ctx, at)
        lead = at.x if name == "x" else at.y
        bend = -3 * k * lead / (square * d)
        parts = [bend * fx, bend * fy, bend * at.nu]
        axis = 0 if name == "x" else 1
        parts[axis] = parts[axis] + (flow + k * across(ctx, at))
        return tuple(parts)


def _smaller(ctx: Any, b: Any, e: Any, z: Any, f: Any, side: Any) -> tuple[Any, Any]:
    """Return t and nu = z/t of oblate coordinates: 2 t^2 = E + b, 2 f^2 nu^2 = E - b, t nu = z."""
    if ctx is FLOAT:
        sign = np.where(z < 0.0, -1.0, 1.0)
        if side is not None:
            sign = np.where(
                (z == 0.0) & (np.asarray(side) != 0), np.where(np.asarray(side) < 0, -1.0, 1.0), sign
            )
        outer = b > 0.0
        large = np.sqrt((e + np.abs(b)) / 2.0)
        safe = np.where(large > 0.0, large, 1.0)
        t = np.where(outer, large, f * np.abs(z) / safe)
        nu = np.where(outer, z / safe, sign * large / f)
        return t, nu
    if b > 0:
        t = ctx.sqrt((e + b) / 2)
        return t, z / t
    below = z < 0 or (z == 0 and side is not None and side < 0)
    large = ctx.sqrt((e - b) / 2)
    return (f * abs(z) / large if large else large), (-large if below else large) / f


def _equatorial(ctx: Any, rho: Any, z: Any, f: Any) -> Any:
    """Return p of prolate coordinates: 2 p^2 = E + b, E^2 = b^2 + 4 f^2 rho^2, b = r^2 - f^2."""
    b = rho * rho + (z - f) * (z + f)
    e = ctx.hypot(b, 2 * f * rho)
    if ctx is FLOAT:
        large = np.sqrt((e + np.abs(b)) / 2.0)
        return np.where(b > 0.0, large, f * rho / np.where(large > 0.0, large, 1.0))
    large = ctx.sqrt((e + abs(b)) / 2)
    return large if b > 0 else f * rho / large


def _argument(ctx: Any, at: _Place) -> Any:
    """Return f U."""
    return ctx.atan2(at.f, at.t) if at.sign > 0 else ctx.asinh(at.f / at.p)


def charge(ctx: Any, at: _Place) -> Any:
    """Return U."""
    return 1 / at.t if at.sign == 0 else _argument(ctx, at) / at.f


def _series(q2: Any, factor: Any) -> Any:
    """Return sum_k factor(k) q2^k by Horner."""
    total = 0 * q2
    for k in range(TERMS, -1, -1):
        total = total * q2 + factor(k)
    return total


def along(ctx: Any, at: _Place) -> Any:
    """Return Z = (3/t^3) sum (-s q^2)^k/(2k + 3), q = f/t."""
    if at.sign == 0:
        return 1 / at.t**3
    closed = 3 * (at.f / at.t - _argument(ctx, at)) / (at.sign * at.f**3)
    if ctx is not FLOAT:
        return closed
    q2 = -at.sign * np.minimum(at.f / at.t, SHORT) ** 2
    short = _series(q2, lambda k: 3.0 / (2 * k + 3)) / at.t**3
    return np.where(at.f / at.t < SHORT, short, closed)


def across(ctx: Any, at: _Place) -> Any:
    """Return X = (3/t^3) sum (-s q^2)^k (k + 1)/(2k + 3), q = f/t."""
    if at.sign == 0:
        return 1 / at.t**3
    closed = 3 * (_argument(ctx, at) - at.f * at.t / at.p**2) / (2 * at.sign * at.f**3)
    if ctx is not FLOAT:
        return closed
    with np.errstate(divide="ignore"):
        q = at.f / at.t
    q2 = -at.sign * np.minimum(q, SHORT) ** 2
    short = _series(q2, lambda k: 3.0 * (k + 1) / (2 * k + 3)) / np.maximum(at.t, at.f) ** 3
    return np.where(q < SHORT, short, closed)


def z_along(ctx: Any, at: _Place) -> Any:
    """Return z Z, also where t = 0."""
    if at.sign == 0:
        return at.z / at.t**3
    if ctx is not FLOAT and at.sign < 0:
        return at.z * along(ctx, at)
    closed = 3 * (at.f * at.nu - at.z * _argument(ctx, at)) / (at.sign * at.f**3)
    if ctx is not FLOAT:
        return closed
    return np.where(at.f < SHORT * at.t, at.z * along(ctx, at), closed)


def z_slope(ctx: Any, at: _Place) -> Any:
    """Return d(z Z)/dz = Z - 3 nu^2/(t D) = (3 s/f^2) (t/D - U), also where t = 0."""
    if at.sign == 0:
        return (1 - 3 * at.nu**2) / at.t**3
    closed = 3 * at.sign * (at.t / at.d - _argument(ctx, at) / at.f) / at.f**2
    if ctx is not FLOAT:
        return closed
    with np.errstate(divide="ignore", invalid="ignore"):
        far = along(ctx, at) - 3 * at.nu**2 / (at.t * at.d)
    return np.where(at.f < SHORT * at.t, far, closed)


def spheroid_potential(semi_axes: Iterable[Number], centre: Iterable[Number] = (0, 0, 0)) -> SpheroidField:
    """Return the potential that is 1 on a spheroid (a, a, c), or (a, c) in short, and decays far away.

    It is C/r + O(1/r^3) far away, C the capacity: a plate (c = 0) of radius a has C = 2 a/pi.

    >>> spheroid_potential((1, 0)).value([[0.0, 0.0, 1.0]]).round(12).tolist()  # a charged plate
    [0.5]

    Raises
    ------
    FieldError
        If the semi-axes are not (a, c) or (a, a, c) with a > 0, c >= 0.
    """
    return SpheroidField(semi_axes=semi_axes, what="charge", centre=centre)  # type: ignore[arg-type]  # made exact


def spheroid_data(
    axis: str, semi_axes: Iterable[Number], centre: Iterable[Number] = (0, 0, 0)
) -> SpheroidField:
    """Return the decaying potential that equals a coordinate, "x", "y" or "z", on a spheroid.

    >>> spheroid_data("z", (1, 2)).value([[0.0, 0.0, 2.0], [0.0, 0.0, -2.0]]).round(12).tolist()
    [2.0, -2.0]

    Raises
    ------
    FieldError
        If the axis is unknown, or z is asked for on a plate.
    """
    return SpheroidField(semi_axes=semi_axes, what=str(axis), centre=centre)  # type: ignore[arg-type]


def spheroid_flow(
    axis: str, semi_axes: Iterable[Number], centre: Iterable[Number] = (0, 0, 0)
) -> SpheroidField:
    """Return the potential of the unit flow along "x", "y" or "z" past a spheroid: no flux through it.

    Past a ball it is x + a^3 x/(2 r^3):

    >>> spheroid_flow("x", (1, 1)).value([[1.0, 0.0, 0.0], [2.0, 0.0, 0.0]]).round(12).tolist()
    [1.5, 2.125]

    Raises
    ------
    FieldError
        If the axis is unknown, or along a plate.
    """
    return SpheroidField(semi_axes=semi_axes, what=f"flow-{axis}", centre=centre)  # type: ignore[arg-type]
