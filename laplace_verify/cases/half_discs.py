"""Half-discs in the plane (sectors of 180 degrees): a step, waves, images, a change of condition."""

from __future__ import annotations

import math

from laplace_verify import fields
from laplace_verify.cases.corners import CORNER
from laplace_verify.cases.definition import Definition, Family
from laplace_verify.geometry import Sector
from laplace_verify.problems import energy_of_solution, flux_through, robin, value_at

__all__ = ["family"]

family = Family()
REFLECTED = (
    "Poisson's integral of the odd continuation: Churchill & Brown, Complex Variables and Applications"
)


@family
def _half_disc_hot_arc() -> Definition:
    return Definition(
        title="Half-disc with a hot arc and a cold diameter",
        solution="2/pi arctan(2 R y/(R^2 - r^2)), R = 5/4",
        note="u = 1 on the arc, u = 0 on the diameter: the data jump at both corners.",
        reading="A half-round duct, its bottom on ice.",
        shape=Sector(1.25, math.pi),
        field=fields.poisson_disc((0, 0), "5/4", fields.arcs((0, "1/2"), (1, -1))),
        conductivity=0.75,
        quantities={"value half way up": value_at((0.0, 0.625), exact="2/pi*atan(4/3)")},
        sources=(REFLECTED,),
        reference_points=(("0", "0.5"), ("0.75", "0.9"), ("-1.24", "1e-3")),
    )


@family
def _half_disc_waves() -> Definition:
    return Definition(
        title="Half-disc with a cold diameter and convection on the arc",
        solution="2 s sin t - 1/2 s^2 sin 2t + 1/4 s^5 sin 5t, s = r/0.9",
        reading="A half-round oven hood over a cooled bench.",
        shape=Sector(0.9, math.pi),
        field=fields.poisson_disc((0, 0), "9/10", fields.fourier((), (2, "-1/2", 0, 0, "1/4"))),
        conditions={"arc": robin(1.2)},
        conductivity=1.5,
        quantities={"energy": energy_of_solution(exact="1.5*pi/2*(4 + 0.5 + 5/16)")},
        sources=(REFLECTED,),
    )


@family
def _half_disc_half_insulated() -> Definition:
    return Definition(
        title="Half-disc whose diameter is cold on one half and insulated on the other",
        solution="r^(1/2) sin(theta/2) - 1/3 r^(3/2) sin(3/2 theta)",
        note="The condition changes in the middle of the straight diameter.",
        reading="A half-round plate, one half of its foot on a cooling rail.",
        shape=Sector(1.0, math.pi),
        field=fields.wedge("1/2") - fields.wedge("3/2") * "1/3",
        conditions={"end": "neumann", "arc": robin(0.8)},
        conductivity=1.1,
        quantities={"flux through the cold half": flux_through("start", exact="-11/15")},
        sources=(CORNER,),
        reference_points=(("0", "0.5"), ("1e-3", "1e-3"), ("-0.9", "0")),
    )


@family
def _half_disc_mirrored_wells() -> Definition:
    return Definition(
        title="Half-disc with an insulated diameter, a well and its mirror image outside",
        solution="1 + log |x - p| + log |x - q|, p = (3/4, 3/4), q = (3/4, -3/4)",
        note="No flux passes the diameter, across which u is continued evenly; p is 0.26 beyond the arc.",
        reading="Ground water under a half-round basin along a tight wall, a well beside it.",
        shape=Sector(0.8, math.pi),
        field=fields.affine((0, 0), 1)
        + fields.log_source(("3/4", "3/4"))
        + fields.log_source(("3/4", "-3/4")),
        conditions={"start": "neumann", "end": "neumann"},
        conductivity=2.0,
        quantities={"flux through the arc": flux_through("arc", exact=0)},
        sources=("method of images: Kellogg 1929, Foundations of Potential Theory, ch. IX",),
    )
