"""Families of odd and even functions of one coordinate, tabulated for sums of products of such functions.

Every function is expanded in Chebyshev's polynomials on [0, L], odd ones in T_1, T_3, ... (s/L), even ones
in T_0, T_2, ..., so that a whole family is one matrix product at a block of points; zeros of odd functions at
s = 0 are exact. The coefficients come from the 2N zeros of T_2N, of which the positive ones suffice:

    c_j = (2/N) sum_i f(L s_i) T_j(s_i),   s_i = cos((2i + 1) pi / (4N)),   halved for j = 0.

What is left out is rounding if the coefficients fall off at least geometrically, as they do for functions
that are analytic on the interval.

References
----------
Trefethen (2013), Approximation theory and approximation practice, ch. 3 and 8 (from memory, unchecked).
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from laplace_verify.arrays import Array, IntArray

__all__ = ["ParityTable", "coefficients", "cosines", "even_polynomials", "nodes", "parity_table", "products"]

SAMPLES = 128
SMALL = 2e-16  # of the largest coefficient: below it they are rounding


@dataclass(frozen=True, slots=True, eq=False)
class ParityTable:
    """Coefficients of odd functions, shape (K, m), and of even ones, shape (K, n), on [0, reach]."""

    reach: float
    odd: Array
    even: Array

    def odd_rows(self, s: Array) -> Array:
        """Return the odd functions at s, shape (K, points)."""
        found: Array = self.odd @ _polynomials(s / self.reach, self.odd.shape[1], 1)
        return found

    def even_rows(self, s: Array) -> Array:
        """Return the even functions at s, shape (K, points)."""
        found: Array = self.even @ _polynomials(s / self.reach, self.even.shape[1], 0)
        return found

    def times(self, weight: Array) -> ParityTable:
        """Return the table of the functions times a number each."""
        return ParityTable(self.reach, weight[:, None] * self.odd, weight[:, None] * self.even)


def parity_table(
    function: Callable[[Array], tuple[Array, Array]], reach: float, weight: Array
) -> ParityTable | None:
    """Return the table of functions of s in [0, reach], None where that would take too many polynomials.

    Parameters
    ----------
    function : callable
        Returns K odd functions and K even ones, shape (K, points) each, entire or nearly so.
    reach : float
        Length of the interval.
    weight : array (K,)
        The size of what the functions are multiplied by.

    Examples
    --------
    >>> table = parity_table(lambda s: (np.sin(s)[None], np.cos(s)[None]), 2.0, np.ones(1))
    >>> bool(abs(table.odd_rows(np.array([1.0]))[0, 0] - math.sin(1)) < 1e-15)
    True
    """
    kept = []
    for rows, parity in zip(function(reach * nodes(SAMPLES)), (1, 0), strict=True):
        found = coefficients(rows, parity)
        size = np.abs(weight[:, None] * found).max(axis=0)
        count = 2 + int(np.flatnonzero(size >= SMALL * size.max())[-1])
        if count > SAMPLES:
            return None
        kept.append(np.ascontiguousarray(found[:, :count]))
    return ParityTable(reach, *kept)


def products(f: Array, g: Array) -> Array:
    """Return sum_k f_k g_k for rows of K functions at points."""
    total: Array = np.einsum("ij,ij->j", f, g)
    return total


def nodes(count: int) -> Array:
    """Return the positive zeros of T_{2 count}, falling."""
    return cosines(2 * np.arange(count) + 1, count)


def coefficients(rows: Array, parity: int) -> Array:
    """Return the coefficients of functions with the values `rows`, shape (K, N), at `nodes`(N)."""
    count = rows.shape[1]
    odd = 2 * np.arange(count) + 1
    found: Array = rows @ cosines(np.multiply.outer(odd - 1 + parity, odd), count).T * (2.0 / count)
    if parity == 0:
        found[:, 0] /= 2.0
    return found


def cosines(turns: IntArray, count: int) -> Array:
    """Return cos(turns pi / (4 count)), the angle folded exactly into [0, pi/4], where rounding is least."""
    quarter = 2 * count
    turns = turns % (4 * quarter)
    turns = np.minimum(turns, 4 * quarter - turns)
    sign = np.where(turns > quarter, -1.0, 1.0)
    turns = np.minimum(turns, 2 * quarter - turns)
    unit = math.pi / (2.0 * quarter)
    small = 2 * turns <= quarter
    found: Array = sign * np.where(small, np.cos(turns * unit), np.sin((quarter - turns) * unit))
    return found


def even_polynomials(s: Array, count: int) -> Array:
    """Return T_0, T_2, ..., T_{2 count - 2} at s, shape (count, points)."""
    return _polynomials(s, count, 0)


def _polynomials(s: Array, count: int, parity: int) -> Array:
    """Return T_parity, T_{parity+2}, ... at s, shape (count, points)."""
    found = np.empty((count, len(s)))
    twice = 4.0 * s * s - 2.0  # T_{k+2} = 2 T_2 T_k - T_{k-2}
    found[0] = s if parity else 1.0
    if count > 1:
        found[1] = (twice - 1.0) * s if parity else twice / 2.0
    for k in range(2, count):
        np.multiply(twice, found[k - 1], out=found[k])
        found[k] -= found[k - 2]
    return found
