"""Corner powers: the harmonic functions that polygons carry at their corners, summed over several corners.

At a corner w with opening ω let z = ((x + i y) - w) e^{-i start} / scale = r e^{i φ}, where φ is the angle
from the side on which a counter-clockwise walk about the region leaves w. With

    λ_j = j π/ω         if both sides carry the same type of condition ("dd", "nn"),
    λ_j = (j - 1/2) π/ω  if it changes ("dn", "nd"; the first letter belongs to φ = 0),

every Im z^{λ_j} ("d" first) or Re z^{λ_j} ("n" first) satisfies the homogeneous conditions on both sides
exactly. Where polynomial data do not match at an angle with n ω = k π, terms Im or Re of z^n log z appear;
they leave polynomial data on both sides (Lehman 1959; Grisvard 1985, section 4.4; from memory, unchecked). A
field of this family is

    u = sum over corners of [ sum_j c_j part z^{λ_j} + sum_n l_n part z^n log z ]
        + sum_n ( a_n Re t^n + b_n Im t^n ),   t = (x + i y - centre)/size,

harmonic off the cuts, which leave each corner along the bisector of its exterior angle (Fox, Henrici and
Moler 1967; from memory, unchecked). Sums are done by Horner's rule in z^{π/ω}, in real arithmetic, from
offsets, so that r^(2/3) keeps its digits at any distance from its corner.

A fit (`references.corner_fit`) stores its coefficients as decimal strings together with a radius that bounds
the distance of u from the solution of a boundary value problem. In float64 a second, shorter expansion with
small coefficients can serve (`swift`): the long one may need more digits than float64 has.
"""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any, NamedTuple

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import FLOAT, MAX_DIGITS, Number
from laplace_verify.errors import FieldError, LaplaceVerifyError
from laplace_verify.fields._corner_sums import Powers, angle_of, horner, local, polynomial_sum, turned
from laplace_verify.fields.base import Field
from laplace_verify.fields.exact import Exact, exact, exact_point
from laplace_verify.fields.motions import show_point
from laplace_verify.fields.singular import Basis, Cut, Singularity
from laplace_verify.fields.specs import registered
from laplace_verify.geometry import Polygon

__all__ = ["CornerPowers", "CornerSeries", "Expansion", "PolynomialPart", "corner_powers"]

INSIDE = 1e-9  # of the polygon's size: points this far outside are taken for points of the boundary
WHOLE = 1e-9  # of an exponent
SMALLEST_RADIUS = Fraction(1, 10**300)  # float64 holds it
SIDES = ("dd", "nn", "dn", "nd")
BASES = ("maximum-principle bound", "confirmed", "closed form", "uncertified")


class CornerSeries(NamedTuple):
    """The terms of one corner.

    Attributes
    ----------
    apex
        The corner w.
    start, stop
        Directions from w along its two sides; the region lies counter-clockwise from `start`. Equal
        directions make a slit, with ω = 2 pi.
    sides
        "dd", "nn", "dn" or "nd": the types of condition on the two sides, start first.
    scale
        Length that makes z dimensionless, > 0.
    coefficients
        c_1, c_2, ... as decimal strings.
    logs
        Pairs (n, l_n) of a whole number and a decimal string.
    """

    apex: tuple[Exact, ...]
    start: tuple[Exact, ...]
    stop: tuple[Exact, ...]
    sides: str
    scale: Exact = 1
    coefficients: tuple[str, ...] = ()
    logs: tuple[tuple[int, str], ...] = ()

    @property
    def opening(self) -> float:
        """The angle ω in radians."""
        return float(angle_of(FLOAT, self.start, self.stop))

    @property
    def powers(self) -> Powers:
        """Which multiples of π/ω the exponents are, and which part is taken."""
        return Powers(mixed=self.sides[0] != self.sides[1], sine=self.sides[0] == "d")

    @property
    def bisector(self) -> tuple[float, float]:
        """Unit vector along the cut."""
        return turned(self.start, self.opening / 2 + math.pi)


class PolynomialPart(NamedTuple):
    """a_0, a_1, ... of Re t^n and b_0, b_1, ... of Im t^n (decimal strings); t = (x + i y - centre)/scale."""

    re: tuple[str, ...] = ()
    im: tuple[str, ...] = ()
    centre: tuple[Exact, ...] = (0, 0)
    scale: Exact = 1


NOTHING = PolynomialPart()


class Expansion(NamedTuple):
    """Corners and polynomial of one sum."""

    corners: tuple[CornerSeries, ...] = ()
    polynomial: PolynomialPart = NOTHING


@registered("corner-powers")
@dataclass(frozen=True, slots=True, kw_only=True)
class CornerPowers(Field):
    """A sum of corner powers; `corner_powers` makes one.

    Attributes
    ----------
    precise
        The expansion that defines the field.
    swift
        The expansion used in float64, or None for the same.
    vertices
        Corners of the polygon outside of which the field is not defined; () for the whole plane.
    radius
        Decimal string: bound for the distance from the solution that was fitted; "0" if the field is meant
        as it stands.
    trust
        Basis of that radius, see `Enclosure`.
    """

    precise: Expansion
    swift: Expansion | None = None
    vertices: tuple[tuple[Exact, ...], ...] = ()
    radius: str = "0"
    trust: Basis = "closed form"

    def __post_init__(self) -> None:
        """Check every parameter."""
        object.__setattr__(self, "precise", _expansion(self.precise, "precise"))
        if self.swift is not None:
            object.__setattr__(self, "swift", _expansion(self.swift, "swift"))
        vertices = tuple(exact_point(v, f"vertices[{i}]", (2,)) for i, v in enumerate(self.vertices))
        object.__setattr__(self, "vertices", vertices)
        if vertices:
            try:
                _polygon(vertices)
            except LaplaceVerifyError as cause:
                raise FieldError(f"vertices must be those of a polygon: {cause}") from cause
        radius = exact(_numeral(self.radius, "radius"), "radius")
        if not (radius == 0 or radius >= SMALLEST_RADIUS):
            raise FieldError(f"radius must be >= 0, and at least 1e-300 if not 0, got {self.radius!r}")
        if self.trust not in BASES:
            raise FieldError(f"trust must be one of {', '.join(BASES)}, got {self.trust!r}")

    @property
    def dim(self) -> int:
        """Two."""
        return 2

    @property
    def basis(self) -> Basis:
        """That of the stored radius."""
        return self.trust

    @property
    def fit_error(self) -> float:
        """The stored radius, rounded up to a float64."""
        return math.nextafter(float(self.radius), math.inf) if float(self.radius) else 0.0

    @property
    def most_digits(self) -> int:
        """Digits behind the decimal point that the stored radius leaves."""
        if not self.fit_error:
            return MAX_DIGITS
        return max(1, math.floor(-math.log10(2 * self.fit_error)))

    @property
    def formula(self) -> str:
        """Such as ``corner powers r^(0.6667 j) about (0, 0) + polynomial of degree 40``."""
        parts = []
        for corner in self.precise.corners:
            step = math.pi / corner.opening
            power = f"r^({step:.4g} {'(j - 1/2)' if corner.powers.mixed else 'j'})"
            if corner.coefficients:
                parts.append(f"{len(corner.coefficients)} powers {power} about {show_point(corner.apex)}")
            parts += [f"z^{n} log z about {show_point(corner.apex)}" for n, _ in corner.logs]
        count = max(len(self.precise.polynomial.re), len(self.precise.polynomial.im))
        if count:
            parts.append(f"polynomial of degree {count - 1}")
        return "[" + " + ".join(parts) + "]" if parts else "0"

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """Each corner with the smallest exponent of a term that is not smooth and not zero."""
        found = []
        for corner in self.precise.corners:
            exponent = _exponent(corner)
            if exponent is not None:
                x, y = (float(c) for c in corner.apex)
                found.append(Singularity(point=(x, y), exponent=exponent, kind="power"))
        return tuple(found)

    @property
    def cuts(self) -> tuple[Cut, ...]:
        """The bisectors of the exterior angles of the singular corners."""
        return tuple(
            Cut(start=(float(c.apex[0]), float(c.apex[1])), direction=c.bisector)
            for c in self.precise.corners
            if _exponent(c) is not None
        )

    def _valid(self, points: Array) -> BoolArray:
        if not self.vertices:
            return np.ones(len(points), dtype=bool)
        return _polygon(self.vertices).contains(points, tol=INSIDE)

    def _terms(self, ctx: Any) -> Expansion:
        """Return the expansion for a context."""
        return self.swift if ctx is FLOAT and self.swift is not None else self.precise

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        terms = self._terms(ctx)
        total = polynomial_sum(ctx, x, terms.polynomial, derivative=False)[0]
        for corner in terms.corners:
            z = local(ctx, x, side, corner)
            re, im = horner(ctx, z, corner, derivative=False)
            total = total + (im if corner.powers.sine else re)
        return total

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        """Return the parts of f': u_x = Re f', u_y = -Im f' for u = Re f; Im f', Re f' for u = Im f."""
        terms = self._terms(ctx)
        gx, gy = polynomial_sum(ctx, x, terms.polynomial, derivative=True)
        for corner in terms.corners:
            z = local(ctx, x, side, corner)
            re, im = horner(ctx, z, corner, derivative=True)
            gx = gx + (im if corner.powers.sine else re)
            gy = gy + (re if corner.powers.sine else -im)
        return gx, gy

    def gradient_error(self, place: tuple[Any, ...]) -> float:
        """Return 4 radius / (pi d), d the distance from the boundary: infinite on it.

        The mean value of the directional derivative over a disc bounds the gradient of a harmonic function
        by 4/(pi d) times its maximum (derived here; the constant is sharp).
        """
        if not self.fit_error:
            return 0.0
        if not self.vertices:
            return math.inf
        d = float(_polygon(self.vertices).distance(np.array([[float(c) for c in place]]))[0])
        # the distance is computed in float64: 1e-15 of the coordinates are taken off
        d -= 1e-15 * (1 + max(abs(float(c)) for c in place))
        return 4 * self.fit_error / (math.pi * d) * (1 + 1e-12) if d > 0 else math.inf

    def conjugate(self) -> Field:
        """Return the stream function: the same terms with sine and cosine exchanged.

        It is single-valued in any region that the cuts leave simply connected. The maximum principle does not
        bound the conjugate of an error, so that a fitted field's conjugate is "uncertified".
        """
        trust: Basis = self.trust if not self.fit_error else "uncertified"
        swift = None if self.swift is None else _conjugate(self.swift)
        return dataclasses.replace(self, precise=_conjugate(self.precise), swift=swift, trust=trust)


def corner_powers(
    corners: tuple[CornerSeries, ...],
    polynomial: PolynomialPart = NOTHING,
    *,
    vertices: tuple[tuple[Number, Number], ...] = (),
    radius: str = "0",
    trust: Basis = "closed form",
    swift: Expansion | None = None,
) -> CornerPowers:
    """Return a sum of corner powers and a polynomial; see `CornerSeries`, `PolynomialPart`, `CornerPowers`.

    Examples
    --------
    The singular function of an L-shape, r^(2/3) sin(2/3 theta), and half a quadratic:

    >>> corner = CornerSeries(apex=(0, 0), start=(1, 0), stop=(0, -1), sides="dd", coefficients=("1",))
    >>> u = corner_powers((corner,), PolynomialPart(re=("0", "0", "0.5")))
    >>> u.value([[0.0, 1.0], [-1.0, 0.0]]).round(6).tolist()
    [0.366025, 1.366025]
    >>> u.singularities[0].exponent == 2 / 3
    True

    Raises
    ------
    FieldError
        If a number cannot be read, a direction is (0, 0), a scale is not positive, sides are unknown, or
        vertices make no polygon.
    """
    return CornerPowers(
        precise=Expansion(tuple(corners), polynomial),
        swift=swift,
        vertices=vertices,  # type: ignore[arg-type]  # made exact
        radius=radius,
        trust=trust,
    )


def _exponent(corner: CornerSeries) -> float | None:
    """Return the smallest exponent of a corner's terms that are not polynomials, None if there is none."""
    step = math.pi / corner.opening
    exponents = []
    for j, text in enumerate(corner.coefficients, start=1):
        exponent = corner.powers.multiple(j) * step
        if float(text) and abs(exponent - round(exponent)) > WHOLE * exponent:
            exponents.append(exponent)
            break
    exponents += [float(n) for n, text in corner.logs if float(text)]
    return min(exponents, default=None)


@lru_cache(maxsize=32)
def _polygon(vertices: tuple[tuple[Exact, ...], ...]) -> Polygon:
    """Return the polygon outside of which a field is not defined."""
    return Polygon([(float(x), float(y)) for x, y in vertices])


def _conjugate(expansion: Expansion) -> Expansion:
    """Return the expansion of the conjugate: Re f -> Im f, Im f -> -Re f."""
    exchange: Callable[[str], str] = lambda sides: sides.translate(str.maketrans("dn", "nd"))  # noqa: E731
    corners = []
    for corner in expansion.corners:
        sign = _minus if corner.powers.sine else str
        corners.append(
            corner._replace(
                sides=exchange(corner.sides),
                coefficients=tuple(sign(c) for c in corner.coefficients),
                logs=tuple((n, sign(c)) for n, c in corner.logs),
            )
        )
    part = expansion.polynomial
    polynomial = part._replace(re=tuple(_minus(c) for c in part.im), im=part.re)
    return Expansion(tuple(corners), polynomial)


def _minus(text: str) -> str:
    """Return minus a decimal string."""
    return text[1:] if text.startswith("-") else f"-{text.removeprefix('+')}"


def _expansion(given: Any, name: str) -> Expansion:
    """Return an expansion, checked; a specification gives plain tuples."""
    try:
        corners, polynomial = given
        made = Expansion(
            tuple(_corner(c, f"{name}.corners[{i}]") for i, c in enumerate(corners)),
            _polynomial_part(polynomial, f"{name}.polynomial"),
        )
    except FieldError:
        raise
    except (TypeError, ValueError) as cause:
        raise FieldError(f"{name} must be an Expansion of corners and a polynomial: {cause}") from cause
    return made


def _corner(given: Any, name: str) -> CornerSeries:
    """Return the series of a corner, checked."""
    corner = CornerSeries(*given)
    apex = exact_point(corner.apex, f"{name}.apex", (2,))
    start = exact_point(corner.start, f"{name}.start", (2,))
    stop = exact_point(corner.stop, f"{name}.stop", (2,))
    if not any(start) or not any(stop):
        raise FieldError(f"start and stop of {name} must be directions, not (0, 0)")
    if corner.sides not in SIDES:
        raise FieldError(f"sides of {name} must be one of {', '.join(SIDES)}, got {corner.sides!r}")
    logs = tuple((_order(n, name), _numeral(c, f"{name}.logs")) for n, c in corner.logs)
    coefficients = tuple(_numeral(c, f"{name}.coefficients") for c in corner.coefficients)
    return CornerSeries(
        apex, start, stop, corner.sides, _positive(corner.scale, f"{name}.scale"), coefficients, logs
    )


def _polynomial_part(given: Any, name: str) -> PolynomialPart:
    """Return the polynomial, checked."""
    part = PolynomialPart(*given)
    return PolynomialPart(
        tuple(_numeral(c, f"{name}.re") for c in part.re),
        tuple(_numeral(c, f"{name}.im") for c in part.im),
        exact_point(part.centre, f"{name}.centre", (2,)),
        _positive(part.scale, f"{name}.scale"),
    )


def _numeral(text: Any, name: str) -> str:
    """Return a decimal string, checked."""
    if not isinstance(text, str) or "/" in text:
        raise FieldError(f'{name} must be decimal strings such as "0.25", got {str(text)[:60]!r}')
    exact(text, name)
    return text


def _order(n: Any, name: str) -> int:
    """Return the power of a logarithmic term, checked."""
    if isinstance(n, bool) or not isinstance(n, int) or not 1 <= n <= 100:
        raise FieldError(f"the power of a logarithmic term of {name} must be from 1 to 100, got {n!r}")
    return n


def _positive(number: Any, name: str) -> Exact:
    """Return a positive number, checked."""
    value = exact(number, name)
    if not value > 0:
        raise FieldError(f"{name} must be positive, got {number}")
    return value
