"""Solid harmonics against scipy's spherical harmonics and mpmath's Legendre functions."""

import math

import mpmath
import numpy as np
import pytest
import scipy.special

from laplace_verify import fields
from laplace_verify.errors import FieldError

EPS = np.finfo(np.float64).eps


def spherical(points):
    x, y, z = points.T
    return np.linalg.norm(points, axis=1), np.arctan2(np.hypot(x, y), z), np.arctan2(y, x)


@pytest.mark.skipif(not hasattr(scipy.special, "sph_harm_y"), reason="scipy older than 1.15")
@pytest.mark.parametrize("degree", [0, 1, 2, 5, 13])
def test_agrees_with_orthonormal_harmonics_of_scipy(degree):
    # Y_lm = sqrt((2l+1)/(4 pi) (l-m)!/(l+m)!) P_l^m e^{i m phi} with P_l^m including (-1)^m
    points = np.random.default_rng(5).uniform(-1, 1, (11, 3))
    r, polar, azimuth = spherical(points)
    for m in range(-degree, degree + 1):
        order = abs(m)
        y = scipy.special.sph_harm_y(degree, order, polar, azimuth)
        factor = (-1) ** order * math.sqrt(4 * math.pi / (2 * degree + 1) * (2 if m else 1))
        expected = factor * r**degree * (y.imag if m < 0 else y.real)
        np.testing.assert_allclose(
            fields.solid(degree, m).value(points), expected, rtol=0, atol=64 * EPS * np.max(r**degree)
        )


@pytest.mark.parametrize(("degree", "m"), [(3, 2), (8, 5), (20, 20), (60, 30)])
def test_agrees_with_legendre_functions_of_mpmath(degree, m):
    # mpmath.legenp(l, m, c, type=2) includes (-1)^m
    point = ("0.3", "-0.2", "0.6")
    with mpmath.workdps(60):
        x, y, z = (mpmath.mpf(c) for c in point)
        r = mpmath.sqrt(x * x + y * y + z * z)
        norm = mpmath.sqrt(2 * mpmath.factorial(degree - m) / mpmath.factorial(degree + m)) * (-1) ** m
        expected = norm * r**degree * mpmath.legenp(degree, m, z / r, type=2)
        angle = m * mpmath.atan2(y, x)
        for order, wave in ((m, mpmath.cos(angle)), (-m, mpmath.sin(angle))):
            value = fields.solid(degree, order).at(point, 40)
            assert abs(value - expected * wave) <= mpmath.mpf(10) ** -38 * abs(expected)


def test_low_degrees_by_hand():
    points = np.random.default_rng(6).uniform(-1, 1, (7, 3))
    x, y, z = points.T
    root = math.sqrt(3)
    by_hand = {
        (0, 0): 1 + 0 * x, (1, 0): z, (1, 1): x, (1, -1): y, (2, 0): z**2 - (x**2 + y**2) / 2,
        (2, 1): root * x * z, (2, -1): root * y * z, (2, 2): root / 2 * (x**2 - y**2), (2, -2): root * x * y,
    }  # fmt: skip
    for (degree, m), expected in by_hand.items():
        np.testing.assert_allclose(fields.solid(degree, m).value(points), expected, rtol=0, atol=8 * EPS)


@pytest.mark.parametrize("degree", [4, 60])
def test_squares_of_one_degree_add_up_to_a_power_of_the_radius(degree):
    # Addition theorem at coinciding points: sum over m of u^2 = r^(2 l) in Schmidt's normalisation
    points = np.random.default_rng(7).uniform(-0.6, 0.6, (5, 3))
    total = sum(fields.solid(degree, m).value(points) ** 2 for m in range(-degree, degree + 1))
    r = np.linalg.norm(points, axis=1)
    np.testing.assert_allclose(total, r ** (2 * degree), rtol=20 * degree * EPS, atol=0)


@pytest.mark.filterwarnings("error")
def test_degree_60_and_500_stay_finite_on_the_poles_and_at_the_centre():
    points = [[0, 0, 1], [0, 0, -1], [0, 0, 0], [1, 0, 0]]
    for degree, m in ((60, 0), (60, 59), (500, 250)):
        assert np.isfinite(fields.solid(degree, m).value(points)).all()
        assert np.isfinite(fields.solid(degree, m).gradient(points)).all()
    assert fields.solid(60, 0).value(points)[:2] == pytest.approx([1, 1], rel=1e-13)


@pytest.mark.parametrize(("degree", "m"), [(2, 3), (2, -3), (-1, 0), (2.0, 1), (501, 0), (2, True)])
def test_bad_degree_or_order(degree, m):
    with pytest.raises(FieldError, match="must be a whole number"):
        fields.solid(degree, m)
