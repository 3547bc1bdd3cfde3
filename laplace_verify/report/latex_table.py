r"""Tables as LaTeX: columns as wide as their content where there is room, else shared out.

Every column is a paragraph of fixed width, so that nothing can run into its neighbour. If the longest lines
do not fit side by side, columns of words get widths in proportion to the square root of all their text
(which keeps the table low), never less than the longest word. If not even the words fit, smaller type is
taken, then a page turned sideways.
"""

from __future__ import annotations

from itertools import pairwise

from laplace_verify.report.content import Cell, Column, Table
from laplace_verify.report.latex_text import escape_latex, pieces_of, width_of
from laplace_verify.report.text import VERDICT_WORDS

__all__ = ["label_of", "table_to_latex"]

_UPRIGHT, _SIDEWAYS = 480.0, 725.0  # width of the text in points, A4 with margins of 20 mm
_GAP = 7.0  # points between two columns
_TYPES = (("footnotesize", 0.85), ("scriptsize", 0.75))  # and widths in parts of those at 10 pt
_SLACK = 2.0  # points
_LINE, _EASE = (
    150.0,
    1.25,
)  # a column that needs more is words; columns may ask for so much more than there is
_CAPTION = 260.0  # narrower captions look like columns
_SHORT, _WORDY = 12, 80  # rows, and letters in a cell, of a table that stays in one piece


def table_to_latex(table: Table) -> str:
    """Return one table, kept together if it is short; a long one may run over pages, its head on each."""
    kind, widths, room = _fitted(table)
    columns = [_column(column, width) for column, width in zip(table.columns, widths, strict=True)]
    gaps = [rf"@{{\hspace{{{gap:.0f}pt}}}}" for gap in _gaps(table)]
    layout = "".join(part for pair in zip(["@{}", *gaps], columns, strict=True) for part in pair) + "@{}"
    head = " & ".join(rf"\textbf{{{escape_latex(column.title)}}}" for column in table.columns)
    opening = f"\\toprule\n{head} \\\\\n\\midrule"
    rows = [
        " & ".join(_entry(cell, column) for cell, column in zip(row, table.columns, strict=True)) + r" \\"
        for row in table.rows
    ]
    caption = rf"\textit{{{escape_latex(table.caption)}}}"
    if _is_short(table):
        parts = [caption + r"\\[2pt]", rf"\begin{{tabular}}{{{layout}}}", opening, *rows, r"\bottomrule"]
        body = "\n".join(
            [r"\begin{minipage}{\linewidth}\raggedright", *parts, r"\end{tabular}", r"\end{minipage}"]
        )
    else:
        whole = max(sum(widths) + sum(_gaps(table)), _CAPTION)
        wide = rf"\multicolumn{{{len(widths)}}}{{@{{}}p{{{whole:.1f}pt}}@{{}}}}"
        parts = [
            rf"\begin{{longtable}}[l]{{{layout}}}", rf"{wide}{{\raggedright{caption}}} \\[2pt]",
            opening, r"\endfirsthead", opening, r"\endhead", r"\bottomrule", r"\endfoot",
            "\n\\addlinespace[1.5pt]\n".join(rows),
            r"\end{longtable}",
        ]  # fmt: skip
        body = "\n".join(parts)
    set_small = f"{{\\{kind}\n{body}\\par}}"
    return f"\\begin{{landscape}}\n{set_small}\n\\end{{landscape}}" if room == _SIDEWAYS else set_small


def label_of(anchor: str) -> str:
    """Return an anchor with such letters only as a label may have."""
    return "".join(letter if letter.isascii() and letter.isalnum() else "-" for letter in anchor)


def _fitted(table: Table) -> tuple[str, list[float], float]:
    """Return type, column widths in points and width of the page for a table."""
    least = [_least(column, [row[k] for row in table.rows]) for k, column in enumerate(table.columns)]
    whole = [max([low, *(_width(row[k]) for row in table.rows)]) for k, low in enumerate(least)]
    amount = [sum(_width(row[k]) for row in table.rows) for k in range(len(least))]
    gaps = sum(_gaps(table)) + 0.01
    for room in (_UPRIGHT, _SIDEWAYS):
        fits = []
        for kind, scale in _TYPES:
            low, high = ([scale * width + _SLACK for width in widths] for widths in (least, whole))
            if sum(low) + gaps <= room:
                fits.append((kind, _shared(low, high, amount, room - gaps), room))
                if sum(min(width, _LINE) for width in high) + gaps <= _EASE * room:
                    return fits[-1]  # the larger type, if most entries have a line to themselves
        if fits:
            return fits[-1]
    share = (_SIDEWAYS - gaps) / sum(low)
    return _TYPES[-1][0], [share * width for width in low], _SIDEWAYS


def _least(column: Column, cells: list[Cell]) -> float:
    """Return the width of what must stay on one line: numbers, and words or parts of them."""
    words = [width_of(word, bold=True) for word in column.title.split()]
    for cell in cells:
        if column.align == "right":
            words.append(_width(cell))
        else:
            bold = cell.verdict is not None
            words += [width_of(part, bold=bold) for word in _text(cell).split() for part in pieces_of(word)]
    return max(words, default=0.0)


def _shared(low: list[float], high: list[float], amount: list[float], room: float) -> list[float]:
    """Return widths within bounds that add up to `room` at most, in proportion to the root of `amount`."""
    if sum(high) <= room:
        return high

    def widths(factor: float) -> list[float]:
        return [
            min(max(a, factor * text**0.5), b) for a, b, text in zip(low, high, amount, strict=True)
        ]  # fmt: skip

    below, above = 0.0, room
    for _ in range(60):
        factor = (below + above) / 2
        below, above = (below, factor) if sum(widths(factor)) > room else (factor, above)
    return widths(below)


def _gaps(table: Table) -> list[float]:
    """Return the space between neighbouring columns, more where text follows a number."""
    pairs = pairwise(column.align for column in table.columns)
    return [2 * _GAP if pair == ("right", "left") else _GAP for pair in pairs]


def _is_short(table: Table) -> bool:
    """Return whether a table is so low that it need not be broken."""
    return len(table.rows) <= _SHORT and all(len(cell.text) <= _WORDY for row in table.rows for cell in row)


def _column(column: Column, width: float) -> str:
    side = "left" if column.align == "right" else "right"
    return rf">{{\ragged{side}\arraybackslash}}p{{{width:.1f}pt}}"


def _width(cell: Cell) -> float:
    """Return the width of a cell on one line, in points at 10 pt."""
    return width_of(_text(cell), bold=cell.verdict is not None)


def _text(cell: Cell) -> str:
    return VERDICT_WORDS[cell.verdict] if cell.verdict is not None else cell.text


def _entry(cell: Cell, column: Column) -> str:
    # The braces keep a cell that opens with "[" from being read as the optional argument of "\\".
    text = escape_latex(_text(cell))
    if cell.verdict is not None:
        return rf"\textbf{{{text}}}"
    if cell.target:
        return rf"\hyperref[{label_of(cell.target)}]{{{text}}}"
    return rf"\mbox{{{text}}}" if column.align == "right" else f"{{{text}}}"
