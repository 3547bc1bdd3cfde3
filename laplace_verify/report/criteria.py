"""Acceptance criteria fixed before the run, and the results against them, one row a case."""

from __future__ import annotations

from laplace_verify.campaign.record import CaseInfo, Record
from laplace_verify.measure.results import Study
from laplace_verify.measure.series import MINIMUM_LEVELS
from laplace_verify.report.case_sections import case_anchor
from laplace_verify.report.content import Block, Cell, Column, Items, Paragraph, Section, Table
from laplace_verify.report.text import (
    conditions_of,
    expected_order,
    finest_error,
    interval,
    joined,
    number,
    order,
    regularity_class,
    worst_norm,
)

__all__ = ["criteria_section", "results_section"]

_RULES = (
    "The expected order of a norm follows from the declared (formal) order and from the regularity of "
    "solution and domain, by the theorem named below, before anything is run. A norm decides only where "
    "theory proves a rate for it; the others are reported as remarks.",
    "The tolerance is half of the smallest loss of order that the verdict is built to see. The order is "
    "fitted to at "
    f"least {MINIMUM_LEVELS} levels, with a standard error.",
    "PASS: expected order less tolerance lies below the whole interval observed ± 2 standard errors, "
    "and the last two levels do not contradict it. FAIL: it lies above the whole interval, or the error "
    "does not fall. Otherwise the verdict is INCONCLUSIVE. Faster convergence than expected passes.",
    f"Fewer than {MINIMUM_LEVELS} levels give orders but no PASS, unless the answer is exact to "
    "round-off. Levels too "
    "coarse for the case, or at the floor of round-off, are shown but not judged.",
)


def criteria_section(record: Record) -> Section:
    """Return the rules and, for every distinct criterion, the cases it applies to."""
    by_norm: dict[tuple[str, ...], list[str]] = {}
    for study in record.studies:
        for norm in study.deciding:
            found = study.orders[norm]
            key = (norm, order(found.formal), expected_order(found), number(found.tolerance, 2), found.basis)
            by_norm.setdefault(key, []).append(study.case_id)
    # Norms that share criterion and cases share a row.
    groups: dict[tuple[tuple[str, ...], tuple[str, ...]], list[str]] = {}
    for (norm, *criterion), cases in by_norm.items():
        groups.setdefault((tuple(criterion), tuple(cases)), []).append(norm)
    blocks: list[Block] = [Items(entries=_RULES, ordered=True)]
    if groups:
        columns = (
            Column(title="Deciding norms"),
            Column(title="Formal order", align="right"),
            Column(title="Expected order", align="right"),
            Column(title="Tolerance", align="right"),
            Column(title="By which theorem"),
            Column(title="Cases"),
        )
        rows = tuple(
            (
                Cell(text=", ".join(norms)),
                *(Cell(text=text) for text in criterion),
                Cell(text=f"{len(cases)}: {', '.join(cases)}"),
            )
            for (criterion, cases), norms in sorted(
                groups.items(), key=lambda item: (-len(item[0][1]), item[0])
            )
        )
        blocks.append(Table(caption="Criteria and the cases they apply to", columns=columns, rows=rows))
    else:
        blocks.append(Paragraph(text="No study has a norm that decides."))
    return Section(anchor="criteria", title="Acceptance criteria, fixed before the run", blocks=tuple(blocks))


def results_section(record: Record) -> Section:
    """Return the table with one row a case."""
    if not record.studies:
        text = Paragraph(text="No case was studied.")
        return Section(anchor="results", title="Results", blocks=(text,))
    columns = (
        Column(title="Case"),
        Column(title="Shape"),
        Column(title="Conditions"),
        Column(title="Solution"),
        Column(title="Norm"),
        Column(title="Formal", align="right"),
        Column(title="Expected", align="right"),
        Column(title="Observed", align="right"),
        Column(title="Finest error", align="right"),
        Column(title="Verdict"),
    )
    rows = tuple(_row(study, record.case(study.case_id)) for study in record.studies)
    caption = (
        "One row a case, in its least favourable deciding norm: formal (declared), expected and observed "
        "order with its interval, and the absolute error on the finest level"
    )
    return Section(
        anchor="results", title="Results", blocks=(Table(caption=caption, columns=columns, rows=rows),)
    )


def _row(study: Study, info: CaseInfo | None) -> tuple[Cell, ...]:
    """Return the row of one study."""
    norm = worst_norm(study)
    found = study.orders.get(norm) if norm else None
    texts = (
        f"{info.dim}-D {info.shape}" if info else "–",
        joined(conditions_of(info)) if info else "–",
        regularity_class(info) if info else "–",
        norm or "–",
        order(found.formal) if found else "–",
        expected_order(found) if found else "–",
        interval(found) if found else "–",
        number(finest_error(study, norm)) if norm else "–",
    )
    return (
        Cell(text=study.case_id, target=case_anchor(study)),
        *(Cell(text=text) for text in texts),
        Cell(text="", verdict=study.verdict),
    )
