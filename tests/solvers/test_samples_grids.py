"""The five- and seven-point samples: textbook grids to the last digit, second order under every condition."""

from __future__ import annotations

import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.geometry import Box, Interval, LShape, Rectangle
from laplace_verify.problems import case, dirichlet, neumann, problem, robin
from laplace_verify.solvers.samples import five_point, seven_point
from laplace_verify.solvers.samples.finite_difference import box_stencil
from laplace_verify.solvers.samples.rectilinear import grid_on

UNIT = Rectangle((0, 0), (1, 1))
PLATE = Rectangle((0, 0), (1.5, 1))
DUCT = Box((0, 0, 0), (1, 1.2, 0.8))
TENSOR = np.array([[2.0, 0.7], [0.7, 1.0]])
WAVE = fields.exp_trig(1.3, "cos", centre=(0.1, 0.2))
SOLID = fields.solid(3, 1) + fields.solid(4, -2) + fields.point_source((2, 1, 1.5))


def observed(solver, posed, sizes):
    """Return errors at the nodes and the orders between sizes, in the maximum norm."""
    errors = []
    for n in sizes:
        answer = solver.solve(posed.problem, n)
        errors.append(np.max(np.abs(answer.values - posed.exact.value(answer.points))))
    ratios = np.array(sizes[1:]) / np.array(sizes[:-1])
    return np.array(errors), np.log(np.array(errors[:-1]) / errors[1:]) / np.log(ratios)


def at(answer, x, y):
    """Return the value at the node (x, y)."""
    distance = np.linalg.norm(answer.points - np.array([x, y]), axis=1)
    assert distance.min() < 1e-12
    return answer.values[np.argmin(distance)]


# ---- values from outside ----


def test_unit_square_with_hot_top_on_four_cells():
    # Textbook example in rational arithmetic: five-point scheme, h = 1/4, top 1, other sides 0.
    sides = {name: dirichlet(float(name == "top")) for name in ("left", "right", "bottom", "top")}
    answer = five_point.solve(problem(UNIT, sides), 4)
    rows = {0.25: (1 / 14, 11 / 112, 1 / 14), 0.5: (3 / 16, 1 / 4, 3 / 16), 0.75: (3 / 7, 59 / 112, 3 / 7)}
    for y, row in rows.items():
        for x, value in zip((0.25, 0.5, 0.75), row, strict=True):
            assert at(answer, x, y) == pytest.approx(value, rel=1e-14)


def test_heated_plate_on_four_cells():
    # Chapra & Canale, Numerical Methods for Engineers, example 29.1: top 100, left 75, right 50, bottom 0;
    # the exact solution of its nine equations, in rational arithmetic.
    sides = {
        "top": dirichlet(100.0),
        "left": dirichlet(75.0),
        "right": dirichlet(50.0),
        "bottom": dirichlet(0.0),
    }
    answer = five_point.solve(problem(UNIT, sides), 4)
    exact = [
        [300 / 7, 3725 / 112, 475 / 14],
        [7075 / 112, 225 / 4, 5875 / 112],
        [550 / 7, 8525 / 112, 975 / 14],
    ]
    for j, row in enumerate(exact):
        for i, value in enumerate(row):
            assert at(answer, (i + 1) / 4, (j + 1) / 4) == pytest.approx(value, rel=1e-14)


def test_plate_with_four_unknowns():
    # Holman, Heat Transfer, chapter 3, example: h = L/3, top 500, other sides 100: 250 above, 150 below.
    sides = {
        "top": dirichlet(500.0),
        "left": dirichlet(100.0),
        "right": dirichlet(100.0),
        "bottom": dirichlet(100.0),
    }
    answer = five_point.solve(problem(UNIT, sides), 3)
    for x in (1 / 3, 2 / 3):
        assert at(answer, x, 2 / 3) == pytest.approx(250.0, rel=1e-14)
        assert at(answer, x, 1 / 3) == pytest.approx(150.0, rel=1e-14)


def test_discrete_separated_solution_at_the_centre():
    # Courant, Friedrichs & Lewy 1928; Forsythe & Wasow 1960: with sin(pi x) on one side and 0 elsewhere the
    # discrete value at the centre is 1/(2 cosh(b/2)), cosh(b h) = 2 - cos(pi h); for 8 cells
    # 0.202915223521828.
    sides = {"bottom": dirichlet(lambda x, y: np.sin(np.pi * x) + 0 * y), "top": dirichlet(0.0),
             "left": dirichlet(0.0), "right": dirichlet(0.0)}  # fmt: skip
    answer = five_point.solve(problem(UNIT, sides), 8)
    assert at(answer, 0.5, 0.5) == pytest.approx(0.202915223521828, rel=1e-14)


@pytest.mark.parametrize("degree", [1, 2, 3])
@pytest.mark.parametrize("part", ["re", "im"])
def test_harmonic_cubics_are_exact_with_dirichlet_data(degree, part):
    # The five-point residual of Re/Im z^n is zero for n <= 3 (Milne 1953; Collatz 1960).
    posed = case(PLATE, {}, fields.polynomial(degree, part))
    errors, _ = observed(five_point, posed, (7, 8))
    assert errors.max() < 1e-13


def test_five_point_residuals_of_quartics():
    # Re z^4 leaves 4 h^2, Im z^4 nothing (Milne 1953; Collatz 1960).
    h = 0.125
    grid = grid_on(UNIT, 8)
    inner = np.all((grid.points > 0.01) & (grid.points < 0.99), axis=1)
    for part, residual in (("re", 4 * h**2), ("im", 0.0)):
        u = fields.polynomial(4, part).value(grid.points)
        laplacian = -(box_stencil(grid, np.eye(2)) @ u)[inner] / h**2
        np.testing.assert_allclose(laplacian, residual, rtol=1e-11, atol=1e-11)


def test_seven_point_residuals_of_quartics_and_exact_cubics():
    # Residuals 4 h^2 for x^4 - 6 x^2 y^2 + y^4 and 6 h^2 for x^4 + y^4 + z^4 - 3 (x^2 y^2 + y^2 z^2 + z^2
    # x^2); zero for cubics and xyz (Milne 1953; Collatz 1960).
    n = 5
    h = 1 / n
    grid = grid_on(Box((0, 0, 0), (1, 1, 1)), n)
    inner = np.all((grid.points > 0.01) & (grid.points < 0.99), axis=1)
    x, y, z = grid.points.T
    cases = [
        (x**4 - 6 * x**2 * y**2 + y**4, 4 * h**2),
        (x**4 + y**4 + z**4 - 3 * (x**2 * y**2 + y**2 * z**2 + z**2 * x**2), 6 * h**2),
        (x**3 - 3 * x * z**2, 0.0),
        (x * y * z, 0.0),
    ]
    for u, residual in cases:
        laplacian = -(box_stencil(grid, np.eye(3)) @ u)[inner] / h**3
        np.testing.assert_allclose(laplacian, residual, rtol=1e-11, atol=1e-11)


def test_stencil_is_five_points_with_a_diagonal_of_four_and_symmetric_with_a_tensor():
    grid = grid_on(UNIT, 4)
    stencil = box_stencil(grid, np.eye(2)).toarray()
    middle = np.argmin(np.linalg.norm(grid.points - 0.5, axis=1))
    assert sorted(stencil[middle][stencil[middle] != 0].tolist()) == [-1.0, -1.0, -1.0, -1.0, 4.0]
    mixed = box_stencil(grid, TENSOR).toarray()
    np.testing.assert_allclose(mixed, mixed.T, rtol=0, atol=1e-14)
    assert np.count_nonzero(np.abs(mixed[middle]) > 1e-14) == 9


# ---- order two ----

CONDITIONS = [
    pytest.param({}, id="dirichlet"),
    pytest.param({"left": "neumann"}, id="one neumann"),
    pytest.param({"left": "neumann", "top": robin(3.0)}, id="neumann robin corner"),
    pytest.param({"left": "neumann", "right": robin("1 + y"), "top": "neumann"}, id="neumann neumann corner"),
    pytest.param(dict.fromkeys(("left", "right", "bottom", "top"), robin(1.0)), id="robin around"),
    pytest.param(dict.fromkeys(("left", "right", "bottom", "top"), "neumann"), id="pure neumann"),
]


@pytest.mark.parametrize("conditions", CONDITIONS)
@pytest.mark.parametrize("material", ["scalar", "tensor"])
def test_five_point_is_second_order_up_to_the_boundary(conditions, material):
    exact, conductivity = (WAVE, 2.5) if material == "scalar" else (fields.stretched(WAVE, TENSOR), TENSOR)
    _, orders = observed(five_point, case(PLATE, conditions, exact, conductivity), (12, 24, 48))
    assert np.all((orders > 1.85) & (orders < 2.15)), orders


@pytest.mark.parametrize("conditions", [{}, {"side-1": "neumann", "side-6": robin(2.0), "side-3": "neumann"}])
@pytest.mark.parametrize("material", ["scalar", "tensor"])
def test_five_point_is_second_order_on_the_l_shape(conditions, material):
    exact, conductivity = (WAVE, 2.5) if material == "scalar" else (fields.stretched(WAVE, TENSOR), TENSOR)
    _, orders = observed(five_point, case(LShape(1.0), conditions, exact, conductivity), (8, 16, 32))
    assert np.all((orders > 1.85) & (orders < 2.15)), orders


def test_a_condition_may_change_within_a_side_off_the_even_grid():
    posed = case(PLATE.split(top=[0.4]), {"top-1": "neumann"}, WAVE, 3.0)
    errors, orders = observed(five_point, posed, (10, 20, 40))
    assert errors[-1] < 2e-4
    assert np.all((orders > 1.8) & (orders < 2.2)), orders


def test_linear_solutions_are_exact_in_one_dimension():
    for conditions in (
        {},
        {"left": "neumann"},
        {"right": robin(2.0)},
        {"left": "neumann", "right": "neumann"},
    ):
        posed = case(Interval(0.5, 2.0), conditions, fields.affine([2.0], 1.0), 3.0)
        errors, _ = observed(five_point, posed, (5, 9))
        assert errors.max() < 1e-13


@pytest.mark.parametrize(
    "conditions",
    [
        {},
        {"left": "neumann", "top": "neumann", "front": robin(2.0)},
        dict.fromkeys(("left", "right", "front", "back", "bottom", "top"), "neumann"),
    ],
)
@pytest.mark.parametrize("diagonal", [(2.0, 2.0, 2.0), (1.0, 2.0, 3.0)])
def test_seven_point_is_second_order(conditions, diagonal):
    conductivity = np.diag(diagonal)
    posed = case(DUCT, conditions, fields.stretched(SOLID, conductivity), conductivity)
    _, orders = observed(seven_point, posed, (6, 9, 13))
    assert np.all((orders > 1.65) & (orders < 2.3)), orders


def test_seven_point_reports_its_iteration():
    answer = seven_point.solve(case(DUCT, {"left": "neumann"}, SOLID).problem, 6)
    assert answer.iterations is not None
    assert 5 < answer.iterations < 200
    assert 0 <= answer.residual < 1e-10
    assert answer.unknowns == 6 * 5 * 5


@pytest.mark.parametrize(
    "conditions",
    [
        {"left": "neumann", "top": robin(1.0)},
        dict.fromkeys(("left", "right", "front", "back", "bottom", "top"), "neumann"),
    ],
)
def test_seven_point_is_second_order_on_edges_under_mixed_derivatives(conditions):
    conductivity = np.array([[2, 0.5, 0.3], [0.5, 1.0, 0.2], [0.3, 0.2, 1.5]])
    posed = case(DUCT, conditions, fields.stretched(SOLID, conductivity), conductivity)
    _, orders = observed(seven_point, posed, (6, 9, 13))
    # Without the rows of `corner_rows` the pure Neumann problem shows 1.2 and 1.3 here.
    assert np.all((orders > 1.65) & (orders < 2.3)), orders


# ---- level and fluxes ----


@pytest.mark.parametrize("level", ["mean", "point", None])
def test_pure_flux_problems_get_the_level_they_ask_for(level):
    around = dict.fromkeys(("left", "right", "bottom", "top"), "neumann")
    posed = case(PLATE, around, WAVE)
    point = (0.6, 0.45)
    constant = {"mean": ("mean", 3.0), "point": ("point", point, 3.0), None: None}[level]
    given = {name: neumann(posed.problem.pieces[name].data) for name in around}
    answer = five_point.solve(problem(PLATE, given, constant=constant), 16)
    if level == "point":
        assert answer.value_at([point])[0] == pytest.approx(3.0, abs=1e-12)
        return
    samples = answer.element_quadrature(2)
    mean = samples.weights @ samples.values / samples.weights.sum()
    assert mean == pytest.approx(3.0 if level == "mean" else 0.0, abs=1e-12)


def test_fluxes_through_every_side_converge_with_order_two_and_balance():
    posed = case(PLATE, {"left": "neumann", "top": robin(2.0)}, WAVE, 2.5)
    errors = []
    for n in (16, 32):
        answer = five_point.solve(posed.problem, n)
        exact = {}
        for piece in posed.problem.pieces:
            points, normals, weights = piece.quadrature(20)
            exact[piece.name] = 2.5 * weights @ np.sum(posed.exact.gradient(points) * normals, axis=1)
        errors.append([answer.fluxes[name] - value for name, value in exact.items()])
        assert sum(answer.fluxes.values()) == pytest.approx(0.0, abs=1e-11)
    ratios = np.array(errors[0]) / np.array(errors[1])
    np.testing.assert_allclose(ratios, 4.0, rtol=0.1)
