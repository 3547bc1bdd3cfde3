"""The five-point solver across interfaces, by hand in 1-D, by studies in 2-D, and with a fault in it."""

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.solvers.samples import FAULTS, five_point

WALL = lv.layers((1,), [0.3, 0.5], {"brick": 0.75, "felt": 0.05, "plaster": 0.5})
ROD = lv.Interval(0, 0.8)
BED = lv.layers((0, 1), ["2/5"], {"rock": 2.5, "sand": 0.5})
PLATE = lv.Rectangle((-0.3, 0.0), (1.2, 0.9))
EVEN = fields.exp_trig(3, "cos", "cosh", centre=(0, "2/5"))
ODD = fields.exp_trig(3, "cos", "sinh", centre=(0, "2/5"), level="9/10")
WAVE = fields.by_region(BED, {"rock": EVEN + ODD * "1/2", "sand": EVEN + ODD * "5/2"})
SMEARED = FAULTS["arithmetic mean of conductivities"].adapter


def test_resistances_in_series_are_met_exactly_at_every_size() -> None:
    problem = lv.problem(ROD, {"left": lv.dirichlet(0), "right": lv.dirichlet(1)}, WALL)
    resistance = 0.3 / 0.75 + 0.2 / 0.05 + 0.3 / 0.5  # common practice, no single source
    for n in (5, 8, 21):
        answer = five_point(problem, n)
        assert answer.fluxes["right"] == pytest.approx(1 / resistance, rel=1e-12)
        assert answer.value_at(np.array([[0.3]]))[0] == pytest.approx(0.4 / resistance, rel=1e-12)


def test_smeared_conductivities_miss_the_flux_through_layers_in_series() -> None:
    problem = lv.problem(ROD, {"left": lv.dirichlet(0), "right": lv.dirichlet(1)}, WALL)
    errors = [abs(SMEARED(problem, n).fluxes["right"] * 5.0 - 1) for n in (64, 128, 256)]
    assert errors[0] / errors[2] == pytest.approx(4, rel=0.1)  # first order
    assert errors[2] > 1e-3


@pytest.mark.parametrize("kind", ["dirichlet", "neumann", lv.robin(0.7)])
def test_flux_along_layers_is_exact_whatever_holds_where_the_interfaces_end(kind) -> None:
    bed = lv.layers((0, 1), ["1/4", "3/5"], [0.5, 2.0, 1.25])
    plate = lv.Rectangle((0, 0), (1.6, 0.9))
    made = lv.case(
        plate, {"left": kind, "top": "neumann", "bottom": "neumann"}, fields.affine((-1, 0), 2), bed
    )
    answer = five_point(made.problem, 7)  # layers of 2, 3 and 2 cells: steps differ next to an interface
    error = answer.values - made.exact.value(answer.points)
    assert np.abs(error).max() < 1e-12
    assert answer.fluxes["left"] == pytest.approx(1.2, rel=1e-11)


def test_second_order_with_an_interface_on_grid_lines_and_first_with_the_fault() -> None:
    made = lv.case(PLATE, {"left": "neumann", "bottom": lv.robin(1.5)}, WAVE, BED)
    sound, broken = (lv.study(solver, made, sizes=(8, 16, 32, 64)) for solver in (five_point, SMEARED))
    assert sound.verdict is lv.Verdict.PASS
    assert 1.9 < sound.orders["max"].observed < 2.1
    assert broken.verdict is lv.Verdict.FAIL
    assert broken.orders["max"].observed < 1.2
    assert "follow" in sound.orders["max"].note or sound.orders["max"].decides


def test_the_fault_is_invisible_without_an_interface() -> None:
    made = lv.case(PLATE, {}, fields.exp_trig(3), 2.0)
    a, b = five_point(made.problem, 8), SMEARED(made.problem, 8)
    assert (a.values == b.values).all()


def test_interfaces_off_the_axes_are_declined_and_solvers_without_regions_do_not_apply() -> None:
    joint = lv.layers((3, 4), ["29/10"], [3.0, 0.75])
    made = lv.case(lv.Rectangle((0, 0), (1.6, 0.9)), {}, fields.affine((0, 0), 1), joint)
    found = lv.study(five_point, made)
    assert found.verdict is lv.Verdict.NOT_APPLICABLE
    assert "follows no axis" in found.reasons[0]

    @lv.adapt(kind="finite difference", order=2)
    def plain(problem, n):
        return five_point(problem, n)

    found = lv.study(plain, made)
    assert found.verdict is lv.Verdict.NOT_APPLICABLE
    assert "regions" in found.reasons[0]
