"""The expected order against published facts."""

import math
from types import SimpleNamespace

import pytest

from laplace_verify.measure.expected import expected_order, smallest_loss

INF = math.inf


def regularity(solution, domain):
    return SimpleNamespace(solution=solution, domain=domain)


def rate(kind, norm, order, s, d):
    found = expected_order(kind, norm, lambda name: order, regularity(s, d))
    return found.expected, found.decides


# Five-point scheme: Gerschgorin 1930; corners: Laasonen 1957, Bramble, Hubbard & Zlamal 1968; L-shape 2/3
# next to the corner and 4/3 inside; jumps: no convergence of the maximum, order 2 inside, Wasow 1957.
@pytest.mark.parametrize(
    ("norm", "s", "d", "expected", "decides"),
    [
        ("max", INF, 2, 2, True),
        ("max", INF, 2 / 3, 2, True),
        ("L2", INF, 2 / 3, 2, True),
        ("max", 2 / 3, 2 / 3, 2 / 3, True),
        ("max", 4 / 3, 2 / 3, 4 / 3, True),
        ("L2", 2 / 3, 2 / 3, 4 / 3, True),
        ("L1", 2 / 3, 2 / 3, 4 / 3, True),
        ("max", 1 / 2, 1 / 2, 1 / 2, True),
        ("L2", 1 / 2, 1 / 2, 1, True),
        ("max", 0, 2, None, False),
        ("L2", 0, 2, 1, True),
        ("L1", 0, 2, 1.75, True),  # a logarithm
        ("H1-semi", INF, 2, None, False),
        ("trace:top", INF, 2, 2, False),
        ("quantity:total", 0.5, 2, None, False),
    ],
)
def test_finite_differences(norm, s, d, expected, decides):
    found, decisive = rate("finite difference", norm, 2, s, d)
    assert found == (pytest.approx(expected, rel=1e-12, abs=0) if expected is not None else None)
    assert decisive is decides


# Strang & Fix 1973; Babuska 1970: H1 min(k, alpha), L2 2 alpha for linear elements on the L-shape.
@pytest.mark.parametrize(
    ("order", "norm", "s", "d", "expected", "decides"),
    [
        (2, "H1-semi", INF, 2, 1, True),
        (2, "L2", INF, 2, 2, True),
        (3, "H1-semi", INF, 2, 2, True),
        (3, "L2", INF, 2, 3, True),
        (2, "H1-semi", 2 / 3, 2 / 3, 2 / 3, True),
        (2, "energy", 2 / 3, 2 / 3, 2 / 3, True),
        (2, "L2", 2 / 3, 2 / 3, 4 / 3, True),
        (3, "L2", INF, 2 / 3, 8 / 3, True),
        (2, "L2", 0, 2, 1, True),
        (2, "H1-semi", 0, 2, None, False),
        (2, "max", INF, 2, 2, False),
        (2, "flux:top", INF, 2, 1, True),
        (2, "flux:top", 2 / 3, 2 / 3, None, False),
    ],
)
def test_finite_elements(order, norm, s, d, expected, decides):
    found, decisive = rate("finite element", norm, order, s, d)
    assert found == (pytest.approx(expected, rel=1e-12, abs=0) if expected is not None else None)
    assert decisive is decides


def test_finite_volumes_decide_in_integral_norms_only():
    assert rate("finite volume", "L2", 2, INF, 2) == (2, True)
    assert rate("finite volume", "max", 2, INF, 2) == (2, False)


def test_exponential_methods_claim_no_rate_for_singular_solutions():
    assert rate("spectral", "max", "exponential", INF, 2) == ("exponential", True)
    assert rate("spectral", "max", "exponential", 2 / 3, 2 / 3) == ("decrease", True)
    assert rate("spectral", "max", "exponential", 0, 2) == (None, False)


def test_stochastic_methods_gain_a_half():
    assert rate("stochastic", "L2", None, INF, 2) == (0.5, True)


def test_every_rate_names_its_basis():
    for kind in (
        "finite difference",
        "finite element",
        "finite volume",
        "boundary element",
        "spectral",
        "other",
    ):
        for norm in ("max", "L1", "L2", "H1-semi", "flux:top"):
            for s in (INF, 2 / 3, 0):
                assert expected_order(kind, norm, lambda name: 2, regularity(s, 2)).basis


def test_the_smallest_loss_is_half_the_order_between_a_half_and_one():
    assert [smallest_loss(p) for p in (0.5, 2 / 3, 4 / 3, 2, 6)] == pytest.approx([0.5, 0.5, 2 / 3, 1, 1])
