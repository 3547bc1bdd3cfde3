"""Which sizes a study runs: those asked for, the solver's own, or default ones and finer ones if needed."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import pairwise

import numpy as np

from laplace_verify.errors import AdapterError
from laplace_verify.measure.results import Level
from laplace_verify.measure.series import MINIMUM_LEVELS

__all__ = [
    "check_budget", "check_seed", "check_sizes", "default_sizes", "further_sizes", "predicted_seconds",
]  # fmt: skip

PLANE, SPACE = (8, 16, 32, 64), (6, 9, 13, 19, 28)
SPACE_RATIO = 1.45
MULTIPLE = 8  # of this is the start of a ladder, as the default sizes are
SHORTEST_STEP = 1.4  # of the last size of a ladder over the one before: less tells little
MOST_ROUNDS = 3
MOST_PAID_ROUNDS = 4
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


def check_budget(budget: object) -> None:
    """Refuse what is no number of seconds.

    Raises
    ------
    AdapterError
        If `budget` is neither None nor a number of at least 0.
    """
    if budget is None:
        return
    number = isinstance(budget, int | float | np.integer | np.floating) and not isinstance(budget, bool)
    if not (number and 0 <= float(budget) < math.inf):  # type: ignore[arg-type]  # checked to be a number
        raise AdapterError(f"budget must be a number of seconds of at least 0, got {budget!r}")


def check_seed(seed: object) -> None:
    """Refuse what cannot seed a generator.

    Raises
    ------
    AdapterError
        If `seed` is no whole number of at least 0.
    """
    if isinstance(seed, bool) or not isinstance(seed, int | np.integer) or not seed >= 0:
        raise AdapterError(f"seed must be a whole number of at least 0, got {seed!r}")


def further_sizes(
    levels: Sequence[Level], dim: int, rounds: int, scale: float, budget: float | None = None
) -> list[int]:
    """Return the sizes worth running next; empty if there are none. `rounds` of additions have been run.

    If fewer than four levels can be judged, the first round is a ladder of four that starts at the coarsest
    size to be judged (with h <= scale/2; a multiple of eight, like the default sizes, whose grid lines meet
    the same points); its last step is shorter where a full one would be too long. Otherwise a round is one
    finer size: twice the last, 1.45 times in space. Sizes with more than the bounded number of unknowns are
    left out, so that what is run does not depend on the machine; with a `budget` in seconds it does: then
    sizes are left out whose time, predicted to grow like unknowns^(3/2), exceeds what is left.
    """
    if rounds >= (MOST_ROUNDS if budget is None else MOST_PAID_ROUNDS):
        return []
    ratio = SPACE_RATIO if dim == 3 else 2.0
    last = levels[-1]
    per_cell = (last.unknowns or last.size**dim) / last.size**dim
    largest = math.floor((MOST_UNKNOWNS[dim] / per_cell) ** (1 / dim))
    wanted = [round(ratio * last.size)]
    if rounds == 0 and sum(level.judged for level in levels) < MINIMUM_LEVELS and math.isfinite(scale):
        start = MULTIPLE * math.ceil(last.size * last.h / (scale / 2) / MULTIPLE - 1e-9)
        wanted = [round(start * ratio**k) for k in range(MINIMUM_LEVELS)]
        if budget is None and wanted[-2] * SHORTEST_STEP < largest < wanted[-1]:
            wanted[-1] = largest // MULTIPLE * MULTIPLE
    known = {level.size for level in levels}
    wanted = [n for n in wanted if n not in known]
    if budget is None:
        return [n for n in wanted if n <= largest]
    chosen: list[int] = []
    for n in wanted:
        budget -= predicted_seconds(last, n, dim)
        if budget < 0:
            break
        chosen.append(n)
    return chosen


def predicted_seconds(last: Level, size: int, dim: int) -> float:
    """Return the time a size should take: like unknowns^(3/2), as sparse elimination in the plane does."""
    return float(last.seconds * (size / last.size) ** (1.5 * dim))
