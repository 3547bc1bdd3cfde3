"""Fields for an anisotropic conductivity: v(x) = u(K^{-1/2} x) solves div(K grad v) = 0.

With S = K^{-1/2} (symmetric), grad v = S grad u and div(K grad v) = trace(K S H S) = trace(H) = 0, where H
is the Hessian of the harmonic u at S x (derived here). n . K grad v = n . K^{1/2} grad u.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array
from laplace_verify.contexts import FLOAT, Precise
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.exact import Exact, exact_point, rational
from laplace_verify.fields.motions import Moved, check_field, show_point
from laplace_verify.fields.specs import registered

__all__ = ["Stretched", "stretched"]

Matrix = tuple[tuple[Any, ...], ...]
ROOT_DIGITS = 40  # of the square root that is rounded to float64 once


@registered("stretched")
@dataclass(frozen=True, slots=True, kw_only=True)
class Stretched(Moved):
    """v(x) = field(tensor^{-1/2} x); `stretched` makes one."""

    field: Field
    tensor: tuple[tuple[Exact, ...], ...]

    def __post_init__(self) -> None:
        """Check that the tensor is symmetric positive definite."""
        check_field(self.field)
        d = self.field.dim
        rows = self.tensor
        if not isinstance(rows, tuple) or len(rows) != d:
            raise FieldError(f"K must be a {d} x {d} matrix for a {d}-D field, got {rows!r}")
        tensor = tuple(exact_point(row, f"K[{i}]", (d,)) for i, row in enumerate(rows))
        if any(tensor[i][j] != tensor[j][i] for i in range(d) for j in range(i)):
            raise FieldError(f"K must be symmetric, got {_show(tensor)}")
        if not all(_minor(tensor, k) > 0 for k in range(1, d + 1)):  # Sylvester's criterion, exactly
            raise FieldError(f"K must be positive definite, got {_show(tensor)}")
        object.__setattr__(self, "tensor", tensor)

    @property
    def formula(self) -> str:
        """Such as ``[x^2 - y^2](K^(-1/2) x), K = ((2, 0), (0, 1))``."""
        return f"[{self.field.formula}](K^(-1/2) x), K = {_show(self.tensor)}"

    def _back(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, ...]:
        return _apply(_roots(ctx, self.tensor)[1], x)

    def _forward(self, ctx: Any, gradient: tuple[Any, ...]) -> tuple[Any, ...]:
        return _apply(_roots(ctx, self.tensor)[1], gradient)

    def _map(self) -> tuple[Array, Array]:
        return np.array(_roots(FLOAT, self.tensor)[0], dtype=np.float64), np.zeros(self.dim)

    def _with(self, field: Field) -> Field:
        return Stretched(field=field, tensor=self.tensor)

    def conjugate(self) -> Field:
        """Refuse: v is not harmonic, so it has no conjugate in the sense of Cauchy and Riemann."""
        raise FieldError(
            f"{self.formula} is not harmonic unless K is a multiple of 1, so it has no conjugate"
        )


def stretched(field: Field, K: npt.ArrayLike) -> Stretched:
    """Return v(x) = u(K^{-1/2} x), which solves div(K grad v) = 0 if u = `field` is harmonic.

    Parameters
    ----------
    field : Field
        A harmonic field in d dimensions.
    K : array_like, shape (d, d)
        Symmetric positive definite conductivity; entries may be strings such as "2/3". In 1-D ``[[k]]``.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> v = stretched(fields.polynomial(2), [[4, 0], [0, 1]])  # x^2/4 - y^2
    >>> v.value([[2.0, 0.0], [0.0, 1.0], [2.0, 1.0]]).tolist()
    [1.0, -1.0, 0.0]

    Raises
    ------
    FieldError
        If K is not symmetric positive definite or does not fit the field.
    """
    rows = K.tolist() if isinstance(K, np.ndarray) else K
    if not isinstance(rows, list | tuple) or not all(isinstance(row, list | tuple) for row in rows):
        raise FieldError(f"K must be a square matrix, got {K!r}")
    return Stretched(field=field, tensor=tuple(tuple(row) for row in rows))


@lru_cache(maxsize=64)
def _rounded_roots(tensor: Matrix) -> tuple[Matrix, Matrix]:
    """Return K^{1/2} and K^{-1/2} in float64, rounded once."""
    root, inverse = _precise_roots(Precise(ROOT_DIGITS), tensor)
    as_floats = [tuple(tuple(float(a) for a in row) for row in m) for m in (root, inverse)]
    return as_floats[0], as_floats[1]


def _roots(ctx: Any, tensor: Matrix) -> tuple[Matrix, Matrix]:
    """Return K^{1/2} and K^{-1/2} in a context."""
    return _rounded_roots(tensor) if ctx is FLOAT else _precise_roots(ctx, tensor)


@lru_cache(maxsize=64)
def _precise_roots(ctx: Precise, tensor: Matrix) -> tuple[Matrix, Matrix]:
    """Return K^{1/2} and K^{-1/2} by the eigenvectors of K; a diagonal K without them."""
    d = len(tensor)
    if all(tensor[i][j] == 0 for i in range(d) for j in range(i)):
        values = [ctx.sqrt(ctx.number(tensor[i][i])) for i in range(d)]
        return _diagonal(ctx, values), _diagonal(ctx, [1 / v for v in values])
    numbers = ctx.matrix([[ctx.number(a) for a in row] for row in tensor])
    values, vectors = ctx.eigsy(numbers)
    roots = [ctx.sqrt(v) for v in values]
    return (
        _rows(vectors * ctx.diag(roots) * vectors.T, d),
        _rows(vectors * ctx.diag([1 / r for r in roots]) * vectors.T, d),
    )


def _diagonal(ctx: Precise, values: list[Any]) -> Matrix:
    """Return a diagonal matrix as rows."""
    return tuple(tuple(v if i == j else ctx.mpf(0) for j in range(len(values))) for i, v in enumerate(values))


def _rows(matrix: Any, d: int) -> Matrix:
    """Return an mpmath matrix as rows."""
    return tuple(tuple(matrix[i, j] for j in range(d)) for i in range(d))


def _apply(matrix: Matrix, x: tuple[Any, ...]) -> tuple[Any, ...]:
    """Return matrix @ x."""
    return tuple(sum((a * c for a, c in zip(row[1:], x[1:], strict=True)), row[0] * x[0]) for row in matrix)


def _minor(tensor: Matrix, k: int) -> Any:
    """Return the leading k x k minor, exactly."""
    a = [[rational(tensor[i][j]) for j in range(k)] for i in range(k)]
    if k == 1:
        return a[0][0]
    if k == 2:
        return a[0][0] * a[1][1] - a[0][1] * a[1][0]
    return (
        a[0][0] * (a[1][1] * a[2][2] - a[1][2] * a[2][1])
        - a[0][1] * (a[1][0] * a[2][2] - a[1][2] * a[2][0])
        + a[0][2] * (a[1][0] * a[2][1] - a[1][1] * a[2][0])
    )


def _show(tensor: Matrix) -> str:
    """Return ``((2, 0), (0, 1))``."""
    return "(" + ", ".join(show_point(row) for row in tensor) + ")"
