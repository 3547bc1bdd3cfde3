"""What a value and a gradient cost, as multiples of one complex exponential per point, and their memory.

Run by hand, from the top folder, on a quiet machine:

    python tests/bench/cost_per_point.py            # all rows
    python tests/bench/cost_per_point.py cylinder   # rows whose name holds one of the words

For a series the first call also makes a table, a tenth of a second or so; it is not counted.

The exponential is timed in the same run, block by block like the fields. Goals are those the project has set
itself; a row beyond its goal is marked. Ratios wander by a quarter under load.
"""

from __future__ import annotations

import sys
import time
import tracemalloc
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

import laplace_verify as lv
from laplace_verify.arrays import blocks
from laplace_verify.fields import Field

POINTS = 200_000
REPEATS = 3
MEBIBYTE = 2.0**20


@dataclass(frozen=True)
class Row:
    """A field, a box that holds its points, and goals for value and gradient; None: none has been set."""

    field: Field
    lower: tuple[float, ...]
    upper: tuple[float, ...]
    value: float | None = None
    gradient: float | None = None


def plate(data: object, neighbours: str = "insulated") -> Row:
    """Return a unit square with data on top."""
    field = lv.fields.rectangle_series((0, 0), (1, 1), data, neighbours=neighbours)
    return Row(field, (0, 0), (1, 1), 8, 20)


def fitted(name: str, lower: tuple[float, ...], upper: tuple[float, ...]) -> Row:
    """Return a corner fit of the catalogue."""
    return Row(lv.catalogue[name].exact, lower, upper)


def images(gap: str) -> Row:
    """Return two spheres; 0.2 an image, of which there are about 41 / arccosh(1 + gap / 2)."""
    count = 41 / np.arccosh(1 + float(gap) / 2)
    return Row(lv.fields.sphere_pair(1, gap), (-1, -1, 3), (1, 1, 5), 2 + 0.2 * count)


def slender(upper: tuple[float, float], data: object, **words: str) -> Row:
    """Return a rectangle from the origin with data on top."""
    return Row(lv.fields.rectangle_series((0, 0), upper, data, **words), (0, 0), upper, 8, 20)


teeth = lv.fields.piecewise(
    (0, "0.1", "0.3", "0.7", 1, "1.5", "1.7", "1.9", 2), [(k % 3, 1) for k in range(8)]
)
sides = lv.fields.rectangle_sides(
    (0, 0), (1, 1), left="1/2", bottom=lv.fields.ramp("1/2", 1), right=lv.fields.step("2/3", 1, -1),
    top=lv.fields.tent("2/5"),
)  # fmt: skip
wind = lv.fields.rectangle_convection((0, 0), (1, 1), lv.fields.step("1/3"), 3)
half = lv.fields.arcs((0, "1/2"), (1, 0))
ROWS = {
    "rectangle, ramp": plate(lv.fields.ramp(0, 1)),
    "rectangle, step": plate(lv.fields.step()),
    "rectangle, parabola": plate(lv.fields.parabola(), "zero"),
    "rectangle, eight pieces": slender((2, 1), teeth),
    "rectangle, four sides": Row(sides, (0, 0), (1, 1), 8, 20),
    "rectangle, convection": Row(wind, (0, 0), (1, 1), 8, 20),
    "rectangle, exponential": plate(lv.fields.exponential(-2)),
    "rectangle, formula": plate("exp(cos(3*x))"),
    "rectangle, one mode": plate(lv.fields.modes([0, 1])),
    "rectangle, 200 modes": Row(plate(lv.fields.modes([0] * 200 + [1])).field, (0, 0), (1, 1)),
    "rectangle, 12 to 1": slender((12, 1), lv.fields.ramp(0, 1), neighbours="insulated"),
    "rectangle, 1000 to 1": slender((1000, 1), lv.fields.step("1/3")),
    "rectangle, 1 to 12": slender((1, 12), lv.fields.ramp(0, 1), neighbours="insulated"),
    "rectangle, 1 to 1000": slender((1, 1000), lv.fields.step("1/3")),
    "disc, two arcs": Row(lv.fields.poisson_disc((0, 0), 1, half), (-0.7, -0.7), (0.7, 0.7), 2),
    "ball, two halves": Row(lv.fields.hemispheres((0, 0, 0), 1), (-0.57,) * 3, (0.57,) * 3, 12),
    "two spheres, gap 1": images("1"),
    "two spheres, gap 0.1": images("0.1"),
    "box, hot top": Row(lv.fields.box_faces((0, 0, 0), (1, 1, 1), top=1), (0,) * 3, (1,) * 3, 80, 160),
    "cylinder, hot top": Row(lv.fields.cylinder_faces(1, 0, 1, top=1), (-0.7, -0.7, 0), (0.7, 0.7, 1), 80),
    "cylinder, tall": Row(lv.fields.cylinder_faces(1, 0, 5, top=1), (-0.7, -0.7, 0), (0.7, 0.7, 5), 80),
    "corner fit, two levels": fitted("l-basin-two-levels", (-0.8, 0), (0.8, 0.8)),
    "corner fit, T": fitted("t-plate-smooth-data", (-1, 0), (1.1, 0.6)),
    "wedge": Row(lv.fields.wedge("2/3"), (-1, 0), (1, 1)),
    "polynomial of degree 200": Row(lv.fields.polynomial(200), (-0.7, -0.7), (0.7, 0.7)),
    "solid harmonic (20, 7)": Row(lv.fields.solid(20, 7), (-1,) * 3, (1,) * 3),
}


def least_seconds(call: Callable[[], object]) -> float:
    """Return the shortest of a few timings."""
    found = []
    for _ in range(REPEATS):
        start = time.process_time()  # other processes do not count
        call()
        found.append(time.process_time() - start)
    return min(found)


def exponential() -> float:
    """Return the seconds of one complex exponential per point."""
    z = np.exp(1j * np.linspace(0, 6, POINTS))
    out = np.empty_like(z)

    def call() -> None:
        for block in blocks(POINTS):
            np.exp(z[block], out=out[block])

    call()
    return least_seconds(call)


def peak(call: Callable[[], object]) -> float:
    """Return the largest memory that a call took beyond its result, in MiB."""
    tracemalloc.start()
    result = call()
    kept, highest = tracemalloc.get_traced_memory()
    tracemalloc.stop()
    del result
    return (highest - kept) / MEBIBYTE


def shown(ratio: float, goal: float | None) -> str:
    """Return a ratio beside its goal."""
    if goal is None:
        return f"{ratio:7.1f}         "
    return f"{ratio:7.1f} of {goal:5.1f}" + ("*" if ratio > goal else " ")


def main(words: list[str]) -> None:
    """Print the table."""
    unit = exponential()
    print(f"one complex exponential: {unit / POINTS * 1e9:.1f} ns; {POINTS} points; * beyond the goal")
    print(f"{'':26}{'value / goal':18}{'gradient / goal':18}MiB beyond the result")
    for name, row in ROWS.items():
        if words and not any(word in name for word in words):
            continue
        points = np.random.default_rng(1).uniform(row.lower, row.upper, (POINTS, row.field.dim))
        row.field.value(points[:9000])  # tables are made once
        row.field.gradient(points[:9000])
        value = least_seconds(lambda row=row, points=points: row.field.value(points)) / unit
        gradient = least_seconds(lambda row=row, points=points: row.field.gradient(points)) / unit
        memory = peak(lambda row=row, points=points: row.field.gradient(points))
        print(f"{name:26}{shown(value, row.value)} {shown(gradient, row.gradient)} {memory:6.1f}", flush=True)


if __name__ == "__main__":
    main(sys.argv[1:])
