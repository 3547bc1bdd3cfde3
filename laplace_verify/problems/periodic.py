"""Periodic pieces: two flat sides that are the same place in space, joined by a shift s.

If x lies on a piece, x + s lies on its partner, whose outward normal there is the opposite one, and

    u(x + s) = u(x),    n . K grad u (x + s) = - n . K grad u (x),

with n the outward normal at either place: what leaves through one piece enters through the other. Such pieces
have no data. They bound nothing in space, and where they meet another piece there is no corner: the two ends
are one point, at which the interior angles add up.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from typing import TypeAlias

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.errors import ProblemError
from laplace_verify.geometry import Boundary, Junction, Shape
from laplace_verify.problems.boundary_values import BoundaryField
from laplace_verify.problems.conditions import PieceKind
from laplace_verify.problems.coordinates import Coordinates
from laplace_verify.problems.materials import Materials

__all__ = ["Join", "check_continued", "check_materials", "glued_exponent", "joins_of"]

Join: TypeAlias = tuple[str, tuple[float, ...]]  # partner and shift
SAMPLED = 64  # points of a piece
CLOSE = 1e-9  # of the shape's size, of the angle pi, of values
CONTINUED = 1e-8  # largest difference of values and fluxes, relative to their size


def joins_of(shape: Shape, names: Iterable[str], coordinates: Coordinates = "cartesian") -> dict[str, Join]:
    """Return the partner of every periodic piece and the shift that leads to it.

    Raises
    ------
    ProblemError
        If a piece is not flat, no other one of `names` faces it, or the coordinates are not Cartesian.

    Examples
    --------
    >>> from laplace_verify.geometry import Rectangle
    >>> joins_of(Rectangle((0, 0), (2, 1)), ["left", "right"])
    {'left': ('right', (2.0, 0.0)), 'right': ('left', (-2.0, 0.0))}
    """
    periodic = [shape.pieces[name] for name in names]
    if periodic and coordinates != "cartesian":
        raise ProblemError(f"periodic pieces need Cartesian coordinates, these are {coordinates}")
    found: dict[str, Join] = {}
    for piece in periodic:
        shifts = {other.name: _shift(shape, piece, other) for other in periodic if other is not piece}
        facing = [(name, shift) for name, shift in shifts.items() if shift is not None]
        if len(facing) != 1:
            raise ProblemError(
                f"piece {piece.name!r} is periodic, but none of the other periodic pieces "
                f"({', '.join(shifts) or 'there is none'}) is its copy on the opposite side; both pieces of "
                'a pair must be flat and declared, as in {"left": "periodic", "right": "periodic"}'
            )
        found[piece.name] = facing[0]
    return found


def _shift(shape: Shape, piece: Boundary, other: Boundary) -> tuple[float, ...] | None:
    """Return the shift that moves a flat piece onto another one that faces away from it, if there is one."""
    if piece.curved or other.curved or abs(piece.measure - other.measure) > CLOSE * piece.measure:
        return None
    points, normals, _ = piece.sample(SAMPLED)
    shift = other.sample(SAMPLED)[0].mean(axis=0) - points.mean(axis=0)
    moved = points + shift
    opposite = np.abs(other.normals(moved) + normals).max() <= CLOSE
    if not (opposite and other.contains(moved).all()):
        return None
    tiny = CLOSE * shape.size
    return tuple(0.0 if abs(step) <= tiny else step for step in shift.tolist())


def check_materials(shape: Shape, joins: Mapping[str, Join], conductivity: object) -> None:
    """Refuse regions that do not continue from a periodic piece onto its partner.

    Raises
    ------
    ProblemError
        Naming piece and point.
    """
    if not isinstance(conductivity, Materials):
        return
    for name, (partner, shift) in joins.items():
        points = shape.pieces[name].sample(SAMPLED)[0]
        differs = conductivity.at(points) != conductivity.at(points + np.array(shift))
        if differs.any():
            raise ProblemError(
                f"the conductivity does not continue from the periodic piece {name!r} at "
                f"{tuple(points[int(np.argmax(differs))].tolist())} onto its partner {partner!r}"
            )


def check_continued(joins: Mapping[str, Join], seen: Mapping[str, BoundaryField], shape: Shape) -> None:
    """Refuse a field whose value or flux does not continue from a periodic piece onto its partner.

    Raises
    ------
    ProblemError
        Naming the pieces, the point and the two numbers.
    """
    for name, (partner, shift) in joins.items():
        points = shape.pieces[name].sample(SAMPLED)[0]
        moved = shape.pieces[partner].project(points + np.array(shift))
        here, there = seen[name], seen[partner]
        for what, one, two, size in (
            ("u", here.value(points), there.value(moved), here.magnitudes(points)[0]),
            ("n . K grad u", here.flux(points), -there.flux(moved), here.magnitudes(points)[1]),
        ):
            gap = np.abs(one - two)
            row = int(np.argmax(gap))
            if not gap[row] <= CONTINUED * size:
                raise ProblemError(
                    f"the field is not periodic: {what} is {one[row]:.9g} at {tuple(points[row].tolist())} "
                    f"on {name!r} and {two[row]:.9g} at the same place on {partner!r}, along the same normal"
                )


def glued_exponent(
    shape: Shape, junction: Junction, kinds: Mapping[str, PieceKind], joins: Mapping[str, Join]
) -> float:
    """Return the exponent at a junction with a periodic piece, after the piece is joined to its partner.

    Raises
    ------
    ProblemError
        If the partner meets no piece where this one does.
    """
    name, other = junction.pieces if junction.pieces[0] in joins else junction.pieces[::-1]
    if other in joins:
        return math.inf  # inside, where two joins cross
    partner, shift = joins[name]
    twin = next(
        (
            candidate
            for candidate in shape.junctions
            if partner in candidate.pieces
            and _same(candidate.points, junction.points + np.array(shift), shape)
        ),
        None,
    )
    if twin is None:
        raise ProblemError(
            f"periodic piece {name!r} meets {other!r}, but its partner {partner!r} meets nothing there"
        )
    beyond = next(piece for piece in twin.pieces if piece != partner)
    opening = junction.opening + twin.opening
    fixed = [kinds[other] == "dirichlet", kinds[beyond] == "dirichlet"]
    if fixed[0] != fixed[1]:
        return math.pi / (2.0 * opening)
    if kinds[other] == kinds[beyond] and abs(opening - math.pi) < CLOSE:
        return math.inf
    return math.pi / opening


def _same(first: Array, second: Array, shape: Shape) -> bool:
    """Return whether two sets of points are the same, in whatever order."""
    if first.shape != second.shape:
        return False
    gaps = np.abs(first[:, None, :] - second[None, :, :]).max(axis=2).min(axis=1)
    return bool(gaps.max() <= 1e-6 * shape.size)
