"""What the order does not see: error constants, and gradients that stay wrong."""

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.measure import Verdict
from laplace_verify.solvers.samples import cell_centred, five_point, p1_element

PLATE = lv.catalogue["plate-degree-six"]


def scaled(factor):
    """Five-point values whose error is `factor` times as large: the order stays."""

    def solve(problem, n):
        answer = five_point.solve(problem, n)
        exact = PLATE.exact.value(answer.points)
        return lv.Answer(
            answer.points, exact + factor * (answer.values - exact), cells=answer.cells, h=answer.h
        )

    return lv.adapt(solve, name="scaled", kind="finite difference", order=2)


@pytest.mark.parametrize(("factor", "remarked"), [(1.0, False), (5.0, False), (40.0, True)])
def test_a_large_error_constant_is_remarked(factor, remarked):
    found = lv.study(scaled(factor), PLATE)
    assert found.verdict is Verdict.PASS
    assert any("times that of interpolating" in remark for remark in found.remarks) is remarked


def test_interpolation_on_a_uniform_grid_has_the_known_constant():
    # Bilinear interpolation of u = x^2 - y^2 on squares of side h: the error is (x (h - x) - y (h - y)) in a
    # cell, whose mean square is h^4 (1/30 - 1/36) * 2 = h^4/90.
    found = lv.study(five_point, lv.case(lv.Rectangle((0, 0), (1, 1)), {}, lv.fields.polynomial(2, "re")))
    for level in found.levels:
        assert level.interpolation == pytest.approx(level.h**2 / np.sqrt(90), rel=1e-6)


def with_gradient(factor):
    """Linear elements that hand back their gradient times `factor`."""

    def solve(problem, n):
        answer = p1_element.solve(problem, n)
        return lv.Answer(
            evaluate=answer.value_at, gradient=lambda x: factor * answer.gradient_at(x), h=answer.h
        )

    return lv.adapt(solve, name="recovered", kind="other", order={"L2": 2})


@pytest.mark.parametrize(("factor", "remarked"), [(1.0, False), (2.0, True), (-1.0, True)])
def test_a_gradient_of_the_wrong_scale_or_sign_is_remarked(factor, remarked):
    found = lv.study(with_gradient(factor), PLATE, sizes=(6, 12, 24, 48), max_points=4000)
    assert found.orders["L2"].verdict is Verdict.PASS
    assert any("the values converge but H1-semi" in remark for remark in found.remarks) is remarked


def kept_in(kind):
    """Five-point values stored in numbers of a kind."""

    def solve(problem, n):
        answer = five_point.solve(problem, n)
        return lv.Answer(answer.points, answer.values.astype(kind), cells=answer.cells, h=answer.h)

    return lv.adapt(solve, name="stored", kind="finite difference", order=2)


@pytest.mark.parametrize(("kind", "remarked"), [(np.float32, True), (np.float64, False)])
def test_values_of_single_precision_are_remarked_far_above_their_round_off(kind, remarked):
    found = lv.study(kept_in(kind), PLATE)
    assert found.verdict is Verdict.PASS
    assert [sign.kind for sign in found.signs] == ["single-precision values"] * remarked


def test_values_of_cells_are_not_taken_for_values_at_nodes():
    found = lv.study(cell_centred, lv.catalogue["plate-saddle"])
    assert (found.verdict, found.signs) == (Verdict.PASS, [])


def test_exact_values_that_fit_into_single_precision_are_no_sign_of_it():
    halves = lv.case(lv.Rectangle((0, 0), (2, 1)), {}, lv.fields.affine((1, 2)))  # sums of dyadic numbers
    assert not lv.study(five_point, halves).signs
