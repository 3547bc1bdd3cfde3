"""Finite differences on a rectilinear grid: three, five or seven points, second order up to the boundary.

The unknowns sit on the grid's nodes, boundary included. Derivative conditions close the balance of the half
cell (quarter cell in a corner) that a boundary node owns, so its equation has the order of the interior ones:

    flux through the cell's inner faces  =  area * g                  (Neumann,  n . K grad u = g)
                                         =  area * (g - alpha u)      (Robin,    n . K grad u + alpha u = g)

Dirichlet nodes are no unknowns; their values go to the right-hand side. Where a Dirichlet piece meets another
condition, Dirichlet wins; where two Dirichlet pieces meet, the later piece gives the value (it never enters a
five-point equation); where two derivative conditions meet, the node's box has a face on either piece.
Periodic sides are joined to one row of unknowns, see `seams`.

A `Scheme` is the list of these decisions, one small function each, so that a single one can be exchanged.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace
from functools import partial
from typing import Any

import numpy as np
import scipy.sparse as sp
from scipy.interpolate import interpn

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.errors import AnswerError
from laplace_verify.problems import Piece, Problem
from laplace_verify.solvers.adapter import Adapter, Refused, adapt
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.samples.corner_rows import corner_rows
from laplace_verify.solvers.samples.input_checks import refuse_ill_posed
from laplace_verify.solvers.samples.levels import level_shift
from laplace_verify.solvers.samples.linear_systems import LinearSolver, conjugate_gradients, direct
from laplace_verify.solvers.samples.rectilinear import Grid, Patch, axis_balances, cells_along, grid_on
from laplace_verify.solvers.samples.seams import facing_nodes, masters, spread

__all__ = [
    "IN_SPACE",
    "SCHEME",
    "Equations",
    "Scheme",
    "Side",
    "five_point",
    "five_point_with",
    "seven_point",
    "solve_on_grid",
]


@dataclass(slots=True, eq=False)
class Equations:
    """The equations being put together: ``matrix @ u = load`` at nodes that are not `held` at `values`."""

    matrix: sp.csr_array
    load: Array
    held: BoolArray
    values: Array
    master: IntArray  # of every node the one whose value it has: itself, but for copies on periodic sides
    lagged: sp.csr_array | None = (
        None  # a small unsymmetric part of the matrix, taken at the previous iterate
    )
    level_is_free: bool = True  # no condition fixes the constant

    def add_transfer(self, nodes: IntArray, strength: Array) -> None:
        """Add a flux out of some nodes' boxes, `strength` times the value at the node."""
        diagonal = np.zeros(len(self.load))
        diagonal[nodes] = strength
        self.matrix = self.matrix + sp.diags_array(diagonal)
        self.level_is_free &= not np.any(strength > 0.0)

    def join(self, master: IntArray) -> None:
        """Add the balance of every copy on a periodic side to that of its master, the only unknown."""
        values = spread(master)
        self.matrix, self.load = values.T @ self.matrix @ values, values.T @ self.load
        if self.lagged is not None:
            self.lagged = values.T @ self.lagged @ values
        self.held |= master != np.arange(len(master))
        self.master = master

    def overwrite(self, nodes: IntArray, rows: sp.csr_array, load: Array) -> None:
        """Replace the equations of some nodes."""
        kept = np.ones(len(self.load))
        kept[nodes] = 0.0
        self.matrix = sp.diags_array(kept) @ self.matrix + rows
        self.load = kept * self.load + load


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Side:
    """One boundary piece as the grid sees it; `tensor` as in `axis_balances`, `regions` of the cells."""

    grid: Grid
    patch: Patch
    piece: Piece
    tensor: Array
    regions: Mapping[str, IntArray] = field(default_factory=dict)

    @property
    def name(self) -> str:
        """The piece's name."""
        return self.piece.name

    def inflow(self) -> Array:
        """Return area * g (nodes of the patch,), where an interface ends on the piece from both its sides."""
        nodes, areas = self.grid.shares(self.patch)
        if not self.piece.parts:
            return areas * self.piece.data(self.grid.points[nodes])
        total = np.zeros(len(self.grid.points))
        for name, cells in self.regions.items():
            own = replace(self.patch, cells=np.intersect1d(self.patch.cells, cells))
            if len(own.cells):
                near, shares = self.grid.shares(own)
                total[near] += shares * self.piece.data(self.grid.points[near], region=name)
        return total[nodes]


# ---- the parts of the scheme ---------------------------------------------------------------------


def box_stencil(grid: Grid, tensor: Array) -> sp.csr_array:
    """Return the balance of fluxes over every node's box."""
    first, *others = axis_balances(grid, tensor)
    return sum(others, start=first)


def half_cell_flux(equations: Equations, side: Side) -> None:
    """Let the prescribed flux enter the half cells: load += area * g."""
    nodes, _ = side.grid.shares(side.patch)
    equations.load[nodes] += side.inflow()


def half_cell_transfer(equations: Equations, side: Side) -> None:
    """Let the flux g - alpha u enter the half cells."""
    nodes, areas = side.grid.shares(side.patch)
    points = side.grid.points[nodes]
    equations.add_transfer(nodes, areas * side.piece.alpha(points))
    equations.load[nodes] += side.inflow()


def held_values(equations: Equations, side: Side) -> None:
    """Hold the nodes of a Dirichlet piece at its data."""
    nodes, _ = side.grid.shares(side.patch)
    equations.held[nodes] = True
    equations.values[nodes] = side.piece.data(side.grid.points[nodes])
    equations.level_is_free = False


def carried_load(equations: Equations, sides: list[Side]) -> Array:  # noqa: ARG001 - a scheme may go side by side
    """Return the load of the unknowns, with the held values carried over."""
    free = ~equations.held
    carried: Array = equations.matrix[free][:, equations.held] @ equations.values[equations.held]
    return equations.load[free] - carried


def cell_material(problem: Problem, grid: Grid) -> tuple[Array, dict[str, IntArray]]:
    """Return K as a matrix (d, d), or a number for every cell, and the cells of each region."""
    if not problem.interfaces:
        return problem.tensor, {}
    middles = grid.centres()
    cells = {region.name: np.flatnonzero(region.contains(middles)) for region in problem.regions}
    return problem.conductivity_at(middles), cells


def balanced_fluxes(grid: Grid, sides: list[Side], values: Array) -> dict[str, float]:
    """Return the integral of n . K grad u over every piece.

    Periodic pieces have none. On Dirichlet pieces it is what the half cells lack for balance, which is as
    accurate as the nodal values.
    A corner of two Dirichlet pieces has one balance for two faces; each face then takes the part along its
    own axis.
    """
    along = [balance @ values for balance in axis_balances(grid, sides[0].tensor)]
    lacking = np.sum(along, axis=0)
    held = np.zeros((grid.dim, len(values)))  # area of the Dirichlet faces at every node, by axis
    given: dict[str, float] = {}
    for side in sides:
        nodes, areas = grid.shares(side.patch)
        if side.piece.kind == "dirichlet":
            held[side.patch.axis, nodes] += areas
            continue
        if not side.piece.has_data:
            continue
        points = grid.points[nodes]
        entering = side.inflow()
        if side.piece.kind == "robin":
            entering -= areas * side.piece.alpha(points) * values[nodes]
        lacking[nodes] -= entering
        given[side.name] = float(np.sum(entering))
    corner = np.count_nonzero(held, axis=0) > 1
    for side in sides:
        if side.piece.kind == "dirichlet":
            nodes, areas = grid.shares(side.patch)
            entering = np.where(corner[nodes], along[side.patch.axis][nodes], lacking[nodes])
            given[side.name] = float(entering @ (areas / held[side.patch.axis, nodes]))
    return given


def nodal_answer(grid: Grid, values: Array, **facts: Any) -> Answer:
    """Hand back the values at the nodes, to be interpolated within the grid's cells."""
    return Answer(grid.points, values, cells=grid.cells_by_name(), **facts)


@dataclass(frozen=True, slots=True, kw_only=True)
class Scheme:
    """The decisions that make a finite-difference solver."""

    accept: Callable[[Problem], None] = refuse_ill_posed
    material: Callable[[Problem, Grid], tuple[Array, dict[str, IntArray]]] = cell_material
    facing: Callable[[Side, Side], tuple[IntArray, IntArray]] = facing_nodes
    stencil: Callable[[Grid, Array], sp.csr_array] = box_stencil
    corners: Callable[[Grid, Array, list[Patch]], sp.csr_array] = corner_rows
    robin: Callable[[Equations, Side], None] = half_cell_transfer
    neumann: Callable[[Equations, Side], None] = half_cell_flux
    dirichlet: Callable[[Equations, Side], None] = held_values
    load: Callable[[Equations, list[Side]], Array] = carried_load
    solve: LinearSolver = direct
    level: Callable[[Problem, float, Callable[[Array], Array]], float] = level_shift
    fluxes: Callable[[Grid, list[Side], Array], dict[str, float]] = balanced_fluxes
    answer: Callable[..., Answer] = nodal_answer


SCHEME = Scheme()
IN_SPACE = Scheme(solve=conjugate_gradients)

SWEEPS = 40  # at most, over the lagged rows of edges
SETTLED = 1e-10  # relative change that ends them


# ---- putting it together -------------------------------------------------------------------------


def solve_on_grid(problem: Problem, n: int, scheme: Scheme = SCHEME) -> Answer:
    """Solve div(K grad u) = 0 on an interval, rectangle, L-shape or box with n cells along every side."""
    scheme.accept(problem)
    grid = grid_on(problem.shape, n, interface_lines(problem), problem.coordinates)
    tensor, regions = scheme.material(problem, grid)
    sides = [
        Side(grid=grid, patch=grid.patch(piece.boundary), piece=piece, tensor=tensor, regions=regions)
        for piece in problem.pieces
        if piece.kind != "axis"  # its faces have no area: the balance is closed as it is
    ]
    equations = assemble(grid, tensor, sides, scheme)
    values, residual, iterations = solved(equations, scheme, sides)
    if equations.level_is_free:
        mean = np.average(values, weights=grid.node_volumes())
        values = values + scheme.level(problem, mean, lambda points: interpolated(grid, values, points))
    lower, upper = problem.shape.bounding_box
    return scheme.answer(
        grid,
        values,
        h=float(np.max((upper - lower) / cells_along(problem.shape, n))),
        unknowns=int(np.count_nonzero(~equations.held)),
        fluxes=scheme.fluxes(grid, sides, values),
        residual=residual,
        iterations=iterations,
    )


def interface_lines(problem: Problem) -> list[list[float]]:
    """Return the coordinates of the interfaces along each axis; Refused if one follows no axis."""
    lines: list[list[float]] = [[] for _ in range(problem.dim)]
    for interface in problem.interfaces:
        points, normals = interface.sample(8)
        if not len(points):
            continue
        axis = int(np.argmax(np.abs(normals[0])))
        spread = float(np.ptp(points[:, axis]))
        if not (np.abs(normals[:, axis]) > 1.0 - 1e-9).all() or spread > 1e-9 * problem.shape.extent:
            raise Refused(
                f"the interface {interface.name!r} follows no axis, so no line of the grid can lie on it",
                beyond=True,
            )
        lines[axis].append(float(points[0, axis]))
    return lines


def assemble(grid: Grid, tensor: Array, sides: list[Side], scheme: Scheme) -> Equations:
    """Write the balance of every box, then close it piece by piece; Dirichlet comes last and so wins."""
    count, balance = len(grid.points), scheme.stencil(grid, tensor)
    open_patches = [side.patch for side in sides if side.piece.kind in ("neumann", "robin")]
    corners = scheme.corners(grid, tensor, open_patches if tensor.ndim == 2 else [])
    lagged = None
    if grid.dim == 3 and corners.nnz:
        lagged = corners  # conjugate gradients need the symmetric part alone
    else:
        balance = balance + corners
    equations = Equations(
        balance, np.zeros(count), np.zeros(count, np.bool_), np.zeros(count), np.arange(count), lagged
    )
    for kind in ("robin", "neumann", "dirichlet"):
        for side in sides:
            if side.piece.kind == kind:
                getattr(scheme, kind)(equations, side)
    master = masters(sides, scheme.facing, count)
    if (master != np.arange(count)).any():
        equations.join(master)
    return equations


def solved(equations: Equations, scheme: Scheme, sides: list[Side]) -> tuple[Array, float, int | None]:
    """Return the nodal values, the relative residual, and the number of iterations (None: direct)."""
    free, grid = ~equations.held, sides[0].grid
    matrix, load = equations.matrix[free][:, free].tocsc(), scheme.load(equations, sides)
    volumes = np.bincount(equations.master, grid.node_volumes(), len(free)).astype(np.float64)
    weights = volumes[free] if equations.level_is_free else None
    values = equations.values.copy()
    values[free], iterations = scheme.solve(matrix, load, weights)
    if equations.lagged is not None:
        for _ in range(SWEEPS):
            before = values[free]
            shifted = load - (equations.lagged @ values)[free]
            values[free], more = scheme.solve(matrix, shifted, weights)
            iterations = (iterations or 0) + (more or 0)
            if np.max(np.abs(values[free] - before)) <= SETTLED * np.max(np.abs(values)):
                break
        else:
            raise AnswerError(
                f"the rows of edges did not settle in {SWEEPS} sweeps; the conductivity is too skew"
            )
        load = shifted
    size = max(float(np.max(np.abs(load), initial=0.0)), np.finfo(float).tiny)
    return (
        values[equations.master],
        float(np.max(np.abs(matrix @ values[free] - load), initial=0.0)) / size,
        iterations,
    )


# ---- what is handed back -------------------------------------------------------------------------


def interpolated(grid: Grid, values: Array, points: Array) -> Array:
    """Return the values between the nodes, linear along every axis."""
    full = np.zeros([len(axis) for axis in grid.axes])
    full[tuple(grid.place.T)] = values
    between: Array = interpn(grid.axes, full, points)
    return between


# ---- the solvers ---------------------------------------------------------------------------------


@adapt(
    name="five-point finite differences",
    kind="finite difference",
    order={"max": 2, "L1": 2, "L2": 2, "flux": 2},
    dims={1, 2},
    shapes={"interval", "rectangle", "l-shape"},
    conditions={"dirichlet", "neumann", "robin", "periodic"},
    conductivity={"scalar", "tensor", "regions"},
    coordinates={"cartesian", "axisymmetric", "radial-cylinder", "radial-sphere"},
    error_floor=1e-11,
    reproduces_degree=1,
    fixes_constant=True,
    checks_well_posedness=True,
)
def five_point(problem: Problem, n: int) -> Answer:
    """Solve on an interval, a rectangle or an L-shape by the three- or five-point formula and LU factors.

    Interfaces between regions of different conductivity must follow the axes; grid lines are laid on them. In
    coordinates (r, z) or r the boxes of the balance are rings and shells.
    """
    return solve_on_grid(problem, n)


@adapt(
    name="seven-point finite differences",
    kind="finite difference",
    order=2,
    dims={3},
    shapes={"box"},
    conditions={"dirichlet", "neumann", "robin", "periodic"},
    conductivity={"scalar", "tensor"},
    error_floor=1e-10,
    reproduces_degree=1,
    checks_well_posedness=True,
)
def seven_point(problem: Problem, n: int) -> Answer:
    """Solve on a box by the seven-point formula and conjugate gradients."""
    return solve_on_grid(problem, n, IN_SPACE)


def five_point_with(scheme: Scheme, name: str) -> Adapter:
    """Return the five-point solver with another scheme; it still declares what `five_point` does."""
    return replace(five_point, function=partial(solve_on_grid, scheme=scheme), name=name)
