"""Norms of unbounded problems are taken over the window and nowhere else."""

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.measure.windows import through_window
from laplace_verify.problems import value_at
from laplace_verify.solvers.samples import fundamental_solutions

DISC = lv.Exterior(lv.Disc((0.2, 0), 1.5))
FIELD = fields.dipole((0.5, 0.3), (1, 2)) + fields.log_source((0.1, 0.1))
CASE = lv.case(DISC, {}, FIELD, at_infinity=("log", 1), quantities={"probe": value_at((2, 0))})


def solver(error, unbounded=True, cells=None):
    def solve(_, n):
        if cells is not None:
            points, mesh = cells(n)
            return lv.Answer(points, FIELD.value(points) + error(points, n), cells=mesh, h=1 / n)
        return lv.Answer(evaluate=lambda x: FIELD.value(x) + error(x, n), h=1 / n)

    return lv.adapt(
        solve,
        name="made up",
        kind="finite element",
        order=2,
        dims={2},
        shapes={"exterior-disc"},
        unbounded=unbounded,
    )


def rings(outer):
    """Quadrilaterals between the body and a circle about its centre."""

    def mesh(n):
        r, t = np.meshgrid(
            np.linspace(1.5, outer, n + 1), 2 * np.pi * np.arange(8 * n) / (8 * n), indexing="ij"
        )
        points = np.stack([0.2 + r * np.cos(t), r * np.sin(t)], axis=-1).reshape(-1, 2)
        i, j = np.meshgrid(np.arange(n), np.arange(8 * n), indexing="ij")
        k = (j + 1) % (8 * n)
        corners = [i * 8 * n + j, (i + 1) * 8 * n + j, (i + 1) * 8 * n + k, i * 8 * n + k]
        return points, {"quad": np.stack([c.ravel() for c in corners], axis=1)}

    return mesh


def test_only_adapters_that_say_so_get_unbounded_problems():
    study = lv.study(solver(lambda x, n: 0 * x[:, 0], unbounded=False), CASE)
    assert study.verdict is lv.Verdict.NOT_APPLICABLE
    assert "bounded shapes" in study.reasons[0]


def test_errors_outside_the_window_do_not_count():
    def far(x, n):
        return np.where(np.hypot(x[:, 0] - 0.2, x[:, 1]) > CASE.window.outer + 1 / n, 1e3, 1.0 / n**2)

    study = lv.study(solver(far), CASE)
    assert study.verdict is lv.Verdict.PASS, study.reasons
    assert study.levels[-1].errors["max"] == pytest.approx(1 / 64**2, rel=1e-9)


def test_errors_inside_the_window_count():
    def near(x, n):
        return np.where(np.hypot(x[:, 0] - 0.2, x[:, 1]) > 2.5, 1.0 / n, 1.0 / n**2)

    assert lv.study(solver(near), CASE).verdict is lv.Verdict.FAIL


def test_norms_are_those_of_the_window():
    study = lv.study(solver(lambda x, n: 0 * x[:, 0] + 1.0 / n**2), CASE)
    assert study.levels[0].errors["L1"] == pytest.approx(CASE.window.measure / 64, rel=1e-10)


def test_cells_beyond_the_window_do_not_count_and_gaps_are_reported():
    wide = lv.study(solver(lambda x, n: 0 * x[:, 0] + 400 / n**2, cells=rings(9.0)), CASE)
    assert wide.verdict is lv.Verdict.PASS, wide.reasons
    assert wide.levels[-1].errors["L1"] == pytest.approx(400 / 64**2 * CASE.window.measure, rel=0.01)
    narrow = lv.study(solver(lambda x, n: 0 * x[:, 0] + 400 / n**2, cells=rings(3.0)), CASE)
    assert narrow.levels[-1].left_out > 0.5
    assert narrow.verdict is lv.Verdict.FAIL


def test_bounded_cases_are_measured_as_they_are():
    case = lv.case(lv.Disc((0, 0), 1), {}, fields.polynomial(2))
    assert through_window(case) is case
    seen = through_window(lv.case(lv.HalfSpace(3), {}, fields.loaded_disc(1), at_infinity="decay"))
    assert seen.problem.pieces["bottom"].measure == 16.0
    assert seen.problem.pieces["bottom"].data([[0.5, 0.0, 0.0]]).tolist() == [1.0]


@pytest.mark.parametrize(
    ("shape", "conditions", "field", "known"),
    [
        (DISC, {}, FIELD, ("log", 1)),
        (DISC, {"rim": "neumann"}, fields.dipole((0.5, 0.3), (1, 2)), "decay"),
        (DISC, {"rim": lv.robin(2)}, fields.dipole((0.5, 0.3), (1, 2)) + fields.affine((0, 0), 1), "bounded"),
        (
            lv.Exterior(lv.Ellipse((0, 0), (2, 1))),
            {"rim": "neumann"},
            fields.flow_past((2, 1), (1, "1/2")) + fields.elliptic_multipole(3, semi_axes=(2, 1)),
            ("flow", (1, 0.5), 0),
        ),
        (
            lv.Exterior(lv.Ellipse((0, 0), (1, 1.5))),
            {},
            fields.flow_past((1, "3/2"), (1, "1/2"), 2, part="stream") + fields.dipole((0.2, 0), (0, 1)),
            ("flow", (-0.5, 1), 2),
        ),
    ],
)  # fmt: skip
def test_sources_inside_bodies_solve_exterior_problems(shape, conditions, field, known):
    study = lv.study(fundamental_solutions, lv.case(shape, conditions, field, 1.3, at_infinity=known))
    assert study.verdict is lv.Verdict.PASS, study.reasons


def test_a_solver_that_forgets_the_charge_fails():
    from dataclasses import replace

    @lv.adapt(kind="boundary element", order="exponential", dims={2}, shapes={"exterior"}, unbounded=True,
              sizes=(8, 12, 16, 24, 32), error_floor=1e-10)  # fmt: skip
    def forgetful(problem, n):
        return fundamental_solutions.function(replace(problem, at_infinity="bounded"), n)

    assert lv.study(forgetful, CASE).verdict is lv.Verdict.FAIL
