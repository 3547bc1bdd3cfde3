"""Bulirsch's complete elliptic integral, by an arithmetic-geometric mean.

    cel(k, p, a, b) = int_0^{pi/2} (a cos^2 t + b sin^2 t)
                      / [(cos^2 t + p sin^2 t) sqrt(cos^2 t + k^2 sin^2 t)] dt

for complementary modulus k > 0 and p > 0, so that K = cel(k, 1, 1, 1) and E = cel(k, 1, 1, k^2). Each step
squares the error; float64 takes as many as k asks for.

References
----------
Bulirsch (1969), Numerical calculation of elliptic integrals and elliptic functions III, Numer. Math. 13,
305-315 (from memory; checked against quadrature in tests).
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from laplace_verify.contexts import FLOAT

__all__ = ["cel", "cels"]

MOST_STEPS = 60


def cel(ctx: Any, k: Any, p: Any, a: Any, b: Any) -> Any:
    """Return cel(k, p, a, b) for arrays of one shape, or precise numbers.

    >>> kept = cel(FLOAT, np.array([0.5]), 1.0, 1.0, 1.0)  # pi / 2 over the mean of 1 and 1/2
    >>> bool(abs(kept[0] - 2.1565156474996432) < 1e-15)
    True
    """
    return cels(ctx, k, ((p, a, b),))[0]


def cels(ctx: Any, k: Any, parameters: Sequence[tuple[Any, Any, Any]]) -> list[Any]:
    """Return cel(k, p, a, b) for several (p, a, b): the mean of k is taken once."""
    sums = []
    for p, a, b in parameters:
        root = ctx.sqrt(p)
        sums.append((root + 0 * k, a + 0 * k, b / root))
    e, em, kc = k, 0 * k + 1, k
    for _ in range(MOST_STEPS):
        for i, (p, a, b) in enumerate(sums):
            g = e / p
            sums[i] = (p + g, a + b / p, 2 * (b + a * g))
        g = em
        em = kc + em
        if _settled(ctx, g, kc):
            break
        kc = 2 * ctx.sqrt(e)
        e = kc * em
    return [ctx.pi / 2 * (b + a * em) / (em * (em + p)) for p, a, b in sums]


def _settled(ctx: Any, g: Any, kc: Any) -> bool:
    """Return whether the means agree to half of the digits: the next step would make that all."""
    if ctx is FLOAT:
        return bool(np.all(~(np.abs(g - kc) > 1e-9 * g)))
    return bool(abs(g - kc) <= ctx.mpf(10) ** -(ctx.dps // 2 + 3) * g)
