"""Pieces one by one: travel, projection by hand, lips of slits, ellipses against other routes."""

import math

import numpy as np
import pytest

import laplace_verify as lv


def test_curves_are_travelled_with_the_region_on_the_left(plane_shape):
    step = 1e-6
    for piece in plane_shape.pieces:
        t = np.linspace(0.1, 0.9, 9)
        ahead, behind = piece.point(t + step), piece.point(t - step)
        direction = (ahead - behind) / np.linalg.norm(ahead - behind, axis=1)[:, None]
        right = np.stack([direction[:, 1], -direction[:, 0]], axis=1)
        assert piece.normals(piece.point(t)) == pytest.approx(right, abs=1e-5)
        assert piece.tangents(t) == pytest.approx(direction, abs=1e-5)


def test_t_is_the_fraction_of_length(plane_shape):
    for piece in plane_shape.pieces:
        points = piece.point(np.linspace(0.0, 1.0, 2001))
        steps = np.linalg.norm(np.diff(points, axis=0), axis=1)
        assert steps.sum() == pytest.approx(piece.measure, rel=1e-5)  # chords, shorter by curvature
        assert steps == pytest.approx(np.full(2000, piece.measure / 2000), rel=1e-4)


def test_ends_are_where_travel_begins_and_ends(plane_shape):
    for piece in plane_shape.pieces:
        if len(piece.ends):
            assert piece.point([0.0, 1.0]) == pytest.approx(piece.ends, abs=1e-15)
        else:
            assert piece.point([0.0]) == pytest.approx(piece.point([1.0]), abs=1e-14)


def test_projection_on_a_side_by_hand():
    side = lv.Rectangle((0, 0), (2, 1)).pieces["top"]
    points = [(0.5, 3.0), (-1.0, 0.0), (5.0, 1.0)]
    assert side.project(points).tolist() == [[0.5, 1.0], [0.0, 1.0], [2.0, 1.0]]
    assert side.normals(points).tolist() == [[0.0, 1.0]] * 3


def test_projection_on_an_arc_stops_at_its_ends():
    arc = lv.Sector(2.0, math.pi / 2).pieces["arc"]
    points = [(3.0, 3.0), (1.0, -5.0), (-5.0, 1.0), (0.5, 0.0)]
    root = math.sqrt(2.0)
    assert arc.project(points) == pytest.approx(np.array([(root, root), (2, 0), (0, 2), (2, 0)]), abs=1e-15)


def test_projection_from_the_centre_lands_on_the_curve():
    for shape in (lv.Disc((1, 2), 3.0), lv.Ellipse((1, 2), (3, 1)), lv.Ball((1, 2, 3), 2.0)):
        centre = [shape.centre]
        piece = shape.pieces[0]
        assert piece.contains(piece.project(centre), tol=1e-14).all()
        assert np.linalg.norm(piece.normals(centre)) == pytest.approx(1.0)
    axis = lv.Cylinder(2, 0, 1).pieces["side"].project([(0.0, 0.0, 0.5)])
    assert np.hypot(axis[0, 0], axis[0, 1]) == 2.0


def test_projection_on_solid_faces_by_hand():
    tube = lv.Cylinder(2.0, 0.0, 1.0)
    points = [(4.0, 0.0, 0.5), (0.0, 1.0, 3.0), (3.0, 4.0, -1.0)]
    assert tube.pieces["side"].project(points).tolist() == [[2, 0, 0.5], [0, 2, 1], [1.2, 1.6, 0]]
    assert tube.pieces["top"].project(points) == pytest.approx(
        np.array([(2, 0, 1), (0, 1, 1), (1.2, 1.6, 1)])
    )
    box = lv.Box((0, 0, 0), (1, 1, 1))
    assert box.pieces["right"].project([(0.5, -2.0, 0.25)]).tolist() == [[1.0, 0.0, 0.25]]


@pytest.mark.parametrize("semi_axes", [(1.0, 1e-3), (1e-3, 1.0), (0.05, 1.0)])
def test_points_are_moved_to_their_own_side_of_a_thin_ellipse(semi_axes):
    """The sides are so close that a coarse search along the rim takes the wrong one."""
    rim = lv.Ellipse((1, 2), semi_axes).pieces["rim"]
    angle = np.random.default_rng(4).random(500) * 2 * np.pi
    on = np.stack([np.cos(angle), np.sin(angle)], axis=1) * semi_axes
    for factor in (0.95, 1.0 + 1e-9, 1.3):
        moved = rim.project([1, 2] + factor * on) - [1, 2]
        assert (moved * on >= 0).all()
        distance = np.hypot(*(moved - factor * on).T)
        assert (distance <= np.hypot(*((factor - 1) * on).T) * (1 + 1e-9) + 1e-15).all()


def test_nearest_point_of_an_ellipse_has_its_normal_towards_the_point():
    # a route of its own: the offset is parallel to the gradient (x/a^2, y/b^2) of the implicit equation
    a, b = 3.0, 0.5
    points = np.random.default_rng(41).uniform(-4, 4, (300, 2))
    foot = lv.Ellipse((0, 0), (a, b)).pieces["rim"].project(points)
    assert (foot[:, 0] / a) ** 2 + (foot[:, 1] / b) ** 2 == pytest.approx(1.0, abs=1e-13)
    offset, gradient = points - foot, foot / np.array([a, b]) ** 2
    cross = offset[:, 0] * gradient[:, 1] - offset[:, 1] * gradient[:, 0]
    size = np.linalg.norm(offset, axis=1) * np.linalg.norm(gradient, axis=1)
    assert np.abs(cross) == pytest.approx(0.0, abs=1e-12 * size.max())


def test_projection_on_half_an_ellipse_may_have_to_pass_over_the_nearer_half():
    half = lv.Ellipse((0, 0), (2, 1)).split(rim=[0.5]).pieces["rim-1"]  # y > 0
    assert half.project([(0.0, -0.01)]) == pytest.approx(np.array([[0.0, 1.0]]), abs=1e-7)
    assert half.project([(5.0, -3.0)]) == pytest.approx(np.array([[2.0, 0.0]]), abs=1e-14)


def test_lips_of_a_slit_share_a_place_and_are_told_apart_by_normals():
    plate = lv.Polygon([(0, 0), (1, 0), (1, 0.5), (1, 0), (2, 0), (2, 1), (0, 1)])
    for shape, first, second in [(plate, "side-2", "side-3"), (lv.Sector(1.0, 2 * math.pi), "start", "end")]:
        one, two = shape.pieces[first], shape.pieces[second]
        points, normals, _ = one.sample(9)
        assert two.contains(points).all()
        assert one.contains(points, normals=normals).all()
        assert not two.contains(points, normals=normals).any()
        assert two.normals(points) == pytest.approx(-normals)
        assert shape.contains(points).all()
        assert shape.distance(points) == pytest.approx(0.0, abs=1e-15)
        assert shape.distance(points + 0.01 * normals) == pytest.approx(0.01)


def test_pieces_contain_only_what_is_near():
    rim = lv.Disc((0, 0), 1).pieces["rim"]
    assert rim.contains([(1 + 1e-6, 0.0)]).tolist() == [False]
    assert rim.contains([(1 + 1e-6, 0.0)], tol=1e-6).tolist() == [True]
    with pytest.raises(lv.GeometryError, match="tol must be >= 0"):
        rim.contains([(1.0, 0.0)], tol=-1)
    with pytest.raises(lv.GeometryError, match="one per point: 1 points, 2 normals"):
        rim.contains([(1.0, 0.0)], normals=[(1.0, 0.0), (0.0, 1.0)])


def test_ends_of_an_interval():
    left, right = lv.Interval(-1.0, 2.0).pieces
    assert (left.dim, left.curved, left.measure) == (1, False, 1.0)
    assert left.point([0.0, 0.5]).tolist() == [[-1.0], [-1.0]]
    assert [a.tolist() for a in left.sample(5)] == [[[-1.0]], [[-1.0]], [1.0]]
    assert [a.tolist() for a in right.quadrature(3)] == [[[2.0]], [[1.0]], [1.0]]
    assert left.contains([-1.0, 2.0]).tolist() == [True, False]
    assert left.normals([0.3, 0.4]).tolist() == [[-1.0], [-1.0]]


def test_what_is_curved(every_shape):
    curved = {p.name: p.curved for p in every_shape["cylinder"].pieces}
    assert curved == {"bottom": False, "top": False, "side": True}
    assert every_shape["ball"].pieces["surface"].curved
    assert every_shape["slit disc"].pieces["arc"].curved
    assert not every_shape["slit disc"].pieces["end"].curved


def test_points_of_a_surface_keep_ratios_of_area(every_shape):
    # points at equal steps of t see equal shares of area: their mean is the centroid of the surface
    for name in ("ball", "cylinder", "box"):
        for piece in every_shape[name].pieces:
            points, _, weights = piece.sample(10_000)
            fine, _, exact = piece.quadrature(4)
            assert weights @ points**2 == pytest.approx(exact @ fine**2, rel=1e-3, abs=1e-3)
            assert piece.point([(0.25, 0.5)]).shape == (1, 3)


@pytest.mark.parametrize(
    ("call", "message"),
    [
        (lambda p: p.point([1.5]), r"t must lie in \[0, 1\]"),
        (lambda p: p.point([float("nan")]), r"t must lie in \[0, 1\]"),
        (lambda p: p.sample(0), "n must be a whole number >= 1, got 0"),
        (lambda p: p.sample(2.5), "n must be a whole number >= 1, got 2.5"),
        (lambda p: p.sample(True), "n must be a whole number >= 1, got True"),
        (lambda p: p.point("a"), r"t must be numbers in \[0, 1\], got 'a'"),
        (lambda p: p.contains([(1, 0)], tol=None), "tol must be a number, got None"),
        (lambda p: p.project([(1e300, 0)]), r"coordinates of at most 1e\+100, but row 0 is \[1e\+300"),
    ],
)
def test_impossible_requests_to_a_piece_are_refused(call, message):
    with pytest.raises(lv.GeometryError, match=message):
        call(lv.Disc((0, 0), 1).pieces["rim"])


def test_faces_cannot_be_cut_in_parts():
    with pytest.raises(lv.GeometryError, match="only curves and straight sides can"):
        lv.Ball((0, 0, 0), 1).pieces["surface"].part(0.0, 0.5, "half")


def test_outlines_and_samples_need_sensible_counts():
    disc = lv.Disc((0, 0), 1)
    for n in (1, 2.5, "4", None):
        with pytest.raises(lv.GeometryError, match="n must be a whole number >= 2, got"):
            disc.outline(n)
    for n in (-1, 2.5, "4"):
        with pytest.raises(lv.GeometryError, match="n must be a whole number >= 0, got"):
            disc.sample(n, seed=0)


@pytest.mark.parametrize("seed", [None, -1, 1.5, "a", True])
def test_samples_need_an_explicit_seed(seed):
    with pytest.raises(lv.GeometryError, match="seed must be a whole number >= 0, got"):
        lv.Disc((0, 0), 1).sample(3, seed)
