"""Patches of cut polygons and of what surrounds a disc or ball, against areas and moments by hand."""

import math

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.geometry.cutting import around_chart, convex_parts, crossings, cut_face, triangle_chart
from laplace_verify.geometry.patches import integrate

SQUARE = lv.Rectangle((0, 0), (2, 1))


def test_a_corner_cut_off_a_rectangle_has_the_moments_of_a_triangle() -> None:
    chart = triangle_chart(convex_parts(SQUARE), [(np.array([1.0, 2.0]), 1.0)])  # x + 2 y <= 1
    points, weights = integrate(chart, 4)
    assert weights.sum() == pytest.approx(1 / 4, rel=1e-14)
    assert weights @ points[:, 0] ** 2 == pytest.approx(1 / 24, rel=1e-13)  # int x^2 (1 - x)/2 dx
    assert (points @ [1, 2] <= 1).all()


def test_the_parts_of_a_polygon_with_a_hole_add_up() -> None:
    ring = lv.Polygon([(0, 0), (3, 0), (3, 3), (0, 3)], holes=[[(1, 1), (2, 1), (2, 2), (1, 2)]])
    normal = np.array([3.0, 1.0])
    areas = [
        integrate(triangle_chart(convex_parts(ring), [(s * normal, s * 5.5)]), 0)[1].sum() for s in (1, -1)
    ]
    assert sum(areas) == pytest.approx(8.0, rel=1e-14)
    assert min(areas) > 1


def test_nothing_is_left_beyond_a_line_that_misses_the_shape() -> None:
    assert triangle_chart(convex_parts(SQUARE), [(np.array([1.0, 0.0]), -0.5)]) is None


def test_what_surrounds_a_disc_converges_to_its_area_and_stays_out_of_it() -> None:
    centre = np.array([1.2, 0.4])
    chart = around_chart(SQUARE, centre, 0.3)
    points, weights = integrate(chart, 5, cell=0.1)
    # analytic integrand: Gauss with 7 points on patches of 0.1 leaves round-off
    assert weights.sum() == pytest.approx(2 - 0.09 * math.pi, rel=1e-12)
    assert (np.hypot(*(points - centre).T) > 0.3).all()
    assert SQUARE.contains(points).all()


def test_what_surrounds_a_ball_in_a_box() -> None:
    chart = around_chart(lv.Box((0, 0, 0), (1, 1, 2)), np.array([0.5, 0.5, 0.75]), 0.25)
    _, weights = integrate(chart, 3, cell=0.5)
    assert weights.sum() == pytest.approx(2 - 4 / 3 * math.pi / 64, rel=1e-8)


@pytest.mark.parametrize(
    ("shape", "centre", "radius", "message"),
    [
        (SQUARE, (1.0, 0.5), 0.6, "does not lie inside"),
        (SQUARE, (3.0, 0.5), 0.1, "does not lie inside"),
        (lv.LShape(1), (-0.5, -0.5), 0.1, "cannot be seen whole"),
        (lv.Disc((0, 0), 1), (0, 0), 0.1, "neither a polygon nor a box"),
    ],
)
def test_discs_that_do_not_fit_are_refused(shape, centre, radius, message) -> None:
    with pytest.raises(lv.GeometryError, match=message):
        around_chart(shape, np.array(centre, dtype=float), radius)


def test_a_disc_is_no_polygon() -> None:
    with pytest.raises(lv.GeometryError, match="is no polygon"):
        convex_parts(lv.Disc((0, 0), 1))


def test_crossings_of_a_circle_with_a_line_and_none_where_it_only_touches() -> None:
    rim = lv.Disc((0, 0), 1).pieces["rim"]
    found = crossings(rim, lambda x: x[:, 1] - 0.5)
    assert found == pytest.approx([1 / 12, 5 / 12], abs=1e-13)
    assert crossings(rim, lambda x: x[:, 1] - 1.0) == []


def test_faces_are_cut_along_the_axes_they_span() -> None:
    face = lv.Box((0, 0, 0), (1, 2, 3)).pieces["front"]
    assert [part.measure for part in cut_face(face, 2, [1.0, 5.0])] == [1.0, 2.0]
    assert cut_face(face, 1, [1.0]) == [face]
