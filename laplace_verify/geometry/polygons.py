"""Polygons with holes and slits, and the L-shape.

A slit is a side walked there and back: two pieces share its place, with opposite normals.

Quadrature: horizontal lines through all vertices cut the plane into slabs; inside a slab the sides that
cross it do not cross one another, and taken from left to right in pairs they bound the region (even-odd
rule). Each pair is a trapezoid, mapped bilinearly from the unit square. A slit inside the region is met
twice and parts two trapezoids of the same region. Derived here; the decomposition is that of Chazelle and
Incerpi 1984, Triangulation and shape-complexity (from memory, unchecked).
"""

from __future__ import annotations

from abc import abstractmethod
from collections.abc import Sequence
from dataclasses import dataclass, field
from functools import lru_cache
from itertools import pairwise
from typing import Any, ClassVar

import numpy as np

from laplace_verify.arrays import Array, BoolArray, IntArray, blocks
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.base import Shape
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.checks import coordinates, positive
from laplace_verify.geometry.patches import Chart
from laplace_verify.geometry.polygon_checks import check_holes, check_loop, enclosed, signed_area
from laplace_verify.geometry.segments import Segment

__all__ = ["LShape", "Polygon"]

Vertices = tuple[tuple[float, float], ...]


@dataclass(frozen=True, slots=True, repr=False)
class _Polygonal(Shape):
    """What every polygon can do, given its loops of vertices (abstract)."""

    dim: ClassVar[int] = 2

    @abstractmethod
    def _rings(self) -> tuple[Vertices, ...]:
        """Outer loop counter-clockwise, then holes clockwise."""

    @property
    def measure(self) -> float:
        """Area."""
        return sum(signed_area(ring) for ring in self._rings())

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner, each of shape (2,)."""
        outer = np.array(self._rings()[0])
        return outer.min(axis=0), outer.max(axis=0)

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        loops = []
        for k, ring in enumerate(self._rings()):
            prefix = f"hole-{k}-side-" if k else "side-"
            loops.append(
                tuple(
                    Segment(name=f"{prefix}{i + 1}", start=ring[i], stop=ring[(i + 1) % len(ring)])
                    for i in range(len(ring))
                )
            )
        return tuple(loops)

    def _inside(self, points: Array) -> BoolArray:
        """Count the sides to the right of each point (even-odd rule)."""
        starts, stops = _edges(self._rings())
        inside = np.zeros(len(points), dtype=np.bool_)
        for rows in blocks(len(points), max(1, 2_000_000 // len(starts))):
            inside[rows] = enclosed(points[rows], starts, stops)
        return inside

    def _distance(self, points: Array) -> Array:
        """Return the distance to the nearest side, over all sides at once."""
        starts, stops = _edges(self._rings())
        along = stops - starts
        length2 = (along**2).sum(axis=1)
        nearest = np.empty(len(points))
        for rows in blocks(len(points), max(1, 1_000_000 // len(starts))):
            offset = points[rows, None, :] - starts
            t = np.clip((offset * along).sum(axis=2) / length2, 0.0, 1.0)
            nearest[rows] = np.sqrt(((offset - t[:, :, None] * along) ** 2).sum(axis=2).min(axis=1))
        return nearest

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        corners, areas = trapezoids(self._rings())
        chosen = generator.choice(len(areas), size=n, p=areas / areas.sum())
        u, v = generator.random(n), generator.random(n)
        return in_trapezoids(corners[chosen], u, v)

    def _chart(self) -> Chart:
        corners, _ = trapezoids(self._rings())

        def place(parameters: Array, box: IntArray) -> tuple[Array, Array]:
            u, v = parameters.T
            low, high = corners[box, 0], corners[box, 1]
            left = low[:, 1] + v * (high[:, 1] - low[:, 1])
            right = low[:, 2] + v * (high[:, 2] - low[:, 2])
            rise = high[:, 0] - low[:, 0]
            points = np.stack([left + u * (right - left), low[:, 0] + v * rise], axis=1)
            return points, (right - left) * rise

        count = len(corners)
        return Chart(
            lower=np.zeros((count, 2)),
            upper=np.ones((count, 2)),
            place=place,
            angles=(False, False),
            extra=(0, 1),
        )


def _edges(rings: Sequence[Vertices]) -> tuple[Array, Array]:
    """Return start and stop (m, 2) of all sides."""
    starts = np.concatenate([np.array(ring) for ring in rings])
    stops = np.concatenate([np.roll(np.array(ring), -1, axis=0) for ring in rings])
    return starts, stops


@lru_cache(maxsize=64)
def trapezoids(rings: tuple[Vertices, ...]) -> tuple[Array, Array]:
    """Return the trapezoids that make up a polygon, and their areas.

    Shape (m, 2, 3): for the lower and the upper edge of each, the values y, x left, x right.
    """
    starts, stops = _edges(rings)
    levels = np.unique(np.concatenate([starts[:, 1], stops[:, 1]]))
    levels = levels[np.concatenate([[True], np.diff(levels) > 1e-14 * (levels[-1] - levels[0])])]
    bottom, top = np.minimum(starts[:, 1], stops[:, 1]), np.maximum(starts[:, 1], stops[:, 1])
    found = []
    for low, high in pairwise(levels.tolist()):
        middle = (low + high) / 2.0
        crossing = (bottom < middle) & (top > middle)
        a, b = starts[crossing], stops[crossing]
        slope = (b[:, 0] - a[:, 0]) / (b[:, 1] - a[:, 1])
        least, most = np.minimum(a[:, 0], b[:, 0]), np.maximum(a[:, 0], b[:, 0])
        at = {y: np.clip(a[:, 0] + (y - a[:, 1]) * slope, least, most) for y in (low, middle, high)}
        order = np.argsort(at[middle], kind="stable")
        left, right = order[0::2], order[1::2]
        for i, j in zip(left, right, strict=True):
            found.append([[low, at[low][i], at[low][j]], [high, at[high][i], at[high][j]]])
    corners = np.array(found)
    widths = corners[:, :, 2] - corners[:, :, 1]
    areas = widths.sum(axis=1) / 2.0 * (corners[:, 1, 0] - corners[:, 0, 0])
    corners, areas = corners[areas > 0.0], areas[areas > 0.0]
    corners.flags.writeable = areas.flags.writeable = False
    return corners, areas


def in_trapezoids(corners: Array, u: Array, v: Array) -> Array:
    """Return the point (n, 2) of each trapezoid with the share v of its area below and u of its width left.

    `corners` (n, 2, 3) are rows of what `trapezoids` returns.
    """
    low, high = corners[:, 0], corners[:, 1]  # rows: y, x left, x right
    bottom, top = low[:, 2] - low[:, 1], high[:, 2] - high[:, 1]
    # the area below a height is a quadratic in it
    root = np.sqrt(bottom**2 * (1.0 - v) + top**2 * v)
    total = bottom + root
    height = v * (bottom + top) / np.where(total > 0.0, total, 1.0)  # 0 at the tip of a triangle
    left = low[:, 1] + height * (high[:, 1] - low[:, 1])
    width = bottom + height * (top - bottom)
    return np.stack([left + u * width, low[:, 0] + height * (high[:, 0] - low[:, 0])], axis=1)


@dataclass(frozen=True, slots=True, repr=False)
class LShape(_Polygonal):
    """The square (-size, size)^2 without its quadrant x > 0, y < 0; re-entrant corner at the origin.

    Pieces side-1 to side-6: side-1 from (0, 0) to (size, 0), then counter-clockwise.

    >>> LShape(1.0).measure
    3.0
    """

    size: float = field()  # overrides the extent that other shapes have under this name

    kind: ClassVar[str] = "l-shape"
    kinds: ClassVar[frozenset[str]] = frozenset({"polygon"})

    def __post_init__(self) -> None:
        """Refuse size <= 0."""
        object.__setattr__(self, "size", positive(self.size, "size"))
        self._check()

    @property
    def vertices(self) -> Vertices:
        """Corners, counter-clockwise from the re-entrant one: an L-shape is a polygon."""
        s = self.size
        return ((0.0, 0.0), (s, 0.0), (s, s), (-s, s), (-s, -s), (0.0, -s))

    @property
    def holes(self) -> tuple[Vertices, ...]:
        """No holes."""
        return ()

    def _rings(self) -> tuple[Vertices, ...]:
        return (self.vertices,)


@dataclass(frozen=True, slots=True, repr=False)
class Polygon(_Polygonal):
    """The polygon with the given vertices, counter-clockwise, less its holes.

    Pieces side-1 (from vertex 1 to vertex 2), side-2, ...; hole-1-side-1, ... A side walked there and back
    is a slit. Holes may be given in either orientation; they are kept clockwise, beginning at the same
    vertex.

    >>> square = Polygon([(0, 0), (1, 0), (1, 1), (0, 1)], holes=[[(0.4, 0.4), (0.4, 0.6), (0.6, 0.6)]])
    >>> print(round(square.measure, 12), square.pieces.names[-1])
    0.98 hole-1-side-3
    """

    vertices: Sequence[Sequence[float]]
    holes: Sequence[Sequence[Sequence[float]]] = ()

    kind: ClassVar[str] = "polygon"

    def __post_init__(self) -> None:
        """Refuse loops that are too short, clockwise outside, crossing, or holes that are not inside."""
        outer = _vertices(self.vertices, "vertices")
        check_loop(outer, "vertices")
        if signed_area(outer) < 0.0:
            raise GeometryError(
                "vertices run clockwise, but the outer boundary must run counter-clockwise: reverse the order"
            )
        if not isinstance(self.holes, Sequence | np.ndarray):
            raise GeometryError(f"holes must be a list of lists of vertices, got {self.holes!r}")
        holes = tuple(_vertices(hole, f"hole {k}") for k, hole in enumerate(self.holes, start=1))
        for k, hole in enumerate(holes, start=1):
            check_loop(hole, f"hole {k}", hole=True)
        holes = tuple((hole[0], *hole[:0:-1]) if signed_area(hole) > 0.0 else hole for hole in holes)
        check_holes(outer, holes)
        object.__setattr__(self, "vertices", outer)
        object.__setattr__(self, "holes", holes)
        self._check()

    def _rings(self) -> tuple[Vertices, ...]:
        outer = tuple((x, y) for x, y in self.vertices)
        return (outer, *(tuple((x, y) for x, y in hole) for hole in self.holes))


def _vertices(value: Any, name: str) -> Vertices:
    """Return a loop of vertices as tuples of floats."""
    try:
        rows = list(value)
    except TypeError as cause:
        raise GeometryError(f"{name} must be a list of (x, y) pairs, got {value!r}") from cause
    pairs = [coordinates(row, 2, f"vertex {k} of {name}") for k, row in enumerate(rows, start=1)]
    if len(pairs) < 3:
        raise GeometryError(f"{name} must have at least 3 vertices, got {len(pairs)}")
    return tuple((x, y) for x, y in pairs)
