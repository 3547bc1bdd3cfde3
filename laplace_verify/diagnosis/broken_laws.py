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
    "mean value": "the equation inside",
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
