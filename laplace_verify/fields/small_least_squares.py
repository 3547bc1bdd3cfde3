"""Many small problems of least squares at once, without the threads of a library.

Gram-Schmidt, every column made orthogonal twice, gives Q and R with Q orthogonal to rounding, and x = R^-1
Q^T b, improved once by the same for what is left of b (Bjoerck 1996, Numerical methods for least squares
problems, ch. 2, from memory, unchecked). Problems are stacked, so that numpy's own loops are long: for
matrices of a hundred rows a threaded library takes longer to start than to compute, and much longer on a busy
machine.
"""

from __future__ import annotations

import numpy as np

from laplace_verify.arrays import Array

__all__ = ["least_squares"]


def least_squares(problems: list[tuple[Array, Array]]) -> list[Array]:
    """Return x, shape (n, k), with least |A x - B| for each pair of A, shape (m, n), and B, shape (m, k).

    Parameters
    ----------
    problems : list of pairs of arrays
        The columns of every A must be independent.

    Examples
    --------
    >>> a, b = np.array([[1.0, 0.0], [1.0, 1.0], [1.0, 2.0]]), np.array([[1.0], [3.0], [5.0]])
    >>> [x.round(12).tolist() for x in least_squares([(a, b)])]
    [[[1.0], [2.0]]]
    """
    found: list[Array] = [np.empty((0, 0))] * len(problems)
    for shape in sorted({a.shape for a, _ in problems}):
        which = [k for k, (a, _) in enumerate(problems) if a.shape == shape]
        q, r = _orthogonal(np.stack([problems[k][0].T for k in which]))
        for k, own_q, own_r in zip(which, q, r, strict=True):
            a, b = problems[k]
            found[k] = _back(own_r, np.einsum("nm,mk->nk", own_q, b))
            rest = b - np.einsum("mn,nk->mk", a, found[k])
            found[k] += _back(own_r, np.einsum("nm,mk->nk", own_q, rest))
    return found


def _orthogonal(columns: Array) -> tuple[Array, Array]:
    """Return Q, in place of the columns, shape (problems, n, m), and R, shape (problems, n, n)."""
    count = columns.shape[1]
    r = np.zeros((len(columns), count, count))
    for j in range(count):
        column, before = columns[:, j], columns[:, :j]
        for _ in range(2):
            share = np.einsum("gkm,gm->gk", before, column)
            column -= np.einsum("gkm,gk->gm", before, share)
            r[:, :j, j] += share
        r[:, j, j] = np.sqrt(np.einsum("gm,gm->g", column, column))
        column /= r[:, j, j, None]
    return columns, r


def _back(r: Array, b: Array) -> Array:
    """Return R^-1 b for an upper triangle R."""
    x = np.empty_like(b)
    for j in range(len(r) - 1, -1, -1):
        x[j] = (b[j] - np.einsum("k,km->m", r[j, j + 1 :], x[j + 1 :])) / r[j, j]
    return x
