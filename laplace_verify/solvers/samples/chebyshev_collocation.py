"""Chebyshev collocation for div(K grad u) = 0 on an interval or a rectangle.

u is a polynomial of degree n in every coordinate, given by its values at Chebyshev points. At inner points
the equation itself holds; at boundary points the conditions do. Where several pieces meet, a Dirichlet value
wins (two of them: the later piece's), and otherwise the sum of the derivative conditions is imposed, each
with its own normal; both hold in the limit, and neither is preferred. Smooth solutions converge
exponentially; rounding stops the error near 1e-11 times the size of u.

Where a side is split into pieces, the rectangle is cut across: u is continuous, and its normal derivative
too. So points gather where conditions change, and singular solutions converge, slowly, instead of wandering.

References
----------
Trefethen, Spectral Methods in MATLAB, 2000, chapters 7 and 13 (from memory, unchecked).
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from laplace_verify.arrays import Array, BoolArray, blocks
from laplace_verify.geometry import Shape
from laplace_verify.geometry.meshes import subdivide
from laplace_verify.problems import Piece, Problem
from laplace_verify.solvers.adapter import adapt
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.samples.chebyshev_lines import Line
from laplace_verify.solvers.samples.levels import level_shift

__all__ = ["COLLOCATION", "ChebyshevGrid", "Scheme", "chebyshev", "solve_by_collocation"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class ChebyshevGrid:
    """The tensor product of one or two lines, first axis slowest."""

    lines: tuple[Line, ...]

    @property
    def dim(self) -> int:
        """The dimension."""
        return len(self.lines)

    def points(self) -> Array:
        """Return all points, shape (nodes, d)."""
        axes = np.meshgrid(*(line.nodes() for line in self.lines), indexing="ij")
        return np.stack([x.ravel() for x in axes], axis=1)

    def along(self, axis: int, matrix: Array) -> Array:
        """Return the operator on all points that applies `matrix` along one axis."""
        return kron([matrix if a == axis else np.eye(len(line)) for a, line in enumerate(self.lines)])

    def weights(self) -> Array:
        """Return weights at all points that integrate u."""
        return kron([line.weights() for line in self.lines])

    def at_cut(self) -> BoolArray:
        """Tell which points lie on a line between two polynomials."""
        flags = np.meshgrid(*(line.at_inner_stop() for line in self.lines), indexing="ij")
        on_cut: BoolArray = np.any([flag.ravel() for flag in flags], axis=0)
        return on_cut

    def at_rim(self) -> BoolArray:
        """Tell which points lie on the boundary."""
        ends = np.meshgrid(
            *(np.isin(np.arange(len(line)), (0, len(line) - 1)) for line in self.lines), indexing="ij"
        )
        on_rim: BoolArray = np.any([end.ravel() for end in ends], axis=0)
        return on_rim


def kron(factors: Sequence[Array]) -> Array:
    """Return the Kronecker product of all factors, in order."""
    product = factors[0]
    for factor in factors[1:]:
        product = np.kron(product, factor).astype(np.float64)
    return product


def grid_on(shape: Shape, n: int) -> ChebyshevGrid:
    """Return the grid of degree n, cut where boundary pieces end."""
    ends = np.concatenate([*shape.bounding_box, *(piece.ends.ravel() for piece in shape.pieces)])
    ends = ends.reshape(-1, shape.dim)
    return ChebyshevGrid(lines=tuple(Line(stops=subdivide(ends[:, a], 1), n=n) for a in range(shape.dim)))


def equation_rows(grid: ChebyshevGrid, tensor: Array) -> Array:
    """Return the collocated operator sum_ab K_ab D_a D_b; on cuts the jump of the normal flux."""
    count = len(grid.points())
    operator, jumps = np.zeros((count, count)), np.zeros((count, count))
    slopes = [grid.along(a, line.derivative(1)) for a, line in enumerate(grid.lines)]
    for a, line in enumerate(grid.lines):
        operator += tensor[a, a] * grid.along(a, line.derivative(2))
        jumps += tensor[a, a] * grid.along(a, line.jump())
        for b in range(a):
            if tensor[a, b] != 0.0:
                operator += 2.0 * tensor[a, b] * (slopes[a] @ slopes[b])
    on_cut = grid.at_cut()
    operator[on_cut] = jumps[on_cut]
    return operator


def impose_conditions(
    matrix: Array, load: Array, grid: ChebyshevGrid, problem: Problem, scheme: Scheme
) -> bool:
    """Replace the rows of boundary points by the conditions; tell whether the constant is left free."""
    points = grid.points()
    slopes = [grid.along(a, line.derivative(1)) for a, line in enumerate(grid.lines)]
    matrix[grid.at_rim()] = 0.0
    free = True
    for piece in problem.pieces:
        on = np.flatnonzero(piece.contains(points))
        if piece.kind != "dirichlet":
            conormal = scheme.conormals(piece, points[on], problem.tensor)
            for axis, slope in enumerate(slopes):
                matrix[on] += conormal[:, axis, np.newaxis] * slope[on]
            load[on] += scheme.influx(piece, points[on])
        if piece.kind == "robin":
            alpha = scheme.transfer(piece, points[on])
            matrix[on, on] += alpha
            free &= not np.any(alpha > 0.0)
    for piece in problem.pieces:
        if piece.kind == "dirichlet":
            on = np.flatnonzero(piece.contains(points))
            matrix[on] = np.eye(len(points))[on]
            load[on] = scheme.held(piece, points[on])
            free = False
    return free


def conormals(piece: Piece, points: Array, tensor: Array) -> Array:
    """Return n . K at points of a piece, (m, d)."""
    result: Array = piece.normals(points) @ tensor
    return result


def data_at(piece: Piece, points: Array) -> Array:
    """Return what is prescribed at points of a piece."""
    return piece.data(points)


def transfer_at(piece: Piece, points: Array) -> Array:
    """Return Robin's alpha at points of a piece."""
    return piece.alpha(points)


def solved(matrix: Array, load: Array) -> Array:
    """Return the solution of a dense system."""
    return np.linalg.solve(matrix, load).astype(np.float64)


def balanced(
    matrix: Array, load: Array, grid: ChebyshevGrid, solve: Callable[[Array, Array], Array] = solved
) -> Array:
    """Return the solution of mean zero; what data lack for balance is spread over the equations inside."""
    inside = ~(grid.at_rim() | grid.at_cut())
    bordered = np.block([[matrix, inside[:, np.newaxis].astype(np.float64)], [grid.weights(), np.zeros(1)]])
    return solve(bordered, np.append(load, 0.0))[:-1]


def evaluated(grid: ChebyshevGrid, values: Array, points: Array, slope: int | None = None) -> Array:
    """Return the polynomial through the values at points (m, d), or its derivative along the axis `slope`."""
    result = np.empty(len(points))
    table = values.reshape([len(line) for line in grid.lines])
    for block in blocks(len(points)):
        part = grid.lines[0].basis(points[block, 0], slope=slope == 0) @ table
        if grid.dim == 2:
            part = np.sum(part * grid.lines[1].basis(points[block, 1], slope=slope == 1), axis=1)
        result[block] = part
    return result


@dataclass(frozen=True, slots=True, kw_only=True)
class Scheme:
    """The decisions that make a solver with Chebyshev collocation."""

    grid: Callable[[Shape, int], ChebyshevGrid] = grid_on
    equations: Callable[[ChebyshevGrid, Array], Array] = equation_rows
    conormals: Callable[[Piece, Array, Array], Array] = conormals
    influx: Callable[[Piece, Array], Array] = data_at
    transfer: Callable[[Piece, Array], Array] = transfer_at
    held: Callable[[Piece, Array], Array] = data_at
    solve: Callable[[Array, Array], Array] = solved
    evaluate: Callable[[ChebyshevGrid, Array, Array, int | None], Array] = evaluated


COLLOCATION = Scheme()


def solve_by_collocation(problem: Problem, n: int, scheme: Scheme = COLLOCATION) -> Answer:
    """Solve with polynomials of degree n in every coordinate."""
    grid = scheme.grid(problem.shape, n)
    matrix, load = scheme.equations(grid, problem.tensor), np.zeros(len(grid.points()))
    free = impose_conditions(matrix, load, grid, problem, scheme)
    values = balanced(matrix, load, grid, scheme.solve) if free else scheme.solve(matrix, load)
    if free:
        mean = float(np.average(values, weights=grid.weights()))
        values = values + level_shift(
            problem, mean, lambda points: scheme.evaluate(grid, values, points, None)
        )
    return Answer(
        evaluate=lambda points: scheme.evaluate(grid, values, points, None),
        gradient=lambda points: np.stack(
            [scheme.evaluate(grid, values, points, a) for a in range(grid.dim)], axis=1
        ),
        unknowns=len(values),
    )


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
    return solve_by_collocation(problem, n)
