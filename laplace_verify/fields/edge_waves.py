"""Waves along an edge: I_a(k r) sin(a theta) or cos(a theta), times sin or cos of k z.

Separation in cylindrical coordinates about the edge: u = f(r) T(theta) Z(z) with Z'' = -k^2 Z and T'' = -a^2
T leaves r^2 f'' + r f' = (k^2 r^2 + a^2) f, whose solution without a pole is the modified Bessel function
I_a(k r) ~ r^a (NIST DLMF 10.25, from memory, unchecked). It is divided by its value at a reference radius, by
scaled functions, so that nothing overflows. With I_a' = (I_{a-1} + I_{a+1})/2 and 2 a I_a/(k r) = I_{a-1} -
I_{a+1} the derivatives of I_a sin(a theta) are

    d/dx = k/2 [ I_{a-1} sin((a-1) theta) + I_{a+1} sin((a+1) theta) ],
    d/dy = k/2 [ I_{a-1} cos((a-1) theta) - I_{a+1} cos((a+1) theta) ],

and likewise for the cosine (derived here).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any, Literal

import numpy as np
from scipy import special

from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.along_z import half_planes, lines_along_z
from laplace_verify.fields.base import Field
from laplace_verify.fields.edges import Line
from laplace_verify.fields.exact import Exact, exact, rational, show
from laplace_verify.fields.sheets import Fan
from laplace_verify.fields.specs import registered
from laplace_verify.fields.wedges import DEFAULT_CUT, Wedge

__all__ = ["EdgeWave", "edge_wave"]

FARTHEST = 500.0  # argument up to which I_a itself is a float64 with room to spare


@registered("edge-wave")
@dataclass(frozen=True, slots=True, kw_only=True)
class EdgeWave(Field):
    """I_alpha(k r)/I_alpha(k radius) part(alpha theta) wave(k z); `edge_wave` makes one."""

    alpha: Exact
    k: Exact
    radius: Exact = 1
    part: Literal["sin", "cos"] = "sin"
    wave: Literal["sin", "cos"] = "cos"
    cut: Exact = DEFAULT_CUT

    def __post_init__(self) -> None:
        """Check every parameter."""
        for name in ("alpha", "k", "radius"):
            number = exact(getattr(self, name), name)
            if not number > 0:
                raise FieldError(f"{name} must be positive, got {show(number)}")
            object.__setattr__(self, name, number)
        object.__setattr__(self, "cut", self._plane().cut)
        if self.wave not in ("sin", "cos"):
            raise FieldError(f'wave must be "sin" or "cos", got {self.wave!r}')

    def _plane(self) -> Wedge:
        """Return the plane field with the same angle: r^alpha sin or cos of alpha theta."""
        return Wedge(alpha=self.alpha, part=self.part, cut=self.cut)

    @property
    def dim(self) -> int:
        """Three."""
        return 3

    @property
    def formula(self) -> str:
        """Such as ``I_{2/3}(2 r)/I_{2/3}(2) sin(2/3 theta) cos(2 z)``."""
        a, k = show(self.alpha), show(self.k)
        below = show(exact(rational(self.k) * rational(self.radius), "k radius"))
        return f"I_{{{a}}}({k} r)/I_{{{a}}}({below}) {self.part}({a} theta) {self.wave}({k} z)"

    @property
    def growth(self) -> float:
        """It grows exponentially."""
        return math.inf

    @property
    def edges(self) -> tuple[Line, ...]:
        """The z axis, unless alpha is a whole number."""
        return lines_along_z(self._plane().singularities)

    @property
    def sheets(self) -> tuple[Fan, ...]:
        """The half-plane where theta jumps, unless alpha is a whole number."""
        return half_planes(self._plane().cuts)

    def _radial(self, ctx: Any, shift: int, r: Any) -> Any:
        """Return I_{alpha + shift}(k r)/I_alpha(k radius)."""
        k, radius = ctx.number(self.k), ctx.number(self.radius)
        order, base = ctx.number(rational(self.alpha) + shift), ctx.number(self.alpha)
        if ctx is FLOAT:
            return _scaled(order, k * r) / _scaled(base, k * radius) * ctx.exp(k * (r - radius))
        return ctx.besseli(order, k * r) / ctx.besseli(base, k * radius)

    def _waves(self, ctx: Any, z: Any) -> tuple[Any, Any]:
        """Return the wave along z and its derivative."""
        k = ctx.number(self.k)
        sine, cosine = ctx.sin(k * z), ctx.cos(k * z)
        return (sine, k * cosine) if self.wave == "sin" else (cosine, -k * sine)

    def _around(self, ctx: Any, order: Any, theta: Any, part: str) -> Any:
        return ctx.sin(order * theta) if part == "sin" else ctx.cos(order * theta)

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        r, theta = self._plane()._polar(ctx, x[:2], side)
        around = self._around(ctx, ctx.number(self.alpha), theta, self.part)
        return self._radial(ctx, 0, r) * around * self._waves(ctx, x[2])[0]

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        """Return the derivatives by the formulas of the module."""
        r, theta = self._plane()._polar(ctx, x[:2], side)
        wave, slope = self._waves(ctx, x[2])
        alpha = ctx.number(self.alpha)
        half = ctx.number(self.k) * wave / 2
        down, up = half * self._radial(ctx, -1, r), half * self._radial(ctx, 1, r)
        other = "cos" if self.part == "sin" else "sin"
        sign = 1 if self.part == "sin" else -1
        along_x = [
            size * self._around(ctx, alpha + shift, theta, self.part) for size, shift in ((down, -1), (up, 1))
        ]
        along_y = [
            size * self._around(ctx, alpha + shift, theta, other) for size, shift in ((down, -1), (up, 1))
        ]
        along_z = slope * self._radial(ctx, 0, r) * self._around(ctx, alpha, theta, self.part)
        return along_x[0] + along_x[1], sign * (along_y[0] - along_y[1]), along_z


def _scaled(order: float, x: Any) -> Any:
    """Return I_order(x) e^{-x}.

    scipy's own scaled function loses two digits near x = 20 (seen against 30 digits); the plain one does not.
    """
    plain = np.minimum(x, FARTHEST)
    return np.where(x < FARTHEST, special.iv(order, plain) * np.exp(-plain), special.ive(order, x))


def edge_wave(
    alpha: Number,
    k: Number,
    part: Literal["sin", "cos"] = "sin",
    wave: Literal["sin", "cos"] = "cos",
    radius: Number = 1,
    cut: Number = DEFAULT_CUT,
) -> EdgeWave:
    """Return u = I_alpha(k r)/I_alpha(k radius) part(alpha theta) wave(k z) about the z axis.

    Near the axis u ~ r^alpha, as at the edge of a prism of opening pi/alpha, and the strength of the
    singularity varies along the edge.

    Parameters
    ----------
    alpha, k : number
        Exponent and wavenumber, positive.
    part, wave : {"sin", "cos"}
        In theta and along z.
    radius : number
        Where the radial factor is 1; a length.
    cut : number
        Angle of the half-plane where theta jumps, see `wedge`.

    Examples
    --------
    >>> u = edge_wave("2/3", 2)
    >>> u.value([[1.0, 0.0, 0.0], [-1.0, 0.0, 0.0]]).round(6).tolist()
    [0.0, 0.866025]

    Raises
    ------
    FieldError
        If a parameter is out of range.
    """
    return EdgeWave(alpha=alpha, k=k, part=part, wave=wave, radius=radius, cut=cut)  # type: ignore[arg-type]
