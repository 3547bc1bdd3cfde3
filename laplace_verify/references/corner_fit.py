"""Solutions in polygons without closed form, fitted by corner powers in high precision.

The boundary value problem: a polygon, on every side u or the flux du/dn given as a polynomial in x and y. The
ansatz is that of `fields.corner_powers`: at chosen corners the powers r^λ with the exact exponents of the
conditions on their two sides, logarithmic terms where data resonate with them, and one polynomial. On its own
two sides a corner's powers satisfy the homogeneous conditions exactly, so that only the sum of the others is
left to fit there, an analytic function. Convergence is exponential in the number of terms (Fox, Henrici and
Moler 1967, SIAM J. Numer. Anal. 4, 89-102; Betcke and Trefethen 2005, SIAM Review 47, 469-491; both from
memory, unchecked).

The coefficients minimise |A c - b|^2 + δ^2 |c|^2 over Chebyshev points of all sides. The second term keeps
them small where the terms are nearly dependent (Adcock and Huybrechs 2019, SIAM Review 61, 443-473; from
memory, unchecked). All of it is done in whole numbers, so that every machine finds the same digits.

Terms of a close fit may be 1e14 times as large as u and cancel, so that float64 evaluates sums about many
points instead (`local_fit`). Those of a coarse fit are small enough for float64 as they are.

The error bounds do not depend on how the coefficients were found: see `corner_bound`, `corner_flux_bound`.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from laplace_verify.errors import FieldError, ProblemError
from laplace_verify.fields import CornerPowers, CornerSeries, Formula, PolynomialPart
from laplace_verify.fields.exact import Exact, exact_point
from laplace_verify.references._corner_rows import Rows, Terms, chebyshev
from laplace_verify.references._whole_numbers import gram, least_squares
from laplace_verify.references.corner_bound import error_bound
from laplace_verify.references.corner_flux_bound import flux_bound
from laplace_verify.references.local_fit import local_sums

__all__ = ["CornerFit", "CornerTerms", "SideData", "fit_corners"]

CLOSE = 1e-9  # a fit with a smaller error bound has local sums for float64
SPARE = 120  # bits beyond those that the normal equations lose


@dataclass(frozen=True, slots=True, kw_only=True)
class SideData:
    """Condition on one side: u = data ("dirichlet") or du/dn = data ("neumann"), n the outward unit normal.

    Attributes
    ----------
    kind
        "dirichlet" or "neumann".
    data
        A polynomial in x and y as a formula string, of degree at most 12.
    """

    kind: Literal["dirichlet", "neumann"] = "dirichlet"
    data: str = "0"


@dataclass(frozen=True, slots=True, kw_only=True)
class CornerTerms:
    """Terms of the ansatz at one vertex.

    Attributes
    ----------
    vertex
        Its number, from 0.
    powers
        Highest j.
    every
        2 keeps j = 1, 3, 5, ... only, for solutions symmetric about the bisector.
    logs
        Powers n of terms z^n log z, with n times the opening a multiple of pi (half a multiple if the
        condition changes).
    """

    vertex: int
    powers: int = 0
    every: int = 1
    logs: tuple[int, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class CornerFit:
    """A problem and an ansatz.

    Attributes
    ----------
    vertices
        Corners as decimal strings, counter-clockwise; a side walked there and back is a slit.
    sides
        One for each side, side k from vertex k to vertex k + 1.
    corners
        Terms at some of the vertices.
    degree
        Of the polynomial; -1 for none.
    centre
        Of the polynomial.
    digits
        Digits behind the decimal point aimed at: δ is 10^-(digits + 4).
    density
        Points on a side of length L: density times sqrt(L / longest side).
    """

    vertices: tuple[tuple[str, str], ...]
    sides: tuple[SideData, ...]
    corners: tuple[CornerTerms, ...]
    degree: int = -1
    centre: tuple[str, str] = ("0", "0")
    digits: int = 52
    density: int = 100

    def __post_init__(self) -> None:
        """Check what can be checked without work."""
        if len(self.sides) != len(self.vertices):
            raise ProblemError(
                f"a polygon of {len(self.vertices)} vertices needs as many sides, got {len(self.sides)}"
            )
        if not any(side.kind == "dirichlet" for side in self.sides):
            raise ProblemError("a corner fit needs u on some side: without one no error bound exists")
        for corner in self.corners:
            if not 0 <= corner.vertex < len(self.vertices):
                raise ProblemError(f"there is no vertex {corner.vertex}; they count from 0")


def fit_corners(fit: CornerFit) -> CornerPowers:
    """Return the fitted solution with a bound on its error.

    The field's `trust` is "maximum-principle bound" if the bound is proven, see `corner_bound.error_bound`.

    Parameters
    ----------
    fit
        Problem and ansatz.

    Raises
    ------
    ProblemError
        If data are no polynomials, a logarithmic term does not fit its corner, or no bound can be given.

    Examples
    --------
    In the L-shape (-1, 1)^2 without x > 0, y < 0, with u = 0 on the inner and u = 1 on the two long sides and
    no flux through the two others, the first coefficient is 1.127980401059387939881 (published):

    >>> one, insulated = SideData(data="1"), SideData(kind="neumann")
    >>> l_shape = CornerFit(
    ...     vertices=(("0", "0"), ("1", "0"), ("1", "1"), ("-1", "1"), ("-1", "-1"), ("0", "-1")),
    ...     sides=(SideData(), insulated, one, one, insulated, SideData()),
    ...     corners=(CornerTerms(vertex=0, powers=79, every=2),),
    ...     digits=8, density=20,
    ... )
    >>> u = fit_corners(l_shape)
    >>> float(u.radius) < 1e-4, u.basis
    (True, 'maximum-principle bound')
    >>> first = float(u.precise.corners[0].coefficients[0])  # of (r/scale)^(2/3)
    >>> round(first / float(u.precise.corners[0].scale) ** (2 / 3), 6)
    1.12798
    """
    terms = _terms(fit)
    bits = 2 * round((fit.digits + 4) / math.log10(2)) + 2 * round(fit.digits / math.log10(2)) + SPARE
    rows = Rows(terms, bits)
    places = _places(fit, terms)
    matrix, right = [], []
    for side, points in places:
        matrix += rows.columns(side, points)
        right += rows.data(side, points)
    products = gram(matrix, right, bits)
    delta = round((fit.digits + 4) / math.log10(2))
    precise = least_squares(products, delta, bits)
    texts = _texts(precise, bits, fit.digits + 16)
    expansion = terms.expansion(dict(enumerate(texts)))
    bound = error_bound(rows, terms, texts, 10.0**-fit.digits)
    return CornerPowers(
        precise=expansion,
        swift=local_sums(terms, expansion) if float(bound.radius) < CLOSE else (),
        vertices=terms.vertices,
        radius=bound.radius,
        trust=bound.basis,
        flux_radius=flux_bound(terms, texts, bound),
    )


def _terms(fit: CornerFit) -> Terms:
    """Return the ansatz with exact geometry."""
    try:
        vertices = tuple(exact_point(v, f"vertices[{i}]", (2,)) for i, v in enumerate(fit.vertices))
        data = tuple(Formula.parse(side.data) for side in fit.sides)
        centre = exact_point(fit.centre, "centre", (2,))
    except FieldError as cause:
        raise ProblemError(f"corner fit: {cause}") from cause
    corners, orders = [], []
    for corner in fit.corners:
        k = corner.vertex
        ahead, behind = vertices[(k + 1) % len(vertices)], vertices[k - 1]
        letters = fit.sides[k].kind[0] + fit.sides[k - 1].kind[0]
        series = CornerSeries(
            apex=vertices[k],
            start=_direction(vertices[k], ahead),
            stop=_direction(vertices[k], behind),
            sides=letters,
            scale=_reach(vertices, vertices[k]),
        )
        _check_logs(series, corner)
        corners.append(series)
        orders.append(_orders(series, corner, with_polynomial=fit.degree >= 0))
    return Terms(
        vertices=vertices,
        kinds=tuple(side.kind for side in fit.sides),
        data=data,
        corners=tuple(corners),
        places=tuple(corner.vertex for corner in fit.corners),
        orders=tuple(orders),
        logs=tuple(corner.logs for corner in fit.corners),
        degree=fit.degree,
        polynomial=PolynomialPart(centre=centre, scale=_reach(vertices, centre)),
    )


def _direction(start: tuple[Exact, ...], stop: tuple[Exact, ...]) -> tuple[Exact, ...]:
    """Return the direction of a side; a side along an axis gives a unit vector."""
    dx, dy = (Fraction(b) - Fraction(a) for a, b in zip(start, stop, strict=True))
    size = max(abs(dx), abs(dy))
    return exact_point((dx / size, dy / size), "direction", (2,))


def _reach(vertices: tuple[tuple[Exact, ...], ...], point: tuple[Exact, ...]) -> Fraction:
    """Return a length not below the distance to the farthest vertex, with three digits."""
    x, y = (Fraction(c) for c in point)
    square = max((Fraction(a) - x) ** 2 + (Fraction(b) - y) ** 2 for a, b in vertices)
    length = Fraction(math.ceil(math.sqrt(float(square)) * 1000), 1000)
    return length if length * length >= square else length + Fraction(1, 1000)


def _orders(series: CornerSeries, corner: CornerTerms, *, with_polynomial: bool) -> tuple[int, ...]:
    """Return the numbers j of the powers in use: beside a polynomial those with whole exponents are spare."""
    step = math.pi / series.opening
    orders = range(1, corner.powers + 1, corner.every)
    if not with_polynomial:
        return tuple(orders)
    exponents = {j: series.powers.multiple(j) * step for j in orders}
    return tuple(j for j, e in exponents.items() if abs(e - round(e)) > 1e-9)


def _check_logs(series: CornerSeries, corner: CornerTerms) -> None:
    """Refuse a term z^n log z that does not leave polynomial data on the sides of its corner."""
    for n in corner.logs:
        turns = n * series.opening / math.pi - (0.5 if series.powers.mixed else 0.0)
        if abs(turns - round(turns)) > 1e-12:
            raise ProblemError(
                f"z^{n} log z does not fit vertex {corner.vertex} with opening "
                f"{series.opening:.6g} and sides {series.sides}"
            )


def _places(fit: CornerFit, terms: Terms) -> list[tuple[int, list[Fraction]]]:
    """Return the sides with the fractions of their lengths where the fit is asked for."""
    lengths = [terms.length(k) for k in range(len(terms.vertices))]
    longest = max(lengths)
    return [
        (k, chebyshev(max(8, round(fit.density * math.sqrt(length / longest)))))
        for k, length in enumerate(lengths)
        if not terms.idle(k)
    ]


def _texts(coefficients: list[int], bits: int, places: int) -> list[str]:
    """Return fixed-point numbers as decimal strings; what lies far below the target becomes 0."""
    texts = []
    for c in coefficients:
        scaled = (c * 10**places + (1 << (bits - 1))) >> bits
        digits = str(abs(scaled)).zfill(places + 1)
        text = f"{digits[:-places]}.{digits[-places:]}".rstrip("0").rstrip(".")
        negligible = abs(scaled) < 10**9  # 1e-7 of the target
        texts.append("0" if negligible else f"-{text}" if scaled < 0 else text)
    return texts
