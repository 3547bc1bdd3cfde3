"""Discs and ellipses: curved boundaries under values, fluxes and convection."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import Disc, Ellipse
from laplace_verify.problems import energy_of_solution, flux_through, robin, value_at

__all__ = ["family"]

family = Family()
FOURIER = "Fourier series: Churchill & Brown, Complex Variables and Applications (Poisson's formula)"
SKEW = [[1.5, -0.4], [-0.4, 0.8]]


@family
def _disc_fourier() -> Definition:
    return Definition(
        title="Disc with three Fourier modes on its rim",
        solution="1 + 2 s cos t - 1/2 s^2 sin 2t + 1/3 s^5 cos 5t, "
        "s = r/0.8, (r, t) polar coordinates about (1/5, -1/10)",
        reading="A round tidal pool whose rim follows three harmonics of the tide.",
        shape=Disc((0.2, -0.1), 0.8),
        field=fields.poisson_disc(
            ("1/5", "-1/10"), "4/5", fields.fourier((1, 2, 0, 0, 0, "1/3"), (0, "-1/2"))
        ),
        conductivity=1.7,
        quantities={"value at the centre": value_at((0.2, -0.1), exact=1)},
        sources=(FOURIER,),
        reference_points=(("0.2", "-0.1"), ("0.68", "0.54"), ("0", "0")),
    )


@family
def _disc_step() -> Definition:
    return Definition(
        title="Disc with two temperatures on its rim",
        solution="(angle under which the hot arc is seen)/pi - 3/8",
        note="u = 1 on the arc from 0 to 135 degrees, u = 0 on the rest: the data jump twice.",
        reading="A round tank with warm water along three eighths of its wall.",
        shape=Disc((0.0, 0.0), 0.9).split(rim=[0.375]),
        field=fields.poisson_disc((0, 0), "9/10", fields.arcs((0, "3/8"), (1, 0))),
        conductivity=1.2,
        quantities={"value at the centre": value_at((0.0, 0.0), exact="3/8")},
        sources=("Poisson's integral: Churchill & Brown, Complex Variables and Applications", HERE),
        reference_points=(("0", "0"), ("0.3", "0.4"), ("0", "-0.89"), ("0.899", "0.001")),
    )


@family
def _disc_flux() -> Definition:
    return Definition(
        title="Disc with a given flux through its rim",
        solution="3 x^2 y - y^3 + (x^2 - y^2)/2",
        reading="Ground water under a round tank whose inflow is measured all round.",
        shape=Disc((0.0, 0.0), 1.1),
        field=fields.polynomial(3, "im") + fields.polynomial(2) * "1/2",
        conditions={"rim": "neumann"},
        conductivity=0.6,
        quantities={
            "flux through the rim": flux_through("rim", exact=0),
            "energy": energy_of_solution(),
        },
    )


@family
def _disc_convection() -> Definition:
    return Definition(
        title="Disc cooled by convection",
        solution="cos(2 x + 3/5) e^(2 y)",
        reading="A cross-section of a cable in a stream of air.",
        shape=Disc((-0.3, 0.2), 0.7),
        field=fields.exp_trig(2, "cos", centre=("-3/10", 0)),
        conditions={"rim": robin(2.0)},
        conductivity=1.4,
        quantities={"value at the centre": value_at((-0.3, 0.2))},
    )


@family
def _disc_source_near() -> Definition:
    return Definition(
        title="Disc with a source close to its rim",
        solution="log |x - p|, p = (0.28, 0.21)",
        note="The source is 0.05 outside.",
        reading="A round pool beside a well.",
        shape=Disc((0.0, 0.0), 0.3),
        field=fields.log_source(("7/25", "21/100")),
        quantities={"value at the centre": value_at((0.0, 0.0))},
        sources=(HERE,),
        reference_points=(("0", "0"), ("0.24", "0.18"), ("-0.2", "0.1")),
    )


@family
def _ellipse_saddle() -> Definition:
    return Definition(
        title="Ellipse, flux given on its upper half",
        solution="x^2 - y^2 + x/2",
        note="The condition changes at the two ends of the long axis, where this solution stays smooth.",
        reading="An oval basin with a metered upper and a controlled lower shore.",
        shape=Ellipse((0.1, -0.2), (1.2, 0.7)).split(rim=[0.5]),
        field=fields.polynomial(2) + fields.affine(("1/2", 0)),
        conditions={"rim-1": "neumann"},
        conductivity=0.9,
        quantities={"value at the centre": value_at((0.1, -0.2), exact="1/50")},
    )


@family
def _ellipse_tensor() -> Definition:
    return Definition(
        title="Ellipse of an anisotropic material",
        solution="Re (X + i Y)^3, (X, Y) = K^(-1/2) (x, y)",
        reading="An oval hatch of rolled plate.",
        shape=Ellipse((0.0, 0.1), (0.6, 1.0)),
        field=fields.stretched(fields.polynomial(3), SKEW),
        conductivity=SKEW,
        quantities={"flux through the rim": flux_through("rim", exact=0)},
    )


@family
def _ellipse_convection() -> Definition:
    return Definition(
        title="Ellipse cooled by convection",
        solution="cos(3/2 x) e^(3/2 y)",
        note="The film is thinner on the upper side: alpha = 2 + y.",
        reading="An oval pressure vessel in a cross wind.",
        shape=Ellipse((0.2, 0.1), (1.0, 0.6)),
        field=fields.exp_trig("3/2", "cos"),
        conditions={"rim": robin("2 + y")},
        conductivity=1.6,
        quantities={"flux through the rim": flux_through("rim", exact=0)},
    )


@family
def _ellipse_between_wells() -> Definition:
    return Definition(
        title="Ellipse between two sources of unequal strength",
        solution="log |x - p| + 1/2 log |x - q|, p = (6/5, 0), q = (0, -3/4)",
        note="Both sources are 0.3 outside: beyond the tip and below the lower side.",
        reading="An oval pond between two wells.",
        shape=Ellipse((0.0, 0.0), (0.9, 0.45)).split(rim=[0.5]),
        field=fields.log_source(("6/5", 0)) + fields.log_source((0, "-3/4"), "1/2"),
        conditions={"rim-1": robin(0.7)},
        conductivity=0.5,
        quantities={"value at the centre": value_at((0.0, 0.0), exact="log(1.2) + log(0.75)/2")},
        sources=(HERE,),
        reference_points=(("0", "0"), ("0.85", "0"), ("0", "-0.4")),
    )
