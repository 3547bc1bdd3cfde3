"""pytest items of a solver: passed, failed, error, skipped, xfailed as promised, also under xdist."""

from importlib.metadata import entry_points

import pytest

pytest_plugins = ["pytester"]

MODULE = "laplace_verify.pytest_plugin"
INSTALLED = any(entry.value == MODULE for entry in entry_points(group="pytest11"))
LOAD = [] if INSTALLED else ["-p", MODULE]  # a checkout that is on the path but not installed

FILE = """
import numpy as np
import laplace_verify as lv
from laplace_verify.solvers.samples import FAULTS, five_point

DECLARED = dict(kind="finite difference", order=2, dims={2}, shapes={"rectangle"})


def breaks(problem, n):
    raise ArithmeticError("zero pivot")


sound = lv.order_tests(five_point, ["plate-saddle", "disc-fourier"])
wrong = lv.order_tests(FAULTS["first-order flux"].adapter, ["plate-flux-top", "plate-saddle"])
broken = lv.order_tests(lv.adapt(breaks, **DECLARED), ["plate-saddle"])
short = lv.order_tests(five_point, ["plate-wave"], sizes=(8, 16, 32))
later = lv.adapt(breaks, known={"plate-saddle": "pivoting comes later"}, **DECLARED)
accepted = lv.order_tests(later, ["plate-saddle"])
once = lv.adapt(five_point.function, name="once", known={"plate-saddle": "was wrong once"}, **DECLARED)
recovered = lv.order_tests(once, ["plate-saddle"])
"""


@pytest.fixture
def session(pytester):
    """Return a function that runs items of FILE in a session of its own."""
    pytester.makepyprojecttoml("")

    def run(name, *options):
        pytester.makepyfile(test_solver=FILE + f"\ntest_orders = {name}\n")
        return pytester.runpytest_inprocess(*LOAD, "-p", "no:cacheprovider", *options)

    return run


def test_a_sound_solver_passes_and_what_it_cannot_do_is_skipped_with_the_reason(session):
    result = session("sound", "-rs")
    result.assert_outcomes(passed=1, skipped=1)
    result.stdout.fnmatch_lines(["*NOT_APPLICABLE*disc*"])


def test_a_wrong_solver_fails_with_reason_and_table(session):
    result = session("wrong")
    result.assert_outcomes(passed=1, failed=1)
    result.stdout.fnmatch_lines(
        ["*plate-flux-top: FAIL*", "*formal order 2*observed 1*", "*size*unknowns*max*"]
    )


def test_a_broken_solver_is_an_error(session):
    result = session("broken")
    result.assert_outcomes(errors=1)
    result.stdout.fnmatch_lines(["*zero pivot*"])


def test_inconclusive_fails(session):
    result = session("short")
    result.assert_outcomes(failed=1)
    result.stdout.fnmatch_lines(["*INCONCLUSIVE*"])


def test_a_known_deviation_is_expected_to_fail(session):
    session("accepted").assert_outcomes(xfailed=1)


def test_a_known_deviation_that_passes_fails(session):
    result = session("recovered")
    result.assert_outcomes(failed=1)
    result.stdout.fnmatch_lines(["*XPASS(strict)*was wrong once*"])


def test_laws_are_items_too(pytester):
    pytester.makepyprojecttoml("")
    pytester.makepyfile(
        test_solver="""
        import laplace_verify as lv
        test_laws = lv.principle_tests("laplace_verify.solvers.samples:five_point")
        """
    )
    result = pytester.runpytest_inprocess(*LOAD, "-v")
    result.assert_outcomes(passed=4)
    result.stdout.fnmatch_lines(["*maximum-principle*PASSED*"])


@pytest.mark.parametrize("workers", [[], ["-n", "2"]], ids=["one-process", "two-workers"])
def test_a_report_is_written_also_when_workers_share_the_items(session, pytester, workers):
    if workers:
        pytest.importorskip("xdist")
    session("wrong", "--verification-report", "report", *workers)
    (folder,) = (pytester.path / "report").iterdir()
    text = (folder / "report.md").read_text(encoding="utf-8")
    assert "plate-flux-top" in text
    assert "plate-saddle" in text


def test_without_the_option_nothing_is_written(session, pytester):
    session("sound")
    assert not (pytester.path / "report").exists()
