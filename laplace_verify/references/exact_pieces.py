"""Pieces of a boundary in exact numbers: their points, normals and measure to any number of digits.

A piece is a map from [0, 1] or [0, 1]^2. Coordinates, radii and semi-axes are the decimals they are written
with; an angle is a rational multiple of pi (or a decimal). Along a straight piece a parameter given as a
fraction yields coordinates that are fractions too, so that distances from an end keep all their digits
however small they are.

    segment            a + t (b - a)                       |b - a| dt
    arc                c + (a cos t, b sin t)              |(a sin t, b cos t)| dt
    sphere, spheroid   c + (a q cos w, a q sin w, b s)     n dS = a (b q cos w, b q sin w, a s) ds dw
                       with q^2 + s^2 = 1
    round face         c + (r cos w, r sin w)              r dr dw
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any, TypeAlias

import mpmath

from laplace_verify.geometry import Boundary
from laplace_verify.geometry.arcs import Arc
from laplace_verify.geometry.faces import Wall
from laplace_verify.geometry.segments import Face, Segment
from laplace_verify.geometry.spheroids import SpheroidSurface
from laplace_verify.geometry.surfaces import RoundFace, Sphere, Tube
from laplace_verify.geometry.thin import ShiftedFace

__all__ = ["ExactPiece", "Place", "angle_as_written", "exact_piece", "written"]

WRITTEN = 12  # significant digits of a coordinate that was written down
ROUNDING = 8 * 2.0**-53  # by which arithmetic may have moved it
LARGEST_DENOMINATOR = 360
Place: TypeAlias = tuple[tuple[Any, ...], tuple[Any, ...], Any]


@dataclass(frozen=True, slots=True)
class ExactPiece:
    """A map from parameters in [0, 1] to a point, the outward unit normal there and ds or dS.

    Attributes
    ----------
    boundary
        The piece.
    turns
        For each parameter, whether the map is periodic in it.
    at
        The map; numbers are fractions or those of mpmath at its working precision.
    """

    boundary: Boundary
    turns: tuple[bool, ...]
    at: Callable[..., Place]

    def parameter(self, point: Sequence[float]) -> Fraction | None:
        """Return the parameter of a point of a straight piece of the plane, None off it and on others."""
        if not isinstance(self.boundary, Segment) or not self.boundary.contains([point]).all():
            return None
        a, b = _ends(self.boundary) or ((), ())
        place = [written(c) for c in point]
        if not a or None in place:
            return None
        along = [q - p for p, q in zip(a, b, strict=True)]
        offset = [(c - p) * d for c, p, d in zip(place, a, along, strict=True) if c is not None]
        return min(max(sum(offset, Fraction(0)) / sum(d * d for d in along), Fraction(0)), Fraction(1))


def written(number: float) -> Fraction | None:
    """Return the decimal of at most 12 digits, or the fraction of small terms, that a float stands for.

    None if it stands for none.

    >>> written(0.1 + 0.2), written(29 / 30), written(3**0.5)
    (Fraction(3, 10), Fraction(29, 30), None)
    """
    decimal = Fraction(f"{float(number):.{WRITTEN}g}")
    for choice in (decimal, Fraction(float(number)).limit_denominator(LARGEST_DENOMINATOR)):
        if abs(float(choice) - float(number)) <= ROUNDING * abs(float(number)):
            return choice
    return None


def angle_as_written(angle: float) -> Any:
    """Return an angle as a multiple of pi or a decimal with mpmath's digits, None if it is neither.

    >>> angle_as_written(math.pi / 3) * 3 == mpmath.pi
    True
    """
    part = Fraction(angle / math.pi).limit_denominator(LARGEST_DENOMINATOR)
    if abs(float(part) * math.pi - angle) <= ROUNDING * max(1.0, abs(angle)):
        return mpmath.pi * part.numerator / part.denominator
    decimal = written(angle)
    return None if decimal is None else number(decimal)


def number(exact: Fraction | Any) -> Any:
    """Return a fraction as a number of mpmath at its working precision."""
    return mpmath.mpf(exact.numerator) / exact.denominator if isinstance(exact, Fraction) else +exact


def exact_piece(boundary: Boundary) -> ExactPiece | None:
    """Return a piece in exact numbers, None if its kind or its numbers are not known exactly."""
    for kind, make in MAKERS.items():
        if isinstance(boundary, kind):
            return make(boundary)
    return None


def _all_written(numbers: Sequence[float]) -> tuple[Fraction, ...] | None:
    """Return several numbers as decimals, None if one of them is none."""
    found = tuple(written(float(n)) for n in numbers)
    return None if None in found else found  # type: ignore[return-value]  # no None in it


def _ends(side: Segment) -> tuple[tuple[Fraction, ...], tuple[Fraction, ...]] | None:
    """Return both ends of a side."""
    a, b = _all_written(side.start), _all_written(side.stop)
    return None if a is None or b is None else (a, b)


def _segment(side: Segment) -> ExactPiece | None:
    """Return a straight side, its normal to the right of travel."""
    ends = _ends(side)
    if ends is None:
        return None
    (ax, ay), (bx, by) = ends
    dx, dy = bx - ax, by - ay
    length = mpmath.sqrt(number(dx * dx + dy * dy))
    normal = (number(dy) / length, -number(dx) / length)

    def at(t: Any) -> Place:
        share = as_fraction(t)
        return (ax + share * dx, ay + share * dy), normal, length

    return ExactPiece(side, (False,), at)


def _arc(arc: Arc) -> ExactPiece | None:
    """Return an arc of a circle or ellipse."""
    known = _all_written((*arc.centre, *arc.semi_axes))
    first, last = angle_as_written(arc.first), angle_as_written(arc.last)
    if known is None or first is None or last is None:
        return None
    cx, cy, a, b = (number(n) for n in known)
    span = 2 * mpmath.pi if arc.closed else last - first
    sign = -1 if arc.hole else 1

    def at(t: Any) -> Place:
        angle = first + number(t) * span
        cos, sin = mpmath.cos(angle), mpmath.sin(angle)
        speed = mpmath.hypot(a * sin, b * cos)
        normal = (sign * b * cos / speed, sign * a * sin / speed)
        return (cx + a * cos, cy + b * sin), normal, span * speed

    return ExactPiece(arc, (arc.closed,), at)


def _face(face: Face) -> ExactPiece | None:
    """Return a rectangle across a coordinate axis."""
    lower, upper = _all_written(face.lower), _all_written(face.upper)
    if lower is None or upper is None:
        return None
    free = [k for k in range(3) if k != face.axis]
    area = math.prod((upper[k] - lower[k] for k in free), start=Fraction(1))
    normal = tuple(mpmath.mpf(face.outward if k == face.axis else 0) for k in range(3))

    def at(u: Any, v: Any) -> Place:
        point = list(lower)
        for k, t in zip(free, (u, v), strict=True):
            point[k] += as_fraction(t) * (upper[k] - lower[k])
        return tuple(point), normal, number(area)

    return ExactPiece(face, (False, False), at)


def _wall(wall: Wall) -> ExactPiece | None:
    """Return the rectangle over a straight side."""
    side, heights = _segment(wall.side), _all_written((wall.z0, wall.z1))
    if side is None or heights is None:
        return None
    z0, z1 = heights

    def at(u: Any, v: Any) -> Place:
        point, normal, length = side.at(u)
        height = z0 + as_fraction(v) * (z1 - z0)
        return (*point, height), (*normal, mpmath.mpf(0)), length * number(z1 - z0)

    return ExactPiece(wall, (False, False), at)


def _round_surface(surface: Sphere | SpheroidSurface) -> ExactPiece | None:
    """Return a sphere or a spheroid about an axis along z."""
    axes = (surface.radius,) * 2 if isinstance(surface, Sphere) else surface.semi_axes[::2]
    known = _all_written((*surface.centre, *axes))
    if known is None or not all(axes):
        return None
    cx, cy, cz, a, b = (number(n) for n in known)
    sign = -1 if surface.hole else 1

    def at(u: Any, v: Any) -> Place:
        s, turn = 2 * number(u) - 1, 2 * mpmath.pi * number(v)
        q, cos, sin = mpmath.sqrt((1 - s) * (1 + s)), mpmath.cos(turn), mpmath.sin(turn)
        steep = mpmath.hypot(b * q, a * s)
        normal = tuple(sign * part / steep for part in (b * q * cos, b * q * sin, a * s))
        return (cx + a * q * cos, cy + a * q * sin, cz + b * s), normal, 4 * mpmath.pi * a * steep

    return ExactPiece(surface, (False, True), at)


def _round_face(face: RoundFace) -> ExactPiece | None:
    """Return a disc across the z axis."""
    centre = face.centre if isinstance(face, ShiftedFace) else (0.0, 0.0, 0.0)
    known = _all_written((*centre, face.radius, face.z))
    if known is None:
        return None
    cx, cy, cz, radius, z = (number(n) for n in known)
    normal = (mpmath.mpf(0), mpmath.mpf(0), mpmath.mpf(face.outward))

    def at(u: Any, v: Any) -> Place:
        r, turn = radius * number(u), 2 * mpmath.pi * number(v)
        point = (cx + r * mpmath.cos(turn), cy + r * mpmath.sin(turn), cz + z)
        return point, normal, 2 * mpmath.pi * radius * r

    return ExactPiece(face, (False, True), at)


def _tube(tube: Tube) -> ExactPiece | None:
    """Return the mantle of a cylinder about the z axis."""
    known = _all_written((tube.radius, tube.z0, tube.z1))
    if known is None:
        return None
    radius, z0, z1 = known

    def at(u: Any, v: Any) -> Place:
        turn, r = 2 * mpmath.pi * number(v), number(radius)
        cos, sin = mpmath.cos(turn), mpmath.sin(turn)
        point = (r * cos, r * sin, z0 + as_fraction(u) * (z1 - z0))
        return point, (cos, sin, mpmath.mpf(0)), 2 * mpmath.pi * r * number(z1 - z0)

    return ExactPiece(tube, (False, True), at)


def as_fraction(parameter: Any) -> Fraction:
    """Return a parameter without rounding."""
    if isinstance(parameter, Fraction):
        return parameter
    sign, mantissa, exponent, _ = mpmath.mpf(parameter)._mpf_
    value = int(mantissa) * Fraction(2) ** int(exponent)
    return -value if sign else value


MAKERS: dict[type[Boundary], Callable[[Any], ExactPiece | None]] = {
    Segment: _segment,
    Arc: _arc,
    Face: _face,
    Wall: _wall,
    Sphere: _round_surface,
    SpheroidSurface: _round_surface,
    RoundFace: _round_face,
    Tube: _tube,
}
