"""How figures look: a palette for colour-blind readers and grey print, and matplotlib kept to itself.

Colours were chosen here; they differ in lightness as well as in hue, and every series has a marker of its
own. Nothing touches `matplotlib.pyplot` or leaves a changed setting behind.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from contextlib import contextmanager
from contextvars import ContextVar
from typing import TYPE_CHECKING, Any

from laplace_verify.measure.verdict import Verdict
from laplace_verify.report.text import power_of_ten

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = [
    "HEIGHT",
    "INK",
    "MARKERS",
    "QUIET",
    "SERIES",
    "TICK_LABELS",
    "VERDICT_COLOURS",
    "WIDTH",
    "decade",
    "drawing",
    "legend_above",
    "log_axis",
    "new_figure",
    "round_numbers",
]

WIDTH, HEIGHT = 3.4, 2.7  # inches; two stand beside one another on a printed page
TICK_LABELS = 8.0  # points
_LEGEND_COLUMNS = 4
INK = "#1d2b33"
QUIET = "#66737a"
SERIES = ("#14506b", "#d1671b", "#5b9279", "#8c3b63", "#b59a22", "#4a4e9e", "#6f7c80")
MARKERS = ("o", "s", "^", "D", "v", "P", "X")
VERDICT_COLOURS = {
    Verdict.PASS: "#0d6b57",
    Verdict.FAIL: "#a8321a",
    Verdict.INCONCLUSIVE: "#c79a2b",
    Verdict.ERROR: "#77296b",
    Verdict.NOT_APPLICABLE: "#9aa5aa",
    Verdict.NOT_RUN: "#d5dbdd",
}
_SETTINGS: dict[str, Any] = {
    "axes.edgecolor": QUIET,
    "axes.labelcolor": INK,
    "axes.linewidth": 0.8,
    "axes.spines.right": False,
    "axes.spines.top": False,
    "axes.titlesize": 9.5,
    "figure.facecolor": "none",
    "font.family": "sans-serif",
    "font.sans-serif": ["DejaVu Sans", "Verdana", "Arial"],  # near in width, if a reader lacks the first
    "font.size": 9.0,
    "grid.color": "#dfe5e6",
    "grid.linewidth": 0.6,
    "legend.fontsize": 8.0,
    "legend.frameon": False,
    "lines.linewidth": 1.4,
    "lines.markersize": 5.0,
    "pdf.fonttype": 3,
    "savefig.facecolor": "none",
    "svg.fonttype": "none",
    "svg.hashsalt": "laplace-verify",
    "text.color": INK,
    "xtick.color": QUIET,
    "xtick.labelcolor": INK,
    "xtick.labelsize": TICK_LABELS,
    "ytick.color": QUIET,
    "ytick.labelcolor": INK,
    "ytick.labelsize": TICK_LABELS,
}


_inside: ContextVar[bool] = ContextVar("_inside", default=False)


@contextmanager
def drawing() -> Iterator[None]:
    """Draw or save with our settings on matplotlib's own defaults, whatever the user has set.

    Inside another such block nothing is done: changing the settings takes a millisecond.
    """
    if _inside.get():
        yield
        return
    import matplotlib

    defaults: dict[str, Any] = {
        key: value for key, value in matplotlib.rcParamsDefault.items() if not key.startswith("backend")
    }
    settings: Any = defaults | _SETTINGS  # the keys are known to matplotlib only
    token = _inside.set(True)
    try:
        with matplotlib.rc_context(settings):
            yield
    finally:
        _inside.reset(token)


def new_figure(width: float, height: float, *, left: float = 0.62, top: float = 0.5) -> Figure:
    """Return an empty figure of this size in inches that draws itself with Agg.

    The margins are fixed, with room for two lines of legend above: computing them takes as long as drawing.
    """
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    figure = Figure(figsize=(width, height))
    figure.subplots_adjust(
        left=left / width, right=1 - 0.1 / width, bottom=0.5 / height, top=1 - top / height
    )
    FigureCanvasAgg(figure)
    return figure


def legend_above(axes: Axes) -> None:
    """Put the legend above the axes, where no curve can be, row by row (matplotlib fills columns)."""
    handles, labels = axes.get_legend_handles_labels()
    figure = axes.get_figure(root=True)
    if not labels or figure is None:
        return
    columns = min(len(labels), _LEGEND_COLUMNS)
    order = [k for column in range(columns) for k in range(column, len(labels), columns)]
    axes.legend(
        [handles[k] for k in order], [labels[k] for k in order], loc="upper left",
        bbox_to_anchor=(0.02, 1.0), bbox_transform=figure.transFigure, borderaxespad=0.2,
        ncols=columns, handlelength=1.9, columnspacing=0.9, handletextpad=0.5,
    )  # fmt: skip


def log_axis(axes: Axes, which: str) -> None:
    """Make the x or y axis logarithmic, with few ticks at round numbers and plain superscripts."""
    from matplotlib.ticker import FixedLocator, FuncFormatter, NullLocator

    getattr(axes, f"set_{which}scale")("log")
    axis = axes.xaxis if which == "x" else axes.yaxis
    low, high = sorted(axis.get_view_interval())
    axis.set_major_locator(FixedLocator(round_numbers(low, high)))
    axis.set_minor_locator(NullLocator())
    axis.set_major_formatter(FuncFormatter(lambda value, _: decade(value)))


def round_numbers(low: float, high: float) -> list[float]:
    """Return at most eight, and if it can be at least three, round numbers between two positive limits.

    >>> round_numbers(0.01, 2.0), round_numbers(0.1, 0.5)
    ([0.01, 0.1, 1.0], [0.1, 0.2, 0.5])
    """
    if not 0 < low < high < math.inf:
        return []
    first, last = math.floor(math.log10(low)), math.ceil(math.log10(high))
    step = max((last - first) // 7, 1)
    found: list[float] = []
    for digits in ((1.0,), (1.0, 3.0), (1.0, 2.0, 5.0), (1.0, 1.5, 2.0, 3.0, 4.0, 5.0, 7.0)):
        every = [digit * 10.0**power for power in range(first, last + 1, step) for digit in digits]
        found = [tick for tick in every if low <= tick <= high]
        if len(found) >= 3:
            break
    return found


def decade(value: float) -> str:
    """Return the label of a tick: a power of ten as such, others with the digits they need.

    >>> decade(1e-5), decade(0.02), decade(3e-4), decade(1.0)
    ('10⁻⁵', '0.02', '3·10⁻⁴', '1')
    """
    if not value > 0:
        return "0"
    exponent = math.floor(math.log10(value) + 1e-9)
    if -3 < exponent < 4:
        return f"{value:g}"
    mantissa = f"{value / 10.0**exponent:.2g}"
    return power_of_ten(exponent) if mantissa == "1" else f"{mantissa}·{power_of_ten(exponent)}"
