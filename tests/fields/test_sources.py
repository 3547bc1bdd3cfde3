"""Point sources and dipoles: flux, limits, singular points."""

import math

import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError

EPS = np.finfo(np.float64).eps


def circle_flux(field, centre, radius):
    """Trapezoid rule, exact to rounding for these fields with 64 points."""
    t = 2 * math.pi * np.arange(64) / 64
    normals = np.column_stack((np.cos(t), np.sin(t)))
    slopes = np.einsum("ij,ij->i", field.gradient(centre + radius * normals), normals)
    return float(slopes.mean()) * 2 * math.pi * radius


def test_flux_of_a_logarithm_is_two_pi_around_it_and_zero_elsewhere():
    u = fields.log_source((0.5, 0), 3)
    assert circle_flux(u, np.array([0.5, 0]), 0.7) == pytest.approx(6 * math.pi, rel=1e-14)
    assert abs(circle_flux(u, np.array([2.5, 0]), 0.5)) < 1e-13
    assert abs(circle_flux(fields.dipole((0.5, 0), (1, 1)), np.array([0.5, 0]), 0.7)) < 1e-13


def test_flux_of_a_point_source_is_minus_four_pi():
    directions = np.random.default_rng(8).normal(size=(6, 3))
    directions /= np.linalg.norm(directions, axis=1, keepdims=True)
    slopes = np.einsum(
        "ij,ij->i", fields.point_source((1, 2, 3)).gradient([1, 2, 3] + 2 * directions), directions
    )
    np.testing.assert_allclose(slopes * 4 * math.pi * 2**2, -4 * math.pi, rtol=1e-14, atol=0)


def test_a_dipole_is_the_derivative_of_a_source():
    points = np.random.default_rng(9).uniform(0.5, 1, (5, 2))
    expected = fields.log_source((0, 0.1)).gradient(points) @ [2, -1]
    np.testing.assert_allclose(fields.dipole((0, 0.1), (2, -1)).value(points), expected, rtol=8 * EPS, atol=0)
    points = np.random.default_rng(9).uniform(0.5, 1, (5, 3))
    expected = -fields.point_source((0, 0.1, 0)).gradient(points) @ [2, -1, 1]
    values = fields.dipole((0, 0.1, 0), (2, -1, 1)).value(points)
    np.testing.assert_allclose(values, expected, rtol=16 * EPS, atol=8 * EPS)


@pytest.mark.filterwarnings("error")
def test_near_and_far_points_neither_overflow_nor_underflow():
    u = fields.log_source((0, 0))
    assert u.value([[1e-200, 0], [1e200, 1e200]]) == pytest.approx(
        [-200 * math.log(10), 200 * math.log(10) + math.log(2) / 2], rel=4 * EPS
    )
    assert fields.point_source((0, 0, 0)).value([[0, 1e-200, 0]])[0] == pytest.approx(1e200, rel=4 * EPS)


@pytest.mark.parametrize(
    ("field", "exponent", "kind"),
    [
        (fields.log_source((1, 2)), 0, "log"),
        (fields.point_source((1, 2, 3)), -1, "pole"),
        (fields.dipole((1, 2), (1, 0)), -1, "pole"),
        (fields.dipole((1, 2, 3), (1, 0, 0)), -2, "pole"),
    ],
)
def test_singular_points(field, exponent, kind):
    (singularity,) = field.singularities
    assert singularity == fields.Singularity(point=(1, 2, 3)[: field.dim], exponent=exponent, kind=kind)
    with pytest.raises(FieldError, match="is infinite at point 0"):
        field.value([singularity.point])


@pytest.mark.parametrize(
    ("make", "reason"),
    [
        (lambda: fields.log_source((0, 0, 0)), "point must have 2 coordinates, got 3"),
        (lambda: fields.point_source((0, 0)), "point must have 3 coordinates, got 2"),
        (lambda: fields.dipole((0,), (1,)), "point must have 2 or 3 coordinates"),
        (lambda: fields.dipole((0, 0), (1, 0, 0)), "direction must have 2 coordinates"),
        (lambda: fields.log_source((0, 0), float("inf")), "strength must be finite"),
    ],
)
def test_bad_parameters(make, reason):
    with pytest.raises(FieldError, match=reason):
        make()
