"""Affine fields u = a . x + c: harmonic in any number of dimensions and for every conductivity."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.exact import Exact, exact, exact_point, show
from laplace_verify.fields.specs import registered

__all__ = ["Affine", "affine"]


@registered("affine")
@dataclass(frozen=True, slots=True, kw_only=True)
class Affine(Field):
    """u(x) = coefficients . x + constant; `affine` makes one."""

    coefficients: tuple[Exact, ...]
    constant: Exact = 0

    def __post_init__(self) -> None:
        """Make the parameters exact."""
        object.__setattr__(self, "coefficients", exact_point(self.coefficients, "coefficients"))
        object.__setattr__(self, "constant", exact(self.constant, "constant"))

    @property
    def dim(self) -> int:
        """Number of coefficients."""
        return len(self.coefficients)

    @property
    def degree(self) -> int:
        """1, or 0 for a constant."""
        return 1 if any(self.coefficients) else 0

    @property
    def formula(self) -> str:
        """Such as ``2 x - y + 1``."""
        terms = [(a, name) for a, name in zip(self.coefficients, "xyz", strict=False) if a]
        if self.constant or not terms:
            terms.append((self.constant, ""))
        return join_terms(terms)

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        total = x[0] * 0 + ctx.number(self.constant)
        for a, coordinate in zip(self.coefficients, x, strict=True):
            total = total + ctx.number(a) * coordinate
        return total

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002
        return tuple(ctx.number(a) for a in self.coefficients)

    def conjugate(self) -> Field:
        """Return -b x + a y for a x + b y + c."""
        if self.dim != 2:
            raise FieldError(f"conjugates belong to the plane, {self.formula} is {self.dim}-D")
        a, b = self.coefficients
        return Affine(coefficients=(-b, a))


def affine(coefficients: Any, constant: Any = 0) -> Affine:
    """Return u(x) = coefficients . x + constant, harmonic everywhere, in as many dimensions as coefficients.

    With `coefficients` in value per length and `constant` in value, u has the unit of `constant`.

    >>> affine((2, -1), constant="1/2").value([[1.0, 1.0], [0.0, 3.0], [0.5, 0.5]]).tolist()
    [1.5, -2.5, 1.0]
    >>> affine((3,)).dim
    1

    Raises
    ------
    FieldError
        If there are not 1, 2 or 3 coefficients, or one is no finite number.
    """
    return Affine(coefficients=coefficients, constant=constant)


def join_terms(terms: list[tuple[Exact, str]]) -> str:
    """Return ``2 x - y + 1`` for [(2, "x"), (-1, "y"), (1, "")].

    >>> join_terms([(2, "x"), (-1, "y"), (1, "")])
    '2 x - y + 1'
    """
    text = ""
    for coefficient, name in terms:
        size = show(-coefficient if coefficient < 0 else coefficient)
        body = name if name and size == "1" else f"{size} {name}".strip()
        text += (
            (" - " if coefficient < 0 else " + ") + body if text else ("-" if coefficient < 0 else "") + body
        )
    return text
