"""Potentials drop by resistances: faults at interfaces and of metric factors break the law."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings

from laplace_verify.measure.verdict import Verdict
from laplace_verify.principles import check_principle
from laplace_verify.principles.series_resistance import SERIES_RESISTANCE
from laplace_verify.solvers import Answer
from laplace_verify.solvers.samples import FAULTS, cell_centred, five_point, p1_element, seven_point

FEW = 4  # problems drawn
DRAWN = settings(
    max_examples=25, deadline=None, database=None, derandomize=True, suppress_health_check=list(HealthCheck)
)


@DRAWN
@given(SERIES_RESISTANCE.problems(five_point))
def test_the_flux_of_every_problem_drawn_is_the_same_across_layers_and_rings(posed):
    # K r^m du/ds by difference quotients of the field, m = 0, 1, 2 for planes, cylinders and spheres
    power = {"cartesian": 0, "radial-sphere": 2}.get(posed.coordinates, 1)
    case = posed.case()
    lower, upper = posed.shape.bounding_box
    axis = 0 if posed.materials is None else int(np.argmax(posed.materials.partition.direction))
    step = 1e-5 * (upper[axis] - lower[axis])
    at = np.tile((lower + upper) / 2.0, (2, 1))
    at[:, axis] = lower[axis] + np.array([0.2, 0.9]) * (upper[axis] - lower[axis])
    shift = step * np.eye(posed.shape.dim)[axis]
    slope = (posed.field.value(at + shift) - posed.field.value(at - shift)) / (2.0 * step)
    flux = case.problem.conductivity_at(at) * at[:, axis] ** power * slope
    assert flux[0] == pytest.approx(flux[1], rel=1e-6)  # of the difference quotient
    assert abs(flux[0]) > 0.1


@DRAWN
@given(SERIES_RESISTANCE.problems(five_point))
def test_the_code_of_layers_and_rings_makes_the_same_problem(posed):
    space = {}
    exec("import laplace_verify as lv\n" + posed.code(), space)  # our own text
    for one, other in zip(space["problem"].pieces, posed.problem().pieces, strict=True):
        points = one.sample(9)[0]
        assert np.array_equal(one.data(points), other.data(points))
    assert posed.coordinates == space["problem"].coordinates


@pytest.mark.slow
@pytest.mark.parametrize("solver", [five_point, cell_centred, p1_element], ids=lambda solver: solver.kind)
def test_sound_solvers_keep_it(solver):
    check = check_principle(solver, SERIES_RESISTANCE.name, seed=3)
    assert check.verdict is Verdict.PASS, check.reason


@pytest.mark.slow
@pytest.mark.parametrize(
    ("fault", "says"),
    [
        ("arithmetic mean of conductivities", "it must be round-off"),
        ("conductivity of the lower neighbour", "in first and"),
        ("equal spacings taken for granted", "in first and"),
        ("metric factor missing", "coordinates"),
        ("metric factor doubled", "coordinates"),
        ("reciprocal metric factor", "coordinates"),
    ],
)
def test_faults_at_interfaces_and_of_metric_factors_break_it_and_the_code_shows_it(fault, says):
    solver = FAULTS[fault].adapter
    check = check_principle(solver, SERIES_RESISTANCE.name)
    assert check.verdict is Verdict.FAIL, check.reason
    assert says in check.reason
    space = {}
    exec(check.example, space)  # our own text
    assert space["violation"](solver) == pytest.approx(check.violation, rel=1e-9)  # the same solve again
    assert space["violation"](five_point) < check.tolerance  # the problem itself is sound


def test_a_mesh_that_misses_the_interface_is_judged_in_the_limit():
    def off_the_interface(problem, n):  # odd numbers of cells, of any material, on a uniform grid
        answer = five_point(problem, n)
        middle = np.abs(answer.points[:, 0] - np.median(answer.points[:, 0])) > 1e-9
        keep = np.flatnonzero(middle | (problem.dim > 1))
        lines = np.stack([np.arange(len(keep) - 1), np.arange(1, len(keep))], axis=1)
        return Answer(answer.points[keep], answer.values[keep], cells={"line": lines}, h=answer.h)

    rods = replace(
        five_point, function=off_the_interface, dims=frozenset({1}), shapes=frozenset({"interval"}),
        coordinates=frozenset({"cartesian"}),
    )  # fmt: skip
    check = check_principle(rods, SERIES_RESISTANCE.name, examples=FEW)
    assert check.verdict is Verdict.PASS, check.reason


def test_solvers_of_one_material_in_cartesian_coordinates_are_not_asked():
    check = check_principle(seven_point, SERIES_RESISTANCE.name)
    assert check.verdict is Verdict.NOT_APPLICABLE
    assert "neither regions nor radial" in check.reason


def test_values_of_cells_stand_at_their_centres():
    check = check_principle(cell_centred, "affine fields reproduced", examples=FEW)
    assert check.verdict is Verdict.PASS, check.reason

    def shifted(problem, n):  # one cell too far
        answer = cell_centred(problem, n)
        return Answer(answer.points, np.roll(answer.values, 1), cells=answer.cells, location="cell")

    wrong = check_principle(replace(cell_centred, function=shifted), "affine fields reproduced", examples=FEW)
    assert wrong.verdict is Verdict.FAIL


@pytest.mark.slow
@pytest.mark.parametrize("fault", ["pinned twice", "level not restored"])
def test_faults_of_pure_neumann_problems_break_affine_fields(fault):
    check = check_principle(FAULTS[fault].adapter, "affine fields reproduced")
    assert check.verdict is Verdict.FAIL, check.reason
    assert "all Dirichlet" not in check.reason
