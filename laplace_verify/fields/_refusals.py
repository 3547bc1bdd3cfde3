"""Where a field has no value, or no gradient, it says so by name: no plausible number is returned there."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.errors import FieldError
from laplace_verify.fields._inputs import equals, name_of, shortened
from laplace_verify.fields._precision import working

if TYPE_CHECKING:
    from laplace_verify.fields.base import Field
    from laplace_verify.fields.edges import Edge, Line, Ring
    from laplace_verify.fields.sheets import Fan, Sheet
    from laplace_verify.fields.singular import Cut, Singularity

CUT_DIGITS = 250  # of a precise point that may lie on a cut: more than values are asked in


@dataclass(frozen=True, slots=True, eq=False)
class Place:
    """Points (n, d) with their sides, the number of the first one, and the exact point if there is one."""

    points: Array
    side: Array | None
    first: int | None
    exact: Any = None

    def name(self, hit: BoolArray) -> str:
        """Name the first point that is hit."""
        return name_of(self.points, hit, self.first, self.exact)

    def undecided(self, hit: BoolArray) -> BoolArray:
        """Return which of the points hit say no side."""
        return hit if self.side is None else hit & (self.side == 0)


@dataclass(frozen=True, slots=True, eq=False)
class Marks:
    """A field and where it is not smooth: asked of it once, not block by block."""

    field: Field
    singularities: tuple[Singularity, ...]
    edges: tuple[Edge | Line | Ring, ...]
    sheets: tuple[Fan | Sheet, ...]
    cuts: tuple[Cut, ...]

    @classmethod
    def of(cls, field: Field) -> Marks:
        """Ask a field."""
        return cls(field, field.singularities, field.edges, field.sheets, field.cuts)


def refuse(marks: Marks, place: Place, *, derivative: bool) -> None:
    """Raise FieldError at the first point where the field has no value (or no gradient)."""
    field = marks.field
    _at_singular_points(marks, place, derivative)
    _on_edges(marks, place, derivative)
    _on_sheets(marks, place, derivative)
    _on_cuts(marks, place)
    if derivative and field.regions:
        _on_interfaces(field, place)
    with np.errstate(over="ignore"):  # points far out, where an infinite distance tells enough
        valid = field._valid(place.points)
    if not valid.all():
        raise FieldError(f"{shortened(field.formula)} is not defined at {place.name(~valid)}")


def refuse_infinite(field: Field, place: Place, results: Array) -> None:
    """Raise FieldError at the first point whose result is not finite."""
    finite = np.isfinite(results)
    if not finite.all():
        bad = np.asarray(~finite.reshape(len(place.points), -1).all(axis=1))
        raise FieldError(
            f"{shortened(field.formula)} is not a finite float64 at {place.name(bad)}: "
            "the point is singular or too far out"
        )


def _at_singular_points(marks: Marks, place: Place, derivative: bool) -> None:
    field = marks.field
    for singularity in marks.singularities:
        hit = equals(place.points, singularity.point, place.exact)
        if not hit.any():
            continue
        where = place.name(hit)
        if singularity.kind == "jump":
            raise FieldError(f"{shortened(field.formula)} jumps at {where}: it has no single value there")
        if singularity.kind != "power":
            raise FieldError(f"{shortened(field.formula)} is infinite at {where}; leave this point out")
        if derivative and singularity.exponent <= 1:
            what = "is infinite" if singularity.exponent < 1 else "has no limit"
            raise FieldError(
                f"the gradient of {shortened(field.formula)} {what} at {where}: "
                f"u ~ r^{singularity.exponent:.4g} there; leave this point out"
            )


def _on_edges(marks: Marks, place: Place, derivative: bool) -> None:
    field = marks.field
    if place.exact is not None:
        if field._jumps_at(place.exact):
            everywhere = np.ones(len(place.points), dtype=np.bool_)
            raise FieldError(_jumps_on_edge(field, place, everywhere))
        return  # other precise values tell by themselves
    for edge in marks.edges:
        if edge.exponent > 0 and not (derivative and edge.exponent <= 1):
            continue  # the value has a limit there
        hit = edge.meets(place.points)
        if hit.any():
            where = place.name(hit)
            if edge.exponent > 0:
                raise FieldError(
                    f"the gradient of {shortened(field.formula)} is infinite at {where}, on an edge"
                )
            raise FieldError(_jumps_on_edge(field, place, hit))


def _jumps_on_edge(field: Field, place: Place, hit: BoolArray) -> str:
    return f"{shortened(field.formula)} jumps at {place.name(hit)}, on an edge: it has no single value there"


def _on_sheets(marks: Marks, place: Place, derivative: bool) -> None:
    field = marks.field
    for sheet in marks.sheets:
        if not (derivative or sheet.jump):
            continue
        hit = place.undecided(sheet.meets(place.points))
        if hit.any():
            what = shortened(field.formula) if sheet.jump else f"the gradient of {shortened(field.formula)}"
            raise FieldError(
                f"{what} has two values at {place.name(hit)}: say side=+1 (where the "
                f"sheet's normal {sheet.normal} points) or side=-1"
            )


def _on_cuts(marks: Marks, place: Place) -> None:
    field = marks.field
    for cut in marks.cuts:
        if place.exact is None:
            meets = cut.meets(place.points)
        else:
            meets = np.array([cut.meets_exactly(*(working(CUT_DIGITS).number(c) for c in place.exact))])
        hit = place.undecided(meets)
        if hit.any():
            raise FieldError(
                f"{shortened(field.formula)} has two values at {place.name(hit)}, on its branch "
                "cut: say side=+1 (left of the cut's direction) or side=-1"
            )


def _on_interfaces(field: Field, place: Place) -> None:
    hit = field.on_interface(place.points, place.exact)
    if hit.any():
        raise FieldError(
            f"the gradient of {shortened(field.formula)} jumps at {place.name(hit)}, on an "
            f"interface: say which region is meant, one of {', '.join(field.regions)}"
        )
