"""Rectangle with a smooth function on one side: a polynomial that takes its corners off, and a short series.

The odd (zero neighbours) or even (insulated) continuation of a smooth f jumps at the ends of the side in its
even or odd derivatives, so its Fourier coefficients decay like a small power of 1 / n. Subtracting the
polynomial

    p(s) = sum_{k < K} a^{2k} [f^(2k)(start) L_k(1 - s/a) + f^(2k)(stop) L_k(s/a)],   L_0 = x,  L_k'' =
    L_{k-1},
                                                                                   L_k(0) = L_k(1) = 0,

which shares these derivatives (of f', integrated once, for insulated neighbours), leaves coefficients that
decay like n^-(2K+1); p itself is summed in closed form. The split f = p + (f - p) is exact whatever the
accuracy of the derivatives. K is what needs the fewest coefficients; where p is much larger than f, precise
numbers get as many more digits, and float64 loses one digit, up to four if f oscillates much.

References
----------
Lidstone (1930), Proc. Edinb. Math. Soc. 2, 16-19, for the polynomials L_k (from memory, unchecked).
"""

from __future__ import annotations

import math
from abc import abstractmethod
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any, ClassVar

import mpmath

from laplace_verify.contexts import FLOAT, Precise
from laplace_verify.fields.exact import exact, rational
from laplace_verify.fields.mode_sums import Decay
from laplace_verify.fields.piecewise import Continuation
from laplace_verify.fields.plate import Plate
from laplace_verify.fields.plate_modes import ModeTable, modes_slopes, modes_solution, slenderness
from laplace_verify.fields.plate_pieces import pieces_slopes, pieces_solution
from laplace_verify.fields.singular import Singularity

__all__ = ["PlateSplit", "Split"]

FLOAT_CORRECTIONS = 6
FLOAT_DIGITS = 30  # of the end derivatives
FEW = 1000.0  # coefficients
SMALLEST = mpmath.mpf(10) ** -9999
SMOOTH = 1e-12  # an end derivative below this, relative to f on the scale a / pi, counts as zero

EndDerivatives = tuple[list[Any], list[Any]]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Split:
    """The polynomial p that was taken off f: K corrections, and p in powers of s with its continuation."""

    corrections: int
    row: tuple[Fraction, ...]
    polynomial: Continuation | None


class PlateSplit(Plate):
    """A plate with smooth data f = p + (f - p) on its side (abstract)."""

    __slots__ = ()

    correction_cost: ClassVar[int]  # of one more correction, in coefficients that it must save

    # -- what a family of smooth data provides ---------------------------------------------------------------

    @abstractmethod
    def _end_derivatives(self, count: int, digits: int) -> EndDerivatives:
        """Return `count` derivatives at both ends, of order 0, 2, ... (zero) or 1, 3, ... (insulated)."""

    @abstractmethod
    def _size(self) -> float:
        """Return about max |f|, above 0."""

    @abstractmethod
    def _rest(self, ctx: Any, split: Split) -> tuple[Any, Any, Decay]:
        """Return of f - p the mean (0 for sines), a function from a range of n to A_n, and their decay."""

    def _prepare(self) -> None:
        """Compute what float64 needs, so that data that cannot be used are refused early."""
        _table(FLOAT, self)

    # -- the plate -------------------------------------------------------------------------------------------

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """Ends of the side where the continuation of the data is not smooth, to 12 digits."""
        found = []
        derivatives = self._end_derivatives(FLOAT_CORRECTIONS, FLOAT_DIGITS)
        start, stop = self.ends
        unit = float(stop - start) / math.pi
        scale = self._size()
        for end, values in zip((start, stop), derivatives, strict=True):
            for k, value in enumerate(values):
                order = 2 * k + (1 if self.even else 0)
                if abs(float(value)) * unit**order > SMOOTH * scale:
                    kind = "power" if order else "jump"
                    found.append(Singularity(point=self.place_on_side(end), exponent=float(order), kind=kind))  # type: ignore[arg-type]
                    break
        return tuple(found)

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        return Plate._value(self, *_roomy(ctx, self, x), side)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        return Plate._gradient(self, *_roomy(ctx, self, x), side)

    def _solve(self, ctx: Any, x: Any, d: Any, h: Any) -> Any:
        polynomial = _split(self, _wanted(ctx)).polynomial
        u = modes_solution(ctx, self, _table(ctx, self), x, d, h)
        return u if polynomial is None else u + pieces_solution(ctx, polynomial, self.depth, x, d, h)

    def _slopes(self, ctx: Any, x: Any, d: Any, h: Any) -> tuple[Any, Any]:
        polynomial = _split(self, _wanted(ctx)).polynomial
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


def _roomy(ctx: Any, plate: PlateSplit, x: tuple[Any, ...]) -> tuple[Any, tuple[Any, ...]]:
    """Return a context with room for the cancellation and the same point in it; float64 as it is."""
    if ctx is FLOAT:
        return ctx, x
    _, _, lost = _plan(plate, ctx.dps)
    roomy = _roomy_context(ctx.dps, lost)
    return roomy, tuple(roomy.make_mpf(c._mpf_) for c in x)


def _wanted(ctx: Any) -> int | None:
    """Return the digits a context is for, None for float64."""
    return None if ctx is FLOAT else ctx.wanted


@lru_cache(maxsize=64)
def _plan(plate: PlateSplit, digits: int | None) -> tuple[list[Any], list[Any], int]:
    """Return the end derivatives to correct for, and how many digits their size costs; digits None: float64.

    After K corrections A_n is about size_K / n^(2K + 1 or 2), with size_k the k-th derivative on the scale a
    / pi: the K that needs the fewest coefficients is taken, within the digits that may be lost.
    """
    wanted = 16 if digits is None else digits
    most = FLOAT_CORRECTIONS if digits is None else FLOAT_CORRECTIONS + digits // 3
    left, right = plate._end_derivatives(most, FLOAT_DIGITS if digits is None else 2 * digits)
    start, stop = plate.ends
    unit, order = math.log10(float(stop - start) / math.pi), 1 if plate.even else 0
    sizes = [
        float(mpmath.log10(max(abs(a), abs(b), SMALLEST)))
        + (2 * k + order) * unit
        - math.log10(plate._size())
        for k, (a, b) in enumerate(zip(left, right, strict=True))
    ]
    counts = [10.0 ** min((size + wanted) / (2 * k + 1 + order), 9.0) for k, size in enumerate(sizes)]
    counts = [max(counts[k:]) for k in range(most)]  # by the worst derivative not corrected for
    needed = [count + plate.correction_cost * k for k, count in enumerate(counts)]
    lost = [max([0.0, *sizes[:k]]) for k in range(most)]
    for allowed in (1.0, 2.0, 3.0, 4.0) if digits is None else (float(digits),):
        best = min((k for k in range(most) if lost[k] <= allowed), key=needed.__getitem__)
        if counts[best] <= FEW:
            break
    return left[:best], right[:best], math.ceil(lost[best])


@lru_cache(maxsize=64)
def _split(plate: PlateSplit, digits: int | None) -> Split:
    """Return what is taken off f."""
    left, right, _ = _plan(plate, digits)
    start, stop = plate.ends
    row = _correction(left, right, stop - start, plate.even)
    polynomial = Continuation.of((start, stop), (row,), even=plate.even) if row else None
    return Split(corrections=len(left), row=row, polynomial=polynomial)


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


@lru_cache(maxsize=64)
def _table(ctx: Any, plate: PlateSplit) -> ModeTable:
    """Return the coefficients of f - p for the mode sums."""
    mean, listing, decay = plate._rest(ctx, _split(plate, _wanted(ctx)))
    return ModeTable(ctx, listing, decay, slenderness(ctx, plate), mean)
