"""How figures look: a palette for colour-blind readers and grey print, and matplotlib kept to itself.

Colours were chosen here; they differ in lightness as well as in hue, and every series has a marker of its
own. Nothing touches `matplotlib.pyplot` or leaves a changed setting behind.
"""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from typing import TYPE_CHECKING, Any

from laplace_verify.measure.verdict import Verdict

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["INK", "MARKERS", "QUIET", "SERIES", "VERDICT_COLOURS", "drawing", "log_axis", "new_figure"]

INK = "#1d2b33"
QUIET = "#7b878d"
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
    "pdf.fonttype": 42,
    "savefig.facecolor": "none",
    "svg.fonttype": "none",
    "svg.hashsalt": "laplace-verify",
    "text.color": INK,
    "xtick.color": QUIET,
    "xtick.labelcolor": INK,
    "xtick.labelsize": 8.0,
    "ytick.color": QUIET,
    "ytick.labelcolor": INK,
    "ytick.labelsize": 8.0,
}


@contextmanager
def drawing() -> Iterator[None]:
    """Draw or save with our settings on matplotlib's own defaults, whatever the user has set."""
    import matplotlib

    defaults: dict[str, Any] = {
        key: value for key, value in matplotlib.rcParamsDefault.items() if not key.startswith("backend")
    }
    settings: Any = defaults | _SETTINGS  # the keys are known to matplotlib only
    with matplotlib.rc_context(settings):
        yield


def new_figure(width: float, height: float, *, fitted: bool = False) -> Figure:
    """Return an empty figure of this size in inches that draws itself with Agg.

    The margins are fixed, with room for two lines of legend above; `fitted` has them computed, which takes
    as long again as drawing.
    """
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    figure = Figure(figsize=(width, height), layout="constrained" if fitted else None)
    if not fitted:
        figure.subplots_adjust(
            left=0.62 / width, right=1 - 0.1 / width, bottom=0.5 / height, top=1 - 0.5 / height
        )
    FigureCanvasAgg(figure)
    return figure


def log_axis(axes: Axes, which: str) -> None:
    """Make the x or y axis logarithmic, with plain superscripts at the ticks and labels that never crowd."""
    from matplotlib.ticker import FuncFormatter, LogLocator, NullFormatter

    from laplace_verify.report.text import number, power_of_ten

    getattr(axes, f"set_{which}scale")("log")
    axis = axes.xaxis if which == "x" else axes.yaxis
    low, high = axis.get_view_interval()
    narrow = not low > 0 or high / low < 30
    axis.set_major_locator(LogLocator(subs=(1.0, 2.0, 5.0) if narrow else (1.0,), numticks=7))
    axis.set_minor_formatter(NullFormatter())

    def label(value: float, _: int) -> str:
        exponent = round(_log10(value))
        exact = abs(value / 10.0**exponent - 1) < 1e-9
        return power_of_ten(exponent) if exact and not -3 < exponent < 3 else number(value, 1)

    axis.set_major_formatter(FuncFormatter(label))


def _log10(value: float) -> float:
    import math

    return math.log10(value) if value > 0 else 0.0
