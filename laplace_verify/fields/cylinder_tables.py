"""The modes of a cylinder with a hot lid in float64: Bessel functions of all modes by one matrix product.

Sums (1) and (2) of `cylinder_kernel` for points whose terms decay at least like e^{-j reach} and e^{-k
reach}. J_0(j r), I_0(k r) and cos(k d) are even, J_1(j r), I_1(k r) and sin(k d) odd, all of them entire.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from functools import lru_cache

import numpy as np
from scipy import special

from laplace_verify.arrays import Array, blocks
from laplace_verify.contexts import FLOAT
from laplace_verify.fields.bessel_tables import quotient, zero
from laplace_verify.fields.parity_tables import ParityTable, parity_table, products
from laplace_verify.fields.polylog import accuracy

__all__ = ["axial_sum", "most_modes", "radial_sum"]

BLOCK = 1024  # points at once: rows of modes by points stay in cache


def most_modes(reach: float, base: float) -> int:
    """Return after how many modes nothing is left, if the n-th decays like e^{-n base reach}."""
    return 2 + math.ceil((accuracy(FLOAT) + 3) / (base * reach))


def radial_sum(
    r: Array, d: Array, profile: Callable[[Array, Array], list[Array]], reach: float, weight: int
) -> Array | None:
    """Return (1) and, if `weight` is 1, its derivatives in r and d; None if there is no table.

    profile(j, d) gives Z and dZ/dd of a column of j.
    """
    j, table = _radial_table(reach)
    if table is None:
        return None
    total = np.zeros((3, len(r)))
    for block in blocks(len(r), BLOCK):
        z, dz = profile(j[:, None], d[block])
        wave = table.even_rows(r[block])
        total[0, block] = products(wave, z)
        if weight:
            total[1, block] = products(table.odd_rows(r[block]), z)
            total[2, block] = products(wave, dz)
    return total


def axial_sum(r: Array, d: Array, height: float, deepest: float, reach: float, weight: int) -> Array | None:
    """Return (2) for d up to `deepest`, as `radial_sum` does."""
    tables = _axial_tables(height, deepest, reach)
    if tables is None:
        return None
    value, across, along = tables
    total = np.zeros((3, len(r)))
    total[0], total[2] = (height - d) / height, -1.0 / height
    for block in blocks(len(r), BLOCK):
        sine = along.odd_rows(d[block])
        total[0, block] += products(value.even_rows(r[block]), sine)
        if weight:
            total[1, block] = products(across.odd_rows(r[block]), sine)
            total[2, block] += products(across.even_rows(r[block]), along.even_rows(d[block]))
    return total


@lru_cache(maxsize=64)
def _radial_table(reach: float) -> tuple[Array, ParityTable | None]:
    """Return the zeros j, and 2 J_0(j r) / (j J_1(j)) with its derivatives."""
    zeros, steep = (
        np.array(c) for c in zip(*map(_zero, range(1, most_modes(reach, math.pi) + 1)), strict=True)
    )
    factor = 2.0 / (zeros * steep)

    def waves(r: Array) -> tuple[Array, Array]:
        at = zeros[:, None] * r
        return -(factor * zeros)[:, None] * special.j1(at), factor[:, None] * special.j0(at)

    return zeros, parity_table(waves, 1.0, np.exp(-reach * zeros))


def _zero(n: int) -> tuple[float, float]:
    j, steep = zero(FLOAT, n)
    return float(j), float(steep)


@lru_cache(maxsize=64)
def _axial_tables(
    height: float, deepest: float, reach: float
) -> tuple[ParityTable, ParityTable, ParityTable] | None:
    """Return the quotients -2 I / (H I_0(k)) over k, the same as they are, and sines and cosines of k d."""
    k = np.arange(1.0, most_modes(reach, math.pi / height) + 1.0) * (math.pi / height)

    def quotients(r: Array) -> tuple[Array, Array]:
        odd, even = (quotient(FLOAT, order, k[:, None], r, 1.0 - r) for order in (1, 0))
        return -2.0 / height * odd, -2.0 / height * even

    def waves(d: Array) -> tuple[Array, Array]:
        return np.sin(k[:, None] * d), np.cos(k[:, None] * d)

    across = parity_table(quotients, 1.0 - reach, np.ones(len(k)))
    along = parity_table(waves, deepest, np.exp(-reach * k))
    return None if across is None or along is None else (across.times(1.0 / k), across, along)
