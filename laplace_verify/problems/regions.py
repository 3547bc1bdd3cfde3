"""Regions of a shape with their own conductivity, and the interfaces between them.

Every region is covered by exactly mapped patches of its own, so that no rule of quadrature reaches across an
interface. What can be laid into what:

    layers along an axis     interval, rectangle, box (any polygon if oblique)
    sectors                  polygons
    disc or ball, coated     inside a disc, an annulus, a ball, a spherical shell of the same centre; a disc
                             anywhere inside a disc; inside a polygon or box that can be seen whole from its
                             centre
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import pairwise
from typing import Literal, TypeAlias

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import FLOAT
from laplace_verify.errors import GeometryError, ProblemError
from laplace_verify.fields.partitions import Layers, Partition, Sectors, Shells
from laplace_verify.fields.walls import Ray, Round, Wall
from laplace_verify.geometry import Annulus, Ball, Boundary, Box, Disc, Interval, Rectangle, Shape
from laplace_verify.geometry import SphericalShell as Shell
from laplace_verify.geometry.cutting import around_chart, convex_parts, crossings, cut_face, triangle_chart
from laplace_verify.geometry.patches import Chart, integrate
from laplace_verify.geometry.segments import Face
from laplace_verify.problems.materials import Materials

__all__ = [
    "Interface",
    "InterfaceKind",
    "Region",
    "interface_kind",
    "interfaces_of",
    "parts_of",
    "region_lengths",
    "regions_of",
]

CLOSED = 1e-12  # of the shape's size: a point this near to a region belongs to it
SEED = 51907  # of the points that are moved onto interfaces


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Region:
    """A part of the shape with its own conductivity; a homogeneous problem has one, the whole shape.

    Attributes
    ----------
    name
        Its name.
    shape
        The whole shape.
    conductivity
        A positive number; in a homogeneous problem also a symmetric positive definite matrix (d, d).
    """

    name: str
    shape: Shape
    conductivity: float | Array
    _partition: Partition | None = None
    _number: int = 0
    _charts: tuple[Chart, ...] = ()

    @property
    def measure(self) -> float:
        """Length, area or volume."""
        return (
            self.shape.measure
            if self._partition is None
            else math.fsum(self.quadrature(9, cell=self._cell)[1])
        )

    @property
    def _cell(self) -> float:
        return self.shape.extent / (8 if self.shape.dim < 3 else 4)

    def contains(self, points: npt.ArrayLike) -> BoolArray:
        """Return which points (n, d) lie in the closed region."""
        inside = self.shape.contains(points)
        if self._partition is None:
            return inside
        return inside & self._partition.contains(points, self._number, tol=CLOSED * self.shape.extent)

    def quadrature(
        self, order: int, singular: npt.ArrayLike = (), cell: float | None = None
    ) -> tuple[Array, Array]:
        """Return points (n, d) of the region and weights (n,), see `geometry.Shape.quadrature`."""
        if self._partition is None:
            return self.shape.quadrature(order, singular, cell)
        rules = [integrate(chart, order, singular, cell) for chart in self._charts]
        return np.concatenate([points for points, _ in rules]), np.concatenate([w for _, w in rules])

    def outline(self, n: int) -> dict[str, Array]:
        """Return about n points along each piece and interface of its boundary: {name: (n, d)}."""
        if self._partition is None:
            return self.shape.outline(n)
        found = {}
        for piece in self.shape.pieces:
            own = [part for part in parts_of(piece, self._partition)
                   if self.contains(part.sample(3)[0]).all()]  # fmt: skip
            for k, part in enumerate(own):
                found[piece.name if len(own) == 1 else f"{piece.name}-part-{k + 1}"] = part.outline(n)
        for interface in interfaces_of(self.shape, self._partition):
            if self.name in interface.between:
                found[interface.name] = interface.outline(n)
        return found


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Interface:
    """Where two regions meet.

    Attributes
    ----------
    name
        "first/second", the names of the two.
    between
        The two names; the normal points from the first into the second.
    """

    name: str
    between: tuple[str, str]
    shape: Shape
    wall: Wall

    def sample(self, n: int, seed: int = SEED) -> tuple[Array, Array]:
        """Return up to n seeded points (m, d) of the interface inside the shape, and unit normals (m, d)."""
        points = self.wall.project(self.shape.sample(16 * n if self.shape.dim > 1 else 1, seed))
        away = self.shape.distance(points) > 1e-6 * self.shape.extent
        if isinstance(self.wall, Ray):  # many are moved onto the apex, where other regions meet too
            apex = np.array([float(c) for c in self.wall.apex])
            away &= np.sqrt(((points - apex) ** 2).sum(axis=1)) > 1e-6 * self.shape.extent
        inside = points[self.shape.contains(points) & away][:n]
        return inside, self.wall.normals(inside)

    def outline(self, n: int) -> Array:
        """Return about n points (m, d) of the interface: in order along it in the plane."""
        if self.shape.dim != 2:
            return self.sample(n)[0]
        turn = np.linspace(0.0, 2.0 * math.pi, n)
        if isinstance(self.wall, Round):
            centre = np.array([float(c) for c in self.wall.centre])
            return self.wall.project(centre + np.stack([np.cos(turn), np.sin(turn)], axis=1))
        lower, upper = self.shape.bounding_box
        reach = float(np.hypot(*(upper - lower)))
        start = self.wall.project((lower + upper)[None, :] / 2.0)[0]
        along = self.wall.ways(start)[0]
        curve = self.wall.project(start + np.linspace(-reach, reach, 64 * n)[:, None] * along)
        curve = np.concatenate([curve[self.shape.contains(curve)], self._ends()])
        curve = curve[np.argsort(curve @ along, kind="stable")]
        chosen: Array = curve[np.unique(np.linspace(0, len(curve) - 1, n).round().astype(int))]
        return chosen

    def _ends(self) -> Array:
        """Return the points where it meets the boundary, shape (m, 2)."""
        ends = [
            piece.point(crossings(piece, lambda points: self.wall.level(FLOAT, tuple(points.T))))
            for piece in self.shape.pieces
        ]
        points = np.concatenate(ends)
        ends_here: Array = points[self.wall.distance(points) <= CLOSED * self.shape.extent]
        return ends_here


def regions_of(shape: Shape, materials: Materials) -> tuple[Region, ...]:
    """Return the regions of a shape.

    Raises
    ------
    ProblemError
        If a region has no part in the shape, or regions of this kind cannot be laid into this shape.
    """
    partition = materials.partition
    try:
        charts = _charts(shape, partition)
    except GeometryError as cause:
        raise ProblemError(f"the regions {', '.join(partition.names)} do not fit: {cause}") from cause
    for name, parts in zip(partition.names, charts, strict=True):
        if not parts:
            raise ProblemError(f"region {name!r} has no part in {shape!r}; leave it out or move it")
    return tuple(
        Region(name=name, shape=shape, conductivity=k, _partition=partition, _number=number, _charts=parts)
        for number, (name, k, parts) in enumerate(
            zip(partition.names, materials.conductivities, charts, strict=True)
        )
    )


def interfaces_of(shape: Shape, partition: Partition) -> tuple[Interface, ...]:
    """Return the interfaces of a partition in a shape."""
    names = partition.names
    return tuple(
        Interface(
            name=f"{names[wall.first]}/{names[wall.second]}",
            between=(names[wall.first], names[wall.second]),
            shape=shape,
            wall=wall,
        )
        for wall in partition.walls
    )


def parts_of(piece: Boundary, partition: Partition) -> list[Boundary]:
    """Return a boundary piece cut where interfaces cross it; surfaces along an axis only.

    Raises
    ------
    ProblemError
        If an interface crosses a surface that cannot be cut.
    """
    if piece.dim == 1:
        return [piece]
    if piece.dim == 2:
        cuts: set[float] = set()
        for wall in partition.walls:
            cuts.update(crossings(piece, lambda points, wall=wall: wall.level(FLOAT, tuple(points.T))))  # type: ignore[misc]
        ends = [0.0, *sorted(cuts), 1.0]
        if len(ends) == 2:
            return [piece]
        return [piece.part(a, b, piece.name) for a, b in pairwise(ends)]
    numbers = partition.locate(piece.point(np.random.default_rng(SEED).random((400, 2))))
    if (numbers == numbers[0]).all():
        return [piece]
    axis = _axis(partition)
    if isinstance(piece, Face) and isinstance(partition, Layers) and axis is not None:
        return [*cut_face(piece, axis, _positions(partition, axis))]
    raise ProblemError(f"an interface crosses the piece {piece.name!r}, a surface that cannot be cut there")


InterfaceKind: TypeAlias = Literal["", "aligned", "oblique", "curved"]


def interface_kind(partition: Partition) -> InterfaceKind:
    """Return whether interfaces are planes along the axes, other straight ones, or curved."""
    if not all(wall.straight for wall in partition.walls):
        return "curved"
    normals = np.concatenate([wall.normals(np.zeros((1, partition.dim))) for wall in partition.walls])
    return "aligned" if bool((np.abs(normals).max(axis=1) > 1.0 - 1e-12).all()) else "oblique"


def region_lengths(shape: Shape, partition: Partition) -> list[float]:
    """Return the lengths that a grid must resolve to tell the regions apart."""
    if isinstance(partition, Layers):
        direction = np.array([float(c) for c in partition.direction])
        length = float(np.sqrt((direction**2).sum()))
        reach = np.concatenate([piece.outline(65) for piece in shape.pieces]) @ direction
        inner = [float(p) for p in partition.positions]
        return [float(d) / length for d in np.diff([float(reach.min()), *inner, float(reach.max())])]
    if isinstance(partition, Shells):
        radii, centre = [float(r) for r in partition.radii], np.array([[float(c) for c in partition.centre]])
        gap = float(shape.distance(centre)[0]) if shape.contains(centre).all() else math.inf
        gaps = [gap - radii[-1]] if gap > radii[-1] else []
        return [radii[0], *np.diff(radii).tolist(), *gaps]
    if partition.meeting is not None:
        away = float(shape.distance(np.array([partition.meeting]))[0])
        return [away] if away > 1e-9 * shape.extent else []
    return []


# ---- patches of the regions ------------------------------------------------------------------------------


def _charts(shape: Shape, partition: Partition) -> list[tuple[Chart, ...]]:
    """Return the patches of every region; () for one that has no part in the shape."""
    axis = _axis(partition)
    if isinstance(partition, Layers) and axis is not None and isinstance(shape, Interval | Rectangle | Box):
        return [tuple(part._chart() for part in parts) for parts in _slabs(shape, partition, axis)]
    if isinstance(partition, Layers):
        return [_clipped(shape, planes) for planes in _between(partition)]
    if isinstance(partition, Sectors):
        return [_sector(shape, partition, k) for k in range(len(partition.names))]
    if isinstance(partition, Shells):
        return _shells(shape, partition)
    raise GeometryError(f"regions of the kind {partition.kind!r} are unknown here")


def _axis(partition: Partition) -> int | None:
    """Return the axis that layers are stacked along, None if they are oblique or no layers."""
    if not isinstance(partition, Layers):
        return None
    along = [k for k, c in enumerate(partition.direction) if c]
    return along[0] if len(along) == 1 else None


def _positions(partition: Layers, axis: int) -> list[float]:
    """Return the coordinates of the interfaces along an axis, rising."""
    return sorted(float(p) / float(partition.direction[axis]) for p in partition.positions)


def _slabs(shape: Shape, partition: Layers, axis: int) -> list[list[Shape]]:
    """Return the part of an interval, rectangle or box in every layer."""
    lower, upper = shape.bounding_box
    cuts = [-math.inf, *_positions(partition, axis), math.inf]
    found: list[list[Shape]] = []
    for a, b in pairwise(cuts):
        low, high = lower.copy(), upper.copy()
        low[axis], high[axis] = max(low[axis], a), min(high[axis], b)
        if not high[axis] - low[axis] > CLOSED * shape.extent:
            found.append([])
        elif isinstance(shape, Interval):
            found.append([Interval(float(low[0]), float(high[0]))])
        else:
            found.append([replace(shape, lower=tuple(low), upper=tuple(high), splits=())])  # type: ignore[call-arg]
    return found if float(partition.direction[axis]) > 0 else found[::-1]


Plane = tuple[Array, float]  # normal, offset of normal . x <= offset


def _between(partition: Layers) -> list[list[Plane]]:
    """Return the half-planes that bound every layer."""
    direction = np.array([float(c) for c in partition.direction])
    cuts = [-math.inf, *(float(p) for p in partition.positions), math.inf]
    return [
        [(sign * direction, sign * p) for sign, p in ((-1.0, a), (1.0, b)) if math.isfinite(p)]
        for a, b in pairwise(cuts)
    ]


def _clipped(shape: Shape, planes: Sequence[Plane]) -> tuple[Chart, ...]:
    chart = triangle_chart(convex_parts(shape), planes)
    return () if chart is None else (chart,)


def _sector(shape: Shape, partition: Sectors, k: int) -> tuple[Chart, ...]:
    """Return a polygon's part in a sector, cut in two if its opening exceeds pi."""
    rays = [np.array([float(c) for c in ray]) for ray in partition.rays]
    start, stop = rays[k], rays[(k + 1) % len(rays)]
    cross = start[0] * stop[1] - start[1] * stop[0]
    opening = math.atan2(cross, float(start @ stop)) % (2.0 * math.pi)
    bounds = [start, stop]
    if opening > math.pi - 1e-9:
        c, s = math.cos(opening / 2.0), math.sin(opening / 2.0)
        bounds = [start, np.array([c * start[0] - s * start[1], s * start[0] + c * start[1]]), stop]
    apex = np.array([float(c) for c in partition.apex])
    charts: tuple[Chart, ...] = ()
    for a, b in pairwise(bounds):
        first, second = np.array([a[1], -a[0]]), np.array([-b[1], b[0]])  # outward normals of the sector
        charts += _clipped(shape, [(first, float(first @ apex)), (second, float(second @ apex))])
    return charts


def _shells(shape: Shape, partition: Shells) -> list[tuple[Chart, ...]]:
    """Return the patches of core, coats and surroundings."""
    centre, radii = tuple(float(c) for c in partition.centre), [float(r) for r in partition.radii]
    hollow = isinstance(shape, Annulus | Shell)
    if hollow and not (
        np.allclose(shape.centre, centre, rtol=0.0, atol=CLOSED * shape.extent)  # type: ignore[attr-defined]
        and getattr(shape, "inner_centre", None) in (None, centre)
    ):
        raise GeometryError(f"in {shape!r} the regions must be concentric with it")
    least = shape.inner if isinstance(shape, Annulus | Shell) else 0.0
    rings = [0.0, *radii]
    charts: list[tuple[Chart, ...]] = []
    for a, b in pairwise(rings):
        inner = max(a, least)
        charts.append(() if b <= inner else (_ring(centre, inner, b)._chart(),))
    return [*charts, _surroundings(shape, centre, max(radii[-1], least))]


def _ring(centre: tuple[float, ...], inner: float, outer: float) -> Shape:
    """Return the disc, annulus, ball or shell between two radii."""
    if len(centre) == 2:
        return Annulus(centre, inner, outer) if inner else Disc(centre, outer)
    return Shell(centre, inner, outer) if inner else Ball(centre, outer)


def _surroundings(shape: Shape, centre: tuple[float, ...], radius: float) -> tuple[Chart, ...]:
    """Return the patches of the shape outside the outermost circle or sphere."""
    if isinstance(shape, Disc | Ball | Annulus | Shell):
        outer = shape.radius if isinstance(shape, Disc | Ball) else shape.outer
        gap = outer - radius - math.dist(shape.centre, centre)
        concentric = math.dist(shape.centre, centre) <= CLOSED * shape.extent
        if not gap > CLOSED * shape.extent:
            raise GeometryError(f"the circle or sphere of radius {radius:g} does not lie inside {shape!r}")
        if concentric:
            return (_ring(tuple(shape.centre), radius, outer)._chart(),)
        if isinstance(shape, Disc):
            return (Annulus(shape.centre, radius, outer, centre)._chart(),)
        raise GeometryError(f"in {shape!r} the regions must be concentric with it")
    return (around_chart(shape, np.array(centre), radius),)
