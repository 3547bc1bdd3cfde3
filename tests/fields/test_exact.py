"""Exact parameters: what is accepted, what is refused, and that huge text stays harmless."""

from decimal import Decimal
from fractions import Fraction

import mpmath
import numpy as np
import pytest

from laplace_verify.contexts import FLOAT
from laplace_verify.errors import FieldError
from laplace_verify.fields.exact import exact, exact_point, offset, show, whole


@pytest.mark.parametrize(
    ("given", "expected"),
    [
        (3, 3),
        (np.int32(3), 3),
        (0.1, 0.1),
        (np.float32(0.5), 0.5),
        ("0.1", Fraction(1, 10)),
        ("1e-3", Fraction(1, 1000)),
        ("-2/6", Fraction(-1, 3)),
        ("4/2", 2),
        (Fraction(6, 3), 2),
        (mpmath.mpf("0.1"), Fraction(0.1)),
        (mpmath.mpf(-3), -3),
        (mpmath.mpf(0), 0),
    ],
)
def test_numbers_keep_their_exact_value(given, expected):
    result = exact(given, "a")
    assert result == expected
    assert type(result) is type(expected)


@pytest.mark.parametrize(
    "given",
    [
        True, None, 1j, "", "abc", "1/0", "0x10", "1_000", "nan", "inf", "1e999999999", "1e400", "9" * 400,
        "1" * 5000, "٣", float("nan"), float("inf"), 10**400, mpmath.mpf("1e400"), mpmath.mpf("inf"), [1],
        np.ones(2), Decimal("0.1"),
    ],
)  # fmt: skip
def test_what_is_no_finite_number_is_refused(given):
    with pytest.raises(FieldError, match="alpha"):
        exact(given, "alpha")


def test_points_name_the_coordinate_that_is_wrong():
    with pytest.raises(FieldError, match=r"centre\[1\] must be finite"):
        exact_point((1, float("nan")), "centre", (2,))
    with pytest.raises(FieldError, match="centre must have 2 or 3 coordinates, got 1"):
        exact_point((1,), "centre", (2, 3))
    with pytest.raises(FieldError, match="tuple of 2 numbers"):
        exact_point("12", "centre", (2,))
    with pytest.raises(FieldError, match="tuple of 2 numbers"):
        exact_point(5, "centre", (2,))


def test_offset_keeps_what_a_float_cannot_hold():
    # 0.1 as float64 exceeds one tenth by 5.551115123125783e-18 (0.1.as_integer_ratio())
    assert offset(FLOAT, np.array([0.1]), Fraction(1, 10))[0] == pytest.approx(
        5.551115123125783e-18, rel=1e-12
    )
    assert offset(FLOAT, np.array([0.1]), 0.1)[0] == 0.0


@pytest.mark.parametrize("bad", [1.0, True, -1, 11, "3", None])
def test_whole_numbers_have_bounds(bad):
    with pytest.raises(FieldError, match="n must be a whole number from 0 to 10"):
        whole(bad, "n", 0, 10)


def test_numbers_in_formulas_are_short():
    assert [show(v) for v in (2, 2.0, 1 / 3, Fraction(-1, 3), 1e300)] == [
        "2",
        "2",
        "0.333333",
        "-1/3",
        "1e+300",
    ]
