"""No interior extremum.

A solution of div(K grad u) = 0 that is not a constant takes neither a largest nor a smallest value inside,
not even a local one (strong maximum principle: Gilbarg & Trudinger, Elliptic Partial Differential Equations
of Second Order, 2nd edition, theorem 2.2 for K = 1 and theorem 3.5; from memory, unchecked). Two ways:

- *among neighbours*: an inner node whose value exceeds that of every node it shares a cell with, or falls
  short of it, does so by a height that must vanish;
- *on circles and spheres*: no value well inside a ball exceeds the largest on its surface. With 64 points on
  a circle, 8 Gauss points times 16 on a sphere, it is enough to compare with these: up to a term of degree 48
  in r/R, in space 12, u(x) is a mean of the values there with the weights of Poisson's kernel, which are
  positive (derived here). The points x looked at have r/R = 1/2, in space 1/4, and the centre.

Unlike the maximum principle it needs no data, so that every kind of condition is tried.

Conditions of validity: K a number; data of a harmonic polynomial of degree 2 to 4, so that the solution is no
constant; the answer has cells with values at nodes, or values between nodes.

Tolerance: if the solver declares "no interior extremum" among its ``discrete_laws`` (every value is a mean of
its neighbours: M-matrix schemes), the height among neighbours *exactly* at two sizes. Otherwise the larger of
both, relative to the largest boundary value, *in the limit* at the declared order (see `limits`).
"""

from __future__ import annotations

from collections.abc import Iterable
from itertools import permutations

import numpy as np
from hypothesis import strategies as st

from laplace_verify.arrays import Array, IntArray
from laplace_verify.principles import strategies
from laplace_verify.principles.law import Finding, Law, NoValuesError, Trial
from laplace_verify.principles.limits import Measurement, between_nodes, exactly
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reading import told, values_at
from laplace_verify.principles.spheres import sphere, spheres_inside
from laplace_verify.solvers import Adapter

__all__ = ["NO_INTERIOR_EXTREMUM"]

DEGREE = 4
DEPTH = {1: 0.5, 2: 0.5, 3: 0.25}  # radius at which values are compared with those on the sphere
INNER = 0.5  # of h: nodes nearer to the boundary count as on it


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    return strategies.posed_for(solver, materials={"scalar"}, degree=DEGREE)


def _highest_neighbours(cells: Iterable[IntArray], values: Array) -> IntArray:
    """Return for every node the one with the largest value that shares a cell (m, k) with it, else -1."""
    rank = np.empty(len(values), dtype=np.int64)
    rank[np.argsort(values, kind="stable")] = np.arange(len(values))
    best = np.full(len(values), -1, dtype=np.int64)
    for nodes in cells:
        for i, j in permutations(range(nodes.shape[1]), 2):
            np.maximum.at(best, nodes[:, i], rank[nodes[:, j]])
    return np.where(best < 0, -1, np.argsort(rank)[best])


def _among_neighbours(trial: Trial, size: int) -> Measurement | None:
    """Return by how much an inner node sticks out of its neighbours; None without cells."""
    answer = trial.answer(size, spheres_inside(trial)[2])
    if answer.cells is None or answer.location != "point":
        return None
    points, values = np.asarray(answer.points), np.asarray(answer.values)
    inside = trial.problem.shape.distance(points) > INNER * trial.spacing(size)
    height, node, other, sign = 0.0, int(np.argmax(inside)), int(np.argmax(inside)), 1.0
    for way in (1.0, -1.0):
        near = _highest_neighbours(answer.cells.values(), way * values)
        over = np.where(inside & (near >= 0), way * (values - values[near]), -np.inf)
        if over.max(initial=-np.inf) > height:
            node, sign, height = int(np.argmax(over)), way, float(over.max())
            other = int(near[node])
    unit, place = trial.posed.size, told(points[node])
    return Measurement(
        violation=height / unit,
        points=points[node : node + 1],
        words=f"at the node {place} the answer is {values[node]:.6g}, "
        f"{'larger' if sign > 0 else 'smaller'} than at every neighbour, the nearest of "
        f"which is {values[other]:.6g}",
        body=(
            f"values = answer.value_at({[tuple(points[i].tolist()) for i in (node, other)]})",
            f"{'' if sign > 0 else '-'}(values[0] - values[1]) / {unit!r}",
        ),
    )


def _on_spheres(trial: Trial, size: int) -> Measurement:
    """Return by how much a value inside a sphere leaves the range of the values on it."""
    centres, radii, around, weights = spheres_inside(trial)
    depth = DEPTH[trial.problem.dim]
    inner = np.concatenate([sphere(c, depth * r)[0] for c, r in zip(centres, radii.tolist(), strict=True)])
    values = values_at(trial, size, np.concatenate([centres, inner, around]))
    middle, rest = np.split(values, [len(centres)])
    within, on = (part.reshape(weights.shape) for part in np.split(rest, 2))
    within = np.column_stack([middle, within])
    over = np.maximum(within - on.max(axis=1, keepdims=True), on.min(axis=1, keepdims=True) - within)
    ball, column = np.unravel_index(int(np.argmax(over)), over.shape)
    spots = np.concatenate([centres[ball : ball + 1], sphere(centres[ball], depth * float(radii[ball]))[0]])
    spot, unit = spots[column], trial.posed.size
    centre, radius = centres[ball].tolist(), float(radii[ball])
    return Measurement(
        violation=max(float(over[ball, column]), 0.0) / unit,
        points=spot[np.newaxis],
        words=f"at {told(spot)} the answer is {within[ball, column]:.6g}, on the "
        f"sphere of radius {radius:.4g} about {told(centres[ball])} it lies between "
        f"{on[ball].min():.6g} and {on[ball].max():.6g}",
        body=(
            f"points, _ = sphere(np.array({centre}), {radius!r})",
            f"inner, on = answer.value_at({[tuple(spot.tolist())]})[0], answer.value_at(points)",
            f"max(inner - on.max(), on.min() - inner, 0) / {unit!r}",
        ),
    )


def _nodes(trial: Trial, size: int) -> Measurement:
    found = _among_neighbours(trial, size)
    if found is None:
        raise NoValuesError("the answer has no cells that tell which nodes are neighbours")
    return found


def _both(trial: Trial, size: int) -> Measurement:
    nodes, spheres = _among_neighbours(trial, size), _on_spheres(trial, size)
    return spheres if nodes is None or not spheres.violation < nodes.violation else nodes


def _judge(trial: Trial) -> Finding:
    if NO_INTERIOR_EXTREMUM.name in trial.solver.discrete_laws:
        return exactly(trial, _nodes)
    return between_nodes(NO_INTERIOR_EXTREMUM.name, trial, _both)


NO_INTERIOR_EXTREMUM = Law(
    name="no interior extremum",
    statement="no value inside is the largest or the smallest of those around it",
    inapplicable=strategies.beyond_numbers,
    problems=_problems,
    judge=_judge,
)
