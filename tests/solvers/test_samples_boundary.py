"""The boundary element sample: closed forms of its integrals, order two inside, and what it declines."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.integrate import quad

from laplace_verify import fields
from laplace_verify.geometry import Annulus, Disc, Ellipse, Polygon, Rectangle, Sector
from laplace_verify.problems import case, neumann, problem, robin
from laplace_verify.solvers import Refused
from laplace_verify.solvers.samples import boundary_elements
from laplace_verify.solvers.samples.boundary_collocation import Elements, collocated, elements_on, layers

WAVE = fields.exp_trig(1.3, "cos", centre=(0.1, 0.2))
SLIT = Polygon(((0, 0), (1, 0), (1, 1), (0, 1), (0, 0.5), (0.5, 0.5), (0, 0.5)))
SHAPES = [
    pytest.param(Rectangle((0, 0), (1.5, 1)), {"left": "neumann", "top": robin(2.0)}, id="rectangle"),
    pytest.param(Disc((0, 0), 1.0), {"rim": robin(0.5)}, id="disc"),
    pytest.param(Ellipse((0, 0), (1.5, 1)), {}, id="ellipse"),
    pytest.param(Annulus((0, 0), 0.4, 1.0, (0.2, 0)), {"inner": "neumann"}, id="annulus"),
    pytest.param(Sector(1.0, math.pi / 2), {"arc": "neumann"}, id="sector"),
]


def largest_error(posed, n, points):
    """Return the largest error at points well inside."""
    answer = boundary_elements.solve(posed.problem, n)
    return np.max(np.abs(answer.value_at(points) - posed.exact.value(points)))


def inner_points(shape, count=50):
    """Return points that keep a distance from the boundary."""
    points = shape.sample(20 * count, seed=1)
    return points[shape.distance(points) > 0.1 * shape.extent][:count]


@pytest.mark.parametrize(("shape", "conditions"), SHAPES)
def test_order_two_inside(shape, conditions):
    posed, points = case(shape, conditions, WAVE, 2.5), inner_points(shape)
    errors = [largest_error(posed, n, points) for n in (16, 32)]
    assert 1.85 < math.log2(errors[0] / errors[1]) < 2.6


def test_integrals_over_an_element_agree_with_quadrature():
    start, end, radius = np.array([0.2, -0.1]), np.array([0.9, 0.4]), 3.0
    elements = Elements(starts=start[None], ends=end[None], radius=radius)
    length = float(np.linalg.norm(end - start))
    normal = np.array([end[1] - start[1], start[0] - end[0]]) / length
    for point in ((0.3, 0.7), (-1.0, 2.0), (1.5, 0.2)):

        def offset(t, point=point):
            return start + t * (end - start) - np.array(point)

        single = quad(lambda t: -math.log(np.linalg.norm(offset(t)) / radius) / (2 * math.pi) * length, 0, 1)
        double = quad(
            lambda t: -(normal @ offset(t)) / (offset(t) @ offset(t)) / (2 * math.pi) * length, 0, 1
        )
        found = layers(elements, np.array([point]))
        assert found[0][0, 0] == pytest.approx(single[0], rel=1e-10)
        assert found[1][0, 0] == pytest.approx(double[0], rel=1e-10)


def test_an_element_acts_on_itself_by_the_integral_of_the_logarithm():
    elements = Elements(starts=np.array([[0.0, 0.0]]), ends=np.array([[0.5, 0.0]]), radius=2.0)
    # twice the integral of log(s/R) from 0 to L/2 is L (log(L/(2 R)) - 1)
    expected = -0.5 * (math.log(0.25 / 2.0) - 1.0) / (2 * math.pi)
    single, double = collocated(elements)
    assert single[0, 0] == pytest.approx(expected, rel=1e-13)
    assert double[0, 0] == 0.0


def test_constants_satisfy_the_identity_on_every_boundary():
    for shape in (Rectangle((0, 0), (1.5, 1)), Annulus((0, 0), 0.4, 1.0, (0.2, 0))):
        _, double = collocated(elements_on(shape, 6)[0])
        np.testing.assert_allclose(double.sum(axis=1), -0.5, rtol=0, atol=1e-12)


def test_a_disc_of_capacity_one_is_no_exception():
    points = inner_points(Disc((0, 0), 1.0))
    assert largest_error(case(Disc((0, 0), 1.0), {}, WAVE), 32, points) < 1e-2


def test_values_on_the_boundary_come_near_those_inside():
    posed = case(Disc((0, 0), 1.0), {}, WAVE)
    rim = posed.problem.shape.pieces["rim"].point(np.linspace(0, 1, 77))
    errors = [largest_error(posed, n, rim) for n in (16, 64)]
    assert errors[1] < 0.4 * errors[0]


def test_pure_flux_problems_get_the_level_they_ask_for():
    shape = Disc((0, 0), 1.0)
    data = case(shape, {"rim": "neumann"}, WAVE).problem.pieces["rim"].data
    posed = problem(shape, {"rim": neumann(data)}, constant=("point", (0.3, -0.2), 3.0))
    assert boundary_elements.solve(posed, 16).value_at([(0.3, -0.2)])[0] == pytest.approx(3.0, abs=1e-12)


def test_slits_and_shapes_that_are_all_boundary_are_declined():
    with pytest.raises(Refused, match="lips"):
        boundary_elements(case(SLIT, {}, WAVE).problem, 8)
    with pytest.raises(Refused, match="no point lies"):
        boundary_elements(case(Rectangle((0, 0), (10, 1)), {}, WAVE).problem, 8)
