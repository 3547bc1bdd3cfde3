"""What the referees share: numbers of a case file as balls, and how a route is held against stored values."""

import json
import math
from fractions import Fraction

import pytest

import laplace_verify as lv
from laplace_verify.cases import case_file
from laplace_verify.references import CONFIRMATIONS

DIGITS = 150  # of the balls
ZERO = "1e-100"  # what cancellation may leave of a number that is zero
STEP = "1e-45"  # of differences, which leave an error of 1e-90 times a third derivative


class Balls:
    """Ball arithmetic, real `arb` and complex `acb`, and numbers of a case file as exact balls.

    `kinds` are the formulas of a route, by kind of field; `COMPOSED` are those made of other fields.
    """

    def __init__(self, flint):
        self.kinds = {}
        self.arb, self.acb, self.fmpq, self.matrix = flint.arb, flint.acb, flint.fmpq, flint.acb_mat
        self.pi = flint.arb.pi()
        self.met = {}

    def number(self, given):
        """Whole, a decimal or a fraction in a string, or the binary value of a float."""
        if given not in self.met:
            exact = Fraction(given)
            self.met[given] = self.arb(self.fmpq(exact.numerator, exact.denominator))
        return self.met[given]

    def point(self, given):
        return [self.number(c) for c in given]

    def value(self, f, x):
        """u of a field of a file at a point."""
        return (COMPOSED | self.kinds)[f["kind"]](self, f, x)

    def norm(self, x):
        return sum((c * c for c in x[1:]), x[0] * x[0]).sqrt()

    def away(self, x, centre):
        return [c - self.number(p) for c, p in zip(x, centre, strict=True)]

    def multipole(self, f, w):
        """Re or Im of w^-n, log |w| for n = 0; w maps the outside of a body onto |w| > 1."""
        if f["n"] == 0:
            return abs(w).log()
        power = w ** -f["n"]
        return power.real if f["part"] == "re" else power.imag

    def flow(self, f, w, capacity):
        """Re or Im of c (conj(V) w + V/w) - i G/(2 pi) log w."""
        stream = self.acb(*self.point(f["velocity"]))
        potential = (
            capacity * (stream.conjugate() * w + stream / w)
            - self.acb(0, 1) * self.number(f["circulation"]) / (2 * self.pi) * w.log()
        )
        return potential.real if f["part"] == "potential" else potential.imag

    def slopes(self, value, point):
        """The gradient by central differences."""
        step, found = self.number(STEP), []
        for axis in range(len(point)):
            ahead, behind = list(point), list(point)
            ahead[axis], behind[axis] = point[axis] + step, point[axis] - step
            found.append((value(ahead) - value(behind)) / (2 * step))
        return found

    def agree(self, number, text, radius, scale, digits):
        """Whether a ball holds the stored number within its radius and half a unit of the claimed digits."""
        claimed = self.number(scale) * self.number(f"1e-{digits}") / 2
        room = self.number(radius) + claimed + self.number(ZERO)
        return bool(abs(number - self.number(text)) <= room)


def affine(b, f, x):
    return sum((b.number(a) * c for a, c in zip(f["coefficients"], x, strict=True)), b.number(f["constant"]))


def combination(b, f, x):
    return sum((b.number(c) * b.value(g, x) for c, g in zip(f["factors"], f["terms"], strict=True)), b.arb(0))


def shifted(b, f, x):
    return b.value(f["field"], b.away(x, f["vector"]))


def inverted(b, f, x):
    """Kelvin's transform."""
    offset, radius = b.away(x, f["centre"]), b.number(f["radius"])
    r = b.norm(offset)
    image = [b.number(p) + radius**2 * c / r**2 for p, c in zip(f["centre"], offset, strict=True)]
    return b.value(f["field"], image) * (radius / r if len(x) == 3 else 1)


def stretched(b, f, x):
    """u(K^(-1/2) x), the root from the eigenvectors."""
    rows = [[b.number(k) for k in row] for row in f["tensor"]]
    if all(k == 0 for i, row in enumerate(f["tensor"]) for j, k in enumerate(row) if i != j):
        return b.value(f["field"], [c / rows[i][i].sqrt() for i, c in enumerate(x)])
    roots, vectors = b.matrix([[b.acb(k) for k in row] for row in rows]).eig(right=True, algorithm="rump")
    d = len(x)
    scale = b.matrix(d, d, [1 / roots[i].sqrt() if i == j else b.acb(0) for i in range(d) for j in range(d)])
    image = vectors * scale * vectors.inv() * b.matrix(d, 1, [b.acb(c) for c in x])
    return b.value(f["field"], [image[i, 0].real for i in range(d)])


def scaled(b, f, x):
    return b.value(f["field"], [c / b.number(f["factor"]) for c in x])


def along_z(b, f, x):
    return (b.number(f["level"]) + b.number(f["slope"]) * x[2]) * b.value(f["field"], x[:2])


def axisymmetric(b, f, x):
    return b.value(f["field"], [x[0], b.arb(0), x[1]])


def coaxial(b, f, x):
    return b.value(f["radial"], x[:1])


def regions(b, f, x):
    """The part of the region a point lies in; the walls are no stored points."""
    p = f["partition"]
    if p["partition"] == "layers":
        along = sum((b.number(d) * c for d, c in zip(p["direction"], x, strict=True)), b.arb(0))
        index = sum(bool(along > b.number(wall)) for wall in p["positions"])
    elif p["partition"] == "shells":
        r = b.norm(b.away(x, p["centre"]))
        index = sum(bool(r > b.number(wall)) for wall in p["radii"])
    else:
        offset = [float(c.mid()) for c in b.away(x, p["apex"])]
        angle = math.atan2(offset[1], offset[0])
        rays = [math.atan2(float(Fraction(ray[1])), float(Fraction(ray[0]))) for ray in p["rays"]]
        index = min(range(len(rays)), key=lambda k: (angle - rays[k]) % (2 * math.pi))
    return b.value(f["parts"][index], x)


COMPOSED = {
    "affine": affine, "along-z": along_z, "axisymmetric": axisymmetric, "coaxial": coaxial,
    "inverted": inverted, "regions": regions, "scaled": scaled, "shifted": shifted,
    "stretched": stretched, "sum": combination,
}  # fmt: skip


@pytest.fixture
def balls():
    """Ball arithmetic in many digits during a test."""
    flint = pytest.importorskip("flint")
    before = flint.ctx.dps
    flint.ctx.dps = DIGITS
    yield Balls(flint)
    flint.ctx.dps = before


@pytest.fixture
def judge(balls):
    """Hold value and gradient of a route against the file of a case; give how many numbers agree."""

    def judged(route, id_, value, gradient=None, stored=None):
        claim, agreed = CONFIRMATIONS[route], 0
        least = 0 if claim.counted == "significant" else 1
        for entry in stored or content(id_)["stored"]:
            point = balls.point(entry["point"])
            found = value(point)
            slopes = gradient(point) if gradient else balls.slopes(value, point)
            steep = max(least, *(abs(Fraction(text)) for text in entry["gradient"]))
            given = [(found, entry["value"], entry["radius"], max(least, abs(Fraction(entry["value"]))))]
            given += [
                (slope, text, entry["gradient_radius"], steep)
                for slope, text in zip(slopes, entry["gradient"], strict=True)
            ]
            for number, text, radius, scale in given:
                where = f"{id_} {entry['place']} {entry['point']}: {number} against {text}"
                assert balls.agree(number, text, radius, scale, claim.digits), where
                agreed += 1
        return agreed

    return judged


@pytest.fixture
def inside():
    """The entries off the boundary, on which kernels are infinite and maps fold."""

    def entries(id_, stored):
        depth = lv.catalogue[id_].problem.shape.distance([[float(c) for c in e["point"]] for e in stored])
        return [entry for entry, d in zip(stored, depth, strict=True) if d > 1e-9]

    return entries


@pytest.fixture
def misprinted():
    """Entries of a file with one digit changed: the value's, then the steepest slope's."""

    def changed(text, digit):
        places = [k for k, c in enumerate(text) if c.isdigit()]
        leading = next(n for n, k in enumerate(places) if text[k] != "0")
        k = places[leading + digit - 1]
        return text[:k] + ("3" if text[k] != "3" else "4") + text[k + 1 :]

    def entries(entry, digit=40):
        axis = max(range(len(entry["gradient"])), key=lambda k: abs(Fraction(entry["gradient"][k])))
        slopes = list(entry["gradient"])
        slopes[axis] = changed(slopes[axis], digit)
        return entry | {"value": changed(entry["value"], digit)}, entry | {"gradient": slopes}

    return entries


@pytest.fixture
def composed():
    """The kinds of field that are made of others, and the affine one."""
    return frozenset(COMPOSED)


def content(id_):
    """The file of a case as the sources write it."""
    return json.loads(case_file(id_))


@pytest.fixture
def case_content():
    return content
