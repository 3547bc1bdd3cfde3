"""Rectangle with an exponential function on one side, with a proven tail.

For f = height e^{r s / a}, with f0 and f1 at the two ends and m = n pi, integration gives

    sines     A_n = 2 m (f0 - (-1)^n f1) / (r^2 + m^2),
    cosines   A_n = 2 r ((-1)^n f1 - f0) / (r^2 + m^2),     A_0 = (f1 - f0) / r.

The polynomial of `plate_split` takes away the first K terms of 1 / (r^2 + m^2) = sum (-1)^j r^{2j} m^{-2j-2};
what is left of A_n is (-1)^K (r / m)^{2K} times as large, known without cancellation, and bounded by

    2 (|f0| + |f1|) (|r| / pi)^{2K} n^{-2K} times 1 / (n pi) for sines, |r| / (n pi)^2 for cosines.

(Derived here.)
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import Any, ClassVar

import numpy as np

from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields._precision import working
from laplace_verify.fields.exact import Exact, exact, rational, show
from laplace_verify.fields.mode_sums import Decay
from laplace_verify.fields.plate import Plate
from laplace_verify.fields.plate_cells import TERMS
from laplace_verify.fields.plate_cells_fit import HalfProblem, local_jumps
from laplace_verify.fields.plate_split import PlateSplit, Split
from laplace_verify.fields.singular import Basis
from laplace_verify.fields.specs import registered

__all__ = ["Exponential", "PlateExponential", "exponential"]

JUMPS = 22  # derivatives at the ends for the cells: (STEEPEST / 2)^22 / 22! = 1e-17
STEEPEST = 3  # |rate|: above it the corner polynomials grow and float64 loses digits, one of them at 4


@dataclass(frozen=True, slots=True, kw_only=True)
class Exponential:
    """f = height e^{rate t}, t the fraction of the side; `exponential` makes one."""

    rate: Exact
    height: Exact = 1

    def __post_init__(self) -> None:
        """Make the numbers exact.

        Raises
        ------
        FieldError
            If the rate is 0 or too large, or the height 0.
        """
        for name in ("rate", "height"):
            object.__setattr__(self, name, exact(getattr(self, name), name))
        if not 0 < abs(float(self.rate)) <= STEEPEST:
            raise FieldError(
                f"rate must be between -{STEEPEST} and {STEEPEST} and not 0, got {show(self.rate)}: give "
                "constant data as a number, steeper ones as a formula"
            )
        if not self.height:
            raise FieldError("height must not be 0: give zero data as the number 0")


def exponential(rate: Number, height: Number = 1) -> Exponential:
    """Return height e^(rate t), t the fraction of the side: `height` at its lower (left) end.

    >>> from laplace_verify import fields
    >>> u = fields.rectangle_series((0, 0), (2, 1), fields.exponential(1), neighbours="insulated")
    >>> bool(abs(u.value([[2.0, 1.0]])[0] - 2.718281828459045) < 2e-15), u.basis
    (True, 'tail bound')

    Raises
    ------
    FieldError
        If the rate is 0 or beyond -3 or 3, or the height 0.
    """
    return Exponential(rate=rate, height=height)  # type: ignore[arg-type]  # made exact there


@registered("rectangle-exponential")
@dataclass(frozen=True, slots=True, kw_only=True)
class PlateExponential(PlateSplit):
    """Data height e^{rate t}, t the fraction of the side; `rectangle_series` makes one."""

    correction_cost: ClassVar[int] = 20  # coefficients are cheap, polylogarithms dear

    rate: Exact
    height: Exact = 1

    def __post_init__(self) -> None:
        """Check the numbers."""
        Plate.__post_init__(self)
        checked = Exponential(rate=self.rate, height=self.height)
        object.__setattr__(self, "rate", checked.rate)
        object.__setattr__(self, "height", checked.height)

    @property
    def basis(self) -> Basis:
        """Tail bound."""
        return "tail bound"

    def half_problem(self) -> HalfProblem:
        """Return what `plate_cells` needs to tabulate u for float64: f and its derivatives at the ends."""
        size = tuple(
            exact(rational(b) - rational(a), "extent") for a, b in zip(self.lower, self.upper, strict=True)
        )
        twin = replace(self, lower=(0, 0), upper=size)
        length = twin.ends[1]
        turn = float(rational(self.rate) / length)
        first, last = (float(end) for end in self._at_ends(working(30)))

        def line(c: Fraction) -> list[float]:
            level = float(self.height) * math.exp(float(rational(self.rate) * c / length))
            return [level * turn**k / math.factorial(k) for k in range(TERMS)]

        # every second derivative jumps, by twice its size
        starting, ending = (
            [sign * end * turn**p if p % 2 == self.even else 0.0 for p in range(JUMPS)]
            for sign, end in ((2, first), (-2, last))
        )
        jumps = [(-length, ending), (0 * length, starting), (length, ending), (2 * length, starting)]
        return HalfProblem(
            side=self.side, even=self.even, far=self.far, length=length, line=line,
            places=local_jumps(self.side, jumps),
            value=lambda s, d, h: twin._solve(FLOAT, s, d, h),
            slopes=lambda s, d, h: twin._slopes(FLOAT, s, d, h),
        )  # fmt: skip

    def _data_text(self) -> str:
        factor = "" if self.height == 1 else f"{show(self.height)} "
        return f"{factor}exp({show(self.rate)} t), t the fraction of the side,"

    def _at_ends(self, ctx: Any) -> tuple[Any, Any]:
        """Return f0 and f1 in a precise context."""
        height = ctx.number(self.height)
        return height, height * ctx.exp(ctx.number(self.rate))

    def _end_derivatives(self, count: int, digits: int) -> tuple[list[Any], list[Any]]:
        ctx = working(digits)
        start, stop = self.ends
        turn = ctx.number(self.rate) / ctx.number(stop - start)
        orders = range(1 if self.even else 0, 2 * count, 2)
        first, last = self._at_ends(ctx)
        return [first * turn**p for p in orders], [last * turn**p for p in orders]

    def _size(self) -> float:
        return max(abs(float(end)) for end in self._at_ends(working(15)))

    def _rest(self, ctx: Any, split: Split) -> tuple[Any, Any, Decay]:
        high = working(30) if ctx is FLOAT else ctx
        r, twice = high.number(self.rate), 2 * split.corrections
        first, last = self._at_ends(high)
        mean = high.mpf(0)
        if self.even:
            mean = (last - first) / r
            if split.polynomial is not None:
                mean = mean - high.number(split.polynomial.mean)
        ends = (ctx.number(first), ctx.number(last))

        def listing(numbers: range) -> Any:
            if ctx is FLOAT:
                return self._coefficients(np.array(numbers, dtype=np.float64), np.pi, float(r), ends, twice)
            return [self._coefficients(n, ctx.pi, r, ends, twice) for n in numbers]

        size, slope = float(abs(first) + abs(last)), abs(float(r)) / np.pi
        bound = 2 * size * slope**twice * (slope if self.even else 1.0) / np.pi
        return ctx.number(mean), listing, Decay(bound=bound, power=float(twice + (2 if self.even else 1)))

    def _coefficients(self, n: Any, pi: Any, r: Any, ends: tuple[Any, Any], twice: int) -> Any:
        """Return A_n of the rest after twice / 2 corrections, for an array of n or one."""
        m = n * pi
        step = ends[0] - (1 - 2 * (n % 2)) * ends[1]
        sign = (-1) ** (twice // 2) * (-2 * r if self.even else 2 * m)
        return sign * step * (r / m) ** twice / (r * r + m * m)
