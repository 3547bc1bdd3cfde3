"""The first referee: closed forms written once more, for ball arithmetic, from the parameters in the files.

Nothing of `laplace_verify.fields` is used. Formulas differ from those of the fields where there is a choice:
solid harmonics by the explicit sum of Legendre's polynomials, spheroids by Carlson's symmetric integrals, the
outside of ellipses by the quadratic of Joukowski's map, tensors by their eigenvectors, gradients by
differences of balls. In every function `b` is the ball arithmetic, `f` a field of a file, `x` the point.
"""

import math
from fractions import Fraction

import mpmath
import pytest

import laplace_verify as lv
from laplace_verify.references import CONFIRMATIONS, confirmation_of

ROUTE = "balls"
IDS = [id_ for id_, case in lv.catalogue.items() if (confirmation_of(case) or ("",))[0] == ROUTE]


# -- polynomials, waves, sources ---------------------------------------------------------------------------


def polynomial(b, f, x):
    power = (b.acb(*b.away(x, f["centre"])) / b.number(f["scale"])) ** f["degree"]
    return power.real if f["part"] == "re" else power.imag


def legendre(degree):
    """Coefficients of P_l, {power: exact}: 2^-l sum over k of (-1)^k C(l, k) C(2l - 2k, l) c^(l - 2k)."""
    terms = {}
    for k in range(degree // 2 + 1):
        number = (-1) ** k * math.comb(degree, k) * math.comb(2 * degree - 2 * k, degree)
        terms[degree - 2 * k] = Fraction(number, 2**degree)
    return terms


def solid(b, f, x):
    """N (x + i y)^m r^(l-m) P_l^(m)(z/r), Schmidt's seminormalised, cosine for m >= 0, sine for m < 0."""
    degree, m = f["l"], abs(f["m"])
    square = x[0] ** 2 + x[1] ** 2 + x[2] ** 2
    total = b.arb(0)
    for power, coefficient in legendre(degree).items():
        if power >= m:
            kept = coefficient * math.perm(power, m)
            total += b.number(kept) * x[2] ** (power - m) * square ** ((degree - power) // 2)
    wave = b.acb(x[0], x[1]) ** m
    size = b.number(
        Fraction((1 if m == 0 else 2) * math.factorial(degree - m), math.factorial(degree + m))
    ).sqrt()
    return size * total * (wave.imag if f["m"] < 0 else wave.real)


def exp_trig(b, f, x):
    unit = b.pi if f["times_pi"] else b.arb(1)
    numbers = [b.number(k) * unit for k in f["k"]]
    rate = numbers[0] if len(numbers) == 1 else b.norm(numbers)
    if f["profile"] in ("exp", "decay"):
        height = x[-1] - b.number(f["level"])
        total = (rate * height if f["profile"] == "exp" else -rate * height).exp()
    else:
        base = b.number(f["centre"][-1])
        top, bottom = rate * (x[-1] - base), rate * (b.number(f["level"]) - base)
        total = getattr(top, f["profile"])() / getattr(bottom, f["over"])()
    for part, k, c, place in zip(f["parts"], numbers, x, f["centre"], strict=False):
        total *= getattr(k * (c - b.number(place)), part)()
    return total


def log_source(b, f, x):
    return b.number(f["strength"]) * b.norm(b.away(x, f["point"])).log()


def point_source(b, f, x):
    return b.number(f["strength"]) / b.norm(b.away(x, f["point"]))


def dipole(b, f, x):
    offset = b.away(x, f["point"])
    along = sum((b.number(d) * c for d, c in zip(f["direction"], offset, strict=True)), b.arb(0))
    return along / b.norm(offset) ** len(x)


def disc_fourier(b, f, x):
    place = b.acb(*b.away(x, f["centre"])) / b.number(f["radius"])
    total = sum((b.number(c) * (place**n).real for n, c in enumerate(f["cosines"])), b.arb(0))
    return sum((b.number(c) * (place ** (n + 1)).imag for n, c in enumerate(f["sines"])), total)


def disc_arcs(b, f, x):
    """The angle under which an arc is seen, less half the arc, over pi; outside the disc its image."""
    z = b.acb(*b.away(x, f["centre"])) / b.number(f["radius"])
    if abs(z) > 1:
        z = 1 / z.conjugate()
    turns = [Fraction(t) for t in f["turns"]]
    total = b.arb(0)
    for start, stop, v in zip(turns, [*turns[1:], turns[0] + 1], f["values"], strict=True):
        first, last = ((b.acb(0, 2) * b.pi * b.number(t)).exp() - z for t in (start, stop))
        ratio = last / first
        seen = b.arb.atan2(ratio.imag, ratio.real)
        seen = seen if seen > 0 else seen + 2 * b.pi
        total += b.number(v) * (seen / b.pi - b.number(stop - start))
    return total


def radial(b, f, x):
    if f["about"] == "sphere":
        return b.number(f["a"]) + b.number(f["b"]) / x[0]
    slope = b.number(f["b"])
    return b.number(f["a"]) + (slope * (x[0] / b.number(f["radius"])).log() if f["b"] else 0)


# -- corners -----------------------------------------------------------------------------------------------


def wedge(b, f, x):
    """r^alpha sin or cos (alpha theta), theta in (cut - 2 pi, cut]."""
    x, y = b.away(x, f["apex"])
    theta, alpha = b.arb.atan2(y, x), b.number(f["alpha"])
    turns = math.ceil((float(theta.mid()) - f["cut"]) / (2 * math.pi) - 1e-12)
    return b.norm([x, y]) ** alpha * getattr(alpha * (theta - 2 * b.pi * turns), f["part"])()


def quarter_wave(b, f, x):
    """r^g cos(g phi) and -cot(g pi/4) r^g sin(g phi), phi from a quadrant's bisector (Kellogg 1974)."""
    x, y = b.away(x, f["apex"])
    gamma, k = b.number(f["gamma"]), f["quadrant"]
    turned = (
        b.acb(x, y) * (b.acb(0, -1) * b.pi * (2 * k + 1) / 4).exp()
    )  # the bisector along the positive axis
    phi, size = gamma * b.arb.atan2(turned.imag, turned.real), b.norm([x, y]) ** gamma
    return (1 if k == 0 else -1) * size * (
        phi.cos() if k % 2 == 0 else (phi.sin() * (1 if k == 1 else -1)) / (gamma * b.pi / 4).tan()
    )  # fmt: skip


# -- outside of ellipses and spheroids ---------------------------------------------------------------------


def joukowski(b, f, x):
    """w with (a + b)/2 w + (a - b)/2 /w = z and |w| >= 1: the larger root of a quadratic."""
    major, minor = (b.number(a) for a in f["semi_axes"])
    z = b.acb(*b.away(x, f["centre"]))
    square = z * z - (major**2 - minor**2)
    root = square.sqrt() if square.real > 0 else b.acb(0, 1) * (-square).sqrt()  # away from the branch cut
    candidates = [(z + root) / (major + minor), (z - root) / (major + minor)]
    return max(candidates, key=lambda w: float(abs(w).mid()))


def elliptic_multipole(b, f, x):
    return b.multipole(f, joukowski(b, f, x))


def flow_past(b, f, x):
    return b.flow(f, joukowski(b, f, x), sum(map(b.number, f["semi_axes"])) / 2)


def spheroid(b, f, x):
    """With A = a^2 + s, C = c^2 + s on the confocal spheroid: R_F(A, A, C), R_D(A, A, C), R_D(A, C, A)."""
    x = b.away(x, f["centre"])
    a2, c2 = b.number(f["semi_axes"][0]) ** 2, b.number(f["semi_axes"][2]) ** 2

    def integrals(A, C):
        A, C = b.acb(A), b.acb(C)
        rf, rd = b.acb.elliptic_rf, b.acb.elliptic_rd
        return rf(A, A, C).real, rd(A, C, A).real, rd(A, A, C).real

    across, along = x[0] ** 2 + x[1] ** 2, x[2] ** 2
    half = (across + along - a2 - c2) / 2  # s^2 - 2 half s - (across c2 + along a2 - a2 c2) = 0
    product = across * c2 + along * a2 - a2 * c2
    s = half + (half**2 + product).sqrt() if half > 0 else product / ((half**2 + product).sqrt() - half)
    (u, X, Z), (u0, X0, Z0) = (
        integrals(a2 + s, c2 + s),
        integrals(a2, c2) if c2 > 0 else (b.pi / 2 / a2.sqrt(), None, None),
    )
    what = f["what"]
    if what == "charge":
        return u / u0
    if what.startswith("flow"):
        return (
            x[2] * (1 + Z / (2 * X0)) if what == "flow-z" else x["xy".index(what[-1])] * (1 + X / (X0 + Z0))
        )
    return x[2] * Z / Z0 if what == "z" else x["xy".index(what)] * X / X0


# -- round bodies, boxes, patches --------------------------------------------------------------------------


def zonal(b, f, x):
    """Sum of (A_l r^l + B_l r^(-l-1)) P_l(z/r), A and B from the values on the spheres."""
    x = b.away(x, f["centre"])
    r, outer, inner = b.norm(x), b.number(f["outer"]), b.number(f["inner"])
    total = b.arb(0)
    for degree in range(max(len(f["outside"]), len(f["inside"]))):
        g, h = (b.number(c[degree]) if degree < len(c) else b.arb(0) for c in (f["outside"], f["inside"]))
        if f["inner"]:
            fraction = (inner / outer) ** (2 * degree + 1)
            up = (g - h * (inner / outer) ** (degree + 1)) / (1 - fraction)
            down = (h - g * (inner / outer) ** degree) / (1 - fraction)
            size = up * (r / outer) ** degree + down * (inner / r) ** (degree + 1)
        else:
            size = g * (r / outer) ** degree
        total += size * sum(b.number(c) * (x[2] / r) ** power for power, c in legendre(degree).items())
    return total


def wavenumber(b, extent, number, ends):
    """p > 0 with p a = n pi + phases, its digits from mpmath, its ball from a change of sign."""

    def phase(p, end, ctx):
        if end in ("zero", "insulated"):
            return ctx.pi / 2 if end == "zero" else 0 * p
        size = (
            mpmath.mpf(str(Fraction(end).numerator)) / Fraction(end).denominator
            if ctx is mpmath
            else b.number(end)
        )
        return ctx.atan(size / p) if ctx is mpmath else (size / p).atan()

    def gap(p, ctx, a):
        return p * a - number * ctx.pi - phase(p, ends[0], ctx) - phase(p, ends[1], ctx)

    with mpmath.workdps(170):
        a = mpmath.mpf(Fraction(extent).numerator) / Fraction(extent).denominator
        start = (number + 0.5) * mpmath.pi / a
        text = mpmath.nstr(mpmath.findroot(lambda p: gap(p, mpmath, a), start), 160)
    guess, step, a = b.number(text), b.number("1e-145"), b.number(extent)
    assert gap(guess - step, b, a) < 0 < gap(guess + step, b, a)
    return guess + step * b.arb(0, 1)


def box_mode(b, f, x):
    lower, total, square = b.point(f["lower"]), b.arb(1), b.arb(0)
    extents = [Fraction(q) - Fraction(p) for p, q in zip(f["lower"], f["upper"], strict=True)]
    for axis, ends in enumerate((f["x_ends"], f["y_ends"])):
        s, number = x[axis] - lower[axis], f["numbers"][axis]
        if ends == ["insulated", "insulated"] and number == 0:
            continue
        p = wavenumber(b, extents[axis], number, ends)
        shift = {"zero": b.pi / 2, "insulated": b.arb(0)}.get(ends[0])
        total *= (p * s - ((b.number(ends[0]) / p).atan() if shift is None else shift)).cos()
        square += p * p
    rate, s, height = square.sqrt(), x[2] - lower[2], b.number(extents[2])

    def profile(t):
        if f["bottom"] in ("zero", "insulated"):
            return (rate * t).sinh() if f["bottom"] == "zero" else (rate * t).cosh()
        return (rate * t).cosh() + b.number(f["bottom"]) / rate * (rate * t).sinh()

    return total * profile(s) / profile(height)


def rectangle_modes(b, f, x):
    """Finitely many cosines on top between insulated sides, zero at the bottom."""
    assert (f["side"], f["neighbours"], f["far"]) == ("top", "insulated", "zero")
    lower, upper = b.point(f["lower"]), b.point(f["upper"])
    height, total = upper[1] - lower[1], b.number(f["rule"][0]) * (x[1] - lower[1]) / (upper[1] - lower[1])
    for n, c in enumerate(f["rule"][1:], start=1):
        p = n * b.pi / (upper[0] - lower[0])
        total += (
            b.number(c) * (p * (x[0] - lower[0])).cos() * (p * (x[1] - lower[1])).sinh() / (p * height).sinh()
        )
    return total


def loaded_rectangle(b, f, x):
    """Solid angle of the rectangle over 2 pi, or its potential over 2 pi (MacMillan 1930, art. 43)."""
    z, total = x[2], b.arb(0)
    for i, corner_x in enumerate((f["lower"][0], f["upper"][0])):
        for j, corner_y in enumerate((f["lower"][1], f["upper"][1])):
            X, Y = b.number(corner_x) - x[0], b.number(corner_y) - x[1]
            R = b.norm([X, Y, z])
            angle = b.arb.atan2(X * Y, z * R)
            if f["given"] == "value":
                term = angle
            else:
                term = X * (Y / b.norm([X, z])).asinh() + Y * (X / b.norm([Y, z])).asinh() - z * angle
            total += (-1) ** (i + j) * term
    return total / (2 * b.pi)


def edge_wave(b, f, x):
    """I_alpha(k r)/I_alpha(k radius) times a corner's sine or cosine times a wave along the edge."""
    k, alpha, r = b.number(f["k"]), b.number(f["alpha"]), b.norm(x[:2])
    corner = wedge(b, f | {"apex": [0, 0]}, x[:2]) / r**alpha
    size = (k * r).bessel_i(alpha) / (k * b.number(f["radius"])).bessel_i(alpha)
    return size * corner * getattr(k * x[2], f["wave"])()


KINDS = {
    "box-mode": box_mode, "dipole": dipole, "disc-arcs": disc_arcs, "disc-fourier": disc_fourier,
    "edge-wave": edge_wave, "elliptic-multipole": elliptic_multipole, "exp-trig": exp_trig,
    "flow-past": flow_past, "loaded-rectangle": loaded_rectangle, "log-source": log_source,
    "point-source": point_source, "polynomial": polynomial, "quarter-wave": quarter_wave, "radial": radial,
    "rectangle-modes": rectangle_modes, "solid": solid, "spheroid": spheroid, "wedge": wedge, "zonal": zonal,
}  # fmt: skip


@pytest.fixture
def formulas(balls):
    balls.kinds = KINDS
    return balls


@pytest.mark.slow
@pytest.mark.parametrize("id_", IDS)
def test_closed_forms_lie_in_balls(id_, formulas, judge, case_content):
    field = case_content(id_)["exact"]["field"]
    numbers = 1 + lv.catalogue[id_].dim
    assert judge(ROUTE, id_, lambda x: formulas.value(field, x)) >= 12 * numbers


def test_the_index_names_this_route_for_what_it_can_do(composed):
    assert CONFIRMATIONS[ROUTE].kinds == set(KINDS) | composed


def test_a_wrong_digit_is_seen(formulas, judge, case_content, misprinted):
    """The twin: a unit in the forty-fifth digit of a value, then of a slope."""
    made = case_content("plate-wave")
    for entry in misprinted(made["stored"][5], 45):
        with pytest.raises(AssertionError, match="against"):
            judge(ROUTE, "plate-wave", lambda x: formulas.value(made["exact"]["field"], x), stored=[entry])
