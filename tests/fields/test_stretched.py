"""Fields for anisotropic conductivities."""

import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError

EPS = np.finfo(np.float64).eps


def test_flux_follows_from_the_harmonic_field():
    # n . K grad v with v = u(S x), S = K^{-1/2}: K grad v = K^{1/2} grad u
    K = np.array([[3, 1.0], [1, 2]])
    values, vectors = np.linalg.eigh(K)
    root = vectors * np.sqrt(values) @ vectors.T
    u = fields.exp_trig(2)
    v = fields.stretched(u, K)
    points = np.random.default_rng(6).uniform(0, 1, (5, 2))
    moved = points @ np.linalg.inv(root)
    np.testing.assert_allclose(v.value(points), u.value(moved), rtol=0, atol=1e-13)
    np.testing.assert_allclose(v.gradient(points) @ K, u.gradient(moved) @ root, rtol=0, atol=1e-13)


def test_one_dimension_and_singular_points():
    assert fields.stretched(fields.affine((1,)), [[4]]).value([2.0]).tolist() == [1]
    v = fields.stretched(fields.log_source((1, 1)), [[4, 0], [0, 9]])
    assert v.singularities[0].point == (2, 3)


def test_cut_keeps_its_sides_under_a_shear():
    v = fields.stretched(fields.wedge(0.5, "cos", cut=0.0), [[2, 1], [1, 2]])
    (cut,) = v.cuts
    point = 2 * np.array(cut.direction)
    left, right = v.value([point, point], side=[1, -1])
    normal = 1e-9 * np.array([-cut.direction[1], cut.direction[0]])
    np.testing.assert_allclose(v.value([point + normal, point - normal]), [left, right], rtol=1e-8, atol=0)
    assert left == pytest.approx(-right, rel=1e-9)


@pytest.mark.parametrize(
    ("K", "reason"),
    [
        ([[1, 0.5], [0.25, 1]], "K must be symmetric"),
        ([[1, 2], [2, 1]], "K must be positive definite"),
        ([[-1, 0], [0, 1]], "K must be positive definite"),
        ([[1, 0], [0, 0]], "K must be positive definite"),
        ([[1]], "K must be a 2 x 2 matrix"),
        (np.eye(3), "K must be a 2 x 2 matrix"),
        ([[1, 0], [0]], r"K\[1\] must have 2 coordinates"),
        ([[1, 0], [0, float("nan")]], r"K\[1\]\[1\] must be finite"),
        (2.0, "K must be a square matrix"),
    ],
)
def test_bad_tensors(K, reason):
    with pytest.raises(FieldError, match=reason):
        fields.stretched(fields.polynomial(2), K)


def test_bad_tensor_in_space():
    with pytest.raises(FieldError, match="positive definite"):
        fields.stretched(fields.solid(1, 0), [[1, 0.9, 0.9], [0.9, 1, -0.9], [0.9, -0.9, 1]])
