"""Plates with a logarithmic source 1, 0.1 and 0.01 outside: from nearly uniform to steep next to one side."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import Definition, Family
from laplace_verify.cases.plates_smooth import SOURCE
from laplace_verify.geometry import Rectangle
from laplace_verify.problems import flux_through, robin, value_at

__all__ = ["family"]

family = Family()


@family
def _plate_source_far() -> Definition:
    return Definition(
        title="Plate with a source one length unit away",
        solution="3/2 log |x - p|, p = (-1, 0.2)",
        note="The source is 1 outside the left side, whose flux is given.",
        reading="Ground water under a hall, drawn down by a municipal well across the road.",
        shape=Rectangle((0.0, 0.0), (0.9, 0.6)),
        field=fields.log_source((-1, "1/5"), "3/2"),
        conditions={"left": "neumann"},
        conductivity=0.8,
        quantities={"flux through the right side": flux_through("right")},
        sources=(SOURCE,),
    )


@family
def _plate_source_close() -> Definition:
    return Definition(
        title="Plate with a source a tenth above its convecting top",
        solution="-log |x - p|, p = (0.35, 0.7)",
        note="The source is 0.1 outside the top, where the condition is Robin's.",
        reading="A lid under a heating cable, ventilated between the two.",
        shape=Rectangle((0.0, 0.0), (0.9, 0.6)),
        field=fields.log_source(("7/20", "7/10"), -1),
        conditions={"top": robin(5.0)},
        conductivity=1.25,
        quantities={"flux through the top": flux_through("top")},
        sources=(SOURCE,),
    )


@family
def _plate_source_touching() -> Definition:
    return Definition(
        title="Small plate with a source a hundredth below it",
        solution="log |x - p| / 4, p = (0.03, -0.01)",
        note="The source is 0.01 outside the bottom; the plate is 0.1 wide.",
        reading="A printed circuit with the ground lead just beyond its lower edge.",
        shape=Rectangle((0.0, 0.0), (0.1, 0.07)),
        field=fields.log_source(("3/100", "-1/100"), "1/4"),
        conductivity=1.1,
        quantities={"value at the edge": value_at((0.03, 0.0))},
        sources=(SOURCE,),
    )
