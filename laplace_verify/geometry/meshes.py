"""Triangulations of planar shapes with n cells along every side, for sample solvers and pictures.

Rectangles and L-shapes get right triangles on a grid, polygons the uniform refinement of a constrained
Delaunay triangulation of their corners, discs, ellipses, sectors and parabolas fans of about equilateral
triangles mapped onto them, annuli and elliptic rings a polar grid. Meshes of one shape with n and 2 n cells
are nested up to the curvature of the boundary, so h is proportional to 1/n. The ends of boundary pieces,
those made by ``split`` included, are nodes.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from laplace_verify.arrays import Array, IntArray, frozen
from laplace_verify.errors import GeometryError
from laplace_verify.geometry._ear_clipping import clip_ears, flip_to_delaunay, join_holes
from laplace_verify.geometry._fans import edges_of, fan_of, unit
from laplace_verify.geometry._marks import SAME, stretched, subdivide
from laplace_verify.geometry.base import Shape
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.cones import ConeSection
from laplace_verify.geometry.halves import HalfAnnulus, HalfDisc
from laplace_verify.geometry.parabolas import ConfocalParabolas
from laplace_verify.geometry.round import Annulus, Disc, Ellipse, Sector
from laplace_verify.geometry.spheroids import EllipticRing
from laplace_verify.geometry.splitting import split_piece

__all__ = ["Mesh", "subdivide", "triangulate"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Mesh:
    """Triangles, counter-clockwise, and the boundary edges of every piece, domain on their left.

    Attributes
    ----------
    points : (n, 2)
        The two lips of a slit have nodes of their own.
    triangles : (m, 3)
        Node numbers.
    boundary : dict of (k, 2)
        Node numbers of the edges on each piece, by its name.
    """

    points: Array
    triangles: IntArray
    boundary: dict[str, IntArray]

    @property
    def h(self) -> float:
        """The longest edge."""
        corners = self.points[self.triangles]
        return float(np.max(np.linalg.norm(corners - np.roll(corners, 1, axis=1), axis=2)))

    @property
    def areas(self) -> Array:
        """The areas of the triangles, shape (m,), all positive."""
        a, b, c = np.moveaxis(self.points[self.triangles], 1, 0)
        areas: Array = 0.5 * ((b - a)[:, 0] * (c - a)[:, 1] - (b - a)[:, 1] * (c - a)[:, 0])
        return areas


def triangulate(shape: Shape, n: int) -> Mesh:
    """Return a triangulation of a planar shape with n cells along every side.

    Arcs are cut into n cells per 60 degrees (rings: 6 n to 12 n cells around). A side that ``split`` cuts
    keeps its n cells on rectangles; on polygons each part of it gets n.

    Raises
    ------
    GeometryError
        If n is not a positive integer or the shape is not one of those named above.

    Examples
    --------
    >>> from laplace_verify.geometry import Rectangle
    >>> mesh = triangulate(Rectangle((0, 0), (2, 1)), 4)
    >>> len(mesh.points), len(mesh.triangles), len(mesh.boundary["top"]), float(mesh.areas.sum())
    (25, 32, 4, 2.0)
    """
    if isinstance(n, bool) or not isinstance(n, (int, np.integer)) or n < 1:
        raise GeometryError(f"n, the cells along every side, must be an integer >= 1, got {n!r}")
    for kind, build in _BUILDERS.items():
        if shape.is_a(kind):
            mesh = build(replace(shape, names=()), int(n))
            old = replace(shape, names=()).pieces.names
            boundary = {new: mesh.boundary[name] for name, new in zip(old, shape.pieces.names, strict=True)}
            return replace(mesh, boundary=boundary)
    raise GeometryError(f"cannot triangulate a shape of kind {shape.kind!r}; can: {', '.join(_BUILDERS)}")


# ---- structured grids ----------------------------------------------------------------------------


def _from_grid(shape: Shape, n: int) -> Mesh:
    """Cut the squares of a grid by parallel diagonals; an L-shape is three squares of n x n cells."""
    lower, upper = shape.bounding_box
    ends = np.concatenate([lower[None], upper[None], *(piece.ends for piece in shape.pieces)])
    count = 2 * n if shape.is_a("l-shape") else n
    x, y = (subdivide(ends[:, axis], count) for axis in (0, 1))
    middles = np.stack(np.meshgrid((x[1:] + x[:-1]) / 2, (y[1:] + y[:-1]) / 2), axis=-1).reshape(-1, 2)
    row, column = np.divmod(np.flatnonzero(shape.contains(middles)), len(x) - 1)
    south_west = row * len(x) + column
    south_east, north_west, north_east = south_west + 1, south_west + len(x), south_west + len(x) + 1
    triangles = np.concatenate(
        [
            np.stack([south_west, south_east, north_east], axis=1),
            np.stack([south_west, north_east, north_west], axis=1),
        ]
    )
    points = np.stack(np.meshgrid(x, y), axis=-1).reshape(-1, 2)
    return _tagged(points, triangles, shape)


def _tagged(points: Array, triangles: IntArray, shape: Shape) -> Mesh:
    """Drop unused nodes and give each boundary edge to the piece that its middle lies on."""
    used, renumbered = np.unique(triangles, return_inverse=True)
    points, triangles = points[used], renumbered.reshape(-1, 3)
    edges = _outer_edges(triangles)
    middles = points[edges].mean(axis=1)
    boundary = {piece.name: edges[piece.contains(middles)] for piece in shape.pieces}
    return _finished(points, triangles, boundary)


def _outer_edges(triangles: IntArray) -> IntArray:
    """Return the directed edges whose reverse belongs to no triangle."""
    edges = np.concatenate([triangles[:, [0, 1]], triangles[:, [1, 2]], triangles[:, [2, 0]]])
    base = int(triangles.max()) + 1
    forward, backward = edges @ [base, 1], edges @ [1, base]
    return edges[~np.isin(forward, backward)]


def _finished(points: Array, triangles: IntArray, boundary: dict[str, IntArray]) -> Mesh:
    """Freeze the arrays of a mesh."""
    return Mesh(points=frozen(points), triangles=triangles, boundary=boundary)


# ---- fans and polar grids: disc, ellipse, sector, rings, halves ----------------------------------


def _from_disc(shape: Shape, n: int) -> Mesh:
    """Map six equilateral triangles onto a disc, ring by ring, and scale it to an ellipse."""
    if isinstance(shape, Disc):
        centre, axes = np.array(shape.centre), np.full(2, shape.radius)
    elif isinstance(shape, Ellipse):
        centre, axes = np.array(shape.centre), np.array(shape.semi_axes)
    fan = fan_of(6, n, closed=True)
    breaks = _turns(np.concatenate([piece.ends for piece in shape.pieces]), centre, axes)
    angle = 2.0 * math.pi * stretched(fan.share, breaks, 6 * n)
    points = centre + axes * (fan.ring / n * np.array([np.cos(angle), np.sin(angle)])).T
    rim = edges_of(fan.rim)
    ends = angle[rim[:, 0]]
    middles = centre + axes * unit(ends + 0.5 * ((angle[rim[:, 1]] - ends) % (2.0 * math.pi)))
    return _finished(points, fan.triangles, _by_piece(list(shape.pieces), rim, middles))


def _from_sector(shape: Shape, n: int) -> Mesh:
    """Map a fan of triangles with about 60 degrees each onto a sector, or onto one beside an axis."""
    if isinstance(shape, Sector):
        first, opening, names = 0.0, shape.opening, ("start", "arc", "end")
    elif isinstance(shape, ConeSection):
        first, opening = math.pi / 2.0 - shape.half_angle, shape.half_angle
        names = ("side", "cap", "straight")
    else:
        raise GeometryError(f"a sector is needed here, got {shape!r}")
    wedges = max(1, round(opening / (math.pi / 3.0)))
    fan = fan_of(wedges, n, closed=False)
    ends = np.concatenate([piece.ends for piece in shape.pieces])
    radii = np.linalg.norm(ends, axis=1) / shape.radius
    on_arc = ends[np.abs(radii - 1.0) < SAME]
    breaks = ((np.arctan2(on_arc[:, 1], on_arc[:, 0]) - first) % (2.0 * math.pi)) / opening
    angle = first + opening * stretched(fan.share, breaks, wedges * n)
    along = shape.radius * stretched(fan.ring / n, radii, n)
    points = along[:, np.newaxis] * unit(angle)
    if isinstance(shape, ConeSection):
        points[fan.end, 0] = 0.0  # the axis, to the last bit
    boundary: dict[str, IntArray] = {}
    for name, nodes in zip(names, (fan.start, fan.rim, fan.end), strict=True):
        edges = edges_of(nodes)
        middles = points[edges].mean(axis=1)
        if nodes is fan.rim:
            middles = shape.radius * unit(angle[edges].mean(axis=1))
        parts = [piece for piece in shape.pieces if piece.name == name or piece.name.startswith(name + "-")]
        boundary |= _by_piece(parts, edges, middles)
    return _finished(points, fan.triangles, {piece.name: boundary[piece.name] for piece in shape.pieces})


def _from_ring(shape: Shape, n: int) -> Mesh:
    """Map a grid of n cells across and 6 n to 12 n around between circles or ellipses, cut by diagonals."""
    if isinstance(shape, Annulus):
        hole, centre = np.array(shape.hole_centre), np.array(shape.centre)
        least, most = np.full(2, shape.inner), np.full(2, shape.outer)
    elif isinstance(shape, EllipticRing) and min(shape.inner) > 0.0:
        hole = centre = np.array(shape.centre)
        least, most = np.array(shape.inner), np.array(shape.outer)
    else:
        raise GeometryError(f"cannot triangulate {shape!r}: the inner semi-axes must be > 0")
    around = n * min(12, max(6, round(math.pi * (least + most).sum() / (most - least).sum())))
    inner, outer = ([p for p in shape.pieces if p.name.startswith(name)] for name in ("inner", "outer"))
    rims = ((inner, hole, least), (outer, centre, most))
    breaks = [_turns(piece.ends, middle, axes) for pieces, middle, axes in rims for piece in pieces]
    angle = 2.0 * math.pi * stretched(np.arange(around) / around, np.concatenate(breaks), around)
    inside, outside = hole + least * unit(angle), centre + most * unit(angle)
    depth = (np.arange(n + 1) / n)[:, np.newaxis, np.newaxis]
    points = ((1.0 - depth) * inside + depth * outside).reshape(-1, 2)
    ring, step = (index.ravel() for index in np.meshgrid(np.arange(n), np.arange(around), indexing="ij"))
    a, b = ring * around + step, ring * around + (step + 1) % around
    c, d = b + around, a + around
    triangles = np.concatenate([np.stack([a, d, c], axis=1), np.stack([a, c, b], axis=1)])
    half = angle + 0.5 * (np.roll(angle, -1) - angle) % math.pi
    loop = np.stack([np.arange(around), (np.arange(around) + 1) % around], axis=1)
    boundary = _by_piece(inner, loop[:, ::-1], hole + least * unit(half))
    boundary |= _by_piece(outer, loop + n * around, centre + most * unit(half))
    return _finished(points, triangles, {piece.name: boundary[piece.name] for piece in shape.pieces})


def _from_half_disc(shape: Shape, n: int) -> Mesh:
    """Map three triangles onto a half-disc, ring by ring."""
    if not isinstance(shape, HalfDisc):
        raise GeometryError(f"a half-disc is needed here, got {shape!r}")
    return _half_fan(shape, n, np.array(shape.centre), 0, lambda angle: np.full(len(angle), shape.radius))


def _from_parabolas(shape: Shape, n: int) -> Mesh:
    """Map three triangles about the focus onto the region, ring by ring."""
    if not isinstance(shape, ConfocalParabolas):
        raise GeometryError(f"confocal parabolas are needed here, got {shape!r}")
    return _half_fan(shape, n, np.array(shape.focus), 1, shape.reach)


def _half_fan(shape: Shape, n: int, centre: Array, axis: int, reach: Callable[[Array], Array]) -> Mesh:
    """Map three triangles onto a shape that reaches so far from a centre on its straight side.

    The side is normal to `axis`; angles run over the half turn that begins at -pi/2 (axis 0) or 0 (axis 1).
    """
    fan, first = fan_of(3, n, closed=False), -math.pi / 2.0 * (1 - axis)
    ends = np.concatenate([piece.ends for piece in shape.pieces]) - centre
    angles = np.arctan2(ends[:, 1], ends[:, 0])
    radii = np.linalg.norm(ends, axis=1) / reach(angles)
    rim = angles[np.abs(radii - 1.0) < SAME]
    angle = first + math.pi * stretched(fan.share, (rim - first) / math.pi, 3 * n)
    along = stretched(fan.ring / n, radii, n) * reach(angle)
    points = centre + along[:, np.newaxis] * unit(angle)
    points[np.concatenate([fan.start, fan.end]), axis] = centre[axis]
    arc, side = edges_of(fan.rim), np.concatenate([edges_of(fan.end), edges_of(fan.start)])
    half = angle[arc].mean(axis=1)
    middles = [points[side].mean(axis=1), centre + reach(half)[:, np.newaxis] * unit(half)]
    boundary = _by_piece(list(shape.pieces), np.concatenate([side, arc]), np.concatenate(middles))
    return _finished(points, fan.triangles, boundary)


def _from_half_annulus(shape: Shape, n: int) -> Mesh:
    """Map a grid of n cells across and 3 n to 6 n around between two half-circles and cut it by diagonals."""
    if not isinstance(shape, HalfAnnulus):
        raise GeometryError(f"a half-annulus is needed here, got {shape!r}")
    centre, gap = np.array(shape.centre), shape.outer - shape.inner
    around = n * min(6, max(3, round(math.pi / 2 * (shape.inner + shape.outer) / gap)))
    ends = np.concatenate([piece.ends for piece in shape.pieces]) - centre
    depths = (np.linalg.norm(ends, axis=1) - shape.inner) / gap
    on_arcs = ends[np.minimum(np.abs(depths), np.abs(depths - 1.0)) < SAME]
    breaks = np.arctan2(on_arcs[:, 1], on_arcs[:, 0]) / math.pi + 0.5
    angle = math.pi * (stretched(np.arange(around + 1) / around, breaks, around) - 0.5)
    radii = shape.inner + gap * stretched(np.arange(n + 1) / n, depths, n)
    points = centre + (radii[:, np.newaxis, np.newaxis] * unit(angle)).reshape(-1, 2)
    node = np.arange(len(points)).reshape(n + 1, around + 1)
    points[node[:, [0, -1]].ravel(), 0] = centre[0]
    a, b, c, d = (part.ravel() for part in (node[:-1, :-1], node[:-1, 1:], node[1:, 1:], node[1:, :-1]))
    triangles = np.concatenate([np.stack([a, d, c], axis=1), np.stack([a, c, b], axis=1)])
    sides = np.concatenate([edges_of(node[:, 0]), edges_of(node[::-1, -1])])
    inner, outer, half = edges_of(node[0, ::-1]), edges_of(node[-1]), (angle[1:] + angle[:-1]) / 2.0
    middles = [centre + shape.inner * unit(half[::-1]), centre + shape.outer * unit(half)]
    edges = np.concatenate([sides, inner, outer])
    places = np.concatenate([points[sides].mean(axis=1), *middles])
    return _finished(points, triangles, _by_piece(list(shape.pieces), edges, places))


def _turns(points: Array, centre: Array, axes: Array) -> Array:
    """Return the eccentric angles of points on an ellipse as parts of a full turn, in [0, 1)."""
    offset = (points - centre) / axes
    return (np.arctan2(offset[:, 1], offset[:, 0]) / (2.0 * math.pi)) % 1.0


def _by_piece(pieces: list[Boundary], edges: IntArray, middles: Array) -> dict[str, IntArray]:
    """Give every edge to the piece that holds its middle, moved onto the curve."""
    return {piece.name: edges[piece.contains(middles)] for piece in pieces}


# ---- polygons ------------------------------------------------------------------------------------


def _from_polygon(shape: Shape, n: int) -> Mesh:
    """Triangulate the corners, then cut every edge in n."""
    corners, rings, sides = _walks(shape)
    walk = join_holes(corners, rings)
    triangles = flip_to_delaunay(corners, clip_ears(corners, walk), set(sides))
    return _refined(corners, triangles, sides, n)


def _walks(shape: Shape) -> tuple[Array, list[list[int]], dict[tuple[int, int], str]]:
    """Return corners (both lips of a slit have some), closed walks through them, the piece on each side."""
    cuts = dict(shape.splits)
    corners: list[Array] = []
    rings: list[list[int]] = []
    sides: dict[tuple[int, int], str] = {}
    for loop in shape._loops():
        travelled = [part for piece in loop for part in split_piece(piece, cuts.get(piece.name, ()))[1]]
        ring = list(range(len(corners), len(corners) + len(travelled)))
        corners += [piece.ends[0] for piece in travelled]
        sides |= {(ring[k - 1], ring[k]): travelled[k - 1].name for k in range(len(ring))}
        rings.append(ring)
    return np.array(corners), rings, sides


def _refined(
    corners: Array, coarse: list[tuple[int, int, int]], sides: dict[tuple[int, int], str], n: int
) -> Mesh:
    """Cut every triangle into n * n; edges are shared by neighbours, but not across a slit."""
    points = [corners]
    count = len(corners)
    chains: dict[tuple[int, int], IntArray] = {}

    def added(new: Array) -> IntArray:
        nonlocal count
        points.append(new)
        count += len(new)
        return np.arange(count - len(new), count)

    def chain(a: int, b: int) -> IntArray:
        if (a, b) not in sides and (b, a) in chains:
            return chains[b, a][::-1]
        if (a, b) not in chains:
            t = (np.arange(1, n) / n)[:, np.newaxis]
            middle = added(corners[a] + t * (corners[b] - corners[a]))
            chains[a, b] = np.concatenate([[a], middle, [b]])
        return chains[a, b]

    triangles = [_cut(corners, triangle, n, chain, added) for triangle in coarse]
    boundary: dict[str, list[IntArray]] = {}
    for side, name in sides.items():
        boundary.setdefault(name, []).append(edges_of(chains[side]))
    return _finished(
        np.concatenate(points),
        np.concatenate(triangles),
        {name: np.concatenate(e) for name, e in boundary.items()},
    )


def _cut(
    corners: Array,
    triangle: tuple[int, int, int],
    n: int,
    chain: Callable[[int, int], IntArray],
    added: Callable[[Array], IntArray],
) -> IntArray:
    """Cut one triangle (a, b, c) into n * n; node (i, j) lies at a + i/n (b - a) + j/n (c - a)."""
    a, b, c = triangle
    lattice = np.full((n + 1, n + 1), -1)
    along = np.arange(n + 1)
    lattice[along, 0], lattice[n - along, along], lattice[0, n - along] = (
        chain(a, b),
        chain(b, c),
        chain(c, a),
    )
    i, j = np.nonzero(np.add.outer(along, along) < n)
    inside = (i > 0) & (j > 0)
    s, t = i[inside, np.newaxis] / n, j[inside, np.newaxis] / n
    lattice[i[inside], j[inside]] = added(
        corners[a] + s * (corners[b] - corners[a]) + t * (corners[c] - corners[a])
    )
    upright = np.stack([lattice[i, j], lattice[i + 1, j], lattice[i, j + 1]], axis=1)
    i, j = i[i + j < n - 1], j[i + j < n - 1]
    return np.concatenate(
        [upright, np.stack([lattice[i + 1, j], lattice[i + 1, j + 1], lattice[i, j + 1]], axis=1)]
    )


_BUILDERS: dict[str, Callable[[Shape, int], Mesh]] = {
    "rectangle": _from_grid,
    "l-shape": _from_grid,
    "polygon": _from_polygon,
    "ellipse": _from_disc,
    "sector": _from_sector,
    "annulus": _from_ring,
    "elliptic-ring": _from_ring,
    "cone-section": _from_sector,
    "half-disc": _from_half_disc,
    "half-annulus": _from_half_annulus,
    "confocal-parabolas": _from_parabolas,
}
