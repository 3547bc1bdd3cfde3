"""Grid convergence index against published worked examples."""

import math

import numpy as np
import pytest

from laplace_verify.errors import AnswerError
from laplace_verify.measure import grid_convergence


def spacings(cells: list[int]) -> list[float]:
    """h = N^(-1/2) for a 2-D grid of N cells."""
    return [n**-0.5 for n in cells]


# Celik et al. 2008, J. Fluids Eng. 130, 078001, table 1; digits beyond the printed ones recomputed by
# fixed-point iteration with unrounded ratios. e_ext of the second column is printed as 0.9 %, it
# evaluates to 0.847 %.
CELIK = [
    pytest.param([18000, 8000, 4500], [6.063, 5.972, 5.863],
                 (1.533969, 6.1684956, 0.015009, 0.017102, 0.02175), "monotone", id="first column"),
    pytest.param([18000, 4500, 980], [10.7880, 10.7250, 10.6050],
                 (0.75190052, 10.880104, 0.0058398, 0.0084654, 0.010672), "monotone", id="second column"),
    pytest.param([18000, 4500, 980], [6.0042, 5.9624, 6.0909],
                 (1.5076917, 6.0268737, 0.0069618, 0.0037621, 0.0047204), "oscillatory", id="third column"),
]  # fmt: skip


@pytest.mark.parametrize(("cells", "values", "published", "behaviour"), CELIK)
def test_reproduces_the_worked_examples_of_celik(cells, values, published, behaviour):
    found = grid_convergence(values, spacings(cells))
    got = (found.order, found.extrapolated, found.approximate_error, found.extrapolated_error, found.index)
    np.testing.assert_allclose(got, published, rtol=5e-5, atol=0)  # the published digits
    assert found.behaviour == behaviour


def test_reproduces_the_tutorial_example_with_ratio_two():
    # Slater, NPARC Alliance, Examining Spatial (Grid) Convergence (digits quoted from memory, recomputed).
    found = grid_convergence([0.97050, 0.96854, 0.96178], [1, 2, 4])
    got = (found.order, found.extrapolated, found.index, found.coarse_index, found.asymptotic_ratio)
    np.testing.assert_allclose(
        got, (1.786170, 0.9713003, 0.001030826, 0.003562493, 1.002024), rtol=2e-6, atol=0
    )


@pytest.mark.parametrize(("coarsest", "order"), [(4, 1.9411992), (8, 1.9844128)])
def test_order_of_exact_five_point_centre_values(coarsest, order):
    # sin(pi x) sinh(b y) solves the five-point equations if cosh(b h) = 2 - cos(pi h) (Courant, Friedrichs &
    # Lewy 1928), so the centre value is 1/(2 cosh(b/2)). Orders: derived from it with 20 digits.
    h = np.array([1 / (4 * coarsest), 1 / (2 * coarsest), 1 / coarsest])
    b = np.arccosh(2 - np.cos(math.pi * h)) / h
    found = grid_convergence(1 / (2 * np.cosh(b / 2)), h)
    assert found.order == pytest.approx(order, rel=1e-7, abs=0)


def test_recovers_order_and_limit_of_a_power_law_at_any_ratio():
    h = np.array([0.1, 0.17, 0.4])
    found = grid_convergence(3.0 + 2.0 * h**2.5, h)
    assert found.order == pytest.approx(2.5, rel=1e-9, abs=0)
    assert found.extrapolated == pytest.approx(3.0, rel=1e-9, abs=0)


def test_names_divergence_and_claims_no_order_for_it():
    found = grid_convergence([1.0, 1.2, 1.3], [1, 2, 4])
    assert found.behaviour == "divergent"
    assert found.order is None
    assert found.extrapolated is None
    assert found.index is None


def test_names_values_that_agree_to_rounding():
    found = grid_convergence([1.0, 1.0, 1.1], [1, 2, 4])
    assert found.behaviour == "converged"
    assert found.extrapolated == 1.0


def test_extreme_ratios_do_not_overflow():
    found = grid_convergence([1.0, 1.0 + 1e-12, 2.0], [1e-30, 1.0, 1e30])
    assert found.behaviour in ("monotone", "divergent")


@pytest.mark.parametrize(
    ("values", "h", "match"),
    [
        ([1.0, 2.0], [1, 2, 4], "three finite numbers"),
        ([1.0, math.nan, 2.0], [1, 2, 4], "three finite numbers"),
        ([1.0, 2.0, 3.0], [4, 2, 1], "rising from the finest"),
        ([1.0, 2.0, 3.0], [0, 2, 4], "rising from the finest"),
    ],
)
def test_refuses_what_is_no_sequence_of_three_grids(values, h, match):
    with pytest.raises(AnswerError, match=match):
        grid_convergence(values, h)
