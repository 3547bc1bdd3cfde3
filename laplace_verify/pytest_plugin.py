"""pytest items for a solver: one a case, one a law; and ``--verification-report DIR``.

In a test file::

    import laplace_verify as lv
    from my_project import solve

    test_orders = lv.order_tests(solve)
    test_principles = lv.principle_tests(solve)

The study runs while its fixture is set up: a solver that breaks is an *error*, one that is wrong a *failure*,
and what it cannot do is *skipped* with the reason. pytest loads this module at every start, so it imports
nothing heavy before an item needs it.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

import pytest

if TYPE_CHECKING:
    from laplace_verify.campaign import Record
    from laplace_verify.measure import Study
    from laplace_verify.principles import Check
    from laplace_verify.problems import Case
    from laplace_verify.solvers import Adapter

__all__ = ["order_tests", "principle_tests"]

OPTION = "--verification-report"


@dataclass(frozen=True, slots=True, kw_only=True)
class _Wanted:
    """One item: a solver with a case, or with a law."""

    solver: Adapter
    seed: int
    case: Case | None = None
    sizes: Sequence[int] | None = None
    law: str = ""
    examples: int = 10


def order_tests(
    solver: Adapter | str,
    cases: Iterable[str | Case] | None = None,
    sizes: Sequence[int] | None = None,
    seed: int = 0,
) -> Callable[..., None]:
    """Return a test function with one item a case: the observed order must be what theory lets us expect.

    Parameters
    ----------
    solver
        An adapter, or ``module:object`` or ``path/to/file.py:object``.
    cases
        Ids or cases; None: the whole catalogue, of which those beyond the declared capabilities are skipped.
    sizes
        Resolution numbers, rising; None: those of the solver, else the defaults.
    seed
        Of the sample points.

    Raises
    ------
    AdapterError, UnknownCaseError
        At collection, if there is no such solver or case, or the sizes are not three or more, rising.

    Examples
    --------
    >>> test_orders = order_tests("laplace_verify.solvers.samples:five_point", cases=["plate-saddle"])
    """
    from laplace_verify.campaign import chosen_cases
    from laplace_verify.measure.levels import check_sizes
    from laplace_verify.solvers import load_solver

    adapter = load_solver(solver)
    sizes = None if sizes is None else check_sizes(sizes)
    items = []
    for case in chosen_cases(cases):
        reason = adapter.known.get(case.id)
        marks = [pytest.mark.xfail(strict=True, reason=f"known deviation: {reason}")] if reason else []
        wanted = _Wanted(solver=adapter, case=case, sizes=sizes, seed=seed)
        items.append(pytest.param(wanted, id=case.id, marks=marks))

    @pytest.mark.parametrize("laplace_study", items, indirect=True)
    def test_order(laplace_study: Study) -> None:
        if str(laplace_study.verdict) != "PASS":
            pytest.fail(study_message(laplace_study), pytrace=False)

    return test_order


def principle_tests(solver: Adapter | str, seed: int = 0, examples: int = 10) -> Callable[..., None]:
    """Return a test function with one item a law of harmonic functions, on random problems.

    Parameters
    ----------
    solver
        An adapter, or ``module:object`` or ``path/to/file.py:object``.
    seed
        Of the random problems; the same seed draws the same problems.
    examples
        How many problems are drawn for each law.

    Raises
    ------
    AdapterError
        At collection, if there is no such solver.

    Examples
    --------
    >>> test_principles = principle_tests("laplace_verify.solvers.samples:five_point")
    """
    from laplace_verify.principles import LAWS
    from laplace_verify.solvers import load_solver

    adapter = load_solver(solver)
    items = [
        pytest.param(_Wanted(solver=adapter, law=law, seed=seed, examples=examples), id=law.replace(" ", "-"))
        for law in LAWS
    ]

    @pytest.mark.parametrize("laplace_check", items, indirect=True)
    def test_principle(laplace_check: Check) -> None:
        if str(laplace_check.verdict) != "PASS":
            pytest.fail(check_message(laplace_check), pytrace=False)

    return test_principle


@pytest.fixture
def laplace_study(request: pytest.FixtureRequest) -> Study:
    """Study the solver on the case of this item."""
    from laplace_verify.measure import study

    wanted: _Wanted = request.param
    assert wanted.case is not None  # noqa: S101  # items are made by order_tests only
    result = study(wanted.solver, wanted.case, sizes=wanted.sizes, seed=wanted.seed)
    _remember(request.config, wanted, result)
    _stop_early(str(result.verdict), result.reasons, result.crash)
    return result


@pytest.fixture
def laplace_check(request: pytest.FixtureRequest) -> Check:
    """Check the law of this item."""
    from laplace_verify.principles import check_principle

    wanted: _Wanted = request.param
    result = check_principle(wanted.solver, wanted.law, seed=wanted.seed, examples=wanted.examples)
    _remember(request.config, wanted, result)
    _stop_early(str(result.verdict), [result.reason], "")
    return result


def _stop_early(verdict: str, reasons: Sequence[str], crash: str) -> None:
    """Skip what could not be made; raise here, in the set-up, what broke: pytest counts that as an error."""
    reason = "; ".join(reasons)
    if verdict in ("NOT_APPLICABLE", "NOT_RUN"):
        pytest.skip(f"{verdict}: {reason}")
    if verdict == "ERROR":
        pytest.fail(f"ERROR: {reason}\n{crash}".rstrip(), pytrace=False)


def study_message(study: Study) -> str:
    """Return why a study did not pass: reasons, table, remarks."""
    parts = [f"{study.solver} on {study.case_id}: {study.verdict}", *study.reasons]
    if study.levels:
        parts += ["", study.table()]
    if study.remarks:
        parts += ["", "remarks:", *(f"- {remark}" for remark in study.remarks)]
    return "\n".join(parts)


def check_message(check: Check) -> str:
    """Return why a law is not kept, with code that shows it again."""
    parts = [f"{check.law}: {check.verdict}", check.reason]
    if check.example:
        parts += ["", "to see it again:", check.example]
    return "\n".join(parts)


# -- the report of a session; under pytest-xdist the workers hand their results over -----------------


# records of one study or check each, as JSON texts, which pytest-xdist can send
_KEY = pytest.StashKey[list[str]]()


def pytest_addoption(parser: pytest.Parser) -> None:
    """Add the option that asks for a report."""
    parser.getgroup("laplace_verify").addoption(
        OPTION, metavar="DIR", help="write a verification report of every solver tested into DIR"
    )


def pytest_configure(config: pytest.Config) -> None:
    """Begin with no results; refuse a folder for reports that cannot be written before anything runs."""
    config.stash[_KEY] = []
    folder = config.getoption(OPTION)
    if folder is None or hasattr(config, "workerinput"):
        return
    from laplace_verify.errors import RecordError
    from laplace_verify.report import check_folder

    try:
        check_folder(Path(folder))
    except RecordError as error:
        raise pytest.UsageError(f"{OPTION}: {error}") from error


def _remember(config: pytest.Config, wanted: _Wanted, result: Study | Check) -> None:
    """Keep a result for the report, if one is wanted."""
    if config.getoption(OPTION) is None:
        return
    from laplace_verify.campaign import partial_record, record_to_json

    record = partial_record(wanted.solver, wanted.seed, wanted.case, result)
    config.stash[_KEY].append(record_to_json(record).decode())


@pytest.hookimpl(optionalhook=True)
def pytest_testnodedown(node: Any, error: object) -> None:
    """Take over the results of a worker of pytest-xdist that has ended."""
    del error
    node.config.stash[_KEY] += getattr(node, "workeroutput", {}).get("laplace_verify", [])


def pytest_sessionfinish(session: pytest.Session) -> None:
    """Write the reports; a worker sends its results instead."""
    config = session.config
    folder = config.getoption(OPTION)
    if folder is None:
        return
    found = config.stash[_KEY]
    if hasattr(config, "workeroutput"):
        config.workeroutput["laplace_verify"] = found
        return
    from laplace_verify.campaign import record_from_json
    from laplace_verify.report import write_report

    command = f"pytest {' '.join(config.invocation_params.args)}"
    for name, record in _by_solver([record_from_json(text.encode()) for text in found], command).items():
        write_report(record, Path(folder) / name)


def _by_solver(parts: Sequence[Record], command: str) -> dict[str, Record]:
    """Return folder name -> record of one solver; solvers that share a name get a number."""
    from laplace_verify.campaign import merged_record

    groups: list[list[Record]] = []
    for part in parts:  # the whole identity counts: solvers in two files may both be called "solve"
        own = next((group for group in groups if group[0].solver == part.solver), None)
        if own is None:
            groups.append([part])
        else:
            own.append(part)
    named: dict[str, Record] = {}
    for group in sorted(groups, key=lambda group: (group[0].solver.name, group[0].solver.module)):
        name = "".join(c if c.isalnum() or c in "-_." else "-" for c in group[0].solver.name)
        twins = sum(folder == name or folder.startswith(f"{name}-no-") for folder in named)
        named[f"{name}-no-{twins + 1}" if twins else name] = merged_record(group, command)
    return named
