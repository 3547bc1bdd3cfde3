"""The command line: results on stdout, progress and errors on stderr.

Exit status: 0 everything ran and passed; 1 something failed, broke or breaks a law or (unless told to warn
only) is inconclusive; 2 the request cannot be understood; 3 nothing could be run.
"""

from __future__ import annotations

import argparse
import os
import shlex
import sys
from collections.abc import Iterable, Sequence
from fractions import Fraction
from pathlib import Path
from typing import TYPE_CHECKING, Any

from laplace_verify.errors import LaplaceVerifyError, ProblemError, nearest_names
from laplace_verify.version import __version__

if TYPE_CHECKING:
    from laplace_verify.campaign import Record
    from laplace_verify.measure import Study

__all__ = ["main"]

FORMATS = ("html", "md", "tex", "csv", "json", "junit")
BAD = ("FAIL", "ERROR")
CLOSED = 1e-12  # of the shape's size: points on the boundary lie in the shape
FIRST_STEPS = """\
laplace-verify checks a solver of Laplace's equation against exact solutions. Three things to do first:

  laplace-verify cases                     what it can be checked on
  laplace-verify run laplace_verify.solvers.samples:five_point
                                           a run with a sample solver
  laplace-verify run my_solver.py:solve    a run with yours

Each command explains itself with --help.
"""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command line and return the exit status.

    >>> main(["value", "plate-saddle", "1/2", "0.25", "--digits", "20"])
    value   0.1875
    radius  1.9e-21
    basis   closed form
    0
    """
    parser = _parser()
    options = parser.parse_args(arguments)
    options.given = sys.argv[1:] if arguments is None else list(arguments)
    if options.command is None:
        _say(FIRST_STEPS.rstrip())
        return 0
    try:
        status: int = options.run(options)
    except LaplaceVerifyError as error:
        _note(f"laplace-verify: {error}")
        return 2
    except BrokenPipeError:  # the reader of our output has seen enough
        sys.stdout = open(os.devnull, "w")  # noqa: SIM115
        return 0
    except KeyboardInterrupt:
        _note("laplace-verify: interrupted")
        return 130
    return status


def _parser() -> argparse.ArgumentParser:
    """Describe commands and options."""
    parser = argparse.ArgumentParser(
        prog="laplace-verify",
        description="Code verification for solvers of Laplace's equation.",
        epilog="Verification is not validation: it checks the code, not whether the equation fits a problem.",
    )
    parser.add_argument("--version", action="version", version=f"laplace-verify {__version__}")
    commands = parser.add_subparsers(dest="command", metavar="COMMAND")
    _add_cases(commands)
    _add_show(commands)
    _add_value(commands)
    _add_run(commands)
    _add_report(commands)
    _add_regenerate(commands)
    return parser


def _add(commands: Any, name: str, what: str, example: str) -> argparse.ArgumentParser:
    """Add a command with one line of help and an example."""
    parser: argparse.ArgumentParser = commands.add_parser(
        name,
        help=what,
        description=what[0].upper() + what[1:] + ".",
        epilog=f"example: laplace-verify {example}",
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    return parser


# -- cases, show, value ------------------------------------------------------------------------------------


def _add_cases(commands: Any) -> None:
    parser = _add(commands, "cases", "list the catalogue", "cases --dim 2 --condition neumann")
    parser.add_argument("--dim", type=int, choices=(1, 2, 3), help="space dimension")
    parser.add_argument("--shape", help="shape, such as rectangle or polygon")
    parser.add_argument(
        "--condition",
        action="append",
        choices=("dirichlet", "neumann", "robin"),
        help="only cases that use this condition; may be repeated",
    )
    parser.add_argument(
        "--tag", action="append", default=[], help="only cases with this tag; may be repeated"
    )
    parser.set_defaults(run=_cases)


def _cases(options: argparse.Namespace) -> int:
    from tabulate import tabulate

    from laplace_verify.cases import catalogue
    from laplace_verify.solvers.declarations import SHAPES

    shapes = {kind for kind in SHAPES if any(case.problem.shape.is_a(kind) for case in catalogue.values())}
    _among("shape", [options.shape] if options.shape else [], shapes)
    _among("tag", options.tag, {tag for case in catalogue.values() for tag in case.tags})
    found = catalogue.select(dim=options.dim, shape=options.shape, tags=set(options.tag))
    wanted = set(options.condition or ())
    rows = [
        (case.id, f"{case.dim}-D", case.problem.shape.kind, ", ".join(sorted(case.conditions)), case.title)
        for case in found
        if wanted <= case.conditions
    ]
    _say(tabulate(rows, headers=("case", "dim", "shape", "conditions", "title"), tablefmt="simple"))
    _note(f"{len(rows)} of {len(catalogue)} cases")
    return 0 if rows else 3


def _among(option: str, given: Sequence[str], known: Iterable[str]) -> None:
    """Refuse names that no case has."""
    for name in given:
        if name not in known:
            raise ProblemError(f"no case has the {option} {name!r}; {nearest_names(name, known)}")


def _add_show(commands: Any) -> None:
    parser = _add(commands, "show", "describe a case", "show wall-mixed-conditions --picture wall.png")
    parser.add_argument("case", help="a case id")
    parser.add_argument("--picture", metavar="FILE", type=Path, help="draw it (png, svg or pdf)")
    parser.set_defaults(run=_show)


def _show(options: argparse.Namespace) -> int:
    from laplace_verify.cases import catalogue, describe

    case = catalogue[options.case]
    _say(describe(case))
    if options.picture is not None:
        from laplace_verify.report import save_picture

        save_picture(case, options.picture)
        _note(f"picture: {options.picture}")
    return 0


def _add_value(commands: Any) -> None:
    parser = _add(
        commands, "value", "print the exact solution at a point", "value plate-saddle 1/3 0.25 --digits 50"
    )
    parser.add_argument("case", help="a case id")
    parser.add_argument(
        "coordinates",
        nargs="+",
        metavar="X",
        help='coordinates, exact: "0.1" or "1/3"; "--" before negative ones',
    )
    parser.add_argument("--digits", type=int, default=30, help="correct digits asked for (default 30)")
    parser.set_defaults(run=_value)


def _value(options: argparse.Namespace) -> int:
    import mpmath

    from laplace_verify.cases import catalogue

    case = catalogue[options.case]
    found = case.exact.enclosure(options.coordinates, options.digits)
    if not case.problem.shape.contains([[float(Fraction(text)) for text in options.coordinates]], CLOSED)[0]:
        _note("note: the point lies outside the shape")
    _say(f"value   {mpmath.nstr(found.value, options.digits)}")
    _say(f"radius  {mpmath.nstr(found.radius, 2)}")
    _say(f"basis   {found.basis}")
    return 0


# -- run, report -------------------------------------------------------------------------------------------


def _add_run(commands: Any) -> None:
    parser = _add(
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
    parser.add_argument("--workers", type=int, default=os.cpu_count() or 1, help="default: one a core")
    parser.add_argument("--seed", type=int, default=0, help="of everything random (default 0)")
    parser.add_argument(
        "--no-principles", action="store_true", help="leave out the laws of harmonic functions"
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
    laws = 0 if options.no_principles else len(LAWS)
    with tqdm(total=len(cases) + laws, file=sys.stderr, unit="item", desc=solver.name) as bar:
        record = verify(
            options.solver,
            cases,
            principles=not options.no_principles,
            sizes=options.sizes,
            seed=options.seed,
            time_limit=options.time_limit,
            workers=options.workers,
            progress=lambda _: bar.update(),
            command=shlex.join(["laplace-verify", *options.given]),
        )
    paths = write_report(record, options.out, formats=options.format)
    _summary(record)
    for path in paths.values():
        _say(f"written: {path}")
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
    _say(tabulate(rows, headers=headers, tablefmt="simple", disable_numparse=True))
    verdicts = _verdicts(record)
    counts = ", ".join(f"{verdicts.count(name)} {name}" for name in dict.fromkeys(sorted(verdicts)))
    _say(f"\n{counts}")


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
    judged = {str(study.verdict) for study in record.studies if study.case_id not in known}
    judged |= {str(check.verdict) for check in record.checks}
    if verdicts <= {"NOT_APPLICABLE", "NOT_RUN"}:
        _note("nothing could be run: no case and no law is within the declared capabilities")
        return 3
    if judged & set(BAD) or (inconclusive == "fail" and "INCONCLUSIVE" in judged):
        return 1
    return 0


def _add_report(commands: Any) -> None:
    parser = _add(
        commands, "report", "render a record again", "report verification-report/record.json --out again"
    )
    parser.add_argument("record", metavar="RECORD", type=Path, help="the record.json of a run")
    parser.add_argument("--out", metavar="DIR", type=Path, default=Path("verification-report"))
    parser.add_argument("--format", nargs="+", choices=FORMATS, default=list(FORMATS), help="default: all")
    parser.set_defaults(run=_report)


def _report(options: argparse.Namespace) -> int:
    from laplace_verify.campaign import record_from_json
    from laplace_verify.report import write_report

    for path in write_report(record_from_json(options.record), options.out, formats=options.format).values():
        _say(f"written: {path}")
    return 0


# -- regenerate --------------------------------------------------------------------------------------------


def _add_regenerate(commands: Any) -> None:
    parser = _add(
        commands, "regenerate", "make the files of reference_cases or reports again", "regenerate cases"
    )
    parser.add_argument("what", choices=("cases", "reports"))
    parser.add_argument("--out", metavar="DIR", type=Path, help="default: the folder in the checkout")
    parser.set_defaults(run=_regenerate)


def _regenerate(options: argparse.Namespace) -> int:
    if options.what == "cases":
        from laplace_verify.cases import regenerate_cases

        written = regenerate_cases(options.out or Path("reference_cases"), note=_note)
    else:
        from laplace_verify.report import regenerate_reports

        written = regenerate_reports(options.out or Path("reports"), note=_note)
    _say(f"{len(written)} files written")
    return 0


def _say(text: str) -> None:
    """Print a result."""
    print(text)  # noqa: T201


def _note(text: str) -> None:
    """Print what is no result."""
    print(text, file=sys.stderr)  # noqa: T201
