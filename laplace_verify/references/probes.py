"""Where the reference values of a case are taken: points inside, close to the boundary, close to its corners.

From the shape and the regularity of a case, seeded by its id, so that the same case has the same points:

- a few points well inside;
- 1e-3 and 1e-6 of the shape's extent from every piece of the boundary;
- 1e-3 and 1e-6 from every corner, singular point and edge, in the direction that leads deepest into the
  shape.

Coordinates are decimals with eleven digits below the extent, so that the last bits of a sine do not show.
"""

from __future__ import annotations

import math
import zlib
from collections.abc import Iterator
from dataclasses import dataclass
from decimal import Decimal

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.geometry import Shape
from laplace_verify.measure.windows import through_window
from laplace_verify.problems import Case, Materials

__all__ = ["Probe", "probes_of"]

INSIDE = 4
LEAST = 12  # probes of a case
MOST = 30  # beyond it every place takes one of the two distances in turn
CLOSE = (("1e-3", 1e-3), ("1e-6", 1e-6))  # parts of the extent
FINE = 11  # decimals of a coordinate, relative to the extent
SAME = 1e-9  # of the extent: two places are one
TURN = 0.13  # radians: no direction lies along an axis or a bisector
DIRECTIONS = {1: 2, 2: 24, 3: 96}


@dataclass(frozen=True, slots=True, kw_only=True)
class Probe:
    """A point at which a reference value is taken.

    Attributes
    ----------
    point
        Coordinates as decimal strings.
    place
        Where it lies, in words.
    """

    point: tuple[str, ...]
    place: str


def probes_of(case: Case) -> tuple[Probe, ...]:
    """Return at least twelve points strictly inside the shape of a case, and in its window if it has one.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> from laplace_verify.geometry import Disc
    >>> from laplace_verify.problems import case
    >>> probes = probes_of(case(Disc((0, 0), 1), {}, fields.polynomial(2)))
    >>> len(probes), probes[0].place, probes[-1].place
    (12, 'inside', '1e-6 of the extent from rim')
    """
    seen = through_window(case).problem.shape
    generator = np.random.default_rng(zlib.crc32(case.id.encode()))
    both = [*_near_corners(case, seen, generator), *_near_pieces(seen, generator)]
    pairs = both if 2 * len(both) + INSIDE <= MOST else [[pair[k % 2]] for k, pair in enumerate(both)]
    near = [probe for pair in pairs for probe in pair]
    return (*_inside(case, seen, max(INSIDE, LEAST - len(near))), *near)


def _inside(case: Case, shape: Shape, count: int) -> Iterator[Probe]:
    """Yield the deepest of some points of the shape."""
    points = shape.sample(6 * count, seed=zlib.crc32(case.id.encode()))
    depth = np.round(shape.distance(points) / shape.extent, 6)
    for point in points[np.argsort(-depth, kind="stable")[:count]]:
        yield Probe(point=_decimals(point, shape.extent), place="inside")


def _near_pieces(shape: Shape, generator: np.random.Generator) -> Iterator[list[Probe]]:
    """Yield the points close to each piece."""
    for piece in shape.pieces:
        pair = []
        for text, close in CLOSE:
            t = generator.uniform(0.2, 0.8, (1, 2) if shape.dim == 3 else 1)
            foot = piece.point(t)
            point = (foot - close * shape.extent * piece.normals(foot))[0]
            place = f"{text} of the extent from {piece.name}"
            pair.append(Probe(point=_decimals(point, shape.extent), place=place))
        yield pair


def _near_corners(case: Case, shape: Shape, generator: np.random.Generator) -> Iterator[list[Probe]]:
    """Yield the points close to each corner, singular point and edge."""
    for name, place in _corners(case, shape, generator):
        pair = []
        for text, close in CLOSE:
            point = _deepest(shape, place, close * shape.extent)
            at = ", ".join(f"{c + 0.0:.6g}" for c in place)
            words = f"{text} of the extent from the {name} ({at})"
            pair.append(Probe(point=_decimals(point, shape.extent), place=words))
        yield pair


def _corners(case: Case, shape: Shape, generator: np.random.Generator) -> Iterator[tuple[str, Array]]:
    """Yield corners, singular points, and a point of every edge, each place once."""
    met: list[Array] = []

    def new(place: Array) -> bool:
        known = any(float(np.abs(place - other).max()) <= SAME * shape.extent for other in met)
        met.append(place)
        return not known

    for point in case.regularity.singular_points:
        if new(point):
            yield "singular point", point
    for name, place in _meetings(case, shape, generator):
        if new(place):
            yield name, place


def _meetings(case: Case, shape: Shape, generator: np.random.Generator) -> Iterator[tuple[str, Array]]:
    """Yield where pieces meet at an angle, and where an edge of the field lies on the shape."""
    for junction in shape.junctions:
        if abs(junction.opening - math.pi) < SAME:
            continue
        points = junction.points
        if len(points) == 1:
            yield "corner", points[0]
        elif len(points) == 2:
            share = generator.uniform(0.3, 0.7)
            yield "edge", (1.0 - share) * points[0] + share * points[1]
            yield from (("corner", end) for end in points)
        else:
            yield "edge", points[int(generator.integers(len(points)))]
    for edge in case.exact.edges:
        part = edge.within(*shape.bounding_box)
        if part is None:
            continue
        points = part.sample(7)[1:-1]
        points = points[shape.contains(points, tol=SAME)]
        if len(points):
            yield "singular edge", points[int(generator.integers(len(points)))]
    k = case.problem.conductivity
    if isinstance(k, Materials) and k.partition.meeting is not None:
        yield "meeting of regions", np.array(k.partition.meeting)


def _deepest(shape: Shape, place: Array, away: float) -> Array:
    """Return the point at a distance from a place that lies deepest in the shape."""
    candidates = place + away * _directions(shape.dim)
    depth = np.where(shape.contains(candidates), shape.distance(candidates), -1.0)
    best: Array = candidates[int(np.argmax(np.round(depth / away, 3)))]
    return best


def _directions(dim: int) -> Array:
    """Return unit vectors spread over the circle or sphere (Fibonacci's spiral), none along an axis."""
    count = DIRECTIONS[dim]
    if dim == 1:
        return np.array([[1.0], [-1.0]])
    golden = math.pi * (3.0 - math.sqrt(5.0))
    turns: Array = np.linspace(0.5, count - 0.5, count)
    angles: Array = turns * (2.0 * math.pi / count if dim == 2 else golden) + TURN
    circle: Array = np.column_stack([np.cos(angles), np.sin(angles)])
    if dim == 2:
        return circle
    height = 1.0 - 2.0 * turns / count
    return np.column_stack([circle * np.sqrt(1.0 - height**2)[:, None], height])


def _decimals(point: Array, extent: float) -> tuple[str, ...]:
    """Return coordinates as decimal strings.

    >>> _decimals(np.array([0.1 + 1e-15, -2.0]), 1.0)
    ('0.1', '-2')
    """
    unit = Decimal(1).scaleb(math.floor(math.log10(extent)) - FINE)
    texts = []
    for coordinate in point.tolist():
        rounded = Decimal(coordinate).quantize(unit)
        texts.append("0" if rounded == 0 else format(rounded.normalize(), "f"))
    return tuple(texts)
