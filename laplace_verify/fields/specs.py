"""Fields as plain data: ``{"kind": "wedge", "alpha": "2/3", ...}``, exact in both directions.

Numbers are written as int, float (the shortest decimal that gives the same binary value back) or as a
fraction in a string. Nothing is executed when a specification is read: each kind names a dataclass, whose
parameters are validated as if a user had typed them.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import fields, is_dataclass
from fractions import Fraction
from typing import Any, TypeVar

from laplace_verify.errors import FieldError, nearest_names
from laplace_verify.fields.base import Field
from laplace_verify.fields.partitions import Partition, partition_from_spec
from laplace_verify.fields.singular import Singularity

__all__ = ["from_spec", "registered", "to_spec"]

FAMILIES: dict[str, type[Field]] = {}
DEEPEST = 40  # levels of nesting: a specification may come from a stranger

F = TypeVar("F", bound=type[Field])


def registered(kind: str) -> Callable[[F], F]:
    """Return a class decorator that makes a family known to `from_spec` under `kind`."""

    def register(family: F) -> F:
        family.kind = kind
        FAMILIES[kind] = family
        return family

    return register


def to_spec(field: Field) -> dict[str, Any]:
    """Return the kind and the parameters of a field as plain data."""
    family: Any = type(field)
    if not (is_dataclass(family) and field.kind):
        raise FieldError(f"{field.formula} cannot be written to a file: its family is not registered")
    return {"kind": field.kind, **{f.name: _plain(getattr(field, f.name)) for f in fields(family)}}


def from_spec(spec: dict[str, Any]) -> Field:
    """Return the field that `Field.spec` described.

    >>> from laplace_verify import fields
    >>> u = fields.wedge("2/3").shifted(("0.1", 0)) + 2 * fields.polynomial(3, part="im")
    >>> from_spec(u.spec()) == u
    True

    Raises
    ------
    FieldError
        If the data name no known kind, miss a parameter, have one too many, or a parameter is out of range.
    """
    return _read(spec, 0)


def _read(spec: Any, depth: int) -> Field:
    """Return the field of a specification nested `depth` levels deep."""
    if depth > DEEPEST:
        raise FieldError(f"a field specification may be nested {DEEPEST} levels deep, this one is deeper")
    if not isinstance(spec, dict) or not isinstance(spec.get("kind"), str):
        raise FieldError(f'a field specification must be a dict with a "kind", got {str(spec)[:80]}')
    kind = spec["kind"]
    if kind not in FAMILIES:
        raise FieldError(f"unknown kind of field {kind[:60]!r}; {nearest_names(kind[:60], FAMILIES)}")
    parameters = {str(name): _parameter(value, depth) for name, value in spec.items() if name != "kind"}
    try:
        return FAMILIES[kind]._from_parameters(parameters)
    except FieldError:
        raise
    except (TypeError, ValueError) as cause:
        raise FieldError(
            f"a field of kind {kind!r} cannot be made of {sorted(parameters)}: {cause}"
        ) from cause


def _parameter(value: Any, depth: int) -> Any:
    """Return a parameter with lists as tuples and nested specifications as fields."""
    if isinstance(value, list | tuple):
        if depth > DEEPEST:
            raise FieldError(f"a field specification may be nested {DEEPEST} levels deep, this one is deeper")
        return tuple(_parameter(item, depth + 1) for item in value)
    if isinstance(value, dict) and set(value) == {"point", "exponent", "as"}:
        return Singularity(point=value["point"], exponent=value["exponent"], kind=value["as"])
    if isinstance(value, dict) and isinstance(value.get("partition"), str):
        return partition_from_spec(value)
    return _read(value, depth + 1) if isinstance(value, dict) else value


def _plain(value: Any) -> Any:
    """Return a parameter as plain data."""
    if isinstance(value, Field | Partition):
        return value.spec()
    if isinstance(value, Fraction):
        return f"{value.numerator}/{value.denominator}"
    if isinstance(value, tuple):
        return [_plain(item) for item in value]
    if isinstance(value, Singularity):
        return {"point": list(value.point), "exponent": _plain(value.exponent), "as": value.kind}
    if isinstance(value, float) and not math.isfinite(value):
        raise FieldError(f"{value} cannot be written to a file; give a finite number")
    if value is None or isinstance(value, str | int | float):
        return value
    raise FieldError(f"a {type(value).__name__} cannot be written to a file; give a formula string")
