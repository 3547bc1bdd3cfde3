"""Working precision that is raised until two evaluations agree."""

from __future__ import annotations

from collections.abc import Callable
from functools import lru_cache
from typing import Any

from laplace_verify.contexts import Precise
from laplace_verify.errors import FieldError
from laplace_verify.fields._inputs import text_of

__all__ = ["agreeing", "real", "working"]


def agreeing(
    evaluate: Callable[[Precise], list[Any]], digits: int, formula: str
) -> tuple[list[Any], list[Any]]:
    """Raise the working precision until two evaluations agree to `digits` digits; return value and change.

    A component that vanishes by cancellation never agrees relatively: once the precision is more than twice
    what was asked for, it is accepted if it is below 10**-(digits + 60).
    """
    previous = evaluate(working(digits))
    extra = 10
    while True:
        ctx = working(digits + extra)
        current = evaluate(ctx)
        changes = [a - b for a, b in zip(current, previous, strict=True)]
        unit, zero = ctx.mpf(10) ** -(digits + 2), ctx.mpf(10) ** -(digits + 60)
        settled = all(
            abs(change) <= unit * abs(value) or (extra > digits + 80 and abs(value) <= zero)
            for change, value in zip(changes, current, strict=True)
        )
        if settled:
            return current, changes
        if extra > 8 * digits + 2000:
            raise FieldError(f"{formula} does not settle to {digits} digits at {digits + extra} digits")
        previous, extra = current, 2 * extra


@lru_cache(maxsize=64)
def working(digits: int) -> Precise:
    """Return the context for a working precision, which may exceed what a caller can ask for."""
    return Precise(digits)


def real(ctx: Precise, number: Any, place: Any) -> Any:
    """Return a result as a real number of the context."""
    result = ctx.convert(number)
    if not (isinstance(result, ctx.mpf) and ctx.isfinite(result)):
        what = "complex" if isinstance(result, ctx.mpc) else "infinite or undefined"
        raise FieldError(f"the value at {text_of(place)} is {what}, not a finite real number")
    return result
