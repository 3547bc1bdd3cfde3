"""Rectangle with data on one side and convection, d_n u + H u = 0, on the opposite one.

With k = n pi / a, q = e^{-2kb} and the distances d and h = b - d from the two sides, the mode n is

    [k cosh kh + H sinh kh] / [k cosh kb + H sinh kb] = cosh kh / cosh kb + g_n (e^{-kh} - e^{-kh - 2kd}),
    g_n = -2 H e^{-kb} / ((1 + q) [k (1 + q) + H (1 - q)]),

so u is the solution with an insulated opposite side, known in closed form, plus modes that start on the
opposite side and fade towards the data. From H (1 - q) in the denominator, |g_n| (1 - q) <= 2 e^{-kb}, and
|A_n| <= 2 max|f|: the tail is that of 4 max|f| e^{-n pi b / a}. The mean of f has the profile (1 + H h) / (1
+ H b). No root of a transcendental equation is needed, because the modes run along the sides that are zero or
insulated. (Separation of variables: Carslaw & Jaeger 1959, ch. V, from memory; the split is derived here.)
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

from laplace_verify.contexts import Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.exact import Exact, exact, rational, show
from laplace_verify.fields.mode_sums import (
    MOST_TERMS,
    Decay,
    mode_slopes,
    mode_value,
    side_angles,
    terms_needed,
)
from laplace_verify.fields.piecewise import Piecewise, level
from laplace_verify.fields.plate import opposite_corners, side_ends
from laplace_verify.fields.plate_pieces import PlatePieces, pieces_slopes, pieces_solution
from laplace_verify.fields.plate_row import fourier_coefficients
from laplace_verify.fields.polylog import accuracy, rounded, source
from laplace_verify.fields.specs import registered

__all__ = ["PlateConvection", "rectangle_convection"]


@registered("rectangle-convection")
@dataclass(frozen=True, slots=True, kw_only=True)
class PlateConvection(PlatePieces):
    """Piecewise polynomial data on `side`, convection opposite; `rectangle_convection` makes one."""

    transfer: Exact  # H > 0, per length

    def __post_init__(self) -> None:
        """Check the pieces and the coefficient."""
        PlatePieces.__post_init__(self)
        object.__setattr__(self, "transfer", exact(self.transfer, "transfer"))
        if not self.transfer > 0:
            raise FieldError(
                f"transfer must be > 0, got {show(self.transfer)}; without transfer the side is insulated: "
                'rectangle_series(..., far="insulated")'
            )
        if self.far != "insulated":
            raise FieldError(f'far must be "insulated", to which transfer is added, got {self.far!r}')

    def _opposite_text(self) -> str:
        return f"d_n u + {show(self.transfer)} u = 0"

    @property
    def _far_side(self) -> str:
        return ""  # neither u nor its normal derivative vanishes there

    def _solve(self, ctx: Any, x: Any, d: Any, h: Any) -> Any:
        insulated = pieces_solution(ctx, self.continuation, self.depth, x, d, h)
        fading, mean, decay = _table(ctx, self)
        _, place = _place(ctx, self, x, d, h)
        return insulated + mean * d + mode_value(ctx, self.even, lambda n: fading[0][:n], decay, place)

    def _slopes(self, ctx: Any, x: Any, d: Any, h: Any) -> tuple[Any, Any]:
        along, depth = pieces_slopes(ctx, self.continuation, self.depth, x, d, h)
        fading, mean, decay = _table(ctx, self)
        gamma, place = _place(ctx, self, x, d, h)
        slopes = mode_slopes(ctx, self.even, lambda n: fading[1][:n], decay, place)
        return along + gamma * slopes[0], depth + mean - gamma * slopes[1]  # d runs against h


def rectangle_convection(
    lower: Iterable[Number],
    upper: Iterable[Number],
    data: Piecewise | Number,
    transfer: Number,
    neighbours: str = "zero",
    side: str = "bottom",
) -> PlateConvection:
    """Return the harmonic u with `data` on one side of a rectangle and d_n u + transfer u = 0 opposite.

    Parameters
    ----------
    lower, upper : pairs of numbers
        Opposite corners; decimals in strings are exact.
    data : data or number
        Values on `side`: `piecewise`, `ramp`, `step`, `tent`, `parabola` or a number.
    transfer : number
        H > 0, per length: alpha / k for a Robin condition k d_n u + alpha u = 0.
    neighbours : "zero" or "insulated"
        u = 0 or d_n u = 0 on the two sides next to `side`.
    side : "left", "right", "bottom" or "top"
        Where the data are.

    Notes
    -----
    Singular points are declared as by `rectangle_series`. The opposite side brings none. Rectangles may be as
    flat as 1 to 1500 in float64 and 1 to 450 at 30 digits: flatter ones need more modes than are summed.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> wall = fields.rectangle_convection((0, 0), (3, 1), 1, 4, neighbours="insulated")  # 1 - 4 y / 5
    >>> [round(u, 15) for u in wall.value([[1.0, 0.0], [2.0, 0.5], [0.5, 1.0]]).tolist()]
    [1.0, 0.6, 0.2]

    Raises
    ------
    FieldError
        If the corners, the words, the data or the coefficient are not as described.
    """
    lower, upper = opposite_corners(lower, upper)
    pieces = data if isinstance(data, Piecewise) else level(data, "data")
    breaks, rows = pieces.on(*side_ends(lower, upper, side))
    return PlateConvection(
        lower=lower, upper=upper, side=side, neighbours=neighbours, far="insulated",
        breaks=breaks, coefficients=rows, transfer=exact(transfer, "transfer"),
    )  # fmt: skip


def _place(ctx: Any, plate: PlateConvection, x: Any, d: Any, h: Any) -> tuple[Any, tuple[Any, Any, Any, Any]]:
    """Return pi / a and the place that the mode sums take, seen from the opposite side."""
    start, stop = plate.ends
    gamma = ctx.pi / ctx.number(stop - start)
    return gamma, (gamma * h, *side_angles(ctx, gamma, x, plate.ends), 2 * gamma * d)


@lru_cache(maxsize=64)
def _table(ctx: Any, plate: PlateConvection) -> tuple[tuple[list[Any], list[Any]], Any, Decay]:
    """Return A_n g_n and n A_n g_n, the slope of the mean less that of the insulated one, and the decay."""
    start, stop = plate.ends
    high, slender = source(ctx), math.pi * float(plate.depth.extent / (stop - start))
    decay = Decay(bound=4.0, ratio=math.exp(-slender))
    try:
        count = terms_needed(decay, 0.0, 1, accuracy(ctx))
    except FieldError as cause:
        raise FieldError(
            f"a rectangle {show(stop - start)} long and {show(plate.depth.extent)} deep "
            f"needs more than {MOST_TERMS} modes on its convecting side for this accuracy: ask for fewer "
            "digits or take a deeper one"
        ) from cause
    big = rational(plate.transfer)
    fading = []
    for n, a in enumerate(fourier_coefficients(high, plate.continuation, count), start=1):
        k = n * high.pi / high.number(stop - start)
        once = high.exp(-k * high.number(plate.depth.extent))
        q, h = once * once, high.number(big)
        fading.append(-2 * h * a * once / ((1 + q) * (k * (1 + q) + h * (1 - q))))
    mean = -plate.continuation.mean * big / (1 + big * plate.depth.extent)
    weighted = [n * g for n, g in enumerate(fading, start=1)]
    return (rounded(ctx, fading), rounded(ctx, weighted)), ctx.number(mean), decay
