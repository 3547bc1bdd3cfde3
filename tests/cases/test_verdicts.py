"""Sample solvers on the catalogue: sound ones pass at default sizes, a faulty one fails where it must."""

import math

import pytest

import laplace_verify as lv
from laplace_verify.solvers.samples import ALL, FAULTS, five_point

DOABLE = [
    pytest.param(solver, id_, id=f"{solver.name.replace(' ', '-')}-{id_}")
    for solver in ALL
    for id_ in lv.catalogue
    if solver.refuses(lv.catalogue[id_].problem) is None
]
FIRST_ORDER = FAULTS["first-order flux"].adapter
NEUMANN = [
    id_
    for id_, case in lv.catalogue.items()
    if FIRST_ORDER.refuses(case.problem) is None
    and "neumann" in case.conditions
    and case.problem.ill_posed is None
]
# Cases with Neumann data on which a first-order closure leaves no trace in the deciding norms.
INVISIBLE = {
    "rod-fixed-and-flux": "u'' = 0",
    "rod-flux-and-convection": "u'' = 0",
    "rod-pure-flux": "u'' = 0",
    "plate-affine": "u_nn = 0",
    "rod-five-layers": "u'' = 0 in every layer",
    "plate-layers-across": "u_nn = 0 in every layer",
    "plate-layers-along": "u_nn = 0 in every layer; what is left comes from the nodes on the joints",
    "plate-insulated-step": "the jump costs as much: order 1 in L2 is all a sound scheme has",
    "tall-plate-step": "the jump costs as much: order 1 in L1 and L2 is all a sound scheme has",
    "l-shape-mixed-corner": "the corner costs more: orders 1/3 and 2/3",
    "plate-condition-change-smooth-data": "the change of condition costs as much: orders 1/2 and 1",
    "plate-hot-end-condition-change": "the change of condition costs as much: orders 1/2 and 1",
    "l-basin-two-levels": "the corner costs more: orders 2/3 and 4/3",
    "plate-condition-change": "the change of condition costs as much: orders 1/2 and 1",
    "dam-on-permeable-layer": "heel and toe cost as much: orders 1/2 and 1",
    "half-of-a-dam": "the toe costs as much: orders 1/2 and 1",
}


@pytest.mark.parametrize(
    "id_",
    ["rod-flux-and-convection", "wall-mixed-conditions", "plate-tensor-oblique", "plate-insulated-step",
     "plate-pure-flux"],
)  # fmt: skip
def test_five_point_passes(id_):
    study = lv.study(five_point, lv.catalogue[id_])
    assert study.verdict is lv.Verdict.PASS, str(study)


@pytest.mark.long
@pytest.mark.parametrize(("solver", "id_"), DOABLE)
def test_sample_solver_passes_at_default_sizes(solver, id_):
    study = lv.study(solver, lv.catalogue[id_])
    allowed = [lv.Verdict.PASS, lv.Verdict.NOT_APPLICABLE]  # a solver may decline what it cannot do
    if solver.kind == "stochastic":
        allowed.append(lv.Verdict.INCONCLUSIVE)  # by chance, on a few cases in a hundred
    assert study.verdict in allowed, f"{study}\n{study.table() if study.orders else ''}"


def test_first_order_flux_fails_near_order_one():
    study = lv.study(FIRST_ORDER, lv.catalogue["plate-flux-top"])
    assert study.verdict is lv.Verdict.FAIL, str(study)
    assert study.orders["max"].observed == pytest.approx(1.0, abs=0.15)  # exactly 1 as h -> 0


@pytest.mark.slow
@pytest.mark.parametrize("id_", NEUMANN)
def test_first_order_flux_is_seen_unless_there_is_a_reason(id_):
    study = lv.study(FIRST_ORDER, lv.catalogue[id_])
    if study.verdict is lv.Verdict.NOT_APPLICABLE:
        pytest.skip(study.reasons[0])
    assert (study.verdict is lv.Verdict.FAIL) == (id_ not in INVISIBLE), str(study)


def test_every_smooth_case_with_a_bending_flux_side_can_see_it():
    """None of the reasons for not seeing the fault is an excuse for a smooth case with u_nn != 0."""
    for id_ in INVISIBLE:
        case = lv.catalogue[id_]
        parts = [case.exact.restricted(region) for region in case.exact.regions] or [case.exact]
        assert math.isfinite(case.regularity.solution) or {part.degree for part in parts} == {1}
    assert set(INVISIBLE) <= set(NEUMANN)
