"""Harmonic polynomials of the plane: real and imaginary part of ((x + i y - c)/scale)^n.

The power is formed by repeated squaring in log2(n) steps. In float64 a plain product would have a relative
error of about n roundings, and rounding (x + i y - c)/scale itself would cost n more; what is lost on the way
is carried along to first order (`_two_floats`), so that a rounding or two remain.
"""

from __future__ import annotations

import dataclasses
from dataclasses import dataclass
from typing import Any, Literal

from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields._two_floats import accurate_power, scaled_offset
from laplace_verify.fields.base import Field
from laplace_verify.fields.combinations import combined
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, show, whole
from laplace_verify.fields.specs import registered

__all__ = ["Polynomial", "complex_power", "polynomial"]

HIGHEST = 10_000


@registered("polynomial")
@dataclass(frozen=True, slots=True, kw_only=True)
class Polynomial(Field):
    """Re or Im of ((x + i y - centre)/scale)^degree; `polynomial` makes one."""

    degree: int = dataclasses.field()  # no default; hides the property of the base class
    part: Literal["re", "im"] = "re"
    centre: tuple[Exact, ...] = (0, 0)
    scale: Exact = 1

    def __post_init__(self) -> None:
        """Check degree, part, centre and scale."""
        object.__setattr__(self, "degree", whole(self.degree, "degree", 0, HIGHEST))
        if self.part not in ("re", "im"):
            raise FieldError(f'part must be "re" or "im", got {self.part!r}')
        object.__setattr__(self, "centre", exact_point(self.centre, "centre", (2,)))
        object.__setattr__(self, "scale", exact(self.scale, "scale"))
        if not self.scale > 0:
            raise FieldError(f"scale must be positive, got {self.scale}")

    @property
    def dim(self) -> int:
        """Two."""
        return 2

    @property
    def formula(self) -> str:
        """Such as ``Re (x + i y)^3``."""
        names = [_shifted(name, c) for name, c in zip("xy", self.centre, strict=True)]
        base = f"{names[0]} + i {names[1]}"
        base = f"({base})" if self.scale == 1 else f"(({base})/{show(self.scale)})"
        return f"{self.part.capitalize()} {base}^{self.degree}"

    def _power(self, ctx: Any, x: tuple[Any, ...], degree: int) -> tuple[Any, Any]:
        """Return real and imaginary part of ((z - c)/scale)^degree."""
        if ctx is not FLOAT:
            scale = ctx.number(self.scale)
            a, b = (offset(ctx, coordinate, c) / scale for coordinate, c in zip(x, self.centre, strict=True))
            return complex_power(a, b, degree)
        (a, da), (b, db) = (scaled_offset(v, c, self.scale) for v, c in zip(x, self.centre, strict=True))
        return accurate_power((a, b, da, db), degree)

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        return self._power(ctx, x, self.degree)[0 if self.part == "re" else 1]

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002
        """Return the parts of f' = n z^{n-1}: u_x = Re f', u_y = -Im f' for u = Re f."""
        if self.degree == 0:
            return 0 * x[0], 0 * x[1]
        re, im = self._power(ctx, x, self.degree - 1)
        factor = self.degree / ctx.number(self.scale)
        return (factor * re, -factor * im) if self.part == "re" else (factor * im, factor * re)

    def conjugate(self) -> Field:
        """Return Im for Re, and -Re for Im."""
        if self.part == "re":
            return dataclasses.replace(self, part="im")
        return combined((-1, dataclasses.replace(self, part="re")))


def polynomial(
    degree: int, part: Literal["re", "im"] = "re", centre: tuple[Number, Number] = (0, 0), scale: Number = 1
) -> Polynomial:
    """Return u(x, y) = Re or Im of ((x + i y - c)/scale)^degree, c = centre: harmonic in the whole plane.

    Parameters
    ----------
    degree : int
        0 to 10000. The float64 error is a few roundings of |z/scale|^degree.
    part : {"re", "im"}
        Real or imaginary part; "im" is the conjugate of "re".
    centre : tuple of two numbers
    scale : number
        A length; with the size of the domain as scale the values stay within 1.

    Examples
    --------
    >>> polynomial(2).value([[2.0, 1.0], [0.0, 1.0], [1.0, 1.0]]).tolist()  # x^2 - y^2
    [3.0, -1.0, 0.0]
    >>> polynomial(200, scale=2).value([[2.0, 0.0]]).tolist()
    [1.0]

    Raises
    ------
    FieldError
        If a parameter is out of range.
    """
    return Polynomial(degree=degree, part=part, centre=centre, scale=scale)  # type: ignore[arg-type]  # made exact


def complex_power(a: Any, b: Any, n: int) -> tuple[Any, Any]:
    """Return real and imaginary part of (a + i b)^n, n >= 0, for arrays or precise numbers.

    >>> complex_power(2, 1, 3)
    (2, 11)
    """
    re, im = 0 * a + 1, 0 * a
    while n:
        if n & 1:
            re, im = re * a - im * b, re * b + im * a
        n >>= 1
        if n:
            a, b = (a - b) * (a + b), 2 * a * b
    return re, im


def _shifted(name: str, centre: Exact) -> str:
    """Return ``x`` or ``(x - 2/3)``."""
    if not centre:
        return name
    return f"({name} {'-' if centre > 0 else '+'} {show(-centre if centre < 0 else centre)})"
