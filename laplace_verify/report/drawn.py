"""All figures of a document, each drawn once and written in every form that is asked for.

A page of HTML takes them as SVG; LaTeX takes pages of one PDF file, which share their fonts.
"""

from __future__ import annotations

import io
from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from laplace_verify.report.content import Document, Picture, Section
from laplace_verify.report.plain_axes import plain_axes
from laplace_verify.report.style import drawing
from laplace_verify.report.svg import figure_to_svg

if TYPE_CHECKING:
    from matplotlib.backends.backend_pdf import PdfPages

__all__ = ["Drawn", "draw_pictures", "pictures_of"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Drawn:
    """SVG by key, the PDF, and the page of each key in it (from 1); empty what was not asked for."""

    svg: dict[str, str] = field(default_factory=dict)
    pdf: bytes = b""
    pages: dict[str, int] = field(default_factory=dict)


def draw_pictures(document: Document, *, svg: bool, pdf: bool) -> Drawn:
    """Draw every picture of the document. Same document, same bytes: no date is written."""
    if not (svg or pdf):
        return Drawn()
    texts: dict[str, str] = {}
    numbers: dict[str, int] = {}
    buffer = io.BytesIO()
    with drawing(), _pages(buffer) as pages:
        for picture in pictures_of(document.sections):
            figure = picture.draw()
            plain_axes(figure)
            if svg:
                texts[picture.key] = figure_to_svg(
                    figure, key=picture.key, title=picture.title, alt=picture.alt
                )
            if pdf:
                pages.savefig(figure)
                numbers[picture.key] = len(numbers) + 1
    return Drawn(svg=texts, pdf=buffer.getvalue() if numbers else b"", pages=numbers)


def _pages(buffer: io.BytesIO) -> PdfPages:
    from matplotlib.backends.backend_pdf import PdfPages

    return PdfPages(buffer, metadata={"CreationDate": None, "Creator": None, "Producer": None})


def pictures_of(sections: Sequence[Section]) -> list[Picture]:
    """Return all pictures in reading order."""
    found: list[Picture] = []
    for section in sections:
        for block in section.blocks:
            if isinstance(block, Picture):
                found.append(block)
            elif isinstance(block, tuple):
                found += block
        found += pictures_of(section.sections)
    return found
