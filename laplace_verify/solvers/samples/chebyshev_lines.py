"""Piecewise polynomials on an interval, given by their values at Chebyshev points.

Between two stops lie n + 1 points, x_j = (a + b)/2 - (b - a)/2 cos(j pi / n); neighbours share their stop.
Values at other points come from the barycentric formula, which is the polynomial itself, not a fit to it.

References
----------
Trefethen, Spectral Methods in MATLAB, 2000, chapters 6 and 12 (differentiation,
Clenshaw-Curtis weights); Berrut & Trefethen, Barycentric Lagrange interpolation, SIAM Review 46 (2004)
501-517, eq. 5.4 (from memory, unchecked).
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from laplace_verify.arrays import Array, BoolArray

__all__ = ["Line", "clenshaw_curtis"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Line:
    """Stops on an axis, rising, and the degree n of the polynomial between each two."""

    stops: Array
    n: int

    def __len__(self) -> int:
        """Return the number of nodes."""
        return self.n * (len(self.stops) - 1) + 1

    def spans(self) -> Iterator[tuple[slice, float, float]]:
        """Yield the nodes between two stops, and the stops."""
        for e in range(len(self.stops) - 1):
            yield slice(e * self.n, (e + 1) * self.n + 1), float(self.stops[e]), float(self.stops[e + 1])

    def nodes(self) -> Array:
        """Return all nodes, rising; stops are exact."""
        x = np.empty(len(self))
        t = np.sin(np.pi * np.arange(-self.n, self.n + 1, 2) / (2 * self.n))  # -cos(j pi / n), exactly odd
        for span, a, b in self.spans():
            half = 0.5 * (b - a)
            x[span] = np.where(t > 0.0, b - half * (1.0 - t), a + half * (1.0 + t))
        return x

    def at_inner_stop(self) -> BoolArray:
        """Tell which nodes are shared by two polynomials."""
        return np.isin(np.arange(len(self)), np.arange(1, len(self.stops) - 1) * self.n)

    def derivative(self, power: int) -> Array:
        """Return the matrix of a derivative at the nodes; at inner stops the mean of both sides."""
        matrix = np.zeros((len(self), len(self)))
        for span, a, b in self.spans():
            matrix[span, span] += np.linalg.matrix_power(slopes(self.n, b - a), power)
        matrix[self.at_inner_stop()] *= 0.5
        return matrix

    def jump(self) -> Array:
        """Return the matrix that gives the jump of the first derivative at inner stops, zero elsewhere."""
        matrix = np.zeros((len(self), len(self)))
        for span, a, b in self.spans():
            matrix[span.start, span] += slopes(self.n, b - a)[0]
            matrix[span.stop - 1, span] -= slopes(self.n, b - a)[-1]
        matrix[~self.at_inner_stop()] = 0.0
        return matrix

    def weights(self) -> Array:
        """Return weights at the nodes that integrate the polynomials."""
        total = np.zeros(len(self))
        for span, a, b in self.spans():
            total[span] += 0.5 * (b - a) * clenshaw_curtis(self.n)
        return total

    def basis(self, x: Array, *, slope: bool = False) -> Array:
        """Return the values (or slopes) at x that unit values at each node make, shape (len(x), nodes)."""
        matrix = np.zeros((len(x), len(self)))
        home = np.clip(np.searchsorted(self.stops, x, side="right") - 1, 0, len(self.stops) - 2)
        nodes = self.nodes()
        for e, (span, a, b) in enumerate(self.spans()):
            rows = home == e
            part = barycentric(x[rows], nodes[span])
            matrix[rows, span] = part @ slopes(self.n, b - a) if slope else part
        return matrix


def alternating(n: int) -> Array:
    """Return (-1)^j, halved at both ends: the barycentric weights of the Chebyshev points."""
    w = np.where(np.arange(n + 1) % 2, -1.0, 1.0)
    w[[0, -1]] *= 0.5
    return w


def slopes(n: int, length: float) -> Array:
    """Return the matrix that differentiates the polynomial through n + 1 points on an interval."""
    t, w = np.sin(np.pi * np.arange(-n, n + 1, 2) / (2 * n)), alternating(n)
    matrix = w / w[:, np.newaxis] / (t[:, np.newaxis] - t + np.eye(n + 1))
    np.fill_diagonal(matrix, 0.0)
    np.fill_diagonal(matrix, -matrix.sum(axis=1))  # constants have slope zero, to rounding
    return matrix * (2.0 / length)


def barycentric(x: Array, nodes: Array) -> Array:
    """Return the Lagrange polynomials of Chebyshev points at x, shape (len(x), len(nodes))."""
    gaps = x[:, np.newaxis] - nodes
    rows, columns = np.nonzero(gaps == 0.0)
    gaps[rows] = 1.0
    terms: Array = alternating(len(nodes) - 1) / gaps
    terms[rows] = np.eye(len(nodes))[columns]
    terms /= terms.sum(axis=1, keepdims=True)
    return terms


def clenshaw_curtis(n: int) -> Array:
    """Return weights on [-1, 1] that integrate the cosine series through n + 1 Chebyshev points."""
    j, even = np.arange(n + 1), np.arange(0, n + 1, 2)
    series = np.cos(np.pi * np.outer(j, even) / n) * (2.0 / (1.0 - even**2))
    series[:, 0] *= 0.5
    if n % 2 == 0:
        series[:, -1] *= 0.5
    w: Array = (2.0 / n) * series.sum(axis=1)
    w[[0, -1]] *= 0.5
    return w
