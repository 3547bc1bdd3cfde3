"""Sizes added while a verdict is open, and iterations that stop early."""

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.errors import AdapterError
from laplace_verify.measure.levels import predicted_seconds
from laplace_verify.measure.results import Level

CASE = lv.case(lv.Rectangle((0, 0), (2, 1)), {}, lv.fields.affine((1, 0)))


def falling(error_of, **declared):
    """A solver with a given relative error at every size."""

    def solve(_, n):
        return lv.Answer(evaluate=lambda x: x[:, 0] * (1 + error_of(n)), h=1 / n)

    return lv.adapt(solve, name="falling", kind="finite difference", order=2, **declared)


def rough(n):
    """Order 2 with a scatter that leaves four levels undecided: every other size is too good."""
    return n**-2.0 * (0.3 if n in (16, 128) else 1.0)


def test_without_a_budget_only_default_sizes_are_added_to():
    found = lv.study(falling(rough), CASE, sizes=(8, 16, 32, 64))
    assert found.sizes == [8, 16, 32, 64]
    assert found.journal == []


def test_a_budget_adds_sizes_to_those_asked_for_and_keeps_a_journal():
    found = lv.study(falling(rough), CASE, sizes=(8, 16, 32, 64), budget=60.0)
    assert len(found.sizes) > 4
    assert found.journal[0].startswith("after sizes 8, 16, 32, 64 open in max")
    assert "s left: 128 added" in found.journal[0]


def test_a_budget_of_nothing_adds_nothing():
    assert lv.study(falling(rough), CASE, sizes=(8, 16, 32, 64), budget=0.0).sizes == [8, 16, 32, 64]


@pytest.mark.parametrize("budget", [-1.0, float("nan"), float("inf"), "60", True])
def test_a_budget_that_is_no_time_is_refused(budget):
    with pytest.raises(AdapterError, match="budget must be a number of seconds"):
        lv.study(falling(rough), CASE, budget=budget)


def test_time_is_predicted_like_sparse_elimination_in_the_plane():
    last = Level(size=64, h=1 / 64, unknowns=4096, seconds=0.5, errors={}, relative={})
    assert predicted_seconds(last, 128, 2) == pytest.approx(4.0)  # 4 times the unknowns to the power 3/2


def iterating(reached):
    """A second-order solver whose iteration leaves `reached(tolerance)` of the solution."""

    def solve(_, n, tolerance=1e-6):
        error = 0.1 * n**-2.0 + reached(tolerance)
        return lv.Answer(evaluate=lambda x: x[:, 0] * (1 + error), h=1 / n)

    return lv.adapt(solve, name="iterating", kind="finite difference", order=2)


def test_an_iteration_that_stops_early_is_remarked():
    early = lv.study(iterating(lambda tolerance: 20 * tolerance), CASE)
    assert any("the iteration stops early: a tolerance of 1.0e-08" in remark for remark in early.remarks)
    sound = lv.study(iterating(lambda tolerance: 0.1 * tolerance), CASE)
    assert not any("iteration" in remark for remark in sound.remarks)


def test_a_solver_that_breaks_with_a_tighter_tolerance_keeps_its_verdict():
    def solve(_, n, tolerance=1e-6):
        if tolerance < 1e-7:
            raise ArithmeticError("no convergence in 100 iterations")
        return lv.Answer(evaluate=lambda x: x[:, 0] * (1 + n**-2.0), h=1 / n)

    found = lv.study(lv.adapt(solve, name="stuck", kind="finite difference", order=2), CASE)
    assert found.verdict is lv.Verdict.PASS
    assert any("ArithmeticError: no convergence" in remark for remark in found.remarks)
    assert np.isfinite(found.levels[-1].errors["L2"])
