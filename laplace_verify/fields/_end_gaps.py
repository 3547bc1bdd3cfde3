"""The potential of a line of charge between its two ends, finite on their prolongation."""

from __future__ import annotations

from typing import Any

import numpy as np

from laplace_verify.contexts import FLOAT

__all__ = ["TINY", "logarithm_between"]

TINY = 1e-150


def logarithm_between(ctx: Any, across: Any, z: Any, ends: list[Any], r: list[Any]) -> Any:
    """Return asinh(Y_1/h) - asinh(Y_0/h): one logarithm that tells on which side of the ends the point is."""
    low, high = ends
    if ctx is FLOAT:
        h2 = np.maximum(across * across + z * z, TINY)  # on the edge the factor X makes the term vanish
        above, below = (
            (high + r[1]) / np.where(low > 0.0, low + r[0], 1.0),
            (r[0] - low) / np.where(high < 0.0, r[1] - high, 1.0),
        )
        ratio = np.where(low > 0.0, above, np.where(high < 0.0, below, above * below / h2))
        return np.log(np.maximum(ratio, TINY))
    if low > 0:
        return ctx.log((high + r[1]) / (low + r[0]))
    if high < 0:
        return ctx.log((r[0] - low) / (r[1] - high))
    h2 = across * across + z * z
    return ctx.log((high + r[1]) * (r[0] - low) / h2) if h2 else ctx.mpf(0)
