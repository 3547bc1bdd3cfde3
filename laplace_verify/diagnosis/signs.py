"""Signs of trouble in the remarks and reasons of studies, which say more than a verdict does.

A mistake that leaves the order as it is shows in remarks: an error constant far above that of
interpolation, gradients that stay, a floor. Where a case fails, only the signs that name a cause are weighed;
where none does, every sign is, and the cases left open are compared with those that pass. Score: weight of
the sign times the share of the failing cases that show it; where nothing fails, the weight alone. A sign that
shows a cause directly weighs as much as a feature that separates the cases perfectly, and comes before it.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass, replace

from laplace_verify.diagnosis.finding import Finding, case_list, counted
from laplace_verify.diagnosis.shared import shared_features
from laplace_verify.measure.floors import named_floor
from laplace_verify.measure.results import Study
from laplace_verify.measure.verdict import Verdict

__all__ = ["SIGNS", "Sign", "signs_among_failing", "signs_where_nothing_fails"]

_TELLING = 0.7  # score of a feature that is added to a sign
_OPEN = 0.5  # weight of what open cases share
_SMALL = 1e-4  # relative error of a promised polynomial that looks like a floor, not like a mistake of scale
_PROMISED = "a harmonic polynomial of degree"


@dataclass(frozen=True, slots=True, kw_only=True)
class Sign:
    """What a remark or reason tells: a pattern that finds it, its meaning, how much it weighs.

    `cause` says that it names a cause, so that it is weighed beside failing cases too.
    """

    pattern: str
    meaning: str
    weight: float
    cause: bool = False


SIGNS = (  # where two weigh the same, the first comes first
    Sign(
        pattern="the iteration stops early",
        meaning="the iteration stops early: its tolerance, its norm or its number of steps",
        weight=1.0,
        cause=True,
    ),
    Sign(
        pattern="single precision",
        meaning="the error stops at the size of single precision: an array or constant in 32 bits",
        weight=1.0,
        cause=True,
    ),
    Sign(
        pattern=r"reported residual .* not well below",
        meaning="the reported residual is not well below the error: the iteration stops early",
        weight=1.0,
        cause=True,
    ),
    Sign(
        pattern="loose tolerance, or of a constant",
        meaning="the error stops falling at a floor: a loose tolerance of the iteration, or a constant typed "
        "with few digits",
        weight=0.75,
        cause=True,
    ),
    Sign(
        pattern="accumulated round-off, or of the tolerance",
        meaning="the error stops falling near round-off: the tolerance of an iteration, or cancellation",
        weight=0.6,
    ),
    Sign(
        pattern="the values converge but",
        meaning="the values converge but gradients or fluxes do not: their scale, sign or recovery",
        weight=0.9,
    ),
    Sign(
        pattern="times that of interpolating",
        meaning="the error constant is far above that of interpolation: a weight, a penalty or a boundary "
        "closure costs accuracy",
        weight=0.7,
    ),
    Sign(
        pattern="standard errors",
        meaning="the stated standard errors do not fit the errors: a bias, or their scale",
        weight=0.9,
        cause=True,
    ),
    Sign(
        pattern="does not follow the curve",
        meaning="points handed back do not follow the curved boundary",
        weight=0.8,
        cause=True,
    ),
    Sign(
        pattern=_PROMISED,
        meaning="polynomials that the solver promises to reproduce are not exact: weights, constants, tags "
        "of pieces or corner nodes",
        weight=0.6,
    ),
    Sign(
        pattern=r"\bobserved [-0-9.]+ .*\(does not decide\)",
        meaning="a norm that does not decide falls short",
        weight=0.5,
    ),
)


def signs_among_failing(failing: Sequence[Study], passing: Sequence[Study]) -> list[Finding]:
    """Return the causes that the remarks and reasons of failing studies name, and what those cases share."""
    found = []
    for sign in SIGNS:
        showing = [study for study in failing if _shows(study, sign)] if sign.cause else []
        if showing:
            others = [study for study in (*failing, *passing) if not _shows(study, sign)]
            who = counted(len(showing), len(failing), "failing cases")
            text = f"{sign.meaning} ({who}){_shared(showing, others)}"
            found.append(_finding(sign, showing, text, len(showing) / len(failing)))
    return found


def signs_where_nothing_fails(studies: Sequence[Study]) -> list[Finding]:
    """Return what remarks tell where no study fails or breaks, and what open studies have in common."""
    ran = [study for study in studies if study.levels]
    found = []
    for sign in SIGNS:
        showing = [study for study in ran if _shows(study, sign)]
        if showing:
            others = [study for study in ran if not _shows(study, sign)]
            who = f"no case fails, remarked in {counted(len(showing), len(ran), 'cases')}"
            text = f"{sign.meaning} ({who}){_shared(showing, others)}"
            found.append(_finding(sign, showing, text, 1.0))
    open_ = [study for study in ran if study.verdict is Verdict.INCONCLUSIVE]
    passing = [study for study in ran if study.verdict is Verdict.PASS]
    if len(open_) > 1 and passing:  # a single one has too much that others lack
        found += [
            replace(finding, score=_OPEN * finding.score)
            for finding in shared_features(open_, passing, "open", "passing")
        ]
    return found


def _finding(sign: Sign, showing: Sequence[Study], text: str, share: float) -> Finding:
    """Return a finding with the first remark as evidence."""
    first = next(text for text in _texts(showing[0]) if re.search(sign.pattern, text))
    return Finding(
        text=text[0].upper() + text[1:],
        evidence=f"{showing[0].case_id}: {first}; cases: {case_list(showing)}",
        score=sign.weight * share,
        studies=tuple(showing),
    )


def _shared(showing: Sequence[Study], others: Sequence[Study]) -> str:
    """Return, in words to add, what sets the cases with a sign apart; "" if nothing does clearly."""
    apart = shared_features(showing, others, "remarked", "others") if others else []
    return f": {apart[0].text}" if apart and apart[0].score >= _TELLING else ""


def _shows(study: Study, sign: Sign) -> bool:
    return any(re.search(sign.pattern, text) for text in _texts(study))


def _texts(study: Study) -> list[str]:
    """Return what is said of a study, and what usually leaves a promised polynomial as inexact as it is."""
    said = [*study.remarks, *study.reasons]
    if any(re.search(_PROMISED, reason) for reason in study.reasons):
        miss = next((level.nodal for level in study.levels if level.nodal), 1.0)  # it grows with the size
        said += [f"polynomials are missed by {miss:.1e}: {named_floor(miss)}"] if miss < _SMALL else []
    return said
