"""The cells of `plate_cells` for a sum of problems with data on one side each of the same rectangle."""

from __future__ import annotations

import math
from collections.abc import Sequence
from fractions import Fraction

import numpy as np

from laplace_verify.arrays import BoolArray
from laplace_verify.fields.plate_cells import REACH, TERMS, Axis, Cells, ComplexArray, Places
from laplace_verify.fields.plate_cells_fit import FRAMES, HalfProblem, NotAnalytic, fitted
from laplace_verify.fields.plate_cells_layout import Intervals, intervals_across, intervals_along

__all__ = ["tabulated"]

SMALLEST = 1e-8  # extent: powers of offsets must not overflow
MOST_PLACES = 6  # summed for a cell
DEEP = 12  # extents along the side with data: beyond them a single problem has faded to rounding

Point = tuple[Fraction, Fraction]
Bilinear = tuple[Fraction, Fraction, Fraction, Fraction]
NOTHING: Bilinear = (Fraction(0),) * 4


def tabulated(
    problems: Sequence[HalfProblem], lower: Point, upper: Point, bilinear: Bilinear = NOTHING
) -> Cells | None:
    """Return the cells of the sum of problems plus c0 + c1 X + c2 Y + c3 X Y, X and Y counted from `lower`.

    None if the rectangle is too slender or too small, or data are steeper than cells can tell.
    """
    size = (upper[0] - lower[0], upper[1] - lower[1])
    corners = [[_point(problem.side, place, size) for place, _ in problem.places] for problem in problems]
    axes = _axes(problems, size, [p for points in corners for p in points])
    if axes is None:
        return None
    x, y, served = axes
    near = [_near(x, y, points, served) for points in corners]
    value = np.zeros((TERMS, len(near[0])), dtype=np.complex128)
    slope = np.zeros((TERMS - 1, len(near[0])), dtype=np.complex128)
    served &= np.array([sum(map(len, lists)) <= MOST_PLACES for lists in zip(*near, strict=True)])
    for problem, numbers in zip(problems, near, strict=True):
        try:
            found = fitted(problem, x, y, numbers, served)
        except NotAnalytic:
            return None
        value += found[0]
        slope += found[1]
    background = _background(x, y, bilinear)
    value[:3] += background
    slope[:2] += np.array([[1.0], [2.0]]) * background[1:]
    starts = np.cumsum([0] + [len(points) for points in corners])
    joined = [
        [start + k for start, numbers in zip(starts, lists, strict=False) for k in numbers] if good else []
        for lists, good in zip(zip(*near, strict=True), served, strict=True)
    ]
    count = np.array([len(numbers) for numbers in joined])
    rows = np.zeros((int(count.max()), len(joined)), dtype=np.int64)
    for cell, numbers in enumerate(joined):
        rows[: len(numbers), cell] = numbers
    return Cells(
        x=_axis(x, lower[0]), y=_axis(y, lower[1]), value=value, slope=slope, count=count, near=rows,
        places=_places(problems, corners, lower), served=served,
    )  # fmt: skip


def _background(x: Intervals, y: Intervals, bilinear: Bilinear) -> ComplexArray:
    """Return the coefficients of F with Re F = c0 + c1 X + c2 Y + c3 X Y, shape (3, cells)."""
    c0, c1, c2, c3 = (float(c) for c in bilinear)
    across, along = (part.ravel() for part in np.meshgrid(x.low, y.low, indexing="ij"))
    level = c0 + c1 * across + (c2 + c3 * across) * along
    return np.stack([level + 0j, (c1 + c3 * along) - 1j * (c2 + c3 * across), 0 * across - 0.5j * c3])


def _point(side: str, place: Fraction, size: Point) -> Point:
    """Return a place on a side, or on its line, as a point."""
    far = {"top": size[1], "right": size[0]}.get(side, Fraction(0))
    return (place, far) if side in ("top", "bottom") else (far, place)


def _axes(
    problems: Sequence[HalfProblem], size: Point, points: list[Point]
) -> tuple[Intervals, Intervals, BoolArray] | None:
    """Return the intervals of both axes, and which cells are wanted."""
    axis = 0 if size[0] >= size[1] else 1
    length, across = size[axis], size[1 - axis]
    if not SMALLEST < across < 1 / SMALLEST:
        return None
    deep = len(problems) == 1 and (problems[0].side in ("left", "right")) == (axis == 0)
    widest = min([0.35 * float(across) if deep else math.inf, *(problem.widest for problem in problems)])
    along = intervals_along(
        length, across, [p[axis] for p in points], widest,
        wanted=DEEP * across if deep else length, backward=problems[0].side in ("top", "right"),
    )  # fmt: skip
    if along is None:
        return None
    pair = (along, intervals_across(across))
    x, y = pair if axis == 0 else pair[::-1]
    served = np.ones((len(x.centre), len(y.centre)), dtype=bool)
    if along.unwanted is not None:
        served[(along.unwanted, slice(None)) if axis == 0 else (slice(None), along.unwanted)] = False
    return x, y, served.ravel()


def _near(x: Intervals, y: Intervals, points: list[Point], served: BoolArray) -> list[list[int]]:
    """Return for every cell that is served the numbers of the points within `REACH` radii of its centre."""
    radius = np.hypot.outer(np.maximum(x.below, x.above), np.maximum(y.below, y.above))
    found: list[list[int]] = [[] for _ in range(radius.size)]
    for number, (px, py) in enumerate(points):
        dx, dy = (np.array([float(c - p) for c in axis.centre]) for axis, p in ((x, px), (y, py)))
        for cell in np.flatnonzero((np.hypot.outer(dx, dy) < REACH * radius).ravel() & served):
            found[cell].append(number)
    return found


def _axis(intervals: Intervals, low: Fraction) -> Axis:
    """Return an axis with its lower end at `low`."""
    centres = [low + c for c in intervals.centre]
    high = [float(c) for c in centres]
    return Axis(
        low=float(low), high=float(low + intervals.length),
        per_length=float(len(intervals.interval) / intervals.length), interval=intervals.interval,
        centre=np.array(high),
        centre_rest=np.array([float(c - Fraction(h)) for c, h in zip(centres, high, strict=True)]),
    )  # fmt: skip


def _places(problems: Sequence[HalfProblem], corners: list[list[Point]], lower: Point) -> Places:
    """Return the places of all problems as numbers."""
    rows: list[list[float]] = []
    jumps: list[list[float]] = []
    turns: list[complex] = []
    for problem, points in zip(problems, corners, strict=True):
        for point, (_, jump) in zip(points, problem.places, strict=True):
            exact = [a + b for a, b in zip(point, lower, strict=True)]
            high = [float(c) for c in exact]
            rows.append([*high, *(float(c - Fraction(h)) for c, h in zip(exact, high, strict=True))])
            jumps.append(list(jump))
            turns.append(FRAMES[problem.side][1])
    width = max((k + 1 for row in jumps for k, c in enumerate(row) if c), default=1)
    table = np.zeros((len(jumps), width))
    for own, row in zip(table, jumps, strict=True):
        own[: len(row)] = row[:width]
    slope = table[:, 1:] * np.arange(1, width)
    turn = np.array(turns, dtype=np.complex128)
    return Places(
        point=np.array(rows).reshape(-1, 4).T.copy(), along=np.stack([turn.real, turn.imag]),
        jump=table, slope=slope, quotient=table[:, 1:].copy(), one_way=len(problems) == 1 and len(jumps) > 0,
    )  # fmt: skip
