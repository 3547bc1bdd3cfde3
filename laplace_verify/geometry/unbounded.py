"""The exterior of one or several bodies.

Pieces keep the names they have on the body, with normals that point out of the fluid, into the body. Corners
are seen from the fluid: a square has the opening 3 pi/2 from outside, the tips of a screen 2 pi. Lengths
(`size`, `extent`) are those of the bodies.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from typing import Any, ClassVar

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.arcs import Arc
from laplace_verify.geometry.base import Junction, Shape
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.planes import Unbounded
from laplace_verify.geometry.segments import Face, Segment
from laplace_verify.geometry.spheroids import SpheroidSurface
from laplace_verify.geometry.surfaces import Sphere
from laplace_verify.geometry.thin import Thin

__all__ = ["Exterior"]

BODIES = (
    "disc", "ellipse", "polygon", "rectangle", "l-shape", "sector", "half-disc", "screen",
    "ball", "spheroid", "box", "round-plate",
)  # fmt: skip


@dataclass(frozen=True, slots=True, repr=False)
class Exterior(Unbounded):
    """The whole space outside a body, or outside several that do not touch.

    The pieces are those of the body; of several, body-1-..., body-2-...

    >>> from laplace_verify.geometry import Disc, Rectangle
    >>> outside = Exterior(Rectangle((0, 0), (2, 1)))
    >>> outside.bounded, outside.measure, outside.pieces["top"].normals([(1, 1)]).tolist()
    (False, inf, [[0.0, -1.0]])
    >>> round(outside.junctions[0].opening / 3.141592653589793, 12)
    1.5
    """

    body: Shape | Sequence[Shape]

    kind: ClassVar[str] = "exterior"

    def __post_init__(self) -> None:
        """Refuse what cannot be a body, and bodies that touch."""
        if not isinstance(self.body, Shape):
            if not isinstance(self.body, Sequence) or not self.body:
                raise GeometryError(f"body must be a shape or a list of shapes, got {self.body!r}")
            several = tuple(self.body)
            object.__setattr__(self, "body", several[0] if len(several) == 1 else several)
        for one in self.bodies:
            holes: Any = getattr(one, "holes", ())
            if not isinstance(one, Shape) or one.kind not in BODIES or holes:
                raise GeometryError(f"a body must be one of {', '.join(BODIES)} without holes, got {one!r}")
        if len({body.dim for body in self.bodies}) > 1:
            raise GeometryError("the bodies of an exterior must have the same dimension")
        if isinstance(self.body, Shape) and (self.body.splits or self.body.names):
            object.__setattr__(self, "splits", (*self.body.splits, *self.splits))
            object.__setattr__(self, "names", (*self.body.names, *self.names))
            object.__setattr__(self, "body", replace(self.body, splits=(), names=()))
        self._check_apart()
        self._check()

    def _check_apart(self) -> None:
        for k, body in enumerate(self.bodies):
            for other in self.bodies[k + 1 :]:
                points = np.concatenate([piece.sample(400)[0] for piece in body.pieces])
                inside = (
                    other.contains(points).any()
                    or body.contains(np.concatenate([piece.sample(400)[0] for piece in other.pieces])).any()
                )
                if inside:
                    raise GeometryError(
                        f"the bodies {body!r} and {other!r} touch or overlap; move them apart"
                    )

    @property
    def bodies(self) -> tuple[Shape, ...]:
        """The bodies, also if there is only one."""
        return (self.body,) if isinstance(self.body, Shape) else tuple(self.body)

    @property
    def dim(self) -> int:  # type: ignore[override]  # that of the body
        """Number of space dimensions."""
        return self.bodies[0].dim

    @property
    def bounding_box(self) -> tuple[Array, Array]:
        """Infinite."""
        return np.full(self.dim, -math.inf), np.full(self.dim, math.inf)

    @property
    def body_box(self) -> tuple[Array, Array]:
        """Lower and upper corner of the box around all bodies."""
        boxes = [body.bounding_box for body in self.bodies]
        lower, upper = (np.array(corners) for corners in zip(*boxes, strict=True))
        return lower.min(axis=0), upper.max(axis=0)

    @property
    def extent(self) -> float:
        """Largest extent of the box around all bodies."""
        lower, upper = self.body_box
        return float((upper - lower).max())

    def is_a(self, kind: str) -> bool:
        """Whether the shape is of this kind: "exterior", or "exterior-disc" if every body is a disc.

        >>> from laplace_verify.geometry import Disc
        >>> Exterior(Disc((0, 0), 1)).is_a("exterior-ellipse")
        True
        """
        wanted = kind.removeprefix("exterior-")
        return kind == self.kind or (
            kind.startswith("exterior-") and isinstance(self.body, Shape) and self.body.is_a(wanted)
        )

    def _loops(self) -> tuple[tuple[Boundary, ...], ...]:
        loops = []
        for k, body in enumerate(self.bodies, start=1):
            prefix = f"body-{k}-" if len(self.bodies) > 1 else ""
            for loop in body._loops():
                if isinstance(body, Thin):  # its pieces are made as the fluid sees them
                    loops.append(tuple(replace(piece, name=prefix + piece.name) for piece in loop))
                else:
                    loops.append(tuple(TURNED[type(p)](p, prefix + p.name) for p in loop[::-1]))
        return tuple(loops)

    def _order(self, names: tuple[str, ...]) -> tuple[str, ...]:
        if not isinstance(self.body, Shape):
            return names
        whole = tuple(piece.name for loop in self.body._loops() for piece in loop)
        return self.body._order(whole)

    def _solid_junctions(self) -> tuple[Junction, ...]:
        found = []
        for k, body in enumerate(self.bodies, start=1):
            prefix = f"body-{k}-" if len(self.bodies) > 1 else ""
            for junction in body._solid_junctions():
                (first, second), opening = junction.pieces, junction.opening
                found.append(
                    Junction(
                        points=junction.points,
                        opening=opening if isinstance(body, Thin) else 2.0 * math.pi - opening,
                        pieces=(prefix + first, prefix + second),
                    )
                )
        return tuple(found)

    def _inside(self, points: Array) -> BoolArray:
        outside = np.ones(len(points), dtype=bool)
        for body in self.bodies:
            outside &= ~body._inside(points)
        return outside


def _turn_segment(piece: Any, name: str) -> Boundary:
    turned: Boundary = replace(piece, name=name, start=piece.stop, stop=piece.start)
    return turned


def _turn_hole(piece: Any, name: str) -> Boundary:
    turned: Boundary = replace(piece, name=name, hole=not piece.hole)
    return turned


def _turn_face(piece: Any, name: str) -> Boundary:
    turned: Boundary = replace(piece, name=name, outward=-piece.outward)
    return turned


TURNED: dict[type, Callable[[Any, str], Boundary]] = {
    Segment: _turn_segment,
    Arc: _turn_hole,
    Sphere: _turn_hole,
    SpheroidSurface: _turn_hole,
    Face: _turn_face,
}
