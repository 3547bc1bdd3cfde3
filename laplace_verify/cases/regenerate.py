"""The folder of reference cases: one JSON file a case, an index, and the versions that made them.

Case files hold no versions, dates or machine, so that the same sources write the same bytes, whatever the
number of processes that share the work.
"""

from __future__ import annotations

import os
import platform
from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import ProcessPoolExecutor
from dataclasses import dataclass, replace
from importlib.metadata import version
from multiprocessing import get_context
from pathlib import Path

import msgspec
from tabulate import tabulate

from laplace_verify.cases.catalogue import catalogue
from laplace_verify.cases.corner_fits import make_fit, stale_fits
from laplace_verify.cases.definition import Definition
from laplace_verify.cases.describe import basis_in_words, regularity_in_words
from laplace_verify.cases.families import FAMILIES
from laplace_verify.errors import RecordError
from laplace_verify.problems import Case, case_to_json
from laplace_verify.references import CONFIRMATIONS, Probe, confirmation_of, probes_of, stored_values
from laplace_verify.references.files import write_file
from laplace_verify.references.quantity_digits import with_quantity_digits
from laplace_verify.version import __version__

__all__ = ["case_file", "regenerate_cases"]

MAKERS = ("numpy", "scipy", "mpmath", "msgspec")
INDEX = """\
# Reference cases

{count} boundary value problems div(K grad u) = 0 with exact solutions, and {ill_posed} without, which a
solver that checks its input refuses; one JSON file a case. Written by
`laplace-verify regenerate cases`; edit the sources in `laplace_verify/cases`, not these files.

A file states the shape, the condition on every boundary piece, the conductivity, the exact solution (as a
formula and as exact parameters), how smooth it is, exact quantities, and at {fewest} points or more u and
grad u in up to {digits} digits ({stored} points in all): inside, 1e-3 and 1e-6 of the shape's extent from the
boundary, and near every corner and singular point. Value and gradient each come with an error radius: the
truth differs by no more. Numbers that must keep all digits are decimal strings. The outward unit normal is n;
Neumann data are n . K grad u, Robin data n . K grad u + alpha u.

"Digits rest on" names the proof of the radius. "Confirmed by" is a second route that shares no code with the
first, which the tests take to the same points.

{routes}

{table}
"""
DIGITS = 50


@dataclass(frozen=True, slots=True)
class _Made:
    """The file of a case and its row in the index."""

    name: str
    content: bytes
    points: int
    row: tuple[str, ...]


def regenerate_cases(
    folder: Path | str,
    note: Callable[[str], object] | None = None,
    *,
    workers: int | None = None,
    progress: Callable[[str], object] | None = None,
) -> list[Path]:
    """Write all cases of the catalogue, an index README.md and PROVENANCE.json into a folder.

    Parameters
    ----------
    folder
        Is made if it does not exist. Other files in it are left alone; a JSON file that is no case of the
        catalogue is reported.
    note
        Called with a line of text as the work goes on.
    workers
        Number of processes; by default one a core. They change nothing in the files.
    progress
        Called with the id of every case that is finished, in the order of the catalogue.

    Returns
    -------
    list of Path
        The files written, in the order of the catalogue.

    Raises
    ------
    RecordError
        If the folder cannot be written to.
    """
    folder, say, tell = Path(folder), note or (lambda _: None), progress or (lambda _: None)
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as cause:
        raise RecordError(f"the folder {folder} cannot be made: {cause}; give another one") from cause
    for name in stale_fits():
        make_fit(name, note=say)
    written, files = [], []
    for made in _all_made(workers or os.cpu_count() or 1):
        written.append(write_file(folder / f"{made.name}.json", made.content))
        files.append(made)
        tell(made.name)
    written.append(write_file(folder / "README.md", _index(files).encode()))
    written.append(write_file(folder / "PROVENANCE.json", _provenance()))
    for path in sorted(folder.glob("*.json")):
        if path not in written:
            say(f"{path.name} is no case of the catalogue; remove it if it is an old one")
    say(f"{len(files)} cases written to {folder}")
    return written


def case_file(id_: str) -> bytes:
    """Return the file of a case of the catalogue, with its reference values.

    Raises
    ------
    UnknownCaseError
        If there is no such case.
    """
    return case_to_json(_complete(id_))


def _all_made(workers: int) -> Iterator[_Made]:
    """Yield the files of all cases, in the order of the catalogue."""
    if workers == 1:
        yield from map(_made, catalogue)
        return
    with ProcessPoolExecutor(workers, mp_context=get_context("spawn")) as executor:
        yield from executor.map(_made, catalogue)


def _made(id_: str) -> _Made:
    """Return the file of one case; runs in a process of its own."""
    case = _complete(id_)
    return _Made(name=id_, content=case_to_json(case), points=len(case.stored), row=_row(case))


def _complete(id_: str) -> Case:
    """Return a case of the package with its reference values."""
    case, definition = catalogue[id_], FAMILIES[id_]()
    if not isinstance(definition, Definition):  # an ill-posed case has no solution to evaluate
        return case
    chosen = (Probe(point=tuple(point), place="chosen") for point in definition.reference_points)
    stored = stored_values(case, (*chosen, *probes_of(case)), DIGITS)
    return replace(with_quantity_digits(case), stored=stored)


def _row(case: Case) -> tuple[str, ...]:
    """Return the row of a case in the index."""
    found = confirmation_of(case)
    return (
        f'<img src="pictures/{case.id}.svg" width="150" alt="">',
        f"[{case.id}]({case.id}.json)<br>{case.title}",
        str(case.dim),
        case.problem.shape.kind,
        ", ".join(sorted(case.conditions)),
        regularity_in_words(case),
        str(len(case.stored)),
        "-" if case.problem.ill_posed is not None else basis_in_words(case),
        "-" if found is None else found[1].route,
    )


def _index(files: Sequence[_Made]) -> str:
    """Return the table of all cases."""
    headers = (
        "picture", "case", "dim", "shape", "conditions", "regularity", "points", "digits rest on",
        "confirmed by",
    )  # fmt: skip
    points = [made.points for made in files if made.points]  # ill-posed cases have none
    return INDEX.format(
        count=len(points),
        ill_posed=len(files) - len(points),
        fewest=min(points),
        stored=sum(points),
        digits=DIGITS,
        routes=_routes(),
        table=tabulate([made.row for made in files], headers=headers, tablefmt="pipe", disable_numparse=True),
    )


def _routes() -> str:
    """Return the table of the routes that confirm values."""
    rows = [
        (c.route, c.source, f"{c.digits} {c.counted}", f"{100 * c.share:.0f} %")
        for c in CONFIRMATIONS.values()
    ]
    headers = ("confirmed by", "source", "digits confirmed", "of the points of a case, at least")
    return tabulate(rows, headers=headers, tablefmt="pipe", disable_numparse=True)


def _provenance() -> bytes:
    """Return the versions of what computed the files."""
    made_by = {"laplace-verify": __version__, "python": platform.python_version()}
    made_by |= {name: version(name) for name in MAKERS}
    return msgspec.json.format(msgspec.json.encode({"made_by": made_by}), indent=2) + b"\n"
