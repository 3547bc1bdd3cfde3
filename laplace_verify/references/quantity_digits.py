"""Quantities of a case in 50 digits where the exact field gives them: values, flux densities, fluxes.

A value is that of the field at the decimals its point is written with, with the field's own radius and basis.
A flux density along a coordinate axis is K times a component of the gradient. The flux through a straight
side of a plane shape is K times the rise of the conjugate function from the start of the side to its end (the
region lies on the left): two values in place of an integral. Quantities in closed form have their digits
already; integrals without any of these keep the digits that quadrature at two orders confirms.
"""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import mpmath

from laplace_verify.errors import FieldError, ProblemError
from laplace_verify.problems import Case, Quantity, StoredNumber
from laplace_verify.problems.closed_forms import DIGITS, in_digits
from laplace_verify.problems.stored import BASES

__all__ = ["with_quantity_digits"]

GUARD = 10
SHORT = 12  # characters of a coordinate that was written down, not computed
AGREEMENT = 1e-9


def with_quantity_digits(case: Case) -> Case:
    """Return the case with as many digits of its quantities as the exact field gives, up to 50.

    Raises
    ------
    ProblemError
        If they disagree with the quantity in float64.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> from laplace_verify.geometry import Rectangle
    >>> from laplace_verify.problems import case, flux_through
    >>> wave = case(Rectangle((0, 0), (1, 1)), {}, fields.exp_trig(1), quantities={"q": flux_through("top")})
    >>> with_quantity_digits(wave).quantities["q"].digits.value[:30]  # e sin 1
    '2.2873552871788423912081719067'
    """
    quantities = {}
    for name, quantity in case.quantities.items():
        found = None
        if quantity.digits is None and case.exact.basis in BASES:
            found = _digits(case, quantity)
        if found is None:
            quantities[name] = quantity
            continue
        room = quantity.radius + AGREEMENT * (1.0 + abs(quantity.value))
        if not abs(float(found.value) - quantity.value) <= room:
            raise ProblemError(
                f"case {case.id!r}, quantity {name!r}: {found.value} in {DIGITS} digits, "
                f"{quantity.value!r} +- {quantity.radius:.2g} in float64"
            )
        quantities[name] = replace(quantity, digits=found)
    return replace(case, quantities=quantities)


def _digits(case: Case, quantity: Quantity) -> StoredNumber | None:
    """Return the digits of one quantity, None where the field does not give them."""
    rules = {"value": _value, "flux density": _flux_density, "flux": _flux}
    rule = rules.get(quantity.kind)
    if rule is None:
        return None
    try:
        return rule(case, quantity)
    except FieldError:  # a singular end, no conjugate in closed form
        return None


def _value(case: Case, quantity: Quantity) -> StoredNumber:
    """Return u at a point."""
    value, radius, basis = case.exact.enclosure(_decimals(quantity.where), _asked(case))
    return in_digits(value, radius, basis)


def _flux_density(case: Case, quantity: Quantity) -> StoredNumber | None:
    """Return K times a derivative along a coordinate axis."""
    axes = [axis for axis, part in enumerate(quantity.direction) if part]
    if len(axes) != 1 or not isinstance(case.problem.conductivity, float) or case.exact.fit_error:
        return None
    asked = _asked(case)
    gradient = case.exact.gradient_at(_decimals(quantity.where), asked)
    with mpmath.workdps(DIGITS + 2 * GUARD):
        k = mpmath.mpf(repr(case.problem.conductivity)) * int(quantity.direction[axes[0]])
        radius = abs(k) * max(abs(part) for part in gradient) * mpmath.mpf(10) ** (1 - asked)
        return in_digits(k * gradient[axes[0]], radius, case.exact.basis)


def _flux(case: Case, quantity: Quantity) -> StoredNumber | None:
    """Return K times the rise of the conjugate along a straight side."""
    problem, name = case.problem, str(quantity.where)
    if problem.dim != 2 or problem.coordinates != "cartesian" or case.window is not None:
        return None
    side = problem.pieces[name].boundary
    ends = [_decimals(end) for end in side.ends]
    written = all(len(c) <= SHORT for end in ends for c in end)
    if side.curved or not written or not isinstance(problem.conductivity, float) or case.exact.fit_error:
        return None
    stream = case.exact.conjugate()
    (start, low, _), (stop, high, basis) = (stream.enclosure(end, _asked(case)) for end in ends)
    with mpmath.workdps(DIGITS + 2 * GUARD):
        k = mpmath.mpf(repr(problem.conductivity))
        found = in_digits(k * (stop - start), k * (low + high), basis)
    # around a source the conjugate gains a turn; quadrature tells
    agrees = abs(float(found.value) - quantity.value) <= quantity.radius + AGREEMENT * (
        1 + abs(quantity.value)
    )
    return found if agrees else None


def _decimals(point: Any) -> tuple[str, ...]:
    """Return the coordinates as they are written."""
    return tuple(repr(float(c)) for c in point)


def _asked(case: Case) -> int:
    """Return how many digits to ask for."""
    return min(DIGITS + GUARD, case.exact.most_digits)
