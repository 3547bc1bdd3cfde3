"""The terms of a corner fit at points of the sides, as whole numbers in fixed point.

A column is one term of the ansatz: u itself on a Dirichlet side, its outward normal derivative on a Neumann
side. With n as a complex number, the normal derivative of Re f or Im f is the part of f' n. On its own two
sides a corner's powers satisfy the conditions exactly; their columns are exactly zero there.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from fractions import Fraction
from itertools import pairwise
from typing import Any

import mpmath

from laplace_verify.contexts import Precise
from laplace_verify.errors import ProblemError
from laplace_verify.fields import CornerSeries, Expansion, Formula, PolynomialPart
from laplace_verify.fields._corner_sums import LocalPoint, angle_of, local
from laplace_verify.fields._precision import working
from laplace_verify.fields.exact import Exact

__all__ = ["DATA_DEGREE", "Rows", "Terms", "chebyshev", "check_degree"]

DATA_DEGREE = 12
NODE_BITS = 60


@dataclass(frozen=True, slots=True, kw_only=True)
class Terms:
    """Geometry, conditions, terms; columns run over corners (powers, logs), then Re, Im t^n."""

    vertices: tuple[tuple[Exact, ...], ...]
    kinds: tuple[str, ...]
    data: tuple[Formula, ...]
    corners: tuple[CornerSeries, ...]
    places: tuple[int, ...]
    orders: tuple[tuple[int, ...], ...]
    logs: tuple[tuple[int, ...], ...]
    degree: int
    polynomial: PolynomialPart

    @property
    def count(self) -> int:
        """Number of columns."""
        powers = sum(len(orders) + len(logs) for orders, logs in zip(self.orders, self.logs, strict=True))
        return powers + max(0, 2 * self.degree + 1)

    def expansion(self, texts: dict[int, str]) -> Expansion:
        """Return an expansion from the coefficients of some columns."""
        corners, column = [], 0
        for series, orders, logs in zip(self.corners, self.orders, self.logs, strict=True):
            powers = {j: texts.get(column + i, "0") for i, j in enumerate(orders)}
            column += len(orders)
            made = tuple(powers.get(j, "0") for j in range(1, max(orders, default=0) + 1))
            terms = tuple((n, texts.get(column + i, "0")) for i, n in enumerate(logs))
            column += len(logs)
            corners.append(series._replace(coefficients=_trimmed(made), logs=terms))
        re, im = [], ["0"]
        for n in range(self.degree + 1):
            re.append(texts.get(column, "0"))
            column += 1
            if n:
                im.append(texts.get(column, "0"))
                column += 1
        part = self.polynomial._replace(re=_trimmed(tuple(re)), im=_trimmed(tuple(im)))
        return Expansion(tuple(corners), part)

    def ends(self, side: int) -> tuple[tuple[Fraction, Fraction], tuple[Fraction, Fraction]]:
        """Return start and end of a side."""
        (a, b), (c, d) = self.vertices[side], self.vertices[(side + 1) % len(self.vertices)]
        return (Fraction(a), Fraction(b)), (Fraction(c), Fraction(d))

    def length(self, side: int) -> float:
        """Return the length of a side."""
        (a, b), (c, d) = self.ends(side)
        return math.hypot(float(c - a), float(d - b))

    def own(self, side: int, corner: int) -> bool:
        """Return whether a side starts or ends at the vertex of a corner of the ansatz."""
        vertex = self.places[corner]
        return side in (vertex, (vertex - 1) % len(self.vertices))

    def idle(self, side: int) -> bool:
        """Return whether all terms and the data vanish on a side."""
        only_own = all(self.own(side, k) and not self.logs[k] for k in range(len(self.corners)))
        return only_own and self.degree < 0 and self.data[side].text.strip() in ("0", "0.0")


def _trimmed(texts: tuple[str, ...]) -> tuple[str, ...]:
    """Return the coefficients without zeros at the end."""
    last = max((i for i, text in enumerate(texts) if text not in ("0", "0.0")), default=-1)
    return texts[: last + 1]


def chebyshev(count: int) -> list[Fraction]:
    """Return Chebyshev points of [0, 1] as fractions; rounding moves them by less than 1e-18.

    >>> [float(t) for t in chebyshev(2)]
    [0.8535533905932737, 0.14644660940672624]
    """
    with mpmath.workdps(40):
        unit = mpmath.mpf(2) ** NODE_BITS
        angles = (mpmath.pi * (2 * i + 1) / (2 * count) for i in range(count))
        return [Fraction(int(mpmath.nint((1 + mpmath.cos(a)) / 2 * unit)), 1 << NODE_BITS) for a in angles]


@dataclass(frozen=True, slots=True)
class Rows:
    """Columns and data at fractions of the length of a side, as whole numbers at 2^bits."""

    terms: Terms
    bits: int
    ctx: Precise = field(init=False, repr=False)
    steps: tuple[Any, ...] = field(init=False, repr=False)

    def __post_init__(self) -> None:
        """Make the number context and the steps of the exponents."""
        ctx = working(math.ceil((self.bits + 32) * math.log10(2)))
        steps = tuple(ctx.pi / angle_of(ctx, c.start, c.stop) for c in self.terms.corners)
        object.__setattr__(self, "ctx", ctx)
        object.__setattr__(self, "steps", steps)

    def columns(self, side: int, fractions: list[Fraction]) -> list[list[int]]:
        """Return a row of whole numbers for each point."""
        return [self._row(side, t) for t in fractions]

    def data(self, side: int, fractions: list[Fraction]) -> list[int]:
        """Return the data of a side."""
        formula = self.terms.data[side]
        points = (dict(zip("xy", self._point(side, t), strict=True)) for t in fractions)
        return [self._fixed(formula.value(self.ctx, point)) for point in points]

    def _fixed(self, number: Any) -> int:
        """Return the whole number nearest to 2^bits times a number."""
        return int(self.ctx.nint(self.ctx.ldexp(self.ctx.convert(number), self.bits)))

    def _point(self, side: int, t: Fraction) -> tuple[Any, Any]:
        """Return a point of a side."""
        start, stop = self.terms.ends(side)
        x, y = (self.ctx.number(a + (b - a) * t) for a, b in zip(start, stop, strict=True))
        return x, y

    def _row(self, side: int, t: Fraction) -> list[int]:
        """Return the columns at one point."""
        terms, ctx = self.terms, self.ctx
        x = self._point(side, t)
        normal = self._normal(side) if terms.kinds[side] == "neumann" else None
        row: list[int] = []
        for k, corner in enumerate(terms.corners):
            if terms.own(side, k):
                row += [0] * len(terms.orders[k])
                if not terms.logs[k]:
                    continue
            z = local(ctx, x, self._lip(side, k), corner)
            if not terms.own(side, k):
                row += self._powers(k, x, z, normal)
            row += [self._log(k, x, z, n, normal) for n in terms.logs[k]]
        return row + self._polynomial(x, normal)

    def _normal(self, side: int) -> Any:
        """Return the outward unit normal as a complex number."""
        (a, b), (c, d) = self.terms.ends(side)
        dx, dy = self.ctx.number(c - a), self.ctx.number(d - b)
        return self.ctx.mpc(dy, -dx) / self.ctx.hypot(dx, dy)

    def _lip(self, side: int, corner: int) -> int | None:
        """Return which lip of a slit's cut a side is: only the sides of the tip itself touch the cut."""
        vertex, series = self.terms.places[corner], self.terms.corners[corner]
        if series.start != series.stop:
            return None
        return 1 if side == vertex else -1 if self.terms.own(side, corner) else None

    def _derivative(self, corner: CornerSeries, x: tuple[Any, Any], normal: Any) -> Any:
        """Return n / (x + i y - w), which turns z f'(z) into f' n."""
        w = self.ctx.mpc(*(self.ctx.number(c) for c in corner.apex))
        return normal / (self.ctx.mpc(*x) - w)

    def _powers(self, k: int, x: tuple[Any, Any], z: LocalPoint, normal: Any) -> list[int]:
        """Return the parts of z^{λ_j}, or of their normal derivatives."""
        ctx, step, corner, bits = self.ctx, self.steps[k], self.terms.corners[k], self.bits
        orders = self.terms.orders[k]
        if not orders:
            return []
        first, every = corner.powers.multiple(orders[0]), 1
        size = z.r ** (step * first)
        p, q = (self._fixed(size * f(step * first * z.angle)) for f in (ctx.cos, ctx.sin))
        size = z.r ** (step * every)
        c, s = (self._fixed(size * f(step * every * z.angle)) for f in (ctx.cos, ctx.sin))
        factor = None
        if normal is not None:
            number = self._derivative(corner, x, normal) * step / 2
            factor = self._fixed(number.real), self._fixed(number.imag)
        wanted, found, j = set(orders), [], orders[0]
        while True:
            if j in wanted:
                a, b = p, q
                if factor is not None:
                    twice = round(2 * corner.powers.multiple(j))
                    a, b = (
                        twice * (p * factor[0] - q * factor[1]) >> bits,
                        twice * (p * factor[1] + q * factor[0]) >> bits,
                    )
                found.append(b if corner.powers.sine else a)
            if j >= orders[-1]:
                return found
            p, q, j = (p * c - q * s) >> bits, (p * s + q * c) >> bits, j + 1

    def _log(self, k: int, x: tuple[Any, Any], z: LocalPoint, n: int, normal: Any) -> int:
        """Return the part of z^n log z, or of its normal derivative."""
        ctx, corner = self.ctx, self.terms.corners[k]
        log = ctx.mpc(ctx.log(z.r), z.angle)
        power = z.r**n * ctx.mpc(ctx.cos(n * z.angle), ctx.sin(n * z.angle))
        f = power * log if normal is None else (n * log + 1) * power * self._derivative(corner, x, normal)
        return self._fixed(f.imag if corner.powers.sine else f.real)

    def _polynomial(self, x: tuple[Any, Any], normal: Any) -> list[int]:
        """Return Re t^n and Im t^n, or their normal derivatives."""
        degree, part, bits, ctx = self.terms.degree, self.terms.polynomial, self.bits, self.ctx
        if degree < 0:
            return []
        scale = ctx.number(part.scale)
        a, b = (self._fixed((c - ctx.number(m)) / scale) for c, m in zip(x, part.centre, strict=True))
        p, q = 1 << bits, 0
        if normal is None:
            row = [p]
            for _ in range(degree):
                p, q = (p * a - q * b) >> bits, (p * b + q * a) >> bits
                row += [p, q]
            return row
        number = normal / scale
        c, d = self._fixed(number.real), self._fixed(number.imag)
        row = [0]
        for n in range(1, degree + 1):
            row += [n * (p * c - q * d) >> bits, n * (p * d + q * c) >> bits]
            p, q = (p * a - q * b) >> bits, (p * b + q * a) >> bits
        return row


def check_degree(formula: Formula, name: str) -> None:
    """Refuse data that are no polynomial of degree at most DATA_DEGREE: high differences along lines vanish.

    Raises
    ------
    ProblemError
        If they do not.
    """
    ctx = working(60)
    for dx, dy in ((1, 0), (0, 1), (1, 1), (2, -3)):
        places = [{"x": ctx.mpf(dx * i) / 7, "y": ctx.mpf(dy * i) / 7} for i in range(DATA_DEGREE + 2)]
        values = [ctx.convert(formula.value(ctx, place)) for place in places]
        size = max(abs(v) for v in values) + 1
        while len(values) > 1:
            values = [b - a for a, b in pairwise(values)]
        if not abs(values[0]) <= size * ctx.mpf(10) ** -40:
            raise ProblemError(f"{name} must be polynomials of degree at most {DATA_DEGREE} in x and y")
