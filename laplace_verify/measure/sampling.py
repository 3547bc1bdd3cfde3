"""Where an answer is compared with the exact solution.

Integral norms use composite Gauss quadrature with patches of the size of the solver's cells, graded
dyadically to singular points. The maximum is taken over these points and over scattered ones, inside, on the
boundary and at distances h/100 to 2h from singular points, then closer and closer to the places of the
largest errors, so that the maximum does not hang on luck. The scattered points are drawn anew on every level:
at fixed points the error next to a singularity changes with the place of the point relative to the grid,
which invents orders.
"""

from __future__ import annotations

import math
import zlib
from collections.abc import Callable
from typing import TYPE_CHECKING

import numpy as np

from laplace_verify.arrays import Array

if TYPE_CHECKING:
    from laplace_verify.geometry import Boundary, Shape

__all__ = ["around", "level_generator", "piece_points", "quadrature_points", "scattered_points"]

ORDER = 5  # three Gauss points a direction: exact for squares of quadratics
GAUSS = 3
SCATTERED = {1: 400, 2: 4000, 3: 8000}  # inside
ON_PIECE, MOST_ON_PIECE = 200, 4000
PER_WIDTH = 4.0  # points a mesh width along a curve
NEAR_SINGULAR = 200  # around every singular point
MOST_SINGULAR = 20  # points around which to scatter


def level_generator(seed: int, case_id: str, size: int) -> np.random.Generator:
    """Return the generator of one level: the same for the same seed, case and size, whatever ran before."""
    return np.random.default_rng([seed, zlib.crc32(case_id.encode()), size])


def quadrature_points(
    shape: Shape,
    singular: Array,
    h: float,
    max_points: int,
    rule: Callable[..., tuple[Array, Array]] | None = None,
) -> tuple[Array, Array]:
    """Return points (n, d) and weights (n,), n <= about `max_points`, patches of size h if that allows.

    `rule` takes the place of the shape's own quadrature: that of a problem with regions, whose patches do not
    reach across interfaces.
    """
    dim, rule = shape.dim, rule or shape.quadrature
    cell = max(h, (shape.measure * GAUSS**dim / max_points) ** (1 / dim))
    points, weights = rule(ORDER, singular, cell)
    for _ in range(3):
        if len(points) <= 1.2 * max_points:
            break
        cell *= 1.1 * (len(points) / max_points) ** (1 / dim)
        points, weights = rule(ORDER, singular, cell)
    return points, weights


def scattered_points(
    shape: Shape, singular: Array, h: float, generator: np.random.Generator, max_points: int
) -> Array:
    """Return seeded points (n, d): inside, on every piece, and within 2 h of singular points."""
    dim = shape.dim
    parts = [shape.sample(min(SCATTERED[dim], max_points), seed=int(generator.integers(2**31)))]
    for piece in shape.pieces:
        wanted = PER_WIDTH ** (dim - 1) * piece.measure / h ** (dim - 1)
        count = int(min(max(wanted, ON_PIECE), MOST_ON_PIECE, max_points))
        parts.append(piece_points(piece, count, generator))
    for centre in singular[:MOST_SINGULAR]:
        direction = generator.standard_normal((NEAR_SINGULAR, dim))
        direction /= np.sqrt((direction**2).sum(axis=1, keepdims=True))
        radius = h * 10 ** generator.uniform(-2.0, math.log10(2.0), (NEAR_SINGULAR, 1))
        close = centre + radius * direction
        parts.append(close[shape.contains(close)])
    return np.concatenate(parts)


def piece_points(piece: Boundary, count: int, generator: np.random.Generator) -> Array:
    """Return random points (count, d) on a piece, uniform in length or area; the end itself in 1-D."""
    if piece.dim == 1:
        return piece.point([0.0])
    if piece.dim == 2:
        return piece.point(generator.random(count))
    return piece.point(generator.random((count, 2)))


def around(shape: Shape, centres: Array, radius: float, count: int, generator: np.random.Generator) -> Array:
    """Return random points of the shape within `radius` (a cube) of each centre, up to `count` each."""
    offset = radius * generator.uniform(-1.0, 1.0, (len(centres), count, shape.dim))
    points = (centres[:, np.newaxis] + offset).reshape(-1, shape.dim)
    inside: Array = points[shape.contains(points)]
    return inside
