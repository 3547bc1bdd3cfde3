"""The fifth referee: conformal maps, special functions and faces of bodies, in ball arithmetic.

*Layers under dams*: Legendre's integral of the first kind, F(asin(sn V), m)/(2 K), where the field takes
Carlson's. *Outside of squares*: the map w -> z is c w 2F1(-1/2, -1/4; 3/4; -w^-4), c times the integral of
sqrt(1 + w^-4); it is inverted by Newton's method, where the field inverts power series. *Cones*: Legendre's
function as Arb computes it, its degree from a root of its own between two signs. *Edges that end*: with G the
power of the stereographic image, u = -R^3 d(G/R)/dz, Kelvin's transform of the slope of a field of degree -1
(Donkin's solutions; derived here by differentiating w = (x + i y)/(R + z)). *Prisms*: half the sum over faces
of their distance times their potential of a single layer, because 2/R is the divergence of the unit vector.

`b` is the ball arithmetic, `f` a field of a file, `x` the point.
"""

from functools import lru_cache

import pytest

import laplace_verify as lv
from laplace_verify.references import CONFIRMATIONS, confirmation_of, probes_of

ROUTE = "maps"
IDS = [id_ for id_, case in lv.catalogue.items() if (confirmation_of(case) or ("",))[0] == ROUTE]
FINE = "1e-145"  # what a root is known to


def dam_seepage(b, f, x):
    """Downstream of the middle; upstream by 1 - head(-x)."""
    assert f["part"] == "head"
    unit = b.pi / (2 * b.number(f["depth"]))
    base, pile = unit * b.number(f["base"]) / 2, unit * b.number(f["pile"])
    wide = base.sinh() ** 2 + pile.sin() ** 2
    m = b.acb(wide / base.cosh() ** 2)
    sine = ((base.sinh() ** 2 - b.acb(unit * abs(x[0]), unit * x[1]).sinh() ** 2) / wide).sqrt()
    head = (b.acb.elliptic_f(sine.asin(), m) / (2 * b.acb.elliptic_k(m))).real
    return head if x[0] > 0 else 1 - head


# -- cones -------------------------------------------------------------------------------------------------


def on_cone(b, nu, c, condition):
    """P_nu(c), or (1 - c^2) P_nu'(c) = nu (P_(nu-1) - c P_nu)."""
    c = b.acb(c)
    if condition == "dirichlet":
        return c.legendre_p(nu).real
    return (nu * (c.legendre_p(nu - 1) - c * c.legendre_p(nu))).real


@lru_cache
def degree(b, share, condition):
    """The first root nu > 0: met in small steps, refined by secants, held between two signs."""
    c = (b.pi * b.number(share)).cos()
    step = b.number("1/16")
    low = step
    while on_cone(b, low, c, condition) * on_cone(b, low + step, c, condition) > 0:
        low += step
    pair = [low, low + step]
    for _ in range(16):
        old, new = pair
        there, here = (on_cone(b, nu, c, condition) for nu in pair)
        if abs(new - old) < b.number("1e-120"):
            break
        pair = [new, (new - here * (new - old) / (here - there)).mid()]
    nu, fine = pair[1].mid(), b.number(FINE)
    assert low < nu < low + step
    assert on_cone(b, nu - fine, c, condition) * on_cone(b, nu + fine, c, condition) < 0
    return nu + fine * b.arb(0, 1)


def cone(b, f, x):
    nu, r = degree(b, f["share"], f["condition"]), b.norm(x)
    return r**nu * b.acb(x[2] / r).legendre_p(nu).real


# -- squares -----------------------------------------------------------------------------------------------


def outwards(b, w):
    """z/c for the square of capacity c, and its slope by w."""
    turned = -(w**-4)
    return w * turned.hypgeom_2f1(b.acb(-1) / 2, b.acb(-1) / 4, b.acb(3) / 4), (1 - turned).sqrt()


def first_guess(b, z):
    """w in a few digits: near a corner from the power 2/3 there, else along the ray from far away."""
    corner = b.acb(1 if z.real > 0 else -1, 1 if z.imag > 0 else -1) / b.arb(2).sqrt()
    beyond = (z - outwards(b, corner)[0]) / corner
    if abs(beyond) < b.number("1/4"):
        return corner * (1 + (3 * beyond / 4) ** (b.acb(2) / 3))
    w, scale = 8 * z, 8
    while scale > 1:
        scale = max(1, scale * 0.85)
        for _ in range(3):
            image, slope = outwards(b, w)
            w = (w - (image - scale * z) / slope).mid()
    return w


def capacity(b):
    """Gamma(1/4)^2/(4 pi^(3/2)), the capacity of a square of side 1 (Landkof 1972, table of capacities)."""
    return (b.arb(1) / 4).gamma() ** 2 / (4 * b.pi ** (b.arb(3) / 2))


def image(b, f, x):
    """w outside the square, with what the last step of Newton's method changed as its radius."""
    z = b.acb(*b.away(x, f["centre"])) / (capacity(b) * b.number(f["side"]))
    w = first_guess(b, z).mid()
    for _ in range(12):
        found, slope = outwards(b, w)
        change = ((found - z) / slope).mid()
        w = (w - change).mid()
        if abs(change) < b.number("1e-80"):
            break
    found, slope = outwards(b, w)
    left = 2 * abs((found - z) / slope)
    assert left < b.number("1e-130")
    return w + b.acb(left * b.arb(0, 1), left * b.arb(0, 1))


def square_multipole(b, f, x):
    return b.multipole(f, image(b, f, x))


def flow_past_square(b, f, x):
    return b.flow(f, image(b, f, x), capacity(b) * b.number(f["side"]))


# -- edges and prisms --------------------------------------------------------------------------------------


def half_edge(b, f, x):
    first = "xyz".index(f["axis"]) + 1
    x, ray = ([c[(first + k) % 3] for k in range(3)] for c in (x, b.point(f["ray"])))

    def stereographic(x):
        return b.acb(x[0], x[1]) / (b.norm(x) + x[2])

    def degree_minus_one(z):
        place = [x[0], x[1], z]
        w = stereographic(place)
        power = (w / (w - stereographic(ray))) ** b.acb(b.number(f["alpha"]))
        return (power.real if f["part"] == "re" else power.imag) / b.norm(place)

    step = b.number("1e-50")
    slope = (degree_minus_one(x[2] + step) - degree_minus_one(x[2] - step)) / (2 * step)
    return -(b.norm(x) ** 3) * slope


def layer(b, x, ends):
    """Integral of 1/R over a rectangle in the plane z = 0 (MacMillan 1930, art. 43)."""
    z, total = x[2], b.arb(0)
    for i, corner_x in enumerate(ends[0]):
        for j, corner_y in enumerate(ends[1]):
            X, Y = corner_x - x[0], corner_y - x[1]
            angle = b.arb.atan2(X * Y, abs(z) * b.norm([X, Y, z]))
            term = X * (Y / b.norm([X, z])).asinh() + Y * (X / b.norm([Y, z])).asinh() - abs(z) * angle
            total += (-1) ** (i + j) * term
    return total


def prism(b, f, x):
    ends, total = list(zip(b.point(f["lower"]), b.point(f["upper"]), strict=True)), b.arb(0)
    for axis in range(3):
        across = ((axis + 1) % 3, (axis + 2) % 3)
        for sign, end in zip((-1, 1), ends[axis], strict=True):
            away = end - x[axis]
            place = [x[across[0]], x[across[1]], away]
            total += sign * away * layer(b, place, [ends[k] for k in across]) / 2
    return total


KINDS = {
    "cone": cone, "dam-seepage": dam_seepage, "flow-past-square": flow_past_square, "half-edge": half_edge,
    "prism": prism, "square-multipole": square_multipole,
}  # fmt: skip
TWINS = (
    "dam-on-permeable-layer",
    "needle-tip",
    "square-pier-in-tidal-stream",
    "notched-cube-edges",
    "air-above-buried-prism",
    "square-pier-disturbance",
)


@pytest.fixture
def formulas(balls):
    balls.kinds = KINDS
    return balls


@pytest.mark.slow
@pytest.mark.parametrize("id_", IDS)
def test_other_maps_give_the_stored_values(id_, formulas, judge, case_content, inside):
    made = case_content(id_)
    entries = inside(id_, made["stored"])
    assert len(entries) >= len(probes_of(lv.catalogue[id_]))
    judge(ROUTE, id_, lambda x: formulas.value(made["exact"]["field"], x), stored=entries)


def test_the_index_names_this_route_for_what_it_can_do(composed):
    assert CONFIRMATIONS[ROUTE].kinds == set(KINDS) | composed


@pytest.mark.slow
@pytest.mark.parametrize("id_", TWINS)
def test_a_wrong_digit_is_seen(id_, formulas, judge, case_content, misprinted):
    """The twin: the fortieth digit of a value, then of a slope."""
    made = case_content(id_)
    for entry in misprinted(made["stored"][0]):
        with pytest.raises(AssertionError, match="against"):
            judge(ROUTE, id_, lambda x: formulas.value(made["exact"]["field"], x), stored=[entry])
