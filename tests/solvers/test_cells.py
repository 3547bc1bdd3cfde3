"""Values, gradients and integrals on straight and curved cells."""

import numpy as np
import pytest

from laplace_verify.errors import AnswerError
from laplace_verify.solvers.cells import CellMesh, connectivity, determinant, inverse
from laplace_verify.solvers.elements import ELEMENTS

NAMES = sorted(ELEMENTS)


def quadratic(points):
    """Return a polynomial with every monomial of degree two, and its gradient."""
    dim = points.shape[1]
    b = np.array([0.7, -1.1, 0.4])[:dim]
    q = np.array([[0.9, 0.3, -0.5], [0.3, -0.6, 0.8], [-0.5, 0.8, 0.2]])[:dim, :dim]
    return 0.3 + points @ b + np.einsum("ni,ij,nj->n", points, q, points), b + 2 * points @ q


def linear(points):
    """Return an affine function and its gradient."""
    b = np.array([0.7, -1.1, 0.4])[: points.shape[1]]
    return 0.3 + points @ b, np.tile(b, (len(points), 1))


@pytest.mark.parametrize("name", NAMES)
def test_polynomials_of_the_cells_degree_come_out_exact_on_affine_cells(name, make_mesh, affine_map):
    warp, _ = affine_map(ELEMENTS[name].dim)
    points, cells = make_mesh(name, bend=warp)
    mesh = CellMesh(points, connectivity(cells, len(points)))
    exact = quadratic if ELEMENTS[name].degree == 2 else linear
    samples = mesh.quadrature(3, exact(points)[0])
    values, gradients = exact(samples.points)
    np.testing.assert_allclose(samples.values, values, rtol=0, atol=1e-14 * 40)
    np.testing.assert_allclose(samples.gradients, gradients, rtol=0, atol=1e-12)


@pytest.mark.parametrize("name", NAMES)
def test_affine_functions_come_out_exact_on_curved_cells(name, make_mesh, bend):
    """Isoparametric cells contain 1, x, y, z whatever their shape."""
    points, cells = make_mesh(name, bend=bend)
    mesh = CellMesh(points, connectivity(cells, len(points)))
    samples = mesh.quadrature(3, linear(points)[0])
    np.testing.assert_allclose(samples.values, linear(samples.points)[0], rtol=0, atol=1e-13)
    np.testing.assert_allclose(samples.gradients, linear(samples.points)[1], rtol=0, atol=1e-12)


@pytest.mark.parametrize("name", NAMES)
def test_gradients_on_curved_cells_are_those_of_the_values(name, make_mesh, bend):
    """Compare with central differences of values along reference directions: du/dxi = J^T grad u."""
    points, cells = make_mesh(name, n=2, bend=bend)
    mesh = CellMesh(points, connectivity(cells, len(points)))
    nodal = np.random.default_rng(3).normal(size=len(points))
    block = mesh.blocks[0]
    at = block.element.random(np.random.default_rng(8), (4,))
    gradients = block.gradients(at, nodal)
    slopes = np.einsum("mqij,mqi->mqj", block.jacobian(at), gradients)
    step = 1e-6
    for axis in range(mesh.dim):
        shift = step * np.eye(mesh.dim)[axis]
        difference = (block.values(at + shift, nodal) - block.values(at - shift, nodal)) / (2 * step)
        np.testing.assert_allclose(slopes[..., axis], difference, rtol=0, atol=1e-7)


@pytest.mark.parametrize("name", NAMES)
def test_integral_of_a_cubic_is_exact_on_affine_cells(name, make_mesh, affine_map):
    """The reference is the change of variables, done with a different rule on the whole cube."""
    dim = ELEMENTS[name].dim
    warp, det = affine_map(dim)
    points, cells = make_mesh(name, bend=warp)
    mesh = CellMesh(points, connectivity(cells, len(points)))
    samples = mesh.quadrature(3, np.zeros(len(points)))
    x, w = np.polynomial.legendre.leggauss(6)
    grid = np.column_stack([axis.ravel() for axis in np.meshgrid(*[(x + 1) / 2] * dim)])
    weights = np.prod(np.column_stack([axis.ravel() for axis in np.meshgrid(*[w / 2] * dim)]), axis=1)
    wanted = det * weights @ np.sum(warp(grid), axis=1) ** 3
    assert samples.weights @ np.sum(samples.points, axis=1) ** 3 == pytest.approx(wanted, rel=1e-13, abs=0)


@pytest.mark.parametrize("name", ["line3", "triangle6", "quad8", "quad9", "tetra10"])
def test_volume_of_cells_on_a_smoothly_mapped_cube_converges(name, make_mesh):
    """The last coordinate is stretched by 1 + 0.2 sin(pi x_1): quadratic cells work like Simpson's rule."""
    dim = ELEMENTS[name].dim

    def shear(points):
        result = points.copy()
        result[:, -1] *= 1 + 0.2 * np.sin(np.pi * points[:, 0]) if dim > 1 else 1
        return result

    points, cells = make_mesh(name, n=4, bend=shear)
    mesh = CellMesh(points, connectivity(cells, len(points)))
    wanted = 1 + 0.2 * 2 / np.pi if dim > 1 else 1  # integral of the height over the base
    # Simpson's rule with four intervals: h^4 / 180 * pi^4 * 0.2 / 16 with h = 1/4 < 2e-4; exact in 1-D.
    assert mesh.volumes().sum() == pytest.approx(wanted, rel=2e-4, abs=0)
    assert mesh.quadrature(0, np.zeros(len(points))).weights.sum() == pytest.approx(
        mesh.volumes().sum(), rel=1e-13, abs=0
    )


def test_volume_of_straight_cells_misses_the_curved_shape(make_mesh):
    """The twin: linear cells on the same map are an order of magnitude further off."""

    def shear(points):
        result = points.copy()
        result[:, -1] *= 1 + 0.2 * np.sin(np.pi * points[:, 0])
        return result

    points, cells = make_mesh("triangle", n=4, bend=shear)
    mesh = CellMesh(points, connectivity(cells, len(points)))
    assert abs(mesh.volumes().sum() - (1 + 0.4 / np.pi)) > 2e-3


def test_random_points_lie_in_their_cells_and_repeat_with_the_seed(make_mesh, bend):
    points, cells = make_mesh("quad9", bend=bend)
    mesh = CellMesh(points, connectivity(cells, len(points)))
    nodal = linear(points)[0]
    first, again, other = (mesh.random(seed, 5, nodal) for seed in (12, 12, 13))
    assert first.points.shape == (9 * 5, 2)
    assert np.array_equal(first.points, again.points)
    assert not np.array_equal(first.points, other.points)
    np.testing.assert_allclose(first.values, linear(first.points)[0], rtol=0, atol=1e-13)


def test_values_per_cell_are_constant_on_each_cell(make_mesh):
    points, cells = make_mesh("triangle", n=2)
    mesh = CellMesh(points, connectivity(cells, len(points)))
    samples = mesh.quadrature(2, np.arange(8.0), per_cell=True)
    assert samples.gradients is None
    assert np.array_equal(samples.values, samples.cells.astype(float))


def test_two_kinds_of_cells_fill_one_mesh():
    points = np.array([[0, 0], [1, 0], [2, 0], [0, 1], [1, 1.0]])
    cells = connectivity({"quad": [[0, 1, 4, 3]], "triangle": [[1, 2, 4]]}, 5)
    mesh = CellMesh(points, cells)
    samples = mesh.quadrature(2, linear(points)[0])
    assert samples.weights.sum() == pytest.approx(1.5, rel=1e-14, abs=0)
    np.testing.assert_allclose(samples.values, linear(samples.points)[0], rtol=0, atol=1e-14)
    assert mesh.volumes() == pytest.approx([1.0, 0.5], rel=1e-14, abs=0)


@pytest.mark.parametrize("dim", [1, 2, 3])
def test_inverse_and_determinant_agree_with_linear_algebra(dim):
    matrices = np.random.default_rng(2).normal(size=(7, 2, dim, dim))
    np.testing.assert_allclose(determinant(matrices), np.linalg.det(matrices), rtol=1e-12, atol=0)
    np.testing.assert_allclose(
        inverse(matrices) @ matrices, np.broadcast_to(np.eye(dim), matrices.shape), rtol=0, atol=1e-10
    )


def test_clockwise_cells_are_as_good_as_the_others():
    points = np.array([[0, 0], [1, 0], [0, 1], [1, 1.0]])
    mesh = CellMesh(points, connectivity({"triangle": [[0, 2, 1], [1, 3, 2]]}, 4))
    samples = mesh.quadrature(2, linear(points)[0])
    assert samples.weights.sum() == pytest.approx(1, rel=1e-14, abs=0)
    np.testing.assert_allclose(samples.gradients, linear(samples.points)[1], rtol=0, atol=1e-14)


SQUARE = np.array([[0, 0], [1, 0], [0, 1], [1, 1.0]])


@pytest.mark.parametrize(
    ("cells", "message"),
    [
        ([[0, 1, 2]], r"cells must be a dict .* got list"),
        ({}, r"cells must be a dict .* \(empty\)"),
        ({"triangle": [[0, 1, 2, 3]]}, r"cells\['triangle'\] must have shape \(m, 3\)"),
        ({"triangle": np.zeros((3, 2), dtype=int)}, r"looks transposed, pass its \.T"),
        ({"triangle": [[0.0, 1.0, 2.0]]}, r"cells\['triangle'\] must hold whole numbers"),
        ({"triangle": [[0, 1, 2], [1, 2]]}, r"cells\['triangle'\] must be a rectangular array"),
        ({"triangle": [[0, 1, 4]]}, r"node numbers from 0 to 3, got 0 to 4"),
        ({"triangle": [[1, 2, 4], [2, 3, 4]]}, r"counted from 1, subtract 1"),
        ({"triangle": [[-1, 1, 2]]}, r"node numbers from 0 to 3, got -1 to 2"),
        ({"triangles": [[0, 1, 2]]}, r"'triangles' is no cell .* did you mean 'triangle'"),
        ({"line": [[0, 1]]}, r"'line' has dimension 1 but the points have 2 coordinates"),
        ({"quad": [[0, 1, 2, 3]]}, r"cells\['quad'\]: 1 of 1 cells are folded .* nodes \[0, 1, 2, 3\]"),
        (
            {"triangle": [[0, 1, 3], [0, 1, 1]]},
            r"1 of 2 cells are folded or have no volume; the first is row 1",
        ),
    ],
)
def test_bad_cells_are_refused_by_name(cells, message):
    with pytest.raises(AnswerError, match=message):
        CellMesh(SQUARE, connectivity(cells, 4))
