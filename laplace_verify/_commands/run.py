"""`run`: study a solver, check the laws, write a report."""

from __future__ import annotations

import argparse
import os
import shlex
import sys
from pathlib import Path
from typing import TYPE_CHECKING, Any

from laplace_verify._commands.common import described, note, say
from laplace_verify._commands.report import FORMATS

if TYPE_CHECKING:
    from laplace_verify.campaign import Record
    from laplace_verify.measure import Study

__all__ = ["add_run"]

BAD = ("FAIL", "ERROR")


def add_run(commands: Any) -> None:
    """Describe the command."""
    parser = described(
        commands,
        "run",
        "study a solver on many cases, check the laws, write a report",
        "run my_solver.py:solve --cases plate-saddle disc-fourier --out report",
    )
    parser.add_argument("solver", metavar="SOLVER", help="module:object or path/to/file.py:object")
    parser.add_argument("--cases", nargs="+", metavar="CASE", help="case ids (default: the whole catalogue)")
    parser.add_argument(
        "--dim", type=int, choices=(1, 2, 3), action="append", help="only cases of this dimension"
    )
    parser.add_argument(
        "--sizes", nargs="+", type=int, metavar="N", help="resolution numbers, rising, 3 or more"
    )
    parser.add_argument("--out", metavar="DIR", type=Path, default=Path("verification-report"))
    parser.add_argument("--format", nargs="+", choices=FORMATS, default=list(FORMATS), help="default: all")
    parser.add_argument("--time-limit", type=float, metavar="S", help="seconds for one study or law")
    parser.add_argument(
        "--budget", type=float, metavar="S", help="seconds a study may add finer sizes for while undecided"
    )
    parser.add_argument("--workers", type=int, default=os.cpu_count() or 1, help="default: one a core")
    parser.add_argument("--seed", type=int, default=0, help="of everything random (default 0)")
    parser.add_argument(
        "--principles",
        action=argparse.BooleanOptionalAction,
        default=True,
        help="check the laws of harmonic functions too (default: yes)",
    )
    parser.add_argument("--inconclusive", choices=("fail", "warn"), default="fail")
    parser.set_defaults(run=_run)


def _run(options: argparse.Namespace) -> int:
    from tqdm import tqdm

    from laplace_verify.campaign import chosen_cases, verify
    from laplace_verify.principles import LAWS
    from laplace_verify.report import check_folder, write_report
    from laplace_verify.solvers import load_solver

    solver = load_solver(options.solver)
    cases = chosen_cases(options.cases)
    if options.dim:
        cases = [case for case in cases if case.dim in options.dim]
    check_folder(options.out)
    laws = len(LAWS) if options.principles else 0
    with tqdm(total=len(cases) + laws, file=sys.stderr, unit="item", desc=solver.name) as bar:
        record = verify(
            options.solver,
            cases,
            principles=options.principles,
            sizes=options.sizes,
            seed=options.seed,
            time_limit=options.time_limit,
            budget=options.budget,
            workers=options.workers,
            progress=lambda _: bar.update(),
            command=shlex.join(["laplace-verify", *options.given]),
        )
    paths = write_report(record, options.out, formats=options.format)
    _summary(record)
    for path in paths.values():
        say(f"written: {path}")
    return _status(record, options.inconclusive)


def _summary(record: Record) -> None:
    """Print a row for every study and check that ran, and the number of each verdict."""
    from tabulate import tabulate

    rows = [
        (study.case_id, *_orders(study), str(study.verdict))
        for study in record.studies
        if str(study.verdict) not in ("NOT_APPLICABLE", "NOT_RUN")
    ]
    rows += [
        (f"law: {check.law}", "", "", "", str(check.verdict))
        for check in record.checks
        if str(check.verdict) not in ("NOT_APPLICABLE", "NOT_RUN")
    ]
    headers = ("case or law", "norm", "expected", "observed", "verdict")
    say(tabulate(rows, headers=headers, tablefmt="simple", disable_numparse=True))
    verdicts = _verdicts(record)
    counts = ", ".join(f"{verdicts.count(name)} {name}" for name in dict.fromkeys(sorted(verdicts)))
    say(f"\n{counts}")


def _orders(study: Study) -> tuple[str, str, str]:
    """Return the deciding norm with the smallest margin: its name, expected and observed order."""
    best = ("", "", "")
    margin = float("inf")
    for norm in study.deciding:
        order = study.orders[norm]
        observed = "exact" if order.observed is None else f"{order.observed:.2f}"
        if not isinstance(order.expected, int | float):
            if best[0] == "":
                best = (norm, str(order.expected or ""), observed)
            continue
        gap = float("-inf") if order.observed is None else order.observed - order.expected
        if gap < margin:
            margin, best = gap, (norm, f"{order.expected:.2f}", observed)
    return best


def _verdicts(record: Record) -> list[str]:
    """Return the verdicts of all studies and checks."""
    return [str(study.verdict) for study in record.studies] + [str(check.verdict) for check in record.checks]


def _status(record: Record, inconclusive: str) -> int:
    """Return the exit status of a run."""
    verdicts = set(_verdicts(record))
    known = record.solver.known
    accepted = {"FAIL", "INCONCLUSIVE"}
    judged = {
        str(study.verdict)
        for study in record.studies
        if not (study.case_id in known and str(study.verdict) in accepted)
    }
    outlived = [
        study.case_id for study in record.studies if study.case_id in known and study.verdict == "PASS"
    ]
    if outlived:
        note(f"declared known deviations that pass: {', '.join(outlived)}; remove the declarations")
    judged |= {str(check.verdict) for check in record.checks}
    if verdicts <= {"NOT_APPLICABLE", "NOT_RUN"}:
        note("nothing could be run: no case and no law is within the declared capabilities")
        return 3
    if outlived or judged & set(BAD) or (inconclusive == "fail" and "INCONCLUSIVE" in judged):
        return 1
    return 0
