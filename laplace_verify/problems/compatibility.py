"""Pure Neumann problems: the data must balance, and a constant must be fixed.

With flux conditions alone, div(K grad u) = 0 has a solution only if the net flux int g ds over the whole
boundary vanishes (divergence theorem), and then one for every constant. `constant` names the one that is
meant: ``("mean", v)`` gives the mean of u over the shape, ``("point", x, v)`` the value at a point of the
closed shape.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any, Literal, TypeAlias

import numpy as np

from laplace_verify.arrays import Array, as_points
from laplace_verify.errors import FieldError, GeometryError, ProblemError
from laplace_verify.fields import Field
from laplace_verify.geometry import Shape
from laplace_verify.problems.coordinates import Coordinates, metric
from laplace_verify.problems.pieces import Piece

__all__ = [
    "Constant",
    "as_constant",
    "check_balance",
    "check_constant",
    "default_constant",
    "is_pure_neumann",
    "mean",
]

Constant: TypeAlias = tuple[Literal["mean"], float] | tuple[Literal["point"], tuple[float, ...], float]

BALANCE = 1e-8  # of the total |flux|
VANISHING = 1e-14  # of the mean of |u|
AGREEMENT = 1e-8  # of a given constant with the exact field


def is_pure_neumann(pieces: Iterable[Piece]) -> bool:
    """Return whether no piece fixes the constant: all are Neumann, or Robin with alpha = 0 on all of them."""
    for piece in pieces:
        if piece.kind == "dirichlet":
            return False
        if piece.kind != "robin":
            continue
        at = piece.sample(64)[0] if np.isfinite(piece.measure) else piece.boundary.outline(64)
        if (piece.alpha(at) != 0.0).any():
            return False
    return True


def as_constant(constant: Any, shape: Shape) -> Constant:
    """Return `constant` checked: ("mean", v) or ("point", x, v).

    Raises
    ------
    ProblemError
        If it has another form, or x lies outside the shape.
    """
    usage = f'constant must be ("mean", value) or ("point", x, value), got {constant!r}'
    if not isinstance(constant, tuple | list) or not constant or constant[0] not in ("mean", "point"):
        raise ProblemError(usage)
    if len(constant) != (2 if constant[0] == "mean" else 3):
        raise ProblemError(usage)
    try:
        value = float(constant[-1])
    except (TypeError, ValueError) as cause:
        raise ProblemError(usage) from cause
    if not np.isfinite(value):
        raise ProblemError(usage)
    if constant[0] == "mean":
        return ("mean", value)
    place = as_points(np.atleast_2d(constant[1]), shape.dim, error=ProblemError, name="point of constant")
    if not shape.contains(place).all():
        raise ProblemError(f"the point of constant must lie in the shape, got {place[0].tolist()}")
    return ("point", tuple(place[0].tolist()), value)


def check_balance(shape: Shape, pieces: Iterable[Piece], coordinates: Coordinates = "cartesian") -> None:
    """Refuse given flux data whose integral over the boundary does not vanish.

    Raises
    ------
    ProblemError
        If the net flux exceeds 1e-8 of the total |flux| and its own quadrature error; both are stated.
    """
    kept = [piece for piece in pieces if piece.has_data]
    coarse, _ = _net_flux(kept, shape.size / 8.0, coordinates)
    fine, total = _net_flux(kept, shape.size / 16.0, coordinates)
    if not abs(fine) <= max(BALANCE * total, 4.0 * abs(fine - coarse)):
        raise ProblemError(
            f"a pure Neumann problem needs data with zero net flux, but their integral over the boundary is "
            f"{fine:.6g} (integral of |g|: {total:.6g}); correct the data, or prescribe u on some piece"
        )


def _net_flux(pieces: list[Piece], cell: float, coordinates: Coordinates) -> tuple[float, float]:
    """Return the integrals of g and |g| over all pieces."""
    net = total = 0.0
    for piece in pieces:
        points, _, weights = piece.quadrature(9, cell=cell)
        weights = weights * metric(coordinates, points)
        values = piece.data(points)
        net += float(weights @ values)
        total += float(weights @ np.abs(values))
    return net, total


def mean(shape: Shape, field: Field, singular: Array, coordinates: Coordinates = "cartesian") -> float:
    """Return the mean of a field over a shape by quadrature graded towards `singular` (m, d).

    A mean that vanishes but for rounding, relative to the mean of |u|, is 0.
    """
    points, weights = shape.quadrature(12, singular=singular, cell=shape.size / (8 if shape.dim < 3 else 4))
    weights = weights * metric(coordinates, points)
    values = field.value(points)
    total = float(weights @ values)
    if abs(total) <= VANISHING * float(weights @ np.abs(values)):
        return 0.0
    return total / float(weights.sum())


def default_constant(
    shape: Shape, field: Field, singular: Array, coordinates: Coordinates = "cartesian"
) -> Constant:
    """Return ("mean", mean of the exact field)."""
    value = mean(shape, field, singular, coordinates)
    return ("mean", float(f"{value:.14g}"))  # the last bits differ between machines


def check_constant(
    constant: Constant,
    shape: Shape,
    field: Field,
    singular: Array,
    coordinates: Coordinates = "cartesian",
) -> None:
    """Refuse a constant that the exact field does not have.

    Raises
    ------
    ProblemError
        If they differ by more than 1e-8 of the field's size.
    """
    try:
        if constant[0] == "mean":
            exact = mean(shape, field, singular, coordinates)
        else:
            exact = float(field.value([constant[1]])[0])
        scale = float(np.abs(field.value(shape.sample(16, seed=0))).max())
    except (FieldError, GeometryError) as cause:
        raise ProblemError(
            f"the exact field cannot be evaluated for constant {constant!r}: {cause}"
        ) from cause
    if not abs(exact - constant[-1]) <= AGREEMENT * max(scale, abs(exact)):
        raise ProblemError(
            f"constant {constant!r} disagrees with the exact field, whose {constant[0]} value is {exact!r}; "
            "leave constant out or correct it"
        )
