"""Around squares: singular corners that open 3 pi/2 into the region.

One solution is smooth; the others come from the Schwarz-Christoffel map of the exterior, and u ~ r^(2/3) at
the corners.
"""

from __future__ import annotations

import math

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import Exterior, Polygon, Rectangle
from laplace_verify.problems import energy_of_solution, flux_through, robin, value_at

__all__ = ["family"]

family = Family()
SQUARE = math.gamma(0.25) ** 2 / (4 * math.pi**1.5)  # logarithmic capacity of the unit square
CAPACITY = "logarithmic capacity: Landkof 1972, Foundations of Modern Potential Theory, table of capacities"
SCHWARZ = "Schwarz-Christoffel map of the exterior: Nehari 1952, Conformal Mapping, ch. V"
MULTIPOLES = "exterior multipoles: Kellogg 1929, Foundations of Potential Theory, ch. V"
FLOW = "flow past mapped bodies: Milne-Thomson 1968, Theoretical Hydrodynamics, 5th ed., ch. VI"


@family
def _square_caisson_outside() -> Definition:
    return Definition(
        title="Outside a square caisson, charged and drained",
        solution="2 log |x - p| + (y - 1/5)/|x - p|^2, p = (1/10, 1/5)",
        note="The corners open 3 pi/2 into the water; this solution is smooth there.",
        reading="Seepage towards a square caisson that is pumped through one wall.",
        shape=Exterior(Rectangle((-0.6, -0.6), (0.6, 0.6))),
        field=fields.log_source(("1/10", "1/5"), 2) + fields.dipole(("1/10", "1/5"), (0, 1)),
        conditions={"left": "neumann", "top": robin(1.5)},
        conductivity=1.1,
        at_infinity=("log", 2.0),
        window=_around_square((0.0, 0.0), 0.6, 1.6),
        quantities={"flux into the left wall": flux_through("left")},
        sources=(MULTIPOLES, HERE),
    )


@family
def _square_footing_losing_heat() -> Definition:
    return Definition(
        title="Outside a square footing with a given charge",
        solution="1 - 3/2 log |w|, w the map of the exterior onto |w| > 1",
        note="The capacity of a square is 0.59017 sides. The flux is infinite at the corners, like r^(-1/3).",
        reading="A square footing kept at one temperature; its heat loss is metered.",
        shape=Exterior(Rectangle((-0.625, -0.625), (0.625, 0.625))),
        field=fields.square_multipole(0, side="5/4") * "-3/2" + fields.affine((0, 0), 1),
        conductivity=0.9,
        at_infinity=("log", -1.5),
        window=_around_square((0.0, 0.0), 0.625, 1.75),
        quantities={
            f"flux into the {side} side": flux_through(side, exact="27*pi/40")
            for side in ("left", "right", "bottom", "top")
        },
        sources=(CAPACITY, SCHWARZ),
        reference_points=(("1", "0.5"), ("0.75", "0.75"), ("0", "-1.5")),
    )


@family
def _square_pier_disturbance() -> Definition:
    return Definition(
        title="Outside a square pier, two multipoles",
        solution="Re w^-2 + 1/2 Im w^-3, w the map of the exterior onto |w| > 1",
        note="Boundary values and solution behave like r^(2/3) at the corners.",
        reading="Disturbance of a still pool by the skin of a square pier, fading away from it.",
        shape=Exterior(Rectangle((-0.75, -1.5), (1.25, 0.5))),
        field=fields.square_multipole(2, side=2, centre=("1/4", "-1/2"))
        + fields.square_multipole(3, "im", side=2, centre=("1/4", "-1/2")) * "1/2",
        conductivity=1.4,
        at_infinity="decay",
        window=_around_square((0.25, -0.5), 1.0, 2.5),
        quantities={"energy": energy_of_solution(exact="1.4*pi*2.75")},
        sources=(SCHWARZ, HERE),
        reference_points=(("1.5", "0"), ("1.26", "0.51"), ("0.25", "-2.5")),
    )


@family
def _stream_turning_about_square_pier() -> Definition:
    return Definition(
        title="Stream function of a turning flow past a square pier",
        solution="Im F(w), F = c (conj(V) w + V/w) - i G/(2 pi) log w, V = 1 + i/2, G = 3/2, c = 0.73771",
        note="The stream function is 0 on the pier and behaves like r^(2/3) at its corners.",
        reading="The stream passes a square pier between two unequal gates, which make it turn.",
        shape=Exterior(Rectangle((-0.625, -0.625), (0.625, 0.625))),
        field=fields.flow_past_square("5/4", (1, "1/2"), "3/2", part="stream"),
        at_infinity=("flow", (-0.5, 1.0), 1.5),
        window=_around_square((0.0, 0.0), 0.625, 1.75),
        quantities={"value off a corner": value_at((-1.0, 1.0))},
        sources=(SCHWARZ, FLOW),
        reference_points=(("0.7", "0.7"), ("0", "1.5"), ("-1.5", "0.25")),
    )


@family
def _square_pier_in_tidal_stream() -> Definition:
    return Definition(
        title="Potential flow past a square pier",
        solution="Re (c (conj(V) w + V/w)), V = 1 + i/4, c = 1.18034",
        note="No flow passes the sides; the speed at the corners is infinite, like r^(-1/3). The added mass "
        "is 4.754 times density times the square of half the side.",
        reading="Tidal stream past a square pier of the jetty.",
        shape=Exterior(Rectangle((-1.0, -0.5), (1.0, 1.5))),
        field=fields.flow_past_square(2, (1, "1/4"), centre=(0, "1/2")),
        conditions=dict.fromkeys(("left", "right", "bottom", "top"), "neumann"),
        conductivity=0.8,
        at_infinity=("flow", (1.0, 0.25), 0.0),
        window=_around_square((0.0, 0.5), 1.0, 2.5),
        quantities={"value at the middle of the front": value_at((-1.0, 0.5), exact=-4 * SQUARE)},
        sources=(SCHWARZ, FLOW),
        reference_points=(("1.01", "1.51"), ("0", "2"), ("-2", "0.25")),
    )


def _around_square(centre: tuple[float, float], half: float, reach: float) -> Polygon:
    """Return the square of half side `reach` without the one of half side `half`."""
    (x, y), signs = centre, ((-1, -1), (1, -1), (1, 1), (-1, 1))
    outer, hole = ([(x + p * r, y + q * r) for p, q in signs] for r in (reach, half))
    return Polygon(outer, holes=[hole])
