"""Re-entrant corners: r^alpha about the corner of the L-shape, where no method keeps its formal order."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import Definition, Family
from laplace_verify.geometry import LShape
from laplace_verify.problems import flux_through

__all__ = ["family"]

family = Family()
CORNER = "Grisvard 1985, Elliptic Problems in Nonsmooth Domains, section 4.4"
BASIN = LShape(1.0)


@family
def _l_shape_corner() -> Definition:
    return Definition(
        title="L-shaped basin, zero values at the corner",
        statement="div grad u = 0 in the L-shape (-1, 1)^2 without x > 0, y < 0; u given on all sides, zero on the two "
        "that meet at the origin. Solution u = r^(2/3) sin(2/3 theta), theta from the positive x axis.",
        reading="An L-shaped tidal pool: the flow is fastest around its inner corner.",
        shape=BASIN,
        field=fields.wedge("2/3"),
        quantities={"flux through the inner side": flux_through("side-1", exact=-1)},
        tags=("corner",),
        sources=(CORNER,),
    )
