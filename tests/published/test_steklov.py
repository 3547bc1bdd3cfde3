"""Steklov eigenvalues, n . grad u = sigma u on the boundary: fields of the package are the eigenfunctions.

Values from outside the project, each with its source; those of the square are computed there as roots of the
transcendental equations and confirmed to 10 digits by Rayleigh-Ritz with harmonic polynomials.
"""

import mpmath
import pytest

from laplace_verify import fields

# equation for a that the sides x = +-1 give, first guess, trig of x, hyperbolic of y, sigma
WAVES = {
    "1": (lambda a: mpmath.cot(a) - mpmath.tanh(a), 0.9, "sin", "cosh", "0.688252742336267389"),
    "4": (lambda a: mpmath.tan(a) + mpmath.tanh(a), 2.4, "cos", "cosh", "2.32363775343172269"),
    "6": (lambda a: mpmath.tan(a) + mpmath.coth(a), 2.3, "cos", "sinh", "2.39038920510581701"),
    "8": (lambda a: mpmath.cot(a) - mpmath.tanh(a), 3.9, "sin", "cosh", "3.92433302324475162"),
    "10": (lambda a: mpmath.cot(a) - mpmath.coth(a), 3.9, "sin", "sinh", "3.9296545067801838"),
}
SIDES = ((1, "0.3", 0, 1), (-1, "-0.7", 0, -1), ("0.2", 1, 1, 1), ("-0.6", -1, 1, -1))  # point, axis, sense


def rates(field):
    """Outward derivative over value at a point of each side of (-1, 1)^2."""
    return [sense * field.gradient_at((x, y), 30)[axis] / field.at((x, y), 30) for x, y, axis, sense in SIDES]


# Girouard & Polterovich 2017, J. Spectral Theory 7 (the square in closed form; from memory)
@pytest.mark.parametrize("number", WAVES)
def test_waves_on_the_square(number):
    equation, guess, trig, hyperbolic, sigma = WAVES[number]
    with mpmath.workdps(40):
        a = mpmath.findroot(equation, guess)
        field = fields.exp_trig(a, trig, hyperbolic, level=1)
        for rate in rates(field):
            assert abs(rate - mpmath.mpf(sigma)) <= mpmath.mpf("1e-16")
        for rate in rates(field.rotated(mpmath.pi / 2)):  # the eigenvalue is double
            assert abs(rate - mpmath.mpf(sigma)) <= mpmath.mpf("1e-16")
        off = rates(fields.exp_trig(a * mpmath.mpf("1.001"), trig, hyperbolic, level=1))  # the twin
        assert max(abs(rate - mpmath.mpf(sigma)) for rate in off) > 1e-4


def test_the_saddle_on_the_square_has_sigma_one():
    assert rates(fields.polynomial(2, "im")) == pytest.approx([1, 1, 1, 1], rel=1e-15)


# the same source: unit disc 0, 1, 1, 2, 2, ...; unit ball l, 2 l + 1 times (exact)
@pytest.mark.parametrize("n", [1, 2, 5])
def test_whole_numbers_on_disc_and_ball(n):
    on_circle, on_sphere = ("3/5", "-4/5"), ("2/7", "-3/7", "6/7")
    for part in ("re", "im"):
        assert_rate(fields.polynomial(n, part), on_circle, n)
    for m in range(-n, n + 1):
        assert_rate(fields.solid(n, m), on_sphere, n)


def assert_rate(field, point, sigma):
    with mpmath.workdps(30):
        place = [mpmath.mpf(int(c.split("/")[0])) / int(c.split("/")[1]) for c in point]
        slope = mpmath.fdot(zip(place, field.gradient_at(point, 25), strict=True))
        assert abs(slope - sigma * field.at(point, 25)) <= mpmath.mpf("1e-22")
        assert abs(slope) > 1e-9
