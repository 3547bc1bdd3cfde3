"""Radial fields a + b log r and a + b/r: against plane and space, digits, refusals."""

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError

R = np.array([0.3, 1.0, 2.5, 40.0])


def test_cylinder_is_the_logarithmic_source_of_the_plane():
    u, plane = fields.radial("cylinder", 3, -2), fields.log_source((0, 0), -2)
    points = np.stack([0.6 * R, 0.8 * R], axis=1)
    np.testing.assert_allclose(u.value(R), 3 + plane.value(points), rtol=0, atol=1e-14)
    slopes = (plane.gradient(points) * [0.6, 0.8]).sum(axis=1)
    np.testing.assert_allclose(u.gradient(R)[:, 0], slopes, rtol=1e-14)


def test_sphere_is_the_point_source_of_space():
    u, space = fields.radial("sphere", "1/3", 2), fields.point_source((0, 0, 0), 2)
    points = np.stack([0.6 * R, 0 * R, 0.8 * R], axis=1)
    np.testing.assert_allclose(u.value(R), 1 / 3 + space.value(points), rtol=1e-14)
    slopes = (space.gradient(points) * [0.6, 0.0, 0.8]).sum(axis=1)
    np.testing.assert_allclose(u.gradient(R)[:, 0], slopes, rtol=1e-14)


def test_high_precision_agrees_with_mpmath():
    with mpmath.workdps(70):
        r = mpmath.mpf(7) / 10
        assert abs(fields.radial("cylinder", "1/3", "2/7").at(("7/10",), 60) - (
            mpmath.mpf(1) / 3 + mpmath.mpf(2) / 7 * mpmath.log(r)
        )) < mpmath.mpf(10) ** -60  # fmt: skip
        (slope,) = fields.radial("sphere", 0, "2/7").gradient_at(("7/10",), 60)
        assert abs(slope + mpmath.mpf(2) / 7 / r**2) < mpmath.mpf(10) ** -58


def test_extreme_radii_do_not_overflow():
    u = fields.radial("sphere", 1, 1)
    assert u.value([1e300]).tolist() == [1.0]
    assert u.gradient([1e200]).tolist() == [[0.0]] or u.gradient([1e200])[0, 0] < 0
    assert np.isfinite(fields.radial("cylinder", 0, 1).value([1e-300, 1e300])).all()


def test_only_constants_reach_the_axis():
    assert fields.radial("cylinder", 2, 0).value([0.0]).tolist() == [2.0]
    assert fields.radial("sphere", 2, 0).singularities == ()
    for about, kind in (("cylinder", "log"), ("sphere", "pole")):
        u = fields.radial(about, 2, 1)
        assert [s.kind for s in u.singularities] == [kind]
        with pytest.raises(FieldError, match="infinite"):
            u.value([0.0])


def test_negative_radii_and_unknown_surfaces_are_refused():
    with pytest.raises(FieldError, match="not defined"):
        fields.radial("cylinder", 2, 1).value([-0.5])
    with pytest.raises(FieldError, match="'cylinder' or a 'sphere'"):
        fields.radial("ball", 2, 1)
    with pytest.raises(FieldError, match="b"):
        fields.radial("sphere", 2, "one")


def test_radius_is_where_the_logarithm_vanishes():
    u = fields.radial("cylinder", 3, -2, radius="2/5")
    assert u.at(("2/5",), 40) == 3
    np.testing.assert_allclose(u.value(R), 3 - 2 * np.log(R / 0.4), rtol=0, atol=1e-14)
    np.testing.assert_allclose(u.gradient(R)[:, 0], -2 / R, rtol=1e-15)
    assert fields.from_spec(u.spec()) == u
    assert u.formula == "3 - 2 log(r/(2/5))"
    for radius in (0, -1):
        with pytest.raises(FieldError, match="radius must be > 0"):
            fields.radial("cylinder", 3, -2, radius=radius)
    with pytest.raises(FieldError, match="belongs to the logarithm"):
        fields.radial("sphere", 3, -2, radius=2)


def test_spec_round_trip_and_formula():
    u = fields.radial("sphere", "-1/3", 2)
    assert fields.from_spec(u.spec()) == u
    assert u.formula == "-1/3 + 2/r"
    assert fields.radial("cylinder", 0, 3).formula == "3 log r"
    with pytest.raises(FieldError, match="cylinder"):
        fields.from_spec({**u.spec(), "about": "cone"})
