"""What stops an error from falling: names for the levels at which sequences stay.

A relative error that no longer falls sits at round-off (about 1e-16 times the condition of the problem), at
the precision of a number stored in 32 bits (2^-24 = 6e-8, times a few), at the tolerance of an iteration, or
at a wrong constant or limit. The size alone cannot tell the last two apart, so a name is a hint and says so.

Reference: IEEE 754 for the two precisions; that errors stay within a few hundred units of them: common
practice, no source.
"""

from __future__ import annotations

from itertools import pairwise

from laplace_verify.measure.series import Series
from laplace_verify.measure.signs import FloorKind

__all__ = ["floor_kind", "named_floor", "rises"]

SINGLE = 2.0**-24
LOWEST, HIGHEST = 0.1, 300.0  # times SINGLE: a mean of rounding errors, and a large multiple of one
ROUGHLY_DOUBLE = 1e-10
RISE = 1.1  # a rise of the error by less is scatter
NAMES: dict[FloorKind, str] = {
    "round-off floor": "the size of accumulated round-off, or of the tolerance of an iteration",
    "single-precision floor": "the size at which numbers of single precision (6e-8) stop",
    "loose floor": "the size of a loose tolerance, or of a constant typed with few digits",
}


def floor_kind(relative: float) -> FloorKind:
    """Return the kind of floor at which errors of this relative size usually stop.

    >>> floor_kind(1e-14), floor_kind(2e-7), floor_kind(1e-3)
    ('round-off floor', 'single-precision floor', 'loose floor')
    """
    if relative <= ROUGHLY_DOUBLE:
        return "round-off floor"
    single = LOWEST * SINGLE <= relative <= HIGHEST * SINGLE
    return "single-precision floor" if single else "loose floor"


def named_floor(relative: float) -> str:
    """Return what usually stops an error at this relative size.

    >>> named_floor(2e-7)
    'the size at which numbers of single precision (6e-8) stop'
    """
    return NAMES[floor_kind(relative)]


def rises(series: Series) -> str:
    """Return between which sizes the error rises before it reaches the floor, in words; "" if nowhere."""
    pairs = pairwise(zip(series.sizes[: series.above], series.errors[: series.above], strict=True))
    found = [f"from size {n} to {m}" for (n, coarse), (m, fine) in pairs if fine > RISE * coarse]
    return f"the error does not fall steadily: it rises {' and '.join(found)}" if found else ""
