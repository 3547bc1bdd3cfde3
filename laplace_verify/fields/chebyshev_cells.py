"""Functions of two variables by Chebyshev sums in cells: sum_ij c_ij T_i(a) T_j(b), a cell a matrix product.

Points are sorted by cell, so that each cell is worked on once. Coefficients come from the zeros of T_n,

    c_j = (2/n) sum_i f(x_i) T_j(x_i),   x_i = cos((2i + 1) pi / (2n)),   halved for j = 0,

in both variables; what is left out is rounding if they have fallen to rounding before n, which is checked.

References
----------
Trefethen (2013), Approximation theory and approximation practice, ch. 3 and 8 (from memory, unchecked).
"""

from __future__ import annotations

import itertools
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.fields.parity_tables import cosines

__all__ = ["ChebyshevCells", "chebyshev_cells"]

SMALL = 4e-16  # of the largest coefficient of a cell: below it they are rounding


@dataclass(frozen=True, slots=True, eq=False)
class ChebyshevCells:
    """Coefficients of K functions, shape (cells, K, m, n); cell = i * (intervals of b) + j."""

    a: Array  # edges of the intervals of both variables
    b: Array
    coefficients: tuple[tuple[Array, ...], ...]

    def values(self, a: Array, b: Array, wanted: Sequence[int], inside: BoolArray) -> tuple[Array, IntArray]:
        """Return functions by their numbers, 0 where not `inside`, and the numbers of the points outside."""
        cell = _interval(self.a, a) * np.int8(len(self.b) - 1)
        cell += _interval(self.b, b)
        cell[~inside] = len(self.coefficients)
        order = np.argsort(cell, kind="stable")
        ends = np.cumsum(np.bincount(cell, minlength=len(self.coefficients) + 1))
        found = np.zeros((len(wanted), len(a)))
        for k, functions in enumerate(self.coefficients):
            here = order[ends[k - 1] if k else 0 : ends[k]]
            if not here.size:
                continue
            m, n = functions[0].shape
            across = _polynomials(_mapped(self.a, k // (len(self.b) - 1), a[here]), m)
            along = _polynomials(_mapped(self.b, k % (len(self.b) - 1), b[here]), n)
            for row, number in zip(found, wanted, strict=True):
                row[here] = np.einsum("ij,ij->j", functions[number] @ along, across)
        return found, order[ends[-2] :]


def chebyshev_cells(
    function: Callable[[Array, Array], Sequence[Array]], a: Sequence[float], b: Sequence[float], most: int
) -> ChebyshevCells:
    """Return the cells of K functions of (a, b), with at most `most` polynomials in each variable.

    Examples
    --------
    >>> wave = chebyshev_cells(lambda a, b: [np.sin(a) * np.exp(b)], (0, 1, 2), (0, 1), 24)
    >>> found, _ = wave.values(np.array([1.5]), np.array([0.5]), [0], np.array([True]))
    >>> found.round(9).tolist()
    [[1.644591202]]

    Raises
    ------
    ValueError
        If that does not do.
    """
    odd = 2 * (2 * np.arange(most) + 1)
    nodes, turn = cosines(odd, most), cosines(np.multiply.outer(np.arange(most), odd), most) * (2.0 / most)
    turn[0] /= 2.0
    kept = []
    for low_a, high_a in itertools.pairwise(a):
        for low_b, high_b in itertools.pairwise(b):
            at = np.meshgrid(
                low_a + (high_a - low_a) * (1 + nodes) / 2, low_b + (high_b - low_b) * (1 + nodes) / 2,
                indexing="ij",
            )  # fmt: skip
            parts = function(at[0].ravel(), at[1].ravel())
            found = np.stack([turn @ part.reshape(most, most) @ turn.T for part in parts])
            size = np.abs(found / np.abs(found).max(axis=(1, 2), keepdims=True)).max(axis=0)
            m, n = (1 + int(np.flatnonzero(size.max(axis=axis) > SMALL)[-1]) for axis in (1, 0))
            if max(m, n) == most:
                raise ValueError(f"{most} polynomials do not give the functions on this cell to rounding")
            kept.append(tuple(np.ascontiguousarray(c[:m, :n]) for c in found))
    return ChebyshevCells(np.array(a, dtype=np.float64), np.array(b, dtype=np.float64), tuple(kept))


def _interval(edges: Array, x: Array) -> npt.NDArray[np.int8]:
    """Return the interval of each point, the last one also beyond its end."""
    found = np.zeros(len(x), dtype=np.int8)
    for edge in edges[1:-1]:
        found += x >= edge
    return found


def _mapped(edges: Array, k: int, x: Array) -> Array:
    """Return x on the scale -1 ... 1 of an interval."""
    scale = 2.0 / (edges[k + 1] - edges[k])
    mapped: Array = x * scale
    mapped -= scale * edges[k] + 1.0
    return mapped


def _polynomials(x: Array, count: int) -> Array:
    """Return T_0 ... T_{count - 1} at x, shape (count, points)."""
    found = np.empty((count, len(x)))
    found[0] = 1.0
    if count > 1:
        found[1] = x
    twice = 2.0 * x
    for k in range(2, count):
        np.multiply(twice, found[k - 1], out=found[k])
        found[k] -= found[k - 2]
    return found
