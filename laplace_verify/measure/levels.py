"""Which sizes a study runs: those asked for, the solver's own, or default ones and finer ones if needed."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise

import numpy as np

from laplace_verify.errors import AdapterError
from laplace_verify.measure.results import Level
from laplace_verify.measure.series import MINIMUM_LEVELS

__all__ = ["check_sizes", "default_sizes", "further_sizes"]

PLANE, SPACE = (8, 16, 32, 64), (6, 9, 13, 19, 28)
SPACE_RATIO = 1.45
MOST_ADDED, MOST_ADDED_FINE = 2, 3
# a bound on work that does not depend on the machine, so that results do not either
MOST_UNKNOWNS = {1: 300_000, 2: 300_000, 3: 100_000}


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
        raise AdapterError(
            f"an order needs at least three sizes (four for a PASS), got {given!r}; try (8, 16, 32, 64)"
        )
    if any(fine <= coarse for coarse, fine in pairwise(given)):
        raise AdapterError(f"sizes must increase from coarse to fine, got {given!r}")
    return tuple(int(n) for n in given)


def further_sizes(levels: Sequence[Level], dim: int, added: int) -> list[int]:
    """Return the sizes worth running next; empty if there are none. `added` finer ones have been run already.

    First up to two finer ones, twice the last (1.45 times in space). If then fewer than four levels can be
    judged, in one and two dimensions sizes half-way between judged ones (3/2 of the coarser), and at last a
    third finer one.
    """
    judged = [level.size for level in levels if level.judged]
    steps = [n for n in judged if not (n % 3 == 0 and 2 * n // 3 in judged)]
    halfway = {3 * n // 2 for n in steps if n % 2 == 0}
    last = levels[-1]
    finer = round(SPACE_RATIO * last.size) if dim == 3 else 2 * last.size
    affordable = last.unknowns * (finer / last.size) ** dim <= MOST_UNKNOWNS[dim]
    if affordable and added < MOST_ADDED:
        return [finer]
    if dim == 3 or len(steps) >= MINIMUM_LEVELS:
        return []
    missing = sorted(n for n in halfway if n not in judged and n < last.size)
    if missing:
        return missing
    return [finer] if affordable and added < MOST_ADDED_FINE else []
