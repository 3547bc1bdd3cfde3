"""Cases around bodies: capacities away from one, what is stated of infinity, solvers that can do them."""

import math

import pytest

import laplace_verify as lv
from laplace_verify.cases import exteriors, exteriors_space, exteriors_squares
from laplace_verify.cases.describe import describe
from laplace_verify.solvers.samples import fundamental_solutions

PLANE, SPACE = [*exteriors.family, *exteriors_squares.family], list(exteriors_space.family)
DOABLE = [i for i in PLANE if fundamental_solutions.refuses(lv.catalogue[i].problem) is None]
SQUARE = math.gamma(0.25) ** 2 / (4 * math.pi**1.5)  # capacity of the unit square (Landkof 1972, memory)


def capacity(shape):
    """Logarithmic capacity of disc, ellipse, screen, square (Ransford 1995, table 5.1, from memory)."""
    body = shape.body
    if body.kind in ("disc", "ellipse"):
        return sum(body.semi_axes) / 2
    if body.kind == "screen":
        return math.dist(body.start, body.stop) / 4
    if body.kind == "rectangle" and body.upper[0] - body.lower[0] == body.upper[1] - body.lower[1]:
        return SQUARE * (body.upper[0] - body.lower[0])
    raise AssertionError(f"no capacity is known for {body!r}")


def assert_capacity_is_harmless(case):
    found = capacity(case.problem.shape)
    if "unit-capacity" in case.tags:
        assert found == pytest.approx(1.0, rel=1e-15)
    else:
        assert abs(found - 1.0) > 0.1, case.id


@pytest.mark.parametrize("id_", [i for i in PLANE if lv.catalogue[i].problem.shape.kind == "exterior"])
def test_capacities_of_plane_bodies_stay_away_from_one(id_):
    assert_capacity_is_harmless(lv.catalogue[id_])


def test_one_case_has_unit_capacity_and_the_check_can_fail():
    assert [i for i in PLANE if "unit-capacity" in lv.catalogue[i].tags] == ["ellipse-of-unit-capacity"]
    shape = lv.Exterior(lv.Disc((0, 0), 1.05))
    with pytest.raises(AssertionError):
        assert_capacity_is_harmless(lv.case(shape, {}, lv.fields.dipole((0, 0), (1, 0)), at_infinity="decay"))


@pytest.mark.parametrize("id_", PLANE + SPACE)
def test_infinity_and_window_are_stated(id_):
    case = lv.catalogue[id_]
    assert "unbounded" in case.tags
    assert "at infinity" in case.statement
    assert "Norms are taken over" in case.statement
    assert case.window.bounded
    assert "norms over" in describe(case)


def test_every_behaviour_at_infinity_occurs():
    def kind(case):
        known = case.problem.at_infinity
        return known if isinstance(known, str) else known[0]

    assert {kind(lv.catalogue[id_]) for id_ in PLANE} == {"decay", "bounded", "log", "flow"}
    assert any(lv.catalogue[id_].problem.at_infinity[-1] == 1.75 for id_ in PLANE)  # with circulation


def test_the_sample_solver_does_discs_and_ellipses():
    assert len(DOABLE) == 9


@pytest.mark.parametrize("id_", DOABLE)
def test_sources_inside_the_body_pass(id_):
    study = lv.study(fundamental_solutions, lv.catalogue[id_])
    assert study.verdict is lv.Verdict.PASS, study.reasons
