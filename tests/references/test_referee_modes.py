"""The referee of solids whose faces are held at constants: an integral between the poles of two series.

*Cylinder* of radius 1 and height H, its lid at 1, h = H - d the height over the cold end. With

    g(p) = J_0(p r)/J_0(p) sinh(p h)/sinh(p H),

g(p)/p has poles at 0, at the zeros of J_0, whose residues sum to the series in J_0, and on the imaginary
axis, whose residues sum to the one in I_0 (both Carslaw & Jaeger 1959, section 8.3, from memory, unchecked).
On the ray p = exp(s + i t) between them g decays in both coordinates, up to the rim, and neither a zero nor a
mode is needed (derived here):

    u = (2 t/pi) h/H + (2/pi) integral over all s of Im g.

The integrand is analytic for |Im s| < pi/4 if t = pi/4: the trapezoidal rule errs like exp(-pi^2/(2 step))
(Trefethen & Weideman 2014, SIAM Review 56, section 5, from memory, unchecked).

*Rectangle*, |x| < b/2, with its upper side at 1: the same with cos(p x)/cos(p b/2) in place of the ratio of
Bessel functions.

*Box* with a hot top: the double series of sines in x and y, which converges like exp(-distance from the top);
or that rectangle in y and z less the double series of sines in y and z, which mends u on both ends of the x
axis and converges like exp(-distance from them); or the same with x and y exchanged. The one is taken whose
distance is largest. Next to a vertex of the top none of them serves.

`b` is the ball arithmetic, `f` a field of a file.
"""

import math

import mpmath
import pytest

import laplace_verify as lv
from laplace_verify.references import CONFIRMATIONS, confirmation_of

ROUTE = "modes"
IDS = [id_ for id_, case in lv.catalogue.items() if (confirmation_of(case) or ("",))[0] == ROUTE]
DIGITS = 80
LEFT = 130.0  # sums end where their terms are exp(-LEFT), 3e-57
STEP = 1 / 28  # the rule errs by exp(-138)
SERVES = 0.1  # distance from which a double series is summed


def along_the_ray(b, gap, d, term):
    """The sums of Im of a few integrands over s; `term` is given p."""
    turn = (b.acb(0, 1) * b.pi / 4).exp()
    first = -LEFT / 2
    last = math.log(math.sqrt(2) * LEFT / float((gap + d).mid()))
    total = None
    for k in range(math.floor(first / STEP), math.ceil(last / STEP) + 1):
        parts = [t.imag for t in term(turn * (b.number(k) * b.number(STEP)).exp())]
        total = parts if total is None else [t + part for t, part in zip(total, parts, strict=True)]
    return [2 / b.pi * b.number(STEP) * t for t in total]


def hot_lid(b, gap, d, height, across):
    """u, its slope in the gap and in d; `across(p)` is the ratio in g and its slope in the gap."""
    h = height - d

    def term(p):
        ratio, slope = across(p)
        full = 1 - (-2 * p * height).exp()
        fall = (-p * d).exp() / full
        cold = (-2 * p * h).exp()
        return ratio * fall * (1 - cold), slope * fall * (1 - cold), -p * ratio * fall * (1 + cold)

    value, out, down = along_the_ray(b, gap, d, term)
    return value + h / height / 2, out, down - 1 / height / 2


def round_ratio(b, gap):
    """J_0(p r)/J_0(p), r = 1 - gap, and its slope in the gap; I_0 of - i p is scaled by its exponential."""

    def across(p):
        z = -b.acb(0, 1) * p
        inner = z * (1 - gap)
        size = (-z * gap).exp() / z.bessel_i(0, scaled=True)
        return size * inner.bessel_i(0, scaled=True), -z * size * inner.bessel_i(1, scaled=True)

    return across


def flat_ratio(b, gap, width):
    """cos(p x)/cos(p width/2), gap = width/2 - x, and its slope in the gap."""

    def across(p):
        q = b.acb(0, 1) * p
        size, image = (q * gap).exp() / (1 + (q * width).exp()), (q * (width - 2 * gap)).exp()
        return size * (1 + image), q * size * (1 - image)

    return across


class Solver:
    """Value and gradient at a point, which come from one sum."""

    known = None, None

    def reaches(self, x):  # noqa: ARG002  # all points, if a solver says no other
        return True

    def value(self, x):
        return self.both(x)[0]

    def gradient(self, x):
        return self.both(x)[1]

    def both(self, x):
        if self.known[0] is not x:
            self.known = x, self.total(x)
        return self.known[1]


class Cylinder(Solver):
    """u and its gradient for constants on the bottom, the side and the top."""

    def __init__(self, b, f):
        self.b, self.f = b, f
        self.radius, self.z0, self.z1 = (b.number(f[name]) for name in ("radius", "z0", "z1"))

    def total(self, x):
        b, f, size = self.b, self.f, self.radius
        r = (x[0] ** 2 + x[1] ** 2).sqrt()
        gap = 1 - r / size
        value, across, along = b.number(f["side"]), b.arb(0), b.arb(0)
        for name, d, sign in (("bottom", x[2] - self.z0, 1), ("top", self.z1 - x[2], -1)):
            weight = b.number(f[name]) - b.number(f["side"])
            if weight == 0:
                continue
            u, out, down = hot_lid(b, gap, d / size, (self.z1 - self.z0) / size, round_ratio(b, gap))
            value, across, along = (
                value + weight * u,
                across - weight * out / size,
                along + sign * weight * down / size,
            )
        return value, [across * c / r if r > 0 else b.arb(0) for c in x[:2]] + [along]


class Box(Solver):
    """u and its gradient for a hot top."""

    def __init__(self, b, f):
        assert f["lower"] == [0, 0, 0]
        assert f["values"][:5] == [0] * 5
        self.b, self.extents, self.size = b, b.point(f["upper"]), b.number(f["values"][5])

    def depth(self, x):
        """The distances by which the three arrangements converge."""
        ends = [min(float(c.mid()), float((e - c).mid())) for c, e in zip(x, self.extents, strict=True)]
        return ends[0], ends[1], float((self.extents[2] - x[2]).mid())

    def reaches(self, x):
        return max(self.depth(x)) >= SERVES

    def total(self, x):
        depth = self.depth(x)
        best = max(range(3), key=lambda axis: depth[axis])
        value, slopes = self.from_top(x) if best == 2 else self.from_ends(x, best)
        return self.size * value, [self.size * slope for slope in slopes]

    def modes(self, x, axes, weight, profile, distance):
        """Sum of weight(m, n, p, q) sin(p x) sin(q y) profile(g) along two axes, and of its slopes."""
        b = self.b
        rates = [b.pi / self.extents[axis] for axis in axes]
        most = [math.ceil(LEFT / distance / float(rate.mid())) for rate in rates]
        waves = [
            [((m * rate * x[axis]).sin(), (m * rate * x[axis]).cos()) for m in range(most_ + 1)]
            for axis, rate, most_ in zip(axes, rates, most, strict=True)
        ]
        total = [b.arb(0)] * 4
        for m in range(1, most[0] + 1):
            for n in range(1, most[1] + 1):
                size = weight(m, n)
                p, q = m * rates[0], n * rates[1]
                if not size or float((p * p + q * q).mid()) * distance**2 > LEFT**2:
                    continue
                g = (p * p + q * q).sqrt()
                (s, c), (t, e) = waves[0][m], waves[1][n]
                along, slope = profile(g)
                size = size if isinstance(size, b.arb) else b.number(size)
                parts = (s * t * along, p * c * t * along, q * s * e * along, s * t * slope)
                total = [sum_ + size * part for sum_, part in zip(total, parts, strict=True)]
        slopes = [b.arb(0)] * 3
        slopes[axes[0]], slopes[axes[1]], slopes[3 - sum(axes)] = total[1:]
        return total[0], slopes

    def from_top(self, x):
        b, height = self.b, self.extents[2]

        def weight(m, n):
            return 16 / (b.pi**2 * m * n) if m % 2 and n % 2 else 0

        def profile(g):
            full = 1 - (-2 * g * height).exp()
            fall, image = (-g * (height - x[2])).exp() / full, (-2 * g * x[2]).exp()
            return fall * (1 - image), g * fall * (1 + image)

        return self.modes(x, (0, 1), weight, profile, self.depth(x)[2])

    def from_ends(self, x, axis):
        b, across = self.b, 1 - axis
        length, width, height = self.extents[axis], self.extents[across], self.extents[2]
        upper = bool(x[across] > width / 2)
        gap = width - x[across] if upper else x[across]
        value, out, down = hot_lid(b, gap, height - x[2], height, flat_ratio(b, gap, width))
        slopes = [b.arb(0)] * 3
        slopes[across], slopes[2] = -out if upper else out, -down

        def weight(m, n):
            if not m % 2:
                return 0
            p, q = m * b.pi / width, n * b.pi / height
            return 8 * (-1) ** (n + 1) / (b.pi**2 * m * n) * q**2 / (p**2 + q**2)

        def profile(g):
            full = 1 + (-g * length).exp()
            ahead, behind = (-g * x[axis]).exp() / full, (-g * (length - x[axis])).exp() / full
            return ahead + behind, g * (behind - ahead)

        rest, falls = self.modes(x, (across, 2), weight, profile, self.depth(x)[axis])
        return value - rest, [slope - fall for slope, fall in zip(slopes, falls, strict=True)]


SOLVERS = {"box-faces": Box, "cylinder-faces": Cylinder}


@pytest.fixture
def eighty(balls):
    """Fewer digits: nothing is differenced here."""
    import flint

    flint.ctx.dps = DIGITS
    return balls


@pytest.mark.slow
@pytest.mark.parametrize("id_", IDS)
def test_the_integral_between_the_series_gives_the_stored_values(id_, eighty, judge, case_content):
    content = case_content(id_)
    field, stored = content["exact"]["field"], content["stored"]
    found = SOLVERS[field["kind"]](eighty, field)
    reached = [entry for entry in stored if found.reaches(eighty.point(entry["point"]))]
    assert len(reached) >= CONFIRMATIONS[ROUTE].share * len(stored)
    left_out = [entry["place"] for entry in stored if entry not in reached]
    assert all("from the corner" in place and "0.7)" in place for place in left_out)  # of the box's hot top
    judge(ROUTE, id_, found.value, found.gradient, stored=reached)


def test_the_index_names_this_route_for_what_it_can_do():
    assert CONFIRMATIONS[ROUTE].kinds == set(SOLVERS)
    assert IDS


def entry_of(id_, point):
    """What a file would hold about a point."""
    exact = lv.catalogue[id_].exact
    value, slopes = exact.at(point, 50), exact.gradient_at(point, 50)
    numbers = {"value": mpmath.nstr(value, 50), "gradient": [mpmath.nstr(slope, 50) for slope in slopes]}
    return {"place": "", "point": point, "radius": "1e-50", "gradient_radius": "1e-44"} | numbers


def test_a_wrong_digit_is_seen(eighty, judge, misprinted):
    """The twin: the fortieth digit of a value, then of a slope, next to the rim."""
    near = entry_of("cylinder-hot-top", ("0.7999993", "0", "1.1999989"))
    found = Cylinder(eighty, lv.catalogue["cylinder-hot-top"].exact.spec())
    assert judge(ROUTE, "cylinder-hot-top", found.value, found.gradient, stored=[near]) == 4
    for entry in misprinted(near):
        with pytest.raises(AssertionError, match="against"):
            judge(ROUTE, "cylinder-hot-top", found.value, found.gradient, stored=[entry])


def test_another_box_does_not_give_the_stored_values(eighty, judge):
    """The twin: it is longer by a part in 1e40."""
    inside = entry_of("box-hot-top", ("0.5", "0.4", "0.3"))
    found = Box(eighty, lv.catalogue["box-hot-top"].exact.spec())
    assert judge(ROUTE, "box-hot-top", found.value, found.gradient, stored=[inside]) == 4
    found = Box(eighty, lv.catalogue["box-hot-top"].exact.spec())
    found.extents = [e * (1 + eighty.number("1e-40")) for e in found.extents]
    with pytest.raises(AssertionError, match="against"):
        judge(ROUTE, "box-hot-top", found.value, found.gradient, stored=[inside])
