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
the distance of u from the solution of a boundary value problem. Its terms may be far larger than u and
cancel, which float64 cannot bear; there sums about many points can serve, each near its own (`local_sums`).
"""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import FLOAT, MAX_DIGITS, Number
from laplace_verify.errors import FieldError, LaplaceVerifyError
from laplace_verify.fields._corner_sums import expansion_gradient, expansion_value
from laplace_verify.fields.base import Field
from laplace_verify.fields.corner_series import (
    NOTHING,
    CornerSeries,
    Expansion,
    LocalSum,
    PolynomialPart,
    checked_expansion,
    checked_local_sum,
    numeral,
)
from laplace_verify.fields.exact import Exact, exact, exact_point
from laplace_verify.fields.local_sums import gradient_by_parts, value_by_parts
from laplace_verify.fields.motions import show_point
from laplace_verify.fields.singular import Basis, Cut, Singularity
from laplace_verify.fields.specs import registered
from laplace_verify.geometry import Polygon

__all__ = ["CornerPowers", "corner_powers"]

INSIDE = 1e-9  # of the polygon's size: points this far outside are taken for points of the boundary
WHOLE = 1e-9  # of an exponent
SMALLEST_RADIUS = Fraction(1, 10**300)  # float64 holds it
BASES = ("maximum-principle bound", "confirmed", "closed form", "uncertified")


@registered("corner-powers")
@dataclass(frozen=True, slots=True, kw_only=True)
class CornerPowers(Field):
    """A sum of corner powers; `corner_powers` makes one.

    Attributes
    ----------
    precise
        The expansion that defines the field.
    swift
        The sums used in float64, each where it is nearest; () for the same expansion.
    vertices
        Corners of the polygon outside of which the field is not defined; () for the whole plane.
    radius
        Decimal string: bound for the distance from the solution that was fitted; "0" if the field is meant
        as it stands.
    trust
        Basis of that radius, see `Enclosure`.
    flux_radius
        Decimal string: bound for the error of the integral of n . grad u over any side of the polygon, with
        the same basis; "" if none is known.
    """

    precise: Expansion
    swift: tuple[LocalSum, ...] = ()
    vertices: tuple[tuple[Exact, ...], ...] = ()
    radius: str = "0"
    trust: Basis = "closed form"
    flux_radius: str = ""

    def __post_init__(self) -> None:
        """Check every parameter."""
        object.__setattr__(self, "precise", checked_expansion(self.precise, "precise"))
        swift = tuple(checked_local_sum(part, f"swift[{i}]") for i, part in enumerate(self.swift))
        object.__setattr__(self, "swift", swift)
        vertices = tuple(exact_point(v, f"vertices[{i}]", (2,)) for i, v in enumerate(self.vertices))
        object.__setattr__(self, "vertices", vertices)
        if vertices:
            try:
                _polygon(vertices)
            except LaplaceVerifyError as cause:
                raise FieldError(f"vertices must be those of a polygon: {cause}") from cause
        radius = exact(numeral(self.radius, "radius"), "radius")
        if not (radius == 0 or radius >= SMALLEST_RADIUS):
            raise FieldError(f"radius must be >= 0, and at least 1e-300 if not 0, got {self.radius!r}")
        if self.flux_radius and not exact(numeral(self.flux_radius, "flux_radius"), "flux_radius") >= 0:
            raise FieldError(f"flux_radius must be >= 0, got {self.flux_radius!r}")
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

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        if ctx is FLOAT and self.swift:
            return value_by_parts(self.swift, self.precise.corners, x, side)
        return expansion_value(ctx, x, side, self.precise)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        if ctx is FLOAT and self.swift:
            return gradient_by_parts(self.swift, self.precise.corners, x, side)
        return expansion_gradient(ctx, x, side, self.precise)

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
        swift = tuple(part._replace(series=_conjugate(part.series)) for part in self.swift)
        series = _conjugate(self.precise)
        return dataclasses.replace(self, precise=series, swift=swift, trust=trust, flux_radius="")


def corner_powers(
    corners: tuple[CornerSeries, ...],
    polynomial: PolynomialPart = NOTHING,
    *,
    vertices: tuple[tuple[Number, Number], ...] = (),
    radius: str = "0",
    trust: Basis = "closed form",
    swift: tuple[LocalSum, ...] = (),
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
