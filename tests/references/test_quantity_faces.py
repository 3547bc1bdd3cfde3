"""Fluxes through faces in 50 digits: a series against heat kernels, rims against antiderivatives."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import mpmath
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.references.quantity_digits import with_quantity_digits
from laplace_verify.references.quantity_rims import flux_by_rim
from laplace_verify.references.quantity_series import flux_by_series

LOWER, UPPER = (Fraction(1, 5), 0, Fraction(-1, 2)), (Fraction(3, 2), Fraction(4, 5), Fraction(2, 5))
BOX = lv.Box(tuple(map(float, LOWER)), tuple(map(float, UPPER)))
EXTENTS = [b - a for a, b in zip(LOWER, UPPER, strict=True)]
EVEN = dict.fromkeys(("left", "right", "front", "back", "bottom", "top"), 2)


def box_case(hot, where, k=1.0):
    field = fields.box_faces(LOWER, UPPER, **(EVEN | hot))
    return lv.case(BOX, {}, field, k, quantities={"q": lv.flux_through(where)})


def by_heat_kernels(a, b, h):
    """Flux through an a by b face at 0 from the opposite face at 1, h away.

    The integral over all times of the heat that an interval of length a, and one of b, keeps (sines), times
    the flux at one end of (0, h) of a dipole at the other (images): a product of three heat kernels in place
    of modes in z (Carslaw and Jaeger 1959, section 14.3; from memory, unchecked).
    """
    pi = mpmath.pi

    def kept(length, t):
        odd = range(1, 161, 2)
        return 8 * length / pi**2 * mpmath.fsum(mpmath.exp(-((m * pi / length) ** 2) * t) / m**2 for m in odd)

    def through(t):
        images = [(2 * n + 1) * h for n in range(10)]
        terms = [(z * z / (2 * t) - 1) * mpmath.exp(-z * z / (4 * t)) for z in images]
        return 4 * mpmath.fsum(terms) / (2 * t * mpmath.sqrt(4 * pi * t))

    # below 0.002 the integrand is smaller than exp(-h^2/0.008); above 3 than exp(-3 pi^2/h^2)
    edges = [mpmath.mpf(e) for e in ("0.002", "0.01", "0.03", "0.08", "0.2", "0.5", "1.2", "3")]
    return -mpmath.quad(lambda t: kept(a, t) * kept(b, t) * through(t), edges)


@pytest.mark.slow
def test_series_agrees_with_an_integral_over_heat_kernels():
    case = box_case({"right": 5}, "left", 1.4)
    digits = with_quantity_digits(case).quantities["q"].digits
    assert digits.basis == "tail bound"
    with mpmath.workdps(30):
        h, a, b = (mpmath.mpf(e.numerator) / e.denominator for e in EXTENTS)
        exact = mpmath.mpf("1.4") * 3 * by_heat_kernels(a, b, h)
        found = mpmath.mpf(digits.value)
        assert mpmath.mpf(digits.radius) < mpmath.mpf("1e-48")
        # limited by the integral: its ends are cut off
        assert abs(found - exact) <= mpmath.mpf("1e-24") * abs(exact)
        assert not abs(found * (1 + mpmath.mpf("1e-23")) - exact) <= mpmath.mpf("1e-24") * abs(exact)


def test_fluxes_next_to_a_jump_are_infinite_and_have_no_series():
    with pytest.raises(lv.ProblemError, match="infinite"):
        box_case({"right": 5}, "top")
    case = box_case({"right": 5}, "left")
    for jumping in ("top", "right"):
        assert flux_by_series(case, replace(case.quantities["q"], where=jumping)) is None


# u homogeneous, face, the flux by hand
SOLIDS = {
    # u = z^2 - (x^2 + y^2)/2: u_z = 2 z
    "bowl": (fields.solid(2, 0), "top", 2 * UPPER[2] * EXTENTS[0] * EXTENTS[1]),
    # the same, u_x = -x and the outward normal is -x
    "bowl from the side": (fields.solid(2, 0), "left", LOWER[0] * EXTENTS[1] * EXTENTS[2]),
    # u = z^3 - 3/2 z (x^2 + y^2): u_z = 3 z^2 - 3/2 (x^2 + y^2)
    "cubic": (
        2 * fields.solid(3, 0), "bottom",
        -2 * (
            3 * LOWER[2] ** 2 * EXTENTS[0] * EXTENTS[1]
            - Fraction(1, 2) * (UPPER[0] ** 3 - LOWER[0] ** 3) * EXTENTS[1]
            - Fraction(1, 2) * UPPER[1] ** 3 * EXTENTS[0]
        ),
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", SOLIDS)
def test_rims_of_homogeneous_polynomials_by_hand(name):
    field, where, exact = SOLIDS[name]
    case = lv.case(BOX, {}, field, 0.7, quantities={"q": lv.flux_through(where)})
    found = flux_by_rim(case, case.quantities["q"])
    with mpmath.workdps(60):
        wanted = mpmath.mpf(7 * exact.numerator) / (10 * exact.denominator)
        assert mpmath.mpf(found.radius) < mpmath.mpf("1e-48")
        assert abs(mpmath.mpf(found.value) - wanted) <= mpmath.mpf(found.radius)


def test_other_fields_have_no_rim():
    mixed = fields.solid(2, 0) + fields.solid(1, 0)
    case = lv.case(BOX, {}, mixed, quantities={"q": lv.flux_through("top")})
    assert flux_by_rim(case, case.quantities["q"]) is None


@pytest.mark.slow
def test_rim_of_a_half_edge_agrees_with_the_area():
    case = lv.catalogue["notched-cube-edges"]
    found = flux_by_rim(case, case.quantities["flux through the left face"])
    with mpmath.workdps(25):
        # three terms alike: the x edge pierces no face, the other two are each other's mirror image
        term = case.exact
        rule = mpmath.calculus.quadrature.GaussLegendre(mpmath.mp).calc_nodes(4, 80)
        a = mpmath.mpf("0.8")
        area = mpmath.fsum(
            p * q * term.gradient_at((-a, a * s, a * t), 18)[0] for s, p in rule for t, q in rule if s <= t
        )
        diagonal = mpmath.fsum(p * p * term.gradient_at((-a, a * s, a * s), 18)[0] for s, p in rule)
        flux = -mpmath.mpf("0.9") * a * a * (2 * area - diagonal)
        assert abs(mpmath.mpf(found.value) - flux) <= mpmath.mpf("1e-15")
