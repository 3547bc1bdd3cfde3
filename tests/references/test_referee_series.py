"""The third referee: an eigenfunction expansion where the fields sum image charges.

*Two spheres* of radius R, h = R cosh m above and below the origin: in bispherical coordinates (e, t)

    u = sqrt(2 (cosh e - cos t)) sum over n of exp(-(n + 1/2) m) P_n(cos t)
        [V_1 sinh((n + 1/2)(m + e)) + V_2 sinh((n + 1/2)(m - e))]/sinh((2 n + 1) m)

(Morse & Feshbach 1953, Methods of Theoretical Physics, section 10.3, from memory, unchecked).
"""

import math

import pytest

import laplace_verify as lv
from laplace_verify.references import CONFIRMATIONS, confirmation_of

ROUTE = "series"
IDS = [id_ for id_, case in lv.catalogue.items() if (confirmation_of(case) or ("",))[0] == ROUTE]


class Spheres:
    """u around two spheres; the gradient is left to differences."""

    def __init__(self, b, f):
        assert f["centre"] == [0, 0, 0]
        self.b, self.radius = b, b.number(f["radius"])
        self.volts = b.point(f["potentials"])
        height = self.radius + b.number(f["gap"]) / 2
        self.d2, self.m = height**2 - self.radius**2, (height / self.radius).acosh()

    def value(self, x):
        b, square = self.b, sum((c * c for c in x), self.b.arb(0))
        d = self.d2.sqrt()
        below = ((square + self.d2) ** 2 - 4 * self.d2 * x[2] ** 2).sqrt()
        cosh, cosine = (square + self.d2) / below, (square - self.d2) / below
        e = (2 * d * x[2] / (square + self.d2)).atanh()
        total = b.arb(0)
        for n in range(math.ceil(math.log(10) * 120 / float((2 * self.m - abs(e)).mid()))):
            k = b.arb(2 * n + 1) / 2
            both = self.volts[0] * (k * (self.m + e)).sinh() + self.volts[1] * (k * (self.m - e)).sinh()
            total += (-k * self.m).exp() * cosine.legendre_p(n) * both / (2 * k * self.m).sinh()
        return (2 * (cosh - cosine)).sqrt() * total


@pytest.mark.slow
@pytest.mark.parametrize("id_", IDS)
def test_series_give_the_stored_values(id_, balls, judge, case_content):
    made = case_content(id_)
    judge(ROUTE, id_, Spheres(balls, made["exact"]["field"]).value)


def test_the_index_names_this_route_for_what_it_can_do():
    assert CONFIRMATIONS[ROUTE].kinds == {"sphere-pair"}
    assert IDS


@pytest.mark.slow
def test_other_potentials_do_not_give_the_stored_values(balls, judge, case_content):
    """The twin: the lower sphere has a little more than nothing."""
    made = case_content("two-spheres-unlike")
    spheres = Spheres(balls, made["exact"]["field"] | {"potentials": [1, "1e-30"]})
    with pytest.raises(AssertionError, match="against"):
        judge(ROUTE, "two-spheres-unlike", spheres.value, stored=made["stored"][:2])
