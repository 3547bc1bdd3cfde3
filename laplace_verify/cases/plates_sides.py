"""Plates with data on all four sides, and with convection opposite a hot side: superposed half problems."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.cases.plates_series import INSULATED, SERIES
from laplace_verify.geometry import Rectangle
from laplace_verify.problems import flux_through, robin, value_at

__all__ = ["family"]

family = Family()
LOWER, UPPER = ("0.2", "-0.3"), ("1.5", "0.5")
PLATE = Rectangle((0.2, -0.3), (1.5, 0.5))


@family
def _plate_four_sides_fitting() -> Definition:
    return Definition(
        title="Plate with data on four sides that agree in the corners",
        solution="superposed half problems, s = x - 0.2, t = y + 0.3: u = 1 + 2 t - 5 t^2/2 on the left, "
        "from 1 to 2 along the bottom, from 2 to 21/8 up the right, 1 - 2 s + 5 s^2/2 on top",
        note="In the upper left and lower right corner the data fit to all orders; in the other two their "
        "second derivatives do not, and u behaves like r^2 log r.",
        reading="Water level in a lock chamber whose four walls are read every morning.",
        shape=PLATE,
        field=fields.rectangle_sides(
            LOWER, UPPER,
            left=fields.piecewise(("-0.3", "0.5"), [(1, 2, "-5/2")]), bottom=fields.ramp(1, 2),
            right=fields.ramp(2, "21/8"), top=fields.piecewise(("0.2", "1.5"), [(1, -2, "5/2")]),
        ),
        conductivity=1.3,
        quantities={"flux through the bottom": flux_through("bottom")},
        sources=(SERIES, HERE),
        reference_points=(("0.85", "0.1"), ("1.49", "0.499"), ("0.2", "0.499999")),
    )  # fmt: skip


@family
def _plate_four_sides_jumping() -> Definition:
    return Definition(
        title="Plate with data on four sides that jump in the corners",
        solution="superposed half problems: u = 2 on the left, 0 to 1 along the bottom, -1 on the right, a "
        "tent from 2 over 3 to 1 along the top",
        note="The data agree in the upper left corner and jump in the other three; at the ridge on top u "
        "behaves like r log r.",
        reading="Electric potential of a plate between four bars, three of whose joints are insulated.",
        shape=PLATE,
        field=fields.rectangle_sides(
            LOWER, UPPER, left=2, bottom=fields.ramp(0, 1), right=-1,
            top=fields.piecewise(("0.2", "0.6", "1.5"), ((2, "5/2"), (3, "-20/9"))),
        ),
        quantities={"value at the sensor": value_at((0.85, 0.1))},
        sources=(SERIES, HERE),
        reference_points=(("0.85", "0.1"), ("1.499", "-0.299"), ("0.6", "0.499999")),
    )  # fmt: skip


@family
def _plate_hot_floor_windy_top() -> Definition:
    return Definition(
        title="Plate between insulated sides, hot floor, convection on top",
        solution="Fourier cosine series of modes k cosh k(b - y) + H sinh k(b - y), H = 5/2, for u on the "
        "floor from 0 up to 2 at x = 0.525 and down to 0 at x = 1.5",
        note="At the ridge and in the lower corners u behaves like r log r; the top adds no singular point.",
        reading="A floor slab heated from below by one pipe, air moving over it.",
        shape=PLATE,
        field=fields.rectangle_convection(LOWER, UPPER, fields.tent("1/4", 2), "5/2", neighbours="insulated"),
        conditions={**INSULATED, "top": robin(3.0)},
        conductivity=1.2,
        quantities={"flux through the top": flux_through("top")},
        sources=(SERIES, HERE),
        reference_points=(("0.85", "0.1"), ("0.525001", "-0.3"), ("1.5", "0.5")),
    )


@family
def _plate_cold_sides_windy_top() -> Definition:
    return Definition(
        title="Plate between cold sides, parabola on the floor, convection on top",
        solution="Fourier sine series of modes k cosh k(b - y) + H sinh k(b - y), H = 4, for u = 4 t (1 - t) "
        "on the floor, t = (x - 0.2)/1.3",
        note="In the lower corners u behaves like r^2 log r; the top adds no singular point.",
        reading="A cooling fin on a warm wall, wind at its tip, its flanks in ice water.",
        shape=PLATE,
        field=fields.rectangle_convection(LOWER, UPPER, fields.parabola(), 4),
        conditions={"top": robin(2.0)},
        conductivity=0.5,
        quantities={"value at the tip": value_at((0.85, 0.5))},
        sources=(SERIES, HERE),
        reference_points=(("0.85", "0.1"), ("0.201", "-0.299"), ("0.85", "0.5")),
    )
