"""Boxes: affine, solid harmonics, waves, a tensor, a source outside; under all conditions."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import Box
from laplace_verify.problems import energy_of_solution, flux_through, robin, value_at

__all__ = ["family"]

family = Family()
TANK = Box((0.0, 0.0, 0.0), (1.2, 0.9, 0.7))
FACES = ("left", "right", "front", "back", "bottom", "top")
SOLID = "solid harmonics: Hobson 1931, The Theory of Spherical and Ellipsoidal Harmonics, ch. IV"
WAVES = "separation of variables: Carslaw & Jaeger 1959, Conduction of Heat in Solids, 2nd ed., ch. VI"
POINT = "point source: Kellogg 1929, Foundations of Potential Theory, ch. VI"
ROCK = [[2.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, 0.5]]
TILTED = [[2.0, 0.4, 0.0], [0.4, 1.0, -0.2], [0.0, -0.2, 0.8]]


@family
def _box_affine() -> Definition:
    return Definition(
        title="Box with an affine solution under all three conditions",
        solution="1 + x - 2 y + 3 z",
        note="Every consistent scheme is exact.",
        reading="A block of the sluice foundation with a uniform heat flow through it.",
        shape=TANK,
        field=fields.affine((1, -2, 3), 1),
        conditions={"right": "neumann", "top": robin(0.9)},
        conductivity=1.6,
        quantities={
            "flux through the top": flux_through("top", exact="5.184"),
            "energy": energy_of_solution(exact="1.6*14*1.2*0.9*0.7"),
        },
        tags=("exactness",),
    )


@family
def _box_solid() -> Definition:
    return Definition(
        title="Box with solid harmonics",
        solution="H31 + H20/2; H31 = sqrt(6)/4 x (4 z^2 - x^2 - y^2), H20 = z^2 - (x^2 + y^2)/2",
        note="Seven-point differences are exact at the nodes.",
        reading="Potential of a far-away ring of anodes inside a tank.",
        shape=TANK,
        field=fields.solid(3, 1) + fields.solid(2, 0) * "1/2",
        tags=("exactness",),
        quantities={"value in the corner": value_at((0.0, 0.0, 0.7), exact="49/200")},
        sources=(SOLID,),
        reference_points=(("0.6", "0.45", "0.35"), ("1.2", "0.9", "0.7")),
    )


@family
def _box_wave_mixed() -> Definition:
    return Definition(
        title="Box with a decaying wave under all three conditions",
        solution="cos(3/2 x - 3/10) sin(2 y + 1/2) e^(5/2 z - 7/4)",
        reading="A concrete block with a heating mat on its left and wind over its top.",
        shape=TANK,
        field=fields.exp_trig(("3/2", 2), ("cos", "sin"), centre=("1/5", "-1/4", 0), level="7/10"),
        conditions={"left": "neumann", "back": "neumann", "top": robin(3.0)},
        conductivity=2.5,
        quantities={"flux through the bottom": flux_through("bottom")},
        sources=(WAVES,),
    )


@family
def _box_flux() -> Definition:
    return Definition(
        title="Box with a given flux through three faces",
        solution="H44 about (1/4, -1/5, 0) plus H4-1 about (0, 0, -1/10), solid harmonics of degree 4",
        reading="A dam block whose inflow is metered on three faces.",
        shape=TANK,
        field=fields.solid(4, 4).shifted(("1/4", "-1/5", 0)) + fields.solid(4, -1).shifted((0, 0, "-1/10")),
        conditions={"right": "neumann", "front": "neumann", "top": "neumann"},
        conductivity=0.8,
        quantities={"flux through the left face": flux_through("left")},
        sources=(SOLID,),
    )


@family
def _box_pure_flux() -> Definition:
    return Definition(
        title="Box with a given flux through all faces",
        solution="H42 about (1/5, 1/10, -1/10), the solid harmonic of degree 4 and order 2 (Schmidt's norm)",
        reading="Seepage through a block of dam core whose discharges are all measured.",
        shape=TANK,
        field=fields.solid(4, 2).shifted(("1/5", "1/10", "-1/10")),
        conditions=dict.fromkeys(FACES, "neumann"),
        conductivity=0.5,
        quantities={"value at the sensor": value_at((0.6, 0.45, 0.35))},
        sources=(SOLID,),
    )


@family
def _box_convection() -> Definition:
    return Definition(
        title="Box with convection on all faces",
        solution="sin(x + 1/5) cos(3/2 y) e^(sqrt(13)/2 (z - 7/10)) + 1",
        reading="A battery block in a stream of air.",
        shape=TANK,
        field=fields.exp_trig((1, "3/2"), ("sin", "cos"), centre=("-1/5", 0, 0), level="7/10")
        + fields.affine((0, 0, 0), 1),
        conditions={name: robin(0.5 * k) for k, name in enumerate(FACES, start=1)},
        conductivity=1.2,
        quantities={"flux through the top": flux_through("top")},
        sources=(WAVES,),
    )


@family
def _box_uneven_film() -> Definition:
    return Definition(
        title="Box under a film that varies over its faces",
        solution="the solid harmonic of degree 3 and order 1 (Schmidt's norm), plus x + 2",
        note="The coefficient varies in both directions of the top; a mean of it is not enough.",
        reading="A brine tank in the open: wind cools one corner of its lid most.",
        shape=TANK,
        field=fields.solid(3, 1) + fields.affine((1, 0, 0), 2),
        conditions={"top": robin("1 + 2*x + y"), "right": robin("2 - z"), "front": "neumann"},
        conductivity=0.8,
        quantities={"flux through the top": flux_through("top")},
        sources=(SOLID,),
    )


@family
def _box_tensor_diagonal() -> Definition:
    return Definition(
        title="Box of a layered material",
        solution="the solid harmonic of degree 4 and order -1 (Schmidt's norm) of (x/sqrt 2, y, z sqrt 2)",
        reading="A block of bedded rock that conducts four times better along x than along z.",
        shape=TANK,
        field=fields.stretched(fields.solid(4, -1), ROCK),
        conditions={"right": "neumann", "top": robin(2.0)},
        conductivity=ROCK,
        quantities={"flux through the front": flux_through("front")},
        sources=(SOLID, HERE),
    )


@family
def _box_tensor_oblique() -> Definition:
    return Definition(
        title="Box of an obliquely bedded material",
        solution="the solid harmonic of degree 4 and order 2 (Schmidt's norm) of K^(-1/2) (x, y, z)",
        reading="A block of rock whose beds dip askew to its faces, metered on its back.",
        shape=TANK,
        field=fields.stretched(fields.solid(4, 2), TILTED),
        conditions={"back": "neumann"},
        conductivity=TILTED,
        quantities={"flux through the left face": flux_through("left")},
        sources=(SOLID, HERE),
    )


@family
def _box_source_near() -> Definition:
    return Definition(
        title="Box with a source close to its top",
        solution="1/|x - p|, p = (1/5, 3/20, 2/5)",
        note="The source is 0.1 outside.",
        tags=("near-source",),
        reading="A grounding electrode just above a block of conducting clay.",
        shape=Box((0.0, 0.0, 0.0), (0.44, 0.36, 0.3)),
        field=fields.point_source(("1/5", "3/20", "2/5")),
        quantities={"value below the source": value_at((0.2, 0.15, 0.3), exact=10)},
        sources=(POINT,),
        reference_points=(("0.3", "0.25", "0.2"), ("0.2", "0.15", "0.3"), ("0.44", "0.36", "0")),
    )
