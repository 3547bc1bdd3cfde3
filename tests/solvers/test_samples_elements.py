"""The linear element sample: order two in L2, one in the H1 seminorm, on every shape, all conditions."""

from __future__ import annotations

import math

import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.geometry import (
    Annulus,
    ConfocalParabolas,
    Disc,
    Ellipse,
    LShape,
    Polygon,
    Rectangle,
    Sector,
)
from laplace_verify.geometry.meshes import triangulate
from laplace_verify.problems import case, neumann, problem, robin
from laplace_verify.solvers.samples import five_point, p1_element
from laplace_verify.solvers.samples.linear_elements import boundary_mass, stiffness

TENSOR = np.array([[2.0, 0.7], [0.7, 1.0]])
WAVE = fields.exp_trig(1.3, "cos", centre=(0.1, 0.2))
HOLES = (((1, 1), (1, 2), (2, 2), (2, 1)),)
SLIT = Polygon(((0, 0), (1, 0), (1, 1), (0, 1), (0, 0.5), (0.5, 0.5), (0, 0.5)))


def observed(posed, sizes):
    """Return the orders in L2 and the H1 seminorm, element by element."""
    errors = []
    for n in sizes:
        samples = p1_element.solve(posed.problem, n).element_quadrature(4)
        off = samples.values - posed.exact.value(samples.points)
        slope = np.sum((samples.gradients - posed.exact.gradient(samples.points)) ** 2, axis=1)
        errors.append([math.sqrt(samples.weights @ off**2), math.sqrt(samples.weights @ slope)])
    errors = np.log(np.array(errors))
    return (errors[:-1] - errors[1:]) / np.log(np.array(sizes[1:]) / np.array(sizes[:-1]))[:, np.newaxis]


SHAPES = [
    pytest.param(Rectangle((0, 0), (1.5, 1)), {"left": "neumann", "top": robin(2.0)}, id="rectangle"),
    pytest.param(LShape(1.0), {"side-1": "neumann", "side-3": robin(2.0)}, id="l-shape"),
    pytest.param(Disc((0, 0), 1.0).split(rim=[0.3]), {"rim-1": "neumann"}, id="disc"),
    pytest.param(Ellipse((0, 0), (1.5, 1)), {"rim": robin(2.0)}, id="ellipse"),
    pytest.param(
        ConfocalParabolas((0.1, -0.2), 0.9, 0.9), {"right": "neumann", "left": robin(1.5)}, id="parabolas"
    ),
    pytest.param(
        Annulus((0, 0), 0.4, 1.0, (0.2, 0)), {"inner": "neumann", "outer": robin(1.5)}, id="annulus"
    ),
    pytest.param(Sector(1.0, 1.5 * math.pi), {"arc": "neumann", "end": robin(1.0)}, id="sector"),
    pytest.param(
        Polygon(((0, 0), (3, 0), (3, 3), (0, 3)), holes=HOLES), {"hole-1-side-1": "neumann"}, id="hole"
    ),
    pytest.param(SLIT, {"side-5": "neumann"}, id="slit"),
]


@pytest.mark.parametrize(("shape", "conditions"), SHAPES)
@pytest.mark.parametrize("material", ["scalar", "tensor"])
def test_orders_two_and_one(shape, conditions, material):
    exact, conductivity = (WAVE, 2.5) if material == "scalar" else (fields.stretched(WAVE, TENSOR), TENSOR)
    orders = observed(case(shape, conditions, exact, conductivity), (8, 16))
    assert np.all((orders[:, 0] > 1.8) & (orders[:, 0] < 2.2)), orders
    assert np.all((orders[:, 1] > 0.9) & (orders[:, 1] < 1.15)), orders


@pytest.mark.parametrize("shape", [Rectangle((0, 0), (1.5, 1)), LShape(1.0)])
def test_on_uniform_right_triangles_dirichlet_values_are_those_of_the_five_point_formula(shape):
    # Courant 1943; Strang & Fix 1973: the stiffness stencil is (4, -1, -1, -1, -1).
    posed = case(shape, {}, WAVE)
    elements, grid = p1_element.solve(posed.problem, 6), five_point.solve(posed.problem, 6)
    order = [np.lexsort(answer.points.round(9).T) for answer in (elements, grid)]
    np.testing.assert_allclose(elements.points[order[0]], grid.points[order[1]], rtol=0, atol=1e-14)
    np.testing.assert_allclose(elements.values[order[0]], grid.values[order[1]], rtol=1e-12, atol=1e-13)


def test_stiffness_row_of_an_inner_node_is_the_five_point_stencil():
    mesh = triangulate(Rectangle((0, 0), (1, 1)), 4)
    matrix = stiffness(mesh, np.eye(2)).toarray()
    row = matrix[np.argmin(np.linalg.norm(mesh.points - 0.5, axis=1))]
    np.testing.assert_allclose(sorted(row[np.abs(row) > 1e-14]), [-1, -1, -1, -1, 4], rtol=1e-14)
    np.testing.assert_allclose(matrix, matrix.T, rtol=0, atol=1e-15)
    np.testing.assert_allclose(matrix.sum(axis=1), 0.0, rtol=0, atol=1e-14)


def test_boundary_mass_integrates_alpha_times_linear_functions_exactly():
    shape = Rectangle((0, 0), (2, 1))
    sides = dict.fromkeys(("left", "right", "bottom"), neumann(0.0))
    posed = problem(shape, {"top": robin("1 + x", 0.0), **sides})
    mesh = triangulate(shape, 3)
    mass = boundary_mass(mesh, posed.pieces["top"])
    ones, x = np.ones(len(mesh.points)), mesh.points[:, 0]
    # Integrals over 0 < x < 2 of (1 + x) and (1 + x) x^2: 4 and 8/3 + 4.
    assert ones @ mass @ ones == pytest.approx(4.0, rel=1e-14)
    assert x @ mass @ x == pytest.approx(8 / 3 + 4, rel=1e-14)


@pytest.mark.parametrize("constant", [("mean", 3.0), ("point", (0.3, -0.2), 3.0)])
def test_pure_flux_problems_get_the_level_they_ask_for(constant):
    shape = Disc((0, 0), 1.0)
    data = case(shape, {"rim": "neumann"}, WAVE).problem.pieces["rim"].data
    answer = p1_element.solve(problem(shape, {"rim": neumann(data)}, constant=constant), 8)
    if constant[0] == "point":
        assert answer.value_at([constant[1]])[0] == pytest.approx(3.0, abs=1e-12)
    else:
        samples = answer.element_quadrature(2)
        assert samples.weights @ samples.values / samples.weights.sum() == pytest.approx(3.0, abs=1e-12)


def test_the_arc_of_a_full_turn_takes_the_limits_of_both_its_ends():
    # r^(1/4) sin(theta/4), -2 pi < theta < 0: -1 where the arc leaves one lip of the slit, 0 at the other.
    posed = case(Sector(1.0, 2 * math.pi), {"end": "neumann"}, fields.wedge(0.25, "sin", cut=0.0))
    answer = p1_element.solve(posed.problem, 8)
    at_meeting = np.linalg.norm(answer.points - np.array([1.0, 0.0]), axis=1) < 1e-9
    np.testing.assert_allclose(sorted(answer.values[at_meeting]), [-1.0, 0.0], rtol=0, atol=1e-8)


def test_affine_solutions_are_exact():
    posed = case(SLIT, {"side-2": "neumann", "side-3": robin(2.0)}, fields.affine([2.0, -1.0], 0.5), TENSOR)
    answer = p1_element.solve(posed.problem, 3)
    np.testing.assert_allclose(answer.values, posed.exact.value(answer.points), rtol=0, atol=1e-13)
