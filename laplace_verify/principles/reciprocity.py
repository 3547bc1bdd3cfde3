"""Reciprocity: Green's second identity for two solutions.

If u and v solve Laplace's equation in a neighbourhood of a closed ball, then over its surface

    integral of (u n . grad v - v n . grad u) = 0

(Green 1828; Gilbarg & Trudinger, Elliptic Partial Differential Equations of Second Order, 2nd edition,
equation 2.11, from memory, unchecked). Unlike the mean value it asks for the slopes of two answers as well.

Conditions of validity: K a number; the answers have values between nodes and gradients that must converge at
the declared order. A stochastic solver is not judged.

Tolerance: r |mean of (u_h n . grad v_h - v_h n . grad u_h)| / (max|u| max|v|) over the spheres of `spheres`,
*exactly* if the solver declares "reciprocity" among its ``discrete_laws``, else *in the limit* at the rate of
gradients, at most one (see `limits`).
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from hypothesis import strategies as st

from laplace_verify.arrays import Array
from laplace_verify.principles import strategies
from laplace_verify.principles.law import Finding, Law, NoValuesError, Trial
from laplace_verify.principles.limits import Measurement, declared_or_in_the_limit, rate_of_slopes
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reading import gradients_at, values_at
from laplace_verify.principles.spheres import spheres_inside
from laplace_verify.solvers import Adapter

__all__ = ["RECIPROCITY"]

DEGREE = 3


def _inapplicable(solver: Adapter) -> str | None:
    if solver.kind == "stochastic":
        return f"{solver.name} is stochastic: its standard error is that of values, not of gradients"
    return strategies.beyond_numbers(solver)


def _with_second(pair: tuple[Posed, Posed]) -> Posed:
    first, second = pair
    return replace(first, beside={"second": second}, note=f"; second: {second.words()}")


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    drawn = strategies.posed_for(solver, materials={"scalar"}, degree=DEGREE)
    return strategies.pairs(drawn, degree=DEGREE).map(_with_second)


def _measure(trial: Trial, size: int) -> Measurement:
    centres, radii, points, weights = spheres_inside(trial)
    second = trial.companions["second"]
    outward = points - np.repeat(centres, weights.shape[1], axis=0)  # r n

    def slopes(one: Trial) -> Array:
        along: Array = np.sum(gradients_at(one, size, points) * outward, axis=1)
        return along

    u, v = values_at(trial, size, points), values_at(second, size, points)
    exchanged = u * slopes(second) - v * slopes(trial)
    means = np.sum(weights * exchanged.reshape(weights.shape), axis=1)
    worst, unit = int(np.argmax(np.abs(means))), trial.posed.size * second.posed.size
    centre, radius = centres[worst].tolist(), float(radii[worst])
    return Measurement(
        violation=abs(float(means[worst])) / unit,
        points=centres[worst : worst + 1],
        words=f"over the sphere of radius {radius:.4g} about {tuple(round(c, 6) for c in centre)} "
        f"the mean of u n . grad v - v n . grad u is {means[worst] / radius:.6g}",
        body=(
            f"centre, radius = np.array({centre}), {radius!r}",
            "points, weights = sphere(centre, radius)",
            "u, v = answer.value_at(points), second.value_at(points)",
            "du, dv = (((points - centre) * a.gradient_at(points)).sum(axis=1) for a in (answer, second))",
            f"abs(weights @ (u * dv - v * du)) / {unit!r}",
        ),
    )


def _judge(trial: Trial) -> Finding:
    if not trial.answer(trial.sizes[0], spheres_inside(trial)[2]).has_gradient:
        raise NoValuesError("the answer has no gradient")
    rate = min(rate_of_slopes(trial), 1.0)
    if rate <= 0.0:
        raise NoValuesError("at the declared order gradients need not converge")
    return declared_or_in_the_limit(RECIPROCITY.name, trial, _measure, rate)


RECIPROCITY = Law(
    name="reciprocity",
    statement="two solutions and their slopes obey Green's second identity on every sphere inside",
    inapplicable=_inapplicable,
    problems=_problems,
    judge=_judge,
)
