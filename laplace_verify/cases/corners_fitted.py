"""Corners without closed form: data that look smooth, and a solution that is not, fitted in high precision.

The error of each fit is bounded by the maximum principle, see `references.corner_bound`.
"""

from __future__ import annotations

from laplace_verify.cases.corner_fits import FITS, fitted
from laplace_verify.cases.definition import Definition, Family
from laplace_verify.geometry import LShape, Polygon, Rectangle
from laplace_verify.problems import flux_through, value_at

__all__ = ["family"]

family = Family()

FOX = "Fox, Henrici and Moler 1967, SIAM J. Numer. Anal. 4, 89-102 (method; from memory, unchecked)"
LEHMAN = "Lehman 1959, J. Math. Mech. 8, 727-760 (r^m log r at corners; from memory, unchecked)"
MOTZ = "Motz 1947, Quart. Appl. Math. 4, 371-377 (a plate of this kind; from memory, unchecked)"
BEAM = (
    "Fix, Gulati and Wakoff 1973, J. Comput. Phys. 13, 209-228 (a bar of this kind; from memory, unchecked)"
)
IGARASHI = (
    "Igarashi and Honma 1996, J. Comput. Appl. Math. 68 (an L-shape of this kind; from memory, unchecked)"
)
LOGS = "At right angles the data bring r^2 log r, although they are one polynomial on the whole boundary."


def _vertices(name: str) -> list[tuple[float, float]]:
    """Return the vertices of a fit as floats."""
    return [(float(x), float(y)) for x, y in FITS[name].vertices]


@family
def _l_basin_smooth_data() -> Definition:
    name = "l-basin-smooth-data"
    return Definition(
        title="L-shaped basin with smooth-looking data",
        solution="the harmonic function that is x^2 + y/2 on the boundary, by a corner fit",
        note=f"At the inner corner u - smooth ~ r^(2/3). {LOGS}",
        reading="The level in an L-shaped pool whose rim is held to a gentle curve.",
        shape=Polygon(_vertices(name)),
        field=fitted(name),
        quantities={
            "level at the sensor": value_at((-0.25, 0.25)),
            "flux through the outer wall": flux_through("side-4"),
        },
        tags=("corner", "fitted"),
        sources=(FOX, LEHMAN),
        reference_points=(("-0.25", "0.25"), ("0.7", "0.4"), ("-1e-3", "1e-3"), ("0.5", "1e-6")),
    )


@family
def _t_plate_smooth_data() -> Definition:
    name = "t-plate-smooth-data"
    return Definition(
        title="T-shaped plate with smooth-looking data",
        solution="the harmonic function that is x^2 - x y + 1 on the boundary, by a corner fit",
        note=f"At both inner corners u - smooth ~ r^(2/3). {LOGS}",
        reading="A T-shaped bracket of the heat store whose temperature varies smoothly along its edge.",
        shape=Polygon(_vertices(name)),
        field=fitted(name),
        conductivity=1.5,
        quantities={
            "temperature at the sensor": value_at((0.1, 0.2)),
            "flux through the foot": flux_through("side-2"),
        },
        tags=("corner", "fitted"),
        sources=(FOX, LEHMAN),
        reference_points=(("0.1", "0.2"), ("-0.1", "-0.8"), ("-0.399", "1e-3"), ("0.3001", "1e-4")),
    )


@family
def _slit_plate_smooth_data() -> Definition:
    name = "slit-plate-smooth-data"
    return Definition(
        title="Slit plate with smooth-looking data",
        solution="the harmonic function that is (x - 1)^3 + 2 on the boundary and both lips, by a corner fit",
        note="At the tip of the slit u - smooth ~ r^(1/2). Outer right angles bring r^2 log r; "
        "at the mouth of the slit they match to second order.",
        reading="A plate with a cut, held at one smooth temperature profile along its edge and both lips.",
        shape=Polygon(_vertices(name)),
        field=fitted(name),
        conductivity=0.8,
        quantities={
            "temperature at the sensor": value_at((-0.3, 0.1)),
            "flux through the left side": flux_through("side-7"),
        },
        tags=("corner", "fitted"),
        sources=(FOX, LEHMAN),
        reference_points=(("-0.3", "0.1"), ("0.5", "0.3"), ("-1e-3", "0"), ("0.5", "-1e-3")),
    )


@family
def _plate_condition_change_smooth_data() -> Definition:
    return Definition(
        title="Plate insulated along half of its bottom, smooth data elsewhere",
        solution="the harmonic function that is x^2 + 1 on all but the insulated part, by a corner fit",
        note="Where the insulation ends u - smooth ~ r^(1/2), although the data there are smooth. At three "
        "right angles the data bring r^2 log r.",
        reading="A floor slab that rests on insulation up to a point in the middle of its underside.",
        shape=Rectangle((-0.7, 0.0), (0.9, 0.8)).split(bottom=[0.4375]),
        field=fitted("plate-condition-change-smooth-data"),
        conditions={"bottom-1": "neumann"},
        conductivity=1.2,
        quantities={
            "temperature at the sensor": value_at((-0.2, 0.1)),
            "flux through the right side": flux_through("right"),
        },
        tags=("corner", "fitted"),
        sources=(FOX, LEHMAN),
        reference_points=(("-0.2", "0.1"), ("0.3", "0.5"), ("-1e-3", "1e-3"), ("-0.4", "1e-6")),
    )


@family
def _plate_hot_end_condition_change() -> Definition:
    return Definition(
        title="Plate with a hot end, cooled along half of its bottom",
        solution="sum of c_j r^(j - 1/2) sin((j - 1/2) theta), theta from the insulated part of the bottom",
        note="u = 5 at the right end, u = 0 on the left half of the bottom, no flux elsewhere.",
        reading="A plate heated at one end above a cooling mat that covers the far half of its underside.",
        shape=Rectangle((-0.8, 0.0), (0.8, 0.75)).split(bottom=[0.5]),
        field=fitted("plate-hot-end-condition-change"),
        conditions={"bottom-2": "neumann", "top": "neumann", "left": "neumann"},
        conductivity=1.6,
        quantities={
            "temperature at the sensor": value_at((0.0, 0.3)),
            "heat in at the hot end": flux_through("right"),
        },
        tags=("corner", "fitted"),
        sources=(MOTZ, FOX),
        reference_points=(("0", "0.3"), ("0.5", "0.5"), ("-1e-3", "1e-3"), ("0.4", "1e-6")),
    )


@family
def _cracked_bar() -> Definition:
    return Definition(
        title="Bar with a crack, loaded from the top",
        solution="sum of c_j r^(j - 1/2) cos((j - 1/2) theta), theta from the uncracked part of the bottom",
        note="u = 1/4 on the top, u = 0 on the left part of the bottom, no flux elsewhere.",
        reading="One half of a bar with a crack from its side to its middle, under torsion.",
        shape=Rectangle((-0.7, 0.0), (0.75, 0.7)).split(bottom=[0.7 / 1.45]),
        field=fitted("cracked-bar"),
        conditions={"bottom-2": "neumann", "right": "neumann", "left": "neumann"},
        quantities={
            "value at the sensor": value_at((0.2, 0.2)),
            "flux through the top": flux_through("top"),
        },
        tags=("corner", "fitted"),
        sources=(BEAM, FOX),
        reference_points=(("0.2", "0.2"), ("-0.5", "0.6"), ("-1e-3", "1e-3"), ("0.4", "1e-6")),
    )


@family
def _l_basin_two_levels() -> Definition:
    return Definition(
        title="L-shaped basin between two levels",
        solution="sum of c_j r^(2 j/3) sin(2 j theta/3), j odd",
        note="u = 0 on the two inner sides, u = 3 on the two long outer ones, no flux through the ends.",
        reading="Seepage around the inner corner of an L-shaped pool between its drain and its outer wall.",
        shape=LShape(0.8),
        field=fitted("l-basin-two-levels"),
        conditions={"side-2": "neumann", "side-5": "neumann"},
        conductivity=0.5,
        quantities={
            "level at the sensor": value_at((-0.4, 0.4)),
            "flux through the outer wall": flux_through("side-3"),
        },
        tags=("corner", "fitted"),
        sources=(IGARASHI, FOX),
        reference_points=(("-0.4", "0.4"), ("0.6", "0.1"), ("-1e-3", "1e-3"), ("0.4", "1e-6")),
    )
