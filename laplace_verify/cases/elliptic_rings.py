"""Rings between confocal ellipses: the logarithm of elliptic coordinates, waves that grow and decay.

With the foci at distance c from the centre and x + i y = c cosh(mu + i nu), mu is constant on either ellipse;
w = e^(mu - mu_0 + i nu) has |w| = 1 on the inner one.
"""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import EllipticRing
from laplace_verify.problems import energy_of_solution, flux_through, robin, shape_factor_between, value_at

__all__ = ["family"]

family = Family()
ELLIPTIC = "elliptic coordinates: Moon & Spencer 1971, Field Theory Handbook, 2nd ed., section I"


@family
def _elliptic_ring_two_temperatures() -> Definition:
    return Definition(
        title="Confocal ellipses at two temperatures",
        solution="3 - 2 log |w|, z = 9/8 w + 1/8 /w",
        note="Both ellipses have their foci at (-3/4, 0) and (3/4, 0); |w| is 1 inside, 5/3 outside.",
        reading="A flat oval cable in an oval sheath.",
        shape=EllipticRing((0.0, 0.0), (1.25, 1.0), (1.95, 1.8)),
        field=fields.elliptic_multipole(0, semi_axes=("5/4", 1)) * -2 + fields.affine((0, 0), 3),
        conductivity=1.4,
        quantities={
            "flux through the inner ellipse": flux_through("inner", exact="5.6*pi"),
            "energy": energy_of_solution(exact="11.2*pi*log(5/3)"),
            "shape factor": shape_factor_between("inner", "outer", exact="2*pi/log(5/3)"),
        },
        sources=(ELLIPTIC,),
        reference_points=(("1.5", "0.5"), ("0", "1"), ("-1.9", "0.1")),
    )


@family
def _elliptic_ring_flux_inside() -> Definition:
    return Definition(
        title="Upright confocal ellipses, flux given on the inner one",
        solution="2 log |w| + 1/2 Re w^2 + Im w^-3, |w| = 1 on the inner ellipse",
        note="Both ellipses have their foci 0.3 above and below the centre (1/5, -1/10).",
        reading="The lining of an oval tunnel, heated from inside.",
        shape=EllipticRing((0.2, -0.1), (0.4, 0.5), (0.72, 0.78)),
        field=fields.elliptic_multipole(0, semi_axes=("2/5", "1/2"), centre=("1/5", "-1/10")) * 2
        + fields.elliptic_multipole(-2, semi_axes=("2/5", "1/2"), centre=("1/5", "-1/10")) * "1/2"
        + fields.elliptic_multipole(3, "im", semi_axes=("2/5", "1/2"), centre=("1/5", "-1/10")),
        conditions={"inner": "neumann"},
        conductivity=0.8,
        quantities={"flux through the outer ellipse": flux_through("outer", exact="3.2*pi")},
        sources=(ELLIPTIC, HERE),
        reference_points=(("0.7", "0.2"), ("0.2", "-0.875"), ("-0.3", "0")),
    )


@family
def _elliptic_ring_film_outside() -> Definition:
    return Definition(
        title="Confocal ellipses, core insulated, convection outside",
        solution="1 + Re (w + 1/w) + 1/2 Im (w^2 - w^-2), |w| = 1 on the inner ellipse",
        note="Pairs of growing and decaying waves leave no flux through the inner ellipse.",
        reading="An oval column with an insulating core in a stream of air.",
        shape=EllipticRing((0.0, 0.0), (1.0, 0.8), (1.56, 1.44)),
        field=fields.affine((0, 0), 1)
        + fields.elliptic_multipole(-1, semi_axes=(1, "4/5"))
        + fields.elliptic_multipole(1, semi_axes=(1, "4/5"))
        + fields.elliptic_multipole(-2, "im", semi_axes=(1, "4/5")) * "1/2"
        - fields.elliptic_multipole(2, "im", semi_axes=(1, "4/5")) * "1/2",
        conditions={"inner": "neumann", "outer": robin(1.5)},
        conductivity=1.25,
        quantities={"value on the core": value_at((0.0, 0.8), exact=1)},
        sources=(ELLIPTIC, HERE),
    )
