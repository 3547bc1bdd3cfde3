"""Cell-centred finite volumes on a rectilinear grid: one value a cell, fluxes by two points.

The flux through a face is the difference of two values over the resistance between them. Half a cell of
width w across a face of area A has the conductance c = 2 A K / w, and two halves in a row have

    1 / (1/c_left + 1/c_right)

(so the harmonic mean of K, the right one across an interface). On the boundary the second point is the middle
of the face, half a cell away. With u the cell's value, what flows in there is

    c (g - u)                          (Dirichlet)
    A g                                (Neumann,  n . K grad u = g)
    c (A g - A alpha u) / (c + A alpha)  (Robin,  n . K grad u + alpha u = g)

where Robin's surface and the half cell are resistances in a row. Conductivities are numbers, one a region;
interfaces follow the axes and lie on grid lines. Second order in the discrete L1 and L2 norms; fluxes through
fixed sides that meet in a corner lose a logarithm.

References
----------
S. V. Patankar, Numerical Heat Transfer and Fluid Flow, 1980, sections 4.2 and 6.7; R. Eymard, T. Gallouet and
R. Herbin, Finite Volume Methods, 2000, chapter 3 (both from memory, unchecked).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np
import scipy.sparse as sp
from scipy.interpolate import RegularGridInterpolator

from laplace_verify.arrays import Array, IntArray
from laplace_verify.problems import Piece, Problem
from laplace_verify.solvers.adapter import adapt
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.samples.finite_difference import cell_material, interface_lines
from laplace_verify.solvers.samples.input_checks import refuse_ill_posed
from laplace_verify.solvers.samples.levels import level_shift
from laplace_verify.solvers.samples.linear_systems import LinearSolver, direct
from laplace_verify.solvers.samples.rectilinear import Grid, Patch, grid_on

__all__ = ["FLUX_SCHEME", "Faces", "FluxScheme", "cell_centred", "solve_on_cells"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Faces:
    """The faces of the grid on one boundary piece, each with the one cell behind it."""

    piece: Piece
    patch: Patch
    middles: Array  # (faces, d)
    areas: Array
    conductance: Array  # of the half cells behind the faces
    conductivity: Array

    @property
    def cells(self) -> IntArray:
        """The cells behind the faces."""
        return self.patch.cells


# ---- the parts of the scheme ---------------------------------------------------------------------


def half_conductance(areas: Array, conductivity: Array, widths: Array) -> Array:
    """Return A K / (w / 2)."""
    return areas * conductivity / (widths / 2.0)


def in_series(left: Array, right: Array) -> Array:
    """Return the conductance of two half cells in a row."""
    return left * right / (left + right)


def fixed_inflow(faces: Faces) -> tuple[Array, Array]:
    """Return a, b of the inflow b - a u of a Dirichlet piece."""
    return faces.conductance, faces.conductance * faces.piece.data(faces.middles)


def prescribed_inflow(faces: Faces) -> tuple[Array, Array]:
    """Return a, b of the inflow b - a u of a Neumann piece."""
    return np.zeros(len(faces.cells)), faces.areas * faces.piece.data(faces.middles)


def transferred_inflow(faces: Faces) -> tuple[Array, Array]:
    """Return a, b of the inflow b - a u of a Robin piece."""
    surface = faces.areas * faces.piece.alpha(faces.middles)
    share = faces.conductance / (faces.conductance + surface)
    return share * surface, share * faces.areas * faces.piece.data(faces.middles)


def cell_answer(grid: Grid, values: Array, **facts: Any) -> Answer:
    """Hand back one value a cell."""
    return Answer(grid.points, values, cells=grid.cells_by_name(), location="cell", **facts)


@dataclass(frozen=True, slots=True, kw_only=True)
class FluxScheme:
    """The decisions that make a finite-volume solver."""

    accept: Callable[[Problem], None] = refuse_ill_posed
    half: Callable[[Array, Array, Array], Array] = half_conductance
    average: Callable[[Array, Array], Array] = in_series
    dirichlet: Callable[[Faces], tuple[Array, Array]] = fixed_inflow
    neumann: Callable[[Faces], tuple[Array, Array]] = prescribed_inflow
    robin: Callable[[Faces], tuple[Array, Array]] = transferred_inflow
    solve: LinearSolver = direct
    level: Callable[[Problem, float, Callable[[Array], Array]], float] = level_shift
    answer: Callable[..., Answer] = cell_answer


FLUX_SCHEME = FluxScheme()


# ---- putting it together -------------------------------------------------------------------------


def solve_on_cells(problem: Problem, n: int, scheme: FluxScheme = FLUX_SCHEME) -> Answer:
    """Solve div(K grad u) = 0 on an interval or a rectangle with n cells along every side."""
    scheme.accept(problem)
    grid = grid_on(problem.shape, n, interface_lines(problem))
    conductivity = numbers(problem, grid)
    matrix = inner_balance(grid, conductivity, scheme)
    outflow, inflow = np.zeros(len(grid.corners)), np.zeros(len(grid.corners))
    closures: list[tuple[Faces, Array, Array]] = []
    for piece in problem.pieces:
        faces = faces_on(grid, piece, conductivity, scheme)
        closure = getattr(scheme, piece.kind)(faces)
        closures.append((faces, *closure))
        np.add.at(outflow, faces.cells, closure[0])
        np.add.at(inflow, faces.cells, closure[1])
    closed = (matrix + sp.diags_array(outflow)).tocsc()
    volumes = np.prod(grid.widths, axis=1)
    free = not np.any(outflow)
    values, iterations = scheme.solve(closed, inflow, volumes if free else None)
    if free:
        mean = float(np.average(values, weights=volumes))
        values = values + scheme.level(problem, mean, lambda points: between_centres(grid, values, points))
    return scheme.answer(
        grid,
        values,
        h=float(np.max(grid.widths)),
        unknowns=len(values),
        fluxes={faces.piece.name: float(np.sum(b - a * values[faces.cells])) for faces, a, b in closures},
        iterations=iterations,
    )


def numbers(problem: Problem, grid: Grid) -> Array:
    """Return K in every cell, shape (cells,)."""
    tensor, _ = cell_material(problem, grid)
    return tensor if tensor.ndim == 1 else np.full(len(grid.corners), tensor[0, 0])


def inner_balance(grid: Grid, conductivity: Array, scheme: FluxScheme) -> sp.csr_array:
    """Return the matrix of what flows out of every cell through its faces with other cells."""
    count, widths = len(grid.corners), grid.widths
    number = np.full([len(axis) for axis in grid.axes], -1)
    number[tuple(grid.index.T)] = np.arange(count)
    matrix = sp.csr_array((count, count))
    for axis in range(grid.dim):
        areas = np.prod(np.delete(widths, axis, axis=1), axis=1)
        half = scheme.half(areas, conductivity, widths[:, axis])
        following = grid.index.copy()
        following[:, axis] += 1
        right = number[tuple(following.T)]
        left = np.flatnonzero(right >= 0)
        right = right[left]
        through = scheme.average(half[left], half[right])
        entries = np.concatenate([through, through, -through, -through])
        where = (np.concatenate([left, right, left, right]), np.concatenate([left, right, right, left]))
        matrix = matrix + sp.csr_array((entries, where), shape=(count, count))
    return matrix


def faces_on(grid: Grid, piece: Piece, conductivity: Array, scheme: FluxScheme) -> Faces:
    """Return the faces that lie on a piece."""
    patch = grid.patch(piece.boundary)
    widths, axis = grid.widths[patch.cells], patch.axis
    middles = grid.centres()[patch.cells]
    middles[:, axis] = grid.axes[axis][grid.index[patch.cells, axis] + patch.side]
    areas = np.prod(np.delete(widths, axis, axis=1), axis=1)
    inside = conductivity[patch.cells]
    return Faces(
        piece=piece,
        patch=patch,
        middles=middles,
        areas=areas,
        conductance=scheme.half(areas, inside, widths[:, axis]),
        conductivity=inside,
    )


def between_centres(grid: Grid, values: Array, points: Array) -> Array:
    """Return the values between (and a little beyond) the cell centres, linear along every axis."""
    middles = [(axis[1:] + axis[:-1]) / 2.0 for axis in grid.axes]
    full = np.zeros([len(axis) for axis in middles])
    full[tuple(grid.index.T)] = values
    found: Array = RegularGridInterpolator(middles, full, bounds_error=False, fill_value=None)(points)
    return found


@adapt(
    name="cell-centred finite volumes",
    kind="finite volume",
    order=2,
    dims={1, 2},
    shapes={"interval", "rectangle"},
    conditions={"dirichlet", "neumann", "robin"},
    conductivity={"scalar", "regions"},
    error_floor=1e-11,
    fixes_constant=True,
    checks_well_posedness=True,
)
def cell_centred(problem: Problem, n: int) -> Answer:
    """Solve on an interval or a rectangle by two-point fluxes between cell centres and LU factors."""
    return solve_on_cells(problem, n)
