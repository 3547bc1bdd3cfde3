"""Radial flow through the walls of pipes and round tanks: u = a + b log r and u = a + b/r, of r alone.

The flux through every cylinder or sphere about the axis or centre is the same: 2 pi K b per unit length, and
-4 pi K b. Unlike on rods, sound schemes are not exact here, so that the metric factor shows in the order.
"""

from __future__ import annotations

from fractions import Fraction

from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.fields import by_region, radial
from laplace_verify.geometry import Interval
from laplace_verify.problems import (
    energy_of_solution,
    flux_through,
    layers,
    resistance_between,
    robin,
    shape_factor_between,
    value_at,
)

__all__ = ["family"]

family = Family()
PIPE = "Carslaw & Jaeger 1959, Conduction of Heat in Solids, 2nd ed., section 7.2 (from memory, unchecked)"
TANK = "Carslaw & Jaeger 1959, Conduction of Heat in Solids, 2nd ed., section 9.3 (from memory, unchecked)"
SERIES = "resistances log(b/a)/(2 pi K) and (1/a - 1/b)/(4 pi K) in series: common practice, no single source"
PER_LENGTH = "Fluxes are per unit length of the pipe."


@family
def _pipe_wall_two_temperatures() -> Definition:
    return Definition(
        title="Pipe wall between two temperatures",
        solution="3 - 5/4 log(r/0.4)",
        note=PER_LENGTH,
        reading="The wall of the sea-water intake of Marram Bay, warm water inside and cold sand outside.",
        shape=Interval(0.4, 1.2),
        field=radial("cylinder", 3, "-5/4", radius="2/5"),
        conductivity=1.8,
        coordinates="radial-cylinder",
        quantities={
            "flux through the outside": flux_through("right", exact="-4.5*pi"),
            "energy": energy_of_solution(exact="4.5*pi*1.25*log(3)"),
            "thermal resistance": resistance_between("left", "right", exact="log(3)/(3.6*pi)"),
        },
        sources=(PIPE,),
        reference_points=(("0.4",), ("0.7",), ("1.2",)),
    )


@family
def _pipe_wall_convection() -> Definition:
    return Definition(
        title="Pipe wall with films of water on both sides",
        solution="1 - 3/2 log r",
        note=PER_LENGTH,
        reading="A heat-exchanger tube of the heating plant, with a film of water inside and outside.",
        shape=Interval(0.5, 0.8),
        field=radial("cylinder", 1, "-3/2"),
        conditions={"left": robin(2.5), "right": robin(0.75)},
        conductivity=0.6,
        coordinates="radial-cylinder",
        quantities={
            "flux through the outside": flux_through("right", exact="-1.8*pi"),
            "value at the inside": value_at((0.5,), exact="1 + 1.5*log(2)"),
        },
        sources=(PIPE, SERIES),
        reference_points=(("0.5",), ("0.65",), ("0.8",)),
    )


@family
def _pipe_thick_wall_flux() -> Definition:
    return Definition(
        title="Thick pipe wall with a given flux inside",
        solution="2 + 4/5 log r",
        note=PER_LENGTH,
        reading="A cooled borehole: the heat drawn off at its wall is metered, the ground far out is known.",
        shape=Interval(0.25, 2.0),
        field=radial("cylinder", 2, "4/5"),
        conditions={"left": "neumann"},
        conductivity=1.25,
        coordinates="radial-cylinder",
        quantities={
            "flux through the inside": flux_through("left", exact="-2*pi"),
            "value at the borehole": value_at((0.25,), exact="2 - 0.8*log(4)"),
        },
        sources=(PIPE,),
        reference_points=(("0.25",), ("0.251",), ("1",), ("2",)),
    )


@family
def _pipe_lagged() -> Definition:
    wall = layers((1,), ["3/5"], {"steel": 8.0, "lagging": 0.5})
    return Definition(
        title="Lagged pipe, two layers",
        solution="4 + log(r/0.6)/8 in steel, 4 + 2 log(r/0.6) in lagging",
        note=PER_LENGTH + " K r du/dr = 1 in both layers: resistances add up.",
        reading="A steam pipe in its lagging, on its way across the dam.",
        shape=Interval(0.5, 0.9),
        field=by_region(
            wall,
            {
                name: radial("cylinder", 4, 1 / Fraction(str(k)), radius="3/5")
                for name, k in zip(wall.names, wall.conductivities, strict=True)
            },
        ),
        conditions={"right": robin(1.5)},
        conductivity=wall,
        coordinates="radial-cylinder",
        quantities={
            "flux through the outside": flux_through("right", exact="2*pi"),
            "thermal resistance of both layers": resistance_between(
                "right", "left", exact="(log(6/5)/8 + log(3/2)/0.5)/(2*pi)"
            ),
            "value at the joint": value_at((0.6,), exact=4),
        },
        sources=(SERIES,),
        reference_points=(("0.5",), ("0.55",), ("0.7",), ("0.9",)),
    )


@family
def _pipe_pure_flux() -> Definition:
    return Definition(
        title="Ring of ground between two wells, flux given on both sides",
        solution="1 - 5/4 log r",
        note=PER_LENGTH,
        reading="Water pumped into a ring drain and drawn from a well in its middle; known by the mean only.",
        shape=Interval(0.3, 1.5),
        field=radial("cylinder", 1, "-5/4"),
        conditions={"left": "neumann", "right": "neumann"},
        conductivity=2.0,
        coordinates="radial-cylinder",
        quantities={"flux through the drain": flux_through("right", exact="-5*pi")},
        sources=(PIPE, HERE),
        reference_points=(("0.3",), ("0.9",), ("1.5",)),
    )


@family
def _shaft_at_rest() -> Definition:
    return Definition(
        title="Solid shaft at one temperature",
        solution="5/2",
        note="The only solutions that are regular on the axis are constants; a division by r = 0 shows here.",
        reading="The shaft of a tidal turbine, long after it has taken on the temperature of the water.",
        shape=Interval(0.0, 0.7),
        field=radial("cylinder", "5/2", 0),
        conditions={"right": robin(1.2)},
        conductivity=1.4,
        coordinates="radial-cylinder",
        quantities={"flux through the mantle": flux_through("right", exact=0)},
        tags=("exactness",),
        sources=(HERE,),
        reference_points=(("0",), ("0.35",), ("0.7",)),
    )


@family
def _tank_wall_two_temperatures() -> Definition:
    return Definition(
        title="Wall of a round tank between two temperatures",
        solution="12/(5 r) - 1",
        reading="The wall of the round hot-water store, from its lining to its cold outside.",
        shape=Interval(0.8, 1.2),
        field=radial("sphere", -1, "12/5"),
        conductivity=0.5,
        coordinates="radial-sphere",
        quantities={
            "flux through the outside": flux_through("right", exact="-4.8*pi"),
            "shape factor": shape_factor_between("left", "right", exact="9.6*pi"),
            "value in the middle": value_at((1.0,), exact="7/5"),
        },
        sources=(TANK,),
        reference_points=(("0.8",), ("1",), ("1.2",)),
    )


@family
def _tank_wall_flux_and_convection() -> Definition:
    return Definition(
        title="Wall of a round tank, heated inside and cooled outside",
        solution="1/2 + 3/(2 r)",
        reading="A round reactor with measured heating inside and a film of sea water outside.",
        shape=Interval(0.5, 1.25),
        field=radial("sphere", "1/2", "3/2"),
        conditions={"left": "neumann", "right": robin(2.0)},
        conductivity=0.8,
        coordinates="radial-sphere",
        quantities={
            "flux through the inside": flux_through("left", exact="4.8*pi"),
            "energy": energy_of_solution(exact="4*pi*0.8*2.25*(2 - 0.8)"),
        },
        sources=(TANK,),
        reference_points=(("0.5",), ("0.85",), ("1.25",)),
    )


@family
def _tank_lagged() -> Definition:
    wall = layers((1,), ["4/5", "1"], {"steel": 4.0, "felt": 0.25, "planks": 1.0})
    ks = {"steel": Fraction(4), "felt": Fraction(1, 4), "planks": Fraction(1)}
    joint = {}
    level = Fraction(0)  # u = level - (1/r - 1/start)/K with flux 4 pi outward along rising u
    for name, start, stop in (("steel", "7/10", "4/5"), ("felt", "4/5", "1"), ("planks", "1", "13/10")):
        a, b, k = Fraction(start), Fraction(stop), ks[name]
        joint[name] = radial("sphere", level + 1 / (k * a), -1 / k)
        level += (1 / a - 1 / b) / k
    return Definition(
        title="Lagged round tank, three layers",
        solution="c - 1/(K r) in every layer, 0 at r = 0.7",
        note="r^2 K du/dr = 1 in all layers: the resistances (1/a - 1/b)/(4 pi K) add up.",
        reading="The round brine tank: a steel wall, a felt coat and a shell of planks.",
        shape=Interval(0.7, 1.3),
        field=by_region(wall, joint),
        conductivity=wall,
        coordinates="radial-sphere",
        quantities={
            "flux through the planks": flux_through("right", exact="4*pi"),
            "value at the outside": value_at((1.3,), exact=level),
            "thermal resistance": resistance_between("right", "left", exact="1857/5824/pi"),
        },
        sources=(SERIES,),
        reference_points=(("0.7",), ("0.75",), ("0.9",), ("1.1",), ("1.3",)),
    )
