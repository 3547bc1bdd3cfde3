"""Bars in torsion: the warping function w, n . grad w = y n_x - x n_y all round, and the torsion constant.

With a twist t per length a section moves along the axis by t w, carries the moment G J t, G the shear
modulus, and J = integral of x^2 + y^2 + x w_y - y w_x.
"""

from __future__ import annotations

import math

from laplace_verify import fields
from laplace_verify.cases.definition import Definition, Family
from laplace_verify.geometry import Ellipse, Polygon
from laplace_verify.problems import energy_of_solution, flux_density_at, torsion_constant

__all__ = ["family"]

family = Family()
TORSION = "torsion of ellipse and triangle: Love 1927, Theory of Elasticity, 4th ed., sections 217-222"


@family
def _bar_elliptic_twisted() -> Definition:
    return Definition(
        title="Warping of a twisted elliptic bar",
        solution="-33/65 x y",
        note="J = pi a^3 b^3/(a^2 + b^2), a = 7/10, b = 2/5.",
        reading="The oval shaft of a tidal turbine under its moment.",
        shape=Ellipse((0.0, 0.0), (0.7, 0.4)),
        field=fields.polynomial(2, "im") * "-33/130",
        conditions={"rim": "neumann"},
        quantities={
            "torsion constant": torsion_constant(exact="pi*0.343*0.064/0.65"),
            "energy": energy_of_solution(),
        },
        sources=(TORSION,),
        reference_points=(("0.3", "0.2"), ("0.7", "0"), ("-0.1", "0.3")),
    )


@family
def _bar_triangular_twisted() -> Definition:
    height = 0.5 * math.sqrt(3.0)
    return Definition(
        title="Warping of a twisted triangular bar",
        solution="-(3 x^2 y - y^3)/2",
        note="The twist is 3/2; J = sqrt(3) s^4/80 for the side s = sqrt(3).",
        reading="A three-edged key of the sluice gear, turned at its end.",
        shape=Polygon([(-0.5, -height), (1.0, 0.0), (-0.5, height)]),
        field=fields.polynomial(3, "im") * "-1/2",
        conditions=dict.fromkeys(("side-1", "side-2", "side-3"), "neumann"),
        quantities={
            "torsion constant": torsion_constant(exact="9*sqrt(3)/80"),
            "slope of the warping amid a side": flux_density_at((-0.5, 0.0), (0, 1)),
        },
        sources=(TORSION,),
    )
