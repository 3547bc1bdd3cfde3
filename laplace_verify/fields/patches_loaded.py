"""A half-space z > 0 with a loaded rectangle or disc on its surface: u = 1, or the inflow -du/dz = 1, on it.

With the solid angle W under which the patch is seen and V = integral over the patch of dA/R,

    u = W/(2 pi)   is 1 on the patch and 0 on the rest of z = 0 (Poisson's integral),
    u = V/(2 pi)   has -du/dz = W/(2 pi): 1 on the patch, 0 beside it,     dV/dz = -W.

*Rectangle.* X_i = x_i - x, Y_j = y_j - y, R^2 = X^2 + Y^2 + z^2, signs (-1)^(i+j):

    W = sum +- atan2(X Y, z R),      V = sum +- [ X asinh(Y/hypot(X, z)) + Y asinh(X/hypot(Y, z)) ] - z W

(MacMillan 1930, The Theory of the Potential, section 43; Kellogg 1929, ch. III; both from memory, unchecked).
Differences over a pair of corners on one side are taken in forms that stay finite on the prolongations of
the edges (derived here).

*Disc* of radius a, r from its axis, M^2 = (a + r)^2 + z^2, k' = hypot(a - r, z)/M, b = (a - r)/(a + r), with
Bulirsch's cel:

    W   = pi (1 + sgn(a - r)) - (4 a z/((a + r) M)) cel(k', b^2, 1, b)
    W_z = -(2/M) [K + (a^2 - r^2 - z^2)/M^2 cel(k', k'^2, 1, 1)],   W_r = -(4 a z/M^3) cel(k', k'^2, -1, 1)
    V   = 2 M E + (2/M) (a^2 - r^2 - z^2) K - z W,                 V_r = -(4 a/M) cel(k', 1, -1, 1)

(Paxton 1959, Solid angle calculation for a circular disk, Rev. Sci. Instrum. 30, 254, from memory,
unchecked; the forms in cel derived here). At the edge the value jumps (u) or the slope is infinite like log
r (inflow).
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields._end_gaps import TINY, Gaps, gaps_to
from laplace_verify.fields._prism_near import Distances, distances, face, face_slopes, solid_angle
from laplace_verify.fields._square_gaps import square_gap
from laplace_verify.fields.base import Field
from laplace_verify.fields.complete_elliptic import cel
from laplace_verify.fields.edges import Edge, Ring
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, show
from laplace_verify.fields.motions import show_point
from laplace_verify.fields.specs import registered

__all__ = ["LoadedDisc", "LoadedRectangle", "loaded_disc", "loaded_rectangle"]


class _Loaded(Field):
    """What loaded patches share; a subclass has `given` (abstract)."""

    __slots__ = ()

    given: str

    def _check_given(self) -> None:
        if self.given not in ("value", "inflow"):
            raise FieldError(f'given must be "value" or "inflow", got {self.given!r}')

    @property
    def dim(self) -> int:
        """Three."""
        return 3

    @property
    def growth(self) -> float:
        """Decays like 1/r; on the way to infinity along the plane the value even faster."""
        return -2.0 if self.given == "value" else -1.0

    @property
    def jump(self) -> float:
        """Exponent at the edge: a jump of the value, or of the flux (r log r)."""
        return 0.0 if self.given == "value" else 1.0

    def _valid(self, points: Array) -> BoolArray:
        """Return which points are in the closed half-space."""
        valid: BoolArray = points[:, 2] >= 0.0
        return valid


@registered("loaded-rectangle")
@dataclass(frozen=True, slots=True, kw_only=True)
class LoadedRectangle(_Loaded):
    """u = W/(2 pi) or V/(2 pi) of a rectangle; `loaded_rectangle` makes one."""

    lower: tuple[Exact, ...]
    upper: tuple[Exact, ...]
    given: str = "value"

    def __post_init__(self) -> None:
        """Check the rectangle."""
        object.__setattr__(self, "lower", exact_point(self.lower, "lower", (2,)))
        object.__setattr__(self, "upper", exact_point(self.upper, "upper", (2,)))
        self._check_given()
        if not all(a < b for a, b in zip(self.lower, self.upper, strict=True)):
            raise FieldError(
                f"lower must be below upper, got {show_point(self.lower)} and {show_point(self.upper)}"
            )

    @property
    def formula(self) -> str:
        """The field in words."""
        return (
            f"[half-space, {self.given} 1 on the rectangle from {show_point(self.lower)} to "
            f"{show_point(self.upper)}, 0 beside it]"
        )

    @property
    def edges(self) -> tuple[Edge, ...]:
        """The four sides."""
        (a, b), (c, d) = (tuple(float(v) for v in corner) for corner in (self.lower, self.upper))
        corners = ((a, b, 0.0), (c, b, 0.0), (c, d, 0.0), (a, d, 0.0))
        return tuple(Edge(start=corners[k], end=corners[(k + 1) % 4], exponent=self.jump) for k in range(4))

    def _corners(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Gaps, Gaps, Any, Distances]:
        """Return X_i, Y_j, z, R_ij."""
        xs, ys = (gaps_to(ctx, *ends) for ends in zip(x[:2], self.lower, self.upper, strict=True))
        return xs, ys, x[2], distances(ctx, xs, ys, x[2])

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        xs, ys, z, r = self._corners(ctx, x)
        total = face(ctx, xs, ys, z) if self.given == "inflow" else solid_angle(ctx, xs, ys, z, r)
        return total / (2 * ctx.pi)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002
        turn = 2 * ctx.pi
        xs, ys, z, r = self._corners(ctx, x)
        if self.given == "inflow":
            along = face_slopes(ctx, xs, ys, z, r)
            return along[0] / turn, along[1] / turn, -solid_angle(ctx, xs, ys, z, r) / turn
        first = [_slope(ctx, xs[i], z, ys, [r[i, 0], r[i, 1]]) for i in (0, 1)]
        second = [_slope(ctx, ys[j], z, xs, [r[0, j], r[1, j]]) for j in (0, 1)]
        down = xs[1] * first[1] - xs[0] * first[0] + ys[1] * second[1] - ys[0] * second[0]
        return z * (first[0] - first[1]) / turn, z * (second[0] - second[1]) / turn, -down / turn


def _slope(ctx: Any, across: Any, z: Any, ends: Gaps, r: list[Any]) -> Any:
    """Return (Y_1/R_1 - Y_0/R_0)/(X^2 + z^2), finite where both ends are on one side, beyond an edge."""
    low, high, length = ends
    if ctx is FLOAT or low * high > 0:
        beside = length * (high + low) / (r[0] * r[1] * (high * r[0] + low * r[1]))
        if ctx is not FLOAT:
            return beside
    else:
        beside = None
    between = (high / r[1] - low / r[0]) / (across * across + z * z)
    return between if beside is None else np.where(low * high > 0.0, beside, between)


@registered("loaded-disc")
@dataclass(frozen=True, slots=True, kw_only=True)
class LoadedDisc(_Loaded):
    """u = W/(2 pi) or V/(2 pi) of a disc; `loaded_disc` makes one."""

    radius: Exact
    given: str = "value"
    centre: tuple[Exact, ...] = (0, 0)

    def __post_init__(self) -> None:
        """Check the disc."""
        object.__setattr__(self, "radius", exact(self.radius, "radius"))
        object.__setattr__(self, "centre", exact_point(self.centre, "centre", (2,)))
        self._check_given()
        if not self.radius > 0:
            raise FieldError(f"radius must be > 0, got {show(self.radius)}")

    @property
    def formula(self) -> str:
        """The field in words."""
        return (
            f"[half-space, {self.given} 1 on the disc of radius {show(self.radius)} about "
            f"{show_point(self.centre)}, 0 beside it]"
        )

    @property
    def edges(self) -> tuple[Ring, ...]:
        """The rim."""
        x, y = (float(c) for c in self.centre)
        return (
            Ring(centre=(x, y, 0.0), axis=(0.0, 0.0, 1.0), radius=float(self.radius), exponent=self.jump),
        )

    def _place(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, ...]:
        """Return dx, dy, r, z, a, a - r, M, k', a^2 - r^2 - z^2."""
        dx, dy = (offset(ctx, p, q) for p, q in zip(x[:2], self.centre, strict=True))
        r, z, a = ctx.hypot(dx, dy), x[2], ctx.number(self.radius)
        inward = square_gap(ctx, self.radius, x[:2], self.centre) / (a + r)
        big = ctx.hypot(a + r, z)
        return dx, dy, r, z, a, inward, big, ctx.hypot(inward, z) / big, inward * (a + r) - z * z

    def _angle(self, ctx: Any, place: tuple[Any, ...]) -> Any:
        """Return W; b is kept off 0, where sgn(a - r) and the integral jump against each other."""
        _, _, r, z, a, inward, big, k, _ = place
        if ctx is FLOAT:
            inside = np.sign(inward)
            b = inward / (a + r)
            b = np.where(np.abs(b) < TINY, 0.0, b)
            p = np.maximum(b * b, TINY * TINY)
        else:
            inside = ctx.sign(inward)
            b = inward / (a + r)
            p = b * b if b else ctx.mpf(10) ** (-6 * ctx.dps)
        lead = 4 * a * z / ((a + r) * big)
        term = lead * cel(ctx, k, p, 1, b) if ctx is FLOAT or z else 0
        if ctx is FLOAT:
            term = np.where(z == 0.0, 0.0, term)
        return ctx.pi * (1 + inside) - term

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        place = self._place(ctx, x)
        angle = self._angle(ctx, place)
        if self.given == "value":
            return angle / (2 * ctx.pi)
        _, _, _, z, _, _, big, k, power = place
        k = self._off(ctx, k)
        first, second = cel(ctx, k, 1, 1, 1), cel(ctx, k, 1, 1, k * k)
        return (2 * big * second + 2 * power * first / big - z * angle) / (2 * ctx.pi)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002
        place = self._place(ctx, x)
        dx, dy, r, z, a, _, big, k, power = place
        turn = 2 * ctx.pi
        if self.given == "inflow":
            out = -4 * a * cel(ctx, k, 1, -1, 1) / big
            down = -self._angle(ctx, place)
        else:
            out = -4 * a * z * cel(ctx, k, k * k, -1, 1) / big**3
            down = -2 * (cel(ctx, k, 1, 1, 1) + power / big**2 * cel(ctx, k, k * k, 1, 1)) / big
        if ctx is FLOAT:
            safe = np.where(r > 0.0, r, 1.0)
            return out * (dx / safe) / turn, out * (dy / safe) / turn, down / turn
        if not r:
            return ctx.mpf(0), ctx.mpf(0), down / turn
        return out * dx / r / turn, out * dy / r / turn, down / turn

    @staticmethod
    def _off(ctx: Any, k: Any) -> Any:
        """Return k' off 0: at the rim K is infinite, but its factor vanishes."""
        if ctx is FLOAT:
            return np.maximum(k, TINY)
        return k if k else ctx.mpf(10) ** (-6 * ctx.dps)


def loaded_rectangle(
    lower: Iterable[Number], upper: Iterable[Number], given: str = "value"
) -> LoadedRectangle:
    """Return the decaying field in z > 0 with u = 1, or -du/dz = 1, on a rectangle of z = 0 and 0 beside it.

    Parameters
    ----------
    lower, upper
        Corners (x, y).
    given
        "value" (u, the solid angle over 2 pi) or "inflow" (the potential of a uniform layer over 2 pi).

    Raises
    ------
    FieldError
        If the rectangle is empty or `given` unknown.

    Examples
    --------
    >>> loaded_rectangle((-1, -1), (1, 1)).value([[0.0, 0.0, 1.0]]).round(12).tolist()  # a cube's centre
    [0.333333333333]
    """
    return LoadedRectangle(lower=lower, upper=upper, given=given)  # type: ignore[arg-type]  # made exact


def loaded_disc(radius: Number, given: str = "value", centre: Iterable[Number] = (0, 0)) -> LoadedDisc:
    """Return the decaying field in z > 0 with u = 1, or -du/dz = 1, on a disc of z = 0 and 0 beside it.

    Parameters
    ----------
    radius, centre
        Of the disc, the centre (x, y).
    given
        See `loaded_rectangle`.

    Raises
    ------
    FieldError
        If the radius is not positive or `given` unknown.

    Examples
    --------
    >>> loaded_disc(1).value([[0.0, 0.0, 1.0]]).round(12).tolist()  # 1 - z/sqrt(a^2 + z^2)
    [0.292893218813]
    """
    return LoadedDisc(radius=radius, given=given, centre=centre)  # type: ignore[arg-type]  # made exact
