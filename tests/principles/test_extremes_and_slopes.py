"""Laws on extremes and slopes: a twin of a sound solver breaks each of them, where it should."""

from dataclasses import replace

import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.geometry import Annulus, Ball, Interval, LShape, Rectangle
from laplace_verify.measure.verdict import Verdict
from laplace_verify.principles import check_principle
from laplace_verify.principles.boundary_slope import BOUNDARY_SLOPE, Peak, harnack, touching_radius
from laplace_verify.principles.largest_gradient import LARGEST_GRADIENT
from laplace_verify.principles.law import Trial
from laplace_verify.principles.no_interior_extremum import NO_INTERIOR_EXTREMUM
from laplace_verify.principles.posed import Posed
from laplace_verify.solvers import Answer
from laplace_verify.solvers.samples import chebyshev, five_point, p1_element

FEW = 3  # problems drawn


def changed(change):
    """Return the five-point solver with values changed by `change(problem, points, values)`."""

    def solve(problem, n):
        answer = five_point(problem, n)
        values = change(problem, answer.points, answer.values)
        return Answer(answer.points, values, cells=answer.cells, h=answer.h)

    return replace(five_point, function=solve, name="twin")


def hump(problem, points):
    """Return a function that is 1 in the middle of the shape and 0 on the sides of its box."""
    lower, upper = problem.shape.bounding_box
    return np.prod(1.0 - (2.0 * (points - lower) / (upper - lower) - 1.0) ** 2, axis=1)


def bulging(problem, points, values):
    return values + 3.0 * np.max(np.abs(values)) * hump(problem, points)


def spiked(problem, points, values):
    spike = np.argmax(problem.shape.distance(points))
    return values + np.where(np.arange(len(values)) == spike, np.max(np.abs(values)), 0.0)


def steep(problem, points, values):  # an edge in the middle that no boundary shows
    lower, upper = problem.shape.bounding_box
    offset = (2.0 * points[:, 0] - lower[0] - upper[0]) / (upper[0] - lower[0])
    return values + 5.0 * np.max(np.abs(values)) * np.tanh(20.0 * offset)


def flat(problem, points, values):
    """The outermost quarter of the shape takes the value of the nearest point of the boundary."""
    depth = problem.shape.distance(points)
    result = values.copy()
    feet = np.stack([piece.boundary.project(points) for piece in problem.pieces])
    nearest = np.argmin(np.linalg.norm(feet - points, axis=2), axis=0)
    for k, piece in enumerate(problem.pieces):
        rows = (nearest == k) & (depth < depth.max() / 4.0)
        result[rows] = piece.data(feet[k, rows])
    return result


@pytest.mark.slow
@pytest.mark.parametrize(
    ("change", "law", "says"),
    [
        (bulging, NO_INTERIOR_EXTREMUM, "it lies between"),
        (spiked, NO_INTERIOR_EXTREMUM, "larger than at every neighbour"),
        (steep, LARGEST_GRADIENT, "half a cell from the boundary nowhere more"),
        (flat, BOUNDARY_SLOPE, "so the drop must be at least"),
    ],
    ids=["bulging", "spiked", "steep", "flat"],
)
def test_a_wrong_solver_breaks_the_law_and_the_code_shows_it(change, law, says):
    twin = changed(change)
    check = check_principle(twin, law.name, examples=FEW)
    assert check.verdict is Verdict.FAIL, check.reason
    assert says in check.reason
    assert check.points
    space = {}
    exec(check.example, space)  # our own text
    assert space["violation"](twin) == pytest.approx(check.violation, rel=1e-9)  # the same solve again
    assert space["violation"](five_point) < check.tolerance  # the problem itself is sound


@pytest.mark.parametrize("law", [NO_INTERIOR_EXTREMUM, BOUNDARY_SLOPE], ids=lambda law: law.name)
def test_what_an_m_matrix_scheme_declares_is_held_to_round_off(law):
    declared = replace(five_point, discrete_laws=frozenset({law.name}))
    assert check_principle(declared, law.name, examples=FEW).verdict is Verdict.PASS

    def small_spike(problem, n):  # vanishes in the limit: only the declaration is broken
        answer = five_point(problem, n)
        values = spiked(problem, answer.points, answer.values)
        values = answer.values + 3.0 * answer.h * (values - answer.values)
        return Answer(answer.points, values, cells=answer.cells, h=answer.h)

    def raised(problem, n):
        answer = five_point(problem, n)
        values = answer.values + 10.0 * answer.h**2 * np.max(np.abs(answer.values))
        return Answer(answer.points, values, cells=answer.cells, h=answer.h)

    solve = small_spike if law is NO_INTERIOR_EXTREMUM else raised
    strict = check_principle(replace(declared, function=solve), law.name, examples=FEW)
    assert strict.verdict is Verdict.FAIL
    assert "round-off" in strict.reason


@pytest.mark.parametrize(
    ("law", "reason"),
    [
        ("no interior extremum", "values between nodes are not available"),
        ("largest gradient on the boundary", "has no gradient"),
        ("slope at a boundary extremum", "values between nodes are not available"),
    ],
)
def test_a_bare_cloud_says_too_little(cloud, law, reason):
    check = check_principle(cloud, law, examples=FEW)
    assert check.verdict is Verdict.NOT_APPLICABLE
    assert reason in check.reason


def test_what_a_law_needs_is_said_where_a_solver_has_it_not(walks):
    stochastic = check_principle(walks, "largest gradient on the boundary")
    assert stochastic.verdict is Verdict.NOT_APPLICABLE
    assert "standard error is that of values" in stochastic.reason
    first = check_principle(replace(five_point, order=1.0), "largest gradient on the boundary")
    assert "gradients need not converge" in first.reason
    flux = check_principle(
        replace(five_point, conditions=frozenset({"neumann"})), "slope at a boundary extremum"
    )
    assert "Dirichlet conditions" in flux.reason
    declared = replace(chebyshev, discrete_laws=frozenset({"no interior extremum"}))
    assert "which nodes are neighbours" in check_principle(declared, "no interior extremum").reason


def trial_of(posed, solver):
    return Trial.of(posed, solver, 0, lambda: None)


def test_neighbours_are_found_in_triangles_too():
    posed = Posed(shape=Rectangle((0, 0), (1, 1)), conditions={}, field=fields.polynomial(2, "re"))

    def solve(problem, n):
        answer = p1_element(problem, n)
        values = spiked(problem, answer.points, -answer.values)
        return Answer(answer.points, values, cells=answer.cells)

    finding = NO_INTERIOR_EXTREMUM.judge(trial_of(posed, replace(p1_element, function=solve)))
    assert finding.broken
    assert "larger than at every neighbour" in finding.words
    assert not NO_INTERIOR_EXTREMUM.judge(trial_of(posed, p1_element)).broken


@pytest.mark.parametrize("dim", [1, 2, 3])
def test_the_least_share_is_that_of_poissons_kernel(dim):
    # at the distance s from p the kernel, in units of its value at the centre, is least at the far end of the
    # diameter: R^(d-2) (R^2 - r^2) / |x - q|^d (Gilbarg & Trudinger, equation 2.26, from memory, unchecked)
    radius, distance = 0.7, 0.2
    x = np.eye(1, dim)[0] * (radius - distance)
    turn = np.linspace(0.0, np.pi, 2001)
    circle = np.stack([np.cos(turn), np.sin(turn), 0 * turn], axis=1)[:, :dim]
    surface = radius * (np.array([[1.0], [-1.0]]) if dim == 1 else circle)
    apart = np.linalg.norm(surface - x, axis=1)
    kernel = radius ** (dim - 2) * (radius**2 - (radius - distance) ** 2) / apart**dim
    assert harnack(distance, radius, dim) == pytest.approx(kernel.min(), rel=1e-12)  # rounding


@pytest.mark.parametrize(
    ("shape", "point", "normal"),
    [
        (Interval(0, 2), (0.0,), (-1.0,)),
        (Annulus((0, 0), 0.5, 1.0), (0.5, 0.0), (-1.0, 0.0)),
        (LShape(1), (0.5, 0.0), (0.0, -1.0)),
        (Ball((0, 0, 0), 2), (0.0, 0.0, 2.0), (0.0, 0.0, 1.0)),
    ],
    ids=["interval", "annulus", "l-shape", "ball"],
)
def test_the_touching_ball_lies_inside(shape, point, normal):
    peak = Peak(np.array(point), np.array(normal), 1.0, 3.0)
    radius = touching_radius(shape, peak)
    centre = (peak.point - radius * peak.normal)[np.newaxis]
    assert shape.contains(centre).all()
    assert shape.distance(centre)[0] == pytest.approx(radius, rel=1e-9)
    assert radius > 0.1 * shape.extent
