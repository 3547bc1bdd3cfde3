"""A convergence table: one row a level, error and order between levels for every norm."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Literal, TypeAlias

from tabulate import tabulate

from laplace_verify.errors import RecordError, nearest_names

if TYPE_CHECKING:
    from laplace_verify.measure.results import Level, Order

__all__ = ["Format", "convergence_table"]

Format: TypeAlias = Literal["text", "markdown", "latex"]
STYLES = {"text": "simple", "markdown": "github", "latex": "latex_booktabs"}


def convergence_table(
    levels: Sequence[Level], orders: Mapping[str, Order], norms: Sequence[str], fmt: Format
) -> str:
    """Return the table; levels that did not enter a fit carry a mark and, below, the reason.

    Raises
    ------
    RecordError
        If `fmt` or a norm is unknown.
    """
    if fmt not in STYLES:
        raise RecordError(f"table format must be 'text', 'markdown' or 'latex', got {fmt!r}")
    for norm in norms:
        if norm not in orders:
            raise RecordError(f"no norm {norm!r} in this study; {nearest_names(norm, orders)}")
    headers = ["size", "h", "unknowns", "seconds"]
    for norm in norms:
        headers += [norm, "order"]
    rows = [_row(k, level, orders, norms) for k, level in enumerate(levels)]
    if levels:
        rows.append(_fit_row(orders, norms))
    table: str = tabulate(
        rows, headers=headers, tablefmt=STYLES[fmt], disable_numparse=True, stralign="right"
    )
    notes = _notes(levels, orders, norms)
    if not notes:
        return table
    if fmt == "latex":
        return table + "\n" + "\n".join(f"\\par\\footnotesize {_latex(note)}" for note in notes)
    return table + "\n\n" + "\n".join(f"* {note}" for note in notes)


def _row(k: int, level: Level, orders: Mapping[str, Order], norms: Sequence[str]) -> list[str]:
    """Return the cells of one level."""
    cells = [str(level.size), f"{level.h:.4g}", str(level.unknowns), f"{level.seconds:.2g}"]
    for norm in norms:
        error = level.errors.get(norm)
        mark = "*" if str(level.size) in orders[norm].left_out else ""
        pairs = orders[norm].pairs
        slope = pairs[k - 1] if 0 < k <= len(pairs) else None
        cells.append("-" if error is None else f"{error:.3e}{mark}")
        cells.append("" if slope is None else f"{slope:.2f}")
    return cells


def _fit_row(orders: Mapping[str, Order], norms: Sequence[str]) -> list[str]:
    """Return the last row: the fitted order, the expected one beside it."""
    cells = ["fit", "", "", ""]
    for norm in norms:
        order = orders[norm]
        cells.append("" if order.expected is None else f"expected {_rate(order.expected)}")
        cells.append("-" if order.observed is None else f"{order.observed:.2f}")
    return cells


def _rate(rate: float | str) -> str:
    """Return a rate in words or with three digits."""
    return rate if isinstance(rate, str) else f"{rate:.3g}"


def _notes(levels: Sequence[Level], orders: Mapping[str, Order], norms: Sequence[str]) -> list[str]:
    """Return, once each, why levels did not enter a fit."""
    found: dict[str, list[str]] = {}
    for norm in norms:
        for size, why in orders[norm].left_out.items():
            found.setdefault(f"size {size} not in the fit: {why}", []).append(norm)
    notes = [
        f"{text} ({', '.join(where)})" if len(where) < len(norms) else text for text, where in found.items()
    ]
    marked = {f"size {size}" for norm in norms for size in orders[norm].left_out}
    notes += [f"size {v.size}: {v.note}" for v in levels if v.note and f"size {v.size}" not in marked]
    return notes


def _latex(text: str) -> str:
    """Escape the characters that LaTeX would read as commands."""
    table = {
        "\\": r"\textbackslash{}", "_": r"\_", "%": r"\%", "&": r"\&", "#": r"\#", "^": r"\^{}", "$": r"\$",
        "{": r"\{", "}": r"\}", "~": r"\~{}", "<": r"\textless{}", ">": r"\textgreater{}",
    }  # fmt: skip
    return "".join(table.get(character, character) for character in text)
