"""Convergence figures: error against h, observed order against h, and verdicts by regularity.

Drawn from the record alone. Each returns a figure with the Agg canvas; nothing is shown and no global state
is kept.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import TYPE_CHECKING

from laplace_verify.measure.results import Level, Study
from laplace_verify.report.style import (
    HEIGHT,
    INK,
    MARKERS,
    QUIET,
    SERIES,
    WIDTH,
    drawing,
    legend_above,
    log_axis,
    new_figure,
)
from laplace_verify.report.text import is_exact, order

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["convergence_figure", "is_exponential", "order_figure", "shown_norms"]

_MOST = 6  # more lines than this cannot be told apart


def shown_norms(study: Study) -> list[str]:
    """Return the norms a figure or table shows: those that decide, then the usual ones, at most six."""
    usual = [norm for norm in ("max", "L1", "L2", "H1-semi") if norm in study.orders]
    measured = [
        norm for level in study.levels for norm in level.errors if norm in ("max", "L1", "L2", "H1-semi")
    ]
    return list(dict.fromkeys([*study.deciding, *usual, *measured]))[:_MOST]


def is_exponential(study: Study) -> bool:
    """Return whether the deciding norms are expected to converge exponentially: then size is the abscissa."""
    return any(study.orders[norm].expected == "exponential" for norm in study.deciding)


def convergence_figure(study: Study) -> Figure:
    """Return errors against h (or against size if convergence is exponential), with the expected slopes.

    Deciding norms are solid with filled markers, others thin and dashed; a hollow marker is a level that
    did not enter the fit.
    """
    with drawing():
        figure = new_figure(WIDTH, HEIGHT)
        axes = figure.add_subplot()
        exponential = is_exponential(study)
        slopes: dict[float, tuple[float, float]] = {}
        for place, norm in enumerate(shown_norms(study)):
            _error_line(axes, study, norm, place, exponential)
            found = study.orders.get(norm)
            if found and found.decides and isinstance(found.expected, float | int) and not is_exact(found):
                anchor = _first_point(study, norm)
                # One guide a slope, below the lowest curve of that slope.
                if anchor and (found.expected not in slopes or anchor[1] < slopes[found.expected][1]):
                    slopes[found.expected] = anchor
        for expected, anchor in slopes.items() if not exponential else ():
            _slope_guide(axes, study.levels, expected, anchor)
        _finish_errors(axes, study, exponential)
        return figure


def _error_line(axes: Axes, study: Study, norm: str, place: int, exponential: bool) -> None:
    """Draw one norm; zero errors have no place on a logarithmic axis and are left out."""
    pairs = [(level, level.errors.get(norm, math.nan)) for level in study.levels]
    usable = [(level, error) for level, error in pairs if error > 0 and math.isfinite(error)]
    if not usable:
        return
    x = [float(level.size) if exponential else level.h for level, _ in usable]
    y = [error for _, error in usable]
    found = study.orders.get(norm)
    decides = found is not None and found.decides
    colour, marker = SERIES[place % len(SERIES)], MARKERS[place % len(MARKERS)]
    axes.plot(
        x, y, color=colour, linestyle="-" if decides else (0, (4, 2)), linewidth=1.5 if decides else 0.9,
        marker=marker, label=norm,
    )  # fmt: skip
    left_out = found.left_out if found else {}
    out = [k for k, (level, _) in enumerate(usable) if not level.judged or str(level.size) in left_out]
    if out:
        axes.plot(
            [x[k] for k in out], [y[k] for k in out], linestyle="none", marker=marker,
            markerfacecolor="white", markeredgecolor=colour,
        )  # fmt: skip


def _first_point(study: Study, norm: str) -> tuple[float, float] | None:
    """Return (h, error) of the coarsest judged level whose error can be drawn."""
    left_out = study.orders[norm].left_out
    for level in study.levels:
        error = level.errors.get(norm, math.nan)
        judged = level.judged and str(level.size) not in left_out
        if judged and level.h > 0 and error > 0 and math.isfinite(error):
            return level.h, error
    return None


def _slope_guide(axes: Axes, levels: Sequence[Level], expected: float, anchor: tuple[float, float]) -> None:
    """Draw a dotted line of the expected slope from just below the coarsest judged error.

    A curve that leaves it upwards falls short.
    """
    start, error = anchor
    stop = min((level.h for level in levels if level.h > 0), default=start)
    if not stop < start:
        return
    ends = [0.7 * error, 0.7 * error * (stop / start) ** expected]
    axes.plot([start, stop], ends, color=INK, linestyle=(0, (1, 1.5)), linewidth=1.2)
    axes.annotate(
        f"slope {order(expected)}",
        (stop, ends[1]),
        xytext=(6, -8),
        textcoords="offset points",
        fontsize=8,
        color=INK,
    )


def _finish_errors(axes: Axes, study: Study, exponential: bool) -> None:
    """Set axes, grid and legend."""
    axes.margins(y=0.1)
    if exponential:
        axes.set_xlabel("size n")
        log_axis(axes, "y")
    else:
        axes.set_xlabel("h  (finer to the left)")
        log_axis(axes, "x")
        log_axis(axes, "y")
    axes.set_ylabel("error")
    axes.grid(True)
    if axes.get_legend_handles_labels()[0]:
        legend_above(axes)
    else:
        _nothing(
            axes, "no level gave an error that can be drawn" if study.levels else "no level was measured"
        )


def order_figure(study: Study) -> Figure:
    """Return the order between neighbouring levels against h, with expected order and fitted interval.

    The band is observed -+ 2 standard errors of the first deciding norm; the floor line is the lowest order
    that the stated tolerance still accepts.
    """
    with drawing():
        figure = new_figure(WIDTH, HEIGHT)
        axes = figure.add_subplot()
        drawn: list[float] = []
        for place, norm in enumerate(shown_norms(study)):
            drawn += _order_line(axes, study, norm, place)
        expected = _expected_lines(axes, study) if drawn else []
        if drawn:
            _frame_orders(axes, drawn + expected)
            log_axis(axes, "x")
            legend_above(axes)
        else:
            exact = any(is_exact(found) for found in study.orders.values())
            _nothing(axes, "errors at round-off: no order" if exact else "fewer than two errors: no order")
        axes.set_xlabel("h  (between two levels)")
        axes.set_ylabel("observed order")
        axes.grid(True)
        return figure


def _order_line(axes: Axes, study: Study, norm: str, place: int) -> list[float]:
    """Draw the orders of one norm at the geometric mean of each pair of h; return them."""
    found = study.orders.get(norm)
    if found is None or is_exact(found):
        return []
    middles = [math.sqrt(a.h * b.h) for a, b in zip(study.levels, study.levels[1:], strict=False)]
    points = [
        (h, p) for h, p in zip(middles, found.pairs, strict=False) if p is not None and math.isfinite(p)
    ]
    if not points:
        return []
    colour, marker = SERIES[place % len(SERIES)], MARKERS[place % len(MARKERS)]
    axes.plot(
        [h for h, _ in points], [p for _, p in points], color=colour, marker=marker,
        linestyle="-" if found.decides else (0, (4, 2)), linewidth=1.5 if found.decides else 0.9,
        label=norm,
    )  # fmt: skip
    if found.decides and found.low is not None and found.high is not None and place == 0:
        axes.axhspan(found.low, found.high, color=colour, alpha=0.13, linewidth=0)
    return [p for _, p in points]


def _expected_lines(axes: Axes, study: Study) -> list[float]:
    """Draw expected order and lowest accepted order of the deciding norms; return the expected ones."""
    heights: dict[float, float | None] = {}
    for norm in study.deciding:
        found = study.orders[norm]
        if isinstance(found.expected, float | int):
            heights.setdefault(float(found.expected), found.tolerance)
    for expected, tolerance in heights.items():
        axes.axhline(expected, color=INK, linestyle=(0, (1, 1.5)), linewidth=1.2)
        axes.annotate(
            f"expected {order(expected)}", (1.0, expected), xycoords=("axes fraction", "data"),
            xytext=(0, 4), textcoords="offset points", ha="right", va="bottom", fontsize=7.5,
        )  # fmt: skip
        if tolerance is not None:
            axes.axhline(expected - tolerance, color=QUIET, linestyle=(0, (5, 3)), linewidth=0.8)
    return list(heights)


def _frame_orders(axes: Axes, values: Sequence[float]) -> None:
    """Keep wild orders of coarse levels from flattening the rest: 1.5 above and below the middle half."""
    ranked = sorted(values)
    low, high = ranked[len(ranked) // 4], ranked[(3 * len(ranked)) // 4]
    bottom, top = max(ranked[0], low - 1.5), min(ranked[-1], high + 1.5)
    margin = max(0.15 * (top - bottom), 0.5)
    axes.set_ylim(bottom - margin, top + margin)


def _nothing(axes: Axes, reason: str) -> None:
    """Say in the figure why it is empty."""
    axes.text(0.5, 0.5, reason, ha="center", va="center", transform=axes.transAxes, color=QUIET)
    axes.set_xticks([])
    axes.set_yticks([])
