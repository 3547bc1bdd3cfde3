"""Shapes from a few small whole numbers: valid as drawn, nothing is thrown away.

Every kind is built from the same seven numbers, of which it uses what it needs. Hypothesis holds the draw
with fewer choices for the simpler one; with as many for each kind the order of `DRAWN` decides, and
failures shrink towards the unit square. All integers stay below 100: larger ones Hypothesis may take from
the constants of the modules it finds loaded, and a seed would no longer fix the draw.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import NamedTuple

from hypothesis import strategies as st

from laplace_verify.geometry import (
    Annulus,
    Ball,
    Box,
    Cylinder,
    Disc,
    Ellipse,
    Interval,
    LShape,
    Polygon,
    Rectangle,
    Sector,
    Shape,
    SphericalShell,
)

__all__ = ["DRAWN", "shape_of_kind"]

ELLIPSES = ((2, 1), (1, 0.5), (3, 1))
HOLES = (2, 4)  # a hole is 1/2 or 1/4 as wide as the shape


class Numbers(NamedTuple):
    """What a shape is built from."""

    place: tuple[int, int, int]  # 0 to 2
    sides: tuple[int, int, int]  # 1 to 3
    variant: int  # 0 to 8

    def corners(self, dim: int) -> tuple[tuple[int, ...], tuple[int, ...]]:
        """Return lower and upper corner of a box."""
        ends = zip(self.place, self.sides, strict=True)
        return self.place[:dim], tuple(a + side for a, side in ends)[:dim]


def _interval(numbers: Numbers) -> Shape:
    (a,), (b,) = numbers.corners(1)
    return Interval(a, b)


def _polygon(numbers: Numbers) -> Shape:
    """Build a triangle, a trapezium, or a square with a notch, which has a re-entrant corner."""
    (shift, _, _), (wide, high, _), variant = numbers
    match variant % 3:
        case 0:
            return Polygon([(0, 0), (wide, 0), (min(shift, wide), high)])
        case 1:
            return Polygon([(0, 0), (wide + shift, 0), (wide, high), (0, high)])
        case _:
            return Polygon([(0, 0), (2 * wide, 0), (2 * wide, 2 * high), (wide, high), (0, 2 * high)])


def _hole(numbers: Numbers) -> float:
    return numbers.sides[0] / HOLES[numbers.variant % 2]


DRAWN: dict[str, tuple[type[Shape], Callable[[Numbers], Shape]]] = {
    "rectangle": (Rectangle, lambda n: Rectangle(*n.corners(2))),
    "interval": (Interval, _interval),
    "box": (Box, lambda n: Box(*n.corners(3))),
    "disc": (Disc, lambda n: Disc(n.place[:2], n.sides[0])),
    "l-shape": (LShape, lambda n: LShape(n.sides[0])),
    "polygon": (Polygon, _polygon),
    "ellipse": (Ellipse, lambda n: Ellipse(n.place[:2], ELLIPSES[n.variant % 3])),
    "annulus": (Annulus, lambda n: Annulus(n.place[:2], _hole(n), n.sides[0])),
    "sector": (Sector, lambda n: Sector(n.sides[0], (n.variant + 2) * math.pi / 6.0)),
    "ball": (Ball, lambda n: Ball(n.place, n.sides[0])),
    "spherical-shell": (SphericalShell, lambda n: SphericalShell(n.place, _hole(n), n.sides[0])),
    "cylinder": (Cylinder, lambda n: Cylinder(n.sides[0], n.place[2], n.place[2] + n.sides[2])),
}

PLACE, SIDE = st.integers(0, 2), st.integers(1, 3)
NUMBERS = st.builds(Numbers, st.tuples(PLACE, PLACE, PLACE), st.tuples(SIDE, SIDE, SIDE), st.integers(0, 8))


def shape_of_kind(kinds: list[str]) -> st.SearchStrategy[Shape]:
    """Return a strategy for shapes of the given kinds, the first being the simplest."""
    return st.builds(lambda kind, numbers: DRAWN[kind][1](numbers), st.sampled_from(kinds), NUMBERS)
