"""The folder of reference cases: one JSON file a case, an index, and the versions that made them.

Case files hold no versions, dates or machine, so that the same sources write the same bytes.
"""

from __future__ import annotations

import platform
from collections.abc import Callable, Iterator
from dataclasses import replace
from importlib.metadata import version
from pathlib import Path

import msgspec
from tabulate import tabulate

from laplace_verify.cases.catalogue import catalogue
from laplace_verify.cases.describe import basis_in_words, regularity_in_words
from laplace_verify.cases.families import FAMILIES
from laplace_verify.errors import RecordError
from laplace_verify.files import write_atomically
from laplace_verify.problems import Case, case_to_json
from laplace_verify.references import stored_values
from laplace_verify.version import __version__

__all__ = ["regenerate_cases"]

MAKERS = ("numpy", "scipy", "mpmath", "msgspec")
INDEX = """\
# Reference cases

{count} boundary value problems div(K grad u) = 0 with exact solutions, one JSON file a case. Written by
`laplace-verify regenerate cases`; edit the sources in `laplace_verify/cases`, not these files.

A file states the shape, the condition on every boundary piece, the conductivity, the exact solution (as a
formula and as exact parameters), how smooth it is, and exact quantities; {stored} of them hold values of u
and grad u with {digits} digits, an error radius and the basis of the digits. Numbers that must keep all
digits are decimal strings. The outward unit normal is n; Neumann data are n . K grad u, Robin data
n . K grad u + alpha u.

{table}
"""
DIGITS = 40


def regenerate_cases(folder: Path | str, note: Callable[[str], object] | None = None) -> list[Path]:
    """Write all cases of the catalogue, an index README.md and PROVENANCE.json into a folder.

    Parameters
    ----------
    folder
        Is made if it does not exist. Other files in it are left alone; a JSON file that is no case of the
        catalogue is reported.
    note
        Called with a line of text as the work goes on.

    Returns
    -------
    list of Path
        The files written, in the order of the catalogue.

    Raises
    ------
    RecordError
        If the folder cannot be written to.
    """
    folder, say = Path(folder), note or (lambda _: None)
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as cause:
        raise RecordError(f"the folder {folder} cannot be made: {cause}; give another one") from cause
    written, cases = [], []
    for case in _complete():
        written.append(_write(folder / f"{case.id}.json", case_to_json(case)))
        cases.append(case)
    written.append(_write(folder / "README.md", _index(cases).encode()))
    written.append(_write(folder / "PROVENANCE.json", _provenance()))
    for path in sorted(folder.glob("*.json")):
        if path not in written:
            say(f"{path.name} is no case of the catalogue; remove it if it is an old one")
    say(f"{len(cases)} cases written to {folder}")
    return written


def _complete() -> Iterator[Case]:
    """Yield the cases of the package with their reference values."""
    for id_, case in catalogue.items():
        points = tuple(FAMILIES[id_]().reference_points)
        yield replace(case, stored=stored_values(case, points, DIGITS))


def _index(cases: list[Case]) -> str:
    """Return the table of all cases."""
    rows = [
        (
            f"[{case.id}]({case.id}.json)",
            case.title,
            case.dim,
            case.problem.shape.kind,
            ", ".join(sorted(case.conditions)),
            regularity_in_words(case),
            basis_in_words(case),
        )
        for case in cases
    ]
    headers = ("case", "title", "dim", "shape", "conditions", "regularity", "digits rest on")
    table = tabulate(rows, headers=headers, tablefmt="pipe")
    stored = sum(1 for case in cases if case.stored)
    return INDEX.format(count=len(cases), stored=stored, digits=DIGITS, table=table)


def _provenance() -> bytes:
    """Return the versions of what computed the files."""
    made_by = {"laplace-verify": __version__, "python": platform.python_version()}
    made_by |= {name: version(name) for name in MAKERS}
    return msgspec.json.format(msgspec.json.encode({"made_by": made_by}), indent=2) + b"\n"


def _write(path: Path, content: bytes) -> Path:
    """Write a file at once or not at all, and return it."""
    write_atomically(path, content)
    return path
