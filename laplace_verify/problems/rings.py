"""The fundamental solution of space integrated over a ring about the axis.

With K = diag(K_r, K_z) and rho^2 = |x - p|_r^2/K_r + (z - q)^2/K_z the solution of div(K grad G) = -delta is
1/(4 pi K_r sqrt(K_z) rho). Integrated over the angle of the point (r, z), seen from p at (s, q):

    G = 1/(pi K_r sqrt(K_z)) K(m)/sqrt(a),    a = (r + s)^2/K_r + (z - q)^2/K_z,    m = 4 r s/(K_r a),

K(m) and E(m) the complete elliptic integrals, dK/dm = (E/(1 - m) - K)/(2 m) (Abramowitz and Stegun 1964,
Handbook of Mathematical Functions, chapter 17; the ring potential: Jackson, Classical Electrodynamics, from
memory, unchecked). 1 - m = ((r - s)^2/K_r + (z - q)^2/K_z)/a is formed without cancellation.
"""

from __future__ import annotations

import math

import numpy as np
from scipy.special import ellipe, ellipkm1

from laplace_verify.arrays import Array

__all__ = ["ring_source"]


def ring_source(points: Array, place: Array, diagonal: Array) -> tuple[Array, Array]:
    """Return G (n,) and its gradient (n, 2) at points (r, z), shape (n, 2), seen from a place (s, q), s > 0.

    >>> g, _ = ring_source(np.array([[0.0, 3.0]]), np.array([4.0, 0.0]), np.ones(2))
    >>> round(float(g[0]), 12) == round(1 / (2 * 5), 12)  # on the axis: 2 pi/(4 pi 5)
    True
    """
    (r, z), (s, q) = points.T, place
    k_r, k_z = diagonal.tolist()
    height = z - q
    a = (r + s) ** 2 / k_r + height**2 / k_z
    below = ((r - s) ** 2 / k_r + height**2 / k_z) / a  # 1 - m
    m = 4.0 * r * s / (k_r * a)
    first, second = ellipkm1(below), ellipe(m)
    series = math.pi / 8.0 * (1.0 + 9.0 * m / 8.0)  # the first terms of dK/dm
    slope = np.where(m > 1e-6, (second / below - first) / (2.0 * np.maximum(m, 1e-6)), series)
    factor = 1.0 / (math.pi * k_r * math.sqrt(k_z) * np.sqrt(a))
    a_r, a_z = 2.0 * (r + s) / k_r, 2.0 * height / k_z
    m_r, m_z = 4.0 * s / (k_r * a) - m * a_r / a, -m * a_z / a
    gradient = np.stack(
        [factor * (slope * m_i - first * a_i / (2.0 * a)) for m_i, a_i in ((m_r, a_r), (m_z, a_z))], axis=1
    )
    return factor * first, gradient
