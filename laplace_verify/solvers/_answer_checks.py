"""Checks of an answer's arguments that need no problem: shapes, numbers, names.

Every message begins with the argument at fault.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, as_points, as_values, frozen
from laplace_verify.errors import AnswerError, nearest_names
from laplace_verify.solvers.cells import CellMesh

LOCATIONS = ("point", "cell")


def callables(evaluate: object, gradient: object) -> None:
    """Refuse an `evaluate` or `gradient` that cannot be called."""
    for name, function in (("evaluate", evaluate), ("gradient", gradient)):
        if function is not None and not callable(function):
            raise AnswerError(
                f"{name} must be a function of points (n, d), got {type(function).__name__}; nodal arrays go "
                f"to "
                "points and values"
            )


def presence(
    points: object, values: object, cells: object, weights: object, evaluate: object, gradient: object
) -> None:
    """Refuse combinations that cannot be measured."""
    if points is None and values is None and evaluate is None:
        given = "gradient only" if gradient is not None else "neither"
        raise AnswerError(
            f"points and values, or evaluate, must be given, got {given}: write Answer(points, values) or "
            "Answer(evaluate=f)"
        )
    if (points is None) != (values is None):
        missing = "points" if points is None else "values"
        raise AnswerError(f"{missing} must be given too: points and values belong together")
    if points is None:
        for name, argument in (("cells", cells), ("weights", weights)):
            if argument is not None:
                raise AnswerError(f"{name} must come with points and values")


def location(given: object) -> None:
    """Refuse an unknown location."""
    if given not in LOCATIONS:
        raise AnswerError(
            f'location must be "point" or "cell", got {given!r}; {nearest_names(str(given), LOCATIONS)}'
        )


def precision(given: object) -> tuple[str, ...]:
    """Remark values that come in less than double precision."""
    dtype = getattr(given, "dtype", None)
    if isinstance(dtype, np.dtype) and dtype.kind == "f" and dtype.itemsize < 8:
        return (f"values came as {dtype}: an error floor near {np.finfo(dtype).eps:.0e} is to be expected",)
    return ()


def numbers(name: str, given: Any) -> Any:
    """Return `given` if it holds numbers only; refuse what numpy would turn into NaN, or into a guess.

    Masked entries would become what lies under the mask, None would become NaN, and "1.5" the number 1.5.
    """
    if isinstance(given, np.ma.MaskedArray) and np.ma.getmaskarray(given).any():
        masked = int(np.ma.getmaskarray(given).sum())
        raise AnswerError(f"{name} must not be masked, but {masked} of {given.size} entries are")
    try:
        array = np.asarray(given)
    except ValueError as cause:
        raise AnswerError(f"{name} must be a rectangular array of numbers: {cause}") from cause
    hollow = array.dtype == object and any(entry is None for entry in array.flat)
    if hollow or array.dtype.kind not in "biufcO":
        what = "None" if hollow else f"{type(given).__name__} of {array.dtype}"
        raise AnswerError(f"{name} must be real numbers, got {what}")
    return given


def nodes(given: Any, values: Any, cells: object, where: str) -> Array:
    """Return points as a read-only (n, d) array; the dimension is theirs, 1-D if a plain list."""
    numbers("points", given)
    shape = np.shape(given)
    if len(shape) not in (1, 2):
        raise AnswerError(f"points must have shape (n, d), one row per point, got {shape}")
    if np.iscomplexobj(np.asarray(given)):
        raise AnswerError(f"points must be real, got {np.asarray(given).dtype}")
    dim = shape[1] if len(shape) == 2 else 1
    free = cells is not None and where == "cell"  # then values belong to the cells
    count = np.size(values)
    if not free and len(shape) == 2 and shape[0] != count and shape[1] == count:
        raise AnswerError(f"points must have shape (n, d), got {shape}: it looks transposed, pass its .T")
    if not 1 <= dim <= 3:
        raise AnswerError(f"points must have 1, 2 or 3 coordinates each, got shape {shape}")
    if not shape[0]:
        raise AnswerError("points must hold at least one point, got none")
    return frozen(as_points(given, dim, error=AnswerError))


def values(given: Any, points: Array | None, mesh: CellMesh | None, where: str) -> Array:
    """Return values as a read-only (n,) array: one per point, or one per cell."""
    numbers("values", given)
    if np.ndim(given) == 0:
        raise AnswerError(f"values must be an array, one value per point, got {given!r}")
    per_cell = mesh is not None and where == "cell"
    places = mesh.centroids() if mesh is not None and per_cell else points
    if places is None:  # `presence` has refused values without points
        raise AnswerError("points must be given too: points and values belong together")
    if len(places) != np.size(given):
        what = "cell" if per_cell else "point"
        raise AnswerError(
            f"values must have shape ({len(places)},), one value per {what}, got {np.shape(given)}"
        )
    result = as_values(given, len(places), error=AnswerError)
    bad = ~np.isfinite(result)
    if bad.any():
        row = int(np.flatnonzero(bad)[0])
        raise AnswerError(
            f"values must be finite, but {int(bad.sum())} of {len(bad)} are not; "
            f"values[{row}] is {result[row]} at point {places[row].tolist()}"
        )
    return frozen(result)


def weights(given: Any, count: int) -> Array:
    """Return weights as a read-only (n,) array of positive numbers."""
    numbers("weights", given)
    if np.shape(given) not in ((count,), (count, 1)):
        raise AnswerError(f"weights must have shape ({count},), one per value, got {np.shape(given)}")
    result = as_values(given, count, error=AnswerError, name="weights")
    bad = ~((result > 0) & np.isfinite(result))
    if bad.any():
        row = int(np.flatnonzero(bad)[0])
        raise AnswerError(
            f"weights must be positive and finite, but {int(bad.sum())} of {count} are not; "
            f"weights[{row}] is {result[row]}"
        )
    return frozen(result)


def rows(name: str, given: Any, count: int, columns: int) -> Array:
    """Return what a gradient function gave as (count, columns); (count,) will do in 1-D; NaN passes."""
    numbers(name, given)
    array = np.asarray(given)
    if array.dtype.kind not in "iuf":
        raise AnswerError(f"{name} must return real numbers of shape (n, {columns}), got {array.dtype}")
    if columns == 1 and array.shape == (count,):
        array = array[:, np.newaxis]
    if array.shape != (count, columns):
        mend = "; it looks transposed" if array.shape == (columns, count) else ""
        raise AnswerError(f"{name} must return shape ({count}, {columns}), got {array.shape}{mend}")
    return array.astype(np.float64)


def real(name: str, given: object) -> float:
    """Return a finite real number."""
    if isinstance(given, np.ndarray) and given.size == 1:
        given = given.item()
    if isinstance(given, bool | np.bool_) or not isinstance(given, int | float | np.integer | np.floating):
        raise AnswerError(f"{name} must be a real number, got {given!r} ({type(given).__name__})")
    number = float(given)
    if not np.isfinite(number):
        raise AnswerError(f"{name} must be finite, got {number}")
    return number


def positive(name: str, given: object) -> float | None:
    """Return a positive number, or None if none is given."""
    if given is None:
        return None
    number = real(name, given)
    if not number > 0:
        raise AnswerError(f"{name} must be positive, got {number}")
    return number


def not_negative(name: str, given: object) -> float | None:
    """Return a number that is at least 0, or None if none is given."""
    if given is None:
        return None
    number = real(name, given)
    if not number >= 0:
        raise AnswerError(f"{name} must be at least 0, got {number}")
    return number


def ordered(h_min: float | None, h_max: float | None) -> None:
    """Refuse a smallest mesh size above the largest."""
    if h_min is not None and h_max is not None and not h_min <= h_max:
        raise AnswerError(f"h_min must be at most h_max, got h_min={h_min} and h_max={h_max}")


def count(name: str, given: object, *, least: int) -> int | None:
    """Return a whole number of at least `least`, or None if none is given."""
    if given is None:
        return None
    if isinstance(given, bool) or not isinstance(given, int | np.integer) or not given >= least:
        raise AnswerError(f"{name} must be a whole number of at least {least}, got {given!r}")
    return int(given)


def standard_error(given: npt.ArrayLike | None, size: int) -> float | Array | None:
    """Return a standard error: a number, or one per value."""
    if given is None:
        return None
    if np.ndim(given) == 0:
        return not_negative("standard_error", given)
    result = as_values(given, size, error=AnswerError, name="standard_error")
    if not (np.isfinite(result) & (result >= 0)).all():
        raise AnswerError("standard_error must be finite and at least 0 everywhere")
    return frozen(result)


def named_numbers(name: str, given: object) -> dict[str, float] | None:
    """Return a dict of names and finite numbers, or None if none is given."""
    if given is None:
        return None
    if not isinstance(given, Mapping):
        raise AnswerError(f"{name} must be a dict of names and numbers, got {type(given).__name__}")
    for key in given:
        if not isinstance(key, str):
            raise AnswerError(f"{name} must have names (str) as keys, got {key!r}")
    return {key: real(f"{name}[{key!r}]", number) for key, number in given.items()}
