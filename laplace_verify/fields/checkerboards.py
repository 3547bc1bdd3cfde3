"""Kellogg's corner: four quadrants of conductivity R, 1, R, 1 and a solution r^gamma of any small exponent.

With phi the angle from the bisector of quadrant k (k = 0 ... 3, counter-clockwise from x, y > 0) and
c = cot(gamma pi/4),

    u_0 = r^gamma cos gamma phi,   u_1 = -c r^gamma sin gamma phi,   u_2 = -u_0,   u_3 = -u_1.

On the rays between them phi = +-pi/4: the values meet because c sin(gamma pi/4) = cos(gamma pi/4), the fluxes
if R sin(gamma pi/4) = c cos(gamma pi/4), that is R = c^2. Derived here; the relation R = cot^2(gamma pi/4) is
that of Kellogg 1974, Applicable Analysis 4, and of Morin, Nochetto & Siebert 2000, SIAM J. Numer. Anal. 38.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any

from laplace_verify.contexts import Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, show, whole
from laplace_verify.fields.motions import show_point
from laplace_verify.fields.partitions import Sectors
from laplace_verify.fields.piecewise_regions import RegionField
from laplace_verify.fields.singular import Cut, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["QuarterWave", "checkerboard", "checkerboard_ratio"]

NAMES = ("first", "second", "third", "fourth")
RAYS = ((1, 0), (0, 1), (-1, 0), (0, -1))
SIGNS = (1, -1, -1, 1)


@registered("quarter-wave")
@dataclass(frozen=True, slots=True, kw_only=True)
class QuarterWave(Field):
    """u_k of the module: the solution of one quadrant, continued to all angles but the one behind it."""

    gamma: Exact
    quadrant: int
    apex: tuple[Exact, ...] = (0, 0)

    def __post_init__(self) -> None:
        """Check every parameter."""
        object.__setattr__(self, "gamma", _gamma(self.gamma))
        object.__setattr__(self, "quadrant", whole(self.quadrant, "quadrant", 0, 3))
        object.__setattr__(self, "apex", exact_point(self.apex, "apex", (2,)))

    @property
    def dim(self) -> int:
        """Two."""
        return 2

    @property
    def growth(self) -> float:
        """The exponent gamma."""
        return float(self.gamma)

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The apex."""
        point = tuple(float(c) for c in self.apex)
        return (Singularity(point=point, exponent=float(self.gamma), kind="power"),)

    @property
    def cuts(self) -> tuple[Cut, ...]:
        """The ray opposite to the bisector."""
        x, y = (float(c) for c in self.apex)
        half = math.sqrt(0.5)
        behind = ((-half, -half), (half, -half), (half, half), (-half, half))[self.quadrant]
        return (Cut(start=(x, y), direction=behind),)

    @property
    def formula(self) -> str:
        """Such as ``-cot(1/2 pi/4) r^(1/2) sin(1/2 phi)``."""
        gamma, k = show(self.gamma), self.quadrant
        sign = "-" if SIGNS[k] < 0 else ""
        wave = f"cot({gamma} pi/4) r^({gamma}) sin" if k % 2 else f"r^({gamma}) cos"
        about = f" about {show_point(self.apex)}" if any(self.apex) else ""
        return f"{sign}{wave}({gamma} (theta - {2 * k + 1} pi/4)){about}"

    def _polar(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, Any]:
        """Return r and the angle from the bisector, which a turn by odd eighths gives without rounding pi."""
        dx, dy = (offset(ctx, c, p) for c, p in zip(x, self.apex, strict=True))
        for _ in range(self.quadrant):
            dx, dy = dy, -dx
        return ctx.hypot(dx, dy), ctx.atan2(dy - dx, dx + dy)

    def _factor(self, ctx: Any) -> Any:
        """Return the sign, times the cotangent in the second and fourth quadrant."""
        if self.quadrant % 2 == 0:
            return SIGNS[self.quadrant]
        quarter = ctx.number(self.gamma) * ctx.pi / 4
        return SIGNS[self.quadrant] * ctx.cos(quarter) / ctx.sin(quarter)

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002 - the cut lies far behind
        gamma = ctx.number(self.gamma)
        r, phi = self._polar(ctx, x)
        wave = ctx.sin(gamma * phi) if self.quadrant % 2 else ctx.cos(gamma * phi)
        return self._factor(ctx) * r**gamma * wave

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002
        """Return the gradient along and across the bisector, turned into place."""
        gamma = ctx.number(self.gamma)
        r, phi = self._polar(ctx, x)
        size = self._factor(ctx) * gamma * r ** (gamma - 1)
        re, im = size * ctx.cos((gamma - 1) * phi), size * ctx.sin((gamma - 1) * phi)
        along, across = (im, re) if self.quadrant % 2 else (re, -im)
        half = ctx.sqrt(ctx.number("1/2"))
        gx, gy = half * (along - across), half * (along + across)
        for _ in range(self.quadrant):
            gx, gy = -gy, gx
        return gx, gy


def checkerboard(gamma: Number, apex: Iterable[Number] = (0, 0)) -> RegionField:
    """Return Kellogg's solution r^gamma m(theta) for quadrants of conductivity R, 1, R, 1.

    Parameters
    ----------
    gamma
        Exponent, 0 < gamma < 2; ``checkerboard_ratio(gamma)`` is the R that goes with it.
    apex
        Where the quadrants meet. Their names are first, second, third, fourth.

    Examples
    --------
    >>> u = checkerboard("1/2")
    >>> u.value([[0.0, 0.0], [1.0, 1.0], [-1.0, 1.0], [-1.0, -1.0]]).round(6).tolist()
    [0.0, 1.189207, -0.0, -1.189207]

    Raises
    ------
    FieldError
        If gamma is out of range.
    """
    place = exact_point(apex, "apex", (2,))
    parts = tuple(QuarterWave(gamma=gamma, quadrant=k, apex=place) for k in range(4))  # type: ignore[arg-type]
    return RegionField(partition=Sectors(apex=place, rays=RAYS, names=NAMES), parts=parts)


def checkerboard_ratio(gamma: Number) -> float:
    """Return R = cot^2(gamma pi/4), the conductivity of the first and third quadrant over the others.

    >>> round(checkerboard_ratio("1/2"), 12)  # 3 + 2 sqrt 2
    5.828427124746

    Raises
    ------
    FieldError
        If gamma is out of range.
    """
    return math.tan(float(_gamma(gamma)) * math.pi / 4.0) ** -2


def _gamma(gamma: Any) -> Exact:
    """Return the exponent, 0 < gamma < 2."""
    value = exact(gamma, "gamma")
    if not 0 < value < 2:
        raise FieldError(f"gamma must lie between 0 and 2, got {show(value)}")
    return value
