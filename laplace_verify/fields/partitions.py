"""Partitions of space into regions: layers, shells about a centre, sectors about an apex.

Each has one coordinate s(x) and rising thresholds t_1 < t_2 < ...; region k holds the points with
t_k <= s < t_{k+1}. So the regions tile all of space, whatever the shape that is laid over them:

    layers     s = direction . x                           thresholds: positions
    shells     s = |x - centre|                            thresholds: radii
    sectors    s = angle of x - apex from the first ray    thresholds: angles of the other rays

Numbers are exact (`fields.exact`): a position "1/3" parts precise points at one third.
"""

from __future__ import annotations

import math
from abc import ABC, abstractmethod
from dataclasses import dataclass, replace
from fractions import Fraction
from itertools import pairwise
from typing import Any, ClassVar

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, BoolArray, IntArray, as_points
from laplace_verify.contexts import FLOAT
from laplace_verify.errors import FieldError, nearest_names
from laplace_verify.fields._precision import working
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, rational
from laplace_verify.fields.walls import Plane, Ray, Round, Wall

__all__ = ["Layers", "Partition", "Sectors", "Shells", "partition_from_spec"]

DIGITS = 60  # when a precise point is compared with a wall


@dataclass(frozen=True, slots=True, kw_only=True)
class Partition(ABC):
    """Named regions that tile space (abstract).

    Attributes
    ----------
    names
        Names of the regions, in the order of the coordinate.
    """

    names: tuple[str, ...]

    kind: ClassVar[str]

    @property
    @abstractmethod
    def dim(self) -> int:
        """Number of space dimensions."""

    @property
    @abstractmethod
    def walls(self) -> tuple[Wall, ...]:
        """The interfaces."""

    @property
    def meeting(self) -> tuple[float, ...] | None:
        """The point where more than two regions may meet, if there is one."""
        return None

    @abstractmethod
    def coordinate(self, ctx: Any, x: tuple[Any, ...]) -> Any:
        """Return s(x) at coordinates: arrays (n,) if ctx is FLOAT, else one number."""

    @abstractmethod
    def thresholds(self, ctx: Any) -> list[Any]:
        """Return t_1, t_2, ... as numbers of the context."""

    @abstractmethod
    def scaled(self, length: Exact) -> Partition:
        """Return the partition enlarged by `length` about the origin."""

    def index(self, ctx: Any, x: tuple[Any, ...]) -> Any:
        """Return the number of the region at coordinates: an array (n,), or one int."""
        s = self.coordinate(ctx, x)
        return sum((s >= t for t in self.thresholds(ctx)), 0 * (s >= s))

    def locate(self, points: npt.ArrayLike) -> IntArray:
        """Return the number of the region of each of points (n, d); on an interface one of the two."""
        array = as_points(points, self.dim, error=FieldError)
        return np.asarray(self.index(FLOAT, tuple(array.T)), dtype=np.int64)

    def number(self, name: str) -> int:
        """Return the number of a region.

        Raises
        ------
        FieldError
            If no region bears the name.
        """
        if name not in self.names:
            raise FieldError(f"no region is named {name!r}; {nearest_names(str(name), self.names)}")
        return self.names.index(name)

    def contains(self, points: npt.ArrayLike, number: int, tol: float = 0.0) -> BoolArray:
        """Return which points (n, d) lie in a closed region, or within `tol` (a length) of it."""
        array = as_points(points, self.dim, error=FieldError)
        inside: BoolArray = self.locate(array) == number
        for wall in self.walls:
            if number in (wall.first, wall.second):
                inside |= wall.meets(array) | (wall.distance(array) <= tol)
        return inside

    def distance(self, points: Array) -> Array:
        """Return the distance (n,) of points (n, d) from the nearest interface."""
        nearest: Array = np.min([wall.distance(points) for wall in self.walls], axis=0)
        return nearest

    def on_interface(self, points: Array, place: tuple[Any, ...] | None = None) -> BoolArray:
        """Return which points (n, d) lie on an interface; one precise `place` is compared to 50 digits."""
        if place is not None:
            ctx = working(DIGITS)
            x = tuple(ctx.number(c) for c in place)
            return np.array([any(wall.meets_exactly(ctx, x) for wall in self.walls)])
        on: BoolArray = np.any([wall.meets(points) for wall in self.walls], axis=0)
        return on

    def spec(self) -> dict[str, Any]:
        """Return the partition as plain data that `partition_from_spec` turns back exactly."""
        numbers = {name: _plain(getattr(self, name)) for name in self.__slots__ if name != "names"}
        return {"partition": self.kind, **numbers, "names": list(self.names)}

    def _check_names(self, count: int) -> None:
        names = tuple(self.names) or tuple(f"{self.kind.rstrip('s')}-{k + 1}" for k in range(count))
        object.__setattr__(self, "names", names)
        if not all(isinstance(name, str) and name for name in names) or len(set(names)) != len(names):
            raise FieldError(f"names of regions must be different words, got {names!r}")
        if len(names) != count:
            raise FieldError(f"{count} regions need {count} names, got {len(names)}: {names!r}")


@dataclass(frozen=True, slots=True, kw_only=True)
class Layers(Partition):
    """Layers between the parallel planes direction . x = position.

    >>> Layers(direction=(0, 1), positions=("1/3", 2), names=("sand", "clay", "rock")).locate([(5, 1)])
    array([1])
    """

    direction: tuple[Exact, ...]
    positions: tuple[Exact, ...]

    kind: ClassVar[str] = "layers"

    def __post_init__(self) -> None:
        """Check direction, positions and names."""
        object.__setattr__(self, "direction", exact_point(self.direction, "direction"))
        object.__setattr__(self, "positions", _rising(self.positions, "positions"))
        if not any(self.direction):
            raise FieldError("direction must not be the zero vector")
        self._check_names(len(self.positions) + 1)

    @property
    def dim(self) -> int:
        """As many as the direction has components."""
        return len(self.direction)

    @property
    def walls(self) -> tuple[Wall, ...]:
        """The planes."""
        return tuple(
            Plane(first=k, second=k + 1, direction=self.direction, position=p)
            for k, p in enumerate(self.positions)
        )

    def coordinate(self, ctx: Any, x: tuple[Any, ...]) -> Any:
        """Return direction . x."""
        return sum((ctx.number(a) * c for a, c in zip(self.direction, x, strict=True) if a), 0 * x[0])

    def thresholds(self, ctx: Any) -> list[Any]:
        """Return the positions."""
        return [ctx.number(p) for p in self.positions]

    def scaled(self, length: Exact) -> Layers:
        """Return the layers with positions times `length`."""
        return replace(self, positions=tuple(_times(p, length) for p in self.positions))


@dataclass(frozen=True, slots=True, kw_only=True)
class Shells(Partition):
    """A disc or ball and the shells around it: regions between the radii, from the inside outwards.

    >>> Shells(centre=(0, 0), radii=(1,), names=("pipe", "soil")).locate([(0.5, 0), (0, 3)])
    array([0, 1])
    """

    centre: tuple[Exact, ...]
    radii: tuple[Exact, ...]

    kind: ClassVar[str] = "shells"

    def __post_init__(self) -> None:
        """Check centre, radii and names."""
        object.__setattr__(self, "centre", exact_point(self.centre, "centre", (2, 3)))
        object.__setattr__(self, "radii", _rising(self.radii, "radii"))
        if not self.radii[0] > 0:
            raise FieldError(f"radii must be positive, got {self.radii[0]}")
        self._check_names(len(self.radii) + 1)

    @property
    def dim(self) -> int:
        """As many as the centre has coordinates."""
        return len(self.centre)

    @property
    def walls(self) -> tuple[Wall, ...]:
        """The circles or spheres."""
        return tuple(
            Round(first=k, second=k + 1, centre=self.centre, radius=r) for k, r in enumerate(self.radii)
        )

    def coordinate(self, ctx: Any, x: tuple[Any, ...]) -> Any:
        """Return |x - centre|."""
        return ctx.sqrt(sum(offset(ctx, c, p) ** 2 for c, p in zip(x, self.centre, strict=True)))

    def thresholds(self, ctx: Any) -> list[Any]:
        """Return the radii."""
        return [ctx.number(r) for r in self.radii]

    def scaled(self, length: Exact) -> Shells:
        """Return the shells with centre and radii times `length`."""
        return replace(
            self,
            centre=tuple(_times(c, length) for c in self.centre),
            radii=tuple(_times(r, length) for r in self.radii),
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class Sectors(Partition):
    """Sectors of the plane between rays from an apex: region k from ray k counter-clockwise to the next.

    >>> Sectors(apex=(0, 0), rays=((1, 0), (0, 1), (-1, 0), (0, -1)), names=()).locate([(-2, -1)])
    array([2])
    """

    apex: tuple[Exact, ...]
    rays: tuple[tuple[Exact, ...], ...]

    kind: ClassVar[str] = "sectors"

    def __post_init__(self) -> None:
        """Check apex, rays and names."""
        object.__setattr__(self, "apex", exact_point(self.apex, "apex", (2,)))
        rays = tuple(exact_point(ray, f"rays[{k}]", (2,)) for k, ray in enumerate(self.rays))
        object.__setattr__(self, "rays", rays)
        if len(rays) < 2 or not all(any(ray) for ray in rays):
            raise FieldError(f"sectors need two or more rays, none of them zero, got {rays!r}")
        angles = [0.0, *self.thresholds(FLOAT), 2 * math.pi]
        if not all(b > a + 1e-9 for a, b in pairwise(angles)):
            raise FieldError(f"rays must run counter-clockwise, at different angles, once, got {rays!r}")
        self._check_names(len(rays))

    @property
    def dim(self) -> int:
        """Two."""
        return 2

    @property
    def meeting(self) -> tuple[float, ...]:
        """The apex."""
        return tuple(float(c) for c in self.apex)

    @property
    def walls(self) -> tuple[Wall, ...]:
        """The rays."""
        count = len(self.rays)
        return tuple(
            Ray(first=(k - 1) % count, second=k, apex=self.apex, direction=ray)
            for k, ray in enumerate(self.rays)
        )

    def coordinate(self, ctx: Any, x: tuple[Any, ...]) -> Any:
        """Return the angle from the first ray, in [0, 2 pi)."""
        dx, dy = (offset(ctx, c, p) for c, p in zip(x, self.apex, strict=True))
        return self._angle(ctx, dx, dy)

    def thresholds(self, ctx: Any) -> list[Any]:
        """Return the angles of the other rays from the first."""
        return [self._angle(ctx, *(ctx.number(c) for c in ray)) for ray in self.rays[1:]]

    def _angle(self, ctx: Any, dx: Any, dy: Any) -> Any:
        ex, ey = (ctx.number(c) for c in self.rays[0])
        angle = ctx.atan2(ex * dy - ey * dx, ex * dx + ey * dy)
        return angle + ctx.where(angle < 0, 2 * ctx.pi, 0 * angle)

    def scaled(self, length: Exact) -> Sectors:
        """Return the sectors with the apex times `length`."""
        return replace(self, apex=tuple(_times(c, length) for c in self.apex))


KINDS: dict[str, type[Partition]] = {kind.kind: kind for kind in (Layers, Shells, Sectors)}


def partition_from_spec(spec: dict[str, Any]) -> Partition:
    """Return the partition that `Partition.spec` described.

    Raises
    ------
    FieldError
        If the kind is unknown, or a parameter is missing, unknown or out of range.
    """
    given = {name: _tuples(value) for name, value in spec.items() if name != "partition"}
    kind = spec.get("partition")
    if not isinstance(kind, str) or kind not in KINDS:
        raise FieldError(f"unknown kind of partition {str(kind)[:60]!r}; {nearest_names(str(kind), KINDS)}")
    try:
        return KINDS[kind](**given)
    except TypeError as cause:
        raise FieldError(f"{kind} cannot be made of {sorted(given)}: {cause}") from cause


def _rising(numbers: Any, name: str) -> tuple[Exact, ...]:
    """Return exact numbers that rise strictly."""
    if isinstance(numbers, str) or not hasattr(numbers, "__iter__"):
        raise FieldError(f"{name} must be a list of numbers, got {numbers!r}")
    found = tuple(exact(value, f"{name}[{k}]") for k, value in enumerate(numbers))
    if not found:
        raise FieldError(f"{name} must hold at least one number")
    if not all(rational(b) > rational(a) for a, b in pairwise(found)):
        raise FieldError(f"{name} must rise, got {[float(x) for x in found]}")
    return found


def _times(number: Exact, length: Exact) -> Exact:
    """Return the product, as a float if one of them is."""
    if isinstance(number, float) or isinstance(length, float):
        return float(number) * float(length)
    return exact(rational(number) * rational(length), "length")


def _plain(value: Any) -> Any:
    """Return exact numbers as JSON can hold them."""
    if isinstance(value, tuple):
        return [_plain(item) for item in value]
    return f"{value.numerator}/{value.denominator}" if isinstance(value, Fraction) else value


def _tuples(value: Any) -> Any:
    """Return lists as tuples."""
    return tuple(_tuples(item) for item in value) if isinstance(value, list | tuple) else value
