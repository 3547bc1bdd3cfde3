"""Fluxes through curves in the plane as rises of the stream function: two values in place of an integral.

With the region on the left of travel from a to b, and v the conjugate of u,

    integral of n . grad u ds = v(b) - v(a)
    u = s log |x - p|:          s (angle of b - p less angle of a - p, by the way of the curve)
    u(x) = w(K^(-1/2) x):       integral of n . K grad u ds = sqrt(det K) times the flux of w between the
                                images of a and b: K^(1/2) J = sqrt(det K) J K^(-1/2), J = ((0, 1), (-1, 0))

(derived here). Of a fit it is the rise of the fit's own stream function, with the radius that the fit has for
it (`corner_flux_bound`). The angle that a curve sweeps about a source is that of its chord plus whole turns;
a straight side has none. On a curved one a sum that differs from quadrature is left to others.
"""

from __future__ import annotations

from typing import Any

import mpmath
import numpy as np

from laplace_verify.errors import FieldError
from laplace_verify.fields import CornerPowers, Field
from laplace_verify.fields.combinations import Combination
from laplace_verify.fields.exact import exact
from laplace_verify.fields.sources import LogSource
from laplace_verify.fields.stretched import Stretched
from laplace_verify.problems import Case, Quantity, StoredNumber
from laplace_verify.problems.closed_forms import DIGITS, in_digits
from laplace_verify.references.exact_pieces import exact_piece, number, written

__all__ = ["flux_by_streams"]

ASKED = DIGITS + 10
WORKING = DIGITS + 30
AGREEMENT = 1e-9


def flux_by_streams(case: Case, quantity: Quantity) -> StoredNumber | None:
    """Return the flux through an open curve with known ends, None where the stream function has no say.

    Raises
    ------
    FieldError
        If the field has no conjugate in closed form, or no value at an end.
    """
    problem, field = case.problem, case.exact
    if problem.dim != 2 or problem.coordinates != "cartesian":
        return None
    with mpmath.workdps(WORKING):
        piece = exact_piece(problem.pieces[str(quantity.where)].boundary)
        if piece is None or piece.turns[0]:
            return None
        ends = [piece.at(t)[0] for t in (0, 1)]
        if getattr(piece.boundary, "hole", False):  # an arc is travelled backwards round a hole
            ends.reverse()
        if isinstance(problem.conductivity, float):
            k = written(problem.conductivity)
            factor = None if k is None else number(k)
        else:
            factor, field, ends = _unstretched(problem.conductivity, field, ends)
        if factor is None:
            return None
        rise, error = _rise(field, ends)
        radius = abs(factor) * (error + mpmath.mpf(10) ** (1 - ASKED))
        found = in_digits(factor * rise, radius, case.exact.basis)
    # round a hole, or a source beside an arc, the stream function gains a turn; quadrature tells
    room = quantity.radius + AGREEMENT * (1.0 + abs(quantity.value))
    return found if abs(float(found.value) - quantity.value) <= room else None


def _rise(field: Field, ends: list[tuple[Any, ...]]) -> tuple[Any, Any]:
    """Return v at the second end less v at the first, and its error."""
    if isinstance(field, Combination):
        rise = error = mpmath.mpf(0)
        for factor, term in zip(field.factors, field.terms, strict=True):
            own, own_error = _rise(term, ends)
            share = mpmath.mpf(factor) if isinstance(factor, float) else number(factor)
            rise, error = rise + share * own, error + abs(share) * own_error
        return rise, error
    if isinstance(field, LogSource):
        strength, *centre = (number(c) for c in (field.strength, *field.point))
        (a, b), (c, d) = ([number(c) - p for c, p in zip(end, centre, strict=True)] for end in ends)
        angle = mpmath.atan2(a * d - b * c, a * c + b * d)
        return strength * angle, abs(strength) * mpmath.mpf(10) ** -ASKED
    stream = field.conjugate()
    if field.fit_error:
        return stream.formula_at(ends[1], ASKED) - stream.formula_at(ends[0], ASKED), _error(field, ends)
    (start, low, _), (stop, high, _) = (stream.enclosure(end, ASKED) for end in ends)
    return stop - start, low + high


def _error(field: Field, ends: list[tuple[Any, ...]]) -> Any:
    """Return the bound that a fit knows for the flux through a side.

    Raises
    ------
    FieldError
        If it knows none, or the ends are not those of a side.
    """
    if isinstance(field, CornerPowers) and field.flux_radius:
        vertices = [tuple(exact(c, "vertex") for c in vertex) for vertex in field.vertices]
        sides = zip(vertices, (*vertices[1:], vertices[0]), strict=True)
        if any(ends == list(side) for side in sides):
            return mpmath.mpf(field.flux_radius)
    raise FieldError(f"{field.formula} has no bound for the flux from {ends[0]} to {ends[1]}")


def _unstretched(
    conductivity: Any, field: Field, ends: list[tuple[Any, ...]]
) -> tuple[Any, Field, list[tuple[Any, ...]]]:
    """Return sqrt(det K), w and the images of the ends; None for the first if K is not that of the field."""
    if not isinstance(field, Stretched) or not isinstance(conductivity, np.ndarray):
        return None, field, ends
    tensor = mpmath.matrix([[number(c) for c in row] for row in field.tensor])
    given = [[written(c) for c in row] for row in conductivity.tolist()]
    if any(k is None or number(k) != tensor[i, j] for i, row in enumerate(given) for j, k in enumerate(row)):
        return None, field, ends
    inner = field.field
    # K^(-1/2) by Cayley and Hamilton: K^(1/2) = (K + d 1)/sqrt(trace K + 2 d), d = sqrt(det K)
    d = mpmath.sqrt(mpmath.det(tensor))
    root = (tensor + d * mpmath.eye(2)) / mpmath.sqrt(tensor[0, 0] + tensor[1, 1] + 2 * d)
    back = mpmath.inverse(root)
    images = [back * mpmath.matrix([number(c) for c in end]) for end in ends]
    return d, inner, [tuple(image) for image in images]
