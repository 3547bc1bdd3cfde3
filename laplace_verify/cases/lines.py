"""Lines of two conductors whose capacitance, charge density and resistance are known in closed form."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.fields import by_region
from laplace_verify.geometry import Annulus, Rectangle
from laplace_verify.problems import (
    conductance_between,
    energy_of_solution,
    flux_density_at,
    flux_through,
    inclusion,
    resistance_between,
)

__all__ = ["family"]

family = Family()
GAUSS = "cylindrical capacitor: Smythe 1968, Static and Dynamic Electricity, 3rd ed., section 2.04"
SHEET = "sheet resistance in squares: common practice, no source"


@family
def _cable_coated() -> Definition:
    coat = inclusion((0, 0), ["2/5"], {"coat": 4.0, "filling": 2.5})
    return Definition(
        title="Conductor with a coat in its screen",
        solution="-5/4 log(r/0.4) in the coat, -2 log(r/0.4) in the filling",
        note="The charge per length is 10 pi; the elastances log(2)/(8 pi) and log(5/2)/(5 pi) add up.",
        reading="A sensor wire in its enamel, in oil up to the screen; K is the permittivity.",
        shape=Annulus((0.0, 0.0), 0.2, 1.0),
        field=by_region(
            coat,
            {
                "coat": fields.log_source((0, 0), "-5/4").scaled("2/5"),
                "filling": fields.log_source((0, 0), -2).scaled("2/5"),
            },
        ),
        conductivity=coat,
        quantities={
            "charge": flux_through("inner", exact="10*pi"),
            "capacitance": conductance_between("inner", "outer", exact="8*pi/(log(2) + 8/5*log(5/2))"),
            "charge density on the wire": flux_density_at((0.0, 0.2), "inner", exact=25),
        },
        sources=(GAUSS, HERE),
        reference_points=(("0.3", "0"), ("0", "-0.45"), ("0.5", "0.5")),
    )


@family
def _sheet_between_bars() -> Definition:
    return Definition(
        title="Resistive sheet between two bus bars",
        solution="3/2 - 5/4 x",
        note="The sheet is 16/9 squares long.",
        reading="The heating foil of a battery lid between its two bars; K is the conductance of a square.",
        shape=Rectangle((0.0, 0.0), (1.2, 0.675)),
        field=fields.affine(("-5/4", 0), "3/2"),
        conditions={"bottom": "neumann", "top": "neumann"},
        conductivity=0.4,
        quantities={
            "resistance": resistance_between("left", "right", exact="40/9"),
            "heat": energy_of_solution(exact="81/160"),
        },
        tags=("exactness",),
        sources=(SHEET,),
    )
