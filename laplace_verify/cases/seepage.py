"""Seepage through the ground below dams: heads, discharge, uplift, exit gradient.

The layer is cut off at two sides, on which the exact head is given; the bottom, bases and piles are tight.
The head is measured from the tailwater, lengths in depths of the layer; the conductivity is the
permeability. Quantities are those of the whole infinite layer where they have a closed form.
"""

from __future__ import annotations

from fractions import Fraction

import mpmath

from laplace_verify import fields
from laplace_verify.cases.definition import Definition, Family
from laplace_verify.fields.seepage import DamSeepage
from laplace_verify.geometry import Polygon, Rectangle
from laplace_verify.problems import discharge_across, exit_gradient_at, flux_through, uplift_on, value_at

__all__ = ["family"]

family = Family()
DIGITS = 60  # of closed forms, of which files keep 50
HARR = "elliptic map of the layer: Harr 1962, Groundwater and Seepage, ch. 5 (from memory)"
RUSSIAN = "Polubarinova-Kochina 1962, Theory of Ground Water Movement, ch. III (from memory)"
CAUTION = (
    "A solver that passes here solves the equation; whether a dam is safe, governing codes and licensed "
    "practice decide."
)
WALLS = {
    "side-1": "bottom", "side-2": "downstream", "side-3": "bed-downstream", "side-4": "front",
    "side-5": "back", "side-6": "bed-upstream", "side-7": "upstream",
}  # fmt: skip

WEIR = Polygon(
    [
        (-2.0, -1.5), (2.0, -1.5), (2.0, 0.0), (1.0, 0.0), (0.0, 0.0), (0.0, -0.6), (0.0, 0.0), (-1.0, 0.0),
        (-2.0, 0.0),
    ]
).renamed(
    **{
        "side-1": "bottom", "side-2": "downstream", "side-3": "bed-downstream", "side-4": "base-front",
        "side-5": "front", "side-6": "back", "side-7": "base-back", "side-8": "bed-upstream",
        "side-9": "upstream",
    }
)  # fmt: skip


def _times(factor: str, head: DamSeepage) -> str:
    """Return a discharge, the form factor times conductivity and head drop, in decimals."""
    with mpmath.workdps(DIGITS + 10):
        return str(mpmath.nstr(fields.form_factor(head, DIGITS) * mpmath.mpmathify(Fraction(factor)), DIGITS))


def _beside_pile(head: DamSeepage) -> str:
    """Return the exit gradient at the downstream face of the pile, in decimals."""
    with mpmath.workdps(DIGITS + 10):
        return str(mpmath.nstr(-head.gradient_at((0, 0), DIGITS, side=-1)[1], DIGITS))


@family
def _dam_on_permeable_layer() -> Definition:
    head = fields.dam_seepage(2, 1)
    return Definition(
        title="Flat-bottomed dam on a layer of finite depth",
        solution="Re V/(2 K(m)) for x > 0, sn(V, m)^2 = 1 - sinh^2 S/sinh^2 B, m = tanh B, S = pi z/2, B = "
        "pi/2; u - 1/2 is odd in x",
        note=f"u = 1 on the bed upstream, 0 downstream; the base |x| < 1 and the bottom are tight. {CAUTION}",
        reading="Seepage under a gravity dam of the tidal power station; its base carries the uplift.",
        shape=Rectangle((-2.0, -1.0), (2.0, 0.0))
        .split(top=[0.25, 0.75])
        .renamed(left="upstream", right="downstream"),
        field=head,
        conditions={"bottom": "neumann", "top-2": "neumann"},
        conductivity=0.4,
        quantities={
            "discharge": discharge_across((0.0, -1.0), (0.0, 0.0), exact=_times("2/5", head)),
            "uplift": uplift_on("top-2", exact=1),
            "pressure head under the upstream quarter of the base": value_at((-0.5, 0.0)),
            "exit gradient half a depth from the toe": exit_gradient_at("top-3", (1.5, 0.0)),
        },
        tags=("seepage",),
        sources=(HARR, RUSSIAN),
        reference_points=(("0.5", "-0.5"), ("-1.000001", "-0.000001"), ("2", "-0.25")),
    )


@family
def _half_of_a_dam() -> Definition:
    unit = fields.dam_seepage("8/5", "4/5")
    return Definition(
        title="Downstream half of a dam, split at its line of symmetry",
        solution="1/2 + 3 Re V/(2 K(m)), sn(V, m)^2 = 1 - sinh^2 S/sinh^2 B, m = tanh B, S = pi z/(2 T), B = "
        "pi/2, T = 4/5",
        note="On x = 0 half of the head is lost; all of the discharge passes it. " + CAUTION,
        reading="A barrage across the inlet, computed on its downstream half with the tailwater at 1/2.",
        shape=Rectangle((0.0, -0.8), (2.0, 0.0)).split(top=[0.4]).renamed(right="downstream"),
        field=unit * 3 + fields.affine((0, 0), "1/2"),
        conditions={"bottom": "neumann", "top-1": "neumann"},
        conductivity=1.5,
        quantities={
            "inflow under the middle": flux_through("left", exact=_times("9/2", unit)),
            "uplift on this half": uplift_on("top-1"),
            "exit gradient at the cut": exit_gradient_at("top-2", (2.0, 0.0)),
        },
        tags=("seepage",),
        sources=(HARR, RUSSIAN),
        reference_points=(("0.5", "-0.5"), ("0", "-0.8"), ("0.800001", "0")),
    )


@family
def _sheet_pile_in_layer() -> Definition:
    head = fields.dam_seepage(0, 1, "1/2")
    return Definition(
        title="Sheet pile to the middle of a layer",
        solution="Re V/(2 K(m)) for x > 0, sn(V, m)^2 = -sinh^2 S/sin^2 t, m = sin t, S = pi z/2, t = pi/4; "
        "u - 1/2 is odd in x",
        note="u = 1 on the bed upstream, 0 downstream; both faces of the pile x = 0, -1/2 < y < 0 and the "
        f"bottom are tight. Half of k h passes under the tip. {CAUTION}",
        reading="A cofferdam of sheet piles; the ground beside it heaves if water leaves too steeply.",
        shape=Polygon(
            [(-1.5, -1.0), (1.5, -1.0), (1.5, 0.0), (0.0, 0.0), (0.0, -0.5), (0.0, 0.0), (-1.5, 0.0)]
        ).renamed(**WALLS),
        field=head,
        conditions={"bottom": "neumann", "front": "neumann", "back": "neumann"},
        conductivity=0.7,
        quantities={
            "discharge": discharge_across((0.0, -1.0), (0.0, -0.5), exact="7/20"),
            "exit gradient beside the pile": exit_gradient_at(
                "bed-downstream", (0.0, 0.0), exact=_beside_pile(head)
            ),
            "head at the tip": value_at((0.0, -0.5), exact="1/2"),
        },
        tags=("seepage",),
        sources=(HARR, RUSSIAN),
        reference_points=(("0.5", "-0.5"), ("1e-6", "-0.5"), ("-1.5", "-0.75")),
    )


@family
def _dam_with_sheet_pile() -> Definition:
    head = fields.dam_seepage(2, "3/2", "3/5")
    return Definition(
        title="Dam with a sheet pile below its middle",
        solution="Re V/(2 K(m)) for x > 0, sn(V, m)^2 = (sinh^2 B - sinh^2 S)/D, D = sinh^2 B + sin^2 t, "
        "m^2 = D/cosh^2 B, S = pi z/3, B = pi/3, t = pi/5; u - 1/2 is odd in x",
        note="u = 1 on the bed upstream, 0 downstream; base, pile and bottom are tight. " + CAUTION,
        reading="A weir whose cut-off wall lengthens the way of the water.",
        shape=WEIR,
        field=head,
        conditions=dict.fromkeys(("bottom", "base-front", "front", "back", "base-back"), "neumann"),
        conductivity=0.5,
        quantities={
            "discharge": discharge_across((0.0, -1.5), (0.0, -0.6), exact=_times("1/2", head)),
            "uplift upstream of the pile": uplift_on("base-back"),
            "uplift downstream of the pile": uplift_on("base-front"),
            "pressure head under the middle of the downstream base": value_at((0.5, 0.0)),
        },
        tags=("seepage",),
        sources=(HARR, RUSSIAN),
        reference_points=(("0.5", "-0.5"), ("-0.000001", "-0.600001"), ("1.5", "0")),
    )
