"""Write the report of a record in every form asked for, each file at once or not at all."""

from __future__ import annotations

import os
from collections.abc import Callable, Sequence
from pathlib import Path

from laplace_verify.campaign.record import Record, check_record, record_to_json
from laplace_verify.errors import RecordError, nearest_names
from laplace_verify.files import write_atomically
from laplace_verify.report.drawn import Drawn, draw_pictures
from laplace_verify.report.html import to_html
from laplace_verify.report.junit import to_junit
from laplace_verify.report.latex import FIGURES, to_latex
from laplace_verify.report.markdown import to_markdown
from laplace_verify.report.model import build_document
from laplace_verify.report.table_csv import to_csv

__all__ = ["FORMATS", "check_folder", "write_report"]

FORMATS = ("html", "md", "tex", "csv", "json", "junit")
_NAMES = {
    "html": "report.html",
    "md": "report.md",
    "tex": "report.tex",
    "csv": "errors.csv",
    "json": "record.json",
    "junit": "junit.xml",
}


def write_report(
    record: Record, folder: str | os.PathLike[str], formats: Sequence[str] = FORMATS
) -> dict[str, Path]:
    """Write the report of `record` into `folder`; return format -> path of the file.

    Parameters
    ----------
    record : Record
        From `verify`, or read back by `record_from_json`; nothing else is needed.
    folder : path
        Made if it does not exist. Files of the same name are replaced.
    formats : sequence of str
        Of "html" (report.html, one self-contained file), "md" (report.md, without figures), "tex"
        (report.tex, its figures the pages of figures.pdf), "csv" (errors.csv, one row a level and
        norm), "json" (record.json, the record itself) and "junit" (junit.xml).

    Raises
    ------
    RecordError
        If `record` is none, a format is unknown or the folder cannot be written.
    """
    check_record(record)
    wanted = [formats] if isinstance(formats, str) else list(dict.fromkeys(formats))
    for name in wanted:
        if name not in _NAMES:
            raise RecordError(f"no report format {name!r}; {nearest_names(name, FORMATS)}")
    place = Path(folder)
    check_folder(place)
    document = build_document(record) if {"html", "md", "tex"} & set(wanted) else None
    drawn = draw_pictures(document, svg="html" in wanted, pdf="tex" in wanted) if document else Drawn()
    makers: dict[str, Callable[[], bytes]] = {
        "csv": lambda: to_csv(record).encode(),
        "json": lambda: record_to_json(record),
        "junit": lambda: to_junit(record),
    }
    if document is not None:
        makers |= {
            "html": lambda: to_html(document, drawn.svg).encode(),
            "md": lambda: to_markdown(document).encode(),
            "tex": lambda: to_latex(document, drawn.pages).encode(),
        }
    paths = {}
    for name in wanted:
        paths[name] = place / _NAMES[name]
        write_atomically(paths[name], makers[name]())
    if drawn.pdf:
        write_atomically(place / FIGURES, drawn.pdf)
    return paths


def check_folder(folder: Path) -> None:
    """Make the folder of a report, before any work is done for it.

    Raises
    ------
    RecordError
        If it cannot be made or written.
    """
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as cause:
        raise RecordError(
            f"cannot make the report folder {folder}: {cause.strerror or cause}; choose one you may write to"
        ) from cause
    if not os.access(folder, os.W_OK | os.X_OK):
        raise RecordError(f"cannot write into the report folder {folder}: choose one you may write to")
