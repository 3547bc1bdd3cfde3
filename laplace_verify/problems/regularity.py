"""How smooth solution and shape are: the exponents that limit the order of any method.

*Solution.* Near a singular point or edge on the closed shape u - smooth ~ r**e; the smallest e counts, 0 for
a jump of boundary data, infinity if there is none.

*Domain.* Where two pieces meet at the interior angle w, solutions with smooth data behave like r**(pi/w) if
both pieces carry the same type of condition (Dirichlet, or flux: Neumann and Robin) and r**(pi/(2 w)) if
Dirichlet meets flux (Grisvard 1985, Elliptic Problems in Nonsmooth Domains, section 4.4; Kondrat'ev 1967).
Robin's term is of lower order and leaves the exponent. With a tensor K the angle is the one seen after the
substitution x -> K^{-1/2} x, which turns a normal n into K^{1/2} n: if n_1, n_2 are the outward normals,

    w' = pi -+ arccos( n_1 . K n_2 / sqrt(n_1 . K n_1  n_2 . K n_2) ),   - for w < pi, + for w > pi
    (derived here). Vertices of solids count where their exponent is known and below that of their edges.

*Scale.* The smallest length that a grid must resolve: of the shape (pieces, gaps), or of the solution
(distance to singular points outside, distances between those on the boundary).
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from scipy.spatial.distance import cdist, pdist

from laplace_verify.arrays import Array, frozen
from laplace_verify.fields import Field, Line
from laplace_verify.geometry import Boundary, Junction, Shape
from laplace_verify.problems.conditions import PERIODIC, PieceKind
from laplace_verify.problems.coordinates import AXIS, Coordinates, cone_exponent
from laplace_verify.problems.materials import Materials
from laplace_verify.problems.periodic import Join, glued_exponent
from laplace_verify.problems.regions import InterfaceKind, interface_kind, region_lengths
from laplace_verify.problems.singular_checks import edge_points, on_shape
from laplace_verify.problems.transmission import interface_exponent

__all__ = ["Regularity", "complement_exponent", "derive"]

SAMPLES = {1: 1, 2: 64, 3: 144}  # points of a piece when gaps between pieces are measured
ON_EDGE = 5  # points that stand for an edge along which data jump
OPEN_LEAST = 1e-9  # an opening of a slit's other side
COINCIDENT = 1e-9  # of the shape's size: the lips of a slit have no gap


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Regularity:
    """Smoothness of a case.

    Attributes
    ----------
    solution
        Smallest exponent e of u - smooth ~ r**e over the singular points; 0 for a jump, inf if smooth.
    domain
        Smallest exponent of the shape's junctions under the conditions, inf if it has none.
    singular_points
        Points of the closed shape where the solution is singular, shape (m, d).
    scale
        Smallest length that matters; grids coarser than half of it are not judged.
    jumps
        Those of the singular points where boundary data jump, and a few points of every edge along which
        they do, shape (k, d).
    interface
        "" in a homogeneous shape. Else the solution is smooth only region by region (`solution` speaks of
        the regions), and the interfaces are "aligned" (planes along the axes), "oblique" or "curved".
    """

    solution: float
    domain: float
    singular_points: Array
    scale: float
    jumps: Array
    interface: InterfaceKind = ""

    def __post_init__(self) -> None:
        """Freeze the arrays."""
        object.__setattr__(self, "singular_points", frozen(self.singular_points))
        object.__setattr__(self, "jumps", frozen(self.jumps))


def derive(
    shape: Shape,
    field: Field,
    kinds: Mapping[str, PieceKind],
    tensor: Array | Materials,
    coordinates: Coordinates = "cartesian",
    joins: Mapping[str, Join] | None = None,
) -> Regularity:
    """Return the regularity of an exact solution in a shape with a kind of condition on each piece.

    Parameters
    ----------
    shape, field
        The shape and the exact solution.
    kinds
        Piece name -> "dirichlet", "neumann", "robin", "periodic" or "axis".
    tensor
        Conductivity as a matrix (d, d), or a number per region.
    coordinates
        In (r, z) or r the least radius is one of the lengths to be resolved.
    joins
        Partner and shift of every periodic piece.
    """
    joins = joins or {}
    singular = on_shape(shape, field)
    places = list(dict.fromkeys(s.point for s in singular))
    jumps = list(dict.fromkeys(s.point for s in singular if s.kind == "jump"))
    edges = [(edge.exponent, edge_points(shape, edge, ON_EDGE)) for edge in field.edges]
    jumps += dict.fromkeys(tuple(p) for e, points in edges if e <= 0.0 for p in points.tolist())
    exponents = [s.exponent for s in singular] + [e for e, points in edges if len(points)]
    scale, beyond = _scale(shape, field, places), math.inf
    interface: InterfaceKind = ""
    least = float(shape.bounding_box[0][0])
    if coordinates != "cartesian" and least > COINCIDENT * shape.size:
        scale = min(scale, least)
    if isinstance(tensor, Materials):
        single, interface = np.eye(shape.dim), interface_kind(tensor.partition)
        beyond = interface_exponent(shape, tensor, kinds)
        scale = min([scale, *region_lengths(shape, tensor.partition)])
    else:
        single = tensor
    corners = (
        junction_exponent(shape, j, kinds, single)
        if joins.keys().isdisjoint(j.pieces)
        else glued_exponent(shape, j, kinds, joins)
        for j in shape.junctions
        if not (isinstance(tensor, Materials) and tensor.partition.on_interface(j.points).any())
    )
    return Regularity(
        solution=min(exponents, default=math.inf),
        domain=min(beyond, *corners, *_vertex_exponents(shape, kinds), math.inf),
        singular_points=np.array(places).reshape(-1, shape.dim),
        scale=scale,
        jumps=np.array(jumps).reshape(-1, shape.dim),
        interface=interface,
    )


def junction_exponent(
    shape: Shape, junction: Junction, kinds: Mapping[str, PieceKind], tensor: Array
) -> float:
    """Return the exponent of a junction, inf where one smooth piece is merely cut in two."""
    first, second = (kinds[name] for name in junction.pieces)
    opening = seen_opening(shape, junction, tensor)
    if AXIS in (first, second):
        return math.inf if first == second else cone_exponent(opening, second if first == AXIS else first)
    if (first == "dirichlet") != (second == "dirichlet"):
        return math.pi / (2.0 * opening)
    if first == second and abs(opening - math.pi) < 1e-9:
        return math.inf
    return math.pi / opening


def complement_exponent(shape: Shape, kinds: Mapping[str, PieceKind]) -> float | None:
    """Return the smallest exponent of the corners seen from the other side of a plane boundary.

    There the opening is 2 pi less the interior angle. Infinite without corners; None for corners in space, on
    an axis and at periodic sides, for which no theorem is used. The lips of a slit (2 pi) have nothing on
    their other side.

    >>> from laplace_verify.geometry import Rectangle
    >>> square = Rectangle((0, 0), (1, 1))
    >>> complement_exponent(square, dict.fromkeys(("left", "right", "bottom", "top"), "dirichlet"))
    0.6666666666666666
    """
    if shape.dim == 1 or not shape.junctions:
        return math.inf
    if shape.dim == 3 or {AXIS, PERIODIC} & set(kinds.values()):
        return None
    least = math.inf
    for junction in shape.junctions:
        first, second = (kinds[name] for name in junction.pieces)
        opening = 2 * math.pi - junction.opening
        if opening < OPEN_LEAST:
            continue
        if (first == "dirichlet") != (second == "dirichlet"):
            least = min(least, math.pi / (2 * opening))
        elif abs(opening - math.pi) > 1e-9:
            least = min(least, math.pi / opening)
    return least


def _vertex_exponents(shape: Shape, kinds: Mapping[str, PieceKind]) -> list[float]:
    """Return the exponents of vertices whose faces all carry Dirichlet conditions; others are not known."""
    return [
        vertex.exponent
        for vertex in shape.sharp_vertices
        if all(kinds[name] == "dirichlet" for name in vertex.pieces)
    ]


def seen_opening(shape: Shape, junction: Junction, tensor: Array) -> float:
    """Return the interior angle of a junction in coordinates that make the conductivity isotropic."""
    isotropic = np.allclose(tensor, tensor[0, 0] * np.eye(len(tensor)), rtol=1e-12, atol=0.0)
    if isotropic or abs(junction.opening - math.pi) < 1e-12:
        return junction.opening
    first, second = (shape.pieces[name].normals(junction.points) for name in junction.pieces)
    mixed = ((first @ tensor) * second).sum(axis=1)
    norms = np.sqrt(((first @ tensor) * first).sum(axis=1) * ((second @ tensor) * second).sum(axis=1))
    turn = np.arccos(np.clip(mixed / norms, -1.0, 1.0))
    seen = math.pi - turn if junction.opening < math.pi else math.pi + turn
    return float(seen.max())


def _scale(shape: Shape, field: Field, places: list[tuple[float, ...]]) -> float:
    """Return the smallest length of shape and solution."""
    lower, upper = shape.bounding_box
    lengths = [*(upper - lower).tolist(), *(_extent(piece) for piece in shape.pieces if shape.dim > 1)]
    if shape.dim > 1:
        lengths.append(_gap(shape))
    if field.singularities:
        away = shape.distance(np.array([s.point for s in field.singularities]))
        lengths += away[away > COINCIDENT * shape.size].tolist()
    for edge in field.edges:
        part = edge.within(lower - shape.size, upper + shape.size)
        touching = isinstance(edge, Line) and len(edge_points(shape, edge))
        if part is not None and not touching:  # how a line goes on beyond the shape does not matter
            away = shape.distance(part.sample(ON_EDGE))
            lengths += away[away > COINCIDENT * shape.size].tolist()
    if len(places) > 1:
        lengths.append(float(pdist(np.array(places)).min()))
    return float(min(lengths))


def _extent(piece: Boundary) -> float:
    """Return the length of an open curve, the width of a closed one, sqrt(area) of a surface."""
    if piece.dim == 3:
        return math.sqrt(piece.measure)
    return piece.measure if len(piece.ends) else piece.measure / math.pi


def _gap(shape: Shape) -> float:
    """Return the least distance between pieces that do not meet: necks, holes near a rim, opposite sides.

    Pairs are taken in the order of the least distance that balls around the pieces allow, so that of a
    polygon with very many sides only neighbours are looked at.
    """
    pieces = tuple(shape.pieces)
    samples = [piece.sample(SAMPLES[shape.dim])[0] for piece in pieces]
    centres = np.array([points.mean(axis=0) for points in samples])
    radii = np.array(
        [cdist(points, centre[None, :]).max() for points, centre in zip(samples, centres, strict=True)]
    )
    first, second = np.triu_indices(len(pieces), k=1)
    bounds = np.sqrt(((centres[first] - centres[second]) ** 2).sum(axis=1)) - radii[first] - radii[second]
    meeting = {frozenset(junction.pieces) for junction in shape.junctions}
    least, size = math.inf, shape.size
    for pair in np.argsort(bounds, kind="stable").tolist():
        if not bounds[pair] < least:
            break
        a, b = int(first[pair]), int(second[pair])
        gap = float(cdist(samples[a], samples[b]).min())
        apart = gap < least and frozenset((pieces[a].name, pieces[b].name)) not in meeting
        if apart and not _touching(pieces[a], pieces[b], size):
            least = gap
    return least


def _touching(first: Boundary, second: Boundary, size: float) -> bool:
    """Return whether an end of one curve lies on the other, as at the mouth of a slit."""
    for one, other in ((first, second), (second, first)):
        if len(one.ends) and (np.hypot(*(one.ends - other.project(one.ends)).T) <= COINCIDENT * size).any():
            return True
    return False
