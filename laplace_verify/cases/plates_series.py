"""Plates with data on one side only: Fourier series summed in closed form, singular corners and kinks."""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.cases.plates_smooth import PLATE
from laplace_verify.problems import flux_through, value_at

__all__ = ["family"]

family = Family()
LOWER, UPPER = ("0", "0"), ("1.6", "0.9")
SERIES = "Fourier series: Carslaw & Jaeger 1959, Conduction of Heat in Solids, 2nd ed., ch. V"
INSULATED = {"left": "neumann", "right": "neumann"}


@family
def _plate_hot_side() -> Definition:
    return Definition(
        title="Plate with one hot side",
        solution="4/pi sum over odd n of sin(n pi x/a) sinh(n pi y/a) / (n sinh(n pi b/a)), a = 1.6, b = 0.9",
        note="The data jump in the two upper corners.",
        reading="A bulkhead with steam behind its upper edge and ice water along the other three.",
        shape=PLATE,
        field=fields.rectangle_series(LOWER, UPPER, 1),
        quantities={"value at the sensor": value_at((0.8, 0.45))},
        sources=(SERIES,),
        reference_points=(("0.8", "0.45"), ("0.4", "0.9"), ("1.599999", "0.899999")),
    )


@family
def _plate_insulated_ramp() -> Definition:
    return Definition(
        title="Plate between insulated sides, a ramp on top",
        solution="y/b - 8/pi^2 sum over odd n of cos(n pi x/a) sinh(n pi y/a) / (n^2 sinh(n pi b/a)), "
        "a = 1.6, b = 0.9",
        note="On top u = 2 x/a, whose slope does not fit the insulated sides: u behaves like r log r there.",
        reading="A tidal flat drained at the bottom, with the water table rising along its top.",
        shape=PLATE,
        field=fields.rectangle_series(LOWER, UPPER, fields.ramp(0, 2), neighbours="insulated"),
        conditions=INSULATED,
        conductivity=1.1,
        quantities={"value at the sensor": value_at((0.8, 0.45), exact="1/2")},
        tags=("corner",),
        sources=(SERIES,),
        reference_points=(("0.8", "0.45"), ("0.2", "0.9"), ("1.6", "0.3")),
    )


@family
def _plate_insulated_step() -> Definition:
    return Definition(
        title="Plate between insulated sides, a step on top",
        solution="Fourier cosine series for u = 2 on the left quarter of the top, u = 1/2 on the rest",
        note="The data jump inside the top, where it is cut in two pieces.",
        reading="Ground water under a sheet pile that holds back two levels of water.",
        shape=PLATE.split(top=[0.25]),
        field=fields.rectangle_series(LOWER, UPPER, fields.step("1/4", 2, "1/2"), neighbours="insulated"),
        conditions=INSULATED,
        quantities={"value at the sensor": value_at((0.8, 0.45))},
        sources=(SERIES,),
        reference_points=(("0.5", "0.45"), ("0.4001", "0.8999"), ("0", "0.1")),
    )


@family
def _plate_insulated_tent() -> Definition:
    return Definition(
        title="Plate between insulated sides, a tent on top",
        solution="Fourier cosine series for u on top rising from 0 to 1 at x = 2/5, falling to 0 at x = 8/5",
        note="At the ridge and in the upper corners u behaves like r log r.",
        reading="A slab with a ridge of warm ground on top.",
        shape=PLATE,
        field=fields.rectangle_series(LOWER, UPPER, fields.tent("1/4"), neighbours="insulated"),
        conditions=INSULATED,
        conductivity=0.7,
        quantities={"flux through the bottom": flux_through("bottom", exact="-28/45")},
        sources=(SERIES, HERE),
        reference_points=(("0.4", "0.45"), ("0.41", "0.9"), ("1.2", "0")),
    )


@family
def _plate_parabola() -> Definition:
    return Definition(
        title="Plate with a parabola on the right side",
        solution="Fourier sine series for u = 4 t (1 - t) on the right, t = y/b, b = 0.9",
        note="In the corners on the right u behaves like r^2 log r.",
        reading="Velocity potential of a duct fed through its right end by a fully developed stream.",
        shape=PLATE,
        field=fields.rectangle_series(LOWER, UPPER, fields.parabola(), side="right"),
        conductivity=1.9,
        quantities={"flux through the right side": flux_through("right")},
        sources=(SERIES, HERE),
        reference_points=(("1.5", "0.45"), ("1.6", "0.3"), ("1.599999999999", "1e-12")),
    )
