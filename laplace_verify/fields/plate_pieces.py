"""Rectangle with piecewise polynomial data on one side, in closed form at every aspect ratio.

`plate_strip` sums for rectangles up to as deep as wide, `plate_row` for deeper ones; both are exact in
principle and agree to rounding.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import lru_cache
from typing import Any

import numpy as np

from laplace_verify.contexts import FLOAT
from laplace_verify.fields.exact import Exact, exact, rational, show
from laplace_verify.fields.piecewise import Continuation, Piecewise
from laplace_verify.fields.plate import Plate
from laplace_verify.fields.plate_box import Depth
from laplace_verify.fields.plate_cells_fit import HalfProblem, local_jumps
from laplace_verify.fields.plate_row import row_gradient, row_value
from laplace_verify.fields.plate_strip import data_on_side, strip_gradient, strip_value
from laplace_verify.fields.singular import Basis, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["PlatePieces", "pieces_slopes", "pieces_solution", "pieces_text"]


@registered("rectangle-pieces")
@dataclass(frozen=True, slots=True, kw_only=True)
class PlatePieces(Plate):
    """Data sum_k coefficients[i][k] (t - breaks[i])^k on piece i; `rectangle_series` makes one."""

    breaks: tuple[Exact, ...]
    coefficients: tuple[tuple[Exact, ...], ...]

    def __post_init__(self) -> None:
        """Check the pieces against the side."""
        Plate.__post_init__(self)
        pieces = Piecewise(breaks=self.breaks, coefficients=self.coefficients)
        pieces.on(*self.ends)
        object.__setattr__(self, "breaks", pieces.breaks)
        object.__setattr__(self, "coefficients", pieces.coefficients)

    @property
    def continuation(self) -> Continuation:
        """The periodic continuation of the data."""
        return _continuation(self.breaks, self.coefficients, self.even)

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """Places of the side where the continuation, or a derivative of it, jumps.

        A jump of the p-th derivative leaves r^p log r and r^p times the angle, p = 0: the angle alone.
        """
        data, found = self.continuation, []
        for place, jumps in zip(data.places, data.jumps, strict=True):
            order = next(p for p, jump in enumerate(jumps) if jump)
            point = self.place_on_side(place)
            if order == 0:
                found.append(Singularity(point=point, exponent=0.0, kind="jump"))
            else:
                found.append(Singularity(point=point, exponent=float(order), kind="power"))
        return tuple(found)

    @property
    def basis(self) -> Basis:
        """Tail bound; closed form if the continuation is one polynomial and no series is left."""
        return "tail bound" if self.continuation.places else "closed form"

    def _data_text(self) -> str:
        return pieces_text(self.breaks, self.coefficients)

    @property
    def _far_side(self) -> str:
        """What `plate_cells` may take for granted opposite the data, see `HalfProblem`."""
        return self.far

    def half_problem(self) -> HalfProblem:
        """Return what `plate_cells` needs to tabulate u for float64, in distances from the lower corner."""
        low, high = self.lower, self.upper
        size = tuple(exact(rational(b) - rational(a), "extent") for a, b in zip(low, high, strict=True))
        breaks = tuple(exact(rational(b) - self.ends[0], "break") for b in self.breaks)
        twin = replace(self, lower=(0, 0), upper=size, breaks=breaks)
        data, length = twin.continuation, twin.ends[1]
        return HalfProblem(
            side=self.side, even=self.even, far=self._far_side, length=length, line=data.powers,
            places=local_jumps(self.side, data.images(-length, 2 * length)),
            value=lambda s, d, h: twin._solve(FLOAT, s, d, h),
            slopes=lambda s, d, h: twin._slopes(FLOAT, s, d, h),
        )  # fmt: skip

    def _solve(self, ctx: Any, x: Any, d: Any, h: Any) -> Any:
        return pieces_solution(ctx, self.continuation, self.depth, x, d, h)

    def _slopes(self, ctx: Any, x: Any, d: Any, h: Any) -> tuple[Any, Any]:
        return pieces_slopes(ctx, self.continuation, self.depth, x, d, h)


def pieces_text(breaks: tuple[Exact, ...], coefficients: tuple[tuple[Exact, ...], ...]) -> str:
    """Return piecewise polynomial data in words."""
    if len(coefficients) == 1 and len(coefficients[0]) == 1:
        return show(coefficients[0][0])
    highest = max(len(row) for row in coefficients) - 1
    name = {0: "steps", 1: "straight pieces"}.get(highest, f"pieces of degree {highest}")
    return f"{name} between {', '.join(show(b) for b in breaks)}"


def pieces_solution(ctx: Any, data: Continuation, depth: Depth, x: Any, d: Any, h: Any) -> Any:
    """Return the solution with the values of `data` on the side."""
    if not _is_deep(ctx, data, depth):
        return strip_value(ctx, data, depth, x, d, h)
    u = row_value(ctx, data, depth, x, d, h)
    if ctx is FLOAT:
        here = np.flatnonzero(d <= 0)
        u[here] = data_on_side(ctx, data, x[here]) + 0 * u[here]
        return u
    return ctx.where(d <= 0, data_on_side(ctx, data, x) + 0 * u, u)  # the data to the last bit; NaN stays


def pieces_slopes(ctx: Any, data: Continuation, depth: Depth, x: Any, d: Any, h: Any) -> tuple[Any, Any]:
    """Return the derivatives of `pieces_solution` along the side and in d."""
    return (row_gradient if _is_deep(ctx, data, depth) else strip_gradient)(ctx, data, depth, x, d, h)


def _is_deep(ctx: Any, data: Continuation, depth: Depth) -> bool:
    """Return whether to sum by rows: in float64 if deeper than wide, where few modes reach the far side.

    The table for the strip is long at many digits; there the rows are used down to a depth of a quarter.
    """
    length = data.breaks[-1] - data.breaks[0]
    return depth.width > (length if ctx is FLOAT else length / 4)


@lru_cache(maxsize=256)
def _continuation(
    breaks: tuple[Exact, ...],
    coefficients: tuple[tuple[Exact, ...], ...],
    even: bool,
) -> Continuation:
    """Return the continuation of data given in the coordinate along the side."""
    places = tuple(rational(b) for b in breaks)
    rows = tuple(tuple(rational(c) for c in row) for row in coefficients)
    return Continuation.of(places, rows, even=even)
