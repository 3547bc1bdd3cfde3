"""Conductivity scaling.

div(c K grad u) = 0 is div(K grad u) = 0 for every number c > 0. With Dirichlet values as they are, flux
densities n . K grad u and Robin's alpha c times as large, the solution is the same and every flux is c times
as large (by the definition of the flux; no source needed). It shows conductivities that are forgotten, or
counted twice, and data taken for a slope instead of a flux.

Conditions of validity: any bounded shape, conditions, K. Fluxes are compared if both answers report them.

Tolerance: the larger of max|v_h - u_h| / max|u| and max|G - c F| / (c k max|u| L^(d-2)), F and G the fluxes
through a piece, k the largest entry of K, L the extent of the shape: *exactly* if the solver declares
"conductivity scaling" among its ``discrete_laws``, else *in the limit* at the declared order, at most one
(see `limits`).
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from hypothesis import strategies as st

from laplace_verify.principles import strategies
from laplace_verify.principles.law import Finding, Law, Trial
from laplace_verify.principles.limits import Measurement, declared_or_in_the_limit, rate_of
from laplace_verify.principles.posed import Conductivity, Posed
from laplace_verify.principles.side_by_side import largest, together
from laplace_verify.solvers import Adapter

__all__ = ["CONDUCTIVITY_SCALING", "largest_entry"]

FACTOR = 4.0
DEGREE = 3


def largest_entry(conductivity: Conductivity) -> float:
    """Return K, or the largest entry of its matrix."""
    return float(np.max(np.abs(np.asarray(conductivity))))


def _scaled(posed: Posed) -> Posed:
    k = posed.conductivity
    more: Conductivity = (
        tuple(tuple(FACTOR * entry for entry in row) for row in k) if isinstance(k, tuple) else FACTOR * k
    )
    conditions = {
        name: kind if isinstance(kind, str) else FACTOR * kind for name, kind in posed.conditions.items()
    }
    scaled = replace(posed, conductivity=more, conditions=conditions)
    return replace(posed, beside={"scaled": scaled}, note=f"; K, fluxes and alpha {FACTOR:g} times as large")


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    return strategies.posed_for(solver, degree=DEGREE).map(_scaled)


def _measure(trial: Trial, size: int) -> Measurement:
    points, plain, beside = together(trial, size)
    scaled, unit = beside["scaled"], trial.posed.size
    values = largest(
        points,
        np.abs(scaled - plain),
        unit,
        "at {place} the answer is {plain}, and {scaled} with " + f"{FACTOR:g} times the conductivity",
        "abs(scaled.value_at(x) - answer.value_at(x))[0]",
        {"plain": plain, "scaled": scaled},
    )
    through = _fluxes(trial, size, unit)
    return through if through is not None and not through.violation <= values.violation else values


def _fluxes(trial: Trial, size: int, unit: float) -> Measurement | None:
    """Return by how much the fluxes miss their factor, None if they are not reported or subject to chance."""
    before, after = trial.answer(size).fluxes, trial.companions["scaled"].answer(size).fluxes
    if trial.solver.kind == "stochastic" or not before or not after:
        return None
    shape = trial.problem.shape
    size_of_flux = FACTOR * largest_entry(trial.posed.conductivity) * unit * shape.extent ** (shape.dim - 2)
    gaps = {name: abs(after[name] - FACTOR * before[name]) for name in before if name in after}
    if not gaps:
        return None
    name = max(gaps, key=lambda piece: gaps[piece])
    piece = next(piece for piece in trial.problem.pieces if piece.name == name)
    return Measurement(
        violation=gaps[name] / size_of_flux,
        points=piece.sample(1)[0],
        words=f"the flux through {name} is {before[name]:.6g}, and {after[name]:.6g} with {FACTOR:g} times "
        "the conductivity",
        body=(f"abs(scaled.fluxes[{name!r}] - {FACTOR:g} * answer.fluxes[{name!r}]) / {size_of_flux!r}",),
    )


def _judge(trial: Trial) -> Finding:
    rate = min(rate_of(trial), 1.0)
    return declared_or_in_the_limit(CONDUCTIVITY_SCALING.name, trial, _measure, rate)


CONDUCTIVITY_SCALING = Law(
    name="conductivity scaling",
    statement="c times the conductivity, with c times the fluxes, leaves the solution as it is",
    inapplicable=strategies.beyond,
    problems=_problems,
    judge=_judge,
)
