"""Unbounded problems are measured through the window of their case.

The case that is measured has the window's points and weights in place of the shape's, and unbounded pieces
cut to the window; the solver is handed the problem as it is. Cells and clouds of a truncated domain count
only inside the window.
"""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from laplace_verify.errors import AnswerError
from laplace_verify.geometry import Windowed, within
from laplace_verify.problems import Case
from laplace_verify.problems.pieces import Pieces

if TYPE_CHECKING:
    from laplace_verify.measure.norms import Sample
    from laplace_verify.problems import Problem

__all__ = ["clipped", "through_window"]

COVERED = 1e-3  # of the window: quadrature points at its rim are counted in or out whole


def through_window(case: Case) -> Case:
    """Return the case as it is measured: itself if its shape is bounded."""
    window, problem = case.window, case.problem
    if window is None:
        return case
    pieces = Pieces(replace(piece, boundary=within(piece.boundary, window)) for piece in problem.pieces)
    shape = Windowed(problem.shape, window, clipped=True)
    return replace(case, problem=replace(problem, shape=shape, pieces=pieces))


def clipped(sample: Sample, problem: Problem, *, cloud: bool = False) -> Sample:
    """Return the part of a sample that lies in the window.

    The weights of a cloud are made to fill the window; of cells, the share of the window that they do not
    fill is reported as left out.

    Raises
    ------
    AnswerError
        If none does.
    """
    if not isinstance(problem.shape, Windowed):
        return sample
    window = problem.shape.window
    inside = window.contains(sample.points, tol=1e-9)
    further = window.contains(sample.extra, tol=1e-9)
    if not inside.any():
        raise AnswerError(f"no point of the answer lies in the window {window!r}, over which norms are taken")
    share = float(np.sum(sample.weights[inside])) / window.measure
    gap = 0.0 if cloud or share > 1.0 - COVERED else 1.0 - share
    return replace(
        sample,
        points=sample.points[inside],
        weights=sample.weights[inside] / (share if cloud and share > 0.0 else 1.0),
        values=sample.values[inside],
        gradients=None if sample.gradients is None else sample.gradients[inside],
        extra=sample.extra[further],
        extra_values=sample.extra_values[further],
        left_out=sample.left_out + gap,
    )
