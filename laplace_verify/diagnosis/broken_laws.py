"""Laws of harmonic functions that the solver breaks, with what the simplest problem that shows it contains.

The search of a law ends at the simplest problem it can find, so that a condition, a tensor or a shape that is
still in it is needed to break the law. Score: 0.4, so that whatever the cases tell comes first.
"""

from __future__ import annotations

import re
from collections.abc import Sequence

from laplace_verify.diagnosis.finding import Finding, listed
from laplace_verify.measure.verdict import Verdict
from laplace_verify.principles.results import Check

__all__ = ["broken_laws"]

_WEIGHT = 0.4
_MARK = "The simplest problem found: "
_MEANS = {
    "constants reproduced": "rows of the matrix that do not add up, or boundary values that do not arrive",
    "affine fields reproduced": "the scale of fluxes, cross terms of a tensor, or weights at corners",
    "maximum principle": "a wrong sign or weight in the matrix, or boundary values that do not arrive",
    "mean value": "the equation inside",
}
_NEEDS = (
    (r"\bneumann\b", "Neumann condition"),
    (r"\brobin\b", "Robin condition"),
    (r"\ball Dirichlet\b", "only Dirichlet conditions"),
    (r"\bK = \[", "tensor conductivity"),
    (r"\bK = ", "conductivity other than 1"),
)


def broken_laws(checks: Sequence[Check]) -> list[Finding]:
    """Return a finding for each law that FAILs, in the order of the checks."""
    return [_finding(check) for check in checks if check.verdict is Verdict.FAIL]


def _finding(check: Check) -> Finding:
    """Say what it takes to break a law."""
    problem = check.reason.partition(_MARK)[2]
    needs = [words for pattern, words in _NEEDS if re.search(pattern, problem)]
    means = _MEANS.get(check.law)
    return Finding(
        text=f"The law {check.law!r} is broken"
        + (f", and the simplest problem that shows it has {listed(needs)}" if needs else "")
        + (f"; typical of {means}" if means else ""),
        evidence=check.reason,
        score=_WEIGHT,
        studies=(),
    )
