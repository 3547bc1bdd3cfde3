"""What fields share: sides, blocks, refusals, digits, algebra."""

from fractions import Fraction

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError


def test_value_at_a_logarithmic_point_is_refused_by_name():
    u = fields.log_source((1, 2))
    with pytest.raises(FieldError, match=r"infinite at point 2 = \(1\.0, 2\.0\)"):
        u.value([[0, 0], [1, 1], [1, 2]])


def test_offending_point_is_named_beyond_the_first_block():
    points = np.ones((10_000, 2))
    points[9_500] = 0
    with pytest.raises(FieldError, match=r"point 9500 = \(0\.0, 0\.0\)"):
        fields.log_source((0, 0)).gradient(points)


@pytest.mark.parametrize("point", [(1, 2), (1.0, 2.0), ("1", Fraction(2)), (mpmath.mpf(1), "2.0")])
def test_precise_value_at_a_logarithmic_point_is_refused(point):
    with pytest.raises(FieldError, match="infinite at point"):
        fields.log_source((1, 2)).at(point)


def test_pole_at_a_decimal_is_refused_in_precise_numbers():
    u = fields.log_source(("0.1", 0))
    with pytest.raises(FieldError, match=r"no value at|not a finite real number|infinite"):
        u.at(("0.1", 0))
    # the float nearest to 0.1 is 5.55e-18 off: numerator and denominator of 0.1.as_integer_ratio()
    assert abs(u.at((Fraction(0.1), "1e-10"), 20) + 10 * mpmath.log(10)) < 1e-14


def test_overflow_is_a_field_error_that_names_the_point():
    with pytest.raises(FieldError, match=r"not a finite float64 at point 1"):
        fields.polynomial(200).value([[1, 1], [1e3, 0]])


@pytest.mark.parametrize(
    ("side", "reason"),
    [
        ([1, -1, 1], r"have shape \(2,\), got \(3,\)"),
        (2, r"must be None, \+1 or -1"),
        (np.nan, r"must be None, \+1 or -1"),
        ("left", "side must be None"),
    ],
)
def test_bad_sides_are_refused(side, reason):
    with pytest.raises(FieldError, match=reason):
        fields.wedge(0.5).value([[1, 0.5], [1, 0.25]], side=side)


def test_results_are_global_mpmath_numbers_with_all_digits():
    value = fields.field("exp(x)").at("1", digits=60)
    assert type(value) is mpmath.mpf
    with mpmath.workdps(60):
        assert abs(value - mpmath.e) < mpmath.mpf(10) ** -59


def test_precision_is_raised_where_digits_cancel():
    # (1 + 1e-40)^2 - 1 = 2e-40 + 1e-80: thirty digits of it need seventy of the terms
    u = fields.field("x**2 - 1", dim=1)
    value = u.at("1.0000000000000000000000000000000000000001", digits=30)
    with mpmath.workdps(50):
        assert abs(value - mpmath.mpf("2.0000000000000000000000000000000000000001e-40")) < mpmath.mpf("1e-69")


def test_a_value_that_is_zero_by_cancellation_settles():
    assert abs(fields.field("sin(pi*x)").at(1, digits=30)) < mpmath.mpf(10) ** -60


def test_two_hundred_digits():
    with mpmath.workdps(220):
        value = fields.exp_trig(1).at((0, 1), digits=200)
        assert abs(value - mpmath.e) < mpmath.mpf(10) ** -199


@pytest.mark.parametrize("point", [(float("nan"), 0), (float("inf"), 0), ("one", 0), (None, 0), "12", 3])
def test_bad_precise_points_are_refused(point):
    with pytest.raises(FieldError, match="point"):
        fields.polynomial(2).at(point)


def test_coordinates_in_one_dimension_need_no_tuple():
    u = fields.affine((2,), 1)
    assert u.at("0.5") == 2
    assert u.value([0.5, 1.0, 2.0]).tolist() == [2, 3, 5]


def test_sums_open_and_multiply_exactly():
    u, v = fields.polynomial(2), fields.affine((1, 0))
    total = 3 * (u + 2 * v) - "1/3" * (u - v)
    assert total.factors == (3, 6, Fraction(-1, 3), Fraction(1, 3))
    assert (-u).factors == (-1,)
    assert (np.float64(2) * u).factors == (2,)
    assert total.value([[1.0, 1.0]])[0] == pytest.approx(6 + 1 / 3, rel=1e-15)


def test_basis_and_opacity_of_a_sum_are_those_of_its_weakest_term():
    mixed = fields.polynomial(2) + fields.field(lambda x, y: x * y)
    assert mixed.opaque
    assert mixed.basis == "uncertified"
    assert mixed.enclosure((1, 2), 20).basis == "uncertified"
    assert not (fields.polynomial(2) + fields.wedge(0.5)).opaque


def test_sums_read_well():
    u = 2 * fields.affine((0, 3)) - fields.polynomial(2) + fields.wedge("2/3")
    assert u.formula == "2 (3 y) - Re (x + i y)^2 + r^(2/3) sin(2/3 theta)"


@pytest.mark.parametrize("factor", [float("nan"), float("inf"), "x", None, 1j, True, np.ones(2)])
def test_bad_factors_are_refused(factor):
    with pytest.raises(FieldError, match="factor"):
        fields.polynomial(2) * factor


def test_fields_of_different_dimension_do_not_add():
    with pytest.raises(FieldError, match=r"same dimension, got \[2, 3\]"):
        fields.polynomial(2) + fields.solid(1, 0)


def test_adding_a_number_is_a_type_error():
    with pytest.raises(TypeError, match="unsupported operand"):
        fields.polynomial(2) + 1


@pytest.mark.parametrize(
    ("field", "degree"),
    [
        (fields.affine((0, 0), 3), 0),
        (fields.affine((0, 1)), 1),
        (fields.polynomial(7) + fields.affine((1, 1)), 7),
        (fields.solid(4, 2).rotated(0.3, axis=(0, 0, 1)).shifted((1, 2, 3)), 4),
        (fields.wedge(3), 3),
        (fields.wedge("2/3"), None),
        (fields.polynomial(2) + fields.log_source((0, 0)), None),
        (fields.stretched(fields.polynomial(5), [[2, 0], [0, 1]]), 5),
        (fields.polynomial(2).inverted((0, 0), 1), None),
        (fields.field("x*y"), None),
    ],
)
def test_degree_of_polynomials(field, degree):
    assert field.degree == degree


def test_singularities_of_a_sum_are_listed_once():
    u = fields.wedge("2/3") + 2 * fields.wedge("2/3", "cos") + fields.wedge("4/3")
    assert [s.exponent for s in u.singularities] == [pytest.approx(2 / 3), pytest.approx(4 / 3)]
    assert len(u.cuts) == 1


def test_enclosure_holds_the_value_at_twice_the_digits():
    u = fields.exp_trig(3, "sin")
    value, radius, basis = u.enclosure(("0.3", "0.7"), 30)
    with mpmath.workdps(70):
        exact = mpmath.exp(mpmath.mpf("2.1")) * mpmath.sin(mpmath.mpf("0.9"))
        assert abs(value - exact) <= radius
        assert radius <= mpmath.mpf(10) ** -29 * abs(exact)
    assert basis == "closed form"
