"""What every shape offers, and every piece of its boundary.

A shape is a closed region of R^d bounded by named pieces. Its outline is one or several loops of pieces,
travelled with the region on the left: counter-clockwise outside, clockwise around holes. Where two pieces
meet at the interior angle ``opening``, solutions of Laplace's equation behave like ``r**(pi/opening)``
(Grisvard 1985, Elliptic Problems in Nonsmooth Domains, section 4.4), so junctions are part of the geometry.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from collections.abc import Sequence
from dataclasses import dataclass, field, fields, replace
from functools import cached_property
from typing import ClassVar, Self, SupportsIndex, overload

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, BoolArray, as_points, frozen
from laplace_verify.errors import GeometryError, nearest_names
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.checks import LARGEST, ROUNDING, not_negative, places, proportions, whole
from laplace_verify.geometry.patches import Chart, integrate
from laplace_verify.geometry.splitting import check_fractions, check_names, junction_openings, split_piece

__all__ = ["Boundaries", "Boundary", "Junction", "Shape", "Vertex"]


class Boundaries(tuple[Boundary, ...]):
    """The pieces of a shape's boundary, by position or by name.

    >>> from laplace_verify.geometry import Rectangle
    >>> pieces = Rectangle((0, 0), (2, 1)).pieces
    >>> pieces["top"].measure, pieces[0].name, "top" in pieces.names
    (2.0, 'left', True)
    """

    __slots__ = ()

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the pieces, in order."""
        return tuple(piece.name for piece in self)

    @overload
    def __getitem__(self, key: str | SupportsIndex) -> Boundary: ...
    @overload
    def __getitem__(self, key: slice) -> tuple[Boundary, ...]: ...
    def __getitem__(self, key: str | SupportsIndex | slice) -> Boundary | tuple[Boundary, ...]:
        """Return the piece at a position or of a name; GeometryError lists the nearest names."""
        if not isinstance(key, str):
            return super().__getitem__(key)
        for piece in self:
            if piece.name == key:
                return piece
        raise GeometryError(f"no piece is named {key!r}; {nearest_names(key, self.names)}")


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Junction:
    """Where two pieces meet.

    Attributes
    ----------
    points
        Shape (m, d): the corner in 2-D (m = 1), points along the edge in 3-D.
    opening
        Interior angle in radians, in (0, 2 pi]; pi where a smooth curve is split, 2 pi at the tip of a slit.
    pieces
        Names of the two pieces.
    """

    points: Array
    opening: float
    pieces: tuple[str, str]

    def __post_init__(self) -> None:
        """Freeze the points."""
        object.__setattr__(self, "points", frozen(self.points))


@dataclass(frozen=True, slots=True, kw_only=True)
class Vertex:
    """A vertex of a solid whose own exponent is smaller than those of the edges that meet there.

    Attributes
    ----------
    point
        Where it is.
    pieces
        Names of the faces that meet there.
    exponent
        Of r in solutions with Dirichlet conditions on all of them.
    """

    point: tuple[float, float, float]
    pieces: tuple[str, ...]
    exponent: float


@dataclass(frozen=True, repr=False)
class Shape(ABC):
    """A closed bounded region with named boundary pieces (abstract).

    `splits` holds the fractions given to `split`, by name of the whole piece, and `names` what `renamed` was
    given; they are no arguments to pass by hand.
    """

    splits: tuple[tuple[str, Sequence[float]], ...] = field(default=(), kw_only=True)
    names: tuple[tuple[str, str], ...] = field(default=(), kw_only=True)

    kind: ClassVar[str]
    dim: ClassVar[int]
    bounded: ClassVar[bool] = True
    kinds: ClassVar[frozenset[str]] = frozenset()  # more general kinds this one belongs to

    @property
    @abstractmethod
    def measure(self) -> float:
        """Length, area or volume."""

    @property
    @abstractmethod
    def bounding_box(self) -> tuple[Array, Array]:
        """Lower and upper corner of the smallest box around the shape, each of shape (d,)."""

    @abstractmethod
    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        """Whole pieces: in 2-D by closed loop, in order of travel."""

    @abstractmethod
    def _inside(self, points: Array) -> BoolArray:
        """Return which points lie in the region, up to round-off at its boundary."""

    @abstractmethod
    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        """Return about n candidates, uniform over a region that contains the shape."""

    @abstractmethod
    def _chart(self) -> Chart:
        """Exactly mapped patches that cover the shape once."""

    def _order(self, names: tuple[str, ...]) -> tuple[str, ...]:
        """Order in which the whole pieces are listed."""
        return names

    @property
    def sharp_vertices(self) -> tuple[Vertex, ...]:
        """Vertices of a 3-D shape whose exponents are smaller than those of their edges."""
        return ()

    def _solid_junctions(self) -> tuple[Junction, ...]:
        """Edges of a 3-D shape."""
        return ()

    def _check(self) -> None:
        """Refuse degenerate proportions and impossible splits; the last line of every __post_init__."""
        lower, upper = self.bounding_box
        proportions(lower.tolist(), upper.tolist(), self.kind)
        whole = {piece.name: piece for loop in self._loops() for piece in loop}
        object.__setattr__(self, "splits", check_fractions(dict(self.splits), whole))
        object.__setattr__(self, "names", check_names(dict(self.names), whole))

    @cached_property
    def extent(self) -> float:
        """Largest extent of the bounding box."""
        lower, upper = self.bounding_box
        return float((upper - lower).max())

    @property
    def size(self) -> float:
        """Largest extent of the bounding box; of an L-shape its argument, half of that."""
        return self.extent

    def is_a(self, kind: str) -> bool:
        """Whether the shape is of this kind or a special case of it.

        >>> from laplace_verify.geometry import LShape
        >>> LShape(1.0).is_a("polygon"), LShape(1.0).is_a("disc")
        (True, False)
        """
        return kind == self.kind or kind in self.kinds

    @cached_property
    def pieces(self) -> Boundaries:
        """The pieces of the boundary."""
        whole = {piece.name: piece for loop in self._loops() for piece in loop}
        cuts = dict(self.splits)
        return Boundaries(
            replace(part, name=self._new_name(part.name))
            for name in self._order(tuple(whole))
            for part in split_piece(whole[name], cuts.get(name, ()))[0]
        )

    def _new_name(self, name: str) -> str:
        """Return the name of a piece, or of a part of one that was split, after `renamed`."""
        for old, new in self.names:
            if name == old or (old in dict(self.splits) and name.startswith(f"{old}-")):
                return new + name[len(old) :]
        return name

    @cached_property
    def junctions(self) -> tuple[Junction, ...]:
        """Where pieces meet: corners in 2-D, edges in 3-D; none in 1-D."""
        if self.dim != 2:
            return self._solid_junctions()
        cuts = dict(self.splits)
        found = []
        for loop in self._loops():
            travelled = [part for piece in loop for part in split_piece(piece, cuts.get(piece.name, ()))[1]]
            for first, second, point, opening in junction_openings(travelled):
                pair = (self._new_name(first), self._new_name(second))
                found.append(Junction(points=point, opening=opening, pieces=pair))
        return tuple(found)

    def contains(self, points: npt.ArrayLike, tol: float = 0.0) -> BoolArray:
        """Return which points (n, d) lie in the closed shape, enlarged by `tol` times its extent.

        Points within round-off (1e-12 of the extent) of the boundary count as inside.

        >>> from laplace_verify.geometry import Disc
        >>> Disc((0, 0), 1.0).contains([(1.0, 0.0), (1.1, 0.0)]).tolist()
        [True, False]
        """
        tol = not_negative(tol, "tol")
        # nothing reaches that far, and squares of what does would overflow
        array = np.clip(as_points(points, self.dim, error=GeometryError), -LARGEST, LARGEST)
        inside = self._inside(array)
        outside = np.flatnonzero(~inside)
        if len(outside):
            inside[outside] = self._distance(array[outside]) <= max(tol, ROUNDING) * self.extent
        return inside

    def distance(self, points: npt.ArrayLike) -> Array:
        """Return the distance (n,) of points (n, d) to the boundary, >= 0 on either side."""
        return self._distance(places(points, self.dim))

    def _distance(self, points: Array) -> Array:
        nearest = np.full(len(points), np.inf)
        for piece in self.pieces:
            offset = points - piece.project(points)
            nearest = np.minimum(nearest, np.sqrt((offset**2).sum(axis=1)))
        return nearest

    def outline(self, n: int) -> dict[str, Array]:
        """Return about n points along each piece, ends included, for drawing: {name: (n, d)}."""
        count = whole(n, "n", 2)
        return {piece.name: piece.outline(count) for piece in self.pieces}

    def sample(self, n: int, seed: int) -> Array:
        """Return n points (n, d), uniformly distributed and strictly inside; same seed, same points.

        >>> from laplace_verify.geometry import Disc
        >>> points = Disc((0, 0), 1.0).sample(5, seed=3)
        >>> points.shape, bool((points == Disc((0, 0), 1.0).sample(5, seed=3)).all())
        ((5, 2), True)
        """
        missing = whole(n, "n", 0)
        generator = np.random.default_rng(whole(seed, "seed", 0))
        found: list[Array] = []
        while missing > 0:
            points = self._draw(generator, missing + missing // 2 + 8)
            points = points[self._inside(points)]
            points = points[self._distance(points) > ROUNDING * self.extent][:missing]
            found.append(points)
            missing -= len(points)
        return np.concatenate(found) if found else np.zeros((0, self.dim))

    def quadrature(
        self, order: int, singular: npt.ArrayLike = (), cell: float | None = None
    ) -> tuple[Array, Array]:
        """Return points (n, d) and weights (n,) that integrate polynomials of degree `order` over the shape.

        Parameters
        ----------
        order
            Polynomial degree, 0 to 100.
        singular
            Points (m, d) where the integrand is singular; patches shrink geometrically towards them.
        cell
            Largest side of a patch, a length.

        Raises
        ------
        GeometryError
            If an argument makes no sense.

        Examples
        --------
        >>> from laplace_verify.geometry import Disc
        >>> points, weights = Disc((0, 0), 2.0).quadrature(4)
        >>> print(round(float(weights @ points[:, 0] ** 2) / 3.141592653589793, 12))  # pi R^4 / 4
        4.0
        """
        return integrate(self._chart(), order, singular, cell)

    def boundary_quadrature(
        self, order: int, singular: npt.ArrayLike = (), cell: float | None = None
    ) -> dict[str, tuple[Array, Array, Array]]:
        """Return {name: (points, outward unit normals, weights)} for every piece; see `quadrature`."""
        return {piece.name: piece.quadrature(order, singular, cell) for piece in self.pieces}

    def split(self, **fractions: Sequence[float]) -> Self:
        """Return the same shape with pieces cut at fractions of their length: top=[0.4] gives top-1, top-2.

        Fractions rise in x, else in y, along straight sides, and counter-clockwise along curves.

        Raises
        ------
        GeometryError
            If a name is unknown, a piece is no curve, or fractions do not rise strictly inside (0, 1).

        Examples
        --------
        >>> from laplace_verify.geometry import Rectangle
        >>> Rectangle((0, 0), (1, 1)).split(top=[0.4]).pieces.names
        ('left', 'right', 'bottom', 'top-1', 'top-2')
        """
        merged = dict(self.splits)
        for name, values in fractions.items():
            if name in merged:
                raise GeometryError(
                    f"{name!r} is already split at {list(merged[name])}; give all in one call"
                )
            merged[name] = values
        return replace(self, splits=tuple(merged.items()))

    def renamed(self, **names: str) -> Self:
        """Return the same shape with pieces called otherwise; parts of a split piece keep their numbers.

        Raises
        ------
        GeometryError
            If a piece is unknown, or two pieces would bear one name.

        Examples
        --------
        >>> from laplace_verify.geometry import Rectangle
        >>> Rectangle((0, 0), (1, 1)).renamed(left="axis").pieces.names
        ('axis', 'right', 'bottom', 'top')
        """
        return replace(self, names=tuple({**dict(self.names), **names}.items()))

    def __repr__(self) -> str:
        """Show the call that makes the shape."""
        extra = ("splits", "names")
        given = ", ".join(repr(getattr(self, f.name)) for f in fields(self) if f.name not in extra)
        text = f"{type(self).__name__}({given})"
        if self.splits:
            text += f".split(**{ {name: list(values) for name, values in self.splits}!r})"
        if self.names:
            text += f".renamed(**{dict(self.names)!r})"
        return text
