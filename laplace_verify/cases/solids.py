"""Boxes: affine, solid harmonics, waves, sources; under all conditions."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import Box
from laplace_verify.problems import flux_through, robin, value_at

__all__ = ["family"]

family = Family()
TANK = Box((0.0, 0.0, 0.0), (1.2, 0.9, 0.7))


@family
def _box_affine() -> Definition:
    return Definition(
        title="Box with an affine solution under all three conditions",
        statement="div(K grad u) = 0 in 0 < x < 1.2, 0 < y < 0.9, 0 < z < 0.7 with K = 1.6; flux given on the right, "
        "convection on top, u given elsewhere. Solution u = 1 + x - 2 y + 3 z.",
        reading="A concrete block of the sluice foundation with a uniform heat flow through it.",
        shape=TANK,
        field=fields.affine((1, -2, 3), 1),
        conditions={"right": "neumann", "top": robin(0.9)},
        conductivity=1.6,
        quantities={"flux through the top": flux_through("top", exact=5.184)},
        tags=("exactness",),
    )


@family
def _box_pure_flux() -> Definition:
    return Definition(
        title="Box with a given flux on all faces",
        statement="div(K grad u) = 0 in 0 < x < 1.2, 0 < y < 0.9, 0 < z < 0.7 with K = 0.5; n . K grad u given on all "
        "faces, mean of u given. Solution u = r^4 P_4^2(cos t) cos 2 phi (Schmidt's norm) about (1/5, 1/10, -1/10).",
        reading="Seepage through a block of dam core whose discharges are all measured.",
        shape=TANK,
        field=fields.solid(4, 2).shifted(("1/5", "1/10", "-1/10")),
        conditions=dict.fromkeys(("left", "right", "front", "back", "bottom", "top"), "neumann"),
        conductivity=0.5,
        quantities={"value at the sensor": value_at((0.6, 0.45, 0.35))},
        sources=(HERE,),
    )
