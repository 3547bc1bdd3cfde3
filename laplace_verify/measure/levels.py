"""Which sizes a study runs: those asked for, the solver's own, or default ones, with finer ones added if that may help."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from laplace_verify.errors import AdapterError
from laplace_verify.measure.results import Level
from laplace_verify.measure.series import MINIMUM_LEVELS

__all__ = ["check_sizes", "default_sizes", "further_sizes"]

PLANE, SPACE = (8, 16, 32, 64), (6, 9, 13, 19, 28)
SPACE_RATIO = 1.45
MOST_ADDED = 2
MOST_UNKNOWNS = 150_000  # a bound on work that does not depend on the machine, so that results do not either


def default_sizes(dim: int) -> tuple[int, ...]:
    """Return 8 16 32 64 in one and two dimensions, 6 9 13 19 28 in three."""
    return SPACE if dim == 3 else PLANE


def check_sizes(sizes: Sequence[int]) -> tuple[int, ...]:
    """Return sizes as a tuple after checking them.

    Raises
    ------
    AdapterError
        If there are fewer than three, one is no positive integer, or they do not increase.
    """
    try:
        given = tuple(sizes)
    except TypeError:
        raise AdapterError(f"sizes must be a sequence such as (8, 16, 32, 64), got {sizes!r}") from None
    if not all(isinstance(n, int | np.integer) and not isinstance(n, bool) and n > 0 for n in given):
        raise AdapterError(f"sizes must be positive integers, got {given!r}")
    if len(given) < 3:
        raise AdapterError(f"an order needs at least three sizes (four for a PASS), got {given!r}; try (8, 16, 32, 64)")
    if any(fine <= coarse for coarse, fine in zip(given, given[1:], strict=False)):
        raise AdapterError(f"sizes must increase from coarse to fine, got {given!r}")
    return tuple(int(n) for n in given)


def further_sizes(levels: Sequence[Level], dim: int, started: int) -> list[int]:
    """Return the sizes worth adding next, best first; empty if there are none.

    First up to two finer ones, twice the last (1.45 times in space). If then fewer than four levels can be judged, in
    one and two dimensions sizes half-way between judged ones (3/2 of the coarser).
    """
    sizes = [level.size for level in levels]
    last = levels[-1]
    finer = round(SPACE_RATIO * last.size) if dim == 3 else 2 * last.size
    unknowns = last.unknowns * (finer / last.size) ** dim
    if len(levels) < started + MOST_ADDED and unknowns <= MOST_UNKNOWNS:
        return [finer]
    judged = [level.size for level in levels if level.judged]
    if dim == 3 or not 2 <= len(judged) < MINIMUM_LEVELS:
        return []
    return [3 * n // 2 for n in judged[:-1] if n % 2 == 0 and 3 * n // 2 not in sizes]
