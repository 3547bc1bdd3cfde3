"""A piece of a shape's boundary: where it is, its outward normals, its quadrature."""

from __future__ import annotations

import math
from abc import ABC, abstractmethod
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, BoolArray, as_points, as_values
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.checks import LARGEST, not_negative, places, whole
from laplace_verify.geometry.patches import Chart, broken, integrate, singular_points

__all__ = ["Boundary", "Curve", "Surface"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Boundary(ABC):
    """A named piece of the boundary of a shape in R^dim (abstract)."""

    name: str

    @property
    @abstractmethod
    def dim(self) -> int:
        """Dimension of the space around the piece."""

    @property
    @abstractmethod
    def curved(self) -> bool:
        """Whether the piece is not flat."""

    @property
    @abstractmethod
    def measure(self) -> float:
        """Length or area; 1 for an end point in 1-D."""

    @property
    @abstractmethod
    def size(self) -> float:
        """The length that tolerances are relative to."""

    @property
    @abstractmethod
    def ends(self) -> Array:
        """End points (2, d) of a curve in order of travel; (0, d) for closed curves and surfaces."""

    @abstractmethod
    def _project(self, points: Array) -> Array: ...

    @abstractmethod
    def _normals(self, points: Array) -> Array: ...

    @abstractmethod
    def point(self, t: npt.ArrayLike) -> Array:
        """Return points (n, d) at t in [0, 1].

        On curves t (n,) are fractions of length, on surfaces t (n, 2) keep ratios of area. Curves
        are travelled with the region on the left.
        """

    @abstractmethod
    def outline(self, n: int) -> Array:
        """Return about n points (n, d) on the piece, ends included."""

    @abstractmethod
    def sample(self, n: int) -> tuple[Array, Array, Array]:
        """Return about n midpoint-rule points, outward unit normals and weights (their sum is `measure`)."""

    @abstractmethod
    def quadrature(
        self, order: int, singular: npt.ArrayLike = (), cell: float | None = None
    ) -> tuple[Array, Array, Array]:
        """Return points, outward unit normals and weights of a composite Gauss rule.

        Exact for polynomials of degree `order` on flat pieces, to round-off on curved ones; graded towards
        `singular` points (m, d); no patch longer than `cell`.
        """

    def part(self, start: float, stop: float, name: str) -> Boundary:
        """Return the part between two fractions of length, in order of travel; curves only."""
        raise GeometryError(
            f"{self.name!r} cannot be cut at {start!r}, {stop!r} for {name!r}: "
            "only curves and straight sides can"
        )

    def project(self, points: npt.ArrayLike) -> Array:
        """Return the nearest point of the piece, shape (n, d), to each of points (n, d)."""
        return self._project(places(points, self.dim))

    def normals(self, points: npt.ArrayLike) -> Array:
        """Return outward unit normals (n, d) at the projections of points (n, d)."""
        return self._normals(places(points, self.dim))

    def contains(
        self, points: npt.ArrayLike, tol: float = 1e-9, normals: npt.ArrayLike | None = None
    ) -> BoolArray:
        """Return which points (n, d) lie within `tol` times the piece's size of the piece.

        Parameters
        ----------
        points
            Shape (n, d).
        tol
            Relative tolerance, >= 0.
        normals
            Outward normals (n, d) at the points, to tell the two lips of a slit apart: a point belongs to the
            piece only if its normal points to the same side.
        """
        tol = not_negative(tol, "tol")
        array = np.clip(as_points(points, self.dim, error=GeometryError), -LARGEST, LARGEST)
        offset = array - self._project(array)
        on: BoolArray = np.sqrt((offset**2).sum(axis=1)) <= tol * self.size
        if normals is not None:
            given = as_points(normals, self.dim, error=GeometryError, name="normals")
            if len(given) != len(array):
                raise GeometryError(
                    f"normals must be one per point: {len(array)} points, {len(given)} normals"
                )
            on &= (given * self._normals(array)).sum(axis=1) > 0.0
        return on


@dataclass(frozen=True, slots=True, kw_only=True)
class Curve(Boundary):
    """A piece of the boundary of a plane region (abstract), travelled with the region on its left."""

    @property
    def dim(self) -> int:
        """Dimension of the space around the piece."""
        return 2

    @property
    def size(self) -> float:
        """The length that tolerances are relative to: that of the curve."""
        return self.measure

    @abstractmethod
    def _chart(self) -> Chart: ...

    @abstractmethod
    def _parameter(self, points: Array) -> Array:
        """Return the chart's parameter (n,) at the projections of points."""

    @abstractmethod
    def _at(self, fractions: Array) -> Array:
        """Return the points at fractions of length."""

    @abstractmethod
    def tangents(self, t: npt.ArrayLike) -> Array:
        """Return unit tangents (n, 2) in the direction of travel at fractions t (n,) of length."""

    @property
    @abstractmethod
    def rising(self) -> bool:
        """Whether travel follows the direction in which `split` counts fractions."""

    def point(self, t: npt.ArrayLike) -> Array:
        """Return points (n, 2) at fractions t (n,) of length, in [0, 1]."""
        return self._at(_fractions(t))

    def outline(self, n: int) -> Array:
        """Return n points (n, 2) along the curve, ends included."""
        return self._at(np.linspace(0.0, 1.0, n))

    def sample(self, n: int) -> tuple[Array, Array, Array]:
        """Return n points at the middle of equal lengths, outward unit normals, and equal weights."""
        n = whole(n, "n", 1)
        points = self._at((np.arange(n) + 0.5) / n)
        return points, self._normals(points), np.full(n, self.measure / n)

    def quadrature(
        self, order: int, singular: npt.ArrayLike = (), cell: float | None = None
    ) -> tuple[Array, Array, Array]:
        """Return points, outward unit normals and weights; see `Boundary.quadrature`."""
        chart, targets = self._chart(), singular_points(singular, 2)
        if len(targets):
            chart = broken(chart, self._parameter(targets[self.contains(targets)]))
        points, weights = integrate(chart, order, targets, cell)
        return points, self._normals(points), weights


@dataclass(frozen=True, slots=True, kw_only=True)
class Surface(Boundary):
    """A piece of the boundary of a solid (abstract)."""

    @property
    def dim(self) -> int:
        """Dimension of the space around the piece."""
        return 3

    @property
    def size(self) -> float:
        """The length that tolerances are relative to: the square root of the area."""
        return math.sqrt(self.measure)

    @property
    def ends(self) -> Array:
        """No end points: shape (0, 3)."""
        return np.zeros((0, 3))

    @abstractmethod
    def _chart(self) -> Chart: ...

    @abstractmethod
    def _at(self, u: Array, v: Array) -> Array:
        """Return the points at u, v in [0, 1]; the map keeps ratios of area."""

    def point(self, t: npt.ArrayLike) -> Array:
        """Return points (n, 3) at t (n, 2) in [0, 1]^2; equal areas of t go to equal areas of the surface."""
        array = as_points(t, 2, error=GeometryError, name="t")
        _check_unit(array)
        return self._at(array[:, 0], array[:, 1])

    def outline(self, n: int) -> Array:
        """Return about n points (n, 3) on the surface, its edge included."""
        side = np.linspace(0.0, 1.0, max(2, math.ceil(math.sqrt(n))))
        u, v = np.meshgrid(side, side, indexing="ij")
        return self._at(u.ravel(), v.ravel())

    def sample(self, n: int) -> tuple[Array, Array, Array]:
        """Return about n points at the middle of equal areas, outward unit normals, and equal weights."""
        side = max(1, round(math.sqrt(whole(n, "n", 1))))
        middle = (np.arange(side) + 0.5) / side
        u, v = np.meshgrid(middle, middle, indexing="ij")
        points = self._at(u.ravel(), v.ravel())
        return points, self._normals(points), np.full(side**2, self.measure / side**2)

    def quadrature(
        self, order: int, singular: npt.ArrayLike = (), cell: float | None = None
    ) -> tuple[Array, Array, Array]:
        """Return points, outward unit normals and weights; see `Boundary.quadrature`."""
        points, weights = integrate(self._chart(), order, singular, cell)
        return points, self._normals(points), weights


def _fractions(t: npt.ArrayLike) -> Array:
    try:
        array = np.asarray(t, dtype=np.float64)
    except (TypeError, ValueError) as cause:
        raise GeometryError(f"t must be numbers in [0, 1], got {t!r}") from cause
    flat = as_values(array, array.size, error=GeometryError, name="t")
    _check_unit(flat)
    return flat


def _check_unit(t: Array) -> None:
    if not ((t >= 0.0) & (t <= 1.0)).all():
        raise GeometryError("t must lie in [0, 1]: it is a fraction of the piece's length or area")
