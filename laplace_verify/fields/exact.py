"""Parameters of a field as exact numbers, so that they mean the same in float64 and in any number of digits.

A whole number stays an int, a float keeps its exact binary value, a decimal or fraction in a string becomes a
`fractions.Fraction`: "0.1" is one tenth, 0.1 is 3602879701896397/36028797018963968.
"""

from __future__ import annotations

import math
import numbers
import re
from collections.abc import Iterable
from fractions import Fraction
from typing import Any, TypeAlias

import mpmath

from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError

__all__ = ["Exact", "exact", "exact_point", "offset", "power", "rational", "show"]

Exact: TypeAlias = int | float | Fraction

# Digits and exponent are bounded: Fraction("1e999999999") would fill the memory.
NUMERAL = re.compile(
    r"\s*[+-]?(\d{1,1000}(\.\d{0,1000})?|\.\d{1,1000})([eE][+-]?\d{1,3}|/\d{1,1000})?\s*", re.ASCII
)


def exact(number: Number, name: str) -> Exact:
    """Return `number` as int, float or Fraction of exactly the same value.

    >>> exact("2/3", "alpha"), exact("0.5", "alpha"), exact(4, "alpha")
    (Fraction(2, 3), Fraction(1, 2), 4)

    Raises
    ------
    FieldError
        If it is not a finite real number, or not a decimal or fraction if it is a string.
    """
    result: Exact
    if isinstance(number, str):
        if not NUMERAL.fullmatch(number):
            raise FieldError(
                f'{name} must be a decimal such as "0.25" or a fraction such as "2/3", got {number[:60]!r}'
            )
        try:
            result = _simplest(Fraction(number))
        except (ValueError, ZeroDivisionError) as cause:
            raise FieldError(f"{name} is no number: {number[:60]!r}") from cause
    elif isinstance(number, bool):
        raise FieldError(f"{name} must be a number, got {number!r}")
    elif isinstance(number, numbers.Integral):
        result = int(number)
    elif isinstance(number, numbers.Rational):
        result = _simplest(Fraction(int(number.numerator), int(number.denominator)))
    elif hasattr(number, "_mpf_"):
        result = _simplest(_fraction_of_mpf(number, name))
    elif isinstance(number, numbers.Real):
        result = float(number)
    else:
        raise FieldError(f"{name} must be a real number, got {type(number).__name__}: {str(number)[:60]}")
    try:
        finite = math.isfinite(float(result))
    except OverflowError:
        finite = False
    if not finite:
        raise FieldError(f"{name} must be finite and within the range of float64, got {str(number)[:60]}")
    return result


def exact_point(point: Iterable[Number], name: str, dims: tuple[int, ...] = (1, 2, 3)) -> tuple[Exact, ...]:
    """Return the coordinates of a point or vector as exact numbers.

    Raises
    ------
    FieldError
        If it has a number of coordinates that is not in `dims`, or one of them is no finite number.
    """
    if isinstance(point, str) or not isinstance(point, Iterable):
        raise FieldError(f"{name} must be a tuple of {_either(dims)} numbers, got {point!r}")
    coordinates = tuple(exact(c, f"{name}[{i}]") for i, c in enumerate(point))
    if len(coordinates) not in dims:
        noun = "coordinate" if dims == (1,) else "coordinates"
        raise FieldError(f"{name} must have {_either(dims)} {noun}, got {len(coordinates)}")
    return coordinates


def rational(number: Exact) -> Fraction:
    """Return the exact value as a fraction."""
    return Fraction(number)


def offset(ctx: Any, x: Any, place: Exact) -> Any:
    """Return x - place without losing the part of `place` that a float64 cannot hold.

    In float64 the place is split into its nearest float and the rest; close to the place the first difference
    is exact (Sterbenz), so the offset keeps its relative accuracy.
    """
    if ctx is not FLOAT:
        return x - ctx.number(place)
    high = float(place)
    if place.as_integer_ratio() == high.as_integer_ratio():
        return x - high
    return (x - high) - float(Fraction(place) - Fraction(high))


def power(ctx: Any, base: Any, exponent: Exact) -> Any:
    """Return base ** exponent, base >= 0, without losing the part of the exponent that a float64 cannot hold.

    That part is multiplied by log(base): near 0 it would cost several units in the last place.
    """
    if ctx is not FLOAT:
        return base ** ctx.number(exponent)
    high = float(exponent)
    low = 0.0 if isinstance(exponent, float) else float(Fraction(exponent) - Fraction(high))
    if not low:
        return base**high
    return base**high * (1 + low * FLOAT.log(FLOAT.where(base > 0, base, 1.0)))


def show(number: Exact) -> str:
    """Return a short text for formulas: 2/3, -1, 0.25.

    >>> show(Fraction(2, 3)), show(0.25), show(2.0)
    ('2/3', '0.25', '2')
    """
    if isinstance(number, float) and number.is_integer() and abs(number) < 1e15:
        return str(int(number))
    return f"{number:.6g}" if isinstance(number, float) else str(number)


def _simplest(fraction: Fraction) -> int | Fraction:
    """Return a whole number as int."""
    return fraction.numerator if fraction.denominator == 1 else fraction


def _fraction_of_mpf(number: Any, name: str) -> Fraction:
    """Return the exact value of an mpmath number."""
    sign, mantissa, exponent, _ = number._mpf_
    if not mpmath.isfinite(number):
        raise FieldError(f"{name} must be finite, got {number}")
    if abs(exponent) > 20000:
        raise FieldError(f"{name} must be within the range of float64, got an exponent of {exponent}")
    value = Fraction(int(mantissa)) * Fraction(2) ** int(exponent)
    return -value if sign else value


def _either(dims: tuple[int, ...]) -> str:
    """Return "2 or 3"."""
    return " or ".join(str(d) for d in dims)


def whole(number: Any, name: str, lowest: int, highest: int) -> int:
    """Return a whole number between two bounds.

    Raises
    ------
    FieldError
        If it is none.
    """
    if not isinstance(number, bool) and isinstance(number, numbers.Integral):
        result = int(number)
        if lowest <= result <= highest:
            return result
    given = repr(number) if isinstance(number, str) else str(number)
    raise FieldError(f"{name} must be a whole number from {lowest} to {highest}, got {given[:60]}")
