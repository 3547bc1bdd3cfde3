"""One figure for a whole record: how far each case falls short of its expected order."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from laplace_verify.campaign.record import Record
from laplace_verify.measure.results import Study
from laplace_verify.measure.verdict import Verdict
from laplace_verify.report.style import INK, QUIET, VERDICT_COLOURS, drawing, new_figure
from laplace_verify.report.text import VERDICT_WORDS, shortfall, worst_norm

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["summary_figure"]

_MARKS = {Verdict.PASS: "o", Verdict.FAIL: "X", Verdict.INCONCLUSIVE: "D", Verdict.ERROR: "s"}
_WIDTH = 4.8  # inches
_REACH = 2.5  # orders; what lies beyond is drawn at the edge


def summary_figure(record: Record) -> Figure:
    """Return observed less expected order, one row a case, with its interval.

    Cases without an algebraic order (exact, exponential, broken, not run) have no place on the axis; their
    rows say so.
    """
    studies = [s for s in record.studies if s.verdict not in (Verdict.NOT_APPLICABLE, Verdict.NOT_RUN)]
    with drawing():
        names = [_cut(study.case_id) for study in studies]
        left = 0.25 + 0.062 * max(map(len, names), default=0)  # of an inch, a letter
        figure = new_figure(_WIDTH, 0.9 + 0.17 * max(len(studies), 3), left=left, top=0.35)
        axes = figure.add_subplot()
        seen: set[Verdict] = set()
        for row, study in enumerate(studies):
            if _mark(axes, row, study, label="" if study.verdict in seen else VERDICT_WORDS[study.verdict]):
                seen.add(study.verdict)
        axes.axvline(0.0, color=INK, linewidth=0.9)
        axes.set_yticks(range(len(studies)), names)
        axes.tick_params(axis="y", labelsize=7.5)
        axes.set_ylim(len(studies) - 0.4, -0.6)
        axes.set_xlim(-_REACH - 0.1, _REACH + 0.1)
        axes.set_xlabel("observed less expected order")
        axes.grid(True, axis="x")
        if not studies:
            axes.text(0.5, 0.5, "no case ran", transform=axes.transAxes, ha="center", color=QUIET)
        elif axes.get_legend_handles_labels()[0]:
            axes.legend(
                loc="lower right", bbox_to_anchor=(1.0, 1.0), ncols=4, handlelength=1.2, columnspacing=1.0
            )
        return figure


def _mark(axes: Axes, row: int, study: Study, label: str) -> bool:
    """Draw the mark of one study, or say why it has none; return whether there is a mark."""
    norm = worst_norm(study)
    found = study.orders[norm] if norm else None
    gap = shortfall(found) if found else None
    colour = VERDICT_COLOURS[study.verdict]
    if found is None or gap is None or math.isnan(gap):
        axes.text(0.0, row, f"  {_why_no_number(study, norm)}", va="center", fontsize=7, color=colour)
        return False
    x = min(max(gap, -_REACH), _REACH)
    if found.low is not None and found.high is not None and isinstance(found.expected, float | int):
        ends = [min(max(end - found.expected, -_REACH), _REACH) for end in (found.low, found.high)]
        axes.plot(ends, [row, row], color=colour, linewidth=1.4)
    if found.tolerance is not None:
        axes.plot([-found.tolerance], [row], marker="|", color=QUIET, markersize=6)
    axes.plot(
        [x], [row], linestyle="none", marker=_MARKS.get(study.verdict, "o"), color=colour, label=label or None
    )  # fmt: skip
    if norm:
        axes.annotate(norm, (_REACH, row), ha="right", va="center", fontsize=7, color=QUIET)
    return True


def _why_no_number(study: Study, norm: str | None) -> str:
    """Return, in two words, why a study has no place on the axis of orders."""
    if study.verdict is Verdict.ERROR:
        return "error"
    found = study.orders.get(norm) if norm else None
    if found is None and not study.orders:
        return f"{VERDICT_WORDS[study.verdict]}, no order to observe"
    if found is None:
        return f"{VERDICT_WORDS[study.verdict]}, no norm decides"
    if isinstance(found.expected, str):
        return f"{found.expected}: {VERDICT_WORDS[study.verdict]}"
    return "exact" if study.verdict is Verdict.PASS else VERDICT_WORDS[study.verdict]


def _cut(name: str) -> str:
    """Return a name short enough for the margin."""
    return name if len(name) <= 44 else f"{name[:42]}…"
