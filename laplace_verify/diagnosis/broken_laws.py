"""Laws of harmonic functions that the solver breaks, with what the simplest problem that shows it contains.

The search of a law ends at the simplest problem it can find, so that a condition, a tensor or a shape that is
still in it is needed to break the law. Score: 0.4, so that whatever the cases tell comes first.
"""

from __future__ import annotations

from collections.abc import Sequence

from laplace_verify.diagnosis.finding import Finding, listed
from laplace_verify.measure.verdict import Verdict
from laplace_verify.principles.results import Check

__all__ = ["broken_laws"]

_WEIGHT = 0.4
_MEANS = {
    "constants reproduced": "rows of the matrix that do not add up, or boundary values that do not arrive",
    "affine fields reproduced": "the scale of fluxes, cross terms of a tensor, or weights at corners",
    "maximum principle": "a wrong sign or weight in the matrix, or boundary values that do not arrive",
    "resistances in series": "conductivities of the wrong side of an interface, or a mean of them",
    "no interior extremum": "the equation inside, or oscillation",
    "mean value": "the equation inside",
    "superposition": "clipping, limiters or absolute thresholds",
    "comparison": "a wrong sign, or data that do not arrive",
    "symmetry": "what depends on place, size or the order of sides",
    "conductivity scaling": "conductivity forgotten, or counted twice",
    "flux balance": "the sign or scale of fluxes and gradients handed back",
    "repeatability": "state kept between solves, or an iteration that stops early",
    "reciprocity": "gradients handed back, or the equation inside",
    "largest gradient on the boundary": "gradients handed back, or the equation inside",
    "slope at a boundary extremum": "the sign of gradients handed back, or rows next to the boundary",
    "Dirichlet principle": "quadrature, or a matrix that is not that of the energy",
    "tighter tolerance": "an iteration that stops early",
    "steady state": "marching that stops before the steady state",
}
_NEEDS = (
    "Neumann condition", "Robin condition", "only Dirichlet conditions", "tensor conductivity",
    "conductivity other than 1",
)  # fmt: skip


def broken_laws(checks: Sequence[Check]) -> list[Finding]:
    """Return a finding for each law that FAILs, in the order of the checks."""
    return [_finding(check) for check in checks if check.verdict is Verdict.FAIL]


def _finding(check: Check) -> Finding:
    """Say what it takes to break a law."""
    needs = [name for name in _NEEDS if check.features.get(name) is True]
    means = _MEANS.get(check.law)
    return Finding(
        text=f"The law {check.law!r} is broken"
        + (f", and the simplest problem that shows it has {listed(needs)}" if needs else "")
        + (f"; typical of {means}" if means else ""),
        evidence=check.reason,
        score=_WEIGHT,
        studies=(),
    )
