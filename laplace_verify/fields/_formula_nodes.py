"""The nodes of a formula: each evaluates to a value and its partial derivatives over a number context."""

from __future__ import annotations

import operator
from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction
from typing import Any, ClassVar, NamedTuple, TypeAlias

from laplace_verify.contexts import FLOAT
from laplace_verify.errors import FieldError

__all__ = ["Binary", "Call", "Constant", "Dual", "Node", "Power", "Symbol"]


GROWING = ("exp", "sin", "cos", "tan", "sinh", "cosh", "tanh")
LARGEST_MAGNITUDE = 64  # bits before the point: sin(10^(10^10)) would need gigabytes of pi


class Dual(NamedTuple):
    """A value and its partial derivatives; an empty tuple if none are wanted or all are zero."""

    value: Any
    partials: tuple[Any, ...]


Names: TypeAlias = dict[str, Dual]


@dataclass(frozen=True, slots=True)
class Constant:
    """An exact rational number."""

    number: Fraction

    def evaluate(self, ctx: Any, names: Names) -> Dual:  # noqa: ARG002  # depends on none
        """Return the number."""
        return Dual(ctx.number(self.number), ())


@dataclass(frozen=True, slots=True)
class Symbol:
    """A coordinate, or pi or e."""

    name: str

    def evaluate(self, ctx: Any, names: Names) -> Dual:
        """Return the coordinate or the constant."""
        if self.name == "pi":
            return Dual(+ctx.pi, ())
        if self.name == "e":
            return Dual(ctx.exp(ctx.number(1)), ())
        return names[self.name]


@dataclass(frozen=True, slots=True)
class Binary:
    """A sum, difference, product or quotient."""

    symbol: str
    left: Node
    right: Node

    EXACT: ClassVar[dict[str, Callable[[Any, Any], Any]]] = {
        "+": operator.add,
        "-": operator.sub,
        "*": operator.mul,
        "/": operator.truediv,
    }

    def exactly(self, a: Fraction, b: Fraction) -> Fraction:
        """Carry the operation out on exact numbers."""
        return Fraction(self.EXACT[self.symbol](a, b))

    def evaluate(self, ctx: Any, names: Names) -> Dual:
        """Return the operation by the rules of sum, product and quotient."""
        a, b = self.left.evaluate(ctx, names), self.right.evaluate(ctx, names)
        value = self.EXACT[self.symbol](a.value, b.value)
        match self.symbol:
            case "+":
                return Dual(value, _linear(1, a, 1, b))
            case "-":
                return Dual(value, _linear(1, a, -1, b))
            case "*":
                return Dual(value, _linear(b.value, a, a.value, b))
        return Dual(value, _linear(1 / b.value, a, -value / b.value, b))


@dataclass(frozen=True, slots=True)
class Power:
    """base ** exponent with an exact rational exponent."""

    base: Node
    exponent: Fraction

    def evaluate(self, ctx: Any, names: Names) -> Dual:
        """Return the power; whole exponents also for negative bases."""
        a = self.base.evaluate(ctx, names)
        value = _power(ctx, a.value, self.exponent)
        if not a.partials or self.exponent == 0:
            return Dual(value, ())
        slope = ctx.number(self.exponent) * _power(ctx, a.value, self.exponent - 1)
        return Dual(value, tuple(slope * p for p in a.partials))


@dataclass(frozen=True, slots=True)
class Call:
    """A function of one or two arguments."""

    name: str
    arguments: tuple[Node, ...]

    FUNCTIONS: ClassVar[dict[str, int]] = {
        **dict.fromkeys(("exp", "log", "sin", "cos", "tan", "sinh", "cosh", "tanh", "sqrt"), 1),
        **dict.fromkeys(("asin", "acos", "atan"), 1),
        "atan2": 2,
    }

    def evaluate(self, ctx: Any, names: Names) -> Dual:
        """Return the function and, by the chain rule, its derivatives."""
        inner = [argument.evaluate(ctx, names) for argument in self.arguments]
        if ctx is not FLOAT and self.name in GROWING and _huge(ctx, inner[0].value):
            raise FieldError(
                f"{self.name} of a number beyond 2^{LARGEST_MAGNITUDE} is not worked out precisely"
            )
        value = getattr(ctx, self.name)(*(a.value for a in inner))
        if not any(a.partials for a in inner):
            return Dual(value, ())
        if self.name == "atan2":
            y, x = inner
            square = x.value * x.value + y.value * y.value
            return Dual(value, _linear(x.value / square, y, -y.value / square, x))
        slope = _slope(ctx, self.name, inner[0].value, value)
        return Dual(value, tuple(slope * p for p in inner[0].partials))


Node: TypeAlias = Constant | Symbol | Binary | Power | Call


def _huge(ctx: Any, a: Any) -> bool:
    """Return whether a precise number is so large that its exponential or sine would fill the memory."""
    return bool(ctx.isfinite(a) and ctx.mag(a) > LARGEST_MAGNITUDE)


def _slope(ctx: Any, name: str, a: Any, value: Any) -> Any:
    """Return the derivative of a function at `a`, where it has `value`."""
    match name:
        case "exp":
            return value
        case "log":
            return 1 / a
        case "sin":
            return ctx.cos(a)
        case "cos":
            return -ctx.sin(a)
        case "tan":
            return 1 + value * value
        case "sinh":
            return ctx.cosh(a)
        case "cosh":
            return ctx.sinh(a)
        case "tanh":
            return (1 - value) * (1 + value)
        case "sqrt":
            return 1 / (2 * value)
        case "atan":
            return 1 / (1 + a * a)
    root = 1 / ctx.sqrt((1 - a) * (1 + a))
    return root if name == "asin" else -root


def _linear(s: Any, a: Dual, t: Any, b: Dual) -> tuple[Any, ...]:
    """Return s grad a + t grad b."""
    if not b.partials:
        return tuple(s * p for p in a.partials)
    if not a.partials:
        return tuple(t * q for q in b.partials)
    return tuple(s * p + t * q for p, q in zip(a.partials, b.partials, strict=True))


def _power(ctx: Any, a: Any, exponent: Fraction) -> Any:
    """Return a ** exponent; a whole exponent stays one, so that negative bases are allowed."""
    return a ** (exponent.numerator if exponent.denominator == 1 else ctx.number(exponent))
