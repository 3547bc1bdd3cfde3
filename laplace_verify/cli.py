"""The command line: results on stdout, progress and errors on stderr.

Exit status: 0 everything ran and passed; 1 something failed, broke or breaks a law or (unless told to warn
only) is inconclusive; 2 the request cannot be understood; 3 nothing could be run.
"""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Sequence

from laplace_verify._commands.catalogue import add_cases, add_show, add_value
from laplace_verify._commands.common import note, say
from laplace_verify._commands.grids import add_gci
from laplace_verify._commands.report import add_regenerate, add_report
from laplace_verify._commands.run import add_run
from laplace_verify._commands.seeded import add_seeded_faults
from laplace_verify.errors import LaplaceVerifyError
from laplace_verify.version import __version__

__all__ = ["main"]

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
        say(FIRST_STEPS.rstrip())
        return 0
    try:
        status: int = options.run(options)
    except LaplaceVerifyError as error:
        note(f"laplace-verify: {error}")
        return 2
    except BrokenPipeError:  # the reader of our output has seen enough
        sys.stdout = open(os.devnull, "w")  # noqa: SIM115
        return 0
    except KeyboardInterrupt:
        note("laplace-verify: interrupted")
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
    for add in (
        add_cases,
        add_show,
        add_value,
        add_run,
        add_report,
        add_gci,
        add_seeded_faults,
        add_regenerate,
    ):
        add(commands)
    return parser
