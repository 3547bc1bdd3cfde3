"""Boundary data that jump along an edge of a solid: regularity, limits along pieces, quantities, norms."""

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.errors import ProblemError
from laplace_verify.measure.exact import Exact
from laplace_verify.measure.expected import expected_order
from laplace_verify.measure.smoothness import Method, Smoothness
from laplace_verify.problems import flux_through


@pytest.fixture(scope="module")
def halves():
    return lv.case(lv.Ball((0, 0, 0), 1), {}, fields.hemispheres((0, 0, 0), 1, 3, 1))


@pytest.fixture(scope="module")
def lid():
    return lv.case(lv.Cylinder(0.8, 0, 1), {}, fields.cylinder_faces("4/5", 0, 1, top=1))


def test_a_jump_along_a_circle_is_exponent_zero(halves, lid):
    for case in (halves, lid):
        assert case.regularity.solution == 0.0
        assert len(case.regularity.singular_points) == 0
        assert len(case.regularity.jumps) > 0
    np.testing.assert_allclose(lid.regularity.jumps[:, 2], 1.0, rtol=0, atol=1e-15)


def test_an_edge_outside_leaves_the_solution_smooth():
    inside = lv.case(lv.Ball((0, 0, 0), 0.5), {}, fields.hemispheres((0, 0, 0), 1))
    assert inside.regularity.solution == float("inf")


def test_data_on_a_rim_are_the_limits_of_each_piece(lid):
    rim = np.array([[0.8, 0.0, 1.0], [0.48, -0.64, 1.0]])
    np.testing.assert_allclose(lid.problem.pieces["top"].data(rim), 1.0, rtol=0, atol=1e-9)
    np.testing.assert_allclose(lid.problem.pieces["side"].data(rim), 0.0, rtol=0, atol=1e-9)


def test_data_on_an_edge_inside_a_piece_are_the_mean(halves):
    data = halves.problem.pieces["surface"].data(np.array([[1.0, 0.0, 0.0], [0.6, 0.8, 0.0]]))
    np.testing.assert_allclose(data, 2.0, rtol=0, atol=1e-9)


def test_flux_through_a_piece_with_a_jump_is_infinite():
    with pytest.raises(ProblemError, match="is infinite, because boundary data jump along"):
        lv.case(
            lv.Cylinder(0.8, 0, 1), {}, fields.cylinder_faces("4/5", 0, 1, top=1),
            quantities={"flux": flux_through("top")},
        )  # fmt: skip


def test_flux_on_an_edge_has_no_limit():
    case = lv.case(lv.Cylinder(0.8, 0, 1), {"side": "neumann"}, fields.cylinder_faces("4/5", 0, 1, top=1))
    with pytest.raises(ProblemError, match="no finite limit"):
        case.problem.pieces["side"].data(np.array([[0.8, 0.0, 1.0]]))


def test_an_edge_inside_the_shape_is_refused():
    with pytest.raises(ProblemError, match="jumps along an edge inside"):
        lv.case(
            lv.Box((-0.7, -0.7, -0.4), (0.7, 0.7, 0.4)),
            {},
            fields.cylinder_faces("1/2", -2, 0, top=1).scaled(1),
        )


def test_measure_leaves_the_edge_out(halves):
    values = Exact(halves).values(np.array([[1.0, 0.0, 0.0], [0.0, 0.0, 0.5]]))
    assert np.isnan(values[0])
    assert np.isfinite(values[1])


def test_no_rate_is_expected_in_the_maximum_norm_and_one_in_l2(lid):
    method = Method(kind="finite difference", formal={"max": 2.0, "L2": 2.0}.get)
    smoothness = Smoothness(solution=lid.regularity.solution, domain=lid.regularity.domain)
    assert not expected_order(method, "max", smoothness).decides
    found = expected_order(method, "L2", smoothness)
    assert (found.expected, found.decides) == (1.0, True)
