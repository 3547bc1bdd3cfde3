"""Axially symmetric fields in (r, z): agreement with space at any angle, symmetry, singular points."""

import math

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError

SPACE = {
    "solid": fields.solid(5, 0),
    "source": fields.point_source((0, 0, "-1/2"), 3),
    "dipole": fields.dipole((0, 0, 2), (0, 0, "3/2")),
    "sum": 2 * fields.solid(2, 0) - fields.point_source((0, 0, 3)) + fields.affine((0, 0, "1/3"), 1),
    "moved": fields.point_source((0, 0, 0)).shifted((0, 0, "-0.4")).scaled(2),
    "inverted": fields.solid(2, 0).inverted((0, 0, 0), 2),
    "formula": fields.field("z**2 - (x**2 + y**2)/2"),
}


@pytest.fixture(params=SPACE.values(), ids=SPACE.keys())
def field(request):
    return request.param


def half_plane(count, seed=5):
    generator = np.random.default_rng(seed)
    return np.stack([generator.uniform(0.05, 1.1, count), generator.uniform(-0.3, 1.2, count)], axis=1)


def test_value_and_gradient_are_those_of_space_at_any_angle(field):
    u = fields.axisymmetric(field)
    points = half_plane(7)
    for angle in (0.0, 0.9, 4.0):
        c, s = math.cos(angle), math.sin(angle)
        turned = np.stack([points[:, 0] * c, points[:, 0] * s, points[:, 1]], axis=1)
        gradient = field.gradient(turned)
        size = np.abs(gradient).max() + np.abs(field.value(turned)).max()
        np.testing.assert_allclose(u.value(points), field.value(turned), rtol=0, atol=1e-13 * size)
        outward = gradient[:, 0] * c + gradient[:, 1] * s
        expected = np.stack([outward, gradient[:, 2]], axis=1)
        np.testing.assert_allclose(u.gradient(points), expected, rtol=0, atol=1e-13 * size)


def test_equation_holds_in_r_and_z(field):
    """u_rr + u_r / r + u_zz = 0 by differences in 50 digits, and fails without the middle term."""
    u = fields.axisymmetric(field)
    if field.opaque:
        pytest.skip("a user's function has its own tests")
    with mpmath.workdps(60):
        r, z, h = mpmath.mpf("0.7"), mpmath.mpf("0.4"), mpmath.mpf(10) ** -12
        at = lambda a, b: u.at((a, b), digits=50)  # noqa: E731
        rr = (at(r + h, z) - 2 * at(r, z) + at(r - h, z)) / h**2
        zz = (at(r, z + h) - 2 * at(r, z) + at(r, z - h)) / h**2
        slope = (at(r + h, z) - at(r - h, z)) / (2 * h)
        size = abs(rr) + abs(zz) + abs(slope / r)
        assert abs(rr + slope / r + zz) < mpmath.mpf("1e-18") * size  # truncation h^2
        assert abs(rr + zz) > mpmath.mpf("1e-3") * size  # the twin: the operator of the plane


def test_gradient_along_r_vanishes_on_the_axis(field):
    u = fields.axisymmetric(field)
    on_axis = np.array([[0.0, 0.1], [0.0, 0.45], [0.0, 0.9]])
    assert (u.gradient(on_axis)[:, 0] == 0.0).all()


def test_spec_round_trip(field):
    if field.opaque:
        pytest.skip("formulas have a test of their own")
    u = fields.axisymmetric(field) + fields.axisymmetric(fields.radial("cylinder", 1, "2/3"))
    again = fields.from_spec(u.spec())
    assert again == u
    assert again.formula == u.formula


def test_singular_points_lie_on_the_axis_of_the_half_plane():
    u = fields.axisymmetric(fields.point_source((0, 0, 2)) + fields.dipole((0, 0, -1), (0, 0, 1)))
    assert {(s.point, s.exponent, s.kind) for s in u.singularities} == {
        ((0.0, 2.0), -1.0, "pole"),
        ((0.0, -1.0), -2.0, "pole"),
    }
    with pytest.raises(FieldError, match="infinite"):
        u.value([[0.0, 2.0]])


@pytest.mark.parametrize(
    ("field", "message"),
    [
        (fields.solid(1, 1), "not symmetric about the z axis"),
        (fields.solid(4, -3), "not symmetric about the z axis"),
        (fields.solid(2, 0) + 1e-6 * fields.solid(2, 2), "not symmetric about the z axis"),
        (fields.point_source((1e-3, 0, 0)), "lies off it"),
        (fields.dipole((0, 0, 0), (1, 0, 0)), "not symmetric about the z axis"),
        (fields.affine((0, 1e-6, 1)), "not symmetric about the z axis"),
        (fields.polynomial(2), "2-D"),
        (fields.radial("sphere", 0, 1), "point_source"),
        (fields.affine((1,)), "1-D"),
    ],
    ids=lambda value: "" if isinstance(value, str) else value.formula,
)
def test_fields_without_axial_symmetry_are_refused(field, message):
    with pytest.raises(FieldError, match=message):
        fields.axisymmetric(field)


def test_what_is_no_field_is_refused():
    with pytest.raises(FieldError, match="field of space was expected"):
        fields.axisymmetric(lambda r, z: r + z)


def test_logarithm_about_the_axis_has_no_value_on_it():
    u = fields.axisymmetric(fields.radial("cylinder", 1, 2))
    np.testing.assert_allclose(u.value([[math.e, 5.0]]), [3.0], rtol=1e-15)
    np.testing.assert_allclose(u.gradient([[0.5, -1.0]]), [[4.0, 0.0]], rtol=1e-15)
    with pytest.raises(FieldError, match="not defined"):
        u.value([[0.0, 1.0]])


@pytest.mark.parametrize("depth", [1e-3, 1e-6, 1e-12, 0.0])
def test_float64_keeps_its_digits_up_to_the_axis(depth):
    u = fields.axisymmetric(SPACE["sum"])
    points = np.array([[depth, 0.37], [depth, -0.21], [depth, 1.0]])
    for point, value, gradient in zip(points, u.value(points), u.gradient(points), strict=True):
        better = float(u.at(tuple(point), 60))
        steeper = [float(g) for g in u.gradient_at(tuple(point), 60)]
        assert abs(value - better) <= 8 * np.finfo(float).eps * 3  # max|u| is about 3
        assert np.abs(gradient - steeper).max() <= 1e-15 * 10
