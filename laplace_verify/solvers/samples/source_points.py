"""The method of fundamental solutions on discs, ellipses and annuli, inside and outside.

    u(x) = c + sum_j q_j log|x - s_j|,    sources s_j outside the closed shape,

is harmonic in the shape for any strengths; they are fitted to the boundary conditions by least squares at
twice as many boundary points. The n sources around the shape lie on the confocal ellipse (circle) that is
`DILATION` times as wide in the sense of conformal radius; a hole has n more on a circle that much smaller.
The charge of the outer sources is zero, because a charged curve can make any constant, and c already does;
the charge in the hole is free and carries the net flux through it.

Outside a disc or an ellipse the sources lie inside, on the confocal ellipse half as wide, or half-way to
the segment between the foci if that is nearer. What grows at infinity is known and taken off first: the
flow V . x and q log|x - c| with the charge q asked for. The sources then have no net charge, and c is 0 if
u is to decay.

Smooth data converge like DILATION^(-n) or the distance of the nearest singularity of u outside allows. The
system is ill conditioned on purpose; least squares with truncated singular values keeps the error near 1e-12
times the size of u, where it stays. Where the solution itself is singular on the boundary the method is slow:
it makes no claim there.

References
----------
Fairweather & Karageorghis, The method of fundamental solutions for elliptic boundary value problems, Adv.
Comput. Math. 9 (1998) 69-95; Barnett & Betcke, J. Comput. Phys. 227 (2008) 7003-7026 (both from memory,
unchecked).
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from functools import partial

import numpy as np

from laplace_verify.arrays import Array, blocks
from laplace_verify.errors import AdapterError
from laplace_verify.geometry import Annulus, Disc, Ellipse, Exterior, Shape
from laplace_verify.problems import Piece, Problem
from laplace_verify.solvers.adapter import adapt
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.samples.levels import level_shift

__all__ = ["CONFOCAL", "FarField", "Scheme", "Sources", "fundamental_solutions", "solve_by_sources"]

DILATION = 2.0
CUT = 1e-15  # singular values below this part of the largest are left out
BLOCK = 2048  # points at a time: a table of points by sources stays in cache
FINE = 40  # degree of the quadrature that takes the mean for the level


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class FarField:
    """vector . x + charge log|x - centre|: what grows at infinity, known from the problem."""

    vector: Array
    charge: float
    centre: Array

    @classmethod
    def of(cls, problem: Problem) -> FarField:
        """Return the far field that a problem asks for; zero in bounded shapes."""
        known, vector, charge = problem.at_infinity, np.zeros(2), 0.0
        if isinstance(known, tuple) and known[0] == "log":
            charge = float(known[1])
        elif isinstance(known, tuple):
            vector, charge = np.array(known[1]), -float(known[2]) / (2.0 * math.pi)
        body = problem.shape.body if isinstance(problem.shape, Exterior) else None
        centre = body.centre if isinstance(body, Disc | Ellipse) else (0.0, 0.0)
        return cls(vector=vector, charge=charge, centre=np.array(centre))

    def value(self, points: Array) -> Array:
        """Return the far field, shape (m,)."""
        if not self.charge:
            return points @ self.vector
        result: Array = points @ self.vector + self.charge * logarithms(points, self.centre[None])[:, 0]
        return result

    def gradient(self, points: Array) -> Array:
        """Return its gradient, shape (m, 2)."""
        if not self.charge:
            return np.tile(self.vector, (len(points), 1))
        pull = np.stack([part[:, 0] for part in inverse_distances(points, self.centre[None])], axis=1)
        result: Array = self.vector + self.charge * pull
        return result


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Sources:
    """u = far field + constant + sum of strengths * log|x - points|."""

    points: Array
    strengths: Array
    constant: float
    far: FarField

    def value(self, points: Array) -> Array:
        """Return u, shape (m,)."""
        result = self.far.value(points)
        for block in blocks(len(points), BLOCK):
            result[block] += self.constant + logarithms(points[block], self.points) @ self.strengths
        return result

    def gradient(self, points: Array) -> Array:
        """Return grad u, shape (m, 2)."""
        result = self.far.gradient(points)
        for block in blocks(len(points), BLOCK):
            pull = inverse_distances(points[block], self.points)
            result[block] += np.stack([part @ self.strengths for part in pull], axis=1)
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


def source_curves(shape: Shape, n: int, dilation: float = DILATION) -> list[Array]:
    """Return n sources around the shape and, if it has a hole, n inside that."""
    if isinstance(shape, Annulus):
        hole = confocal(np.array(shape.hole_centre), (shape.inner, shape.inner), 1.0 / dilation, n)
        return [confocal(np.array(shape.centre), (shape.outer, shape.outer), dilation, n), hole]
    if isinstance(shape, Disc | Ellipse):
        return [confocal(np.array(shape.centre), shape.semi_axes, dilation, n)]
    if isinstance(shape, Exterior) and isinstance(shape.body, Disc | Ellipse):
        a, b = shape.body.semi_axes
        # the segment between the foci has a + b = sqrt(|a^2 - b^2|)
        shrunk = max(1.0 / dilation, (abs(a - b) / (a + b)) ** 0.45)
        return [confocal(np.array(shape.body.centre), (a, b), shrunk, n)]
    raise AdapterError(
        "sources can be placed around discs, ellipses and annuli, and inside discs and ellipses, "
        f"got {shape!r}"
    )


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


def condition_rows(
    piece: Piece,
    problem: Problem,
    curves: list[Array],
    n: int,
    far: FarField,
    kernel: Callable[[Array, Array], Array] = logarithms,
) -> tuple[Array, Array]:
    """Return the equations of one piece, weighted by the square roots of the lengths they stand for."""
    points, normals, weights = piece.sample(
        max(4, math.ceil(2 * n * piece.measure / loop_length(piece, problem)))
    )
    sources, root = np.concatenate(curves), np.sqrt(weights)[:, np.newaxis]
    value = np.append(columns(kernel(points, sources), n), np.ones((len(points), 1)), axis=1)
    if piece.kind == "dirichlet":
        return root * value, root[:, 0] * (piece.data(points) - far.value(points))
    x, y = inverse_distances(points, sources)
    slope = columns(normals[:, :1] * x + normals[:, 1:] * y, n)
    k = problem.tensor[0, 0]
    rows = k * np.append(slope, np.zeros((len(points), 1)), axis=1)
    load = piece.data(points) - k * (normals * far.gradient(points)).sum(axis=1)
    if piece.kind == "robin":
        alpha = piece.alpha(points)
        rows += alpha[:, np.newaxis] * value
        load -= alpha * far.value(points)
    return root * rows, root[:, 0] * load


def loop_length(piece: Piece, problem: Problem) -> float:
    """Return the length of the closed curve that a piece is part of."""
    around = [other for other in problem.pieces if in_hole(other) == in_hole(piece)]
    return float(sum(other.measure for other in around))


def in_hole(piece: Piece) -> bool:
    """Tell whether a piece belongs to the inner circle of an annulus."""
    return piece.name.startswith("inner")


def truncated_least_squares(rows: Array, load: Array, cut: float = CUT) -> Array:
    """Return the least-squares solution of smallest norm, columns scaled to unit length."""
    size = np.linalg.norm(rows, axis=0)
    size[size == 0.0] = 1.0
    solution, *_ = np.linalg.lstsq(rows / size, load, rcond=cut)
    unscaled: Array = solution / size
    return unscaled


@dataclass(frozen=True, slots=True, kw_only=True)
class Scheme:
    """The decisions that make a solver with fundamental solutions."""

    curves: Callable[[Shape, int], list[Array]] = source_curves
    far: Callable[[Problem], FarField] = FarField.of
    rows: Callable[[Piece, Problem, list[Array], int, FarField], tuple[Array, Array]] = condition_rows
    solve: Callable[[Array, Array], Array] = truncated_least_squares
    gradient: Callable[[Sources, Array], Array] = Sources.gradient


CONFOCAL = Scheme()


def solve_by_sources(problem: Problem, n: int, scheme: Scheme = CONFOCAL) -> Answer:
    """Solve with n sources on every enclosing curve."""
    curves, far = scheme.curves(problem.shape, n), scheme.far(problem)
    pieces = [scheme.rows(piece, problem, curves, n, far) for piece in problem.pieces]
    rows, load = (np.concatenate(part) for part in zip(*pieces, strict=True))
    if problem.at_infinity == "decay":
        rows[:, -1] = 0.0  # the constant is 0
    unknown = scheme.solve(rows, load)
    solution = Sources(
        points=np.concatenate(curves), strengths=uncharged(unknown[:-1], n), constant=unknown[-1], far=far
    )
    if not np.any(rows[:, -1]) and problem.at_infinity != "decay":  # no condition sees the constant
        mean = 0.0
        if problem.shape.bounded:
            points, weights = problem.shape.quadrature(FINE)
            mean = float(np.average(solution.value(points), weights=weights))
        solution = replace(solution, constant=solution.constant + level_shift(problem, mean, solution.value))
    return Answer(
        evaluate=solution.value, gradient=partial(scheme.gradient, solution), unknowns=rows.shape[1]
    )


@adapt(
    name="fundamental solutions",
    kind="boundary element",
    order="exponential",
    dims={2},
    shapes={"disc", "ellipse", "annulus", "exterior-disc", "exterior-ellipse"},
    unbounded=True,
    conditions={"dirichlet", "neumann", "robin"},
    error_floor=1e-10,
    formulation="indirect",
    sizes=(8, 12, 16, 24, 32, 48),
)
def fundamental_solutions(problem: Problem, n: int) -> Answer:
    """Solve with n sources on every enclosing curve."""
    return solve_by_sources(problem, n)
