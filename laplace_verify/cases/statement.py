"""The statement of a case in words and formulas, made from the case itself so that they cannot disagree."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping, Sequence
from typing import Any

import numpy as np

from laplace_verify.fields.partitions import Layers, Sectors, Shells
from laplace_verify.geometry import Shape
from laplace_verify.problems import Case, Condition, Materials
from laplace_verify.problems.conditions import Data
from laplace_verify.problems.coordinates import Coordinates
from laplace_verify.problems.infinity import AtInfinity

__all__ = [
    "conditions_in_words",
    "conductivity_in_words",
    "given_in_words",
    "in_symbols",
    "infinity_in_words",
    "posed_in_words",
    "region_in_words",
    "statement_of",
]

AXES = ("x", "y", "z")
SYMMETRIC = {  # the equation in coordinates with a symmetry
    "axisymmetric": "(1/r) d/dr(r K du/dr) + d/dz(K du/dz)",
    "radial-cylinder": "(1/r) d/dr(r K du/dr)",
    "radial-sphere": "(1/r^2) d/dr(r^2 K du/dr)",
}


def statement_of(case: Case, solution: str, note: str = "") -> str:
    """Return equation, region, conditions, solution and a note in a few sentences.

    Parameters
    ----------
    case
        The case.
    solution
        The exact solution as a readable formula.
    note
        More sentences.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> from laplace_verify.geometry import Interval
    >>> from laplace_verify.problems import case
    >>> rod = case(Interval(0, 2), {}, fields.affine((3,)), 0.5)
    >>> print(statement_of(rod, "3 x"))
    div(K grad u) = 0 with K = 0.5 in 0 < x < 2; u given on the whole boundary. Solution u = 3 x.
    """
    seen = f"Norms are taken over {region_in_words(case.window)}." if case.window is not None else ""
    return " ".join(filter(None, [f"{posed_in_words(case)}. Solution u = {solution}.", note, seen]))


def posed_in_words(case: Case) -> str:
    """Return equation, region and conditions."""
    problem = case.problem
    k = in_symbols(conductivity_in_words(problem.conductivity), problem.coordinates)
    equation = "div grad u = 0" if k == "1" else f"div(K grad u) = 0 with K = {k}"
    if problem.coordinates != "cartesian":
        equation += f", that is {SYMMETRIC[problem.coordinates]} = 0,"
    kinds = dict(case._conditions)
    region = in_symbols(region_in_words(problem.shape), problem.coordinates)
    parts = [f"{equation} in {region}", *conditions_in_words(kinds)]
    if any(piece.kind == "axis" for piece in problem.pieces):
        parts.append("no condition on the axis r = 0")
    if problem.at_infinity is not None:
        parts.append(infinity_in_words(problem.at_infinity))
    missing = [name for name in problem.shape.pieces.names if name not in problem.pieces.names]
    if missing:
        parts.append(f"no condition on {', '.join(missing)}")
    if problem.constant is not None:
        parts.append("the mean of u given" if problem.constant[0] == "mean" else "u given at one point")
    return "; ".join(parts)


def infinity_in_words(at_infinity: AtInfinity) -> str:
    """Return what is known of u far away.

    >>> infinity_in_words(("flow", (1.0, 0.5), 0.0))
    'u - (1, 0.5) . x bounded at infinity'
    """
    if at_infinity is None:
        return "bounded shape"
    if isinstance(at_infinity, str):
        return {"decay": "u -> 0 at infinity", "bounded": "u bounded at infinity"}[at_infinity]
    if at_infinity[0] == "log":
        return f"u - {_number(at_infinity[1])} log |x| bounded at infinity"
    turning = f" + {_number(at_infinity[2])}/(2 pi) log |x|" if at_infinity[2] else ""
    return f"u - {_point(at_infinity[1])} . x{turning} bounded at infinity"


def in_symbols(text: str, coordinates: Coordinates) -> str:
    """Return a text about x and y in the coordinates' own symbols, r and z.

    >>> in_symbols("the rectangle 0 < x < 2, 0 < y < 1", "axisymmetric")
    'the rectangle 0 < r < 2, 0 < z < 1'
    """
    if coordinates == "cartesian":
        return text
    return re.sub(r"\by\b", "z", re.sub(r"\bx\b", "r", text))


def conductivity_in_words(conductivity: Any) -> str:
    """Return a number or a matrix in few digits.

    >>> conductivity_in_words(2.5), conductivity_in_words(np.array([[2.0, 0.5], [0.5, 1.0]]))
    ('2.5', '[[2, 0.5], [0.5, 1]]')
    """
    if isinstance(conductivity, Materials):
        pairs = zip(conductivity.names, conductivity.conductivities, strict=True)
        return ", ".join(f"{_number(k)} in {name}" for name, k in pairs) + f" ({places(conductivity)})"
    if np.ndim(conductivity) == 0:
        return _number(float(conductivity))
    rows = (", ".join(_number(float(k)) for k in row) for row in np.asarray(conductivity))
    return "[" + ", ".join(f"[{row}]" for row in rows) + "]"


def places(materials: Materials) -> str:
    """Return where the regions lie.

    >>> from laplace_verify.problems import layers
    >>> places(layers((0, 1), ["1/4"], [1, 2]))
    'interfaces y = 0.25'
    """
    partition = materials.partition
    if isinstance(partition, Layers):
        across = " + ".join(
            axis if c == 1 else f"{_number(float(c))} {axis}"
            for c, axis in zip(partition.direction, AXES, strict=False)
            if c
        )
        return f"interfaces {across} = {', '.join(_number(float(p)) for p in partition.positions)}"
    if isinstance(partition, Shells):
        radii = ", ".join(_number(float(r)) for r in partition.radii)
        return f"interfaces |x - {_point([float(c) for c in partition.centre])}| = {radii}"
    if isinstance(partition, Sectors):
        rays = ", ".join(_point([float(c) for c in ray]) for ray in partition.rays)
        return f"sectors about {_point([float(c) for c in partition.apex])} between the rays {rays}"
    return f"{len(partition.names)} regions"


def conditions_in_words(conditions: Mapping[str, Condition]) -> list[str]:
    """Return "u given on ..." and the like, one phrase for all pieces with the same condition.

    >>> from laplace_verify.problems import robin
    >>> conditions_in_words({"left": Condition(kind="dirichlet"), "right": robin(2)})
    ['u given on left', 'n . K grad u + 2 u given on right']
    """
    phrases: dict[str, list[str]] = {}
    for name, condition in conditions.items():
        phrases.setdefault(given_in_words(condition), []).append(name)
    if len(phrases) == 1 and len(conditions) > 1:
        return [f"{phrase} on the whole boundary" for phrase in phrases]
    return [f"{phrase} on {', '.join(names)}" for phrase, names in phrases.items()]


def given_in_words(condition: Condition) -> str:
    """Return which combination of u and its flux is given; what it equals if the condition says so.

    >>> from laplace_verify.problems import robin
    >>> given_in_words(robin(2))
    'n . K grad u + 2 u given'
    >>> given_in_words(robin(-0.5, "x - y"))
    'n . K grad u - 0.5 u = x - y'
    """
    if condition.kind == "periodic":
        return "u and its flux periodic"
    data, alpha = condition.data, condition.alpha
    given = " given" if data is None else f" = {_right_side(data)}"
    if condition.kind == "dirichlet":
        return f"u{given}"
    if condition.kind == "neumann":
        return f"n . K grad u{given}"
    if isinstance(alpha, float):
        return f"n . K grad u {'-' if alpha < 0.0 else '+'} {_number(abs(alpha))} u{given}"
    return f"n . K grad u + {f'({alpha})' if isinstance(alpha, str) else 'alpha'} u{given}"


def _right_side(data: Data) -> str:
    """Return what data equal: a number or a formula, or that they are a function."""
    if isinstance(data, float):
        return _number(data)
    return data if isinstance(data, str) else "a function"


def region_in_words(shape: Shape) -> str:
    """Return the region as a reader would write it.

    >>> from laplace_verify.geometry import Disc, Rectangle
    >>> region_in_words(Disc((0.1, 0), 2))
    'the disc of radius 2 about (0.1, 0)'
    >>> region_in_words(Rectangle((0, 0), (2, 1)).split(top=[0.25]))
    'the rectangle 0 < x < 2, 0 < y < 1 (top cut at 0.25 of its length)'
    """
    describe = REGIONS.get(shape.kind)
    text = describe(shape) if describe else repr(shape)
    for name, fractions in shape.splits:
        cuts = " and ".join(_number(fraction) for fraction in fractions)
        text += f" ({name} cut at {cuts} of its length)"
    return text


def _box(shape: Any) -> str:
    """Return 0 < x < 2, 0 < y < 1."""
    lower, upper = shape.bounding_box
    return ", ".join(
        f"{_number(a)} < {axis} < {_number(b)}" for axis, a, b in zip(AXES, lower, upper, strict=False)
    )


def _annulus(shape: Any) -> str:
    """Return the region between two circles."""
    if shape.inner_centre is None:
        rings = f"of radius {_number(shape.inner)} and {_number(shape.outer)} about {_point(shape.centre)}"
        return f"the annulus between the circles {rings}"
    inner = f"of radius {_number(shape.inner)} about {_point(shape.inner_centre)}"
    return f"the disc of radius {_number(shape.outer)} about {_point(shape.centre)} without the disc {inner}"


def _ring(shape: Any) -> str:
    """Return the region between concentric ellipses or spheroids."""
    what = "ellipses" if shape.dim == 2 else "spheroids"
    axes = f"{_point(shape.inner)} and {_point(shape.outer)}"
    return f"the region between the {what} with semi-axes {axes} about {_point(shape.centre)}"


def _exterior(shape: Any) -> str:
    """Return the region outside one or several bodies."""
    return f"the exterior of {' and of '.join(region_in_words(body) for body in shape.bodies)}"


def _layer(shape: Any) -> str:
    """Return the half-space or strip as an inequality for its last coordinate."""
    axis = AXES[shape.dim - 1]
    if shape.kind == "half-space":
        return f"the half-{'plane' if shape.dim == 2 else 'space'} {axis} > 0"
    what = "strip" if shape.dim == 2 else "layer"
    return f"the {what} {_number(shape.z0)} < {axis} < {_number(shape.z1)}"


def _polygon(shape: Any) -> str:
    """Return the corners, and those of the holes."""
    text = f"the polygon with corners {', '.join(_point(vertex) for vertex in shape.vertices)}"
    for hole in shape.holes:
        text += f", less the hole with corners {', '.join(_point(vertex) for vertex in hole)}"
    return text


REGIONS: dict[str, Callable[[Any], str]] = {
    "interval": _box,
    "rectangle": lambda s: f"the rectangle {_box(s)}",
    "box": lambda s: f"the box {_box(s)}",
    "disc": lambda s: f"the disc of radius {_number(s.radius)} about {_point(s.centre)}",
    "ellipse": lambda s: (
        f"the ellipse with semi-axes {_number(s.semi_axes[0])} (x) and {_number(s.semi_axes[1])} (y) "
        f"about {_point(s.centre)}"
    ),
    "annulus": _annulus,
    "sector": lambda s: (
        f"the sector 0 < r < {_number(s.radius)}, 0 < theta < {_number(math.degrees(s.opening))} degrees"
    ),
    "half-disc": lambda s: (
        f"the half x > {_number(s.centre[0])} of the disc of radius {_number(s.radius)} about "
        f"{_point(s.centre)}"
    ),
    "half-annulus": lambda s: (
        f"the half x > {_number(s.centre[0])} of the annulus between the circles of radius "
        f"{_number(s.inner)} and {_number(s.outer)} about {_point(s.centre)}"
    ),
    "confocal-parabolas": lambda s: (
        f"the region above the axis of the parabolas about the focus {_point(s.focus)} whose vertices lie "
        f"{_number(s.right)} to its right and {_number(s.left)} to its left"
    ),
    "cone-section": lambda s: (
        f"the part of the disc of radius {_number(s.radius)} about the origin with x > 0 and less than "
        f"{_number(math.degrees(s.half_angle))} degrees from the y axis"
    ),
    "prism": lambda s: f"the prism over {region_in_words(s.base)}, {_number(s.z0)} < z < {_number(s.z1)}",
    "notched-cube": lambda s: (
        f"the cube (-{_number(s.size)}, {_number(s.size)})^3 without its octant x, y, z > 0"
    ),
    "l-shape": lambda s: (
        f"the L-shape (-{_number(s.size)}, {_number(s.size)})^2 without its quadrant x > 0, y < 0"
    ),
    "polygon": _polygon,
    "ball": lambda s: f"the ball of radius {_number(s.radius)} about {_point(s.centre)}",
    "spherical-shell": lambda s: (
        f"the shell between the spheres of radius {_number(s.inner)} and {_number(s.outer)} about "
        f"{_point(s.centre)}"
    ),
    "elliptic-ring": _ring,
    "spheroidal-shell": _ring,
    "pair-shell": lambda s: (
        f"the ball of radius {_number(s.outer)} about {_point(s.centre)} without two balls of radius "
        f"{_number(s.radius)}, {_number(s.gap)} apart along z"
    ),
    "spheroid": lambda s: f"the spheroid with semi-axes {_point(s.semi_axes)} about {_point(s.centre)}",
    "screen": lambda s: f"the screen from {_point(s.start)} to {_point(s.stop)}",
    "round-plate": lambda s: f"the plate of radius {_number(s.radius)} about {_point(s.centre)}, across z",
    "exterior": _exterior,
    "half-space": _layer,
    "strip": _layer,
    "cylinder": lambda s: (
        f"the cylinder x^2 + y^2 < {_number(s.radius)}^2, {_number(s.z0)} < z < {_number(s.z1)}"
    ),
}


def _number(number: float) -> str:
    """Return a number in at most twelve digits."""
    return f"{number + 0.0:.12g}"


def _point(point: Sequence[float]) -> str:
    """Return (0.1, 0)."""
    return f"({', '.join(_number(float(c)) for c in point)})"
