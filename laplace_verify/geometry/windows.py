"""Windows on unbounded regions: bounded shapes over which norms and checks are taken."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import ClassVar

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.base import Boundaries, Junction, Shape
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.cartesian import Box, Rectangle
from laplace_verify.geometry.patches import Chart
from laplace_verify.geometry.planes import HalfSpace, Strip, within
from laplace_verify.geometry.polygons import Polygon
from laplace_verify.geometry.round import Annulus, Disc, Ellipse
from laplace_verify.geometry.solids import Ball, SphericalShell
from laplace_verify.geometry.spheroids import EllipticRing, Spheroid, SpheroidalShell
from laplace_verify.geometry.thin import RoundPlate, Screen
from laplace_verify.geometry.unbounded import Exterior

__all__ = ["Windowed", "check_window", "default_window"]

REACH = 1.5  # how far a default window reaches beyond a body, in extents of it
SAMPLED = 400


@dataclass(frozen=True, repr=False)
class Windowed(Shape):
    """An unbounded region seen through a window: its own pieces and corners, the window's points and weights.

    Unbounded pieces are cut to the window. `contains` asks the whole region unless `clipped`.
    """

    whole: Shape
    window: Shape
    clipped: bool = False

    kind: ClassVar[str] = "windowed"

    @property
    def dim(self) -> int:  # type: ignore[override]  # that of the region
        """Number of space dimensions."""
        return self.whole.dim

    @property
    def measure(self) -> float:
        """Length, area or volume of the window."""
        return self.window.measure

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """That of the window."""
        return self.window.bounding_box

    @property
    def extent(self) -> float:
        """That of the body; on a half-space that of the window."""
        return self.window.extent if isinstance(self.whole, HalfSpace) else self.whole.extent

    @cached_property
    def pieces(self) -> Boundaries:
        """The pieces of the region, cut to the window."""
        return Boundaries(within(piece, self.window) for piece in self.whole.pieces)

    @cached_property
    def junctions(self) -> tuple[Junction, ...]:
        """Those of the region."""
        return self.whole.junctions

    def is_a(self, kind: str) -> bool:
        """Whether the region is of this kind."""
        return self.whole.is_a(kind)

    def contains(self, points: npt.ArrayLike, tol: float = 0.0) -> BoolArray:
        """Return which points lie in the region and, if clipped, in the window."""
        inside = self.whole.contains(points, tol)
        return inside & self.window.contains(points, tol) if self.clipped else inside

    def distance(self, points: npt.ArrayLike) -> Array:
        """Return the distance to the boundary of the region."""
        return self.whole.distance(points)

    def sample(self, n: int, seed: int) -> Array:
        """Return points of the window."""
        return self.window.sample(n, seed)

    def quadrature(
        self, order: int, singular: npt.ArrayLike = (), cell: float | None = None
    ) -> tuple[Array, Array]:
        """Return points and weights of the window."""
        return self.window.quadrature(order, singular, cell)

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        return (tuple(self.pieces),)

    def _inside(self, points: Array) -> BoolArray:
        return self.whole._inside(points)

    def _draw(self, generator: np.random.Generator, n: int) -> Array:
        return self.window._draw(generator, n)

    def _chart(self) -> Chart:
        return self.window._chart()


def default_window(shape: Shape) -> Shape:
    """Return a window that follows the boundary of an unbounded region.

    Raises
    ------
    GeometryError
        If the region has none that is plain: give one.

    Examples
    --------
    >>> from laplace_verify.geometry import Disc, Exterior
    >>> default_window(Exterior(Disc((0, 0), 1)))
    Annulus((0.0, 0.0), 1.0, 4.0, None)
    """
    if isinstance(shape, HalfSpace | Strip):
        return _beside(shape)
    if isinstance(shape, Exterior) and isinstance(shape.body, Shape):
        found = _around(shape.body, REACH * shape.extent)
        if found is not None:
            return found
    raise GeometryError(f"{shape!r} needs a window: give window=, a bounded shape that follows its boundary")


def _around(body: Shape, reach: float) -> Shape | None:
    """Return the ring or shell around a body."""
    if isinstance(body, Disc):
        return Annulus(body.centre, body.radius, body.radius + reach)
    if isinstance(body, Ball):
        return SphericalShell(body.centre, body.radius, body.radius + reach)
    if isinstance(body, Ellipse):
        return EllipticRing(body.centre, body.semi_axes, tuple(a + reach for a in body.semi_axes))
    if isinstance(body, Spheroid):
        return SpheroidalShell(body.centre, body.semi_axes, tuple(a + reach for a in body.semi_axes))
    if isinstance(body, RoundPlate):
        wide = body.radius + reach
        return SpheroidalShell(body.centre, (body.radius, body.radius, 0.0), (wide, wide, reach))
    if isinstance(body, Screen):
        start, stop = np.array(body.start), np.array(body.stop)
        half = np.abs(stop - start) / 2.0
        if min(half) == 0.0:
            return EllipticRing(tuple((start + stop) / 2.0), tuple(half), tuple(half + reach))
    vertices: Sequence[Sequence[float]] | None = getattr(body, "vertices", None)
    if vertices is None:
        return None
    lower, upper = body.bounding_box
    (a, b), (c, d) = (lower - reach).tolist(), (upper + reach).tolist()
    return Polygon([(a, b), (c, b), (c, d), (a, d)], holes=[vertices])


def _beside(shape: HalfSpace | Strip) -> Shape:
    """Return the rectangle or box in the middle of a half-space or strip."""
    low, high = (0.0, 2.0) if isinstance(shape, HalfSpace) else (shape.z0, shape.z1)
    reach = max(2.0, 2.0 * (high - low)) if isinstance(shape, Strip) else 2.0
    lower, upper = [-reach] * (shape.dim - 1) + [low], [reach] * (shape.dim - 1) + [high]
    return Rectangle(lower, upper) if shape.dim == 2 else Box(lower, upper)


def check_window(shape: Shape, window: Shape) -> Shape:
    """Return `window` if it is a bounded part of an unbounded region that touches its boundary.

    Raises
    ------
    GeometryError
        Saying what is wrong: dimension, points outside, or a gap to every piece.
    """
    if not isinstance(window, Shape) or not window.bounded or not window.measure > 0.0:
        raise GeometryError(f"window must be a bounded shape, got {window!r}")
    if window.dim != shape.dim:
        raise GeometryError(f"the window has dimension {window.dim}, the shape has dimension {shape.dim}")
    outlines = [piece.outline(40) for piece in window.pieces]
    points = np.concatenate([window.sample(SAMPLED, seed=0), *outlines])
    outside = ~shape.contains(points, tol=1e-9)
    if outside.any():
        raise GeometryError(
            f"the window {window!r} reaches out of {shape!r}, for example at {points[outside][0].tolist()}"
        )
    for piece in shape.pieces:
        cut = within(piece, window)
        if not window.contains(cut.sample(64)[0], tol=1e-9).any():
            raise GeometryError(
                f"the window {window!r} does not touch piece {piece.name!r}; errors are largest there, so "
                "the window must begin at the boundary"
            )
    return window
