"""The dimensional twin of a dimensionless problem.

With lengths in L, values in U and conductivity in k: x = L x', u = U u', K = k K'. Then fluxes n . K grad u
scale by k U / L, Robin's alpha by k / L, integrals of the flux by k U L^(d-2), the energy by k U^2 L^(d-2);
other quantities as `units.exponents` says. The twin's quantities keep no more digits than float64 has.
"""

from __future__ import annotations

import math
from dataclasses import fields, replace
from typing import Any, TypeAlias

import numpy as np

from laplace_verify.errors import ProblemError
from laplace_verify.geometry import Shape
from laplace_verify.problems.assembly import Conductivity, as_conductivity
from laplace_verify.problems.compatibility import Constant
from laplace_verify.problems.conditions import Condition
from laplace_verify.problems.data import PointFunction, Rescaled
from laplace_verify.problems.materials import Materials
from laplace_verify.problems.quantities import Quantity
from laplace_verify.problems.regularity import Regularity
from laplace_verify.problems.units import Units, exponents

__all__ = [
    "Scale",
    "as_scale",
    "scaled_condition",
    "scaled_conductivity",
    "scaled_constant",
    "scaled_quantity",
    "scaled_regularity",
    "scaled_shape",
]

Scale: TypeAlias = float | tuple[float, str] | None

LENGTHS = frozenset({"a", "b", "lower", "upper", "centre", "radius", "semi_axes", "inner", "outer"}) | {
    "inner_centre", "size", "vertices", "holes", "z0", "z1", "start", "stop", "body", "gap", "focus", "right",
    "left", "base",
}  # fmt: skip
EPS = float(np.finfo(np.float64).eps)
DRIVES = {"torsion constant": -2, "added mass": -1}  # power of length of twist and motion, others are values
RATIOS = frozenset({"opening", "half_angle", "splits", "names", "dim"})  # angles, fractions and words stay


def as_scale(given: Any, name: str, unit: str) -> tuple[float, str]:
    """Return factor and unit of an argument that is a positive number, (number, unit) or None.

    Raises
    ------
    ProblemError
        If it is none of these.
    """
    if given is None:
        return 1.0, unit
    factor = given
    if isinstance(given, tuple) and len(given) == 2 and isinstance(given[1], str):
        factor, unit = given
    valid = isinstance(factor, int | float | np.integer | np.floating) and not isinstance(factor, bool)
    if not valid or not 0.0 < factor < math.inf:
        raise ProblemError(
            f'{name} must be a positive number or (number, unit) such as (0.2, "m"), got {given!r}'
        )
    return float(factor), unit


def scaled_shape(shape: Shape, length: float) -> Shape:
    """Return the shape with all its lengths multiplied by `length`; angles and fractions of splits stay.

    >>> from laplace_verify.geometry import Rectangle
    >>> scaled_shape(Rectangle((0, 0), (2, 1)), 0.5).upper
    (1.0, 0.5)
    """
    changes: dict[str, Any] = {}
    for field in fields(shape):
        if field.name in LENGTHS:
            changes[field.name] = _times(getattr(shape, field.name), length)
        elif field.name not in RATIOS:
            raise ProblemError(
                f"{shape.kind!r} cannot be scaled: whether {field.name!r} is a length is unknown"
            )
    return replace(shape, **changes)


def _times(value: Any, length: float) -> Any:
    """Return nested tuples of numbers, or shapes, times `length`."""
    if isinstance(value, Shape):
        return scaled_shape(value, length)
    if value is None:
        return None
    if isinstance(value, tuple | list):
        return tuple(_times(item, length) for item in value)
    return value * length


def scaled_condition(
    name: str, condition: Condition, dim: int, length: float, conductivity: float
) -> Condition:
    """Return the condition with alpha times conductivity / length."""
    if condition.alpha is None:
        return condition
    factor = conductivity / length
    if isinstance(condition.alpha, float):
        return replace(condition, alpha=condition.alpha * factor)
    function = PointFunction(condition.alpha, dim, f"Robin's alpha of piece {name!r}")
    return replace(condition, alpha=Rescaled(function, length=length, factor=factor))


def scaled_conductivity(conductivity: Conductivity, length: float, factor: float) -> Conductivity:
    """Return the conductivity of a dimensional twin, from lengths and conductivity as they are."""
    if isinstance(conductivity, Materials):
        return conductivity.scaled(length, factor)
    array = np.asarray(conductivity)
    return as_conductivity(array * factor, len(array) if array.ndim else 1)


def scaled_constant(constant: Constant | None, length: float, value: float) -> Constant | None:
    """Return the constant of a pure Neumann problem in the units of the twin."""
    if constant is None:
        return None
    if constant[0] == "mean":
        return ("mean", constant[1] * value)
    return ("point", tuple(c * length for c in constant[1]), constant[2] * value)


def scaled_regularity(regularity: Regularity, length: float) -> Regularity:
    """Return the regularity with points and scale multiplied by `length`; exponents stay."""
    return replace(
        regularity,
        singular_points=regularity.singular_points * length,
        jumps=regularity.jumps * length,
        scale=regularity.scale * length,
    )


def scaled_quantity(
    quantity: Quantity, dim: int, length: float, value: float, conductivity: float, units: Units
) -> Quantity:
    """Return the quantity in the units of the twin."""

    def of(kind: str) -> float:
        good, high, big = exponents(kind, dim)
        return conductivity**good * value**high * length**big

    factor, where = of(quantity.kind), quantity.where
    pieces = isinstance(where, str) or (isinstance(where, tuple) and isinstance(where[0], str))
    drive = value * length ** DRIVES.get(quantity.kind, 0)
    return replace(
        quantity,
        value=quantity.value * factor,
        # the factor itself is rounded, and the product once more
        radius=quantity.radius * factor + 8 * EPS * abs(quantity.value * factor),
        unit=units.of(quantity.kind, dim),
        where=where if pieces else _times(where, length),
        place=_times(quantity.place, length),
        drive=tuple(d * drive for d in quantity.drive),
        digits=None,
    )
