"""Problems and cases with a conductivity per region, through checks, data, quantities, files and twins."""

import math

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.problems import (
    case_from_json,
    case_to_json,
    energy_of_solution,
    transmission_exponent,
)

PLATE = lv.Rectangle((0, 0), (1.6, 0.9))
BED = lv.layers((0, 1), ["1/4", "3/5"], {"clay": 0.5, "sand": 2.0, "gravel": 1.25})
ALONG = fields.affine((-1, 0), 2)
PIPE = lv.inclusion(("7/10", "2/5"), "1/4", {"pipe": 4.5, "soil": 0.5})
FAR = fields.affine((1, 0)) - fields.dipole(("7/10", "2/5"), (1, 0)) * "1/20"  # beta a^2 = 4/5 / 16
AROUND = fields.by_region(PIPE, {"pipe": fields.affine(("1/5", 0), "14/25"), "soil": FAR})
QUARTERS = lv.sectors((0.5, 0.25), [(1, 0), (0, 1), (-1, 0), (0, -1)], [5, 1, 5, 1])

SHAPES = [
    (lv.Interval(0, 2), lv.layers((1,), [0.5, 1.25], [1, 2, 3]), [0.5, 0.75, 0.75]),
    (lv.Interval(0, 2), lv.layers((-1,), [-1.25, -0.5], [1, 2, 3]), [0.75, 0.75, 0.5]),
    (PLATE, BED, [0.4, 0.56, 0.48]),
    (PLATE, lv.layers((3, 4), [2.9], [1, 2]), [2.9**2 / 24 - 0.0, 1.44 - 2.9**2 / 24]),
    (lv.LShape(1), lv.layers((1, 0), [0.25], [1, 2]), [2.25, 0.75]),
    (PLATE, PIPE, [math.pi / 16, 1.44 - math.pi / 16]),
    (PLATE, QUARTERS, [1.1 * 0.65, 0.5 * 0.65, 0.125, 1.1 * 0.25]),
    (PLATE, lv.sectors((0.8, 0.45), [(1, 0), (0, 1)], [1, 2]), [0.36, 1.08]),
    (lv.Disc((0, 0), 1), lv.inclusion((0.2, 0), 0.5, [1, 2]), [math.pi / 4, 0.75 * math.pi]),
    (lv.Annulus((0, 0), 0.5, 2), lv.inclusion((0, 0), 1, [1, 2]), [0.75 * math.pi, 3 * math.pi]),
    (lv.Ball((0, 0, 1), 2), lv.inclusion((0, 0, 1), 1, [1, 2]), [4 / 3 * math.pi, 28 / 3 * math.pi]),
    (lv.Box((0, 0, 0), (1, 2, 3)), lv.layers((0, 0, 1), [1], [1, 2]), [2.0, 4.0]),
]
IDS = [f"{shape.kind}-{type(k.partition).__name__.lower()}-{n}" for n, (shape, k, _) in enumerate(SHAPES)]


def given(shape, conductivity):
    return lv.problem(shape, {piece.name: lv.dirichlet(0) for piece in shape.pieces}, conductivity)


@pytest.mark.parametrize(("shape", "k", "measures"), SHAPES, ids=IDS)
def test_regions_tile_the_shape_and_their_patches_stay_inside_them(shape, k, measures) -> None:
    problem = given(shape, k)
    assert [region.name for region in problem.regions] == list(k.names)
    for region, measure in zip(problem.regions, measures, strict=True):
        # by hand; patches around a circle are no polynomials: 1e-9
        assert region.measure == pytest.approx(measure, rel=1e-9)
        points, weights = region.quadrature(5, cell=shape.extent / 3)
        assert region.contains(points).all()
        assert (weights > 0).all()
        assert (problem.conductivity_at(points) == region.conductivity).all()
    points, weights = problem.quadrature(4, cell=shape.extent / 8)
    assert weights.sum() == pytest.approx(shape.measure, rel=1e-7)


@pytest.mark.parametrize(("shape", "k"), [row[:2] for row in SHAPES], ids=IDS)
def test_outlines_of_regions_and_interfaces_lie_in_the_shape(shape, k) -> None:
    problem = given(shape, k)
    for region in problem.regions:
        outline = region.outline(9)
        assert outline
        for points in outline.values():
            assert shape.contains(points, tol=1e-9).all()
            assert k.partition.contains(points, k.names.index(region.name), tol=1e-9).all()
    for interface in problem.interfaces:
        points, normals = interface.sample(6)
        if len(points):
            first, second = (k.names.index(name) for name in interface.between)
            assert (k.partition.locate(points - 1e-4 * normals) == first).all()
            assert (k.partition.locate(points + 1e-4 * normals) == second).all()


def test_a_region_picks_the_side_of_an_interface_and_no_other_point() -> None:
    problem = given(PLATE, BED)
    on = [(0.5, 0.25)]
    assert problem.conductivity_at(on, region="clay").tolist() == [0.5]
    assert problem.conductivity_at(on, region="sand").tolist() == [2.0]
    with pytest.raises(lv.ProblemError, match="does not lie in region 'gravel'"):
        problem.conductivity_at(on, region="gravel")
    with pytest.raises(lv.ProblemError, match="no region is named 'mud'"):
        problem.conductivity_at(on, region="mud")


def test_there_is_no_single_tensor() -> None:
    with pytest.raises(lv.ProblemError, match="differs between the regions clay, sand, gravel"):
        _ = given(PLATE, BED).tensor
    assert given(PLATE, 2).tensor.tolist() == [[2, 0], [0, 2]]
    assert given(PLATE, 2).interfaces == ()


@pytest.mark.parametrize(
    ("call", "message"),
    [
        (lambda: lv.layers((1, 0), [1], [1, -2]), "must be a positive number, got -2"),
        (lambda: lv.layers((1, 0), [1], [1, float("nan")]), "must be a positive number"),
        (lambda: lv.layers((1, 0), [1], [1, [[1, 0], [0, 1]]]), "tensors are taken for homogeneous"),
        (lambda: lv.layers((1, 0), [1], [1, 1e13]), "differ by less than"),
        (lambda: lv.layers((1, 0), [1], [1]), "2 regions need as many conductivities"),
        (lambda: lv.layers((1, 0), [2, 1], [1, 2, 3]), "must rise"),
        (lambda: lv.inclusion((0, 0), [0], [1, 2]), "positive"),
        (lambda: lv.sectors((0, 0), [(1, 0)], [1]), "two or more rays"),
        (lambda: given(PLATE, {"left": 1, "right": 2}), "is made by layers"),
        (lambda: given(PLATE, lv.layers((1,), [1], [1, 2])), "the regions are 1-D"),
        (lambda: given(PLATE, lv.layers((1, 0), [2], [1, 2])), "has no part in"),
        (lambda: given(PLATE, lv.inclusion((0.1, 0.1), [0.2], [1, 2])), "does not lie inside"),
        (lambda: given(lv.Disc((0, 0), 1), lv.inclusion((0.6, 0), [0.5], [1, 2])), "does not lie inside"),
        (lambda: given(lv.Disc((0, 0), 1), lv.layers((1, 0), [0], [1, 2])), "is no polygon"),
        (lambda: given(lv.LShape(1), lv.inclusion((-0.5, -0.5), [0.2], [1, 2])), "cannot be seen whole"),
    ],
)
def test_regions_that_make_no_sense_are_refused(call, message) -> None:
    with pytest.raises(lv.ProblemError, match=message):
        call()


def test_a_case_accepts_the_solution_and_refuses_a_wrong_conductivity() -> None:
    assert lv.case(PLATE, {}, AROUND, PIPE).regularity.interface == "curved"
    wrong = lv.inclusion(("7/10", "2/5"), "1/4", {"pipe": 4.4, "soil": 0.5})
    with pytest.raises(
        lv.ProblemError, match=r"flux K n \. grad u jumps by .* across the interface 'pipe/soil'"
    ):
        lv.case(PLATE, {}, AROUND, wrong)


def test_a_case_refuses_a_jump_of_the_value_a_field_that_solves_nothing_and_other_regions() -> None:
    torn = fields.by_region(PIPE, {"pipe": fields.affine(("1/5", 0), "15/25"), "soil": FAR})
    with pytest.raises(lv.ProblemError, match=r"the value jumps by 0\.04 .*'pipe/soil'"):
        lv.case(PLATE, {}, torn, PIPE)
    bent = fields.by_region(BED, [fields.field("x**2 + 0*y"), fields.affine((1, 0)), fields.affine((1, 0))])
    with pytest.raises(lv.ProblemError, match=r"is no solution: div\(K grad u\)"):
        lv.case(PLATE, {}, bent, BED)
    with pytest.raises(lv.ProblemError, match="has no part in region 'clay'"):
        lv.case(PLATE, {}, AROUND, BED)
    with pytest.raises(lv.ProblemError, match="pieced together from the regions pipe, soil"):
        lv.case(PLATE, {}, AROUND)
    moved = lv.inclusion(("7/10", "2/5"), "3/10", {"pipe": 4.5, "soil": 0.5})
    with pytest.raises(lv.ProblemError, match=r"differ about region|jumps"):
        lv.case(PLATE, {}, AROUND, moved)


def test_a_singular_point_is_taken_only_where_the_regions_meet() -> None:
    k = [fields.checkerboard_ratio("1/2"), 1.0] * 2
    rays = [(1, 0), (0, 1), (-1, 0), (0, -1)]
    names = ("first", "second", "third", "fourth")
    board = lv.sectors((0.5, 0.25), rays, dict(zip(names, k, strict=True)))
    made = lv.case(PLATE, {}, fields.checkerboard("1/2", (0.5, 0.25)), board)
    assert made.regularity.solution == 0.5
    assert made.regularity.domain == pytest.approx(0.5, rel=1e-9)  # from the conductivities alone
    pole = fields.by_region(PIPE, {"pipe": fields.dipole(("7/10", "2/5"), (1, 0)), "soil": FAR})
    with pytest.raises(lv.ProblemError, match=r"value jumps|singular point"):
        lv.case(PLATE, {}, pole, PIPE)


def test_data_of_a_piece_that_an_interface_crosses_are_the_regions_own() -> None:
    left = lv.case(PLATE, {"left": "neumann"}, ALONG, BED).problem.pieces["left"]
    assert left.data([(0, 0.1), (0, 0.5), (0, 0.8)]).tolist() == [0.5, 2.0, 1.25]
    on = [(0, 0.25)]
    assert left.data(on, region="clay").tolist() == [0.5]
    assert left.data(on, region="sand").tolist() == [2.0]
    assert left.data(on).tolist() == [1.25]  # the mean
    assert len(left.parts) == 3
    points, _, weights = left.quadrature(3)
    assert weights @ left.data(points) == pytest.approx(0.25 * 0.5 + 0.35 * 2 + 0.3 * 1.25, rel=1e-14)


def test_quantities_are_integrated_region_by_region() -> None:
    made = lv.case(
        PLATE,
        {},
        ALONG,
        BED,
        quantities={
            "flux": lv.flux_through("left", exact="6/5"),
            "energy": energy_of_solution(exact="48/25"),  # sum of K_i times area
        },
    )
    assert made.quantities["flux"].value == 1.2
    with pytest.raises(lv.ProblemError, match="disagrees"):
        lv.case(PLATE, {}, ALONG, BED, quantities={"flux": lv.flux_through("left", exact="1.3")})


@pytest.mark.parametrize(
    ("field", "k"),
    [(ALONG, BED), (AROUND, PIPE), (fields.affine((0, 0), 1), QUARTERS)],
)
def test_files_keep_regions_byte_for_byte_and_a_twin_scales_them(field, k) -> None:
    made = lv.case(PLATE, {"left": "neumann"}, field, k)
    text = case_to_json(made)
    again = case_from_json(text)
    assert case_to_json(again) == text
    assert again.problem.conductivity == k
    twin = made.scaled(length=(0.2, "m"), value=(50, "K"), conductivity=(3, "W/(m K)"))
    assert [r.conductivity for r in twin.problem.regions] == [3 * c for c in k.conductivities]
    points, _, _ = made.problem.pieces["left"].sample(7)
    np.testing.assert_allclose(  # k U / L; rounding of the two paths
        twin.problem.pieces["left"].data(0.2 * points),
        made.problem.pieces["left"].data(points) * 3 * 50 / 0.2,
        rtol=1e-12,
        atol=1e-12,
    )


def test_a_file_with_broken_regions_is_refused_by_name() -> None:
    text = case_to_json(lv.case(PLATE, {}, ALONG, BED))
    for old, new, message in (
        (b'"sand": 2.0', b'"sand": -2.0', "must be a positive number"),
        (b'"partition": "layers"', b'"partition": "onions"', "unknown kind of partition"),
        (b'"interface": "aligned"', b'"interface": "curved"', "regularity.interface"),
        (b'"values": {', b'"worth": {', "regions and values"),
    ):
        assert old in text
        with pytest.raises(lv.RecordError, match=message):
            case_from_json(text.replace(old, new), "broken.json")


def test_exponents_of_interfaces() -> None:
    quarter = math.pi / 2
    # no contrast: no interface; two half-planes: reflections, exponent 1 (derived here)
    assert transmission_exponent([(1.0, 2.0), (2 * math.pi - 1.0, 2.0)]) == pytest.approx(1.0, rel=1e-8)
    assert transmission_exponent([(math.pi, 2.0), (math.pi, 7.0)]) == pytest.approx(1.0, rel=1e-8)
    # Dirichlet then flux over one material: pi / (2 w)
    assert transmission_exponent([(1.5 * math.pi, 3.0)], (True, False)) == pytest.approx(1 / 3, rel=1e-12)
    # two quarters between Dirichlet sides: K_1 cot + K_2 cot = 0 at pi/2
    assert transmission_exponent([(quarter, 2.0), (quarter, 7.0)], (True, True)) == pytest.approx(1.0)
    # flux, then Dirichlet, over quarters: tan^2(lambda pi/2) = K_2/K_1, K_1 at the flux end (derived here)
    found = transmission_exponent([(quarter, 2.0), (quarter, 7.0)], (False, True))
    assert math.tan(found * quarter) ** 2 == pytest.approx(7.0 / 2.0, rel=1e-9)
