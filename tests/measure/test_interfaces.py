"""Norms and expected orders with interfaces."""

import math

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.measure.expected import expected_order
from laplace_verify.measure.smoothness import Method, Smoothness

PLATE = lv.Rectangle((0, 0), (1.6, 0.9))
PIPE = lv.inclusion(("7/10", "2/5"), "1/4", {"pipe": 4.5, "soil": 0.5})
FAR = fields.affine((1, 0)) - fields.dipole(("7/10", "2/5"), (1, 0)) * "1/20"
AROUND = fields.by_region(PIPE, {"pipe": fields.affine(("1/5", 0), "14/25"), "soil": FAR})


def smooth(interface):
    return Smoothness(solution=math.inf, domain=1.0, interface=interface)


def second_order(kind):
    return Method(kind=kind, formal=lambda _: 2)


@pytest.mark.parametrize(
    ("kind", "norm", "interface", "expected", "decides"),
    [
        ("finite difference", "max", "aligned", 2.0, True),
        ("finite difference", "L2", "aligned", 2.0, True),
        ("finite difference", "max", "curved", None, False),
        ("finite difference", "L2", "oblique", "decrease", True),
        ("finite element", "L2", "aligned", 2.0, True),
        ("finite element", "L2", "curved", 1.0, True),
        ("finite element", "H1-semi", "oblique", 0.5, True),
        ("finite element", "L1", "oblique", None, False),
        ("stochastic", "L2", "curved", 0.5, True),
    ],
)
def test_what_decides_at_an_interface(kind, norm, interface, expected, decides) -> None:
    found = expected_order(second_order(kind), norm, smooth(interface))
    assert (found.expected, found.decides) == (expected, decides)
    assert found.basis


def test_without_an_interface_nothing_changes() -> None:
    assert expected_order(second_order("finite element"), "L2", smooth("")).expected == 2.0


def lifted(slope):
    """A solver whose error is slope x / n^2 in value and gradient."""

    def solve(_, n):
        made = lv.case(PLATE, {}, AROUND, PIPE)
        return lv.Answer(
            evaluate=lambda x: made.exact.value(x) + slope * x[:, 0] / n**2,
            gradient=lambda x: made.exact.gradient(x) + np.array([slope / n**2, 0.0]),
            h=1 / n,
        )

    return lv.adapt(solve, name="lifted", kind="other", order=2, conductivity={"regions"})


def test_energy_and_flux_densities_take_the_conductivity_of_each_region() -> None:
    made = lv.case(PLATE, {}, AROUND, PIPE)
    found = lv.study(lifted(1.0), made, sizes=(16, 32, 64, 128))
    level = found.levels[0]
    inside = math.pi / 16
    # int K |grad e|^2 = (4.5 pi/16 + 0.5 (1.44 - pi/16)) / n^4; rules around a circle: 1e-6
    energy = math.sqrt(4.5 * inside + 0.5 * (1.44 - inside)) / 256
    assert level.errors["energy"] == pytest.approx(energy, rel=1e-6)
    assert level.errors["H1-semi"] == pytest.approx(1.2 / 256, rel=1e-6)
    # on the left side K = 0.5: int (0.5 / n^2)^2 over 0.9
    assert level.errors["fluxdensity:left"] == pytest.approx(0.5 / 256 * math.sqrt(0.9), rel=1e-9)
    assert found.verdict is lv.Verdict.PASS


def test_a_solver_that_stalls_does_not_pass_at_a_curved_interface() -> None:
    made = lv.case(PLATE, {}, AROUND, PIPE)

    @lv.adapt(kind="finite difference", order=2, conductivity={"regions"})
    def stalled(_, n):
        return lv.Answer(evaluate=lambda x: made.exact.value(x) + 0.01 * x[:, 0], h=1 / n)

    assert lv.study(stalled, made, sizes=(16, 32, 64, 128)).verdict is lv.Verdict.FAIL


def test_features_tell_interfaces_and_jumps() -> None:
    made = lv.case(PLATE, {}, AROUND, PIPE)
    told = lv.study(lifted(1.0), made, sizes=(8, 16, 32)).features
    assert told["interface"] is True
    assert told["interface off the axes"] is True
    assert told["interface that meets the boundary"] is False
    assert told["conductivity jump of ten or more"] is False
    plain = lv.case(PLATE, {}, fields.affine((1, 0)))
    assert lv.study(lifted(1.0), plain, sizes=(8, 16, 32)).features["interface"] is False
