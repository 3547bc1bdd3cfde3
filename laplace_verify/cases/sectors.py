"""Sectors up to the full turn: smooth and singular apexes."""

from __future__ import annotations

import math

from laplace_verify import fields
from laplace_verify.cases.corners import CORNER
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import Sector
from laplace_verify.problems import flux_through, robin, value_at

__all__ = ["family"]

family = Family()


@family
def _sector_quarter_mixed() -> Definition:
    return Definition(
        title="Quarter disc under all three conditions",
        solution="2 y + 3 x^2 y - y^3",
        note="u = 0 on the x axis and u_x = 0 on the y axis: a change of condition that does no harm.",
        reading="A quarter of a round heat store, cut along its planes of symmetry.",
        shape=Sector(1.1, math.pi / 2),
        field=fields.affine((0, 2)) + fields.polynomial(3, "im"),
        conditions={"end": "neumann", "arc": robin(1.0)},
        conductivity=1.5,
        quantities={"flux through the start": flux_through("start", exact=-5.2965)},
        sources=(HERE,),
    )


@family
def _sector_three_quarter() -> Definition:
    return Definition(
        title="Three-quarter disc with a re-entrant apex",
        solution="r^(2/3) sin(2/3 theta)",
        reading="A round pool with one quarter walled off.",
        shape=Sector(0.9, 3 * math.pi / 2),
        field=fields.wedge("2/3"),
        quantities={"value at the sensor": value_at((-0.4, 0.3))},
        tags=("corner",),
        sources=(CORNER,),
    )


@family
def _sector_slit() -> Definition:
    return Definition(
        title="Slit disc",
        solution="r^(1/2) sin(theta/2), 0 < theta < 2 pi",
        note="u vanishes on both lips of the slit.",
        reading="A round plate with a cooled cut to its centre.",
        shape=Sector(1.0, 2 * math.pi),
        field=fields.wedge("1/2", cut=2 * math.pi),
        quantities={"value at the sensor": value_at((-0.49, 0.0), exact="7/10")},
        sources=(CORNER,),
    )


@family
def _sector_slit_mixed() -> Definition:
    return Definition(
        title="Slit disc, one lip cooled, one insulated",
        solution="r^(1/4) sin(theta/4), 0 < theta < 2 pi",
        note="The strongest singularity that homogeneous conditions allow in the plane.",
        reading="A round plate with a cut that is cooled on its upper and insulated on its lower lip.",
        shape=Sector(1.0, 2 * math.pi),
        field=fields.wedge("1/4", cut=2 * math.pi),
        conditions={"end": "neumann"},
        conductivity=1.2,
        quantities={"value at the sensor": value_at((-0.5, 0.0))},
        sources=(CORNER,),
    )


@family
def _sector_hot_arc() -> Definition:
    return Definition(
        title="Quarter disc with a hot arc between cold sides",
        solution="the sum of (-1)^k (angle under which the k-th quarter of the circle is seen)/pi",
        note="u = 1 on the arc, u = 0 on the sides; continued oddly across the sides u fills the disc.",
        reading="A quarter-round duct between two cold walls.",
        shape=Sector(1.2, math.pi / 2),
        field=fields.poisson_disc((0, 0), "6/5", fields.arcs((0, "1/4", "1/2", "3/4"), (1, -1, 1, -1))),
        conductivity=0.7,
        quantities={"value at the sensor": value_at((0.5, 0.5))},
        sources=("Poisson's integral: Churchill & Brown, Complex Variables and Applications", HERE),
        reference_points=(("0.5", "0.5"), ("0.01", "0.01"), ("0.84", "0.84")),
    )


@family
def _sector_source_behind_apex() -> Definition:
    return Definition(
        title="Narrow sector with a source behind its apex",
        solution="log |x - p|, p = (-3/10, -1/5)",
        reading="A tapering bank beside a well.",
        shape=Sector(1.1, math.pi / 5),
        field=fields.log_source(("-3/10", "-1/5")),
        conditions={"start": robin(1.4), "end": "neumann"},
        conductivity=1.2,
        quantities={"flux through the arc": flux_through("arc")},
        sources=(HERE,),
    )
