"""Rectangle with a formula or a user's function on one side: coefficients by a fast Fourier transform.

The polynomial of `plate_split` is taken off first; the coefficients of the rest come from the trapezoidal
rule on 32, 64, ... intervals, doubled until the last quarter of them is lost in rounding. Whether f is what
its samples suggest is not known, hence the basis "uncertified".
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any, ClassVar

import numpy as np
from scipy.fft import dct, dst

from laplace_verify.contexts import FLOAT
from laplace_verify.errors import FieldError
from laplace_verify.fields._precision import working
from laplace_verify.fields._samples import converged, parsed, sampled
from laplace_verify.fields.mode_sums import Decay
from laplace_verify.fields.plate import Plate
from laplace_verify.fields.plate_cells import TERMS
from laplace_verify.fields.plate_cells_fit import HalfProblem, local_jumps
from laplace_verify.fields.plate_split import PlateSplit, Split
from laplace_verify.fields.polylog import horner
from laplace_verify.fields.singular import Basis
from laplace_verify.fields.specs import registered

__all__ = ["PlateSmooth"]

FLOAT_INTERVALS = 8192
CELL_DIGITS = 20  # of the derivatives for the cells
PRECISE_INTERVALS = 1024


@registered("rectangle-smooth")
@dataclass(frozen=True, slots=True, kw_only=True)
class PlateSmooth(PlateSplit):
    """Data by a formula in the coordinate along the side, or by a user's function; see `rectangle_series`."""

    correction_cost: ClassVar[int] = 2  # coefficients are dear: their number squared is the cost of all

    data: str | Callable[[Any], Any]

    def __post_init__(self) -> None:
        """Read the formula, and sample the data once so that bad ones are refused early."""
        Plate.__post_init__(self)
        if not isinstance(self.data, str) and not callable(self.data):
            raise FieldError(f"data must be a formula or a function, got {type(self.data).__name__}")
        if isinstance(self.data, str):
            parsed(self.data, self.variable)
        self._prepare()

    @property
    def variable(self) -> str:
        """The coordinate along the side."""
        return "x" if self.side in ("top", "bottom") else "y"

    @property
    def basis(self) -> Basis:
        """Uncertified: the function is known at its samples only."""
        return "uncertified"

    def half_problem(self) -> HalfProblem:
        """Return what `plate_cells` needs to tabulate u for float64: Taylor's series of the data."""
        start, stop = self.ends
        origin, length = float(start), stop - start

        def line(c: Fraction) -> list[float]:
            found = _derivatives(self, start + c, -1 if c == length else 1, TERMS, CELL_DIGITS)
            return [float(v / math.factorial(k)) for k, v in enumerate(found)]

        # every second derivative jumps, by twice its size
        starting, ending = (
            [
                sign * float(v) if p % 2 == self.even else 0.0
                for p, v in enumerate(_derivatives(self, end, sign // 2, TERMS, CELL_DIGITS))
            ]
            for sign, end in ((2, start), (-2, stop))
        )
        jumps = [(-length, ending), (0 * length, starting), (length, ending), (2 * length, starting)]
        return HalfProblem(
            side=self.side, even=self.even, far=self.far, length=length, line=line,
            places=local_jumps(self.side, jumps), widest=float(length) / 16,
            value=lambda s, d, h: self._solve(FLOAT, s + origin, d, h),
            slopes=lambda s, d, h: self._slopes(FLOAT, s + origin, d, h),
        )  # fmt: skip

    def _data_text(self) -> str:
        if isinstance(self.data, str):
            return self.data
        return f"{getattr(self.data, '__name__', 'f')}({self.variable})"

    def _end_derivatives(self, count: int, digits: int) -> tuple[list[Any], list[Any]]:
        return _differences(self, count, digits)

    def _size(self) -> float:
        return _largest(self)

    def _rest(self, ctx: Any, split: Split) -> tuple[Any, Any, Decay]:
        coefficients = _transformed(ctx, self, [ctx.number(c) for c in split.row])
        mean, listed = (coefficients[0], coefficients[1:]) if self.even else (ctx.number(0), coefficients)

        def listing(numbers: range) -> Any:
            return [listed[n - 1] if n <= len(listed) else ctx.number(0) for n in numbers]

        return mean, listing, Decay(last=max(len(listed), 1))


@lru_cache(maxsize=64)
def _largest(plate: PlateSmooth) -> float:
    """Return max |f| on 65 points, 1 if f is zero."""
    start, stop = (float(end) for end in plate.ends)
    largest = float(np.abs(sampled(plate.data, plate.variable, FLOAT, np.linspace(start, stop, 65))).max())
    return largest or 1.0


@lru_cache(maxsize=64)
def _differences(plate: PlateSmooth, count: int, digits: int) -> tuple[list[Any], list[Any]]:
    """Return at both ends the derivatives of order 0, 2, ... (zero) or 1, 3, ... (insulated), `count` each.

    They are forward differences with steps of 10^-digits into the side, in so many digits that nothing is
    lost.
    """
    start, stop = plate.ends
    rounded = working(digits)  # whose numbers are exact from here on, so short ones are wanted
    result = []
    for end, direction in ((start, 1), (stop, -1)):
        derivatives = [rounded.mpf(v) for v in _derivatives(plate, end, direction, 2 * count, digits)]
        result.append(derivatives[1::2] if plate.even else derivatives[::2])
    return result[0], result[1]


def _derivatives(plate: PlateSmooth, place: Fraction, direction: int, count: int, digits: int) -> list[Any]:
    """Return the derivatives of order 0 ... count - 1 at a place, by differences in the given direction."""
    ctx = working(digits * (count + 1))
    start, stop = plate.ends
    step = direction * ctx.number(stop - start) * ctx.mpf(10) ** -digits
    values = [sampled(plate.data, plate.variable, ctx, ctx.number(place) + j * step) for j in range(count)]
    derivatives = []
    for order in range(count):
        derivatives.append(values[0] / step**order)
        values = [b - a for a, b in itertools.pairwise(values)]
    return derivatives


def _transformed(ctx: Any, plate: PlateSmooth, row: list[Any]) -> Any:
    """Return the coefficients of f - p, from as many samples as it takes."""

    def transform(count: int) -> tuple[Any, Any]:
        samples, size = _samples(ctx, plate, row, count)
        return _transform(ctx, samples, plate.even), size

    most = FLOAT_INTERVALS if ctx is FLOAT else PRECISE_INTERVALS
    advice = "data with a kink or jump are given as piecewise polynomials"
    return converged(ctx, transform, most, plate._data_text(), advice)


def _samples(ctx: Any, plate: PlateSmooth, row: list[Any], intervals: int) -> tuple[Any, Any]:
    """Return f - p at intervals + 1 equidistant points of the side, and max(|f|, |p|)."""
    start, stop = plate.ends
    places = [start + (stop - start) * Fraction(j, intervals) for j in range(intervals + 1)]
    if ctx is FLOAT:
        t = np.array([float(place) for place in places])
        f = sampled(plate.data, plate.variable, ctx, t)
        p = horner(row, t - float(start)) if row else 0 * t
        terms = sum(
            abs(c) * float(stop - start) ** k for k, c in enumerate(row)
        )  # of p, whose rounding remains
        return f - p, max(np.abs(f).max(), terms)
    f = [sampled(plate.data, plate.variable, ctx, ctx.number(place)) for place in places]
    p = [horner(row, ctx.number(place - start)) if row else ctx.mpf(0) for place in places]
    return [a - b for a, b in zip(f, p, strict=True)], max(abs(v) for v in (*f, *p))


def _transform(ctx: Any, samples: Any, even: bool) -> Any:
    """Return the coefficients of the trigonometric polynomial through the samples, trapezoidal rule."""
    intervals = len(samples) - 1
    if ctx is FLOAT:
        if not even:
            return dst(samples[1:-1], type=1) / intervals
        cosines = dct(samples, type=1) / intervals
        cosines[[0, -1]] /= 2
        return cosines
    turn = [(ctx.cospi if even else ctx.sinpi)(ctx.mpf(m) / intervals) for m in range(2 * intervals)]
    weighted = [samples[0] / 2, *samples[1:-1], samples[-1] / 2]
    sums = [
        2 * ctx.fdot((w, turn[n * j % (2 * intervals)]) for j, w in enumerate(weighted)) / intervals
        for n in range(0 if even else 1, intervals + 1 if even else intervals)
    ]
    if even:
        sums[0] /= 2
        sums[-1] /= 2
    return sums
