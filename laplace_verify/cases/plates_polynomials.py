"""Plates with harmonic polynomials of degree seven to twelve, each under conditions of its own.

Degrees one to six are those of `plates_smooth`, `plates_flux` and `plates_mixed`. On square cells the
residual of the nine-point stencil vanishes up to degree seven; degree eight and more show it.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import partial
from typing import Literal

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.cases.plates_smooth import PLATE
from laplace_verify.problems import Condition, flux_through, robin

__all__ = ["family"]

family = Family()
STENCIL = "truncation of the nine-point stencil: Kantorovich & Krylov 1958, Approximate Methods, ch. III"


@dataclass(frozen=True, slots=True, kw_only=True)
class _Degree:
    """Re or Im ((z - z0) / scale)^degree on the plate, and what is given on its sides."""

    degree: int
    part: Literal["re", "im"]
    centre: tuple[str, str]
    flux: str  # the side whose flux is the quantity
    reading: str
    conditions: Mapping[str, str | Condition] = field(default_factory=dict)
    conductivity: float = 1.0


DEGREES = {
    "seven": _Degree(
        degree=7, part="im", centre=("4/5", "9/20"), flux="bottom", conditions={"left": "neumann"},
        conductivity=1.2,
        reading="Potential in a pool floor between seven pairs of electrodes, current metered on the left.",
    ),
    "eight": _Degree(
        degree=8, part="re", centre=("4/5", "9/20"), flux="top",
        reading="Deflection of a soap film over a rectangular frame bent in eight waves.",
    ),
    "nine": _Degree(
        degree=9, part="im", centre=("7/10", "2/5"), flux="right", conditions={"right": robin(2.0)},
        conductivity=0.9,
        reading="Temperature of a cover plate with nine hot spots around it and wind on its right.",
    ),
    "ten": _Degree(
        degree=10, part="re", centre=("9/10", "1/2"), flux="left",
        conditions={"bottom": "neumann", "top": robin(0.6)}, conductivity=1.6,
        reading="Head in a filter bed with ten wells outside, recharge from below and a leaky lid.",
    ),
    "eleven": _Degree(
        degree=11, part="im", centre=("17/20", "2/5"), flux="bottom",
        conditions={"bottom": "neumann", "left": "neumann", "right": "neumann"},
        reading="Stream function of a basin with eleven inlets, three walls of which are metered.",
    ),
    "twelve": _Degree(
        degree=12, part="re", centre=("3/4", "1/2"), flux="right", conductivity=0.75,
        reading="Voltage of a sensor plate amid twelve electrodes of alternating sign.",
    ),
}  # fmt: skip


def _define(word: str, case: _Degree) -> Definition:
    """Return the case of one degree."""
    x0, y0 = case.centre
    return Definition(
        title=f"Plate with a harmonic polynomial of degree {word}",
        solution=f"{case.part.capitalize()} (z - z0)^{case.degree}, z = x + i y, z0 = {x0} + {y0} i",
        reading=case.reading,
        shape=PLATE,
        field=fields.polynomial(case.degree, case.part, centre=case.centre),
        conditions=case.conditions,
        conductivity=case.conductivity,
        quantities={f"flux through the {case.flux}": flux_through(case.flux)},
        sources=(HERE, STENCIL),
    )


for _word, _case in DEGREES.items():
    family[f"plate-degree-{_word}"] = partial(_define, _word, _case)
