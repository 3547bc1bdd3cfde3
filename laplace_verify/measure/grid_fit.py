"""Grid convergence from four or more grids: phi = phi_0 + a h^p by least squares, and its uncertainty.

The fit minimises sum_k w_k (phi_k - phi_0 - a h_k^p)^2, once with equal weights and once with w_k ~ 1/h_k,
which trusts the fine grids more; of the two the one with the smaller standard deviation

    sigma^2 = K/(K - m) sum_k w_k (phi_k - fit_k)^2,   sum_k w_k = 1,  m parameters,

is kept. Where the order it shows cannot be believed (p < 1/2, p > 2, or values that go up and down) the best
of phi_0 + a h, phi_0 + a h^2 and, for p < 1/2, phi_0 + a h + b h^2 stands in for it. With the estimated error
e = phi_1 - phi_0 and the data range D = (max - min)/(K - 1) the uncertainty is

    sigma < D:  Fs |e| + sigma + |phi_1 - fit_1|,     else  3 sigma/D (|e| + sigma + |phi_1 - fit_1|),

with Fs = 1.25 if 1/2 <= p < 2.1 and sigma < D, else 3.

References
----------
Eca & Hoekstra 2014, "A procedure for the estimation of the numerical uncertainty of CFD calculations based
on grid refinement studies", J. Comput. Phys. 262, 104-130 (from memory, unchecked; the theoretical order is
taken as 2 there and here).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
from scipy.optimize import minimize_scalar

from laplace_verify.arrays import Array

__all__ = ["ValueFit", "fit_values"]

LOWEST, HIGHEST = 0.05, 12.0  # of the orders tried
BELIEVED = (0.5, 2.0)
TRUSTED = 2.1
SAFE, CAUTIOUS = 1.25, 3.0
TRIALS = 120


@dataclass(frozen=True, slots=True, kw_only=True)
class ValueFit:
    """Limit, order (of the free fit, None if there is none), standard deviation and uncertainty of a fit.

    `words` says which expansion was used and why.
    """

    limit: float
    order: float | None
    deviation: float
    uncertainty: float
    safety_factor: float
    behaviour: Literal["monotone", "oscillatory"]
    words: str


@dataclass(frozen=True, slots=True)
class _Expansion:
    """A fitted expansion in given powers of h: limit, weighted deviation, misfit on the finest grid."""

    powers: tuple[float, ...]
    limit: float
    deviation: float
    misfit: float


def fit_values(phi: Array, h: Array) -> ValueFit | None:
    """Return the fit to values on four or more grids, finest first; None if the values diverge.

    Parameters
    ----------
    phi, h : ndarray, shape (K,), K >= 4
        Values and spacings, finest first.
    """
    swings = bool(np.any(np.diff(phi)[:-1] * np.diff(phi)[1:] < 0))
    free = _free(phi, h)
    order = free.powers[0] if free is not None else None
    if order is None and not swings:
        return None
    if order is not None and BELIEVED[0] <= order <= BELIEVED[1] and not swings and free is not None:
        return _estimate(phi, free, order, "monotone", f"phi_0 + a h^p with p = {order:.3g}")
    if order is not None and order > BELIEVED[1] and not swings:
        kept, why = _best(phi, h, [(1.0,), (2.0,)]), f"p = {order:.3g} exceeds 2"
    else:
        kept = _best(phi, h, [(1.0,), (2.0,), (1.0, 2.0)])
        why = "the values go up and down" if swings else f"p = {order:.3g} is below 1/2"
    terms = " + ".join(f"{name} h^{power:g}" for name, power in zip("ab", kept.powers, strict=False))
    words = f"{why}: phi_0 + {terms} in place of a free order"
    return _estimate(phi, kept, order, "oscillatory" if swings else "monotone", words)


def _free(phi: Array, h: Array) -> _Expansion | None:
    """Return the best phi_0 + a h^p with p up to `HIGHEST`; None if none with p > 0 fits best."""

    def deviation(p: float) -> float:
        return _best(phi, h, [(p,)], parameters=3).deviation

    trials = np.linspace(LOWEST, HIGHEST, TRIALS)
    best = int(np.argmin([deviation(float(p)) for p in trials]))
    if best == 0:
        return None
    if best == TRIALS - 1:
        return _best(phi, h, [(HIGHEST,)], parameters=3)
    found = minimize_scalar(
        deviation, bounds=(trials[best - 1], trials[best + 1]), method="bounded", options={"xatol": 1e-10}
    )
    return _best(phi, h, [(float(found.x),)], parameters=3)


def _best(
    phi: Array, h: Array, choices: Sequence[tuple[float, ...]], parameters: int | None = None
) -> _Expansion:
    """Return the expansion and weighting with the smallest standard deviation."""
    equal, fine = np.full(len(h), 1.0 / len(h)), (1.0 / h) / (1.0 / h).sum()
    fits = [
        _expansion(phi, h, powers, weights, parameters or 1 + len(powers))
        for powers in choices
        for weights in (equal, fine)
    ]
    return min(fits, key=lambda fit: fit.deviation)


def _expansion(
    phi: Array, h: Array, powers: tuple[float, ...], weights: Array, parameters: int
) -> _Expansion:
    """Fit phi_0 + sum a_j h^p_j; `parameters` of them, an order that is free counted, are fitted."""
    design = np.column_stack([np.ones_like(h), *((h / h[-1]) ** p for p in powers)])
    root = np.sqrt(weights)[:, np.newaxis]
    solution = np.linalg.lstsq(root * design, root[:, 0] * phi, rcond=None)[0]
    misfit = phi - design @ solution
    variance = len(h) / max(len(h) - parameters, 1) * float((weights * misfit**2).sum())
    return _Expansion(powers, float(solution[0]), math.sqrt(variance), float(misfit[0]))


def _estimate(
    phi: Array,
    fit: _Expansion,
    order: float | None,
    behaviour: Literal["monotone", "oscillatory"],
    words: str,
) -> ValueFit:
    """Return the uncertainty of the value on the finest grid."""
    error, misfit = abs(float(phi[0]) - fit.limit), abs(fit.misfit)
    span = float(np.ptp(phi)) / (len(phi) - 1)
    good = fit.deviation < span
    trusted = good and order is not None and BELIEVED[0] <= order < TRUSTED and behaviour == "monotone"
    safety = SAFE if trusted else CAUTIOUS
    if good:
        uncertainty = safety * error + fit.deviation + misfit
    else:
        uncertainty = 3 * fit.deviation / span * (error + fit.deviation + misfit)
    return ValueFit(
        limit=fit.limit, order=order, deviation=fit.deviation, uncertainty=uncertainty,
        safety_factor=safety, behaviour=behaviour, words=words,
    )  # fmt: skip
