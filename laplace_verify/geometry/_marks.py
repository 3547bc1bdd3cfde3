"""Marks along a side: nearly equal cells, and ends of pieces that are marks."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array
from laplace_verify.errors import GeometryError

__all__ = ["SAME", "stretched", "subdivide"]

SAME = 1e-9  # relative distance at which two places are one


def subdivide(breaks: npt.ArrayLike, n: int) -> Array:
    """Return about n + 1 rising coordinates that contain all `breaks`, cells nearly equal.

    The smallest and the largest break are the ends; equal ones count once. Every interval between two breaks
    gets at least one cell, so there may be more than n.

    >>> subdivide([0.0, 0.3, 1.0], 4).tolist()
    [0.0, 0.3, 0.5333333333333333, 0.7666666666666666, 1.0]
    """
    stops = np.unique(np.asarray(breaks, dtype=np.float64))
    apart = np.diff(stops) > SAME * (stops[-1] - stops[0])
    stops = np.append(stops[:-1][apart], stops[-1])  # of nearly equal ones the last, but the very first stays
    stops[0] = np.min(breaks)
    marks = np.rint(n * (stops - stops[0]) / (stops[-1] - stops[0])).astype(int)
    for k in range(1, len(marks)):
        marks[k] = max(marks[k], marks[k - 1] + 1)
    parts = [
        np.linspace(stops[k], stops[k + 1], marks[k + 1] - marks[k], endpoint=False)
        for k in range(len(marks) - 1)
    ]
    return np.concatenate([*parts, stops[-1:]])


def stretched(share: Array, breaks: Array, cells: int) -> Array:
    """Move positions in [0, 1] so that the nearest of the marks k / cells comes to lie on every break."""
    inner = breaks[(breaks > SAME) & (breaks < 1.0 - SAME)]
    marks = subdivide([0.0, *inner, 1.0], cells)
    if len(marks) != cells + 1:
        raise GeometryError(f"n is too small: {len(inner)} ends of pieces do not fit on {cells} cells")
    return np.interp(share, np.arange(cells + 1) / cells, marks)
