"""Solids with re-entrant edges: prisms whose edge is singular along its length, a cube without an octant."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.boxes import SOLID
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import LShape, NotchedCube, Polygon, Prism
from laplace_verify.problems import flux_through, robin, value_at

__all__ = ["family"]

family = Family()
EDGE = "edges of polyhedra: Grisvard 1985, Elliptic Problems in Nonsmooth Domains, section 4.4 (from memory)"
BESSEL = "cylindrical coordinates: Carslaw & Jaeger 1959, Conduction of Heat in Solids, 2nd ed., ch. VIII"
VERTEX = (
    "exponent 0.4541737 of the vertex: Schmitz, Volk & Wendland 1993, Three-dimensional singularities of "
    "elastic fields near vertices (from memory, unchecked; two spectral computations agree to 13 digits)"
)
CORNER_BLOCK = Prism(LShape(0.9), 0.0, 0.8)


@family
def _corner_block() -> Definition:
    return Definition(
        title="Block with a re-entrant edge",
        solution="(1 + z/2) r^(2/3) sin(2 theta/3) about the edge",
        note="The singularity r^(2/3) grows along the edge.",
        reading="The concrete around a corner of the pump shaft, warmer towards the deck.",
        shape=CORNER_BLOCK,
        field=fields.along_z(fields.wedge("2/3"), slope="1/2"),
        conductivity=1.4,
        quantities={
            "value beside the edge": value_at((-0.1, 0.1, 0.4)),
            "flux through the far side": flux_through("side-3"),
        },
        sources=(EDGE, HERE),
        reference_points=(("-0.5", "0.5", "0.4"), ("-0.000001", "0.000001", "0.4"), ("0.9", "0.9", "0.8")),
    )


@family
def _corner_block_mixed() -> Definition:
    return Definition(
        title="Block whose edge is cold on one side and insulated on the other",
        solution="(1 - z/4) r^(1/3) sin(theta/3) about the edge",
        note="Where the condition changes at the edge the singularity is r^(1/3).",
        reading="A quay corner, its one wall in the water, its other wall lined.",
        shape=CORNER_BLOCK,
        field=fields.along_z(fields.wedge("1/3"), slope="-1/4"),
        conditions={"side-6": "neumann", "top": robin(1.5)},
        conductivity=0.8,
        quantities={
            "value beside the edge": value_at((-0.1, 0.1, 0.4)),
            "flux through the far side": flux_through("side-3"),
        },
        sources=(EDGE, HERE),
    )


@family
def _corner_block_waves() -> Definition:
    return Definition(
        title="Block with a singularity that changes sign along its re-entrant edge",
        solution="I_a(3 r)/I_a(3) sin(a theta) cos(3 z), a = 2/3, about the edge, I_a the modified Bessel "
        "function",
        reading="A shaft corner with heating cables laid in waves behind its walls.",
        shape=CORNER_BLOCK,
        field=fields.edge_wave("2/3", 3),
        conditions={"bottom": "neumann", "side-4": "neumann"},
        conductivity=1.2,
        quantities={
            "value beside the edge": value_at((-0.1, 0.1, 0.4)),
            "flux through the far side": flux_through("side-4"),
        },
        sources=(BESSEL, HERE),
        reference_points=(("-0.5", "0.5", "0.4"), ("0.9", "0.9", "0.8"), ("-0.000001", "0.000001", "0.1")),
    )


@family
def _ridge_block_insulated() -> Definition:
    return Definition(
        title="Block with an insulated re-entrant edge of 225 degrees",
        solution="(1 + z) r^(4/5) cos(4 theta/5) about the edge",
        reading="Bedrock under the toe of the dam, sealed along both faces of a ridge.",
        shape=Prism(Polygon([(0.0, 0.0), (1.0, 0.0), (1.0, 0.8), (-0.9, 0.8), (-0.9, -0.9)]), -0.3, 0.5),
        field=fields.along_z(fields.wedge("4/5", "cos"), slope=1),
        conditions={"side-1": "neumann", "side-5": "neumann", "top": "neumann"},
        conductivity=0.7,
        quantities={
            "value on the edge": value_at((0.0, 0.0, 0.1), exact=0),
            "flux through the far side": flux_through("side-3"),
        },
        sources=(EDGE, HERE),
    )


@family
def _notched_cube_smooth() -> Definition:
    return Definition(
        title="Cube without an octant, smooth solution",
        solution="sqrt(15)/2 z (x^2 - y^2) + 2 x - 1",
        note="The solution is smooth; the vertex of the notch is not.",
        reading="A foundation block with a recess for the pump, in a smooth field.",
        shape=NotchedCube(0.7),
        field=fields.solid(3, 2) + fields.affine((2, 0, 0), -1),
        conductivity=1.3,
        quantities={
            "value at the vertex": value_at((0.0, 0.0, 0.0), exact=-1),
            "flux through the left face": flux_through("left"),
        },
        sources=(SOLID, VERTEX),
        reference_points=(("-0.1", "-0.1", "-0.1"), ("0", "0", "0.3"), ("0", "0", "0")),
    )


@family
def _notched_cube_edges() -> Definition:
    return Definition(
        title="Cube without an octant, singular along the edges of the notch",
        solution="the sum over the three edges of the notch of Re [z + 2/3 R (1 - q)] q^(2/3), z along the "
        "edge, q = w/(w - b), w the stereographic image of the direction, b that of (1, 1, 1)",
        note="The solution is like r^(2/3) along the edges and homogeneous of degree 1 at the vertex.",
        reading="A foundation block with a recess whose edges carry reinforcement at another potential.",
        shape=NotchedCube(0.8),
        field=(
            fields.half_edge("2/3", (1, 1, 1), "x")
            + fields.half_edge("2/3", (1, 1, 1), "y")
            + fields.half_edge("2/3", (1, 1, 1), "z")
        ),
        conditions={"left": "neumann", "bottom": robin(1.2)},
        conductivity=0.9,
        quantities={
            "value at the vertex": value_at((0.0, 0.0, 0.0), exact=0),
            "value beside an edge": value_at((-0.05, -0.05, 0.4)),
            "flux through the left face": flux_through("left"),
        },
        sources=(VERTEX, EDGE, HERE),
        reference_points=(("-0.4", "-0.3", "-0.2"), ("-0.000001", "-0.000001", "0.4"), ("0", "0.2", "0.3")),
    )
