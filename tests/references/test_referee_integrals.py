"""The second referee: rigorous quadrature of Poisson's and Laplace's integrals, from the conditions alone.

*Rectangle*, 0 < x < a, with data f on the side d = 0, zero on d = b and zero (-) or insulated (+) sides x = 0
and x = a: u = Re of

    integral over 0 < t < a of f(t) sum over all j of [k(d + i(x - t + 2 a j)) +- k(d + i(x + t + 2 a j))] dt,
    k(s) = cot(pi s/2b)/2b,

because Re k is Poisson's kernel of the strip 0 < d < b, which is mirrored in the sides (derived here). The
images next to the rectangle are integrated one by one. Those far away are summed: with k = -+ i/2b (1 + 2 sum
over n of exp(+- i n pi s/b)) above and below and q = exp(-2 pi a/b),

    sum over j >= 1 of [k(s + 2 a i j) + k(s - 2 a i j)] = (2/b) sum over n of q^n/(1 - q^n) sin(n pi s/b),

likewise with odd multiples of a from 3 on, q^(3n/2)/(1 - q^n), about s = d + i(x + t - a).

*Axial symmetry*: u(r, z) = (1/pi) integral over 0 < t < pi of U(z + i r cos t) dt, where U is u on the axis
(Laplace; Whittaker & Watson 1927, A Course of Modern Analysis, section 18.3, from memory, unchecked). For a
ball with unit data on its upper half U(s) = 1/2 + s (1 + 1/(1 + q))/(2 q), q = sqrt(1 + s^2), for a
half-space with unit data on a disc U(s) = 1 - s/sqrt(1 + s^2), both from Poisson's integral on the axis, unit
radius.

Gradients are the integrals of the derivatives. `b` is the ball arithmetic, `f` a field of a file.
"""

import math
from functools import partial

import pytest

import laplace_verify as lv
from laplace_verify.references import CONFIRMATIONS, confirmation_of

ROUTE = "integrals"
IDS = [id_ for id_, case in lv.catalogue.items() if (confirmation_of(case) or ("",))[0] == ROUTE]
DIGITS = 60
GOAL = 1e-54  # of one integral
DEEP = 8 * DIGITS  # halvings that quadrature may take: points lie close to the boundary


def integral(b, integrand, start, stop):
    return b.acb.integral(
        lambda t, _: integrand(t), start, stop, rel_tol=GOAL, abs_tol=GOAL, depth_limit=DEEP, eval_limit=10**6
    )


# -- rectangle ---------------------------------------------------------------------------------------------


class Rectangle:
    """u and its gradient for piecewise polynomial data on one side of a rectangle."""

    def __init__(self, b, f):
        self.b, self.side = b, f["side"]
        lower, upper = b.point(f["lower"]), b.point(f["upper"])
        across = 0 if self.side in ("top", "bottom") else 1  # the axis along the data
        self.across, self.origin = across, lower[across]
        self.base = (upper if self.side in ("top", "right") else lower)[1 - across]
        self.a, self.depth = upper[across] - lower[across], upper[1 - across] - lower[1 - across]
        self.sign = 1 if f["neighbours"] == "insulated" else -1
        assert f["far"] == "zero"
        self.breaks = [b.number(t) - self.origin for t in f["breaks"]]
        self.data = [partial(b_polynomial, b.point(c), start) for c, start in zip(
            f["coefficients"], self.breaks, strict=False
        )]  # fmt: skip
        slender = float((b.pi * self.a / self.depth).mid())
        count = range(1, math.ceil(DIGITS * math.log(10) / slender) + 3)
        q = (-2 * b.pi * self.a / self.depth).exp()
        self.even = [q**n / (1 - q**n) for n in count]
        self.odd = [(-3 * n * b.pi * self.a / self.depth).exp() / (1 - q**n) for n in count]

    def local(self, x):
        """Distance along the side and from it."""
        return x[self.across] - self.origin, abs(self.base - x[1 - self.across])

    def near(self, s, slope):
        """k(s) or its derivative."""
        rate = self.b.pi / (2 * self.depth)
        return (
            -rate / ((rate * s).sin() ** 2 * 2 * self.depth) if slope else (rate * s).cot() / (2 * self.depth)
        )

    def far(self, s, slope, weights):
        """(2/b) sum of weights sin(n pi s/b), or its derivative."""
        rate = self.b.pi / self.depth
        up = (self.b.acb(0, 1) * rate * s).exp()
        down, above, below = 1 / up, self.b.acb(0), self.b.acb(0)
        for n in range(len(weights), 0, -1):
            weight = weights[n - 1] * (n * rate if slope else 1)
            above, below = (above + weight) * up, (below + weight) * down
        half = above + below if slope else (above - below) / self.b.acb(0, 1)
        return half / self.depth

    def total(self, x, d, slope):
        """Integrate over all pieces: three images that may be close, one by one, and the others."""
        i, a, sign = self.b.acb(0, 1), self.a, self.sign
        kernels = (
            lambda t: self.near(d + i * (x - t), slope),
            lambda t: sign * self.near(d + i * (x + t), slope),
            lambda t: sign * self.near(d + i * (x + t - 2 * a), slope),
            lambda t: (
                self.far(d + i * (x - t), slope, self.even)
                + sign * self.far(d + i * (x + t - a), slope, self.odd)
            ),
        )
        return sum(
            (
                integral(self.b, lambda t, f=f, k=kernel: f(t) * k(t), start, stop)
                for kernel in kernels
                for f, start, stop in zip(self.data, self.breaks, self.breaks[1:], strict=False)
            ),
            self.b.acb(0),
        )

    def value(self, x):
        return self.height(*self.local(x))

    def gradient(self, x):
        along, inwards = self.slopes(*self.local(x))
        inwards = -inwards if self.side in ("top", "right") else inwards
        return [along, inwards] if self.across == 0 else [inwards, along]

    def height(self, x, d):
        return self.total(x, d, slope=False).real

    def slopes(self, x, d):
        """d/dx and d/dd of Re F(d + i x) are -Im F' and Re F'."""
        slope = self.total(x, d, slope=True)
        return -slope.imag, slope.real


class Convection(Rectangle):
    """Convection on the far side adds modes that start there: u = u_0 + sum of A_n c_n sinh(k d) sin(k x).

    A_n are integrals of the data, and c_n is what is left of the mode on the far side, k/((k cosh kb + H sinh
    kb) sinh kb); cosines and the mean, with c_0 d = d/(b (1 + H b)), between insulated sides (derived here).
    """

    def __init__(self, b, f):
        super().__init__(b, f | {"far": "zero"})
        assert f["far"] == "insulated"
        H, depth, cosine = b.number(f["transfer"]), self.depth, self.sign > 0
        self.wave, self.turned = ("cos", "sin") if cosine else ("sin", "cos")
        self.mean = (
            self.against(lambda t: b.acb(1)) / self.a / (depth * (1 + H * depth)) if cosine else b.arb(0)
        )
        self.modes = []
        for n in range(1, math.ceil(DIGITS * math.log(10) / float((b.pi * depth / self.a).mid())) + 3):
            k = n * b.pi / self.a
            size = 2 * self.against(lambda t, k=k: getattr(k * t, self.wave)()) / self.a
            far = k * (k * depth).cosh() + H * (k * depth).sinh()
            self.modes.append((k, size * k / (far * (k * depth).sinh())))

    def against(self, wave):
        """The integral of the data times a wave."""
        pieces = zip(self.data, self.breaks, self.breaks[1:], strict=False)
        return sum(integral(self.b, lambda t, f=f: f(t) * wave(t), *ends).real for f, *ends in pieces)

    def height(self, x, d):
        return (
            super().height(x, d)
            + self.mean * d
            + sum(c * getattr(k * x, self.wave)() * (k * d).sinh() for k, c in self.modes)
        )

    def slopes(self, x, d):
        along, inwards = super().slopes(x, d)
        for k, c in self.modes:
            along += -self.sign * k * c * getattr(k * x, self.turned)() * (k * d).sinh()
            inwards += k * c * getattr(k * x, self.wave)() * (k * d).cosh()
        return along, inwards + self.mean


def b_polynomial(coefficients, start, t):
    return sum((c * (t - start) ** n for n, c in enumerate(coefficients)), 0 * t)


def exponential(b, f):
    """Data height exp(rate t), t the fraction of the side."""
    ends = [f["lower"][0], f["upper"][0]]
    assert f["side"] == "top"
    made = Rectangle(b, f | {"breaks": ends, "coefficients": [[0]]})
    made.data = [lambda t: b.number(f["height"]) * (b.number(f["rate"]) * t / made.a).exp()]
    return made


class FourSides:
    """The sum of four rectangles with data on one side and zero on the others."""

    def __init__(self, b, f):
        names = ("left", "right", "bottom", "top")
        common = {"lower": f["lower"], "upper": f["upper"], "neighbours": "zero", "far": "zero"}
        self.parts = [
            Rectangle(b, common | {"side": name, "breaks": breaks, "coefficients": coefficients})
            for name, breaks, coefficients in zip(names, f["breaks"], f["coefficients"], strict=True)
        ]

    def value(self, x):
        return sum((part.value(x) for part in self.parts[1:]), self.parts[0].value(x))

    def gradient(self, x):
        slopes = [part.gradient(x) for part in self.parts]
        return [sum(s[k] for s in slopes[1:]) + slopes[0][k] for k in (0, 1)]


# -- axial symmetry ----------------------------------------------------------------------------------------


class Axial:
    """u and its gradient from the values on the axis, unit radius."""

    def __init__(self, b, f, axis, axis_slope):
        self.b, self.radius, self.axis, self.axis_slope = b, b.number(f["radius"]), axis, axis_slope
        self.centre = b.point(f["centre"])
        self.base, self.jump = (
            b.number(f.get("lower", 0)),
            b.number(f.get("upper", 1)) - b.number(f.get("lower", 0)),
        )

    def local(self, x):
        offset = [c - p for c, p in zip(x, [*self.centre, 0][:3], strict=True)]
        return offset, (offset[0] ** 2 + offset[1] ** 2).sqrt() / self.radius, offset[2] / self.radius

    def total(self, r, z, term):
        i = self.b.acb(0, 1)
        half = integral(
            self.b, lambda t: term(z + i * r * t.cos(), i * t.cos()), self.b.arb(0), self.b.pi / 2
        )
        rest = integral(self.b, lambda t: term(z + i * r * t.cos(), i * t.cos()), self.b.pi / 2, self.b.pi)
        return (half + rest).real / self.b.pi

    def value(self, x):
        _, r, z = self.local(x)
        return self.base + self.jump * self.total(r, z, lambda s, _: self.axis(s))

    def gradient(self, x):
        offset, r, z = self.local(x)
        size = self.jump / self.radius
        across = size * self.total(r, z, lambda s, turned: self.axis_slope(s) * turned)
        along = size * self.total(r, z, lambda s, _: self.axis_slope(s))
        rho = r * self.radius
        return [across * offset[0] / rho, across * offset[1] / rho, along] if rho > 0 else [rho, rho, along]


def hemispheres(b, f):
    def axis(s):
        q = (1 + s * s).sqrt()
        return b.acb(1) / 2 + s * (1 + 1 / (1 + q)) / (2 * q)

    def slope(s):  # of s/(2 q) + s/(2 q (1 + q)), where dq/ds = s/q
        q = (1 + s * s).sqrt()
        return 1 / (2 * q**3) + (1 / (q * (1 + q)) - s * s * (1 + 2 * q) / (q**3 * (1 + q) ** 2)) / 2

    return Axial(b, f, axis, slope)


def loaded_disc(b, f):
    assert f["given"] == "value"
    return Axial(b, f, lambda s: 1 - s / (1 + s * s).sqrt(), lambda s: -1 / (1 + s * s).sqrt() ** 3)


SOLVERS = {
    "hemispheres": hemispheres, "loaded-disc": loaded_disc, "rectangle-convection": Convection,
    "rectangle-exponential": exponential, "rectangle-pieces": Rectangle, "rectangle-sides": FourSides,
}  # fmt: skip


@pytest.fixture
def sixty(balls):
    """Fewer digits: nothing is differenced here."""
    import flint

    flint.ctx.dps = DIGITS
    return balls


@pytest.mark.slow
@pytest.mark.parametrize("id_", IDS)
def test_integrals_of_the_data_give_the_stored_values(id_, sixty, judge, case_content, inside):
    made = case_content(id_)
    solver = SOLVERS[made["exact"]["field"]["kind"]](sixty, made["exact"]["field"])
    entries = inside(id_, made["stored"])
    assert len(entries) >= CONFIRMATIONS[ROUTE].share * len(made["stored"])
    judge(ROUTE, id_, solver.value, solver.gradient, stored=entries)


def test_the_index_names_this_route_for_what_it_can_do():
    assert CONFIRMATIONS[ROUTE].kinds == set(SOLVERS)


def test_a_wrong_digit_is_seen(sixty, judge, case_content, misprinted):
    """The twin: the fortieth digit of a value, then of a slope."""
    made = case_content("plate-hot-floor-windy-top")
    solver = Convection(sixty, made["exact"]["field"])
    for entry in misprinted(made["stored"][0]):
        with pytest.raises(AssertionError, match="against"):
            judge(ROUTE, "plate-hot-floor-windy-top", solver.value, solver.gradient, stored=[entry])


def test_other_data_do_not_give_the_stored_values(sixty, judge, case_content):
    """The twin: the hot spot is larger by a part in 1e40."""
    made = case_content("warm-spot-on-bed")
    spot = loaded_disc(sixty, made["exact"]["field"])
    spot.radius = spot.radius * (1 + sixty.number("1e-40"))
    with pytest.raises(AssertionError, match="against"):
        judge(ROUTE, "warm-spot-on-bed", spot.value, spot.gradient, stored=made["stored"][3:4])
