"""Strict slope at a boundary extremum (Hopf's lemma).

Where a solution that is no constant takes its largest value M, at a point p of a smooth piece, it rises
towards p with a slope n . grad u > 0: it never arrives flat. If the ball of radius R about y touches the
boundary at p, Harnack's inequality for M - u says by how much: at the distance s from p along the normal

    M - u(p - s n) >= s R^(d-2) / (2 R - s)^(d-1) (M - u(y)),    so n . grad u(p) >= (M - u(y)) / (2^(d-1) R).

(Hopf 1952; Gilbarg & Trudinger, Elliptic Partial Differential Equations of Second Order, 2nd edition, lemma
3.4, and problem 2.6 for the constants; from memory, unchecked. On a line it is an equality, in the plane and
in space the tests compare with Poisson's kernel itself.) For a smallest value the same holds with signs
changed.

Conditions of validity: Dirichlet conditions on the whole boundary, K a number; values between nodes. Data:
m - k |x - p|^2 or m + k |x - p|^2 with p on a piece, away from its ends, so that the extremum is where it is
known to be.

Tolerance: with s one cell, at least the declared clearance and at most R/2 (R/4 if chance is to be told
apart, or if the answer is constant on each cell), what the left side lacks, times R/s and relative to the
largest boundary value, *exactly* if the solver declares "slope at a boundary extremum" among its
``discrete_laws``; else *in the limit* at order one at most, one less than the declared order where s shrinks
with the cells (see `limits`).
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from hypothesis import strategies as st

from laplace_verify.arrays import Array
from laplace_verify.geometry import Shape
from laplace_verify.principles import strategies
from laplace_verify.principles._shapes import shape_of_kind
from laplace_verify.principles.law import Finding, Law, NoValuesError, Trial
from laplace_verify.principles.limits import (
    Measurement,
    declared_or_in_the_limit,
    rate_of,
    rate_of_slopes,
)
from laplace_verify.principles.maximum_principle import dirichlet_needed
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reading import deep_points, told, values_at
from laplace_verify.solvers import Adapter

__all__ = ["BOUNDARY_SLOPE", "Peak", "harnack", "touching_radius"]

LEVELS = st.integers(1, 9)
CURVATURES = st.sampled_from((1, 2, -1, -2))
PLACES = st.sampled_from((0.5, 0.25, 0.75))
MOST_PIECES = 6
LARGEST, SHRINKING = 0.4, 0.8  # radii of balls tried, first in units of the extent, then in steps
STEPS = 40
TOUCHING = 1e-9
ASKED = 6
BEYOND_CLEARANCE = 1.01
DIGITS = 12


class Peak(NamedTuple):
    """Where the data are largest (sign 1) or smallest (-1), with outward normal and value."""

    point: Array
    normal: Array
    sign: float
    value: float


def harnack(distance: float, radius: float, dim: int) -> float:
    """Return s R^(d-2) / (2 R - s)^(d-1): the share of M - u(y) that is left at the distance s from p.

    >>> harnack(0.5, 1.0, 1), harnack(1.0, 1.0, 2)
    (0.5, 1.0)
    """
    return distance * radius ** (dim - 2) / (2.0 * radius - distance) ** (dim - 1)


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    return _peaked(strategies.drawable(solver.dims, solver.shapes))


@st.composite
def _peaked(draw: st.DrawFn, found: list[str]) -> Posed:
    """Draw a shape, a point on its boundary and data whose extremum is there."""
    shape = draw(shape_of_kind(found))
    pieces = tuple(shape.pieces)
    piece = pieces[draw(st.integers(0, MOST_PIECES - 1)) % len(pieces)]
    level, k, t = draw(LEVELS), draw(CURVATURES), draw(PLACES)
    place = np.round(piece.point(np.full((1, 2), t) if shape.dim == 3 else np.array([t])), DIGITS) + 0.0
    offsets = [
        f"({axis} {'-' if c > 0 else '+'} {abs(c):.{DIGITS}g})**2" if c else f"{axis}**2"
        for axis, c in zip("xyz", place[0].tolist(), strict=False)
    ]
    size = "" if abs(k) == 1 else f"{abs(k)} * "
    return Posed(
        shape=shape,
        conditions={},
        data=f"{level} {'-' if k > 0 else '+'} {size}({' + '.join(offsets)})",
        note=f"; {'largest' if k > 0 else 'smallest'} at {tuple(place[0].tolist())} on {piece.name}",
        drawn=Peak(place[0], piece.normals(place)[0], 1.0 if k > 0 else -1.0, float(level)),
    )


def touching_radius(shape: Shape, peak: Peak) -> float:
    """Return the radius of a ball inside that touches the boundary at the extremum."""
    radius = LARGEST * shape.extent
    for _ in range(STEPS):
        centre = (peak.point - radius * peak.normal)[np.newaxis]
        if shape.contains(centre)[0] and shape.distance(centre)[0] >= radius * (1.0 - TOUCHING):
            return radius
        radius *= SHRINKING
    raise NoValuesError("no ball inside touches the boundary at the extremum")


def _at_cells(trial: Trial) -> bool:
    """Whether a point one cell from the boundary has a value of its own."""
    first = trial.answer(trial.sizes[0])
    return trial.solver.kind != "stochastic" and first.location == "point" and rate_of_slopes(trial) > 0.0


def _measure(trial: Trial, size: int) -> Measurement:
    shape, peak = trial.problem.shape, trial.posed.drawn
    radius = touching_radius(shape, peak)
    middle, fixed = peak.point - radius * peak.normal, radius / 4.0
    distance = fixed
    others = deep_points(shape, trial.seed)[:ASKED]  # two points alone are no answer
    trial.answer(size, np.array([middle, peak.point - fixed * peak.normal, *others]))
    if _at_cells(trial):
        clearance = BEYOND_CLEARANCE * trial.solver.clearance * shape.extent
        distance = min(max(trial.spacing(size), clearance), radius / 2.0)
    near = peak.point - distance * peak.normal
    values = values_at(trial, size, np.array([middle, near]))
    drops = peak.sign * (peak.value - values)
    share = harnack(distance, radius, shape.dim)
    unit = trial.posed.size * distance / radius
    return Measurement(
        violation=max(float(share * drops[0] - drops[1]), 0.0) / unit,
        points=near[np.newaxis],
        words=f"{distance:.4g} inwards from {told(peak.point)}, where the data are {peak.value:.6g}, the "
        f"answer is {values[1]:.6g}; it is {values[0]:.6g} at the centre {told(middle)} of a ball that "
        f"touches the boundary there, so the drop must be at least {share * abs(drops[0]):.6g}",
        body=(
            f"drops = {peak.sign:g} * ({peak.value!r} - answer.value_at({[middle.tolist(), near.tolist()]}))",
            f"max({share!r} * drops[0] - drops[1], 0) / {unit!r}",
        ),
    )


def _judge(trial: Trial) -> Finding:
    _measure(trial, trial.sizes[0])  # the answer tells what it is made of
    rate = min(rate_of_slopes(trial) if _at_cells(trial) else rate_of(trial), 1.0)
    return declared_or_in_the_limit(BOUNDARY_SLOPE.name, trial, _measure, rate)


BOUNDARY_SLOPE = Law(
    name="slope at a boundary extremum",
    statement="the solution rises towards its largest value on a smooth piece with a slope above zero",
    inapplicable=dirichlet_needed,
    problems=_problems,
    judge=_judge,
)
