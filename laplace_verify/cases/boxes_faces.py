"""Boxes whose faces are held at different temperatures, and boxes with insulated or cooled sides."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.boxes import WAVES
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import Box
from laplace_verify.problems import flux_through, robin, value_at

__all__ = ["family"]

family = Family()
SERIES = "double series: Carslaw & Jaeger 1959, Conduction of Heat in Solids, 2nd ed., section 6.2"
JUMPS = "The data jump along the edges of the warm face: no rate in the maximum norm."


@family
def _box_hot_top() -> Definition:
    return Definition(
        title="Box with one hot face",
        solution="sum over odd m, n of 16/(pi^2 m n) sin(m pi x/1.2) sin(n pi y/0.9) sinh(g z)/sinh(0.7 g)",
        note=JUMPS,
        reading="A concrete block cooled on five faces under a heated slab.",
        shape=Box((0.0, 0.0, 0.0), (1.2, 0.9, 0.7)),
        field=fields.box_faces((0, 0, 0), ("6/5", "9/10", "7/10"), top=1),
        conductivity=1.4,
        quantities={
            "value in the middle": value_at((0.6, 0.45, 0.35)),
            "flux through the bottom": flux_through("bottom"),
        },
        sources=(SERIES, HERE),
        reference_points=(("0.6", "0.45", "0.35"), ("0.6", "0.45", "0.699")),
    )


@family
def _box_insulated_sides() -> Definition:
    return Definition(
        title="Box with insulated and cold sides",
        solution="cos(2 pi x/1.2) sin(pi y/0.9) sinh(g z)/sinh(0.7 g), g^2 = (2 pi/1.2)^2 + (pi/0.9)^2",
        reading="A block between two symmetry planes, with a pattern of heating wires on top.",
        shape=Box((0.0, 0.0, 0.0), (1.2, 0.9, 0.7)),
        field=fields.box_mode((0, 0, 0), ("6/5", "9/10", "7/10"), (2, 0), x=("insulated", "insulated")),
        conditions={"left": "neumann", "right": "neumann"},
        conductivity=1.7,
        quantities={"flux through the top": flux_through("top", exact=0)},
        sources=(WAVES,),
    )


@family
def _box_cooled_sides() -> Definition:
    return Definition(
        title="Box with convection on two sides and below",
        solution="cos(p x) cos(q (y - 0.45)) Z(z)/Z(0.7), Z(z) = g cosh(g z) + 0.8 sinh(g z), "
        "p tan(1.2 p) = 2, q tan(0.45 q) = 3/2, g^2 = p^2 + q^2",
        note="The wavenumbers are roots, found in as many digits as are asked for.",
        reading="A cooling fin in a stream of air, at its symmetry plane, on a warm machine.",
        shape=Box((0.0, 0.0, 0.0), (1.2, 0.9, 0.7)),
        field=fields.box_mode(
            (0, 0, 0), ("6/5", "9/10", "7/10"), (0, 0), x=("insulated", 2), y=("3/2", "3/2"), bottom="4/5"
        ),
        conditions={
            "left": "neumann", "right": robin(3.0), "front": robin(2.25), "back": robin(2.25),
            "bottom": robin(1.2),
        },
        conductivity=1.5,
        quantities={"flux through the top": flux_through("top")},
        sources=(WAVES,),
    )  # fmt: skip


@family
def _box_metered_top() -> Definition:
    return Definition(
        title="Box with a given flux through its top",
        solution="sin(3 pi x/2.4) cos(pi y/0.9) cosh(g z)/cosh(0.7 g), g^2 = (3 pi/2.4)^2 + (pi/0.9)^2",
        reading="A soil column, wet on its left, sealed elsewhere, with metered rain on top.",
        shape=Box((0.0, 0.0, 0.0), (1.2, 0.9, 0.7)),
        field=fields.box_mode(
            (0, 0, 0), ("6/5", "9/10", "7/10"), (1, 1),
            x=("zero", "insulated"), y=("insulated", "insulated"), bottom="insulated",
        ),
        conditions=dict.fromkeys(("right", "front", "back", "bottom", "top"), "neumann"),
        conductivity=0.6,
        quantities={"value at a corner": value_at((1.2, 0.0, 0.7), exact=-1)},
        sources=(WAVES,),
    )  # fmt: skip
