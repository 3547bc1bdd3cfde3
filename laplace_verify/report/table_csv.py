"""Every measured error as comma-separated values: one row a level and norm, RFC 4180, UTF-8.

Floats are written by `repr`, the shortest decimal that reads back to the same bits; what is absent is an
empty field. A study without levels has one row that gives its verdict.
"""

from __future__ import annotations

import csv
import io

from laplace_verify.campaign.record import Record
from laplace_verify.measure.results import Level, Study

__all__ = ["COLUMNS", "to_csv"]

COLUMNS = (
    "case", "dim", "shape", "verdict", "level", "size", "h", "unknowns", "seconds", "norm", "absolute",
    "relative", "judged", "note", "decides", "formal_order", "expected_order",
    "observed_order", "order_low", "order_high",
)  # fmt: skip


def to_csv(record: Record) -> str:
    """Return the table with a head line; columns as in `COLUMNS`."""
    buffer = io.StringIO()
    writer = csv.writer(buffer, lineterminator="\r\n")
    writer.writerow(COLUMNS)
    for study in record.studies:
        info = record.case(study.case_id)
        opening = [study.case_id, info.dim if info else "", info.shape if info else "", study.verdict.value]
        if not study.levels:
            writer.writerow(opening + [""] * (len(COLUMNS) - len(opening)))
        for place, level in enumerate(study.levels):
            writer.writerows(opening + row for row in _rows(study, place, level))
    return buffer.getvalue()


def _rows(study: Study, place: int, level: Level) -> list[list[object]]:
    """Return the rows of one level, without the columns of the case."""
    start = [place, level.size, _exact(level.h), _exact(level.unknowns), _exact(level.seconds)]
    rows: list[list[object]] = []
    for norm, error in level.errors.items():
        order = study.orders.get(norm)
        found: tuple[object, ...] = ("", "", "", "", "", "")
        if order is not None:
            found = (order.decides, order.formal, order.expected, order.observed, order.low, order.high)
        middle = [norm, _exact(error), _exact(level.relative.get(norm)), level.judged, level.note]
        rows.append(start + middle + [_exact(value) for value in found])
    return rows or [[*start, *[""] * (len(COLUMNS) - 4 - len(start))]]


def _exact(value: object) -> object:
    """Return `value` so that it reads back to the same number; None is empty."""
    if value is None:
        return ""
    return repr(float(value)) if isinstance(value, float) else value
