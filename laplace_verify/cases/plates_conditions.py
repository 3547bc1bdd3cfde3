"""Plates with smooth solutions under flux and convection: every side once, all round, mixed, anisotropic."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import Rectangle
from laplace_verify.problems import energy_of_solution, flux_through, robin, value_at

__all__ = ["family"]

family = Family()
PLATE = Rectangle((0.0, 0.0), (1.6, 0.9))


@family
def _wall_mixed_conditions() -> Definition:
    return Definition(
        title="Wall under all three conditions",
        statement="div(K grad u) = 0 in 0 < x < 1.6, 0 < y < 0.9 with K = 2.5; flux given on the left, convection with "
        "alpha = 3 on top, u given on the right and below. Solution u = cos(2 x - 4/5) e^(2 y).",
        reading="The outer wall of the seawater-heating plant: heater on the left, wind on top.",
        shape=PLATE,
        field=fields.exp_trig(2, "cos", centre=("2/5", 0)),
        conditions={"left": "neumann", "top": robin(3.0)},
        conductivity=2.5,
        quantities={
            "flux through the right side": flux_through("right"),
            "value at the sensor": value_at((0.4, 0.0), exact=1),
            "energy": energy_of_solution(),
        },
    )


@family
def _plate_pure_flux() -> Definition:
    return Definition(
        title="Plate with a given flux on all sides",
        statement="div(K grad u) = 0 in 0 < x < 1.6, 0 < y < 0.9 with K = 0.7; n . K grad u given on all sides, mean of u "
        "given. Solution u = Re (z - z0)^4 + 2 y, z0 = 1/2 + i/5.",
        reading="Ground water under the works between sheet piles and drains whose discharges are known.",
        shape=PLATE,
        field=fields.polynomial(4, centre=("1/2", "1/5")) + fields.affine((0, 2)),
        conditions=dict.fromkeys(("left", "right", "bottom", "top"), "neumann"),
        conductivity=0.7,
        quantities={"flux through the top": flux_through("top")},
        sources=(HERE,),
    )
