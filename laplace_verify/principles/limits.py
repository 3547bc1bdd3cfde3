"""Two ways to judge a violation: it is round-off at once, or it vanishes as the solver is refined.

*Exactly*: at the two smallest sizes the violation is at most 1e-9 of the largest boundary value, plus ten
times the declared error floor.

*In the limit*: with spacings h1 > h2 > h3 the violation v3 is round-off, or

    v3 <= (h3/h2)^(q/2) max(v1, v2),

where q <= 2 is the rate the law may count on. A solver that converges at the rate q passes with room to
spare: between h2 and h3 its violation falls by (h3/h2)^q. One whose answers approach something that
breaks the law does not: its violation tends to a constant. The exponent is halved, and the larger of two
coarse violations taken, because a violation at single sizes depends on how the points lie in the mesh;
this is a check of a law, not of an order. Before the law counts as broken, a finer size (twice the last,
1.45 times in space) must confirm it: the rule is then put to the last three sizes. (Rule derived here.)

A stochastic solver is allowed eight of its own standard errors instead, at two sizes.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.errors import AnswerError
from laplace_verify.principles.law import Finding, Trial, round_off

__all__ = [
    "Measurement",
    "between_nodes",
    "declared_or_in_the_limit",
    "exactly",
    "in_the_limit",
    "rate_of",
    "rate_of_slopes",
]

CAP = 2.0  # no law asks for more than second order
FINER = {1: 2.0, 2: 2.0, 3: 1.45}


class Measurement(NamedTuple):
    """A violation at one size, where it is, what was seen there, and lines of code that compute it again."""

    violation: float
    points: Array
    words: str
    body: tuple[str, ...]


Measure = Callable[[Trial, int], Measurement]


def exactly(trial: Trial, measure: Measure) -> Finding:
    """Judge a violation that must be round-off; the worse of two sizes is kept."""
    findings = []
    for size in trial.sizes[:2]:
        found = measure(trial, size)
        allowed = max(round_off(trial.solver), trial.noise(size))
        findings.append(_finding(found, allowed, (size,), (found.violation,)))
        if findings[-1].broken:
            break
    return max(findings, key=lambda finding: finding.severity)


def in_the_limit(trial: Trial, measure: Measure, rate: float) -> Finding:
    """Judge a violation that must vanish under refinement."""
    if trial.solver.kind == "stochastic":
        return exactly(trial, measure)
    floor = round_off(trial.solver)
    sizes, spacings, history = [], [], []
    for size in _with_confirmation(trial):
        found = measure(trial, size)
        sizes.append(size)
        spacings.append(trial.spacing(size))
        history.append(found.violation)
        if len(sizes) > 1 and not spacings[-1] < spacings[-2]:
            raise AnswerError(
                f"h must fall from size to size, got {spacings[-2]:.4g} and {spacings[-1]:.4g} at {sizes}"
            )
        allowed = max(floor, trial.noise(size))
        if len(sizes) >= 3:
            ratio = (spacings[-1] / spacings[-2]) ** (min(rate, CAP) / 2.0)
            allowed = max(allowed, ratio * float(np.max(history[-3:-1])))
            if found.violation <= allowed:
                break
    return _finding(found, allowed, tuple(sizes), tuple(history))


def declared_or_in_the_limit(law: str, trial: Trial, measure: Measure, rate: float) -> Finding:
    """Judge exactly what the solver declares as a discrete law, in the limit what it does not."""
    if law in trial.solver.discrete_laws:
        return exactly(trial, measure)
    return in_the_limit(trial, measure, rate)


def between_nodes(law: str, trial: Trial, measure: Measure) -> Finding:
    """Judge a violation made of values between nodes: exactly if the solver declares the law.

    Where the answer is constant on each cell, these values are of first order only.
    """
    measure(trial, trial.sizes[0])  # the answer tells what it is made of
    constant_on_cells = trial.answer(trial.sizes[0]).location == "cell"
    rate = min(rate_of(trial), 1.0) if constant_on_cells else rate_of(trial)
    return declared_or_in_the_limit(law, trial, measure, rate)


def rate_of_slopes(trial: Trial) -> float:
    """Return the rate to count on for gradients: the declared one in H1-semi, else one less than for values.

    0 where they need not converge.
    """
    order = trial.solver.formal_order("H1-semi")
    if order is None:
        return rate_of(trial) - 1.0 if rate_of(trial) > 1.0 else 0.0
    return CAP if isinstance(order, str) else min(float(order), CAP)


def rate_of(trial: Trial) -> float:
    """Return the rate to count on for smooth solutions: the declared order in the maximum norm, at most 2."""
    for norm in ("max", "L2", "L1"):
        order = trial.solver.formal_order(norm)
        if order is not None:
            return CAP if isinstance(order, str) else min(float(order), CAP)
    return 1.0


def _with_confirmation(trial: Trial) -> tuple[int, ...]:
    """Return the sizes of the trial and the one that must confirm a violation."""
    last = trial.sizes[-1]
    return (*trial.sizes, max(last + 1, round(FINER[trial.problem.dim] * last)))


def _finding(
    found: Measurement, allowed: float, sizes: tuple[int, ...], history: tuple[float, ...]
) -> Finding:
    return Finding(
        violation=found.violation,
        tolerance=allowed,
        sizes=sizes,
        history=history,
        points=found.points,
        words=found.words,
        body=found.body,
    )
