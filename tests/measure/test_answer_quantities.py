"""Quantities of a study: reported by the solver, or computed from its answer; a wrong scale must fail."""

import math
from dataclasses import replace

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.measure.answer_quantities import computed_quantity
from laplace_verify.problems import (
    added_mass,
    conductance_between,
    energy_of_solution,
    flux_density_at,
    torsion_constant,
)
from laplace_verify.solvers.samples import (
    chebyshev,
    five_point,
    fundamental_solutions,
    p1_element,
)

LINE = lv.case(
    lv.Annulus((0, 0), 0.5, 2.0),
    {},
    fields.log_source((0, 0), -3),
    4.0,
    quantities={
        "capacitance": conductance_between("inner", "outer", exact="8*pi/log(4)"),
        "charge density": flux_density_at((0.5, 0.0), "inner", exact=24),
        "energy": energy_of_solution(exact="72*pi*log(4)"),
    },
)
QUICK = {"sizes": (8, 12, 16, 24), "max_points": 2000}
CORNER = lv.case(
    lv.LShape(1.0), {}, fields.wedge("2/3"), quantities={"charge": lv.flux_through("side-1", exact=-1)}
)


def answering(case, *, factor=1.0, report=True, shrink=2.0, kind="finite element"):
    """Return a solver with an error n^-2 that computes every quantity times a factor, if it reports any."""

    @lv.adapt(name="made", kind=kind, order={"max": 2, "L2": 2, "H1-semi": 1, "quantity": 2}, unbounded=True)
    def solve(_problem, n):
        e = float(n) ** -shrink
        exact = {name: factor * q.value + e for name, q in case.quantities.items()}
        return lv.Answer(
            evaluate=lambda x: case.exact.value(x) + e * np.cos(x[:, 0]),
            gradient=lambda x: case.exact.gradient(x) + e * np.sin(x),
            h=1 / n,
            quantities=exact if report else None,
        )

    return solve


@pytest.mark.parametrize("kind", ["finite element", "finite difference"])
@pytest.mark.parametrize("case", [LINE, CORNER], ids=["line", "corner"])
def test_reported_quantities_pass_and_twice_the_charge_fails(case, kind):
    sound = lv.study(answering(case, kind=kind), case, **QUICK)
    assert sound.verdict is not lv.Verdict.FAIL, str(sound)
    wrong = lv.study(answering(case, factor=2.0, kind=kind), case, **QUICK)
    assert wrong.verdict is lv.Verdict.FAIL
    assert any(reason.startswith("quantity:") and "FAIL" in reason for reason in wrong.reasons)


def test_quantities_are_computed_from_an_answer_that_reports_none():
    found = lv.study(answering(LINE, report=False), LINE, **QUICK)
    for name in LINE.quantities:
        order = found.orders[f"quantity:{name}"]
        assert (order.expected, order.decides) == ("decrease", True)
        assert "computed from the answer" in order.basis
        assert order.verdict is lv.Verdict.PASS
        assert order.observed == pytest.approx(2.0, abs=0.1)


def test_gradients_of_twice_the_size_fail_by_the_quantities():
    @lv.adapt(name="doubled", kind="other", order={"max": 2, "L2": 2})
    def doubled(_problem, n):
        e = float(n) ** -2
        return lv.Answer(
            evaluate=lambda x: LINE.exact.value(x) + e,
            gradient=lambda x: (2 + e) * LINE.exact.gradient(x),
            h=1 / n,
        )

    found = lv.study(doubled, LINE, **QUICK)
    assert found.verdict is lv.Verdict.FAIL
    assert sum("quantity:" in reason and "FAIL" in reason for reason in found.reasons) == 3


ELLIPSE = lv.case(
    lv.Ellipse((0, 0), (1.5, 1.0)),
    {"rim": "neumann"},
    fields.polynomial(2, "im") * "-5/26",
    quantities={"J": torsion_constant(exact="27/26*pi"), "energy": energy_of_solution()},
)
STREAM = lv.case(
    lv.Exterior(lv.Ellipse((0, 0), (1.5, 1.0))),
    {"rim": "neumann"},
    fields.flow_past(("3/2", 1), (1, 0)),
    1.2,
    at_infinity=("flow", (1.0, 0.0), 0.0),
    quantities={"m": added_mass(exact="6/5*pi")},
)
PLATE = lv.case(
    lv.Rectangle((0, 0), (2, 1)),
    {"bottom": "neumann", "top": "neumann"},
    fields.affine((3, 0), 1),
    2.0,
    quantities={"conductance": conductance_between("right", "left", exact=1)},
)


@pytest.mark.parametrize(
    ("solver", "case"),
    [
        (fundamental_solutions, ELLIPSE),
        (fundamental_solutions, STREAM),
        (fundamental_solutions, LINE),
        (five_point, PLATE),
        (p1_element, PLATE),
        (p1_element, CORNER),
        (five_point, CORNER),
        (chebyshev, PLATE),
    ],
    ids=lambda value: getattr(value, "name", ""),
)
def test_sample_solvers_pass_on_the_quantities_computed_from_their_answers(solver, case):
    found = lv.study(solver, case)
    assert found.verdict is lv.Verdict.PASS, str(found)
    assert set(found.orders) & {f"quantity:{name}" for name in case.quantities} or case is CORNER
    for name in case.quantities:
        assert found.levels[-1].relative.get(f"quantity:{name}", 0.0) <= 5e-2


def test_a_torsion_constant_of_half_the_section_fails():
    """The twin: a warping function whose sign is wrong has another constant, at every size."""

    @lv.adapt(name="mirrored", kind="other", order={"max": 2, "L2": 2})
    def mirrored(_problem, n):
        return lv.Answer(evaluate=lambda x: -ELLIPSE.exact.value(x), h=1 / n)

    order = lv.study(mirrored, ELLIPSE, **QUICK).orders["quantity:J"]
    assert order.verdict is lv.Verdict.FAIL
    # J = I_p - int |grad w|^2 with the sign turned: I_p + int |grad w|^2
    section = math.pi * 1.5 * (1.5**2 + 1.0) / 4
    wanted = section + (section - ELLIPSE.quantities["J"].value)
    answer = lv.Answer(evaluate=lambda x: -ELLIPSE.exact.value(x), h=0.1)
    found = computed_quantity(ELLIPSE.quantities["J"], answer, ELLIPSE, None, 0.1)
    assert found == pytest.approx(wanted, rel=1e-12)


def test_nothing_is_computed_where_the_answer_says_nothing():
    points = np.random.default_rng(5).uniform(0.4, 0.6, (50, 2))
    cloud = lv.Answer(points, ELLIPSE.exact.value(points))
    hole = lv.Answer(evaluate=lambda x: np.where(x[:, 0] > 0, np.nan, 1.0))
    flat = lv.Answer(evaluate=ELLIPSE.exact.value)  # no gradient
    for answer in (cloud, hole):
        assert computed_quantity(ELLIPSE.quantities["J"], answer, ELLIPSE, None, 0.1) is None
    assert computed_quantity(ELLIPSE.quantities["energy"], flat, ELLIPSE, None, 0.1) is None
    assert computed_quantity(LINE.quantities["charge density"], flat, LINE, None, 0.1) is None
    assert computed_quantity(LINE.quantities["capacitance"], flat, LINE, None, 0.1) is None


def test_a_reported_flux_makes_the_ratio():
    answer = lv.Answer(evaluate=LINE.exact.value, fluxes={"inner": 24 * math.pi})
    found = computed_quantity(LINE.quantities["capacitance"], answer, LINE, None, 0.1)
    assert found == pytest.approx(8 * math.pi / math.log(4), rel=1e-14)
    charge = replace(LINE.quantities["capacitance"], kind="flux", where="inner")
    assert computed_quantity(charge, answer, LINE, None, 0.1) is None  # it is measured as flux:inner


def test_quantities_of_seepage_are_computed_too():
    # head 2 + x - 3 y on the unit square: uplift on the bottom 5/2; across x = 1/2, upwards, to the right
    # flows -K u_x; at the top water leaves with the gradient 3
    square = lv.Rectangle((0, 0), (1, 1))
    wanted = {
        "uplift": lv.uplift_on("bottom", exact="5/2"),
        "flow": lv.discharge_across((0.5, 0.0), (0.5, 1.0), exact=-4),
        "exit": lv.exit_gradient_at("top", (0.25, 1.0), exact=3),
    }
    case = lv.case(square, {}, fields.affine((1, -3), 2), 4.0, quantities=wanted)
    answer = lv.Answer(evaluate=lambda x: case.exact.value(x) + 7.0, gradient=case.exact.gradient)
    for name, quantity in case.quantities.items():
        found = computed_quantity(quantity, answer, case, None, 0.1, shift=7.0)
        assert found == pytest.approx(quantity.value, rel=1e-12), name
    raised = computed_quantity(case.quantities["uplift"], answer, case, None, 0.1)
    assert raised == pytest.approx(9.5)
