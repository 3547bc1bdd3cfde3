"""The expected order against published facts."""

import math

import pytest

import laplace_verify as lv
from laplace_verify.measure.criteria import expectations, smoothness_of
from laplace_verify.measure.expected import expected_order, smallest_loss
from laplace_verify.measure.smoothness import Method, Smoothness

INF = math.inf


def rate(kind, norm, order, s, d, complement=None, **declared):
    method = Method(kind=kind, formal=lambda name: order, **declared)
    found = expected_order(method, norm, Smoothness(solution=s, domain=d, complement=complement))
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
        ("quantity:total", 0.5, 2, "decrease", True),
        ("flux:top", 0.5, 2, None, False),
    ],
)
def test_finite_differences(norm, s, d, expected, decides):
    found, decisive = rate("finite difference", norm, 2, s, d)
    assert found == (
        expected if isinstance(expected, str | None) else pytest.approx(expected, rel=1e-12, abs=0)
    )
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


@pytest.mark.parametrize(("p", "expected"), [(2, 1.75), (4, 1.75), (6, 1.75)])
def test_a_log_term_at_a_corner_caps_the_maximum_at_two_whatever_the_degree(p, expected):
    # u = r^2 log r is what smooth-looking data leave at a right angle: s = 2, and a logarithm comes with it.
    assert rate("finite difference", "max", p, 2, 2) == (expected, True)
    assert rate("finite element", "max", p, 2, 2) == (expected, False)
    assert rate("finite difference", "max", p, 2.5, 2)[0] == min(p, 2.5)  # a power has no logarithm


# Five-point scheme away from the boundary: twice the corner exponent (Bramble, Hubbard & Zlamal 1968), order
# 2 beside a jump of the data (Bramble, Hubbard & Thomee 1969).
@pytest.mark.parametrize(
    ("kind", "norm", "order", "s", "d", "expected", "decides"),
    [
        ("finite difference", "max", 2, 2 / 3, 2 / 3, 4 / 3, True),
        ("finite difference", "max", 2, 1 / 2, 1 / 2, 1, True),
        ("finite difference", "max", 2, 0, 2, 2, True),
        ("finite difference", "L2", 2, 0, 2, 2, True),
        ("finite volume", "max", 2, 2 / 3, 2 / 3, 4 / 3, False),
        ("finite element", "L2", 3, 2 / 3, 2 / 3, 4 / 3, True),
        ("finite element", "L2", 3, 2, 2, 3, True),
    ],
)
def test_points_at_a_fixed_distance_feel_the_pollution_only(kind, norm, order, s, d, expected, decides):
    found, decisive = rate(kind, norm, order, s, d, clearance=0.1)
    assert found == pytest.approx(expected, rel=1e-12)
    assert decisive is decides


# Square, smooth solution: the flux is smooth side by side, so a direct method keeps its order; an indirect
# one sees the outer corners of 270 degrees, exponent 2/3, in density and dual density. On the L-shape the
# dual density of a direct method sees the re-entrant corner.
@pytest.mark.parametrize(
    ("declared", "norm", "s", "d", "c", "expected", "decides"),
    [
        ({}, "L2", INF, INF, INF, 3, True),
        ({}, "max", INF, INF, INF, 3, False),
        ({"clearance": 0.1}, "max", INF, INF, INF, 3, True),
        ({"formulation": "direct"}, "L2", INF, 2, 2 / 3, 3, True),
        ({"formulation": "direct"}, "L2", INF, 2 / 3, 2 / 3, 3 / 2 + 2 / 3, True),
        ({"formulation": "indirect"}, "L2", INF, 2, 2 / 3, "decrease", True),
        ({"formulation": "indirect", "discretisation": "collocation", "clearance": 0.1}, "max", INF, 2, 2 / 3,
         "decrease", True),
        ({"formulation": "indirect", "discretisation": "Galerkin", "clearance": 0.1}, "max", INF, 2, 2 / 3,
         4 / 3, True),
        ({"formulation": "direct", "discretisation": "Galerkin", "clearance": 0.1}, "L2", 2 / 3, 2 / 3, 2,
         4 / 3, True),
        ({"formulation": "direct", "discretisation": "collocation"}, "L2", 2 / 3, 2 / 3, 2, "decrease", True),
        ({"formulation": "direct", "discretisation": "Galerkin"}, "L2", 2 / 3, 2 / 3, 2, 4 / 3, False),
        ({"clearance": 0.1}, "trace:top", INF, INF, INF, None, False),
        ({"formulation": "direct", "discretisation": "Galerkin"}, "L2", 2 / 3, 2 / 3, None, "decrease", True),
    ],
)  # fmt: skip
def test_boundary_elements(declared, norm, s, d, c, expected, decides):
    found, decisive = rate("boundary element", norm, 3, s, d, c, **declared)
    assert found == (pytest.approx(expected, rel=1e-12) if isinstance(expected, float | int) else expected)
    assert decisive is decides


def test_the_other_side_of_the_boundary_has_the_complementary_corners():
    assert smoothness_of(lv.catalogue["plate-saddle"]).complement == pytest.approx(2 / 3, rel=1e-12)
    assert smoothness_of(lv.catalogue["l-shape-corner"]).complement == pytest.approx(2 / 3, rel=1e-12)
    assert smoothness_of(lv.catalogue["disc-fourier"]).complement == INF
    assert smoothness_of(lv.catalogue["box-solid"]).complement is None


def test_an_indirect_and_a_direct_method_are_judged_apart_on_the_same_case():
    def adapter(formulation):
        return lv.adapt(
            lambda problem, n: None, name="b", kind="boundary element", order=3, formulation=formulation,
            discretisation="Galerkin", clearance=0.1,
        )  # fmt: skip

    plate = lv.catalogue["plate-saddle"]
    assert expectations(adapter("direct"), plate)["max"].expected == 3
    assert expectations(adapter("indirect"), plate)["max"].expected == pytest.approx(4 / 3)


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
                method = Method(kind=kind, formal=lambda name: 2)
                assert expected_order(method, norm, Smoothness(solution=s, domain=2)).basis


def test_the_smallest_loss_is_half_the_order_between_a_half_and_one():
    assert [smallest_loss(p) for p in (0.5, 2 / 3, 4 / 3, 2, 6)] == pytest.approx([0.5, 0.5, 2 / 3, 1, 1])
