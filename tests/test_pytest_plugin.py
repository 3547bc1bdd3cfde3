"""pytest items of a solver: passed, failed, error, skipped, xfailed as promised, also under xdist."""

from importlib.metadata import entry_points

import pytest

from laplace_verify.principles import LAWS as PRINCIPLES

pytest_plugins = ["pytester"]

MODULE = "laplace_verify.pytest_plugin"
INSTALLED = any(entry.value == MODULE for entry in entry_points(group="pytest11"))
LOAD = [] if INSTALLED else ["-p", MODULE]  # a checkout that is on the path but not installed

SOLVERS = """
import numpy as np
import laplace_verify as lv
from laplace_verify.solvers.samples import FAULTS, five_point

DECLARED = dict(kind="finite difference", order=2, dims={2}, shapes={"rectangle"})


def breaks(problem, n):
    raise ArithmeticError("zero pivot")


later = lv.adapt(breaks, known={"plate-saddle": "pivoting comes later"}, **DECLARED)
once = lv.adapt(five_point.function, name="once", known={"plate-saddle": "was wrong once"}, **DECLARED)

test_sound = lv.order_tests(five_point, ["plate-saddle", "disc-fourier"])
test_wrong = lv.order_tests(FAULTS["first-order flux"].adapter, ["plate-flux-top", "plate-saddle"])
test_broken = lv.order_tests(lv.adapt(breaks, **DECLARED), ["plate-saddle"])
test_short = lv.order_tests(five_point, ["plate-wave"], sizes=(8, 16, 32))
test_accepted = lv.order_tests(later, ["plate-saddle"])
test_recovered = lv.order_tests(once, ["plate-saddle"])
"""
LAWS = """
import laplace_verify as lv

test_laws = lv.principle_tests("laplace_verify.solvers.samples:five_point")
"""


@pytest.fixture
def run(pytester):
    """Return a function that runs a test file in a session of its own."""
    pytester.makepyprojecttoml("")

    def run(file, *options):
        pytester.makepyfile(test_solver=file)
        return pytester.runpytest_subprocess(*LOAD, "-p", "no:cacheprovider", *options)

    return run


def test_every_verdict_becomes_what_pytest_calls_it(run, pytester):
    result = run(SOLVERS, "-v", "-rsx")
    result.assert_outcomes(passed=2, failed=3, errors=1, skipped=1, xfailed=1)
    result.stdout.re_match_lines_random(
        [
            r".*test_sound\[plate-saddle\] PASSED",
            r"SKIPPED .*NOT_APPLICABLE: .*disc",
            r".*test_wrong\[plate-saddle\] PASSED",
            r".*plate-flux-top: FAIL",
            r".*formal order 2.*observed 1",  # the reason ...
            r" *size .*unknowns .*max .*order",  # ... and the table
            r".*test_broken\[plate-saddle\] ERROR",
            r".*zero pivot",
            r".*plate-wave: INCONCLUSIVE",
            r"XFAIL .*pivoting comes later",
            r".*XPASS\(strict\).*was wrong once",
        ]
    )
    assert not (pytester.path / "report").exists()


def test_laws_are_items_too(run):
    result = run(LAWS, "-v")
    # finite differences minimise no energy, and this sample takes neither tolerance nor duration
    result.assert_outcomes(passed=len(PRINCIPLES) - 3, skipped=3)
    result.stdout.fnmatch_lines(["*maximum-principle*PASSED*"])


@pytest.mark.parametrize("workers", [[], ["-n", "2"]], ids=["one-process", "two-workers"])
def test_a_report_is_written_also_when_workers_share_the_items(run, pytester, workers):
    if workers:
        pytest.importorskip("xdist")
    run(SOLVERS, "-k", "wrong or sound", "--verification-report", "report", *workers)
    reports = {
        folder.name: (folder / "report.md").read_text() for folder in (pytester.path / "report").iterdir()
    }
    assert len(reports) == 2
    for name, text in reports.items():
        assert "plate-saddle" in text
        assert ("plate-flux-top" in text) == ("fault" in name)


TWINS = """
import laplace_verify as lv
from laplace_verify.solvers.samples import five_point

DECLARED = dict(kind="finite difference", dims={2}, shapes={"rectangle"}, conditions={"dirichlet"})
test_one = lv.order_tests(lv.adapt(five_point.function, name="solve", order=2, **DECLARED), ["plate-saddle"])
test_two = lv.order_tests(lv.adapt(five_point.function, name="solve", order=1, **DECLARED), ["plate-cubic"])
"""


def test_solvers_that_share_a_name_get_reports_of_their_own(run, pytester):
    run(TWINS, "--verification-report", "report")
    texts = [(pytester.path / "report" / name / "report.md").read_text() for name in ("solve", "solve-no-2")]
    assert sorted("plate-saddle" in text for text in texts) == [False, True]


def test_a_report_folder_that_cannot_be_written_is_refused_before_anything_runs(run, pytester):
    (pytester.path / "taken").write_text("a file")
    result = run(TWINS, "--verification-report", "taken")
    assert result.ret == pytest.ExitCode.USAGE_ERROR
    result.stderr.fnmatch_lines(["*--verification-report: cannot make the report folder taken*"])


def test_sizes_that_do_not_rise_stop_the_collection(run):
    result = run(TWINS.replace('["plate-cubic"]', '["plate-cubic"], sizes=(8, 4, 2)'))
    result.assert_outcomes(errors=1)
    result.stdout.fnmatch_lines(["*sizes must increase from coarse to fine*"])
