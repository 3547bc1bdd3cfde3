"""A proven bound on the error of a corner fit, from its residual on the boundary.

The fit is harmonic exactly, so e = fit - solution is harmonic and continuous. *Maximum principle.* If |e| <=
eps on the Dirichlet sides and |de/dn| <= eta on the Neumann sides, and psi >= 0 is harmonic with dpsi/dn >= 1
on the Neumann sides, then |e| <= eps + eta psi (test Green's identity with the negative part of eps + eta psi
-+ e; background: Protter and Weinberger 1967, from memory, unchecked). Where the residual of a Neumann side
is exactly zero dpsi/dn >= 0 suffices. Here psi is a quadratic, found by linear programming and then verified
in exact arithmetic.

*Between the samples.* A side is cut into panels. On a panel of half length h about m every term is analytic
in the ellipse with foci at the ends and semi-axes h (rho +- 1/rho)/2, as long as no other corner lies within
R = h (rho + 1/rho)/2 of m; there |z^λ| <= ((|m - w| +- R)/scale)^λ. A function bounded by M in that ellipse
has a Chebyshev series whose tail beyond degree n is at most 2 M rho^-n / (rho - 1) (Bernstein; Trefethen
2013, Approximation Theory and Approximation Practice, theorem 8.2), and a polynomial of degree n is at most
its largest value at N > n Chebyshev points, divided by cos(n pi / (2 N)) (Ehlich and Zeller 1964; both from
memory, unchecked). With S the largest sample and T the tail, the residual is at most
(S + T)/cos(n pi/(2N)) + T.

*Rounding.* The samples are taken in fixed point with hundreds of bits to spare. A recurrence step adds at
most 4 units, an entry of a row at most 8 (j + 1) of them times its factor; the allowance below is larger.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from decimal import ROUND_CEILING, Context, Decimal
from fractions import Fraction
from typing import Any, Literal, NamedTuple

import numpy as np
from scipy.optimize import linprog

from laplace_verify.errors import ProblemError
from laplace_verify.references._corner_rows import DATA_DEGREE, Rows, Terms, chebyshev, check_degree

__all__ = ["UP", "Bound", "error_bound", "largest_in_disc"]

RADII = (1.2, 1.4, 1.7, 2.0, 2.5, 3.0, 4.0, 5.0, 6.5, 8.0, 10.0, 13.0)  # rho
CLEAR = 0.9  # largest R in units of the distance to a corner
LARGEST_DEGREE = 130  # panels that need more are halved
SHORTEST = 2.0**-12  # of a side
SAFE = 1.0 + 1e-9  # float64 rounding of the bounds themselves
UP = Context(prec=2, rounding=ROUND_CEILING)


@dataclass(frozen=True, slots=True, kw_only=True)
class Bound:
    """The radius as a decimal string, rounded up, and its basis; the residuals on the two kinds of sides."""

    radius: str
    basis: Literal["maximum-principle bound", "uncertified"]
    residuals: dict[str, Decimal]


class _Panel(NamedTuple):
    start: Fraction
    stop: Fraction
    degree: int
    tail: float


def error_bound(rows: Rows, terms: Terms, texts: list[str], target: float) -> Bound:
    """Return a bound for |fit - solution| on the closed polygon.

    Parameters
    ----------
    rows, terms
        The ansatz.
    texts
        Coefficients of all columns as decimal strings.
    target
        Size of the residual that is expected; tails are made a small part of it.

    Raises
    ------
    ProblemError
        If data are no polynomials, or there is no quadratic comparison function for the Neumann sides.
    """
    worst: dict[str, Decimal] = {"dirichlet": Decimal(0), "neumann": Decimal(0)}
    busy = []
    sizes = [abs(float(text)) for text in texts]
    for side, formula in enumerate(terms.data):
        check_degree(formula, "data of a corner fit")
        if terms.idle(side):
            continue
        busy.append(side)
        kind = terms.kinds[side]
        worst[kind] = max(worst[kind], _on_side(rows, terms, texts, sizes, side, target))
    total, needs = worst["dirichlet"], [side for side in busy if terms.kinds[side] == "neumann"]
    if needs:
        highest = comparison(terms, needs)
        total += worst["neumann"] * Decimal(float(highest) * SAFE)
    return Bound(radius=str(UP.create_decimal(total)), basis="maximum-principle bound", residuals=worst)


def _on_side(
    rows: Rows, terms: Terms, texts: list[str], sizes: list[float], side: int, target: float
) -> Decimal:
    """Return a bound of the residual on a side."""
    unit = 1 << rows.bits
    numbers = np.array([_fixed(text, rows.bits) for text in texts], dtype=object)
    # units of the last place: factors at most 2 n / (distance of a corner), see the module's text
    slack = (sum(sizes) + 1.0) * len(texts) ** 2 * 1e4
    largest = Decimal(0)
    for panel in _panels(terms, sizes, side, target / 100.0):
        count = 2 * panel.degree
        places = [panel.start + (panel.stop - panel.start) * t for t in chebyshev(count)]
        matrix = np.array(rows.columns(side, places), dtype=object)
        residual = [
            abs((int(row @ numbers) >> rows.bits) - data)
            for row, data in zip(matrix, rows.data(side, places), strict=True)
        ]
        sample = Decimal(max(residual) + math.ceil(slack)) / Decimal(unit)
        tail = Decimal(panel.tail * SAFE)
        # the nodes are rounded by 1e-18 of a panel: n = N/2 has room for the factor 1 + 1e-12
        factor = Decimal(SAFE / math.cos(math.pi * panel.degree / (2 * count)))
        largest = max(largest, (sample + tail) * factor + tail)
    return largest


def _fixed(text: str, bits: int) -> int:
    """Return the whole number nearest to 2^bits times a decimal."""
    return round(Fraction(text) * (1 << bits))


def _panels(terms: Terms, sizes: list[float], side: int, tail: float) -> list[_Panel]:
    """Return panels that cover a side, each with a degree for which the tail is small enough."""
    waiting, found = [(Fraction(0), Fraction(1))], []
    while waiting:
        start, stop = waiting.pop()
        best = _degree(terms, sizes, side, start, stop, tail)
        if best is not None and best[0] <= LARGEST_DEGREE:
            found.append(_Panel(start, stop, *best))
            continue
        if stop - start < SHORTEST:
            raise ProblemError(
                f"no bound on side {side + 1}: another corner of the fit comes too close to it"
            )
        middle = (start + stop) / 2
        waiting += [(start, middle), (middle, stop)]
    return found


def _degree(
    terms: Terms, sizes: list[float], side: int, start: Fraction, stop: Fraction, tail: float
) -> tuple[int, float] | None:
    """Return the smallest degree with a small tail, and the tail; None if the panel is too long."""
    a, b = (np.array([float(c) for c in end]) for end in terms.ends(side))
    middle = a + (b - a) * float((start + stop) / 2)
    half = float(np.hypot(*(b - a))) * float(stop - start) / 2
    best: tuple[int, float] | None = None
    for rho in RADII:
        reach = half * (rho + 1 / rho) / 2 * SAFE
        bound = largest_in_disc(terms, sizes, side, middle, reach)
        if bound is None:
            break
        bound *= 2 / (rho - 1)
        n = max(DATA_DEGREE, 4, math.ceil(math.log(max(bound / tail, 1.0)) / math.log(rho)))
        if best is None or n < best[0]:
            best = n, bound * rho**-n
    return best


def largest_in_disc(terms: Terms, sizes: list[float], side: int, middle: Any, reach: float) -> float | None:
    """Return a bound of the sum of all terms in a disc, None if another corner is too near.

    Terms of a side's own corners are exactly zero (powers) or polynomials of low degree (logarithms) on it.
    """
    flux = terms.kinds[side] == "neumann"
    total, column = 0.0, 0
    for k, corner in enumerate(terms.corners):
        count = len(terms.orders[k])
        if terms.own(side, k):
            column += count + len(terms.logs[k])
            continue
        distance = float(np.hypot(*(middle - [float(c) for c in corner.apex])))
        if reach > CLEAR * distance:
            return None
        near, far = (distance - reach) / float(corner.scale), (distance + reach) / float(corner.scale)
        step = math.pi / corner.opening
        for j, size in zip(terms.orders[k], sizes[column : column + count], strict=True):
            exponent = corner.powers.multiple(j) * step
            total += size * _power(near, far, exponent, float(corner.scale), flux)
        column += count
        for n, size in zip(terms.logs[k], sizes[column : column + len(terms.logs[k])], strict=True):
            log = max(abs(math.log(near)), abs(math.log(far))) + 4 * math.pi
            total += size * _power(near, far, n, float(corner.scale), flux) * (log + 1.0)
        column += len(terms.logs[k])
    part = terms.polynomial
    far = (float(np.hypot(*(middle - [float(c) for c in part.centre]))) + reach) / float(part.scale)
    for n in range(terms.degree + 1):
        width = 2 if n else 1
        size = sum(sizes[column : column + width])
        column += width
        total += size * (_power(far, far, n, float(part.scale), flux) if n or not flux else 0.0)
    return total * SAFE


def _power(near: float, far: float, exponent: float, scale: float, flux: bool) -> float:
    """Return a bound of |z^e|, or of |e z^(e-1)| / scale, for near <= |z| <= far."""
    if not flux:
        return math.pow(far, exponent)
    return exponent / scale * math.pow(far if exponent >= 1.0 else near, exponent - 1.0)


def comparison(terms: Terms, needs: list[int]) -> Fraction:
    """Return the largest value of a quadratic psi >= 0 with dpsi/dn >= 1 on the sides `needs`.

    psi = a x + b y + c (x^2 - y^2) + d x y + constant, with dpsi/dn >= 0 on the other Neumann sides. The
    coefficients come from linear programming, rounded; that they serve is checked exactly: dpsi/dn is linear
    along a side, so its ends decide, and psi is a quadratic there.

    Raises
    ------
    ProblemError
        If there is none.
    """
    sides = range(len(terms.vertices))
    boundary = np.array([
        [float(a[i] + (b[i] - a[i]) * Fraction(t, 8)) for i in (0, 1)]
        for a, b in (terms.ends(side) for side in sides) for t in range(9)
    ])  # fmt: skip
    x, y = boundary.T
    values = np.column_stack((x, y, x * x - y * y, x * y))
    one = np.ones((len(values), 1))
    rows, right = (
        [*np.hstack((values, one, -one)), *np.hstack((-values, -one, 0 * one))],
        [0.0] * (2 * len(x)),
    )
    for side in sides:
        if terms.kinds[side] != "neumann":
            continue
        normal, length = _normal(terms, side)
        for end in terms.ends(side):
            slopes = [float(s) for s in _slopes(normal, end)]
            rows.append(np.array([*(-s / length for s in slopes), 0.0, 0.0]))
            right.append(-1.02 if side in needs else 0.0)
    found = linprog([0, 0, 0, 0, 0, 1], A_ub=np.array(rows), b_ub=right, bounds=[(None, None)] * 6)
    if found.status == 0 and found.x is not None:
        chosen = [Fraction(round(float(c) * 4096), 4096) for c in found.x[:4]]
        if _serves(terms, needs, chosen):
            low, high = _range(terms, chosen)
            return high - low
    raise ProblemError(
        "no quadratic comparison function exists for these Neumann sides, so the error cannot be bounded; "
        "give u on more sides"
    )


def _normal(terms: Terms, side: int) -> tuple[tuple[Fraction, Fraction], float]:
    """Return an outward normal as long as the side, and the length."""
    (a, b), (c, d) = terms.ends(side)
    return (d - b, a - c), terms.length(side)


def _slopes(normal: tuple[Fraction, Fraction], point: tuple[Fraction, Fraction]) -> list[Fraction]:
    """Return the derivatives along a normal of x, y, x^2 - y^2 and x y."""
    (n, m), (x, y) = normal, point
    return [n, m, 2 * (x * n - y * m), x * m + y * n]


def _serves(terms: Terms, needs: list[int], chosen: list[Fraction]) -> bool:
    """Return whether dpsi/dn is large enough on all Neumann sides, in exact arithmetic."""
    for side, kind in enumerate(terms.kinds):
        if kind != "neumann":
            continue
        normal, _ = _normal(terms, side)
        square = normal[0] ** 2 + normal[1] ** 2
        for end in terms.ends(side):
            slope = sum((c * s for c, s in zip(chosen, _slopes(normal, end), strict=True)), Fraction(0))
            if slope < 0 or (side in needs and slope * slope < square):
                return False
    return True


def _range(terms: Terms, chosen: list[Fraction]) -> tuple[Fraction, Fraction]:
    """Return bounds of a x + b y + c (x^2 - y^2) + d x y on the boundary, and so in the polygon."""

    def psi(point: tuple[Fraction, Fraction]) -> Fraction:
        x, y = point
        return chosen[0] * x + chosen[1] * y + chosen[2] * (x * x - y * y) + chosen[3] * x * y

    low: list[Fraction] = []
    high: list[Fraction] = []
    for side in range(len(terms.vertices)):
        a, b = terms.ends(side)
        middle = ((a[0] + b[0]) / 2, (a[1] + b[1]) / 2)
        first, centre, last = psi(a), psi(middle), psi(b)
        # Bernstein form of a quadratic: its values lie within those of its control points
        control = 2 * centre - (first + last) / 2
        low.append(min(first, control, last))
        high.append(max(first, control, last))
    return min(low), max(high)
