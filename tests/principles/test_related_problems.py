"""Laws on fluxes, gradients and answers to several problems: a twin of a sound solver breaks each of them."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from laplace_verify import fields
from laplace_verify.measure.verdict import Verdict
from laplace_verify.principles import check_principle, strategies
from laplace_verify.principles.comparison import COMPARISON
from laplace_verify.principles.motions import mirrored, motions_of, moved
from laplace_verify.solvers import Answer
from laplace_verify.solvers.samples import FAULTS, five_point, p1_element

DRAWN = settings(
    max_examples=25, deadline=None, database=None, derandomize=True, suppress_health_check=list(HealthCheck)
)


@pytest.fixture
def wrong(twins):
    """Return a wrong solver by name, of the twins or of the seeded faults."""
    return lambda name: twins[name] if name in twins else FAULTS[name].adapter


@pytest.mark.slow
@pytest.mark.parametrize(
    ("name", "law", "says"),
    [
        ("clips", "superposition", "2 times the first and -3 times the second"),
        ("cuts off", "superposition", "times the data is"),
        ("flux sign", "comparison", "for larger data"),
        ("drifts", "symmetry", "at the corresponding point of the problem"),
        ("flux for gradient", "conductivity scaling", "with 4 times the conductivity"),
        ("half-cell factor", "flux balance", "add up to"),
        ("screened", "flux balance", "add up to"),
        ("bulges", "reciprocity", "the mean of u n . grad v - v n . grad u"),
    ],
)
def test_a_wrong_solver_breaks_the_law_and_the_code_shows_it(wrong, name, law, says):
    check = check_principle(wrong(name), law)
    assert check.verdict is Verdict.FAIL, check.reason
    assert says in check.reason
    assert check.points
    space = {}
    exec(check.example, space)  # our own text
    assert space["violation"](wrong(name)) == pytest.approx(check.violation, rel=1e-9)  # the same solve again
    assert space["violation"](five_point) < check.tolerance  # the problem itself is sound


@pytest.mark.slow
def test_flux_balance_inside_is_judged_by_gradients(twins):
    bare = replace(five_point, function=lambda problem, n: _without_fluxes(five_point(problem, n)))
    assert check_principle(bare, "flux balance").verdict is Verdict.PASS
    screened = replace(bare, function=lambda p, n: _without_fluxes(twins["screened"](p, n)))
    check = check_principle(screened, "flux balance")
    assert check.verdict is Verdict.FAIL
    assert "mean flux density through the sphere" in check.reason


def test_flux_balance_needs_fluxes_or_gradients(cloud):
    check = check_principle(cloud, "flux balance")
    assert check.verdict is Verdict.NOT_APPLICABLE
    assert "lacks the flux" in check.reason
    first = replace(five_point, order=1.0, function=lambda p, n: _without_fluxes(five_point(p, n)))
    assert check_principle(first, "flux balance").verdict is Verdict.NOT_APPLICABLE


def _without_fluxes(answer):
    return Answer(answer.points, answer.values, cells=answer.cells, h=answer.h)


@pytest.mark.slow
def test_a_declared_law_is_held_to_round_off_on_several_problems():
    def rough(problem, n):  # not linear, by an amount that vanishes like h^2
        answer = five_point(problem, n)
        return Answer(answer.points, answer.values + answer.h**2 * np.abs(answer.values), cells=answer.cells)

    limit = replace(five_point, function=rough)
    assert check_principle(limit, "superposition").verdict is Verdict.PASS
    strict = replace(limit, discrete_laws=frozenset({"superposition"}))
    assert check_principle(strict, "superposition").verdict is Verdict.FAIL
    declared = replace(five_point, discrete_laws=frozenset({"superposition", "comparison", "symmetry"}))
    for law in declared.discrete_laws:
        assert check_principle(declared, law).verdict is Verdict.PASS


def test_comparison_needs_a_condition_that_fixes_the_level():
    only_flux = replace(five_point, conditions=frozenset({"neumann"}))
    check = check_principle(only_flux, "comparison")
    assert check.verdict is Verdict.NOT_APPLICABLE
    assert "fix the level" in check.reason


@DRAWN
@given(st.sampled_from([five_point, p1_element]).flatmap(COMPARISON.problems))
def test_compared_problems_have_data_in_order(posed):
    lower, upper = posed.problem(), posed.beside["upper"].problem()
    for below, above in zip(lower.pieces, upper.pieces, strict=True):
        assert below.kind == above.kind
        points, _, _ = below.sample(200)
        assert np.min(above.data(points) - below.data(points)) >= -1e-9  # rounding of the difference


@DRAWN
@given(
    strategies.posed((1, 2, 3), None, degree=4, waves=False).flatmap(
        lambda posed: st.tuples(st.just(posed), st.sampled_from(motions_of(posed.shape)))
    )
)
def test_a_moved_problem_is_the_picture_of_the_problem(drawn):
    posed, motion = drawn
    image = moved(posed, motion)
    inside = posed.shape.sample(20, seed=3)
    assert image.shape.contains(motion.points(inside)).all()
    assert image.shape.measure == pytest.approx(posed.shape.measure * motion.scale**posed.shape.dim)
    values, pictures = posed.field.value(inside), image.field.value(motion.points(inside))
    assert pictures == pytest.approx(values, rel=1e-12, abs=1e-12 * np.max(np.abs(values)))  # rounding
    before, after = posed.problem(), image.problem()
    for piece in before.pieces:
        points, normals, _ = piece.sample(5)
        image_of = [p for p in after.pieces if p.contains(motion.points(points)).all()]
        assert [p.kind for p in image_of] == [piece.kind]
        turned = normals @ motion.matrix(before.dim).T / motion.scale
        assert image_of[0].normals(motion.points(points)) == pytest.approx(turned, abs=1e-9)  # of the points
        if piece.kind == "neumann":
            data = image_of[0].data(motion.points(points))
            assert data == pytest.approx(piece.data(points) / motion.scale, rel=1e-9, abs=1e-9)


def test_what_has_no_rule_is_not_mirrored():
    with pytest.raises(TypeError, match="no rule to mirror"):
        mirrored(fields.exp_trig(1, "cos"))


@pytest.mark.slow
def test_repeatability_sees_what_is_kept_from_an_earlier_problem():
    kept = {}

    def forgetful(problem, n):  # keeps the answer to the problem it met last but one
        before, kept["last"] = kept.get("last"), five_point(problem, n)
        same = before is not None and len(before.values) == len(kept["last"].values)
        return before if same else kept["last"]

    check = check_principle(replace(five_point, function=forgetful), "repeatability")
    assert check.verdict is Verdict.FAIL
    assert "solved again" in check.reason
    assert "solved before and after" in check.reason


@pytest.mark.slow
def test_repeatability_names_noise_a_broken_law(twins):
    check = check_principle(twins["not repeatable"], "repeatability")
    assert check.verdict is Verdict.FAIL
    space = {}
    exec(check.example, space)  # our own text
    assert space["violation"](twins["not repeatable"]) > 1e-6  # the difference of two draws of noise of 0.01
    assert space["violation"](five_point) == 0.0


@pytest.mark.slow
def test_repeatability_tries_another_first_guess():
    def iterated(problem, n, initial=None):  # stops a thousandth of the way before the solution
        answer = five_point(problem, n)
        guess = np.zeros(len(answer.values)) if initial is None else initial(answer.points)
        return Answer(answer.points, answer.values + 1e-3 * guess, cells=answer.cells, h=answer.h)

    early = replace(five_point, function=iterated)
    check = check_principle(early, "repeatability")
    assert check.verdict is Verdict.FAIL
    assert "with another first guess" in check.reason
    space = {}
    exec(check.example, space)  # our own text
    assert space["violation"](early) == pytest.approx(check.violation, rel=1e-9)  # the same solve again
    converged = replace(five_point, function=lambda problem, n, initial=None: five_point(problem, n))
    assert check_principle(converged, "repeatability").verdict is Verdict.PASS
