"""The Kelvin transform: closed forms, singular points that come and go, straight cuts."""

import math

import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError

EPS = np.finfo(np.float64).eps


def test_a_linear_field_becomes_a_dipole():
    points = np.random.default_rng(3).uniform(0.3, 1, (7, 2))
    u = fields.affine((1, 2)).inverted((0, 0), 1)
    np.testing.assert_allclose(u.value(points), fields.dipole((0, 0), (1, 2)).value(points), rtol=16 * EPS)
    points = np.random.default_rng(3).uniform(0.3, 1, (7, 3))
    u = fields.affine((1, 2, 3)).inverted((0, 0, 0), 1)
    np.testing.assert_allclose(
        u.value(points), fields.dipole((0, 0, 0), (1, 2, 3)).value(points), rtol=16 * EPS
    )


def test_the_constant_becomes_a_point_source_in_space():
    u = fields.affine((0, 0, 0), 1).inverted((1, 0, 0), 3)
    points = np.random.default_rng(4).uniform(2, 3, (5, 3))
    np.testing.assert_allclose(u.value(points), fields.point_source((1, 0, 0), 3).value(points), rtol=8 * EPS)
    assert u.singularities == fields.point_source((1, 0, 0)).singularities


@pytest.mark.parametrize(
    "field", [fields.polynomial(3), fields.wedge("2/3"), fields.solid(3, 1), fields.dipole((1, 0), (1, 1))]
)
def test_values_stay_on_the_circle_and_twice_is_once_undone(field):
    centre = (0,) * field.dim
    v = field.inverted(centre, 2)
    on = np.random.default_rng(5).normal(size=(6, field.dim))
    on[:, 1] = np.abs(on[:, 1])
    on *= 2 / np.linalg.norm(on, axis=1, keepdims=True)
    np.testing.assert_allclose(
        v.value(on), field.value(on), rtol=0, atol=64 * EPS * np.max(np.abs(field.value(on)))
    )
    twice = v.inverted(centre, 2)
    points = on * 0.3
    np.testing.assert_allclose(twice.value(points), field.value(points), rtol=1e-13, atol=1e-15)


@pytest.mark.parametrize(
    ("field", "expected"),
    [
        (fields.polynomial(3), ("pole", -3)),
        (fields.solid(3, 1), ("pole", -4)),
        (fields.log_source((1, 0)), ("log", 0)),
        (fields.wedge("2/3"), ("pole", -2 / 3)),
        (fields.exp_trig(2), ("pole", -math.inf)),
        (fields.field("x*y"), ("pole", -math.inf)),
    ],
)
def test_far_away_becomes_a_singular_point(field, expected):
    found = [s for s in field.inverted((0,) * field.dim, 1).singularities if s.point == (0,) * field.dim]
    assert [(s.kind, pytest.approx(s.exponent)) for s in found] == [expected]


def test_decaying_fields_have_no_singular_point_at_the_centre():
    assert fields.dipole((1, 0), (1, 0)).inverted((0, 0), 1).singularities[0].point == (1, 0)
    assert len(fields.dipole((1, 0), (1, 0)).inverted((0, 0), 1).singularities) == 1
    u = fields.point_source((2, 0, 0)).inverted((0, 0, 0), 1)
    assert [s.point for s in u.singularities] == [(0.5, 0, 0)]
    with pytest.raises(FieldError, match=r"not defined at point 1 = \(0\.0, 0\.0, 0\.0\)"):
        u.value([[1, 1, 1], [0, 0, 0]])


def test_the_centre_is_refused():
    u = fields.polynomial(2).inverted((1, 0), 1)
    with pytest.raises(FieldError, match="infinite at point 0"):
        u.value([[1, 0]])
    with pytest.raises(FieldError, match="infinite at point"):
        u.at((1, 0))


def test_a_cut_that_stays_straight_keeps_its_sides():
    slit = fields.wedge(0.5, "cos", cut=0.0, apex=(1, 0))
    v = slit.inverted((0, 0), 2)  # ray from 1 to infinity -> segment from 4 back to 0
    (cut,) = v.cuts
    assert (cut.start, cut.direction, cut.length) == ((0, 0), (1, 0), 4)
    for y, side in ((1e-9, 1), (-1e-9, -1)):
        close, on = v.value([[2, y]])[0], v.value([[2, 0]], side=side)[0]
        assert close == pytest.approx(slit.value([[2 / (1 + y * y / 4), y]])[0], rel=1e-8)
        assert on == pytest.approx(close, rel=1e-7)
    assert v.value([[5, 0]]).shape == (1,)  # beyond the cut


@pytest.mark.parametrize(
    ("make", "reason"),
    [
        (lambda: fields.wedge(0.5, cut=0.0).inverted((0, 1), 1), "would not stay straight"),
        (lambda: fields.wedge(0.5, cut=0.0).inverted((2, 0), 1), "would not stay straight"),
        (lambda: fields.polynomial(2).inverted((0, 0), 0), "radius must be positive"),
        (lambda: fields.polynomial(2).inverted((0, 0, 0), 1), "centre must have 2 coordinates"),
        (lambda: fields.affine((1,)).inverted((0,), 1), "no Kelvin transform"),
    ],
)
def test_bad_inversions(make, reason):
    with pytest.raises(FieldError, match=reason):
        make()


def test_without_the_factor_it_would_not_be_harmonic_in_space():
    # the twin of the shared check: u(x*) alone, by the formula for u = z in the unit sphere
    wrong = fields.field("z/(x**2 + y**2 + z**2)")
    right = fields.field("z/(x**2 + y**2 + z**2)**(3/2)")
    h, point = 1e-4, np.array([0.5, 0.4, 0.6])
    steps = np.vstack((h * np.eye(3), -h * np.eye(3)))
    laplacian = {
        field.text: (field.value(point + steps).sum() - 6 * field.value([point])[0]) / h**2
        for field in (wrong, right)
    }
    assert abs(laplacian[wrong.text]) > 0.5
    assert abs(laplacian[right.text]) < 1e-5
    exact = fields.affine((0, 0, 1)).inverted((0, 0, 0), 1)
    assert exact.value([point])[0] == pytest.approx(right.value([point])[0], rel=8 * EPS)
