"""Data of a condition as a function of points: from a number, a formula string, a field or a function."""

from __future__ import annotations

import inspect
from collections.abc import Callable
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, as_values
from laplace_verify.contexts import FLOAT
from laplace_verify.errors import FieldError, LaplaceVerifyError, ProblemError
from laplace_verify.fields import Field, Formula
from laplace_verify.problems.conditions import Data

__all__ = ["PointFunction", "Rescaled"]

COORDINATES = ("x", "y", "z")


class Rescaled:
    """factor * f(x / length): the data of a dimensional twin, as a function of an array of points."""

    __slots__ = ("factor", "function", "length")

    def __init__(self, function: PointFunction, *, length: float, factor: float) -> None:
        self.function, self.length, self.factor = function, length, factor

    def __call__(self, points: Array) -> Array:
        """Return the values (n,) at points (n, d)."""
        values: Array = self.factor * self.function(points / self.length)
        return values


class PointFunction:
    """A function of points (n, d) -> values (n,), finite, with its origin kept for messages and files.

    Parameters
    ----------
    source
        A number, a formula string over x, y, z, a field, or a function. A function of d arguments gets the
        coordinates, one of a single argument gets x in 1-D and the array (n, d) otherwise.
    dim
        Space dimension d.
    name
        What it is, for messages: "data of piece 'top'".

    Raises
    ------
    ProblemError
        If a formula cannot be read, a field has another dimension, or a function takes another number of
        arguments.
    """

    __slots__ = ("_columns", "_formula", "dim", "name", "source")

    def __init__(self, source: Data, dim: int, name: str) -> None:
        self.source, self.dim, self.name = source, dim, name
        self._columns = False
        self._formula: Formula | None = None
        if isinstance(source, str):
            self._formula = _read(source, dim, name)
        elif isinstance(source, Field):
            if source.dim != dim:
                raise ProblemError(
                    f"{name} is a field of dimension {source.dim}, the shape has dimension {dim}"
                )
        elif callable(source) and not isinstance(source, Rescaled):
            self._columns = _takes_columns(source, dim, name)

    @property
    def number(self) -> float | None:
        """The number, if the source is one."""
        return self.source if isinstance(self.source, float) else None

    def __call__(self, points: Array) -> Array:
        """Return the values (n,) at points (n, d).

        Raises
        ------
        ProblemError
            If a function raises, or its result has the wrong shape or is not finite; the first such point
            is named.
        """
        if isinstance(self.source, float):
            return np.full(len(points), self.source)
        if not len(points):
            return np.zeros(0)
        try:
            with np.errstate(all="ignore"):  # what is not finite is refused by name below
                result = self._evaluate(points)
        except LaplaceVerifyError as cause:
            raise ProblemError(f"{self.name}: {cause}") from cause
        except Exception as cause:
            raise ProblemError(f"{self.name} raised {type(cause).__name__}: {cause}") from cause
        values = as_values(result, len(points), error=ProblemError, name=self.name)
        bad = ~np.isfinite(values)
        if bad.any():
            row = int(np.flatnonzero(bad)[0])
            raise ProblemError(
                f"{self.name} is {values[row]} at {tuple(points[row].tolist())}; it must be finite"
            )
        return values

    def _evaluate(self, points: Array) -> Any:
        """Return whatever the source makes of the points."""
        if self._formula is not None:
            return self._formula.value(FLOAT, dict(zip(COORDINATES, points.T, strict=False)))
        if isinstance(self.source, Field):
            return self.source.value(points)
        function: Any = self.source
        return function(*points.T) if self._columns else function(points)


def _read(text: str, dim: int, name: str) -> Formula:
    """Return the parsed formula."""
    try:
        formula = Formula.parse(text)
    except FieldError as cause:
        raise ProblemError(f"{name}: {cause}") from cause
    given = {*COORDINATES[:dim], "r", *(["theta"] if dim == 2 else [])}
    beyond = sorted(formula.variables - given)
    if beyond:
        raise ProblemError(f"{name}: formula {text!r} uses {', '.join(beyond)}, the shape is {dim}-D")
    return formula


def _takes_columns(function: Callable[..., Any], dim: int, name: str) -> bool:
    """Return whether the function wants coordinates one by one, refusing any other number of arguments."""
    least, most = _arity(function)
    if least <= dim <= most:
        return True
    if least <= 1 <= most:
        return False
    wanted = f"{least}" if least == most else f"{least} to {most:g}"
    raise ProblemError(
        f"{name} is a function of {wanted} arguments; it must take the {dim} coordinates, or one array "
        f"of points"
    )


def _arity(function: Callable[..., Any]) -> tuple[float, float]:
    """Return the least and the largest number of positional arguments a function takes."""
    if isinstance(function, np.ufunc):
        return function.nin, function.nin
    try:
        parameters = inspect.signature(function).parameters.values()
    except (TypeError, ValueError):  # some built-ins do not tell; they are called with coordinates
        return 0, np.inf
    places = [p for p in parameters if p.kind in (p.POSITIONAL_ONLY, p.POSITIONAL_OR_KEYWORD)]
    least = sum(p.default is p.empty for p in places)
    endless = any(p.kind is p.VAR_POSITIONAL for p in parameters)
    return least, np.inf if endless else len(places)
