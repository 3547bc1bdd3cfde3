"""Attraction of buried masses, harmonic above them."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import Definition, Family
from laplace_verify.geometry import Box
from laplace_verify.problems import flux_density_at, value_at

__all__ = ["family"]

family = Family()
PRISM = (
    "attraction of a prism: Nagy 1966, Geophysics 31, 362-371; MacMillan 1930, The Theory of the Potential, "
    "section 43"
)


@family
def _air_above_buried_prism() -> Definition:
    return Definition(
        title="Gravity above a buried prism",
        solution="integral of dV/|x - xi| over the prism -0.6 < x < 0.5, -0.4 < y < 0.4, -1.1 < z < -0.3",
        note="u is the potential over the gravitational constant and the density; the attraction is grad u.",
        reading="A gravity survey of the dunes over a buried concrete caisson.",
        shape=Box((-0.6, -0.5, 0.0), (0.6, 0.5, 0.5)),
        field=fields.prism(("-3/5", "-2/5", "-11/10"), ("1/2", "2/5", "-3/10")),
        conditions={"bottom": "neumann"},
        quantities={
            "attraction at the station": flux_density_at((0.0, 0.0, 0.0), (0, 0, -1)),
            "attraction beside it": flux_density_at((0.6, 0.0, 0.0), (0, 0, -1)),
            "potential at the station": value_at((0.0, 0.0, 0.0)),
        },
        sources=(PRISM,),
        reference_points=(("0", "0", "0"), ("-0.6", "0.4", "0"), ("0.5", "0.5", "0.5")),
    )
