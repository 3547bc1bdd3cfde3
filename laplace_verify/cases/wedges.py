"""Wedges from an eighth of a turn to a whole one: every pair of conditions at the apex, exponent by exponent.

An apex of opening w carries r^(j pi/w) if both sides have the same type of condition and r^((j - 1/2) pi/w)
if it changes; where data do not match it carries r^m log r.
"""

from __future__ import annotations

import math

from laplace_verify import fields
from laplace_verify.cases.corners import CORNER
from laplace_verify.cases.corners_fitted import LEHMAN
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import Sector
from laplace_verify.problems import flux_through, robin, value_at

__all__ = ["family"]

family = Family()
TWO_WALLS = ("corner", "wedge")


@family
def _wedge_eighth_turn() -> Definition:
    return Definition(
        title="Eighth of a disc, zero on both sides",
        solution="r^4 sin(4 theta)",
        note="The opening is a whole part of pi, so the corner's own solution is a polynomial.",
        reading="A narrow wedge of still water between two cold walls.",
        shape=Sector(1.3, math.pi / 4),
        field=fields.polynomial(4, "im"),
        conductivity=1.4,
        quantities={"value at the sensor": value_at((0.8, 0.4), exact="0.6144")},
        tags=TWO_WALLS,
        sources=(HERE,),
    )


@family
def _wedge_sixth_turn_mixed() -> Definition:
    return Definition(
        title="Sixth of a disc, one side cold, one insulated",
        solution="r^(3/2) sin(3/2 theta)",
        note="A convex corner whose change of condition leaves a bounded but rough gradient.",
        reading="A sixth of a round heat store, cooled along one cut and closed along the other.",
        shape=Sector(1.2, math.pi / 3),
        field=fields.wedge("3/2"),
        conditions={"end": "neumann"},
        conductivity=0.7,
        quantities={"value at the sensor": value_at((0.5, 0.25))},
        tags=TWO_WALLS,
        sources=(CORNER,),
        reference_points=(("0.5", "0.25"), ("1e-6", "1e-6"), ("1", "1e-6")),
    )


@family
def _wedge_third_turn_insulated() -> Definition:
    return Definition(
        title="Third of a disc, both sides insulated, convection at the rim",
        solution="1 + r^(3/2) cos(3/2 theta)",
        reading="A third of a round basin between two tight walls, open to the air along its rim.",
        shape=Sector(0.9, 2 * math.pi / 3),
        field=fields.wedge("3/2", "cos") + fields.affine((0, 0), 1),
        conditions={"start": "neumann", "end": "neumann", "arc": robin(2.0)},
        quantities={
            "value at the sensor": value_at((0.3, 0.4)),
            "flux through the wall": flux_through("start", exact=0),
        },
        tags=TWO_WALLS,
        sources=(CORNER,),
        reference_points=(("0.3", "0.4"), ("-1e-6", "1e-3")),
    )


@family
def _wedge_obtuse() -> Definition:
    return Definition(
        title="Obtuse wedge, zero on both sides",
        solution="r^(4/3) sin(4/3 theta)",
        note="A convex corner: the gradient is bounded, the second derivatives are not.",
        reading="A pool between two cold walls that meet at 135 degrees.",
        shape=Sector(1.1, 3 * math.pi / 4),
        field=fields.wedge("4/3"),
        conductivity=1.3,
        quantities={"value at the sensor": value_at((0.2, 0.5))},
        tags=TWO_WALLS,
        sources=(CORNER,),
        reference_points=(("0.2", "0.5"), ("1e-6", "1e-6")),
    )


@family
def _wedge_half_turn_mixed() -> Definition:
    return Definition(
        title="Half disc, the condition changes in the middle of its straight side",
        solution="r^(1/2) sin(theta/2) - r^(3/2) sin(3/2 theta)/3",
        note="The shape has no corner at the centre; the change of condition alone makes the solution rough.",
        reading="A half-round plate that rests half on a cooling mat and half on insulation.",
        shape=Sector(0.8, math.pi),
        field=fields.wedge("1/2") - fields.wedge("3/2") * "1/3",
        conditions={"end": "neumann"},
        conductivity=2.5,
        quantities={"value at the sensor": value_at((-0.2, 0.3))},
        tags=TWO_WALLS,
        sources=(CORNER,),
        reference_points=(("-0.2", "0.3"), ("0.5", "1e-6"), ("-1e-6", "1e-6")),
    )


@family
def _wedge_re_entrant_insulated() -> Definition:
    return Definition(
        title="Re-entrant wedge, both sides insulated",
        solution="r^(4/5) cos(4/5 theta)",
        reading="Flow around a blunt headland of 135 degrees.",
        shape=Sector(1.0, 5 * math.pi / 4),
        field=fields.wedge("4/5", "cos"),
        conditions={"start": "neumann", "end": "neumann"},
        conductivity=0.6,
        quantities={
            "value at the sensor": value_at((-0.3, 0.3)),
            "flux through the wall": flux_through("start", exact=0),
        },
        tags=TWO_WALLS,
        sources=(CORNER,),
        reference_points=(("-0.3", "0.3"), ("-1e-6", "1e-6")),
    )


@family
def _wedge_re_entrant_mixed() -> Definition:
    return Definition(
        title="Three-quarter disc, one side cold, one insulated, convection at the rim",
        solution="r^(1/3) sin(theta/3)",
        reading="A round plate with a quarter cut out, cooled on one face of the cut, open along its rim.",
        shape=Sector(1.2, 3 * math.pi / 2),
        field=fields.wedge("1/3"),
        conditions={"end": "neumann", "arc": robin(1.5)},
        conductivity=0.9,
        quantities={"value at the sensor": value_at((-0.5, -0.3))},
        tags=TWO_WALLS,
        sources=(CORNER,),
        reference_points=(("-0.5", "-0.3"), ("1e-6", "1e-6")),
    )


@family
def _wedge_nearly_full() -> Definition:
    return Definition(
        title="Disc without an eighth, zero on both sides",
        solution="r^(4/7) sin(4/7 theta)",
        reading="Water around the tip of a sharp breakwater.",
        shape=Sector(0.9, 7 * math.pi / 4),
        field=fields.wedge("4/7", cut=15 * math.pi / 8),
        conductivity=1.1,
        quantities={"value at the sensor": value_at((-0.4, 0.2))},
        tags=TWO_WALLS,
        sources=(CORNER,),
        reference_points=(("-0.4", "0.2"), ("-1e-6", "1e-6")),
    )


@family
def _wedge_full_turn_insulated() -> Definition:
    return Definition(
        title="Slit disc, both lips insulated",
        solution="r^(1/2) cos(theta/2), 0 < theta < 2 pi",
        note="u jumps across the slit from sqrt(r) to -sqrt(r); no flux passes it.",
        reading="Seepage around the toe of a thin sheet pile.",
        shape=Sector(1.1, 2 * math.pi),
        field=fields.wedge("1/2", "cos", cut=2 * math.pi),
        conditions={"start": "neumann", "end": "neumann"},
        conductivity=1.7,
        quantities={"value at the sensor": value_at((0.0, 0.5), exact="1/2")},
        tags=TWO_WALLS,
        sources=(CORNER,),
        reference_points=(("0", "0.5"), ("-1e-6", "0")),
    )


@family
def _wedge_quarter_turn_logarithm() -> Definition:
    corner = fields.CornerSeries(apex=(0, 0), start=(1, 0), stop=(0, 1), sides="dd", logs=((2, "1"),))
    return Definition(
        title="Quarter disc with data that do not match at the apex",
        solution="r^2 (log r sin(2 theta) + theta cos(2 theta))",
        note="u = 0 on the x axis and -pi/2 y^2 on the y axis: smooth data, r^2 log r at a convex corner.",
        reading="The corner of a tank whose two walls follow different gentle profiles.",
        shape=Sector(0.9, math.pi / 2),
        field=fields.corner_powers((corner,)),
        conductivity=1.2,
        quantities={"value at the sensor": value_at((0.4, 0.3))},
        tags=TWO_WALLS,
        sources=(LEHMAN, HERE),
        reference_points=(("0.4", "0.3"), ("1e-6", "1e-6"), ("0.5", "1e-6")),
    )
