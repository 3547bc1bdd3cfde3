"""Regularised least squares in whole numbers: fixed point, the same digits on every machine.

A number a is kept as the integer nearest to 2^bits a. The normal matrix of whole numbers is exact; if
python-flint is installed it forms the same product sooner. The matrix plus δ^2 is positive definite, so that
elimination needs no pivots and its entries do not grow.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

__all__ = ["Products", "gram", "least_squares"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Products:
    """A'A (n, n) and A'b (n,) as arrays of whole numbers at 2^bits."""

    matrix: Any
    right: Any


def gram(matrix: list[list[int]], right: list[int], bits: int) -> Products:
    """Return A'A and A'b.

    >>> products = gram([[2, 0], [2, 4]], [2, 6], 1)
    >>> products.matrix.tolist(), products.right.tolist()
    ([[4, 4], [4, 8]], [8, 12])
    """
    full = [[*row, b] for row, b in zip(matrix, right, strict=True)]
    products = _product_by_flint(full)
    if products is None:
        products = _product(full)
    shifted = products >> bits
    return Products(matrix=shifted[:-1, :-1], right=shifted[:-1, -1])


def _product_by_flint(rows: list[list[int]]) -> Any:
    """Return the product by python-flint, None if it is not installed."""
    try:
        from flint import fmpz_mat
    except ImportError:
        return None
    a = fmpz_mat(rows)
    table = (a.transpose() * a).table()
    return np.array([[int(entry) for entry in row] for row in table], dtype=object)


def _product(rows: list[list[int]]) -> Any:
    """Return the product by numpy's loops over Python's integers."""
    a = np.array(rows, dtype=object)
    n = a.shape[1]
    result = np.empty((n, n), dtype=object)
    for i in range(n):
        result[i, i:] = a[:, i] @ a[:, i:]
        result[i:, i] = result[i, i:]
    return result


def least_squares(products: Products, delta: int, bits: int) -> list[int]:
    """Return the c that minimises |A c - b|^2 + 4^-delta |c|^2, at 2^bits.

    >>> least_squares(Products(matrix=np.array([[32]], dtype=object), right=np.array([16], dtype=object)),
    ...               10, 4)
    [8]
    """
    s, x = products.matrix.copy(), products.right.copy()
    n = len(x)
    extra = 1 << max(bits - 2 * delta, 0) if bits >= 2 * delta else 0
    for i in range(n):
        s[i, i] += extra
    for k in range(n):
        column = s[k + 1 :, k]
        if not len(column):
            break
        factors = (column << bits) // s[k, k]
        for i in range(k + 1, n):
            s[i, k + 1 : i + 1] -= (factors[i - k - 1] * s[k + 1 : i + 1, k]) >> bits
        x[k + 1 :] -= (factors * x[k]) >> bits
    for k in range(n - 1, -1, -1):
        # s holds D L' by columns: s[i, k] for i > k is D_k L_ik
        total = x[k] - ((s[k + 1 :, k] @ x[k + 1 :]) >> bits if k + 1 < n else 0)
        x[k] = (total << bits) // s[k, k]
    return [int(c) for c in x]
