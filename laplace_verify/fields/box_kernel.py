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
from functools import lru_cache

import numpy as np

from laplace_verify.arrays import Array, BoolArray, IntArray, blocks
from laplace_verify.fields.box_axes import ACCURACY, Rows, flow, nearest_images, survival

__all__ = ["face_slopes", "face_value"]

STEP = 0.25  # of log t: exp(-pi^2 / STEP) = 7e-18
BLOCK = 512  # points at once: rows of times by points stay in cache
GAUSS, PANEL = 40, 20
SHORT = 5.0  # largest v times extent of the innermost panel

Extents = tuple[float, float, float]
Factors = Callable[[Array, Array, Array, Array, bool], tuple[Rows, Rows, Rows]]
Part = tuple[float, Array, Factors]


def face_value(x: Array, y: Array, d: Array, h: Array, extents: Extents) -> Array:
    """Return u at distances x, y from the nearer walls, d from the hot face and h from the opposite one."""
    close = d <= min(extents) / 2.0
    u = np.where(close, _solid_angles(x, y, d, extents), 0.0)
    for sign, weight, factors, rows in _sums(close, extents):
        for block in blocks(len(rows), BLOCK):
            here = rows[block]
            (f, _), (g, _), (k, _) = factors(x[here], y[here], d[here], h[here], False)
            u[here] += sign * (weight @ (f * g * k))
    return u


def face_slopes(x: Array, y: Array, d: Array, h: Array, extents: Extents) -> tuple[Array, Array, Array]:
    """Return the derivatives of `face_value` in x, y and d."""
    close = d <= min(extents) / 2.0
    slopes = [np.where(close, part, 0.0) for part in _solid_angle_slopes(x, y, d, extents)]
    for sign, weight, factors, rows in _sums(close, extents):
        for block in blocks(len(rows), BLOCK):
            here = rows[block]
            (f, df), (g, dg), (k, dk) = factors(x[here], y[here], d[here], h[here], True)
            for slope, product in zip(slopes, (df * g * k, f * dg * k, f * g * dk), strict=True):
                slope[here] += sign * (weight @ product)
    return slopes[0], slopes[1], slopes[2]


def _sums(close: BoolArray, extents: Extents) -> Iterator[tuple[float, Array, Factors, IntArray]]:
    """Yield sign, weights, factors and points of the sums over time: two near the hot face, else one."""
    near, far = np.flatnonzero(close), np.flatnonzero(~close)
    if len(near):
        for part in (_late_box(extents), _late_images(extents)):
            yield (*part, near)
    if len(far):
        yield (*_whole_box(extents), far)


def _last_time(extents: Extents) -> float:
    """Return the time after which nothing is left in the box."""
    return ACCURACY / (math.pi**2 * sum(1.0 / e**2 for e in extents))


@lru_cache(maxsize=64)
def _whole_box(extents: Extents) -> Part:
    """Return the trapezoidal rule for all times, at d > m/2."""
    first = math.log((min(extents) / 2.0) ** 2 / (4.0 * ACCURACY))
    t = np.exp(np.arange(first, math.log(_last_time(extents)) + STEP, STEP))
    return 1.0, STEP * t, _box_factors(extents, t)


@lru_cache(maxsize=64)
def _late_box(extents: Extents) -> Part:
    """Return Gauss's rule in log t for times after tau."""
    log_t, weight = _gauss(GAUSS, math.log(_first_difference(extents)), math.log(_last_time(extents)))
    t = np.exp(log_t)
    return 1.0, weight * t, _box_factors(extents, t)


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

    return -1.0, weight, factors


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
