"""What a check of one law of harmonic functions found: plain data, for the record, the report and pytest."""

from __future__ import annotations

from dataclasses import dataclass, field

from laplace_verify.measure.results import Feature
from laplace_verify.measure.verdict import Verdict
from laplace_verify.problems.drawing import PieceInfo

__all__ = ["Check"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Check:
    """How a solver kept one law that every harmonic function obeys.

    Parameters
    ----------
    law : str
        Name of the law in plain words ("maximum principle").
    verdict : Verdict
        PASS, FAIL, INCONCLUSIVE, ERROR, NOT_APPLICABLE or NOT_RUN.
    violation : float or None
        Largest amount by which the law was broken, in the unit that `reason` names; None if it was not
        measured.
    tolerance : float or None
        Violations up to this pass, same unit.
    reason : str
        Why this verdict, in plain words.
    example : str
        Python for a fresh session: the problem and a function ``violation(solver)``; empty if there is none.
    points : tuple of tuple of float
        Where the law was broken, one row of d coordinates a point.
    features : dict
        What the simplest problem that breaks the law contains, as `Study.features` has it of a case.
    pieces : tuple of PieceInfo
        The boundary of that problem, as it is drawn.
    """

    law: str
    verdict: Verdict
    violation: float | None = None
    tolerance: float | None = None
    reason: str = ""
    example: str = ""
    points: tuple[tuple[float, ...], ...] = ()
    features: dict[str, Feature] = field(default_factory=dict)
    pieces: tuple[PieceInfo, ...] = ()
