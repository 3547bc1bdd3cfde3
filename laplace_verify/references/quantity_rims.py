"""Flux through a plane face of a field homogeneous about the origin, as an integral around its rim.

Let u be harmonic and homogeneous of degree d, the face lie in the plane x = c, and p = (y, z). Euler's
relation for u_x, homogeneous of degree d - 1, is c u_xx + p . grad u_x = (d - 1) u_x in the plane, and
u_xx = - u_yy - u_zz. Gauss's theorem in the plane, with the outward normal q of the rim there, gives

    (d + 1) integral of u_x over the face = integral of (p . q) u_x - c q . grad u around the rim

(derived here). So a field whose gradient is dear is needed along four edges only. Basis "confirmed", as for
other integrals (`quantity_integrals`).
"""

from __future__ import annotations

from fractions import Fraction
from typing import Any

import mpmath

from laplace_verify.fields import Field
from laplace_verify.fields.combinations import Combination
from laplace_verify.fields.half_edges import HalfEdge
from laplace_verify.fields.solids import Solid
from laplace_verify.geometry.segments import Face
from laplace_verify.problems import Case, Quantity, StoredNumber
from laplace_verify.problems.closed_forms import DIGITS, in_digits
from laplace_verify.references.exact_pieces import exact_piece, number, written
from laplace_verify.references.refined_quadrature import Integral, Tolerance, along

__all__ = ["flux_by_rim"]

ASKED = DIGITS + 10
WORKING = DIGITS + 30
SETTLED = mpmath.mpf(10) ** -(DIGITS + 3)
UNSURE = 10  # radius over the change between two levels
ENDS = [(Fraction(0), False), (Fraction(1), False)]


def flux_by_rim(case: Case, quantity: Quantity) -> StoredNumber | None:
    """Return the flux through a rectangle, None if the field is not known to be homogeneous.

    Raises
    ------
    FieldError
        If the field has no gradient at a point of the rim.
    """
    degree, k = _degree(case.exact), case.problem.conductivity
    face = case.problem.pieces[str(quantity.where)].boundary
    factor = written(k) if isinstance(k, float) else None
    if degree is None or factor is None or not isinstance(face, Face):
        return None
    with mpmath.workdps(WORKING):
        piece = exact_piece(face)
        if piece is None:
            return None
        total = Integral(mpmath.mpf(0), mpmath.mpf(0), mpmath.mpf(0))
        tolerance = Tolerance(SETTLED, abs(mpmath.mpf(quantity.value)))
        for free in (0, 1):
            for end in (0, 1):
                total += along(_density(case.exact, face, piece, free, end), ENDS, tolerance)
        share = number(factor) * face.outward / (degree + 1)
        radius = UNSURE * total.change + total.size * mpmath.mpf(10) ** (2 - ASKED)
        return in_digits(share * total.value, abs(share) * radius, "confirmed")


def _density(field: Field, face: Face, piece: Any, free: int, end: int) -> Any:
    """Return what is integrated along an edge over [0, 1], by the parameter that is free on it."""
    axes = [axis for axis in range(3) if axis != face.axis]
    across, sign = axes[1 - free], 2 * end - 1

    def place(t: Any) -> tuple[Any, ...]:
        point: tuple[Any, ...] = piece.at(*((t, end) if free == 0 else (end, t)))[0]
        return point

    length = place(Fraction(1))[axes[free]] - place(Fraction(0))[axes[free]]

    def density(t: Any) -> Any:
        point = place(t)
        gradient = field.gradient_at(point, ASKED)
        inside = number(point[across]) * gradient[face.axis] - number(point[face.axis]) * gradient[across]
        return sign * number(length) * inside

    return density


def _degree(field: Field) -> int | None:
    """Return the degree of a field that is homogeneous about the origin, None if it is not known to be."""
    if isinstance(field, HalfEdge):
        return 1
    if isinstance(field, Solid):
        return field.degree
    if isinstance(field, Combination):
        degrees = {_degree(term) for term in field.terms}
        return degrees.pop() if len(degrees) == 1 else None
    return None
