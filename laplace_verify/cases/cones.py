"""Cone tips in the meridian plane: Legendre functions whose degree is no whole number."""

from __future__ import annotations

import math

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.fields import axisymmetric
from laplace_verify.geometry import ConeSection
from laplace_verify.problems import flux_through, robin, value_at

__all__ = ["family"]

family = Family()
CONE = "cones: Jackson, Classical Electrodynamics, section 3.4; Hobson 1931, ch. IX (from memory, unchecked)"
ROOT = "The degree is a root, found in as many digits as are asked for."


@family
def _cone_tip_cold() -> Definition:
    return Definition(
        title="Cone with a cold mantle",
        solution="R^nu P_nu(cos t), P_nu(cos 45 degrees) = 0, nu = 2.5479",
        note=ROOT,
        reading="A conical plug of concrete, cooled along its mantle.",
        shape=ConeSection(0.9, math.pi / 4.0),
        field=axisymmetric(fields.cone("1/4")),
        conductivity=1.2,
        coordinates="axisymmetric",
        quantities={"value on the axis": value_at((0.0, 0.45)), "flux through the cap": flux_through("cap")},
        sources=(CONE, HERE),
        reference_points=(("0", "0.4"), ("0.2", "0.5"), ("0.000001", "0.000003")),
    )


@family
def _cone_tip_insulated() -> Definition:
    return Definition(
        title="Cone with an insulated mantle, cooled by convection at its base",
        solution="R^nu P_nu(cos t) + 2, P_nu'(cos 60 degrees) = 0, nu = 3.1957",
        note=ROOT,
        reading="The tip of a driven pile, lined along its mantle, in still water.",
        shape=ConeSection(0.8, math.pi / 3.0),
        field=axisymmetric(fields.cone("1/3", "neumann") + fields.affine((0, 0, 0), 2)),
        conditions={"side": "neumann", "cap": robin(1.5)},
        conductivity=0.6,
        coordinates="axisymmetric",
        quantities={
            "value at the tip": value_at((0.0, 0.0), exact=2),
            "flux through the cap": flux_through("cap", exact=0),
        },
        sources=(CONE, HERE),
    )


@family
def _conical_notch_cold() -> Definition:
    return Definition(
        title="Ball with a conical notch, cold along it",
        solution="R^nu P_nu(cos t), P_nu(cos 135 degrees) = 0, nu = 0.4631",
        note=ROOT,
        reading="A boulder around the point of a cold drill.",
        shape=ConeSection(0.9, 0.75 * math.pi),
        field=axisymmetric(fields.cone("3/4")),
        conductivity=1.5,
        coordinates="axisymmetric",
        quantities={"value on the axis": value_at((0.0, 0.45)), "flux through the cap": flux_through("cap")},
        sources=(CONE, HERE),
        reference_points=(("0", "0.4"), ("0.3", "-0.1"), ("0.000001", "0.000001")),
    )


@family
def _conical_notch_insulated() -> Definition:
    return Definition(
        title="Ball with an insulated conical notch",
        solution="R^nu P_nu(cos t), P_nu'(cos 150 degrees) = 0, nu = 1.1156",
        note=ROOT,
        reading="A boulder around a lined drill hole, metered at the hole.",
        shape=ConeSection(0.75, 5.0 / 6.0 * math.pi),
        field=axisymmetric(fields.cone("5/6", "neumann")),
        conditions={"side": "neumann"},
        conductivity=0.8,
        coordinates="axisymmetric",
        quantities={
            "value on the axis": value_at((0.0, 0.45)),
            "flux through the cap": flux_through("cap", exact=0),
        },
        sources=(CONE, HERE),
    )


@family
def _needle_tip() -> Definition:
    return Definition(
        title="Around the tip of a needle",
        solution="R^nu P_nu(cos t), P_nu(cos 170 degrees) = 0, nu = 0.2012",
        note=ROOT,
        reading="The soil around the tip of a grounded probe.",
        shape=ConeSection(0.6, 17.0 / 18.0 * math.pi),
        field=axisymmetric(fields.cone("17/18")),
        conditions={"cap": robin(0.9)},
        coordinates="axisymmetric",
        quantities={"value on the axis": value_at((0.0, 0.3))},
        sources=(CONE, HERE),
    )
