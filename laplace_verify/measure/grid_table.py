"""The table of a grid convergence estimate, and the CSV file it can be made from.

Rows and symbols follow Celik et al. 2008, J. Fluids Eng. 130, 078001, table 1: N, r21, r32, phi_1, phi_2,
phi_3, p, phi_ext, e_a, e_ext, GCI, with 1 the finest grid.
"""

from __future__ import annotations

import csv
import math
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

from tabulate import tabulate

from laplace_verify.errors import RecordError
from laplace_verify.measure.table import STYLES, Format

if TYPE_CHECKING:
    from laplace_verify.measure.grid_convergence import GridConvergence

__all__ = ["Grids", "grid_table", "read_grids"]

MOST_ROWS = 10_000


@dataclass(frozen=True, slots=True, kw_only=True)
class Grids:
    """Spacings, numbers of cells if the file gives these, and named values, all from the finest grid on."""

    h: tuple[float, ...]
    cells: tuple[float, ...] | None
    columns: dict[str, tuple[float, ...]]


def grid_table(
    found: GridConvergence, fmt: Format = "text", name: str = "phi", cells: Sequence[float] | None = None
) -> str:
    """Return the estimate as a table of two columns, symbol and number; grid 1 is the finest.

    Raises
    ------
    RecordError
        If `fmt` is unknown.
    """
    if fmt not in STYLES:
        raise RecordError(f"table format must be 'text', 'markdown' or 'latex', got {fmt!r}")
    numbers = range(1, len(found.values) + 1)
    rows = (
        [(f"N{k}", _number(n)) for k, n in zip(numbers, cells, strict=True)]
        if cells is not None
        else [(f"h{k}", _number(h)) for k, h in zip(numbers, found.h, strict=True)]
    )
    rows += [(f"r{k + 1}{k}", _number(r)) for k, r in zip(numbers, found.ratios, strict=False)]
    rows += [(f"phi{k}", _number(value)) for k, value in zip(numbers, found.values, strict=True)]
    rows += [
        ("p", _number(found.order)),
        ("phi_ext", _number(found.extrapolated)),
        ("e_a", _percent(found.approximate_error)),
        ("e_ext", _percent(found.extrapolated_error)),
        ("safety factor", _number(found.safety_factor)),
        ("GCI", _percent(found.index)),
        ("uncertainty", _number(found.uncertainty)),
        ("asymptotic ratio", _number(found.asymptotic_ratio)),
        ("fit deviation", _number(found.deviation)),
        ("behaviour", found.behaviour),
    ]
    shown = [row for row in rows if row[1] or row[0] in ("p", "phi_ext", "GCI")]
    table: str = tabulate(
        shown, headers=("1 = finest", name), tablefmt=STYLES[fmt], disable_numparse=True, stralign="left"
    )
    return f"{table}\n\n{found.note}" if found.note and fmt != "latex" else table


def read_grids(path: Path, dim: int = 2) -> Grids:
    """Return spacings and values of a CSV file with a header (RFC 4180).

    The first column is "h" (spacing) or "N" (number of cells; then h = N^(-1/dim)); every other column holds
    the values of one quantity. Rows may come in any order; empty lines are skipped.

    Raises
    ------
    RecordError
        If the file cannot be read, the first column is neither, or a cell is no finite number; the message
        names file, row and column.
    """
    try:
        with path.open(newline="", encoding="utf-8-sig") as stream:
            table = [row for row in csv.reader(stream) if any(cell.strip() for cell in row)]
    except (OSError, UnicodeDecodeError, csv.Error) as cause:
        raise RecordError(f"cannot read {path}: {cause}; give a CSV file with a header") from cause
    header = [cell.strip() for cell in table[0]] if table else []
    if len(header) < 2 or header[0] not in ("h", "N") or len(set(header)) != len(header):
        raise RecordError(
            f'{path}: the header must be "h" or "N" and then a name for every column of values, got '
            f"{','.join(header)!r}"
        )
    if len(table) > MOST_ROWS:
        raise RecordError(f"{path}: {len(table)} rows are no grid study; at most {MOST_ROWS} are read")
    rows = [_row(path, number, header, row) for number, row in enumerate(table[1:], start=2)]
    if any(not row[0] > 0 for row in rows):
        raise RecordError(f"{path}: every {header[0]} must be positive, got {[row[0] for row in rows]}")
    by_cells = header[0] == "N"
    rows.sort(key=lambda row: -row[0] if by_cells else row[0])
    first = tuple(row[0] for row in rows)
    return Grids(
        h=tuple(n ** (-1.0 / dim) for n in first) if by_cells else first,
        cells=first if by_cells else None,
        columns={name: tuple(row[k] for row in rows) for k, name in enumerate(header) if k},
    )


def _row(path: Path, number: int, header: Sequence[str], cells: Sequence[str]) -> list[float]:
    """Return the numbers of one row."""
    if len(cells) != len(header):
        raise RecordError(f"{path}, row {number}: {len(header)} cells expected, got {len(cells)}")
    found = []
    for name, cell in zip(header, cells, strict=True):
        try:
            value = float(cell)
        except ValueError:
            value = math.nan
        if not math.isfinite(value):
            raise RecordError(f"{path}, row {number}, column {name!r}: a number was expected, got {cell!r}")
        found.append(value)
    return found


def _number(value: float | None) -> str:
    """Return a number to seven digits, nothing of None."""
    return "" if value is None else f"{value:.7g}"


def _percent(share: float | None) -> str:
    """Return a share in percent, nothing of None."""
    return "" if share is None else f"{100 * share:.4g} %"
