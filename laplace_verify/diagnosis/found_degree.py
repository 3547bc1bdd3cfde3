"""Polynomials that come out exact under one condition and not under another.

The degree a scheme reproduces is found from the record: the largest degree of harmonic polynomial up to which
every case with Dirichlet data, flat pieces and one scalar conductivity comes out to round-off at the solver's
own points, at every size. Where a polynomial of no higher degree is missed, there is no discretisation error
to hide behind, so that the conditions of those cases are suspect. For degree 1 theory says that a sound
scheme reproduces it under Dirichlet and Neumann conditions on flat pieces (the patch test); higher degrees,
Robin conditions and tensors with cross terms, which sound schemes may integrate by a rule that is not exact,
are hints only.

Source: the patch test: Strang & Fix 1973, section 4.2; from memory, unchecked.
"""

from __future__ import annotations

from collections.abc import Sequence

from laplace_verify.diagnosis.finding import Finding, case_list
from laplace_verify.diagnosis.shared import shared_features
from laplace_verify.measure.results import Study
from laplace_verify.measure.series import FLOOR_MARGIN, ROUND_OFF
from laplace_verify.measure.verdict import Verdict

__all__ = ["found_degree", "missed_polynomials"]

_ALONE, _BESIDE = 0.85, 0.4  # score where nothing fails, and where failing cases tell more
_PROVEN = 1  # degree up to which theory speaks
_ALLOWED = FLOOR_MARGIN * ROUND_OFF
_BENT = ("curved boundary", "interface", "coordinates with a symmetry")
_UNSURE = ("Robin condition", "off-diagonal conductivity")


def found_degree(studies: Sequence[Study]) -> int | None:
    """Return the degree up to which polynomials with Dirichlet data come out exact, None if none does."""
    exact: dict[int, bool] = {}
    for study in studies:
        degree = _degree(study)
        if degree is not None and study.features.get("only Dirichlet conditions") is True:
            exact[degree] = exact.get(degree, True) and _is_exact(study)
    wrong = min((degree for degree, holds in exact.items() if not holds), default=None)
    right = [degree for degree, holds in exact.items() if holds and (wrong is None or degree < wrong)]
    return max(right, default=None)


def missed_polynomials(studies: Sequence[Study], failing: bool) -> list[Finding]:
    """Return which conditions miss polynomials that come out exact with Dirichlet data.

    Hints are given only if something is `failing`.
    """
    found = found_degree(studies)
    if found is None:
        return []
    low = [study for study in studies if _at_most(study, found)]
    missed = [study for study in low if not _is_exact(study)]
    good = [study for study in low if _is_exact(study)]
    sure = [study for study in missed if _at_most(study, _PROVEN) and not _is_unsure(study)]
    if sure:
        return [_finding(sure, good, min(found, _PROVEN), _BESIDE if failing else _ALONE)]
    return [_finding(missed, good, found, _BESIDE)] if missed and failing else []


def _finding(missed: Sequence[Study], good: Sequence[Study], degree: int, score: float) -> Finding:
    """Put into words which cases are not exact and what they have in common."""
    apart = shared_features(missed, good, "inexact", "exact")
    why = f": {apart[0].text}" if apart else ""
    worst = max(missed, key=_miss)
    return Finding(
        text=f"Harmonic polynomials of degree up to {degree} come out to round-off with Dirichlet data, but "
        f"not in {len(missed)} {'case' if len(missed) == 1 else 'cases'} with other data{why}",
        evidence=f"largest error at the solver's own points over the largest |u|: {_miss(worst):.1e} "
        f"({worst.case_id}), allowed {_ALLOWED:.0e}; cases: {case_list(missed)}",
        score=score,
        studies=tuple(missed),
    )


def _degree(study: Study) -> int | None:
    """Return the degree of a study's polynomial; None where exactness is not to be expected or measured."""
    degree = study.features.get("harmonic polynomial")
    if isinstance(degree, bool) or not isinstance(degree, int | float) or study.verdict is Verdict.ERROR:
        return None
    if not study.levels or any(level.nodal is None for level in study.levels):
        return None
    return None if any(study.features.get(name) is True for name in _BENT) else int(degree)


def _at_most(study: Study, degree: int) -> bool:
    """Return whether a study has a polynomial of that degree or less that may be expected to be exact."""
    own = _degree(study)
    return own is not None and own <= degree


def _miss(study: Study) -> float:
    """Return the largest relative error at the solver's own points over all levels."""
    return max(level.nodal for level in study.levels if level.nodal is not None)


def _is_exact(study: Study) -> bool:
    return _miss(study) <= _ALLOWED


def _is_unsure(study: Study) -> bool:
    """Return whether a sound scheme need not reproduce the polynomial of this study."""
    return any(study.features.get(name) is True for name in _UNSURE)
