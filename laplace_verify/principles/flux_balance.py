"""Flux balance.

A solution has no sources: by the divergence theorem

    integral of n . K grad u over the whole boundary = 0,    and over every closed surface inside

(Gauss; Gilbarg & Trudinger, Elliptic Partial Differential Equations of Second Order, 2nd edition, equation
2.10, from memory, unchecked).

Conditions of validity: any bounded shape and conditions, any K. The answer reports the fluxes through all
pieces, or has a gradient; what it has is looked at. A stochastic solver is not judged.

Tolerance: with U the largest boundary value, k the largest entry of K and L the extent of the shape, both
|sum of the fluxes| / (k U L^(d-2)) and, over the spheres of `spheres`, r |mean of n . K grad u_h| / (k U)
are judged *exactly* if the solver declares "flux balance" among its ``discrete_laws``. Else *in the limit*
(see `limits`): the sum at the declared order, the means at the rate of gradients, both at most one.
"""

from __future__ import annotations

import numpy as np
from hypothesis import strategies as st

from laplace_verify.principles import strategies
from laplace_verify.principles.conductivity_scaling import largest_entry
from laplace_verify.principles.law import Finding, Law, NoValuesError, Trial
from laplace_verify.principles.limits import (
    Measurement,
    declared_or_in_the_limit,
    rate_of,
    rate_of_slopes,
)
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reading import gradients_at
from laplace_verify.principles.spheres import spheres_inside
from laplace_verify.solvers import Adapter

__all__ = ["FLUX_BALANCE"]

DEGREE = 3


def _inapplicable(solver: Adapter) -> str | None:
    if solver.kind == "stochastic":
        return f"{solver.name} is stochastic: its standard error is that of values, not of fluxes"
    return strategies.beyond(solver)


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    return strategies.posed_for(solver, degree=DEGREE)


def _through_the_boundary(trial: Trial, size: int) -> Measurement:
    """Return the net flux through the boundary."""
    fluxes = trial.answer(size, spheres_inside(trial)[2]).fluxes or {}
    shape, net = trial.problem.shape, sum(fluxes.values())
    unit = largest_entry(trial.posed.conductivity) * trial.posed.size * shape.extent ** (shape.dim - 2)
    return Measurement(
        violation=abs(net) / unit,
        points=np.concatenate([piece.sample(1)[0] for piece in trial.problem.pieces]),
        words="the fluxes through the pieces, "
        + ", ".join(f"{name} {flux:.6g}" for name, flux in fluxes.items())
        + f", add up to {net:.6g}",
        body=(f"abs(sum(answer.fluxes.values())) / {unit!r}",),
    )


def _through_spheres(trial: Trial, size: int) -> Measurement:
    """Return the largest net flux through the spheres inside."""
    centres, radii, points, weights = spheres_inside(trial)
    tensor = trial.problem.tensor
    fluxes = gradients_at(trial, size, points) @ tensor
    offsets = points - np.repeat(centres, weights.shape[1], axis=0)
    along = np.sum(fluxes * offsets, axis=1).reshape(weights.shape) / radii[:, np.newaxis]
    means = np.sum(weights * along, axis=1)
    worst = int(np.argmax(np.abs(radii * means)))
    unit = largest_entry(trial.posed.conductivity) * trial.posed.size
    centre, radius = centres[worst].tolist(), float(radii[worst])
    return Measurement(
        violation=abs(float(radius * means[worst])) / unit,
        points=centres[worst : worst + 1],
        words=f"the mean flux density through the sphere of radius {radius:.4g} about "
        f"{tuple(round(c, 6) for c in centre)} is {means[worst]:.6g}",
        body=(
            f"centre, radius = np.array({centre}), {radius!r}",
            "points, weights = sphere(centre, radius)",
            f"flux = answer.gradient_at(points) @ np.array({tensor.tolist()})",
            f"abs(weights @ ((points - centre) * flux).sum(axis=1)) / {unit!r}",
        ),
    )


def _judge(trial: Trial) -> Finding:
    name, first, points = FLUX_BALANCE.name, trial.sizes[0], spheres_inside(trial)[2]
    answer, found = trial.answer(first, points), []
    if set(answer.fluxes or {}) >= {piece.name for piece in trial.problem.pieces}:
        rate = min(rate_of(trial), 1.0)
        found.append(declared_or_in_the_limit(name, trial, _through_the_boundary, rate))
    if answer.has_gradient and not any(finding.broken for finding in found):
        rate = min(rate_of_slopes(trial), 1.0)
        if rate > 0.0:
            found.append(declared_or_in_the_limit(name, trial, _through_spheres, rate))
    if not found:
        raise NoValuesError(
            "the answer lacks the flux through some piece, and a gradient that must converge at this order"
        )
    return max(found, key=lambda finding: finding.severity)


FLUX_BALANCE = Law(
    name="flux balance",
    statement="the net flux through the boundary, and through every closed surface inside, is zero",
    inapplicable=_inapplicable,
    problems=_problems,
    judge=_judge,
)
