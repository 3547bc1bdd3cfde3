"""Moments against closed formulas, singular integrands against exact values, cells, orders."""

import math
from fractions import Fraction

import mpmath
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mpmath import mpf

import laplace_verify as lv
from laplace_verify.geometry.patches import boxes, gauss


def radius(points, centre):
    return np.sqrt(((points - np.array(centre)) ** 2).sum(axis=1))


def moment(shape, powers, order):
    points, weights = shape.quadrature(order)
    return weights @ np.prod(points ** np.array(powers), axis=1)


def ball_moment(powers, size):
    """Integral of prod x_i^p_i over a ball in R^d (Folland 2001, Amer. Math. Monthly 108, 446)."""
    if any(p % 2 for p in powers):
        return 0.0
    total = sum(powers) + len(powers)
    gammas = [math.gamma((p + 1) / 2) for p in powers]
    return size**total * 2 * math.prod(gammas) / math.gamma(total / 2) / total


def polygon_moment(vertices, p, q):
    """Integral of x^p y^q, by Green that of x^(p+1) y^q dy / (p+1) over the sides, in fractions."""
    total = Fraction(0)
    corners = [(Fraction(x), Fraction(y)) for x, y in vertices]
    for (x0, y0), (x1, y1) in zip(corners, [*corners[1:], corners[0]], strict=True):
        dx, dy = x1 - x0, y1 - y0
        for i in range(p + 2):
            for j in range(q + 1):
                term = (
                    math.comb(p + 1, i) * x0 ** (p + 1 - i) * dx**i * math.comb(q, j) * y0 ** (q - j) * dy**j
                )
                total += term * dy / (i + j + 1)
    return float(total / (p + 1))


POWERS_2D = [(0, 0), (2, 0), (0, 2), (4, 2), (1, 3), (6, 4), (10, 10)]
POWERS_3D = [(0, 0, 0), (2, 0, 0), (0, 2, 0), (2, 4, 2), (1, 1, 2), (4, 4, 4)]


@pytest.mark.parametrize("powers", POWERS_2D)
def test_moments_of_disc_ellipse_and_annulus(powers):
    order = sum(powers)
    scale = ball_moment((order, 0), 1.75) if order % 2 == 0 else 1.0
    exact = ball_moment(powers, 1.75)
    assert moment(lv.Disc((0, 0), 1.75), powers, order) == pytest.approx(exact, rel=1e-12, abs=1e-13 * scale)
    a, b = 2.0, 0.75
    stretched = ball_moment(powers, 1.0) * a ** (powers[0] + 1) * b ** (powers[1] + 1)
    assert moment(lv.Ellipse((0, 0), (a, b)), powers, order) == pytest.approx(stretched, rel=1e-12, abs=1e-11)
    ring = exact - ball_moment(powers, 0.5)
    assert moment(lv.Annulus((0, 0), 0.5, 1.75), powers, order) == pytest.approx(
        ring, rel=1e-12, abs=1e-13 * scale
    )


def test_moments_of_an_eccentric_annulus():
    # disc less disc; about the hole's centre its moments are those of a centred disc
    shape = lv.Annulus((0.0, 0.0), 0.5, 2.0, inner_centre=(0.75, -0.5))
    points, weights = shape.quadrature(4)
    hole = 0.75**2 * math.pi * 0.25 + ball_moment((2, 0), 0.5)
    assert weights @ points[:, 0] ** 2 == pytest.approx(ball_moment((2, 0), 2.0) - hole, rel=1e-13)
    assert weights @ points.prod(axis=1) == pytest.approx(0.75 * 0.5 * math.pi * 0.25, rel=1e-12)


@pytest.mark.parametrize("powers", POWERS_3D)
def test_moments_of_ball_shell_and_box(powers):
    order = sum(powers)
    exact = ball_moment(powers, 1.25)
    assert moment(lv.Ball((0, 0, 0), 1.25), powers, order) == pytest.approx(exact, rel=1e-12, abs=1e-13)
    shell = exact - ball_moment(powers, 0.5)
    assert moment(lv.SphericalShell((0, 0, 0), 0.5, 1.25), powers, order) == pytest.approx(
        shell, rel=1e-12, abs=1e-13
    )
    brick = math.prod(
        (b ** (p + 1) - a ** (p + 1)) / (p + 1) for p, a, b in zip(powers, (0, 1, -1), (2, 3, 2), strict=True)
    )
    assert moment(lv.Box((0, 1, -1), (2, 3, 2)), powers, order) == pytest.approx(brick, rel=1e-13)


def test_moments_of_a_cylinder_and_a_sector():
    tube = lv.Cylinder(0.75, -0.5, 1.5)
    exact = ball_moment((4, 2), 0.75) * (1.5**4 - 0.5**4) / 4
    assert moment(tube, (4, 2, 3), 9) == pytest.approx(exact, rel=1e-12)
    # int r^3 cos^2 over 0 < angle < w = R^4/4 (w/2 + sin(2 w)/4)
    for opening in (0.3, 2.0, 1.5 * math.pi, 2 * math.pi):
        exact = 1.5**4 / 4 * (opening / 2 + math.sin(2 * opening) / 4)
        assert moment(lv.Sector(1.5, opening), (2, 0), 2) == pytest.approx(exact, rel=1e-13)


@pytest.mark.parametrize("powers", POWERS_2D)
def test_moments_of_polygons(powers):
    outer = [(0.0, 0.0), (3.0, -0.5), (3.5, 2.0), (1.0, 1.25), (0.0, 2.0)]
    hole = [(1.0, 0.25), (1.5, 0.25), (1.25, 0.75)]
    slit = [(0.0, 0.0), (1.0, 0.0), (0.75, 0.5), (1.0, 0.0), (2.0, 0.0), (2.0, 1.0), (0.0, 1.5)]
    order = sum(powers)
    exact = polygon_moment(outer, *powers) - polygon_moment(hole, *powers)
    assert moment(lv.Polygon(outer, [hole]), powers, order) == pytest.approx(exact, rel=1e-12)
    assert moment(lv.Polygon(slit), powers, order) == pytest.approx(polygon_moment(slit, *powers), rel=1e-12)
    corner = polygon_moment(lv.LShape(1.0).vertices, *powers)
    assert moment(lv.LShape(1.0), powers, order) == pytest.approx(corner, rel=1e-12, abs=1e-14)


def test_moments_of_surfaces():
    # int of x_i^2 over the sphere of radius R is 4 pi R^4 / 3; over a flat disc pi R^4 / 4
    points, _, weights = lv.Ball((0, 0, 0), 1.5).pieces["surface"].quadrature(4)
    assert weights @ points**2 == pytest.approx(np.full(3, 4 * math.pi * 1.5**4 / 3), rel=1e-13)
    points, _, weights = lv.Cylinder(1.5, 0, 1).pieces["top"].quadrature(4)
    assert weights @ points[:, 1] ** 2 == pytest.approx(math.pi * 1.5**4 / 4, rel=1e-13)
    points, _, weights = lv.Cylinder(1.5, 0, 1).pieces["side"].quadrature(4)
    assert weights @ (points[:, 1] ** 2 * points[:, 2]) == pytest.approx(math.pi * 1.5**3 / 2, rel=1e-13)


def test_flat_rules_are_exact_to_their_order_and_no_further():
    square = lv.Rectangle((0, 0), (1, 1))
    for order in (1, 3, 5, 9):
        points, weights = square.quadrature(order)
        assert weights @ points[:, 0] ** order == pytest.approx(1 / (order + 1), rel=1e-14)
        assert abs(weights @ points[:, 0] ** (order + 1) * (order + 2) - 1.0) > 1e-7  # the twin
    nodes, weights = gauss(3)
    assert weights @ nodes**5 == pytest.approx(1 / 6, rel=1e-14)


def test_length_of_ellipses():
    # a E(1 - b^2/a^2) 4, from mpmath at 30 digits
    for a, b in [(2.0, 1.0), (1.0, 3.0), (1.0, 0.01)]:
        long, short = max(a, b), min(a, b)
        exact = float(4 * long * mpmath.ellipe(1 - (mpf(short) / long) ** 2))
        rim = lv.Ellipse((1.0, 1.0), (a, b)).pieces["rim"]
        assert rim.measure == pytest.approx(exact, rel=1e-14)
        assert rim.quadrature(0)[2].sum() == pytest.approx(exact, rel=1e-13)


# ---- singular integrands ----


def corner_integral(width, height, power):
    """Integral of r^power over [0, width] x [0, height], in polar coordinates by mpmath."""
    angle, p = mpmath.atan2(height, width), mpf(power) + 2
    low = mpmath.quad(lambda t: (width / mpmath.cos(t)) ** p, [0, angle])
    high = mpmath.quad(lambda t: (height / mpmath.sin(t)) ** p, [angle, mpmath.pi / 2])
    return (low + high) / p


@pytest.mark.parametrize("power", [-0.5, -2 / 3, 0.5, -1.0])
def test_corner_and_side_singularities_in_a_rectangle(power):
    shape = lv.Rectangle((0, 0), (1, 1))
    points, weights = shape.quadrature(6, singular=[(0.0, 0.0)])
    exact = float(corner_integral(1, 1, power))
    assert weights @ radius(points, (0, 0)) ** power == pytest.approx(exact, rel=1e-9)
    # at 0.3 of the bottom side, which no bisection hits
    points, weights = shape.quadrature(6, singular=[(0.3, 0.0)])
    exact = float(corner_integral(mpf("0.3"), 1, power) + corner_integral(mpf("0.7"), 1, power))
    assert weights @ radius(points, (0.3, 0)) ** power == pytest.approx(
        exact, rel=1e-7 if power == -1 else 1e-9
    )


def test_without_grading_a_singular_integral_is_missed():
    # the twin that must fail
    points, weights = lv.Rectangle((0, 0), (1, 1)).quadrature(6)
    assert abs(weights @ radius(points, (0, 0)) ** -0.5 / float(corner_integral(1, 1, -0.5)) - 1.0) > 1e-5


@pytest.mark.parametrize("angle", [0.0, 1.0, 0.7 * math.pi])
def test_singular_point_on_the_rim_of_a_disc(angle):
    # polar coordinates around the rim point: r < 2 cos t, |t| < pi/2
    at = (math.cos(angle), math.sin(angle))
    points, weights = lv.Disc((0, 0), 1).quadrature(6, singular=[at])
    exact = float(2 * mpmath.quad(lambda t: (2 * mpmath.cos(t)) ** 1.5 / 1.5, [0, mpmath.pi / 2]))
    assert weights @ radius(points, at) ** -0.5 == pytest.approx(exact, rel=1e-9)


def test_re_entrant_corner_slit_tip_and_centre():
    # gradients of r^(2/3) in the L-shape and of r^(1/2) in the slit disc, squared: energy integrals
    points, weights = lv.LShape(1.0).quadrature(4, singular=[(0, 0)])
    exact = 3 * float(corner_integral(1, 1, -2 / 3))
    assert weights @ radius(points, (0, 0)) ** (-2 / 3) == pytest.approx(exact, rel=1e-9)
    points, weights = lv.Sector(1.5, 2 * math.pi).quadrature(4, singular=[(0, 0)])
    assert weights @ radius(points, (0, 0)) ** -1.0 == pytest.approx(2 * math.pi * 1.5, rel=1e-9)
    points, weights = lv.Disc((1, 1), 2.0).quadrature(4, singular=[(1, 1)])
    assert weights @ np.log(radius(points, (1, 1))) == pytest.approx(
        4 * math.pi * (math.log(2) - 0.5), rel=1e-9
    )


def test_singular_point_in_a_ball_and_on_its_surface():
    points, weights = lv.Ball((0, 0, 0), 1.0).quadrature(6, singular=[(0, 0, 0)])
    assert weights @ radius(points, (0, 0, 0)) ** -1.0 == pytest.approx(2 * math.pi, rel=1e-8)
    # potential of a uniform ball at its surface: volume / R
    points, weights = lv.Ball((0, 0, 0), 1.0).quadrature(6, singular=[(0, 0, 1)])
    assert weights @ radius(points, (0, 0, 1)) ** -1.0 == pytest.approx(4 / 3 * math.pi, rel=1e-6)
    # and of a uniform sphere: area / R
    points, _, weights = lv.Ball((0, 0, 0), 1.0).pieces["surface"].quadrature(6, singular=[(1, 0, 0)])
    assert weights @ radius(points, (1, 0, 0)) ** -1.0 == pytest.approx(4 * math.pi, rel=1e-6)


@pytest.mark.parametrize(
    ("start", "power", "tolerance"),
    # Away from the origin float64 cannot place points nearer than 1e-16 to the singular point, and r^-1/2
    # feels the square root of that.
    [(0.0, -0.5, 1e-9), (0.0, -1 / 3, 1e-12), (0.3, -0.5, 5e-8), (0.3, -1 / 3, 1e-9), (0.5, 0.5, 1e-12)],
)
def test_singular_flux_along_a_side(start, power, tolerance):
    side = lv.Rectangle((0, 0), (1, 1)).pieces["bottom"]
    points, _, weights = side.quadrature(6, singular=[(start, 0.0)])
    exact = (start ** (power + 1) + (1 - start) ** (power + 1)) / (power + 1)
    assert weights @ radius(points, (start, 0)) ** power == pytest.approx(exact, rel=tolerance)


def test_grading_towards_the_far_end_of_a_side_comes_to_an_end():
    # side-6 of the L-shape arrives at the origin: there parameters near 1 are coarser than coordinates near 0
    points, _, weights = lv.LShape(1.0).pieces["side-6"].quadrature(6, singular=[(0.0, 0.0)])
    assert weights @ np.abs(points[:, 1]) ** (-1 / 3) == pytest.approx(1.5, rel=1e-9)


def test_singular_flux_along_an_arc():
    # chord length 2 sin(s/2): int of its -1/3 power by mpmath, with s = v^3 to remove the singularity
    exact = float(
        2
        * mpmath.quad(
            lambda v: 3 * v**2 * (2 * mpmath.sin(v**3 / 2)) ** (-mpf(1) / 3), [0, mpmath.cbrt(mpmath.pi)]
        )
    )
    at = (math.cos(2.0), math.sin(2.0))
    points, _, weights = lv.Disc((0, 0), 1).pieces["rim"].quadrature(6, singular=[at])
    assert weights @ radius(points, at) ** (-1 / 3) == pytest.approx(exact, rel=1e-9)


def test_no_point_falls_on_the_singular_point(plane_shape):
    corners = np.concatenate(
        [j.points for j in plane_shape.junctions] or [plane_shape.pieces[0].point([0.2])]
    )
    points, _ = plane_shape.quadrature(4, singular=corners)
    rules = [p for p, _, _ in plane_shape.boundary_quadrature(4, singular=corners).values()]
    for at in corners:
        assert all((radius(p, at) > 0.0).all() for p in [points, *rules])


def test_singular_points_elsewhere_change_nothing():
    shape = lv.Rectangle((0, 0), (1, 1))
    points, weights = shape.quadrature(4, singular=[(50.0, 50.0)])
    assert (points == shape.quadrature(4)[0]).all()
    assert (weights == shape.quadrature(4)[1]).all()


# ---- cells ----


def test_cells_are_no_larger_than_asked_and_keep_the_measure(shape):
    cell = shape.extent / 5
    points, weights = shape.quadrature(2, cell=cell)
    assert weights.sum() == pytest.approx(shape.measure, rel=1e-13)
    # every ball of two cells' radius around an inner point holds quadrature points
    for at in shape.sample(5, seed=3):
        assert radius(points, at).min() < cell
    assert len(points) >= shape.measure / cell**shape.dim


def test_cells_of_the_boundary_are_no_larger_than_asked(plane_shape):
    cell = plane_shape.extent / 7
    for name, (points, normals, weights) in plane_shape.boundary_quadrature(1, cell=cell).items():
        piece = plane_shape.pieces[name]
        assert weights.sum() == pytest.approx(piece.measure, rel=1e-13)
        assert len(points) == len(normals) >= piece.measure / cell * 0.99
        for at in piece.point(np.linspace(0.0, 1.0, 20)):
            assert radius(points, at).min() <= cell


@given(
    inner=st.floats(0.05, 0.9),
    place=st.floats(0.0, 0.95),
    angle=st.floats(0.0, 6.3),
    size=st.floats(1e-3, 1e3),
)
def test_any_eccentric_annulus_is_a_disc_less_a_disc(inner, place, angle, size):
    offset = place * (1.0 - inner)
    centre = (size * offset * math.cos(angle), size * offset * math.sin(angle))
    shape = lv.Annulus((0.0, 0.0), size * inner, size, inner_centre=centre)
    points, weights = shape.quadrature(2)
    exact = (
        ball_moment((2, 0), size)
        - math.pi * (size * inner) ** 2 * centre[0] ** 2
        - ball_moment((2, 0), size * inner)
    )
    assert weights.sum() == pytest.approx(shape.measure, rel=1e-12)
    assert weights @ points[:, 0] ** 2 == pytest.approx(exact, rel=1e-11)
    assert (weights > 0.0).all()
    assert shape.contains(points).all()
    assert shape.contains(shape.sample(10, seed=2)).all()


def test_a_pole_just_outside_is_resolved_without_a_cell():
    # log |x - p| is harmonic: its mean over a disc is its value at the centre, however near p is to the rim
    disc = lv.Disc((0, 0), 1.0)
    for gap in (0.05, 1e-3, 1e-6):
        at = (1.0 + gap, 0.0)
        points, weights = disc.quadrature(4, singular=[at])
        assert weights @ np.log(radius(points, at)) == pytest.approx(math.pi * math.log1p(gap), abs=1e-10)
        points, _, weights = disc.pieces["rim"].quadrature(4, singular=[at])
        assert weights @ np.log(radius(points, at)) == pytest.approx(2 * math.pi * math.log1p(gap), abs=1e-10)


def test_cells_resolve_a_kink():
    # |x - 0.3| on [0, 1]: one patch cannot, patches of 1/64 nearly can
    shape = lv.Interval(0.0, 1.0)
    exact = (0.3**2 + 0.7**2) / 2
    coarse, fine = (
        abs(w @ np.abs(p[:, 0] - 0.3) - exact)
        for p, w in (shape.quadrature(3), shape.quadrature(3, cell=1 / 64))
    )
    assert coarse > 1e-3
    assert fine < 1e-4


def test_boxes_make_a_grid():
    lower, upper = boxes([0, 1, 3], [0, 2])
    assert lower.tolist() == [[0, 0], [1, 0]]
    assert upper.tolist() == [[1, 2], [3, 2]]


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        ({"order": -1}, "order must be a whole number from 0 to 100, got -1"),
        ({"order": 2.5}, "order must be a whole number"),
        ({"order": 2, "cell": 0.0}, "cell must be > 0"),
        ({"order": 2, "cell": float("nan")}, "cell must be finite"),
        ({"order": 2, "cell": "fine"}, "cell must be a number, got 'fine'"),
        ({"order": 2, "singular": "origin"}, "singular must be numbers"),
        ({"order": 2, "cell": 1e-6}, "over 2000000 patches; take a larger one"),
        ({"order": 2, "singular": [(1.0, 2.0, 3.0)]}, r"singular must have shape \(n, 2\)"),
        ({"order": 2, "singular": [(1.0, float("inf"))]}, "singular must be finite"),
    ],
)
def test_impossible_requests_are_refused(arguments, message):
    with pytest.raises(lv.GeometryError, match=message):
        lv.Rectangle((0, 0), (1, 1)).quadrature(**arguments)
