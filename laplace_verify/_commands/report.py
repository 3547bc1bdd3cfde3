"""`report` and `regenerate`: files made again from a record, or from the sources."""

from __future__ import annotations

import argparse
from pathlib import Path
from typing import Any

from laplace_verify._commands.common import described, note, say

__all__ = ["FORMATS", "add_regenerate", "add_report"]

FORMATS = ("html", "md", "tex", "csv", "json", "junit")


def add_report(commands: Any) -> None:
    """Describe the command."""
    parser = described(
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
        say(f"written: {path}")
    return 0


def add_regenerate(commands: Any) -> None:
    """Describe the command."""
    parser = described(
        commands, "regenerate", "make the files of reference_cases or reports again", "regenerate cases"
    )
    parser.add_argument("what", choices=("cases", "reports"))
    parser.add_argument("--out", metavar="DIR", type=Path, help="default: the folder in the checkout")
    parser.add_argument("--workers", metavar="N", type=int, help="processes for cases (default: one a core)")
    parser.set_defaults(run=_regenerate)


def _regenerate(options: argparse.Namespace) -> int:
    if options.what == "cases":
        written = _regenerate_cases(options.out or Path("reference_cases"), options.workers)
    else:
        from laplace_verify.report import regenerate_reports

        written = regenerate_reports(options.out or Path("reports"), note=note)
    say(f"{len(written)} files written")
    return 0


def _regenerate_cases(folder: Path, workers: int | None) -> list[Path]:
    """Write the files of all cases and their pictures, with a bar for each."""
    from tqdm import tqdm

    from laplace_verify.cases import catalogue, regenerate_cases
    from laplace_verify.report import draw_cases

    notes: list[str] = []
    with tqdm(total=len(catalogue), unit="case", desc="files") as bar:
        written = regenerate_cases(folder, notes.append, workers=workers, progress=lambda _: bar.update())
    with tqdm(total=len(catalogue), unit="case", desc="pictures") as bar:
        written += draw_cases(folder / "pictures", progress=lambda _: bar.update())
    for text in notes:
        note(text)
    return written
