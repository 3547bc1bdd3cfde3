"""The order theory lets us expect: the formal order after the regularity of solution and domain.

Notation: p formal order, k = p - 1 the degree of a finite element, s = regularity.solution (u - smooth ~ r^s
at the worst singular point, inf if smooth, 0 at a jump of the data), d = regularity.domain (the smallest
exponent pi/opening, or pi/(2 opening) where Dirichlet meets Neumann or Robin, over all corners). The order
decides only where a theorem proves it for the norm; elsewhere it is None or shown without deciding.

Derivation for the grid methods with 0 < s < inf: the truncation error h^p r^(s-2-p) leaves a local error
h^p r^(s-p) for r > h, capped by h^s at the corner, and a pollution h^(s+min(d,p)) r^(-d) carried by the dual
corner function. Their maximum is O(h^s); integrated over two dimensions (edges in space have codimension two)
the squares give O(h^min(p, s+min(d,p), s+1)) in L2 and the moduli O(h^min(p, s+min(d,p), s+2)) in L1. Where
the local terms tie, p = s + 2 in L1, the integral of h^p/r^2 brings a factor ln(1/h), whose local order
1/ln(1/h) is about 1/4 on affordable grids: that much less is expected.

References
----------
Gerschgorin 1930, Z. angew. Math. Mech. 10, 373-382; Forsythe & Wasow 1960 (maximum norm, smooth solution).
Laasonen 1957, "On the degree of convergence of discrete approximations for the solutions of the Dirichlet
problem", and Bramble, Hubbard & Zlamal 1968, SIAM J. Numer. Anal. 5 (corners: s at the corner, 2 pi/opening
inside). Wasow 1957 and Bramble, Hubbard & Thomee 1969 (discontinuous data). Strang & Fix 1973, Babuska 1970
and Ciarlet 1978 (finite elements). Apel, Nicaise & Pfefferer 2016, "Discretization of the Poisson equation
with non-smooth data", IMA J. Numer. Anal. (jumps: L2 only). Eymard, Gallouet & Herbin 2000, "Finite volume
methods". Trefethen 2000, "Spectral methods in Matlab". All from memory, unchecked.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Protocol

from laplace_verify.measure.interfaces import at_interface
from laplace_verify.measure.results import Rate

__all__ = ["Expectation", "RegularityLike", "expected_order", "is_functional", "smallest_loss"]

Formal = Callable[[str], float | str | None]
FUNCTIONALS = ("flux:", "quantity:", "probe:")

LOGARITHM = 0.25  # local order of 1/ln(1/h), h from 1/16 to 1/64 of the extent
SMOOTH_GRID = "order {p:g} for smooth solutions by the discrete maximum principle (Gerschgorin 1930)"
CORNER_GRID = (
    "min(p, s) = {rate:.3g} in the maximum norm at a singularity r^{s:.3g} (Laasonen 1957; Bramble, "
    "Hubbard & Zlamal 1968)"
)
JUMP_GRID = "no rate in the maximum norm where boundary data jump (Wasow 1957)"
CEA = "min(k, s) = {rate:g} by best approximation (Cea; Strang & Fix 1973; Babuska 1970)"
NITSCHE = "{rate:g} = min(k, s) + min(1, d), at most k + 1, by duality (Aubin-Nitsche; Strang & Fix 1973)"
JUMP_ELEMENT = "{rate:g} in L2 for data with jumps, up to a logarithm (Apel, Nicaise & Pfefferer 2016)"
NO_ENERGY = "a solution with jumping data has no finite energy, so theory promises no rate in {norm}"
NO_DEGREE = "no formal order is declared for this norm"
OPEN = "no rate is proven for this norm and this kind of method"


class RegularityLike(Protocol):
    """The two exponents that bound a rate."""

    @property
    def solution(self) -> float:
        """Exponent s of the solution, inf if smooth."""

    @property
    def domain(self) -> float:
        """Exponent d of the domain, inf without corners."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Expectation:
    """What is expected in one norm, fixed before the run, and the theorem behind it (`basis`).

    `claimed` means that the author of the solver expects it, not theory.
    """

    norm: str
    formal: float | str | None
    expected: Rate
    decides: bool
    basis: str
    claimed: bool = False


def is_functional(norm: str) -> bool:
    """Return whether `norm` is a single number, whose signed error may pass through zero."""
    return norm.startswith(FUNCTIONALS)


def smallest_loss(expected: float) -> float:
    """Return the loss of order that a verdict is built to see: half the expected order, from 1/2 to 1.

    A first-order boundary closure in a second-order scheme (loss 1) and a method that stops converging
    where order 1/2 is expected (loss 1/2) are both caught. The tolerance is half of it.

    >>> smallest_loss(2.0), smallest_loss(2/3)
    (1.0, 0.5)
    """
    return min(1.0, max(expected / 2, 0.5))


def expected_order(
    kind: str,
    norm: str,
    formal: Formal,
    regularity: RegularityLike,
) -> Expectation:
    """Return the expected order of a method of `kind` in `norm`.

    Parameters
    ----------
    kind : str
        "finite difference", "finite volume", "finite element", "spectral", "boundary element", "stochastic"
        or "other".
    norm : str
        A norm of the study, such as "max" or "flux:top".
    formal : callable
        norm -> declared order, "exponential" or None.
    regularity : object with `solution` and `domain`
        The exponents s and d of the case.

    Examples
    --------
    >>> from types import SimpleNamespace
    >>> corner = SimpleNamespace(solution=2/3, domain=2/3)
    >>> found = expected_order("finite element", "L2", lambda norm: 2, corner)
    >>> round(found.expected, 4), found.decides
    (1.3333, True)
    """
    declared = formal(norm)
    if norm.startswith("probe:"):
        basis = "read off between nodes, so its error need not fall evenly: shown, does not decide"
        return Expectation(norm=norm, formal=declared, expected=None, decides=False, basis=basis)
    interface = getattr(regularity, "interface", "")
    rule = _exponential if declared == "exponential" else RULES.get(kind, _other)
    expected, decides, basis = rule(norm, declared, formal, regularity)
    if interface and expected is not None:
        expected, decides, basis = at_interface(kind, norm, expected, basis, interface, decides=decides)
    return Expectation(norm=norm, formal=declared, expected=expected, decides=decides, basis=basis)


Rule = Callable[[str, float | str | None, Formal, RegularityLike], tuple[Rate, bool, str]]


def _finite_difference(
    norm: str, declared: float | str | None, _: Formal, regularity: RegularityLike
) -> tuple[Rate, bool, str]:
    """Return rate, decides, basis on a grid, in the maximum norm and the integral norms."""
    if not isinstance(declared, int | float):
        return None, False, NO_DEGREE
    p, s, d = float(declared), regularity.solution, regularity.domain
    if norm == "H1-semi" or norm == "energy" or is_functional(norm):
        return _declared_only(norm, p, s)
    if math.isinf(s):
        return p, norm in ("max", "L1", "L2"), SMOOTH_GRID.format(p=p)
    if norm == "max" or norm.startswith("trace:"):
        if not s > 0:
            return None, False, JUMP_GRID
        rate = min(p, s)
        return rate, norm == "max", CORNER_GRID.format(rate=rate, s=s)
    return _integrated(norm, p, s, d)


def _integrated(norm: str, p: float, s: float, d: float) -> tuple[Rate, bool, str]:
    """Return the rate of a grid method in L1 or L2 at a corner (module docstring)."""
    if norm not in ("L1", "L2") or not s >= 0:
        return None, False, OPEN
    local = s + (1.0 if norm == "L2" else 2.0)
    rate = min(p, s + min(d, p), local)
    basis = (
        f"min(p, s + min(d, p), s + {local - s:g}) = {rate:.3g} in {norm}: local error and pollution of a "
        f"singularity r^{s:.3g} (Laasonen 1957; Bramble, Hubbard & Zlamal 1968; integration derived here)"
    )
    if norm == "L1" and rate == p == local:
        return rate - LOGARITHM, True, f"{basis}; less {LOGARITHM} for a logarithm"
    return rate, True, basis


def _finite_volume(
    norm: str, declared: float | str | None, formal: Formal, regularity: RegularityLike
) -> tuple[Rate, bool, str]:
    """Return the grid rates; only integral norms at the method's own points decide."""
    expected, decides, basis = _finite_difference(norm, declared, formal, regularity)
    if norm in ("L1", "L2") and decides:
        return expected, True, f"{basis}; discrete norms of cell averages (Eymard, Gallouet & Herbin 2000)"
    return (
        expected,
        False,
        f"{basis}; shown, not proven for finite volumes" if expected is not None else basis,
    )


def _finite_element(
    norm: str, declared: float | str | None, formal: Formal, regularity: RegularityLike
) -> tuple[Rate, bool, str]:
    """Return the rates of conforming elements of degree k = p - 1."""
    p = formal("L2")
    if not isinstance(p, int | float):
        return None, False, NO_DEGREE
    k, s, d = float(p) - 1.0, regularity.solution, regularity.domain
    if norm in ("H1-semi", "energy"):
        if not s > 0:
            return None, False, NO_ENERGY.format(norm=norm)
        rate = min(k, s)
        return rate, True, CEA.format(rate=rate)
    if norm in ("L1", "L2") and s >= 0:
        rate = min(k + 1, min(k, s) + min(1.0, d))
        basis = (NITSCHE if s > 0 else JUMP_ELEMENT).format(rate=rate)
        return (rate, True, basis) if norm == "L2" else (rate, False, f"not below the L2 rate: {basis}")
    if norm == "max" and s > 0:
        return min(k + 1, s), False, "up to logarithms and on smooth meshes; shown, does not decide"
    if norm.startswith("flux:") and math.isinf(s) and d > 1:
        return k, True, f"{k:g}: the gradient converges uniformly on convex domains (Rannacher & Scott 1982)"
    if is_functional(norm) and isinstance(declared, int | float):
        return _declared_only(norm, float(declared), s)
    return None, False, OPEN


def _declared_only(norm: str, declared: float, s: float) -> tuple[Rate, bool, str]:
    """Return the author's own order where the solution is smooth: it depends on the recovery."""
    if is_functional(norm) and math.isinf(s):
        return declared, True, f"declared for smooth solutions: {declared:g}"
    return None, False, "depends on how the solver recovers it: shown, does not decide"


def _exponential(
    norm: str, declared: float | str | None, _: Formal, regularity: RegularityLike
) -> tuple[Rate, bool, str]:
    """Return geometric convergence for smooth solutions, plain convergence otherwise."""
    del declared
    s = regularity.solution
    if math.isinf(s):
        basis = "geometric convergence for analytic solutions (Trefethen 2000)"
        return "exponential", norm in ("max", "L2"), basis
    if norm == "L2" or (norm == "max" and s > 0):
        basis = "the solution is not analytic: theory promises convergence but claims no more"
        return "decrease", True, basis
    return None, False, OPEN


def _boundary_element(
    norm: str, declared: float | str | None, _: Formal, regularity: RegularityLike
) -> tuple[Rate, bool, str]:
    """Return the declared order inside for smooth solutions; next to the boundary nothing is proven."""
    if not isinstance(declared, int | float):
        return None, False, NO_DEGREE
    if math.isinf(regularity.solution):
        basis = (
            "declared order of the potential inside (quadrature next to the boundary may cost some in max)"
        )
        return float(declared), norm == "L2", basis
    if norm == "L2":
        return "decrease", True, "density with corner singularities: convergence, but no rate without grading"
    return None, False, OPEN


def _stochastic(
    norm: str, declared: float | str | None, _: Formal, regularity: RegularityLike
) -> tuple[Rate, bool, str]:
    """Return 1/2 in the number of samples (central limit theorem)."""
    del declared, regularity
    if norm == "L2":
        return 0.5, True, "1/2 in the number of samples (central limit theorem)"
    return None, False, OPEN


def _other(
    norm: str, declared: float | str | None, _: Formal, regularity: RegularityLike
) -> tuple[Rate, bool, str]:
    """Return the declared order for smooth solutions: there is no theory for an unnamed kind of method."""
    if not isinstance(declared, int | float):
        return None, False, NO_DEGREE
    if math.isinf(regularity.solution):
        return (
            float(declared),
            norm == "L2" or is_functional(norm),
            f"declared for smooth solutions: {declared:g}",
        )
    if norm == "L2":
        return "decrease", True, "singular solution and a method of no named kind: convergence, but no rate"
    return None, False, OPEN


RULES: dict[str, Rule] = {
    "finite difference": _finite_difference,
    "finite volume": _finite_volume,
    "finite element": _finite_element,
    "boundary element": _boundary_element,
    "spectral": _boundary_element,  # of algebraic order; the exponential ones have their own rule
    "stochastic": _stochastic,
    "other": _other,
}
