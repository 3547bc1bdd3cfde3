"""What bounds a rate: the method as its author declares it, and the smoothness of solution and shape."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import NamedTuple

from laplace_verify.measure.results import Rate

__all__ = ["FUNCTIONALS", "Method", "Promise", "Smoothness", "is_functional"]

FUNCTIONALS = ("flux:", "quantity:", "probe:")
LOGARITHM = 0.25  # local order of 1/ln(1/h), h from 1/16 to 1/64 of the extent


@dataclass(frozen=True, slots=True, kw_only=True)
class Method:
    """A method in the terms on which theory depends.

    `formal` maps a norm to the declared order, "exponential" or None. `clearance` > 0 means that errors are
    taken at a fixed distance from the boundary. `formulation` ("direct", "indirect") and `discretisation`
    ("collocation", "Galerkin") belong to boundary elements; None where not declared.
    """

    kind: str
    formal: Callable[[str], float | str | None]
    clearance: float = 0.0
    formulation: str | None = None
    discretisation: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Smoothness:
    """The exponents that bound a rate.

    Attributes
    ----------
    solution
        s: u - smooth ~ r^s at the worst singular point; inf if smooth, 0 at a jump of the data.
    domain
        d: the smallest exponent of the corners, pi/opening or pi/(2 opening); inf without corners.
    complement
        c: the same for the other side of the boundary, whose openings are 2 pi - opening; None in space.
    interface
        "" or how interfaces lie: "aligned", "oblique", "curved".
    """

    solution: float
    domain: float
    complement: float | None = None
    interface: str = ""

    @property
    def smooth(self) -> bool:
        """Whether the solution has no singular point."""
        return math.isinf(self.solution)

    @property
    def logarithmic(self) -> bool:
        """Whether the singular term is r^s log r: a power with a whole exponent would be smooth."""
        return not self.smooth and self.solution > 0 and self.solution == round(self.solution)

    def capped(self, rate: float) -> float:
        """Return min(rate, s), less what a logarithm costs where r^s log r is the cap."""
        if self.logarithmic and rate >= self.solution:
            return self.solution - LOGARITHM
        return min(rate, self.solution)


class Promise(NamedTuple):
    """What a theorem promises in one norm, whether that decides a verdict, and the theorem."""

    expected: Rate
    decides: bool
    basis: str


def is_functional(norm: str) -> bool:
    """Return whether `norm` is a single number, whose signed error may pass through zero."""
    return norm.startswith(FUNCTIONALS)


def declared_only(norm: str, declared: float, smoothness: Smoothness) -> Promise:
    """Return the author's own order of a functional where the solution is smooth: recovery decides it."""
    if is_functional(norm) and smoothness.smooth:
        return Promise(declared, True, f"declared for smooth solutions: {declared:g}")
    return Promise(None, False, "depends on how the solver recovers it: shown, does not decide")
