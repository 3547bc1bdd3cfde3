"""The fourth referee: expansions about corners, summed in ball arithmetic from the coefficients in the file.

With z = (x + i y - corner) e^{-i start}/scale, u is the sum over corners of Im or Re of c_j z^{lambda_j} and
l_n z^n log z plus a polynomial, term by term, without Horner's rule, in complex balls. For a fit this is its
formula; that the formula meets the conditions is looked at along the boundary, |u - data| on Dirichlet sides
and |du/dn - data| on others, at points the fit did not use. By the maximum principle their size is that of
the error of the fit.
"""

import json
import math
from fractions import Fraction
from pathlib import Path

import pytest

import laplace_verify as lv
from laplace_verify.cases import corner_fits
from laplace_verify.references import CONFIRMATIONS, confirmation_of

ROUTE = "expansions"
IDS = [id_ for id_, case in lv.catalogue.items() if (confirmation_of(case) or ("",))[0] == ROUTE]
FITTED = [id_ for id_ in IDS if id_ in corner_fits.FITS]
LOOKED = 5  # points of a side


def angle(b, start, stop):
    """From start counter-clockwise to stop, in (0, 2 pi]."""
    turn = b.acb(*b.point(stop)) / b.acb(*b.point(start))
    if start == stop:
        return 2 * b.pi
    found = b.arb.atan2(turn.imag, turn.real)
    return found if found > 0 else found + 2 * b.pi


def value(b, f, x):
    """u at a point, lips of cuts apart."""
    corners, (re, im, centre, size) = f["precise"]
    t = b.acb(x[0] - b.number(centre[0]), x[1] - b.number(centre[1])) / b.number(size)
    total, power = b.arb(0), b.acb(1)
    for n in range(max(len(re), len(im))):
        total += b.number(re[n]) * power.real if n < len(re) else 0
        total += b.number(im[n]) * power.imag if n < len(im) else 0
        power *= t
    for apex, start, stop, kinds, scale, coefficients, logs in corners:
        opening = angle(b, start, stop)
        direction = b.acb(*b.point(start))
        z = (
            b.acb(x[0] - b.number(apex[0]), x[1] - b.number(apex[1]))
            / direction
            * abs(direction)
            / b.number(scale)
        )
        phi = b.arb.atan2(z.imag, z.real)
        turns = math.floor((float((opening / 2 + b.pi - phi).mid())) / (2 * math.pi))
        log = b.acb(abs(z).log(), phi + 2 * b.pi * turns)
        sine, mixed = kinds[0] == "d", kinds[0] != kinds[1]
        step = (log * b.pi / opening).exp()
        power = (log * b.pi / opening / 2).exp() if mixed else step
        for text in coefficients:
            total += b.number(text) * (power.imag if sine else power.real) if text not in ("0", "0.0") else 0
            power *= step
        for n, text in logs:
            term = z**n * log
            total += b.number(text) * (term.imag if sine else term.real)
    return total


@pytest.mark.slow
@pytest.mark.parametrize("id_", IDS)
def test_expansions_give_the_stored_values(id_, balls, judge, case_content):
    field = case_content(id_)["exact"]["field"]
    judge(ROUTE, id_, lambda x: value(balls, field, x))


@pytest.mark.slow
@pytest.mark.parametrize("id_", FITTED)
def test_a_fit_meets_its_conditions_along_the_boundary(id_, balls):
    """Within the published radius on Dirichlet sides, a thousand times it for slopes on Neumann sides."""
    field = lv.catalogue[id_].exact.spec()
    fit = corner_fits.FITS[id_]
    radius = balls.number(field["radius"])
    corners = [[Fraction(c) for c in v] for v in fit.vertices]
    for k, side in enumerate(fit.sides):
        (ax, ay), (bx, by) = corners[k], corners[(k + 1) % len(corners)]
        length = math.hypot(bx - ax, by - ay)
        normal = [float(by - ay) / length, -float(bx - ax) / length]
        for i in range(LOOKED):
            share = Fraction(2 * i + 1, 2 * LOOKED) + Fraction(1, 97)
            x, y = ax + share * (bx - ax), ay + share * (by - ay)
            data = balls.number(eval(side.data, {"x": x, "y": y}))  # a formula of our own sources
            inwards = [
                balls.number(c) - balls.number("1e-60") * balls.number(n)
                for c, n in zip((x, y), normal, strict=True)
            ]
            if side.kind == "dirichlet":
                assert abs(value(balls, field, inwards) - data) <= radius + balls.number("1e-55"), (k, i)
            else:
                slopes = balls.slopes(lambda p: value(balls, field, p), inwards)
                flow = sum((s * balls.number(n) for s, n in zip(slopes, normal, strict=True)), balls.arb(0))
                assert abs(flow - data) <= 1000 * radius + balls.number("1e-30"), (k, i)


def test_a_changed_coefficient_is_seen(balls, judge, case_content):
    """The twin: the first power of the cracked bar, a unit in its thirtieth digit."""
    made = case_content("cracked-bar")
    field = json.loads(json.dumps(made["exact"]["field"]))
    coefficients = field["precise"][0][0][5]
    coefficients[0] = str(Fraction(coefficients[0]) + Fraction(1, 10**30))
    with pytest.raises(AssertionError, match="against"):
        judge(ROUTE, "cracked-bar", lambda x: value(balls, field, x), stored=made["stored"][3:5])


def test_the_index_names_this_route_for_what_it_can_do():
    assert CONFIRMATIONS[ROUTE].kinds == {"corner-powers"}
    assert len(FITTED) == len(list(Path(corner_fits.FOLDER).glob("*.json")))
