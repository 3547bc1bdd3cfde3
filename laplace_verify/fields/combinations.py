"""Sums and multiples of fields: div(K grad u) = 0 is linear."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import reduce
from typing import Any

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.affine import join_terms
from laplace_verify.fields.base import Field
from laplace_verify.fields.edges import Edge, Line, Ring
from laplace_verify.fields.exact import Exact, exact, rational
from laplace_verify.fields.sheets import Fan, Sheet
from laplace_verify.fields.singular import Basis, Cut, Singularity, weakest_basis
from laplace_verify.fields.specs import registered

__all__ = ["Combination", "combined"]

ROUNDED_UP = 1.0 + 1e-14  # of sums of error bounds


@registered("sum")
@dataclass(frozen=True, slots=True, kw_only=True)
class Combination(Field):
    """u = sum of factors[i] * terms[i]."""

    factors: tuple[Exact, ...]
    terms: tuple[Field, ...]

    def __post_init__(self) -> None:
        """Check that the terms are fields of one dimension, one factor each."""
        factors = tuple(exact(f, f"factors[{i}]") for i, f in enumerate(self.factors))
        object.__setattr__(self, "factors", factors)
        if not self.terms or len(factors) != len(self.terms):
            raise FieldError(f"a sum needs one factor per term, got {len(factors)} and {len(self.terms)}")
        if not all(isinstance(term, Field) for term in self.terms):
            raise FieldError("the terms of a sum must be fields")
        dims = sorted({term.dim for term in self.terms})
        if len(dims) > 1:
            raise FieldError(f"fields that are added must have the same dimension, got {dims}")

    @property
    def dim(self) -> int:
        """The dimension of all terms."""
        return self.terms[0].dim

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """Those of all terms, each once."""
        return tuple(dict.fromkeys(s for term in self.terms for s in term.singularities))

    @property
    def cuts(self) -> tuple[Cut, ...]:
        """Those of all terms, each once."""
        return tuple(dict.fromkeys(c for term in self.terms for c in term.cuts))

    @property
    def edges(self) -> tuple[Edge | Line | Ring, ...]:
        """Those of all terms, each once."""
        return tuple(dict.fromkeys(e for term in self.terms for e in term.edges))

    @property
    def sheets(self) -> tuple[Fan | Sheet, ...]:
        """Those of all terms, each once."""
        return tuple(dict.fromkeys(s for term in self.terms for s in term.sheets))

    @property
    def basis(self) -> Basis:
        """The weakest of the terms."""
        return weakest_basis(*(term.basis for term in self.terms))

    @property
    def fit_error(self) -> float:
        """The sum of those of the terms, each times |factor|."""
        pairs = zip(self.factors, self.terms, strict=True)
        return ROUNDED_UP * math.fsum(abs(float(f)) * term.fit_error for f, term in pairs)

    @property
    def most_digits(self) -> int:
        """The fewest of the terms."""
        return min(term.most_digits for term in self.terms)

    def gradient_error(self, place: tuple[Any, ...]) -> float:
        """Return the sum of those of the terms, each times |factor|."""
        pairs = zip(self.factors, self.terms, strict=True)
        return ROUNDED_UP * math.fsum(abs(float(f)) * term.gradient_error(place) for f, term in pairs if f)

    @property
    def opaque(self) -> bool:
        """Whether one of the terms is."""
        return any(term.opaque for term in self.terms)

    @property
    def degree(self) -> int | None:
        """The largest degree of the terms, None if one is no polynomial."""
        degrees = [term.degree for term in self.terms]
        known = [d for d in degrees if d is not None]
        return max(known) if len(known) == len(degrees) else None

    @property
    def regions(self) -> tuple[str, ...]:
        """Those of all terms, each once."""
        return tuple(dict.fromkeys(name for term in self.terms for name in term.regions))

    def restricted(self, region: str) -> Field:
        """Return the sum of the restricted terms."""
        return Combination(factors=self.factors, terms=tuple(term.restricted(region) for term in self.terms))

    def on_interface(self, points: Array, place: tuple[Any, ...] | None = None) -> BoolArray:
        """Return where the gradient of a term jumps."""
        return reduce(lambda a, b: a | b, (term.on_interface(points, place) for term in self.terms))

    @property
    def growth(self) -> float:
        """The largest growth of the terms."""
        return max(term.growth for term in self.terms)

    @property
    def formula(self) -> str:
        """The terms with their factors."""
        parts = []
        for factor, term in zip(self.factors, self.terms, strict=True):
            text = term.formula
            if factor != 1 and (_is_sum(text) or (abs(float(factor)) != 1 and text[0].isdigit())):
                text = f"({text})"
            parts.append((factor, text))
        return join_terms(parts)

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        parts = (
            ctx.number(f) * t._value(ctx, x, side) for f, t in zip(self.factors, self.terms, strict=True)
        )
        return reduce(lambda a, b: a + b, parts)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        total: tuple[Any, ...] = (0,) * self.dim
        for factor, term in zip(self.factors, self.terms, strict=True):
            number = ctx.number(factor)
            part = term._gradient(ctx, x, side)
            total = tuple(a + number * b for a, b in zip(total, part, strict=True))
        return total

    def _valid(self, points: Array) -> BoolArray:
        return reduce(lambda a, b: a & b, (term._valid(points) for term in self.terms))

    def conjugate(self) -> Field:
        """Return the sum of the terms' conjugates."""
        return Combination(factors=self.factors, terms=tuple(term.conjugate() for term in self.terms))


def combined(*pairs: tuple[Number, Field]) -> Field:
    """Return the sum of factor * field over the pairs, with sums inside sums opened.

    Raises
    ------
    FieldError
        If the dimensions differ or a factor is no finite number.
    """
    factors: list[Exact] = []
    terms: list[Field] = []
    for factor, field in pairs:
        number = exact(factor, "factor")
        inner = (
            zip(field.factors, field.terms, strict=True) if isinstance(field, Combination) else ((1, field),)
        )
        for own, term in inner:
            factors.append(product(number, own))
            terms.append(term)
    return Combination(factors=tuple(factors), terms=tuple(terms))


def _is_sum(text: str) -> bool:
    """Return whether a formula has a plus or minus outside its brackets."""
    depth = 0
    for before, sign in zip(" " + text, text, strict=False):
        depth += (sign in "([") - (sign in ")]")
        if depth == 0 and sign in "+-" and before == " ":
            return True
    return False


def product(a: Exact, b: Exact) -> Exact:
    """Return a b exactly; a float stays a float only if nothing is lost.

    >>> product(0.1, 3) == product(3, 0.1)
    True
    """
    value = rational(a) * rational(b)
    if (isinstance(a, float) or isinstance(b, float)) and float(value) == value:
        return float(value)
    return exact(value, "factor")
