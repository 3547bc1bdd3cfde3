"""Measure a solver's answers against the exact solution: errors, observed and expected order, verdict."""

from laplace_verify.measure.grid_convergence import GridConvergence, grid_convergence
from laplace_verify.measure.results import ErrorMap, Level, Order, Study
from laplace_verify.measure.study import study
from laplace_verify.measure.verdict import Verdict

__all__ = ["ErrorMap", "GridConvergence", "Level", "Order", "Study", "Verdict", "grid_convergence", "study"]
