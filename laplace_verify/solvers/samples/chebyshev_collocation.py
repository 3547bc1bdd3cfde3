"""Chebyshev collocation for div(K grad u) = 0 on an interval or a rectangle.

u is a polynomial of degree n in every coordinate, given by its values at the Chebyshev points x_j = cos(j pi
/ n). At inner points the equation itself holds; at boundary points the conditions do. Where several pieces
meet, a Dirichlet value wins (two of them: the later piece's), and otherwise the sum of the derivative
conditions is imposed, each with its own normal; both hold in the limit, and neither is preferred. Smooth
solutions converge exponentially; rounding stops the error near 1e-12 times the size of u.

Between the points u is evaluated by the barycentric formula, which is the polynomial itself, not a fit to it.

References ---------- Trefethen, Spectral Methods in MATLAB, 2000, chapters 6 and 13 (differentiation matrix
with negative-sum diagonal); Berrut & Trefethen, Barycentric Lagrange interpolation, SIAM Review 46 (2004)
501-517, eq. 5.4 (both from memory, unchecked).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from laplace_verify.arrays import Array, blocks
from laplace_verify.problems import Problem
from laplace_verify.solvers.adapter import Refused, adapt
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.samples.levels import level_shift

__all__ = ["chebyshev"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class ChebyshevGrid:
    """The tensor product of Chebyshev points on the sides of a box, first axis slowest."""

    lower: Array
    upper: Array
    n: int

    @property
    def dim(self) -> int:
        """The dimension."""
        return len(self.lower)

    def nodes(self, axis: int) -> Array:
        """Return the n + 1 points along an axis, falling, ends exact."""
        t = np.sin(np.pi * np.arange(self.n, -self.n - 1, -2) / (2 * self.n))  # cos(j pi / n), exactly odd
        half = 0.5 * (self.upper[axis] - self.lower[axis])
        x: Array = np.where(t > 0.0, self.upper[axis] - half * (1.0 - t), self.lower[axis] + half * (1.0 + t))
        return x

    def points(self) -> Array:
        """Return all points, shape ((n + 1)^d, d)."""
        axes = np.meshgrid(*(self.nodes(axis) for axis in range(self.dim)), indexing="ij")
        return np.stack([x.ravel() for x in axes], axis=1)

    def slope(self, axis: int) -> Array:
        """Return the matrix that differentiates values along an axis, shape (n + 1, n + 1)."""
        x, w = self.nodes(axis), barycentric_weights(self.n)
        gaps = x[:, np.newaxis] - x + np.eye(len(x))
        matrix = w / w[:, np.newaxis] / gaps
        np.fill_diagonal(matrix, 0.0)
        np.fill_diagonal(matrix, -matrix.sum(axis=1))  # constants have slope zero, to rounding
        return matrix

    def along(self, axis: int, matrix: Array) -> Array:
        """Return the operator on all points that applies `matrix` along one axis."""
        factors = [matrix if a == axis else np.eye(self.n + 1) for a in range(self.dim)]
        return kron(factors)

    def weights(self) -> Array:
        """Return weights at all points that integrate the polynomial (Clenshaw & Curtis 1960)."""
        one = clenshaw_curtis(self.n)
        return kron([0.5 * (b - a) * one for a, b in zip(self.lower, self.upper, strict=True)])

    def basis(self, axis: int, x: Array) -> Array:
        """Return the Lagrange polynomials along an axis at x, shape (len(x), n + 1)."""
        gaps = x[:, np.newaxis] - self.nodes(axis)
        rows, columns = np.nonzero(gaps == 0.0)
        gaps[rows] = 1.0
        terms: Array = barycentric_weights(self.n) / gaps
        terms[rows] = np.eye(self.n + 1)[columns]
        terms /= terms.sum(axis=1, keepdims=True)
        return terms


def kron(factors: Sequence[Array]) -> Array:
    """Return the Kronecker product of all factors, in order."""
    product = factors[0]
    for factor in factors[1:]:
        product = np.kron(product, factor).astype(np.float64)
    return product


def barycentric_weights(n: int) -> Array:
    """Return (-1)^j, halved at both ends: the weights of the Chebyshev points."""
    w = np.where(np.arange(n + 1) % 2, -1.0, 1.0)
    w[[0, -1]] *= 0.5
    return w


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


@adapt(
    name="Chebyshev collocation",
    kind="spectral",
    order="exponential",
    dims={1, 2},
    shapes={"interval", "rectangle"},
    conditions={"dirichlet", "neumann", "robin"},
    conductivity={"scalar", "tensor"},
    error_floor=1e-10,
    sizes=(4, 6, 8, 12, 16, 24),
)
def chebyshev(problem: Problem, n: int) -> Answer:
    """Solve with polynomials of degree n in every coordinate."""
    decline_changes_within_a_side(problem)
    lower, upper = problem.shape.bounding_box
    grid = ChebyshevGrid(lower=lower, upper=upper, n=n)
    slopes = [grid.along(axis, grid.slope(axis)) for axis in range(grid.dim)]
    matrix, load = equation_rows(slopes, problem.tensor), np.zeros(len(slopes[0]))
    free = impose_conditions(matrix, load, grid, slopes, problem)
    values = balanced(matrix, load, grid) if free else solved(matrix, load)
    if free:
        mean = float(np.average(values, weights=grid.weights()))
        values = values + level_shift(problem, mean, lambda points: evaluated(grid, values, points))
    gradients = [slope @ values for slope in slopes]
    return Answer(
        evaluate=lambda points: evaluated(grid, values, points),
        gradient=lambda points: np.stack([evaluated(grid, part, points) for part in gradients], axis=1),
        unknowns=len(values),
    )


def decline_changes_within_a_side(problem: Problem) -> None:
    """Refuse problems that are singular in mid-side: no polynomial follows r^(1/2) there."""
    for corner in problem.shape.junctions:
        kinds = {problem.pieces[name].kind for name in corner.pieces}
        if math.isclose(corner.opening, math.pi) and len(kinds) > 1 and "dirichlet" in kinds:
            raise Refused(f"Dirichlet gives way to another condition within a side, at {corner.points[0]}")


def equation_rows(slopes: Sequence[Array], tensor: Array) -> Array:
    """Return the collocated operator div(K grad u), as sum_a D_a (sum_b K_ab D_b)."""
    fluxes = [sum(tensor[a, b] * slope for b, slope in enumerate(slopes)) for a in range(len(slopes))]
    operator: Array = np.sum([slope @ flux for slope, flux in zip(slopes, fluxes, strict=True)], axis=0)
    return operator


def impose_conditions(
    matrix: Array, load: Array, grid: ChebyshevGrid, slopes: Sequence[Array], problem: Problem
) -> bool:
    """Replace the rows of boundary points by the conditions; tell whether the constant is left free."""
    points = grid.points()
    derivative = [piece for piece in problem.pieces if piece.kind in ("neumann", "robin")]
    touched = np.zeros(len(points), np.bool_)
    free = True
    for piece in derivative:
        on = np.flatnonzero(piece.contains(points))
        fresh = on[~touched[on]]
        matrix[fresh], load[fresh], touched[on] = 0.0, 0.0, True
        conormal = piece.normals(points[on]) @ problem.tensor
        for axis, slope in enumerate(slopes):
            matrix[on] += conormal[:, axis, np.newaxis] * slope[on]
        load[on] += piece.data(points[on])
        if piece.kind == "robin":
            alpha = piece.alpha(points[on])
            matrix[on, on] += alpha
            free &= not np.any(alpha > 0.0)
    for piece in problem.pieces:
        if piece.kind == "dirichlet":
            on = np.flatnonzero(piece.contains(points))
            matrix[on] = np.eye(len(points))[on]
            load[on] = piece.data(points[on])
            free = False
    return free


def solved(matrix: Array, load: Array) -> Array:
    """Return the solution of a dense system."""
    return np.linalg.solve(matrix, load).astype(np.float64)


def balanced(matrix: Array, load: Array, grid: ChebyshevGrid) -> Array:
    """Return the solution of mean zero; what data lack for balance is spread over the equations inside."""
    inside = np.all(
        [(x > a) & (x < b) for x, a, b in zip(grid.points().T, grid.lower, grid.upper, strict=True)], axis=0
    )
    weights = grid.weights()
    bordered = np.block([[matrix, inside[:, np.newaxis].astype(float)], [weights, np.zeros(1)]])
    return solved(bordered, np.append(load, 0.0))[:-1]


def evaluated(grid: ChebyshevGrid, values: Array, points: Array) -> Array:
    """Return the polynomial through the given values at points (m, d)."""
    result = np.empty(len(points))
    table = values.reshape((grid.n + 1,) * grid.dim)
    for block in blocks(len(points)):
        part = grid.basis(0, points[block, 0]) @ table
        if grid.dim == 2:
            part = np.sum(part * grid.basis(1, points[block, 1]), axis=1)
        result[block] = part
    return result
