"""The second referee: rigorous quadrature of Poisson's and Laplace's integrals, from the conditions alone.

*Rectangle* with data f on one side. In the half-strip 0 < x < a, d > 0 with S = f on d = 0 and zero (-) or
insulated (+) long sides, S = Re C,

    C(x, d) = integral over 0 < t < a of f(t) [k(d + i(x - t)) +- k(d + i(x + t))] dt,
    k(s) = coth(pi s/2a)/2a,

because k sums Poisson's kernel of the half-plane over the mirror images in the long sides (derived here).
The opposite side, at d = b, is zero and mirrors once more: u = sum over j >= 0 of S(d + 2 j b) -
S(2 (j + 1) b - d). Between insulated sides the mean of f, whose images cancel in pairs, adds its own solution
mean (1 - d/b).

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
        self.even = f["neighbours"] == "insulated"
        assert f["far"] == "zero"
        self.breaks = [b.number(t) - self.origin for t in f["breaks"]]
        self.data = [partial(b_polynomial, b.point(c), start) for c, start in zip(
            f["coefficients"], self.breaks, strict=False
        )]  # fmt: skip
        self.count = (
            math.ceil(DIGITS * math.log(10) * float(self.a.mid()) / (2 * math.pi * float(self.depth.mid())))
            + 3
        )

    def local(self, x):
        """Distance along the side and from it."""
        return x[self.across] - self.origin, abs(self.base - x[1 - self.across])

    def kernel(self, s, derivative):
        rate = self.b.pi / (2 * self.a)
        half = s * rate
        return -rate / (half.sinh() ** 2 * 2 * self.a) if derivative else half.coth() / (2 * self.a)

    def images(self, x, d):
        """Yield arguments s(t) of the kernel, its sign and that of ds/dd: the near ones first."""
        i, mirrored = self.b.acb(0, 1), 1 if self.even else -1
        for j in range(self.count):
            for depth, turn in ((d + 2 * j * self.depth, 1), (2 * (j + 1) * self.depth - d, -1)):
                yield (lambda t, z=depth: z + i * (x - t)), turn, turn
                yield (lambda t, z=depth: z + i * (x + t)), turn * mirrored, turn

    def total(self, x, d, term):
        """Integrate over all pieces and images; the first four images, which may be close, one by one."""
        images, result = list(self.images(x, d)), self.b.acb(0)
        for group in [[image] for image in images[:4]] + [images[4:]]:
            for k, data in enumerate(self.data):

                def integrand(t, group=group, data=data):
                    return data(t) * sum((term(image, t) for image in group), self.b.acb(0))

                result += integral(self.b, integrand, self.breaks[k], self.breaks[k + 1])
        return result.real

    def value(self, x):
        along, d = self.local(x)
        mean = self.mean() * (1 - d / self.depth)
        return mean + self.total(along, d, lambda image, t: image[1] * self.kernel(image[0](t), False))

    def mean(self):
        """Of the data between insulated sides; 0 between cold ones."""
        parts = (
            integral(
                self.b, lambda t, data=data: self.b.acb(data(t)), self.breaks[k], self.breaks[k + 1]
            ).real
            for k, data in enumerate(self.data if self.even else ())
        )
        return sum(parts, self.b.arb(0)) / self.a

    def gradient(self, x):
        along, d = self.local(x)
        i = self.b.acb(0, 1)
        slope_d = -self.mean() / self.depth + self.total(
            along, d, lambda m, t: m[1] * m[2] * self.kernel(m[0](t), True)
        )
        slope_x = self.total(along, d, lambda m, t: m[1] * i * self.kernel(m[0](t), True))
        inwards = -slope_d if self.side in ("top", "right") else slope_d
        return [slope_x, inwards] if self.across == 0 else [inwards, slope_x]


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
    "hemispheres": hemispheres, "loaded-disc": loaded_disc,
    "rectangle-exponential": exponential, "rectangle-pieces": Rectangle, "rectangle-sides": FourSides,
}  # fmt: skip


@pytest.fixture
def sixty(balls):
    """Fewer digits: nothing is differenced here."""
    import flint

    flint.ctx.dps = DIGITS
    return balls


def inside(case, stored):
    """The entries off the boundary, on which the kernels are infinite."""
    points = [[float(c) for c in entry["point"]] for entry in stored]
    depth = case.problem.shape.distance(points)
    return [entry for entry, d in zip(stored, depth, strict=True) if d > 1e-9]


@pytest.mark.slow
@pytest.mark.parametrize("id_", IDS)
def test_integrals_of_the_data_give_the_stored_values(id_, sixty, judge, case_content):
    made = case_content(id_)
    solver = SOLVERS[made["exact"]["field"]["kind"]](sixty, made["exact"]["field"])
    entries = inside(lv.catalogue[id_], made["stored"])
    assert len(entries) >= CONFIRMATIONS[ROUTE].share * len(made["stored"])
    judge(ROUTE, id_, solver.value, solver.gradient, stored=entries)


def test_the_index_names_this_route_for_what_it_can_do():
    assert CONFIRMATIONS[ROUTE].kinds == set(SOLVERS)


def test_other_data_do_not_give_the_stored_values(sixty, judge, case_content):
    """The twin: the hot spot is larger by a part in 1e40."""
    made = case_content("warm-spot-on-bed")
    spot = loaded_disc(sixty, made["exact"]["field"])
    spot.radius = spot.radius * (1 + sixty.number("1e-40"))
    with pytest.raises(AssertionError, match="against"):
        judge(ROUTE, "warm-spot-on-bed", spot.value, spot.gradient, stored=made["stored"][3:4])
