"""Solvers: what they declare, how they are called, and what they give back."""

from laplace_verify.solvers.adapter import Adapter, Refused, adapt
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.loading import load_solver

__all__ = ["Adapter", "Answer", "Refused", "adapt", "load_solver"]
