"""Grid convergence index against published worked examples."""

import math

import numpy as np
import pytest
from scipy.optimize import curve_fit

from laplace_verify.errors import AnswerError, RecordError
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
        ([1.0], [1], "two or more finite numbers"),
        ([1.0, 2.0], [1, 2, 4], "2 spacings"),
        ([1.0, 2.0], [1, 2], "order must be given with two grids"),
        ([1.0, math.nan, 2.0], [1, 2, 4], "two or more finite numbers"),
        ([1.0, 2.0, 3.0], [4, 2, 1], "rising from the finest"),
        ([1.0, 2.0, 3.0], [0, 2, 4], "rising from the finest"),
    ],
)
def test_refuses_what_is_no_sequence_of_grids(values, h, match):
    with pytest.raises(AnswerError, match=match):
        grid_convergence(values, h)


def test_refuses_an_order_where_three_grids_show_one():
    with pytest.raises(AnswerError, match="only then"):
        grid_convergence([1.0, 1.1, 1.4], [1, 2, 4], order=2)


@pytest.mark.parametrize("order", [0.0, -1.0, math.nan])
def test_refuses_an_assumed_order_that_is_not_positive(order):
    with pytest.raises(AnswerError, match="between 0 and"):
        grid_convergence([1.0, 1.1], [1, 2], order=order)


def test_two_grids_need_an_assumed_order_and_carry_the_safety_factor_three():
    # Roache 1994, J. Fluids Eng. 116, 405-413: GCI = 3 |e| / (r^p - 1) with two grids.
    found = grid_convergence([2.0, 2.3], [1, 2], order=2)
    assert found.behaviour == "assumed order"
    assert found.safety_factor == 3.0
    assert found.extrapolated == pytest.approx(1.9, rel=1e-14)
    assert found.index == pytest.approx(3 * 0.15 / 3, rel=1e-14)


@pytest.mark.parametrize("order", [0.8, 1.0, 1.7, 2.0])
def test_four_grids_recover_order_and_limit_of_a_power_law(order):
    h = np.array([1.0, 1.4, 2.2, 4.0])
    found = grid_convergence(3.0 - 0.2 * h**order, h)
    assert found.behaviour == "monotone"
    assert found.order == pytest.approx(order, rel=1e-4)
    assert found.extrapolated == pytest.approx(3.0, abs=1e-4)
    assert found.safety_factor == 1.25
    assert found.uncertainty == pytest.approx(1.25 * 0.2, rel=1e-3)


def test_the_fit_agrees_with_a_general_curve_fit_on_scattered_values():
    # scipy.optimize.curve_fit minimises the same sum by Levenberg-Marquardt, equal weights.
    h = np.array([1.0, 1.5, 2.0, 3.0, 4.0, 6.0])
    values = 5.0 + 0.03 * h**1.5 + 1e-3 * np.array([1, -1, 1, 0.5, -1, 0.2])
    plain, _ = curve_fit(lambda x, limit, a, p: limit + a * x**p, h, values, p0=(5.0, 0.03, 1.5), sigma=None)
    close, _ = curve_fit(
        lambda x, limit, a, p: limit + a * x**p, h, values, p0=(5.0, 0.03, 1.5), sigma=np.sqrt(h)
    )
    found = grid_convergence(values, h)
    limits, orders = (plain[0], close[0]), (plain[2], close[2])
    assert min(abs(found.extrapolated - limit) for limit in limits) < 1e-6
    assert min(abs(found.order - order) for order in orders) < 1e-4


@pytest.mark.parametrize("seed", range(20))
def test_the_uncertainty_of_scattered_values_covers_the_error(seed):
    # 20 of 20 seeds; the procedure aims at 95 %
    h = np.array([1.0, 1.25, 1.6, 2.0, 2.5])
    noise = np.random.default_rng(seed).normal(0.0, 2e-4, 5)
    found = grid_convergence(1.0 + 0.01 * h**2 + noise, h)
    assert abs(found.values[0] - 1.0) <= found.uncertainty


def test_an_order_above_two_is_not_believed_without_saying_so():
    h = np.array([1.0, 2.0, 4.0, 8.0])
    found = grid_convergence(1.0 + 0.001 * h**3, h)
    assert found.order == pytest.approx(3.0, rel=1e-4)
    assert "exceeds 2" in found.note
    assert found.safety_factor == 3.0


def test_four_grids_that_go_up_and_down_are_named_oscillatory():
    found = grid_convergence([1.00, 1.01, 0.98, 1.05], [1, 2, 4, 8])
    assert found.behaviour == "oscillatory"
    assert found.safety_factor == 3.0
    assert "up and down" in found.note


def test_four_grids_that_diverge_get_no_order_and_no_index():
    found = grid_convergence([1.0, 1.2, 1.3, 1.35], [1, 2, 4, 8])
    assert (found.behaviour, found.order, found.index) == ("divergent", None, None)


def test_the_table_holds_the_figures_of_the_published_example():
    # Celik et al. 2008, table 1, first column: r21 1.5, p 1.53, phi_ext 6.1685, e_a 1.5 %, e_ext 1.7 %,
    # GCI 2.2 %.
    found = grid_convergence([6.063, 5.972, 5.863], spacings([18000, 8000, 4500]))
    rows = dict(
        line.split(maxsplit=1) for line in found.table(cells=(18000, 8000, 4500)).splitlines() if " " in line
    )
    assert (rows["N1"], rows["r21"], rows["r32"]) == ("18000", "1.5", "1.333333")
    assert float(rows["p"]) == pytest.approx(1.53, abs=0.005)
    assert float(rows["phi_ext"]) == pytest.approx(6.1685, abs=5e-5)
    for name, published in [("e_a", 1.5), ("e_ext", 1.7), ("GCI", 2.2)]:
        assert float(rows[name].rstrip(" %")) == pytest.approx(published, abs=0.05)


def test_the_table_refuses_an_unknown_format():
    with pytest.raises(RecordError, match="'text', 'markdown' or 'latex'"):
        grid_convergence([1.0, 1.1, 1.4], [1, 2, 4]).table("html")
