"""One figure for what a user holds: a case, a study or a record."""

from __future__ import annotations

import io
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

from laplace_verify.campaign.identity import case_info
from laplace_verify.campaign.record import CaseInfo, Record
from laplace_verify.errors import RecordError
from laplace_verify.files import write_atomically
from laplace_verify.measure.results import Study
from laplace_verify.problems import Case
from laplace_verify.report.figures import convergence_figure
from laplace_verify.report.shape_figures import case_figure
from laplace_verify.report.style import drawing
from laplace_verify.report.summary_figures import summary_figure

if TYPE_CHECKING:
    from matplotlib.figure import Figure

__all__ = ["plot", "save_picture"]

_POINTS = 100  # per piece that is no plane curve; each is an element of an SVG file


def plot(what: Case | Study | Record) -> Figure:
    """Return a figure: the shape of a case, the errors of a study, or how far a record falls short.

    The figure is complete and shown nowhere; ``figure.savefig("plate.png")`` writes it.

    Parameters
    ----------
    what : Case, Study or Record
        A case is drawn with its pieces, conditions and singular points; a study with its errors against h
        and the expected slope; a record with observed less expected order, one row a case.

    Raises
    ------
    RecordError
        If `what` is none of these.
    """
    if isinstance(what, Study):
        return convergence_figure(what)
    if isinstance(what, Record):
        return summary_figure(what)
    if isinstance(what, Case):
        return case_figure(_drawn(what))
    raise RecordError(f"only a case, a study or a record can be plotted, got {type(what).__name__}")


def save_picture(what: Case | Study | Record, path: Path) -> None:
    """Write the figure that `plot` gives to a file; the ending of its name says which kind.

    Raises
    ------
    RecordError
        If matplotlib does not know the ending, or the file cannot be written.
    """
    figure, kind = plot(what), path.suffix.removeprefix(".").lower()
    known = sorted(figure.canvas.get_supported_filetypes())
    if kind not in known:
        raise RecordError(f"a picture cannot be written as {path.name!r}; known endings: {', '.join(known)}")
    buffer = io.BytesIO()
    with drawing():
        figure.savefig(buffer, format=kind)
    write_atomically(path, buffer.getvalue())


def _drawn(case: Case) -> CaseInfo:
    """Return what is known about a case, with outlines in every dimension."""
    info = case_info(case)
    if case.dim == 2:
        return info
    outline = case.problem.shape.outline(_POINTS)
    pieces = tuple(
        replace(piece, outline=tuple(tuple(row) for row in outline[piece.name].tolist()))
        for piece in info.pieces
    )
    return replace(info, pieces=pieces)
