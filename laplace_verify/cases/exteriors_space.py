"""Around bodies in space and on half-spaces: balls, spheroids, a round plate, two spheres, loaded patches."""

from __future__ import annotations

import math

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import (
    Ball,
    Box,
    Exterior,
    HalfSpace,
    PairShell,
    RoundPlate,
    SphericalShell,
    Spheroid,
    SpheroidalShell,
    Strip,
)
from laplace_verify.problems import (
    added_mass,
    capacitance_coefficient,
    conductance_between,
    energy_of_solution,
    flux_through,
    robin,
    value_at,
)

__all__ = ["family"]

family = Family()
POINT = "point charge: Kellogg 1929, Foundations of Potential Theory, ch. III"
LAMB = "flow past ellipsoids: Lamb 1932, Hydrodynamics, 6th ed., art. 92 and 103-114"
SMYTHE = "charged spheroids and disc: Smythe 1968, Static and Dynamic Electricity, 3rd ed., ch. V"
IMAGES = "two spheres by images: Smythe 1968, Static and Dynamic Electricity, 3rd ed., sections 5.08-5.09"
LAYER = "uniform layers: MacMillan 1930, The Theory of the Potential, section 43"

SPINDLE = "11.2*pi*sqrt(2)/log((1.5 + sqrt(2))/(1.5 - sqrt(2)))"  # 4 pi K f/artanh(f/c), f = sqrt 2, K = 1.4


@family
def _float_losing_heat() -> Definition:
    return Definition(
        title="Outside a ball with a film of water",
        solution="2/|x - p| + (x^2 - y^2) stretched by Kelvin's transform, p = (1/10, 0, 2/5)",
        reading="A warm float in still water, cooled through a film.",
        shape=Exterior(Ball((0.0, 0.0, 0.25), 0.8)),
        field=fields.point_source(("1/10", 0, "2/5"), 2) + fields.solid(2, 2).inverted((0, 0, "1/4"), "4/5"),
        conditions={"surface": robin(1.5)},
        conductivity=0.6,
        at_infinity="decay",
        window=SphericalShell((0.0, 0.0, 0.25), 0.8, 2.0),
        quantities={
            "flux into the float": flux_through("surface", exact="4.8*pi"),
            "energy": energy_of_solution(),
        },
        sources=(POINT, HERE),
        reference_points=(("1", "0", "0"), ("0", "0", "1.05"), ("-1", "1", "0.5")),
    )


@family
def _float_in_tidal_stream() -> Definition:
    return Definition(
        title="Potential flow past a ball",
        solution="V . x (1 + R^3/(2 r^3)), V = (1, 0, 0), R = 9/10",
        reading="The stream past a round float, far below the surface.",
        shape=Exterior(Ball((0.0, 0.0, 0.0), 0.9)),
        field=fields.spheroid_flow("x", ("9/10", "9/10")),
        conditions={"surface": "neumann"},
        at_infinity=("flow", (1.0, 0.0, 0.0), 0.0),
        window=SphericalShell((0.0, 0.0, 0.0), 0.9, 2.2),
        quantities={
            "value behind the float": value_at((1.8, 0.0, 0.0), exact="153/80"),
            "added mass": added_mass(exact="2/3*pi*0.729"),
        },
        sources=(LAMB,),
    )


@family
def _charged_spindle() -> Definition:
    return Definition(
        title="Charged prolate spheroid",
        solution="artanh(f/t)/artanh(f/c), f^2 = c^2 - a^2, a = 1/2, c = 3/2, t the polar semi-axis of the "
        "confocal spheroid",
        note="The charge over 4 pi is the capacity f/artanh(f/c).",
        reading="A spindle-shaped electrode of the chlorination plant.",
        shape=Exterior(Spheroid((0.0, 0.0, 0.0), (0.5, 1.5))),
        field=fields.spheroid_potential(("1/2", "3/2")),
        conductivity=1.4,
        at_infinity="decay",
        window=SpheroidalShell((0.0, 0.0, 0.0), (0.5, 1.5), (1.6, 2.5)),
        quantities={
            "flux into the electrode": flux_through("surface", exact=SPINDLE),
            "capacitance": conductance_between("surface", "infinity", exact=SPINDLE),
        },
        sources=(SMYTHE,),
        reference_points=(("0.5", "0", "0"), ("0", "0", "1.6"), ("1", "-1", "1")),
    )


@family
def _buoy_heaving() -> Definition:
    return Definition(
        title="Potential flow past an oblate buoy along its axis",
        solution="z + z Z(t)/(2 X_0), Z, X the dipole integrals of the confocal spheroids",
        reading="Water streams up and down past a flat buoy.",
        shape=Exterior(Spheroid((0.2, 0.0, -0.1), (1.2, 0.7))),
        field=fields.spheroid_flow("z", ("6/5", "7/10"), ("1/5", 0, "-1/10")),
        conditions={"surface": "neumann"},
        conductivity=1.2,
        at_infinity=("flow", (0.0, 0.0, 1.0), 0.0),
        window=SpheroidalShell((0.2, 0.0, -0.1), (1.2, 0.7), (2.4, 2.0)),
        quantities={"value above the buoy": value_at((0.2, 0.0, 0.9)), "added mass": added_mass()},
        sources=(LAMB,),
    )


@family
def _oblate_float_tilted_data() -> Definition:
    return Definition(
        title="Outside an oblate spheroid with linear data",
        solution="x on the spheroid (a = 11/10, c = 3/5), decaying, plus its potential",
        reading="A flat float with one warm side in still water.",
        shape=Exterior(Spheroid((0.0, 0.0, 0.0), (1.1, 0.6))),
        field=fields.spheroid_data("x", ("11/10", "3/5")) + fields.spheroid_potential(("11/10", "3/5")),
        conditions={"surface": robin(0.8)},
        conductivity=0.7,
        at_infinity="decay",
        window=SpheroidalShell((0.0, 0.0, 0.0), (1.1, 0.6), (2.2, 1.7)),
        quantities={"energy": energy_of_solution()},
        sources=(LAMB, SMYTHE),
    )


@family
def _charged_round_plate() -> Definition:
    return Definition(
        title="Charged round plate",
        solution="(2/pi) atan(a/t), a = 6/5, t the polar semi-axis of the confocal spheroid",
        note="The charge over 4 pi is 2 a/pi; it lies half on each face, like 1/sqrt(a^2 - r^2).",
        reading="A thin round electrode hung in the settling tank.",
        shape=Exterior(RoundPlate((0.0, 0.0, 0.0), 1.2)),
        field=fields.spheroid_potential(("6/5", 0)),
        conductivity=1.3,
        at_infinity="decay",
        window=SpheroidalShell((0.0, 0.0, 0.0), (1.2, 0.0), (2.4, 1.8)),
        quantities={"flux into the upper face": flux_through("top", exact="156/25")},
        sources=(SMYTHE,),
        reference_points=(("0", "0", "0.5"), ("1.3", "0", "0"), ("0.6", "0.6", "1e-3")),
    )


@family
def _two_spheres_unlike() -> Definition:
    step = 2.0 * math.asinh(math.sqrt(0.5 / 4.0))
    own = math.fsum(math.sinh(step) / math.sinh(n * step) for n in range(1, 80, 2))
    return Definition(
        title="Two equal spheres at different potentials",
        solution="sum over image charges (-1)^(n+1) R sinh m/sinh(n m) at heights (-1)^(n+1) d coth(n m)",
        note="Radius 1, gap 1/2, potentials 1 (above) and 0 (below).",
        reading="Two round floats side by side, one of them heated.",
        shape=Exterior([Ball((0.0, 0.0, 1.25), 1.0), Ball((0.0, 0.0, -1.25), 1.0)]),
        field=fields.sphere_pair(1, "1/2"),
        conductivity=0.8,
        at_infinity="decay",
        window=PairShell((0.0, 0.0, 0.0), 1.0, 0.5, 4.0),
        quantities={
            "flux into the upper sphere": flux_through("body-1-surface", exact=0.8 * 4 * math.pi * own),
            "own capacitance": capacitance_coefficient("body-1-surface", "body-1-surface"),
            "mutual capacitance": capacitance_coefficient("body-2-surface", "body-1-surface"),
        },
        sources=(IMAGES,),
        reference_points=(("0", "0", "0"), ("0", "0", "2.5"), ("1.5", "0", "-1")),
    )


@family
def _warm_spot_on_bed() -> Definition:
    return Definition(
        title="Half-space with a warm disc on its surface",
        solution="(solid angle of the disc r < 4/5)/(2 pi)",
        note="u is 1 on the disc and 0 beside it.",
        reading="The pool above a round heater let into its bed.",
        shape=HalfSpace(3),
        field=fields.loaded_disc("4/5"),
        conductivity=0.6,
        at_infinity="decay",
        window=Box((-1.5, -1.5, 0.0), (1.5, 1.5, 1.5)),
        quantities={"value over the middle": value_at((0.0, 0.0, 0.6), exact="2/5")},
        sources=(LAYER, "solid angle of a disc: Paxton 1959, Rev. Sci. Instrum. 30, 254"),
        reference_points=(("0", "0", "0.6"), ("0.8", "0", "0.1"), ("1", "1", "1e-3")),
    )


@family
def _heated_mat_on_bed() -> Definition:
    return Definition(
        title="Half-space heated over a rectangle of its surface",
        solution="(potential of a uniform layer on |x| < 1, |y| < 1/2)/(2 pi)",
        note="The inflow through the surface is 1 on the rectangle and 0 beside it.",
        reading="The pool above a rectangular heating mat on its bed.",
        shape=HalfSpace(3),
        field=fields.loaded_rectangle((-1, "-1/2"), (1, "1/2"), "inflow"),
        conditions={"bottom": "neumann"},
        at_infinity="decay",
        window=Box((-1.8, -1.4, 0.0), (1.8, 1.4, 1.2)),
        quantities={"value in the middle of the mat": value_at((0.0, 0.0, 0.0))},
        sources=(LAYER,),
        reference_points=(("0", "0", "0"), ("1.1", "0.6", "0"), ("0.5", "0.2", "0.5")),
    )


@family
def _pressure_mat_on_bed() -> Definition:
    return Definition(
        title="Half-space with a rectangle of its surface at one",
        solution="(solid angle of the rectangle 0 < x < 3/2, 0 < y < 1)/(2 pi)",
        reading="Pore pressure under a loaded mat on the foreshore.",
        shape=HalfSpace(3),
        field=fields.loaded_rectangle((0, 0), ("3/2", 1)),
        conductivity=1.5,
        at_infinity="decay",
        window=Box((-1.0, -1.0, 0.0), (2.5, 2.0, 1.5)),
        quantities={"value under the middle": value_at((0.75, 0.5, 1.0))},
        sources=(LAYER,),
    )


@family
def _buried_charge_below_layer() -> Definition:
    return Definition(
        title="Layer above a buried pair of charges",
        solution="1/|x - p| - 1/|x - q|, p = (0, 0, -1/2), q = (3/5, 0, 8/5)",
        reading="A water layer between a leaking pipe below and a drain above.",
        shape=Strip(3, 0.0, 1.0),
        field=fields.point_source((0, 0, "-1/2")) - fields.point_source(("3/5", 0, "8/5")),
        conditions={"top": "neumann"},
        conductivity=1.2,
        at_infinity="decay",
        window=Box((-1.5, -1.5, 0.0), (1.5, 1.5, 1.0)),
        quantities={"value at the foot": value_at((0.0, 0.0, 0.0))},
        sources=(POINT,),
    )
