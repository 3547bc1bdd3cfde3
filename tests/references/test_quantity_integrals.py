"""Fifty digits of integrals over the boundary, against the same integrals worked out by hand (derived here).

Energies by hand are integrals of K |grad u|^2 over the shape; the digits come from its boundary.
"""

from __future__ import annotations

import math
from dataclasses import replace
from fractions import Fraction

import mpmath
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.problems.closed_forms import closed_form
from laplace_verify.references.exact_pieces import angle_as_written, exact_piece, written
from laplace_verify.references.quantity_digits import with_quantity_digits
from laplace_verify.references.refined_quadrature import Tolerance, along, around, over

ENERGY = lv.energy_of_solution()
DISC = lv.Disc((0.0, 0.0), 0.7)
THREE_QUARTERS = lv.Sector(0.9, 1.5 * math.pi)
PLATE = lv.Rectangle((0.0, 0.0), (1.6, 0.9))
SHELL = lv.SphericalShell((0.0, 0.0, 0.0), 0.4, 1.1)
TENSOR = [[4.0, 0.0], [0.0, 1.0]]

# shape, field, K, coordinates, quantity; then the same by hand as a formula, and the basis
BY_HAND = {
    # |grad Re z^n|^2 = n^2 r^(2n-2): pi n R^(2n)
    "energy in a disc": (
        (DISC, fields.polynomial(3) + 2 * fields.polynomial(2), 1.3, "cartesian", ENERGY),
        "13/10*pi*(3*(7/10)**6 + 8*(7/10)**4)", "confirmed",
    ),
    "energy in a ring": (
        (lv.Annulus((0.0, 0.0), 0.4, 1.1), fields.log_source((0, 0), 3), 1.0, "cartesian", ENERGY),
        "18*pi*log(11/4)", "confirmed",
    ),
    # u = x^2 - y^2: 4 (x^2 + y^2), pi a b (a^2 + b^2)
    "energy in an ellipse": (
        (lv.Ellipse((0.0, 0.0), (1.2, 0.7)), fields.polynomial(2), 1.0, "cartesian", ENERGY),
        "pi*(84/100)*(144/100 + 49/100)", "confirmed",
    ),
    # u = r^(2/3) sin(2 t/3): 4/9 r^(-2/3) over three quarters of a turn
    "energy at a corner": (
        (THREE_QUARTERS, fields.wedge("2/3"), 1.0, "cartesian", ENERGY),
        "pi/2*(9/10)**(4/3)", "confirmed",
    ),
    # u = r^(2/3) along the side t = 0
    "uplift at a corner": (
        (THREE_QUARTERS, fields.wedge("2/3", "cos"), 1.0, "cartesian", lv.uplift_on("start")),
        "3/5*(9/10)**(5/3)", "confirmed",
    ),
    # u = r^2 P_2: 2 R^5 times the integral of P_2^2 over the unit sphere, 4 pi/5
    "energy in a ball": (
        (lv.Ball((0.0, 0.0, 0.0), 0.8), fields.solid(2, 0), 1.0, "cartesian", ENERGY),
        "8*pi/5*(4/5)**5", "confirmed",
    ),
    # u = z^2 - r^2/2: 4 z^2 + r^2, times 2 pi r
    "energy in a section": (
        (lv.Rectangle((0.0, 0.0), (0.6, 1.5)), fields.axisymmetric(fields.solid(2, 0)), 1.0,
         "axisymmetric", ENERGY),
        "2*pi*(4/3*(3/2)**3*(18/100) + (3/2)*(6/10)**4/4)", "confirmed",
    ),
    "energy in a rod": (
        (lv.Interval(0.2, 1.7), fields.affine((3,)), 0.5, "cartesian", ENERGY), "27/4", "closed form",
    ),
    # a source off the centre, by the theorem of Gauss
    "flux through a sphere": (
        (SHELL, fields.point_source((0, 0, "0.04"), 2), 0.5, "cartesian", lv.flux_through("inner")),
        "4*pi", "confirmed",
    ),
    # u = 2 x y, r du/dr = 2 R^2 sin 2t over a quarter of a turn
    "flux through a quarter": (
        (DISC.split(rim=[0.25]), fields.polynomial(2, "im"), 1.0, "cartesian", lv.flux_through("rim-1")),
        "98/100", "closed form",
    ),
    # u = x^2/4 - y^2, K grad u = (2 x, -2 y)
    "flux with a tensor": (
        (PLATE, fields.stretched(fields.polynomial(2), TENSOR), TENSOR, "cartesian",
         lv.flux_through("right")),
        "2*(16/10)*(9/10)", "closed form",
    ),
    # u = e^(s z) cos x cos y, s = sqrt 2
    "flux through a face": (
        (lv.Box((0.0, 0.0, 0.0), (1.2, 0.9, 0.7)), fields.exp_trig((1, 1)), 1.0, "cartesian",
         lv.flux_through("top")),
        "sqrt(2)*exp(sqrt(2)*(7/10))*sin(6/5)*sin(9/10)", "confirmed",
    ),
}  # fmt: skip


LONG = ("energy at a corner", "flux through a face", "flux through a sphere")


@pytest.mark.parametrize(
    "name", [pytest.param(name, marks=pytest.mark.slow if name in LONG else ()) for name in BY_HAND]
)
def test_integrals_by_hand(name):
    (shape, field, k, coordinates, quantity), formula, basis = BY_HAND[name]
    case = lv.case(shape, {}, field, k, coordinates=coordinates, quantities={"q": quantity})
    assert case.quantities["q"].digits is None
    digits = with_quantity_digits(case).quantities["q"].digits
    assert digits.basis == basis
    with mpmath.workdps(80):
        exact, found = mpmath.mpf(closed_form("by hand", formula)[1].value), mpmath.mpf(digits.value)
        allowed = mpmath.mpf("1e-45") * abs(exact)
        assert mpmath.mpf(digits.radius) <= allowed
        assert abs(found - exact) <= mpmath.mpf(digits.radius) + mpmath.mpf("1e-49") * abs(exact)
        assert not abs(found - exact * (1 + mpmath.mpf("1e-44"))) <= allowed


def test_a_wrong_energy_is_refused():
    shape, field, k, _, quantity = BY_HAND["energy in a ball"][0]
    case = lv.case(shape, {}, field, k, quantities={"q": quantity})
    wrong = replace(case.quantities["q"], value=case.quantities["q"].value * 1.001)
    with pytest.raises(lv.ProblemError, match="in 50 digits"):
        with_quantity_digits(replace(case, quantities={"q": wrong}))


def test_a_length_that_is_no_decimal_has_no_digits():
    odd = lv.case(lv.Disc((0.0, 0.0), math.sqrt(0.5)), {}, fields.polynomial(2), quantities={"q": ENERGY})
    assert with_quantity_digits(odd).quantities["q"].digits is None


def test_numbers_as_they_are_written():
    assert written(0.1 + 0.2) == Fraction(3, 10)
    assert written(math.pi) is None
    with mpmath.workdps(60):
        assert angle_as_written(2.0 * math.pi / 3.0) == 2 * mpmath.pi / 3
        assert angle_as_written(0.7) == mpmath.mpf(7) / 10
    assert angle_as_written(math.sqrt(2.0)) is None


@pytest.mark.parametrize(
    "piece",
    [
        PLATE.pieces["top"],
        lv.Annulus((0.1, 0.2), 0.4, 1.1).pieces["inner"],
        lv.Ellipse((0.1, -0.2), (1.2, 0.7)).pieces["rim"],
        lv.Sector(0.9, 0.7).pieces["arc"],
        lv.Box((0, 0, 0), (1.2, 0.9, 0.7)).pieces["back"],
        SHELL.pieces["inner"],
        lv.Spheroid((0.1, 0.2, 0.3), (0.8, 0.8, 1.3)).pieces["surface"],
        lv.Cylinder(0.6, 0.1, 1.3).pieces["bottom"],
        lv.Cylinder(0.6, 0.1, 1.3).pieces["side"],
        lv.Prism(lv.LShape(1.0), 0.0, 0.5).pieces["side-1"],
    ],
    ids=lambda piece: type(piece).__name__,
)
def test_pieces_in_exact_numbers_are_those_of_the_shape(piece):
    exact = exact_piece(piece)
    places = [exact.at(*t) for t in ([0.3, 0.8][: len(exact.turns)], [0.9, 0.25][: len(exact.turns)])]
    points, normals = ([[float(c) for c in place[k]] for place in places] for k in (0, 1))
    assert piece.contains(points, tol=1e-14).all()
    assert normals == pytest.approx(piece.normals(points), abs=1e-14)
    with mpmath.workdps(30):
        tolerance = Tolerance(mpmath.mpf("1e-20"), 0)
        weight = lambda *t: exact.at(*t)[2]  # noqa: E731
        if len(exact.turns) == 2:
            area = over(weight, exact.turns[1], tolerance)
        elif exact.turns[0]:
            area = around(weight, tolerance)
        else:
            area = along(weight, [(Fraction(0), False), (Fraction(1), False)], tolerance)
    assert float(area.value) == pytest.approx(piece.measure, rel=1e-12)


def test_a_density_that_the_rules_cannot_follow_shows_in_the_change():
    ends = [(Fraction(0), False), (Fraction(1), False)]
    with mpmath.workdps(40):
        tolerance = Tolerance(mpmath.mpf("1e-30"), 0)
        jumped = along(lambda t: mpmath.mpf(t < Fraction(1, 3)), ends, tolerance)
        smooth = along(lambda t: mpmath.exp(mpmath.mpf(t.numerator) / t.denominator), ends, tolerance)
        assert abs(jumped.value - mpmath.mpf(1) / 3) <= 10 * jumped.change
        assert jumped.change > mpmath.mpf("1e-9")
        assert abs(smooth.value - mpmath.expm1(1)) <= mpmath.mpf("1e-37") + smooth.change
        assert smooth.change < mpmath.mpf("1e-29")
