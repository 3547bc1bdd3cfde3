"""Plates with smooth solutions and values given all round: polynomials, waves, a tensor, a source outside."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import Rectangle
from laplace_verify.problems import energy_of_solution, flux_through, robin, value_at

__all__ = ["family"]

family = Family()
PLATE = Rectangle((0.0, 0.0), (1.6, 0.9))
OBLIQUE = [[2.0, 0.5], [0.5, 1.0]]
WAVES = "separation of variables: Carslaw & Jaeger 1959, Conduction of Heat in Solids, 2nd ed., ch. V"
STENCIL = "truncation of the five-point stencil: Milne 1953, Numerical Solution of Differential Equations"
SOURCE = "logarithmic source: Kellogg 1929, Foundations of Potential Theory, ch. VI"


@family
def _plate_affine() -> Definition:
    return Definition(
        title="Plate with an affine solution under all three conditions",
        solution="1 + 2 x - 3 y",
        note="Every consistent scheme is exact.",
        reading="A slab of the heat store with a uniform heat flow across it.",
        shape=PLATE,
        field=fields.affine((2, -3), 1),
        conditions={"left": "neumann", "top": robin(1.3)},
        conductivity=1.8,
        quantities={
            "flux through the left side": flux_through("left", exact="-81/25"),
            "flux through the top": flux_through("top", exact="-216/25"),
        },
        tags=("exactness",),
    )


@family
def _plate_saddle() -> Definition:
    return Definition(
        title="Plate with the harmonic saddle",
        solution="x^2 - y^2",
        note="Five-point differences are exact at the nodes: u_xxxx = u_yyyy = 0.",
        reading="Water level in a still basin forced along its rim.",
        shape=PLATE,
        field=fields.polynomial(2),
        quantities={
            "value at the sensor": value_at((0.5, 0.25), exact="3/16"),
            "energy": energy_of_solution(exact="6.4704"),
        },
        tags=("exactness",),
        sources=(STENCIL,),
        reference_points=(("0.3", "0.7"), ("1.6", "0.9")),
    )


@family
def _plate_cubic() -> Definition:
    return Definition(
        title="Plate with a cubic solution",
        solution="3 x^2 y - y^3 + (x^2 - y^2)/2",
        note="Five-point differences are exact at the nodes.",
        reading="Level of a harbour basin with a seiche frozen at its largest.",
        shape=PLATE,
        field=fields.polynomial(3, "im") + fields.polynomial(2) * "1/2",
        conductivity=0.6,
        quantities={"value at the sensor": value_at((1.0, 0.5), exact="7/4")},
        tags=("exactness",),
        sources=(HERE, STENCIL),
    )


@family
def _plate_degree_six() -> Definition:
    return Definition(
        title="Plate with a harmonic polynomial of degree six",
        solution="Re (z - z0)^6, z = x + i y, z0 = 3/10 + i/5",
        note="On square cells the five-point residual is 60 h^2 Re (z - z0)^2.",
        reading="Potential of a corrosion cell driven by a ring of six anodes far away.",
        shape=PLATE,
        field=fields.polynomial(6, centre=("3/10", "1/5")),
        quantities={"flux through the top": flux_through("top")},
        sources=(HERE, STENCIL),
        reference_points=(("0.31", "0.2"), ("1.6", "0.45"), ("0.8", "0.899999999999")),
    )


@family
def _plate_wave() -> Definition:
    return Definition(
        title="Plate with a wave that decays inwards",
        solution="cos(3 x - 3/5) e^(3 y - 33/10)",
        reading="Temperature of a sea wall under alternating sun and shade along its top.",
        shape=Rectangle((-0.4, 0.3), (0.9, 1.1)),
        field=fields.exp_trig(3, "cos", centre=("1/5", 0), level="11/10"),
        conductivity=1.4,
        quantities={"value at the sensor": value_at((0.2, 1.1), exact=1)},
        sources=(WAVES,),
        reference_points=(("0.2", "0.7"), ("-0.4", "0.3"), ("0.9", "1.1")),
    )


@family
def _plate_tensor_oblique_fixed() -> Definition:
    return Definition(
        title="Plate of an oblique laminate, values given",
        solution="Re (X + i Y)^5, (X, Y) = K^(-1/2) (x, y)",
        reading="A fibre-reinforced panel of the pump house with fibres laid askew.",
        shape=PLATE,
        field=fields.stretched(fields.polynomial(5), OBLIQUE),
        conductivity=OBLIQUE,
        quantities={"flux through the right side": flux_through("right")},
    )


@family
def _plate_source_near() -> Definition:
    return Definition(
        title="Plate with a source close to its right side",
        solution="log |x - p|, p = (0.6, 0.1)",
        note="The source is 0.05 outside.",
        reading="Ground-water head beside a well just outside the concrete apron.",
        shape=Rectangle((0.0, 0.0), (0.55, 0.35)),
        field=fields.log_source(("3/5", "1/10")),
        quantities={"value at the sensor": value_at((0.3, 0.1))},
        sources=(SOURCE,),
        reference_points=(("0.55", "0.1"), ("0.1", "0.3"), ("0.549999", "0.100001")),
    )


@family
def _long_duct() -> Definition:
    return Definition(
        title="Long duct, twelve times as long as high",
        solution="cosh(y - 1/4) cos x + x/2",
        reading="A cable duct under the causeway, warmed along floor and roof.",
        shape=Rectangle((0.0, 0.0), (6.0, 0.5)),
        field=fields.exp_trig(1, "cos", "cosh", centre=(0, "1/4")) + fields.affine(("1/2", 0)),
        conditions={"bottom": "neumann", "top": "neumann", "right": robin(0.8)},
        conductivity=1.5,
        quantities={"value at the sensor": value_at((3.0, 0.25))},
        sources=(WAVES,),
    )
