"""Shape functions and quadrature of the reference cells."""

import math
from itertools import product

import numpy as np
import pytest

from laplace_verify.errors import AnswerError
from laplace_verify.solvers.elements import ELEMENTS, element

NAMES = sorted(ELEMENTS)


def monomial_integral(powers, simplex):
    """Integrate a monomial over the unit cube, or simplex (Dirichlet's formula prod a_i! / (d + sum a)!)."""
    if simplex:
        return math.prod(map(math.factorial, powers)) / math.factorial(len(powers) + sum(powers))
    return 1 / math.prod(power + 1 for power in powers)


@pytest.mark.parametrize("name", NAMES)
def test_shape_functions_are_one_at_their_node_and_zero_at_the_others(name):
    kind = ELEMENTS[name]
    assert np.array_equal(kind.shape(kind.nodes), np.eye(len(kind.nodes)))


@pytest.mark.parametrize("name", NAMES)
def test_shape_functions_add_up_to_one_and_their_gradients_to_zero(name):
    kind = ELEMENTS[name]
    at = kind.random(np.random.default_rng(41), (17,))
    np.testing.assert_allclose(kind.shape(at).sum(axis=1), 1, rtol=0, atol=1e-14)
    np.testing.assert_allclose(kind.shape_gradient(at).sum(axis=1), 0, rtol=0, atol=1e-13)


@pytest.mark.parametrize("name", NAMES)
def test_gradients_agree_with_central_differences(name):
    kind = ELEMENTS[name]
    at = kind.random(np.random.default_rng(7), (5,))
    step = 1e-6
    for axis in range(kind.dim):
        ahead, behind = at.copy(), at.copy()
        ahead[:, axis] += step
        behind[:, axis] -= step
        difference = (kind.shape(ahead) - kind.shape(behind)) / (2 * step)
        # Central differences of cubics: step^2 * |third derivative| + eps / step.
        np.testing.assert_allclose(kind.shape_gradient(at)[..., axis], difference, rtol=0, atol=1e-8)


@pytest.mark.parametrize(
    ("name", "edges"),
    [
        # VTK's node order, written out by hand: (edge node, its two corners).
        ("line3", [(2, 0, 1)]),
        ("triangle6", [(3, 0, 1), (4, 1, 2), (5, 2, 0)]),
        ("quad8", [(4, 0, 1), (5, 1, 2), (6, 2, 3), (7, 3, 0)]),
        ("quad9", [(4, 0, 1), (5, 1, 2), (6, 2, 3), (7, 3, 0)]),
        ("tetra10", [(4, 0, 1), (5, 1, 2), (6, 0, 2), (7, 0, 3), (8, 1, 3), (9, 2, 3)]),
    ],
)
def test_edge_nodes_lie_halfway_between_their_corners(name, edges):
    nodes = ELEMENTS[name].nodes
    for node, a, b in edges:
        assert np.array_equal(nodes[node], (nodes[a] + nodes[b]) / 2)


@pytest.mark.parametrize("name", ["line", "triangle", "quad", "tetra", "hexahedron"])
@pytest.mark.parametrize("order", [0, 1, 2, 3, 4, 7])
def test_quadrature_integrates_every_monomial_of_its_order(name, order):
    kind = ELEMENTS[name]
    points, weights = kind.quadrature(order)
    assert (weights > 0).all()
    assert (kind.outside(points) < 0).all()
    for powers in product(range(order + 1), repeat=kind.dim):
        if kind.simplex and sum(powers) > order:
            continue
        value = weights @ np.prod(points ** np.array(powers), axis=1)
        assert value == pytest.approx(monomial_integral(powers, kind.simplex), rel=2e-14, abs=1e-16), powers


@pytest.mark.parametrize("name", ["line", "triangle", "quad", "tetra", "hexahedron"])
def test_quadrature_of_order_three_misses_degree_four(name):
    kind = ELEMENTS[name]
    points, weights = kind.quadrature(3)
    powers = (4,) + (0,) * (kind.dim - 1)
    value = weights @ points[:, 0] ** 4
    assert abs(value - monomial_integral(powers, kind.simplex)) > 1e-5


@pytest.mark.parametrize("name", ["line", "triangle", "quad", "tetra", "hexahedron"])
def test_random_points_are_uniform_in_the_reference_cell(name):
    kind = ELEMENTS[name]
    at = kind.random(np.random.default_rng(5), (20000,))
    assert (kind.outside(at) <= 0).all()
    powers = (1,) + (0,) * (kind.dim - 1)
    mean = monomial_integral(powers, kind.simplex) / kind.volume
    # Standard deviation of a coordinate is below 0.3; 5 sigma of the mean of 20000.
    assert abs(at.mean(axis=0) - mean).max() < 5 * 0.3 / math.sqrt(20000)


def test_unknown_cell_names_the_nearest():
    with pytest.raises(AnswerError, match=r"'triangel6' is no cell .* did you mean 'triangle6'"):
        element("triangel6")
