"""Cases as JSON: one file a case, readable without Python, the same bytes for the same case.

    format, format_version    "laplace-verify case", 2
    id, title, statement, reading, tags, sources
    dim, shape                {"kind": "rectangle", "lower": [0, 0], "upper": [1, 1], "split": {"top": [0.4]}}
    conductivity              a number, a matrix, or {"regions": partition, "values": region -> number}
    coordinates               "axisymmetric" (points are (r, z)), "radial-cylinder" or "radial-sphere" (points
                              are r); left out if Cartesian. Pieces called "axis" carry no condition
    conditions                piece -> {"kind": "robin", "alpha": 3.0}; "data" too in ill-posed problems,
                              "partner" of a periodic piece
    constant                  null, or {"kind": "mean" | "point", "point": null | [x, y], "value": v}
    exact                     {"formula": text, "basis": why its digits can be believed, "field": parameters}
    regularity                exponents (null: smooth, no limit), singular points, jumps, smallest length
    quantities                name -> {"kind", "where", "value", "radius", "basis", "unit"}, "place" of an
                              exit gradient, "direction" of a flux density; numbers as decimal strings,
                              "confirmed" by quadrature at two orders where no basis is given
    units                     of length, value, conductivity; "" if dimensionless
    stored                    list of {"place": words, "point", "value", "gradient", "radius",
                              "gradient_radius", "basis"}: u and every component of grad u at an exact point
                              differ from the truth by no more than the radius; decimal strings
    ill_posed                 why the problem has no solution or several; left out if it has one. The data are
                              then given, and exact and regularity are null
    at_infinity, window       unbounded shapes only: "decay", "bounded", ["log", charge] or ["flow", vector,
                              circulation], and the bounded shape over which norms are taken

Reading derives data, regularity and quantities again from the exact field and refuses a file that disagrees
with them, so a file edited by hand cannot bring a wrong answer into a study.
"""

from __future__ import annotations

import math
import sys
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import replace
from typing import Any

import msgspec
import numpy as np

from laplace_verify.errors import LaplaceVerifyError, RecordError
from laplace_verify.fields import from_spec
from laplace_verify.files import json_content
from laplace_verify.geometry import Shape, shape_from_spec, shape_to_spec
from laplace_verify.problems.assembly import Conductivity
from laplace_verify.problems.case import Case, case
from laplace_verify.problems.case_file import (
    CaseFile,
    ConditionEntry,
    ExactEntry,
    QuantityEntry,
    RegularityEntry,
    StoredEntry,
    UnitsEntry,
    constant_from_file,
    constant_to_file,
    infinity_to_file,
)
from laplace_verify.problems.conditions import Condition
from laplace_verify.problems.ill_posed import ill_posed_case
from laplace_verify.problems.materials import Materials
from laplace_verify.problems.problem import problem
from laplace_verify.problems.quantities import Quantity, QuantitySpec, Where
from laplace_verify.problems.quantity_values import CLOSED_FORM
from laplace_verify.problems.regularity import Regularity
from laplace_verify.problems.stored import StoredNumber, StoredValue
from laplace_verify.problems.units import Units

__all__ = ["FORMAT", "FORMAT_VERSION", "case_from_json", "case_to_json"]

FORMAT = "laplace-verify case"
FORMAT_VERSION = 2
READABLE = (1, 2)  # version 1 has neither places nor radii of gradients
STORED = 1e-8  # of values with the field in float64, whose points are rounded where gradients are large
EPS = sys.float_info.epsilon
AGREEMENT = 1e-9  # of exponents and lengths in a file with those derived


def case_to_json(case: Case) -> bytes:
    """Return the JSON of a case: UTF-8, two blanks of indentation, a newline at the end.

    Raises
    ------
    RecordError
        If a part cannot be written down: an exact field or Robin's alpha that is a Python function.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> from laplace_verify.geometry import Interval
    >>> from laplace_verify.problems import case
    >>> text = case_to_json(case(Interval(0, 1), {}, fields.affine((2,))))
    >>> text == case_to_json(case_from_json(text))
    True
    """
    posed = case.problem
    k = posed.conductivity
    solved = posed.ill_posed is None
    content = CaseFile(
        format=FORMAT,
        format_version=FORMAT_VERSION,
        id=case.id,
        title=case.title,
        statement=case.statement,
        reading=case.reading,
        tags=sorted(case.tags),
        sources=list(case.sources),
        dim=case.dim,
        shape=shape_to_spec(posed.shape),
        conductivity=_conductivity_to_file(k),
        coordinates=posed.coordinates,
        conditions={p.name: _condition(case, p.name) for p in posed.pieces if p.kind != "axis"},
        constant=constant_to_file(posed.constant),
        exact=_exact_to_file(case) if solved else None,
        regularity=_regularity_to_file(case.regularity) if solved else None,
        quantities={name: _quantity_to_file(q) for name, q in case.quantities.items()},
        units=UnitsEntry(
            length=case.units.length, value=case.units.value, conductivity=case.units.conductivity
        ),
        stored=[
            StoredEntry(**{name: getattr(s, name) for name in StoredEntry.__struct_fields__})
            for s in case.stored
        ],
        at_infinity=infinity_to_file(posed.at_infinity),
        window=msgspec.UNSET if case.window is None else shape_to_spec(case.window),
        ill_posed=msgspec.UNSET if posed.ill_posed is None else posed.ill_posed,
    )
    return msgspec.json.format(msgspec.json.encode(content), indent=2) + b"\n"


def case_from_json(data: bytes, path: str = "case file") -> Case:
    """Return the case that a JSON file describes.

    Parameters
    ----------
    data
        Content of the file.
    path
        Its name, for messages.

    Raises
    ------
    RecordError
        If the file is no case file, or a field is missing, unknown, malformed, or disagrees with what
        follows from the exact field; file and field are named.
    """
    content = _decoded(data, path)
    with _named(path, "shape"):
        shape = shape_from_spec(content.shape)
    if shape.dim != content.dim:
        raise RecordError(f"{path}: dim is {content.dim}, but the shape has dimension {shape.dim}")
    with _named(path, "conditions"):
        conditions = {
            n: Condition(kind=c.kind, alpha=c.alpha, data=c.data) for n, c in content.conditions.items()
        }
    if content.ill_posed is not msgspec.UNSET:
        return _ill_posed(content, path, shape, conditions, content.ill_posed)
    if content.exact is None or content.regularity is None:
        missing = "exact" if content.exact is None else "regularity"
        raise RecordError(f"{path}: {missing} is null, which it may be in ill-posed problems only")
    with _named(path, "exact.field"):
        field = from_spec(content.exact.field)
    specs = {
        name: QuantitySpec(
            kind=q.kind, where=_where(q.where), unit=q.unit, direction=q.direction, place=q.place
        )
        for name, q in content.quantities.items()
    }
    with _named(path, "problem"):
        made = case(
            shape,
            conditions,
            field,
            _conductivity_from_file(content.conductivity),
            id=content.id,
            title=content.title,
            statement=content.statement,
            tags=content.tags,
            sources=content.sources,
            reading=content.reading,
            quantities=specs,
            constant=constant_from_file(content.constant),
            at_infinity=None if content.at_infinity is msgspec.UNSET else content.at_infinity,
            window=None if content.window is msgspec.UNSET else shape_from_spec(content.window),
            coordinates=content.coordinates,
        )
    _check_partners(path, content, made)
    _check_regularity(path, content.regularity, made.regularity)
    with _named(path, "stored"):
        stored = tuple(StoredValue(**msgspec.structs.asdict(s)) for s in content.stored)
        _check_stored(made, stored)
    return replace(
        made,
        quantities={
            name: _quantity_from_file(path, name, q, made.quantities[name])
            for name, q in content.quantities.items()
        },
        units=Units(**msgspec.structs.asdict(content.units)),
        stored=stored,
    )


def _check_stored(made: Case, stored: tuple[StoredValue, ...]) -> None:
    """Refuse stored values at points outside the shape, or that are not those of the exact field."""
    for value in stored:
        if len(value.point) != made.dim:
            raise RecordError(f"point {value.point} needs {made.dim} coordinates")
    if not stored:
        return
    points = np.array([[float(c) for c in value.point] for value in stored])
    inside, found = made.problem.shape.contains(points), made.exact.value(points)
    for value, within, expected in zip(stored, inside.tolist(), found.tolist(), strict=True):
        if not within:
            raise RecordError(f"the point {value.point} lies outside the shape")
        if not abs(float(value.value) - expected) <= float(value.radius) + STORED * (1.0 + abs(expected)):
            raise RecordError(
                f"value at {value.point} is {value.value} +- {value.radius}, the exact field gives "
                f"{expected!r}"
            )


def _ill_posed(
    content: CaseFile, path: str, shape: Shape, conditions: dict[str, Condition], why: str
) -> Case:
    """Return the ill-posed case of a file."""
    for name in ("exact", "regularity", "quantities", "stored"):
        if getattr(content, name):
            raise RecordError(
                f"{path}: {name} must be null or empty, for the problem is said to be ill-posed"
            )
    with _named(path, "problem"):
        posed = problem(
            shape,
            conditions,
            _conductivity_from_file(content.conductivity),
            constant=constant_from_file(content.constant),
            coordinates=content.coordinates,
            name=content.id,
            ill_posed=why,
        )
        return ill_posed_case(
            posed,
            title=content.title,
            statement=content.statement,
            reading=content.reading,
            tags=content.tags,
            sources=content.sources,
        )


def _decoded(data: bytes, path: str) -> CaseFile:
    """Return the typed content of a file."""
    head = json_content(data, path)
    if not isinstance(head, dict) or head.get("format") != FORMAT:
        raise RecordError(f'{path}: not a case file; it must hold an object with "format": "{FORMAT}"')
    if head.get("format_version") not in READABLE:
        known = " and ".join(map(str, READABLE))
        raise RecordError(
            f"{path}: format_version {head.get('format_version')!r} cannot be read, only {known}"
        )
    try:
        return msgspec.convert(head, CaseFile)
    except msgspec.ValidationError as cause:
        raise RecordError(f"{path}: {cause}") from cause


@contextmanager
def _named(path: str, part: str) -> Iterator[None]:
    """Turn errors of this package into RecordError that names file and field."""
    try:
        yield
    except LaplaceVerifyError as cause:
        raise RecordError(f"{path}: {part}: {cause}") from cause


def _condition(case: Case, name: str) -> ConditionEntry:
    """Return kind and alpha of a piece."""
    condition = case._conditions[name]
    alpha = condition.alpha
    if alpha is not None and not isinstance(alpha, float | str):
        raise RecordError(
            f"case {case.id!r}: Robin's alpha of piece {name!r} is a function, which cannot be written "
            f"to a file; "
            "give a number or a formula string"
        )
    data = condition.data
    if data is not None and not isinstance(data, float | str):
        raise RecordError(
            f"case {case.id!r}: the data of piece {name!r} are a function, which cannot be written to a "
            "file; give a number or a formula string"
        )
    partner = case.problem.pieces[name].partner
    return ConditionEntry(kind=condition.kind, alpha=alpha, data=data, partner=partner)


def _exact_to_file(case: Case) -> ExactEntry:
    with _named(f"case {case.id!r}", "exact"):
        return ExactEntry(formula=case.exact.formula, basis=case.exact.basis, field=case.exact.spec())


def _conductivity_to_file(conductivity: Conductivity) -> float | list[list[float]] | dict[str, Any]:
    if isinstance(conductivity, Materials):
        return conductivity.spec()
    return conductivity if isinstance(conductivity, float) else conductivity.tolist()


def _conductivity_from_file(conductivity: float | list[list[float]] | dict[str, Any]) -> Any:
    return Materials.from_spec(conductivity) if isinstance(conductivity, dict) else conductivity


def _regularity_to_file(regularity: Regularity) -> RegularityEntry:
    return RegularityEntry(
        solution=_exponent(regularity.solution),
        domain=_exponent(regularity.domain),
        singular_points=regularity.singular_points.tolist(),
        jumps=regularity.jumps.tolist(),
        scale=_rounded(regularity.scale),
        interface=regularity.interface,
    )


def _exponent(exponent: float) -> float | None:
    """Return an exponent for a file: null stands for infinity."""
    return _rounded(exponent) if math.isfinite(exponent) else None


def _rounded(number: float) -> float:
    """Return twelve significant digits: the last bits may differ between machines."""
    return float(f"{number:.12g}")


def _check_partners(path: str, content: CaseFile, made: Case) -> None:
    """Refuse a file that joins periodic pieces in another way than the shape does."""
    for name, given in content.conditions.items():
        partner = made.problem.pieces[name].partner
        if given.partner != partner:
            raise RecordError(
                f"{path}: conditions.{name}: partner is {given.partner!r}, in the shape it is {partner!r}"
            )


def _check_regularity(path: str, given: RegularityEntry, derived: Regularity) -> None:
    """Refuse a file whose regularity is not that of its own exact field."""
    expected = _regularity_to_file(derived)
    for name in ("solution", "domain", "scale"):
        a, b = getattr(given, name), getattr(expected, name)
        if (a is None) != (b is None) or (a is not None and not abs(a - b) <= AGREEMENT * abs(b)):
            raise RecordError(f"{path}: regularity.{name} is {a}, but shape and exact field give {b}")
    for name in ("singular_points", "jumps", "interface"):
        a, b = getattr(given, name), getattr(expected, name)
        if a != b:
            raise RecordError(f"{path}: regularity.{name} is {a}, but the exact field has {b}")


def _quantity_to_file(quantity: Quantity) -> QuantityEntry:
    digits = quantity.digits
    where = quantity.where
    return QuantityEntry(
        kind=quantity.kind,
        where=list(where) if isinstance(where, tuple) else where,
        direction=quantity.direction,
        value=repr(quantity.value) if digits is None else digits.value,
        radius=repr(quantity.radius) if digits is None else digits.radius,
        basis="" if digits is None else digits.basis,
        unit=quantity.unit,
        place=quantity.place,
    )


def _where(given: str | list[float | str] | None) -> Where:
    """Return where a quantity of a file belongs; `case` refuses what does not fit its kind."""
    return tuple(given) if isinstance(given, list) else given  # type: ignore[arg-type]


def _quantity_from_file(path: str, name: str, given: QuantityEntry, derived: Quantity) -> Quantity:
    """Return the quantity of a file, refusing one that the exact field does not have."""
    try:
        value, radius = float(given.value), float(given.radius)
    except ValueError as cause:
        raise RecordError(f"{path}: quantities.{name}: value and radius must be decimal strings") from cause
    room = radius + derived.radius + CLOSED_FORM * (1.0 + abs(derived.value))
    if not (abs(value - derived.value) <= room and 0.0 <= radius < math.inf):
        raise RecordError(
            f"{path}: quantities.{name}: value is {given.value} +- {given.radius}, the exact field gives "
            f"{derived.value!r} +- {derived.radius:.2g}"
        )
    if not given.basis:
        return replace(derived, value=value, radius=radius)
    with _named(path, f"quantities.{name}"):
        digits = StoredNumber(value=given.value, radius=given.radius, basis=given.basis)
    return replace(derived, value=value, radius=radius + EPS * abs(value), digits=digits)
