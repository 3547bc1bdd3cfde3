"""Integrals to many digits by two rules of a kind that agree, the finer one being kept.

    periodic direction        trapezoid rule of m and 2m points: the error falls like exp(-c m) for analytic
                              integrands (Trefethen and Weideman 2014, SIAM Review 56, 385-458, theorem 3.2)
    panel with singular ends  tanh-sinh rule with steps h and h/2; distances from the nearer end are exact
                              (Takahasi and Mori 1974, Publ. RIMS 9, 721-741)
    any other                 Gauss-Legendre rules of n and 2n points; panels on which they do not agree are
                              halved, which grades them towards singularities beside the piece

All from memory, unchecked. The result is confirmed, not proven: the change from one rule to the next is no
bound, though the finer rule is as a rule better by as many digits again. Rules, tolerances and the number of
refinements are fixed, so that the digits are the same on every machine.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from itertools import pairwise, product
from typing import Any, TypeAlias

import mpmath
from mpmath.calculus.quadrature import GaussLegendre

from laplace_verify.references.exact_pieces import as_fraction

__all__ = ["Integral", "Tolerance", "along", "around", "over"]

POINTS = (12, 24, 48, 96)
STEPS = (8, 16, 32, 64, 128)  # nodes of tanh-sinh per unit of its own variable
TURNS = (4, 8, 16, 32, 64, 128, 256, 512)
ROUND = (1, 2, *TURNS)  # for surfaces, which may be symmetric about the axis
OFFSET = Fraction(3, 11)  # of a step: no point on a plane of symmetry, no two rules alike by chance
HALVINGS = 12
MOST = 20_000  # points of a surface
MOST_AROUND = 64
PANEL_HALVINGS = 4  # of a surface, where they multiply
PROBES = (Fraction(2, 7), Fraction(5, 6))  # lines on which the rules of a surface are settled

Rule: TypeAlias = list[tuple[Fraction, Any]]
Panel: TypeAlias = tuple[Fraction, Fraction, int]


@dataclass(frozen=True, slots=True)
class Tolerance:
    """Which change is let pass: `relative` times the integral of the absolute value and a `scale`."""

    relative: Any
    scale: Any

    def passes(self, change: Any, size: Any) -> bool:
        """Return whether a change is small enough."""
        return bool(change <= self.relative * (size + self.scale))


@dataclass(frozen=True, slots=True)
class Integral:
    """An integral, its change at the last refinement, and the integral of the absolute value."""

    value: Any
    change: Any
    size: Any

    def __add__(self, other: Integral) -> Integral:
        """Return the integral over both ranges."""
        return Integral(self.value + other.value, self.change + other.change, self.size + other.size)


def along(
    density: Callable[[Any], Any], breaks: Iterable[tuple[Fraction, bool]], tolerance: Tolerance
) -> Integral:
    """Return the integral over [0, 1].

    Parameters
    ----------
    density
        Of a fraction in (0, 1).
    breaks
        Where panels end, from 0 to 1, and whether the density is singular there.
    tolerance
        Which change from one rule to the next is let pass on a panel.
    """
    total = Integral(mpmath.mpf(0), mpmath.mpf(0), mpmath.mpf(0))
    for (start, steep), (stop, steep_too) in pairwise(breaks):
        if steep or steep_too:
            total += _settled((_applied(density, start, stop, _tanh_sinh(h)) for h in STEPS), tolerance)
        else:
            total += _halved(density, start, stop, tolerance, HALVINGS)
    return total


def around(density: Callable[[Any], Any], tolerance: Tolerance) -> Integral:
    """Return the integral of a density of period 1 over one period; see `along`."""
    zero, one = Fraction(0), Fraction(1)
    return _settled((_applied(density, zero, one, _trapezoid(m)) for m in TURNS), tolerance)


def over(density: Callable[[Any, Any], Any], turning: bool, tolerance: Tolerance) -> Integral | None:
    """Return the integral over [0, 1]^2 of a smooth density, periodic in the second parameter if `turning`.

    How fine the rules must be in either parameter is found along lines of the other; then the rule that is
    twice as fine in the first is compared with the one that is in the second. None if that takes more than
    20000 points. See `along`.
    """

    def across(v: Fraction) -> Callable[[Any], Any]:
        return lambda u: density(u, v)

    def beside(u: Fraction) -> Callable[[Any], Any]:
        return lambda v: density(u, v)

    if turning:
        m = max(_turns_needed(beside(u), tolerance) for u in PROBES)
        if m > MOST_AROUND:
            return None
        ring, finer_ring = _trapezoid(m), _trapezoid(2 * m)
        # only the mean around is smooth at the poles of a sphere
        first = _panels(lambda u: mpmath.fsum(q * density(u, v) for v, q in ring), tolerance)
        pairs = ((_composite(first), finer_ring), (_refined(first), ring))
    else:
        first = _finest([_panels(across(v), tolerance) for v in PROBES])
        second = _finest([_panels(beside(u), tolerance) for u in PROBES])
        pairs = ((_composite(first), _refined(second)), (_refined(first), _composite(second)))
    if sum(len(one) * len(other) for one, other in pairs) > MOST:
        return None
    return _settled((_tensor(density, *pair) for pair in pairs), tolerance)


def _finest(choices: list[list[Panel]]) -> list[Panel]:
    """Return the panels with most points."""
    return max(choices, key=lambda panels: sum(n for _, _, n in panels))


def _panels(density: Callable[[Any], Any], tolerance: Tolerance) -> list[Panel]:
    """Return panels of [0, 1], each with a number of points that twice as many confirm."""
    found: list[Panel] = []
    waiting = [(Fraction(0), Fraction(1), PANEL_HALVINGS)]
    while waiting:
        start, stop, halvings = waiting.pop()
        low, _ = _applied(density, start, stop, _gauss(POINTS[0]))
        for coarse, fine in pairwise(POINTS):
            high, size = _applied(density, start, stop, _gauss(fine))
            settled = tolerance.passes(abs(high - low), size)
            if settled or (not halvings and fine == POINTS[-1]):
                found.append((start, stop, coarse))
                break
            low = high
        else:
            middle = (start + stop) / 2
            waiting += [(start, middle, halvings - 1), (middle, stop, halvings - 1)]
    return sorted(found)


def _composite(panels: list[Panel], times: int = 1) -> Rule:
    """Return the rule made of the Gauss rules of all panels, with so many times their points."""
    return [
        (
            start + t * (stop - start),
            mpmath.mpf((stop - start).numerator) / (stop - start).denominator * weight,
        )
        for start, stop, n in panels
        for t, weight in _gauss(times * n)
    ]


def _refined(panels: list[Panel]) -> Rule:
    """Return the composite rule with twice the points."""
    return _composite(panels, 2)


def _turns_needed(density: Callable[[Any], Any], tolerance: Tolerance) -> int:
    """Return the smallest number of points around that twice as many confirm."""
    zero, one = Fraction(0), Fraction(1)
    low, _ = _applied(density, zero, one, _trapezoid(ROUND[0]))
    for coarse, fine in pairwise(ROUND):
        high, size = _applied(density, zero, one, _trapezoid(fine))
        if tolerance.passes(abs(high - low), size):
            return coarse
        low = high
    return ROUND[-2]


def _halved(
    density: Callable[[Any], Any], start: Fraction, stop: Fraction, tolerance: Tolerance, halvings: int
) -> Integral:
    """Return the integral over a panel, in halves if it does not settle."""
    found = _settled((_applied(density, start, stop, _gauss(n)) for n in POINTS), tolerance)
    if tolerance.passes(found.change, found.size) or not halvings:
        return found
    middle = (start + stop) / 2
    return _halved(density, start, middle, tolerance, halvings - 1) + _halved(
        density, middle, stop, tolerance, halvings - 1
    )


def _settled(sums: Iterable[tuple[Any, Any]], tolerance: Tolerance) -> Integral:
    """Return the first of ever finer sums that changes by no more than the tolerance, else the last."""
    every = iter(sums)
    value, size = next(every)
    found = Integral(value, size, size)
    for value, size in every:
        found = Integral(value, abs(value - found.value), size)
        if tolerance.passes(found.change, size):
            break
    return found


def _applied(density: Callable[[Any], Any], start: Fraction, stop: Fraction, rule: Rule) -> tuple[Any, Any]:
    """Return the sums of a rule for the density and for its absolute value."""
    width = stop - start
    length = mpmath.mpf(width.numerator) / width.denominator
    terms = [length * weight * density(start + t * width) for t, weight in rule]
    return mpmath.fsum(terms), mpmath.fsum(abs(term) for term in terms)


def _tensor(density: Callable[[Any, Any], Any], first: Rule, second: Rule) -> tuple[Any, Any]:
    """Return the sums of the product of two rules."""
    terms = [p * q * density(u, v) for (u, p), (v, q) in product(first, second)]
    return mpmath.fsum(terms), mpmath.fsum(abs(term) for term in terms)


def _gauss(n: int) -> Rule:
    """Return the Gauss-Legendre rule of n = 3 2^k points on [0, 1] at the working precision."""
    return _gauss_rule(n, mpmath.mp.prec)


@lru_cache(maxsize=32)
def _gauss_rule(n: int, precision: int) -> Rule:
    degree = (n // 3).bit_length()
    nodes = GaussLegendre(mpmath.mp).calc_nodes(degree, precision)
    return [((1 + as_fraction(x)) / 2, weight / 2) for x, weight in nodes]


def _trapezoid(m: int) -> Rule:
    """Return the trapezoid rule of m points on a period 1."""
    return [((k + OFFSET) / m, mpmath.mpf(1) / m) for k in range(m)]


def _tanh_sinh(steps: int) -> Rule:
    """Return the tanh-sinh rule on [0, 1] with `steps` nodes per unit."""
    return _tanh_sinh_rule(steps, mpmath.mp.prec)


@lru_cache(maxsize=32)
def _tanh_sinh_rule(steps: int, precision: int) -> Rule:
    """Return nodes s and 1 - s, s = 1/(1 + exp(pi sinh k h)), down to weights of 2**-precision squared."""
    rule, k = [(Fraction(1, 2), mpmath.pi / 4 / steps)], 1
    while True:
        x = mpmath.mpf(k) / steps
        grown = mpmath.exp(mpmath.pi * mpmath.sinh(x))
        near = 1 / (1 + grown)
        weight = mpmath.pi * mpmath.cosh(x) * near * grown * near / steps
        if weight < mpmath.mpf(2) ** (-2 * precision):
            return rule
        rule += [(as_fraction(near), weight), (1 - as_fraction(near), weight)]
        k += 1
