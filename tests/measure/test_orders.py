"""The fit of an observed order."""

import numpy as np
import pytest

from laplace_verify.errors import AnswerError
from laplace_verify.measure.orders import fit_order, noise_level, pair_orders

HALVING = 2.0 ** -np.arange(7)


def test_pair_orders_leave_out_zero_and_missing_errors():
    assert pair_orders([1, 0.5, 0.25, 0.125], [4.0, 1.0, 0.0, np.nan]) == [2.0, None, None]


@pytest.mark.parametrize(
    ("levels", "weights", "error"),
    [
        # Generalised least squares for halving, sigma = 0.05, p = 2: worked out separately to three digits.
        (4, [-0.246, 0.824, 0.530, -1.109], 0.11),
        (5, [-0.116, 0.246, 0.522, 0.122, -0.775], 0.074),
    ],
)
def test_weights_of_the_fit(levels, weights, error):
    h = HALVING[:levels]
    fit = fit_order(h, h**2, expected=2.0)
    np.testing.assert_allclose(fit.weights, weights, rtol=0, atol=6e-4)
    assert fit.error == pytest.approx(error, rel=0.02, abs=0)


def test_five_point_errors_give_order_two():
    # e^x cos y on the unit square, h = 1/8 ... 1/128: published maximum errors of the five-point scheme.
    fit = fit_order(HALVING[:5] / 8, [2.7635e-4, 7.0711e-5, 1.7749e-5, 4.4418e-6, 1.1108e-6], 2.0)
    assert fit.order == pytest.approx(1.9995, rel=0, abs=0.01)


def test_five_point_errors_on_the_l_shape_give_order_two_thirds():
    # r^(2/3) sin(2/3 theta), h = 1/8 ... 1/128: measured maximum errors; theory says 2/3 (Laasonen 1957).
    fit = fit_order(HALVING[:5] / 8, [2.011e-2, 1.303e-2, 8.298e-3, 5.249e-3, 3.313e-3], 2 / 3, noise=0.03)
    assert fit.low < 2 / 3 < fit.high
    assert fit.order == pytest.approx(0.6643, rel=0, abs=0.01)


@pytest.mark.parametrize("ratio", [1.3, 2**0.5, 1.5, 2.0, 3.0])
def test_recovers_a_power_law_at_any_ratio(ratio):
    h = 0.7 * ratio ** -np.arange(5.0)
    fit = fit_order(h, 3 * h**1.75, expected=2.0)
    assert fit.order == pytest.approx(1.75, rel=1e-10, abs=0)
    assert fit.constant == pytest.approx(3.0, rel=1e-9, abs=0)


def test_rough_errors_widen_the_interval():
    h = HALVING[:5]
    smooth, rough = fit_order(h, h**2, 2.0), fit_order(h, h**2 * [1, 2, 0.5, 2, 1], 2.0)
    assert rough.error > 3 * smooth.error


@pytest.mark.parametrize(
    ("h", "errors", "match"),
    [
        ([1, 0.5], [1, 0.5], "length >= 3"),
        ([1, 0.5, 0.5], [1, 0.5, 0.2], "fall from level to level"),
        ([1, 0.5, 0.25], [1, 0.5, 0.0], "positive and finite"),
        ([1, 0.5, 0.25], [1, 0.5, np.nan], "positive and finite"),
    ],
)
def test_refuses_sequences_without_an_order(h, errors, match):
    with pytest.raises(AnswerError, match=match):
        fit_order(h, errors)


def test_noise_follows_kind_nesting_and_meshes():
    h = [1 / 8, 1 / 16, 1 / 32]
    assert noise_level("finite difference", [8, 16, 32], h) == 0.03
    assert noise_level("finite difference", [9, 18, 37], [1 / 9, 1 / 17.4, 1 / 36]) == 0.05
    assert noise_level("finite element", [8, 16, 32], h) == 0.03
    assert noise_level("finite element", [8, 16, 32], [0.125, 0.0605, 0.031]) == 0.05
    assert noise_level("finite element", [8, 16, 32], [0.13, 0.05, 0.03]) == 0.1
