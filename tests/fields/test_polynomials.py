"""Harmonic polynomials of the plane."""

import math

import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError
from laplace_verify.fields.polynomials import complex_power

EPS = np.finfo(np.float64).eps


@pytest.mark.parametrize(
    ("degree", "part", "expected"),
    [
        # Binomial theorem, by hand
        (0, "re", lambda x, y: 1 + 0 * x * y),
        (0, "im", lambda x, y: 0 * x * y),
        (1, "im", lambda x, y: y + 0 * x),
        (2, "re", lambda x, y: x**2 - y**2),
        (2, "im", lambda x, y: 2 * x * y),
        (3, "re", lambda x, y: x**3 - 3 * x * y**2),
        (4, "im", lambda x, y: 4 * x**3 * y - 4 * x * y**3),
    ],
)
def test_low_degrees_by_hand(degree, part, expected):
    points = np.random.default_rng(2).uniform(-1, 1, (7, 2))
    values = fields.polynomial(degree, part).value(points)
    np.testing.assert_allclose(values, expected(*points.T), rtol=0, atol=16 * EPS)


@pytest.mark.parametrize("degree", [60, 200])
def test_high_degrees_on_the_unit_circle(degree):
    # de Moivre: Re (cos t + i sin t)^n = cos(n t); rounding of the point moves it by up to n eps
    t = np.random.default_rng(3).uniform(0, 2 * math.pi, 9)
    points = np.column_stack((np.cos(t), np.sin(t)))
    np.testing.assert_allclose(
        fields.polynomial(degree).value(points), np.cos(degree * t), rtol=0, atol=3 * degree * EPS
    )
    slopes = np.hypot(*fields.polynomial(degree, "im").gradient(points).T)
    np.testing.assert_allclose(slopes, degree, rtol=3 * degree * EPS, atol=0)


def test_a_wrong_degree_shows():
    t = np.linspace(0.1, 3, 9)
    points = np.column_stack((np.cos(t), np.sin(t)))
    assert np.max(np.abs(fields.polynomial(60).value(points) - np.cos(59 * t))) > 0.1


@pytest.mark.filterwarnings("error")
@pytest.mark.parametrize("degree", [60, 200])
def test_tiny_arguments_underflow_quietly(degree):
    points = [[1e-12, 0], [0, 0], [1e-300, 1e-300]]
    assert fields.polynomial(degree).value(points).tolist() == [1e-12**degree, 0, 0]
    assert np.isfinite(fields.polynomial(degree).gradient(points)).all()


def test_centre_and_scale():
    u = fields.polynomial(2, centre=(1, -1), scale=2)
    assert u.value([[3, -1], [1, 1], [1, -1]]).tolist() == [1, -1, 0]
    assert u.gradient([[3, -1]]).tolist() == [[1, 0]]


def test_complex_power_agrees_with_python():
    for n in range(12):
        expected = (0.5 + 0.75j) ** n
        re, im = complex_power(0.5, 0.75, n)
        assert abs(complex(re, im) - expected) <= 8 * EPS


@pytest.mark.parametrize(
    ("arguments", "reason"),
    [
        ({"degree": -1}, "degree must be a whole number"),
        ({"degree": 2.0}, "degree must be a whole number"),
        ({"degree": 10**9}, "degree must be a whole number"),
        ({"degree": 2, "part": "real"}, 'part must be "re" or "im"'),
        ({"degree": 2, "scale": 0}, "scale must be positive"),
        ({"degree": 2, "centre": (0, 0, 0)}, "centre must have 2 coordinates"),
    ],
)
def test_bad_parameters(arguments, reason):
    with pytest.raises(FieldError, match=reason):
        fields.polynomial(**arguments)
