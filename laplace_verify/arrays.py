"""Array checks at the public boundary: one row per point, float64, C order, finite.

Shapes are checked before any subtraction: (n, 1) minus (n,) broadcasts to (n, n) without complaint.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import TypeAlias

import numpy as np
import numpy.typing as npt

from laplace_verify.errors import LaplaceVerifyError

__all__ = ["Array", "BoolArray", "IntArray", "as_points", "as_values", "between", "blocks", "frozen"]

Array: TypeAlias = npt.NDArray[np.float64]
BoolArray: TypeAlias = npt.NDArray[np.bool_]
IntArray: TypeAlias = npt.NDArray[np.int64]

BLOCK = 16000  # points per block: its temporaries stay in cache; powers of 2 alias there


def shown(given: object) -> str:
    """Return what came in, short enough for a message.

    >>> shown([[1j, 2]]), shown("text")
    ('list [[1j, 2]]', "str 'text'")
    """
    return f"{type(given).__name__} {repr(given)[:60]}"


def as_points(
    points: npt.ArrayLike, dim: int, *, error: type[LaplaceVerifyError], name: str = "points"
) -> Array:
    """Return `points` as float64 of shape (n, dim); in 1-D a plain list of n coordinates will do.

    Raises
    ------
    error
        If the shape is not (n, dim) or a coordinate is not finite.
    """
    try:
        array = np.ascontiguousarray(points, dtype=np.float64)
    except (TypeError, ValueError) as cause:
        raise error(f"{name} must be numbers of shape (n, {dim}), got {shown(points)}") from cause
    if dim == 1 and array.ndim == 1:
        array = array[:, np.newaxis]
    if array.ndim != 2 or array.shape[1] != dim:
        raise error(f"{name} must have shape (n, {dim}), one row per point, got {array.shape}")
    for rows in blocks(len(array)):  # a mask of all points would be memory that grows with them
        finite = np.isfinite(array[rows])
        if not finite.all():
            row = rows.start + int(np.flatnonzero(~finite.all(axis=1))[0])
            raise error(f"{name} must be finite, but row {row} is {array[row].tolist()}")
    return array


def as_values(
    values: npt.ArrayLike, count: int, *, error: type[LaplaceVerifyError], name: str = "values"
) -> Array:
    """Return `values` as float64 of shape (count,); a single number is repeated; (count, 1) is flattened.

    NaN passes: who must refuse it knows what to say about it.

    Raises
    ------
    error
        If the shape is none of these or an entry is no real number.
    """
    try:
        array = np.asarray(values)
        if np.iscomplexobj(array):
            raise error(f"{name} must be real, got {array.dtype}")
        array = array.astype(np.float64)
    except (TypeError, ValueError) as cause:
        if isinstance(cause, LaplaceVerifyError):
            raise
        got = type(values).__name__
        raise error(f"{name} must be real numbers of shape ({count},), got {got}") from cause
    if array.ndim == 0:
        return np.full(count, float(array))
    if array.shape == (count, 1):
        array = array[:, 0]
    if array.shape != (count,):
        raise error(f"{name} must have shape ({count},), one value per point, got {array.shape}")
    return np.ascontiguousarray(array)


def frozen(array: npt.ArrayLike) -> Array:
    """Return a float64 copy that cannot be written to."""
    copy = np.array(array, dtype=np.float64, order="C")
    copy.flags.writeable = False
    return copy


def between(points: Array, low: npt.ArrayLike, high: npt.ArrayLike) -> BoolArray:
    """Return which points (n, d) lie in the closed box from `low` to `high`, axis by axis: rows are short.

    >>> between(np.array([[0.0, 1.0], [0.5, 3.0]]), (0, 0), (1, 2)).tolist()
    [True, False]
    """
    inside: BoolArray = np.ones(len(points), dtype=bool)
    for column, a, b in zip(points.T, np.asarray(low), np.asarray(high), strict=True):
        inside &= column >= a
        inside &= column <= b
    return inside


def blocks(count: int, size: int = BLOCK) -> Iterator[slice]:
    """Yield slices that cover range(count), `size` at a time.

    >>> list(blocks(5, 2))
    [slice(0, 2, None), slice(2, 4, None), slice(4, 5, None)]
    """
    for start in range(0, count, size):
        yield slice(start, min(start + size, count))
