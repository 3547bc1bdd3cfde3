"""Reflections, turns, shifts and changes of scale of a whole problem.

A motion takes x to s R M x + v: M reflects in x = 0 or not, R turns about the z-axis (or, in space, the
x-axis), s > 0 is a scale, v a shift. If u solves div(K grad u) = 0 with a number K, so does its picture
u(M R^T (x - v) / s); n . K grad becomes 1 / s times as large, so that Robin's alpha must too.
"""

from __future__ import annotations

import math
import operator
from collections.abc import Mapping
from dataclasses import replace
from functools import reduce
from typing import Any, NamedTuple

import numpy as np

from laplace_verify import fields
from laplace_verify.arrays import Array
from laplace_verify.fields import Field
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
from laplace_verify.principles.posed import Posed

__all__ = ["Motion", "mirrored", "motions_of", "moved"]

SAMPLES = 9  # points a piece by which its picture is known


class Motion(NamedTuple):
    """x -> scale R M x + shift; see the module."""

    words: str
    mirror: bool = False
    turn: tuple[float, float] = (1.0, 0.0)  # cosine and sine
    about_x: bool = False
    scale: float = 1.0
    shift: tuple[int, int, int] = (0, 0, 0)

    @property
    def angle(self) -> float:
        """The angle of the turn in radians."""
        return math.atan2(self.turn[1], self.turn[0])

    def matrix(self, dim: int) -> Array:
        """Return s R M, shape (d, d)."""
        c, s = self.turn
        about_z = [[c, -s, 0.0], [s, c, 0.0], [0.0, 0.0, 1.0]]
        about_x = [[1.0, 0.0, 0.0], [0.0, c, -s], [0.0, s, c]]
        turn = np.array(about_x if self.about_x else about_z)
        first = np.diag([-1.0 if self.mirror else 1.0, 1.0, 1.0])
        product: Array = self.scale * (turn @ first)[:dim, :dim]
        return product

    def points(self, points: Array) -> Array:
        """Return where points (n, d) go."""
        dim = points.shape[1]
        image: Array = points @ self.matrix(dim).T + np.array(self.shift[:dim], dtype=np.float64)
        return image


REFLECTED = Motion("reflected in x = 0", mirror=True)
SHIFTED = Motion("shifted by (3, -2, 1)", shift=(3, -2, 1))
ENLARGED = Motion("three times as large", scale=3.0)
QUARTER = Motion("turned by a quarter", turn=(0.0, 1.0))
EXCHANGED = Motion("x and y exchanged", mirror=True, turn=(0.0, -1.0))
TIPPED = Motion("turned by a quarter about the x-axis", turn=(0.0, 1.0), about_x=True)
OBLIQUE = Motion("turned by the angle with cosine 0.6 and sine 0.8", turn=(0.6, 0.8))
ALONG_AXES = (REFLECTED, SHIFTED, ENLARGED, QUARTER, EXCHANGED)

MOTIONS: dict[type[Shape], tuple[Motion, ...]] = {
    Interval: (REFLECTED, SHIFTED, ENLARGED),
    Rectangle: ALONG_AXES,
    Box: (*ALONG_AXES, TIPPED),
    Ellipse: ALONG_AXES,
    Disc: (*ALONG_AXES, OBLIQUE),
    Annulus: (*ALONG_AXES, OBLIQUE),
    Polygon: (*ALONG_AXES, OBLIQUE),
    Ball: (*ALONG_AXES, TIPPED, OBLIQUE),
    SphericalShell: (*ALONG_AXES, TIPPED, OBLIQUE),
    Cylinder: (REFLECTED, ENLARGED, QUARTER, EXCHANGED, OBLIQUE),
    LShape: (ENLARGED,),
    Sector: (ENLARGED,),
}


def motions_of(shape: Shape) -> tuple[Motion, ...]:
    """Return the motions that take a shape to one of its own kind."""
    return MOTIONS[type(shape)]


def moved(posed: Posed, motion: Motion) -> Posed:
    """Return the picture of a problem, whose K is a number."""
    if posed.field is None or not isinstance(posed.conductivity, int | float):
        raise TypeError("a field and a number for K are needed to move a problem")
    shape = _moved_shape(posed.shape, motion)
    images = {
        piece.name: motion.points(piece.boundary.sample(SAMPLES)[0]) for piece in posed.problem().pieces
    }
    names = {name: _name_at(shape, points) for name, points in images.items()}
    conditions = {
        names[name]: kind if isinstance(kind, str) else kind / motion.scale
        for name, kind in posed.conditions.items()
    }
    return replace(posed, shape=shape, conditions=conditions, field=_moved_field(posed.field, motion))


def _name_at(shape: Shape, points: Array) -> str:
    """Return the name of the piece that holds all the points."""
    return next(piece.name for piece in shape.pieces if piece.contains(points).all())


def _moved_shape(shape: Shape, motion: Motion) -> Shape:
    """Return the picture of a shape."""
    s = motion.scale
    match shape:
        case Interval() | Rectangle() | Box():
            ends = motion.points(np.array(shape.bounding_box))
            lower, upper = ends.min(axis=0).tolist(), ends.max(axis=0).tolist()
            return Interval(lower[0], upper[0]) if isinstance(shape, Interval) else type(shape)(lower, upper)
        case Disc():
            return Disc(_point(motion, shape.centre), s * shape.radius)
        case Ellipse():
            a, b = (s * axis for axis in shape.semi_axes)
            return Ellipse(_point(motion, shape.centre), (b, a) if motion.turn[1] else (a, b))
        case Annulus():
            return Annulus(_point(motion, shape.centre), s * shape.inner, s * shape.outer)
        case Polygon():
            corners = [_point(motion, corner) for corner in shape.vertices]
            return Polygon(corners[::-1] if motion.mirror else corners)
        case Ball():
            return Ball(_point(motion, shape.centre), s * shape.radius)
        case SphericalShell():
            return SphericalShell(_point(motion, shape.centre), s * shape.inner, s * shape.outer)
        case Cylinder():
            return Cylinder(s * shape.radius, s * shape.z0, s * shape.z1)
        case LShape():
            return LShape(s * shape.size)
        case Sector():
            return Sector(s * shape.radius, shape.opening)
        case _:
            raise TypeError(f"a {shape.kind} is not moved")


def _point(motion: Motion, point: Any) -> tuple[Any, ...]:
    """Return where one point goes."""
    return tuple(motion.points(np.array([point], dtype=np.float64))[0].tolist())


def _moved_field(field: Field, motion: Motion) -> Field:
    """Return the picture of a field."""
    result = mirrored(field) if motion.mirror else field
    if motion.angle:
        axis = None if field.dim < 3 else (1, 0, 0) if motion.about_x else (0, 0, 1)
        result = result.rotated(motion.angle, axis)
    if motion.scale != 1.0:
        result = result.scaled(motion.scale)
    return result.shifted(motion.shift[: field.dim]) if any(motion.shift) else result


def mirrored(field: Field) -> Field:
    """Return u(-x, y, z) of an affine field, a harmonic polynomial, or a sum of such.

    Re z^n becomes (-1)^n Re z^n, Im z^n becomes -(-1)^n Im z^n; in space cos m phi and sin |m| phi in the
    same way.

    >>> mirrored(fields.affine((1, 2), 3)).formula
    '-x + 2 y + 3'
    """
    return _mirrored(field.spec())


def _sign(power: int) -> int:
    """Return (-1)^power."""
    return -1 if power % 2 else 1


def _mirrored(spec: Mapping[str, Any]) -> Field:
    match spec:
        case {"kind": "affine", "coefficients": [first, *rest], "constant": constant}:
            return fields.affine((-first, *rest), constant)
        case {"kind": "polynomial", "degree": degree, "part": part, "centre": [0, 0], "scale": 1}:
            return _sign(degree + (part == "im")) * fields.polynomial(degree, part)
        case {"kind": "solid", "l": degree, "m": order}:
            return _sign(abs(order) + (order < 0)) * fields.solid(degree, order)
        case {"kind": "sum", "factors": factors, "terms": terms}:
            parts: list[Field] = [f * _mirrored(term) for f, term in zip(factors, terms, strict=True)]
            return reduce(operator.add, parts)
        case _:
            raise TypeError(f"no rule to mirror {spec}")
