"""The terms of a sum of corner powers as plain data with exact numbers, and the checks of what is given."""

from __future__ import annotations

import math
from typing import Any, NamedTuple

from laplace_verify.contexts import FLOAT
from laplace_verify.errors import FieldError
from laplace_verify.fields._corner_sums import Powers, angle_of, turned
from laplace_verify.fields.exact import Exact, exact, exact_point

__all__ = ["CornerSeries", "Expansion", "LocalSum", "PolynomialPart"]

SIDES = ("dd", "nn", "dn", "nd")


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


class LocalSum(NamedTuple):
    """A sum that stands for the field near one point, without terms that cancel.

    Attributes
    ----------
    apex
        The point.
    reach
        Radius up to which it serves, > 0.
    start, stop
        Directions of the sector where it serves, counter-clockwise from `start`; equal ones for a whole disc.
    series
        The terms.
    """

    apex: tuple[Exact, ...]
    reach: Exact
    start: tuple[Exact, ...]
    stop: tuple[Exact, ...]
    series: Expansion


def checked_expansion(given: Any, name: str) -> Expansion:
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
    start, stop = _direction(corner.start, f"{name}.start"), _direction(corner.stop, f"{name}.stop")
    if corner.sides not in SIDES:
        raise FieldError(f"sides of {name} must be one of {', '.join(SIDES)}, got {corner.sides!r}")
    logs = tuple((_order(n, name), numeral(c, f"{name}.logs")) for n, c in corner.logs)
    coefficients = tuple(numeral(c, f"{name}.coefficients") for c in corner.coefficients)
    return CornerSeries(
        apex, start, stop, corner.sides, positive(corner.scale, f"{name}.scale"), coefficients, logs
    )


def _polynomial_part(given: Any, name: str) -> PolynomialPart:
    """Return the polynomial, checked."""
    part = PolynomialPart(*given)
    return PolynomialPart(
        tuple(numeral(c, f"{name}.re") for c in part.re),
        tuple(numeral(c, f"{name}.im") for c in part.im),
        exact_point(part.centre, f"{name}.centre", (2,)),
        positive(part.scale, f"{name}.scale"),
    )


def numeral(text: Any, name: str) -> str:
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


def positive(number: Any, name: str) -> Exact:
    """Return a positive number, checked."""
    value = exact(number, name)
    if not value > 0:
        raise FieldError(f"{name} must be positive, got {number}")
    return value


def checked_local_sum(given: Any, name: str) -> LocalSum:
    """Return a local sum, checked."""
    try:
        apex, reach, start, stop, series = given
    except (TypeError, ValueError) as cause:
        raise FieldError(f"{name} must be a LocalSum: {cause}") from cause
    return LocalSum(
        exact_point(apex, f"{name}.apex", (2,)),
        positive(reach, f"{name}.reach"),
        _direction(start, f"{name}.start"),
        _direction(stop, f"{name}.stop"),
        checked_expansion(series, f"{name}.series"),
    )


def _direction(given: Any, name: str) -> tuple[Exact, ...]:
    """Return a direction, checked."""
    direction = exact_point(given, name, (2,))
    if not any(direction):
        raise FieldError(f"{name} must be a direction, not (0, 0)")
    return direction
