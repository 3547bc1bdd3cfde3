"""The section of a case: what was asked, what was measured, what was concluded."""

from __future__ import annotations

import math

from laplace_verify.campaign.record import CaseInfo, Record
from laplace_verify.measure.results import Level, Study
from laplace_verify.report.content import (
    Block,
    Cell,
    Code,
    Column,
    Facts,
    Items,
    Paragraph,
    Picture,
    Section,
    Table,
)
from laplace_verify.report.figures import convergence_figure, is_exponential, order_figure, shown_norms
from laplace_verify.report.maps import error_figure
from laplace_verify.report.shape_figures import case_figure
from laplace_verify.report.text import (
    accepted,
    expected_order,
    finest_error,
    interval,
    is_exact,
    joined,
    number,
    order,
    seconds,
    vector,
)

__all__ = ["case_anchor", "case_section"]


def case_anchor(study: Study) -> str:
    """Return the anchor of a study's section."""
    return f"case-{study.case_id}"


def case_section(record: Record, study: Study) -> Section:
    """Return everything known about one study."""
    info = record.case(study.case_id)
    blocks: list[Block] = []
    if info is not None:
        blocks += _question(info)
    blocks += _conclusion(study)
    if study.orders:
        blocks += _order_table(study)
    if study.levels:
        blocks += [_grid_table(study), _error_table(study)]
        blocks += _left_out(study)
        blocks += _place_table(study)
        blocks.append(_pictures(study, info))
    title = info.title if info and info.title else study.case_title or study.case_id
    return Section(
        anchor=case_anchor(study),
        title=f"{title} ({study.case_id})" if title != study.case_id else title,
        blocks=tuple(blocks),
        verdict=study.verdict,
    )


def _question(info: CaseInfo) -> list[Block]:
    """Return statement, reading and facts of the case."""
    blocks: list[Block] = []
    blocks += [Paragraph(text=info.statement, tone="lead")] if info.statement else []
    pairs = [
        ("Reading", info.reading),
        ("Shape", f"{info.shape}, {info.dim}-D"),
        ("Conditions", ", ".join(f"{piece.name}: {piece.condition}" for piece in info.pieces)),
        ("Conductivity", info.conductivity),
        ("Exact solution", info.formula),
        ("Ill-posed", info.ill_posed),
        ("Regularity", _regularity(info)),
        ("Quantities", "; ".join(f"{q.name} = {q.value!r} {q.unit}".strip() for q in info.quantities)),
        ("Tags", ", ".join(info.tags)),
        ("Sources", "; ".join(info.sources)),
    ]
    blocks.append(Facts(pairs=tuple((name, value) for name, value in pairs if value)))
    return blocks


def _regularity(info: CaseInfo) -> str:
    """Return exponents and singular points in words."""
    found = info.regularity
    if found is None:
        return ""
    solution = (
        "smooth"
        if math.isinf(found.solution)
        else f"u behaves like r^{number(found.solution)} at its worst point"
    )
    domain = (
        "no corner matters"
        if math.isinf(found.domain)
        else f"smallest corner exponent {number(found.domain)}"
    )
    text = f"{solution}; {domain}; smallest length {number(found.scale)}"
    if found.singular_points:
        text += f"; singular at {joined(map(vector, found.singular_points[:6]))}"
    return text + (f"; data jump at {joined(map(vector, found.jumps[:6]))}" if found.jumps else "")


def _conclusion(study: Study) -> list[Block]:
    """Return reasons, remarks, and what the solver said when it broke."""
    blocks: list[Block] = []
    if accepted(study):
        blocks.append(Paragraph(label="Accepted deviation.", text=f"Declared before the run: {study.known}"))
    if len(study.reasons) == 1:
        blocks.append(Paragraph(label="Why.", text=study.reasons[0]))
    elif study.reasons:
        blocks += [Paragraph(label="Why.", text=""), Items(entries=tuple(study.reasons))]
    if study.crash:
        blocks += [Paragraph(label="What the solver raised.", text=""), Code(text=study.crash)]
    notes = {found.note for found in study.orders.values()}  # the table of orders says these
    remarks = tuple(remark for remark in study.remarks if remark not in notes)
    if remarks:
        blocks += [
            Paragraph(label="Remarks.", text="These do not decide the verdict."),
            Items(entries=remarks),
        ]
    return blocks


def _order_table(study: Study) -> list[Block]:
    """Return one row a norm that is expected to converge or usually shown; the others in one line below."""
    shown = {norm for norm, found in study.orders.items() if found.expected is not None} | set(
        shown_norms(study)
    )
    others = [
        f"{norm} {interval(found).partition(' [')[0]}"
        for norm, found in study.orders.items()
        if norm not in shown
    ]
    columns = (
        Column(title="Norm"),
        Column(title="Role"),
        Column(title="Formal order", align="right"),
        Column(title="Expected order", align="right"),
        Column(title="Observed order", align="right"),
        Column(title="Tolerance", align="right"),
        Column(title="Finest error", align="right"),
        Column(title="Verdict"),
    )
    rows = tuple(
        (
            Cell(text=norm),
            Cell(text="decides" if found.decides else "remark"),
            Cell(text=order(found.formal)),
            Cell(text=expected_order(found)),
            Cell(text=interval(found)),
            Cell(text=number(found.tolerance, 2)),
            Cell(text=number(finest_error(study, norm))),
            Cell(text="–", verdict=found.verdict if found.decides else None),
        )
        for norm, found in study.orders.items()
        if norm in shown
    )
    blocks: list[Block] = [
        Table(caption="Formal, expected and observed order by norm", columns=columns, rows=rows)
    ]
    bases: dict[str, list[str]] = {}
    for norm in (norm for norm in study.orders if norm in shown and study.orders[norm].basis):
        bases.setdefault(study.orders[norm].basis, []).append(norm)
    if bases:
        blocks.append(Paragraph(label="Why these orders are expected.", text=""))
        blocks.append(Items(entries=tuple(f"{joined(norms)}: {basis}" for basis, norms in bases.items())))
    if others:
        label = "Observed orders without an expected one."
        blocks.append(Paragraph(label=label, text=f"{', '.join(others)}."))
    return blocks


def _grid_table(study: Study) -> Table:
    """Return one row a level: size, mesh width, unknowns, time, and whether it was judged."""
    columns = [Column(title=title, align="right") for title in ("n", "h", "Ratio", "Unknowns", "Seconds")]
    columns.append(Column(title="Judged"))
    rows = tuple(
        (
            *_size_and_h(level),
            Cell(text=f"{before.h / level.h:.2f}" if before and level.h > 0 else ""),
            Cell(text=str(level.unknowns)),
            Cell(text=seconds(level.seconds)),
            Cell(text=_judged(study, level)),
        )
        for before, level in zip([None, *study.levels], study.levels, strict=False)
    )
    caption = "Levels. Ratio: h of the level before over h (refinement ratio)"
    return Table(caption=caption, columns=tuple(columns), rows=rows)


def _judged(study: Study, level: Level) -> str:
    """Return whether a level entered the fits, and in which norms it did not."""
    out = sorted(
        norm
        for norm in shown_norms(study)
        if norm in study.orders and str(level.size) in study.orders[norm].left_out
    )
    if not level.judged:
        return "no"
    return f"not in {joined(out)}" if out else "yes"


def _error_table(study: Study) -> Table:
    """Return one row a level: error, and order to the level before, for every shown norm."""
    norms = shown_norms(study)
    columns = [Column(title="n", align="right"), Column(title="h", align="right")]
    for norm in norms:
        columns += [Column(title=norm, align="right"), Column(title="order", align="right")]
    rows = tuple(_error_row(study, place, level, norms) for place, level in enumerate(study.levels))
    caption = "Absolute errors, and the order from the level before"
    return Table(caption=caption, columns=tuple(columns), rows=rows)


def _error_row(study: Study, place: int, level: Level, norms: list[str]) -> tuple[Cell, ...]:
    """Return the cells of one level."""
    cells = list(_size_and_h(level))
    for norm in norms:
        found = study.orders.get(norm)
        pairs = found.pairs if found else []
        pair = pairs[place - 1] if 0 < place <= len(pairs) else None
        noise = found is not None and is_exact(found)  # ratios of rounding errors
        texts = number(level.errors.get(norm)), "" if pair is None or noise else order(pair)
        cells += [Cell(text=text) for text in texts]
    return tuple(cells)


def _place_table(study: Study) -> list[Block]:
    """Return the largest error near every piece, corner and interface, and its order, largest first."""
    finest = {place: errors[-1] for place, errors in study.local.items() if errors and errors[-1] is not None}
    if not finest or all(is_exact(found) for found in study.orders.values() if found.decides):
        return []
    orders = study.local_orders
    columns = (
        Column(title="Place"),
        Column(title="Largest error", align="right"),
        Column(title="Order there", align="right"),
    )
    rows = tuple(
        (Cell(text=place), Cell(text=number(error)), Cell(text=order(orders[place])))
        for place, error in sorted(finest.items(), key=lambda entry: -(entry[1] or 0.0))
    )
    caption = (
        "Where the error sits: largest within 2h of each piece, corner and interface on the finest level, "
        "and its order over the last three levels"
    )
    return [Table(caption=caption, columns=columns, rows=rows)]


def _size_and_h(level: Level) -> tuple[Cell, Cell]:
    return Cell(text=str(level.size)), Cell(text=number(level.h, 4))


def _left_out(study: Study) -> list[Block]:
    """Say why levels did not enter a fit, each reason once."""
    reasons: dict[tuple[str, str], list[str]] = {}
    for norm in shown_norms(study):
        found = study.orders.get(norm)
        for size, why in (found.left_out if found else {}).items():
            reasons.setdefault((size, why), []).append(norm)
    lines = [
        f"n = {size} is not in the fit of {joined(norms)}: {why}" for (size, why), norms in reasons.items()
    ]
    named = {size for size, _ in reasons}
    lines += [
        f"n = {level.size}: {level.note}"
        for level in study.levels
        if level.note and str(level.size) not in named
    ]
    return [Items(entries=tuple(lines))] if lines else []


def _pictures(study: Study, info: CaseInfo | None) -> tuple[Picture, ...]:
    """Return the shape, convergence, observed order and error map."""
    words = "; ".join(
        f"{norm}: observed {interval(found)}, expected {expected_order(found)}"
        for norm, found in study.orders.items()
        if found.decides
    )
    abscissa = "n" if is_exponential(study) else "h"
    pictures = [_shape_picture(info)] if info is not None and _is_drawn(info) else []
    pictures += [
        Picture(
            key=f"errors-{study.case_id}",
            title="Convergence",
            alt=f"Errors against h, both logarithmic, {len(study.levels)} levels. {words}.",
            caption=f"Errors against {abscissa}; solid: decides, dashed: remark.",
            draw=lambda: convergence_figure(study),
        ),
        Picture(
            key=f"orders-{study.case_id}",
            title="Observed order",
            alt=f"Order between neighbouring levels against h. {words}.",
            caption="Order between neighbouring levels against h, and the expected one.",
            draw=lambda: order_figure(study),
        ),
    ]
    field = study.error_map
    if field is not None and field.points:
        worst = max(range(len(field.errors)), key=lambda k: abs(field.errors[k]))
        largest = f"largest {number(abs(field.errors[worst]))} at {vector(field.points[worst])}"
        pictures.append(
            Picture(
                key=f"map-{study.case_id}",
                title="Error map",
                alt=f"Size of the error at {len(field.points)} points for n = {field.size}: {largest}.",
                caption=f"|error| for n = {field.size}, {largest}.",
                draw=lambda: error_figure(field, info),
            )
        )
    return tuple(pictures)


def _is_drawn(info: CaseInfo) -> bool:
    return info.dim == 2 and any(len(piece.outline) > 1 for piece in info.pieces)


def _shape_picture(info: CaseInfo) -> Picture:
    """Return the shape of a case."""
    pieces = joined(f"{piece.name} ({piece.condition})" for piece in info.pieces)
    return Picture(
        key=f"shape-{info.id}",
        title="The problem",
        alt=f"The {info.shape} with its boundary pieces: {pieces}.",
        caption="Boundary pieces by name, lines by condition.",
        draw=lambda: case_figure(info),
    )
