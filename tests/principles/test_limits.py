"""The rule of the limit: what vanishes passes, what tends to a constant fails, one size does not decide."""

from dataclasses import replace

import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import AnswerError
from laplace_verify.geometry import Box, Rectangle
from laplace_verify.principles.law import Trial, round_off, trial_sizes
from laplace_verify.principles.limits import Measurement, exactly, in_the_limit, rate_of
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.spheres import sphere
from laplace_verify.solvers import Answer
from laplace_verify.solvers.samples import (
    chebyshev,
    five_point,
    fundamental_solutions,
    p1_element,
    seven_point,
)

POINTS = np.array([[0.5, 0.5]])


@pytest.fixture
def judged():
    """Judge made-up violations, one for each of the sizes 8, 16, 32 and, to confirm, 64."""

    def judge(violations, rate=2.0, solver=five_point, rule=None):
        posed = Posed(shape=Rectangle((0, 0), (1, 1)), conditions={}, field=fields.affine((1, 0)))
        trial = Trial(
            solver=solver,
            posed=posed,
            problem=posed.problem(),
            seed=0,
            sizes=(8, 16, 32),
            may_call=lambda: None,
        )
        by_size = dict(zip((8, 16, 32, 64), violations, strict=False))

        def measure(trial, size):
            trial.answer(size)
            return Measurement(by_size[size], POINTS, "", ("0",))

        return exactly(trial, measure) if rule == "exactly" else in_the_limit(trial, measure, rate)

    return judge


@pytest.mark.parametrize(
    ("violations", "sizes"),
    [
        ((0.1, 0.025, 0.00625), 3),  # order two
        ((0.0, 0.0, 0.0), 3),
        ((0.3, 1e-10, 9e-10), 3),  # round-off
        ((0.0, 0.0, 1e-4, 2.5e-5), 4),  # two coarse sizes that happen to show nothing: the fourth decides
        ((0.1, 0.01, 0.06, 0.015), 4),
    ],
)
def test_what_vanishes_is_kept(judged, violations, sizes):
    found = judged(violations)
    assert not found.broken
    assert len(found.sizes) == sizes
    assert found.history == violations[:sizes]


@pytest.mark.parametrize(
    "violations",
    [
        (0.1, 0.1, 0.1, 0.1),
        (0.13, 0.11, 0.1025, 0.1006),  # tends to 0.1 at order two
        (1e-8, 1e-8, 1e-8, 1e-8),
        (0.1, 0.1 / 2**0.4, 0.1 / 2**0.8, 0.1 / 2**1.2),  # less than half of the declared order
        (np.nan, np.nan, np.nan, np.nan),
    ],
)
def test_what_does_not_vanish_is_broken_and_a_fourth_size_confirms_it(judged, violations):
    found = judged(violations)
    assert found.broken
    assert found.sizes == (8, 16, 32, 64)


def test_a_law_must_not_ask_for_more_than_second_order(judged):
    assert not judged((0.1, 0.025, 0.00625), rate=6.0).broken


def test_an_exact_law_allows_round_off_and_the_declared_floor(judged):
    assert not judged((1e-9, 1e-9), rule="exactly").broken
    assert judged((1e-9, 2e-9), rule="exactly").broken
    assert not judged((1e-9, 2e-9), rule="exactly", solver=replace(five_point, error_floor=1e-9)).broken
    assert judged((np.nan, 0.0), rule="exactly").broken
    assert round_off(replace(five_point, error_floor=None)) == 1e-9


def test_spacings_that_do_not_fall_are_an_error_of_the_solver(judged):
    stuck = replace(five_point, function=lambda problem, n: _same_h(five_point(problem, n)))
    with pytest.raises(AnswerError, match="h must fall from size to size"):
        judged((0.1, 0.1, 0.1, 0.1), solver=stuck)


def _same_h(answer):
    return Answer(answer.points, answer.values, cells=answer.cells, h=0.1)


def test_sizes_are_the_declared_ones_about_twice_as_fine_each():
    assert trial_sizes(five_point, 2) == (8, 16, 32)
    assert trial_sizes(chebyshev, 2) == (4, 8, 16)
    assert trial_sizes(fundamental_solutions, 2) == (8, 16, 32)
    assert trial_sizes(seven_point, 3) == trial_sizes(p1_element, 3) == (6, 9, 13)
    assert trial_sizes(replace(five_point, sizes=(10, 11, 12, 13)), 2) == (10, 11, 12)


def test_the_rate_is_the_declared_order_in_the_maximum_norm():
    class Has:
        def __init__(self, solver):
            self.solver = solver

    assert rate_of(Has(five_point)) == 2.0
    assert rate_of(Has(chebyshev)) == 2.0
    assert rate_of(Has(replace(five_point, order=1.0))) == 1.0
    assert rate_of(Has(replace(five_point, order={"L2": 1.5}))) == 1.5
    assert rate_of(Has(replace(five_point, order={"H1-semi": 1.0}))) == 1.0


@pytest.mark.parametrize("dim", [1, 2, 3])
def test_means_over_spheres_are_exact_for_quadratics(dim):
    centre = np.array([0.3, -0.2, 1.1])[:dim]
    points, weights = sphere(centre, 0.7)
    assert np.allclose(np.linalg.norm(points - centre, axis=1), 0.7, rtol=1e-14, atol=0.0)  # rounding
    # mean of x_i^2 over the sphere is c_i^2 + r^2 / d (symmetry: the squares add up to r^2)
    expected = centre**2 + 0.49 / dim
    assert np.allclose(weights @ points**2, expected, rtol=1e-13, atol=0.0)  # rounding
    assert weights.sum() == pytest.approx(1.0, rel=1e-14)


def test_harmonic_polynomials_of_degree_four_have_their_mean_value_on_the_sphere():
    field = fields.solid(4, 2)
    centre = np.array([0.3, -0.2, 1.1])
    points, weights = sphere(centre, 0.7)
    assert weights @ field.value(points) == pytest.approx(field.value(centre[None])[0], rel=1e-12)  # rounding


def test_a_box_of_data_is_measured_on_its_faces():
    posed = Posed(shape=Box((0, 0, 0), (1, 2, 3)), conditions={"top": 2}, field=fields.affine((1, 1, 1), 1))
    assert posed.size == 7.0
    assert "top robin with alpha = 2" in posed.words()
