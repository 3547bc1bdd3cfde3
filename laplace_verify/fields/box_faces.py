"""Box whose six faces are held at constant values: the Dirichlet problem with jumps along edges.

u is the sum over faces of value times the solution with that face hot (`box_kernel`, `box_precise`). Since
the six solutions with one hot face add up to 1, any constant may be taken off all values first: the value of
the nearest face is, so that the terms left are smooth near every edge whose two faces agree.

Next to an edge with a jump, at distance r, |grad u| grows like jump / (pi/2) / r; on the edge u has no value.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray, between
from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError, nearest_names
from laplace_verify.fields.base import Field
from laplace_verify.fields.box_kernel import face_slopes, face_value
from laplace_verify.fields.box_precise import precise_slopes, precise_value
from laplace_verify.fields.edges import Edge
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, rational, show
from laplace_verify.fields.singular import Basis
from laplace_verify.fields.specs import registered

__all__ = ["BoxFaces", "box_faces", "inside_box"]

FACES = ("left", "right", "front", "back", "bottom", "top")  # face 2 axis + end
OUTSIDE = 1e-12  # of the longest extent: how far outside a point may be put by rounding


@registered("box-faces")
@dataclass(frozen=True, slots=True, kw_only=True)
class BoxFaces(Field):
    """Constant values on the faces, in the order left, right, front, back, bottom, top; see `box_faces`."""

    lower: tuple[Exact, ...]
    upper: tuple[Exact, ...]
    values: tuple[Exact, ...]

    def __post_init__(self) -> None:
        """Make numbers exact and check the corners.

        Raises
        ------
        FieldError
            If the corners are not those of a box or there are not six values.
        """
        object.__setattr__(self, "lower", exact_point(self.lower, "lower", (3,)))
        object.__setattr__(self, "upper", exact_point(self.upper, "upper", (3,)))
        values = tuple(exact(v, f"values[{i}]") for i, v in enumerate(self.values))
        object.__setattr__(self, "values", values)
        if len(values) != len(FACES):
            raise FieldError(
                f"values must be six numbers, in the order {', '.join(FACES)}, got {len(values)}"
            )
        if not all(e > 0 for e in self.extents):
            raise FieldError(
                f"every coordinate of lower must be below that of upper, got {_point(self.lower)} and "
                f"{_point(self.upper)}"
            )

    @property
    def dim(self) -> int:
        """3."""
        return 3

    @property
    def extents(self) -> tuple[Fraction, ...]:
        """Edge lengths along x, y, z."""
        return tuple(rational(b) - rational(a) for a, b in zip(self.lower, self.upper, strict=True))

    @property
    def edges(self) -> tuple[Edge, ...]:
        """The edges whose two faces differ in value."""
        corners = ([float(c) for c in self.lower], [float(c) for c in self.upper])
        found = []
        for axis in range(3):
            first, second = ((axis + 1) % 3, (axis + 2) % 3)
            for i in (0, 1):
                for j in (0, 1):
                    if rational(self.values[2 * first + i]) == rational(self.values[2 * second + j]):
                        continue
                    start, end = [0.0] * 3, [0.0] * 3
                    start[first] = end[first] = corners[i][first]
                    start[second] = end[second] = corners[j][second]
                    start[axis], end[axis] = corners[0][axis], corners[1][axis]
                    found.append(Edge(start=tuple(start), end=tuple(end)))  # type: ignore[arg-type]  # three each
        return tuple(found)

    @property
    def basis(self) -> Basis:
        """Integrals and sums with proven bounds."""
        return "tail bound"

    @property
    def formula(self) -> str:
        """The problem in one line."""
        given = ", ".join(f"{show(v)} on {f}" for f, v in zip(FACES, self.values, strict=True) if v)
        data = f"{given}, 0 elsewhere" if given else "0 all over"
        return f"[box {_point(self.lower)} to {_point(self.upper)}: {data}]"

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        walls = self._walls(ctx, x)

        def solve(rows: Any, face: int) -> Any:
            near, other, d, h, extents, _ = self._seen_from(ctx, face, walls, rows)
            if ctx is FLOAT:
                return face_value(near, other, d, h, extents)
            return precise_value(ctx, near, other, d, extents)

        (u,) = self._summed(ctx, walls, 1, lambda rows, face: (solve(rows, face),), keep=True)
        return self._on_faces(ctx, walls, u)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002  # no cut
        walls = self._walls(ctx, x)

        def solve(rows: Any, face: int) -> tuple[Any, ...]:
            near, other, d, h, extents, signs = self._seen_from(ctx, face, walls, rows)
            if ctx is FLOAT:
                parts = face_slopes(near, other, d, h, extents)
            else:
                parts = precise_slopes(ctx, near, other, d, extents)
            axis = face // 2
            slopes: list[Any] = [None] * 3
            slopes[(axis + 1) % 3], slopes[(axis + 2) % 3] = signs[0] * parts[0], signs[1] * parts[1]
            slopes[axis] = -parts[2] if face % 2 else parts[2]
            return tuple(slopes)

        return self._summed(ctx, walls, 3, solve, keep=False)

    def _walls(self, ctx: Any, x: tuple[Any, ...]) -> list[Any]:
        """Return the distances from the six faces, exact next to them."""
        walls = []
        for c, low, high in zip(x, self.lower, self.upper, strict=True):
            for distance in (offset(ctx, c, low), -offset(ctx, c, high)):
                walls.append(ctx.where(distance > 0, distance, 0 * distance))
        return walls

    def _seen_from(self, ctx: Any, face: int, walls: list[Any], rows: Any) -> tuple[Any, ...]:
        """Return the two folded coordinates, d, h, extents, and the signs of the folded derivatives."""
        axis = face // 2
        order = ((axis + 1) % 3, (axis + 2) % 3, axis)
        convert = float if ctx is FLOAT else ctx.number
        extents = tuple(convert(self.extents[i]) for i in order)
        at = [w if rows is None else w[rows] for w in walls]
        folded, signs = [], []
        for i in order[:2]:
            low, high = at[2 * i], at[2 * i + 1]
            folded.append(ctx.where(low <= high, low, high))
            signs.append(ctx.where(low <= high, 1, -1))
        return *folded, at[face], at[face ^ 1], extents, signs

    def _summed(
        self,
        ctx: Any,
        walls: list[Any],
        count: int,
        solve: Callable[[Any, int], tuple[Any, ...]],
        *,
        keep: bool,
    ) -> tuple[Any, ...]:
        """Return the sums over faces of (value - value of the nearest face) times `solve`."""
        if ctx is not FLOAT:
            base = self.values[min(range(6), key=lambda f: walls[f])]
            sums = [ctx.number(base) if keep else ctx.mpf(0)] * count
            for face, value in enumerate(self.values):
                weight = rational(value) - rational(base)
                if weight:
                    factor, parts = ctx.number(weight), solve(None, face)
                    sums = [total + factor * part for total, part in zip(sums, parts, strict=True)]
            return tuple(sums)
        nearest = np.argmin(np.array(walls), axis=0)
        result = [np.zeros(len(walls[0])) for _ in range(count)]
        levels: Array = np.array([float(v) for v in self.values])[nearest]
        for base in dict.fromkeys(self.values):
            rows = np.flatnonzero(levels == float(base))
            for face, value in enumerate(self.values):
                share = float(rational(value) - rational(base))
                if share and len(rows):
                    for total, part in zip(result, solve(rows, face), strict=True):
                        total[rows] += share * part
        return tuple(total + levels if keep else total for total in result)

    def _on_faces(self, ctx: Any, walls: list[Any], u: Any) -> Any:
        """Return u with the faces' own values on them, NaN on an edge where two differ."""
        nan = math.nan if ctx is FLOAT else ctx.nan
        lowest = [min(self.values), max(self.values)]
        low, high = ctx.number(lowest[1]) + 0 * walls[0], ctx.number(lowest[0]) + 0 * walls[0]
        for wall, value in zip(walls, self.values, strict=True):
            level = ctx.number(value)
            low = ctx.where((wall == 0) & (low > level), level, low)
            high = ctx.where((wall == 0) & (high < level), level, high)
        touching = walls[0] == 0
        for wall in walls[1:]:
            touching = touching | (wall == 0)
        return ctx.where(touching, ctx.where(low == high, low, nan), u)

    def _jumps_at(self, place: tuple[Exact, ...]) -> bool:
        """Return whether faces of different values meet at a point."""
        ends = (end for pair in zip(self.lower, self.upper, strict=True) for end in pair)
        met = {
            rational(value)
            for face, (end, value) in enumerate(zip(ends, self.values, strict=True))
            if rational(place[face // 2]) == rational(end)
        }
        return len(met) > 1

    def _valid(self, points: Array) -> BoolArray:
        """Return which points lie in the closed box, to rounding."""
        return inside_box(self.lower, self.upper, points)


def box_faces(
    lower: Iterable[Number],
    upper: Iterable[Number],
    values: Mapping[str, Number] | None = None,
    **faces: Number,
) -> BoxFaces:
    """Return the harmonic u in a box whose faces are held at constant values, 0 where none is given.

    Parameters
    ----------
    lower, upper : triples of numbers
        Opposite corners; decimals in strings are exact. Any aspect ratio will do.
    values : mapping, optional
        Face name -> value: left, right (x), front, back (y), bottom, top (z); also as keywords.

    Returns
    -------
    Field
        u on the closed box, equal to the values on the faces. Where two faces of different value meet, the
        edge is declared in `edges`: u has no value on it.

    Examples
    --------
    >>> u = box_faces((0, 0, 0), (1, 1, 1), top=1)
    >>> bool(abs(u.value([[0.5, 0.5, 0.5]])[0] - 1/6) < 1e-15)  # six rotations add up to 1
    True
    >>> len(u.edges), u.value([[0.5, 0.5, 1.0], [0.0, 0.0, 0.0]]).tolist()
    (4, [1.0, 0.0])

    Raises
    ------
    FieldError
        If the corners are not those of a box, a face is unknown or a value is no finite number.
    """
    given = {**(values or {}), **faces}
    for name in given:
        if name not in FACES:
            raise FieldError(f"no face is called {name!r}; {nearest_names(str(name)[:40], FACES)}")
    corners: dict[str, Any] = {"lower": tuple(lower), "upper": tuple(upper)}  # made exact there
    data: Any = tuple(given.get(face, 0) for face in FACES)
    return BoxFaces(values=data, **corners)


def inside_box(lower: tuple[Exact, ...], upper: tuple[Exact, ...], points: Array) -> BoolArray:
    """Return which points lie in the closed box, to rounding."""
    low, high = np.array([float(c) for c in lower]), np.array([float(c) for c in upper])
    slack = OUTSIDE * float((high - low).max())
    return between(points, low - slack, high + slack)


def _point(point: tuple[Exact, ...]) -> str:
    """Return (0, 1, 2)."""
    return "(" + ", ".join(show(c) for c in point) + ")"
