"""One solver over many cases and laws: everything that was found, in one record."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Sequence
from concurrent.futures import Executor, Future, as_completed
from functools import partial
from typing import Any

from laplace_verify.campaign.gathering import now
from laplace_verify.campaign.identity import case_info, environment, solver_identity
from laplace_verify.campaign.isolation import Failure, run_isolated
from laplace_verify.campaign.record import Record, Settings
from laplace_verify.cases import catalogue
from laplace_verify.errors import AdapterError, ProblemError
from laplace_verify.measure import Study, Verdict, study
from laplace_verify.measure.levels import check_budget, check_seed, check_sizes
from laplace_verify.principles import LAWS, Check, check_principle
from laplace_verify.problems import Case, Problem, as_case
from laplace_verify.solvers import Adapter, load_solver
from laplace_verify.version import __version__

__all__ = ["chosen_cases", "verify"]

Progress = Callable[[Study | Check], object]


def verify(
    solver: Adapter | str,
    cases: Iterable[str | Case | Problem] | None = None,
    principles: bool = True,
    sizes: Sequence[int] | None = None,
    executor: Executor | None = None,
    seed: int = 0,
    time_limit: float | None = None,
    *,
    workers: int = 1,
    budget: float | None = None,
    progress: Progress | None = None,
    command: str = "",
) -> Record:
    """Study a solver on every case, check every law, and return the record.

    Parameters
    ----------
    solver
        An adapter, or ``module:object`` or ``path/to/file.py:object``.
    cases
        Ids, cases or ill-posed problems; None: the whole catalogue, of which those beyond the declared
        capabilities come back as NOT_APPLICABLE.
    principles
        Whether the laws of harmonic functions are checked too.
    sizes
        Resolution numbers, rising, three or more; None: those of the solver, else the defaults.
    executor
        Any concurrent.futures Executor; what cannot travel to its workers runs in a child process here. None:
        child processes of our own, `workers` at a time, each isolated from all others.
    seed
        Of everything random; the same seed gives the same record, times and host apart.
    time_limit
        Seconds for one study or check, after which it is an ERROR; not kept with an `executor`.
    budget
        Seconds that a study may spend on sizes beyond the planned ones while its verdict is open; None: a
        bounded number of unknowns, which does not depend on the machine.
    progress
        Called with every study and check as it ends.
    command
        The command that repeats the run, for the report.

    Raises
    ------
    AdapterError, UnknownCaseError
        If there is no such solver or case, the sizes are not three or more, rising, or workers, seed, budget
        or time limit make no sense. What a solver does never raises: it is in the record.

    Examples
    --------
    >>> record = verify("laplace_verify.solvers.samples:five_point", ["plate-saddle"], principles=False)
    >>> [str(study.verdict) for study in record.studies]
    ['PASS']
    """
    if workers < 1:
        raise AdapterError(f"workers must be 1 or more, got {workers}")
    if time_limit is not None and not time_limit > 0:
        raise AdapterError(f"time_limit must be a positive number of seconds, got {time_limit}")
    if executor is not None and not hasattr(executor, "submit"):
        raise AdapterError(
            f"executor must be one of concurrent.futures, such as ProcessPoolExecutor(4), got {executor!r}"
        )
    check_seed(seed)
    check_budget(budget)
    sizes = None if sizes is None else check_sizes(sizes)
    adapter = load_solver(solver)
    source = solver if isinstance(solver, str) else ""
    chosen = chosen_cases(cases)
    laws = list(LAWS) if principles else []
    started = now()
    jobs: list[Callable[[], Study | Check]] = [
        *(partial(study, adapter, case, sizes=sizes, seed=seed, budget=budget) for case in chosen),
        *(partial(check_principle, adapter, law, seed=seed) for law in laws),
    ]
    results: list[Any] = [None] * len(jobs)
    ended = (
        run_isolated(jobs, workers, time_limit)
        if executor is None
        else _by_executor(jobs, executor, time_limit)
    )
    for index, result in ended:
        if isinstance(result, Failure):
            result = (
                _broken_study(adapter, chosen[index], seed, result)
                if index < len(chosen)
                else _broken_check(laws[index - len(chosen)], result)
            )
        results[index] = result
        if progress is not None:
            progress(result)
    return Record(
        package_version=__version__,
        solver=solver_identity(adapter, source),
        environment=environment(),
        settings=Settings(
            seed=seed,
            sizes=sizes,
            cases=None if cases is None else tuple(case.id for case in chosen),
            principles=principles,
            time_limit=time_limit,
            budget=budget,
        ),
        command=command,
        started=started,
        finished=now(),
        studies=tuple(results[: len(chosen)]),
        checks=tuple(results[len(chosen) :]),
        cases=tuple(case_info(case) for case in chosen),
    )


def chosen_cases(cases: Iterable[str | Case | Problem] | None) -> list[Case]:
    """Return the cases asked for by id or as they are, each once; None: the whole catalogue.

    Raises
    ------
    UnknownCaseError
        If the catalogue has no case of an id; the nearest ids are named.
    ProblemError
        If two different cases bear the same id, or something is no case.
    """
    if cases is None:
        return list(catalogue.values())
    if isinstance(cases, str | Case | Problem):
        cases = [cases]
    found: dict[str, Case] = {}
    for given in cases:
        case = catalogue[given] if isinstance(given, str) else as_case(given)
        if found.setdefault(case.id, case) is not case:
            raise ProblemError(f"two different cases are called {case.id!r}; give each an id of its own")
    return list(found.values())


def _by_executor(
    jobs: Sequence[Callable[[], Any]], executor: Executor, time_limit: float | None
) -> Iterator[tuple[int, Any]]:
    """Run the jobs through an executor of the user's and yield (index, result) as they end.

    Jobs that cannot travel to its workers, and those lost with a worker that another job killed, run in child
    processes of our own afterwards.
    """
    futures: dict[Future[Any], int] = {}
    stranded: list[int] = []
    for index, job in enumerate(jobs):
        try:
            futures[executor.submit(job)] = index
        except RuntimeError:  # a broken pool takes no more jobs
            stranded.append(index)
    for future in as_completed(futures):
        if future.exception() is None:
            yield futures[future], future.result()
        else:
            stranded.append(futures[future])
    stranded.sort()
    for place, result in run_isolated([jobs[index] for index in stranded], time_limit=time_limit):
        yield stranded[place], result


def _broken_study(solver: Adapter, case: Case, seed: int, failure: Failure) -> Study:
    """Return the study of a process that gave no result."""
    return Study(
        solver=solver.name,
        case_id=case.id,
        case_title=case.title,
        verdict=Verdict.ERROR,
        sizes=[],
        seed=seed,
        reasons=[failure.reason],
        crash=failure.crash,
    )


def _broken_check(law: str, failure: Failure) -> Check:
    """Return the check of a process that gave no result."""
    return Check(law=law, verdict=Verdict.ERROR, reason=failure.reason)
