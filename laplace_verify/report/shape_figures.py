"""Pictures of problems: a case with its conditions, and the problem on which a law is broken."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, TypeAlias

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.campaign.record import CaseInfo
from laplace_verify.principles import Check
from laplace_verify.problems.drawing import PieceInfo
from laplace_verify.report.style import HEIGHT, INK, SERIES, WIDTH, drawing, legend_above, new_figure

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["case_figure", "few_ticks", "law_figure"]

Mark: TypeAlias = tuple[Sequence[tuple[float, ...]], str, str]  # points, marker, label

_NAME_LETTER = 0.025  # width of a letter of a name in parts of a drawn shape
_LINES = {
    "dirichlet": ("-", SERIES[0]),
    "neumann": ((0, (5, 2)), SERIES[1]),
    "robin": ((0, (4, 1.5, 1, 1.5)), SERIES[3]),
    "periodic": ((0, (1, 1.5)), SERIES[2]),
    "axis": ((0, (8, 2, 1, 2)), SERIES[6]),
}


def case_figure(info: CaseInfo) -> Figure:
    """Return the shape of a case: its pieces by name, lines by condition, singular points marked."""
    marks: list[Mark] = []
    if info.regularity is not None and info.dim < 3:
        marks = [
            (info.regularity.singular_points, "*", "singular"),
            (info.regularity.jumps, "x", "jump of data"),
        ]
    return _figure(info.pieces, info.dim, marks)


def law_figure(check: Check) -> Figure:
    """Return the problem in the plane on which a law is broken, and where."""
    return _figure(check.pieces, 2, [(check.points, "x", "broken here")])


def _figure(pieces: Sequence[PieceInfo], dim: int, marks: Sequence[Mark]) -> Figure:
    """Return pieces by name, lines by condition, and marked points."""
    with drawing():
        figure = new_figure(WIDTH, HEIGHT)
        axes = figure.add_subplot(projection="3d" if dim == 3 else None)
        rows = [row for piece in pieces for row in piece.outline]
        sides = np.ptp(np.asarray(rows, dtype=np.float64), axis=0) if rows else np.ones(dim)
        extent = float(sides.max())
        seen: set[str] = set()
        for piece in pieces:
            label = "" if piece.condition in seen else piece.condition
            _draw_piece(axes, piece, dim, label=label, extent=extent)
            seen.add(piece.condition)
        for points, marker, label in marks:
            _draw_points(axes, points, dim, marker, label)
        axes.set_xlabel("x")
        if dim == 1:
            axes.set_yticks([])
            axes.set_ylim(-1, 1)
            axes.spines["left"].set_visible(False)
        else:
            axes.set_ylabel("y")
            axes.set_aspect("equal")
            axes.margins(0.12)
            if dim == 2:
                few_ticks(axes, sides)
        legend_above(axes)
        return figure


def few_ticks(axes: Axes, extent: Array) -> None:
    """Take as many ticks as a shape of this width and height has room for."""
    width, height = extent.tolist()
    axes.locator_params(axis="x", nbins=2 if width < 0.3 * height else 5)
    axes.locator_params(axis="y", nbins=2 if height < 0.3 * width else 5)


def _draw_piece(axes: Axes, piece: PieceInfo, dim: int, *, label: str, extent: float) -> None:
    """Draw one piece of a shape of this extent, and its name where the piece is long enough for it."""
    line = np.asarray(piece.outline, dtype=np.float64)
    if not line.size:
        return
    style, colour = _LINES.get(piece.condition, ("-", INK))
    if dim == 1:
        axes.plot(line[:, 0], np.zeros(len(line)), "s", color=colour, label=label or None)
        axes.annotate(piece.name, (line[0, 0], 0.0), xytext=(0, 9), textcoords="offset points", ha="center")
    elif dim == 2:
        axes.plot(line[:, 0], line[:, 1], color=colour, linestyle=style, linewidth=2.0, label=label or None)
        length = float(np.linalg.norm(np.diff(line, axis=0), axis=1).sum())
        if len(piece.name) * _NAME_LETTER * extent > length:
            return
        middle = line[len(line) // 2] if len(line) > 2 else line.mean(axis=0)
        axes.annotate(
            piece.name, (middle[0], middle[1]), ha="center", va="center", fontsize=8,
            bbox={"boxstyle": "round,pad=0.15", "facecolor": "white", "edgecolor": "none", "alpha": 0.85},
        )  # fmt: skip
    else:
        axes.plot(*line.T, ".", color=colour, markersize=2.0, label=label or None)


def _draw_points(axes: Axes, points: Sequence[tuple[float, ...]], dim: int, marker: str, label: str) -> None:
    """Mark points, if there are any."""
    if points:
        place = np.asarray(points, dtype=np.float64)
        y = place[:, 1] if dim == 2 else np.zeros(len(place))
        axes.plot(
            place[:, 0], y, marker, color=SERIES[3], markersize=8, linestyle="none", label=label, zorder=5
        )
