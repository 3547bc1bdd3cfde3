"""Difference equations on small grids and their convergence, against textbooks and exact solutions."""

from fractions import Fraction

import mpmath
import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.solvers.samples import five_point, p1_element

SQUARE = lv.Rectangle((0, 0), (1, 1))
ROUNDING = 1e-13  # of values of size 1 and 100 from direct solves of a few dozen equations


def square(**data):
    """Given values on the sides of the unit square."""
    return lv.problem(SQUARE, {name: lv.dirichlet(value) for name, value in data.items()})


def nodes(n):
    """Interior nodes of n x n cells, row by row from the bottom."""
    x = np.arange(1, n) / n
    return np.array([(a, b) for b in x for a in x])


def test_heated_plate_of_nine_nodes():
    # Chapra & Canale, Numerical Methods for Engineers, example 29.1 (from memory); the converged values are
    # rationals, the textbook prints iterates stopped at 1 %.
    plate = square(top=100, left=75, right=50, bottom=0)
    found = five_point.solve(plate, 4).value_at(nodes(4))
    exact = [300 / 7, 3725 / 112, 475 / 14, 7075 / 112, 225 / 4, 5875 / 112, 550 / 7, 8525 / 112, 975 / 14]
    assert found == pytest.approx(exact, rel=ROUNDING, abs=0)
    printed = [43.00061, 33.29755, 33.88506, 63.21152, 56.11238, 52.33999, 78.58718, 76.06402, 69.71050]
    assert found == pytest.approx(printed, rel=3.5e-3, abs=0)


def test_square_with_a_hot_top_of_nine_nodes():
    # Textbook example, rational arithmetic (from memory, exact).
    found = five_point.solve(square(top=1, left=0, right=0, bottom=0), 4).value_at(nodes(4))
    exact = ["1/14", "11/112", "1/14", "3/16", "1/4", "3/16", "3/7", "59/112", "3/7"]
    assert found == pytest.approx([float(Fraction(f)) for f in exact], rel=ROUNDING, abs=0)


def test_plate_of_four_nodes():
    # Holman, Heat Transfer, ch. 3 (from memory, exact): upper pair 250, lower pair 150.
    found = five_point.solve(square(top=500, left=100, right=100, bottom=100), 3).value_at(nodes(3))
    assert found == pytest.approx([150, 150, 250, 250], rel=ROUNDING, abs=0)


def test_column_with_one_convecting_side():
    # Incropera & DeWitt, example 4.3 (from memory, all printed digits confirmed): 1 m square, k = 1, three
    # sides at 500 K, the fourth convecting to 300 K with h = 10. Odd nodes off the centre line, even ones on
    # it, far side first.
    column = lv.problem(
        SQUARE,
        {
            "left": lv.dirichlet(500),
            "right": lv.dirichlet(500),
            "top": lv.dirichlet(500),
            "bottom": lv.robin(10, 3000),
        },
    )
    answer = five_point.solve(column, 4)
    places = [(x, y) for y in (0.75, 0.5, 0.25, 0.0) for x in (0.25, 0.5)]
    printed = [489.30, 485.15, 472.07, 462.01, 436.95, 418.74, 356.99, 339.05]
    found = answer.value_at(np.array(places))
    assert found == pytest.approx(printed, abs=5.1e-3)  # rounded to two decimals
    heat = 2 * 10 * (0.125 * (500 - 300) + 0.25 * (found[6] - 300) + 0.125 * (found[7] - 300))
    assert heat == pytest.approx(882.6, abs=0.05)  # printed as 883


# -- residuals on harmonic polynomials ---------------------------------------------------------------------


def stencil(field, point, h, weights):
    """Sum of weights times values at point + h offset, in 40 digits."""
    with mpmath.workdps(45):
        place = [mpmath.mpf(c) for c in point]
        total = mpmath.mpf(0)
        for offset, weight in weights.items():
            total += weight * field.at(
                tuple(c + h * o for c, o in zip(place, offset, strict=True)), digits=40
            )
        return total


def cross(dim):
    """The (2 dim + 1)-point stencil, times h^2."""
    weights = {(0,) * dim: -2 * dim}
    for axis in range(dim):
        for sign in (1, -1):
            weights[tuple(sign * (k == axis) for k in range(dim))] = 1
    return weights


NINE = {(a, b): 4 if a * b == 0 else 1 for a in (-1, 0, 1) for b in (-1, 0, 1)} | {(0, 0): -20}
X, Y, H = 0.375, -0.625, 0.25


@pytest.mark.parametrize(
    ("degree", "part", "expected"),
    [(1, "re", 0), (2, "re", 0), (2, "im", 0), (3, "re", 0), (3, "im", 0), (4, "im", 0), (4, "re", 4),
     (5, "re", 20 * X), (5, "im", 20 * Y), (6, "re", 60 * (X**2 - Y**2)), (6, "im", 120 * X * Y)],
)  # fmt: skip
def test_five_point_residual_on_harmonic_polynomials(degree, part, expected):
    # h^2/12 (u_xxxx + u_yyyy) and exact above: Milne 1953; Collatz 1960 (from memory, confirmed
    # symbolically).
    found = stencil(lv.fields.polynomial(degree, part), (X, Y), H, cross(2)) / H**2
    assert abs(found - expected * H**2) < mpmath.mpf("1e-30")


@pytest.mark.parametrize(
    ("degree", "part"), [(n, p) for n in range(1, 8) for p in ("re", "im")] + [(8, "im")]
)
def test_nine_point_residual_vanishes_to_degree_seven(degree, part):
    # Kantorovich & Krylov 1958; Collatz 1960; Rosser 1975 (from memory, confirmed symbolically).
    assert abs(stencil(lv.fields.polynomial(degree, part), (X, Y), H, NINE)) < mpmath.mpf("1e-30")


def test_nine_point_residual_on_degree_eight():
    # Same sources: (40/3) h^6.
    found = stencil(lv.fields.polynomial(8), (X, Y), H, NINE) / (6 * H**2)
    assert abs(found - mpmath.mpf(40) / 3 * H**6) < mpmath.mpf("1e-30")


def test_seven_point_residual_in_space():
    # x^4 + y^4 + z^4 - 3 (x^2 y^2 + y^2 z^2 + z^2 x^2): 6 h^2; x^4 - 6 x^2 y^2 + y^4: 4 h^2; cubics: 0 (as
    # above).
    cubic_symmetric = lv.field("x**4 + y**4 + z**4 - 3*(x**2*y**2 + y**2*z**2 + z**2*x**2)")
    flat = lv.field("x**4 - 6*x**2*y**2 + y**4", dim=3)
    for field, expected in [
        (cubic_symmetric, 6),
        (flat, 4),
        (lv.fields.solid(3, -2), 0),
        (lv.fields.solid(3, 0), 0),
    ]:
        found = stencil(field, (X, Y, 0.5), H, cross(3)) / H**2
        assert abs(found - expected * H**2) < mpmath.mpf("1e-28")


@pytest.mark.parametrize(
    ("degree", "part", "exact"), [(2, "re", True), (3, "im", True), (4, "im", True), (4, "re", False)]
)
def test_five_point_solver_is_exact_at_its_nodes_where_the_residual_vanishes(degree, part, exact):
    case = lv.case(SQUARE, {}, lv.fields.polynomial(degree, part))
    answer = five_point.solve(case.problem, 8)
    wrong = np.abs(answer.values - case.exact.value(answer.points)).max()
    assert (wrong < 20 * ROUNDING) == exact


# -- discrete separated solutions --------------------------------------------------------------------------

# sin(a x) sinh(b y) solves the five-point equations if cosh(b h) = 2 - cos(a h): Courant, Friedrichs & Lewy
# 1928; Forsythe & Wasow 1960 (from memory). Unit square, sin(pi x) on one side: 1/(2 cosh(b/2)) in the
# centre; errors computed.
CENTRE_ERRORS = {
    4: 0.0141199399791,
    8: 0.00364681585263,
    16: 0.000919615294858,
    32: 0.000230408916213,
    64: 5.76339684251e-5,
}
MODE = lv.fields.exp_trig(1, "sin", "sinh", centre=(0, 1), level=0, times_pi=True)


@pytest.mark.parametrize(("n", "expected"), CENTRE_ERRORS.items())
def test_five_point_solver_reproduces_the_discrete_separated_solution(n, expected):
    case = lv.case(SQUARE, {}, MODE)
    centre = np.array([[0.5, 0.5]])
    found = five_point.solve(case.problem, n).value_at(centre)[0]
    h = 1 / n
    b = np.arccosh(2 - np.cos(np.pi * h)) / h
    assert found == pytest.approx(
        1 / (2 * np.cosh(b / 2)), rel=1e-12, abs=0
    )  # arccosh near 1 loses a few digits
    assert found - case.exact.value(centre)[0] == pytest.approx(expected, abs=2e-13)
    if n == 8:
        assert b == pytest.approx(3.101976299364463, rel=1e-13, abs=0)
        assert found == pytest.approx(0.202915223521828, abs=1e-14)


def test_five_point_scheme_on_smooth_data():
    # Order 2 in the maximum norm: Gerschgorin 1930; Forsythe & Wasow 1960 (from memory); errors of e^x cos y
    # on the unit square measured independently.
    case = lv.case(SQUARE, {}, lv.fields.exp_trig(1))
    found = []
    for n in (8, 16, 32, 64):
        answer = five_point.solve(case.problem, n)
        found.append(np.abs(answer.values - case.exact.value(answer.points)).max())
    assert found == pytest.approx([2.7635e-4, 7.0711e-5, 1.7749e-5, 4.4418e-6], rel=2e-5, abs=0)
    assert np.log2(found[-2] / found[-1]) == pytest.approx(1.9985, abs=1e-3)


def test_five_point_scheme_at_a_jump_of_the_data():
    # Order 2 away from the jump, no convergence of the maximum (limit 0.00718): Wasow 1957; Bramble, Hubbard
    # & Thomee 1969 (from memory); figures measured independently.
    u = lv.fields.rectangle_series((0, 0), (1, 1), 1)
    point, largest, fixed = np.array([[0.5, 0.75]]), [], []
    for n in (16, 32, 64):
        answer = five_point.solve(square(top=1, left=0, right=0, bottom=0), n)
        inner = nodes(n)
        largest.append(np.abs(answer.value_at(inner) - u.value(inner)).max())
        fixed.append(answer.value_at(point)[0] - u.value(point)[0])
    assert largest == pytest.approx([0.007223, 0.007183, 0.007180], abs=6e-7)
    assert np.log2(fixed[-2] / fixed[-1]) == pytest.approx(2.0, abs=0.01)  # 1.9982 at h = 1/128


def test_linear_elements_on_right_triangles_are_the_five_point_scheme():
    # Courant 1943; Strang & Fix 1973 (from memory, exact): the stencil is 4, -1, -1, -1, -1.
    problem = lv.case(SQUARE, {}, lv.fields.exp_trig(2)).problem
    inner = nodes(8)
    by_elements, by_differences = (s.solve(problem, 8).value_at(inner) for s in (p1_element, five_point))
    assert by_elements == pytest.approx(by_differences, rel=1e-12, abs=0)
