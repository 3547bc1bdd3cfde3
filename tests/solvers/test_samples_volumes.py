"""Cell-centred finite volumes: known small systems, order two in the integral norms, fluxes and levels."""

import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.cases import catalogue
from laplace_verify.geometry import Interval, Rectangle
from laplace_verify.problems import case, dirichlet, layers, neumann, problem, robin
from laplace_verify.solvers.adapter import Refused
from laplace_verify.solvers.samples import cell_centred
from laplace_verify.solvers.samples.cell_centred import in_series

PLATE = Rectangle((0, 0), (1.5, 1))
WAVE = fields.exp_trig(1.3, "cos", centre=(0.1, 0.2))
AROUND = ("left", "right", "bottom", "top")


def averages(posed, answer):
    """Return the exact averages over the cells by three Gauss points an axis (errors of h^6)."""
    samples = answer.element_quadrature(5)
    exact = posed.exact.value(samples.points)
    per_cell = len(samples.points) // len(answer.values)
    weights = samples.weights.reshape(-1, per_cell)
    return np.sum(weights * exact.reshape(-1, per_cell), axis=1) / weights.sum(axis=1), weights.sum(axis=1)


def orders(posed, sizes=(12, 24, 48)):
    """Return the observed orders in the discrete L2 norm."""
    errors = []
    for n in sizes:
        answer = cell_centred.solve(posed.problem, n)
        exact, volumes = averages(posed, answer)
        errors.append(np.sqrt(np.average((answer.values - exact) ** 2, weights=volumes)))
    return np.log2(np.array(errors[:-1]) / errors[1:])


def test_rod_of_five_cells():
    # Versteeg & Malalasekera, An Introduction to Computational Fluid Dynamics, example 4.1 (from memory,
    # unchecked; the exact solution is linear): ends at 100 and 500, five cells of 0.1.
    rod = problem(Interval(0.0, 0.5), {"left": dirichlet(100.0), "right": dirichlet(500.0)}, 1000.0)
    answer = cell_centred.solve(rod, 5)
    np.testing.assert_allclose(answer.values, [140.0, 220.0, 300.0, 380.0, 460.0], rtol=1e-13)
    assert answer.fluxes["right"] == pytest.approx(1000.0 * 400.0 / 0.5, rel=1e-12)


def test_two_layers_carry_what_their_resistances_in_a_row_allow():
    wall = problem(
        Interval(0.0, 1.0),
        {"left": dirichlet(20.0), "right": robin(4.0, 0.0)},
        layers((1,), ["3/4"], {"brick": 0.5, "felt": 0.125}),
    )
    answer = cell_centred.solve(wall, 8)
    assert answer.fluxes["left"] == pytest.approx(20.0 / (0.75 / 0.5 + 0.25 / 0.125 + 1.0 / 4.0), rel=1e-13)
    assert answer.fluxes["right"] == pytest.approx(-answer.fluxes["left"], rel=1e-13)


def test_half_cells_in_a_row_give_the_harmonic_mean():
    assert in_series(np.array([2.0]), np.array([6.0])) == pytest.approx(1.5)  # 1 / (1/2 + 1/6)


@pytest.mark.parametrize(
    "conditions",
    [
        {},
        {"left": "neumann"},
        {"left": "neumann", "top": robin(3.0)},
        {"left": "neumann", "right": robin("1 + y"), "top": "neumann"},
        dict.fromkeys(AROUND, robin(1.0)),
        dict.fromkeys(AROUND, "neumann"),
    ],
)
def test_second_order_in_the_mean(conditions):
    found = orders(case(PLATE, conditions, WAVE, 2.5))
    assert np.all((found > 1.85) & (found < 2.15)), found


def test_fluxes_balance_and_converge_with_order_two():
    posed = case(PLATE, {"left": "neumann", "top": robin(2.0)}, WAVE, 2.5)
    errors = []
    for n in (16, 32):
        answer = cell_centred.solve(posed.problem, n)
        piece = posed.problem.pieces["top"]
        points, normals, weights = piece.quadrature(20)
        exact = 2.5 * weights @ np.sum(posed.exact.gradient(points) * normals, axis=1)
        errors.append(answer.fluxes["top"] - exact)
        assert sum(answer.fluxes.values()) == pytest.approx(0.0, abs=1e-11)
    assert errors[0] / errors[1] == pytest.approx(4.0, rel=0.1)


@pytest.mark.parametrize("level", ["mean", "point"])
def test_pure_flux_problems_get_the_level_they_ask_for(level):
    posed = case(PLATE, dict.fromkeys(AROUND, "neumann"), WAVE)
    point = (0.6, 0.45)
    constant = ("mean", 3.0) if level == "mean" else ("point", point, 3.0)
    given = {name: neumann(posed.problem.pieces[name].data) for name in AROUND}
    errors = []
    for n in (8, 32):
        answer = cell_centred.solve(problem(PLATE, given, constant=constant), n)
        if level == "mean":
            assert np.mean(answer.values) == pytest.approx(3.0, abs=1e-12)  # cells of one size
            continue
        exact, _ = averages(posed, answer)
        offset = 3.0 - float(posed.exact.value(np.array([point]))[0])
        errors.append(np.max(np.abs(answer.values - exact - offset)))
    if errors:
        assert errors[0] / errors[1] == pytest.approx(16.0, rel=0.3)  # the point's place in its cell differs


def test_unbalanced_fluxes_are_refused():
    with pytest.raises(Refused, match="zero net flux"):
        cell_centred(catalogue["plate-unbalanced-flux"].problem, 8)
