"""The reader of formulas: values, exact derivatives, and attacks."""

import math
import time
from fractions import Fraction

import mpmath
import numpy as np
import pytest

from laplace_verify.contexts import FLOAT, precise
from laplace_verify.errors import FieldError
from laplace_verify.fields import Formula

# every formula takes x and y
VALUES = [
    # text, value at x = 0.3, y = 0.7 by the math module
    ("2 + 3*x - y/4", lambda x, y: 2 + 3 * x - y / 4),
    ("-x**2", lambda x, y: -(x**2)),
    ("2**-2", lambda x, y: 0.25),
    ("x**-2", lambda x, y: x**-2),
    ("(x*y)**(1/2)", lambda x, y: (x * y) ** 0.5),
    ("x**y", lambda x, y: x**y),
    ("exp(x)*sin(y)", lambda x, y: math.exp(x) * math.sin(y)),
    ("log(x) + sqrt(y)", lambda x, y: math.log(x) + math.sqrt(y)),
    ("cos(pi*x) + e", lambda x, y: math.cos(math.pi * x) + math.e),
    ("tan(x) + tanh(y)", lambda x, y: math.tan(x) + math.tanh(y)),
    ("sinh(x) - cosh(y)", lambda x, y: math.sinh(x) - math.cosh(y)),
    ("atan(x) + asin(y) + acos(x)", lambda x, y: math.atan(x) + math.asin(y) + math.acos(x)),
    ("atan2(y, x)", lambda x, y: math.atan2(y, x)),
    (
        "r**(2/3)*sin(2*theta/3)",
        lambda x, y: math.hypot(x, y) ** (2 / 3) * math.sin(2 * math.atan2(y, x) / 3),
    ),
    ("+x - -y", lambda x, y: x + y),
    ("1.5e-3*x + .5 + 1.", lambda x, y: 0.0015 * x + 1.5),
    ("exp(x)**0", lambda x, y: 1),
]


@pytest.mark.parametrize(("text", "python"), VALUES)
def test_values_and_derivatives(text, python):
    formula = Formula.parse(text)
    expected = python(0.3, 0.7)
    point = {"x": np.array([0.3, 0.3, 0.3]), "y": np.array([0.7, 0.7, 0.7])}
    np.testing.assert_allclose(formula.value(FLOAT, point) + np.zeros(3), expected, rtol=4e-16 * 4, atol=0)
    ctx = precise(40)
    x, y, h = ctx.mpf(3) / 10, ctx.mpf(7) / 10, ctx.mpf(10) ** -12
    assert float(formula.value(ctx, {"x": x, "y": y})) == pytest.approx(expected, rel=1e-15)
    slopes = formula.gradient(ctx, {"x": x, "y": y})
    assert len(slopes) == 2
    for slope, dx, dy in zip(slopes, (h, 0), (0, h), strict=True):
        up, down = (formula.value(ctx, {"x": x + s * dx, "y": y + s * dy}) for s in (1, -1))
        assert abs((up - down) / (2 * h) - slope) < 1e-20
    float_slopes = formula.gradient(FLOAT, {"x": 0.3, "y": 0.7})
    assert [float(s) for s in float_slopes] == pytest.approx([float(s) for s in slopes], rel=1e-14)


def test_decimals_and_fractions_are_exact():
    ctx = precise(60)
    assert Formula.parse("0.1").value(ctx, {}) == ctx.mpf(1) / 10
    assert Formula.parse("2/3").value(ctx, {}) == ctx.mpf(2) / 3
    assert Formula.parse("0.1 + 0.2 - 0.3").value(FLOAT, {}) == 0.0
    assert Formula.parse("1e-30").node.number == Fraction(1, 10**30)


def test_pi_has_all_digits():
    with mpmath.workdps(60):
        value = mpmath.mp.make_mpf(Formula.parse("pi").value(precise(60), {})._mpf_)
        assert abs(value - mpmath.pi) < mpmath.mpf(10) ** -59


def test_variables_are_those_of_the_text():
    assert Formula.parse("x + pi*z").variables == {"x", "z"}
    assert Formula.parse("r*theta").variables == {"r", "theta"}
    assert Formula.parse("e").variables == frozenset()


def test_polar_coordinates_may_be_given_themselves():
    formula = Formula.parse("r*z")
    assert formula.value(FLOAT, {"r": 2.0, "z": 3.0}) == 6
    assert formula.gradient(FLOAT, {"r": 2.0, "z": 3.0}) == (3, 2)


def test_missing_coordinates_are_named():
    with pytest.raises(FieldError, match=r"needs z, but only \['x', 'y'\] are given"):
        Formula.parse("x*z").value(FLOAT, {"x": 1.0, "y": 2.0})
    with pytest.raises(FieldError, match="needs theta"):
        Formula.parse("theta").value(FLOAT, {"x": 1.0})


@pytest.mark.parametrize(
    ("text", "reason"),
    [
        ("__import__('os')", "unknown function '__import__'"),
        ("x.__class__", "column 1: Attribute is not allowed"),
        ("x.real", "Attribute is not allowed"),
        ("(1).__class__.__mro__", "Attribute is not allowed"),
        ("exp.__globals__", "Attribute is not allowed"),
        ("getattr(x, 'y')", "unknown function 'getattr'"),
        ("x[0]", "Subscript is not allowed"),
        ("[x for x in y]", "ListComp is not allowed"),
        ("lambda: 0", "Lambda is not allowed"),
        ("(x := 3)", "NamedExpr is not allowed"),
        ("x if y else z", "IfExp is not allowed"),
        ("x and y", "BoolOp is not allowed"),
        ("x < y", "Compare is not allowed"),
        ("not x", "UnaryOp is not allowed"),
        ("~x", "UnaryOp is not allowed"),
        ("x @ y", "BinOp is not allowed"),
        ("x // y", "BinOp is not allowed"),
        ("x % 2", "BinOp is not allowed"),
        ("x^2", r"write \*\* for powers"),
        ("x = 3", "column"),
        ("import os", "column"),
        ("x; y", "column"),
        ("x +", "column"),
        ("x y", "column"),
        ("(x", "column"),
        ("'x'", "is no plain decimal number"),
        ("1j", "is no plain decimal number"),
        ("0x10", "is no plain decimal number"),
        ("1_000", "is no plain decimal number"),
        ("True", "is no plain decimal number"),
        ("None", "is no plain decimal number"),
        ("...", "is no plain decimal number"),
        ("2x", "column"),
        ("x + q", "column 5: unknown name 'q'; names are x, y, z, r, theta, pi, e"),
        ("exp", "unknown name 'exp'"),
        ("sine(x)", "unknown function 'sine'; did you mean"),
        ("exp(x, y)", "exp takes 1 argument$"),
        ("atan2(y)", "atan2 takes 2 arguments"),
        ("exp(x=1)", "exp takes 1 argument"),
        ("exp(*x)", "Starred is not allowed"),
        ("exp(x)(y)", "unknown function 'Call'"),
        ("1/0", "column 1: division by zero"),
        ("x/(1 - 1)", "division by zero"),
        ("0**-1", "division by zero"),
        ("9**9**9", "exponents must be between|too large"),
        ("9**999 * 9**999", "too large"),
        ("x**(10**6)", "exponents must be between"),
        ("x**-1001", "exponents must be between"),
        ("2**1000*2**1000", "too large a number"),
        ("10**1000", "too large a number"),
        ("1e400", "within the range of float64"),
        ("1e999999999", "no plain decimal number"),
        ("9" * 1500, "no plain decimal number|range of float64"),
        ("", "1 to 2000 characters, got 0"),
        ("   ", "1 to 2000 characters, got 0"),
        ("x" * 2001, "1 to 2000 characters, got 2001"),
        ("x\n+y", "one line of plain ASCII"),
        ("x\0", "one line of plain ASCII"),
        ("π*x", "one line of plain ASCII"),
        ("ｘ", "one line of plain ASCII"),
        (3, "must be a string, got int"),
        (b"x", "must be a string, got bytes"),
    ],
)
def test_anything_but_a_formula_is_refused_with_the_place(text, reason):
    with pytest.raises(FieldError, match=reason):
        Formula.parse(text)


@pytest.mark.parametrize(
    "text",
    [
        "(" * 900 + "x" + ")" * 900,
        "-" * 1900 + "x",
        "exp(" * 390 + "x" + ")" * 390,
        "x**" * 600 + "x",
        "+".join(["x"] * 900),
        "(" * 150 + "x" + "+1)" * 150,
        "9**" * 600 + "9",
    ],
)
def test_deep_nesting_is_refused_quickly(text):
    start = time.perf_counter()
    with pytest.raises(FieldError, match=r"nested|column|too large|exponents"):
        Formula.parse(text)
    assert time.perf_counter() - start < 1


def test_ninety_terms_are_fine():
    assert Formula.parse("+".join(["x"] * 90)).value(FLOAT, {"x": 2.0}) == 180


@pytest.mark.filterwarnings("error")
def test_odd_text_does_not_warn():
    with pytest.raises(FieldError, match="formula"):
        Formula.parse("0or x")
