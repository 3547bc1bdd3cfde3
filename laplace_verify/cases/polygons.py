"""Polygons: sides off the axes, a hole with a source in it, a slit."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import Polygon
from laplace_verify.problems import flux_through, robin, value_at

__all__ = ["family"]

family = Family()
SLIT = "crack-tip exponent 1/2: Grisvard 1985, Elliptic Problems in Nonsmooth Domains, section 4.4"


@family
def _triangle_cubic() -> Definition:
    return Definition(
        title="Triangle with a cubic solution",
        solution="x^3 - 3 x y^2 + 2 x y",
        reading="A gusset plate of the lifting bridge.",
        shape=Polygon([(0.0, 0.0), (1.4, 0.2), (0.5, 1.1)]),
        field=fields.polynomial(3) + fields.polynomial(2, "im"),
        conductivity=0.75,
        quantities={"flux through the first side": flux_through("side-1")},
    )


@family
def _hexagon_mixed() -> Definition:
    return Definition(
        title="Irregular hexagon under all three conditions",
        solution="cos(3/2 x - 3/20) e^(3/2 y)",
        reading="A caisson of six unequal walls, one heated, one ventilated.",
        shape=Polygon([(0.9, 0.0), (0.5, 0.7), (-0.4, 0.75), (-0.8, 0.1), (-0.5, -0.6), (0.4, -0.7)]),
        field=fields.exp_trig("3/2", "cos", centre=("1/10", 0)),
        conditions={"side-2": "neumann", "side-5": robin(2.5)},
        conductivity=1.3,
        quantities={"flux through the ventilated side": flux_through("side-5")},
    )


@family
def _polygon_with_hole() -> Definition:
    return Definition(
        title="Four-sided plate with a hole",
        solution="log |x - p| + (x^2 - y^2)/2, p = (0.72, 0.57)",
        note="The source lies in the hole, so u has no single-valued conjugate.",
        reading="A footing around a duct that draws water from the ground.",
        shape=Polygon(
            [(0.0, 0.0), (1.5, 0.1), (1.4, 1.2), (0.1, 1.0)],
            holes=[[(0.5, 0.35), (1.0, 0.4), (0.95, 0.8), (0.45, 0.75)]],
        ),
        field=fields.log_source(("18/25", "57/100")) + fields.polynomial(2) * "1/2",
        conditions={"side-2": "neumann"},
        conductivity=0.9,
        quantities={"value at the sensor": value_at((0.3, 0.3))},
        sources=(HERE,),
    )


@family
def _slit_plate() -> Definition:
    return Definition(
        title="Plate with a slit",
        solution="r^(1/2) sin(theta/2) about the tip, 0 < theta < 2 pi, theta = 0 on the upper lip",
        note="u vanishes on both lips, which are the straight line from (1.1, 0) to the tip (0, 0).",
        reading="A plate with a cooled saw cut from its right edge to the middle.",
        shape=Polygon(
            [(-0.9, -0.6), (1.1, -0.6), (1.1, 0.0), (0.0, 0.0), (1.1, 0.0), (1.1, 0.6), (-0.9, 0.6)]
        ),
        field=fields.wedge("1/2", cut=0),
        quantities={"value at the sensor": value_at((-0.5, 0.0))},
        sources=(SLIT,),
    )
