"""Rectangle with piecewise polynomial data on all four sides: superposition of half problems.

With B = c0 + c1 s + c2 t + c3 s t, harmonic, equal to the data of bottom and top in the four corners,

    u = B + sum over the sides of the solution with data f - B there and zero on the other three.

Bottom and top less B vanish in the corners, and so do left and right where the data agree; without B each of
two sides would bring a jump to a corner where u has none, and their gradients, 1 / distance, would cancel.

At a corner with data h along x and v along y, u has an analytic continuation if and only if h^(2k) = (-1)^k
v^(2k) there for all k (both are derivatives along the sides; odd ones are free). If k is the first to break
it, u behaves like r^(2k) log r, and for k = 0 it jumps: it tends to a multiple of the angle. (Derived here.)
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterable
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.affine import affine
from laplace_verify.fields.base import Field
from laplace_verify.fields.combinations import combined
from laplace_verify.fields.exact import Exact, rational
from laplace_verify.fields.piecewise import Piecewise, Rows, level
from laplace_verify.fields.plate import SIDES, corner_text, in_rectangle, opposite_corners, side_ends
from laplace_verify.fields.plate_cells import Cells, cells_gradient, cells_value
from laplace_verify.fields.plate_cells_table import tabulated
from laplace_verify.fields.plate_pieces import PlatePieces, pieces_text
from laplace_verify.fields.polynomials import polynomial
from laplace_verify.fields.singular import Basis, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["PlateSides", "rectangle_sides"]

Pieces = tuple[tuple[Fraction, ...], Rows]  # breaks and rows of one side, in the coordinate along it


@registered("rectangle-sides")
@dataclass(frozen=True, slots=True, kw_only=True)
class PlateSides(Field):
    """Data sum_k coefficients[j][i][k] (t - breaks[j][i])^k on piece i of the j-th side of `SIDES`."""

    lower: tuple[Exact, ...]
    upper: tuple[Exact, ...]
    breaks: tuple[tuple[Exact, ...], ...]
    coefficients: tuple[tuple[tuple[Exact, ...], ...], ...]

    def __post_init__(self) -> None:
        """Check the corners, and the pieces against the sides."""
        lower, upper = opposite_corners(self.lower, self.upper)
        object.__setattr__(self, "lower", lower)
        object.__setattr__(self, "upper", upper)
        if not len(self.breaks) == len(self.coefficients) == len(SIDES):
            raise FieldError(
                f"data must be given on {', '.join(SIDES)}, got breaks of {len(self.breaks)} and rows "
                f"of coefficients of {len(self.coefficients)} sides"
            )
        given = [
            Piecewise(breaks=breaks, coefficients=rows)
            for breaks, rows in zip(self.breaks, self.coefficients, strict=True)
        ]
        for side, pieces in zip(SIDES, given, strict=True):
            pieces.on(*side_ends(lower, upper, side))
        object.__setattr__(self, "breaks", tuple(pieces.breaks for pieces in given))
        object.__setattr__(self, "coefficients", tuple(pieces.coefficients for pieces in given))

    @property
    def dim(self) -> int:
        """2."""
        return 2

    @property
    def formula(self) -> str:
        """The problem in one line."""
        data = zip(SIDES, self.breaks, self.coefficients, strict=True)
        listed = ", ".join(f"{pieces_text(breaks, rows)} on {side}" for side, breaks, rows in data)
        return f"[{corner_text(self.lower)} to {corner_text(self.upper)}: {listed}]"

    @property
    def basis(self) -> Basis:
        """That of the half problems."""
        return _superposition(self).basis

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """Places where data or a derivative jump, and corners where they do not fit together."""
        inside = [
            singularity
            for term in _half_problems(self)
            for singularity, place in zip(term.singularities, term.continuation.places, strict=True)
            if place not in term.ends
        ]
        return (*inside, *_corner_singularities(self))

    def data(self, side: str) -> Pieces:
        """Return breaks and rows of a side as fractions."""
        j = tuple(SIDES).index(side)
        return Piecewise(breaks=self.breaks[j], coefficients=self.coefficients[j]).on(
            *side_ends(self.lower, self.upper, side)
        )

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        table = _cells(self) if ctx is FLOAT else None
        if table is None:
            return _superposition(self)._value(ctx, x, side)
        u, left_out = cells_value(table, *x)
        if left_out.size:
            u[left_out] = _superposition(self)._value(ctx, tuple(c[left_out] for c in x), None)
        return u

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        table = _cells(self) if ctx is FLOAT else None
        if table is None:
            return _superposition(self)._gradient(ctx, x, side)
        slopes, left_out = cells_gradient(table, *x)
        if left_out.size:
            slopes[:, left_out] = _superposition(self)._gradient(ctx, tuple(c[left_out] for c in x), None)
        return tuple(slopes)

    def _valid(self, points: Array) -> BoolArray:
        return in_rectangle(self.lower, self.upper, points)


def rectangle_sides(
    lower: Iterable[Number],
    upper: Iterable[Number],
    *,
    left: Piecewise | Number = 0,
    right: Piecewise | Number = 0,
    bottom: Piecewise | Number = 0,
    top: Piecewise | Number = 0,
) -> PlateSides:
    """Return the harmonic u in a rectangle with given values on all four sides.

    Parameters
    ----------
    lower, upper : pairs of numbers
        Opposite corners; decimals in strings are exact.
    left, right, bottom, top : data or number
        Values on the sides: `piecewise`, `ramp`, `step`, `tent`, `parabola` or a number. Data run with x on
        bottom and top, with y on left and right.

    Notes
    -----
    Data of two sides may differ in their corner: u then has no value there, and a singular point of exponent
    0 and kind "jump" is declared. If they agree but their second derivatives do not add up to 0, u behaves
    like r^2 log r there, exponent 2; and so on. Data by Fourier coefficients or by a function are added with
    `rectangle_series`; give them zero at both ends of their side.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> u = fields.rectangle_sides((0, 0), (2, 1), right=fields.ramp(0, 2), top=fields.ramp(0, 2))  # x y
    >>> u.value([[2.0, 1.0], [0.5, 0.5]]).tolist(), u.singularities
    ([2.0, 0.25], ())

    Raises
    ------
    FieldError
        If the corners or the data are not as described.
    """
    lower, upper = opposite_corners(lower, upper)
    given = {"left": left, "right": right, "bottom": bottom, "top": top}
    pieces = [
        (data if isinstance(data, Piecewise) else level(data, side)).on(*side_ends(lower, upper, side))
        for side, data in given.items()
    ]
    return PlateSides(
        lower=lower, upper=upper,
        breaks=tuple(breaks for breaks, _ in pieces), coefficients=tuple(rows for _, rows in pieces),
    )  # fmt: skip


@lru_cache(maxsize=64)
def _superposition(plate: PlateSides) -> Field:
    """Return B plus the half problems."""
    (x, y), c0, c1, c2, c3 = _bilinear(plate)
    terms: list[tuple[Number, Field]] = [(1, affine((c1, c2), c0 - c1 * x - c2 * y))]
    if c3:
        terms.append((c3 / 2, polynomial(2, "im", centre=(x, y))))
    return combined(*terms, *((1, half) for half in _half_problems(plate)))


@lru_cache(maxsize=64)
def _cells(plate: PlateSides) -> Cells | None:
    """Return the cells of the superposition, None if it is B alone."""
    halves = [half.half_problem() for half in _half_problems(plate)]
    if not halves:
        return None
    low, high = ((rational(c[0]), rational(c[1])) for c in (plate.lower, plate.upper))
    _, c0, c1, c2, c3 = _bilinear(plate)
    return tabulated(halves, low, high, (c0, c1, c2, c3))


def _bilinear(plate: PlateSides) -> tuple[tuple[Fraction, ...], Fraction, Fraction, Fraction, Fraction]:
    """Return the lower corner and c0 ... c3 of B = c0 + c1 s + c2 t + c3 s t, s and t counted from it."""
    lower, (a, b), corners = _frame(plate)
    low, twist = corners[0][0], corners[1][1] - corners[0][1] - corners[1][0] + corners[0][0]
    return lower, low, (corners[1][0] - low) / a, (corners[0][1] - low) / b, twist / (a * b)


def _frame(plate: PlateSides) -> tuple[tuple[Fraction, ...], tuple[Fraction, ...], list[list[Fraction]]]:
    """Return lower corner, extents, and values of bottom and top in corners [low or high x][same of y]."""
    low, high = (tuple(rational(c) for c in corner) for corner in (plate.lower, plate.upper))
    rows = [_end_derivatives(plate.data(side)) for side in ("bottom", "top")]
    return (
        low,
        tuple(b - a for a, b in zip(low, high, strict=True)),
        [[rows[j][end][0] for j in (0, 1)] for end in (0, 1)],
    )


@lru_cache(maxsize=64)
def _half_problems(plate: PlateSides) -> tuple[PlatePieces, ...]:
    """Return the solutions with data f - B on one side and zero on the others, those that are not zero."""
    _, _, corners = _frame(plate)
    ends = {
        "left": corners[0], "right": corners[1],
        "bottom": [corners[0][0], corners[1][0]], "top": [corners[0][1], corners[1][1]],
    }  # fmt: skip
    found = []
    for side, (first, last) in ends.items():
        breaks, rows = plate.data(side)
        slope = (last - first) / (breaks[-1] - breaks[0])
        rest = tuple(
            _less(row, (first + slope * (start - breaks[0]), slope))
            for row, start in zip(rows, breaks, strict=False)
        )
        if any(any(row) for row in rest):
            found.append(
                PlatePieces(lower=plate.lower, upper=plate.upper, side=side, breaks=breaks, coefficients=rest)
            )
    return tuple(found)


def _less(row: tuple[Fraction, ...], line: tuple[Fraction, Fraction]) -> tuple[Fraction, ...]:
    """Return the coefficients of a polynomial less a straight line."""
    pairs = itertools.zip_longest(row, line, fillvalue=Fraction(0))
    return tuple(c - d for c, d in pairs)


def _end_derivatives(pieces: Pieces) -> tuple[list[Fraction], list[Fraction]]:
    """Return the derivatives of order 0, 2, 4, ... of the data at both ends of the side."""
    breaks, rows = pieces
    length = breaks[-1] - breaks[-2]
    first = [math.factorial(p) * c for p, c in enumerate(rows[0])][::2]
    last = [
        sum((math.perm(k, p) * c * length ** (k - p) for k, c in enumerate(rows[-1]) if k >= p), Fraction(0))
        for p in range(0, len(rows[-1]), 2)
    ]
    return first, last


def _corner_singularities(plate: PlateSides) -> list[Singularity]:
    """Return the corners where the data of two sides do not fit together."""
    along = {side: _end_derivatives(plate.data(side)) for side in SIDES}
    found = []
    for i, j in itertools.product((0, 1), (0, 1)):
        horizontal, vertical = along[("bottom", "top")[j]][i], along[("left", "right")[i]][j]
        pairs = itertools.zip_longest(horizontal, vertical, fillvalue=Fraction(0))
        broken = next((k for k, (h, v) in enumerate(pairs) if h != (-1) ** k * v), None)
        if broken is not None:
            point = (float((plate.lower, plate.upper)[i][0]), float((plate.lower, plate.upper)[j][1]))
            kind = "power" if broken else "jump"
            found.append(Singularity(point=point, exponent=2.0 * broken, kind=kind))  # type: ignore[arg-type]
    return found
