"""Quantities of an answer that its solver did not report, computed from the answer itself.

A flux and what follows from it (conductance, resistance, shape factor, capacitance) comes from the solver's
own flux through the piece where it reports one, else from n . K grad u_h integrated over the piece, as does
the discharge across a section; the energy from grad u_h . K grad u_h over the shape; a flux density and an
exit gradient from grad u_h at the point; an uplift, a torsion constant and an added mass from the values of
u_h on the boundary alone. Values at points are the probes of
`functionals`. Where the answer says nothing on some part of a piece (a mesh inside a curve, a bare cloud)
nothing is computed.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.measure.norms import conducted
from laplace_verify.problems.driving import OF_VALUES, boundary_density, ratio, stream
from laplace_verify.problems.sections import section

if TYPE_CHECKING:
    from laplace_verify.geometry import Boundary
    from laplace_verify.measure.norms import Sample
    from laplace_verify.problems import Case, Problem, Quantity
    from laplace_verify.solvers import Answer

__all__ = ["computed_quantity"]

ORDER = 7
MOST_POINTS = 20_000  # on a piece


def computed_quantity(
    quantity: Quantity, answer: Answer, case: Case, sample: Sample, h: float, shift: float = 0.0
) -> float | None:
    """Return a quantity as the answer has it, None if it cannot be computed from the answer.

    Parameters
    ----------
    quantity
        The exact one; its kind, place and driving amount say what is to be computed.
    answer, case
        The case as it is measured, see `through_window`.
    sample
        The answer at quadrature points with weights, for the energy.
    h
        Spacing of the answer: the boundary is integrated in steps of it.
    shift
        What a pure Neumann answer lies too high.
    """
    if quantity.kind == "value" or answer.kind == "cloud":
        return None
    if quantity.kind == "energy":
        return _energy(answer, case, sample)
    if quantity.kind in ("flux density", "exit gradient"):
        return _at_point(quantity, answer, case.problem)
    if quantity.kind in OF_VALUES:
        parts = [_of_values(quantity, answer, case, piece, h, shift) for piece in _pieces(quantity, case)]
        return float(sum(parts)) if np.isfinite(parts).all() else None
    return _from_flux(quantity, answer, case, h)


def _pieces(quantity: Quantity, case: Case) -> list[Boundary]:
    """Return what a quantity is integrated over."""
    where, pieces = quantity.where, case.problem.pieces
    if quantity.kind == "discharge":
        return [section("", where, case.problem.shape)]
    if where is None:
        return [piece.boundary for piece in pieces if piece.has_data]
    return [pieces[str(where[0] if isinstance(where, tuple) else where)].boundary]


def _from_flux(quantity: Quantity, answer: Answer, case: Case, h: float) -> float | None:
    """Return the flux, or the ratio that it makes with the driving amount."""
    (piece,) = _pieces(quantity, case)
    flux = None if quantity.kind == "discharge" else (answer.fluxes or {}).get(piece.name)
    if flux is not None and quantity.kind == "flux":
        return None  # it is measured as flux:PIECE
    if flux is None:
        if not answer.has_gradient:
            return None
        points, normals, weights = _quadrature(piece, case, h)
        gradients = answer.gradient_at(points)
        if gradients is None or not np.isfinite(gradients).all():
            return None
        flux = float(weights @ (conducted(case.problem, points)(gradients) * normals).sum(axis=1))
    if quantity.kind == "discharge":
        return -flux
    return ratio(quantity.kind, flux, quantity.drive, _number(case.problem))


def _energy(answer: Answer, case: Case, sample: Sample) -> float | None:
    """Return the integral of grad u_h . K grad u_h; not of a problem seen through a window only."""
    if not answer.has_gradient or sample.gradients is None or case.window is not None:
        return None
    inside = np.isfinite(sample.gradients).all(axis=1)
    if not inside.all():
        return None
    flow = conducted(case.problem, sample.points)(sample.gradients)
    return float(sample.weights @ (flow * sample.gradients).sum(axis=1))


def _at_point(quantity: Quantity, answer: Answer, problem: Problem) -> float | None:
    """Return e . K grad u_h at a point, or -n . grad u_h at one of a piece."""
    place = quantity.where if quantity.place is None else quantity.place
    points = np.array([place], dtype=np.float64)
    gradients = answer.gradient_at(points) if answer.has_gradient else None
    if gradients is None or not np.isfinite(gradients).all():
        return None
    if quantity.kind == "exit gradient":
        return -float(gradients[0] @ problem.pieces[str(quantity.where)].normals(points)[0])
    return float(conducted(problem, points)(gradients)[0] @ np.asarray(quantity.direction))


def _of_values(
    quantity: Quantity, answer: Answer, case: Case, piece: Boundary, h: float, shift: float
) -> float:
    """Return the share of a piece in an integral of values, NaN if u_h has no values there."""
    points, normals, weights = _quadrature(piece, case, h)
    values = answer.value_at(points) - shift
    k = 1.0
    if quantity.kind == "added mass":
        values = values - stream(case.problem.at_infinity, points)
        k = _number(case.problem)
    density = boundary_density(quantity.kind, points, normals, values, np.zeros(0), quantity.drive)
    return k * float(weights @ density)


def _quadrature(piece: Boundary, case: Case, h: float) -> tuple[Array, Array, Array]:
    """Return points, normals and weights, measures of space, on a piece."""
    surface = max(case.problem.dim - 1, 1)
    coarsest = (piece.measure * ORDER**surface / MOST_POINTS) ** (1 / surface)
    points, normals, weights = piece.quadrature(ORDER, case.regularity.singular_points, max(h, coarsest))
    return points, normals, weights * case.problem.metric(points)


def _number(problem: Problem) -> float:
    """Return K if it is a number, else 1: only kinds that need a number use it."""
    return problem.conductivity if isinstance(problem.conductivity, float) else 1.0
