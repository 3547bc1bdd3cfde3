"""Box with one hot face in float64: u = 1 on the face at d = 0, 0 on the five others.

The place where a Brownian particle leaves the box depends on three independent coordinates, so that

    u(x, y, d) = int_0^inf phi_a(x, t) phi_b(y, t) kappa_c(d, t) dt        (`box_axes`),

with x and y measured from the nearer walls. Let m be the least extent.

* d > m/2: the trapezoidal rule in log t; its error is about e^{-pi^2/step}, and times before (m/2)^2/160 and
  after a few m^2 hold nothing.
* d <= m/2: up to the time tau = (3m/2)^2/160 the integrand is that of the nearest images,
  E_a E_b kappa_inf, to rounding, and over all times the latter is a sum of solid angles,

      S = int_0^inf E_a E_b kappa_inf dt = (2/pi) sum_{i,j = -1..1} (-1)^{i+j} atan2(X Y, d R),
      X = x - i a,  Y = y - j b,  R^2 = X^2 + Y^2 + d^2,

  so u = S + int_tau^inf phi_a phi_b kappa_c dt - int_tau^inf E_a E_b kappa_inf dt. Both integrands are smooth
  at every distance from face, edges and corners: Gauss's rule in log t for the first, in v = t^{-1/2} (where
  the integrand is entire and even) for the second, on panels that double as far as the longest extent asks
  for.

Every extent is admissible; the work grows with the logarithm of the aspect ratio.

References
----------
Carslaw & Jaeger (1959), Conduction of heat in solids, 2nd ed., section 6.1 (product solutions); Trefethen &
Weideman (2014), SIAM Review 56, 385-458 (trapezoidal rule); both from memory, unchecked. Splitting derived
here.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from functools import lru_cache, partial

import numpy as np

from laplace_verify.arrays import Array, BoolArray, IntArray, blocks
from laplace_verify.fields.box_axes import ACCURACY, Rows, flow, nearest_images, survival
from laplace_verify.fields.parity_tables import ParityTable, parity_table, products

__all__ = ["face_slopes", "face_value"]

STEP = 0.25  # of log t: exp(-pi^2 / STEP) = 7e-18
BLOCK = 1024  # points at once: rows of times by points stay in cache
GAUSS, PANEL = 40, 20
SAMPLED = 65  # distances at which the size of a flow is seen
SHORT = 5.0  # largest v times extent of the innermost panel

Extents = tuple[float, float, float]
Factors = Callable[[Array, Array, Array, Array, bool], tuple[Rows, ...]]
Part = tuple[Array, Factors]


@dataclass(frozen=True, slots=True, eq=False)
class Rule:
    """Signed weights of a sum over times, its three factors there, and their tables if they can be had.

    The flow is odd about the hot face or, if `opposite`, about the opposite one, from where its table counts.
    """

    weight: Array
    factors: Factors
    tables: tuple[ParityTable, ...]
    opposite: bool

    def rows(self, x: Array, y: Array, d: Array, h: Array, slopes: bool) -> tuple[Rows, Rows, Rows]:
        """Return the factors, the last one times the weights."""
        if not self.tables:
            f, g, (k, dk) = self.factors(x, y, d, h, slopes)
            return f, g, (self.weight[:, None] * k, self.weight[:, None] * dk)
        places = zip(self.tables, (x, y, h if self.opposite else d), strict=True)
        f, g, (k, dk) = ((table.odd_rows(s), table.even_rows(s) if slopes else s) for table, s in places)
        return f, g, (k, -dk if self.opposite else dk)


def face_value(x: Array, y: Array, d: Array, h: Array, extents: Extents) -> Array:
    """Return u at distances x, y from the nearer walls, d from the hot face and h from the opposite one."""
    close = d <= min(extents) / 2.0
    u = np.zeros(len(d))
    u[close] = _solid_angles(x[close], y[close], d[close], extents)
    for rule, rows in _sums(close, extents):
        for block in blocks(len(rows), BLOCK):
            here = rows[block]
            (f, _), (g, _), (k, _) = rule.rows(x[here], y[here], d[here], h[here], False)
            u[here] += products(f * g, k)
    return u


def face_slopes(x: Array, y: Array, d: Array, h: Array, extents: Extents) -> tuple[Array, Array, Array]:
    """Return the derivatives of `face_value` in x, y and d."""
    close = d <= min(extents) / 2.0
    slopes = np.zeros((3, len(d)))
    slopes[:, close] = _solid_angle_slopes(x[close], y[close], d[close], extents)
    for rule, rows in _sums(close, extents):
        for block in blocks(len(rows), BLOCK):
            here = rows[block]
            (f, df), (g, dg), (k, dk) = rule.rows(x[here], y[here], d[here], h[here], True)
            slopes[0, here] += products(df, g * k)
            slopes[1, here] += products(dg, f * k)
            slopes[2, here] += products(f * g, dk)
    return slopes[0], slopes[1], slopes[2]


def _sums(close: BoolArray, extents: Extents) -> Iterator[tuple[Rule, IntArray]]:
    """Yield the rules and their points."""
    for rule, rows in ((_near_rule, np.flatnonzero(close)), (_far_rule, np.flatnonzero(~close))):
        if len(rows):
            yield rule(extents), rows


@lru_cache(maxsize=64)
def _near_rule(extents: Extents) -> Rule:
    """Return the sum over late times, less that of the nearest images, for d <= m/2."""
    parts = (_late_box(extents), _late_images(extents))

    def factors(x: Array, y: Array, d: Array, h: Array, slopes: bool) -> tuple[Rows, ...]:
        pairs = zip(*(part[1](x, y, d, h, slopes) for part in parts), strict=True)
        return tuple((np.vstack([a[0], b[0]]), np.vstack([a[1], b[1]])) for a, b in pairs)

    return _tabled(np.concatenate([parts[0][0], -parts[1][0]]), factors, extents, opposite=False)


@lru_cache(maxsize=64)
def _far_rule(extents: Extents) -> Rule:
    """Return the sum over all times, for d > m/2."""
    return _tabled(*_whole_box(extents), extents, opposite=True)


def _tabled(weight: Array, factors: Factors, extents: Extents, *, opposite: bool) -> Rule:
    """Return a rule with the tables of its factors."""
    a, b, c = extents
    half = min(extents) / 2.0
    reach = c - half if opposite else half

    def along(i: int, s: Array) -> Rows:
        if i < 2:
            return factors(s, s, half + 0.0 * s, c - half + 0.0 * s, True)[i]
        if not opposite:
            return factors(0.0 * s, 0.0 * s, s, c - s, True)[2]
        value, slope = factors(0.0 * s, 0.0 * s, c - s, s, True)[2]
        return value, -slope

    through = partial(along, 2)
    flow_size = np.abs(weight) * np.abs(through(np.linspace(0.0, reach, SAMPLED))[0]).max(axis=1)
    tables = []
    for i, (length, size) in enumerate(((a / 2, flow_size), (b / 2, flow_size), (reach, np.abs(weight)))):
        table = parity_table(partial(along, i), length, size)
        if table is None:
            return Rule(weight, factors, (), opposite)
        tables.append(table)
    tables[2] = tables[2].times(weight)
    return Rule(weight, factors, tuple(tables), opposite)


def _last_time(extents: Extents) -> float:
    """Return the time after which nothing is left in the box."""
    return ACCURACY / (math.pi**2 * sum(1.0 / e**2 for e in extents))


@lru_cache(maxsize=64)
def _whole_box(extents: Extents) -> Part:
    """Return the trapezoidal rule for all times, at d > m/2."""
    first = math.log((min(extents) / 2.0) ** 2 / (4.0 * ACCURACY))
    t = np.exp(np.arange(first, math.log(_last_time(extents)) + STEP, STEP))
    return STEP * t, _box_factors(extents, t)


@lru_cache(maxsize=64)
def _late_box(extents: Extents) -> Part:
    """Return Gauss's rule in log t for times after tau."""
    log_t, weight = _gauss(GAUSS, math.log(_first_difference(extents)), math.log(_last_time(extents)))
    t = np.exp(log_t)
    return weight * t, _box_factors(extents, t)


@lru_cache(maxsize=64)
def _late_images(extents: Extents) -> Part:
    """Return Gauss's rule in v = t^{-1/2} from 0 to tau^{-1/2} for the nearest images, to be taken off."""
    a, b, _ = extents
    high = 1.0 / math.sqrt(_first_difference(extents))
    nodes, weights = [], []
    while high * max(a, b) > SHORT:
        panel = _gauss(PANEL, high / 2.0, high)
        nodes.append(panel[0])
        weights.append(panel[1])
        high /= 2.0
    even = _gauss(2 * PANEL, -high, high)
    v = np.concatenate([*nodes, even[0][PANEL:]])
    weight = np.concatenate([*weights, even[1][PANEL:]])

    def factors(x: Array, y: Array, d: Array, h: Array, slopes: bool) -> tuple[Rows, Rows, Rows]:
        del h
        square = (v * v)[:, None]
        decay = np.exp(-square * (d * d / 4.0)) / math.sqrt(
            math.pi
        )  # f(d) dt = d e^{-d^2 v^2/4} dv / sqrt pi
        through = (d * decay, (1.0 - square * (d * d / 2.0)) * decay)
        return nearest_images(x, a, v, slopes), nearest_images(y, b, v, slopes), through

    return weight, factors


def _box_factors(extents: Extents, t: Array) -> Factors:
    """Return the three factors of the box at given times."""
    a, b, c = extents

    def factors(x: Array, y: Array, d: Array, h: Array, slopes: bool) -> tuple[Rows, Rows, Rows]:
        return survival(x, a, t, slopes), survival(y, b, t, slopes), flow(d, h, c, t, slopes)

    return factors


def _first_difference(extents: Extents) -> float:
    """Return tau: the images left out are at least 3m/2 away."""
    return float((1.5 * min(extents)) ** 2 / (4.0 * ACCURACY))


def _gauss(count: int, low: float, high: float) -> tuple[Array, Array]:
    """Return nodes and weights of Gauss's rule on [low, high]."""
    nodes, weights = np.polynomial.legendre.leggauss(count)
    half = (high - low) / 2.0
    return half * nodes + (high + low) / 2.0, half * weights


def _corners(x: Array, y: Array, extents: Extents) -> Iterator[tuple[float, Array, Array]]:
    """Yield sign and offsets of the nine nearest lattice corners."""
    for i in (0, 1, -1):
        for j in (0, 1, -1):
            yield 2.0 / math.pi * (-1.0) ** (i + j), x - i * extents[0], y - j * extents[1]


def _solid_angles(x: Array, y: Array, d: Array, extents: Extents) -> Array:
    """Return S."""
    total = np.zeros(len(d))
    for sign, across, along in _corners(x, y, extents):
        total += sign * np.arctan2(across * along, d * np.sqrt(across**2 + along**2 + d * d))
    return total


def _solid_angle_slopes(x: Array, y: Array, d: Array, extents: Extents) -> list[Array]:
    """Return the derivatives of S in x, y and d."""
    slopes = [np.zeros(len(d)) for _ in range(3)]
    for sign, across, along in _corners(x, y, extents):
        p, q = across**2 + d * d, along**2 + d * d
        r = np.sqrt(p + along**2)
        slopes[0] += sign * along * d / (p * r)
        slopes[1] += sign * across * d / (q * r)
        slopes[2] -= sign * (across / p) * (along / q) * ((r * r + d * d) / r)
    return slopes
