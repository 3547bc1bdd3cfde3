"""Laws of harmonic functions as checks on a solver, and Hypothesis strategies for problems."""

from laplace_verify.principles import strategies
from laplace_verify.principles.check import check_principle
from laplace_verify.principles.law import Law
from laplace_verify.principles.laws import LAWS
from laplace_verify.principles.results import Check

__all__ = ["LAWS", "Check", "Law", "check_principle", "strategies"]
