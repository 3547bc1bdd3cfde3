"""Sample solver on boxes with values face by face: what theory promises, and a twin that falls short."""

import pytest

import laplace_verify as lv
from laplace_verify.solvers.samples import seven_point


@pytest.mark.parametrize("id_", ["box-insulated-sides", "box-cooled-sides", "box-metered-top"])
def test_second_order_differences_pass_on_smooth_modes(id_):
    study = lv.study(seven_point, lv.catalogue[id_], sizes=(4, 8, 16, 32))
    assert study.verdict == lv.Verdict.PASS, study.reasons


@pytest.mark.slow
def test_a_jump_along_edges_costs_one_order_in_l2_and_all_in_the_maximum():
    study = lv.study(seven_point, lv.catalogue["box-hot-top"], sizes=(5, 10, 20, 40))
    assert study.verdict == lv.Verdict.PASS, study.reasons
    assert study.orders["L2"].expected == 1.0
    assert study.orders["L2"].observed == pytest.approx(1.0, abs=0.15)
    assert not study.orders["max"].decides
    assert study.orders["max"].observed < 0.5
