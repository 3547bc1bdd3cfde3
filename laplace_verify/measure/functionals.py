"""Single numbers and boundary norms of one answer: traces, fluxes, flux densities, quantities, probes.

The flux through a piece is int n . K grad u over it, n outward: what flows in where it is positive. Fluxes
are measured only if the solver reports them, quantities as it reports them or else as computed from its
answer (`answer_quantities`); probes are read off the answer where it can be evaluated. Signed errors are
kept, because a functional whose error passes through zero shows any order.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.measure.answer_quantities import computed_quantity
from laplace_verify.measure.norms import conducted, weighted_norm

if TYPE_CHECKING:
    from laplace_verify.measure.exact import Exact
    from laplace_verify.measure.norms import Measured, Sample
    from laplace_verify.problems import Case, Piece
    from laplace_verify.solvers import Answer

__all__ = ["ExactFluxes", "Functionals", "measure_functionals", "probes"]

TRACE_ORDER, FLUX_ORDER = 5, 15
TRACE_POINTS = 3000
PARTS = 8  # patches along a piece for the exact flux


@dataclass(slots=True)
class Functionals:
    """Errors, relative and signed errors by norm; `computed` are the norms not reported but computed here."""

    errors: dict[str, float] = field(default_factory=dict)
    relative: dict[str, float] = field(default_factory=dict)
    signed: dict[str, float] = field(default_factory=dict)
    computed: set[str] = field(default_factory=set)

    def add(self, norm: str, error: float, scale: float) -> None:
        """Keep one number."""
        self.errors[norm] = abs(error)
        self.relative[norm] = abs(error) / (abs(scale) or 1.0)
        self.signed[norm] = error


class ExactFluxes:
    """The exact flux through each piece and int |n . K grad u| as its scale, when first asked for."""

    def __init__(self, case: Case, exact: Exact) -> None:
        self._case, self._exact = case, exact
        self._known: dict[str, tuple[float, float] | None] = {}

    def of(self, name: str) -> tuple[float, float] | None:
        """Return flux and scale of a piece, None if the gradient does not exist along it."""
        if name not in self._known:
            self._known[name] = self._integrated(name)
        return self._known[name]

    def _integrated(self, name: str) -> tuple[float, float] | None:
        problem = self._case.problem
        piece = problem.pieces[name]
        length = piece.measure ** (1 / max(problem.dim - 1, 1))
        points, normals, weights = piece.quadrature(
            FLUX_ORDER, self._case.regularity.singular_points, length / PARTS
        )
        gradient = self._exact.gradients(points)
        if not np.isfinite(gradient).all():
            return None
        density = (conducted(problem, points)(gradient) * normals).sum(axis=1)
        weights = weights * problem.metric(points)
        scale = float(weights @ np.abs(density))
        for quantity in self._case.quantities.values():
            if quantity.kind == "flux" and quantity.where == name:
                return float(quantity.value), scale
        return float(weights @ density), scale


def probes(case: Case) -> list[tuple[Array, float]]:
    """Return points (1, d) and exact values of the case's quantities of kind "value", in order."""
    found = []
    for quantity in case.quantities.values():
        if quantity.kind == "value" and isinstance(quantity.where, tuple):
            found.append((np.array([quantity.where], dtype=np.float64), float(quantity.value)))
    return found


def measure_functionals(
    answer: Answer,
    case: Case,
    exact: Exact,
    fluxes: ExactFluxes,
    h: float,
    measured: Measured,
    sample: Sample,
) -> Functionals:
    """Return everything but the interior norms.

    `measured.shift` is taken off a pure Neumann answer first; `measured.scale`, the largest |u|, makes errors
    of values relative.
    """
    shift, scale = measured.shift, measured.scale
    result = Functionals()
    for piece in case.problem.pieces:
        if not piece.has_data:
            continue  # no boundary of space
        _trace(result, piece, answer, case, exact, h, shift)
    for name, flux in (answer.fluxes or {}).items():
        known = fluxes.of(name) if case.problem.pieces[name].has_data else None
        if known is not None:
            result.add(f"flux:{name}", flux - known[0], max(abs(known[0]), known[1]))
    reported = answer.quantities or {}
    for name, quantity in case.quantities.items():
        value = reported.get(name)
        if value is None:
            value = computed_quantity(quantity, answer, case, sample, h, shift)
            result.computed.add(f"quantity:{name}")
        if value is not None:
            result.add(f"quantity:{name}", value - float(quantity.value), float(quantity.value) or scale)
    for k, (point, value) in enumerate(probes(case)):
        seen = float(answer.value_at(point)[0])
        if np.isfinite(seen):
            result.add(f"probe:{k}", seen - shift - value, scale)
    return result


def _trace(
    result: Functionals, piece: Piece, answer: Answer, case: Case, exact: Exact, h: float, shift: float
) -> None:
    """Add trace:PIECE, and fluxdensity:PIECE if the answer has a gradient, where they can be evaluated."""
    points, normals, weights = _trace_points(piece, answer, case, h)
    if not len(points) or exact.on_a_cut(points).any():
        return
    seen = answer.value_at(points) - shift
    u = exact.values(points)
    usable = np.isfinite(seen) & np.isfinite(u)
    if not usable.mean() > 0.5:  # a mesh inside a curved piece has no trace on it
        return
    w = weights[usable]
    error = weighted_norm(w, seen[usable] - u[usable])
    result.add(f"trace:{piece.name}", error, weighted_norm(w, u[usable]))
    if not answer.has_gradient:
        return
    gradients = answer.gradient_at(points)
    if gradients is None:
        return
    exact_gradients = exact.gradients(points)
    current = conducted(case.problem, points)
    density = (current(gradients) * normals).sum(axis=1)
    exact_density = (current(exact_gradients) * normals).sum(axis=1)
    usable = np.isfinite(density) & np.isfinite(exact_density)
    if usable.mean() > 0.5:
        w = weights[usable]
        error = weighted_norm(w, density[usable] - exact_density[usable])
        result.add(f"fluxdensity:{piece.name}", error, weighted_norm(w, exact_density[usable]))


def _trace_points(piece: Piece, answer: Answer, case: Case, h: float) -> tuple[Array, Array, Array]:
    """Return points, normals and weights on a piece: Gauss points, or a cloud's own nodes there."""
    if answer.kind == "cloud" and answer.points is not None:
        points = answer.points[piece.contains(answer.points)]
        count = max(len(points), 1)
        normals = piece.normals(points) if len(points) else points
        return points, normals, np.full(len(points), piece.measure / count) * case.problem.metric(points)
    if case.problem.dim == 1:
        points, normals, weights = piece.quadrature(TRACE_ORDER)
        return points, normals, weights * case.problem.metric(points)
    surface = case.problem.dim - 1
    coarsest = (piece.measure * 3**surface / TRACE_POINTS) ** (1 / surface)
    cell = max(h, coarsest)
    points, normals, weights = piece.quadrature(TRACE_ORDER, case.regularity.singular_points, cell)
    return points, normals, weights * case.problem.metric(points)
