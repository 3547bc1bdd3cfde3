"""Flux through a face of a box whose faces are held at constant values, by its double series.

If the four faces beside it have the value v of the face too, only the opposite face, at w, drives a flux.
With the face a by b and the distance h between the two, the solution of Carslaw and Jaeger (1959, section
6.2) gives

    integral of n . grad u = (v - w) sum over odd m, n of 64 a b/(pi^4 m^2 n^2) g/sinh(g h),
    g = pi hypot(m/a, n/b).

*Tail.* x/sinh(x h) <= (2/h) exp(-x h/2), because t <= 2 sinh(t/2), t = x h; and g h/2 >= s m + t n with
s, t = pi h/(2 sqrt 2 a), pi h/(2 sqrt 2 b). So the terms with m > M or n > N add up to at most

    128 a b/(pi^4 h) [exp(-s M) + exp(-t N)] / ((1 - exp(-s)) (1 - exp(-t)))

(derived here). If a face beside it differs, the flux is infinite, which `problems.quantity_values` says.
"""

from __future__ import annotations

from fractions import Fraction

import mpmath

from laplace_verify.fields.box_faces import FACES, BoxFaces
from laplace_verify.fields.exact import rational
from laplace_verify.problems import Case, Quantity, StoredNumber
from laplace_verify.problems.closed_forms import DIGITS, in_digits
from laplace_verify.references.exact_pieces import number, written

__all__ = ["flux_by_series"]

ASKED = DIGITS + 10
WORKING = DIGITS + 30


def flux_by_series(case: Case, quantity: Quantity) -> StoredNumber | None:
    """Return the flux through a face, None if the field is not that of a box with constant faces."""
    field, k = case.exact, case.problem.conductivity
    factor = written(k) if isinstance(k, float) else None
    if not isinstance(field, BoxFaces) or factor is None or quantity.where not in FACES:
        return None
    face = FACES.index(str(quantity.where))
    values = [rational(v) for v in field.values]
    beside = {v for other, v in enumerate(values) if other // 2 != face // 2}
    if beside != {values[face]}:
        return None
    a, b = (extent for axis, extent in enumerate(field.extents) if axis != face // 2)
    drive = values[face] - values[face ^ 1]
    with mpmath.workdps(WORKING):
        total, tail = _series(a, b, field.extents[face // 2])
        share = number(factor * drive)
        radius = abs(share) * (tail + total * mpmath.mpf(10) ** (1 - ASKED))
        return in_digits(share * total, radius, field.basis)


def _series(a: Fraction, b: Fraction, h: Fraction) -> tuple[mpmath.mpf, mpmath.mpf]:
    """Return the sum of the series and a bound for what is left out."""
    s, t = (mpmath.pi * number(h / side) / (2 * mpmath.sqrt(2)) for side in (a, b))
    most_m, most_n = (int(mpmath.ceil(ASKED * mpmath.log(10) / rate)) for rate in (s, t))
    terms = (
        _term(number(m / a), number(n / b), number(h)) / (m * n) ** 2
        for m in range(1, most_m + 1, 2)
        for n in range(1, most_n + 1, 2)
    )
    scale = 64 * number(a * b) / mpmath.pi**4
    beyond = (mpmath.exp(-s * most_m) + mpmath.exp(-t * most_n)) / (mpmath.expm1(-s) * mpmath.expm1(-t))
    return scale * mpmath.fsum(terms), 2 * scale / number(h) * beyond


def _term(p: mpmath.mpf, q: mpmath.mpf, h: mpmath.mpf) -> mpmath.mpf:
    """Return g/sinh(g h), g = pi hypot(p, q)."""
    g = mpmath.pi * mpmath.hypot(p, q)
    return g / mpmath.sinh(g * h)
