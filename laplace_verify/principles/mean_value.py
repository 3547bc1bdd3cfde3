"""Mean value.

If u is harmonic in a neighbourhood of a closed ball, its value at the centre is the mean over the sphere and
over the ball, in the plane over circle and disc, on a line over the two ends and the segment:

    u(c) = mean of u over |x - c| = r = mean of u over |x - c| < r.

(Gauss 1840; Gilbarg & Trudinger, Elliptic Partial Differential Equations of Second Order, 2nd edition,
theorem 2.1; from memory, unchecked.)

Conditions of validity: K is a number; any boundary conditions; values can be had at any point, from a
function or from cells. A bare cloud of nodes says nothing on a circle: not applicable.

Tolerance: the mean is taken by the trapezoidal rule with 64 points on circles and by 8 Gauss points times
16 on spheres, which is exact for harmonic polynomials of degree 15 and less, and over the radius by 3 Gauss
points. The fields drawn are smooth, so |mean - u_h(c)|, the largest over the eight deepest of 64 seeded
points with r = 0.6 of the distance to the boundary, must vanish *in the limit* (see `limits`) at the solver's
declared order in the maximum norm; at order one if the answer is constant on each cell, whose value between
centres is only as good as that.
"""

from __future__ import annotations

import numpy as np
from hypothesis import strategies as st

from laplace_verify.principles import strategies
from laplace_verify.principles.law import Finding, Law, Trial
from laplace_verify.principles.limits import Measurement, between_nodes
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reading import values_at
from laplace_verify.principles.spheres import ball, sphere, spheres_inside
from laplace_verify.solvers import Adapter

__all__ = ["MEAN_VALUE"]

DEGREE = 4
MEANS = {"sphere": sphere, "ball": ball}


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    return strategies.posed_for(solver, materials={"scalar"}, degree=DEGREE)


def _measure(trial: Trial, size: int) -> Measurement:
    centres, radii, _, _ = spheres_inside(trial)
    places = list(zip(centres, radii.tolist(), strict=True))
    rules = [(name, *mean(*place)) for name, mean in MEANS.items() for place in places]
    values = values_at(trial, size, np.concatenate([centres, *(points for _, points, _ in rules)]))
    ends = np.cumsum([len(centres), *(len(points) for _, points, _ in rules)])
    parts = np.split(values, ends[:-1])
    means = [float(weights @ part) for (_, _, weights), part in zip(rules, parts[1:], strict=True)]
    gap = np.abs(np.array(means) - np.tile(values[: len(centres)], len(MEANS)))
    worst, unit = int(np.argmax(gap)), trial.posed.size
    name, which = rules[worst][0], worst % len(centres)
    centre, radius = centres[which].tolist(), float(radii[which])
    place = tuple(round(c, 6) for c in centre)
    return Measurement(
        violation=float(np.max(gap)) / unit,
        points=centres[which : which + 1],
        words=f"the value at {place} is {values[which]:.6g}, the mean over the {name} of radius {radius:.4g} "
        f"about it {means[worst]:.6g}",
        body=(
            f"centre, radius = np.array({centre}), {radius!r}",
            f"points, weights = {name}(centre, radius)",
            f"abs(weights @ answer.value_at(points) - answer.value_at([centre])[0]) / {unit!r}",
        ),
    )


def _judge(trial: Trial) -> Finding:
    return between_nodes(MEAN_VALUE.name, trial, _measure)


MEAN_VALUE = Law(
    name="mean value",
    statement="the value at a point is the mean over every sphere and ball (circle, disc) about it inside",
    inapplicable=strategies.beyond_numbers,
    problems=_problems,
    judge=_judge,
)
