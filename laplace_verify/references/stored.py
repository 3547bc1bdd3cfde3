"""Reference values of a case: u and grad u at chosen points, in many digits.

A number is printed with `digits` significant digits, a fit's with two more than its bound leaves; the radius
is what the evaluation leaves open plus half a unit in the last printed digit, rounded up. The basis is that
of the field: "closed form" (only rounding is left, and two working precisions agree), "tail bound" (a series
with a proven bound) or "maximum-principle bound" (a fit, whose digits are limited and whose gradient is the
better known the farther from the boundary). A field without such a basis has no reference values.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import mpmath

from laplace_verify.errors import ProblemError
from laplace_verify.problems import Case, StoredValue
from laplace_verify.references.probes import Probe

__all__ = ["StoredReference", "stored_values"]

GUARD = 10  # digits beyond those printed
NOISE = 50  # digits below those asked for: what is left there of components that cancel
PROVEN = ("closed form", "tail bound", "maximum-principle bound")


@dataclass(frozen=True, slots=True, kw_only=True)
class StoredReference:
    """The reference values of one case.

    Attributes
    ----------
    case_id
        Id of the case they belong to.
    values
        Points with u, grad u, radius and basis.
    """

    case_id: str
    values: tuple[StoredValue, ...]


def stored_values(
    case: Case, points: Iterable[Probe | Sequence[str]], digits: int = 50
) -> tuple[StoredValue, ...]:
    """Return u and grad u of a case at points, as decimal strings of `digits` significant digits.

    Parameters
    ----------
    case
        The case; lengths and values in its own units.
    points
        Points of the closed shape, coordinates as decimal strings (exact), or `Probe`s.
    digits
        Significant digits, 1 to 200.

    Raises
    ------
    ProblemError
        If a point lies outside the shape (or on the boundary, if the field is a fit), the basis of
        the field is no proof, or `digits` is out of range.
    FieldError
        If u or its gradient has no value at a point.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> from laplace_verify.geometry import Disc
    >>> from laplace_verify.problems import case
    >>> pool = case(Disc((0, 0), 1), {}, fields.polynomial(2))
    >>> value = stored_values(pool, [("0.5", "0.1")], digits=6)[0]
    >>> value.value, value.gradient, value.radius, value.gradient_radius
    ('0.24', ('1.0', '-0.2'), '5.1e-7', '5.1e-6')
    """
    if isinstance(digits, bool) or not isinstance(digits, int) or not 1 <= digits <= 200:
        raise ProblemError(f"digits must be an integer from 1 to 200, got {digits!r}")
    if case.exact.basis not in PROVEN:
        raise ProblemError(
            f"case {case.id!r}: the digits of {case.exact.formula} rest on nothing proven "
            f"({case.exact.basis!r}), so they cannot be stored as a reference"
        )
    probes = (p if isinstance(p, Probe) else Probe(point=tuple(p), place="") for p in points)
    return tuple(_stored_value(case, probe, digits) for probe in probes)


def _stored_value(case: Case, probe: Probe, digits: int) -> StoredValue:
    """Return the reference value at one point."""
    point = probe.point
    place = [float(mpmath.mpf(c)) for c in point]
    if len(place) != case.dim or not case.problem.shape.contains([place], tol=1e-15).all():
        raise ProblemError(f"case {case.id!r}: {point} is no point of {case.problem.shape!r}")
    asked = min(digits + GUARD, case.exact.most_digits)
    value, open_, basis = case.exact.enclosure(point, digits=asked)
    gradient = case.exact.gradient_at(point, digits=asked)
    sloped = case.exact.gradient_error(tuple(Fraction(c) for c in point))
    if not sloped < math.inf:
        raise ProblemError(
            f"case {case.id!r}: the gradient at {point} is not bounded there; choose a point off the boundary"
        )
    with mpmath.workdps(digits + 2 * GUARD):
        (text,), radius = _printed((value,), 2 * open_, digits)
        largest_change = max(abs(g) for g in gradient) * mpmath.mpf(10) ** -asked
        slopes, gradient_radius = _printed(gradient, 2 * (sloped + largest_change), digits)
        return StoredValue(
            place=probe.place,
            point=point,
            value=text,
            gradient=slopes,
            radius=radius,
            gradient_radius=gradient_radius,
            basis=basis,
        )


def _printed(numbers: Sequence[Any], open_: Any, digits: int) -> tuple[tuple[str, ...], str]:
    """Return the numbers in decimals, and what these may be off: what was open and half a unit each.

    Components that cancel leave noise far below the digits asked for; it is printed as zero.
    """
    noise = mpmath.mpf(10) ** -(digits + GUARD + NOISE)
    texts, off = [], mpmath.mpf(0)
    for number in numbers:
        if abs(number) <= noise:
            texts.append("0.0")
            off = max(off, abs(number))
            continue
        known = math.floor(mpmath.log10(abs(number))) + 1  # digits before the decimal point
        sure = digits if not open_ else known + math.ceil(-mpmath.log10(open_)) + 2
        shown = max(1, min(digits, sure))
        texts.append(mpmath.nstr(number, shown))
        off = max(off, mpmath.mpf(10) ** (known - shown) / 2)
    return tuple(texts), _rounded_up(open_ + off)


def _rounded_up(radius: Any) -> str:
    """Return two significant digits that are not below the radius.

    >>> _rounded_up(mpmath.mpf("1.23e-7")), _rounded_up(mpmath.mpf(0))
    ('1.3e-7', '0.0')
    """
    if not radius:
        return "0.0"
    with mpmath.workdps(30):
        exponent = int(mpmath.floor(mpmath.log10(radius))) - 1
        steps = mpmath.ceil(radius / mpmath.mpf(10) ** exponent)
        return str(mpmath.nstr(steps * mpmath.mpf(10) ** exponent, 3))
