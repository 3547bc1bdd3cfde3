"""Meridian sections of round bodies in coordinates (r, z): cylinders, hollow cylinders, balls and shells.

The same fields as in space, with one dimension less to solve in: sections agree with `round_solids` to the
last digit wherever both pose the same problem.
"""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.boxes import POINT, SOLID
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.fields import axisymmetric, by_region, radial
from laplace_verify.geometry import HalfAnnulus, HalfDisc, Rectangle
from laplace_verify.problems import energy_of_solution, flux_through, layers, robin, value_at

__all__ = ["family"]

family = Family()
WELL = "Carslaw & Jaeger 1959, Conduction of Heat in Solids, 2nd ed., section 7.2 (from memory, unchecked)"
SOIL = "anisotropic ground by stretching of coordinates: Bear 1972, Dynamics of Fluids in Porous Media, ch. 7"
RUST = axisymmetric(fields.point_source((0, 0, "-2/5")))  # a source below the section


@family
def _pillar_section() -> Definition:
    return Definition(
        title="Solid cylinder in its meridian section",
        solution="z^3 - 3/2 z r^2",
        reading="A core sample of the dam, held at measured temperatures all over.",
        shape=Rectangle((0.0, -0.5), (0.8, 0.9)),
        field=axisymmetric(fields.solid(3, 0)),
        conductivity=1.6,
        coordinates="axisymmetric",
        quantities={
            "value on the axis": value_at((0.0, 0.5), exact="1/8"),
            "flux through the mantle": flux_through("right", exact="-3*1.6*pi*0.64*0.56"),
        },
        sources=(SOLID,),
        reference_points=(("0", "0.2"), ("0.4", "-0.3"), ("0.8", "0.9")),
    )


@family
def _pillar_section_mixed() -> Definition:
    return Definition(
        title="Solid cylinder under all three conditions",
        solution="1/sqrt(r^2 + (z + 2/5)^2) + z^2 - r^2/2",
        reading="A round pillar over a warm spring, metered on its mantle and ventilated on top.",
        shape=Rectangle((0.0, 0.0), (0.6, 1.1)),
        field=RUST + axisymmetric(fields.solid(2, 0)),
        conditions={"right": "neumann", "top": robin(2.0)},
        conductivity=0.7,
        coordinates="axisymmetric",
        quantities={
            "flux through the bottom": flux_through("bottom"),
            "value in the middle of the bottom": value_at((0.0, 0.0), exact="5/2"),
        },
        sources=(POINT, SOLID),
        reference_points=(("0", "0.5"), ("0.000001", "0.001"), ("0.3", "0.6"), ("0.6", "1.1")),
    )


@family
def _pillar_section_pure_flux() -> Definition:
    return Definition(
        title="Solid cylinder with a given flux all over",
        solution="z^4 - 3 z^2 r^2 + 3/8 r^4 + 3 z",
        reading="A round float whose exchange with the water is metered on all its faces.",
        shape=Rectangle((0.0, -0.7), (0.5, 0.6)),
        field=axisymmetric(fields.solid(4, 0) + fields.affine((0, 0, 3))),
        conditions=dict.fromkeys(("right", "bottom", "top"), "neumann"),
        conductivity=1.3,
        coordinates="axisymmetric",
        quantities={"energy": energy_of_solution()},
        sources=(SOLID,),
        reference_points=(("0", "0.1"), ("0.25", "-0.2"), ("0.5", "0.6")),
    )


@family
def _sleeve_section_mixed() -> Definition:
    return Definition(
        title="Hollow cylinder with mixed conditions",
        solution="2 - log r + z^2 - r^2/2",
        reading="The concrete sleeve of a well, metered inside, with a film of water outside.",
        shape=Rectangle((0.4, -0.3), (1.0, 0.6)),
        field=axisymmetric(radial("cylinder", 2, -1)) + axisymmetric(fields.solid(2, 0)),
        conditions={"left": "neumann", "right": robin(1.5)},
        conductivity=0.9,
        coordinates="axisymmetric",
        quantities={
            "flux through the inside": flux_through("left", exact="0.9*2*pi*0.9*1.16"),
            "value at the rim": value_at((1.0, 0.6), exact="93/50"),
        },
        sources=(WELL, SOLID),
        reference_points=(("0.4", "0.1"), ("0.7", "0.2"), ("1", "0.6")),
    )


@family
def _sleeve_section_source_in_the_bore() -> Definition:
    return Definition(
        title="Hollow cylinder around a point source",
        solution="1/sqrt(r^2 + z^2)",
        reading="A lamp in the bore of a round sleeve: the temperature of the wall is known.",
        shape=Rectangle((0.3, -0.5), (0.9, 0.8)),
        field=axisymmetric(fields.point_source((0, 0, 0))),
        conditions={"top": "neumann", "bottom": "neumann"},
        conductivity=2.2,
        coordinates="axisymmetric",
        quantities={
            "flux through the inside": flux_through(
                "left",
                exact="2*pi*2.2*(0.5/sqrt(0.34) + 0.8/sqrt(0.73))",
            ),
        },
        sources=(POINT,),
        reference_points=(("0.3", "0"), ("0.6", "0.4"), ("0.9", "-0.5")),
    )


@family
def _ground_section_layers() -> Definition:
    ground = layers((0, 1), ["0"], {"clay": 0.5, "sand": 2.0})
    swirl = axisymmetric(3 * fields.solid(2, 0))
    return Definition(
        title="Round plug of two layers, one on the other",
        solution="3 z^2 - 3/2 r^2 + z/K",
        note="Value and vertical flux K du/dz = 1 agree at z = 0.",
        reading="A round plug of sand on clay under the edge of a settling pool.",
        shape=Rectangle((0.0, -0.4), (0.7, 0.5)),
        field=by_region(
            ground,
            {
                "clay": swirl + axisymmetric(fields.affine((0, 0, 2))),
                "sand": swirl + axisymmetric(fields.affine((0, 0, "1/2"))),
            },
        ),
        conditions={"right": "neumann"},
        conductivity=ground,
        coordinates="axisymmetric",
        quantities={"value in the joint": value_at((0.5, 0.0), exact="-3/8")},
        sources=(HERE,),
        reference_points=(("0", "0.25"), ("0", "-0.2"), ("0.35", "0.1"), ("0.7", "-0.4")),
    )


@family
def _ground_section_anisotropic() -> Definition:
    return Definition(
        title="Round plug of ground that conducts better sideways than down",
        solution="z^2/K_z - r^2/(2 K_r) + 1/sqrt(r^2/K_r + (z - 3)^2/K_z), K_r = 9/4, K_z = 1/4",
        reading="A round plug of bedded silt around a drain, with a spring above.",
        shape=Rectangle((0.0, 0.0), (1.2, 0.8)),
        field=axisymmetric(
            fields.stretched(
                fields.solid(2, 0) + fields.point_source((0, 0, 6)),
                [[2.25, 0, 0], [0, 2.25, 0], [0, 0, 0.25]],
            )
        ),
        conditions={"right": "neumann", "bottom": robin(0.5)},
        conductivity=[[2.25, 0.0], [0.0, 0.25]],
        coordinates="axisymmetric",
        quantities={"flux through the mantle": flux_through("right")},
        sources=(SOIL, HERE),
        reference_points=(("0", "0.4"), ("0.6", "0.2"), ("1.2", "0.8")),
    )


@family
def _ball_section() -> Definition:
    return Definition(
        title="Ball in its meridian section",
        solution="z^3 - 3/2 z r^2 + 2 z",
        reading="A round float in the field of a far-away source.",
        shape=HalfDisc((0.0, 0.2), 0.9),
        field=axisymmetric(fields.solid(3, 0) + fields.affine((0, 0, 2))),
        conductivity=1.3,
        coordinates="axisymmetric",
        quantities={
            "flux through the surface": flux_through("rim", exact=0),
            "value at the centre": value_at((0.0, 0.2), exact="51/125"),
        },
        sources=(SOLID,),
        reference_points=(("0", "0.2"), ("0.4", "0.5"), ("0.54", "0.92")),
    )


@family
def _ball_section_convection() -> Definition:
    return Definition(
        title="Ball cooled by convection, a dipole above it",
        solution="(z - 3/2)/(r^2 + (z - 3/2)^2)^(3/2)",
        reading="A round vessel in the tidal stream, under a pair of electrodes.",
        shape=HalfDisc((0.0, 0.0), 0.8),
        field=axisymmetric(fields.dipole((0, 0, "3/2"), (0, 0, 1))),
        conditions={"rim": robin(2.5)},
        conductivity=1.4,
        coordinates="axisymmetric",
        quantities={
            "flux through the surface": flux_through("rim", exact=0),
            "value at the centre": value_at((0.0, 0.0), exact="-4/9"),
        },
        sources=(POINT, HERE),
        reference_points=(("0", "0.1"), ("0.3", "-0.4"), ("0.48", "0.64")),
    )


@family
def _shell_section_mixed() -> Definition:
    return Definition(
        title="Spherical shell, heated inside and cooled outside, in its section",
        solution="1/s + z^2 - r^2/2, s the distance from the centre",
        reading="A round reactor with measured heating inside and a film of water outside.",
        shape=HalfAnnulus((0.0, 0.0), 0.6, 1.1),
        field=axisymmetric(fields.point_source((0, 0, 0)) + fields.solid(2, 0)),
        conditions={"inner": "neumann", "outer": robin(1.5)},
        conductivity=0.8,
        coordinates="axisymmetric",
        quantities={"flux through the outer sphere": flux_through("outer", exact="-3.2*pi")},
        sources=(POINT, SOLID),
        reference_points=(("0", "0.9"), ("0.5", "0.6"), ("0.66", "-0.88")),
    )


@family
def _shell_section_off_centre() -> Definition:
    return Definition(
        title="Shell around a point source off its centre",
        solution="2/sqrt(r^2 + (z - 1/10)^2)",
        reading="The wall of a round vessel with a heater not quite in its middle.",
        shape=HalfAnnulus((0.0, 0.0), 0.5, 0.9),
        field=axisymmetric(fields.point_source((0, 0, "1/10"), 2)),
        conductivity=1.5,
        coordinates="axisymmetric",
        quantities={"flux through the inner sphere": flux_through("inner", exact="12*pi")},
        sources=(POINT,),
        reference_points=(("0", "-0.7"), ("0.42", "0.56"), ("0.54", "0.72")),
    )
