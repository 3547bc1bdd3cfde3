"""Corner powers of the plane: r^alpha sin(alpha theta) and r^alpha cos(alpha theta) about an apex.

They are the leading solutions at a corner of opening w: sin with alpha = pi/w vanishes on both sides, cos
with alpha = pi/w has no flux through them, and alpha = pi/(2 w) serves a corner where the conditions change
(w = pi: a change in the middle of a straight side, alpha = 1/2). Unless alpha is whole, theta needs a branch
cut: a ray from the apex at the angle `cut`, where theta runs through (cut - 2 pi, cut].
"""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any, Literal

import numpy as np

from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.combinations import combined
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, power, rational, show
from laplace_verify.fields.motions import show_point
from laplace_verify.fields.polynomials import Polynomial
from laplace_verify.fields.singular import Cut, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["Wedge", "wedge"]

DEFAULT_CUT = 7 * math.pi / 4
EIGHTH = math.pi / 4
# A point meant to lie on a lip may be off by the rounding of its coordinates, or by this angle.
LIP_ANGLE = 1e-9
LIP_ROUNDING = 128 * np.finfo(np.float64).eps
DIAGONALS = (
    (1.0, 0.0),
    (1.0, 1.0),
    (0.0, 1.0),
    (-1.0, 1.0),
    (-1.0, 0.0),
    (-1.0, -1.0),
    (0.0, -1.0),
    (1.0, -1.0),
)


@registered("wedge")
@dataclass(frozen=True, slots=True, kw_only=True)
class Wedge(Field):
    """u = r^alpha sin(alpha theta) or cos, theta in (cut - 2 pi, cut]; `wedge` makes one."""

    alpha: Exact
    part: Literal["sin", "cos"] = "sin"
    cut: Exact = DEFAULT_CUT
    apex: tuple[Exact, ...] = (0, 0)

    def __post_init__(self) -> None:
        """Check every parameter."""
        object.__setattr__(self, "alpha", exact(self.alpha, "alpha"))
        object.__setattr__(self, "cut", exact(self.cut, "cut"))
        object.__setattr__(self, "apex", exact_point(self.apex, "apex", (2,)))
        if not self.alpha:
            raise FieldError("alpha must not be 0; for a constant use fields.affine((0, 0), constant)")
        if self.part not in ("sin", "cos"):
            raise FieldError(f'part must be "sin" or "cos", got {self.part!r}')
        if not abs(float(self.cut)) <= 4 * math.pi + 1e-9:
            raise FieldError(f"cut is an angle in radians between -4 pi and 4 pi, got {self.cut}")

    @property
    def dim(self) -> int:
        """Two."""
        return 2

    @property
    def whole(self) -> bool:
        """Whether alpha is a whole number: then there is no cut."""
        return rational(self.alpha).denominator == 1

    @property
    def degree(self) -> int | None:
        """Alpha if it is a positive whole number: then u is a polynomial."""
        return int(self.alpha) if self.whole and self.alpha > 0 else None

    @property
    def growth(self) -> float:
        """The exponent alpha."""
        return float(self.alpha)

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The apex, a pole if alpha < 0; nothing if u is a polynomial."""
        if self.degree is not None:
            return ()
        point = tuple(float(c) for c in self.apex)
        kind: Literal["power", "pole"] = "power" if self.alpha > 0 else "pole"
        return (Singularity(point=point, exponent=float(self.alpha), kind=kind),)

    @property
    def cuts(self) -> tuple[Cut, ...]:
        """The ray from the apex at the angle `cut`, unless alpha is whole."""
        if self.whole:
            return ()
        x, y = (float(c) for c in self.apex)
        return (Cut(start=(x, y), direction=self._direction()),)

    @property
    def formula(self) -> str:
        """Such as ``r^(2/3) sin(2/3 theta)``."""
        alpha = show(self.alpha)
        about = f", about {show_point(self.apex)}" if any(self.apex) else ""
        text = (
            f"r^({alpha}) {self.part}({alpha} theta)"
            if not self.whole
            else f"r^{alpha} {self.part}({alpha} theta)"
        )
        return f"[{text}{about}]" if about else text

    def _eighths(self) -> int | None:
        """Return the cut as a multiple of pi/4 if it is one to rounding, else None."""
        eighths = round(float(self.cut) / EIGHTH)
        near = abs(float(self.cut) - eighths * EIGHTH) <= 4e-16 * max(1, abs(eighths))
        return eighths if near else None

    def _direction(self) -> tuple[float, float]:
        """Return the unit vector of the cut, exact along the axes."""
        eighths = self._eighths()
        if eighths is None:
            return math.cos(float(self.cut)), math.sin(float(self.cut))
        dx, dy = DIAGONALS[eighths % 8]
        length = math.hypot(dx, dy)
        return dx / length, dy / length

    def _polar(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, Any]:
        """Return r and theta.

        atan2 is accurate near the axes; whole turns put it into (cut - 2 pi, cut]. On a lip rounding must not
        decide: there the turns are those that bring theta nearest to the end which `side` names.
        """
        dx, dy = (offset(ctx, c, p) for c, p in zip(x, self.apex, strict=True))
        r, theta = ctx.hypot(dx, dy), ctx.atan2(dy, dx)
        if self.whole:
            return r, theta
        eighths = self._eighths()
        cut = ctx.number(self.cut) if eighths is None else eighths * ctx.pi / 4
        floor = np.floor if ctx is FLOAT else ctx.floor
        turns = floor((cut - theta) / (2 * ctx.pi))
        if side is not None:
            ex, ey = self._direction()
            size = abs(dx) + abs(dy)
            rounding = LIP_ROUNDING * (size + sum(abs(float(c)) for c in self.apex))
            lip = (
                (abs(ex * dy - ey * dx) <= LIP_ANGLE * size + rounding)
                & (ex * dx + ey * dy >= 0)
                & (side != 0)
            )
            end = ctx.where(side > 0, cut - 2 * ctx.pi, cut)
            turns = ctx.where(lip, floor((end - theta) / (2 * ctx.pi) + 0.5), turns)
        return r, theta + 2 * ctx.pi * turns

    def _polynomial(self, degree: int) -> Polynomial:
        """Return u for a whole alpha > 0: the rounding of alpha theta would cost alpha pi/2 units."""
        return Polynomial(degree=degree, part="im" if self.part == "sin" else "re", centre=self.apex)

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        if self.degree is not None:
            return self._polynomial(self.degree)._value(ctx, x, side)
        r, theta = self._polar(ctx, x, side)
        alpha = ctx.number(self.alpha)
        return r**alpha * (ctx.sin(alpha * theta) if self.part == "sin" else ctx.cos(alpha * theta))

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        """Return the parts of f' = alpha z^{alpha - 1}: u_x = Re f', u_y = -Im f' for u = Re f."""
        if self.degree is not None:
            return self._polynomial(self.degree)._gradient(ctx, x, side)
        r, theta = self._polar(ctx, x, side)
        less = rational(self.alpha) - 1
        size = ctx.number(self.alpha) * power(ctx, r, less)
        turn = ctx.number(less) * theta
        re, im = size * ctx.cos(turn), size * ctx.sin(turn)
        return (im, re) if self.part == "sin" else (re, -im)

    def conjugate(self) -> Field:
        """Return the sin part for the cos part, and minus the cos part for the sin part."""
        if self.part == "cos":
            return dataclasses.replace(self, part="sin")
        return combined((-1, dataclasses.replace(self, part="cos")))


def wedge(
    alpha: Number,
    part: Literal["sin", "cos"] = "sin",
    cut: Number = DEFAULT_CUT,
    apex: Iterable[Number] = (0, 0),
) -> Wedge:
    """Return u = r^alpha sin(alpha theta) or r^alpha cos(alpha theta), theta in (cut - 2 pi, cut].

    Parameters
    ----------
    alpha : number
        Exponent, not 0; ``"2/3"`` or a Fraction is exact. A whole number gives a polynomial (or, below 0, a
        pole) without cut; any other positive one a singular point at the apex, whose gradient is infinite
        there if alpha < 1.
    part : {"sin", "cos"}
    cut : number
        Angle in radians of the ray where theta jumps by 2 pi; it must lie outside the domain or on a slit.
        The default 7 pi/4 bisects the missing quadrant of an L-shape, and suits a sector of opening up to 7
        pi/4 and the half-plane y > 0. For a wider sector give pi + opening/2; for a slit along the positive
        x axis 2 pi, where ``side=+1`` is the lip theta = 0 and ``side=-1`` the lip theta = 2 pi.
    apex : tuple of two numbers

    Examples
    --------
    >>> u = wedge("2/3")
    >>> u.value([[1.0, 0.0], [0.0, 1.0], [-1.0, 0.0]]).round(6).tolist()
    [0.0, 0.866025, 0.866025]
    >>> import math
    >>> wedge(0.5, cut=2 * math.pi).value([[4.0, 0.0], [4.0, 0.0]], side=[1, -1]).round(12).tolist()
    [0.0, 0.0]
    >>> wedge(0.5, "cos", cut=2 * math.pi).value([[4.0, 0.0], [4.0, 0.0]], side=[1, -1]).tolist()
    [2.0, -2.0]

    Raises
    ------
    FieldError
        If a parameter is out of range.
    """
    return Wedge(alpha=alpha, part=part, cut=cut, apex=apex)  # type: ignore[arg-type]  # made exact
