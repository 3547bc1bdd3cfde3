"""Ranked suspects for a record in which something fails.

Three kinds of evidence are weighed on one scale from 0 to 1:

- a *feature* (a condition, a shape, a tensor): the share of the failing cases that have it less the share
  of the passing cases that have it. 1: all failing cases have it and no passing one. `shared` explains it.
- a *pattern*: the share of the failing cases that fail in the same manner (a wrong limit, one order lost,
  only the gradient). `patterns` explains it.
- a *place*: the share of the failing cases whose largest errors crowd in the same place. `places` explains
  it.

The score ranks; it is no probability. Where one feature explains as much as another, the cases cannot tell
them apart and the text names both.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from laplace_verify.campaign.record import Record, check_record
from laplace_verify.diagnosis.patterns import patterns
from laplace_verify.diagnosis.places import places
from laplace_verify.diagnosis.shared import shared_features
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
        The smallest case that shows it: lowest dimension, then fewest unknowns.
    """

    text: str
    evidence: str
    score: float
    case_id: str


def diagnose(record: Record) -> list[Suspect]:
    """Return where to look first, most telling suspect first; nothing if no study fails or breaks.

    Known deviations and undecided studies are left out: they say nothing about a mistake. Studies in which
    the solver broke are explained apart from those in which it fell short.

    Raises
    ------
    RecordError
        If `record` is none.
    """
    check_record(record)
    failing = [study for study in record.studies if study.verdict is Verdict.FAIL and study.known is None]
    passing = [study for study in record.studies if study.verdict is Verdict.PASS]
    broken = [study for study in record.studies if study.verdict is Verdict.ERROR]
    ran = [study for study in record.studies if study.levels and study.verdict is not Verdict.ERROR]
    findings = shared_features(failing, passing, "failing", "passing")
    findings += patterns(failing)
    findings += places(record, failing)
    findings += shared_features(broken, ran, "broken", "completed")
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


def _smallest(record: Record, studies: Sequence[Study]) -> str:
    """Return the id of the study that is cheapest to look into."""

    def size(study: Study) -> tuple[int, int, str]:
        info = record.case(study.case_id)
        return (info.dim if info else 4, study.levels[0].unknowns if study.levels else 0, study.case_id)

    return min(studies, key=size).case_id
