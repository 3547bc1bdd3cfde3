"""Signs of trouble in the remarks and reasons of studies, which say more than a verdict does.

A mistake that leaves the order as it is shows in remarks: an error constant far above that of
interpolation, gradients that stay, a floor. Where a case fails, only the signs that name a cause are weighed,
in open cases too; where none does, every sign is, and the cases left open are compared with those that pass.
Score: weight of the sign times the share of the failing and open cases that show it, in full from four in
five; where nothing fails, the weight alone. A sign that shows a cause directly weighs as much as a feature
that separates the cases perfectly, and comes before it.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from laplace_verify.diagnosis.finding import Finding, case_list, counted
from laplace_verify.diagnosis.shared import shared_features
from laplace_verify.measure.floors import floor_kind
from laplace_verify.measure.results import Study
from laplace_verify.measure.signs import FloorKind, Sign, SignKind
from laplace_verify.measure.verdict import Verdict

__all__ = ["MEANINGS", "Meaning", "signs_among_failing", "signs_where_nothing_fails"]

_TELLING = 0.7  # score of a feature that is added to a sign
_OPEN = 0.5  # weight of what open cases share
_SMALL = 1e-4  # relative error of a promised polynomial that looks like a floor, not like a mistake of scale
_SHORT_WEIGHT = 0.5
_CLEAR = 0.8  # share of the failing and open cases from which a cause counts in full
_FLOORS: tuple[FloorKind, ...] = ("single-precision floor", "loose floor", "round-off floor")


@dataclass(frozen=True, slots=True, kw_only=True)
class Meaning:
    """What signs of some kinds tell, and how much it weighs.

    `cause` says that they name a cause, so that they are weighed beside failing cases too; `alone` that they
    are weighed where nothing fails.
    """

    kinds: tuple[SignKind, ...]
    text: str
    weight: float
    cause: bool = False
    alone: bool = True


MEANINGS = (  # where two weigh the same, the first comes first
    Meaning(
        kinds=("early stop",),
        text="the iteration stops early: its tolerance, its norm or its number of steps",
        weight=1.0,
        cause=True,
    ),
    Meaning(
        kinds=("single-precision values",),
        text="the values handed back are numbers of single precision: an array of 32 bits",
        weight=1.0,
        cause=True,
    ),
    Meaning(
        kinds=("single-precision floor",),
        text="the error stops at the size of single precision: an array or constant in 32 bits",
        weight=1.0,
        cause=True,
    ),
    Meaning(
        kinds=("large residual",),
        text="the reported residual is not well below the error, so that the equations are not solved: the "
        "iteration stops early, or the system is close to singular",
        weight=1.0,
        cause=True,
    ),
    Meaning(
        kinds=("loose floor",),
        text="the error stops falling at a floor: a loose tolerance of the iteration, or a constant typed "
        "with few digits",
        weight=0.75,
        cause=True,
    ),
    Meaning(
        kinds=("round-off floor",),
        text="the error stops falling near round-off: the tolerance of an iteration, or cancellation",
        weight=0.6,
    ),
    Meaning(
        kinds=("stuck gradients",),
        text="the values converge but gradients or fluxes do not: their scale, sign or recovery",
        weight=0.9,
    ),
    Meaning(
        kinds=("large error constant",),
        text="the error constant is far above that of interpolation: a weight, a penalty or a boundary "
        "closure costs accuracy",
        weight=0.7,
    ),
    Meaning(
        kinds=("limited between nodes",),
        text="values at the solver's own points converge an order faster than those between them: how values "
        "are evaluated between points, or the cells handed back",
        weight=1.0,
        cause=True,
        alone=False,  # nodes of sound schemes may converge faster than their order
    ),
    Meaning(
        kinds=("wrong standard errors",),
        text="the stated standard errors do not fit the errors: a bias, or their scale",
        weight=0.9,
        cause=True,
    ),
    Meaning(
        kinds=("off the curve",),
        text="points handed back do not follow the curved boundary",
        weight=0.8,
        cause=True,
    ),
    Meaning(
        kinds=("inexact polynomial",),
        text="polynomials that the solver promises to reproduce are not exact: weights, constants, tags "
        "of pieces or corner nodes",
        weight=0.6,
    ),
)


def signs_among_failing(studies: Sequence[Study]) -> list[Finding]:
    """Return the causes that the signs of failing and open studies name, and what those cases share."""
    ran = _one_floor([study for study in studies if study.levels])
    bad = [study for study in ran if study.verdict in (Verdict.FAIL, Verdict.INCONCLUSIVE)]
    words = (
        "failing cases" if all(study.verdict is Verdict.FAIL for study in bad) else "failing or open cases"
    )
    found = []
    for meaning in MEANINGS:
        showing = [study for study in bad if _first(study, meaning)] if meaning.cause else []
        if showing:
            others = [study for study in ran if not _first(study, meaning)]
            text = f"{meaning.text} ({counted(len(showing), len(bad), words)}){_shared(showing, others)}"
            found.append(_finding(meaning, showing, text, min(1.0, len(showing) / len(bad) / _CLEAR)))
    return found


def signs_where_nothing_fails(studies: Sequence[Study]) -> list[Finding]:
    """Return what signs tell where no study fails or breaks, and what open studies have in common."""
    ran = _one_floor([study for study in studies if study.levels])
    found = []
    for meaning in MEANINGS:
        showing = [study for study in ran if _first(study, meaning)] if meaning.alone else []
        if showing:
            others = [study for study in ran if not _first(study, meaning)]
            text = f"{meaning.text} ({_remarked(showing, ran)}){_shared(showing, others)}"
            found.append(_finding(meaning, showing, text, 1.0))
    found += _short(ran)
    open_ = [study for study in ran if study.verdict is Verdict.INCONCLUSIVE]
    passing = [study for study in ran if study.verdict is Verdict.PASS]
    if len(open_) > 1 and passing:  # a single one has too much that others lack
        found += [
            replace(finding, score=_OPEN * finding.score)
            for finding in shared_features(open_, passing, "open", "passing")
        ]
    return found


def _short(ran: Sequence[Study]) -> list[Finding]:
    """Return a finding on norms that fall short where they do not decide."""
    notes = {id(study): note for study in ran if (note := _short_note(study))}
    showing = [study for study in ran if id(study) in notes]
    if not showing:
        return []
    others = [study for study in ran if id(study) not in notes]
    return [
        Finding(
            text=f"A norm that does not decide falls short ({_remarked(showing, ran)})"
            f"{_shared(showing, others)}",
            evidence=f"{showing[0].case_id}: {notes[id(showing[0])]}; cases: {case_list(showing)}",
            score=_SHORT_WEIGHT,
            studies=tuple(showing),
        )
    ]


def _short_note(study: Study) -> str:
    """Return what is said of the first norm that falls short without deciding; "" if none does."""
    notes = (
        order.note for order in study.orders.values() if order.verdict is Verdict.FAIL and not order.decides
    )
    return next(notes, "")


def _finding(meaning: Meaning, showing: Sequence[Study], text: str, share: float) -> Finding:
    """Return a finding with the first remark as evidence."""
    first = _first(showing[0], meaning)
    return Finding(
        text=text[0].upper() + text[1:],
        evidence=f"{showing[0].case_id}: {first.text if first else ''}; cases: {case_list(showing)}",
        score=meaning.weight * share,
        studies=tuple(showing),
    )


def _remarked(showing: Sequence[Study], ran: Sequence[Study]) -> str:
    return f"no case fails, remarked in {counted(len(showing), len(ran), 'cases')}"


def _shared(showing: Sequence[Study], others: Sequence[Study]) -> str:
    """Return, in words to add, what sets the cases with a sign apart; "" if nothing does clearly."""
    apart = shared_features(showing, others, "remarked", "others") if others else []
    return f": {apart[0].text}" if apart and apart[0].score >= _TELLING else ""


def _first(study: Study, meaning: Meaning) -> Sign | None:
    """Return the first sign of a study that has this meaning."""
    return next((sign for sign in study.signs if sign.kind in meaning.kinds), None)


def _one_floor(studies: Sequence[Study]) -> list[Study]:
    """Return the studies with the kind of floor that most of them have: one solver has one cause of floors.

    Its size alone, which the kind is told by, changes with the condition of the problem.
    """
    signs = [_signs(study) for study in studies]
    kinds = [next((sign.kind for sign in own if sign.kind in _FLOORS), None) for own in signs]
    common = max(_FLOORS, key=kinds.count)
    return [
        replace(study, signs=[replace(s, kind=common) if s.kind in _FLOORS else s for s in own])
        for study, own in zip(studies, signs, strict=True)
    ]


def _signs(study: Study) -> list[Sign]:
    """Return the signs of a study, and what usually leaves a promised polynomial as inexact as it is."""
    if not any(sign.kind == "inexact polynomial" for sign in study.signs):
        return study.signs
    miss = next((level.nodal for level in study.levels if level.nodal), 1.0)  # it grows with the size
    if not miss < _SMALL:
        return study.signs
    return [Sign(kind=floor_kind(miss), text=f"polynomials are missed by {miss:.1e}"), *study.signs]
