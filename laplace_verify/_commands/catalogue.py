"""`cases`, `show`, `value`: what the catalogue holds."""

from __future__ import annotations

import argparse
from pathlib import Path
from typing import Any

from laplace_verify._commands.common import among, described, note, say
from laplace_verify.errors import ProblemError

__all__ = ["add_cases", "add_show", "add_value"]


def add_cases(commands: Any) -> None:
    """Describe the command."""
    parser = described(commands, "cases", "list the catalogue", "cases --dim 2 --condition neumann")
    parser.add_argument("--dim", type=int, choices=(1, 2, 3), help="space dimension")
    parser.add_argument("--shape", help="shape, such as rectangle or polygon")
    parser.add_argument(
        "--condition",
        action="append",
        choices=("dirichlet", "neumann", "robin", "periodic"),
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
    among("shape", [options.shape] if options.shape else [], shapes)
    among("tag", options.tag, {tag for case in catalogue.values() for tag in case.tags})
    found = catalogue.select(dim=options.dim, shape=options.shape, tags=set(options.tag))
    wanted = set(options.condition or ())
    rows = [
        (case.id, f"{case.dim}-D", case.problem.shape.kind, ", ".join(sorted(case.conditions)), case.title)
        for case in found
        if wanted <= case.conditions
    ]
    say(tabulate(rows, headers=("case", "dim", "shape", "conditions", "title"), tablefmt="simple"))
    note(f"{len(rows)} of {len(catalogue)} cases")
    return 0 if rows else 3


def add_show(commands: Any) -> None:
    """Describe the command."""
    parser = described(commands, "show", "describe a case", "show wall-mixed-conditions --picture wall.png")
    parser.add_argument("case", help="a case id")
    parser.add_argument("--picture", metavar="FILE", type=Path, help="draw it (png, svg or pdf)")
    parser.set_defaults(run=_show)


def _show(options: argparse.Namespace) -> int:
    from laplace_verify.cases import catalogue, describe

    case = catalogue[options.case]
    say(describe(case))
    if options.picture is not None:
        from laplace_verify.report import save_picture

        save_picture(case, options.picture)
        note(f"picture: {options.picture}")
    return 0


def add_value(commands: Any) -> None:
    """Describe the command."""
    parser = described(
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
    parser.add_argument(
        "--side",
        type=int,
        choices=(1, -1),
        help="on a cut: 1 for what lies on its left, -1 on its right",
    )
    parser.set_defaults(run=_value)


def _value(options: argparse.Namespace) -> int:
    import mpmath

    from laplace_verify.cases import catalogue
    from laplace_verify.cases.statement import region_in_words
    from laplace_verify.fields.exact import exact_point

    case = catalogue[options.case]
    exact = case.exact
    place = [float(c) for c in exact_point(options.coordinates, "point", (case.dim,))]
    if not case.problem.shape.contains([place])[0]:
        raise ProblemError(
            f"the point ({', '.join(options.coordinates)}) lies outside "
            f"{region_in_words(case.problem.shape)}, where case {case.id!r} is posed"
        )
    found = exact.enclosure(options.coordinates, options.digits, side=options.side)
    say(f"value   {mpmath.nstr(found.value, options.digits)}")
    say(f"radius  {mpmath.nstr(found.radius, 2)}")
    say(f"basis   {found.basis}")
    return 0
