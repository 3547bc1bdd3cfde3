"""The method of fundamental solutions on discs, ellipses and annuli.

    u(x) = c + sum_j q_j log|x - s_j|,    sources s_j outside the closed shape,

is harmonic in the shape for any strengths; they are fitted to the boundary conditions by least squares at
twice as many boundary points. The n sources around the shape lie on the confocal ellipse (circle) that is
`DILATION` times as wide in the sense of conformal radius; a hole has n more on a circle that much smaller.
The charge of the outer sources is zero, because a charged curve can make any constant, and c already does;
the charge in the hole is free and carries the net flux through it.

Smooth data converge like DILATION^(-n) or the distance of the nearest singularity of u outside allows. The
system is ill conditioned on purpose; least squares with truncated singular values keeps the error near 1e-12
times the size of u, where it stays. Where the solution itself is singular on the boundary the method is slow:
it makes no claim there.

References ---------- Fairweather & Karageorghis, The method of fundamental solutions for elliptic boundary
value problems, Adv. Comput. Math. 9 (1998) 69-95; Barnett & Betcke, J. Comput. Phys. 227 (2008) 7003-7026
(both from memory, unchecked).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from laplace_verify.arrays import Array, blocks
from laplace_verify.errors import AdapterError
from laplace_verify.geometry import Annulus, Disc, Ellipse, Shape
from laplace_verify.problems import Piece, Problem
from laplace_verify.solvers.adapter import adapt
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.samples.levels import level_shift

__all__ = ["fundamental_solutions"]

DILATION = 2.0
CUT = 1e-15  # singular values below this part of the largest are left out
BLOCK = 2048  # points at a time: a table of points by sources stays in cache
FINE = 40  # degree of the quadrature that takes the mean for the level


@adapt(
    name="fundamental solutions",
    kind="boundary element",
    order="exponential",
    dims={2},
    shapes={"disc", "ellipse", "annulus"},
    conditions={"dirichlet", "neumann", "robin"},
    error_floor=1e-10,
    formulation="indirect",
    sizes=(8, 12, 16, 24, 32, 48),
)
def fundamental_solutions(problem: Problem, n: int) -> Answer:
    """Solve with n sources on every enclosing curve."""
    curves = source_curves(problem.shape, n)
    pieces = [condition_rows(piece, problem, curves, n) for piece in problem.pieces]
    rows, load = (np.concatenate(part) for part in zip(*pieces, strict=True))
    unknown = truncated_least_squares(rows, load)
    solution = Sources(
        points=np.concatenate(curves), strengths=uncharged(unknown[:-1], n), constant=unknown[-1]
    )
    if not np.any(rows[:, -1]):  # no condition sees the constant
        points, weights = problem.shape.quadrature(FINE)
        mean = float(np.average(solution.value(points), weights=weights))
        solution = replace(solution, constant=solution.constant + level_shift(problem, mean, solution.value))
    return Answer(evaluate=solution.value, gradient=solution.gradient, unknowns=rows.shape[1])


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Sources:
    """u = constant + sum of strengths * log|x - points|."""

    points: Array
    strengths: Array
    constant: float

    def value(self, points: Array) -> Array:
        """Return u, shape (m,)."""
        result = np.empty(len(points))
        for block in blocks(len(points), BLOCK):
            result[block] = self.constant + logarithms(points[block], self.points) @ self.strengths
        return result

    def gradient(self, points: Array) -> Array:
        """Return grad u, shape (m, 2)."""
        result = np.empty((len(points), 2))
        for block in blocks(len(points), BLOCK):
            pull = inverse_distances(points[block], self.points)
            result[block] = np.stack([part @ self.strengths for part in pull], axis=1)
        return result


def logarithms(points: Array, sources: Array) -> Array:
    """Return log|x - s|, shape (points, sources)."""
    x, y = (points[:, axis, np.newaxis] - sources[:, axis] for axis in (0, 1))
    result: Array = 0.5 * np.log(x * x + y * y)
    return result


def inverse_distances(points: Array, sources: Array) -> tuple[Array, Array]:
    """Return the components of grad log|x - s| = (x - s) / |x - s|^2, each (points, sources)."""
    x, y = (points[:, axis, np.newaxis] - sources[:, axis] for axis in (0, 1))
    squared = x * x + y * y
    return x / squared, y / squared


def source_curves(shape: Shape, n: int) -> list[Array]:
    """Return n sources around the shape and, if it has a hole, n inside that."""
    if isinstance(shape, Annulus):
        hole = confocal(np.array(shape.hole_centre), (shape.inner, shape.inner), 1.0 / DILATION, n)
        return [confocal(np.array(shape.centre), (shape.outer, shape.outer), DILATION, n), hole]
    if isinstance(shape, Disc | Ellipse):
        return [confocal(np.array(shape.centre), shape.semi_axes, DILATION, n)]
    raise AdapterError(f"sources can be placed around discs, ellipses and annuli, got {shape!r}")


def confocal(centre: Array, semi_axes: Sequence[float], dilation: float, n: int) -> Array:
    """Return n points on the ellipse with the same foci whose a + b is `dilation` times as large."""
    a, b = semi_axes
    mean, difference = 0.5 * (a + b) * dilation, 0.5 * (a - b) / dilation
    t = 2.0 * np.pi * (np.arange(n) + 0.5) / n
    return centre + np.stack([(mean + difference) * np.cos(t), (mean - difference) * np.sin(t)], axis=1)


def uncharged(strengths: Array, n: int) -> Array:
    """Return the strengths with the mean of the first n, the outer sources, taken off."""
    return np.concatenate([strengths[:n] - np.mean(strengths[:n]), strengths[n:]])


def columns(terms: Array, n: int) -> Array:
    """Return the effect of every strength when the outer ones have their mean taken off."""
    return np.concatenate([terms[:, :n] - terms[:, :n].mean(axis=1, keepdims=True), terms[:, n:]], axis=1)


def condition_rows(piece: Piece, problem: Problem, curves: list[Array], n: int) -> tuple[Array, Array]:
    """Return the equations of one piece, weighted by the square roots of the lengths they stand for."""
    points, normals, weights = piece.sample(
        max(4, math.ceil(2 * n * piece.measure / loop_length(piece, problem)))
    )
    sources, root = np.concatenate(curves), np.sqrt(weights)[:, np.newaxis]
    value = np.append(columns(logarithms(points, sources), n), np.ones((len(points), 1)), axis=1)
    if piece.kind == "dirichlet":
        return root * value, root[:, 0] * piece.data(points)
    x, y = inverse_distances(points, sources)
    slope = columns(normals[:, :1] * x + normals[:, 1:] * y, n)
    rows = problem.tensor[0, 0] * np.append(slope, np.zeros((len(points), 1)), axis=1)
    if piece.kind == "robin":
        rows += piece.alpha(points)[:, np.newaxis] * value
    return root * rows, root[:, 0] * piece.data(points)


def loop_length(piece: Piece, problem: Problem) -> float:
    """Return the length of the closed curve that a piece is part of."""
    around = [other for other in problem.pieces if in_hole(other) == in_hole(piece)]
    return float(sum(other.measure for other in around))


def in_hole(piece: Piece) -> bool:
    """Tell whether a piece belongs to the inner circle of an annulus."""
    return piece.name.startswith("inner")


def truncated_least_squares(rows: Array, load: Array) -> Array:
    """Return the least-squares solution of smallest norm, columns scaled to unit length."""
    size = np.linalg.norm(rows, axis=0)
    size[size == 0.0] = 1.0
    solution, *_ = np.linalg.lstsq(rows / size, load, rcond=CUT)
    unscaled: Array = solution / size
    return unscaled
