from __future__ import annotations

import math
import time

import numpy as np
import pytest

import laplace_verify as lv

SMOOTH = lv.fields.affine((1, 2))


def domain(shape, conditions, field=SMOOTH, k=1.0):
    return lv.case(shape, conditions, field, k).regularity.domain


def test_exponents_of_right_angles(square) -> None:
    assert domain(square, {}) == pytest.approx(2.0, rel=1e-14)  # pi/(pi/2)
    assert domain(square, {"top": "neumann"}) == pytest.approx(1.0, rel=1e-14)
    assert domain(square, dict.fromkeys(square.pieces.names, "neumann")) == pytest.approx(2.0, rel=1e-14)


def test_robin_counts_as_flux(square) -> None:
    assert domain(square, {"top": lv.robin(1)}) == pytest.approx(1.0, rel=1e-14)
    half = {"top": lv.robin(1), "right": "neumann"}
    assert domain(square, dict.fromkeys(square.pieces.names, "neumann") | half) == pytest.approx(
        2.0, rel=1e-14
    )


def test_exponents_of_the_re_entrant_corner() -> None:
    shape = lv.LShape(1.0)
    assert domain(shape, {}) == pytest.approx(2 / 3, rel=1e-14)
    assert domain(shape, {"side-1": "neumann"}) == pytest.approx(1 / 3, rel=1e-14)


def test_a_change_of_condition_in_a_straight_side_has_exponent_one_half(square) -> None:
    assert domain(square.split(top=[0.4]), {"top-1": "neumann"}) == pytest.approx(0.5, rel=1e-14)
    # the same cut without change of condition is no corner at all
    assert domain(square.split(top=[0.4]), {}) == pytest.approx(2.0, rel=1e-14)


def test_smooth_shapes_and_lines_have_no_limit() -> None:
    assert domain(lv.Disc((0, 0), 1.0), {}) == math.inf
    assert domain(lv.Disc((0, 0), 1.0).split(rim=[0.5]), {}) == math.inf
    assert domain(lv.Interval(0, 1), {}, lv.fields.affine((1,))) == math.inf


def test_the_tip_of_a_slit_has_exponent_one_half(slit_disc) -> None:
    assert domain(slit_disc, {}) == pytest.approx(0.5, rel=1e-12)
    assert domain(slit_disc, {"end": "neumann"}) == pytest.approx(0.25, rel=1e-12)


def test_edges_of_solids_count() -> None:
    cube = lv.Box((0, 0, 0), (1, 1, 1))
    linear = lv.fields.affine((1, 0, 0))
    assert domain(cube, {}, linear) == pytest.approx(2.0, rel=1e-14)
    assert domain(cube, {"top": "neumann"}, linear) == pytest.approx(1.0, rel=1e-14)
    assert domain(lv.Cylinder(1.0, 0, 2), {"side": "neumann"}, linear) == pytest.approx(1.0, rel=1e-14)


def test_a_tensor_changes_the_angle_that_counts() -> None:
    # K = diag(4, 1): x -> x/2. The L-shape keeps its right angles and their exponents
    diagonal = [[4.0, 0.0], [0.0, 1.0]]
    assert domain(lv.LShape(1.0), {}, k=diagonal) == pytest.approx(2 / 3, rel=1e-12)
    # K = diag(1/4, 1): x -> 2 x
    steep = [[0.25, 0.0], [0.0, 1.0]]
    obtuse = lv.Polygon([(0, 0), (2, 0), (-2, 2)])  # angle at the origin: pi/2 + pi/4 = 3 pi/4
    # becomes (4, 0) and (-4, 2): angle pi - atan(1/2)
    expected = math.pi / (math.pi - math.atan(0.5))
    assert domain(obtuse, {}, k=steep) == pytest.approx(expected, rel=1e-12)
    assert domain(obtuse, {}) == pytest.approx(4 / 3, rel=1e-12)


def test_a_tensor_opens_re_entrant_corners_beyond_pi() -> None:
    # an arrow head; at the origin the sides lead along (-1, 1) and (-1, -1), the interior angle is 3 pi/2;
    # K = diag(4, 1) makes them (-1/2, 1) and (-1/2, -1), with the interior angle 2 (pi - atan 2)
    arrow = lv.Polygon([(0, 0), (-1, -1), (3, 0), (-1, 1)])
    expected = math.pi / (2 * (math.pi - math.atan(2)))
    assert domain(arrow, {}, k=[[4.0, 0.0], [0.0, 1.0]]) == pytest.approx(expected, rel=1e-12)


def test_singular_points_on_the_shape_set_the_solution_exponent() -> None:
    corner = lv.case(lv.LShape(1.0), {}, lv.fields.wedge("2/3") + lv.fields.wedge("4/3")).regularity
    assert corner.solution == pytest.approx(2 / 3, rel=1e-15)
    assert corner.singular_points.tolist() == [[0.0, 0.0]]  # one point, though two terms are singular there
    assert corner.jumps.shape == (0, 2)
    outside = lv.case(lv.Rectangle((0, 1), (1, 2)), {}, lv.fields.wedge("2/3")).regularity
    assert (outside.solution, outside.singular_points.shape) == (math.inf, (0, 2))


def test_jumps_are_listed_and_have_exponent_zero(square, angle) -> None:
    regularity = lv.case(square, {}, angle).regularity
    assert regularity.solution == 0.0
    assert regularity.jumps.tolist() == regularity.singular_points.tolist() == [[0.0, 0.0]]
    with pytest.raises(ValueError, match="read-only"):
        regularity.jumps[0, 0] = 1.0


@pytest.mark.parametrize(
    ("shape", "expected"),
    [
        pytest.param(lv.Rectangle((0, 0), (3, 0.5)), 0.5, id="thin plate"),
        pytest.param(lv.Annulus((0, 0), 0.8, 1.0), 0.2, id="gap of an annulus"),
        pytest.param(lv.Annulus((0, 0), 0.1, 1.0), 0.2, id="small hole"),
        pytest.param(lv.Disc((0, 0), 2.0), 4.0, id="disc"),
        pytest.param(lv.Sector(2.0, math.pi / 2), 2.0, id="sector"),
        pytest.param(lv.LShape(1.5), 1.5, id="l-shape"),
        pytest.param(
            lv.Polygon([(0, 0), (4, 0), (4, 4), (0, 4)], holes=[[(1, 1), (1, 3), (2, 3), (2, 1)]]),
            1.0,
            id="hole one away from a side",
        ),
        pytest.param(lv.Rectangle((0, 0), (1, 1)).split(top=[0.1]), 0.1, id="short part of a side"),
    ],
)
def test_the_scale_is_the_smallest_length_of_the_shape(shape, expected) -> None:
    # gaps are measured between sample points, so a hundredth too much may be found
    assert lv.case(shape, {}, SMOOTH).regularity.scale == pytest.approx(expected, rel=0.01)


def test_the_lips_of_a_slit_and_its_mouth_are_no_gap() -> None:
    slit = lv.Polygon([(0, 0), (2, 0), (2, 2), (0, 2), (0, 1), (1, 1), (0, 1)])
    assert lv.case(slit, {}, SMOOTH).regularity.scale == pytest.approx(1.0, rel=0.01)


def test_scale_in_three_dimensions() -> None:
    linear = lv.fields.affine((1, 0, 0))
    assert lv.case(lv.SphericalShell((0, 0, 0), 0.75, 1.0), {}, linear).regularity.scale == pytest.approx(
        0.25
    )
    assert lv.case(lv.Box((0, 0, 0), (1, 2, 0.3)), {}, linear).regularity.scale == pytest.approx(0.3)


def test_the_scale_sees_sources_outside_and_neighbouring_singular_points(square) -> None:
    assert lv.case(square, {}, lv.fields.log_source((0.5, -0.05))).regularity.scale == pytest.approx(0.05)
    # a change of condition at x = 0.4 and at x = 0.6 on the x axis, cuts pointing down
    two = sum(
        (lv.fields.wedge("1/2", cut=3 * math.pi / 2, apex=(x, 0)) for x in ("0.6",)),
        lv.fields.wedge("1/2", cut=3 * math.pi / 2, apex=("0.4", 0)),
    )
    assert lv.case(square, {}, two).regularity.scale == pytest.approx(0.2, rel=1e-12)


def test_the_solution_exponent_is_reproduced_by_the_field_itself() -> None:
    # an independent route: slope of log |u| along the bisector of the corner
    case = lv.case(lv.LShape(1.0), {}, lv.fields.wedge("2/3"))
    r = np.array([1e-6, 1e-4])
    u = np.abs(case.exact.value(np.stack([-r, r], axis=1) / math.sqrt(2)))
    slope = float(np.diff(np.log(u))[0] / np.diff(np.log(r))[0])
    assert slope == pytest.approx(case.regularity.solution, rel=1e-9)


def test_a_polygon_with_many_sides_is_looked_at_in_no_time() -> None:
    """Its smallest length is that of a side, 2 sin(pi/300); 45 000 pairs of sides one by one take seconds."""
    angles = [2 * math.pi * k / 300 for k in range(300)]
    many = lv.Polygon([(math.cos(a), math.sin(a)) for a in angles])
    start = time.perf_counter()
    scale = lv.case(many, {}, lv.fields.polynomial(2)).regularity.scale
    assert time.perf_counter() - start < 3.0  # 0.3 s on an idle machine
    assert scale == pytest.approx(2 * math.sin(math.pi / 300), rel=1e-9)


def test_a_neck_between_pieces_that_do_not_meet_is_the_smallest_length() -> None:
    square = [(0, 0), (1, 0), (1, 1), (0, 1)]
    holes = [
        [(0.1, 0.1), (0.4, 0.1), (0.4, 0.9), (0.1, 0.9)],
        [(0.42, 0.1), (0.9, 0.1), (0.9, 0.9), (0.42, 0.9)],
    ]
    neck = lv.case(lv.Polygon(square, holes), {}, lv.fields.polynomial(2)).regularity.scale
    assert neck == pytest.approx(0.02, rel=1e-9)
