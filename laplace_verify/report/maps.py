"""Pictures in space: the error of the finest level.

In two dimensions every pixel inside the outline takes the error of the nearest measured point, without
interpolation. In one dimension the error is drawn against x; in three, each of three views shows the
largest error along the line of sight.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np
from scipy.spatial import cKDTree

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.campaign.record import CaseInfo, PieceInfo
from laplace_verify.measure.results import ErrorMap
from laplace_verify.report.shape_figures import few_ticks
from laplace_verify.report.style import (
    HEIGHT,
    INK,
    QUIET,
    SERIES,
    WIDTH,
    decade,
    drawing,
    log_axis,
    new_figure,
    round_numbers,
)

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["error_figure", "inside_outline"]

_PIXELS = 150
_DECADES = 4.0  # shades span at most this many powers of ten below the largest error


def error_figure(field: ErrorMap, info: CaseInfo | None) -> Figure:
    """Return where the error |u_h - u| of the finest level sits."""
    points = np.asarray(field.points, dtype=np.float64)
    errors = np.abs(np.asarray(field.errors, dtype=np.float64))
    with drawing():
        figure = new_figure(WIDTH, HEIGHT)
        if points.ndim != 2 or not len(points):
            figure.text(0.5, 0.5, "no point was measured", ha="center", color=QUIET)
        elif points.shape[1] == 1:
            _along_line(figure.add_subplot(), points[:, 0], errors)
        elif points.shape[1] == 2:
            _plane_map(figure, points, errors, info.pieces if info else ())
        else:
            _three_views(figure, points, errors)
        return figure


def _along_line(axes: Axes, x: Array, errors: Array) -> None:
    """Draw the error of a one-dimensional case against x."""
    rank = np.argsort(x, kind="stable")
    positive = errors[rank] > 0
    axes.plot(x[rank][positive], errors[rank][positive], color=SERIES[0], linewidth=1.0)
    if positive.any():
        top = float(errors.max())
        # An error that changes sign dips towards zero; the dips are no information.
        axes.set_ylim(top * 1e-4, top * 2)
        log_axis(axes, "y")
    axes.set_xlabel("x")
    axes.set_ylabel("|error|")
    axes.grid(True)


def _shades(errors: Array) -> tuple[float, float]:
    """Return the limits of log10 |error| for the shades."""
    top = float(errors.max()) if len(errors) and np.isfinite(errors).all() else math.nan
    if not top > 0:
        return -1.0, 0.0
    positive = errors[errors > 0]
    high = math.log10(top)
    low = max(math.log10(float(np.quantile(positive, 0.05))), high - _DECADES)
    return min(low, high - 0.5), high


def _logarithm(errors: Array, floor: float) -> Array:
    """Return log10 of errors, not below `floor`; NaN stays NaN."""
    logarithm: Array = np.log10(np.maximum(errors, 10.0**floor))
    return logarithm


def _plane_map(figure: Figure, points: Array, errors: Array, pieces: Sequence[PieceInfo]) -> None:
    """Draw the nearest-point map of a plane case inside its outline."""
    axes = figure.add_axes((0.17, 0.17, 0.58, 0.78))
    outline = [np.asarray(piece.outline, dtype=np.float64) for piece in pieces if len(piece.outline) > 1]
    every = np.vstack([points, *outline]) if outline else points
    lower, upper = every.min(axis=0), every.max(axis=0)
    cell = float((upper - lower).max()) / _PIXELS
    counts = np.maximum(np.ceil((upper - lower) / cell).astype(int), 1)
    x, y = (lower[k] + (np.arange(counts[k]) + 0.5) * cell for k in (0, 1))
    grid = np.stack(np.meshgrid(x, y), axis=-1).reshape(-1, 2)
    low, high = _shades(errors)
    distance, nearest = cKDTree(points).query(grid)
    values = _logarithm(errors, low)[nearest]
    inside = inside_outline(grid, outline) if outline else distance < 4 * _spacing(points)
    image = np.where(inside, values, np.nan).reshape(counts[1], counts[0])
    extent = (lower[0], lower[0] + counts[0] * cell, lower[1], lower[1] + counts[1] * cell)
    axes.imshow(
        image, origin="lower", extent=extent, cmap="cividis", vmin=low, vmax=high, interpolation="nearest"
    )
    for line in outline:
        axes.plot(line[:, 0], line[:, 1], color=INK, linewidth=0.9)
    axes.set_aspect("equal")
    margin = 0.03 * float((upper - lower).max())
    axes.set_xlim(lower[0] - margin, upper[0] + margin)
    axes.set_ylim(lower[1] - margin, upper[1] + margin)
    axes.set_xlabel("x")
    axes.set_ylabel("y")
    few_ticks(axes, upper - lower)
    _scale(figure.add_axes((0.79, 0.2, 0.03, 0.66)), low, high)


def _spacing(points: Array) -> float:
    """Return a typical distance between neighbouring points."""
    if len(points) < 2:
        return 1.0
    distance, _ = cKDTree(points).query(points, k=2)
    return float(np.median(np.asarray(distance)[:, 1]))


def inside_outline(points: Array, outline: Sequence[Array]) -> BoolArray:
    """Return which points lie inside the closed curves that the polylines make up (even-odd rule).

    A slit, walked there and back, counts twice and so does no harm.
    """
    x, y = points.T
    inside = np.zeros(len(points), dtype=np.bool_)
    for line in outline:
        for (x0, y0), (x1, y1) in zip(line[:-1].tolist(), line[1:].tolist(), strict=True):
            if y0 == y1:
                continue
            crosses = (y0 > y) != (y1 > y)
            inside[crosses] ^= x[crosses] < x0 + (y[crosses] - y0) * ((x1 - x0) / (y1 - y0))
    return inside


def _three_views(figure: Figure, points: Array, errors: Array) -> None:
    """Draw, for three directions, the largest error along the line of sight on a grid of squares."""
    low, high = _shades(errors)
    values = _logarithm(errors, low)
    lower, upper = points.min(axis=0), points.max(axis=0)
    cell = float((upper - lower).max()) / max(math.sqrt(len(points) / 6), 4.0)
    grid = np.clip(((points - lower) / cell).astype(int), 0, None)
    for left, bottom, across, up, along in (
        (0.17, 0.64, 0, 1, "z"), (0.66, 0.64, 0, 2, "y"), (0.17, 0.14, 1, 2, "x")
    ):  # fmt: skip
        axes = figure.add_axes((left, bottom, 0.3, 0.27))
        image = np.full((grid[:, up].max() + 1, grid[:, across].max() + 1), -np.inf)
        np.maximum.at(image, (grid[:, up], grid[:, across]), values)
        image[np.isneginf(image)] = np.nan
        extent = (
            lower[across], lower[across] + image.shape[1] * cell, lower[up], lower[up] + image.shape[0] * cell
        )  # fmt: skip
        axes.imshow(
            image, origin="lower", extent=extent, cmap="cividis", vmin=low, vmax=high, interpolation="nearest"
        )
        axes.set_title(f"along {along}", pad=3, fontsize=8)
        axes.set_xlabel("xyz"[across], fontsize=8)
        axes.set_ylabel("xyz"[up], fontsize=8)
        axes.locator_params(nbins=3)
        axes.tick_params(labelsize=7)
    _scale(figure.add_axes((0.62, 0.24, 0.33, 0.035)), low, high, across=True)


def _scale(axes: Axes, low: float, high: float, *, across: bool = False) -> None:
    """Draw the scale of the shades, log10 from `low` to `high`, labelled by the errors themselves."""
    from matplotlib.ticker import FixedLocator, FuncFormatter

    shades = np.linspace(low, high, 128)
    axes.imshow(
        shades[None, :] if across else shades[:, None], aspect="auto", origin="lower", cmap="cividis",
        extent=(low, high, 0.0, 1.0) if across else (0.0, 1.0, low, high),
    )  # fmt: skip
    axis, other = (axes.xaxis, axes.yaxis) if across else (axes.yaxis, axes.xaxis)
    if not across:
        axes.yaxis.tick_right()
    ticks = round_numbers(10.0**low, 10.0**high)
    step = -(-len(ticks) // 3) if across else 1  # beside one another there is room for three
    axis.set_major_locator(FixedLocator(np.log10(ticks[::step]).tolist()))
    axis.set_major_formatter(FuncFormatter(lambda value, _: decade(10.0**value)))
    axes.set_title("|error|", fontsize=8, pad=4)
    other.set_major_locator(FixedLocator([]))
    for spine in axes.spines.values():
        spine.set_visible(False)
