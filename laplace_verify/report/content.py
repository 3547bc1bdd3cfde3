"""What a report consists of, before anyone decides how it looks.

`model` fills these from a record; the HTML, Markdown and LaTeX writers each know how to set one of each.
All text is plain: escaping is the writer's business, and no text carries markup.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Literal, TypeAlias

from laplace_verify.measure.verdict import Verdict

if TYPE_CHECKING:
    from matplotlib.figure import Figure

__all__ = [
    "Block",
    "Cell",
    "Code",
    "Column",
    "Document",
    "Facts",
    "Items",
    "Paragraph",
    "Picture",
    "Section",
    "Table",
]


@dataclass(frozen=True, slots=True, kw_only=True)
class Cell:
    """One entry of a table; `verdict` sets it as a verdict mark, `target` links to a section's anchor."""

    text: str
    verdict: Verdict | None = None
    target: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Column:
    """Head of a column; numbers are set to the right."""

    title: str
    align: Literal["left", "right"] = "left"


@dataclass(frozen=True, slots=True, kw_only=True)
class Table:
    """A table with a caption; the first cell of every row is the row's head."""

    caption: str
    columns: tuple[Column, ...]
    rows: tuple[tuple[Cell, ...], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Paragraph:
    """Running text; a caution is set apart, a lead is larger, a label opens it in bold."""

    text: str
    tone: Literal["plain", "lead", "caution"] = "plain"
    label: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Items:
    """A list of short entries."""

    entries: tuple[str, ...]
    ordered: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Facts:
    """Names with their values."""

    pairs: tuple[tuple[str, str], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Code:
    """Text to be shown letter by letter: a command, a program, a traceback."""

    text: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Picture:
    """A figure, drawn only by the writers that show it; `alt` says in words what it shows."""

    key: str
    title: str
    alt: str
    caption: str
    draw: Callable[[], Figure]


Block: TypeAlias = Paragraph | Items | Facts | Code | Table | Picture | tuple[Picture, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Section:
    """A heading with what stands under it."""

    anchor: str
    title: str
    blocks: tuple[Block, ...] = ()
    sections: tuple[Section, ...] = ()
    verdict: Verdict | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Document:
    """A whole report. `counts` are the verdict totals that open it."""

    title: str
    subtitle: str
    summary: str
    counts: tuple[tuple[Verdict, int], ...]
    sections: tuple[Section, ...] = field(default=())
