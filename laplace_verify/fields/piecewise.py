"""Piecewise polynomials on one side of a rectangle, and the jumps of their periodic continuation.

On a side of length a with zero neighbours the data continue as an odd function of period 2a, with insulated
neighbours as an even one. Integrating by parts piece by piece, a function of period 2a with jumps J_jp of its
p-th derivative at the places c_j has the Fourier coefficients (k = n pi / a, n != 0; derived here)

    F_n = 1 / (2a) sum_j sum_p J_jp e^{-i k c_j} / (i k)^{p+1},

so that the jumps, exact fractions here, are all that the harmonic function needs to know of its data.
"""

from __future__ import annotations

import itertools
import math
from bisect import bisect_right
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from fractions import Fraction

from laplace_verify.contexts import Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.exact import Exact, exact, rational, show

__all__ = ["Continuation", "Piecewise", "level", "parabola", "piecewise", "ramp", "step", "tent"]

HIGHEST_DEGREE = 12

Rows = tuple[tuple[Fraction, ...], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Piecewise:
    """f(t) = sum_k coefficients[i][k] (t - breaks[i])^k for breaks[i] <= t < breaks[i+1].

    t is the coordinate along the side (x on top and bottom, y on left and right) or, if `fraction`, the
    fraction of its length, 0 to 1. `piecewise`, `ramp`, `step`, `tent` and `parabola` make them.
    """

    breaks: tuple[Exact, ...]
    coefficients: tuple[tuple[Exact, ...], ...]
    fraction: bool = False

    def __post_init__(self) -> None:
        """Make everything exact and check the order.

        Raises
        ------
        FieldError
            If the breaks do not rise, there is not one row of coefficients per piece, a row is empty, or the
            degree is above 12.
        """
        breaks = tuple(exact(b, f"breaks[{i}]") for i, b in enumerate(self.breaks))
        rows = tuple(
            tuple(exact(c, f"coefficients[{i}][{k}]") for k, c in enumerate(_row(row, i)))
            for i, row in enumerate(self.coefficients)
        )
        if len(breaks) != len(rows) + 1 or not rows:
            raise FieldError(
                f"{len(rows)} rows of coefficients need {len(rows) + 1} breaks, the two ends of the side "
                f"among "
                f"them, got {len(breaks)}"
            )
        if not all(rational(a) < rational(b) for a, b in itertools.pairwise(breaks)):
            raise FieldError(f"breaks must rise, got {', '.join(show(b) for b in breaks)}")
        for i, row in enumerate(rows):
            if not 1 <= len(row) <= HIGHEST_DEGREE + 1:
                raise FieldError(
                    f"coefficients[{i}] must have 1 to {HIGHEST_DEGREE + 1} entries, got {len(row)}"
                )
        object.__setattr__(self, "breaks", breaks)
        object.__setattr__(self, "coefficients", rows)

    def on(self, start: Fraction, stop: Fraction) -> tuple[tuple[Fraction, ...], Rows]:
        """Return breaks and coefficients in the coordinate along a side from `start` to `stop`.

        Raises
        ------
        FieldError
            If the first and last break are not the ends of the side.
        """
        length = stop - start
        places = tuple(rational(b) for b in self.breaks)
        rows = tuple(tuple(rational(c) for c in row) for row in self.coefficients)
        if self.fraction:
            places = tuple(start + length * b for b in places)
            rows = tuple(tuple(c / length**k for k, c in enumerate(row)) for row in rows)
        if (places[0], places[-1]) != (start, stop):
            raise FieldError(
                f"breaks must run from {show(start)} to {show(stop)}, the ends of the side, got "
                f"{show(places[0])} to {show(places[-1])}; write decimals as strings if both must agree "
                f"exactly"
            )
        return places, rows


def _row(row: object, i: int) -> Iterable[Number]:
    """Return a row of coefficients."""
    if isinstance(row, str) or not isinstance(row, Iterable):
        raise FieldError(f"coefficients[{i}] must be a list of numbers, lowest power first, got {row!r}")
    return row


def piecewise(breaks: Sequence[Number], coefficients: Sequence[Sequence[Number]]) -> Piecewise:
    """Return data sum_k coefficients[i][k] (t - breaks[i])^k on piece i, t the coordinate along the side.

    The first and the last break are the ends of the side; t is x on top and bottom, y on left and right.

    >>> from laplace_verify import fields
    >>> data = fields.piecewise((0, "1/2", 1), ((0, 2), (1,)))  # rises to 1 at mid-side, then stays
    >>> u = fields.rectangle_series((0, 0), (1, 1), data, neighbours="insulated")
    >>> u.value([[0.25, 1], [0.75, 1]]).tolist()
    [0.5, 1.0]

    Raises
    ------
    FieldError
        If the breaks do not rise or the rows do not fit them.
    """
    return Piecewise(breaks=tuple(breaks), coefficients=tuple(coefficients))  # type: ignore[arg-type]  # made exact there


def level(value: Number, name: str) -> Piecewise:
    """Return constant data; `name` stands for the number in an error.

    >>> level("1/2", "top").coefficients
    ((Fraction(1, 2),),)
    """
    return Piecewise(breaks=(0, 1), coefficients=((exact(value, name),),), fraction=True)


def ramp(start: Number, stop: Number) -> Piecewise:
    """Return the straight line from `start` at the lower (left) end of the side to `stop` at the other.

    >>> ramp(0, 2).coefficients
    ((0, 2),)
    """
    rise = rational(exact(stop, "stop")) - rational(exact(start, "start"))
    return Piecewise(breaks=(0, 1), coefficients=((start, rise),), fraction=True)  # type: ignore[arg-type]


def step(at: Number = "1/2", before: Number = 1, after: Number = 0) -> Piecewise:
    """Return `before` up to the fraction `at` of the side (rising in x, else y), `after` beyond.

    >>> step("1/4").breaks
    (0, Fraction(1, 4), 1)
    """
    return Piecewise(breaks=(0, at, 1), coefficients=((before,), (after,)), fraction=True)  # type: ignore[arg-type]


def tent(at: Number = "1/2", height: Number = 1) -> Piecewise:
    """Return 0 at both ends of the side, `height` at the fraction `at`, straight between.

    >>> tent().coefficients
    ((0, 2), (1, -2))
    """
    place, top = rational(exact(at, "at")), rational(exact(height, "height"))
    if not 0 < place < 1:
        raise FieldError(f"at must lie between 0 and 1, a fraction of the side, got {at!r}")
    rows = ((Fraction(0), top / place), (top, -top / (1 - place)))
    return Piecewise(breaks=(0, place, 1), coefficients=rows, fraction=True)


def parabola(height: Number = 1) -> Piecewise:
    """Return 4 height t (1 - t), t the fraction of the side: 0 at both ends, `height` in the middle.

    >>> parabola().coefficients
    ((0, 4, -4),)
    """
    top = 4 * rational(exact(height, "height"))
    return Piecewise(breaks=(0, 1), coefficients=((0, top, -top),), fraction=True)


@dataclass(frozen=True, slots=True, kw_only=True)
class Continuation:
    """The even (insulated) or odd (zero) continuation of piecewise polynomial data, period twice the side.

    `places` are coordinates along the side, in [start, stop]; `jumps[j][p]` is the jump of the p-th
    derivative there, from the left to the right.
    """

    breaks: tuple[Fraction, ...]
    rows: Rows
    even: bool
    places: tuple[Fraction, ...]
    jumps: Rows

    @classmethod
    def of(cls, breaks: tuple[Fraction, ...], rows: Rows, *, even: bool) -> Continuation:
        """Return the continuation, with the places where nothing jumps left out."""
        size = max(len(row) for row in rows)
        left = [_derivatives(row, Fraction(0), size) for row in rows]
        right = [_derivatives(row, b - a, size) for row, a, b in zip(rows, breaks, breaks[1:], strict=False)]
        parity = [(-1) ** p * (1 if even else -1) for p in range(size)]  # of the p-th derivative at an end
        before = [tuple(s * g for s, g in zip(parity, left[0], strict=True)), *right]
        after = [*left, tuple(s * g for s, g in zip(parity, right[-1], strict=True))]
        jumps = [tuple(b - a for a, b in zip(*pair, strict=True)) for pair in zip(before, after, strict=True)]
        kept = [(place, row) for place, row in zip(breaks, jumps, strict=True) if any(row)]
        return cls(
            breaks=breaks, rows=rows, even=even,
            places=tuple(place for place, _ in kept), jumps=tuple(row for _, row in kept),
        )  # fmt: skip

    @property
    def mean(self) -> Fraction:
        """Mean value over a period: the mean over the side if even, 0 if odd."""
        if not self.even:
            return Fraction(0)
        pieces = zip(self.rows, self.breaks, self.breaks[1:], strict=False)
        total = sum(c * (b - a) ** (k + 1) / (k + 1) for row, a, b in pieces for k, c in enumerate(row))
        return Fraction(total) / (self.breaks[-1] - self.breaks[0])

    def powers(self, c: Fraction) -> list[float]:
        """Return the data in powers of s - c, those just above c, or below if c is the upper end."""
        k = max(bisect_right(self.breaks, c, hi=len(self.rows)) - 1, 0)
        derivatives = _derivatives(self.rows[k], c - self.breaks[k], len(self.rows[k]))
        return [float(value / math.factorial(p)) for p, value in enumerate(derivatives)]

    def images(self, low: Fraction, high: Fraction) -> list[tuple[Fraction, tuple[Fraction, ...]]]:
        """Return all places of the continuation in [low, high] with their jumps, in rising order.

        A place c is reflected to 2 start - c, where the p-th derivative jumps by -(+-1)(-1)^p times as much.
        """
        start, period = self.breaks[0], 2 * (self.breaks[-1] - self.breaks[0])
        found: dict[Fraction, tuple[Fraction, ...]] = {}
        for place, row in zip(self.places, self.jumps, strict=True):
            sign = -1 if self.even else 1
            mirrored = tuple(sign * (-1) ** p * jump for p, jump in enumerate(row))
            for base, jumps in ((place, row), (2 * start - place, mirrored)):
                first, last = math.ceil((low - base) / period), math.floor((high - base) / period)
                for m in range(first, last + 1):
                    found[base + m * period] = jumps
        return sorted(found.items())


def _derivatives(row: tuple[Fraction, ...], t: Fraction, size: int) -> tuple[Fraction, ...]:
    """Return the derivatives of order 0 ... size-1 of sum_k row[k] t^k."""
    return tuple(
        sum((c * math.perm(k, p) * t ** (k - p) for k, c in enumerate(row) if k >= p), Fraction(0))
        for p in range(size)
    )
