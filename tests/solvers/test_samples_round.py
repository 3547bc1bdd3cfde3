"""Sample solvers in (r, z) and r: exact boxes, order two up to the axis, fluxes of space, a lost radius."""

import math

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.solvers.samples import FAULTS, chebyshev, five_point, p1_element
from laplace_verify.solvers.samples.rectilinear import axis_balances, grid_on

SWIRL = fields.axisymmetric(fields.solid(3, 0) + fields.point_source((0, 0, -1)))
SECTION, SLEEVE = lv.Rectangle((0, 0), (0.8, 1.1)), lv.Rectangle((0.3, 0), (0.9, 1.1))
MIXED = {"right": "neumann", "top": lv.robin(2.0)}
SOLID = lv.case(SECTION, MIXED, SWIRL, 1.5, coordinates="axisymmetric")
HOLLOW = lv.case(SLEEVE, {"left": "neumann", **MIXED}, SWIRL, 1.5, coordinates="axisymmetric")
PIPE = lv.case(
    lv.Interval(0.5, 2),
    {"left": "neumann", "right": lv.robin(3.0)},
    fields.radial("cylinder", 1, 2),
    0.7,
    coordinates="radial-cylinder",
)
TANK = lv.case(
    lv.Interval(0.5, 2), {"left": "neumann"}, fields.radial("sphere", 1, 2), 0.7, coordinates="radial-sphere"
)
ROUND = {"solid": SOLID, "hollow": HOLLOW, "pipe": PIPE, "tank": TANK}
OUTER = FAULTS["radius of the outer node"].adapter


def orders(solver, posed, sizes=(16, 32, 64)):
    """Observed orders in the maximum norm at the nodes."""
    errors = []
    for n in sizes:
        answer = solver.solve(posed.problem, n)
        errors.append(np.max(np.abs(answer.values - posed.exact.value(answer.points))))
    return np.log2(np.array(errors[:-1]) / errors[1:])


@pytest.mark.parametrize("name", ROUND)
def test_five_point_is_second_order_and_a_misplaced_radius_is_first(name):
    found = orders(five_point, ROUND[name])
    assert np.all(np.abs(found - 2.0) < 0.1), found
    wrong = orders(OUTER, ROUND[name])
    assert np.all(np.abs(wrong - 1.0) < 0.15), wrong


def test_the_misplaced_radius_is_invisible_in_cartesian_coordinates():
    flat = lv.case(SECTION, MIXED, fields.polynomial(3), 1.5)
    first, second = (solver.solve(flat.problem, 12).values for solver in (OUTER, five_point))
    np.testing.assert_array_equal(first, second)


@pytest.mark.parametrize("name", ["solid", "hollow"])
def test_linear_elements_are_second_order_in_r_and_z(name):
    study = lv.study(p1_element, ROUND[name])
    assert study.verdict is lv.Verdict.PASS, str(study)
    assert study.orders["L2"].observed == pytest.approx(2.0, abs=0.1)
    assert study.orders["H1-semi"].observed == pytest.approx(1.0, abs=0.1)


@pytest.mark.parametrize(
    ("shape", "conditions"),
    [
        (lv.HalfDisc((0, 0.1), 0.9), {}),
        (lv.HalfDisc((0, 0.1), 0.9), {"rim": lv.robin(1.5)}),
        (lv.HalfAnnulus((0, 0), 0.5, 0.9), {"inner": "neumann"}),
        (lv.Sector(0.9, math.pi / 2), {"start": "neumann"}),
        (lv.Polygon([(0, 0), (0.7, 0.2), (0.5, 0.9), (0, 1.1)]), {}),
    ],
    ids=["ball", "ball in a stream", "shell", "dome", "spindle"],
)
def test_linear_elements_pass_on_balls_shells_and_domes(shape, conditions):
    field = fields.axisymmetric(fields.solid(3, 0) + fields.point_source((0, 0, -2)))
    study = lv.study(p1_element, lv.case(shape, conditions, field, coordinates="axisymmetric"))
    assert study.verdict is lv.Verdict.PASS, str(study)


def test_boxes_have_the_volumes_of_rings_and_shells():
    grid = grid_on(SECTION, 7, (), "axisymmetric")
    assert grid.node_volumes().sum() == pytest.approx(math.pi * 0.8**2 * 1.1, rel=1e-14)
    corner = np.argmin(np.abs(grid.points).sum(axis=1))  # on the axis: half a cell up, half a cell out
    assert grid.node_volumes()[corner] == pytest.approx(math.pi * (0.4 / 7) ** 2 * 0.55 / 7, rel=1e-13)
    shell = grid_on(lv.Interval(0.5, 2), 9, (), "radial-sphere")
    assert shell.node_volumes().sum() == pytest.approx(4 / 3 * math.pi * (8 - 0.125), rel=1e-14)


def test_faces_on_the_boundary_have_the_areas_of_cylinders_and_discs():
    grid = grid_on(SECTION, 5, (), "axisymmetric")
    for name, area in (("left", 0.0), ("right", 2 * math.pi * 0.8 * 1.1), ("top", math.pi * 0.64)):
        _, areas = grid.shares(grid.patch(SECTION.pieces[name]))
        assert areas.sum() == pytest.approx(area, rel=1e-14, abs=1e-300)


def test_a_flux_along_z_and_the_parabola_are_balanced_exactly():
    """u = z and u = z^2 - r^2/2: the boxes are exact, and so are differences of squares at middles."""
    grid = grid_on(SECTION, 6, (), "axisymmetric")
    inner = (grid.points[:, 0] < 0.8) & (grid.points[:, 1] > 0) & (grid.points[:, 1] < 1.1)
    r, z = grid.points.T
    balance = sum(axis_balances(grid, np.eye(2)), start=0 * axis_balances(grid, np.eye(2))[0])
    for u in (z, z**2 - r**2 / 2):
        assert np.abs((balance @ u)[inner]).max() < 1e-14
    assert np.abs((balance @ (z**2 - r**2))[inner]).max() > 1e-3  # the twin: harmonic in the plane only


@pytest.mark.parametrize("name", ROUND)
def test_reported_fluxes_are_those_of_space(name):
    posed = ROUND[name]
    answer = five_point.solve(posed.problem, 64)
    assert "axis" not in answer.fluxes
    for piece in posed.problem.pieces:
        if piece.kind == "axis":
            continue
        points, normals, weights = piece.quadrature(15, cell=0.1)
        density = 1.0 * (posed.exact.gradient(points) @ posed.problem.tensor * normals).sum(axis=1)
        exact = float((weights * posed.problem.metric(points)) @ density)
        assert answer.fluxes[piece.name] == pytest.approx(exact, rel=3e-3), piece.name
    assert sum(answer.fluxes.values()) == pytest.approx(0.0, abs=1e-9)


def test_pure_flux_gets_the_mean_of_space():
    around = dict.fromkeys(("right", "bottom", "top"), "neumann")
    posed = lv.case(SECTION, around, SWIRL, coordinates="axisymmetric")
    for solver in (five_point, p1_element):
        answer = solver.solve(posed.problem, 32)
        assert np.abs(answer.values - posed.exact.value(answer.points)).max() < 5e-3


def test_solvers_that_do_not_declare_coordinates_are_not_asked():
    assert "coordinates" in chebyshev.refuses(SOLID.problem)
    assert five_point.refuses(SOLID.problem) is None
    assert "radial-cylinder" in p1_element.refuses(PIPE.problem) or "dim" in p1_element.refuses(PIPE.problem)


def test_layers_lie_on_grid_lines_in_r_and_z():
    wall = lv.layers((1,), ["7/10"], {"steel": 8.0, "felt": 0.5})
    parts = [fields.radial("cylinder", 0, "1/8"), None]
    parts[1] = fields.radial("cylinder", repr((1 / 8 - 2) * math.log(0.7)), 2)
    posed = lv.case(
        lv.Interval(0.5, 1.2), {"right": lv.robin(1.0)}, fields.by_region(wall, parts), wall,
        coordinates="radial-cylinder",
    )  # fmt: skip
    assert np.all(np.abs(orders(five_point, posed) - 2.0) < 0.1)
    smeared = orders(FAULTS["arithmetic mean of conductivities"].adapter, posed)
    assert np.all(smeared < 1.3), smeared
