"""Fields outside a square: multipoles, the logarithm and flows of `outside`, by the map of `_square_map`.

By symmetry only an octant of the plane needs to be mapped; offsets from the corners are formed from the exact
ends of the square, so that r^(2/3) keeps its digits at any distance from them.
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
from laplace_verify.fields._square_map import octant, unit_capacity
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, rational, show
from laplace_verify.fields.motions import show_point
from laplace_verify.fields.outside import Flow, Mapped, Multipole
from laplace_verify.fields.singular import Basis, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["SquareFlow", "SquareMultipole", "flow_past_square", "square_multipole"]

INSIDE = 1e-9  # of the half side: how far inside a point may be put by rounding


class _Square(Mapped):
    """The square that a field lies outside of; a subclass has `side` and `centre`."""

    __slots__ = ()

    side: Exact
    centre: tuple[Exact, ...]

    def _check_body(self) -> None:
        """Make side and centre exact and check them."""
        object.__setattr__(self, "side", exact(self.side, "side"))
        object.__setattr__(self, "centre", exact_point(self.centre, "centre", (2,)))
        if not self.side > 0:
            raise FieldError(f"side must be > 0, got {show(self.side)}")

    @property
    def body(self) -> str:
        """The square in words."""
        return f"the square of side {show(self.side)} about {show_point(self.centre)}"

    @property
    def basis(self) -> Basis:
        """Power series with bounded tails."""
        return "tail bound"

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The corners, where u ~ r^(2/3)."""
        return tuple(
            Singularity(point=(float(x), float(y)), exponent=2 / 3, kind="power")
            for x in self._ends(0)
            for y in self._ends(1)
        )

    def _ends(self, axis: int) -> tuple[Fraction, Fraction]:
        """Return where the square begins and ends along an axis."""
        middle, half = rational(self.centre[axis]), rational(self.side) / 2
        return middle - half, middle + half

    def _valid(self, points: Array) -> BoolArray:
        half = float(self.side) / 2
        away = np.abs(points - np.array([float(c) for c in self.centre])).max(axis=1)
        outside: BoolArray = away >= half * (1 - INSIDE)
        return outside

    def _capacity(self, ctx: Any) -> Any:
        return unit_capacity(ctx) * ctx.number(self.side) / 2

    def _map(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, Any]:  # noqa: ARG002  # no cut
        half = ctx.number(self.side) / 2
        (u, du, right), (v, dv, upper) = (self._folded(ctx, x[k], k) for k in (0, 1))
        steep = v > u
        far, near = ctx.where(steep, v, u), ctx.where(steep, u, v)
        dfar, dnear = ctx.where(steep, dv, du), ctx.where(steep, du, dv)
        w, s = octant(ctx, (far / half, near / half), (dfar / half, dnear / half))
        return tuple(_unfolded(ctx, number, steep, right, upper) for number in (w, half * s))

    def _folded(self, ctx: Any, x: Any, axis: int) -> tuple[Any, Any, Any]:
        """Return |x - centre|, its excess over half the side, both to full accuracy, and the sign."""
        low, high = self._ends(axis)
        away = offset(ctx, x, self.centre[axis])
        sign = ctx.where(away < 0, -1, 1)
        beyond = ctx.where(away < 0, -offset(ctx, x, _plain(low)), offset(ctx, x, _plain(high)))
        return abs(away), beyond, sign


@registered("square-multipole")
@dataclass(frozen=True, slots=True, kw_only=True)
class SquareMultipole(_Square, Multipole):
    """Re w^-n, Im w^-n or log |w| (n = 0) outside a square; `square_multipole` makes one."""

    n: int
    part: str
    side: Exact
    centre: tuple[Exact, ...] = (0, 0)

    def __post_init__(self) -> None:
        """Check degree, part and body."""
        self._check_multipole()
        self._check_body()


@registered("flow-past-square")
@dataclass(frozen=True, slots=True, kw_only=True)
class SquareFlow(_Square, Flow):
    """Re F (potential) or Im F (stream) of the flow past a square; `flow_past_square` makes one."""

    side: Exact
    velocity: tuple[Exact, ...]
    circulation: Exact = 0
    part: str = "potential"
    centre: tuple[Exact, ...] = (0, 0)

    def __post_init__(self) -> None:
        """Check body, velocity and part."""
        self._check_body()
        self._check_flow()


def square_multipole(
    n: int, part: str = "re", *, side: Number, centre: Iterable[Number] = (0, 0)
) -> SquareMultipole:
    """Return Re w^-n or Im w^-n, for n = 0 log |w|: |w| = 1 on the square, w ~ z/c far away.

    Parameters
    ----------
    n
        -200 to 200; decays like |z|^-n, grows if n < 0.
    part
        "re" or "im".
    side
        Length of the sides, which are parallel to the axes; c = 0.59017... side.
    centre
        Of the square.

    Raises
    ------
    FieldError
        If an argument is out of range.

    Examples
    --------
    The potential of a charged square is 0 on it:

    >>> u = square_multipole(0, side=2)
    >>> (u.value([[1.0, 0.5], [2.0, 0.0], [1e6, 0.0]]) + 0.0).round(12).tolist()
    [0.0, 0.546060177621, 13.649707517902]
    """
    return SquareMultipole(n=n, part=part, side=side, centre=centre)  # type: ignore[arg-type]  # made exact


def flow_past_square(
    side: Number,
    velocity: Iterable[Number],
    circulation: Number = 0,
    *,
    part: str = "potential",
    centre: Iterable[Number] = (0, 0),
) -> SquareFlow:
    """Return potential or stream function of the plane flow past a square.

    Parameters
    ----------
    side, centre
        The body, see `square_multipole`.
    velocity, circulation, part
        See `flow_past`.

    Raises
    ------
    FieldError
        If an argument is out of range, or a potential with circulation is asked for.

    Examples
    --------
    >>> flow_past_square(2, (1, 0)).value([[1.0, 0.0], [0.0, 1.0]]).round(12).tolist()
    [2.360681198032, 0.0]
    """
    given: dict[str, Any] = {"velocity": velocity, "circulation": circulation, "centre": centre}  # made exact
    return SquareFlow(side=side, part=part, **given)  # type: ignore[arg-type]


def _plain(number: Fraction) -> Exact:
    """Return a float if it is one, so that offsets need no second difference."""
    return float(number) if Fraction(float(number)) == number else number


def _unfolded(ctx: Any, w: Any, steep: Any, right: Any, upper: Any) -> Any:
    """Return the image of w under the reflections that lead back from the octant."""
    re, im = ctx.where(steep, w.imag, w.real), ctx.where(steep, w.real, w.imag)
    return right * re + 1j * (upper * im)
