"""Hexahedra for solids: grids of boxes, and cores of cubes wrapped in layers that follow a round surface.

A ball is a cube whose six faces are carried outwards in layers, a cylinder an upright block whose four sides
are. A node x on the surface of the reference block, largest coordinate 1, lies in layer t at

    (1 - t) c x + t R e(x),    e(x) the unit vector along (tan(pi x_1/4), ...),

c the half width of the core: equal steps in x give equal angles on the sphere. A spherical shell has layers
only, from the inner sphere to the outer one. Spheroids are stretched balls. Meshes with n and 2 n cells are
nested up to the curvature of the surface, so h is proportional to 1/n.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from laplace_verify.arrays import Array, IntArray
from laplace_verify.errors import AdapterError
from laplace_verify.geometry import Ball, Cylinder, Shape, SphericalShell, Spheroid
from laplace_verify.solvers.samples.rectilinear import grid_on

__all__ = ["Hexahedra", "hexahedra"]

CORE = 0.45  # half width of a core in radii
FACES = (
    (0, 3, 2, 1),
    (4, 5, 6, 7),
    (0, 1, 5, 4),
    (1, 2, 6, 5),
    (2, 3, 7, 6),
    (3, 0, 4, 7),
)  # seen from outside
Place = Callable[[Array, float], Array]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Hexahedra:
    """Nodes (n, 3), cells (m, 8) in the order of mesh files, and boundary faces (k, 4) by piece."""

    points: Array
    cells: IntArray
    boundary: dict[str, IntArray]

    @property
    def h(self) -> float:
        """The longest edge of a cell."""
        corners = self.points[self.cells]
        edges = (corners[:, list(face)] - np.roll(corners[:, list(face)], 1, axis=1) for face in FACES)
        return max(float(np.sqrt((edge**2).sum(axis=2)).max()) for edge in edges)


def hexahedra(shape: Shape, n: int) -> Hexahedra:
    """Return a mesh with n cells along every side of a box, or across the core of a round solid.

    Raises
    ------
    AdapterError
        If the solid is none of those of the module.
    """
    if shape.is_a("box") or shape.is_a("prism-l-shape") or shape.is_a("notched-cube"):
        grid = grid_on(shape, n)
        return _with_boundary(shape, grid.points, grid.cells_by_name()["hexahedron"])
    if isinstance(shape, Cylinder):
        radius, height = shape.radius, shape.z1 - shape.z0
        rows = max(1, round(n * height / (math.pi / 2.0 * radius)))

        def upright(x: Array, t: float) -> Array:
            flat = (1.0 - t) * CORE * radius * x[:, :2] + t * radius * _directions(x[:, :2])
            return np.column_stack([flat, shape.z0 + height * x[:, 2]])

        points, cells = _block((-1.0, -1.0, 0.0), (n, n, rows))
        return _with_boundary(shape, *_wrapped(points, cells, 2, _layers(n), upright))
    if isinstance(shape, SphericalShell):
        a, b = shape.inner, shape.outer
        centre, count = np.array(shape.centre), max(1, round(n * (b - a) / (math.pi / 4.0 * (a + b))))
        points, cells = _block((-1.0, -1.0, -1.0), (n, n, n))
        wrapped, both = _wrapped(
            points, cells, 3, count, lambda x, t: centre + ((1.0 - t) * a + t * b) * _directions(x)
        )
        used, numbers = np.unique(both[len(cells) :], return_inverse=True)
        return _with_boundary(shape, wrapped[used], numbers.reshape(-1, 8))
    if isinstance(shape, Ball | Spheroid):
        axes = np.full(3, shape.radius) if isinstance(shape, Ball) else np.array(shape.semi_axes)
        middle = np.array(shape.centre)
        points, cells = _block((-1.0, -1.0, -1.0), (n, n, n))
        return _with_boundary(
            shape,
            *_wrapped(
                points, cells, 3, _layers(n),
                lambda x, t: middle + axes * ((1.0 - t) * CORE * x + t * _directions(x)),
            ),
        )  # fmt: skip
    raise AdapterError(f"there are hexahedra for boxes and round solids, not for {shape!r}")


def _layers(n: int) -> int:
    """Return the layers around a core of n cells: radially about as long as the cells of the core."""
    return max(1, round(n * (1.0 - CORE * 1.2) / (2.0 * CORE)))


def _directions(x: Array) -> Array:
    """Return the unit vectors of points on the surface of the reference block; 0 in its middle."""
    spread = np.tan(math.pi / 4.0 * x)
    length = np.sqrt((spread**2).sum(axis=1, keepdims=True))
    unit: Array = spread / np.where(length > 0.0, length, 1.0)
    return unit


def _block(lower: tuple[float, float, float], counts: tuple[int, int, int]) -> tuple[Array, IntArray]:
    """Return nodes and cells of a grid from `lower` to (1, 1, 1)."""
    axes = [np.linspace(a, 1.0, count + 1) for a, count in zip(lower, counts, strict=True)]
    points = np.stack([grid.ravel() for grid in np.meshgrid(*axes, indexing="ij")], axis=1)
    node = np.arange(len(points)).reshape([count + 1 for count in counts])
    near, far = slice(None, -1), slice(1, None)
    corners = [
        (near, near, near), (far, near, near), (far, far, near), (near, far, near),
        (near, near, far), (far, near, far), (far, far, far), (near, far, far),
    ]  # fmt: skip
    return points, np.stack([node[corner].ravel() for corner in corners], axis=1)


def _outer_faces(cells: IntArray) -> IntArray:
    """Return the faces (k, 4) that belong to one cell only, counter-clockwise seen from outside."""
    faces = np.concatenate([cells[:, list(face)] for face in FACES])
    _, first, count = np.unique(np.sort(faces, axis=1), axis=0, return_index=True, return_counts=True)
    alone: IntArray = faces[np.sort(first[count == 1])]
    return alone


def _wrapped(
    points: Array, cells: IntArray, across: int, layers: int, place: Place
) -> tuple[Array, IntArray]:
    """Carry the faces of a block at |x_i| = 1, i < `across`, outwards in layers; its cells come first."""
    faces = _outer_faces(cells)
    reach = np.abs(points[faces][:, :, :across]).min(axis=1)  # 1 in x_i if all corners lie at |x_i| = 1
    faces = faces[reach.max(axis=1) > 1.0 - 1e-9]
    used, numbers = np.unique(faces, return_inverse=True)
    quads = numbers.reshape(-1, 4)
    nodes, below, found = [place(points, 0.0)], used, [cells]
    for k in range(1, layers + 1):
        above = len(points) + (k - 1) * len(used) + np.arange(len(used))
        found.append(np.concatenate([below[quads], above[quads]], axis=1))
        nodes.append(place(points[used], k / layers))
        below = above
    return np.concatenate(nodes), np.concatenate(found)


def _with_boundary(shape: Shape, points: Array, cells: IntArray) -> Hexahedra:
    """Give every outer face to the piece that holds its four corners."""
    faces = _outer_faces(cells)
    boundary = {}
    for piece in shape.pieces:
        on = piece.contains(points[faces].reshape(-1, 3)).reshape(-1, 4).all(axis=1)
        boundary[piece.name] = faces[on]
    return Hexahedra(points=points, cells=cells, boundary=boundary)
