"""Seepage with a free surface to a horizontal drain: Kozeny's basic parabola, prescribed.

With the start of the drain as origin and z = w^2, w = xi + i eta, the head is u = 2 a eta. The drain xi < a,
eta = 0 has head 0, the ground xi = 0 below is tight; on the free surface xi = a the elevation is y = 2 a eta:
head = elevation, and no water passes it. Both facts make a case, on the same region: a free surface that is
known must fulfil both. The region begins at a line of equal head, the parabola eta = c. The discharge is
2 a^2 times the permeability.
"""

from __future__ import annotations

from typing import Any

from laplace_verify import fields
from laplace_verify.cases.definition import Definition, Family
from laplace_verify.cases.seepage import CAUTION
from laplace_verify.geometry import ConfocalParabolas
from laplace_verify.problems import discharge_across, exit_gradient_at, flux_through, uplift_on

__all__ = ["family"]

family = Family()
KOZENY = "basic parabola: Kozeny 1931; Harr 1962, Groundwater and Seepage, section 3.3 (from memory)"
SOLUTION = "2 a r^(1/2) sin(theta/2), that is 2 a Im z^(1/2)"
PIECES = {
    "axis-left": "ground", "axis-right": "drain", "right": "free-surface", "left": "upstream"
}  # fmt: skip


def _drained(right: float, left: float, a: str) -> dict[str, Any]:
    """Return shape and field for the parabola with the vertex a^2 = `right` beyond the start of the drain."""
    shape = ConfocalParabolas((0.0, 0.0), right, left).renamed(**PIECES)
    return {"shape": shape, "field": fields.wedge("1/2") * 2 * a, "tags": ("seepage",), "sources": (KOZENY,)}


@family
def _free_surface_head_is_elevation() -> Definition:
    return Definition(
        title="Free surface to a drain: the head is the elevation",
        solution=f"{SOLUTION}, a = 3/5",
        note=f"On the free surface u = y is given; u = 0 on the drain, 1.32 upstream. {CAUTION}",
        reading="An earth dam with a blanket drain under its toe; the water table is known from wells.",
        **_drained(0.36, 1.21, "3/5"),
        conditions={"ground": "neumann"},
        conductivity=0.8,
        quantities={
            "discharge": discharge_across((-0.85, 0.0), (-0.85, 1.32), exact="72/125"),
            "inflow": flux_through("upstream", exact="72/125"),
            "seepage through the free surface": flux_through("free-surface", exact=0),
            "uplift on the ground": uplift_on("ground", exact="1.0648"),
        },
        reference_points=(("-0.5", "0.5"), ("0.000001", "0"), ("-0.85", "1.32")),
    )


@family
def _free_surface_without_flux() -> Definition:
    return Definition(
        title="Free surface to a drain: no water passes it",
        solution=f"{SOLUTION}, a = 4/5",
        note="No flux through the free surface, on which the head must come out as the elevation; u = 0 on "
        f"the drain, 1.44 upstream. {CAUTION}",
        reading="A levee on a blanket drain, its water table prescribed: the head computed must lie on it.",
        **_drained(0.64, 0.81, "4/5"),
        conditions={"ground": "neumann", "free-surface": "neumann"},
        conductivity=1.25,
        quantities={
            "discharge": discharge_across((-0.17, 0.0), (-0.17, 1.44), exact="8/5"),
            "outflow into the drain": flux_through("drain", exact="-8/5"),
            "exit gradient at the end of the drain": exit_gradient_at("drain", (0.64, 0.0), exact=1),
        },
        reference_points=(("-0.25", "0.5"), ("0.64", "0"), ("-0.000001", "0.000001")),
    )
