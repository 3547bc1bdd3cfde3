"""Number contexts: a formula is written once and runs on float64 arrays and on mpmath numbers.

A formula takes a context `ctx` and uses mpmath's function names: ``ctx.exp``, ``ctx.log``, ``ctx.atan2``,
``ctx.pi``. `FLOAT` maps them to numpy ufuncs; `precise(digits)` is an mpmath context of its own, so no
global precision is ever changed. Numbers of a precise context also answer numpy's ufuncs (numpy calls a
method of the ufunc's name on objects), which lets a user's ``np.exp(x) * np.cos(y)`` be evaluated to any
number of digits.
"""

from __future__ import annotations

import math
from fractions import Fraction
from functools import lru_cache
from typing import Any, TypeAlias

import mpmath
import numpy as np
from mpmath.ctx_mp import MPContext

from laplace_verify.errors import FieldError

__all__ = ["FLOAT", "FloatContext", "Number", "Precise", "precise"]

Number: TypeAlias = int | float | str | Fraction | mpmath.mpf

MAX_DIGITS = 200
GUARD_DIGITS = 15

UFUNCS = {
    "exp": "exp", "expm1": "expm1", "log": "log", "log1p": "log1p", "sqrt": "sqrt",
    "sin": "sin", "cos": "cos", "tan": "tan", "sinh": "sinh", "cosh": "cosh", "tanh": "tanh",
    "arcsin": "asin", "arccos": "acos", "arctan": "atan", "arctan2": "atan2",
    "arcsinh": "asinh", "arccosh": "acosh", "arctanh": "atanh", "hypot": "hypot",
}  # fmt: skip


class FloatContext:
    """numpy under mpmath's names; every function takes and returns float64 (or complex128) arrays."""

    exp, expm1, log, log1p, sqrt = np.exp, np.expm1, np.log, np.log1p, np.sqrt
    sin, cos, tan, sinh, cosh, tanh = np.sin, np.cos, np.tan, np.sinh, np.cosh, np.tanh
    asin, acos, atan, atan2 = np.arcsin, np.arccos, np.arctan, np.arctan2
    asinh, acosh, atanh, hypot = np.arcsinh, np.arccosh, np.arctanh, np.hypot
    fabs, where = np.abs, staticmethod(np.where)  # np.where would bind to the instance
    pi = math.pi

    @staticmethod
    def number(x: Number) -> float:
        """Return the float64 nearest to `x`; strings may be decimals or fractions such as "2/3"."""
        if isinstance(x, str):
            return float(Fraction(x))
        return float(x)


class Precise(MPContext):  # type: ignore[misc]  # mpmath carries no type information
    """An mpmath context with `digits` correct digits asked for and guard digits on top."""

    def __init__(self, digits: int) -> None:
        super().__init__()
        self.digits = digits
        self.dps = digits + GUARD_DIGITS
        for ufunc, name in UFUNCS.items():
            for kind in (self.mpf, self.mpc):
                setattr(kind, ufunc, _as_method(getattr(self, name)))

    def number(self, x: Number) -> Any:
        """Return `x` as a number of this context: strings exactly, floats as the binary value they hold."""
        if isinstance(x, str):
            x = Fraction(x)
        if isinstance(x, Fraction):
            return self.mpf(x.numerator) / self.mpf(x.denominator)
        return self.convert(x)

    @staticmethod
    def where(condition: Any, yes: Any, no: Any) -> Any:
        """Choose as numpy.where does, for single numbers."""
        return yes if condition else no


def _as_method(function: Any) -> Any:
    """Wrap a context function so that it can be bound to a number class."""
    return lambda *arguments: function(*arguments)


FLOAT = FloatContext()


@lru_cache(maxsize=32, typed=True)  # typed: True must not find the context of 1
def precise(digits: int) -> Precise:
    """Return the shared context for `digits` digits.

    Raises
    ------
    FieldError
        If `digits` is not an integer between 1 and 200.
    """
    if isinstance(digits, bool) or not isinstance(digits, int) or not 1 <= digits <= MAX_DIGITS:
        raise FieldError(f"digits must be an integer from 1 to {MAX_DIGITS}, got {digits!r}")
    return Precise(digits)
