"""Exact data on the true boundary: u, the flux n . K grad u, and Robin's g = n . K grad u + alpha u."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.errors import FieldError, ProblemError
from laplace_verify.fields import Edge, Field, Line, Ring, Singularity
from laplace_verify.geometry import Boundary
from laplace_verify.problems.conditions import Kind
from laplace_verify.problems.data import PointFunction
from laplace_verify.problems.limits import (
    AT_POINT,
    bounded_at_edge,
    bounded_limit,
    directions_along,
    limits_at_edge,
    near,
    sides_on,
)
from laplace_verify.problems.materials import Materials

__all__ = ["BoundaryField", "ExactData"]

INTERFACE = 1e-12  # of the shape's size: closer than this is on an interface
ALONG_EDGE = 1e-9  # angle between an edge and K n that counts as none
STENCIL_STEP = 1e-3  # of the shape's size, between values along an edge
FORWARD = (
    -25 / 12,
    4.0,
    -3.0,
    4 / 3,
    -1 / 4,
)  # derivative at the first of five values, Abramowitz & Stegun 25.2
BESIDE = 1e-6  # of the shape's size: where the regions on both sides are looked up


class BoundaryField:
    """A field seen from one piece of the boundary of a shape.

    Parameters
    ----------
    field, boundary
        The field and the piece.
    tensor
        Conductivity, shape (d, d), or a number per region.
    size
        Size of the shape, which tolerances refer to.
    """

    __slots__ = ("_boundary", "_field", "_size", "_tensor")

    def __init__(self, field: Field, boundary: Boundary, tensor: Array | Materials, size: float) -> None:
        self._field, self._boundary, self._tensor, self._size = field, boundary, tensor, size

    def in_region(self, region: str) -> BoundaryField:
        """Return the field of one region with its conductivity, seen from the piece.

        Raises
        ------
        ProblemError
            If there are regions and none bears the name.
        """
        if not isinstance(self._tensor, Materials):
            return self
        k = self._tensor.of(region) * np.eye(self._boundary.dim)
        return BoundaryField(self._field.restricted(region), self._boundary, k, self._size)

    def value(self, points: Array) -> Array:
        """Return u (n,) at points (n, d) on the piece; at a jump the limit along the piece."""
        return self._filled(points, self._value, self._steepness, derivative=False)

    def flux(self, points: Array) -> Array:
        """Return n . K grad u (n,) at points (n, d) on the piece, n the outward normal.

        Raises
        ------
        ProblemError
            At a singular point where it is infinite.
        """
        return self._filled(points, self._flux, self._flow, derivative=True)

    def magnitudes(self, points: Array) -> tuple[float, float]:
        """Return how large value and flux may be near points (n, d): |u| + size |grad u|, and |K grad u|."""
        steep = float(self._steepness(points).max())
        return float(np.abs(self.value(points)).max()) + steep, float(self._flow(points).max())

    def densities(self, points: Array) -> tuple[Array, Array]:
        """Return u and the flux, each (n,), at quadrature points graded towards singular points.

        Such points come so near to a singular point that they must be told from it to the last bit; one that
        cannot be told counts 0, which the error radius of the integral covers.
        """
        values, fluxes = np.zeros(len(points)), np.zeros(len(points))
        apart = np.ones(len(points), dtype=bool)
        for singularity in self._field.singularities:
            apart &= (points != np.asarray(singularity.point)).any(axis=1)
        for edge in self._field.edges:
            apart &= ~edge.meets(points)
        values[apart] = self._named(self._value, points[apart])
        fluxes[apart] = self._named(self._flux, points[apart])
        return values, fluxes

    def flux_limit(self, singularity: Singularity) -> float | None:
        """Return the limit of the flux along the piece at a singular point on it, None if it has none."""
        return bounded_limit(self._flux, self._flow, self._boundary, singularity, self._size)

    def _filled(
        self,
        points: Array,
        function: Callable[[Array], Array],
        magnitude: Callable[[Array], Array],
        *,
        derivative: bool,
    ) -> Array:
        """Evaluate `function`, with limits along the piece where the field itself has no value."""
        values = np.empty(len(points))
        ordinary = np.ones(len(points), dtype=bool)
        for singularity in self._field.singularities:
            if not _undefined(singularity, derivative):
                continue
            hit = near(points, singularity.point, self._size)
            if not hit.any():
                continue
            limit = None
            if singularity.kind in ("jump", "power"):
                limit = bounded_limit(function, magnitude, self._boundary, singularity, self._size)
            if limit is None:
                row = int(np.flatnonzero(hit)[0])
                what = "flux n . K grad u" if derivative else "value"
                raise ProblemError(
                    f"the {what} on piece {self._boundary.name!r} has no finite limit at point {row} = "
                    f"{tuple(points[row].tolist())}, a singular point ({singularity.kind}); leave this "
                    f"point out"
                )
            values[hit], ordinary[hit] = limit, False
        for edge in self._field.edges:
            if edge.exponent > float(derivative):
                continue  # the value (the gradient) has a limit
            hit = ordinary & (edge.distance(points) <= AT_POINT * self._size)
            if not hit.any():
                continue
            if derivative and edge.exponent < 1.0:  # r log r: the flux has a limit on either side
                values[hit] = self._flux_at_edge(edge, points, hit)
            else:
                values[hit] = limits_at_edge(function, self._boundary, edge, points[hit], self._size)
            ordinary[hit] = False
        if ordinary.any():
            values[ordinary] = self._named(function, points[ordinary])
        return values

    def _flux_at_edge(self, edge: Edge | Line | Ring, points: Array, hit: BoolArray) -> Array:
        """Return the flux at the points hit, on an edge along which |grad u| is infinite.

        Where the edge ends on the piece and K n points along it, the flux is a derivative along the edge, on
        which u itself is finite: five values inwards, error h^4. Elsewhere it is the limit along the piece,
        zero on an insulated face, if there is one.

        Raises
        ------
        ProblemError
            If it has no finite limit.
        """
        places = points[hit]
        if not isinstance(self._tensor, Materials):
            flow = self._boundary.normals(places) @ self._tensor
            strength = np.sqrt((flow**2).sum(axis=1))
            inwards = -flow / strength[:, None]
            turned = np.cross(inwards, edge.tangents(places))
            if (np.abs(turned) <= ALONG_EDGE).all():
                step = STENCIL_STEP * self._size
                around = [self._field.value(places + k * step * inwards) for k in range(len(FORWARD))]
                slopes = sum(c * u for c, u in zip(FORWARD, around, strict=True)) / step
                along: Array = -strength * slopes
                return along
        limits = bounded_at_edge(self._flux, self._flow, self._boundary, places, self._size)
        if limits is None:
            row = int(np.flatnonzero(hit)[0])
            raise ProblemError(
                f"the flux n . K grad u on piece {self._boundary.name!r} has no finite limit at point "
                f"{row} = {tuple(points[row].tolist())}, on an edge where it is infinite; leave it out"
            )
        return limits

    def _named(self, function: Callable[[Array], Array], points: Array) -> Array:
        """Evaluate `function`, naming the piece if the field refuses."""
        try:
            return function(points)
        except FieldError as cause:
            raise ProblemError(f"data of piece {self._boundary.name!r}: {cause}") from cause

    def _value(self, points: Array) -> Array:
        return self._field.value(points, side=self._sides(points))

    def _current(self, points: Array) -> Array:
        """Return K grad u (n, d); on an interface the mean of its limits along the piece."""
        if isinstance(self._tensor, Materials):
            return self._pieced(points, self._tensor)
        return self._field.gradient(points, side=self._sides(points)) @ self._tensor

    def _pieced(self, points: Array, materials: Materials) -> Array:
        """Return K grad u (n, d) region by region."""
        numbers = materials.partition.locate(points)
        current = np.empty(points.shape)
        close = materials.partition.distance(points) <= INTERFACE * self._size
        for number, name in enumerate(materials.names):
            mine = (numbers == number) & ~close
            if mine.any():
                current[mine] = self.in_region(name)._current(points[mine])
        for row in np.flatnonzero(close):
            place = points[row]
            ways = directions_along(self._boundary, place, self._size)
            inward = -self._boundary.normals(place[None])[0]
            beside = place + BESIDE * self._size * np.array(ways or [inward])
            names = [materials.names[k] for k in materials.partition.locate(beside)]
            limits = [self.in_region(name)._current(place[None])[0] for name in names]
            current[row] = np.mean(limits, axis=0)
        return current

    def _flux(self, points: Array) -> Array:
        flux: Array = (self._boundary.normals(points) * self._current(points)).sum(axis=1)
        return flux

    def _flow(self, points: Array) -> Array:
        """Return |K grad u| (n,)."""
        flow: Array = np.sqrt((self._current(points) ** 2).sum(axis=1))
        return flow

    def _steepness(self, points: Array) -> Array:
        """Return size |grad u| (n,), the change of u over the shape."""
        if isinstance(self._tensor, Materials):  # |K grad u| over the least K is no smaller than |grad u|
            bound: Array = self._size * self._flow(points) / min(self._tensor.conductivities)
            return bound
        gradients = self._field.gradient(points, side=self._sides(points))
        steepness: Array = self._size * np.sqrt((gradients**2).sum(axis=1))
        return steepness

    def _sides(self, points: Array) -> Array | None:
        return sides_on(self._field, self._boundary, points, self._size)


def _undefined(singularity: Singularity, derivative: bool) -> bool:
    """Return whether the field has no value (no gradient) at the singular point."""
    if singularity.kind == "power":
        return derivative and singularity.exponent <= 1.0  # r log r has an infinite gradient too
    return True


class ExactData:
    """Data of a condition derived from an exact field, which stays out of sight of the problem's user."""

    __slots__ = ("__alpha", "__kind", "__seen")

    def __init__(self, seen: BoundaryField, kind: Kind, alpha: PointFunction | None) -> None:
        self.__seen, self.__kind, self.__alpha = seen, kind, alpha

    def by_region(self, points: Array, region: str) -> Array:
        """Return f or g (n,) as the limit from one region."""
        return ExactData(self.__seen.in_region(region), self.__kind, self.__alpha)(points)

    def __call__(self, points: Array) -> Array:
        """Return f or g (n,) at points (n, d) on the piece."""
        if self.__kind == "dirichlet":
            return self.__seen.value(points)
        flux = self.__seen.flux(points)
        if self.__alpha is None:
            return flux
        data: Array = flux + self.__alpha(points) * self.__seen.value(points)
        return data
