"""Li_s(e^{-p + iq}) against mpmath, and the sums of modes against plain sums."""

import math

import mpmath
import numpy as np
import pytest

from laplace_verify.contexts import FLOAT, Precise
from laplace_verify.errors import FieldError
from laplace_verify.fields.mode_sums import Decay, mode_slopes, mode_value, terms_needed
from laplace_verify.fields.polylog import by_index, horner, polylog

ORDERS = (0, 1, 2, 3, 4, 7)

rng = np.random.default_rng(71)
P = np.concatenate([rng.uniform(0, 1.3, 25), 10.0 ** rng.uniform(-12, 1, 15), np.zeros(8)])
Q = np.concatenate([rng.uniform(0, np.pi, 25), 10.0 ** rng.uniform(-12, 0.49, 15), rng.uniform(0.1, 3.1, 8)])


def reference(order, p, q):
    """mpmath 1.4 polylog at 40 digits, of the float64 numbers p and q as they are."""
    with mpmath.workdps(60):
        return mpmath.polylog(order, mpmath.exp(mpmath.mpc(-float(p), float(q))))


def worst(values, order):
    return max(
        float(abs(v - r) / max(1, abs(r)))
        for v, r in ((v, reference(order, p, q)) for v, p, q in zip(values, P, Q, strict=True))
    )


@pytest.mark.parametrize("order", ORDERS)
def test_float64_agrees_with_mpmath_on_the_closed_disc(order):
    # 4 eps: a handful of roundings of terms that are at most 3 times the sum.
    assert worst(polylog(FLOAT, order, P, Q, np.pi - Q), order) <= 9e-16


def test_the_comparison_notices_one_missing_term_of_the_expansion():
    """Twin: Li_2 without its logarithm is caught."""
    values = polylog(FLOAT, 2, P, Q, np.pi - Q)
    w = P - 1j * Q
    assert not worst(values + w * 1e-13, 2) <= 9e-16


@pytest.mark.parametrize("order", ORDERS)
def test_forty_digits_agree_with_mpmath(order):
    ctx = Precise(40)
    for p, q in list(zip(P, Q, strict=True))[::4]:
        got = polylog(ctx, order, ctx.mpf(p), ctx.mpf(q), ctx.pi - ctx.mpf(q))
        want = reference(order, p, q)
        assert abs(mpmath.mpmathify(got) - want) <= mpmath.mpf(10) ** -39 * max(1, abs(want))


def test_relative_accuracy_is_kept_next_to_one_and_next_to_minus_one():
    """Li_0 = 1 / (e^w - 1), and Im Li_s(-e^{-v}) for tiny angles from -1."""
    p, q = np.array([1e-13]), np.array([3e-13])
    want = 1 / np.expm1(p - 1j * q)
    assert abs(polylog(FLOAT, 0, p, q, np.pi - q) / want - 1)[0] <= 4e-16
    r = np.array([1e-12])
    near = polylog(FLOAT, 2, np.array([0.3]), np.pi - r, r).imag[0]
    with mpmath.workdps(40):  # Im Li_2(-x e^{-ir}) = r log(1 + x) + O(r^3)
        assert abs(near / (1e-12 * mpmath.log(1 + mpmath.exp(mpmath.mpf(0.3)) ** -1)) - 1) <= 1e-15


def test_the_point_where_the_logarithm_is_infinite_gives_no_number():
    zero = np.array([0.0])
    with np.errstate(all="ignore"):
        for order in (0, 1):
            assert np.isnan(polylog(FLOAT, order, zero, zero, zero + np.pi)).all()


def test_horner_and_by_index_do_what_they_say():
    z = np.array([0.5 + 0.5j, -1.0 + 0j, 2j])
    assert np.allclose(horner([1.0, 2.0, 3.0], z), 1 + 2 * z + 3 * z * z, rtol=1e-15, atol=0)
    index = np.array([2, 0, 2, 1])
    assert by_index(index, lambda k, x: k * x, np.array([1.0, 5.0, 10.0, 100.0])).tolist() == [2, 0, 20, 100]
    assert by_index(1, lambda k, x: k * x, 7) == 7


def plain_modes(p, q, gap, count, weight):
    """The same sum mode by mode at 60 digits, A_n = 1 / n^2 with the factor 1 - e^{-n(2p + gap)} below."""
    with mpmath.workdps(60):
        total = slope = mpmath.mpf(0)
        for n in range(1, count + 1):
            decays = mpmath.exp(-n * p), mpmath.exp(-n * (p + gap))
            total += mpmath.sin(n * q) * (decays[0] - decays[1]) / n**2
            slope -= mpmath.sin(n * q) * (decays[0] + decays[1]) / n
        return slope if weight else total


@pytest.mark.parametrize("gap", ["1e-9", "0.01", "3"])
def test_differences_of_modes_do_not_cancel(gap):
    p, q, count = 0.2, 0.7, 12
    gap = float(gap)
    place = tuple(np.array([v]) for v in (p, q, np.pi - q, gap))
    decay = Decay(last=count)
    values = mode_value(FLOAT, False, lambda n: [1 / k**2 for k in range(1, n + 1)], decay, place)
    slopes = mode_slopes(FLOAT, False, lambda n: [1 / k for k in range(1, n + 1)], decay, place)
    args = (mpmath.mpf(p), mpmath.mpf(q), mpmath.mpf(gap), count)
    # rtol 4 eps, although the two sums agree to 9 digits for the smallest gap
    assert float(values[0] / plain_modes(*args, 0) - 1) == pytest.approx(0, abs=1e-15)
    assert float(slopes[1][0] / plain_modes(*args, 1) - 1) == pytest.approx(0, abs=1e-15)


@pytest.mark.parametrize("decay", [Decay(ratio=0.9), Decay(power=3), Decay(ratio=0.99, power=1)])
@pytest.mark.parametrize("p", [0.0, 0.01, 1.0])
@pytest.mark.parametrize("weight", [0, 1])
def test_the_tail_bound_bounds_the_tail(decay, p, weight):
    rho = decay.ratio * math.exp(-p)
    for count in (1, 10, 100):
        n = np.arange(count + 1, 60000, dtype=float)
        tail = float(np.sum(n ** (weight - decay.power) * rho ** (n - 1)))
        assert tail <= decay.tail(count, p, weight) * (1 + 1e-9)


def test_too_many_terms_are_refused_by_name():
    with pytest.raises(FieldError, match=r"needs more than 20000 terms at distance 3\.18e-07 side lengths"):
        terms_needed(Decay(power=1), 1e-6, 0, 40.0)
