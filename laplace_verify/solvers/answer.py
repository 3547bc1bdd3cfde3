"""What a solver gives back: numbers at nodes, a function on cells, or a function to call.

An answer is measured as its user would evaluate it. With `evaluate` it is that function; with `cells` it is
the function that the cells' own shape functions make of the nodal values, so the value between nodes is part
of the solver; a bare cloud of nodes says nothing between its points and is judged there only, weighted by
`weights` if given. Everything is checked when the answer is made, and against the problem by `validated`.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import KW_ONLY, dataclass, field
from typing import TYPE_CHECKING, Literal, TypeAlias

import numpy as np
import numpy.typing as npt
from scipy.spatial import cKDTree

from laplace_verify.arrays import Array, IntArray, as_points, as_values, blocks
from laplace_verify.errors import AnswerError
from laplace_verify.solvers import _answer_checks as checks
from laplace_verify.solvers import _answer_fit as fit
from laplace_verify.solvers.cells import CellBlock, CellMesh, Samples, connectivity
from laplace_verify.solvers.locate import Locator

if TYPE_CHECKING:
    from laplace_verify.problems import Problem

__all__ = ["Answer", "AnswerKind", "Evaluate"]

Evaluate: TypeAlias = Callable[[Array], npt.ArrayLike]
AnswerKind: TypeAlias = Literal["callable", "cells", "cloud"]

SAME_NODE = 1e-9  # of the extent of the nodes: a point this close to a node is the node


@dataclass(frozen=True, slots=True, eq=False, init=False, repr=False)
class Answer:
    """The result of one solve.

    Parameters
    ----------
    points : (n, d) nodes, or cell centres if `location` is "cell"; in 1-D a list of n coordinates will do
    values : (n,) u at the points; with `location="cell"` cell averages or values at cell centres
    cells : meshio's cell names and node numbers, such as {"triangle6": (m, 6)}; counted from 0
    weights : (n,) positive weights that turn a sum over the points into an integral (cell volumes)
    location : "point" or "cell"; with `cells` and "cell" there is one value per cell, its average, which is
        judged against the exact average
    evaluate : function of points (n, d) that returns u, shape (n,); NaN means "outside my mesh"
    gradient : function of points (n, d) that returns grad u, shape (n, d)
    h : mesh size; the observed order is taken in it. h_min, h_max : extremes of the mesh
    unknowns : number of degrees of freedom, by default the number of values
    samples : number of random samples; standard_error : a number or (n,), for stochastic solvers
    fluxes : integral of n . K grad u over boundary pieces, by name
    quantities : other numbers the solver computed, by name of the case's quantities
    residual : final residual; iterations : number of iterations

    Raises
    ------
    AnswerError
        Names the argument at fault, what was expected, and how to mend it.

    Examples
    --------
    Water level in a tidal pool, linear between three gauges:

    >>> import numpy as np
    >>> pool = Answer([0.0, 0.5, 1.0], [1.0, 1.5, 2.0], cells={"line": [[0, 1], [1, 2]]})
    >>> pool.kind, pool.value_at([[0.25], [0.6]]).tolist()
    ('cells', [1.25, 1.6])
    >>> Answer([0.0, 0.5, 1.0], [1.0, float("nan"), 2.0])  # doctest: +ELLIPSIS
    Traceback (most recent call last):
    ...
    laplace_verify.errors.AnswerError: values must be finite, but 1 of 3 are not; values[1] is nan ...
    """

    points: Array | None = None
    values: Array | None = None
    cells: Mapping[str, IntArray] | None = None
    weights: Array | None = None
    location: Literal["point", "cell"] = "point"
    _: KW_ONLY
    evaluate: Evaluate | None = None
    gradient: Evaluate | None = None
    h: float | None = None
    h_min: float | None = None
    h_max: float | None = None
    unknowns: int | None = None
    samples: int | None = None
    standard_error: float | Array | None = None
    fluxes: Mapping[str, float] | None = None
    quantities: Mapping[str, float] | None = None
    residual: float | None = None
    iterations: int | None = None
    mesh: CellMesh | None = field(init=False, repr=False, default=None)
    _notes: tuple[str, ...] = field(init=False, repr=False, default=())
    _locator: Locator | None = field(init=False, repr=False, default=None)
    _tree: cKDTree | None = field(init=False, repr=False, default=None)

    def __init__(
        self,
        points: npt.ArrayLike | None = None,
        values: npt.ArrayLike | None = None,
        cells: Mapping[str, npt.ArrayLike] | None = None,
        weights: npt.ArrayLike | None = None,
        location: str = "point",
        *,
        evaluate: Evaluate | None = None,
        gradient: Evaluate | None = None,
        h: float | None = None,
        h_min: float | None = None,
        h_max: float | None = None,
        unknowns: int | None = None,
        samples: int | None = None,
        standard_error: npt.ArrayLike | None = None,
        fluxes: Mapping[str, float] | None = None,
        quantities: Mapping[str, float] | None = None,
        residual: float | None = None,
        iterations: int | None = None,
    ) -> None:
        """Convert and check every argument; see the class."""
        checks.callables(evaluate, gradient)
        checks.presence(points, values, cells, weights, evaluate, gradient)
        checks.location(location)
        notes = checks.precision(values)
        nodes = None if points is None else checks.nodes(points, values, cells, location)
        mesh = None
        if cells is not None and nodes is not None:
            mesh = CellMesh(nodes, connectivity(cells, len(nodes)))
        numbers = None if values is None else checks.values(values, nodes, mesh, location)
        count = 0 if numbers is None else len(numbers)
        spacings = {
            name: checks.positive(name, x) for name, x in (("h", h), ("h_min", h_min), ("h_max", h_max))
        }
        checks.ordered(spacings["h_min"], spacings["h_max"])
        arguments = {
            "points": nodes,
            "values": numbers,
            "cells": None if mesh is None else {block.element.name: block.nodes for block in mesh.blocks},
            "weights": None if weights is None else checks.weights(weights, count),
            "location": location,
            "evaluate": evaluate,
            "gradient": gradient,
            **spacings,
            "unknowns": checks.count("unknowns", unknowns, least=1),
            "samples": checks.count("samples", samples, least=1),
            "standard_error": checks.standard_error(standard_error, count),
            "fluxes": checks.named_numbers("fluxes", fluxes),
            "quantities": checks.named_numbers("quantities", quantities),
            "residual": checks.not_negative("residual", residual),
            "iterations": checks.count("iterations", iterations, least=0),
            "mesh": mesh,
            "_notes": notes,
            "_locator": None,
            "_tree": None,
        }
        for name, value in arguments.items():
            object.__setattr__(self, name, value)

    def __repr__(self) -> str:
        """Show what kind of answer it is and how large."""
        size = "" if self.values is None else f", {len(self.values)} values"
        return f"Answer({self.kind}{size}{'' if self.h is None else f', h={self.h:.6g}'})"

    @property
    def kind(self) -> AnswerKind:
        """How the answer is measured: "callable", "cells" or "cloud"."""
        if self.evaluate is not None:
            return "callable"
        return "cells" if self.mesh is not None else "cloud"

    @property
    def degrees_of_freedom(self) -> int | None:
        """`unknowns` as reported, else the number of values; None for a callable that reports neither."""
        if self.unknowns is not None:
            return self.unknowns
        return None if self.values is None else len(self.values)

    @property
    def has_gradient(self) -> bool:
        """Whether `gradient_at` gives anything: a gradient function, or nodal values on cells."""
        return self.gradient is not None or (self.kind == "cells" and self.location == "point")

    def value_at(self, points: npt.ArrayLike) -> Array:
        """Return u at points (n, d), shape (n,).

        NaN where the answer says nothing: outside the cells; off the nodes of a bare cloud; where `evaluate`
        itself returns NaN.

        Raises
        ------
        AnswerError
            If `evaluate` returns another shape, complex or infinite values.
        """
        asked = self._asked(points)
        if self.evaluate is not None:
            return _called(self.evaluate, asked, "evaluate", None)
        if self.mesh is None:
            return self._at_nodes(asked)
        numbers = self._numbers()
        result = np.full(len(asked), np.nan)
        for block, rows, at, cells in self._located(asked):
            if self.location == "cell":
                result[rows] = numbers[cells]
            else:
                result[rows] = block.values(at, numbers)[:, 0]
        return result

    def gradient_at(self, points: npt.ArrayLike) -> Array | None:
        """Return grad u at points (n, d), shape (n, d), or None if the answer has no gradient.

        On a face between cells it is the gradient in one of them. NaN rows as in `value_at`.
        """
        asked = self._asked(points)
        if self.gradient is not None:
            return _called(self.gradient, asked, "gradient", asked.shape[1])
        if not self.has_gradient:
            return None
        result = np.full(asked.shape, np.nan)
        numbers = self._numbers()
        for block, rows, at, _cells in self._located(asked):
            result[rows] = block.gradients(at, numbers)[:, 0]
        return result

    def element_quadrature(self, order: int) -> Samples:
        """Return quadrature points, weights, values and gradients, element by element.

        Exact for degree `order` in the reference coordinates times the Jacobian determinant: on affine cells,
        for degree `order` in x. A solver's own `gradient` function takes the place of the cells' gradient.

        Raises
        ------
        AnswerError
            If the answer has no cells.
        """
        return self._with_own_gradient(
            self._mesh().quadrature(order, self._numbers(), per_cell=self.location == "cell")
        )

    def random_points(self, seed: int, per_cell: int = 1) -> Samples:
        """Return seeded random points in every cell with values and gradients (for the max norm)."""
        return self._with_own_gradient(
            self._mesh().random(seed, per_cell, self._numbers(), per_cell=self.location == "cell")
        )

    def validated(self, problem: Problem) -> Answer:
        """Return this answer after checking it against the problem.

        Raises
        ------
        AnswerError
            If the dimension differs, there are too few points, a point lies outside the shape, the cells
            cover far too little or too much of it, or a flux names no piece.
        """
        fit.check(self, problem)
        return self

    def remarks(self, problem: Problem) -> tuple[str, ...]:
        """Return what is odd about the answer without spoiling it, in plain words."""
        return self._notes + fit.remarks(self, problem)

    def _numbers(self) -> Array:
        """Return the values of an answer that has some."""
        if self.values is None:
            raise AnswerError("values: this answer is a function only; use value_at")
        return self.values

    def _mesh(self) -> CellMesh:
        """Return the mesh of an answer that has cells."""
        if self.mesh is None:
            raise AnswerError("cells: this answer has none; element by element quadrature needs them")
        return self.mesh

    def _asked(self, points: npt.ArrayLike) -> Array:
        """Check points to evaluate at; the dimension is the nodes', or that of the points for a callable."""
        if self.points is not None:
            dim = self.points.shape[1]
        else:
            shape = np.shape(points)
            dim = shape[1] if len(shape) == 2 else 1
        return as_points(points, dim, error=AnswerError)

    def _at_nodes(self, asked: Array) -> Array:
        """Return the values of a cloud at points that coincide with nodes, NaN elsewhere."""
        tree = self._tree
        if tree is None:
            tree = cKDTree(np.asarray(self.points))
            object.__setattr__(self, "_tree", tree)
        reach = SAME_NODE * float(np.max(tree.maxes - tree.mins))
        distance, nearest = tree.query(asked)
        found = distance <= reach
        return np.where(found, self._numbers()[np.where(found, nearest, 0)], np.nan)

    def _located(self, asked: Array) -> Iterator[tuple[CellBlock, IntArray, Array, IntArray]]:
        """Yield, kind by kind, a block with one cell a point, the points' rows, where they are, the cells."""
        mesh = self._mesh()
        locator = self._locator
        if locator is None:
            locator = Locator(mesh)
            object.__setattr__(self, "_locator", locator)
        cells, at = locator.find(asked)
        for block in mesh.blocks:
            rows = np.flatnonzero((cells >= block.first) & (cells < block.first + len(block.nodes)))
            if len(rows):
                chosen = cells[rows]
                yield block.pick(chosen - block.first), rows, at[rows][:, np.newaxis], chosen

    def _with_own_gradient(self, samples: Samples) -> Samples:
        """Replace the cells' gradient by the solver's own where it gives one."""
        if self.gradient is None:
            return samples
        return samples._replace(
            gradients=_called(self.gradient, samples.points, "gradient", samples.points.shape[1])
        )


def _called(function: Evaluate, points: Array, name: str, columns: int | None) -> Array:
    """Call the solver's function block by block and check what it returns; NaN passes, infinity does not."""
    shape = (len(points),) if columns is None else (len(points), columns)
    result = np.empty(shape)
    for part in blocks(len(points)):
        asked = points[part].copy()  # the solver may write into its argument
        returned = function(asked)
        if columns is None:
            result[part] = as_values(checks.numbers(name, returned), len(asked), error=AnswerError, name=name)
        else:
            result[part] = checks.rows(name, returned, len(asked), columns)
    infinite = np.isinf(result) if columns is None else np.isinf(result).any(axis=1)
    if infinite.any():
        row = int(np.flatnonzero(infinite)[0])
        raise AnswerError(
            f"{name} must return finite numbers (or NaN outside its mesh), got {result[row].tolist()} at "
            f"point "
            f"{points[row].tolist()}"
        )
    return result
