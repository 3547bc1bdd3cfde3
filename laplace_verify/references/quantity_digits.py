"""Quantities of a case in 50 digits where the exact field gives them: values, flux densities, fluxes.

A value is that of the field at the decimals its point is written with, with the field's own radius and basis.
A flux density along a coordinate axis is K times a component of the gradient, an exit gradient minus one. The
flux through a curve in the plane is a rise of the stream function (`quantity_streams`), that through a face
of a box with constant faces a series (`quantity_series`), that through a face of a homogeneous field an
integral around its rim (`quantity_rims`). Other fluxes, energies, uplifts and added masses are integrated
(`quantity_integrals`). Quantities in closed form have their digits already; what is left, if anything, keeps
the digits that quadrature in float64 confirms.
"""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import mpmath

from laplace_verify.errors import FieldError, ProblemError
from laplace_verify.problems import Case, Quantity, StoredNumber
from laplace_verify.problems.closed_forms import DIGITS, in_digits
from laplace_verify.problems.stored import BASES
from laplace_verify.references.quantity_integrals import integral_digits
from laplace_verify.references.quantity_rims import flux_by_rim
from laplace_verify.references.quantity_series import flux_by_series
from laplace_verify.references.quantity_streams import flux_by_streams

__all__ = ["with_quantity_digits"]

GUARD = 10
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
    rules = {
        "value": (_value,),
        "flux density": (_flux_density,),
        "exit gradient": (_exit_gradient,),
        "flux": (flux_by_streams, flux_by_series, flux_by_rim, integral_digits),
    }
    for rule in rules.get(quantity.kind, (integral_digits,)):
        try:
            found = rule(case, quantity)
        except FieldError:  # a singular end, no value on a piece
            continue
        if found is not None:
            return found
    return None


def _value(case: Case, quantity: Quantity) -> StoredNumber:
    """Return u at a point."""
    value, radius, basis = case.exact.enclosure(_decimals(quantity.where), _asked(case))
    return in_digits(value, radius, basis)


def _flux_density(case: Case, quantity: Quantity) -> StoredNumber | None:
    """Return K times a derivative along a coordinate axis."""
    k = case.problem.conductivity
    return _slope(case, quantity.where, quantity.direction, k) if isinstance(k, float) else None


def _exit_gradient(case: Case, quantity: Quantity) -> StoredNumber | None:
    """Return - n . grad u at a point of a piece that lies across a coordinate axis."""
    place = quantity.place or ()
    normal = case.problem.pieces[str(quantity.where)].normals([place])[0]
    return _slope(case, place, tuple(float(n) for n in normal), -1.0)


def _slope(case: Case, place: Any, direction: tuple[float, ...], factor: float) -> StoredNumber | None:
    """Return a factor times a derivative along a coordinate axis."""
    axes = [axis for axis, part in enumerate(direction) if part]
    if len(axes) != 1 or case.exact.fit_error:
        return None
    asked = _asked(case)
    gradient = case.exact.gradient_at(_decimals(place), asked)
    with mpmath.workdps(DIGITS + 2 * GUARD):
        k = mpmath.mpf(repr(factor)) * int(direction[axes[0]])
        radius = abs(k) * max(abs(part) for part in gradient) * mpmath.mpf(10) ** (1 - asked)
        return in_digits(k * gradient[axes[0]], radius, case.exact.basis)


def _decimals(point: Any) -> tuple[str, ...]:
    """Return the coordinates as they are written."""
    return tuple(repr(float(c)) for c in point)


def _asked(case: Case) -> int:
    """Return how many digits to ask for."""
    return min(DIGITS + GUARD, case.exact.most_digits)
