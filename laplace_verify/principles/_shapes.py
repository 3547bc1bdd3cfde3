"""Strategies for every kind of shape: small whole numbers, valid as drawn, nothing is thrown away.

Lists of values begin with the simplest, towards which Hypothesis shrinks. All integers stay below 100:
larger ones Hypothesis may take from the constants of the modules it finds loaded, and a seed would no
longer fix the draw.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import TypeVar

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

__all__ = ["DRAWN"]

Draw = Callable[[st.SearchStrategy[int]], int]
S = TypeVar("S", bound=Shape)

PLACES = st.integers(0, 2)
LENGTHS = st.sampled_from((1, 2, 3))
HOLES = st.sampled_from((2, 4))  # a hole is 1/2 or 1/4 as wide as the shape


def _boxlike(build: Callable[[list[int], list[int]], Shape], dim: int) -> st.SearchStrategy[Shape]:
    """Return a strategy for shapes between two corners."""
    return st.builds(
        lambda lower, sides: build(lower, [a + side for a, side in zip(lower, sides, strict=True)]),
        st.lists(PLACES, min_size=dim, max_size=dim),
        st.lists(LENGTHS, min_size=dim, max_size=dim),
    )


def _centre(dim: int) -> st.SearchStrategy[tuple[int, ...]]:
    return st.tuples(*([PLACES] * dim))


@st.composite
def _polygons(draw: st.DrawFn) -> Shape:
    """Draw a triangle, a trapezium or a notched square with whole corners."""
    wide, high, shift = draw(LENGTHS), draw(LENGTHS), draw(PLACES)
    match draw(st.sampled_from(("triangle", "trapezium", "notched"))):
        case "triangle":
            return Polygon([(0, 0), (wide, 0), (min(shift, wide), high)])
        case "trapezium":
            return Polygon([(0, 0), (wide + shift, 0), (wide, high), (0, high)])
        case _:  # a re-entrant corner, deeper than a right angle
            return Polygon([(0, 0), (2 * wide, 0), (2 * wide, 2 * high), (wide, high), (0, 2 * high)])


def _balls(build: Callable[[tuple[int, ...], int], S], dim: int) -> st.SearchStrategy[S]:
    return st.builds(build, _centre(dim), st.sampled_from((1, 2)))


def _hollow(build: Callable[[tuple[int, ...], float, int], S], dim: int) -> st.SearchStrategy[S]:
    radii = st.sampled_from((1, 2))
    return st.builds(
        lambda centre, outer, part: build(centre, outer / part, outer), _centre(dim), radii, HOLES
    )


DRAWN: dict[str, tuple[type[Shape], st.SearchStrategy[Shape]]] = {
    "rectangle": (Rectangle, _boxlike(Rectangle, 2)),
    "interval": (Interval, _boxlike(lambda a, b: Interval(a[0], b[0]), 1)),
    "box": (Box, _boxlike(Box, 3)),
    "disc": (Disc, _balls(Disc, 2)),
    "l-shape": (LShape, st.builds(LShape, st.sampled_from((1, 2)))),
    "polygon": (Polygon, _polygons()),
    "ellipse": (
        Ellipse,
        st.builds(Ellipse, _centre(2), st.sampled_from(((2, 1), (1, 0.5), (3, 1)))),
    ),
    "annulus": (Annulus, _hollow(Annulus, 2)),
    "sector": (
        Sector,
        st.builds(
            lambda r, sixths: Sector(r, sixths * math.pi / 6.0), st.sampled_from((1, 2)), st.integers(2, 10)
        ),
    ),
    "ball": (Ball, _balls(Ball, 3)),
    "spherical-shell": (SphericalShell, _hollow(SphericalShell, 3)),
    "cylinder": (
        Cylinder,
        st.builds(lambda r, z, length: Cylinder(r, z, z + length), st.sampled_from((1, 2)), PLACES, LENGTHS),
    ),
}
