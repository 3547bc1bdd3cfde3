"""Frames, grids, ticks and labels of a finished figure as plain lines and texts.

matplotlib draws an axis tick by tick, each of several artists, and measures every label to place the next:
two thirds of the time a report takes. Here one path holds the grid, one the frame with its ticks, and
labels go where the margins leave room. The look is the same, but the axes no longer follow a change of their
limits: this is for figures about to be written, not for those handed to a user.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from laplace_verify.report.style import TICK_LABELS, drawing

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.axis import Axis
    from matplotlib.figure import Figure

__all__ = ["plain_axes"]

_TICK, _PAD = 3.0, 3.0  # length of a tick and space to its label, in points
_LETTER = 0.62  # width of a digit in parts of the size of the type
_FRAME = {"left": (0, 0, 0, 1), "right": (1, 0, 1, 1), "bottom": (0, 0, 1, 0), "top": (0, 1, 1, 1)}


def plain_axes(figure: Figure) -> None:
    """Replace the parts of all plane axes by lines and texts; axes in space stay as they are."""
    with drawing():
        for axes in figure.axes:
            if axes.name == "rectilinear" and axes.axison:
                axes.apply_aspect()
                _lines(axes)
                _labels(axes)
                axes.set_axis_off()


def _lines(axes: Axes) -> None:
    """Draw grid, ticks and frame, all in parts of the axes."""
    import matplotlib
    from matplotlib.patches import PathPatch
    from matplotlib.path import Path

    width, height = _points(axes)
    x, y = (_ticks(axes, axis)[0] for axis in (axes.xaxis, axes.yaxis))
    grid: list[list[tuple[float, float]]] = []
    grid += [[(at, 0.0), (at, 1.0)] for at in x if axes.xaxis.get_tick_params()["gridOn"]]
    grid += [[(0.0, at), (1.0, at)] for at in y if axes.yaxis.get_tick_params()["gridOn"]]
    edge, out = (1.0, _TICK / width) if _on_right(axes) else (0.0, -_TICK / width)
    frame = [[(at, 0.0), (at, -_TICK / height)] for at in x]
    frame += [[(edge, at), (edge + out, at)] for at in y]
    frame += [
        [(x0, y0), (x1, y1)] for name, (x0, y0, x1, y1) in _FRAME.items() if axes.spines[name].get_visible()
    ]
    look = matplotlib.rcParams
    for lines, colour, thick, order in (
        (grid, look["grid.color"], look["grid.linewidth"], 0.5),
        (frame, look["axes.edgecolor"], look["axes.linewidth"], 2.5),
    ):
        if lines:
            path = Path(np.concatenate(lines), [Path.MOVETO, Path.LINETO] * len(lines))
            axes.add_artist(
                PathPatch(
                    path, fill=False, edgecolor=colour, linewidth=thick, zorder=order,
                    transform=axes.transAxes, clip_on=False,
                )
            )  # fmt: skip


def _labels(axes: Axes) -> None:
    """Write the labels of ticks and axes."""
    width, height = _points(axes)
    right = _on_right(axes)
    below, beside = -(_TICK + _PAD) / height, (_TICK + _PAD) / width
    place: dict[str, Any] = {"transform": axes.transAxes, "clip_on": False}
    x_size, y_size = _type_size(axes.xaxis), _type_size(axes.yaxis)
    across, up = _ticks(axes, axes.xaxis), _ticks(axes, axes.yaxis)
    for at, text in zip(*across, strict=True):
        axes.text(at, below, text, ha="center", va="top", fontsize=x_size, **place)
    for at, text in zip(*up, strict=True):
        axes.text(
            1.0 + beside if right else -beside, at, text, ha="left" if right else "right",
            va="center_baseline", fontsize=y_size, **place,
        )  # fmt: skip
    label = axes.xaxis.get_label()
    if label.get_text():
        drop = below - (1.25 * x_size * bool(across[1]) + 1.0) / height
        axes.text(0.5, drop, label.get_text(), ha="center", va="top", fontsize=label.get_fontsize(), **place)
    label = axes.yaxis.get_label()
    if label.get_text():
        room = _LETTER * y_size * max(map(len, up[1]), default=0) + _PAD
        axes.text(
            1.0 + beside + room / width if right else -beside - room / width, 0.5, label.get_text(),
            rotation=90, ha="left" if right else "right", va="center", fontsize=label.get_fontsize(), **place,
        )  # fmt: skip


def _ticks(axes: Axes, axis: Axis) -> tuple[list[float], list[str]]:
    """Return place, in parts of the axes, and label of every tick inside the limits."""
    along = 0 if axis is axes.xaxis else 1
    values = np.atleast_1d(np.asarray(axis.get_majorticklocs(), dtype=np.float64))
    texts = axis.get_major_formatter().format_ticks(values.tolist())
    corners = np.array([axes.get_xlim()[0], axes.get_ylim()[0]])
    points = np.tile(corners, (len(values), 1))
    points[:, along] = values
    places = (
        (axes.transData + axes.transAxes.inverted()).transform(points)[:, along] if len(values) else values
    )
    inside = [k for k, at in enumerate(places.tolist()) if -1e-9 <= at <= 1 + 1e-9]
    return [float(places[k]) for k in inside], [texts[k] for k in inside]


def _points(axes: Axes) -> tuple[float, float]:
    """Return width and height of the axes in points."""
    box = axes.get_position()
    figure = axes.get_figure(root=True)
    if figure is None:  # axes that were taken out of their figure
        return 1.0, 1.0
    return 72 * box.width * figure.get_figwidth(), 72 * box.height * figure.get_figheight()


def _on_right(axes: Axes) -> bool:
    return axes.yaxis.get_ticks_position() == "right"


def _type_size(axis: Axis) -> float:
    """Return the size of the tick labels in points."""
    return float(axis.get_tick_params().get("labelsize", TICK_LABELS))
