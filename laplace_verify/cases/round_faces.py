"""Cylinders, balls and shells with values given face by face or by Legendre polynomials."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import Ball, Cylinder, SphericalShell
from laplace_verify.problems import energy_of_solution, flux_through, robin, value_at

__all__ = ["family"]

family = Family()
BESSEL = "Bessel series: Carslaw & Jaeger 1959, Conduction of Heat in Solids, 2nd ed., section 8.3"
LEGENDRE = "zonal harmonics: Jackson, Classical Electrodynamics, section 3.3"
RIM = "The data jump along the rim: no rate in the maximum norm."


@family
def _cylinder_hot_top() -> Definition:
    return Definition(
        title="Cylinder with a hot lid",
        solution="sum over zeros j of J0 of 2 J0(j r/0.8)/(j J1(j)) sinh(j z/0.8)/sinh(1.5 j)",
        note=RIM,
        reading="A pillar in cold water under a warm deck.",
        shape=Cylinder(0.8, 0.0, 1.2),
        field=fields.cylinder_faces("4/5", 0, "6/5", top=1),
        conductivity=1.3,
        quantities={"value in the middle": value_at((0.0, 0.0, 0.6))},
        sources=(BESSEL, HERE),
        reference_points=(("0", "0", "0.6"), ("0.4", "0.3", "1.199")),
    )


@family
def _cylinder_hot_side() -> Definition:
    return Definition(
        title="Cylinder with a hot side",
        solution="sum over odd n of 4/(n pi) sin(n pi z/0.9) I0(n pi r/0.9)/I0(0.7 n pi/0.9)",
        note=RIM,
        reading="A drum of grout in a heating jacket, cooled at both ends.",
        shape=Cylinder(0.7, 0.0, 0.9),
        field=fields.cylinder_faces("7/10", 0, "9/10", side=1),
        quantities={"value in the middle": value_at((0.0, 0.0, 0.45))},
        sources=(BESSEL, HERE),
    )


@family
def _cylinder_three_temperatures() -> Definition:
    return Definition(
        title="Tall cylinder with a temperature of its own on each face",
        solution="1/2 + 1/2 v(1.5 - z) - v(z + 0.5), v the solution with one hot lid at that distance",
        note=RIM,
        reading="A rod of the pump between its motor, the water and the bearing.",
        shape=Cylinder(0.4, -0.5, 1.5),
        field=fields.cylinder_faces("2/5", "-1/2", "3/2", top=1, side="1/2", bottom="-1/2"),
        quantities={"value on the axis": value_at((0.0, 0.0, 0.5))},
        sources=(BESSEL, HERE),
    )


@family
def _ball_two_halves() -> Definition:
    return Definition(
        title="Ball with two temperatures on its surface",
        solution="1/2 + sum over odd l of (P_(l-1)(0) - P_(l+1)(0))/2 (r/0.9)^l P_l(cos t), "
        "in closed form by elliptic integrals",
        note="The data jump along the equator: no rate in the maximum norm.",
        reading="A float, its lower half in water, its upper half in the sun.",
        shape=Ball((0.0, 0.0, 0.0), 0.9),
        field=fields.hemispheres((0, 0, 0), 0.9),
        conductivity=1.1,
        quantities={"value above the centre": value_at((0.0, 0.0, 0.45))},
        sources=("Jackson, Classical Electrodynamics, section 2.7", HERE),
        reference_points=(("0", "0", "0.45"), ("0.3", "0.4", "0.6")),
    )


@family
def _ball_legendre() -> Definition:
    return Definition(
        title="Ball with Legendre data",
        solution="1/2 + (r/0.8) P_1 - 2 (r/0.8)^4 P_4 + (r/0.8)^7 P_7, P_l = P_l(cos t)",
        reading="A sensor ball in the field of ring-shaped electrodes.",
        shape=Ball((0.1, 0.0, -0.2), 0.8),
        field=fields.ball_zonal((0.1, 0, -0.2), 0.8, ("1/2", 1, 0, 0, -2, 0, 0, 1)),
        quantities={
            "value at the centre": value_at((0.1, 0.0, -0.2), exact="1/2"),
            "energy": energy_of_solution(),
        },
        sources=(LEGENDRE,),
    )


@family
def _shell_legendre() -> Definition:
    return Definition(
        title="Spherical shell with Legendre data on both spheres",
        solution="the sum over l of (A_l r^l + B_l r^(-l-1)) P_l(cos t) equal to 1 + P_2 at r = 0.5 "
        "and P_1 - P_3/2 at r = 1.1",
        reading="The wall of a round tank with patterns of heating on both sides.",
        shape=SphericalShell((0.0, 0.0, 0.0), 0.5, 1.1),
        field=fields.shell_zonal((0, 0, 0), 0.5, 1.1, (1, 0, 1), (0, 1, 0, "-1/2")),
        conditions={"outer": robin(0.8)},
        conductivity=1.2,
        quantities={"flux through the inner sphere": flux_through("inner")},
        sources=(LEGENDRE,),
    )
