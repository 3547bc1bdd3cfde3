"""Plates and a box that are periodic in one direction: one cell of something that repeats itself endlessly.

On a plate of width w the waves cos(2 pi m x/w) and sin(2 pi m x/w) continue from the right side onto the left
one, value and flux. The sides are no boundary and their corners are none: the solution is as smooth as on a
ring.
"""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.cases.plates_smooth import WAVES
from laplace_verify.fields import by_region
from laplace_verify.geometry import Box, Rectangle
from laplace_verify.problems import Condition, flux_through, layers, robin, value_at

__all__ = ["family"]

family = Family()
SIDES = {name: Condition(kind="periodic") for name in ("left", "right")}


@family
def _plate_periodic_sides() -> Definition:
    return Definition(
        title="Plate with periodic sides and a given flux on top",
        solution="cos(2 pi (x - 1/10)) cosh(2 pi y)/cosh(7 pi/5) + 2 y",
        reading="One bay of a quay wall that repeats itself every metre, heated from above.",
        shape=Rectangle((0, 0), (1, 0.7)),
        field=fields.exp_trig(2, "cos", "cosh", centre=("1/10", 0), level="7/10", times_pi=True)
        + fields.affine((0, 2)),
        conditions={**SIDES, "top": "neumann"},
        conductivity=1.6,
        quantities={"flux through the bottom": flux_through("bottom", exact="-16/5")},
        sources=(WAVES,),
    )


@family
def _plate_periodic_convection() -> Definition:
    return Definition(
        title="Plate with periodic sides and convection on top",
        solution="sin(4 pi (x + 1/2)) e^(-4 pi y) - y",
        reading="A floor slab over rows of ducts, one period of it, with the air of the hall above.",
        shape=Rectangle((-0.5, 0), (0.5, 0.4)),
        field=fields.exp_trig(4, "sin", "decay", centre=("-1/2", 0), times_pi=True) + fields.affine((0, -1)),
        conditions={**SIDES, "bottom": "neumann", "top": robin(2.5)},
        conductivity=0.7,
        quantities={"flux through the bottom": flux_through("bottom", exact="7/10")},
        sources=(WAVES,),
    )


@family
def _plate_periodic_pure_flux() -> Definition:
    return Definition(
        title="Plate with periodic sides and given fluxes above and below",
        solution="cos(5 pi x/2) e^(5 pi (y - 1/2)/2) + y/2 + 3",
        reading="Seepage through one period of a filter bed; its level is known by the mean only.",
        shape=Rectangle((0, 0), (0.8, 0.5)),
        field=fields.exp_trig("5/2", "cos", centre=(0, "1/2"), times_pi=True) + fields.affine((0, "1/2"), 3),
        conditions={**SIDES, "bottom": "neumann", "top": "neumann"},
        conductivity=2.5,
        quantities={"flux through the top": flux_through("top", exact=1)},
        sources=(WAVES,),
    )


@family
def _plate_periodic_layers() -> Definition:
    bed = layers((0, 1), ["2/5"], {"rock": 2.0, "sand": 0.5})
    even = fields.exp_trig(2, "cos", "cosh", centre=(0, "2/5"), times_pi=True)
    odd = fields.exp_trig(2, "cos", "sinh", centre=(0, "2/5"), level="9/10", times_pi=True)
    return Definition(
        title="Two layers with a wave along the joint and periodic sides",
        solution="cos 2 pi x [cosh 2 pi s + a sinh 2 pi s/sinh pi], s = y - 2/5, a = 1/2 in rock, 2 in sand",
        reading="One period of a rippled temperature in rock under a bed of sand.",
        shape=Rectangle((0, 0), (1, 0.9)),
        field=by_region(bed, {"rock": even + odd * "1/2", "sand": even + odd * 2}),
        conditions={**SIDES, "bottom": "neumann"},
        conductivity=bed,
        quantities={"value on the joint": value_at((0.5, 0.4), exact=-1)},
        sources=(HERE,),
    )


@family
def _box_periodic_sides() -> Definition:
    return Definition(
        title="Box with periodic sides, a given flux and convection",
        solution="sin(2 pi x) cos(pi y) e^(sqrt(5) pi (z - 3/5)) + y + 2 z",
        reading="One row of a pillar field, repeated to both sides, with a cooled front and a heated roof.",
        shape=Box((0, 0, 0), (1, 0.8, 0.6)),
        field=fields.exp_trig((2, 1), ("sin", "cos"), centre=(0, 0, "3/5"), times_pi=True)
        + fields.affine((0, 1, 2)),
        conditions={**SIDES, "top": "neumann", "front": robin(1.5)},
        conductivity=1.2,
        quantities={"flux through the back": flux_through("back")},
        sources=(WAVES,),
    )
