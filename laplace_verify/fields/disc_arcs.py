"""Disc with constant values on arcs of its rim: angles instead of an integral.

With z = (x + i y - centre) / radius, the arc from e^{i alpha} to e^{i beta}, delta = (beta - alpha) / 2,
a = z - e^{i alpha} and b = z - e^{i beta}, data 1 on the arc and 0 elsewhere give

    u = atan2( (1 - |z|^2) sin delta, Re(b conj(a) e^{-i delta}) ) / pi,

the angle under which the arc is seen from z less the half of it, because b conj(a) e^{-i delta} has the
imaginary part (1 - |z|^2) sin delta. The rim itself gives atan2(0, -+1): exactly 1 or 0. 1 - |z|^2 = -2 Re(a
e^{-i alpha}) - |a|^2 is formed from the nearest jump, and the jumps are held in two floats each, so that
nothing cancels at any distance. The gradient is u_x = Im g, u_y = Re g with g = (1/b - 1/a) / (pi radius).

References
----------
Poisson's integral; for half of the rim this is u = 1/2 + atan2(2y, 1 - x^2 - y^2) / pi. Derived here for any
arc.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any

import numpy as np

from laplace_verify.contexts import FLOAT, Number, Precise
from laplace_verify.errors import FieldError
from laplace_verify.fields.disc import DiscField
from laplace_verify.fields.exact import Exact, exact, rational, show
from laplace_verify.fields.singular import Singularity
from laplace_verify.fields.specs import registered

__all__ = ["Arcs", "DiscArcs", "arcs"]


NEAR = 0.25  # |a|^2 of a jump from which a point is seen if it is the nearest


@dataclass(frozen=True, slots=True, kw_only=True)
class Arcs:
    """Values on arcs of a circle; `arcs` makes them."""

    turns: tuple[Exact, ...]
    values: tuple[Exact, ...]

    def __post_init__(self) -> None:
        """Make everything exact and check the order.

        Raises
        ------
        FieldError
            If there are fewer than two arcs, as many values as arcs are not given, or the turns do not rise
            within one turn.
        """
        turns = tuple(exact(t, f"turns[{i}]") for i, t in enumerate(self.turns))
        values = tuple(exact(v, f"values[{i}]") for i, v in enumerate(self.values))
        if len(turns) != len(values) or len(turns) < 2:
            raise FieldError(
                f"two or more arcs need as many values as starting places, got {len(turns)} places and "
                f"{len(values)} values"
            )
        places = [rational(t) for t in turns]
        if not all(a < b for a, b in zip(places, [*places[1:], places[0] + 1], strict=True)):
            raise FieldError(
                f"turns must rise and stay within one turn, got {', '.join(show(t) for t in turns)}"
            )
        object.__setattr__(self, "turns", turns)
        object.__setattr__(self, "values", values)


def arcs(turns: Iterable[Number], values: Iterable[Number]) -> Arcs:
    """Return data values[i] from turns[i] to turns[i+1], fractions of a full turn from the x axis.

    Turns count counter-clockwise; the last arc ends where the first begins. Fractions of a turn are exact
    where radians would not be.

    >>> from laplace_verify import fields
    >>> u = fields.poisson_disc((0, 0), 1, fields.arcs((0, "1/2"), (1, 0)))  # upper half of the rim at 1
    >>> u.value([[0.0, 0.0], [0.0, 1.0], [0.6, -0.8]]).tolist()
    [0.5, 1.0, 0.0]

    Raises
    ------
    FieldError
        If there are fewer than two arcs, the numbers do not match, or the turns do not rise within one turn.
    """
    return Arcs(turns=tuple(turns), values=tuple(values))  # type: ignore[arg-type]  # made exact there


@registered("disc-arcs")
@dataclass(frozen=True, slots=True, kw_only=True)
class DiscArcs(DiscField):
    """Constant values on arcs of the rim; `poisson_disc` makes one."""

    turns: tuple[Exact, ...]
    values: tuple[Exact, ...]

    def __post_init__(self) -> None:
        """Check disc and arcs."""
        DiscField.__post_init__(self)
        checked = Arcs(turns=self.turns, values=self.values)
        object.__setattr__(self, "turns", checked.turns)
        object.__setattr__(self, "values", checked.values)

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The ends of the arcs where the value changes."""
        return tuple(
            Singularity(point=_jump(FLOAT, turn, self.centre, self.radius)[1], exponent=0.0, kind="jump")
            for i, turn in enumerate(self.turns)
            if rational(self.values[i]) != rational(self.values[i - 1])
        )

    def _data_text(self) -> str:
        return (
            " | ".join(f"{show(v)} from {show(t)}" for t, v in zip(self.turns, self.values, strict=True))
            + " turn"
        )

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        offsets = [self._from_jump(ctx, x, i) for i in range(len(self.turns))]
        gap, at_jump = _rim_gap(ctx, offsets)
        total: Any = None
        for i, value in enumerate(self.values):
            if not value:
                continue
            (_, (ax, ay)), (_, (bx, by)) = offsets[i], offsets[(i + 1) % len(offsets)]
            half = (rational(self.turns[(i + 1) % len(self.turns)]) - rational(self.turns[i])) % 1 / 2
            cosine, sine = _direction_rounded(ctx, half)
            share = bx * ay  # whole arrays cost as much as arithmetic, so they are updated in place
            share -= by * ax
            share *= -sine
            if cosine:
                share += (bx * ax + by * ay) * cosine  # Re(b conj(a) e^{-i delta})
            share = ctx.atan2(gap * sine, share)
            share /= ctx.pi
            if value != 1:
                share *= ctx.number(value)
            total = share if total is None else total + share
        if total is None:
            total = 0 * gap
        if ctx is not FLOAT:
            return ctx.nan if at_jump else total
        if at_jump.any():
            total = np.where(at_jump, math.nan, total)
        return total

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002  # no cut
        real: Any = 0 * x[0]
        imaginary: Any = 0 * x[0]
        for i in range(len(self.turns)):
            change = rational(self.values[i - 1]) - rational(self.values[i])
            if change:
                _, (ax, ay) = self._from_jump(ctx, x, i)
                square = ax * ax + ay * ay
                weight = ctx.number(change) / ctx.where(
                    square == 0, math.nan if ctx is FLOAT else ctx.nan, square
                )
                real, imaginary = real + weight * ax, imaginary - weight * ay  # 1 / a = conj(a) / |a|^2
        scale = ctx.pi * ctx.number(self.radius)
        return imaginary / scale, real / scale

    def _from_jump(self, ctx: Any, x: tuple[Any, ...], i: int) -> tuple[tuple[Any, Any], tuple[Any, Any]]:
        """Return e^{i alpha} and z - e^{i alpha} for the start of arc i, to full relative accuracy."""
        unit, high, low = _jump(ctx, self.turns[i], self.centre, self.radius)
        apart = [c - a - b if b else c - a for c, a, b in zip(x, high, low, strict=True)]
        if self.radius != 1:
            apart = [c / ctx.number(self.radius) for c in apart]
        return unit, (apart[0], apart[1])


def _rim_gap(ctx: Any, offsets: list[Any]) -> tuple[Any, Any]:
    """Return 1 - |z|^2, at least +0, as seen from a jump that is near, and whether z is a jump itself.

    Its rounding is that of the distance from the jump it is seen from.
    """
    unit, offset = offsets[0]
    gap, nearest = _gap_from(unit, offset)
    if ctx is not FLOAT:
        for unit, offset in offsets[1:]:
            other, square = _gap_from(unit, offset)
            if square < nearest:
                gap, nearest = other, square
        return (gap if gap > 0 else ctx.mpf(0)), nearest == 0
    at_jump = nearest == 0
    for unit, (ax, ay) in offsets[1:]:
        square = ax * ax
        square += ay * ay
        here = np.flatnonzero(square < NEAR)
        here = here[square[here] < nearest[here]]
        gap[here], nearest[here] = _gap_from(unit, (ax[here], ay[here]))
        at_jump[here] = nearest[here] == 0
    gap = np.maximum(gap, 0.0, out=gap)
    gap += 0.0  # not -0.0, whose atan2 is -pi
    return gap, at_jump


def _gap_from(unit: tuple[Any, Any], offset: tuple[Any, Any]) -> tuple[Any, Any]:
    """Return 1 - |z|^2 = -2 Re(a e^{-i alpha}) - |a|^2 and |a|^2 for a jump at `unit`."""
    (ex, ey), (ax, ay) = unit, offset
    square = ax * ax
    square += ay * ay
    gap = ax * (-2 * ex)
    if ey:
        gap += ay * (-2 * ey)
    gap -= square
    return gap, square


_SOURCE = Precise(40)


def _direction(ctx: Any, turn: Fraction) -> tuple[Any, Any]:
    """Return cos and sin of a fraction of a turn in a precise context, exact at quarters."""
    angle = ctx.number(2 * (turn % 1))
    return ctx.cospi(angle), ctx.sinpi(angle)


@lru_cache(maxsize=512)
def _direction_rounded(ctx: Any, turn: Fraction) -> tuple[Any, Any]:
    """Return the same as numbers of the context."""
    cosine, sine = _direction(_SOURCE if ctx is FLOAT else ctx, turn)
    return (float(cosine), float(sine)) if ctx is FLOAT else (cosine, sine)


@lru_cache(maxsize=512)
def _jump(ctx: Any, turn: Exact, centre: tuple[Exact, ...], radius: Exact) -> Any:
    """Return e^{i alpha} and the jump point, in float64 split into its nearest float and the rest."""
    source = _SOURCE if ctx is FLOAT else ctx
    unit = _direction(source, rational(turn))
    points = [source.number(c) + source.number(radius) * e for c, e in zip(centre, unit, strict=True)]
    if ctx is not FLOAT:
        return unit, points, (ctx.mpf(0), ctx.mpf(0))
    high = tuple(float(p) for p in points)
    return tuple(float(e) for e in unit), high, [float(p - h) for p, h in zip(points, high, strict=True)]
