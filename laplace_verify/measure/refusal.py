"""The study of an ill-posed case: a solver that declares that it checks must refuse it at every size."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import TYPE_CHECKING

from laplace_verify.errors import LaplaceVerifyError, history, told
from laplace_verify.measure.features import ill_posed_features
from laplace_verify.measure.results import Study
from laplace_verify.measure.running import WANTED
from laplace_verify.measure.verdict import Verdict
from laplace_verify.solvers import Adapter, Refused

if TYPE_CHECKING:
    from laplace_verify.problems import Case

__all__ = ["refusal_study", "said"]


def refusal_study(solver: Adapter, case: Case, sizes: Sequence[int], seed: int) -> Study:
    """Return PASS if the solver raises `Refused` at every size, FAIL if it answers at one.

    Any other exception is an ERROR: to stumble over a singular matrix is no check. What the solver does not
    declare to do is NOT_APPLICABLE.
    """
    tried, refusals = list[int](), list[str]()
    declined, crash = solver.refuses(case.problem), ""
    problem = replace(case.problem, ill_posed=None)  # the solver has to find out by itself
    verdict, reasons = Verdict.NOT_APPLICABLE, [declined or ""]
    if declined is None:
        wanted = problem.shape.sample(WANTED, seed=seed)
        verdict = Verdict.PASS
        for size in sizes:
            tried.append(size)
            try:
                solver.solve(problem, size, wanted, seed=seed)
            except Refused as cause:
                if not cause.beyond:
                    refusals.append(str(cause))
                    continue
                verdict, reasons = Verdict.NOT_APPLICABLE, [f"the solver declined: {cause}"]
            except (Exception, SystemExit) as cause:
                verdict, reasons, crash = Verdict.ERROR, [f"size {size}: {said(cause)}"], history(cause)
            else:
                verdict, reasons = Verdict.FAIL, [_answered(case, size)]
            break
    if verdict is Verdict.PASS:
        reasons = [f"refused at every size, as it must be: {reason}" for reason in dict.fromkeys(refusals)]
    known = solver.known.get(case.id)
    return Study(
        solver=solver.name,
        case_id=case.id,
        case_title=case.title,
        verdict=verdict,
        sizes=tried or list(sizes),
        seed=seed,
        reasons=reasons,
        remarks=[] if known is None else [f"known deviation, says its author: {known}"],
        features=ill_posed_features(case),
        known=known,
        crash=crash,
    )


def said(cause: BaseException) -> str:
    """Return what an exception of a solver says, with its type unless it is one of ours."""
    if isinstance(cause, LaplaceVerifyError):
        return str(cause)
    return f"the solver raised {told(cause)}"


def _answered(case: Case, size: int) -> str:
    """Return why an answer is wrong."""
    return (
        f"size {size}: the solver answered an ill-posed problem, although it declares that it checks; it "
        f"must raise lv.Refused(reason), for {case.problem.ill_posed}"
    )
