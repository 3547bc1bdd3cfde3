"""Local sums of a corner fit for float64, from its values on arcs.

About an apex on the boundary let z = (x + i y - w) e^{-i start}/R = r e^{iθ}, 0 < θ < ω. First the data are
met: for every power r^m of the data of the two sides a harmonic a Re z^m + b Im z^m, or, where m ω is a
multiple of π (half a multiple if the conditions differ) and those do not do, the part of z^m log z whose
value or flux does. What is left vanishes on both sides, or has no flux there: it is a sum of c_j r^{λ_j} sin
or cos λ_j θ, with the exponents of `fields.corner_powers`, and on the arc r = 1 these are orthogonal, so that

    c_j = (2/K) sum_i v(θ_i) sin or cos λ_j θ_i,   θ_i = ω (i - 1/2)/K,

to an aliasing error of the size of c_{2K - j}. About an inner point it is the Fourier series on the circle.
Nothing cancels, nothing is solved, and |sum - u| is at most the error on the arc (maximum principle).

Sums end where terms fall below 2^-64 of the largest one.
"""

from __future__ import annotations

import math
from fractions import Fraction
from typing import Any

from laplace_verify.fields import CornerPowers, CornerSeries, Expansion, LocalSum, PolynomialPart
from laplace_verify.fields._corner_sums import angle_of, expansion_value
from laplace_verify.fields._precision import working
from laplace_verify.fields.exact import exact, exact_point
from laplace_verify.references._corner_rows import DATA_DEGREE, Terms
from laplace_verify.references.local_cover import Spot, cover

__all__ = ["local_sums"]

DIGITS = 60
LARGEST = 66  # highest exponent of a term: 0.5^66 = 1e-20
SPARE = 12  # points of an arc beyond the number of terms
TINY = 2.0**-64
WHOLE = 1e-9
NONE = 1e-25  # of the data: a mismatch below it is rounding

Complex = tuple[Any, Any]


def local_sums(terms: Terms, precise: Expansion) -> tuple[LocalSum, ...]:
    """Return sums about points that cover the polygon, for the field with the expansion `precise`.

    The conditions of `terms` are met exactly: the sums differ from the expansion by no more than its error.
    """
    vertices = tuple((Fraction(x), Fraction(y)) for x, y in terms.vertices)
    made = _Maker(terms, CornerPowers(precise=precise))
    return tuple(made.disc(s) if s.sides is None else made.sector(s, s.sides) for s in cover(vertices))


class _Maker:
    """Local sums of one field."""

    def __init__(self, terms: Terms, field: CornerPowers) -> None:
        self.terms, self.field, self.conjugate = terms, field, field.conjugate()
        self.ctx = working(DIGITS)

    def disc(self, spot: Spot) -> LocalSum:
        """Return the sum about an inner point."""
        ctx = self.ctx
        count = 2 * (LARGEST + SPARE)
        turns = [2 * ctx.pi * i / count for i in range(count)]
        values = [self._at(self.field, spot, turn) for turn in turns]
        re = [ctx.fsum(values) / count]
        im = [ctx.number(0)]
        for n in range(1, LARGEST + 1):
            re.append(2 * ctx.fdot(values, [ctx.cos(n * t) for t in turns]) / count)
            im.append(2 * ctx.fdot(values, [ctx.sin(n * t) for t in turns]) / count)
        return self._finished(spot, ((1, 0), (1, 0)), None, re, im)

    def sector(self, spot: Spot, sides: tuple[int, int]) -> LocalSum:
        """Return the sum about a vertex or a point of a side."""
        ctx, terms = self.ctx, self.terms
        ways = (_way(terms, sides[0], 1), _way(terms, sides[1], -1))
        corner = CornerSeries(
            apex=exact_point(spot.apex, "apex", (2,)),
            start=ways[0],
            stop=ways[1],
            sides=terms.kinds[sides[0]][0] + terms.kinds[sides[1]][0],
            scale=exact(spot.reach, "reach"),
        )
        re, im, logs = self._particular(spot, sides, corner)
        opening = angle_of(ctx, *ways)
        count = math.ceil(LARGEST * float(opening) / math.pi)
        places = [opening * (2 * i + 1) / (2 * (count + SPARE)) for i in range(count + SPARE)]
        known = Expansion((corner._replace(logs=logs),), self._part(spot, re, im))
        begin = self._angle(corner.start)
        values = []
        for place in places:
            x = self._point(spot, begin + place)
            values.append(self.field._value(ctx, x, None) - expansion_value(ctx, x, None, known))
        wave = ctx.sin if corner.powers.sine else ctx.cos
        if corner.sides == "nn":
            re[0] += ctx.fsum(values) / len(values)
        step = ctx.pi / opening
        found = []
        for j in range(1, count + 1):
            exponent = corner.powers.multiple(j) * step
            found.append(2 * ctx.fdot(values, [wave(exponent * p) for p in places]) / len(places))
        corner = corner._replace(coefficients=_texts(found), logs=logs)
        return self._finished(spot, ways, corner, re, im)

    def _particular(
        self, spot: Spot, sides: tuple[int, int], corner: CornerSeries
    ) -> tuple[list[Any], list[Any], Any]:
        """Return the coefficients of Re t^m, Im t^m and of logarithms that meet the data of the two sides."""
        ctx = self.ctx
        opening, begin = angle_of(ctx, corner.start, corner.stop), self._angle(corner.start)
        ways = zip(sides, (corner.start, corner.stop), strict=True)
        given = [self._data(spot, side, way) for side, way in ways]
        size = max(1, *(abs(g) for data in given for g in data))
        re, im, logs = [], [], []
        for m in range(DATA_DEGREE + 2):
            a, b, log = _matched(ctx, m, corner.sides, opening, given[0][m], given[1][m], NONE * size)
            turned = ctx.mpc(a, -b) * ctx.expj(-m * begin)
            re.append(turned.real)
            im.append(-turned.imag)
            if log:
                logs.append((m, repr(float(log))))
        return re, im, tuple(logs)

    def _data(self, spot: Spot, side: int, way: tuple[Any, ...]) -> list[Any]:
        """Return the coefficients of the powers of r in the data of a side; those of a flux one place up."""
        ctx = self.ctx
        angle, reach = self._angle(way), ctx.number(spot.reach)
        count = DATA_DEGREE + 1
        nodes = [ctx.mpf(i) / DATA_DEGREE for i in range(count)]
        values = []
        for r in nodes:
            x, y = self._point(spot, angle, r)
            values.append(ctx.convert(self.terms.data[side].value(ctx, {"x": x, "y": y})))
        table = ctx.matrix([[r**m for m in range(count)] for r in nodes])
        zero, none = ctx.number(0), NONE * max(map(abs, values))
        found = [c if abs(c) > none else zero for c in ctx.lu_solve(table, ctx.matrix(values))]
        if self.terms.kinds[side] == "dirichlet":
            return [*found, zero]
        return [zero, *(reach * c for c in found)]

    def _finished(
        self, spot: Spot, ways: tuple[Any, Any], corner: CornerSeries | None, re: list[Any], im: list[Any]
    ) -> LocalSum:
        """Return the sum, its conjugate's constant chosen so that the conjugates fit together."""
        ctx = self.ctx
        corners = () if corner is None else (corner,)
        turn = ctx.pi / 7 if corner is None else self._angle(corner.start) + angle_of(ctx, *ways) / 3
        sums = CornerPowers(precise=Expansion(corners, self._part(spot, re, im)))
        x = self._point(spot, turn)
        im[0] -= self.conjugate._value(ctx, x, None) - sums.conjugate()._value(ctx, x, None)
        series = Expansion(corners, self._part(spot, re, im))
        return LocalSum(exact_point(spot.apex, "apex", (2,)), exact(spot.reach, "reach"), *ways, series)

    def _part(self, spot: Spot, re: list[Any], im: list[Any]) -> PolynomialPart:
        """Return a polynomial about the apex."""
        size = max(map(abs, [*re, *im[1:]]))
        centre, scale = exact_point(spot.apex, "apex", (2,)), exact(spot.reach, "reach")
        return PolynomialPart(_texts(re, size), _texts(im, size), centre, scale)

    def _at(self, field: Any, spot: Spot, turn: Any) -> Any:
        """Return a field's value on the arc."""
        return field._value(self.ctx, self._point(spot, turn), None)

    def _point(self, spot: Spot, turn: Any, r: Any = 1) -> tuple[Any, Any]:
        """Return the point at a direction and a distance in units of the reach."""
        ctx = self.ctx
        length = ctx.number(spot.reach) * r
        x, y = (ctx.number(c) for c in spot.apex)
        return x + length * ctx.cos(turn), y + length * ctx.sin(turn)

    def _angle(self, way: tuple[Any, ...]) -> Any:
        """Return the angle of a direction."""
        return self.ctx.atan2(*(self.ctx.number(c) for c in reversed(way)))


def _matched(ctx: Any, m: int, sides: str, opening: Any, first: Any, second: Any, none: float) -> Any:
    """Return a, b and l of a Re z^m + b Im z^m + l (part of z^m log z) with given data on both sides.

    The data are coefficients of r^m: values, or fluxes times r. The part is Im if `sides` begin with "d",
    else Re.
    """
    zero = ctx.number(0)
    c, s = ctx.cos(m * opening), ctx.sin(m * opening)
    a, b = (first, zero) if sides[0] == "d" else (zero, -first / m if m else zero)
    met = a * c + b * s if sides[1] == "d" else m * (b * c - a * s)
    missing = second - met
    if abs(missing) <= none:
        return a, b, zero
    # what a unit of the other coefficient gives on the second side, and a unit of the logarithm at resonance
    unit, log = {
        "dd": (s, opening * c),
        "nd": (c, -opening * s),
        "dn": (m * c, -m * opening * s),
        "nn": (-m * s, -m * opening * c),
    }[sides]
    if abs(unit) > WHOLE:
        return (a, missing / unit, zero) if sides[0] == "d" else (missing / unit, b, zero)
    return a, b, missing / log


def _way(terms: Terms, side: int, sign: int) -> tuple[Any, ...]:
    """Return the direction of a side, or against it, a unit vector along the axes."""
    (a, b), (c, d) = terms.ends(side)
    dx, dy = sign * (c - a), sign * (d - b)
    size = max(abs(dx), abs(dy))
    return exact_point((dx / size, dy / size), "direction", (2,))


def _texts(numbers: list[Any], size: Any = None) -> tuple[str, ...]:
    """Return numbers as shortest decimals of float64, without negligible ones at the end."""
    size = max(map(abs, numbers)) if size is None else size
    last = max((i for i, n in enumerate(numbers) if abs(n) > TINY * size), default=-1)
    return tuple(repr(float(n)) for n in numbers[: last + 1])
