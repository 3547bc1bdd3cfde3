"""Plates with smooth solutions under convection, under several conditions at once, and with a tensor."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import Definition, Family
from laplace_verify.cases.plates_smooth import OBLIQUE, PLATE, WAVES
from laplace_verify.problems import energy_of_solution, flux_through, robin, value_at

__all__ = ["family"]

family = Family()
LAYERED = [[3.0, 0.0], [0.0, 0.5]]


@family
def _wall_mixed_conditions() -> Definition:
    return Definition(
        title="Wall under all three conditions",
        solution="cos(2 x - 4/5) e^(2 y)",
        reading="The outer wall of the seawater-heating plant, with a heater on the left and wind on top.",
        shape=PLATE,
        field=fields.exp_trig(2, "cos", centre=("2/5", 0)),
        conditions={"left": "neumann", "top": robin(3.0)},
        conductivity=2.5,
        quantities={
            "flux through the right side": flux_through("right"),
            "value at the sensor": value_at((0.4, 0.0), exact=1),
            "energy": energy_of_solution(),
        },
        sources=(WAVES,),
        reference_points=(("0.4", "0.45"), ("0", "0.9"), ("1.6", "1e-12")),
    )


@family
def _plate_convection_all_round() -> Definition:
    return Definition(
        title="Plate with convection all round",
        solution="sin(3/2 x - 3/10) e^(3/2 y - 27/20) + x/2 + 1",
        reading="A battery plate cooled by air streams of different strength on its four edges.",
        shape=PLATE,
        field=fields.exp_trig("3/2", "sin", centre=("1/5", 0), level="9/10") + fields.affine(("1/2", 0), 1),
        conditions={"left": robin(0.5), "right": robin(2.0), "bottom": robin(1.0), "top": robin(4.0)},
        conductivity=1.2,
        quantities={
            "flux through the top": flux_through("top"),
            "value in the corner": value_at((1.6, 0.9)),
        },
        sources=(WAVES,),
    )


@family
def _plate_uneven_film() -> Definition:
    return Definition(
        title="Plate under a film that varies along its edges",
        solution="Re (z - 1/2)^3 + y + 2, z = x + i y",
        note="The coefficient grows along the top and falls along the right side; no mean will do.",
        reading="A chilled deck plate in a cross wind: the air film thins downstream.",
        shape=PLATE,
        field=fields.polynomial(3, centre=("1/2", 0)) + fields.affine((0, 1), 2),
        conditions={"top": robin("1 + 2*x"), "right": robin("3 - 2*y"), "left": "neumann"},
        conductivity=1.5,
        quantities={"flux through the top": flux_through("top")},
    )


@family
def _plate_tensor_diagonal() -> Definition:
    return Definition(
        title="Plate of a layered material",
        solution="Re (X + i Y)^4 + Y, (X, Y) = (x/sqrt 3, y sqrt 2)",
        reading="A dam core of thin layers that let water pass six times better along than across.",
        shape=PLATE,
        field=fields.stretched(fields.polynomial(4) + fields.affine((0, 1)), LAYERED),
        conditions={"left": "neumann", "bottom": robin(2.0)},
        conductivity=LAYERED,
        quantities={"flux through the right side": flux_through("right")},
    )


@family
def _plate_tensor_oblique() -> Definition:
    return Definition(
        title="Plate of an oblique laminate under all three conditions",
        solution="Im (X + i Y)^4 + Re (X + i Y)^3, (X, Y) = K^(-1/2) (x, y)",
        note="The flux n . K grad u through a side holds the tangential derivative of u too.",
        reading="A fibre-reinforced panel, fibres laid askew, metered on its right and ventilated on top.",
        shape=PLATE,
        field=fields.stretched(fields.polynomial(4, "im") + fields.polynomial(3), OBLIQUE),
        conditions={"right": "neumann", "top": robin(1.5)},
        conductivity=OBLIQUE,
        quantities={"flux through the left side": flux_through("left")},
    )
