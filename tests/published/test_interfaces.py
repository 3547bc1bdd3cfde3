"""Interfaces against values from outside: Kellogg's checkerboard, layers, spheres and cylinders."""

import math

import mpmath
import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.problems import transmission_exponent

# Kellogg 1974; Morin, Nochetto & Siebert 2000, SIAM J. Numer. Anal. 38: exponent, R, sigma as printed.
PUBLISHED = [
    # The last digits printed, ...881, are off: cot^2(pi/40) = 161.4476387975884957 (50 digits below).
    ("1/10", 161.4476387975881, -14.92256510455152, 14),
    ("1/2", 5.8284271247461907, None, 15),
    ("1/4", 25.27414236908818, None, 16),
]


@pytest.mark.parametrize(("gamma", "ratio", "sigma", "digits"), PUBLISHED)
def test_kelloggs_ratio_and_phase(gamma, ratio, sigma, digits) -> None:
    assert fields.checkerboard_ratio(gamma) == pytest.approx(ratio, rel=10.0 ** (1 - digits))
    if sigma is not None:
        # the second quadrant's wave is cos(gamma (theta - pi + sigma)), rho = pi/4
        theta = 0.6 * math.pi
        angle = float(mpmath.mpf(1) / 10)
        u = fields.checkerboard(gamma).value([(math.cos(theta), math.sin(theta))])[0]
        form = math.cos(math.pi / 4 * angle) * math.cos((theta - math.pi + sigma) * angle)
        first = math.cos((math.pi / 2 - sigma) * angle)  # factor of the first quadrant in print
        np.testing.assert_allclose(u * first, form, rtol=1e-12, atol=0)


@pytest.mark.parametrize(("gamma", "ratio"), [row[:2] for row in PUBLISHED])
def test_the_exponent_follows_from_the_published_ratio(gamma, ratio) -> None:
    quarter = math.pi / 2
    found = transmission_exponent([(quarter, ratio), (quarter, 1.0)] * 2)
    assert found == pytest.approx(
        float(mpmath.mpf(gamma.split("/")[0]) / int(gamma.split("/")[1])), rel=1e-12
    )


def test_the_printed_ratio_of_one_tenth_is_wrong_in_its_last_digits() -> None:
    with mpmath.workdps(30):
        true = mpmath.cot(mpmath.pi / 40) ** 2
        assert mpmath.nstr(true, 19) == "161.4476387975884957"
        assert abs(true - mpmath.mpf("161.4476387975881")) > 3e-13


def test_maxwells_ball_gradient_and_moment() -> None:
    """Inside 3 K2/(K1 + 2 K2) of the gradient far away; Maxwell 1873, art. 314 (from memory, unchecked)."""
    case = lv.catalogue["boulder-in-clay"]
    inside = case.exact.gradient([(0.1, 0.2, 0.1)])[0]
    np.testing.assert_allclose(inside, [0, 0, 3 * 0.75 / (4.5 + 2 * 0.75)], rtol=1e-15, atol=1e-16)
    far = case.exact.value([(0.0, 0.0, 1.25)])[0]
    moment = (4.5 - 0.75) / (4.5 + 1.5) * 0.5**3
    assert far == pytest.approx(1.25 - moment / 1.25**2, rel=1e-15)


def test_a_cylinder_across_a_flow() -> None:
    """Inside 2 K2/(K1 + K2); the plane form of Maxwell's ball (from memory, unchecked)."""
    inside = lv.catalogue["pipe-in-a-slab"].exact.gradient([(0.7, 0.45)])[0]
    np.testing.assert_allclose(inside, np.array([2.0, 1.0]) * 2 * 0.5 / (4.5 + 0.5), rtol=1e-15, atol=0)


def test_resistances_in_series_and_conductances_side_by_side() -> None:
    """Common practice, no single source."""
    heights, k = np.array([0.25, 0.35, 0.3]), np.array([0.5, 2.0, 1.25])
    across, along = lv.catalogue["plate-layers-across"], lv.catalogue["plate-layers-along"]
    drop = across.exact.value([(0.3, 0.9)])[0] - across.exact.value([(0.3, 0.0)])[0]
    assert drop == pytest.approx((heights / k).sum(), rel=1e-15)
    assert along.quantities["flux through the left side"].value == pytest.approx(
        1.25 * heights @ k, rel=1e-15
    )


def test_the_neutral_coat_of_hashin_and_shtrikman() -> None:
    """K3 = K2 (K1 + K2 + f (K1 - K2))/(K1 + K2 - f (K1 - K2)) in the plane (from memory, unchecked)."""
    core, coat, around = lv.catalogue["coated-cable"].problem.conductivity.conductivities
    f = 0.25
    assert around == coat * (core + coat + f * (core - coat)) / (core + coat - f * (core - coat))
