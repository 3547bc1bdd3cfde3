"""Pictures of the cases of the catalogue, one SVG file a case, for the index of the reference cases."""

from __future__ import annotations

import re
from collections.abc import Callable
from pathlib import Path

from laplace_verify.cases import catalogue
from laplace_verify.files import write_atomically
from laplace_verify.report.plots import plot
from laplace_verify.report.svg import figure_to_svg

__all__ = ["draw_cases"]

_ALONE = '<svg xmlns="http://www.w3.org/2000/svg" width="{width}pt" height="{height}pt" '
_PAPER = '<rect width="100%" height="100%" fill="white"/>\n'  # readers may have a dark page


def draw_cases(folder: Path | str, progress: Callable[[str], object] | None = None) -> list[Path]:
    """Write a picture of every case into a folder, the same bytes every time.

    Parameters
    ----------
    folder
        Is made if it does not exist.
    progress
        Called with the id of every case that is drawn.

    Returns
    -------
    list of Path
        The files, in the order of the catalogue.

    Raises
    ------
    RecordError
        If a file cannot be written.
    """
    written = []
    for id_, case in catalogue.items():
        svg = figure_to_svg(
            plot(case), key=id_, title=case.title, alt=f"The shape of {id_} and its conditions."
        )
        path = Path(folder) / f"{id_}.svg"
        write_atomically(path, _standing_alone(svg).encode())
        written.append(path)
        if progress is not None:
            progress(id_)
    return written


def _standing_alone(svg: str) -> str:
    """Return an element that stood in a page as a file of its own."""
    box = re.search(r'viewBox="0 0 ([\d.]+) ([\d.]+)"', svg)
    width, height = box.groups() if box else ("245", "194")
    svg = svg.replace("<svg ", _ALONE.format(width=width, height=height), 1)
    return svg.replace("</desc>\n", "</desc>\n" + _PAPER, 1) + "\n"
