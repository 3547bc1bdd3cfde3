"""The report as Markdown with tables in GitHub's manner; figures are left out, their captions too.

Reference: GitHub Flavored Markdown Spec, version 0.29-gfm (2019), section 4.10 (tables), 2.4 (backslash
escapes).
"""

from __future__ import annotations

import re

from laplace_verify.report.content import (
    Block,
    Cell,
    Code,
    Column,
    Document,
    Facts,
    Items,
    Paragraph,
    Section,
    Table,
)
from laplace_verify.report.text import SYMBOLS, VERDICT_WORDS, printable

__all__ = ["escape_markdown", "table_to_markdown", "to_markdown"]

_SPECIAL = re.compile(r"([\\`*_\[\]|<>&$~])")
_OPENING = re.compile(r"^(\s*)([#+\-=]|\d+(?=[.)]))")


def escape_markdown(text: str) -> str:
    r"""Return `text` such that Markdown shows it letter by letter, on one line.

    >>> print(escape_markdown("<b>a|b</b>"))
    \<b\>a\|b\</b\>
    """
    line = _SPECIAL.sub(r"\\\1", " ".join(printable(text).split()))
    return _OPENING.sub(lambda found: found.group(1) + _shielded(found.group(2)), line)


def _shielded(opening: str) -> str:
    """Keep a first sign from making a heading, a list or a rule."""
    return opening + "\u200b" if opening.isdigit() else "\\" + opening


def to_markdown(document: Document) -> str:
    """Return the document as Markdown."""
    parts = [
        f"# {escape_markdown(document.title)}",
        escape_markdown(document.subtitle),
        f"**{escape_markdown(document.summary)}**",
        "\n".join(
            f"- {SYMBOLS[verdict]} {VERDICT_WORDS[verdict]}: {count}" for verdict, count in document.counts
        ),
    ]
    for section in document.sections:
        parts += _section(section, 2)
    return "\n\n".join(part for part in parts if part) + "\n"


def _section(section: Section, level: int) -> list[str]:
    mark = f" — {SYMBOLS[section.verdict]} {VERDICT_WORDS[section.verdict]}" if section.verdict else ""
    parts = [f"{'#' * level} {escape_markdown(section.title)}{mark}"]
    parts += [text for text in map(_block, section.blocks) if text]
    for inner in section.sections:
        parts += _section(inner, level + 1)
    return parts


def _block(block: Block) -> str:
    match block:
        case Paragraph(text=text, tone=tone, label=label):
            body = f"**{escape_markdown(label)}** {escape_markdown(text)}" if label else escape_markdown(text)
            return f"> {body}" if tone == "caution" else body
        case Items(entries=entries, ordered=ordered):
            return "\n".join(
                f"{f'{i}.' if ordered else '-'} {escape_markdown(e)}" for i, e in enumerate(entries, 1)
            )
        case Facts(pairs=pairs):
            return "\n".join(
                f"- **{escape_markdown(name)}:** {escape_markdown(value)}" for name, value in pairs
            )
        case Code(text=text):
            longest = max((len(run) for run in re.findall("`+", text)), default=0)
            fence = "`" * max(3, longest + 1)
            return f"{fence}\n{printable(text)}\n{fence}"
        case Table():
            return table_to_markdown(block)
    return ""  # pictures


def table_to_markdown(table: Table) -> str:
    """Return one table, its caption in italics above it."""
    rule = "|".join(_rule(column) for column in table.columns)
    lines = ["| " + " | ".join(escape_markdown(column.title) for column in table.columns) + " |", f"|{rule}|"]
    lines += ["| " + " | ".join(map(_cell, row)) + " |" for row in table.rows]
    caption = f"*{escape_markdown(table.caption)}*\n\n" if table.caption else ""
    return caption + "\n".join(lines)


def _rule(column: Column) -> str:
    return "---:" if column.align == "right" else ":---"


def _cell(cell: Cell) -> str:
    if cell.verdict is not None:
        return f"{SYMBOLS[cell.verdict]} {VERDICT_WORDS[cell.verdict]}"
    return escape_markdown(cell.text)
