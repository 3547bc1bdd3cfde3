"""Charges that crowd about one point of an axis, by their multipoles.

Charges q_n at z = c + a_n, all |a_n| <= a, have outside of |x - c| = a the potential

    sum_l M_l P_l(cos t) / r^{l+1},   M_l = sum_n q_n a_n^l,   r and t seen from c,

and what is left out after L terms is at r >= b at most sum |q_n| (a / b)^L / (b - a); of gradients about
L / b times that. With Q_l = P_l / r^{l+1} and W_l = P'_{l+1} / r^{l+3},

    d Q_l / dz = -(l + 1) Q_{l+1},   d Q_l / dx = -x W_l,

    (l + 1) Q_{l+1} = [(2 l + 1) z Q_l - l Q_{l-1}] / r^2,
    (l + 1) W_{l+1} = [(2 l + 3) z W_l - (l + 2) W_{l-1}] / r^2.

(Jackson, Classical Electrodynamics, ch. 3 and 4, for the expansion; recurrences of Legendre and Gegenbauer
polynomials, NIST DLMF 18.9; both from memory, checked in tests against sums of charges.)
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from laplace_verify.arrays import Array

__all__ = ["Cluster"]

SMALL = 1e-18  # of the first term


@dataclass(frozen=True, slots=True, eq=False)
class Cluster:
    """Moments M_0, M_1, ... about z = centre."""

    centre: float
    moments: tuple[float, ...]

    @classmethod
    def of(cls, centre: float, charges: Array, offsets: Array, nearest: float) -> Cluster:
        """Return the cluster of charges at centre + offsets for points at least `nearest` from the centre."""
        size, ratio = np.abs(charges).sum(), np.abs(offsets).max(initial=0.0) / nearest
        count = 1
        while (count + 1) * ratio**count > SMALL and size > 0:
            count += 1
        return cls(centre, tuple(float((charges * offsets**degree).sum()) for degree in range(count)))

    def value(self, dz: Array, flat: Array) -> Array:
        """Return the potential at height dz and at squared distance `flat` from the axis."""
        z, inverse = self._seen(dz, flat)
        before, now = np.zeros_like(z), np.sqrt(inverse)
        z *= inverse
        total = self.moments[0] * now
        for degree, moment in enumerate(self.moments[1:]):
            before, now = now, _next(before, now, z, inverse, (2 * degree + 1, degree, degree + 1))
            total += moment * now
        return total

    def slopes(self, dz: Array, flat: Array) -> tuple[Array, Array]:
        """Return what is to be multiplied by x for the derivative in x, and the derivative in z."""
        z, inverse = self._seen(dz, flat)
        before = np.sqrt(inverse)
        wave_before, wave = np.zeros_like(z), inverse * before  # W_{-1}, W_0
        now = z * wave  # Q_1
        z *= inverse
        across, along = -self.moments[0] * wave, -self.moments[0] * now
        for n, moment in enumerate(self.moments[1:], start=1):
            before, now = now, _next(before, now, z, inverse, (2 * n + 1, n, n + 1))
            wave_before, wave = wave, _next(wave_before, wave, z, inverse, (2 * n + 1, n + 1, n))
            across -= moment * wave
            along -= moment * (n + 1) * now
        return across, along

    def _seen(self, dz: Array, flat: Array) -> tuple[Array, Array]:
        """Return height and inverse squared distance from the centre."""
        z = dz - self.centre
        square = z * z
        square += flat
        return z, np.divide(1.0, square, out=square)


def _next(before: Array, now: Array, z: Array, inverse: Array, factors: tuple[int, int, int]) -> Array:
    """Return (a z now - b inverse before) / c, in place of `before`."""
    a, b, c = factors
    before *= inverse
    before *= -b / c
    lead = z * now
    lead *= a / c
    before += lead
    return before
