"""Error norms of one answer.

With e = u_h - u: max |e|, L1 = int |e|, L2 = (int e^2)^(1/2), H1-semi = (int |grad e|^2)^(1/2), energy =
(int grad e . K grad e)^(1/2), each absolute and divided by the same norm of u over the same points. A
callable is integrated over the shape (integrals are those of space: with the weight 2 pi r or 4 pi r^2 in
coordinates (r, z) or r), a nodal answer with cells element by element with those cells' own shape
functions, values of cells against the exact averages over them (a step between cells is no part of a finite
volume method), a bare cloud at its own points with its weights, or equal ones. A pure Neumann answer is
aligned first: the weighted mean of e is taken out, and kept as the error of the level.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.errors import AnswerError
from laplace_verify.measure.sampling import around, quadrature_points, scattered_points
from laplace_verify.measure.windows import clipped

if TYPE_CHECKING:
    from laplace_verify.measure.exact import Exact
    from laplace_verify.problems import Problem
    from laplace_verify.solvers import Answer
    from laplace_verify.solvers.cells import Samples

__all__ = [
    "Measured",
    "Sample",
    "conducted",
    "measure_norms",
    "sample_answer",
    "sharpened",
    "weighted_norm",
]

PEAKS, PER_PEAK = 40, 25
RADII = (0.5, 0.125)  # of h
AVERAGE_ORDER = 5  # exact averages over cells, with an error of order 6


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Sample:
    """An answer at points: quadrature points with weights, and further points for the maximum only.

    `values` and `gradients` are the solver's; `extra` and `extra_values` serve the maximum. `left_out` is the
    share of the quadrature weight outside the solver's mesh. Where the values are averages over cells,
    `points` are the cells' centres and `weights` their volumes.
    """

    points: Array
    weights: Array
    values: Array
    gradients: Array | None
    extra: Array
    extra_values: Array
    left_out: float = 0.0
    averaged: Samples | None = None  # the values are averages over cells; these points make them of u


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Measured:
    """Norms of one level, the level's own error (pure Neumann), and signed errors at points."""

    errors: dict[str, float]
    relative: dict[str, float]
    shift: float
    scale: float  # largest |u|
    points: Array
    signed: Array
    left_out: float
    near: float | None  # largest error nearer to the boundary than the declared clearance


def sample_answer(
    answer: Answer,
    problem: Problem,
    singular: Array,
    h: float,
    generator: np.random.Generator,
    max_points: int,
) -> Sample:
    """Evaluate an answer where it is to be measured, with weights that are measures of space."""
    if answer.kind == "callable":
        return in_space(_sample_callable(answer, problem, singular, h, generator, max_points), problem)
    if answer.kind == "cells":
        if answer.location == "cell":
            return in_space(_sample_averages(answer), problem)
        return in_space(clipped(_sample_cells(answer, generator), problem), problem)
    points, values = answer.points, answer.values
    if points is None or values is None:
        raise AnswerError("points and values, or evaluate, must be given: this answer has neither")
    weights = answer.weights  # a solver's own are measures of space: in (r, z) the volumes of rings
    if weights is None:
        weights = np.full(len(points), problem.shape.measure / len(points)) * problem.metric(points)
    sample = Sample(
        points=points, weights=weights, values=values, gradients=answer.gradient_at(points),
        extra=points[:0], extra_values=values[:0],
    )  # fmt: skip
    return clipped(sample, problem, cloud=True)


def in_space(sample: Sample, problem: Problem) -> Sample:
    """Return a sample whose weights, measures of the shape in (r, z) or r, are measures of space."""
    if problem.coordinates == "cartesian":
        return sample
    return replace(sample, weights=sample.weights * problem.metric(sample.points))


def sharpened(
    sample: Sample, answer: Answer, exact: Exact, problem: Problem, h: float, generator: np.random.Generator
) -> Sample:
    """Return the sample of a callable with further points about its largest errors, for the maximum."""
    if answer.kind != "callable":
        return sample
    for radius in RADII:
        points = np.concatenate([sample.points, sample.extra])
        error = np.concatenate([sample.values, sample.extra_values]) - exact.values(points)
        if problem.constant is not None:
            error = error - np.nanmean(error)
        size = np.where(np.isfinite(error), np.abs(error), -1.0)
        count = min(PEAKS, len(size))
        peaks = points[np.sort(np.argpartition(-size, count - 1)[:count])]
        close = around(problem.shape, peaks, radius * h, PER_PEAK, generator)
        values = answer.value_at(close)
        known = _inside_mesh(close, values, problem, h, "evaluate") if len(close) else np.zeros(0, dtype=bool)
        sample = replace(
            sample,
            extra=np.concatenate([sample.extra, close[known]]),
            extra_values=np.concatenate([sample.extra_values, values[known]]),
        )
    return sample


def measure_norms(sample: Sample, exact: Exact, problem: Problem, clearance: float = 0.0) -> Measured:
    """Return every norm of the values and, if there is one, of the gradient.

    `clearance`, relative to the shape's extent, keeps points near the boundary out of the norms; the largest
    error there is reported apart.
    """
    u, extra_u = _exact_values(sample, exact), exact.values(sample.extra)
    defined, extra_defined = np.isfinite(u), np.isfinite(extra_u)
    if not defined.any():
        raise AnswerError("no point of the answer lies where the exact solution has a value")
    clear, extra_clear = defined, extra_defined
    if clearance > 0:
        reach = clearance * problem.shape.extent
        clear = defined & (problem.shape.distance(sample.points) >= reach)
        extra_clear = extra_defined & (problem.shape.distance(sample.extra) >= reach)
        if not clear.any():
            raise AnswerError(
                f"no point lies further than the declared clearance {clearance} from the boundary"
            )
    weights = np.where(clear, sample.weights, 0.0)
    total = float(weights.sum())
    error, extra_error = sample.values - u, sample.extra_values - extra_u
    shift, mean = 0.0, 0.0
    if problem.constant is not None:
        shift = float(weights[clear] @ error[clear]) / total
        mean = float(weights[clear] @ u[clear]) / total
        error, extra_error = error - shift, extra_error - shift
    errors, relative = _value_norms(
        np.concatenate([error[clear], extra_error[extra_clear]]),
        np.concatenate([u[clear], extra_u[extra_clear]]) - mean,
        weights[clear],
    )
    if sample.gradients is not None:
        _add_gradient_norms(errors, relative, sample, exact, problem, clear)
    left_out = sample.left_out + float(sample.weights[~defined].sum() / sample.weights.sum())
    return Measured(
        errors=errors, relative=relative, shift=shift, scale=float(np.max(np.abs(u[clear]))) or 1.0,
        points=np.concatenate([sample.points[clear], sample.extra[extra_clear]]),
        signed=np.concatenate([error[clear], extra_error[extra_clear]]),
        left_out=left_out,
        near=_largest(np.concatenate([error[defined & ~clear], extra_error[extra_defined & ~extra_clear]])),
    )  # fmt: skip


def _exact_values(sample: Sample, exact: Exact) -> Array:
    """Return u at the points of a sample, or its averages over the cells."""
    if sample.averaged is None:
        return exact.values(sample.points)
    fine = sample.averaged
    totals = np.bincount(fine.cells, fine.weights * exact.values(fine.points))
    averages: Array = totals / sample.weights
    return averages


def _value_norms(error: Array, u: Array, weights: Array) -> tuple[dict[str, float], dict[str, float]]:
    """Return max, L1, L2 of the error, absolute and relative; the first len(weights) carry weights."""
    errors, sizes = _three_norms(error, weights), _three_norms(u, weights)
    return errors, {name: errors[name] / (sizes[name] or 1.0) for name in errors}


def _three_norms(f: Array, weights: Array) -> dict[str, float]:
    """Return max, L1 and L2 of f."""
    weighted = np.abs(f[: len(weights)])
    return {
        "max": float(np.max(np.abs(f))),
        "L1": float(weights @ weighted),
        "L2": weighted_norm(weights, weighted),
    }


def weighted_norm(weights: Array, f: Array) -> float:
    """Return (sum of weights f^2)^(1/2), f of shape (n,), without overflow however far a solver diverged."""
    largest = float(np.max(np.abs(f), initial=0.0))
    if not 0.0 < largest < np.inf:
        return largest
    return largest * float(np.sqrt(weights @ (f / largest) ** 2))


def _add_gradient_norms(
    errors: dict[str, float], relative: dict[str, float], sample: Sample, exact: Exact, problem: Problem,
    clear: BoolArray,
) -> None:  # fmt: skip
    """Add H1-semi and energy where both gradients exist."""
    if sample.gradients is None:
        return
    gradients = exact.gradients(sample.points)
    usable = clear & np.isfinite(gradients).all(axis=1) & np.isfinite(sample.gradients).all(axis=1)
    if not usable.any():
        return
    gradient, weights = gradients[usable], sample.weights[usable]
    error = sample.gradients[usable] - gradient
    current = conducted(problem, sample.points[usable])
    # a constant has no gradient to be relative to: values per length take its place
    extent, largest = problem.shape.extent, float(np.max(np.abs(exact.values(sample.points)[clear])))
    per_length = (largest or 1.0) / extent * float(np.sqrt(weights.sum()))
    unit = np.full_like(gradient, 1.0 / np.sqrt(problem.dim))
    for name, through in (("H1-semi", lambda g: g), ("energy", current)):
        norms = [weighted_norm(weights, _length(g, through)) for g in (error, gradient)]
        mean = weighted_norm(weights, _length(unit, through)) / float(np.sqrt(weights.sum()))
        errors[name] = norms[0]
        relative[name] = norms[0] / (norms[1] or per_length * mean)


def conducted(problem: Problem, points: Array) -> Callable[[Array], Array]:
    """Return the function that turns gradients (n, d) at the given points into K grad u (n, d)."""
    if problem.interfaces:
        k = problem.conductivity_at(points)[:, np.newaxis]
        return lambda gradients: k * gradients
    tensor = problem.tensor
    return lambda gradients: gradients @ tensor


def _length(gradient: Array, through: Callable[[Array], Array]) -> Array:
    """Return (g . K g)^(1/2) row by row, without overflow; `through` turns g into K g."""
    largest = float(np.max(np.abs(gradient), initial=0.0)) or 1.0
    scaled = gradient / largest
    length: Array = largest * np.sqrt((through(scaled) * scaled).sum(axis=1))
    return length


def _sample_callable(
    answer: Answer,
    problem: Problem,
    singular: Array,
    h: float,
    generator: np.random.Generator,
    max_points: int,
) -> Sample:
    """Evaluate a callable at quadrature and scattered points; NaN near curved pieces is outside its mesh."""
    shape = problem.shape
    points, weights = quadrature_points(shape, singular, h, max_points, problem.quadrature)
    extra = scattered_points(shape, singular, h, generator, max_points)
    values, extra_values = answer.value_at(points), answer.value_at(extra)
    inside = _inside_mesh(points, values, problem, h, "evaluate")
    extra_inside = _inside_mesh(extra, extra_values, problem, h, "evaluate")
    gradients = None
    if answer.has_gradient:
        gradients = answer.gradient_at(points[inside])
        if gradients is not None:
            _inside_mesh(points[inside], gradients.sum(axis=1), problem, h, "gradient")
    return Sample(
        points=points[inside], weights=weights[inside], values=values[inside], gradients=gradients,
        extra=extra[extra_inside], extra_values=extra_values[extra_inside],
        left_out=float(weights[~inside].sum() / weights.sum()),
    )  # fmt: skip


def _sample_cells(answer: Answer, generator: np.random.Generator) -> Sample:
    """Evaluate a nodal answer element by element; the maximum also over nodes, middles and random points."""
    mesh, values = answer.mesh, answer.values
    if mesh is None or values is None:
        raise AnswerError("cells: this answer has none")
    # Two more than 2 p: with fewer, points would sit where the error of interpolation vanishes. In bricks
    # the determinant of the map brings those two already.
    degree = max(block.element.degree for block in mesh.blocks)
    solid = mesh.dim == 3 and not any(block.element.simplex for block in mesh.blocks)
    samples = answer.element_quadrature(2 * degree if solid else 2 * degree + 2)
    scattered = answer.random_points(int(generator.integers(2**31)), per_cell=1)
    extra, extra_values = [scattered.points], [scattered.values]
    for block in mesh.blocks:
        at = _middles(block.element.nodes[: block.element.corners])
        extra.append(block.points(at).reshape(-1, mesh.dim))
        extra_values.append(block.values(at, values).ravel())
        used = np.unique(block.nodes)
        extra.append(mesh.nodes[used])
        extra_values.append(values[used])
    return Sample(
        points=samples.points,
        weights=samples.weights,
        values=samples.values,
        gradients=samples.gradients,
        extra=np.concatenate(extra),
        extra_values=np.concatenate(extra_values),
    )


def _sample_averages(answer: Answer) -> Sample:
    """Return the values of cells, to be compared with the exact averages over them."""
    mesh, values = answer.mesh, answer.values
    if mesh is None or values is None:
        raise AnswerError("cells: this answer has none")
    centres, fine = mesh.centroids(), answer.element_quadrature(AVERAGE_ORDER)
    volumes: Array = np.bincount(fine.cells, fine.weights).astype(np.float64)
    return Sample(
        points=centres, weights=volumes, values=values, gradients=None,
        extra=centres[:0], extra_values=values[:0], averaged=fine,
    )  # fmt: skip


def _middles(corners: Array) -> Array:
    """Return the points half-way between any two corners: where linear interpolation is worst."""
    first, second = np.triu_indices(len(corners), k=1)
    middles: Array = np.unique(0.5 * (corners[first] + corners[second]), axis=0)
    return middles


def _inside_mesh(points: Array, values: Array, problem: Problem, h: float, name: str) -> BoolArray:
    """Return which values are numbers; NaN further than h from every curved piece is an error."""
    known: BoolArray = np.isfinite(values)
    if known.all():
        return known
    outside = points[~known]
    distance = np.full(len(outside), np.inf)
    for piece in problem.pieces:
        if piece.curved:
            offset = outside - piece.project(outside)
            distance = np.minimum(distance, np.sqrt((offset**2).sum(axis=1)))
    bad = ~(distance <= h)
    if bad.any():
        where = outside[int(np.flatnonzero(bad)[0])].tolist()
        raise AnswerError(
            f"{name} must return numbers in the shape, but {int(bad.sum())} of {len(points)} are NaN; "
            f"the first at {where}, not within h = {h:.3g} of a curved piece (there NaN is outside the mesh)"
        )
    return known


def _largest(error: Array) -> float | None:
    """Return max |error|, None if there is none."""
    return float(np.max(np.abs(error))) if len(error) else None
