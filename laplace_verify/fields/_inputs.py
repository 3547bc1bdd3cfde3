"""Points and sides as a user gives them, and how a message names them."""

from __future__ import annotations

import math
from fractions import Fraction
from typing import Any, TypeAlias

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.errors import FieldError

__all__ = ["Side", "as_sides", "columns", "equals", "is_number", "name_of", "shortened", "text_of"]

Side: TypeAlias = npt.ArrayLike | None
SHORT = 10**6  # the largest denominator of a fraction that a float is read as
LONGEST = 120  # letters of a formula in a message; fits have hundreds


def columns(points: Array) -> tuple[Array, ...]:
    """Return the coordinates as contiguous arrays."""
    return tuple(np.ascontiguousarray(points.T))


def as_sides(side: Side, count: int) -> Array | None:
    """Return sides as an array (count,) of +1, -1 (0: not on a cut), or None.

    Raises
    ------
    FieldError
        If the shape is neither () nor (count,), or an entry is not one of these.
    """
    if side is None:
        return None
    try:
        sides = np.asarray(side, dtype=np.float64)
    except (TypeError, ValueError) as cause:
        raise FieldError(f"side must be None, +1, -1 or an array of them, got {side!r}") from cause
    if sides.shape not in ((), (count,)):
        raise FieldError(f"side must be one number or have shape ({count},), got {sides.shape}")
    if not np.isin(sides, (-1.0, 0.0, 1.0)).all():
        raise FieldError("side must be None, +1 or -1 (0 for points that are not on a cut)")
    return np.ascontiguousarray(np.broadcast_to(sides, (count,)))


def equals(points: Array, singular: tuple[float, ...], place: Any) -> BoolArray:
    """Return which points are the singular one; a precise point is compared with the number that is meant."""
    if place is None:
        same: BoolArray = points[:, 0] == singular[0]
        if same.any():  # rare: most blocks are done after one coordinate
            same = np.asarray((points == singular).all(axis=1))
        return same
    return np.array([all(a in _meant_by(b) for a, b in zip(place, singular, strict=True))])


def _meant_by(number: float) -> tuple[Fraction, ...]:
    """Return what a float may stand for: itself, its decimals, or the short fraction that it is nearest to.

    >>> [str(q) for q in _meant_by(0.5)], str(_meant_by(1 / 3)[-1])
    (['1/2', '1/2', '1/2'], '1/3')
    """
    if not math.isfinite(number):
        return ()
    short = Fraction(number).limit_denominator(SHORT)
    return (Fraction(number), Fraction(str(float(number))), *([short] if float(short) == number else []))


def is_number(point: Any) -> bool:
    """Return whether a single coordinate was given in place of a point."""
    return isinstance(point, (int, float, str, Fraction)) or hasattr(point, "_mpf_") or np.ndim(point) == 0


def name_of(points: Array, hit: BoolArray, first: int | None, place: Any) -> str:
    """Return "point 7 = (0.0, 1.0)" for the first point that is hit."""
    if place is not None:
        return f"point {text_of(place)}"
    row = int(np.flatnonzero(hit)[0])
    return f"point {row + (first or 0)} = {tuple(points[row].tolist())}"


def shortened(formula: str) -> str:
    """Return a formula short enough for a message.

    >>> shortened("x" * 200)[-5:]
    'x ...'
    """
    return formula if len(formula) <= LONGEST else f"{formula[:LONGEST]} ..."


def text_of(place: tuple[Any, ...]) -> str:
    """Return a precise point in a message."""
    return "(" + ", ".join(str(c) if len(str(c)) <= 24 else f"{float(c):.17g}" for c in place) + ")"
