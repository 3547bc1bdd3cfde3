"""Re-entrant corners and a change of condition: r^alpha, where no method keeps its formal order."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import LShape, Rectangle
from laplace_verify.problems import energy_of_solution, flux_through, value_at

__all__ = ["family"]

family = Family()
CORNER = "Grisvard 1985, Elliptic Problems in Nonsmooth Domains, section 4.4"
BASIN = LShape(1.0)


@family
def _l_shape_corner() -> Definition:
    return Definition(
        title="L-shaped basin, zero values at the corner",
        solution="r^(2/3) sin(2/3 theta)",
        note="u vanishes on side-1 and side-6, which meet at the re-entrant corner.",
        reading="An L-shaped tidal pool, where the flow is fastest around the inner corner.",
        shape=BASIN,
        field=fields.wedge("2/3"),
        quantities={
            "flux through the inner side": flux_through("side-1", exact=-1),
            "energy": energy_of_solution(),
        },
        tags=("corner",),
        sources=(CORNER,),
        reference_points=(("0.5", "0.5"), ("-1", "0.25"), ("-1e-6", "1e-6")),
    )


@family
def _l_shape_insulated_corner() -> Definition:
    return Definition(
        title="L-shaped basin, insulated corner",
        solution="r^(2/3) cos(2/3 theta) + (x^2 - y^2)/2",
        note="No flux passes side-1 and side-6, which meet at the re-entrant corner.",
        reading="A bent channel with tight walls around its inner corner.",
        shape=BASIN,
        field=fields.wedge("2/3", "cos") + fields.polynomial(2) * "1/2",
        conditions={"side-1": "neumann", "side-6": "neumann"},
        conductivity=1.5,
        quantities={"flux through the inner side": flux_through("side-1", exact=0)},
        tags=("corner",),
        sources=(CORNER,),
        reference_points=(("0.5", "0.25"), ("1e-9", "1e-9"), ("-0.5", "-1")),
    )


@family
def _l_shape_mixed_corner() -> Definition:
    return Definition(
        title="L-shaped basin, the condition changes at the corner",
        solution="r^(1/3) sin(theta/3)",
        note="u = 0 on side-1, no flux through side-6: the strongest corner singularity of this shape.",
        reading="An L-shaped plate cooled along one leg of its inner corner and insulated along the other.",
        shape=BASIN,
        field=fields.wedge("1/3"),
        conditions={"side-6": "neumann"},
        conductivity=0.8,
        quantities={"flux through the inner side": flux_through("side-1", exact="-4/5")},
        tags=("corner",),
        sources=(CORNER,),
        reference_points=(("0.5", "0.5"), ("-1", "-1"), ("0", "1e-6")),
    )


@family
def _l_shape_smooth() -> Definition:
    return Definition(
        title="L-shaped basin with a smooth solution",
        solution="cos(2 x - 3/5) e^(2 y - 2)",
        note="The corner is re-entrant, but this solution does not feel it.",
        reading="A bent wall under a temperature wave that is stronger than the corner's own.",
        shape=BASIN,
        field=fields.exp_trig(2, "cos", centre=("3/10", 0), level=1),
        conditions={"side-4": "neumann"},
        conductivity=0.8,
        quantities={
            "value in the corner": value_at((0.0, 0.0)),
            "flux through the top": flux_through("side-3"),
        },
        tags=("corner",),
        sources=(HERE,),
    )


@family
def _plate_condition_change() -> Definition:
    return Definition(
        title="Plate whose condition changes in the middle of a side",
        solution="r^(1/2) sin(theta/2) about (0, 0)",
        note="On the bottom u = 0 for x > 0 and u_y = 0 for x < 0.",
        reading="The floor of a pool, insulated up to the point where the cooling mat begins.",
        shape=Rectangle((-0.75, 0.0), (1.25, 0.7)).split(bottom=[0.375]),
        field=fields.wedge("1/2"),
        conditions={"bottom-1": "neumann"},
        conductivity=1.6,
        quantities={"flux through the cooling mat": flux_through("bottom-2", exact="-0.8*sqrt(5.0)")},
        sources=(CORNER,),
    )
