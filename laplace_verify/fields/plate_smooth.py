"""Rectangle with a smooth function on one side, by polynomial end corrections and a fast Fourier transform.

The odd (zero neighbours) or even (insulated) continuation of a smooth f jumps at the ends of the side in its
even or odd derivatives, so its Fourier coefficients decay like a small power of 1 / n. Subtracting the
polynomial

    p(s) = sum_{k < K} a^{2k} [f^(2k)(start) L_k(1 - s/a) + f^(2k)(stop) L_k(s/a)],   L_0 = x,  L_k'' =
    L_{k-1},
                                                                                   L_k(0) = L_k(1) = 0,

which shares these derivatives (of f', integrated once, for insulated neighbours), leaves coefficients that
decay like n^-(2K+1); p itself is summed in closed form. The split f = p + (f - p) is exact whatever the
accuracy of the derivatives. K is what needs the fewest coefficients; where p is much larger than f, precise
numbers get as many more digits, and float64 loses one digit, up to four if f oscillates much. The
coefficients of the rest come from the trapezoidal rule on 32, 64, ... intervals, doubled until the last
quarter of them is lost in rounding; whether f is what its samples suggest is not known, hence the basis
"uncertified".

References
----------
Lidstone (1930), Proc. Edinb. Math. Soc. 2, 16-19, for the polynomials L_k (from memory, unchecked).
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any

import mpmath
import numpy as np
from scipy.fft import dct, dst

from laplace_verify.contexts import FLOAT, Precise
from laplace_verify.errors import FieldError
from laplace_verify.fields._precision import working
from laplace_verify.fields._samples import converged, parsed, sampled
from laplace_verify.fields.exact import exact, rational
from laplace_verify.fields.mode_sums import Decay
from laplace_verify.fields.piecewise import Continuation
from laplace_verify.fields.plate import Plate
from laplace_verify.fields.plate_modes import ModeTable, modes_slopes, modes_solution, slenderness
from laplace_verify.fields.plate_pieces import pieces_slopes, pieces_solution
from laplace_verify.fields.polylog import horner
from laplace_verify.fields.singular import Basis, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["PlateSmooth"]

FLOAT_INTERVALS = 8192
PRECISE_INTERVALS = 1024
FLOAT_CORRECTIONS = 6
FLOAT_DIGITS = 30  # of the end derivatives
FEW = 1000.0  # coefficients
SMALLEST = mpmath.mpf(10) ** -9999
SMOOTH = 1e-12  # an end derivative below this, relative to f on the scale a / pi, counts as zero


@registered("rectangle-smooth")
@dataclass(frozen=True, slots=True, kw_only=True)
class PlateSmooth(Plate):
    """Data by a formula in the coordinate along the side, or by a user's function; see `rectangle_series`."""

    data: str | Callable[[Any], Any]

    def __post_init__(self) -> None:
        """Read the formula, and sample the data once so that bad ones are refused early."""
        Plate.__post_init__(self)
        if not isinstance(self.data, str) and not callable(self.data):
            raise FieldError(f"data must be a formula or a function, got {type(self.data).__name__}")
        if isinstance(self.data, str):
            parsed(self.data, self.variable)
        _split(FLOAT, self)

    @property
    def variable(self) -> str:
        """The coordinate along the side."""
        return "x" if self.side in ("top", "bottom") else "y"

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """Ends of the side where the continuation of the data is not smooth, to 12 digits."""
        found = []
        derivatives = _end_derivatives(self, FLOAT_CORRECTIONS, FLOAT_DIGITS)
        start, stop = self.ends
        unit = float(stop - start) / math.pi
        scale = _size(self)
        for end, values in zip((start, stop), derivatives, strict=True):
            for k, value in enumerate(values):
                order = 2 * k + (1 if self.even else 0)
                if abs(float(value)) * unit**order > SMOOTH * scale:
                    kind = "power" if order else "jump"
                    found.append(Singularity(point=self.place_on_side(end), exponent=float(order), kind=kind))  # type: ignore[arg-type]
                    break
        return tuple(found)

    @property
    def basis(self) -> Basis:
        """Uncertified: the function is known at its samples only."""
        return "uncertified"

    def _data_text(self) -> str:
        if isinstance(self.data, str):
            return self.data
        return f"{getattr(self.data, '__name__', 'f')}({self.variable})"

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        return Plate._value(self, *_roomy(ctx, self, x), side)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        return Plate._gradient(self, *_roomy(ctx, self, x), side)

    def _solve(self, ctx: Any, x: Any, d: Any, h: Any) -> Any:
        polynomial, _ = _split(ctx, self)
        u = modes_solution(ctx, self, _table(ctx, self), x, d, h)
        return u if polynomial is None else u + pieces_solution(ctx, polynomial, self.depth, x, d, h)

    def _slopes(self, ctx: Any, x: Any, d: Any, h: Any) -> tuple[Any, Any]:
        polynomial, _ = _split(ctx, self)
        along, depth = modes_slopes(ctx, self, _table(ctx, self), x, d, h)
        if polynomial is None:
            return along, depth
        more_along, more_depth = pieces_slopes(ctx, polynomial, self.depth, x, d, h)
        return along + more_along, depth + more_depth


class _Roomy(Precise):
    """A context with digits on top for what cancels between p and f - p."""

    def __init__(self, wanted: int, lost: int) -> None:
        super().__init__(wanted + lost)
        self.wanted = wanted


@lru_cache(maxsize=64)
def _roomy_context(wanted: int, lost: int) -> _Roomy:
    """Return the shared context of this kind."""
    return _Roomy(wanted, lost)


def _roomy(ctx: Any, plate: PlateSmooth, x: tuple[Any, ...]) -> tuple[Any, tuple[Any, ...]]:
    """Return a context with room for the cancellation and the same point in it; float64 as it is."""
    if ctx is FLOAT:
        return ctx, x
    _, _, lost = _plan(plate, ctx.dps)
    roomy = _roomy_context(ctx.dps, lost)
    return roomy, tuple(roomy.make_mpf(c._mpf_) for c in x)


@lru_cache(maxsize=64)
def _size(plate: PlateSmooth) -> float:
    """Return max |f| on 65 points, 1 if f is zero."""
    start, stop = (float(end) for end in plate.ends)
    largest = float(np.abs(sampled(plate.data, plate.variable, FLOAT, np.linspace(start, stop, 65))).max())
    return largest or 1.0


@lru_cache(maxsize=64)
def _end_derivatives(plate: PlateSmooth, count: int, digits: int) -> tuple[list[Any], list[Any]]:
    """Return at both ends the derivatives of order 0, 2, ... (zero) or 1, 3, ... (insulated), `count` each.

    They are forward differences with steps of 10^-digits into the side, in so many digits that nothing is
    lost.
    """
    highest = 2 * count - 1
    ctx = working(digits * (highest + 2))
    rounded = working(digits)  # whose numbers are exact from here on, so short ones are wanted
    start, stop = plate.ends
    step = ctx.number(stop - start) * ctx.mpf(10) ** -digits
    result = []
    for end, direction in ((start, 1), (stop, -1)):
        values = [
            sampled(plate.data, plate.variable, ctx, ctx.number(end) + direction * j * step)
            for j in range(highest + 1)
        ]
        derivatives = []
        for order in range(highest + 1):
            derivatives.append(rounded.mpf(values[0] / (direction * step) ** order))
            values = [b - a for a, b in itertools.pairwise(values)]
        result.append(derivatives[1::2] if plate.even else derivatives[::2])
    return result[0], result[1]


@lru_cache(maxsize=64)
def _plan(plate: PlateSmooth, digits: int | None) -> tuple[list[Any], list[Any], int]:
    """Return the end derivatives to correct for, and how many digits their size costs; digits None: float64.

    After K corrections A_n is about size_K / n^(2K + 1 or 2), with size_k the k-th derivative on the scale a
    / pi: the K that needs the fewest coefficients is taken, within the digits that may be lost.
    """
    wanted = 16 if digits is None else digits
    most = FLOAT_CORRECTIONS if digits is None else FLOAT_CORRECTIONS + digits // 3
    left, right = _end_derivatives(plate, most, FLOAT_DIGITS if digits is None else 2 * digits)
    start, stop = plate.ends
    unit, order = math.log10(float(stop - start) / math.pi), 1 if plate.even else 0
    sizes = [
        float(mpmath.log10(max(abs(a), abs(b), SMALLEST))) + (2 * k + order) * unit - math.log10(_size(plate))
        for k, (a, b) in enumerate(zip(left, right, strict=True))
    ]
    counts = [10.0 ** min((size + wanted) / (2 * k + 1 + order), 9.0) for k, size in enumerate(sizes)]
    needed = [max(counts[k:]) + 2 * k for k in range(most)]  # by the worst derivative not corrected for
    lost = [max([0.0, *sizes[:k]]) for k in range(most)]
    for allowed in (1.0, 2.0, 3.0, 4.0) if digits is None else (float(digits),):
        best = min((k for k in range(most) if lost[k] <= allowed), key=needed.__getitem__)
        if needed[best] <= FEW:
            break
    return left[:best], right[:best], math.ceil(lost[best])


@lru_cache(maxsize=64)
def _split(ctx: Any, plate: PlateSmooth) -> tuple[Continuation | None, Any]:
    """Return p, and the coefficients of f - p: A_1, ... of sines or A_0, A_1, ... of cosines."""
    left, right, _ = _plan(plate, None if ctx is FLOAT else ctx.wanted)
    start, stop = plate.ends
    row = _correction(left, right, stop - start, plate.even)
    polynomial = Continuation.of((start, stop), (row,), even=plate.even) if row else None
    return polynomial, _transformed(ctx, plate, [ctx.number(c) for c in row])


def _correction(left: list[Any], right: list[Any], length: Fraction, even: bool) -> tuple[Fraction, ...]:
    """Return p in powers of s, exact fractions."""
    row = [Fraction(0)] * (2 * len(left) + 1)
    lidstone = [Fraction(1)]  # L_k = sum_i lidstone[i] x^(2i+1)
    for k, (at_start, at_stop) in enumerate(zip(left, right, strict=True)):
        if k:
            lidstone = [Fraction(0)] + [c / ((2 * i + 2) * (2 * i + 3)) for i, c in enumerate(lidstone)]
            lidstone[0] = -sum(lidstone[1:], Fraction(0))
        first, last = (rational(exact(v, "end derivative")) * length ** (2 * k) for v in (at_start, at_stop))
        for i, c in enumerate(lidstone):
            power = 2 * i + 1
            row[power] += last * c
            for j in range(power + 1):  # (1 - x)^power
                row[j] += first * c * math.comb(power, j) * (-1) ** j
    scaled = [c / length**k for k, c in enumerate(row)]
    if even and left:
        scaled = [Fraction(0)] + [c / (k + 1) for k, c in enumerate(scaled)]
    while scaled and not scaled[-1]:
        scaled.pop()
    return tuple(scaled)


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


@lru_cache(maxsize=64)
def _table(ctx: Any, plate: PlateSmooth) -> ModeTable:
    """Return the coefficients of f - p for the mode sums."""
    _, coefficients = _split(ctx, plate)
    mean, listed = (coefficients[0], coefficients[1:]) if plate.even else (ctx.number(0), coefficients)
    last = max(len(listed), 1)

    def listing(numbers: range) -> Any:
        return [listed[n - 1] if n <= len(listed) else ctx.number(0) for n in numbers]

    return ModeTable(ctx, listing, Decay(last=last), slenderness(ctx, plate), mean)
