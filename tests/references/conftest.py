"""What the referees share: numbers of a case file as balls, and how a route is held against stored values."""

import json
from fractions import Fraction

import pytest

from laplace_verify.cases import case_file
from laplace_verify.references import CONFIRMATIONS

DIGITS = 150  # of the balls
ZERO = "1e-100"  # what cancellation may leave of a number that is zero
STEP = "1e-45"  # of differences, which leave an error of 1e-90 times a third derivative


class Balls:
    """Ball arithmetic, real `arb` and complex `acb`, and numbers of a case file as exact balls."""

    def __init__(self, flint):
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


def content(id_):
    """The file of a case as the sources write it."""
    return json.loads(case_file(id_))


@pytest.fixture
def case_content():
    return content
