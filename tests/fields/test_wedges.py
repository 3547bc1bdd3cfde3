"""Corner powers: branches, lips, limits at the apex, the conditions they are made for."""

import math
from fractions import Fraction

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError

EPS = np.finfo(np.float64).eps
SLIT = 2 * math.pi


def polar(r, theta):
    return np.column_stack((r * np.cos(theta), r * np.sin(theta)))


@pytest.mark.parametrize("opening", [math.pi / 3, math.pi / 2, math.pi, 3 * math.pi / 2, 1.7 * math.pi])
@pytest.mark.parametrize("part", ["sin", "cos"])
def test_default_cut_serves_sectors_from_angle_zero(opening, part):
    alpha = math.pi / opening
    u = fields.wedge(alpha, part)
    theta = np.linspace(0, opening, 9)
    expected = 0.8**alpha * getattr(np, part)(alpha * theta)
    np.testing.assert_allclose(u.value(polar(0.8, theta)), expected, rtol=0, atol=8 * EPS)


def test_l_shape_power_vanishes_on_both_sides_of_the_re_entrant_corner():
    u = fields.wedge("2/3")  # sides y = 0, x > 0 and x = 0, y < 0; exponent pi/opening = 2/3
    sides = [[1, 0], [1e-12, 0], [0, -1], [0, -1e-9]]
    assert np.max(np.abs(u.value(sides))) <= 2 * EPS
    assert u.value([[-1, 0]])[0] == pytest.approx(math.sin(2 * math.pi / 3), rel=4 * EPS)


def test_wrong_cut_shows_on_the_l_shape():
    # theta in (-pi, pi]: the side x = 0, y < 0 gets theta = -pi/2
    assert abs(fields.wedge("2/3", cut=math.pi).value([[0, -1]])[0]) > 0.5


def test_cos_has_no_flux_through_the_sides():
    u = fields.wedge("2/3", "cos")
    assert np.max(np.abs(u.gradient([[1, 0], [0.25, 0]])[:, 1])) <= 4 * EPS  # normal -y
    assert np.max(np.abs(u.gradient([[0, -1], [0, -0.25]])[:, 0])) <= 8 * EPS  # normal x


def test_change_of_condition_in_a_straight_side():
    # r^(1/2) sin(theta/2) about (0.4, 0): zero for x > 0.4, no flux for x < 0.4
    u = fields.wedge("1/2", "sin", apex=("0.4", 0))
    assert u.value([[0.5, 0], [0.9, 0]]).tolist() == [0, 0]
    assert np.max(np.abs(u.gradient([[0.1, 0], [0.3, 0]])[:, 1])) <= 4 * EPS
    v = fields.wedge("1/2", "cos", apex=("0.4", 0))
    assert np.max(np.abs(v.value([[0.1, 0], [0.3, 0]]))) <= 4 * EPS
    assert np.max(np.abs(v.gradient([[0.5, 0], [0.9, 0]])[:, 1])) <= 4 * EPS


def test_side_picks_the_lip_of_a_slit():
    u = fields.wedge(0.5, "cos", cut=SLIT)
    points = [[4.0, 0.0]] * 3
    assert u.value(points, side=[1, -1, 1]).tolist() == [2, -2, 2]
    np.testing.assert_allclose(u.value([[4, 1e-9], [4, -1e-9]]), [2, -2], rtol=1e-9, atol=0)
    assert u.at((4, 0), 30, side=-1) == -2
    assert u.gradient(points[:2], side=[1, -1])[:, 0].tolist() == [0.25, -0.25]
    # off the cut a side changes nothing
    assert u.value([[-4, 1], [4, -1]], side=1).tolist() == u.value([[-4, 1], [4, -1]]).tolist()


@pytest.mark.parametrize("angle", [0.3, 1.0, 2.5, 4.0, 5.5])
def test_lips_of_a_turned_and_shifted_slit_survive_rounding(angle):
    u = fields.wedge(0.5, "cos", cut=SLIT).rotated(angle).shifted((0.3, -0.7))
    direct = fields.wedge(0.5, "cos", cut=angle, apex=(0.3, -0.7))
    tip = np.array([0.3, -0.7])
    points = tip + np.linspace(0.01, 2, 50)[:, np.newaxis] * [math.cos(angle), math.sin(angle)]
    left, right = u.value(points, side=1), u.value(points, side=-1)
    np.testing.assert_allclose(left, -right, rtol=1e-12, atol=0)
    assert (left > 0).all()
    # theta from the x axis: cos(angle/2 - pi) on the left lip of the unturned one
    r = np.linalg.norm(points - tip, axis=1)
    np.testing.assert_allclose(
        direct.value(points, side=1), np.sqrt(r) * math.cos(angle / 2 - math.pi), rtol=1e-11
    )
    with pytest.raises(FieldError, match=r"two values at point \d+ = "):
        u.value(points)


def test_a_cut_without_side_is_refused():
    u = fields.wedge(0.5, cut=SLIT)
    with pytest.raises(FieldError, match=r"two values at point 1 = \(1\.0, 0\.0\).*side=\+1"):
        u.value([[0, 1], [1, 0]])
    with pytest.raises(FieldError, match=r"two values at point \(1, 0\)"):
        u.at((1, 0))
    with pytest.raises(FieldError, match="two values at point 0"):
        u.gradient([[1, 0]])
    with pytest.raises(FieldError, match="two values"):
        u.value([[1, 0], [2, 0]], side=[1, 0])
    assert u.at((1, "1e-30"), 20) > 0  # off the cut, however little


def test_apex_is_a_limit_for_values_and_refused_for_infinite_gradients():
    assert fields.wedge("2/3").value([[0, 0]]).tolist() == [0]
    assert fields.wedge("2/3").at((0, 0)) == 0
    with pytest.raises(FieldError, match=r"gradient of .* is infinite at point 0"):
        fields.wedge("2/3").gradient([[0, 0]])
    with pytest.raises(FieldError, match="is infinite at point"):
        fields.wedge("2/3").gradient_at((0, 0))
    assert fields.wedge("4/3").gradient([[0, 0]]).tolist() == [[0, 0]]
    with pytest.raises(FieldError, match="infinite at point 0"):
        fields.wedge(-0.5).value([[0, 0]])
    with pytest.raises(FieldError, match="infinite at point 0"):
        fields.wedge(-2).value([[0, 0]])


def test_apex_of_a_moved_wedge_is_no_point_of_its_cut():
    u = fields.wedge("2/3").rotated(0.3).shifted((0.1, 0.7))
    assert abs(u.value([u.singularities[0].point])[0]) < 1e-10


@pytest.mark.parametrize(
    ("alpha", "singular", "cuts"),
    [
        ("2/3", ("power", 2 / 3), 1),
        (3, None, 0),
        ("4/2", None, 0),
        (-1, ("pole", -1), 0),
        (2.5, ("power", 2.5), 1),
    ],
)
def test_singular_points_and_cuts(alpha, singular, cuts):
    u = fields.wedge(alpha, apex=(1, 2))
    assert len(u.cuts) == cuts
    if singular is None:
        assert u.singularities == ()
    else:
        (s,) = u.singularities
        assert (s.kind, s.exponent, s.point) == (singular[0], pytest.approx(singular[1]), (1, 2))


def test_whole_exponents_are_the_harmonic_polynomials():
    points = np.random.default_rng(4).uniform(-1, 1, (9, 2))
    np.testing.assert_allclose(
        fields.wedge(3, "sin").value(points), fields.polynomial(3, "im").value(points), rtol=0, atol=16 * EPS
    )


def test_accuracy_close_to_the_axes():
    u = fields.wedge(Fraction(1, 2))
    points = [[1.0, 1e-300], [1.0, 1e-12], [1e-12, 1e-20]]
    with mpmath.workdps(40):
        for point, value in zip(points, u.value(points), strict=True):
            x, y = map(mpmath.mpf, point)
            assert value == pytest.approx(float(mpmath.im(mpmath.sqrt(mpmath.mpc(x, y)))), rel=4 * EPS)


@pytest.mark.parametrize(
    ("arguments", "reason"),
    [
        ({"alpha": 0}, "alpha must not be 0"),
        ({"alpha": "two"}, "alpha must be a decimal"),
        ({"alpha": 0.5, "part": "re"}, 'part must be "sin" or "cos"'),
        ({"alpha": 0.5, "cut": 20}, "cut is an angle in radians"),
        ({"alpha": 0.5, "apex": (0,)}, "apex must have 2 coordinates"),
    ],
)
def test_bad_parameters(arguments, reason):
    with pytest.raises(FieldError, match=reason):
        fields.wedge(**arguments)
