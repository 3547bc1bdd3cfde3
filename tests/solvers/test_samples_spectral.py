"""Chebyshev collocation and fundamental solutions: errors fall geometrically down to rounding."""

from __future__ import annotations

import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.geometry import Annulus, Disc, Ellipse, Interval, Rectangle
from laplace_verify.problems import case, neumann, problem, robin
from laplace_verify.solvers.samples import chebyshev, fundamental_solutions
from laplace_verify.solvers.samples.chebyshev_lines import Line, clenshaw_curtis
from laplace_verify.solvers.samples.source_points import confocal

PLATE = Rectangle((0, 0), (1.5, 1))
TENSOR = np.array([[2.0, 0.7], [0.7, 1.0]])
WAVE = fields.exp_trig(1.3, "cos", centre=(0.1, 0.2))
AROUND = ("left", "right", "bottom", "top")


def errors(solver, posed, sizes):
    """Return the largest errors of value and gradient at seeded points, one row a size."""
    rows = []
    for n in sizes:
        answer = solver.solve(posed.problem, n)
        points = posed.problem.shape.sample(137, seed=n)
        rows.append(
            [
                np.max(np.abs(answer.value_at(points) - posed.exact.value(points))),
                np.max(np.abs(answer.gradient_at(points) - posed.exact.gradient(points))),
            ]
        )
    return np.array(rows)


@pytest.mark.parametrize(
    "conditions",
    [
        pytest.param({}, id="dirichlet"),
        pytest.param({"left": "neumann", "top": "neumann"}, id="neumann corner"),
        pytest.param({"left": robin(2.0), "top": "neumann", "right": robin(1.0)}, id="robin"),
        pytest.param(dict.fromkeys(AROUND, "neumann"), id="pure neumann"),
        pytest.param(dict.fromkeys(AROUND, robin(1.0)), id="robin around"),
    ],
)
@pytest.mark.parametrize("material", ["scalar", "tensor"])
def test_chebyshev_converges_geometrically(conditions, material):
    exact, conductivity = (WAVE, 2.5) if material == "scalar" else (fields.stretched(WAVE, TENSOR), TENSOR)
    found = errors(chebyshev, case(PLATE, conditions, exact, conductivity), (4, 8, 12))
    # The entire function e^{ky} cos kx gains more than a factor 100 with each two degrees from here on; the
    # last value is rounding: eps times n^4 times the size of u.
    assert np.all(found[1] < 1e-3 * found[0])
    assert found[2, 0] < 1e-10
    assert found[2, 1] < 3e-9


def test_chebyshev_is_exact_for_polynomials_of_its_degree_and_not_below():
    for degree, exact in ((4, True), (6, False)):
        found = errors(chebyshev, case(PLATE, {"top": "neumann"}, fields.polynomial(degree, "re")), (5,))
        assert bool(found[0, 0] < 1e-11) is exact


@pytest.mark.parametrize("conditions", [{}, {"left": "neumann"}, {"left": "neumann", "right": "neumann"}])
def test_chebyshev_on_an_interval(conditions):
    posed = case(Interval(0.5, 2.0), conditions, fields.affine([2.0], 1.0), 3.0)
    assert errors(chebyshev, posed, (3, 8)).max() < 1e-11


def test_chebyshev_converges_geometrically_across_split_sides_and_slowly_at_singularities():
    cut = PLATE.split(top=[0.4])
    smooth = case(cut, {"top-1": "neumann", "left": robin(2.0)}, fields.stretched(WAVE, TENSOR), TENSOR)
    found = errors(chebyshev, smooth, (4, 8, 12))
    assert np.all(found[1] < 1e-3 * found[0])
    assert found[2, 0] < 1e-9
    # r^(1/2) at a change of conditions: the local error falls like 1/n, since points gather like 1/n^2 there.
    strong = case(
        PLATE.split(bottom=[0.4]),
        {"bottom-1": "neumann"},
        fields.wedge(0.5, "sin", cut=-1.0).shifted((0.6, 0.0)),
    )
    found = errors(chebyshev, strong, (6, 12, 24))
    assert np.all(found[1:, 0] < 0.7 * found[:-1, 0])


def test_chebyshev_at_its_own_nodes_is_no_division_by_zero():
    answer = chebyshev.solve(case(PLATE, {}, WAVE).problem, 12)
    points = np.array([[0.0, 0.0], [0.75, 0.5], [1.5, 1.0], [0.0, 0.3]])
    np.testing.assert_allclose(answer.value_at(points), WAVE.value(points), rtol=1e-10)


@pytest.mark.parametrize("n", [1, 2, 5, 8])
def test_clenshaw_curtis_integrates_polynomials_of_degree_n(n):
    x = np.cos(np.pi * np.arange(n + 1) / n)
    for power in range(n + 1):
        exact = (1 - (-1) ** (power + 1)) / (power + 1)
        assert clenshaw_curtis(n) @ x**power == pytest.approx(exact, abs=1e-14)


def test_differentiation_matrix_of_two_intervals_is_the_published_one():
    # Trefethen, Spectral Methods in MATLAB, 2000, chapter 6 (from memory): D_2 on x = 1, 0, -1.
    published = np.array([[1.5, -2.0, 0.5], [0.5, 0.0, -0.5], [-0.5, 2.0, -1.5]])
    rising = Line(stops=np.array([-1.0, 1.0]), n=2).derivative(1)
    np.testing.assert_allclose(rising[::-1, ::-1], published, rtol=0, atol=1e-15)


def test_a_line_of_two_polynomials_knows_slopes_jumps_and_integrals():
    line = Line(stops=np.array([0.0, 0.5, 2.0]), n=4)
    x = line.nodes()
    kinked = np.where(x < 0.5, x**3, 0.125 + 3.0 * (x - 0.5))
    assert (line.jump() @ kinked)[4] == pytest.approx(3.0 - 0.75, rel=1e-12)
    assert np.count_nonzero(line.jump() @ kinked) == 1
    assert line.weights() @ kinked == pytest.approx(0.5**4 / 4 + 1.5 * 0.125 + 1.5 * 1.5**2, rel=1e-13)
    at = np.array([0.2, 0.5, 1.7])
    np.testing.assert_allclose(line.basis(at) @ kinked, [0.008, 0.125, 3.725], rtol=1e-13)
    np.testing.assert_allclose(line.basis(at, slope=True) @ kinked, [0.12, 3.0, 3.0], rtol=1e-12)


SPLIT = Disc((0.2, 0.1), 0.5).split(rim=[0.3])
HOLED = Annulus((0, 0), 0.4, 1.0, (0.2, 0.0))


@pytest.mark.parametrize(
    ("shape", "conditions"),
    [
        pytest.param(SPLIT, {}, id="disc"),
        pytest.param(SPLIT, {"rim-1": "neumann", "rim-2": robin(2.0)}, id="disc mixed"),
        pytest.param(SPLIT, {"rim-1": "neumann", "rim-2": "neumann"}, id="disc pure neumann"),
        pytest.param(Ellipse((0, 0), (1.0, 0.6)), {"rim": "neumann"}, id="flat ellipse"),
        pytest.param(Ellipse((0, 0), (0.6, 1.0)), {}, id="tall ellipse"),
        pytest.param(HOLED, {"inner": "neumann"}, id="annulus"),
        pytest.param(HOLED, {"inner": "neumann", "outer": "neumann"}, id="annulus pure neumann"),
    ],
)
def test_fundamental_solutions_converge_geometrically(shape, conditions):
    # A charge in the hole, so that the annulus needs its logarithm.
    exact = WAVE + fields.log_source(HOLED.hole_centre, 2.0) if shape is HOLED else WAVE
    found = errors(fundamental_solutions, case(shape, conditions, exact, 2.0), (12, 24, 48))
    # Sources at twice the radius gain at least a factor 2^(n/2) between n and 2 n while the data are
    # resolved.
    assert np.all(found[1] < found[0] / 2**6)
    assert np.all(found[2, 0] < 1e-11)
    assert np.all(found[2, 1] < 1e-9)


def test_the_unit_disc_has_no_trouble_with_its_logarithmic_capacity_of_one():
    found = errors(fundamental_solutions, case(Disc((0, 0), 0.5), {}, fields.affine([1.0, 0.0], 7.0)), (32,))
    # Sources on the circle of radius 1 make no constant at all: the constant of its own must do it.
    assert found[:, 0].max() < 1e-8


def test_sources_lie_on_a_confocal_ellipse():
    points = confocal(np.array([1.0, 2.0]), (2.0, 1.0), 2.0, 9) - np.array([1.0, 2.0])
    focus = np.sqrt(3.0)
    # The sum of distances to the foci of the ellipse itself is twice the large semi-axis, here 3 + 1/4.
    total = np.hypot(points[:, 0] - focus, points[:, 1]) + np.hypot(points[:, 0] + focus, points[:, 1])
    np.testing.assert_allclose(total, 2 * (0.5 * 3.0 * 2.0 + 0.5 * 1.0 / 2.0), rtol=1e-14)


@pytest.mark.parametrize("solver", [chebyshev, fundamental_solutions])
@pytest.mark.parametrize("level", ["mean", "point"])
def test_pure_flux_problems_get_the_level_they_ask_for(solver, level):
    shape = PLATE if solver is chebyshev else SPLIT
    sides = dict.fromkeys(shape.pieces.names, "neumann")
    posed = case(shape, sides, WAVE)
    given = {name: neumann(posed.problem.pieces[name].data) for name in sides}
    point = (0.3, 0.2)
    constant = ("mean", 3.0) if level == "mean" else ("point", point, 3.0)
    answer = solver.solve(problem(shape, given, constant=constant), 24)
    if level == "point":
        assert answer.value_at([point])[0] == pytest.approx(3.0, abs=1e-11)
    else:
        points, weights = shape.quadrature(20)
        assert weights @ answer.value_at(points) / weights.sum() == pytest.approx(3.0, abs=1e-9)
