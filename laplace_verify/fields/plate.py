"""A rectangle with data on one side: the part that does not depend on how the data are given.

A family of data solves the problem as a function of the coordinate along the side with data and of the
distances d and h = b - d from it and from the opposite side; all distances are exact next to the sides.
"""

from __future__ import annotations

from abc import abstractmethod
from collections.abc import Iterable
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray, between
from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError, nearest_names
from laplace_verify.fields.base import Field
from laplace_verify.fields.exact import Exact, exact_point, offset, rational, show
from laplace_verify.fields.plate_box import Depth
from laplace_verify.fields.plate_cells import Cells, cells_gradient, cells_value
from laplace_verify.fields.plate_cells_fit import HalfProblem
from laplace_verify.fields.plate_cells_table import tabulated

__all__ = ["SIDES", "Plate", "corner_text", "in_rectangle", "opposite_corners", "side_ends"]

SIDES = {"left": (1, 0), "right": (1, 1), "bottom": (0, 0), "top": (0, 1)}  # axis along the side; low or high
CONDITIONS = ("zero", "insulated")
OUTSIDE = 1e-12  # of the longer side: how far outside a point may be put by rounding


@dataclass(frozen=True, slots=True, kw_only=True)
class Plate(Field):
    """Harmonic in the rectangle lower < (x, y) < upper, with data on `side`; see `rectangle_series`."""

    lower: tuple[Exact, ...]
    upper: tuple[Exact, ...]
    side: str = "top"
    neighbours: str = "zero"
    far: str = "zero"

    def __post_init__(self) -> None:
        """Make the corners exact and check the words.

        Raises
        ------
        FieldError
            If the corners are not those of a rectangle or a word is unknown.
        """
        lower, upper = opposite_corners(self.lower, self.upper)
        object.__setattr__(self, "lower", lower)
        object.__setattr__(self, "upper", upper)
        for name, given, known in (
            ("side", self.side, tuple(SIDES)),
            ("neighbours", self.neighbours, CONDITIONS),
            ("far", self.far, CONDITIONS),
        ):
            if given not in known:
                raise FieldError(
                    f"{name} must be one of {', '.join(known)}, got {given!r}; {_nearest(given, known)}"
                )

    @property
    def dim(self) -> int:
        """2."""
        return 2

    @property
    def even(self) -> bool:
        """Whether the data continue as an even function: insulated neighbours."""
        return self.neighbours == "insulated"

    @property
    def ends(self) -> tuple[Fraction, Fraction]:
        """Coordinates along the side of its two ends."""
        return side_ends(self.lower, self.upper, self.side)

    @property
    def depth(self) -> Depth:
        """Extent across the side, and what is opposite."""
        axis = 1 - SIDES[self.side][0]
        return Depth(rational(self.upper[axis]) - rational(self.lower[axis]), self.far == "insulated")

    @property
    def formula(self) -> str:
        """The problem in one line."""
        return (
            f"[{corner_text(self.lower)} to {corner_text(self.upper)}: {self._data_text()} on {self.side}, "
            f"neighbours {self.neighbours}, opposite {self._opposite_text()}]"
        )

    def place_on_side(self, coordinate: Fraction) -> tuple[float, float]:
        """Return the point of the side with the given coordinate along it."""
        axis, end = SIDES[self.side]
        hot = (self.lower, self.upper)[end][1 - axis]
        return (float(coordinate), float(hot)) if axis == 0 else (float(hot), float(coordinate))

    # -- what a family of data provides ----------------------------------------------------------------------

    @abstractmethod
    def _data_text(self) -> str:
        """Return the data in words or as a formula."""

    def _opposite_text(self) -> str:
        """Return what stands opposite the data, in words."""
        return self.far

    @abstractmethod
    def _solve(self, ctx: Any, x: Any, d: Any, h: Any) -> Any:
        """Return u."""

    @abstractmethod
    def _slopes(self, ctx: Any, x: Any, d: Any, h: Any) -> tuple[Any, Any]:
        """Return the derivatives of u along the side and with respect to d."""

    # -- the field -------------------------------------------------------------------------------------------

    def _distances(self, ctx: Any, point: tuple[Any, ...]) -> tuple[Any, Any, Any]:
        """Return the coordinate along the side and the distances from it and from the opposite side."""
        axis, end = SIDES[self.side]
        x, y = point[axis], point[1 - axis]
        x = _between(ctx, x, self.lower[axis], self.upper[axis])
        y = _between(ctx, y, self.lower[1 - axis], self.upper[1 - axis])
        low, high = offset(ctx, y, self.lower[1 - axis]), -offset(ctx, y, self.upper[1 - axis])
        low, high = (
            (np.maximum(low, 0.0), np.maximum(high, 0.0))
            if ctx is FLOAT
            else (max(low, 0 * low), max(high, 0 * high))
        )
        return (x, high, low) if end else (x, low, high)

    def half_problem(self) -> HalfProblem | None:
        """Return what `plate_cells` needs to tabulate u for float64, None if it cannot."""
        return None

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        table = _cells(self) if ctx is FLOAT else None
        if table is None:
            return self._value_by_sums(ctx, x)
        u, left_out = cells_value(table, *x)
        if left_out.size:
            u[left_out] = self._value_by_sums(ctx, tuple(c[left_out] for c in x))
        return u

    def _value_by_sums(self, ctx: Any, x: tuple[Any, ...]) -> Any:
        along, d, h = self._distances(ctx, x)
        u = self._solve(ctx, along, d, h)
        if self.even:
            return u
        axis = SIDES[self.side][0]
        on_neighbour = (offset(ctx, along, self.lower[axis]) <= 0) | (
            offset(ctx, along, self.upper[axis]) >= 0
        )
        if ctx is FLOAT:
            u[on_neighbour] *= 0.0
            return u
        return ctx.where(on_neighbour, 0 * u, u)  # exactly zero, but NaN stays NaN at a corner that jumps

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002  # no cut
        table = _cells(self) if ctx is FLOAT else None
        if table is None:
            return self._gradient_by_sums(ctx, x)
        slopes, left_out = cells_gradient(table, *x)
        if left_out.size:
            slopes[:, left_out] = self._gradient_by_sums(ctx, tuple(c[left_out] for c in x))
        return tuple(slopes)

    def _gradient_by_sums(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, ...]:
        along, d, h = self._distances(ctx, x)
        axis, end = SIDES[self.side]
        slope, depth = self._slopes(ctx, along, d, h)
        across = -depth if end else depth  # d falls with y if the data are on the upper side
        return (slope, across) if axis == 0 else (across, slope)

    def _valid(self, points: Array) -> BoolArray:
        """Return which points lie in the closed rectangle, to rounding."""
        return in_rectangle(self.lower, self.upper, points)


@lru_cache(maxsize=64)
def _cells(plate: Plate) -> Cells | None:
    """Return the cells of a plate."""
    problem = plate.half_problem()
    if problem is None:
        return None
    low, high = ((rational(c[0]), rational(c[1])) for c in (plate.lower, plate.upper))
    return tabulated([problem], low, high)


def opposite_corners(
    lower: Iterable[Number], upper: Iterable[Number]
) -> tuple[tuple[Exact, ...], tuple[Exact, ...]]:
    """Return two corners of a rectangle as exact points.

    Raises
    ------
    FieldError
        If they are not those of a rectangle.
    """
    low, high = exact_point(lower, "lower", (2,)), exact_point(upper, "upper", (2,))
    if not all(rational(a) < rational(b) for a, b in zip(low, high, strict=True)):
        raise FieldError(
            f"lower must lie below and left of upper, got {corner_text(low)} and {corner_text(high)}"
        )
    return low, high


def in_rectangle(lower: tuple[Exact, ...], upper: tuple[Exact, ...], points: Array) -> BoolArray:
    """Return which points (n, 2) lie in a closed rectangle, to rounding."""
    low = np.array([float(c) for c in lower])
    high = np.array([float(c) for c in upper])
    slack = OUTSIDE * float((high - low).max())
    return between(points, low - slack, high + slack)


def side_ends(lower: Iterable[Number], upper: Iterable[Number], side: str) -> tuple[Fraction, Fraction]:
    """Return the coordinates along a side of the ends of that side."""
    if side not in SIDES:
        raise FieldError(f"side must be one of {', '.join(SIDES)}, got {side!r}")
    axis = SIDES[side][0]
    low, high = exact_point(lower, "lower", (2,)), exact_point(upper, "upper", (2,))
    return rational(low[axis]), rational(high[axis])


def _between(ctx: Any, x: Any, lower: Exact, upper: Exact) -> Any:
    """Return x, or the end it lies beyond by rounding."""
    low, high = ctx.number(lower), ctx.number(upper)
    if ctx is FLOAT:
        return np.minimum(np.maximum(x, low), high)
    return ctx.where(x < low, 0 * x + low, ctx.where(x > high, 0 * x + high, x))


def corner_text(point: tuple[Exact, ...]) -> str:
    """Return (0, 1)."""
    return "(" + ", ".join(show(c) for c in point) + ")"


def _nearest(given: object, known: tuple[str, ...]) -> str:
    """Return the nearest known words."""
    return nearest_names(str(given)[:40], known)
