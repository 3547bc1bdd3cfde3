"""Number contexts: exact entry of decimals, no global state, numpy's ufuncs on precise numbers."""

from fractions import Fraction

import mpmath
import numpy as np
import pytest

from laplace_verify.contexts import FLOAT, precise
from laplace_verify.errors import FieldError


def test_decimal_strings_enter_exactly_and_floats_as_their_binary_value():
    ctx = precise(30)
    assert ctx.number("0.1") * 10 == 1
    assert ctx.number(0.1) * 10 != 1
    assert ctx.number("2/3") == ctx.number(Fraction(2, 3)) == ctx.mpf(2) / 3
    assert FLOAT.number("2/3") == 2 / 3


def test_numpy_ufuncs_keep_the_digits_of_precise_numbers():
    ctx = precise(40)
    x = ctx.number("0.3")
    difference = np.exp(x) * np.cos(x) - ctx.exp(x) * ctx.cos(x)
    assert abs(difference) < ctx.mpf(10) ** -50
    assert abs(np.arctan2(x, x) - ctx.pi / 4) < ctx.mpf(10) ** -50


def test_precise_contexts_leave_the_global_precision_alone():
    before = mpmath.mp.prec
    precise(100).exp(1)
    assert mpmath.mp.prec == before


@pytest.mark.parametrize("digits", [0, -3, 401, 2.5, True])
def test_digits_out_of_range_are_refused(digits):
    with pytest.raises(FieldError, match="digits must be an integer from 1 to 200"):
        precise(digits)
