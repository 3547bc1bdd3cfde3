"""What is prescribed on a piece of the boundary.

With the outward unit normal n and the conductivity K:

    dirichlet    u = f
    neumann      n . K grad u = g
    robin        n . K grad u + alpha u = g,   alpha >= 0
    periodic     u and its flux continue on the opposite piece, see `periodic`; no data

The flux n . K grad u points out of the region along rising u; a heat flux or a discharge is its negative.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any, Literal, TypeAlias

import numpy as np

from laplace_verify.errors import ProblemError, nearest_names
from laplace_verify.fields import Field

__all__ = [
    "EVERY_KIND",
    "KINDS",
    "PERIODIC",
    "Condition",
    "Data",
    "Kind",
    "PieceKind",
    "dirichlet",
    "neumann",
    "robin",
]

Data: TypeAlias = float | str | Field | Callable[..., Any]
Kind: TypeAlias = Literal["dirichlet", "neumann", "robin", "periodic"]
PieceKind: TypeAlias = Kind | Literal["axis"]  # the axis r = 0 is no boundary of space
KINDS: tuple[Kind, ...] = ("dirichlet", "neumann", "robin")  # with data
PERIODIC: Literal["periodic"] = "periodic"
EVERY_KIND: tuple[Kind, ...] = (*KINDS, PERIODIC)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Condition:
    """A kind of boundary condition and, if they are given and not derived, its data.

    Attributes
    ----------
    kind
        "dirichlet", "neumann", "robin" or "periodic".
    data
        f or g: a number, a formula string, a field or a function; None if derived from an exact field.
    alpha
        Coefficient of a Robin condition: a number, a formula string or a function; None for other kinds. It
        must be >= 0, unless `data` are given with it for a problem that is said to be ill-posed.

    Raises
    ------
    ProblemError
        If the kind is unknown, a number is not finite, or alpha is missing, misplaced, or negative without
        data. (With data, `problem` checks alpha, for it is told whether the problem is ill-posed.)
    """

    kind: Kind
    data: Data | None = None
    alpha: Data | None = None

    def __post_init__(self) -> None:
        """Check what can be checked without points."""
        if self.kind not in EVERY_KIND:
            known = nearest_names(str(self.kind), EVERY_KIND)
            raise ProblemError(f"unknown kind of boundary condition {self.kind!r}; {known}")
        if (self.alpha is not None) != (self.kind == "robin"):
            need = "needs alpha >= 0" if self.kind == "robin" else "has no alpha"
            raise ProblemError(f"a {self.kind} condition {need}, got alpha={self.alpha!r}")
        if self.kind == PERIODIC and self.data is not None:
            raise ProblemError(f"a periodic condition has no data, got {self.data!r}")
        for name in ("data", "alpha"):
            object.__setattr__(self, name, _checked(getattr(self, name), name))
        if self.data is None and isinstance(self.alpha, float) and not self.alpha >= 0.0:
            raise ProblemError(
                f"Robin's alpha must be >= 0, got {self.alpha!r}: with n . K grad u + alpha u = g and "
                f"the outward "
                "normal a passive surface has a positive coefficient"
            )


def dirichlet(f: Data) -> Condition:
    """Return the condition u = f.

    Parameters
    ----------
    f
        A number, a formula string such as ``"x**2 - y**2"``, a field, or a function of the coordinates (or of
        one array of points (n, d)).

    Examples
    --------
    >>> dirichlet(20.0).kind
    'dirichlet'
    """
    return _given("dirichlet", f)


def neumann(g: Data) -> Condition:
    """Return the condition n . K grad u = g with the outward normal n; `g` as in `dirichlet`.

    >>> neumann(0).data
    0.0
    """
    return _given("neumann", g)


def robin(alpha: Data, g: Data | None = None) -> Condition:
    """Return the condition n . K grad u + alpha u = g.

    Parameters
    ----------
    alpha
        Coefficient >= 0, in conductivity per length: a number, a formula string or a function.
    g
        Right-hand side as in `dirichlet`; left out in `case`, which derives it from the exact field.

    Raises
    ------
    ProblemError
        If alpha is a negative number and g is left out; otherwise alpha is checked when the problem is posed.

    Examples
    --------
    >>> robin(3).alpha
    3.0
    """
    return Condition(kind="robin", data=g, alpha=alpha)


def _given(kind: Kind, data: Data | None) -> Condition:
    """Return a condition whose data must not be None."""
    if data is None:
        raise ProblemError(
            f"{kind} needs its data: a number, a formula string, a field or a function; got None"
        )
    return Condition(kind=kind, data=data)


def _checked(data: Any, name: str) -> Data | None:
    """Return data with numbers as float, refusing what is neither number, text, field nor function."""
    if data is None or isinstance(data, str | Field):
        return data
    if callable(data):
        function: Callable[..., Any] = data
        return function
    if isinstance(data, bool) or not isinstance(data, int | float | np.integer | np.floating):
        raise ProblemError(
            f"{name} of a condition must be a number, a formula string, a field or a function, "
            f"got {type(data).__name__}"
        )
    if not math.isfinite(data):
        raise ProblemError(f"{name} of a condition must be finite, got {data!r}")
    return float(data)
