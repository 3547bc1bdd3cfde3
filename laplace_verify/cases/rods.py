"""Rods: the only harmonic functions of one variable are affine, and every sound scheme is exact on them.

With u = a + b x, a rod tells a wrong sign, coefficient or half cell at an end at once, by size, not by order.
"""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import Definition, Family
from laplace_verify.fields import Field
from laplace_verify.geometry import Interval
from laplace_verify.problems import energy_of_solution, flux_through, resistance_between, robin, value_at

__all__ = ["family"]

family = Family()
TEXTBOOK = "Carslaw & Jaeger 1959, Conduction of Heat in Solids, 2nd ed., ch. III (steady flow in a rod)"
ROD = Interval(0.2, 1.7)


def _line(slope: str, constant: str) -> Field:
    """Return constant + slope x."""
    return fields.affine((slope,), constant)


@family
def _rod_two_temperatures() -> Definition:
    return Definition(
        title="Rod between two temperatures",
        solution="3 - 2 x",
        reading="A tie rod through the sluice wall of Marram Bay, held at the temperatures of two pools.",
        shape=ROD,
        field=_line("-2", "3"),
        conductivity=2.0,
        quantities={
            "flux through the right end": flux_through("right", exact=-4),
            "thermal resistance": resistance_between("left", "right", exact="3/4"),
            "energy": energy_of_solution(exact=12),
            "value at the sensor": value_at((0.8,), exact="7/5"),
        },
        tags=("exactness",),
        sources=(TEXTBOOK,),
    )


@family
def _rod_fixed_and_flux() -> Definition:
    return Definition(
        title="Rod with a fixed end and a given flux",
        solution="5/4 x - 1/2",
        reading="A sensor stem with one end in the pool, the other fed by a constant heater.",
        shape=ROD,
        field=_line("5/4", "-1/2"),
        conditions={"right": "neumann"},
        conductivity=0.4,
        quantities={"value at the heater": value_at((1.7,), exact="13/8")},
        tags=("exactness",),
        sources=(TEXTBOOK,),
    )


@family
def _rod_fixed_and_convection() -> Definition:
    return Definition(
        title="Rod with a fixed end and convection at the other",
        solution="1 + 2/3 x",
        reading="A pipe wall cooled by the tide on its left and kept at plant temperature on its right.",
        shape=ROD,
        field=_line("2/3", "1"),
        conditions={"left": robin(4.0)},
        conductivity=1.5,
        quantities={"value at the cooled face": value_at((0.2,), exact="17/15")},
        tags=("exactness",),
        sources=(TEXTBOOK,),
    )


@family
def _rod_flux_and_convection() -> Definition:
    return Definition(
        title="Rod with a given flux and convection",
        solution="2 - 4/5 x",
        reading="The lid of the heat store, heated from below and losing heat to the air above.",
        shape=ROD,
        field=_line("-4/5", "2"),
        conditions={"left": "neumann", "right": robin(0.7)},
        conductivity=3.0,
        quantities={
            "value at the heated face": value_at((0.2,), exact="46/25"),
            "value at the cooled face": value_at((1.7,), exact="16/25"),
        },
        tags=("exactness",),
        sources=(TEXTBOOK,),
    )


@family
def _rod_both_convection() -> Definition:
    return Definition(
        title="Rod with convection at both ends",
        solution="1/2 + 3/2 x",
        reading="A window of the pump house, with different films of air inside and outside.",
        shape=ROD,
        field=_line("3/2", "1/2"),
        conditions={"left": robin(2.0), "right": robin(0.3)},
        conductivity=0.8,
        quantities={"flux through the right end": flux_through("right", exact="6/5")},
        tags=("exactness",),
        sources=(TEXTBOOK,),
    )


@family
def _rod_pure_flux() -> Definition:
    return Definition(
        title="Rod with a given flux at both ends",
        solution="1 + 4/5 x",
        reading="A seepage path between two pumps of equal discharge; its level is known by the mean only.",
        shape=ROD,
        field=_line("4/5", "1"),
        conditions={"left": "neumann", "right": "neumann"},
        conductivity=2.5,
        quantities={"flux through the right end": flux_through("right", exact=2)},
        tags=("exactness",),
        sources=(TEXTBOOK,),
    )
