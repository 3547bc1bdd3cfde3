"""The check of one law on one solver, from the request to the finding in plain words."""

from __future__ import annotations

import numpy as np

from laplace_verify.errors import AdapterError, ProblemError, nearest_names, told
from laplace_verify.measure.features import problem_features
from laplace_verify.measure.verdict import Verdict
from laplace_verify.principles.driving import EXAMPLES, BrokenLawError, BrokenSolverError, Search
from laplace_verify.principles.example import example_code
from laplace_verify.principles.law import Finding, Law, Trial
from laplace_verify.principles.laws import LAWS
from laplace_verify.principles.repeatability import REPEATABILITY
from laplace_verify.principles.results import Check
from laplace_verify.problems.drawing import drawn_pieces
from laplace_verify.solvers import Adapter, Refused

__all__ = ["check_principle"]

SMALL = 1e-4  # relative violations below this may be an iteration stopped early

REPEATED = 1e-6  # relative; two runs may differ by the order of additions, not by more
COMPARED = 50  # points at which two functions are compared
SHOWN = 20  # points kept


def check_principle(solver: Adapter, law: str, seed: int = 0, examples: int = EXAMPLES) -> Check:
    """Try a law of harmonic functions on problems drawn within a solver's declared capabilities.

    Parameters
    ----------
    solver : Adapter
    law : str
        A key of `LAWS`, such as "maximum principle".
    seed : int
        Of the problems and of the points looked at; the same seed gives the same check.
    examples : int
        How many problems are drawn. The solver is called at most 16 times as often, shrinking included, and
        twice more before a law counts as broken.

    Returns
    -------
    Check
        FAIL with the simplest problem found and code that shows it; ERROR if the solver raises, returns
        what cannot be measured, or gives two answers to one question; NOT_APPLICABLE with the reason.

    Raises
    ------
    ProblemError
        If there is no such law (the nearest are named), or `seed` or `examples` is no such number.
    AdapterError
        If `solver` is no adapter, or declares a discrete law that does not exist.

    Examples
    --------
    >>> from laplace_verify.solvers.samples import five_point
    >>> check = check_principle(five_point, "constants reproduced")
    >>> str(check.verdict), check.violation < check.tolerance
    ('PASS', True)
    """
    if not isinstance(law, str) or law not in LAWS:
        raise ProblemError(f"there is no law {law!r}; {nearest_names(str(law), LAWS)}")
    if not isinstance(solver, Adapter):
        raise AdapterError(
            f"solver must be an adapter, got {type(solver).__name__}; "
            f"put `@lv.adapt(kind=..., order=...)` above the solve function"
        )
    if isinstance(seed, bool) or not isinstance(seed, int | np.integer) or seed < 0:
        raise ProblemError(f"seed must be a whole number >= 0, got {seed!r}")
    if isinstance(examples, bool) or not isinstance(examples, int | np.integer) or examples < 1:
        raise ProblemError(f"examples must be a whole number >= 1, got {examples!r}")
    for declared in sorted(solver.discrete_laws):
        if declared not in LAWS:
            raise AdapterError(
                f"discrete_laws: there is no law {declared!r}; {nearest_names(declared, LAWS)}"
            )
    return _checked(LAWS[law], solver, int(seed), int(examples))


def _checked(law: Law, solver: Adapter, seed: int, examples: int) -> Check:
    """Return the check of a law that exists on an adapter."""
    reason = law.inapplicable(solver)
    if reason is not None:
        return Check(law=law.name, verdict=Verdict.NOT_APPLICABLE, reason=reason)
    search = Search(law=law, solver=solver, seed=seed, examples=examples)
    failure = search.run()
    if isinstance(failure, BrokenSolverError):
        return _broke(law, failure)
    if failure is not None:
        return _failed(law, failure)
    if search.worst is None:
        why = (
            search.unseen
            or f"the solver declined all {search.refused} problems drawn, last with: {search.refusal}"
        )
        return Check(law=law.name, verdict=Verdict.NOT_APPLICABLE, reason=why)
    worst = search.worst
    declined = (
        f"; {search.refused} more were declined by the solver, last with: {search.refusal}"
        if search.refused
        else ""
    )
    return Check(
        law=law.name,
        verdict=Verdict.PASS,
        violation=worst.violation,
        tolerance=worst.tolerance,
        reason=f"kept on {search.tried} problem{'s' if search.tried > 1 else ''} in {search.calls} solves"
        f"{declined}; the violation nearest to what is allowed: {worst.violation:.2g} of the largest "
        "boundary value, "
        f"allowed {worst.tolerance:.2g}",
    )


def _failed(law: Law, failure: BrokenLawError) -> Check:
    """Return the check of a law that was broken, unless the solver gives two answers to one question."""
    trial, finding = failure.trial, failure.finding
    # where repeatability itself is asked for, two answers break the law
    difference = 0.0 if law is REPEATABILITY else _between_runs(trial)
    if difference is None or not difference <= REPEATED:
        seen = (
            "could not be repeated"
            if difference is None
            else f"differed by {difference:.2g} of the largest value"
        )
        return Check(
            law=law.name,
            verdict=Verdict.ERROR,
            reason=f"the solver is not repeatable: two runs on the same problem {seen}, so no law can be "
            f"checked. The problem: {trial.posed.words()}",
            example=example_code(trial, trial.sizes[0], _two_runs(trial)),
        )
    history = ", ".join(f"{v:.2g} with n = {n}" for n, v in zip(finding.sizes, finding.history, strict=True))
    limit = len(finding.sizes) > 1
    rule = finding.rule or ("it must vanish under refinement" if limit else "it must be round-off")
    # An iteration stopped early looks like a small constant; what it is allowed, only its author can say.
    small = not limit and finding.violation < SMALL
    mend = "; if the solver iterates to a tolerance, declare it as error_floor" if small else ""
    return Check(
        law=law.name,
        verdict=Verdict.FAIL,
        violation=finding.violation,
        tolerance=finding.tolerance,
        reason=f"broken: {finding.words}. Violation, relative to the largest boundary value: {history}; "
        f"{rule}, at most {finding.tolerance:.2g} is allowed{mend}. "
        f"The simplest problem found: {trial.posed.words()}",
        example=example_code(trial, finding.sizes[-1], finding.body),
        points=_rows(finding),
        features=problem_features(trial.problem),
        pieces=drawn_pieces(trial.problem),
    )


def _broke(law: Law, failure: BrokenSolverError) -> Check:
    """Return the check of a solver that raised or returned what cannot be measured."""
    trial, cause = failure.trial, failure.cause
    size = max(trial.answers, default=None)
    after = "" if size is None else f" (it had solved n = {size})"
    return Check(
        law=law.name,
        verdict=Verdict.ERROR,
        reason=f"{told(cause)}{after}. The simplest problem on which this happens: {trial.posed.words()}",
        example=example_code(trial, trial.sizes[0], ("answer",)),
    )


def _between_runs(trial: Trial) -> float | None:
    """Return the relative difference of two runs at the smallest size; None if they cannot be compared."""
    size = trial.sizes[0]
    points = trial.problem.shape.sample(COMPARED, seed=trial.seed)
    try:
        runs = [trial.solver.solve(trial.problem, size, points, seed=trial.seed) for _ in range(2)]
        numbers = [run.values if run.values is not None else run.value_at(points) for run in runs]
    except Refused:
        return None
    except Exception:  # it answered before: that alone is not repeatable
        return None
    first, second = numbers
    if first.shape != second.shape:
        return None
    scale = max(float(np.max(np.abs(first), initial=0.0)), np.finfo(float).tiny)
    return float(np.max(np.abs(first - second), initial=0.0)) / scale


def _two_runs(trial: Trial) -> tuple[str, ...]:
    """Return lines that show the difference of two runs."""
    again = f"again = {trial.call()}"
    if trial.answers[trial.sizes[0]].kind != "callable":
        return again, "abs(again.values - answer.values).max()"
    points = f"points = problem.shape.sample({COMPARED}, seed={trial.seed})"
    return again, points, "abs(again.value_at(points) - answer.value_at(points)).max()"


def _rows(finding: Finding) -> tuple[tuple[float, ...], ...]:
    """Return the points as plain numbers."""
    return tuple(tuple(float(c) for c in point) for point in finding.points[:SHOWN])
