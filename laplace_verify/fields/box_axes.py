"""One-dimensional factors of heat flow in a box: survival between walls, and flow through a face.

A Brownian particle of generator Laplace that starts at x in (0, a) is still between absorbing walls at time t
with probability

    phi_a(x, t) = sum_{n odd} 4/(n pi) sin(n pi x/a) e^{-n^2 pi^2 t/a^2}
                = sum_i (-1)^i erf((x - i a) / (2 sqrt t)),

and leaves (0, c) through the end at distance d at the rate

    kappa_c(d, t) = sum_k 2 k pi/c^2 sin(k pi d/c) e^{-k^2 pi^2 t/c^2} = sum_j f(d + 2 j c),
    f(s) = s e^{-s^2/4t} / (2 sqrt(pi) t^{3/2}).

E_a keeps the three nearest images of phi_a. Rows belong to times, columns to points; each function comes with
its derivative in space (or, if `slopes` is False, with itself once more).

References
----------
Carslaw & Jaeger (1959), Conduction of heat in solids, 2nd ed., ch. III and XIV (from memory; both forms are
compared with each other in tests).
"""

from __future__ import annotations

import math

import numpy as np
from scipy.special import erf

from laplace_verify.arrays import Array

__all__ = ["ACCURACY", "Rows", "flow", "nearest_images", "survival"]

ACCURACY = 40.0  # exp(-40) = 4e-18 is left out
LATE = 0.014  # t / a^2 from which the sines serve; earlier the three nearest images are all of phi_a
LATE_FLOW = 0.05
ODD = np.arange(1, 18, 2)  # exp(-19^2 pi^2 LATE) = 2e-22
EVERY = np.arange(1, 11)  # exp(-11^2 pi^2 LATE_FLOW) = 1e-26

Rows = tuple[Array, Array]


def nearest_images(x: Array, a: float, v: Array, slopes: bool) -> Rows:
    """Return E_a and dE_a/dx at 2 sqrt t = 1/s, s = v / 2, shape (times, points); 0 <= x <= a/2."""
    s = v[:, None] / 2.0
    near, beyond, behind = x * s, (a - x) * s, (a + x) * s
    value = erf(near) + (erf(beyond) - erf(behind))
    if not slopes:
        return value, value
    slope = (
        (2.0 / math.sqrt(math.pi))
        * s
        * (np.exp(-near * near) - np.exp(-beyond * beyond) - np.exp(-behind * behind))
    )
    return value, slope


def survival(x: Array, a: float, t: Array, slopes: bool) -> Rows:
    """Return phi_a and its derivative at distances 0 <= x <= a/2 from the nearer wall."""
    value = np.empty((len(t), len(x)))
    slope = np.empty_like(value) if slopes else value
    early = t < LATE * a * a
    if early.any():
        value[early], steep = nearest_images(x, a, 1.0 / np.sqrt(t[early]), slopes)
        if slopes:
            slope[early] = steep
    late = ~early
    if late.any():
        angle = np.multiply.outer(ODD, math.pi / a * x)
        decay = np.exp(-np.multiply.outer(t[late], (ODD * (math.pi / a)) ** 2))
        value[late] = (4.0 / math.pi / ODD * decay) @ np.sin(angle)
        if slopes:
            slope[late] = (4.0 / a * decay) @ np.cos(angle)
    return value, slope


def flow(d: Array, h: Array, c: float, t: Array, slopes: bool) -> Rows:
    """Return kappa_c and its derivative in d; d + h = c."""
    value = np.empty((len(t), len(d)))
    slope = np.empty_like(value) if slopes else value
    early = t < LATE_FLOW * c * c
    if early.any():
        value[early], steep = _images(d, h, c, t[early][:, None])
        if slopes:
            slope[early] = steep
    late = ~early
    if late.any():
        near = np.where(d <= h, d, h)
        angle = np.multiply.outer(EVERY, math.pi / c * near)
        turn = np.where(d <= h, 1.0, -1.0)  # sin(k pi d/c) = (-1)^(k+1) sin(k pi h/c)
        sign = np.where(EVERY[:, None] % 2 == 1, 1.0, turn)
        weight = (
            2.0 * math.pi / c**2 * EVERY * np.exp(-np.multiply.outer(t[late], (EVERY * (math.pi / c)) ** 2))
        )
        value[late] = weight @ (sign * np.sin(angle))
        if slopes:
            slope[late] = (weight * (EVERY * math.pi / c)) @ (sign * turn * np.cos(angle))
    return value, slope


def _images(d: Array, h: Array, c: float, t: Array) -> Rows:
    """Return the images at d, d - 2c, d + 2c and d - 4c, in pairs that cancel exactly on the far face."""
    value, slope = np.zeros(()), np.zeros(())
    for sign, s in ((1.0, d), (-1.0, c + h), (1.0, 2.0 * c + d), (-1.0, 3.0 * c + h)):
        decay = np.exp(-s * s / (4.0 * t))
        value = value + sign * s * decay
        slope = slope + (1.0 - s * s / (2.0 * t)) * decay
    scale = 2.0 * math.sqrt(math.pi) * t * np.sqrt(t)
    return value / scale, slope / scale
