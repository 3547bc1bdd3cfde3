"""Spheroids, rings and shells between concentric bodies, and what lies outside bodies and planes."""

import json
import math

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.geometry import shape_from_spec, shape_to_spec, within

BOUNDED = {
    "prolate": lv.Spheroid((1, 0, 0.5), (1, 1, 2)),
    "oblate": lv.Spheroid((1, 0, 0.5), (2, 0.7)),
    "ring": lv.EllipticRing((0, 1), (1, 0.5), (2, 1)),
    "ring around a screen": lv.EllipticRing((0, 1), (1, 0), (2, 1)),
    "shell": lv.SpheroidalShell((0, 0, 1), (1, 0.5), (2, 1)),
    "shell around a plate": lv.SpheroidalShell((0, 0, 1), (1, 0), (2, 1)),
    "shell around a pair": lv.PairShell((0, 0, 1), 1, 0.5, 4),
    "shell around a near pair": lv.PairShell((0, 0, 1), 1, 0.01, 2.5),
}
OUTSIDE = {
    "disc": lv.Exterior(lv.Disc((0, 1), 2)),
    "split ellipse": lv.Exterior(lv.Ellipse((0, 1), (2, 1)).split(rim=[0.25])),
    "rectangle": lv.Exterior(lv.Rectangle((0, 0), (2, 1))),
    "screen": lv.Exterior(lv.Screen((-1, 0), (1, 0.5))),
    "sector": lv.Exterior(lv.Sector(1, 2)),
    "two discs": lv.Exterior([lv.Disc((-2, 0), 1), lv.Disc((2, 0), 1.5)]),
    "ball": lv.Exterior(lv.Ball((0, 0, 1), 1)),
    "spheroid": lv.Exterior(lv.Spheroid((0, 0, 0), (1, 2))),
    "plate": lv.Exterior(lv.RoundPlate((0, 0, 1), 2)),
    "box": lv.Exterior(lv.Box((0, 0, 0), (1, 2, 3))),
    "half-plane": lv.HalfSpace(2),
    "half-space": lv.HalfSpace(3),
    "strip": lv.Strip(2, -1, 0.5),
    "layer": lv.Strip(3, 0, 2),
}
WINDOWS = {2: lv.Rectangle((-3, -1), (3, 0.5)), 3: lv.Box((-3, -3, 0), (3, 3, 2))}
HIGH = lv.Rectangle((0, 1), (1, 2))
bounded = pytest.mark.parametrize("shape", BOUNDED.values(), ids=BOUNDED.keys())
outside = pytest.mark.parametrize("shape", OUTSIDE.values(), ids=OUTSIDE.keys())


def enclosed(shape, order=9):
    """Volume by Gauss: integral of x . n / d over the boundary."""
    rules = shape.boundary_quadrature(order).values()
    return sum(float((w * ((x - shape.centre) * n).sum(axis=1)).sum()) for x, n, w in rules) / shape.dim


@bounded
def test_volume_and_boundary_quadrature_give_the_measure(shape):
    _, weights = shape.quadrature(6)
    assert weights.sum() == pytest.approx(shape.measure, rel=1e-14)
    assert enclosed(shape) == pytest.approx(shape.measure, rel=1e-13)


@bounded
def test_samples_are_inside_and_half_of_them_are_above_the_middle(shape):
    points = shape.sample(4000, seed=5)
    assert shape.contains(points).all()
    assert (points[:, -1] > shape.centre[-1]).mean() == pytest.approx(0.5, abs=0.04)  # five sigma


@bounded
def test_points_of_pieces_are_on_them(shape):
    t = np.random.default_rng(3).random((50, 2))
    for piece in shape.pieces:
        points = piece.point(t if shape.dim == 3 else t[:, 0])
        assert piece.contains(points).all()
        assert shape.distance(points).max() <= 1e-14 * shape.extent
        assert np.allclose(np.linalg.norm(piece.normals(points), axis=1), 1.0, rtol=1e-15)


def test_parameters_of_a_spheroid_keep_ratios_of_area():
    surface = lv.Spheroid((0, 0, 0), (1, 3)).pieces["surface"]
    points, _, weights = surface.quadrature(12)
    cap = surface.point([[0.2, 0.0]])[0, 2]  # a fifth of the area is above
    assert weights[points[:, 2] > cap].sum() / surface.measure == pytest.approx(0.2, abs=0.01)


@pytest.mark.parametrize(
    ("axes", "area"),
    [
        # 2 pi a (a + c^2/(a e) artanh e), e^2 = 1 - c^2/a^2 and its prolate sister (Beyer 1987, from memory)
        ((2.0, 1.0), 2 * math.pi * (4 + math.atanh(math.sqrt(0.75)) / math.sqrt(0.75))),
        ((1.0, 2.0), 2 * math.pi * (1 + 2 * math.asin(math.sqrt(0.75)) / math.sqrt(0.75))),
        ((1.5, 1.5), 4 * math.pi * 2.25),
    ],
)
def test_area_of_a_spheroid(axes, area):
    assert lv.Spheroid((0, 0, 0), axes).pieces["surface"].measure == pytest.approx(area, rel=1e-14)


def test_nearest_point_of_a_spheroid_lies_along_the_normal():
    surface = lv.Spheroid((0, 0, 0), (1, 2)).pieces["surface"]
    points = np.random.default_rng(1).normal(size=(40, 3)) * 3
    feet = surface.project(points)
    offset, normal = points - feet, surface.normals(points)
    assert np.abs(np.cross(offset, normal)).max() <= 1e-13


@outside
def test_exteriors_are_unbounded_and_say_what_to_use(shape):
    assert not shape.bounded
    assert shape.measure == math.inf
    assert math.isfinite(shape.extent)
    assert shape.size == shape.extent > 0
    for call in (lambda: shape.sample(3, seed=0), lambda: shape.quadrature(3)):
        with pytest.raises(lv.GeometryError, match="use a window, a bounded shape"):
            call()


@outside
def test_normals_point_out_of_the_fluid(shape):
    for piece in shape.pieces:
        points, normals, _ = within(piece, WINDOWS[shape.dim]).sample(20)
        step = 1e-6 * shape.extent
        assert shape.contains(points - step * normals).all()
        if shape.kind != "exterior" or shape.bodies[0].measure > 0:
            assert not shape.contains(points + step * normals).any()


@outside
def test_unbounded_shapes_survive_json(shape):
    again = shape_from_spec(json.loads(json.dumps(shape_to_spec(shape))))
    assert again == shape
    assert again.pieces.names == shape.pieces.names


def test_openings_are_seen_from_the_fluid():
    def openings(shape):
        return [round(j.opening / math.pi, 12) for j in shape.junctions]

    assert openings(OUTSIDE["rectangle"]) == [1.5] * 4
    assert openings(OUTSIDE["screen"]) == [2.0, 2.0]
    assert openings(OUTSIDE["plate"]) == [2.0]
    assert set(openings(OUTSIDE["box"])) == {1.5}
    assert openings(OUTSIDE["split ellipse"]) == [1.0, 1.0]
    assert openings(lv.Rectangle((0, 0), (2, 1))) == [0.5] * 4  # the twin: from inside


def test_names_of_pieces():
    assert OUTSIDE["two discs"].pieces.names == ("body-1-rim", "body-2-rim")
    assert OUTSIDE["rectangle"].pieces.names == ("left", "right", "bottom", "top")
    assert OUTSIDE["split ellipse"].pieces.names == ("rim-1", "rim-2")
    assert lv.Exterior(lv.Disc((0, 0), 1)).split(rim=[0.5]).pieces.names == ("rim-1", "rim-2")


def test_two_sides_of_a_screen_are_told_apart_by_normals():
    screen = lv.Exterior(lv.Screen((0, 0), (2, 0)))
    up = np.array([[0.0, 1.0]])
    point = np.array([[0.5, 0.0]])
    assert screen.pieces["back"].contains(point, normals=up).all()  # the fluid is below
    assert not screen.pieces["front"].contains(point, normals=up).any()


def test_kinds():
    assert OUTSIDE["disc"].is_a("exterior")
    assert OUTSIDE["disc"].is_a("exterior-ellipse")
    assert not OUTSIDE["disc"].is_a("disc")
    assert not OUTSIDE["two discs"].is_a("exterior-disc")
    assert OUTSIDE["rectangle"].is_a("exterior-polygon")


@pytest.mark.parametrize(
    ("make", "message"),
    [
        (lambda: lv.Exterior(lv.Annulus((0, 0), 1, 2)), "a body must be one of disc, ellipse"),
        (lambda: lv.Exterior("disc"), "a body must be one of|body must be a shape"),
        (lambda: lv.Exterior([]), "body must be a shape or a list of shapes"),
        (lambda: lv.Exterior([lv.Disc((0, 0), 1), lv.Ball((0, 0, 0), 1)]), "same dimension"),
        (lambda: lv.Exterior([lv.Disc((0, 0), 1), lv.Disc((1.5, 0), 1)]), "touch or overlap"),
        (lambda: lv.HalfSpace(1), "dim must be 2 or 3, got 1"),
        (lambda: lv.Strip(2, 1, 1), "z0 must be below z1"),
        (lambda: lv.Screen((0, 0), (0, 0)), "two different ends"),
        (lambda: lv.Screen((0, 0), (1, 0)).sample(3, seed=0), "has no inside"),
        (lambda: lv.RoundPlate((0, 0, 0), -1), "radius must be > 0"),
        (lambda: lv.Spheroid((0, 0, 0), (1, 2, 3)), "round about the z direction"),
        (lambda: lv.Spheroid((0, 0, 0), (1, 0)), "semi_axes must be > 0"),
        (lambda: lv.Spheroid((0, 0, 0), (1, 1e-4)), "differ by less than a factor"),
        (lambda: lv.EllipticRing((0, 0), (1, 2), (2, 2)), "every outer semi-axis must exceed"),
        (lambda: lv.EllipticRing((0, 0), (0, 0), (2, 2)), "not all zero"),
        (lambda: lv.EllipticRing.confocal((0, 0), (1, 2), 2), "longest must be > 2.0"),
        (lambda: lv.EllipticRing.confocal((0, 0), (1, 2), -3), "longest must be > 0"),
        (lambda: lv.SpheroidalShell((0, 0, 0), (0, 1), (2, 2)), "inner equatorial semi-axis"),
        (lambda: lv.PairShell((0, 0, 0), 1, 1, 2.25), "outer must exceed 2 radius"),
        (lambda: lv.HalfSpace(2).pieces["bottom"].sample(5), "is unbounded; take the part of it in a window"),
        (
            lambda: within(lv.HalfSpace(2).pieces["bottom"], HIGH),
            "does not reach piece",
        ),
        (
            lambda: shape_from_spec({"kind": "exterior", "body": {"kind": "exterior", "body": {}}}),
            "must be a bounded shape, got another exterior",
        ),
    ],
)
def test_what_cannot_be_is_refused(make, message):
    with pytest.raises(lv.GeometryError, match=message):
        make()


@pytest.mark.parametrize("inner", [(1.3, 0.5), (0.5, 1.3), (0.7, 0.7), (1.0, 0.0)])
def test_confocal_ellipses_share_their_foci(inner):
    """The sum of the distances from the foci is the same, twice the longer semi-axis, all along the outer."""
    ring = lv.EllipticRing.confocal((0, 1), inner, 2.5)
    assert ring.inner == inner
    c = np.sqrt(abs(inner[0] ** 2 - inner[1] ** 2))
    along = np.array([c, 0.0]) if inner[0] >= inner[1] else np.array([0.0, c])

    def sums(shape):
        points = shape.pieces["outer"].sample(20)[0] - np.array([0.0, 1.0])
        return np.hypot(*(points - along).T) + np.hypot(*(points + along).T)

    assert np.abs(sums(ring) - 5.0).max() <= 1e-14
    if c > 0:  # the twin: another ellipse of the same length
        wide = (2.5, 2.4) if inner[0] >= inner[1] else (2.4, 2.5)
        assert np.abs(sums(lv.EllipticRing((0, 1), inner, wide)) - 5.0).max() > 0.01


def test_check_of_the_volume_can_fail():
    """The twin: normals of the wrong sign on the inner piece do not enclose the measure."""
    ring = BOUNDED["ring"]
    turned = lv.EllipticRing((0, 1), (1, 0.5), (2, 1))
    rules = turned.boundary_quadrature(9)
    total = sum(float((w * ((x - ring.centre) * np.abs(n)).sum(axis=1)).sum()) for x, n, w in rules.values())
    assert total / 2 != pytest.approx(ring.measure, rel=1e-3)
