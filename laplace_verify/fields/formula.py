"""Formulas in text, such as "exp(pi*y)*sin(pi*x)", read safely and evaluated in any number context.

The text is parsed by `ast` and compared node by node with a short list of what is allowed; nothing is ever
executed. Length, nesting and the size of numbers and powers are bounded, so text from a stranger can exhaust
neither memory nor time. Decimals are exact: "0.1" is one tenth in 50 digits too, and 2/3 is two thirds.

Derivatives are exact by forward differentiation: every node gives its value and its partial derivatives.
"""

from __future__ import annotations

import ast
import sys
import warnings
from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from laplace_verify.errors import FieldError, nearest_names
from laplace_verify.fields._formula_nodes import Binary, Call, Constant, Dual, Node, Power, Symbol
from laplace_verify.fields.exact import NUMERAL, exact

__all__ = ["Formula"]

LONGEST = 2000  # characters
DEEPEST = 100  # levels of nesting
LARGEST_POWER = 1000
LARGEST_FOLDED = 4000  # bits of an exact intermediate number
LARGEST = Fraction(sys.float_info.max)

CARTESIAN = ("x", "y", "z")
VARIABLES = (*CARTESIAN, "r", "theta")
OPERATORS = {ast.Add: "+", ast.Sub: "-", ast.Mult: "*", ast.Div: "/", ast.Pow: "**"}


@dataclass(frozen=True, slots=True)
class Formula:
    """A formula of x, y, z, of r (distance from the origin) and of theta (atan2(y, x), in the plane).

    Allowed are + - * / **, numbers, pi, e and the functions exp log sin cos tan sinh cosh tanh sqrt asin
    acos atan and atan2(y, x).

    >>> f = Formula.parse("x**2 - y**2 + 0.5*x")
    >>> sorted(f.variables)
    ['x', 'y']
    >>> from laplace_verify.contexts import FLOAT
    >>> f.value(FLOAT, {"x": 3.0, "y": 1.0}), f.gradient(FLOAT, {"x": 3.0, "y": 1.0})
    (9.5, (6.5, -2.0))
    """

    text: str
    node: Node
    variables: frozenset[str]

    @classmethod
    def parse(cls, text: str, names: tuple[str, ...] = VARIABLES) -> Formula:
        """Return the formula of the variables `names` that `text` spells.

        Raises
        ------
        FieldError
            If the text holds anything else than a formula, or one beyond the bounds; the message names the
            place.
        """
        if not isinstance(text, str):
            raise FieldError(f"a formula must be a string, got {type(text).__name__}")
        text = text.strip()
        if not text or len(text) > LONGEST:
            raise FieldError(f"a formula must have 1 to {LONGEST} characters, got {len(text)}")
        if not text.isascii() or not text.isprintable():
            raise FieldError(f"a formula must be one line of plain ASCII characters, got {text[:80]!r}")
        try:
            with warnings.catch_warnings():
                warnings.simplefilter("ignore")  # "0or x" warns before it is refused
                tree = ast.parse(text, mode="eval")
        except SyntaxError as cause:
            raise FieldError(f"formula {text[:80]!r}, column {cause.offset}: {cause.msg}") from cause
        except (RecursionError, MemoryError, ValueError) as cause:
            raise FieldError(f"formula {text[:80]!r} is nested too deeply or malformed") from cause
        reader = _Reader(text, names)
        node = reader.read(tree.body, 0)
        return cls(text=text, node=node, variables=frozenset(reader.variables))

    def value(self, ctx: Any, variables: Mapping[str, Any]) -> Any:
        """Return the value at coordinates given by name: arrays if ctx is FLOAT, else precise numbers.

        r and theta are worked out from x, y (and z) unless given.

        Raises
        ------
        FieldError
            If a variable of the formula is not given.
        """
        return self._evaluate(ctx, {name: Dual(value, ()) for name, value in variables.items()}).value

    def gradient(self, ctx: Any, coords: Mapping[str, Any]) -> tuple[Any, ...]:
        """Return the partial derivatives with respect to the coordinates given, in their order.

        Raises
        ------
        FieldError
            If a variable of the formula is not given.
        """
        count = len(coords)
        units = [tuple(1 if i == j else 0 for j in range(count)) for i in range(count)]
        given = {name: Dual(value, units[i]) for i, (name, value) in enumerate(coords.items())}
        return self._evaluate(ctx, given).partials or (0,) * count

    def _evaluate(self, ctx: Any, given: dict[str, Dual]) -> Dual:
        """Return the value with its derivatives."""
        for name in sorted(self.variables - set(given)):
            derived = _derived(ctx, name, given)
            if derived is None:
                raise FieldError(f"formula {self.text!r} needs {name}, but only {sorted(given)} are given")
            given[name] = derived
        return self.node.evaluate(ctx, given)


def _derived(ctx: Any, name: str, given: dict[str, Dual]) -> Dual | None:
    """Return r or theta from Cartesian coordinates, None if they do not suffice."""
    known = [Symbol(n) for n in CARTESIAN if n in given]
    if name == "r" and known:
        squares: list[Node] = [Power(s, Fraction(2)) for s in known]
        total = squares[0]
        for square in squares[1:]:
            total = Binary("+", total, square)
        return Call("sqrt", (total,)).evaluate(ctx, given)
    if name == "theta" and len(known) == 2:
        return Call("atan2", (known[1], known[0])).evaluate(ctx, given)
    return None


class _Reader:
    """Turns the nodes that `ast` found into our own, refusing all others."""

    def __init__(self, text: str, names: tuple[str, ...]) -> None:
        self.text = text
        self.names = names
        self.variables: set[str] = set()

    def refuse(self, node: ast.AST, reason: str) -> FieldError:
        """Return an error that names the place."""
        column = getattr(node, "col_offset", 0) + 1
        return FieldError(f"formula {self.text[:80]!r}, column {column}: {reason}")

    def read(self, node: ast.expr, depth: int) -> Node:
        """Return our node for one of theirs."""
        if depth > DEEPEST:
            raise self.refuse(node, f"nested more than {DEEPEST} levels deep")
        match node:
            case ast.Constant():
                return self._number(node)
            case ast.Name():
                return self._name(node)
            case ast.UnaryOp(op=ast.USub() | ast.UAdd()):
                inner = self.read(node.operand, depth + 1)
                return _folded("*", Constant(Fraction(-1)), inner) if isinstance(node.op, ast.USub) else inner
            case ast.BinOp() if type(node.op) in OPERATORS:
                return self._operation(node, depth)
            case ast.Call():
                return self._call(node, depth)
            case ast.BinOp(op=ast.BitXor()):
                raise self.refuse(node, "write ** for powers, not ^")
        raise self.refuse(
            node,
            f"{type(node).__name__} is not allowed; use + - * / ** and functions of {', '.join(self.names)}",
        )

    def _number(self, node: ast.Constant) -> Constant:
        literal = ast.get_source_segment(self.text, node) or ""
        plain = type(node.value) in (int, float) and NUMERAL.fullmatch(literal)
        if not plain:
            raise self.refuse(node, f"{literal[:40] or node.value!r} is no plain decimal number")
        try:
            return Constant(Fraction(exact(literal, "number")))
        except FieldError as cause:
            raise self.refuse(node, str(cause)) from cause

    def _name(self, node: ast.Name) -> Node:
        if node.id in ("pi", "e"):
            return Symbol(node.id)
        if node.id not in self.names:
            raise self.refuse(
                node, f"unknown name {node.id[:40]!r}; names are {', '.join((*self.names, 'pi', 'e'))}"
            )
        self.variables.add(node.id)
        return Symbol(node.id)

    def _operation(self, node: ast.BinOp, depth: int) -> Node:
        left, right = self.read(node.left, depth + 1), self.read(node.right, depth + 1)
        operator = OPERATORS[type(node.op)]
        if operator == "**":
            return self._power(node, left, right)
        if operator == "/" and isinstance(right, Constant) and right.number == 0:
            raise self.refuse(node, "division by zero")
        return self.checked(node, _folded(operator, left, right))

    def checked(self, node: ast.AST, result: Node) -> Node:
        """Refuse a number beyond the range of float64."""
        if isinstance(result, Constant) and not abs(result.number) <= LARGEST:
            raise self.refuse(node, "this is too large a number")
        return result

    def _power(self, node: ast.BinOp, base: Node, exponent: Node) -> Node:
        if not isinstance(exponent, Constant):
            return Call("exp", (Binary("*", exponent, Call("log", (base,))),))
        power = exponent.number
        if not abs(power) <= LARGEST_POWER or power.denominator > 10**6:
            raise self.refuse(node, f"exponents must be between -{LARGEST_POWER} and {LARGEST_POWER}")
        if isinstance(base, Constant) and power.denominator == 1:
            if base.number == 0 and power < 0:
                raise self.refuse(node, "division by zero")
            size = max(abs(base.number.numerator), base.number.denominator).bit_length() * abs(power)
            if size > LARGEST_FOLDED:
                raise self.refuse(node, "this power is too large a number")
            return self.checked(node, Constant(base.number ** int(power)))
        return Power(base, power)

    def _call(self, node: ast.Call, depth: int) -> Node:
        if not isinstance(node.func, ast.Name) or node.func.id not in Call.FUNCTIONS:
            name = node.func.id[:40] if isinstance(node.func, ast.Name) else type(node.func).__name__
            raise self.refuse(node, f"unknown function {name!r}; {nearest_names(name, Call.FUNCTIONS)}")
        name = node.func.id
        wanted = Call.FUNCTIONS[name]
        if node.keywords or len(node.args) != wanted:
            raise self.refuse(node, f"{name} takes {wanted} argument{'s' if wanted > 1 else ''}")
        return Call(name, tuple(self.read(argument, depth + 1) for argument in node.args))


def _folded(operator: str, left: Node, right: Node) -> Node:
    """Return an operation, carried out exactly if both sides are numbers of moderate size."""
    operation = Binary(operator, left, right)
    if isinstance(left, Constant) and isinstance(right, Constant):
        number = operation.exactly(left.number, right.number)
        if max(abs(number.numerator), number.denominator).bit_length() <= LARGEST_FOLDED:
            return Constant(number)
    return operation
