"""Coding mistakes in Chebyshev collocation, and ways of doing the same right that look like some."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import partial

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.geometry import Shape
from laplace_verify.problems import Piece
from laplace_verify.solvers.samples import chebyshev_collocation as sound
from laplace_verify.solvers.samples.chebyshev_collocation import (
    COLLOCATION,
    ChebyshevGrid,
    chebyshev,
    solve_by_collocation,
)
from laplace_verify.solvers.samples.chebyshev_lines import Line
from laplace_verify.solvers.samples.seeding import Seeds

__all__ = ["SPECTRAL_FAULTS"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class _Unscaled(Line):
    """A line that forgets the scale 2/(b - a) of the first derivative in the second."""

    def derivative(self, power: int) -> Array:
        """Return the derivative, the second one scaled once only."""
        whole = float(self.stops[-1] - self.stops[0])
        return Line.derivative(self, power) * (1.0 if power == 1 else 0.5 * whole)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class _EndRow(Line):
    """A line whose derivative lacks the factor 2 of the end nodes in its first row."""

    def derivative(self, power: int) -> Array:
        """Return the derivative; the row of the first node is halved."""
        matrix = Line.derivative(self, power)
        matrix[0] *= 0.5
        return matrix


def relined(shape: Shape, n: int, kind: type[Line]) -> ChebyshevGrid:
    """Return the grid with another kind of line."""
    grid = sound.grid_on(shape, n)
    return ChebyshevGrid(lines=tuple(kind(stops=line.stops, n=line.n) for line in grid.lines))


def negated_second(grid: ChebyshevGrid, tensor: Array) -> Array:
    """Take K_yy with the wrong sign: a wave equation."""
    signs = np.diag([1.0, -1.0][: grid.dim])
    return sound.equation_rows(grid, signs @ tensor)


def no_mixed_derivative(grid: ChebyshevGrid, tensor: Array) -> Array:
    """Leave out K_xy."""
    return sound.equation_rows(grid, np.diag(np.diag(tensor)))


def single_mixed_derivative(grid: ChebyshevGrid, tensor: Array) -> Array:
    """Count K_xy once instead of twice."""
    return sound.equation_rows(grid, 0.5 * (tensor + np.diag(np.diag(tensor))))


def scaled_rows(grid: ChebyshevGrid, tensor: Array) -> Array:
    """Divide every equation inside by its largest number."""
    matrix = sound.equation_rows(grid, tensor)
    scaled: Array = matrix / np.max(np.abs(matrix), axis=1, keepdims=True)
    return scaled


def normal_without_conductivity(piece: Piece, points: Array, tensor: Array) -> Array:
    """Take the flux for the normal derivative."""
    del tensor
    return piece.normals(points)


def upward_normals(piece: Piece, points: Array, tensor: Array) -> Array:
    """Let all normals point along the axes, on the left and at the bottom too."""
    result: Array = np.abs(piece.normals(points)) @ tensor
    return result


def reversed_influx(piece: Piece, points: Array) -> Array:
    """Take prescribed data with the wrong sign."""
    return -piece.data(points)


def halved_transfer(piece: Piece, points: Array) -> Array:
    """Take half of alpha."""
    return 0.5 * piece.alpha(points)


def values_moved(piece: Piece, points: Array) -> Array:
    """Take the values of the next point of the piece."""
    return np.roll(piece.data(points), 1)


def rounded(piece: Piece, points: Array) -> Array:
    """Take prescribed values through a table with five digits after the point."""
    return np.round(piece.data(points), 5)


def single_precision(matrix: Array, load: Array) -> Array:
    """Solve in 32 bits."""
    return np.linalg.solve(matrix.astype(np.float32), load.astype(np.float32)).astype(np.float64)


def by_least_squares(matrix: Array, load: Array) -> Array:
    """Solve by an orthogonal factorisation."""
    solution, *_ = np.linalg.lstsq(matrix, load, rcond=None)
    return solution.astype(np.float64)


def linear_between(grid: ChebyshevGrid, values: Array, points: Array, slope: int | None) -> Array:
    """Interpolate linearly between the points instead of by the polynomial."""
    if slope is not None:
        return sound.evaluated(grid, values, points, slope)
    table = values.reshape([len(line) for line in grid.lines])
    result = linear_basis(grid.lines[0].nodes(), points[:, 0]) @ table
    if grid.dim == 2:
        result = np.sum(result * linear_basis(grid.lines[1].nodes(), points[:, 1]), axis=1)
    return result


def linear_basis(nodes: Array, x: Array) -> Array:
    """Return the hat functions of nodes at x, shape (len(x), len(nodes))."""
    return np.stack([np.interp(x, nodes, row) for row in np.eye(len(nodes))], axis=1)


def slopes_unscaled(grid: ChebyshevGrid, values: Array, points: Array, slope: int | None) -> Array:
    """Hand back gradients in the coordinates of the reference square."""
    found = sound.evaluated(grid, values, points, slope)
    if slope is None:
        return found
    stops = grid.lines[slope].stops
    return found * 0.5 * float(stops[-1] - stops[0])


FIXED = ("plate-wave", "plate-cubic", "plate-degree-six")
FLUX = ("plate-flux-top", "plate-flux-left", "wall-mixed-conditions")
FLUX_SUSPECTS = ("Neumann condition", "Neumann data", "neumann on", "second normal derivative")
TENSOR = ("plate-tensor-oblique-fixed", "plate-tensor-oblique")
TENSOR_SUSPECTS = ("tensor conductivity", "off-diagonal conductivity")
EVERYWHERE = ("do not get smaller", "diverge", "wrong limit")

SEEDS = Seeds(sample=chebyshev, solve=solve_by_collocation, scheme=COLLOCATION)
SPECTRAL_FAULTS = SEEDS.faults

SEEDS.add(
    "second derivative scaled once",
    "second derivatives are scaled by 2/length once instead of twice; invisible on squares",
    replace(COLLOCATION, grid=partial(relined, kind=_Unscaled)),
    kind="off by one in h",
    suspects=("unequal extents", *EVERYWHERE),
    shown_by=("plate-wave", "plate-cubic", "plate-flux-top"),
)
SEEDS.add(
    "end row halved",
    "the row of the first node in the matrix of the derivative lacks a factor 2",
    replace(COLLOCATION, grid=partial(relined, kind=_EndRow)),
    kind="half-cell factor",
    suspects=("neumann on left", "neumann on bottom", *FLUX_SUSPECTS, "robin on"),
    shown_by=("plate-flux-left", "plate-flux-bottom", "wall-mixed-conditions"),
)
SEEDS.add(
    "second derivative negated",
    "d^2/dy^2 enters with the wrong sign",
    replace(COLLOCATION, equations=negated_second),
    kind="exchanged axes",
    suspects=("dimension", *EVERYWHERE),
    shown_by=FIXED,
)
SEEDS.add(
    "mixed derivative left out",
    "K_xy is missing in the equation",
    replace(COLLOCATION, equations=no_mixed_derivative),
    kind="exchanged axes",
    suspects=TENSOR_SUSPECTS,
    shown_by=TENSOR,
)
SEEDS.add(
    "mixed derivative once",
    "K_xy is counted once, and K_yx not",
    replace(COLLOCATION, equations=single_mixed_derivative),
    kind="exchanged axes",
    suspects=TENSOR_SUSPECTS,
    shown_by=TENSOR,
)
SEEDS.add(
    "conductivity missing in the flux",
    "n . grad u is put equal to the prescribed n . K grad u; invisible where K = 1",
    replace(COLLOCATION, conormals=normal_without_conductivity),
    kind="flux or gradient",
    suspects=("conductivity other than 1", *FLUX_SUSPECTS, "Robin"),
    shown_by=("wall-mixed-conditions", "plate-tensor-diagonal", "plate-flux-top"),
)
SEEDS.add(
    "normals along the axes",
    "normals on the left and at the bottom point inwards",
    replace(COLLOCATION, conormals=upward_normals),
    kind="normal orientation",
    suspects=("neumann on left", "neumann on bottom", *FLUX_SUSPECTS),
    shown_by=("plate-flux-left", "plate-flux-bottom", "plate-source-near-flux"),
)
SEEDS.add(
    "data negated",
    "data of derivative conditions enter with the wrong sign",
    replace(COLLOCATION, influx=reversed_influx),
    kind="flux sign",
    suspects=(*FLUX_SUSPECTS, "Robin"),
    shown_by=FLUX,
)
SEEDS.add(
    "half of alpha",
    "Robin's alpha enters at half its size",
    replace(COLLOCATION, transfer=halved_transfer),
    kind="Robin coefficient",
    suspects=("Robin", "robin on"),
    shown_by=("plate-convection-all-round", "wall-mixed-conditions", "plate-tensor-oblique"),
)
SEEDS.add(
    "values of the next point",
    "Dirichlet data are those of the neighbouring point",
    replace(COLLOCATION, held=values_moved),
    kind="shifted data",
    suspects=("Dirichlet", *EVERYWHERE),
    shown_by=("plate-cubic",),
)
SEEDS.add(
    "linear between points",
    "between the points of the grid values are interpolated linearly",
    replace(COLLOCATION, evaluate=linear_between),
    kind="evaluation",
    suspects=("exponential", "algebraic", "only", "Dirichlet"),
    shown_by=FIXED,
)
SEEDS.add(
    "gradients of the reference square",
    "gradients are handed back in reference coordinates",
    replace(COLLOCATION, evaluate=slopes_unscaled),
    kind="gradient recovery",
    effect="accuracy",
    suspects=("gradient",),
    shown_by=("plate-wave", "plate-cubic", "plate-flux-left"),
)
SEEDS.add(
    "system in single precision",
    "the linear system is solved in 32 bits",
    replace(COLLOCATION, solve=single_precision),
    kind="reduced precision",
    effect="accuracy",
    suspects=("single precision",),
    shown_by=FIXED,
)
SEEDS.add(
    "values with five digits",
    "prescribed values are rounded to five digits after the point",
    replace(COLLOCATION, held=rounded),
    kind="reduced precision",
    effect="accuracy",
    suspects=("Dirichlet",),
    shown_by=FIXED,
)
SEEDS.add(
    "rows scaled",
    "every equation inside is divided by its largest number",
    replace(COLLOCATION, equations=scaled_rows),
    kind="equivalent formulation",
    effect="harmless",
    suspects=(),
    shown_by=(*FIXED, "plate-tensor-oblique"),
)
SEEDS.add(
    "orthogonal factorisation",
    "the system is solved by an orthogonal factorisation",
    replace(COLLOCATION, solve=by_least_squares),
    kind="equivalent formulation",
    effect="harmless",
    suspects=(),
    shown_by=(*FIXED, "plate-flux-top"),
)
