"""Around bodies in the plane: decay, a given charge, uniform flow with and without circulation, open screens.

The logarithmic capacity of every body stays away from 1 by more than a tenth, because methods that write u
as a potential of the boundary alone break down at 1; one case has exactly 1 and bears the tag
"unit-capacity".
"""

from __future__ import annotations

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.geometry import (
    Annulus,
    Disc,
    Ellipse,
    EllipticRing,
    Exterior,
    HalfSpace,
    Rectangle,
    Screen,
    Strip,
)
from laplace_verify.problems import added_mass, energy_of_solution, flux_through, robin, value_at

__all__ = ["family"]

family = Family()
LAMB = "flow past a cylinder: Lamb 1932, Hydrodynamics, 6th ed., art. 68"
MAP = "Joukowski's map: Milne-Thomson 1968, Theoretical Hydrodynamics, 5th ed., ch. VI"
CAPACITY = "logarithmic capacity: Ransford 1995, Potential Theory in the Complex Plane, table 5.1"
MULTIPOLES = "exterior multipoles: Kellogg 1929, Foundations of Potential Theory, ch. V"
MIDDLE = ("1/5", "-1/10")


@family
def _pile_dipole() -> Definition:
    return Definition(
        title="Outside a pile, a dipole in it",
        solution="(x' + 2 y')/r'^2 about (1/2, 1/5)",
        reading="Disturbance of the still pool by a sensor buried in a pile.",
        shape=Exterior(Disc((0.2, -0.1), 1.4)),
        field=fields.dipole(("1/2", "1/5"), (1, 2)),
        conductivity=1.5,
        at_infinity="decay",
        window=Annulus((0.2, -0.1), 1.4, 3.6),
        quantities={"flux into the pile": flux_through("rim", exact=0), "energy": energy_of_solution()},
        sources=(MULTIPOLES,),
        reference_points=(("2", "0"), ("0.2", "1.3"), ("-1.3", "-1.1")),
    )


@family
def _heated_main_losing_heat() -> Definition:
    return Definition(
        title="Outside a pipe with a given charge",
        solution="-3/2 log |x| + r^-2 cos 2 theta, r in radii of the pipe",
        reading="The seawater main in the ground: heat leaves through a film, the loss is metered.",
        shape=Exterior(Disc((0.0, 0.0), 0.6)),
        field=fields.log_source((0, 0), "-3/2") + fields.elliptic_multipole(2, semi_axes=("3/5", "3/5")),
        conditions={"rim": robin(2.0)},
        conductivity=0.8,
        at_infinity=("log", -1.5),
        window=Annulus((0.0, 0.0), 0.6, 2.0),
        quantities={"flux into the pipe": flux_through("rim", exact="2.4*pi")},
        sources=(MULTIPOLES,),
        reference_points=(("1", "0.5"), ("0.6", "0"), ("0", "-1.9")),
    )


@family
def _pile_in_tidal_stream() -> Definition:
    return Definition(
        title="Potential flow past a pile",
        solution="V . x (1 + R^2/r^2), V = (6/5, 1/2), R = 7/10",
        reading="Tidal stream past a round pile; no water passes its face.",
        shape=Exterior(Disc((0.1, 0.2), 0.7)),
        field=fields.flow_past(("7/10", "7/10"), ("6/5", "1/2"), centre=("1/10", "1/5")),
        conditions={"rim": "neumann"},
        at_infinity=("flow", (1.2, 0.5), 0.0),
        window=Annulus((0.1, 0.2), 0.7, 2.3),
        quantities={
            "value north of the pile": value_at((0.1, 1.6), exact="7/8"),
            "added mass": added_mass(exact="0.49*pi"),
        },
        sources=(LAMB,),
        reference_points=(("0.8", "0.2"), ("-1", "1"), ("0.1", "2.4")),
    )


@family
def _hull_stream_function() -> Definition:
    return Definition(
        title="Stream function of a turning flow past a hull",
        solution="Im F(w), F = 3/2 (conj(V) w + V/w) - i G/(2 pi) log w, V = 1 + i/2, G = 7/4, "
        "z = 3/2 w + 1/2 /w",
        note="The stream function is 0 on the hull.",
        reading="A moored hull in the stream, with the circulation that its rudder sheds.",
        shape=Exterior(Ellipse((0.0, 0.0), (2.0, 1.0))),
        field=fields.flow_past((2, 1), (1, "1/2"), "7/4", part="stream"),
        at_infinity=("flow", (-0.5, 1.0), 1.75),
        window=EllipticRing((0.0, 0.0), (2.0, 1.0), (3.5, 2.75)),
        quantities={"circulation": flux_through("rim", exact="7/4")},
        sources=(MAP,),
        reference_points=(("2", "0.5"), ("0", "1.5"), ("-3", "-1")),
    )


@family
def _hull_potential() -> Definition:
    return Definition(
        title="Potential flow past an upright hull with a breathing skin",
        solution="Re (5/4 (conj(V) w + V/w)) + Re w^-3, V = 1 - i/5, |w| = 1 on the ellipse",
        reading="A buoy in the stream whose skin takes in and gives off water in six places.",
        shape=Exterior(Ellipse((0.0, 0.0), (0.9, 1.6))),
        field=fields.flow_past(("9/10", "8/5"), (1, "-1/5"))
        + fields.elliptic_multipole(3, semi_axes=("9/10", "8/5")),
        conditions={"rim": "neumann"},
        conductivity=1.3,
        at_infinity=("flow", (1.0, -0.2), 0.0),
        window=EllipticRing((0.0, 0.0), (0.9, 1.6), (2.4, 3.0)),
        quantities={"flux into the hull": flux_through("rim", exact=0)},
        sources=(MAP, HERE),
    )


@family
def _lagoon_pair_of_wells() -> Definition:
    return Definition(
        title="Outside an island with an intake and an outlet",
        solution="1 + log |x - p| - log |x - q|, p = (3/10, 1/5), q = (-3/5, -1/5)",
        reading="Water level around an island that takes in as much as it gives off.",
        shape=Exterior(Ellipse((0.0, 0.0), (1.6, 1.1))),
        field=fields.log_source(("3/10", "1/5"))
        - fields.log_source(("-3/5", "-1/5"))
        + fields.affine((0, 0), 1),
        conductivity=0.7,
        at_infinity="bounded",
        window=EllipticRing((0.0, 0.0), (1.6, 1.1), (3.2, 2.6)),
        quantities={"flux into the island": flux_through("rim", exact=0), "energy": energy_of_solution()},
        sources=(HERE,),
    )


@family
def _ellipse_of_unit_capacity() -> Definition:
    return Definition(
        title="Charged ellipse of logarithmic capacity one",
        solution="2 log |w| + Re w^-2, z = w + 2/5 /w",
        note="The capacity (a + b)/2 is 1: u = 2 log |x| + o(1), with no constant.",
        reading="A cable duct whose size defeats methods that forget the constant.",
        shape=Exterior(Ellipse((0.0, 0.0), (1.4, 0.6))),
        field=fields.elliptic_multipole(0, semi_axes=("7/5", "3/5")) * 2
        + fields.elliptic_multipole(2, semi_axes=("7/5", "3/5")),
        conductivity=1.2,
        at_infinity=("log", 2.0),
        window=EllipticRing((0.0, 0.0), (1.4, 0.6), (3.0, 2.4)),
        quantities={"flux into the duct": flux_through("rim", exact="-4.8*pi")},
        tags=("unit-capacity",),
        sources=(CAPACITY, MAP),
        reference_points=(("1.4", "0.5"), ("0", "0.6"), ("2", "-2")),
    )


@family
def _pile_with_circulation() -> Definition:
    return Definition(
        title="Stream function of a turning flow past a pile, a film on its face",
        solution="Im F(w), F = 1/2 (conj(V) w + V/w) - i G/(2 pi) log w, V = 4/5 - i/5, G = -5/4, "
        "w = 2 (z + 3/10 - i/10)",
        reading="The stream past a turning pile; its face leaks in proportion to what it feels.",
        shape=Exterior(Disc((-0.3, 0.1), 0.5)),
        field=fields.flow_past(
            ("1/2", "1/2"), ("4/5", "-1/5"), "-5/4", part="stream", centre=("-3/10", "1/10")
        ),
        conditions={"rim": robin(1.5)},
        at_infinity=("flow", (0.2, 0.8), -1.25),
        window=Annulus((-0.3, 0.1), 0.5, 1.8),
        quantities={"circulation": flux_through("rim", exact="-5/4")},
        sources=(LAMB,),
    )


@family
def _hull_with_breathing_skin() -> Definition:
    return Definition(
        title="Outside a hull whose skin takes in and gives off, fading away",
        solution="Re w^-1 + 1/2 Im w^-2, |w| = 1 on the ellipse",
        note="The flux is given all round; that u fades fixes its level.",
        reading="Still water around a hull with intakes and outlets.",
        shape=Exterior(Ellipse((0.3, -0.2), (1.5, 0.9))),
        field=fields.elliptic_multipole(1, semi_axes=("3/2", "9/10"), centre=("3/10", "-1/5"))
        + fields.elliptic_multipole(2, "im", semi_axes=("3/2", "9/10"), centre=("3/10", "-1/5")) * "1/2",
        conditions={"rim": "neumann"},
        conductivity=0.7,
        at_infinity="decay",
        window=EllipticRing((0.3, -0.2), (1.5, 0.9), (3.0, 2.4)),
        quantities={"energy": energy_of_solution(exact="1.05*pi")},
        sources=(MAP, HERE),
    )


@family
def _charged_screen() -> Definition:
    return Definition(
        title="Charged open screen",
        solution="log |w|, z = 13/20 (w + 1/w)",
        note="The capacity is a quarter of the length, 13/20; the tips carry u ~ sqrt(r).",
        reading="A flat earthing strip of the pump house.",
        shape=Exterior(Screen((-1.3, 0.0), (1.3, 0.0))),
        field=fields.elliptic_multipole(0, semi_axes=("13/10", 0)),
        conductivity=0.9,
        at_infinity=("log", 1.0),
        window=EllipticRing((0.0, 0.0), (1.3, 0.0), (2.6, 2.0)),
        quantities={
            "flux into the front": flux_through("front", exact="-0.9*pi"),
            "flux into the back": flux_through("back", exact="-0.9*pi"),
        },
        sources=(CAPACITY, MAP),
        reference_points=(("1.4", "0"), ("0", "0.5"), ("-1", "1e-3")),
    )


@family
def _stream_across_screen() -> Definition:
    return Definition(
        title="Potential flow across an open screen",
        solution="Re (2/5 (conj(V) w + V/w)), z = 2/5 (w + 1/w), V = 3/10 + i",
        reading="The stream meets a plane fender of the jetty; water flows round its ends.",
        shape=Exterior(Screen((-0.8, 0.0), (0.8, 0.0))),
        field=fields.flow_past(("4/5", 0), ("3/10", 1)),
        conditions={"front": "neumann", "back": "neumann"},
        at_infinity=("flow", (0.3, 1.0), 0.0),
        window=EllipticRing((0.0, 0.0), (0.8, 0.0), (1.8, 1.4)),
        quantities={
            "value in front of the middle": value_at((0.0, 0.6), exact=1),
            "added mass": added_mass(exact="0.64*pi/1.09"),
        },
        sources=(MAP,),
    )


@family
def _screen_fading_disturbance() -> Definition:
    return Definition(
        title="Outside an upright screen, two multipoles",
        solution="Re w^-1 + 2/3 Im w^-2, |w| = 1 on the screen",
        note="The values on the two sides differ; u ~ sqrt(r) at the tips.",
        reading="Still water around an upright baffle whose two faces are held at different levels.",
        shape=Exterior(Screen((0.25, -0.5), (0.25, 1.0))),
        field=fields.elliptic_multipole(1, semi_axes=(0, "3/4"), centre=("1/4", "1/4"))
        + fields.elliptic_multipole(2, "im", semi_axes=(0, "3/4"), centre=("1/4", "1/4")) * "2/3",
        conductivity=1.2,
        at_infinity="decay",
        window=EllipticRing((0.25, 0.25), (0.0, 0.75), (1.25, 1.75)),
        quantities={
            "flux into the front": flux_through("front", exact="-12/5"),
            "flux into the back": flux_through("back", exact="12/5"),
        },
        sources=(MAP, HERE),
    )


@family
def _stream_turning_about_screen() -> Definition:
    return Definition(
        title="Stream function of a turning flow past an open screen",
        solution="Im F(w), F = 3/8 (conj(V) w + V/w) - i G/(2 pi) log w, V = 1/2 + i, G = 2, "
        "z = 3/8 (w + 1/w)",
        note="The stream function is 0 on the screen and behaves like sqrt(r) at its tips.",
        reading="A stream that turns about a flat fender.",
        shape=Exterior(Screen((-0.75, 0.0), (0.75, 0.0))),
        field=fields.flow_past(("3/4", 0), ("1/2", 1), 2, part="stream"),
        at_infinity=("flow", (-1.0, 0.5), 2.0),
        window=EllipticRing((0.0, 0.0), (0.75, 0.0), (1.75, 1.5)),
        quantities={"value above the middle": value_at((0.0, 1.0))},
        sources=(MAP,),
    )


@family
def _anode_under_the_quay() -> Definition:
    return Definition(
        title="Half-plane above a buried dipole, with a film on its bed",
        solution="(2 x + y + 1/2)/(x^2 + (y + 1/2)^2)",
        reading="Stray current of an anode buried under the bed of the pool.",
        shape=HalfSpace(2),
        field=fields.dipole((0, "-1/2"), (2, 1)),
        conditions={"bottom": robin(0.8)},
        conductivity=1.4,
        at_infinity="decay",
        window=Rectangle((-1.5, 0.0), (2.0, 1.2)),
        quantities={"value above the anode": value_at((0.0, 0.5), exact=1)},
        sources=(MULTIPOLES,),
    )


@family
def _channel_between_drains() -> Definition:
    return Definition(
        title="Strip between two dipoles beyond its banks",
        solution="x/(x^2 + (y + 2/5)^2) - x/(x^2 + (y - 6/5)^2)",
        reading="Head in a long channel whose banks leak through two opposite drains.",
        shape=Strip(2, 0.0, 0.9),
        field=fields.dipole((0, "-2/5"), (1, 0)) - fields.dipole((0, "6/5"), (1, 0)),
        conditions={"top": "neumann"},
        conductivity=0.6,
        at_infinity="decay",
        window=Rectangle((-1.8, 0.0), (1.8, 0.9)),
        quantities={"value between the drains": value_at((0.0, 0.4), exact=0)},
        sources=(MULTIPOLES,),
    )
