"""Annuli: the logarithm, sources in the hole, flow past a pile, an eccentric hole."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import Annulus
from laplace_verify.problems import (
    conductance_between,
    energy_of_solution,
    flux_density_at,
    flux_through,
    robin,
    shape_factor_between,
    value_at,
)

__all__ = ["family"]

family = Family()
PIPE = "radial flow: Carslaw & Jaeger 1959, Conduction of Heat in Solids, 2nd ed., ch. VII"
LAMB = "flow past a cylinder: Lamb 1932, Hydrodynamics, 6th ed., art. 68"
MIDDLE = ("1/10", "1/5")


@family
def _annulus_logarithm() -> Definition:
    return Definition(
        title="Annulus with radial flow",
        solution="1 - 3 log r about (1/10, 1/5)",
        reading="Insulation of the seawater main, warm inside and cold outside.",
        shape=Annulus((0.1, 0.2), 0.4, 1.25),
        field=fields.log_source(MIDDLE, -3) + fields.affine((0, 0), 1),
        conductivity=2.0,
        quantities={
            "flux through the inner circle": flux_through("inner", exact="12*pi"),
            "energy": energy_of_solution(exact="36*pi*log(3.125)"),
            "conductance": conductance_between("inner", "outer", exact="4*pi/log(3.125)"),
            "shape factor": shape_factor_between("inner", "outer", exact="2*pi/log(3.125)"),
            "flux density on the inner circle": flux_density_at((0.5, 0.2), "inner", exact=15),
        },
        sources=(PIPE,),
        reference_points=(("0.5", "0.2"), ("0.1", "0.9"), ("-0.5", "0.2")),
    )


@family
def _annulus_flux_inside() -> Definition:
    return Definition(
        title="Annulus, flux given on the inner circle",
        solution="2 log r + (x^2 - y^2)/2",
        reading="A pipe wall heated by a wire mesh on its inside.",
        shape=Annulus((0.0, 0.0), 0.5, 1.2),
        field=fields.log_source((0, 0), 2) + fields.polynomial(2) * "1/2",
        conditions={"inner": "neumann"},
        conductivity=0.7,
        quantities={"flux through the outer circle": flux_through("outer", exact="2.8*pi")},
        sources=(PIPE, HERE),
    )


@family
def _annulus_convection() -> Definition:
    return Definition(
        title="Annulus cooled by convection outside",
        solution="log r + 3 x^2 y - y^3",
        reading="A steam pipe in a cross wind.",
        shape=Annulus((0.0, 0.0), 0.4, 0.85),
        field=fields.log_source((0, 0)) + fields.polynomial(3, "im"),
        conditions={"outer": robin(1.5)},
        conductivity=1.2,
        quantities={"flux through the inner circle": flux_through("inner", exact="-2.4*pi")},
        sources=(PIPE, HERE),
    )


@family
def _annulus_eccentric() -> Definition:
    return Definition(
        title="Disc with an eccentric hole",
        solution="log |x - p| + (x^3 - 3 x y^2)/2, p = (7/20, 1/5)",
        reading="A cable laid off the axis of its duct.",
        shape=Annulus((0.0, 0.0), 0.3, 1.25, (0.35, 0.2)),
        field=fields.log_source(("7/20", "1/5")) + fields.polynomial(3) * "1/2",
        conductivity=1.3,
        quantities={"flux through the inner circle": flux_through("inner", exact="-2.6*pi")},
        sources=(HERE,),
    )


@family
def _annulus_past_pile() -> Definition:
    return Definition(
        title="Flow past a round pile",
        solution="x + 4/25 x/r^2",
        note="No flow passes the inner circle of radius 2/5.",
        reading="Potential of the tidal stream around a pile of the jetty.",
        shape=Annulus((0.0, 0.0), 0.4, 1.2),
        field=fields.affine((1, 0)) + fields.dipole((0, 0), (1, 0)) * "4/25",
        conditions={"inner": "neumann"},
        quantities={
            "value at the front of the pile": value_at((-0.4, 0.0), exact="-4/5"),
            "speed beside the pile": flux_density_at((0.0, 0.4), (1, 0), exact=2),
            "energy": energy_of_solution(),
        },
        sources=(LAMB,),
    )


@family
def _annulus_two_temperatures_outside() -> Definition:
    return Definition(
        title="Annulus, its outer circle at two temperatures",
        solution="(angle under which the hot arc is seen)/pi - 1/4 + 1/2 log(r/1.2)",
        note="u = 1 on the arc from 0 to 90 degrees, u = 0 on the rest of it: the data jump twice.",
        reading="A round shaft with a film inside, warm water along a quarter of its lining.",
        shape=Annulus((0.0, 0.0), 0.45, 1.2).split(outer=[0.25]),
        field=fields.poisson_disc((0, 0), "6/5", fields.arcs((0, "1/4"), (1, 0)))
        + fields.elliptic_multipole(0, semi_axes=("6/5", "6/5")) * "1/2",
        conditions={"inner": robin(1.6)},
        conductivity=1.3,
        quantities={"flux through the inner circle": flux_through("inner", exact="-1.3*pi")},
        sources=("Poisson's integral: Churchill & Brown, Complex Variables and Applications", HERE),
        reference_points=(("0.5", "0"), ("0.8", "0.8"), ("-1.1", "0.1")),
    )


@family
def _annulus_film_on_both_sides() -> Definition:
    return Definition(
        title="Annulus between two films",
        solution="2 + log r + x/r^2 + (x^2 - y^2)/2 about (1/10, 1/5)",
        reading="A pipe wall between hot water and moving air.",
        shape=Annulus((0.1, 0.2), 0.5, 1.1),
        field=fields.affine((0, 0), 2)
        + fields.log_source(MIDDLE)
        + fields.dipole(MIDDLE, (1, 0))
        + fields.polynomial(2, centre=MIDDLE) * "1/2",
        conditions={"inner": robin(2.5), "outer": robin("3/2 + x")},
        conductivity=0.9,
        quantities={"flux through the outer circle": flux_through("outer", exact="1.8*pi")},
        sources=(PIPE, HERE),
    )


@family
def _eccentric_circles_two_temperatures() -> Definition:
    return Definition(
        title="Eccentric circles at two temperatures",
        solution="3/2 log(|x - p|/|x - q|), p = (1/2, 0), q = (2, 0)",
        note="Both circles are level lines: |x - p|/|x - q| is 1/4 on the inner and 1/2 on the outer one.",
        reading="A cable off the axis of its duct, both at a temperature of their own.",
        shape=Annulus((0.0, 0.0), 0.4, 1.0, (0.4, 0.0)),
        field=(fields.log_source(("1/2", 0)) - fields.log_source((2, 0))) * "3/2",
        conductivity=0.8,
        quantities={
            "flux through the inner circle": flux_through("inner", exact="-2.4*pi"),
            "energy": energy_of_solution(exact="3.6*pi*log(2)"),
            "conductance": conductance_between("inner", "outer", exact="1.6*pi/log(2)"),
            "shape factor": shape_factor_between("inner", "outer", exact="2*pi/log(2)"),
            "flux density at the narrows": flux_density_at((0.8, 0.0), "inner", exact=-5),
            "flux density opposite": flux_density_at((0.0, 0.0), "inner", exact="-9/5"),
        },
        sources=("eccentric cylinders: Smythe 1968, Static and Dynamic Electricity, 3rd ed., section 4.13",),
        reference_points=(("0.9", "0"), ("0", "0.5"), ("-0.9", "0.1")),
    )
