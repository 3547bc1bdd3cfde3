"""Plates with smooth solutions and values given all round: polynomials, waves, a tensor, sources outside."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import Rectangle
from laplace_verify.problems import energy_of_solution, flux_through, robin, value_at

__all__ = ["family"]

family = Family()
PLATE = Rectangle((0.0, 0.0), (1.6, 0.9))
OBLIQUE = [[2.0, 0.5], [0.5, 1.0]]
SEPARATION = "separation of variables: Carslaw & Jaeger 1959, Conduction of Heat in Solids, 2nd ed., ch. V"
STENCIL = "five-point residual: Milne 1953, Numerical Solution of Differential Equations; from memory, confirmed here"
SOURCE = "logarithmic source: Kellogg 1929, Foundations of Potential Theory, ch. VI"


@family
def _plate_affine() -> Definition:
    return Definition(
        title="Plate with an affine solution under all three conditions",
        statement="div(K grad u) = 0 in 0 < x < 1.6, 0 < y < 0.9 with K = 1.8; flux given on the left, convection "
        "on top, u given below and on the right. Solution u = 1 + 2 x - 3 y: exact for every consistent scheme.",
        reading="A slab of the heat store with a uniform heat flow across it.",
        shape=PLATE,
        field=fields.affine((2, -3), 1),
        conditions={"left": "neumann", "top": robin(1.3)},
        conductivity=1.8,
        quantities={
            "flux through the left side": flux_through("left", exact=-3.24),
            "flux through the top": flux_through("top", exact=-8.64),
        },
        tags=("exactness",),
    )


@family
def _plate_saddle() -> Definition:
    return Definition(
        title="Plate with the harmonic saddle",
        statement="div grad u = 0 in 0 < x < 1.6, 0 < y < 0.9, u given on all sides. Solution u = x^2 - y^2, "
        "without error for five-point differences (u_xxxx = u_yyyy = 0).",
        reading="Water level in a still basin forced along its rim.",
        shape=PLATE,
        field=fields.polynomial(2),
        quantities={
            "value at the sensor": value_at((0.5, 0.25), exact="3/16"),
            "energy": energy_of_solution(exact="6.4704"),
        },
        tags=("exactness",),
    )


@family
def _plate_cubic() -> Definition:
    return Definition(
        title="Plate with a cubic solution",
        statement="div(K grad u) = 0 in 0 < x < 1.6, 0 < y < 0.9 with K = 0.6, u given on all sides. Solution u = Im "
        "(x + i y)^3 + Re (x + i y)^2 / 2, without error for five-point differences.",
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
        statement="div grad u = 0 in 0 < x < 1.6, 0 < y < 0.9, u given on all sides. Solution u = Re (z - z0)^6 with z0 = "
        "3/10 + i/5: the five-point residual is 60 h^2 Re (z - z0)^2 on square cells.",
        reading="Potential of a corrosion cell driven by a ring of six anodes far away.",
        shape=PLATE,
        field=fields.polynomial(6, centre=("3/10", "1/5")),
        quantities={"flux through the top": flux_through("top")},
        sources=(HERE, STENCIL),
    )


@family
def _plate_wave() -> Definition:
    return Definition(
        title="Plate with a wave that decays inwards",
        statement="div(K grad u) = 0 in 0 < x < 1.6, 0 < y < 0.9 with K = 1.4, u given on all sides. Solution u = "
        "cos(3 x - 3/5) e^(3 (y - 0.9)).",
        reading="Temperature of a sea wall under alternating sun and shade along its top.",
        shape=PLATE,
        field=fields.exp_trig(3, "cos", centre=("1/5", 0), level="9/10"),
        conductivity=1.4,
        quantities={"value at the sensor": value_at((0.2, 0.9), exact=1)},
        sources=(SEPARATION,),
    )


@family
def _plate_tensor_oblique_fixed() -> Definition:
    return Definition(
        title="Plate of an oblique laminate, values given",
        statement="div(K grad u) = 0 in 0 < x < 1.6, 0 < y < 0.9 with K = [[2, 1/2], [1/2, 1]], u given on all "
        "sides. Solution u = Re Z^5, Z = X + i Y, (X, Y) = K^(-1/2) (x, y).",
        reading="A fibre-reinforced panel with fibres laid askew.",
        shape=PLATE,
        field=fields.stretched(fields.polynomial(5), OBLIQUE),
        conductivity=OBLIQUE,
        quantities={"flux through the right side": flux_through("right")},
        sources=(HERE,),
    )


@family
def _plate_source_near() -> Definition:
    return Definition(
        title="Plate with a source close to its right side",
        statement="div grad u = 0 in 0 < x < 0.8, 0 < y < 0.5, u given on all sides. Solution u = log |x - p|, p = "
        "(0.85, 0.2), at distance 0.05 from the plate.",
        reading="A well just outside the bay's concrete apron.",
        shape=Rectangle((0.0, 0.0), (0.8, 0.5)),
        field=fields.log_source(("0.85", "0.2")),
        quantities={"value at the sensor": value_at((0.4, 0.2))},
        sources=(SOURCE,),
    )
