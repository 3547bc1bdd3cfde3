"""Dirichlet's principle.

Among all functions v with the same boundary values the solution has the least energy

    E(v) = 1/2 integral of K |grad v|^2,

and a Ritz-Galerkin solution has the least of all functions of its trial space with these values (Strang &
Fix, An Analysis of the Finite Element Method, 1973, sections 1.1 and 1.2; Courant & Hilbert, Methods of
Mathematical Physics I, chapter IV; from memory, unchecked). With a(v, w) = integral of K grad v . grad w,
d = u_h - u_H, and the mesh of u_H contained in that of u_h,

    a(u_h, d) = 0,    E(u_H) = E(u_h) + E(d),    E(u_h) >= exact minimum:

on the line through both answers the energy is least at u_h, and so no more than E(u_H).

Conditions of validity: finite elements, whose answers are nodal values on cells; Dirichlet conditions on the
whole boundary, no load of Neumann or Robin conditions; K a number; rectangles, L-shapes and boxes, with data
of degree one along every side, or with kinks in the middle, which suit meshes of an even number of cells a
side. What the answers must have is measured, and without it the law is not applicable: the cells fill the
shape, the interpolated data equal the data on the boundary, u_H is a function of the finer mesh.

Tolerance: |a(u_h, d)| / a(u_H, u_H), what E(u_h) lacks relative to the exact minimum where the data are those
of a field, and what u_h misses of its data, must each be round-off; sizes are the first and twice the first.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from hypothesis import strategies as st

from laplace_verify import fields
from laplace_verify.arrays import Array
from laplace_verify.principles import strategies
from laplace_verify.principles.law import Finding, Law, NoValuesError, Trial, round_off
from laplace_verify.principles.limits import Measurement
from laplace_verify.principles.maximum_principle import dirichlet_needed, kinked
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reading import told
from laplace_verify.problems import Problem
from laplace_verify.solvers import Adapter, Answer

__all__ = ["DIRICHLET_PRINCIPLE", "slope_of_energy"]

ALIGNED = ("rectangle", "l-shape", "box")
ORDER = 4  # of quadrature: squares of gradients of cells of degree two
SAME = 1e-9
ON_PIECE = 50


def _inapplicable(solver: Adapter) -> str | None:
    if solver.kind != "finite element":
        return f"{solver.name} is no finite element method: its answers need not minimise an energy"
    if not _shapes(solver):
        return f"{solver.name} is not declared for rectangles, L-shapes or boxes"
    return dirichlet_needed(solver)


def _shapes(solver: Adapter) -> list[str]:
    return [kind for kind in strategies.drawable(solver.dims, solver.shapes) if kind in ALIGNED]


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    found = _shapes(solver)
    kinks = kinked(found, places=(0.5,))
    plane = solver.dims & {2}
    if not plane:
        return kinks
    smooth = strategies.posed(plane, set(found), {"dirichlet"}, degree=1)
    return st.builds(_bent, smooth, st.sampled_from((1, 2, -1, -2))) | kinks


def _bent(posed: Posed, factor: int) -> Posed:
    """Return a problem with 2 x y times a factor added to its affine field: still affine on every side."""
    if posed.field is None:
        raise TypeError("a field is needed to add to")
    return replace(posed, field=posed.field + factor * fields.polynomial(2, "im"))


def slope_of_energy(coarse: Answer, fine: Answer) -> float:
    """Return |a(u_h, u_h - u_H)| / a(u_H, u_H) of two nodal answers, the cells of u_h within those of u_H.

    K is a number, so that it cancels.
    """
    start, end = coarse.value_at(_nodes(fine)), np.asarray(fine.values)
    first, last = _slopes(fine, start), _slopes(fine, end)
    weights = _on(fine, end).element_quadrature(ORDER).weights
    along = weights @ np.sum(last * (last - first), axis=1)
    return abs(float(along)) / float(weights @ np.sum(first**2, axis=1))


def _nodes(answer: Answer) -> Array:
    return np.asarray(answer.points)


def _on(answer: Answer, values: Array) -> Answer:
    """Return a function on the cells of an answer."""
    return Answer(answer.points, values, cells=answer.cells)


def _slopes(answer: Answer, values: Array) -> Array:
    """Return the gradients (q, d), at the quadrature points, of a function on the cells of an answer."""
    gradients = _on(answer, values).element_quadrature(ORDER).gradients
    if gradients is None:
        raise NoValuesError("the answer has no gradient")
    return gradients


def _boundary_values(answer: Answer, problem: Problem) -> tuple[Array, Array]:
    """Return which nodes (n,) are on the boundary, and the data at all nodes (n,), zero inside."""
    nodes = _nodes(answer)
    on, values = np.zeros(len(nodes), dtype=bool), np.zeros(len(nodes))
    for piece in problem.pieces:
        here = piece.contains(nodes)
        values[here], on = piece.data(nodes[here]), on | here
    return on, values


def _why_not(trial: Trial, coarse: Answer, fine: Answer) -> str | None:
    """Return which condition of the law is not met, or None."""
    problem, unit = trial.problem, trial.posed.size
    for answer in (coarse, fine):
        if answer.mesh is None or answer.location != "point":
            return "the answer is no function on cells"
        if not abs(float(np.sum(answer.mesh.volumes())) / problem.shape.measure - 1.0) <= SAME:
            return "the cells do not fill the shape"
        data = _on(answer, _boundary_values(answer, problem)[1])
        for piece in problem.pieces:
            points = piece.sample(ON_PIECE)[0]
            if not np.max(np.abs(data.value_at(points) - piece.data(points))) <= SAME * unit:
                return f"the trial functions do not hold the data on {piece.name}"
    inside = fine.random_points(trial.seed).points
    start = _on(fine, coarse.value_at(_nodes(fine)))
    if not np.max(np.abs(start.value_at(inside) - coarse.value_at(inside))) <= SAME * unit:
        return "the meshes are not nested"
    return None


def _judge(trial: Trial) -> Finding:
    first = trial.sizes[0]
    coarse, fine = trial.answer(first), trial.answer(2 * first)
    reason = _why_not(trial, coarse, fine)
    if reason is not None:
        raise NoValuesError(reason)
    found = [_missed(trial, fine), _not_least(trial, coarse, fine)]
    if trial.posed.field is not None:
        found.append(_below(trial, fine))
    worst = max(found, key=lambda measured: measured.violation)
    return Finding(
        violation=worst.violation,
        tolerance=round_off(trial.solver),
        sizes=(2 * first,),
        history=(worst.violation,),
        points=worst.points,
        words=worst.words,
        body=worst.body,
    )


def _missed(trial: Trial, fine: Answer) -> Measurement:
    """Return by how much an answer misses its data at the nodes."""
    on, data = _boundary_values(fine, trial.problem)
    gap = np.where(on, np.abs(np.asarray(fine.values) - data), 0.0)
    worst, unit = int(np.argmax(gap)), trial.posed.size
    place = _nodes(fine)[worst]
    return Measurement(
        violation=float(gap[worst]) / unit,
        points=place[np.newaxis],
        words=f"at the boundary node {told(place)} the answer is {np.asarray(fine.values)[worst]:.6g}, "
        f"the data {data[worst]:.6g}",
        body=(f"abs(answer.value_at({[tuple(place.tolist())]})[0] - {float(data[worst])!r}) / {unit!r}",),
    )


def _not_least(trial: Trial, coarse: Answer, fine: Answer) -> Measurement:
    """Return how steep the energy still is at an answer, on the line through it and the coarser one."""
    way = np.abs(np.asarray(fine.values) - coarse.value_at(_nodes(fine)))
    slope, first = slope_of_energy(coarse, fine), trial.sizes[0]
    return Measurement(
        violation=slope,
        points=_nodes(fine)[[int(np.argmax(way))]],
        words="the energy of the answer is not the least: on the line through it and the answer with "
        f"n = {first}, whose mesh and data are contained, it changes by {slope:.2g} of its size",
        body=(
            f"coarse = {trial.call(size=first)}",
            "slope_of_energy(coarse, answer)",
        ),
    )


def _below(trial: Trial, fine: Answer) -> Measurement:
    """Return by how much the energy of an answer is less than that of the solution."""
    field = trial.posed.field
    if field is None:
        raise TypeError("a field is needed to know the least energy")
    points, weights = trial.problem.shape.quadrature(ORDER)
    least = float(weights @ np.sum(field.gradient(points) ** 2, axis=1))
    samples = _on(fine, np.asarray(fine.values)).element_quadrature(ORDER)
    slopes = _slopes(fine, np.asarray(fine.values))
    energy = float(samples.weights @ np.sum(slopes**2, axis=1))
    error = np.abs(np.asarray(fine.values) - field.value(_nodes(fine)))
    return Measurement(
        violation=max(least - energy, 0.0) / least,
        points=_nodes(fine)[[int(np.argmax(error))]],
        words=f"the integral of |grad u|^2 is {energy:.6g}, less than {least:.6g}, the least there can be",
        body=(
            f"samples = answer.element_quadrature({ORDER})",
            f"1 - samples.weights @ (samples.gradients**2).sum(axis=1) / {least!r}",
        ),
    )


DIRICHLET_PRINCIPLE = Law(
    name="Dirichlet principle",
    statement="the energy is least of all trial functions, and no less than that of the solution",
    inapplicable=_inapplicable,
    problems=_problems,
    judge=_judge,
)
