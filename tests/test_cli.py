"""The command line: results on stdout, errors in one line with the mend, exit status as promised."""

import json
import re
import subprocess
import sys

import pytest

from laplace_verify.cli import main

SAMPLE = "laplace_verify.solvers.samples:five_point"
SOLVERS = """
import numpy as np
import laplace_verify as lv

TABLE = [1, 2, 3]


@lv.adapt(kind="finite difference", order=2, dims={1})
def exact_rod(problem, n):
    (a,), (b,) = problem.shape.bounding_box
    x = np.linspace(a, b, n + 1)[:, None]
    ends = [piece for piece in problem.pieces if piece.kind == "dirichlet"]
    left, right = (float(piece.data(piece.point([0.0]))[0]) for piece in problem.pieces)
    return lv.Answer(x, left + (right - left) * (x[:, 0] - a) / (b - a), cells={"line": np.c_[:n, 1 : n + 1]})


@lv.adapt(kind="finite difference", order=2, dims={2})
def broken(problem, n):
    raise ArithmeticError("zero pivot")


def _short(problem, n):
    exact = lv.catalogue["plate-saddle"].exact
    return lv.Answer(evaluate=lambda x: exact.value(x) * (1 + 1 / n), h=1.0 / n)


def _sound(problem, n):
    exact = lv.catalogue["plate-saddle"].exact
    return lv.Answer(evaluate=lambda x: exact.value(x) * (1 + 1 / n**2), h=1.0 / n)


KNOWN = {"kind": "finite difference", "order": 2, "dims": {2}, "known": {"plate-saddle": "open outlet"}}
deviating = lv.adapt(_short, name="deviating", **KNOWN)
mended = lv.adapt(_sound, name="mended", **KNOWN)
crashing = lv.adapt(broken.function, name="crashing", **KNOWN)


@lv.adapt(kind="finite difference", order=2, dims={2})
def hanging(problem, n):
    import time

    time.sleep(60)


@lv.adapt(kind="finite difference", order=2, dims={3}, shapes={"ball"}, conditions={"neumann"})
def balls_only(problem, n):
    raise ArithmeticError("never called")
"""


@pytest.fixture
def solver_file(tmp_path):
    file = tmp_path / "my_solver.py"
    file.write_text(SOLVERS)
    return str(file)


def run(tmp_path, solver, *options, format_=("json",)):
    """Run a solver without laws into a folder of its own."""
    return main(
        ["run", solver, "--out", str(tmp_path / "out"), "--no-principles", "--format", *format_, *options]
    )


def test_alone_it_tells_what_to_do_first(capsys):
    assert main([]) == 0
    assert "laplace-verify run my_solver.py:solve" in capsys.readouterr().out


def test_the_module_runs_as_a_program():
    shown = subprocess.run(
        [sys.executable, "-m", "laplace_verify", "--version"], capture_output=True, text=True, check=True
    )
    assert shown.stdout.startswith("laplace-verify ")


def test_cases_are_listed_by_dimension_and_condition(capsys):
    assert main(["cases", "--dim", "1", "--condition", "robin"]) == 0
    out = capsys.readouterr().out
    assert "rod-fixed-and-convection" in out
    assert "rod-two-temperatures" not in out
    assert "plate" not in out.split("title")[1].split("\n")[2]


def test_no_case_found_is_status_3(capsys):
    assert main(["cases", "--dim", "1", "--tag", "slit"]) == 3
    assert "0 of" in capsys.readouterr().err


def test_show_describes_and_draws(tmp_path, capsys):
    picture = tmp_path / "plate.png"
    assert main(["show", "plate-saddle", "--picture", str(picture)]) == 0
    assert "plate-saddle" in capsys.readouterr().out
    assert picture.read_bytes().startswith(b"\x89PNG")


def test_a_picture_of_unknown_kind_is_refused(tmp_path, capsys):
    assert main(["show", "plate-saddle", "--picture", str(tmp_path / "plate.xyz")]) == 2
    assert "known endings" in capsys.readouterr().err


def test_value_prints_digits_radius_and_basis(capsys):
    # plate-saddle is the harmonic quadratic Re (x + iy)^2 = x^2 - y^2 (statement of the case).
    assert main(["value", "plate-saddle", "1/3", "0.25", "--digits", "40"]) == 0
    value, radius, basis = capsys.readouterr().out.splitlines()
    assert value.split()[1] == "0.04861111111111111111111111111111111111111"
    assert float(radius.split()[1]) < 1e-40
    assert basis.split(maxsplit=1)[1] == "closed form"


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (["value", "disc-step", "1", "0"], "lies outside the disc of radius 0.9"),
        (["value", "slit-plate", "1/2", "0"], "two values at point .* say side="),
        (["value", "plate-sadle", "1", "1"], "did you mean 'plate-saddle'"),
        (["value", "plate-saddle", "1"], "dimension|coordinates"),
        (["value", "plate-saddle", "a", "b"], "number|decimal|fraction"),
        (["value", "plate-saddle", "1", "1/2", "--digits", "0"], "digits must be"),
        (["show", "disk-fourier"], "did you mean 'disc-fourier'"),
        (["run", "no_such_module_here:solve"], "cannot import no_such_module_here"),
        (["run", "no_such_file.py:solve"], "there is no file no_such_file.py"),
        (["run", "laplace_verify.solvers.samples:five_pint"], "five_point"),
        (["run", SAMPLE, "--cases", "plate-sadle"], "did you mean 'plate-saddle'"),
        (["run", SAMPLE, "--cases", "plate-saddle", "--sizes", "8", "16"], "at least three sizes"),
        (["run", SAMPLE, "--cases", "plate-saddle", "--sizes", "32", "16", "8"], "must increase"),
        (["report", "no_such_record.json"], "cannot read no_such_record.json"),
    ],
)
def test_what_cannot_be_understood_is_status_2_and_one_line(
    arguments, message, capsys, tmp_path, monkeypatch
):
    monkeypatch.chdir(tmp_path)
    assert main(arguments) == 2
    captured = capsys.readouterr()
    lines = captured.err.strip().splitlines()
    assert re.search(message, lines[-1]), captured.err
    assert captured.out == ""


def test_an_object_that_is_no_solver_is_refused(solver_file, capsys):
    assert main(["run", f"{solver_file}:TABLE"]) == 2
    assert "name a solve function" in capsys.readouterr().err


def test_a_folder_that_cannot_be_written_is_refused_before_anything_runs(tmp_path, capsys):
    (tmp_path / "file").write_text("in the way")
    assert main(["run", SAMPLE, "--cases", "plate-saddle", "--out", str(tmp_path / "file" / "out")]) == 2
    assert "choose one you may write to" in capsys.readouterr().err


def test_a_sound_solver_is_status_0_and_the_paths_are_printed(tmp_path, capsys):
    assert (
        run(tmp_path, SAMPLE, "--cases", "plate-saddle", "rod-two-temperatures", format_=("json", "md")) == 0
    )
    captured = capsys.readouterr()
    assert "2 PASS" in captured.out
    assert str(tmp_path / "out" / "record.json") in captured.out
    record = json.loads((tmp_path / "out" / "record.json").read_text())
    assert record["command"].startswith(f"laplace-verify run {SAMPLE}")
    assert "five-point" in captured.err  # the progress bar


def test_a_broken_solver_is_status_1_with_the_reason_in_the_record(tmp_path, solver_file, capsys):
    assert run(tmp_path, f"{solver_file}:broken", "--cases", "plate-saddle") == 1
    assert "1 ERROR" in capsys.readouterr().out
    assert "zero pivot" in (tmp_path / "out" / "record.json").read_text()


def test_a_hanging_solver_is_stopped(tmp_path, solver_file):
    assert run(tmp_path, f"{solver_file}:hanging", "--cases", "plate-saddle", "--time-limit", "1") == 1
    assert "time limit of 1 s" in (tmp_path / "out" / "record.json").read_text()


def test_nothing_within_the_capabilities_is_status_3(tmp_path, solver_file, capsys):
    assert run(tmp_path, f"{solver_file}:balls_only", "--cases", "plate-saddle") == 3
    assert "nothing could be run" in capsys.readouterr().err


def test_inconclusive_fails_unless_a_warning_will_do(tmp_path):
    three = ("--cases", "plate-wave", "--sizes", "8", "16", "32")  # three sizes give orders, no PASS
    assert run(tmp_path, SAMPLE, *three) == 1
    assert run(tmp_path, SAMPLE, *three, "--inconclusive", "warn") == 0


def test_a_record_is_rendered_again_to_the_same_bytes(tmp_path):
    assert run(tmp_path, SAMPLE, "--cases", "plate-saddle", format_=("json", "csv", "md")) == 0
    again = tmp_path / "again"
    assert (
        main(["report", str(tmp_path / "out" / "record.json"), "--out", str(again), "--format", "csv", "md"])
        == 0
    )
    for name in ("errors.csv", "report.md"):
        assert (again / name).read_bytes() == (tmp_path / "out" / name).read_bytes()


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (("cases", "--shape", "polgon"), "no case has the shape 'polgon'; did you mean 'polygon'"),
        (("cases", "--tag", "re-entrent"), "no case has the tag 're-entrent'; did you mean 're-entrant'"),
    ],
)
def test_a_filter_that_no_case_can_meet_is_status_2(arguments, message, capsys):
    assert main(list(arguments)) == 2
    assert message in capsys.readouterr().err


def test_a_value_outside_the_shape_is_refused(capsys):
    assert main(["value", "plate-saddle", "50", "0.5"]) == 2
    shown = capsys.readouterr()
    assert "the point (50, 0.5) lies outside the rectangle" in shown.err
    assert shown.out == ""
    assert main(["value", "plate-saddle", "1/2", "0.25"]) == 0
    assert capsys.readouterr().err == ""


def test_a_grid_study_is_printed_with_its_index(tmp_path, capsys):
    # Celik et al. 2008, J. Fluids Eng. 130, 078001, table 1, first column: p = 1.53, GCI = 2.2 %.
    path = tmp_path / "flow.csv"
    path.write_text("N,discharge\n18000,6.063\n8000,5.972\n4500,5.863\n", encoding="utf-8")
    assert main(["gci", str(path)]) == 0
    printed = capsys.readouterr().out
    assert re.search(r"^p +1\.53", printed, re.M)
    assert re.search(r"^GCI +2\.175 %", printed, re.M)


def test_a_grid_study_that_diverges_is_status_1_and_a_bad_file_status_2(tmp_path, capsys):
    path = tmp_path / "flow.csv"
    path.write_text("h,q\n1,1\n2,1.2\n4,1.3\n", encoding="utf-8")
    assert main(["gci", str(path), "--format", "markdown"]) == 1
    assert "divergent" in capsys.readouterr().out
    path.write_text("h,q\n1,1\n2,1.2\n", encoding="utf-8")
    assert main(["gci", str(path)]) == 2
    assert "order must be given with two grids" in capsys.readouterr().err
    assert main(["gci", str(path), "--order", "2"]) == 0


def test_a_known_deviation_is_accepted_but_neither_a_crash_nor_an_unexpected_pass(
    tmp_path, solver_file, capsys
):
    cases = ("--cases", "plate-saddle")
    assert run(tmp_path, solver_file.replace(".py", ".py:deviating"), *cases) == 0
    assert run(tmp_path, solver_file.replace(".py", ".py:crashing"), *cases) == 1
    assert "known deviations that pass" not in capsys.readouterr().err
    assert run(tmp_path, solver_file.replace(".py", ".py:mended"), *cases) == 1
    assert "declared known deviations that pass: plate-saddle" in capsys.readouterr().err


def test_value_on_a_cut_is_that_of_the_side_asked_for(capsys):
    found = []
    for side in ("1", "-1"):
        assert main(["value", "slit-plate-smooth-data", "--digits", "8", "--", "1/2", "-1e-9"]) == 0
        below = capsys.readouterr().out
        assert main(["value", "slit-plate-smooth-data", "1/2", "0", "--digits", "8", "--side", side]) == 0
        found.append(capsys.readouterr().out.split()[1])
    assert float(below.split()[1]) == pytest.approx(float(found[1]), abs=1e-7)
    assert float(found[0]) == pytest.approx(float(found[1]), abs=1e-12)  # both lips have the same data
