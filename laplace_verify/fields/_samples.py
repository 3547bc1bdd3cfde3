"""Data on a side or rim given as a function: samples, and Fourier coefficients that have visibly decayed."""

from __future__ import annotations

from collections.abc import Callable
from functools import lru_cache
from typing import Any

import numpy as np

from laplace_verify.contexts import FLOAT
from laplace_verify.errors import FieldError
from laplace_verify.fields.formula import Formula
from laplace_verify.fields.user import UserField

__all__ = ["converged", "parsed", "sampled"]

FEWEST = 32
NOISE = 1e4  # a tail that does not shrink any more is rounding of the data themselves, up to this many units


@lru_cache(maxsize=256)
def parsed(text: str, variable: str) -> Formula:
    """Return a formula of one variable, read once."""
    return Formula.parse(text, names=(variable,))


def sampled(data: str | Callable[[Any], Any], variable: str, ctx: Any, t: Any) -> Any:
    """Return the data at t: an array (n,) of float64, or one precise number.

    Raises
    ------
    FieldError
        If the data are not finite there, or raise.
    """
    if isinstance(data, str):
        with np.errstate(all="ignore"):
            try:
                values = parsed(data, variable).value(ctx, {variable: t})
            except (ZeroDivisionError, ValueError) as cause:
                if isinstance(cause, FieldError):
                    raise
                raise FieldError(f"data {data!r} have no value at {variable} = {t}") from cause
    else:
        with np.errstate(all="ignore"):
            values = UserField(function=data, slope=None, dim=1)._value(ctx, (t,), None)
    if ctx is not FLOAT:
        number = ctx.convert(values)
        if not (hasattr(number, "_mpf_") and ctx.isfinite(number)):
            raise FieldError(f"data must be finite, but at {variable} = {ctx.nstr(t, 8)} they are not")
        return ctx.make_mpf(number._mpf_)
    values = np.broadcast_to(np.asarray(values, dtype=np.float64), t.shape)
    if not np.isfinite(values).all():
        raise FieldError(
            f"data must be finite, but at {variable} = {t[~np.isfinite(values)][0]} they are not"
        )
    return values


def converged(
    ctx: Any, transform: Callable[[int], tuple[Any, Any]], most: int, name: str, advice: str
) -> Any:
    """Return coefficients from as many samples as it takes, without those that are rounding.

    transform(count) returns the coefficients from `count` samples, lowest first, and the size of what was
    sampled. The last quarter must be below rounding; or, in float64, small and no longer shrinking when the
    samples are doubled: then it is the rounding of the function itself.

    Raises
    ------
    FieldError
        If the coefficients have not decayed after `most` samples.
    """
    count, previous = FEWEST, np.inf
    while count <= most:
        coefficients, size = transform(count)
        rounding = size * (2.0**-53 if ctx is FLOAT else ctx.mpf(10) ** -ctx.digits)
        largest = max(abs(c) for c in coefficients[3 * len(coefficients) // 4 :])
        plateau = ctx is FLOAT and largest <= NOISE * rounding and largest > previous / 4
        if largest <= rounding or plateau:
            cut = 2 * largest if plateau else rounding / 8
            kept = [i for i, c in enumerate(coefficients) if abs(c) > cut]
            return coefficients[: kept[-1] + 1 if kept else 1]
        count, previous = 2 * count, largest
    raise FieldError(
        f"the Fourier coefficients of {name} have not decayed after {most} samples, the data are not smooth "
        f"enough: {advice}"
    )
