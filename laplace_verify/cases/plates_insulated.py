"""Plates between insulated sides, zero below and data on top: tall, square and long.

Ramp, step and tent on a plate of ordinary proportions are in `plates_series`. Data with a slope at the ends
leave r log r in the upper corners.
"""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.cases.plates_series import INSULATED, SERIES
from laplace_verify.geometry import Rectangle
from laplace_verify.problems import flux_through, value_at

__all__ = ["family"]

family = Family()
TALL = ("0.3", "2.1")
SQUARE = ("0.7", "0.7")
LONG = ("4.8", "0.4")


def _shape(upper: tuple[str, str]) -> Rectangle:
    """Return the rectangle from the origin to `upper`."""
    return Rectangle((0.0, 0.0), (float(upper[0]), float(upper[1])))


@family
def _tall_plate_parabola() -> Definition:
    return Definition(
        title="Plate seven times as high as wide, a parabola on top",
        solution="Fourier cosine series for u = 4 t (1 - t) on top, t = x/a, a = 0.3, b = 2.1",
        note="Below one width from the top u = 2 y/(3 b). In the upper corners u behaves like r log r.",
        reading="A borehole lined with foil, its mouth warmed most in the middle.",
        shape=_shape(TALL),
        field=fields.rectangle_series((0, 0), TALL, fields.parabola(), neighbours="insulated"),
        conditions=INSULATED,
        conductivity=1.4,
        quantities={"flux through the bottom": flux_through("bottom", exact="-2/15")},
        sources=(SERIES, HERE),
    )


@family
def _tall_plate_step() -> Definition:
    return Definition(
        title="Plate seven times as high as wide, a step on top",
        solution="Fourier cosine series for u = -1 on top up to x = 0.12 and 1 beyond, a = 0.3",
        note="The data jump inside the top, where it is cut in two pieces.",
        reading="Voltage in a tall resistive strip fed through two contacts of opposite sign.",
        shape=_shape(TALL).split(top=[0.4]),
        field=fields.rectangle_series((0, 0), TALL, fields.step("2/5", -1, 1), neighbours="insulated"),
        conditions=INSULATED,
        quantities={"flux through the bottom": flux_through("bottom", exact="-1/35")},
        sources=(SERIES, HERE),
    )


@family
def _square_plate_exponential() -> Definition:
    return Definition(
        title="Square plate between insulated sides, an exponential on top",
        solution="Fourier cosine series for u = 1/2 e^(3/2 t) on top, t = x/a, a = 0.7",
        note="In the upper corners u behaves like r log r.",
        reading="A salt pan brined through its top, most at the right.",
        shape=_shape(SQUARE),
        field=fields.rectangle_series(
            (0, 0), SQUARE, fields.exponential("3/2", "1/2"), neighbours="insulated"
        ),
        conditions=INSULATED,
        conductivity=0.6,
        quantities={"flux through the bottom": flux_through("bottom")},
        sources=(SERIES, HERE),
    )


@family
def _square_plate_cosine() -> Definition:
    return Definition(
        title="Square plate between insulated sides, a cosine on top",
        solution="3/4 y/b + 1/2 cos(2 pi x/a) sinh(2 pi y/a) / sinh(2 pi b/a), a = b = 0.7",
        reading="Pressure in a felt pad between smooth walls, pressed by a corrugated sheet.",
        shape=_shape(SQUARE),
        field=fields.rectangle_series(
            (0, 0), SQUARE, fields.modes(["3/4", 0, "1/2"]), neighbours="insulated"
        ),
        conditions=INSULATED,
        conductivity=1.8,
        quantities={"flux through the bottom": flux_through("bottom", exact="-27/20")},
        sources=(SERIES,),
    )


@family
def _long_plate_cosine() -> Definition:
    return Definition(
        title="Plate twelve times as long as high, a cosine on top",
        solution="1/2 y/b + cos(3 pi x/a) sinh(3 pi y/a) / sinh(3 pi b/a), a = 4.8, b = 0.4",
        reading="Seepage under a long levee with a water level in standing waves.",
        shape=_shape(LONG),
        field=fields.rectangle_series((0, 0), LONG, fields.modes(["1/2", 0, 0, 1]), neighbours="insulated"),
        conditions=INSULATED,
        quantities={"value at the sensor": value_at((2.4, 0.2), exact="1/4")},
        sources=(SERIES,),
    )


@family
def _long_plate_tent() -> Definition:
    return Definition(
        title="Plate twelve times as long as high, a tent on top",
        solution="Fourier cosine series for u on top from 0 up to 3/2 at x = 3.6 and down to 0 at x = 4.8",
        note="At the ridge and in the upper corners u behaves like r log r.",
        reading="A road bed, drained below, under a heap of wet gravel.",
        shape=_shape(LONG),
        field=fields.rectangle_series((0, 0), LONG, fields.tent("3/4", "3/2"), neighbours="insulated"),
        conditions=INSULATED,
        conductivity=0.9,
        quantities={"flux through the bottom": flux_through("bottom", exact="-81/10")},
        sources=(SERIES, HERE),
    )


@family
def _long_plate_ramp() -> Definition:
    return Definition(
        title="Plate twelve times as long as high, a ramp on top",
        solution="y/(2 b) - 8/pi^2 sum over odd n of cos(n pi x/a) sinh(n pi y/a) / (n^2 sinh(n pi b/a)), "
        "a = 4.8, b = 0.4",
        note="On top u = 2 x/a - 1/2; away from the ends u = (2 x/a - 1/2) y/b, in the upper corners u "
        "behaves like r log r.",
        reading="Heat through a long lintel, frost on one end and sunshine on the other.",
        shape=_shape(LONG),
        field=fields.rectangle_series((0, 0), LONG, fields.ramp("-1/2", "3/2"), neighbours="insulated"),
        conditions=INSULATED,
        conductivity=2.0,
        quantities={"flux through the bottom": flux_through("bottom", exact="-12")},
        sources=(SERIES,),
    )
