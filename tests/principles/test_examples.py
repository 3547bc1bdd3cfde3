"""The Python that a failure prints shows it again in a fresh session, and keeps the problem as a case."""

import subprocess
import sys
from dataclasses import replace

import pytest

import laplace_verify as lv
from laplace_verify.measure.verdict import Verdict
from laplace_verify.principles import LAWS, check_principle
from laplace_verify.solvers import Answer
from laplace_verify.solvers.samples import FAULTS, five_point, walk_on_spheres

FEW = 3  # problems drawn
WRONG = """
from dataclasses import replace
import numpy as np
import laplace_verify as lv
from laplace_verify.solvers.samples import FAULTS, walk_on_spheres

flux = FAULTS["half-cell factor"].adapter


@lv.adapt(kind="finite difference", order=2, dims={2}, shapes={"rectangle"}, error_floor=1e-11)
def grid(problem, n):
    return flux(problem, n)


@lv.adapt(kind="stochastic", order=0.5, dims={2}, shapes={"rectangle", "disc"}, conditions={"dirichlet"},
          sizes=(50, 200, 800))
def walks(problem, n, wanted, seed):
    answer = walk_on_spheres(problem, n, wanted, seed)
    values = answer.values + 3.0 * np.max(np.abs(answer.values)) * answer.points[:, 0] ** 2
    return lv.Answer(answer.points, values, samples=n, standard_error=answer.standard_error)
"""
CHECK = """
import sys
from pathlib import Path
import wrong
from laplace_verify.principles import check_principle
check = check_principle(getattr(wrong, sys.argv[1]), sys.argv[2], examples=3)
print(check.violation if str(check.verdict) == "FAIL" else check.reason)
Path("again.py").write_text(check.example)
"""


@pytest.mark.slow
@pytest.mark.parametrize(
    ("solver", "law"),
    [
        ("grid", "affine fields reproduced"),
        ("grid", "flux balance"),
        ("walks", "constants reproduced"),
        ("walks", "superposition"),
        ("walks", "symmetry"),
    ],
)
def test_the_code_shows_the_same_violation_in_a_fresh_session(tmp_path, solver, law):
    (tmp_path / "wrong.py").write_text(WRONG)
    run = [sys.executable, "-W", "error"]
    said = subprocess.run(
        [*run, "-c", CHECK, solver, law], cwd=tmp_path, capture_output=True, text=True, check=True
    )
    again = subprocess.run([*run, "again.py"], cwd=tmp_path, capture_output=True, text=True, check=True)
    assert float(again.stdout) == pytest.approx(float(said.stdout), rel=1e-9), said.stdout  # the same solve


@pytest.mark.slow
def test_a_counterexample_is_kept_as_a_case_that_fails_the_solver_and_passes_the_sound_one(tmp_path):
    solver = FAULTS["flux sign"].adapter
    check = check_principle(solver, "affine fields reproduced")
    assert 'lv.save_case(case, "my_cases", "its-name")' in check.example
    space = {}
    exec(check.example, space)  # our own text
    lv.save_case(space["case"], tmp_path, "wrong-flux", title="A flux that enters with the wrong sign")
    kept = lv.catalogue.with_folder(tmp_path)["wrong-flux"]
    assert lv.study(solver, kept).verdict is Verdict.FAIL
    assert lv.study(five_point, kept).verdict is Verdict.PASS


def test_data_without_a_solution_are_not_offered_as_a_case():
    def clipped(problem, n):
        answer = five_point(problem, n)
        return Answer(answer.points, 2.0 * answer.values, cells=answer.cells)

    check = check_principle(
        replace(five_point, function=clipped), "slope at a boundary extremum", examples=FEW
    )
    assert check.verdict is Verdict.FAIL
    assert "save_case" not in check.example


@pytest.mark.slow
def test_a_capability_that_is_declared_but_missing_is_an_error_with_the_draw():
    def dirichlet_only(problem, n):
        for piece in problem.pieces:
            if piece.kind != "dirichlet":
                raise NotImplementedError(f"no {piece.kind} conditions yet")
        return five_point(problem, n)

    boastful = replace(five_point, function=dirichlet_only, name="boastful")
    for law in ("constants reproduced", "flux balance"):
        check = check_principle(boastful, law)
        assert check.verdict is Verdict.ERROR
        assert "NotImplementedError: no " in check.reason
        assert "The simplest problem on which this happens" in check.reason
        space = {}
        exec(check.example, space)  # our own text
        with pytest.raises(NotImplementedError, match="conditions yet"):
            space["violation"](boastful)


def test_a_capability_that_is_declared_and_declined_is_told():
    def declines(problem, n):
        if any(piece.kind == "robin" for piece in problem.pieces):
            raise lv.Refused("films are not modelled")
        return five_point(problem, n)

    check = check_principle(replace(five_point, function=declines), "constants reproduced", seed=1)
    assert check.verdict is Verdict.PASS
    assert "declined by the solver" in check.reason
    assert "films are not modelled" in check.reason


@pytest.mark.parametrize("examples", [0, -1, 2.5, True, None])
def test_the_number_of_problems_must_be_one(examples):
    with pytest.raises(lv.ProblemError, match="examples must be a whole number >= 1"):
        check_principle(five_point, "constants reproduced", examples=examples)


def test_the_number_of_solves_follows_the_number_of_problems():
    calls = []

    def counted(problem, n):
        calls.append(n)
        return five_point(problem, n)

    for examples in (1, 5):
        calls.clear()
        check = check_principle(
            replace(five_point, function=counted), "constants reproduced", examples=examples
        )
        assert f"kept on {examples} problem" in check.reason
        assert len(calls) == 2 * examples  # judged at two sizes


@pytest.mark.slow
def test_a_solver_that_needs_to_know_the_points_gets_them_from_every_law():
    small = replace(walk_on_spheres, sizes=(50, 100, 200), dims=frozenset({2}), shapes=frozenset({"disc"}))
    for law in LAWS:
        check = check_principle(small, law, examples=1)
        assert check.verdict in (Verdict.PASS, Verdict.NOT_APPLICABLE), check.reason
