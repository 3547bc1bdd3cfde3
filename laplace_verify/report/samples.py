"""The sample reports that the README links to: a sound solver, and the same with a mistake put into it."""

from __future__ import annotations

import os
from collections.abc import Callable, Sequence
from pathlib import Path

from laplace_verify.campaign import verify
from laplace_verify.files import write_atomically
from laplace_verify.report.writer import write_report
from laplace_verify.solvers.samples import FAULTS, five_point

__all__ = ["regenerate_reports"]

CASES = (
    "rod-fixed-and-flux",
    "plate-saddle",
    "plate-wave",
    "plate-flux-top",
    "wall-mixed-conditions",
    "plate-tensor-oblique",
    "plate-hot-side",
    "l-shape-corner",
)
_FAULT = "first-order flux"
_FORMATS = ("html", "md", "csv", "json")
_INDEX = """\
# Sample reports

Written by `laplace-verify regenerate reports`; they differ from run to run in times, dates and host only.

- [The five-point sample solver](five-point/report.md), sound: [HTML](five-point/report.html),
  [CSV](five-point/errors.csv), [record](five-point/record.json). Every case passes, the corner of the
  L-shape at the order 2/3 that theory leaves there.
- [The same solver with a mistake](five-point-first-order-flux/report.md): {fault}:
  [HTML](five-point-first-order-flux/report.html). The cases with flux data fail near order 1, the others
  still pass, and the diagnosis names the flux condition.
- [Seeded faults](seeded-faults/README.md): known mistakes put into the sample solvers one at a time, what
  catches each and what is suspected first ([CSV](seeded-faults/outcomes.csv)); written by
  `laplace-verify seeded-faults --out reports/seeded-faults`.

Open the HTML files in a browser; they are complete in themselves.
"""


def regenerate_reports(
    folder: Path, note: Callable[[str], object] | None = None, *, cases: Sequence[str] = CASES
) -> list[Path]:
    """Write the sample reports and their index into a folder; return the files.

    Parameters
    ----------
    folder
        Is made if it does not exist.
    note
        Called with a line of text as the work goes on.
    cases
        Ids of the cases; the index describes what the default shows.

    Raises
    ------
    RecordError
        If the folder cannot be written.
    """
    say = note or (lambda _: None)
    fault = FAULTS[_FAULT]
    written: list[Path] = []
    for name, solver in (("five-point", five_point), ("five-point-first-order-flux", fault.adapter)):
        say(f"{solver.name}: {len(cases)} cases")
        command = f"laplace-verify run laplace_verify.solvers.samples:five_point --cases {' '.join(cases)}"
        record = verify(
            solver,
            cases,
            workers=os.cpu_count() or 1,
            command=command if solver is five_point else "laplace-verify regenerate reports",
        )
        written += write_report(record, folder / name, formats=_FORMATS).values()
    index = folder / "README.md"
    write_atomically(index, _INDEX.format(fault=fault.description).encode())
    return [*written, index]
