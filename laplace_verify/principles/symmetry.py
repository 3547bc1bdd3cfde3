"""Symmetry.

Laplace's equation does not change under reflections, rotations, shifts and changes of scale (Gilbarg &
Trudinger, Elliptic Partial Differential Equations of Second Order, 2nd edition, problem 2.1, from memory,
unchecked): the solution of the moved problem is the moved solution. It shows what depends on where a shape
lies, how large it is, or in which order sides and axes come, when one of two alike is wrong.

Conditions of validity: K a number; data of an affine field plus a harmonic polynomial. Every motion takes a
shape to one of its own kind; discs, rings, polygons, balls and shells are turned obliquely too, L-shapes and
sectors, whose corner is the origin, are enlarged only. See `motions`.

Tolerance: the largest difference at corresponding points well inside, relative to the largest boundary
value, *exactly* if the solver declares "symmetry" among its ``discrete_laws``, else *in the limit* at the
declared order (see `limits`): the picture of a mesh need not be the mesh of the picture.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from hypothesis import strategies as st

from laplace_verify.principles import strategies
from laplace_verify.principles.law import Finding, Law, Trial
from laplace_verify.principles.limits import Measurement, between_nodes
from laplace_verify.principles.motions import Motion
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reading import deep_points, values_at
from laplace_verify.solvers import Adapter

__all__ = ["SYMMETRY"]

DEGREE = 3


def _with_picture(drawn: tuple[Posed, Posed, Motion]) -> Posed:
    posed, picture, motion = drawn
    return replace(posed, beside={"moved": picture}, note=f"; {motion.words}", drawn=motion)


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    drawn = strategies.posed_for(solver, materials={"scalar"}, degree=DEGREE, waves=False)
    return strategies.transformed(drawn).map(_with_picture)


def _measure(trial: Trial, size: int) -> Measurement:
    points = deep_points(trial.problem.shape, trial.seed)
    motion: Motion = trial.posed.drawn
    answer = trial.answer(size, points)
    if answer.kind == "cloud" and answer.points is not None:
        points = answer.points
    images = motion.points(points)
    values, pictures = values_at(trial, size, points), values_at(trial.companions["moved"], size, images)
    gap = np.abs(values - pictures)
    worst, unit = int(np.argmax(gap)), trial.posed.size
    place, image = points[worst].tolist(), images[worst].tolist()
    return Measurement(
        violation=float(gap[worst]) / unit,
        points=points[worst : worst + 1],
        words=f"at {tuple(round(c, 6) for c in place)} the answer is {values[worst]:.6g}, and "
        f"{pictures[worst]:.6g} at the corresponding point of the problem {motion.words}",
        body=(f"abs(answer.value_at([{place}]) - moved.value_at([{image}]))[0] / {unit!r}",),
    )


def _judge(trial: Trial) -> Finding:
    return between_nodes(SYMMETRY.name, trial, _measure)


SYMMETRY = Law(
    name="symmetry",
    statement="a reflected, turned, shifted or enlarged problem has the picture of the solution",
    inapplicable=strategies.beyond_numbers,
    problems=_problems,
    judge=_judge,
)
