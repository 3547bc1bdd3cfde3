"""A user's own fields: functions and formula strings."""

import math

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError


def wave(x, y):
    return np.exp(x) * np.cos(y)


def test_dimension_comes_from_the_arguments_or_the_names():
    assert fields.field(lambda x: 2 * x).dim == 1
    assert fields.field(wave).dim == 2
    assert fields.field(lambda x, y, z: x + y + z).dim == 3
    assert fields.field(lambda *x: x[0], dim=3).dim == 3
    assert fields.field(lambda x, y, k=2: k * x * y).dim == 2
    assert fields.field(np.hypot, dim=2).dim == 2
    assert [fields.field(text).dim for text in ("x", "y", "r", "x + z", "2")] == [1, 2, 2, 3, 1]
    assert fields.field("x", dim=2).value([[3, 4]]).tolist() == [3]


def test_precise_values_of_a_numpy_function():
    with mpmath.workdps(50):
        value = fields.field(wave).at((1, "0.5"), 40)
        assert abs(value - mpmath.e * mpmath.cos(0.5)) < mpmath.mpf(10) ** -39


def test_float64_derivative_is_good_to_a_few_1e_13():
    points = np.random.default_rng(7).uniform(-1, 1, (50, 2))
    x, y = points.T
    exact = np.column_stack((wave(x, y), -np.exp(x) * np.sin(y)))
    assert np.max(np.abs(fields.field(wave).gradient(points) - exact)) < 1e-12 * np.max(np.abs(exact))


def test_precise_derivative_by_differences():
    slope = fields.field(wave).gradient_at((1, "0.5"), 30)
    with mpmath.workdps(50):
        assert abs(slope[0] - mpmath.e * mpmath.cos(0.5)) < mpmath.mpf(10) ** -29
        assert abs(slope[1] + mpmath.e * mpmath.sin(0.5)) < mpmath.mpf(10) ** -29


def test_steps_shrink_near_singular_points():
    def log(x, y):
        return np.log(np.hypot(x, y))

    close = [[1e-10, 0]]
    assert fields.field(log, singular=[(0, 0)]).gradient(close)[0, 0] == pytest.approx(1e10, rel=1e-6)
    # the twin: the shortest step, 2^-28, straddles a singular point it does not know of
    assert abs(fields.field(log).gradient(close)[0, 0] / 1e10 - 1) > 0.5
    with pytest.raises(FieldError, match="infinite at point 0"):
        fields.field(log, singular=[(0, 0)]).value([[0, 0]])


@pytest.mark.parametrize(("rate", "error"), [(1.0, 1e-12), (50.0, 1e-11), (1e3, 1e-11), (1e6, 1e-8)])
def test_steps_adapt_to_the_length_over_which_a_function_varies(rate, error):
    """Rounding, about eps, is divided by h >= 1/(4096 rate): 1e-12; at rate 1e6 steps end at 2^-28."""

    def fast(x, y):
        return np.exp(rate * y) * np.cos(rate * x)

    points = np.random.default_rng(11).random((200, 2)) / rate
    x, y = rate * points.T
    exact = np.exp(y) * np.stack([-np.sin(x), np.cos(x)])
    assert np.abs(fields.field(fast).gradient(points).T / rate - exact).max() < error


@pytest.mark.parametrize("count", [1, 2, 3, 5])
def test_arrays_of_derivatives_mean_the_same_for_any_number_of_points(count):
    """(d, n) and (n, d) look alike for n = d."""
    points = np.arange(2.0 * count).reshape(count, 2) + 1.0
    exact = points * [2.0, -2.0]
    for slope in (
        lambda x, y: np.array([2 * x, -2 * y]),
        lambda x, y: np.array([2 * x, -2 * y]).T,
        lambda x, y: (2 * x, -2 * y),
    ):
        assert (fields.field(lambda x, y: x * x - y * y, slope).gradient(points) == exact).all()


def test_gradient_functions_may_return_a_tuple_or_an_array():
    by_tuple = fields.field(wave, lambda x, y: (wave(x, y), -np.exp(x) * np.sin(y)))
    by_array = fields.field(wave, lambda x, y: np.column_stack((wave(x, y), -np.exp(x) * np.sin(y))))
    line = fields.field(lambda x: x * x, lambda x: 2 * x)
    points = [[0.1, 0.2], [0.3, 0.4], [0.5, 0.6]]
    np.testing.assert_array_equal(by_tuple.gradient(points), by_array.gradient(points))
    assert line.gradient([3.0]).tolist() == [[6]]
    assert line.gradient_at(3) == (6,)


def test_constants_spread_over_the_points():
    u = fields.field(lambda x, y: 2.0, lambda x, y: (0, 0))
    assert u.value([[1, 2], [3, 4], [5, 6]]).tolist() == [2, 2, 2]
    assert u.gradient([[1, 2], [3, 4], [5, 6]]).shape == (3, 2)
    assert u.at((1, 2)) == 2


@pytest.mark.parametrize(
    ("function", "reason"),
    [
        (lambda x, y: math.exp(x) * y, "only 16 digits.*write it with numpy's functions"),
        (lambda x, y: x.clip(0, 1) + y, "cannot take precise numbers.*formula string"),
        (lambda x, y: np.array([x, y]).astype(float).sum(), "cannot take precise numbers|only 16 digits"),
    ],
)
def test_functions_that_lose_digits_are_told_how_to_mend_it(function, reason):
    with pytest.raises(FieldError, match=reason):
        fields.field(function).at((1, 2), 30)


@pytest.mark.parametrize(
    ("function", "reason"),
    [
        (lambda x, y: x[:1], r"must have shape \(3,\)"),
        (lambda x, y: x + 1j * y, "must be real"),
        (lambda x, y: np.where(x > 2, np.nan, y), "not a finite float64 at point 1"),
        (lambda x, y: "high", "must be real numbers"),
        (lambda x, y: x.nothing, "raised AttributeError"),
    ],
)
def test_bad_results_are_refused(function, reason):
    with pytest.raises(FieldError, match=reason):
        fields.field(function).value([[1, 2], [3, 4], [2, 2]])


@pytest.mark.parametrize(
    ("make", "reason"),
    [
        (lambda: fields.field(3), "a function or a formula string, got int"),
        (lambda: fields.field(wave, gradient=3), "gradient must be a function"),
        (lambda: fields.field("x*y", gradient=wave), "differentiates itself"),
        (lambda: fields.field(wave, dim=3), "dim = 3, but the function takes 2"),
        (lambda: fields.field(lambda *x: x[0]), "give dim="),
        (lambda: fields.field(max), "give dim="),
        (lambda: fields.field(lambda: 0), "dim must be a whole number"),
        (lambda: fields.field("x*y", dim=1), "has 2 coordinates, but dim = 1"),
        (lambda: fields.field("theta*z"), "theta belongs to the plane"),
        (lambda: fields.field(wave, singular=[(1,)]), r"singular\[0\] must have 2 coordinates"),
        (
            lambda: fields.field(wave, singular=[fields.Singularity(point=(1,), exponent=0, kind="log")]),
            r"singular\[0\] must have 2 coordinates",
        ),
        (lambda: fields.field(wave, singular=5), "singular must be a list of points, got 5"),
        (lambda: fields.field(wave, lambda x, y: x).gradient([[1, 2]]), "must return a tuple of 2"),
    ],
)
def test_bad_requests(make, reason):
    with pytest.raises(FieldError, match=reason):
        make()


@pytest.mark.parametrize("text", ["sin(exp(exp(x)))", "exp(exp(exp(exp(x))))", "cosh(exp(exp(x)))*log(0-x)"])
def test_towers_of_exponentials_do_not_exhaust_memory(text):
    with pytest.raises(FieldError, match=r"beyond 2\^64"):
        fields.field(text).at(24, 30)
    assert fields.field("sin(exp(exp(x)))").at(1, 30) == fields.field("sin(exp(exp(x)))").at(1, 30)


def test_a_field_is_passed_through():
    u = fields.wedge("2/3")
    assert fields.field(u) is u


def test_formula_is_not_defined_where_it_is_complex():
    u = fields.field("sqrt(x)")
    with pytest.raises(FieldError, match=r"not a finite float64 at point 1 = \(-1\.0,\)"):
        u.value([1, -1])
    with pytest.raises(FieldError, match="not a finite real number"):
        u.at(-1)
