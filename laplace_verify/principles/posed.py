"""Problems as they are drawn: the few parameters they were made of, so that they can be written as code.

A `Problem` holds data as functions, which cannot be read back; a `Posed` one is still the shape, the
names of the conditions and a field or a formula, and `code` writes the Python that makes it again.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from dataclasses import field as dataclass_field
from typing import Any

import numpy as np

from laplace_verify.fields import Field
from laplace_verify.fields.partitions import Layers
from laplace_verify.geometry import Shape
from laplace_verify.problems import Case, Materials, Problem, case, dirichlet, problem, robin
from laplace_verify.problems.coordinates import Coordinates

__all__ = ["Conductivity", "Posed", "field_code"]

Conductivity = float | tuple[tuple[float, ...], ...]

ON_PIECE = 33  # points a piece at which the size of the data is taken


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Posed:
    """div(K grad u) = 0 with the data of a field, or with a formula as Dirichlet data on the whole boundary.

    Attributes
    ----------
    shape : Shape
    conditions : mapping
        Piece name -> "neumann" or Robin's alpha; pieces not named are Dirichlet.
    conductivity : float or tuple of rows
    field : Field or None
        The exact solution, if there is one.
    data : str
        Otherwise the formula of the Dirichlet data.
    materials : Materials or None
        Layers in place of one conductivity; the field then has an affine part in each.
    coordinates : str
        As in `laplace_verify.case`.
    beside : mapping
        Problems that are solved too, by the names that their answers have in code.
    note : str
        In what relation they stand, in words.
    drawn : object
        What the law that drew it needs to know again when it judges: a motion, a place on the boundary.
    """

    shape: Shape
    conditions: Mapping[str, str | float]
    conductivity: Conductivity = 1.0
    field: Field | None = None
    data: str = ""
    materials: Materials | None = None
    coordinates: Coordinates = "cartesian"
    beside: Mapping[str, Posed] = dataclass_field(default_factory=dict)
    note: str = ""
    drawn: Any = None

    def case(self) -> Case:
        """Return the case with its exact solution; for problems made from a field."""
        if self.field is None:
            raise TypeError("a problem with a formula as data has no exact solution")
        kinds = {
            name: kind if isinstance(kind, str) else robin(kind) for name, kind in self.conditions.items()
        }
        k = self.conductivity if self.materials is None else self.materials
        return case(self.shape, kinds, self.field, k, coordinates=self.coordinates, id="drawn-problem")

    def problem(self) -> Problem:
        """Return the problem as a solver is handed it."""
        if self.field is not None:
            return self.case().problem
        given = {piece.name: dirichlet(self.data) for piece in self.shape.pieces}
        return problem(self.shape, given, self.conductivity, name="drawn-problem")

    @property
    def size(self) -> float:
        """The largest value of the field, or of the data, on the boundary: the unit of all violations."""
        outline = self.shape.outline(ON_PIECE)
        if self.field is not None:
            values = self.field.value(np.concatenate(list(outline.values())))
        else:
            values = np.concatenate([piece.data(outline[piece.name]) for piece in self.problem().pieces])
        return float(np.max(np.abs(values))) or 1.0

    def words(self) -> str:
        """Return one line that a reader can picture."""
        data = f"u = {self.field.formula}" if self.field is not None else f"u = {self.data} on the boundary"
        sides = [
            f"{name} {kind if isinstance(kind, str) else f'robin with alpha = {kind:g}'}"
            for name, kind in self.conditions.items()
        ]
        k = self.conductivity
        material = [] if k == 1 else [f"K = {[list(row) for row in k] if isinstance(k, tuple) else f'{k:g}'}"]
        if self.materials is not None:
            layers = zip(self.materials.names, self.materials.conductivities, strict=True)
            material = ["K = " + " and ".join(f"{number:g} in {name}" for name, number in layers)]
        place = f"on {self.shape!r}"
        if self.coordinates != "cartesian":
            place += f" in {self.coordinates} coordinates"
        return ", ".join([data, place, *(sides or ["all Dirichlet"]), *material]) + self.note

    def code(self) -> str:
        """Return Python that makes `problem` and, if there is an exact solution, `exact` and `case`.

        Of a problem beside it, called "other", they are `problem_other` and so on.
        """
        others = [other._own_code(f"_{name}") for name, other in self.beside.items()]
        return "\n\n".join([self._own_code(""), *others])

    def _own_code(self, suffix: str) -> str:
        """Return the code of this problem alone, its names ending in `suffix`."""
        k = [] if self.conductivity == 1 else [f"    conductivity={_number(self.conductivity)},"]
        if self.field is None:
            sides = ", ".join(f'"{piece.name}"' for piece in self.shape.pieces)
            conditions = f'    dict.fromkeys([{sides}], lv.dirichlet("{self.data}")),'
            lines = [f"problem{suffix} = lv.problem(", f"    lv.{self.shape!r},", conditions, *k, ")"]
            return "\n".join(lines)
        kinds = ", ".join(
            f'"{name}": ' + (f'"{kind}"' if isinstance(kind, str) else f"lv.robin({_number(kind)})")
            for name, kind in self.conditions.items()
        )
        exact, made = field_code(self.field), []
        if self.materials is not None:
            made = [f"layers = {_layers_code(self.materials)}"]
            parts = ", ".join(_field_code(part) for part in self.field.spec()["parts"])
            exact, k = f"lv.fields.by_region(layers, [{parts}])", ["    layers,"]
        if self.coordinates != "cartesian":
            k = [*k, f'    coordinates="{self.coordinates}",']
        return "\n".join(
            [
                *made,
                f"exact{suffix} = {exact}",
                f"case{suffix} = lv.case(",
                f"    lv.{self.shape!r},",
                f"    {{{kinds}}},",
                f"    exact{suffix},",
                *k,
                ")",
                f"problem{suffix} = case{suffix}.problem",
            ]
        )


def field_code(field: Field) -> str:
    """Return Python that makes a field.

    >>> from laplace_verify import fields
    >>> field_code(2 * fields.affine((1, 0), 3) + fields.polynomial(2, "im"))
    '2 * lv.fields.affine((1, 0), 3) + lv.fields.polynomial(2, "im")'
    """
    return _field_code(field.spec())


def _field_code(spec: Mapping[str, Any]) -> str:
    """Return Python for the specification of a field."""
    match spec:
        case {"kind": "sum", "factors": factors, "terms": terms}:
            parts = [
                _field_code(term) if factor == 1 else f"{_number(factor)} * {_field_code(term)}"
                for factor, term in zip(factors, terms, strict=True)
            ]
            return " + ".join(parts)
        case {"kind": "affine", "coefficients": coefficients, "constant": constant}:
            added = f", {_number(constant)}" if constant else ""
            return f"lv.fields.affine({_number(coefficients)}{added})"
        case {"kind": "polynomial", "degree": degree, "part": part, "centre": [0, 0], "scale": 1}:
            return f'lv.fields.polynomial({degree}, "{part}")'
        case {"kind": "solid", "l": degree, "m": order}:
            return f"lv.fields.solid({degree}, {order})"
        case {"kind": "radial", "about": about, "a": a, "b": b, "radius": 1}:
            return f'lv.fields.radial("{about}", {_number(a)}, {_number(b)})'
        case {"kind": "stretched", "field": field, "tensor": tensor}:
            return f"lv.fields.stretched({_field_code(field)}, {_number(tensor)})"
        case {"kind": "rotated", "field": field, "angle": angle, "axis": axis}:
            about = "" if axis is None else f", {_number(axis)}"
            return f"({_field_code(field)}).rotated({_number(angle)}{about})"
        case {"kind": "scaled", "field": field, "factor": factor}:
            return f"({_field_code(field)}).scaled({_number(factor)})"
        case {"kind": "shifted", "field": field, "vector": vector}:
            return f"({_field_code(field)}).shifted({_number(vector)})"
        case {"kind": "exp-trig", "k": k, "parts": parts} if _plain_wave(spec):
            many = len(k) > 1
            waves = tuple(parts) if many else f'"{parts[0]}"'
            return f"lv.fields.exp_trig({_number(k if many else k[0])}, {waves})"
        case _:
            return f"lv.fields.from_spec({dict(spec)!r})"


def _layers_code(materials: Materials) -> str:
    """Return Python that makes layers."""
    layers = materials.partition
    if not isinstance(layers, Layers):
        raise TypeError("only layers are drawn")
    places = [str(place) for place in layers.positions]
    values = dict(zip(materials.names, materials.conductivities, strict=True))
    return f"lv.layers({_number(layers.direction)}, {places}, {values})"


def _plain_wave(spec: Mapping[str, Any]) -> bool:
    """Whether an exponential wave has everything but its wavenumbers at the defaults."""
    return (
        spec["profile"] == spec["over"] == "exp"
        and not any(spec["centre"])
        and spec["level"] == 0
        and not spec["times_pi"]
    )


def _number(value: Any) -> str:
    """Return a number, a fraction or a nest of them as Python."""
    if isinstance(value, list | tuple):
        inner = ", ".join(_number(item) for item in value)
        return f"({inner},)" if len(value) == 1 else f"({inner})"
    return repr(int(value)) if isinstance(value, float) and value.is_integer() else repr(value)
