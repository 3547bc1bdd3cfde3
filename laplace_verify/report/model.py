"""From a record to the content of a report: what is said, in which order; not how it is set.

Everything here is computed from the record alone, so a report can be written again from its JSON.
"""

from __future__ import annotations

from collections import Counter

from laplace_verify.campaign.record import Record
from laplace_verify.diagnosis import diagnose
from laplace_verify.diagnosis.suspects import Suspect
from laplace_verify.measure.results import Study
from laplace_verify.measure.verdict import Verdict
from laplace_verify.principles import Check
from laplace_verify.report.case_sections import case_anchor, case_section
from laplace_verify.report.content import (
    Block,
    Cell,
    Code,
    Column,
    Document,
    Facts,
    Items,
    Paragraph,
    Picture,
    Section,
    Table,
)
from laplace_verify.report.coverage import coverage_section
from laplace_verify.report.criteria import criteria_section, results_section
from laplace_verify.report.shape_figures import law_figure
from laplace_verify.report.summary_figures import summary_figure
from laplace_verify.report.text import (
    CAUTIONS,
    FIGURE_KEY,
    SCOPE,
    VERDICT_MEANING,
    accepted,
    count_of,
    joined,
    main_reason,
    number,
    vector,
)

__all__ = ["build_document"]


def build_document(record: Record) -> Document:
    """Return the whole report of a record."""
    suspects = diagnose(record)
    counts = Counter(study.verdict for study in record.studies)
    return Document(
        title=f"Code verification of {record.solver.name}",
        subtitle=_subtitle(record),
        summary=_summary(record),
        counts=tuple((verdict, counts[verdict]) for verdict in Verdict),
        sections=(
            _verdict_section(record, suspects),
            Section(anchor="scope", title="Scope", blocks=tuple(Paragraph(text=text) for text in SCOPE)),
            criteria_section(record),
            results_section(record),
            _known_section(record),
            coverage_section(record),
            _laws_section(record),
            _diagnosis_section(record, suspects),
            Section(
                anchor="cases",
                title="The cases one by one",
                blocks=(
                    Paragraph(
                        text=f"{count_of(len(record.studies), 'case')}, in the order of the catalogue."
                    ),
                    Paragraph(text=FIGURE_KEY),
                ),
                sections=tuple(case_section(record, study) for study in record.studies),
            ),
            _environment_section(record),
            _limits_section(),
        ),
    )


def _subtitle(record: Record) -> str:
    solver = record.solver
    parts = [solver.kind, f"declared order {solver.order}"]
    parts += [f"run of {record.started}"] if record.started else []
    return ", ".join([*parts, f"laplace-verify {record.package_version}"])


def _summary(record: Record) -> str:
    """Return the outcome in one or two sentences."""
    studies = record.studies
    if not studies and not record.checks:
        return "Nothing was run."
    counts = Counter(study.verdict for study in studies)
    declared = Counter(study.verdict for study in studies if accepted(study))
    ran = sum(counts[v] for v in (Verdict.PASS, Verdict.FAIL, Verdict.INCONCLUSIVE, Verdict.ERROR))
    parts = [f"{counts[Verdict.PASS]} of {count_of(ran, 'case')} that ran {'passes' if ran == 1 else 'pass'}"]
    for verdict, words in (
        (Verdict.FAIL, ("fails", "fail")),
        (Verdict.INCONCLUSIVE, ("is inconclusive", "are inconclusive")),
        (Verdict.ERROR, ("breaks the solver", "break the solver")),
    ):
        if counts[verdict]:
            expected = f" ({declared[verdict]} as declared)" if declared[verdict] else ""
            parts.append(f"{counts[verdict]} {words[counts[verdict] > 1]}{expected}")
    return f"{joined(parts)}.{_summary_of_laws(record)}"


def _summary_of_laws(record: Record) -> str:
    """Return one sentence on the laws, with a space before it; nothing if none was checked."""
    if not record.checks:
        return ""
    counts = Counter(check.verdict for check in record.checks)
    kept = counts[Verdict.PASS]
    laws = f"{count_of(len(record.checks), 'law')} of harmonic functions"
    parts = [f"{kept} of {laws} {'is' if kept == 1 else 'are'} kept"]
    for verdict, words in ((Verdict.FAIL, "broken"), (Verdict.ERROR, "not checked because the solver broke")):
        if counts[verdict]:
            parts.append(f"{counts[verdict]} {'is' if counts[verdict] == 1 else 'are'} {words}")
    return f" {', '.join(parts)}."


def _verdict_section(record: Record, suspects: list[Suspect]) -> Section:
    """Say what the verdicts mean and where to look first."""
    counts = Counter(study.verdict for study in record.studies)
    laws = Counter(check.verdict for check in record.checks)
    rows = tuple(
        (
            Cell(text="", verdict=verdict),
            Cell(text=str(counts[verdict])),
            Cell(text=str(laws[verdict])),
            Cell(text=VERDICT_MEANING[verdict]),
        )
        for verdict in Verdict
    )
    columns = (
        Column(title="Verdict"),
        Column(title="Cases", align="right"),
        Column(title="Laws", align="right"),
        Column(title="Meaning"),
    )
    blocks: list[Block] = [Table(caption="Verdicts and what they mean", columns=columns, rows=rows)]
    if suspects:
        blocks.append(Paragraph(label="Where to look first.", text=f"{_capital(suspects[0].text)}."))
    troubled = [study for study in record.studies if _needs_attention(study)]
    if troubled:
        blocks.append(Paragraph(text="Cases that need attention:"))
        blocks.append(Items(entries=tuple(f"{study.case_id}: {main_reason(study)}" for study in troubled)))
    if record.studies:
        blocks.append(
            Picture(
                key="summary",
                title="Shortfall of the order",
                alt="One mark for each case: observed less expected order in its least favourable "
                "deciding norm, with its interval; marks far left of zero fall short.",
                caption="Observed less expected order in the least favourable deciding norm of each "
                "case, with the fitted interval (2 standard errors). Zero: as theory promises.",
                draw=lambda: summary_figure(record),
            )
        )
    return Section(anchor="verdict", title="Verdict", blocks=tuple(blocks))


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]


def _needs_attention(study: Study) -> bool:
    troubled = (Verdict.FAIL, Verdict.INCONCLUSIVE, Verdict.ERROR)
    return study.verdict in troubled and not accepted(study)


def _known_section(record: Record) -> Section:
    """List the deviations the author declared, and what became of them."""
    declared = [study for study in record.studies if study.known is not None]
    if not declared:
        text = "No deviation was declared before the run; every verdict counts as it stands."
        return Section(anchor="known", title="Accepted deviations", blocks=(Paragraph(text=text),))
    rows = tuple(
        (
            Cell(text=study.case_id, target=case_anchor(study)),
            Cell(text=study.known or ""),
            Cell(text="", verdict=study.verdict),
            Cell(text="deviates as declared" if accepted(study) else _unused(study)),
        )
        for study in declared
    )
    columns = tuple(Column(title=title) for title in ("Case", "Declared reason", "Verdict", "Outcome"))
    table = Table(caption="Deviations declared by the author before the run", columns=columns, rows=rows)
    return Section(anchor="known", title="Accepted deviations", blocks=(table,))


def _unused(study: Study) -> str:
    if study.verdict is Verdict.PASS:
        return "passes: the declaration is out of date, remove it"
    return (
        "not tried"
        if study.verdict in (Verdict.NOT_APPLICABLE, Verdict.NOT_RUN)
        else "not the declared outcome"
    )


def _laws_section(record: Record) -> Section:
    """Tabulate the checks of the laws every harmonic function obeys, and show counterexamples."""
    if not record.checks:
        text = "The laws of harmonic functions were not checked in this run."
        return Section(anchor="laws", title="Laws of harmonic functions", blocks=(Paragraph(text=text),))
    columns = (
        Column(title="Law"),
        Column(title="Largest violation", align="right"),
        Column(title="Tolerance", align="right"),
        Column(title="Verdict"),
        Column(title="Reason"),
    )
    rows = tuple(
        (
            Cell(text=check.law),
            Cell(text=number(check.violation)),
            Cell(text=number(check.tolerance)),
            Cell(text="", verdict=check.verdict),
            Cell(text=check.reason),
        )
        for check in record.checks
    )
    intro = (
        "A correct solver keeps these laws on every problem, without any exact solution to compare with. "
        "Those that hold only up to the discretisation error are checked against a tolerance that allows "
        "for it."
    )
    blocks: list[Block] = [
        Paragraph(text=intro), Table(caption="Laws checked on the solver", columns=columns, rows=rows)
    ]  # fmt: skip
    for check in record.checks:
        if check.verdict in (Verdict.FAIL, Verdict.ERROR) and (check.example or check.points):
            where = f" Broken at {joined(map(vector, check.points[:3]))}." if check.points else ""
            blocks.append(Paragraph(label=f"{check.law}.", text=f"{check.reason}.{where}".replace("..", ".")))
            blocks += [_broken_law_picture(check)] if _is_drawn(check) else []
            blocks += [Code(text=check.example)] if check.example else []
    return Section(anchor="laws", title="Laws of harmonic functions", blocks=tuple(blocks))


def _is_drawn(check: Check) -> bool:
    """Return whether a broken law has a place in the plane to show."""
    return bool(check.points) and any(len(piece.outline) > 1 for piece in check.pieces)


def _broken_law_picture(check: Check) -> Picture:
    """Return the simplest problem that breaks a law, and where it does."""
    where = joined(map(vector, check.points[:3]))
    return Picture(
        key=f"law-{check.law.replace(' ', '-')}",
        title=check.law.capitalize(),
        alt=f"The simplest problem found that breaks the law, pieces by name; broken at {where}.",
        caption="The simplest problem found that breaks the law, and where.",
        draw=lambda: law_figure(check),
    )


def _diagnosis_section(record: Record, suspects: list[Suspect]) -> Section:
    """List the suspects with their evidence."""
    if not suspects:
        troubled = any(study.verdict in (Verdict.FAIL, Verdict.ERROR) for study in record.studies)
        text = (
            "Nothing sets the failing cases apart from the passing ones."
            if troubled
            else "No case fails or breaks and no remark names a cause, so there is nothing to explain."
        )
        return Section(anchor="diagnosis", title="Diagnosis", blocks=(Paragraph(text=text),))
    intro = (
        "What the failing cases have in common, how they fail, where their errors sit and what remarks and "
        "broken laws tell. The score, from 0 to 1, ranks: for a feature it is the share of failing cases "
        "that have it less the share of passing ones, lowered where so few cases split so by chance. It is "
        "a hint where to look, not a finding of fact."
    )
    columns = (
        Column(title="Score", align="right"),
        Column(title="Suspect"),
        Column(title="Evidence"),
        Column(title="Smallest case"),
    )
    rows = tuple(
        (
            Cell(text=f"{suspect.score:.2f}"),
            Cell(text=suspect.text),
            Cell(text=suspect.evidence),
            Cell(text=suspect.case_id, target=f"case-{suspect.case_id}" if suspect.case_id else ""),
        )
        for suspect in suspects
    )
    table = Table(caption="Suspects, most telling first", columns=columns, rows=rows)
    return Section(anchor="diagnosis", title="Diagnosis", blocks=(Paragraph(text=intro), table))


def _environment_section(record: Record) -> Section:
    """State all that is needed to run it again."""
    solver, place, asked = record.solver, record.environment, record.settings
    pairs = [
        ("Solver", f"{solver.name} ({solver.kind})"),
        ("Loaded from", solver.module or "not recorded"),
        ("Source SHA-256", solver.source_sha256 or "not recorded"),
        ("Declared order", solver.order),
        *((f"Declared {name}", value) for name, value in solver.capabilities.items()),
        ("laplace-verify", record.package_version),
        ("Python", place.python),
        ("numpy", place.numpy),
        ("scipy", place.scipy),
        *place.packages.items(),
        ("Platform", f"{place.platform}, {count_of(place.cpus, 'processor')}"),
        ("Seed", str(asked.seed)),
        ("Sizes", ", ".join(map(str, asked.sizes)) if asked.sizes else "default"),
        ("Cases asked for", ", ".join(asked.cases) if asked.cases is not None else "whole catalogue"),
        ("Laws checked", "yes" if asked.principles else "no"),
        ("Time limit", f"{asked.time_limit:g} s a study" if asked.time_limit else "none"),
        ("Budget for further sizes", f"{asked.budget:g} s a study" if asked.budget else "none"),
        ("Started", record.started or "not recorded"),
        ("Finished", record.finished or "not recorded"),
    ]
    blocks: list[Block] = [Facts(pairs=tuple(pairs))]
    if record.command:
        blocks += [Paragraph(text="The command that repeats this run:"), Code(text=record.command)]
    return Section(anchor="environment", title="Environment and repetition", blocks=tuple(blocks))


def _limits_section() -> Section:
    return Section(
        anchor="limits",
        title="Limits and cautions",
        blocks=tuple(Paragraph(text=text, tone="caution") for text in CAUTIONS),
    )
