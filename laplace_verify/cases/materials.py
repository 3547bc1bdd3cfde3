"""Bodies of several materials: layers, inclusions, a coat, a checkerboard corner, a slanting interface.

With K constant per region u is smooth on either side of an interface and has a kink on it: value and flux
K n . grad u are continuous, the gradient is not.
"""

from __future__ import annotations

from fractions import Fraction

from laplace_verify import fields
from laplace_verify.cases.definition import HERE, Definition, Family
from laplace_verify.fields import Field, by_region
from laplace_verify.fields.partitions import Layers
from laplace_verify.geometry import Ball, Disc, Interval, Rectangle
from laplace_verify.problems import (
    Materials,
    energy_of_solution,
    flux_through,
    inclusion,
    layers,
    resistance_between,
    robin,
    sectors,
    value_at,
)

__all__ = ["family"]

family = Family()
SERIES = "resistances in series and side by side: common practice, no single source"
SPHERE = "Maxwell 1873, A Treatise on Electricity and Magnetism, vol. 1, art. 314 (from memory, unchecked)"
IMAGES = "images in a plane interface: Maxwell 1873, vol. 1, art. 315 (from memory, unchecked)"
COAT = "Hashin & Shtrikman 1962, J. Appl. Phys. 33, 3125-3131 (coated inclusions; from memory, unchecked)"
CORNER = (
    "Kellogg 1974, Applicable Analysis 4, 101-129; Morin, Nochetto & Siebert 2000, SIAM J. Numer. Anal. 38"
)
PLATE = Rectangle((0.0, 0.0), (1.6, 0.9))
SEABED = layers((0, 1), ["1/4", "3/5"], {"clay": 0.5, "sand": 2.0, "gravel": 1.25})


def _through(wall: Materials, flux: str, start: str) -> Field:
    """Return the field of a uniform flux K du/ds = `flux` across layers, 0 at s = `start`."""
    partition, q = wall.partition, Fraction(flux)
    if not isinstance(partition, Layers):
        raise TypeError("a uniform flux crosses layers only")
    parts, level, last = [], Fraction(0), Fraction(start)
    ends = [*(Fraction(p) for p in partition.positions), None]
    for k, end in zip(wall.conductivities, ends, strict=True):
        slope = q / Fraction(str(k))
        parts.append(fields.affine([slope * Fraction(c) for c in partition.direction], level - slope * last))
        if end is not None:
            level, last = level + slope * (end - last), end
    return by_region(wall, parts)


@family
def _rod_two_layers() -> Definition:
    wall = layers((1,), ["4/5"], {"steel": 1.5, "cork": 0.25})
    return Definition(
        title="Rod of two layers between two temperatures",
        solution="(x - 1/5)/3 in steel, 1/5 + 2 (x - 4/5) in cork",
        note="Resistances add up: 0.6/1.5 + 0.9/0.25 = 4.",
        reading="A steel hanger with a cork washer between pump house and pool.",
        shape=Interval(0.2, 1.7),
        field=_through(wall, "1/2", "1/5"),
        conductivity=wall,
        quantities={
            "flux through the right end": flux_through("right", exact="1/2"),
            "value at the joint": value_at((0.8,), exact="1/5"),
            "thermal resistance": resistance_between("right", "left", exact=4),
        },
        tags=("exactness",),
        sources=(SERIES,),
        reference_points=(("0.5",), ("0.75",), ("1.7",)),
    )


@family
def _rod_five_layers() -> Definition:
    wall = layers(
        (1,),
        ["1/10", "1/4", "3/10", "13/20"],
        {"plaster": 0.5, "brick": 0.75, "air": 0.025, "foam": 0.04, "board": 0.16},
    )
    return Definition(
        title="Wall of five layers with a film of air outside",
        solution="2 R(x), R(x) the resistance from the left end to x",
        note="R is the sum of thickness over conductivity; the flux is 2 everywhere.",
        reading="The wall of the control room from the plaster inside to the boards outside.",
        shape=Interval(0.0, 0.8),
        field=_through(wall, "2", "0"),
        conditions={"left": "neumann", "right": robin(2.5)},
        conductivity=wall,
        quantities={
            "flux through the left end": flux_through("left", exact=-2),
            "energy": energy_of_solution(),
        },
        tags=("exactness",),
        sources=(SERIES,),
        reference_points=(("0.05",), ("0.28",), ("0.77",)),
    )


@family
def _plate_layers_across() -> Definition:
    return Definition(
        title="Layered plate, heat flows across the layers",
        solution="R(y), the resistance of unit width from the bottom to y",
        note="The flux is 1 everywhere; resistances add up: 0.25/0.5 + 0.35/2 + 0.3/1.25.",
        reading="Warm ground water rising evenly through clay, sand and gravel.",
        shape=PLATE,
        field=_through(SEABED, "1", "0"),
        conditions={"left": "neumann", "right": "neumann", "top": robin(0.8)},
        conductivity=SEABED,
        quantities={
            "flux through the top": flux_through("top", exact="8/5"),
            "thermal resistance": resistance_between("top", "bottom", exact="0.915/1.6"),
        },
        tags=("exactness",),
        sources=(SERIES,),
        reference_points=(("0.3", "0.24"), ("1.6", "0.7")),
    )


@family
def _plate_layers_along() -> Definition:
    return Definition(
        title="Layered plate, heat flows along the layers",
        solution="2 - 5/4 x",
        note="Conductances add up: 0.25 * 0.5 + 0.35 * 2 + 0.3 * 1.25 = 1.2; the flux at the left side jumps "
        "from layer to layer.",
        reading="Ground water seeping sideways through clay, sand and gravel.",
        shape=PLATE,
        field=fields.affine(("-5/4", 0), 2),
        conditions={"left": "neumann", "bottom": "neumann", "top": "neumann"},
        conductivity=SEABED,
        quantities={"flux through the left side": flux_through("left", exact="3/2")},
        tags=("exactness",),
        sources=(SERIES,),
        reference_points=(("0.3", "0.24"), ("1.6", "0.7")),
    )


@family
def _plate_two_layers_wave() -> Definition:
    bed = layers((0, 1), ["2/5"], {"rock": 2.5, "sand": 0.5})
    even = fields.exp_trig(3, "cos", "cosh", centre=(0, "2/5"))
    odd = fields.exp_trig(3, "cos", "sinh", centre=(0, "2/5"), level="9/10")
    return Definition(
        title="Plate of two layers with a wave along the interface",
        solution="cos 3 x [cosh 3 s + a sinh 3 s / sinh 3/2], s = y - 2/5, a = 1/2 in rock, 5/2 in sand",
        note="The Neumann data of the left side jump where the interface ends on it.",
        reading="Temperature of rock under a bed of sand, with sun and shade above.",
        shape=Rectangle((-0.3, 0.0), (1.2, 0.9)),
        field=by_region(bed, {"rock": even + odd * "1/2", "sand": even + odd * "5/2"}),
        conditions={"left": "neumann", "bottom": robin(1.5)},
        conductivity=bed,
        quantities={
            "value at the sensor": value_at((0.0, 0.4), exact=1),
            "flux through the left side": flux_through("left"),
        },
        sources=(HERE,),
        reference_points=(("0.2", "0.1"), ("0.2", "0.39"), ("-0.3", "0.8"), ("1.2", "0.9")),
    )


@family
def _well_beside_a_fault() -> Definition:
    ground = layers((1, 0), ["3/5"], {"chalk": 3.0, "clay": 1.0})
    well, image = fields.log_source(("-1/4", "3/10")), fields.log_source(("29/20", "3/10"))
    return Definition(
        title="A well beside a fault between two kinds of ground",
        solution="log |x - p| + log |x - q| / 2 in chalk, 3/2 log |x - p| in clay; p = (-1/4, 3/10), "
        "q = (29/20, 3/10)",
        note="q is the image of p in the fault x = 3/5; its strength is (K1 - K2)/(K1 + K2).",
        reading="Ground-water head between a well and a clay-filled fault.",
        shape=Rectangle((0.0, 0.0), (1.3, 0.8)),
        field=by_region(ground, {"chalk": well + image * "1/2", "clay": well * "3/2"}),
        conditions={"top": "neumann", "right": robin(0.7)},
        conductivity=ground,
        quantities={"value at the fault": value_at((0.6, 0.3))},
        sources=(IMAGES,),
        reference_points=(("0.1", "0.3"), ("0.59", "0.5"), ("1.2", "0.1")),
    )


@family
def _plate_oblique_interface() -> Definition:
    joint = layers((3, 4), ["29/10"], {"granite": 3.0, "slate": 0.75})
    cubic = [fields.polynomial(3, part, centre=("1/2", "7/20")) for part in ("re", "im")]
    even = cubic[0] * "-44/125" - cubic[1] * "117/125"
    odd = cubic[0] * "117/125" - cubic[1] * "44/125" + fields.affine(("3/5", "4/5"), "-29/50")
    return Definition(
        title="Plate with a slanting interface",
        solution="Re w^3 + a Im (w^3 + w), w = (4 + 3 i)/5 (z - 1/2 - 7 i/20), "
        "a = 1/2 in granite, 2 in slate",
        note="Im w is the distance from the interface 3 x + 4 y = 29/10.",
        reading="A joint between granite and slate under the dam, at an angle to the grid.",
        shape=PLATE,
        field=by_region(joint, {"granite": even + odd * "1/2", "slate": even + odd * 2}),
        conditions={"bottom": "neumann"},
        conductivity=joint,
        quantities={"flux through the bottom": flux_through("bottom")},
        reference_points=(("0.5", "0.36"), ("0.1", "0.2"), ("1.5", "0.85")),
    )


@family
def _pipe_in_a_slab() -> Definition:
    slab = inclusion(("7/10", "2/5"), ["1/4"], {"pipe": 4.5, "concrete": 0.5})
    outside = fields.affine((2, 1)) - fields.dipole(("7/10", "2/5"), (2, 1)) * "1/20"
    return Definition(
        title="A pipe in a slab across a uniform flow",
        solution="(2 x + y)/5 + 36/25 in the pipe; 2 x + y - (2 X + Y)/(20 r^2) outside, X = x - 7/10, "
        "Y = y - 2/5",
        note="Inside the gradient is 2 K2/(K1 + K2) times that far away.",
        reading="A steel pipe cast into the slab of the heat store.",
        shape=PLATE,
        field=by_region(slab, {"pipe": fields.affine(("2/5", "1/5"), "36/25"), "concrete": outside}),
        conditions={"right": "neumann", "top": robin(1.2)},
        conductivity=slab,
        quantities={"value at the axis": value_at((0.7, 0.4), exact="9/5")},
        sources=(SPHERE,),
        reference_points=(("0.8", "0.4"), ("0.94", "0.4"), ("1.6", "0.9")),
    )


@family
def _void_in_a_column() -> Definition:
    column = inclusion(("1/5", "-1/10"), ["2/5"], {"void": 0.2, "concrete": 1.8})
    outside = fields.affine((1, 0)) + fields.dipole(("1/5", "-1/10"), (1, 0)) * "16/125"
    return Definition(
        title="A void off the axis of a round column",
        solution="9/5 x - 4/25 in the void; x + 16/125 X/r^2 outside, X = x - 1/5",
        reading="An air duct cast off-centre into a round column, with heat flowing across.",
        shape=Disc((0.0, 0.0), 1.1),
        field=by_region(column, {"void": fields.affine(("9/5", 0), "-4/25"), "concrete": outside}),
        conductivity=column,
        quantities={"value at the middle of the void": value_at((0.2, -0.1), exact="1/5")},
        sources=(SPHERE,),
        reference_points=(("0.3", "-0.2"), ("0.59", "-0.1"), ("-1.1", "0")),
    )


@family
def _coated_cable() -> Definition:
    # neutral: K3 = K2 (K1 + K2 + f (K1 - K2)) / (K1 + K2 - f (K1 - K2)), f = (inner/outer radius)^2 = 1/4
    cable = inclusion((0, 0), ["3/10", "3/5"], {"copper": 9.0, "sheath": 1.0, "soil": 1.5})
    sheath = fields.affine(("5/4", "-5/8")) - fields.dipole((0, 0), ("5/4", "-5/8")) * "9/125"
    return Definition(
        title="A coated cable that leaves the flow around it undisturbed",
        solution="v/4 in copper, (5/4) v (1 - 9/(125 r^2)) in the sheath, v in the soil; v = x - y/2",
        note="The sheath balances the core: outside nothing tells of the cable.",
        reading="A sheathed copper cable in damp soil between two heated culverts.",
        shape=Disc((0.0, 0.0), 1.0),
        field=by_region(
            cable,
            {"copper": fields.affine(("1/4", "-1/8")), "sheath": sheath, "soil": fields.affine((1, "-1/2"))},
        ),
        conductivity=cable,
        quantities={"energy": energy_of_solution()},
        sources=(COAT,),
        reference_points=(("0.1", "0.2"), ("0.44", "0"), ("0", "1")),
    )


@family
def _boulder_in_clay() -> Definition:
    ground = inclusion((0, 0, 0), ["1/2"], {"boulder": 4.5, "clay": 0.75})
    outside = fields.affine((0, 0, 1)) - fields.dipole((0, 0, 0), (0, 0, 1)) * "5/64"
    return Definition(
        title="A ball in surroundings of another conductivity",
        solution="3/8 z in the boulder; z - 5/64 z/r^3 outside",
        note="Inside the gradient is 3 K2/(K1 + 2 K2) times that far away.",
        reading="A boulder in clay with heat rising evenly from below.",
        shape=Ball((0.0, 0.0, 0.0), 1.3),
        field=by_region(ground, {"boulder": fields.affine((0, 0, "3/8")), "clay": outside}),
        conductivity=ground,
        quantities={"value at the top of the boulder": value_at((0.0, 0.0, 0.5), exact="3/16")},
        sources=(SPHERE,),
        reference_points=(("0.1", "0.2", "0.3"), ("0", "0.5", "0.5"), ("0", "0", "1.3")),
    )


@family
def _checkerboard_corner() -> Definition:
    gamma, apex = "1/2", ("3/4", "3/8")
    ratio = fields.checkerboard_ratio(gamma)
    board = sectors(
        apex,
        [(1, 0), (0, 1), (-1, 0), (0, -1)],
        {"first": ratio, "second": 1.0, "third": ratio, "fourth": 1.0},
    )
    return Definition(
        title="Four blocks of two materials that meet in a point",
        solution="r^(1/2) m(theta) about (3/4, 3/8), m'' = -m/4 in every quadrant",
        note="Conductivities 3 + 2 sqrt 2 and 1 in turn; the gradient is infinite where the four meet.",
        reading="Four paving blocks of two kinds of stone around one joint.",
        shape=PLATE,
        field=fields.checkerboard(gamma, apex),
        conductivity=board,
        quantities={"value at the joint": value_at((0.75, 0.375), exact=0)},
        tags=("corner",),
        sources=(CORNER,),
        reference_points=(("0.751", "0.379"), ("0.75001", "0.37502"), ("1.6", "0.9"), ("0.1", "0.1")),
    )
