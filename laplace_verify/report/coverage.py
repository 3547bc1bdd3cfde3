"""What the run exercised, what it did not, and what harmonic problems can never exercise."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable

from laplace_verify.campaign.record import CaseInfo, Record
from laplace_verify.diagnosis.shared import feature_names
from laplace_verify.measure.results import Study
from laplace_verify.measure.verdict import Verdict
from laplace_verify.report.case_sections import case_anchor
from laplace_verify.report.content import Block, Cell, Column, Items, Paragraph, Section, Table
from laplace_verify.report.text import (
    NEVER_EXERCISED,
    NO_SOLUTION,
    VERDICT_WORDS,
    accepted,
    conditions_of,
    joined,
    regularity_class,
)

__all__ = ["coverage_section", "traits"]

_MEASURED = (Verdict.PASS, Verdict.FAIL, Verdict.INCONCLUSIVE)
_ALWAYS_ASKED = (
    *(("dimension", text) for text in ("1-D", "2-D", "3-D")),
    *(("condition", text) for text in ("dirichlet", "neumann", "robin", "periodic")),
    *(("solution", text) for text in ("smooth", "singular point", "jump of the data", NO_SOLUTION)),
    *(("conductivity", text) for text in ("1", "other scalar", "tensor", "regions")),
)


def traits(info: CaseInfo) -> list[tuple[str, str]]:
    """Return what a case exercises, as (aspect, value)."""
    smoothness = regularity_class(info)
    if smoothness not in ("smooth", "jump of the data", "not stated", NO_SOLUTION):
        smoothness = "singular point"
    conductivity = info.conductivity
    if conductivity != "1":
        tensor = "[" in conductivity or "(" in conductivity
        conductivity = "tensor" if tensor else "regions" if "," in conductivity else "other scalar"
    return [
        ("dimension", f"{info.dim}-D"),
        ("shape", info.shape),
        *(("condition", condition) for condition in conditions_of(info)),
        ("conductivity", conductivity),
        ("solution", smoothness),
    ]


def coverage_section(record: Record) -> Section:
    """Return the three lists of coverage."""
    counts = _counts(record)
    never = Items(entries=NEVER_EXERCISED)
    return Section(
        anchor="coverage",
        title="Coverage",
        sections=(
            Section(anchor="exercised", title="What was exercised", blocks=_exercised(record, counts)),
            Section(
                anchor="not-exercised", title="What was not exercised", blocks=_not_exercised(record, counts)
            ),
            Section(
                anchor="never-exercised",
                title="What harmonic problems can never exercise",
                blocks=(Paragraph(text="However many cases pass, these stay untested:"), never),
            ),
        ),
    )


def _counts(record: Record) -> dict[tuple[str, str], Counter[Verdict]]:
    """Return trait -> number of cases by verdict."""
    counts: dict[tuple[str, str], Counter[Verdict]] = {}
    for study in record.studies:
        info = record.case(study.case_id)
        for trait in traits(info) if info else ():
            counts.setdefault(trait, Counter())[study.verdict] += 1
    return counts


def _exercised(record: Record, counts: dict[tuple[str, str], Counter[Verdict]]) -> tuple[Block, ...]:
    """Return the tables of traits and of further features by verdict."""
    aspects = list(dict.fromkeys(aspect for aspect, _ in _ALWAYS_ASKED))
    aspects.insert(1, "shape")
    known = [trait for aspect in aspects for trait in sorted(counts) if trait[0] == aspect]
    if not known:
        return (Paragraph(text="No case was run."),)
    blocks: list[Block] = [
        _table("Cases by what they exercise, and verdict", [(f"{a}: {v}", counts[a, v]) for a, v in known])
    ]
    features: dict[str, Counter[Verdict]] = {}
    for study in record.studies:
        for name in filter(_is_general, feature_names(study)):
            features.setdefault(name, Counter())[study.verdict] += 1
    if features:
        blocks.append(_table("Features that the diagnosis compares, and verdict", sorted(features.items())))
    return tuple(blocks)


def _is_general(feature: str) -> bool:
    """Leave out features that the first table has, and those that name single pieces or tags."""
    return not feature.startswith(("tag ", "shape: ", "dimension: ")) and " on " not in feature


def _table(caption: str, rows: Iterable[tuple[str, Counter[Verdict]]]) -> Table:
    columns = (
        Column(title="Feature"),
        *(Column(title=VERDICT_WORDS[verdict], align="right") for verdict in Verdict),
    )
    return Table(
        caption=caption,
        columns=columns,
        rows=tuple(
            (Cell(text=name), *(Cell(text=str(count[verdict] or "·")) for verdict in Verdict))
            for name, count in rows
        ),
    )


def _not_exercised(record: Record, counts: dict[tuple[str, str], Counter[Verdict]]) -> tuple[Block, ...]:
    """Return the traits no measured case has, and the studies that were not made."""
    measured = {trait for trait, count in counts.items() if any(count[verdict] for verdict in _MEASURED)}
    missing: dict[str, list[str]] = {}
    for aspect, value in dict.fromkeys([*_ALWAYS_ASKED, *sorted(counts)]):
        if (aspect, value) not in measured and value != "not stated":
            missing.setdefault(aspect, []).append(value)
    lines = tuple(f"{aspect}: {joined(values)}" for aspect, values in missing.items())
    intro = (
        "No case that was measured has:"
        if lines
        else "Every dimension, condition and kind of solution was measured."
    )
    blocks: list[Block] = [Paragraph(text=intro), *([Items(entries=lines)] if lines else [])]
    skipped = [study for study in record.studies if study.verdict not in (*_MEASURED, Verdict.ERROR)]
    if skipped:
        columns = (Column(title="Case"), Column(title="Verdict"), Column(title="Reason"))
        rows = tuple(_skipped(study) for study in skipped)
        blocks.append(Table(caption="Cases that were not run, and why", columns=columns, rows=rows))
    if any(accepted(study) for study in record.studies):
        blocks.append(Paragraph(text="Cases with an accepted deviation count as measured, not as passed."))
    return tuple(blocks)


def _skipped(study: Study) -> tuple[Cell, ...]:
    return (
        Cell(text=study.case_id, target=case_anchor(study)),
        Cell(text="", verdict=study.verdict),
        Cell(text="; ".join(study.reasons) or "no reason was recorded"),
    )
