"""The fields of a case file and their types; `schema` says what they mean."""

from __future__ import annotations

from typing import Any, Literal

import msgspec

from laplace_verify.problems.compatibility import Constant
from laplace_verify.problems.conditions import Kind
from laplace_verify.problems.coordinates import Coordinates
from laplace_verify.problems.infinity import AtInfinity
from laplace_verify.problems.quantities import QuantityKind

__all__ = [
    "CaseFile",
    "ConditionEntry",
    "ConstantEntry",
    "ExactEntry",
    "QuantityEntry",
    "RegularityEntry",
    "StoredEntry",
    "UnitsEntry",
    "constant_from_file",
    "constant_to_file",
    "infinity_to_file",
]


class ConditionEntry(msgspec.Struct, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """The condition of a piece; `data` in ill-posed problems, `partner` of periodic pieces only."""

    kind: Kind
    alpha: float | str | None = None
    data: float | str | None = None
    partner: str | None = None


class ConstantEntry(msgspec.Struct, kw_only=True, forbid_unknown_fields=True):
    """What fixes the constant of a pure Neumann problem."""

    kind: Literal["mean", "point"]
    point: tuple[float, ...] | None
    value: float


class ExactEntry(msgspec.Struct, kw_only=True, forbid_unknown_fields=True):
    """The exact solution: for readers, why its digits can be believed, and as parameters."""

    formula: str
    basis: str
    field: dict[str, Any]


class RegularityEntry(msgspec.Struct, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """Exponents, null for infinity, with singular points, jumps and the smallest length."""

    solution: float | None
    domain: float | None
    singular_points: list[list[float]]
    jumps: list[list[float]]
    scale: float
    interface: Literal["", "aligned", "oblique", "curved"] = ""


class QuantityEntry(msgspec.Struct, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """An exact quantity; numbers as decimal strings."""

    kind: QuantityKind
    where: str | list[float | str] | None
    value: str
    radius: str
    basis: str = ""
    unit: str
    direction: tuple[float, ...] = ()
    place: tuple[float, ...] | None = None


class UnitsEntry(msgspec.Struct, kw_only=True, forbid_unknown_fields=True):
    """Units, "" if dimensionless."""

    length: str
    value: str
    conductivity: str


class StoredEntry(msgspec.Struct, kw_only=True, forbid_unknown_fields=True):
    """A reference value with its radius; numbers as decimal strings."""

    place: str = ""
    point: tuple[str, ...]
    value: str
    gradient: tuple[str, ...]
    radius: str
    gradient_radius: str = ""
    basis: str


class CaseFile(msgspec.Struct, kw_only=True, forbid_unknown_fields=True, omit_defaults=True):
    """All fields of a case file, in their order."""

    format: str
    format_version: int
    id: str
    title: str
    statement: str
    reading: str
    tags: list[str]
    sources: list[str]
    dim: int
    shape: dict[str, Any]
    conductivity: float | list[list[float]] | dict[str, Any]
    coordinates: Coordinates = "cartesian"
    conditions: dict[str, ConditionEntry]
    constant: ConstantEntry | None
    exact: ExactEntry | None
    regularity: RegularityEntry | None
    quantities: dict[str, QuantityEntry]
    units: UnitsEntry
    stored: list[StoredEntry]
    at_infinity: str | list[Any] | msgspec.UnsetType = msgspec.UNSET
    window: dict[str, Any] | msgspec.UnsetType = msgspec.UNSET
    ill_posed: str | msgspec.UnsetType = msgspec.UNSET


def constant_to_file(constant: Constant | None) -> ConstantEntry | None:
    """Return how the constant is written."""
    if constant is None:
        return None
    if constant[0] == "mean":
        return ConstantEntry(kind="mean", point=None, value=constant[1])
    return ConstantEntry(kind="point", point=constant[1], value=constant[2])


def constant_from_file(constant: ConstantEntry | None) -> Any:
    """Return the constant as it was given."""
    if constant is None:
        return None
    if constant.kind == "mean":
        return ("mean", constant.value)
    return ("point", constant.point, constant.value)


def infinity_to_file(at_infinity: AtInfinity) -> str | list[Any] | msgspec.UnsetType:
    """Return how the behaviour at infinity is written."""
    if at_infinity is None:
        return msgspec.UNSET
    if isinstance(at_infinity, str):
        return at_infinity
    return [list(part) if isinstance(part, tuple) else part for part in at_infinity]
