"""The mesh size an observed order is taken in."""

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.solvers.spacing import spacing


def problem_on(shape):
    """Return a problem with u = 1 all round."""
    return lv.problem(shape, {piece.name: lv.dirichlet(1.0) for piece in shape.pieces})


@pytest.fixture(scope="module")
def plate():
    """Return a problem on a 4 x 1 plate: area 4, boundary 10."""
    return problem_on(lv.Rectangle((0, 0), (4, 1)))


def function(**keywords):
    """Return an answer that is a function only."""
    return lv.Answer(evaluate=lambda points: points[:, 0], **keywords)


def test_what_the_solver_reports_comes_first(plate):
    assert spacing(function(h=0.3, unknowns=100), plate) == (0.3, "reported by the solver")


def test_volume_methods_share_the_measure_among_their_unknowns(plate):
    h, basis = spacing(function(unknowns=400), plate, "finite element")
    assert h == pytest.approx(0.1, rel=1e-14, abs=0)
    assert basis == "(measure / unknowns)^(1/2)"


def test_boundary_elements_share_the_boundary(plate):
    h, basis = spacing(function(unknowns=400), plate, "boundary element")
    assert h == pytest.approx(10 / 400, rel=1e-14, abs=0)
    assert basis == "boundary measure / unknowns"


def test_boundary_elements_in_space_take_a_square_root():
    h, _ = spacing(function(unknowns=600), problem_on(lv.Box((0, 0, 0), (1, 1, 1))), "boundary element")
    assert h == pytest.approx(0.1, rel=1e-14, abs=0)


def test_on_a_line_there_is_one_rule():
    rod = problem_on(lv.Interval(0, 3))
    for kind in ("finite difference", "boundary element"):
        assert spacing(lv.Answer(np.linspace(0, 3, 6), np.ones(6)), rod, kind).h == pytest.approx(
            0.5, rel=1e-14, abs=0
        )


def test_values_are_counted_if_unknowns_are_not_reported(plate):
    points = np.random.default_rng(2).random((16, 2))
    assert spacing(lv.Answer(points, np.ones(16)), plate).h == pytest.approx(0.5, rel=1e-14, abs=0)


def test_n_is_the_last_resort(plate):
    assert spacing(function(), plate, size=8) == (0.5, "size of the shape / n")
    with pytest.raises(lv.AnswerError, match=r"h must be reported: Answer\(\.\.\., h=\.\.\.\)"):
        spacing(function(), plate)
