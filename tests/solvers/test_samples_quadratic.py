"""The quadratic element sample: order three in L2, two in the H1 seminorm, under curved boundaries too."""

from __future__ import annotations

import math

import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.geometry import Annulus, Disc, Ellipse, Rectangle, Sector
from laplace_verify.geometry.meshes import triangulate
from laplace_verify.problems import case, robin
from laplace_verify.solvers.samples import p2_element
from laplace_verify.solvers.samples.faults_quadratic import QUADRATIC_FAULTS
from laplace_verify.solvers.samples.quadratic_elements import bent, boundary_mass, stiffness, with_middles

TENSOR = np.array([[2.0, 0.7], [0.7, 1.0]])
WAVE = fields.exp_trig(1.3, "cos", centre=(0.1, 0.2))
SHAPES = [
    pytest.param(Rectangle((0, 0), (1.5, 1)), {"left": "neumann", "top": robin(2.0)}, id="rectangle"),
    pytest.param(Disc((0, 0), 1.0).split(rim=[0.3]), {"rim-1": "neumann"}, id="disc"),
    pytest.param(Ellipse((0, 0), (1.5, 1)), {"rim": robin(2.0)}, id="ellipse"),
    pytest.param(
        Annulus((0, 0), 0.4, 1.0, (0.2, 0)), {"inner": "neumann", "outer": robin(1.5)}, id="annulus"
    ),
    pytest.param(Sector(1.0, 1.5 * math.pi), {"arc": "neumann", "end": robin(1.0)}, id="sector"),
]


def observed(solver, posed, sizes=(8, 16)):
    """Return the orders in L2 and the H1 seminorm, element by element."""
    errors = []
    for n in sizes:
        samples = solver.solve(posed.problem, n).element_quadrature(6)
        off = samples.values - posed.exact.value(samples.points)
        slope = np.sum((samples.gradients - posed.exact.gradient(samples.points)) ** 2, axis=1)
        errors.append([math.sqrt(samples.weights @ off**2), math.sqrt(samples.weights @ slope)])
    return np.log2(np.array(errors[0]) / np.array(errors[1]))


@pytest.mark.parametrize(("shape", "conditions"), SHAPES)
@pytest.mark.parametrize("material", ["scalar", "tensor"])
def test_orders_three_and_two(shape, conditions, material):
    exact, conductivity = (WAVE, 2.5) if material == "scalar" else (fields.stretched(WAVE, TENSOR), TENSOR)
    in_l2, in_h1 = observed(p2_element, case(shape, conditions, exact, conductivity))
    assert 2.7 < in_l2 < 3.4
    assert 1.8 < in_h1 < 2.3


def test_straight_sides_lose_an_order_under_a_curve_and_none_elsewhere():
    straight = QUADRATIC_FAULTS["straight sides"].adapter
    assert observed(straight, case(Disc((0, 0), 1.0), {}, WAVE))[0] < 2.3
    assert observed(straight, case(Rectangle((0, 0), (1.5, 1)), {}, WAVE))[0] > 2.7


def test_quadratic_solutions_are_exact_on_straight_sides():
    saddle = fields.polynomial(2, "im", centre=(0.2, -0.4))
    posed = case(Rectangle((0, 0), (1.5, 1)), {"left": "neumann", "top": robin(2.0)}, saddle)
    answer = p2_element.solve(posed.problem, 6)
    np.testing.assert_allclose(answer.values, posed.exact.value(answer.points), rtol=0, atol=1e-12)


def test_bent_triangles_have_the_area_of_the_disc_up_to_the_fourth_power():
    # chords leave h^2, parabolas through three points of the circle h^4
    gaps = [math.pi - bent(Disc((0, 0), 1.0), n).areas.sum() for n in (8, 16)]
    assert 3.7 < math.log2(gaps[0] / gaps[1]) < 4.3
    flat = [math.pi - with_middles_of(n).areas.sum() for n in (8, 16)]
    assert 1.8 < math.log2(flat[0] / flat[1]) < 2.2


def with_middles_of(n):
    """Return the mesh of a disc whose sides are straight."""
    return with_middles(triangulate(Disc((0, 0), 1.0), n // 2))


def test_stiffness_maps_constants_to_zero_and_is_symmetric():
    matrix = stiffness(bent(Disc((0, 0), 1.0), 6), TENSOR).toarray()
    np.testing.assert_allclose(matrix.sum(axis=1), 0.0, rtol=0, atol=1e-12)
    np.testing.assert_allclose(matrix, matrix.T, rtol=0, atol=1e-13)


def test_boundary_mass_integrates_over_the_whole_circle():
    posed = case(Disc((0, 0), 1.0), {"rim": robin(2.0)}, WAVE).problem
    mesh = bent(posed.shape, 32)
    ones = np.ones(len(mesh.points))
    total = ones @ boundary_mass(mesh, posed.pieces["rim"]) @ ones
    assert total == pytest.approx(4 * math.pi, rel=1e-6)  # (h/2)^4
