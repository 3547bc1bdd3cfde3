"""Balls, spherical shells and cylinders."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.boxes import POINT, SOLID, WAVES
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import Ball, Cylinder, SphericalShell
from laplace_verify.problems import energy_of_solution, flux_through, robin, value_at

__all__ = ["family"]

family = Family()
MIDDLE = ("1/10", "-1/5", "3/10")


@family
def _ball_solid() -> Definition:
    return Definition(
        title="Ball with a solid harmonic",
        solution="sqrt(15)/2 z (x^2 - y^2) + 2 x - 1",
        reading="A float in the field of a far-away source.",
        shape=Ball((0.1, -0.2, 0.3), 0.9),
        field=fields.solid(3, 2) + fields.affine((2, 0, 0), -1),
        conductivity=1.3,
        quantities={"flux through the surface": flux_through("surface", exact=0)},
        sources=(SOLID,),
        reference_points=(("0.1", "-0.2", "0.3"), ("1", "-0.2", "0.3")),
    )


@family
def _ball_flux() -> Definition:
    return Definition(
        title="Ball with a given flux through its surface",
        solution="sqrt(3) x z + sqrt(15) x y z",
        reading="A boulder in ground water whose exchange is metered all over.",
        shape=Ball((0.0, 0.0, 0.0), 0.8),
        field=fields.solid(2, 1) + fields.solid(3, -2),
        conditions={"surface": "neumann"},
        conductivity=0.6,
        quantities={
            "flux through the surface": flux_through("surface", exact=0),
            "energy": energy_of_solution(),
        },
        sources=(SOLID,),
    )


@family
def _ball_convection() -> Definition:
    return Definition(
        title="Ball cooled by convection",
        solution="cos(x - 1/10) cos(3/4 y) e^(5/4 z)",
        reading="A round pressure vessel in the tidal stream.",
        shape=Ball((0.1, 0.0, -0.2), 0.7),
        field=fields.exp_trig((1, "3/4"), "cos", centre=("1/10", 0, 0)),
        conditions={"surface": robin(2.5)},
        conductivity=1.4,
        quantities={"value at the centre": value_at((0.1, 0.0, -0.2), exact="exp(-0.25)")},
        sources=(WAVES, HERE),
    )


@family
def _shell_point_source() -> Definition:
    return Definition(
        title="Spherical shell with radial flow",
        solution="2/r about (1/10, -1/5, 3/10)",
        reading="The wall of a round pressure vessel, warm inside and cold outside.",
        shape=SphericalShell((0.1, -0.2, 0.3), 0.5, 1.2),
        field=fields.point_source(MIDDLE, 2),
        conductivity=1.5,
        quantities={"flux through the inner sphere": flux_through("inner", exact="12*pi")},
        sources=(POINT,),
    )


@family
def _shell_mixed() -> Definition:
    return Definition(
        title="Spherical shell, heated inside and cooled outside",
        solution="1/r + z^2 - (x^2 + y^2)/2",
        reading="A round reactor with measured heating inside and a film of water outside.",
        shape=SphericalShell((0.0, 0.0, 0.0), 0.6, 1.1),
        field=fields.point_source((0, 0, 0)) + fields.solid(2, 0),
        conditions={"inner": "neumann", "outer": robin(1.5)},
        conductivity=0.8,
        quantities={"flux through the outer sphere": flux_through("outer", exact="-3.2*pi")},
        sources=(POINT, SOLID),
    )


@family
def _cylinder_solid() -> Definition:
    return Definition(
        title="Cylinder with solid harmonics",
        solution="z^3 - 3/2 z (x^2 + y^2) + sqrt(3) x y",
        reading="A core sample held at measured temperatures.",
        shape=Cylinder(0.8, -0.5, 0.9),
        field=fields.solid(3, 0) + fields.solid(2, -2),
        conductivity=1.6,
        quantities={"value on the axis": value_at((0.0, 0.0, 0.5), exact="1/8")},
        sources=(SOLID,),
    )


@family
def _cylinder_mixed() -> Definition:
    return Definition(
        title="Cylinder under all three conditions",
        solution="cos(x - 1/10) sin(3/4 y + 3/20) e^(5/4 z)",
        reading="A round pillar of the jetty, metered on its side and ventilated on top.",
        shape=Cylinder(0.6, 0.0, 1.1),
        field=fields.exp_trig((1, "3/4"), ("cos", "sin"), centre=("1/10", "-1/5", 0)),
        conditions={"side": "neumann", "top": robin(2.0)},
        conductivity=0.7,
        quantities={"flux through the bottom": flux_through("bottom")},
        sources=(WAVES, HERE),
    )
