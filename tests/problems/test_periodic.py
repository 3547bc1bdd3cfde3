"""Periodic pieces: joined in pairs, without data, no corners; the field must continue across."""

import math

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.problems import case_from_json, case_to_json
from laplace_verify.problems.periodic import joins_of
from laplace_verify.solvers.samples import FAULTS, five_point, p1_element, seven_point

PLATE = lv.Rectangle((0.5, 0), (1.5, 0.6))
SIDES = {"left": "periodic", "right": "periodic"}
WAVE = lv.field("cos(2*pi*x)*cosh(2*pi*y)/20 + sin(2*pi*x)*sinh(2*pi*y)/30 + y", dim=2)
CASE = lv.case(PLATE, {**SIDES, "top": "neumann"}, WAVE, 2.0)
TENSOR = [[2.0, 0.5], [0.5, 1.0]]


def skew_wave():
    """Re exp(i k x + l y) with -K11 k^2 + 2 i k K12 l + K22 l^2 = 0: l = k (sqrt(det K) - i K12)/K22."""
    (_, off), (_, last) = TENSOR
    rate = 2 * math.pi * math.sqrt(TENSOR[0][0] * last - off**2) / last
    return lv.field(f"exp({rate!r}*y)*cos(2*pi*(x - {off / last!r}*y))/20", dim=2)


def test_pieces_know_partner_and_shift():
    left, right, top = (CASE.problem.pieces[name] for name in ("left", "right", "top"))
    assert (left.kind, left.partner, left.shift) == ("periodic", "right", (1.0, 0.0))
    assert (right.kind, right.partner, right.shift) == ("periodic", "left", (-1.0, 0.0))
    assert (top.partner, top.shift) == (None, None)
    points = left.sample(7)[0]
    assert right.contains(points + np.array(left.shift)).all()
    assert not left.has_data
    assert top.has_data


@pytest.mark.parametrize("ask", ["data", "alpha"])
def test_a_periodic_piece_has_no_data_and_says_so(ask):
    with pytest.raises(lv.ProblemError, match=rf"piece 'left' is periodic and has no {ask}: .*piece 'right'"):
        getattr(CASE.problem.pieces["left"], ask)([[0.5, 0.1]])


def test_problems_with_data_may_have_periodic_sides():
    posed = lv.problem(PLATE, {**SIDES, "bottom": lv.dirichlet(1), "top": lv.neumann("cos(2*pi*x)")})
    assert posed.pieces["right"].partner == "left"
    flux = lv.problem(PLATE, {**SIDES, "bottom": lv.neumann(1), "top": lv.neumann(-1)})
    assert flux.constant == ("mean", 0.0)
    with pytest.raises(lv.ProblemError, match="zero net flux"):
        lv.problem(PLATE, {**SIDES, "bottom": lv.neumann(1), "top": lv.neumann(1)})


OTHER = lv.Polygon([(0, 0), (2, 0), (1, 1), (0, 1)])
BAD = {
    "one side only": (PLATE, {"left": "periodic"}, WAVE, {}, r"other periodic pieces \(there is none\)"),
    "no pair": (PLATE, {"left": "periodic", "top": "periodic"}, WAVE, {}, "'left' is periodic, but none"),
    "sloping": (OTHER, {"side-2": "periodic", "side-4": "periodic"}, WAVE, {}, "copy on the opposite side"),
    "curved": (lv.Disc((0, 0), 1), {"rim": "periodic"}, WAVE, {}, "piece 'rim' is periodic, but none"),
    "value": (PLATE, SIDES, lv.fields.affine((1, 0)), {}, "u is 0.5 at .* 'left' and 1.5 at the same place"),
    "flux": (PLATE, SIDES, lv.field("sin(pi*(x - 1/2))*sinh(pi*y)"), {}, "not periodic: n . K grad u is"),
    "axisymmetric": (
        lv.Rectangle((1, 0), (2, 1)), {"bottom": "periodic", "top": "periodic"},
        lv.fields.axisymmetric(lv.fields.affine((0, 0, 0), 1)), {"coordinates": "axisymmetric"},
        "need Cartesian coordinates",
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", BAD)
def test_what_does_not_continue_is_refused(name):
    shape, conditions, field, options, message = BAD[name]
    with pytest.raises(lv.ProblemError, match=message):
        lv.case(shape, conditions, field, **options)


def test_regions_must_continue_too():
    tilted = lv.layers((1, 4), ["1"], {"a": 1.0, "b": 2.0})
    with pytest.raises(
        lv.ProblemError, match="conductivity does not continue from the periodic piece 'left'"
    ):
        lv.problem(
            lv.Rectangle((0, 0), (1, 1)), {**SIDES, "top": lv.dirichlet(0), "bottom": lv.dirichlet(1)}, tilted
        )


def test_data_and_misspelling_are_refused():
    with pytest.raises(lv.ProblemError, match="a periodic condition has no data"):
        lv.problems.Condition(kind="periodic", data=1.0)
    with pytest.raises(lv.ProblemError, match="did you mean 'periodic'"):
        lv.case(PLATE, {"left": "periodical"}, WAVE)


@pytest.mark.parametrize(
    ("shape", "conditions", "field", "exponent"),
    [
        (PLATE, SIDES, WAVE, math.inf),
        (PLATE, {**SIDES, "top": "neumann"}, WAVE, math.inf),
        # a change of condition at the place where the ends of the bottom are joined: r^(1/2)
        (PLATE.split(bottom=[0.5]), {**SIDES, "bottom-1": "neumann"}, WAVE, 0.5),
        # without periodic sides the corners count
        (PLATE, {"top": "neumann"}, WAVE, 1.0),
        # a box: edges of the periodic faces are none, Dirichlet beside Dirichlet at right angles has 2
        (lv.Box((0, 0, 0), (1, 1, 1)), SIDES, lv.fields.affine((0, 1, 2)), 2.0),
        # periodic both ways: no edge is left
        (
            lv.Box((0, 0, 0), (1, 1, 1)),
            {**SIDES, "front": "periodic", "back": "periodic"},
            lv.fields.affine((0, 0, 2)),
            math.inf,
        ),
    ],
    ids=["dirichlet", "mixed", "change at the joint", "twin", "box", "box both ways"],
)
def test_periodic_corners_are_no_corners(shape, conditions, field, exponent):
    assert lv.case(shape, conditions, field).regularity.domain == pytest.approx(exponent)


def test_file_names_the_partner_and_is_checked():
    case = lv.catalogue["plate-periodic-sides"]
    text = case_to_json(case)
    assert b'"partner": "right"' in text
    again = case_from_json(text)
    assert case_to_json(again) == text
    assert again.problem.pieces["left"].shift == (1.0, 0.0)
    with pytest.raises(
        lv.RecordError, match=r"conditions\.left: partner is 'top', in the shape it is 'right'"
    ):
        case_from_json(text.replace(b'"partner": "right"', b'"partner": "top"'))


def test_a_dimensional_twin_stays_periodic():
    twin = CASE.scaled(length=(2, "m"))
    assert twin.problem.pieces["left"].shift == (2.0, 0.0)


@pytest.mark.parametrize(
    ("shape", "conditions", "field", "conductivity"),
    [
        (PLATE, {**SIDES, "top": lv.robin(2.0), "bottom": "neumann"}, WAVE, 2.0),
        (PLATE, {**SIDES, "top": "neumann", "bottom": "neumann"}, WAVE, 2.0),
        (PLATE, {**SIDES, "top": "neumann"}, skew_wave(), TENSOR),
        (
            lv.Rectangle((0, 0), (0.5, 1)),
            {"bottom": "periodic", "top": "periodic", "left": "neumann"},
            lv.field("cos(2*pi*y)*cosh(2*pi*x)/20", dim=2),
            1.0,
        ),
    ],
    ids=["convection", "pure flux", "tensor", "upwards"],
)
def test_five_point_has_its_order_and_the_shifted_seam_has_not(shape, conditions, field, conductivity):
    case = lv.case(shape, conditions, field, conductivity)
    study = lv.study(five_point, case)
    assert study.verdict is lv.Verdict.PASS, str(study)
    assert study.orders["max"].expected == 2.0
    bare = [piece.name for piece in case.problem.pieces if not piece.has_data]
    assert len(bare) == 2
    assert not [norm for norm in study.orders if norm.partition(":")[2] in bare]  # no trace, no flux
    assert lv.study(FAULTS["seam shifted"].adapter, case).verdict is lv.Verdict.FAIL


def test_the_seam_is_one_row_of_unknowns():
    answer = five_point.solve(CASE.problem, 16)
    left, right = (np.isclose(answer.points[:, 0], x) for x in (0.5, 1.5))
    np.testing.assert_array_equal(answer.values[left], answer.values[right])
    assert answer.unknowns == 16 * 16  # 17 columns less one, 17 rows less the bottom


def test_seven_points_are_periodic_both_ways():
    box = lv.Box((0, 0, 0), (1, 1, 0.5))
    field = lv.field("cos(2*pi*x)*sin(2*pi*y)*exp(2*sqrt(2)*pi*(z - 1/2)) + z", dim=3)
    both = {**SIDES, "front": "periodic", "back": "periodic", "top": "neumann"}
    errors = []
    for n in (8, 16):
        answer = seven_point.solve(lv.case(box, both, field).problem, n)
        errors.append(np.abs(answer.values - field.value(answer.points)).max())
    assert math.log2(errors[0] / errors[1]) == pytest.approx(2.0, abs=0.2)


def test_who_does_not_declare_periodic_is_not_asked():
    study = lv.study(p1_element, CASE)
    assert study.verdict is lv.Verdict.NOT_APPLICABLE
    assert "periodic" in study.reasons[0]


def test_joins_name_each_other():
    box = lv.Box((0, 0, 0), (1, 2, 3))
    joins = joins_of(box, ["bottom", "top", "left", "right"])
    assert joins["top"] == ("bottom", (0.0, 0.0, -3.0))
    assert joins["left"] == ("right", (1.0, 0.0, 0.0))
