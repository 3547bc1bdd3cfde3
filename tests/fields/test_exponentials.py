"""Waves times exponentials: no overflow, exact zeros, reference levels."""

import math

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError

EPS = np.finfo(np.float64).eps


@pytest.mark.filterwarnings("error")
@pytest.mark.parametrize("k", [227, 1000, 10**6])
def test_high_wavenumbers_do_not_overflow(k):
    # sinh(k pi) overflows from k = 227 on; the quotient is 1 at the level and e^{-k pi d} below it
    u = fields.exp_trig(k, "cos", "sinh", level=1, times_pi=True)
    d = 1 / (4 * k)
    values = u.value([[0, 1], [0, 1 - d], [0, 0.5], [0, 0]])
    assert values[0] == 1
    assert values[1] == pytest.approx(math.exp(-math.pi / 4), rel=1e-9)
    assert 0 <= values[2] < 1e-100
    assert values[3] == 0


def test_hyperbolic_profiles_are_the_quotients_they_say():
    with mpmath.workdps(40):
        for profile, function in (("sinh", mpmath.sinh), ("cosh", mpmath.cosh)):
            u = fields.exp_trig("5/2", "cos", profile, centre=(0, "0.25"), level=-1)
            expected = function(mpmath.mpf("0.5")) / function(mpmath.mpf("-3.125"))  # 2.5 (0.45 - 0.25)
            assert abs(u.at((0, "0.45"), 35) - expected) < mpmath.mpf(10) ** -34


def test_zeros_of_a_multiple_of_pi_are_exact():
    u = fields.exp_trig(7, "sin", "sinh", level=1, times_pi=True)
    assert u.value([[1, 0.5], [2 / 7, 0.5], [3, 0.25]])[[0, 2]].tolist() == [0, 0]
    half = fields.exp_trig("1/2", "cos", "cosh", level=1, times_pi=True)
    assert half.value([[1, 1], [3, 1], [-1, 0.5]]).tolist() == [0, 0, 0]
    # the twin: with k as a float the zero is only a rounding away
    assert 0 < abs(fields.exp_trig(7 * math.pi, "sin").value([[1, 0]])[0]) < 1e-14


def test_relative_accuracy_near_the_zero_of_sinh():
    u = fields.exp_trig(3, "cos", "sinh", level=1)
    value = u.value([[0, 1e-12]])[0]
    assert value == pytest.approx(3e-12 / math.sinh(3), rel=4 * EPS)


@pytest.mark.parametrize("profile", ["exp", "decay", "cosh", "sinh"])
def test_profile_is_one_at_its_level(profile):
    u = fields.exp_trig((3, 4), "cos", profile, level="0.75")
    assert u.value([[0, 0, 0.75]])[0] == pytest.approx(1, rel=4 * EPS)


def test_growth_and_decay():
    up, down = fields.exp_trig(2).value([[0, 1]])[0], fields.exp_trig(2, "cos", "decay").value([[0, 1]])[0]
    assert up == pytest.approx(math.exp(2), rel=4 * EPS)
    assert down == pytest.approx(math.exp(-2), rel=4 * EPS)


def test_conjugate_of_an_even_profile_without_level():
    # level at the centre: cosh(k y) cos(k x) is the real part of cos(k z), its conjugate -sinh(k y) sin(k x)
    v = fields.exp_trig(2, "cos", "cosh").conjugate()
    assert v.value([[0.3, 0.4]])[0] == pytest.approx(-math.sinh(0.8) * math.sin(0.6), rel=8 * EPS)


def test_formulas_cannot_be_misread():
    low = fields.exp_trig(3, "sin", "cosh", level=-2, times_pi=True)
    assert low.formula == "cosh(3 pi y)/cosh(3 pi (-2)) sin(3 pi x)"  # not 3 pi - 2
    assert fields.exp_trig(2, profile="sinh", level=1).formula == "sinh(2 y)/sinh(2) cos(2 x)"
    assert fields.exp_trig(1, "cos").formula == "exp(y) cos(x)"
    assert fields.exp_trig(1, centre=(2, "1/4"), profile="cosh").formula == "cosh(y - 1/4) cos(x - 2)"
    space = fields.exp_trig((1, "3/4"), level=1)
    assert space.formula == "exp(sqrt(1^2 + (3/4)^2) (z - 1)) cos(x) cos(3/4 y)"


@pytest.mark.parametrize(
    ("arguments", "reason"),
    [
        ({"k": -1}, "wavenumbers must be positive"),
        ({"k": 0}, "wavenumbers must be positive"),
        ({"k": (0, 0)}, "wavenumbers must be positive"),
        ({"k": (1, 2, 3)}, "k must have 1 or 2"),
        ({"k": 1, "part": "tan"}, "part must be"),
        ({"k": 1, "part": None}, "part must be"),
        ({"k": (1, 2), "part": ("cos",)}, "part must be"),
        ({"k": 1, "profile": "tanh"}, "profile must be one of exp"),
        ({"k": 1, "profile": "sinh"}, "zero at its centre: give a level"),
        ({"k": 1, "centre": (0, 0, 0)}, "centre must have 2 coordinates"),
        ({"k": 1, "level": "high"}, "level must be a decimal"),
        ({"k": 1, "times_pi": 1}, "times_pi must be True or False"),
    ],
)
def test_bad_parameters(arguments, reason):
    with pytest.raises(FieldError, match=reason):
        fields.exp_trig(**arguments)
