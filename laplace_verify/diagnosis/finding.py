"""What each kind of evidence hands to the ranking."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from laplace_verify.measure.results import Study

__all__ = ["Finding", "case_list", "counted", "listed"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Finding:
    """One observation on a group of studies; `score` from 0 to 1, `place` in words if it names one."""

    text: str
    evidence: str
    score: float
    studies: tuple[Study, ...]
    place: str = ""


def case_list(studies: Sequence[Study], limit: int = 6) -> str:
    """Return the ids of the studies, a long list cut short."""
    return listed([study.case_id for study in studies], limit)


def listed(words: Iterable[str], limit: int = 6) -> str:
    """Return words with commas between them, a long list cut short.

    >>> listed(["a", "b", "c"], 2)
    'a, b and 1 more'
    """
    known = list(words)
    more = len(known) - limit
    return ", ".join(known[:limit]) + (f" and {more} more" if more > 0 else "")


def counted(part: int, whole: int, what: str) -> str:
    """Return how many of a group, as a reader would say it.

    >>> counted(6, 6, "failing cases"), counted(0, 14, "passing"), counted(1, 1, "failing cases")
    ('all 6 failing cases', 'none of the 14 passing', 'the only failing case')
    """
    if whole == 1:
        return f"the only {what.replace('cases', 'case')}" if part else f"none of the {what}"
    if part == whole:
        return f"both {what}" if whole == 2 else f"all {whole} {what}"
    return f"{part} of the {whole} {what}" if part else f"none of the {whole} {what}"
