"""Quantities in closed form: numbers, fractions and formulas such as "36*pi*log(25/8)", to 50 digits."""

from __future__ import annotations

import math
from decimal import Decimal
from fractions import Fraction
from typing import Any

import mpmath

from laplace_verify.contexts import precise
from laplace_verify.errors import FieldError, ProblemError
from laplace_verify.fields.formula import Formula
from laplace_verify.problems.quantities import Exact
from laplace_verify.problems.stored import StoredNumber

__all__ = ["DIGITS", "closed_form", "in_digits"]

DIGITS = 50


def closed_form(name: str, exact: Exact) -> tuple[float, StoredNumber | None]:
    """Return a closed form as float64 and, unless it was a float, with 50 digits.

    >>> closed_form("charge", "12*pi")[1].value[:20]
    '37.69911184307751886'

    Raises
    ------
    ProblemError
        If it is no finite number.
    """
    if isinstance(exact, bool) or not isinstance(exact, float | int | str | Fraction):
        raise ProblemError(
            f"quantity {name!r}: exact must be a number, a fraction or a formula, got {exact!r}"
        )
    if not isinstance(exact, str) and not math.isfinite(exact):
        raise ProblemError(f"quantity {name!r}: exact must be finite, got {exact!r}")
    if isinstance(exact, float):
        return exact, None
    ctx = precise(DIGITS + 10)
    try:
        number = (
            Formula.parse(exact, names=()).value(ctx, {}) if isinstance(exact, str) else ctx.number(exact)
        )
        number = mpmath.mp.make_mpf(ctx.mpf(number)._mpf_)
    except (FieldError, TypeError, ValueError, ZeroDivisionError) as cause:
        raise ProblemError(
            f"quantity {name!r}: exact must be a number, a fraction or a formula, got {exact!r}: {cause}"
        ) from cause
    if not mpmath.isfinite(number):
        raise ProblemError(f"quantity {name!r}: exact must be finite, got {exact!r}")
    return float(number), in_digits(number, 0, "closed form")


def in_digits(number: Any, radius: Any, basis: str, digits: int = DIGITS) -> StoredNumber:
    """Return an mpmath number as text of `digits` digits, fewer where the radius leaves fewer.

    The stored radius is twice the radius given plus half a unit in the last digit printed.

    >>> in_digits(mpmath.mpf(1) / 3, mpmath.mpf("2e-7"), "confirmed")
    StoredNumber(value='0.33333333', radius='4.1e-7', basis='confirmed')
    """
    with mpmath.workdps(digits + 20):
        if not number and not radius:
            return StoredNumber(value="0", radius="0", basis=basis)
        top = int(mpmath.floor(mpmath.log10(max(abs(number), radius))))
        if radius:
            digits = max(1, min(digits, top - int(mpmath.floor(mpmath.log10(radius))) + 2))
        value = mpmath.nstr(number, digits)
        open_ = 2 * mpmath.mpf(radius) + abs(mpmath.mpf(value) - number)
        return StoredNumber(value=value, radius=_rounded_up(open_), basis=basis)


def _rounded_up(radius: Any) -> str:
    """Return two significant digits that are not below the radius."""
    if not radius:
        return "0"
    exponent = int(mpmath.floor(mpmath.log10(radius))) - 1
    steps = int(mpmath.ceil(radius / mpmath.mpf(10) ** exponent))
    return str(Decimal(steps).scaleb(exponent).normalize()).replace("E", "e")
