"""Facts that hold for every shape, from the divergence theorem and from what the words mean."""

import dataclasses
import math
import pickle

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify import geometry as geo


def overlapping(piece, shape):
    """Whether another piece shares this one's place: the two lips of a slit."""
    points, normals, _ = piece.sample(9)
    return any(
        other.contains(points).all() and not other.contains(points, normals=normals).any()
        for other in shape.pieces
        if other.name != piece.name
    )


def test_quadrature_gives_the_measure(shape):
    points, weights = shape.quadrature(3)
    assert weights.sum() == pytest.approx(shape.measure, rel=1e-13)
    assert (weights > 0.0).all()
    assert shape.contains(points).all()
    assert points.flags.c_contiguous
    assert points.dtype == np.float64


def test_boundary_quadrature_gives_the_measure_of_each_piece(shape):
    rules = shape.boundary_quadrature(3)
    assert tuple(rules) == shape.pieces.names
    for name, (points, normals, weights) in rules.items():
        piece = shape.pieces[name]
        assert weights.sum() == pytest.approx(piece.measure, rel=1e-13)
        assert piece.contains(points, tol=1e-13, normals=normals).all()


def test_normals_integrate_to_zero_and_x_dot_n_to_d_times_the_measure(shape):
    # Divergence theorem for constant fields and for the field x.
    rules = shape.boundary_quadrature(4).values()
    total = sum((w[:, None] * n).sum(axis=0) for _, n, w in rules)
    outflow = sum((w * (p * n).sum(axis=1)).sum() for p, n, w in rules)
    surface = sum(w.sum() for _, _, w in rules)
    assert np.abs(total).max() <= 1e-13 * surface
    assert outflow == pytest.approx(shape.dim * shape.measure, rel=1e-12)


def test_divergence_theorem_for_a_polynomial_flux(shape):
    # F = (x^3, y^2 x, ...): div F = 3 x^2 + 2 x y in 2-D; interior and boundary rules must agree.
    def flux(p):
        out = np.zeros_like(p)
        out[:, 0] = p[:, 0] ** 3
        if p.shape[1] > 1:
            out[:, 1] = p[:, 1] ** 2 * p[:, 0]
        return out

    points, weights = shape.quadrature(4)
    divergence = 3.0 * points[:, 0] ** 2 + (2.0 * points[:, 0] * points[:, 1] if shape.dim > 1 else 0.0)
    rules = shape.boundary_quadrature(4).values()
    outflow = sum((w * (flux(p) * n).sum(axis=1)).sum() for p, n, w in rules)
    assert outflow == pytest.approx(weights @ divergence, rel=1e-12)


def test_leaving_out_a_piece_breaks_the_divergence_theorem():
    # the twin that must fail
    rules = geo.Rectangle((0, 0), (2, 1)).boundary_quadrature(2)
    rules.pop("top")
    assert abs(sum((w * (p * n).sum(axis=1)).sum() for p, n, w in rules.values()) - 4.0) > 0.5


def test_normals_have_length_one_and_point_outwards(shape):
    step = 1e-6 * shape.extent
    for piece in shape.pieces:
        points, normals, weights = piece.sample(40)
        assert weights.sum() == pytest.approx(piece.measure, rel=1e-13)
        assert np.sqrt((normals**2).sum(axis=1)) == pytest.approx(1.0, abs=1e-14)
        assert shape.contains(points - step * normals).all()
        if not overlapping(piece, shape):
            assert not shape.contains(points + step * normals).any()


def test_points_of_a_piece_are_on_the_boundary_and_in_the_closed_shape(shape):
    for name, points in shape.outline(17).items():
        assert shape.contains(points).all()
        assert shape.distance(points) == pytest.approx(0.0, abs=1e-14 * max(1.0, np.abs(points).max()))
        assert shape.pieces[name].contains(points).all()


def test_pieces_cover_the_boundary(shape):
    # The nearest boundary point to any point lies on some piece, and moving there really is the distance.
    points = shape.sample(50, seed=11)
    distance = shape.distance(points)
    nearest = np.min([np.sqrt(((points - p.project(points)) ** 2).sum(axis=1)) for p in shape.pieces], axis=0)
    assert distance == pytest.approx(nearest, rel=1e-12)
    lower, upper = shape.bounding_box
    assert (points > lower).all()
    assert (points < upper).all()
    assert (distance > 0.0).all()


def test_projection_is_nearest(shape):
    # no point of a fine outline is nearer
    generator = np.random.default_rng(29)
    lower, upper = shape.bounding_box
    points = lower + (upper - lower) * (1.5 * generator.random((60, shape.dim)) - 0.25)
    for piece in shape.pieces:
        foot = piece.project(points)
        assert piece.contains(foot, tol=1e-12).all()
        assert piece.project(foot) == pytest.approx(foot, abs=1e-12)
        other = piece.outline(900)
        best = np.sqrt(((points[:, None] - other) ** 2).sum(axis=2)).min(axis=1)
        assert (np.sqrt(((points - foot) ** 2).sum(axis=1)) <= best + 1e-12).all()


def test_bounding_box_is_touched_on_every_side(shape):
    lower, upper = shape.bounding_box
    points = np.concatenate(list(shape.outline(2001).values()))
    slack = 1e-5 * shape.extent if shape.dim < 3 else 0.05 * shape.extent  # surfaces get a coarse grid
    assert points.min(axis=0) == pytest.approx(lower, abs=slack)
    assert points.max(axis=0) == pytest.approx(upper, abs=slack)
    assert (points >= lower - 1e-14 * np.abs(lower)).all()
    assert (points <= upper + 1e-14 * np.abs(upper)).all()


def test_samples_are_inside_repeatable_and_differ_between_seeds(shape):
    points = shape.sample(200, seed=17)
    assert points.shape == (200, shape.dim)
    assert shape.contains(points).all()
    assert (points == shape.sample(200, seed=17)).all()
    assert not (points == shape.sample(200, seed=18)).any()
    assert shape.sample(0, seed=17).shape == (0, shape.dim)


def test_samples_are_uniform(shape):
    # means of 1st and 2nd moments over 4000 points within 4.5 standard deviations of their integrals
    sample, (points, weights) = shape.sample(4000, seed=23), shape.quadrature(4)
    weights = weights / weights.sum()
    for power in (1, 2):
        mean = weights @ points**power
        deviation = np.sqrt(weights @ (points**power - mean) ** 2 / 4000)
        assert (np.abs((sample**power).mean(axis=0) - mean) <= 4.5 * deviation).all()


def test_half_of_the_samples_fall_in_half_of_the_shape(plane_shape):
    # a strip of known share: the quadrature cells decide which share that is
    points, weights = plane_shape.quadrature(2, cell=plane_shape.extent / 100)
    middle = (plane_shape.bounding_box[0] + plane_shape.bounding_box[1]) / 2.0
    share = weights[points[:, 1] < middle[1]].sum() / plane_shape.measure
    found = (plane_shape.sample(4000, seed=31)[:, 1] < middle[1]).mean()
    # 4.5 standard deviations of a fraction, and the cells cut by the line
    assert abs(found - share) <= 4.5 * 0.5 / math.sqrt(4000) + 0.01


def test_distance_is_what_one_walks_along_the_normal(shape):
    for piece in shape.pieces:
        points, normals, _ = piece.sample(7)
        inside = points - 1e-5 * normals
        assert shape.distance(inside) == pytest.approx(1e-5, rel=1e-9)


def test_shapes_are_values(shape):
    again = pickle.loads(pickle.dumps(shape))
    assert again == shape
    assert hash(again) == hash(shape)
    assert again.pieces.names == shape.pieces.names
    with pytest.raises(dataclasses.FrozenInstanceError, match="cannot assign"):
        shape.splits = ()


def test_representation_is_the_call_that_makes_the_shape():
    assert repr(lv.Annulus([0, 1], 1, 2)) == "Annulus((0.0, 1.0), 1.0, 2.0, None)"
    assert repr(lv.LShape(1)) == "LShape(1.0)"
    plate = lv.Polygon([(0, 0), (1, 0), (0, 1)]).split(**{"side-1": [0.5]})
    assert repr(plate) == "Polygon(((0.0, 0.0), (1.0, 0.0), (0.0, 1.0)), ()).split(**{'side-1': [0.5]})"


@pytest.mark.parametrize(
    ("kind", "wider"),
    [("rectangle", "polygon"), ("l-shape", "polygon"), ("disc", "ellipse")],
)
def test_special_kinds_belong_to_wider_ones(kind, wider):
    shape = {"rectangle": lv.Rectangle((0, 0), (1, 1)), "l-shape": lv.LShape(1), "disc": lv.Disc((0, 0), 1)}[
        kind
    ]
    assert shape.kind == kind
    assert shape.is_a(kind)
    assert shape.is_a(wider)
    assert not shape.is_a("interval")
    assert not lv.Polygon([(0, 0), (1, 0), (0, 1)]).is_a("rectangle")


def test_rectangles_and_l_shapes_have_vertices_like_polygons():
    for shape in (lv.Rectangle((0, 1), (2, 3)), lv.LShape(2.0)):
        same = lv.Polygon(shape.vertices, shape.holes)
        assert same.measure == shape.measure
        points = np.random.default_rng(5).uniform(-3, 3, (200, 2))
        assert (same.contains(points) == shape.contains(points)).all()
        assert same.distance(points) == pytest.approx(shape.distance(points), rel=1e-14)


@pytest.mark.parametrize(
    ("name", "pieces"),
    [
        ("interval", "left right"),
        ("rectangle", "left right bottom top"),
        ("box", "left right front back bottom top"),
        ("disc", "rim"),
        ("ellipse", "rim"),
        ("annulus", "inner outer"),
        ("slit disc", "start end arc"),
        ("l-shape", "side-1 side-2 side-3 side-4 side-5 side-6"),
        ("triangle", "side-1 side-2 side-3"),
        ("ball", "surface"),
        ("spherical shell", "inner outer"),
        ("cylinder", "bottom top side"),
    ],
)
def test_names_of_pieces(name, pieces, request):
    shapes = request.getfixturevalue("every_shape")
    assert shapes[name].pieces.names == tuple(pieces.split())


def test_box_faces_are_where_their_names_say():
    box = lv.Box((0, 1, 2), (1, 3, 6))
    for name, axis, level, area in [
        ("left", 0, 0, 8), ("right", 0, 1, 8), ("front", 1, 1, 4),
        ("back", 1, 3, 4), ("bottom", 2, 2, 2), ("top", 2, 6, 2),
    ]:  # fmt: skip
        points, normals, _ = box.pieces[name].sample(16)
        assert (points[:, axis] == level).all()
        assert np.abs(normals[:, axis]).tolist() == [1.0] * 16
        assert box.pieces[name].measure == area


def test_pieces_by_name_and_by_position():
    pieces = lv.Rectangle((0, 0), (1, 1)).pieces
    assert pieces["bottom"] is pieces[2]
    assert [piece.name for piece in pieces[:2]] == ["left", "right"]
    with pytest.raises(lv.GeometryError, match=r"no piece is named 'botom'; did you mean 'bottom'"):
        pieces["botom"]


def test_closed_shape_contains_its_boundary_and_tolerance_widens_it():
    disc = lv.Disc((10.0, 0.0), 2.0)
    ring = disc.pieces["rim"].point(np.linspace(0, 1, 1000))
    assert disc.contains(ring).all()
    further = 10.0 + 2.0 * (1.0 + 1e-3)
    assert not disc.contains([(further, 0.0)]).any()
    assert disc.contains([(further, 0.0)], tol=1e-3).all()  # 1e-3 of the extent 4
    with pytest.raises(lv.GeometryError, match="tol must be >= 0"):
        disc.contains(ring, tol=-1.0)
    for tol in (float("nan"), "wide", None):
        with pytest.raises(lv.GeometryError, match=r"tol must be (finite|a number)"):
            disc.contains(ring, tol=tol)


SHAPES = [
    lv.Interval(0, 1),
    lv.Rectangle((0, 0), (1, 1)),
    lv.LShape(1),
    lv.Polygon([(0, 0), (1, 0), (0, 1)]),
    lv.Disc((0, 0), 1),
    lv.Ellipse((0, 0), (2, 1)),
    lv.Annulus((0, 0), 1, 2),
    lv.Sector(1, 2),
    lv.Box((0, 0, 0), (1, 1, 1)),
    lv.Ball((0, 0, 0), 1),
    lv.SphericalShell((0, 0, 0), 1, 2),
    lv.Cylinder(1, 0, 1),
]


@pytest.mark.parametrize("shape", SHAPES, ids=lambda shape: shape.kind)
def test_points_beyond_the_range_of_squares_lie_outside(shape):
    """A diverging solver's points must not end in an overflow warning."""
    far = [[1e300] * shape.dim, [-1.7e308] * shape.dim, [0.1] * shape.dim]
    assert not shape.contains(far)[:2].any()
    assert not shape.pieces[0].contains(far)[:2].any()
    with pytest.raises(lv.GeometryError, match=r"at most 1e\+100, but row 0 is"):
        shape.distance(far)


@pytest.mark.parametrize(
    ("bad", "message"),
    [
        ([(0.0, 0.0, 0.0)], r"shape \(n, 2\)"),
        ([(0.0, float("nan"))], "row 0"),
        ("here", "must be numbers"),
    ],
)
def test_points_of_the_wrong_kind_are_refused(bad, message):
    disc = lv.Disc((0, 0), 1)
    for ask in (disc.contains, disc.distance, disc.pieces["rim"].project, disc.pieces["rim"].normals):
        with pytest.raises(lv.GeometryError, match=message):
            ask(bad)


def test_a_thin_eccentric_annulus_is_sampled_in_proportion_to_its_width():
    """The region between the circles is 1.5e-6 wide at angle 0 and 0.5e-6 at angle pi."""
    ring = lv.Annulus((0, 0), 1 - 1e-6, 1, inner_centre=(-5e-7, 0))
    points = ring.sample(4000, seed=8)
    assert ring.contains(points).all()
    # mean of cos t with density (1 + cos(t)/2)/(2 pi) is 1/4; its standard error is 0.7/sqrt(4000) = 0.011
    assert points[:, 0].mean() == pytest.approx(0.25, abs=0.04)
    assert points[:, 1].mean() == pytest.approx(0.0, abs=0.04)
