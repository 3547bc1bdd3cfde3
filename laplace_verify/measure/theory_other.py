"""The rates of exponential and stochastic methods, and of methods of no named kind.

References
----------
Trefethen 2000, "Spectral methods in Matlab" (geometric convergence for analytic solutions; from memory,
unchecked). The central limit theorem for the 1/2 of stochastic methods.
"""

from __future__ import annotations

from laplace_verify.measure.smoothness import Method, Promise, Smoothness, is_functional
from laplace_verify.measure.theory_grids import OPEN

__all__ = ["exponential", "other", "stochastic"]

GEOMETRIC = "geometric convergence for analytic solutions (Trefethen 2000)"
NOT_ANALYTIC = "the solution is not analytic: theory promises convergence but claims no more"
UNNAMED = "singular solution and a method of no named kind: convergence, but no rate"
ROOT = "1/2 in the number of samples (central limit theorem)"


def exponential(norm: str, smoothness: Smoothness) -> Promise:
    """Return geometric convergence for smooth solutions, plain convergence otherwise."""
    if smoothness.smooth:
        return Promise("exponential", norm in ("max", "L2"), GEOMETRIC)
    if norm == "L2" or (norm == "max" and smoothness.solution > 0):
        return Promise("decrease", True, NOT_ANALYTIC)
    return Promise(None, False, OPEN)


def stochastic(norm: str) -> Promise:
    """Return 1/2 in the number of samples."""
    return Promise(0.5, True, ROOT) if norm == "L2" else Promise(None, False, OPEN)


def other(norm: str, declared: float, _: Method, smoothness: Smoothness) -> Promise:
    """Return the declared order for smooth solutions: there is no theory for an unnamed kind of method."""
    if smoothness.smooth:
        return Promise(
            declared, norm == "L2" or is_functional(norm), f"declared for smooth solutions: {declared:g}"
        )
    return Promise("decrease", True, UNNAMED) if norm == "L2" else Promise(None, False, OPEN)
