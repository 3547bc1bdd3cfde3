"""Shifted, turned and enlarged fields."""

import math

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError

EPS = np.finfo(np.float64).eps


def test_motions_move_the_picture():
    u = fields.log_source((1, 0))
    assert u.shifted((2, 3)).singularities[0].point == (3, 3)
    assert u.scaled(4).singularities[0].point == (4, 0)
    assert u.rotated(math.pi / 2).singularities[0].point == (0, 1)
    turned = fields.point_source((1, 0, 0)).rotated(math.pi / 2, axis=(0, 0, 5))
    assert turned.singularities[0].point == pytest.approx((0, 1, 0), abs=1e-16)


def test_rotation_is_counter_clockwise_and_right_handed():
    # u = x turned by 90 degrees is y; about the z axis too; y turned about x is z
    assert fields.affine((1, 0)).rotated(math.pi / 2).value([[5, 2]]).tolist() == [2]
    assert fields.affine((1, 0, 0)).rotated(math.pi / 2, axis=(0, 0, 1)).value([[5, 2, 3]]).tolist() == [2]
    assert fields.affine((0, 1, 0)).rotated(math.pi / 2, axis=(1, 0, 0)).value([[5, 2, 3]]).tolist() == [3]


def test_rotation_about_a_slanted_axis_keeps_the_axis():
    axis = np.array([1, 2, 2.0])
    u = fields.solid(3, 2)
    v = u.rotated(0.7, axis=axis)
    assert v.value([axis])[0] == pytest.approx(u.value([axis])[0], rel=16 * EPS)
    back = v.rotated(-0.7, axis=axis)
    points = np.random.default_rng(1).uniform(-1, 1, (7, 3))
    np.testing.assert_allclose(back.value(points), u.value(points), rtol=0, atol=32 * EPS)


def test_a_quarter_turn_is_exact_in_every_number_of_digits():
    u = fields.affine((1, 0)).rotated(math.pi / 2)
    with mpmath.workdps(60):
        assert abs(u.at((7, "0.1"), 50) - mpmath.mpf(1) / 10) < mpmath.mpf(10) ** -50
    # the twin: a float that is no quarter turn is taken at its binary value
    assert abs(fields.affine((1, 0)).rotated(1.5).at((0, 0), 30)) == 0
    assert fields.affine((1, 0)).rotated(1.5).at((1, 0), 30) != 0


def test_scaled_divides_the_gradient():
    u = fields.polynomial(2).scaled("1/2")
    assert u.value([[0.5, 0.0]]).tolist() == [1]
    assert u.gradient([[0.5, 0.0]]).tolist() == [[4, 0]]


def test_cuts_move_along():
    (cut,) = fields.wedge(0.5, cut=0.0).scaled(2).rotated(math.pi / 2).shifted((1, 1)).cuts
    assert cut.start == (1, 1)
    assert cut.direction == (0, 1)
    assert cut.length == math.inf


def test_motions_of_a_shifted_singular_point_keep_offsets_exact():
    # 1e-12 from the singular point: x - 0.1 with the decimal, not with the float nearest to it
    u = fields.wedge("2/3").shifted(("0.1", 0))
    point = [[0.1 + 1e-12, 1e-13]]
    assert u.value(point)[0] == pytest.approx(float(u.at(point[0], 30)), rel=16 * EPS)


@pytest.mark.parametrize(
    ("make", "reason"),
    [
        (lambda u: u.shifted((1, 2, 3)), "vector must have 2 coordinates"),
        (lambda u: u.shifted(1), "vector must be a tuple of 2 numbers, got 1"),
        (lambda u: u.shifted(None), "vector must be a tuple of 2 numbers, got None"),
        (lambda u: u.inverted(0, 1), "centre must be a tuple of 2 numbers, got 0"),
        (lambda _: fields.solid(1, 0).rotated(1, axis=3), "axis must be a tuple of 3 numbers, got 3"),
        (lambda u: u.scaled(0), "factor must be positive"),
        (lambda u: u.scaled(-1), "factor must be positive"),
        (lambda u: u.rotated("a"), "angle must be a decimal"),
        (lambda u: u.rotated(1, axis=(0, 0, 1)), "axis must be left out in 2-D"),
        (lambda _: fields.solid(1, 0).rotated(1), "axis must be three numbers in 3-D"),
        (lambda _: fields.solid(1, 0).rotated(1, axis=(0, 0, 0)), "axis must not be the zero vector"),
        (lambda _: fields.affine((1,)).rotated(1), "one coordinate cannot be rotated"),
        (lambda _: fields.stretched(3, [[1]]), "a field was expected, got int"),
    ],
)
def test_bad_motions(make, reason):
    with pytest.raises(FieldError, match=reason):
        make(fields.polynomial(2))
