"""Checks on the numbers that describe a shape: finite, of the right count, not degenerate."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, as_points
from laplace_verify.errors import GeometryError

__all__ = [
    "LARGEST",
    "ROUNDING",
    "THINNEST",
    "coordinates",
    "not_negative",
    "number",
    "places",
    "positive",
    "proportions",
    "whole",
]

ROUNDING = 1e-12  # relative to a shape's size: what float64 may lose on the way to a point of the boundary
THINNEST = 1e-9  # least extent, relative to the largest, of a shape we can still sample and integrate over
LARGEST = 1e100  # squares of coordinates must stay far from overflow


def coordinates(value: Any, length: int, name: str) -> tuple[float, ...]:
    """Return `value` as a tuple of `length` finite floats.

    >>> coordinates([0, 1], 2, "lower")
    (0.0, 1.0)
    """
    try:
        array = np.asarray(value, dtype=np.float64)
    except (TypeError, ValueError) as cause:
        raise GeometryError(f"{name} must be {length} numbers, got {value!r}") from cause
    if array.shape != (length,):
        raise GeometryError(f"{name} must be {length} numbers, one per coordinate, got {value!r}")
    if not (np.abs(array) <= LARGEST).all():
        raise GeometryError(f"{name} must be finite and at most {LARGEST:g}, got {value!r}")
    return tuple(float(x) for x in array)


def number(value: Any, name: str) -> float:
    """Return `value` as a finite float."""
    if isinstance(value, bool) or np.ndim(value) != 0:
        raise GeometryError(f"{name} must be a number, got {value!r}")
    try:
        result = float(value)
    except (TypeError, ValueError) as cause:
        raise GeometryError(f"{name} must be a number, got {value!r}") from cause
    if not abs(result) <= LARGEST:
        raise GeometryError(f"{name} must be finite and at most {LARGEST:g}, got {value!r}")
    return result


def positive(value: Any, name: str) -> float:
    """Return `value` as a finite float > 0."""
    result = number(value, name)
    if not result > 0.0:
        raise GeometryError(f"{name} must be > 0, got {value!r}")
    return result


def not_negative(value: Any, name: str) -> float:
    """Return `value` as a finite float >= 0."""
    result = number(value, name)
    if not result >= 0.0:
        raise GeometryError(f"{name} must be >= 0, got {value!r}")
    return result


def whole(value: Any, name: str, least: int, most: int | None = None) -> int:
    """Return `value` as an int from `least` to `most` (None: no upper bound).

    >>> whole(3, "n", 1)
    3
    """
    is_whole = isinstance(value, int | np.integer) and not isinstance(value, bool)
    if not is_whole or value < least or (most is not None and value > most):
        wanted = f">= {least}" if most is None else f"from {least} to {most}"
        raise GeometryError(f"{name} must be a whole number {wanted}, got {value!r}")
    return int(value)


def places(points: npt.ArrayLike, dim: int) -> Array:
    """Return points (n, dim) as float64, refusing any whose squared distance would overflow."""
    array = as_points(points, dim, error=GeometryError)
    far = np.abs(array).max(axis=1, initial=0.0) > LARGEST
    if far.any():
        row = int(np.flatnonzero(far)[0])
        raise GeometryError(
            f"points must have coordinates of at most {LARGEST:g}, but row {row} is {array[row].tolist()}"
        )
    return array


def proportions(lower: Sequence[float], upper: Sequence[float], shape: str) -> None:
    """Refuse a bounding box that is empty, too thin, or lost to round-off by its distance from the origin."""
    extents = [b - a for a, b in zip(lower, upper, strict=True)]
    largest = max(extents)
    if not min(extents) >= THINNEST * largest or not largest > 0.0:
        raise GeometryError(
            f"{shape} is degenerate: its extents are {extents}; "
            f"each must be at least {THINNEST:g} of the largest"
        )
    reach = max(abs(x) for x in (*lower, *upper))
    if not largest >= max(THINNEST * reach, 1.0 / LARGEST) or not math.isfinite(reach):
        raise GeometryError(
            f"{shape} of size {largest:g} lies {reach:g} from the origin, where float64 cannot resolve it; "
            "move it nearer or scale it"
        )
