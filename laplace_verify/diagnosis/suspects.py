"""Ranked suspects: where to look first in a solver whose record shows that something is wrong.

Evidence is weighed on one scale from 0 to 1:

- a *feature* (a condition, a shape, a tensor): how many of the failing cases have it, and how few of the
  passing ones, less where so few cases split so by chance. 1: all failing cases have it and no passing one.
  `shared` explains it.
- a *pattern*: in what manner the failing cases fail (a wrong limit, one order lost, only the gradient).
  `patterns` explains it.
- a *place*: where the errors of the failing cases are largest and how slowly they fall there (`local`), and
  near which conditions and points the largest ones crowd (`places`).
- a *sign* in remarks and reasons: an iteration that stops early, a floor, an error constant. `signs`
  explains it; where nothing fails, these and what open cases share are all there is.
- *polynomials* that are exact under one condition and not under another. `found_degree` explains it.
- *laws* that are broken, with the simplest problem that shows it. `broken_laws` explains it.

The score ranks; it is no probability. Where one feature explains as much as another, the cases cannot tell
them apart and the text names both.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from laplace_verify.campaign.record import Record, check_record
from laplace_verify.diagnosis.broken_laws import broken_laws
from laplace_verify.diagnosis.finding import Finding
from laplace_verify.diagnosis.found_degree import missed_polynomials
from laplace_verify.diagnosis.local import slow_places
from laplace_verify.diagnosis.patterns import patterns
from laplace_verify.diagnosis.places import places
from laplace_verify.diagnosis.shared import shared_features
from laplace_verify.diagnosis.signs import signs_among_failing, signs_where_nothing_fails
from laplace_verify.measure.results import Study
from laplace_verify.measure.verdict import Verdict

__all__ = ["Suspect", "diagnose"]

_LIMIT = 8  # more suspects than this tell nothing


@dataclass(frozen=True, slots=True, kw_only=True)
class Suspect:
    """One place to look.

    Parameters
    ----------
    text : str
        What the failing cases have in common, in plain words with the counts.
    evidence : str
        The numbers behind it, and which cases.
    score : float
        From 0 to 1, for ranking; see the module for its meaning.
    case_id : str
        The smallest case that shows it: lowest dimension, then fewest unknowns; "" for a law, whose
        evidence holds a problem.
    """

    text: str
    evidence: str
    score: float
    case_id: str


def diagnose(record: Record) -> list[Suspect]:
    """Return where to look first, most telling suspect first; nothing if nothing is wrong or remarked.

    Known deviations are left out, and so are undecided studies where others fail: they say nothing about a
    mistake. Studies in which the solver broke are explained apart from those in which it fell short.

    Raises
    ------
    RecordError
        If `record` is none.
    """
    check_record(record)
    studies = [study for study in record.studies if study.known is None]
    failing = [study for study in studies if study.verdict is Verdict.FAIL]
    passing = [study for study in record.studies if study.verdict is Verdict.PASS]
    broken = [study for study in record.studies if study.verdict is Verdict.ERROR]
    ran = [study for study in record.studies if study.levels and study.verdict is not Verdict.ERROR]
    findings = signs_among_failing(studies) if failing else []
    findings += shared_features(failing, _telling(failing, passing), "failing", "passing")
    findings += patterns(failing)
    findings += _places(record, failing)
    findings += missed_polynomials(studies, bool(failing))
    findings += shared_features(broken, ran, "broken", "completed")
    if not failing and not broken:
        findings += signs_where_nothing_fails(studies)
    findings += broken_laws(record.checks)
    ranked = sorted(findings, key=lambda finding: -finding.score)[:_LIMIT]
    return [
        Suspect(
            text=finding.text,
            evidence=finding.evidence,
            score=finding.score,
            case_id=_smallest(record, finding.studies),
        )
        for finding in ranked
    ]


def _telling(failing: Sequence[Study], passing: Sequence[Study]) -> list[Study]:
    """Return the passing studies that are a contrast to the failing ones.

    Where a singular solution leaves a fraction of the declared order, or a mere decrease, a mistake that
    costs an order still passes. Such studies tell something only if another of their kind fails.
    """
    if not all(_held_to_full_rate(study) for study in failing):
        return list(passing)
    return [study for study in passing if _held_to_full_rate(study)]


def _held_to_full_rate(study: Study) -> bool:
    """Return whether a norm decides in which all of the declared order is expected."""
    orders = [study.orders[norm] for norm in study.deciding]
    return not orders or any(order.formal is not None and order.expected == order.formal for order in orders)


def _places(record: Record, failing: Sequence[Study]) -> list[Finding]:
    """Return places by local errors, and by the map of errors those that local errors do not name."""
    slow = slow_places(record, failing)
    named = {finding.place for finding in slow}
    return slow + [crowded for crowded in places(record, failing) if crowded.place not in named]


def _smallest(record: Record, studies: Sequence[Study]) -> str:
    """Return the id of the study that is cheapest to look into, "" of none."""

    def size(study: Study) -> tuple[int, int, str]:
        info = record.case(study.case_id)
        return (info.dim if info else 4, study.levels[0].unknowns if study.levels else 0, study.case_id)

    return min(studies, key=size).case_id if studies else ""
