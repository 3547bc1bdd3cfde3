"""Plates with smooth solutions whose flux is given: on every side once, all round, beside a source.

The second normal derivative of u does not vanish on the sides with given flux, so that a boundary closure of
first order, u_n = (u_b - u_in)/h, shows as an error h u_nn / 2.
"""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.cases.plates_smooth import PLATE, SOURCE, WAVES
from laplace_verify.geometry import Rectangle
from laplace_verify.problems import energy_of_solution, flux_density_at, flux_through, value_at

__all__ = ["family"]

family = Family()


@family
def _plate_flux_left() -> Definition:
    return Definition(
        title="Plate with a given flux on the left",
        solution="cos(2 x - 3/5) e^(2 y - 9/5)",
        reading="A bay wall with a heating mat on its left face.",
        shape=PLATE,
        field=fields.exp_trig(2, "cos", centre=("3/10", 0), level="9/10"),
        conditions={"left": "neumann"},
        conductivity=1.7,
        quantities={"flux through the right side": flux_through("right")},
        sources=(WAVES,),
    )


@family
def _plate_flux_right() -> Definition:
    return Definition(
        title="Plate with a given flux on the right",
        solution="Im (z - z0)^5, z = x + i y, z0 = 1/5 - i/10",
        reading="A seepage block drained at a metered rate on its right.",
        shape=PLATE,
        field=fields.polynomial(5, "im", centre=("1/5", "-1/10")),
        conditions={"right": "neumann"},
        conductivity=0.8,
        quantities={"flux through the bottom": flux_through("bottom")},
    )


@family
def _plate_flux_bottom() -> Definition:
    return Definition(
        title="Plate with a given flux at the bottom",
        solution="sin(3 x - 3/4) e^(-3 y)",
        reading="A pool floor heated from below in strips.",
        shape=Rectangle((-0.4, 0.0), (0.9, 0.8)),
        field=fields.exp_trig(3, "sin", "decay", centre=("1/4", 0)),
        conditions={"bottom": "neumann"},
        conductivity=1.3,
        quantities={"value on the heated floor": value_at((0.25, 0.0), exact=0)},
        sources=(WAVES,),
    )


@family
def _plate_flux_top() -> Definition:
    return Definition(
        title="Plate with a given flux on top",
        solution="Re (z - z0)^4 + 2 x, z = x + i y, z0 = 1/2 - i/10",
        reading="A slab warmed by measured sunshine on its top.",
        shape=PLATE,
        field=fields.polynomial(4, centre=("1/2", "-1/10")) + fields.affine((2, 0)),
        conditions={"top": "neumann"},
        conductivity=2.2,
        quantities={
            "flux through the right side": flux_through("right"),
            "flux density in the middle of the top": flux_density_at((0.8, 0.9), "top"),
            "energy": energy_of_solution(),
        },
    )


@family
def _plate_pure_flux() -> Definition:
    return Definition(
        title="Plate with a given flux on all sides",
        solution="Re (z - z0)^4 + 2 y, z = x + i y, z0 = 1/2 + i/5",
        reading="Ground water between sheet piles and drains whose discharges are all measured.",
        shape=PLATE,
        field=fields.polynomial(4, centre=("1/2", "1/5")) + fields.affine((0, 2)),
        conditions=dict.fromkeys(("left", "right", "bottom", "top"), "neumann"),
        conductivity=0.7,
        quantities={"flux through the top": flux_through("top")},
    )


@family
def _plate_source_near_flux() -> Definition:
    return Definition(
        title="Plate with a source close to a side of given flux",
        solution="log |x - p| / 2, p = (0.2, -0.05)",
        note="The source is 0.05 below the side whose flux is given.",
        reading="A leaking pipe just below the apron, whose inflow is measured along the apron's sole.",
        shape=Rectangle((0.0, 0.0), (0.55, 0.35)),
        field=fields.log_source(("1/5", "-1/20"), "1/2"),
        conditions={"bottom": "neumann"},
        conductivity=1.5,
        quantities={"flux through the bottom": flux_through("bottom")},
        sources=(SOURCE, HERE),
    )
