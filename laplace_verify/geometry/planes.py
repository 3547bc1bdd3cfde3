"""Half-spaces and strips: regions bounded by infinite lines and planes.

What is infinite cannot be sampled or integrated over. Norms and checks are taken over a window: a bounded
shape whose boundary follows that of the region (a `Box` on a half-space). `within` cuts a plane to a window.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from typing import Any, ClassVar, NoReturn

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.base import Shape
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.checks import number
from laplace_verify.geometry.patches import Chart
from laplace_verify.geometry.segments import Face, Segment
from laplace_verify.geometry.splitting import check_fractions, check_names

__all__ = ["HalfSpace", "Plane", "Strip", "Unbounded", "within"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Plane(Boundary):
    """The line (2-D) or plane (3-D) on which the last coordinate is `height`; `outward` is -1 or +1."""

    space: int
    height: float
    outward: float
    length: float = 1.0  # what tolerances are relative to

    @property
    def dim(self) -> int:
        """Dimension of the space around the piece."""
        return self.space

    @property
    def curved(self) -> bool:
        """Whether the piece is not flat."""
        return False

    @property
    def measure(self) -> float:
        """Infinite."""
        return math.inf

    @property
    def size(self) -> float:
        """The length that tolerances are relative to."""
        return self.length

    @property
    def ends(self) -> Array:
        """No end points."""
        return np.zeros((0, self.space))

    def _project(self, points: Array) -> Array:
        return np.column_stack([points[:, :-1], np.full(len(points), self.height)])

    def _normals(self, points: Array) -> Array:
        normals = np.zeros_like(points)
        normals[:, -1] = self.outward
        return normals

    def _infinite(self) -> NoReturn:
        raise GeometryError(
            f"piece {self.name!r} is unbounded; take the part of it in a window: within(piece, Box(...)) or "
            "within(piece, Rectangle(...))"
        )

    def point(self, t: npt.ArrayLike) -> Array:  # noqa: ARG002
        """Refuse: there are no fractions of an infinite length or area."""
        self._infinite()

    def outline(self, n: int) -> Array:
        """Return n points (n, d) of the piece within two lengths of the origin, for drawing."""
        side = np.linspace(-2.0, 2.0, n if self.space == 2 else max(2, math.ceil(math.sqrt(n)))) * self.length
        grid = [axis.ravel() for axis in np.meshgrid(*[side] * (self.space - 1), indexing="ij")]
        return np.column_stack([*grid, np.full(len(grid[0]), self.height)])

    def sample(self, n: int) -> tuple[Array, Array, Array]:  # noqa: ARG002
        """Refuse: an infinite piece has no equal parts."""
        self._infinite()

    def quadrature(
        self,
        order: int,  # noqa: ARG002
        singular: npt.ArrayLike = (),  # noqa: ARG002
        cell: float | None = None,  # noqa: ARG002
    ) -> tuple[Array, Array, Array]:
        """Refuse: an infinite piece has no quadrature rule."""
        self._infinite()


@dataclass(frozen=True, slots=True, repr=False)
class Unbounded(Shape):
    """What exteriors, half-spaces and strips share (abstract)."""

    bounded: ClassVar[bool] = False

    @property
    def measure(self) -> float:
        """Infinite."""
        return math.inf

    def _infinite(self) -> NoReturn:
        raise GeometryError(
            f"{self!r} is unbounded: it cannot be sampled or integrated over; use a window, a "
            "bounded shape such as an Annulus around a disc or a Box on a half-space, as a case does"
        )

    def _draw(self, generator: np.random.Generator, n: int) -> Array:  # noqa: ARG002
        self._infinite()

    def _chart(self) -> Chart:
        self._infinite()

    def _check(self) -> None:
        whole = {piece.name: piece for loop in self._loops() for piece in loop}
        object.__setattr__(self, "splits", check_fractions(dict(self.splits), whole))
        object.__setattr__(self, "names", check_names(dict(self.names), whole))


@dataclass(frozen=True, slots=True, repr=False)
class HalfSpace(Unbounded):
    """The half-plane y > 0 (dim 2) or half-space z > 0 (dim 3); piece bottom.

    >>> HalfSpace(3).pieces["bottom"].normals([(4.0, 5.0, 0.0)]).tolist()
    [[0.0, 0.0, -1.0]]
    """

    dim: int = field()  # type: ignore[misc]  # an argument here

    kind: ClassVar[str] = "half-space"

    def __post_init__(self) -> None:
        """Refuse a dimension other than 2 or 3."""
        object.__setattr__(self, "dim", _dimension(self.dim))
        self._check()

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Infinite but for the lowest last coordinate, 0."""
        lower = np.full(self.dim, -math.inf)
        lower[-1] = 0.0
        return lower, np.full(self.dim, math.inf)

    @property
    def extent(self) -> float:
        """1: a half-space has no length of its own."""
        return 1.0

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        return ((Plane(name="bottom", space=self.dim, height=0.0, outward=-1.0),),)

    def _inside(self, points: Array) -> BoolArray:
        inside: BoolArray = points[:, -1] >= 0.0
        return inside


@dataclass(frozen=True, slots=True, repr=False)
class Strip(Unbounded):
    """The strip z0 < y < z1 (dim 2) or the layer z0 < z < z1 (dim 3); pieces bottom, top.

    >>> Strip(2, -1.0, 0.5).extent
    1.5
    """

    dim: int = field()  # type: ignore[misc]  # an argument here
    z0: float
    z1: float

    kind: ClassVar[str] = "strip"

    def __post_init__(self) -> None:
        """Refuse z0 >= z1."""
        object.__setattr__(self, "dim", _dimension(self.dim))
        object.__setattr__(self, "z0", number(self.z0, "z0"))
        object.__setattr__(self, "z1", number(self.z1, "z1"))
        if not self.z0 < self.z1:
            raise GeometryError(f"z0 must be below z1, got {self.z0!r} and {self.z1!r}")
        self._check()

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Infinite but for the last coordinate."""
        lower, upper = np.full(self.dim, -math.inf), np.full(self.dim, math.inf)
        lower[-1], upper[-1] = self.z0, self.z1
        return lower, upper

    @property
    def extent(self) -> float:
        """The width."""
        return self.z1 - self.z0

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        sides = (("bottom", self.z0, -1.0), ("top", self.z1, 1.0))
        return tuple(
            (Plane(name=name, space=self.dim, height=z, outward=n, length=self.extent),)
            for name, z, n in sides
        )

    def _inside(self, points: Array) -> BoolArray:
        inside: BoolArray = (points[:, -1] >= self.z0) & (points[:, -1] <= self.z1)
        return inside


def within(piece: Boundary, window: Shape) -> Boundary:
    """Return a piece itself if it is bounded, else the part of it that a window's box holds.

    Raises
    ------
    GeometryError
        If the window's box does not touch the plane.

    Examples
    --------
    >>> from laplace_verify.geometry import Rectangle
    >>> within(HalfSpace(2).pieces["bottom"], Rectangle((-1, 0), (3, 2))).measure
    4.0
    """
    if not isinstance(piece, Plane):
        return piece
    lower, upper = window.bounding_box
    room = 1e-9 * window.extent
    if not lower[-1] - room <= piece.height <= upper[-1] + room:
        raise GeometryError(
            f"the window {window!r} does not reach piece {piece.name!r} at {piece.height:g}; let it end there"
        )
    low, high = (*lower[:-1].tolist(), piece.height), (*upper[:-1].tolist(), piece.height)
    if piece.space == 3:
        return Face(name=piece.name, lower=low, upper=high, axis=2, outward=piece.outward)
    start, stop = (low, high) if piece.outward < 0.0 else (high, low)
    return Segment(name=piece.name, start=start, stop=stop)


def _dimension(value: Any) -> int:
    """Return 2 or 3."""
    if isinstance(value, bool) or value not in (2, 3):
        raise GeometryError(f"dim must be 2 or 3, got {value!r}")
    return int(value)
