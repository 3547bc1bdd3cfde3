"""Errors of stochastic answers against the standard errors that come with them."""

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.measure import Level, Order, Verdict
from laplace_verify.measure.coverage import judge_coverage, settled_by_coverage
from laplace_verify.measure.results import Coverage
from laplace_verify.solvers.samples import walk_on_spheres

CASE = lv.catalogue["plate-saddle"]
SIZES = (100, 400, 1600, 6400)


def sampler(bias=0.0, stated=1.0, shared=False):
    """A solver with normal errors of size 1/sqrt(n) that states them `stated` times as large."""

    def solve(_, n, wanted, seed):
        points = wanted[:100]
        draw = np.random.default_rng([seed, n]).standard_normal(1 if shared else len(points))
        values = CASE.exact.value(points) + draw / np.sqrt(n) + bias
        return lv.Answer(points, values, samples=n, standard_error=stated / np.sqrt(n))

    return lv.adapt(solve, name="sampler", kind="stochastic", order=0.5, sizes=SIZES)


@pytest.mark.parametrize("seed", range(5))
def test_an_unbiased_answer_passes(seed):
    found = lv.study(sampler(), CASE, seed=seed)
    assert found.verdict is Verdict.PASS, found.reasons
    assert not found.remarks
    assert all(0.85 <= level.coverage.covered <= 1.0 for level in found.levels)


def test_standard_errors_that_are_too_small_fail():
    found = lv.study(sampler(stated=0.2), CASE)
    assert found.verdict is Verdict.FAIL
    assert "standard errors are too small, at a confidence of 99.9%" in " ".join(found.reasons)


def test_a_bias_above_the_statistical_error_fails():
    # 0.06 is 4.8 standard errors at n = 6400
    found = lv.study(sampler(bias=0.06), CASE)
    assert found.verdict is Verdict.FAIL
    assert "size 6400: squared errors are" in " ".join(found.reasons)


def test_standard_errors_that_are_too_large_are_remarked():
    found = lv.study(sampler(stated=5.0), CASE)
    assert found.verdict is Verdict.PASS
    assert any("standard errors are too large" in remark for remark in found.remarks)


def level(ratio, points=100):
    return Level(size=64, h=0.1, unknowns=1, seconds=0.0, errors={}, relative={},
                 coverage=Coverage(points=points, ratio=ratio, covered=0.9))  # fmt: skip


def test_points_that_share_their_samples_get_a_remark_before_a_fault():
    # 0.999 quantiles of chi^2: 149.4/100 with 100 degrees of freedom, 10.83 with one (Abramowitz & Stegun
    # 1964, table 26.8).
    assert judge_coverage([level(1.49)]) == ([], [])
    faults, remarks = judge_coverage([level(1.50)])
    assert not faults
    assert "unless the points share their samples" in remarks[0].text
    assert remarks[0].kind == "wrong standard errors"
    assert judge_coverage([level(10.82)])[0] == []
    assert len(judge_coverage([level(10.84)])[0]) == 1
    assert len(judge_coverage([level(np.nan)])[0]) == 1


@pytest.mark.slow
@pytest.mark.parametrize("case_id", ["plate-saddle", "disc-step", "l-shape-corner", "ball-legendre"])
def test_walks_on_spheres_pass(case_id):
    found = lv.study(walk_on_spheres, lv.catalogue[case_id])
    assert found.verdict is Verdict.PASS, found.reasons


def open_order(verdict=Verdict.INCONCLUSIVE):
    order = Order(
        observed=0.4, low=0.2, high=0.6, formal=0.5, expected=0.5, decides=True, tolerance=0.25,
        verdict=verdict, finer=True,
    )  # fmt: skip
    return {"L2": order}


def stating(order=0.5, ratio=1.0, count=4):
    """Levels whose standard errors fall at an order and cover the errors as `ratio` says."""
    return [
        Level(size=n, h=1 / n, unknowns=1, seconds=0.0, errors={}, relative={},
              coverage=Coverage(points=100, ratio=ratio, covered=0.95, stated=n**-order))
        for n in SIZES[:count]
    ]  # fmt: skip


def test_covered_errors_whose_standard_errors_fall_settle_an_open_order():
    settled = settled_by_coverage(open_order(), stating())["L2"]
    assert settled.verdict is Verdict.PASS
    assert "lie within the standard errors on every level, and those fall at order 0.50" in settled.note


@pytest.mark.parametrize(
    "levels",
    [
        stating(order=0.2),
        stating(ratio=1.6),  # remarked: biased unless the points share their samples
        stating(ratio=0.05),  # standard errors so large that they cover anything
        stating(count=3),
        [*stating()[:3], level(1.0)],  # written before the size of standard errors was kept
        [],
    ],
)
def test_standard_errors_that_do_not_fall_or_fit_leave_it_open(levels):
    assert settled_by_coverage(open_order(), levels) == open_order()


def test_a_failure_is_not_settled():
    assert settled_by_coverage(open_order(Verdict.FAIL), stating()) == open_order(Verdict.FAIL)
