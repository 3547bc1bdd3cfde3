"""Largest gradient on the boundary.

If u is harmonic, |grad u|^2 is subharmonic, because its Laplacian is 2 |Hessian of u|^2 >= 0. So the largest
slope in any part of the shape is taken on the boundary of that part (Protter & Weinberger, Maximum Principles
in Differential Equations, 1967, chapter 2, section 3 for subharmonic functions; Sperb, Maximum Principles and
their Applications, 1981, chapter 5, for gradients; both from memory, unchecked).

The part looked at is the shape without a rim half a cell wide, at least the declared clearance: points of
every piece, moved in along the normal by that much, stand for its boundary. Slopes that are damped next to
the boundary, and spikes inside, break the law; a wrong factor common to all slopes does not.

Conditions of validity: K a number, any conditions; data of a harmonic polynomial of degree 2 to 4, whose
slope is largest at some points only; the answer has gradients that must converge at the declared order. A
stochastic solver is not judged.

Tolerance: (largest |grad u_h| at the 100 deepest of 300 seeded points - largest in the rim) times the extent
of the shape, relative to the largest boundary value, must vanish *in the limit* at the rate of gradients, at
most one (see `limits`); *exactly* if the solver declares "largest gradient on the boundary" among its
``discrete_laws``. With 200 points a side (in space a face) the largest slope in the rim is missed by less
than what lies between it and the slopes at points so deep.
"""

from __future__ import annotations

import numpy as np
from hypothesis import strategies as st

from laplace_verify.arrays import Array
from laplace_verify.principles import strategies
from laplace_verify.principles.law import Finding, Law, NoValuesError, Trial
from laplace_verify.principles.limits import Measurement, declared_or_in_the_limit, rate_of_slopes
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reading import deep_points, gradients_at, told
from laplace_verify.solvers import Adapter

__all__ = ["LARGEST_GRADIENT"]

DEGREE = 4
ON_PIECE = 200
OF_A_CELL = 0.5
BEYOND_CLEARANCE = 1.01


def _inapplicable(solver: Adapter) -> str | None:
    if solver.kind == "stochastic":
        return f"{solver.name} is stochastic: its standard error is that of values, not of gradients"
    return strategies.beyond_numbers(solver)


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    return strategies.posed_for(solver, materials={"scalar"}, degree=DEGREE)


def _rim(trial: Trial, depth: float) -> Array:
    """Return points (m, d) of every piece, moved in along the normal by a depth, that are inside."""
    moved = []
    for piece in trial.problem.pieces:
        points, normals, _ = piece.sample(ON_PIECE)
        moved.append(points - depth * normals)
    points = np.concatenate(moved)
    shape = trial.problem.shape
    inside: Array = points[shape.contains(points) & (shape.distance(points) >= depth * (1.0 - 1e-9))]
    return inside


def _slopes(gradients: Array) -> Array:
    """Return |grad u|, shape (m,)."""
    slopes: Array = np.sqrt(np.sum(gradients**2, axis=1))
    return slopes


def _measure(trial: Trial, size: int) -> Measurement:
    deep, shape = deep_points(trial.problem.shape, trial.seed), trial.problem.shape
    trial.answer(size, deep)
    clearance = BEYOND_CLEARANCE * trial.solver.clearance * shape.extent
    near = _rim(trial, max(OF_A_CELL * trial.spacing(size), clearance))
    near = near[~np.isnan(trial.answer(size).value_at(near))]  # the mesh may end before a curved piece
    if not len(near):
        raise NoValuesError("half a cell from the boundary no point is left inside")
    inside = _slopes(gradients_at(trial, size, deep))
    outside = _slopes(gradients_at(trial, size, near))
    worst, highest = int(np.argmax(inside)), int(np.argmax(outside))
    unit = trial.posed.size / shape.extent
    places = [tuple(deep[worst].tolist()), tuple(near[highest].tolist())]
    return Measurement(
        violation=max(float(inside[worst] - outside[highest]), 0.0) / unit,
        points=deep[worst : worst + 1],
        words=f"at {told(deep[worst])} the slope is {inside[worst]:.6g}, half a cell from "
        f"the boundary nowhere more than {outside[highest]:.6g}",
        body=(
            f"slopes = np.linalg.norm(answer.gradient_at({places}), axis=1)",
            f"max(slopes[0] - slopes[1], 0) / {unit!r}",
        ),
    )


def _judge(trial: Trial) -> Finding:
    if not trial.answer(trial.sizes[0], deep_points(trial.problem.shape, trial.seed)).has_gradient:
        raise NoValuesError("the answer has no gradient")
    rate = min(rate_of_slopes(trial), 1.0)
    if rate <= 0.0:
        raise NoValuesError("at the declared order gradients need not converge")
    return declared_or_in_the_limit(LARGEST_GRADIENT.name, trial, _measure, rate)


LARGEST_GRADIENT = Law(
    name="largest gradient on the boundary",
    statement="no slope inside is larger than the largest next to the boundary",
    inapplicable=_inapplicable,
    problems=_problems,
    judge=_judge,
)
