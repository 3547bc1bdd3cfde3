"""Interfaces between regions: planes, circles and spheres, rays.

A wall parts two neighbouring regions of a partition, `first` and `second`; its unit normal points from the
first into the second. Its level function vanishes on it and changes sign across it:

    plane    direction . x - position                 normal direction/|direction|
    round    |x - centre| - radius                    normal (x - centre)/|x - centre|
    ray      direction x (x - apex), on one side of the apex only    normal: the left of the direction
"""

from __future__ import annotations

import math
from abc import ABC, abstractmethod
from dataclasses import dataclass
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.fields.exact import Exact, offset

__all__ = ["Plane", "Ray", "Round", "Wall"]

ROUNDING = 16 * np.finfo(np.float64).eps  # of a point that was computed to lie on a wall
EXACTLY = 50  # digits to which a precise point is compared with a wall


@dataclass(frozen=True, slots=True, kw_only=True)
class Wall(ABC):
    """An interface (abstract); `first` and `second` are the numbers of the regions it parts."""

    first: int
    second: int

    @abstractmethod
    def level(self, ctx: Any, x: tuple[Any, ...]) -> Any:
        """Return a function of coordinates that vanishes on the wall and changes sign across it."""

    @abstractmethod
    def project(self, points: Array) -> Array:
        """Return the nearest points (n, d) of the wall."""

    @abstractmethod
    def normals(self, points: Array) -> Array:
        """Return unit normals (n, d) at points on the wall, from the first into the second region."""

    @property
    @abstractmethod
    def straight(self) -> bool:
        """Whether the wall is flat."""

    @property
    @abstractmethod
    def size(self) -> float:
        """A bound for the coordinates of the points that define the wall, to judge rounding by."""

    def reaches(self, ctx: Any, x: tuple[Any, ...]) -> Any:  # noqa: ARG002 - most walls have no end
        """Return whether the wall is there, given that the level vanishes."""
        return True

    def distance(self, points: Array) -> Array:
        """Return the distance (n,) of points (n, d) from the wall."""
        away: Array = np.sqrt(((points - self.project(points)) ** 2).sum(axis=1))
        return away

    def meets(self, points: Array) -> BoolArray:
        """Return which points lie on the wall, to rounding."""
        rounding = ROUNDING * (np.abs(points).sum(axis=1) + self.size)
        on: BoolArray = self.distance(points) <= rounding
        return on

    def meets_exactly(self, ctx: Any, x: tuple[Any, ...]) -> bool:
        """Return whether one precise point lies on the wall, to 50 digits."""
        size = sum((abs(c) for c in x), ctx.mpf(self.size)) or ctx.mpf(1)
        return bool(abs(self.level(ctx, x)) <= size * ctx.mpf(10) ** -EXACTLY and self.reaches(ctx, x))

    def ways(self, point: Array) -> list[Array]:
        """Return the unit vectors (2,) in which the wall leaves a point on it, in the plane."""
        nx, ny = self.normals(point[None, :])[0].tolist()
        return [np.array([-ny, nx]), np.array([ny, -nx])]


@dataclass(frozen=True, slots=True, kw_only=True)
class Plane(Wall):
    """The points with direction . x = position: a point, a line or a plane."""

    direction: tuple[Exact, ...]
    position: Exact

    @property
    def straight(self) -> bool:
        """True."""
        return True

    @property
    def length(self) -> float:
        """|direction|."""
        return math.sqrt(sum(float(c) ** 2 for c in self.direction))

    @property
    def size(self) -> float:
        """Distance from the origin."""
        return abs(float(self.position)) / self.length

    def level(self, ctx: Any, x: tuple[Any, ...]) -> Any:
        """Return direction . x - position."""
        total = sum((ctx.number(a) * c for a, c in zip(self.direction, x, strict=True) if a), 0 * x[0])
        return offset(ctx, total, self.position)

    def project(self, points: Array) -> Array:
        """Return the feet of the perpendiculars."""
        unit = np.array([float(c) for c in self.direction]) / self.length
        foot: Array = points - (points @ unit - float(self.position) / self.length)[:, None] * unit
        return foot

    def normals(self, points: Array) -> Array:
        """Return the unit direction."""
        return np.tile(np.array([float(c) for c in self.direction]) / self.length, (len(points), 1))


@dataclass(frozen=True, slots=True, kw_only=True)
class Round(Wall):
    """The circle or sphere |x - centre| = radius."""

    centre: tuple[Exact, ...]
    radius: Exact

    @property
    def straight(self) -> bool:
        """False."""
        return False

    @property
    def size(self) -> float:
        """Reach of the circle or sphere from the origin."""
        return sum(abs(float(c)) for c in self.centre) + float(self.radius)

    def level(self, ctx: Any, x: tuple[Any, ...]) -> Any:
        """Return |x - centre| - radius."""
        squares = sum(offset(ctx, c, p) ** 2 for c, p in zip(x, self.centre, strict=True))
        return ctx.sqrt(squares) - ctx.number(self.radius)

    def project(self, points: Array) -> Array:
        """Return the points of the same direction from the centre (any for the centre itself)."""
        projected: Array = self._centre() + float(self.radius) * self.normals(points)
        return projected

    def normals(self, points: Array) -> Array:
        """Return the unit vectors away from the centre."""
        away = points - self._centre()
        away[~away.any(axis=1), 0] = 1.0
        unit: Array = away / np.sqrt((away**2).sum(axis=1, keepdims=True))
        return unit

    def _centre(self) -> Array:
        return np.array([float(c) for c in self.centre])


@dataclass(frozen=True, slots=True, kw_only=True)
class Ray(Wall):
    """The points apex + t direction, t >= 0, of the plane."""

    apex: tuple[Exact, ...]
    direction: tuple[Exact, ...]

    @property
    def straight(self) -> bool:
        """True."""
        return True

    @property
    def size(self) -> float:
        """Distance of the apex from the origin."""
        return sum(abs(float(c)) for c in self.apex)

    def level(self, ctx: Any, x: tuple[Any, ...]) -> Any:
        """Return direction x (point - apex)."""
        dx, dy = self._offset(ctx, x)
        ex, ey = (ctx.number(c) for c in self.direction)
        return ex * dy - ey * dx

    def reaches(self, ctx: Any, x: tuple[Any, ...]) -> Any:
        """Return whether the point lies ahead of the apex, or is the apex."""
        dx, dy = self._offset(ctx, x)
        ex, ey = (ctx.number(c) for c in self.direction)
        return ex * dx + ey * dy >= 0

    def project(self, points: Array) -> Array:
        """Return the nearest points of the ray."""
        apex, unit = np.array([float(c) for c in self.apex]), self.unit()
        along = np.maximum((points - apex) @ unit, 0.0)
        foot: Array = apex + along[:, None] * unit
        return foot

    def normals(self, points: Array) -> Array:
        """Return the left normal."""
        ex, ey = self.unit().tolist()
        return np.tile([-ey + 0.0, ex], (len(points), 1))

    def ways(self, point: Array) -> list[Array]:
        """Return the direction, and its opposite unless the point is the apex."""
        unit = self.unit()
        at_apex = self.meets(point[None, :]).all() and np.allclose(
            point, [float(c) for c in self.apex], rtol=0.0, atol=ROUNDING * (self.size + 1.0)
        )
        return [unit] if at_apex else [unit, -unit]

    def unit(self) -> Array:
        """Return the unit direction (2,)."""
        direction = np.array([float(c) for c in self.direction])
        return direction / math.hypot(*direction)

    def _offset(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, Any]:
        dx, dy = (offset(ctx, c, p) for c, p in zip(x, self.apex, strict=True))
        return dx, dy
