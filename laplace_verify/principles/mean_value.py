"""Mean value.

If u is harmonic in a neighbourhood of a closed ball, its value at the centre is the mean over the sphere,
in the plane over the circle, on a line over the two ends:

    u(c) = mean of u over |x - c| = r.

(Gauss 1840; Gilbarg & Trudinger, Elliptic Partial Differential Equations of Second Order, 2nd edition,
theorem 2.1; from memory, unchecked.)

Conditions of validity: K is a number; any boundary conditions; values can be had at any point, from a
function or from cells. A bare cloud of nodes says nothing on a circle: not applicable.

Tolerance: the mean is taken by the trapezoidal rule with 64 points on circles and by 8 Gauss points times
16 on spheres, which is exact for harmonic polynomials of degree 15 and less. The fields drawn are smooth,
so |mean - u_h(c)|, the largest over the eight deepest of 64 seeded points with r = 0.6 of the distance to
the boundary, must vanish *in the limit* (see `limits`) at the solver's declared order in the maximum
norm; at order one if the answer is constant on each cell, whose value between centres is only as good as
that.
"""

from __future__ import annotations

import numpy as np
from hypothesis import strategies as st

from laplace_verify.arrays import Array
from laplace_verify.principles import strategies
from laplace_verify.principles.law import Finding, Law, Trial
from laplace_verify.principles.limits import Measurement, in_the_limit, rate_of
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reading import values_at
from laplace_verify.solvers import Adapter

__all__ = ["MEAN_VALUE", "sphere"]

ON_CIRCLE = 64
GAUSS, AROUND = 8, 16
DRAWN_CENTRES, CENTRES = 64, 8
SHARE = 0.6  # of the distance to the boundary
DEGREE = 4


def sphere(centre: Array, radius: float) -> tuple[Array, Array]:
    """Return points (m, d) on the sphere (circle, pair of ends) and weights (m,) with sum one.

    >>> import numpy as np
    >>> points, weights = sphere(np.array([1.0, 0.0]), 2.0)
    >>> round(float(weights @ points[:, 0] ** 2), 12)  # 1 + 2^2 / 2
    3.0
    """
    dim = len(centre)
    if dim == 1:
        return centre + radius * np.array([[-1.0], [1.0]]), np.array([0.5, 0.5])
    if dim == 2:
        angle = 2.0 * np.pi * np.arange(ON_CIRCLE) / ON_CIRCLE
        ring = np.stack([np.cos(angle), np.sin(angle)], axis=1)
        return centre + radius * ring, np.full(ON_CIRCLE, 1.0 / ON_CIRCLE)
    z, weights = np.polynomial.legendre.leggauss(GAUSS)
    angle = 2.0 * np.pi * np.arange(AROUND) / AROUND
    level, turn = (part.ravel() for part in np.meshgrid(z, angle, indexing="ij"))
    across = np.sqrt(1.0 - level**2)
    unit = np.stack([across * np.cos(turn), across * np.sin(turn), level], axis=1)
    return centre + radius * unit, np.repeat(weights / (2.0 * AROUND), AROUND)


def _inapplicable(solver: Adapter) -> str | None:
    if "scalar" not in solver.conductivity:
        return f"{solver.name} does not solve problems whose conductivity is a number, as the law asks"
    return strategies.beyond(solver)


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    kinds = solver.conditions & set(strategies.KINDS)
    return strategies.posed(solver.dims, solver.shapes, kinds, degree=DEGREE)


def _spheres(trial: Trial) -> tuple[Array, Array]:
    """Return centres (m, d) and radii (m,) of spheres that fit inside, away from the declared clearance."""
    shape = trial.problem.shape
    centres = shape.sample(DRAWN_CENTRES, seed=trial.seed)
    depth = shape.distance(centres)
    chosen = np.argsort(-depth, kind="stable")[:CENTRES]
    radii = SHARE * np.maximum(depth[chosen] - trial.solver.clearance * shape.extent, 0.0)
    return centres[chosen], radii


def _measure(trial: Trial, size: int) -> Measurement:
    centres, radii = _spheres(trial)
    spheres = [sphere(centre, radius) for centre, radius in zip(centres, radii.tolist(), strict=True)]
    weights = np.array([w for _, w in spheres])
    values = values_at(trial, size, np.concatenate([centres, *(points for points, _ in spheres)]))
    middle, around = values[: len(centres)], values[len(centres) :].reshape(weights.shape)
    means = np.sum(weights * around, axis=1)
    gap = np.abs(means - middle)
    worst, unit = int(np.argmax(gap)), trial.posed.size
    centre, radius = centres[worst].tolist(), float(radii[worst])
    place = tuple(round(c, 6) for c in centre)
    return Measurement(
        violation=float(np.max(gap)) / unit,
        points=centres[worst : worst + 1],
        words=f"the value at {place} is {middle[worst]:.6g}, the mean at the distance {radius:.4g} from it "
        f"{means[worst]:.6g}",
        body=(
            f"centre, radius = np.array({centre}), {radius!r}",
            "points, weights = sphere(centre, radius)",
            f"abs(weights @ answer.value_at(points) - answer.value_at([centre])[0]) / {unit!r}",
        ),
    )


def _judge(trial: Trial) -> Finding:
    _measure(trial, trial.sizes[0])  # the answer tells what it is made of
    constant_on_cells = trial.answer(trial.sizes[0]).location == "cell"
    return in_the_limit(trial, _measure, min(rate_of(trial), 1.0) if constant_on_cells else rate_of(trial))


MEAN_VALUE = Law(
    name="mean value",
    statement="the value at a point is the mean over every circle or sphere about it that fits inside",
    inapplicable=_inapplicable,
    problems=_problems,
    judge=_judge,
)
