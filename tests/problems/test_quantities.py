from __future__ import annotations

import math

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.problems import energy_of_solution


def one(case):
    (quantity,) = case.quantities.values()
    return quantity


def test_flux_value_and_energy_of_a_hand_computed_field(square) -> None:
    # u = x^2 - y^2, K = 3 on [0, 1]^2: through the top 3 * -2 = -6; energy 3 int 4 (x^2 + y^2) = 8
    wanted = {
        "heat in": lv.flux_through("top", unit="W/m"),
        "centre": lv.value_at((0.75, 0.25)),
        "energy": energy_of_solution(),
    }
    found = lv.case(square, {}, lv.fields.polynomial(2), 3.0, quantities=wanted).quantities
    assert list(found) == ["heat in", "centre", "energy"]
    for name, exact in (("heat in", -6.0), ("centre", 0.5), ("energy", 8.0)):
        assert abs(found[name].value - exact) <= found[name].radius <= 1e-12
    assert (found["heat in"].kind, found["heat in"].where, found["heat in"].unit) == ("flux", "top", "W/m")
    assert (found["centre"].kind, found["centre"].where, found["centre"].unit) == ("value", (0.75, 0.25), "")


def test_fluxes_add_up_to_nothing_within_their_radii() -> None:
    shape = lv.Polygon([(0, 0), (2, 0), (2.5, 1), (1, 2), (-0.5, 1)])
    field = lv.fields.log_source((3, 3)) + lv.fields.exp_trig(2)
    wanted = {name: lv.flux_through(name) for name in shape.pieces.names}
    found = lv.case(shape, {}, field, quantities=wanted).quantities.values()
    assert abs(math.fsum(q.value for q in found)) <= math.fsum(q.radius for q in found) <= 1e-10


@pytest.mark.parametrize("piece", ["side-1", "side-6"])
def test_a_singular_flux_is_integrated_with_an_honest_radius(piece) -> None:
    # u = r^(2/3) sin(2 theta/3): on both sides of the corner the flux is -(2/3) r^(-1/3), its integral -1
    wanted = {"flux": lv.flux_through(piece)}
    quantity = one(lv.case(lv.LShape(1.0), {}, lv.fields.wedge("2/3"), quantities=wanted))
    assert abs(quantity.value + 1.0) <= quantity.radius <= 1e-8


def test_a_strong_singularity_off_the_origin_has_an_honest_radius() -> None:
    # u = r^(1/4) sin(theta/4) about the tip (0.3, 0.1): the flux through the upper lip is -r^(-3/4)/4,
    # its integral over a lip of length 1 is -1
    tip = (0.3, 0.1)
    shape = lv.Polygon([(1.3, 0.1), tip, (1.3, 0.1), (1.3, 1.0), (-1, 1.0), (-1, -1), (1.3, -1)])
    field = lv.fields.wedge("1/4", cut=2 * math.pi, apex=tip)
    wanted = {"upper": lv.flux_through("side-2")}
    quantity = one(lv.case(shape, {}, field, quantities=wanted))
    assert abs(quantity.value + 1.0) <= quantity.radius <= 1e-2


def test_an_infinite_flux_is_refused(square, angle) -> None:
    for spec in (lv.flux_through("bottom"), energy_of_solution()):
        with pytest.raises(lv.ProblemError, match="is infinite, because boundary data jump at"):
            lv.case(square, {}, angle, quantities={"heat": spec})
    far = lv.case(square, {}, angle, quantities={"heat": lv.flux_through("top")})
    # theta has the conjugate -log r: the flux between (0, 1) and (1, 1) is the change of log r, log sqrt 2
    assert abs(abs(one(far).value) - math.log(2) / 2) <= one(far).radius


def test_a_closed_form_replaces_the_integral_if_it_agrees() -> None:
    corner = lv.fields.wedge("2/3")
    exact = lv.case(lv.LShape(1.0), {}, corner, quantities={"q": lv.flux_through("side-1", exact=-1)})
    assert one(exact).value == -1.0
    assert one(exact).radius < 1e-15
    with pytest.raises(lv.ProblemError, match=r"quantity 'q': the closed form -1\.001 disagrees"):
        lv.case(lv.LShape(1.0), {}, corner, quantities={"q": lv.flux_through("side-1", exact=-1.001)})


def test_a_fraction_is_a_closed_form(square) -> None:
    third = lv.value_at((0.5, 0.5), exact="1/3")
    assert one(lv.case(square, {}, lv.fields.affine((0, 0), "1/3"), quantities={"v": third})).value == 1 / 3


def test_quantities_of_a_line_and_a_solid() -> None:
    bar = lv.case(
        lv.Interval(0, 2), {}, lv.fields.affine((3,)), 2.0, quantities={"q": lv.flux_through("left")}
    )
    assert abs(one(bar).value + 6.0) <= one(bar).radius
    ball = lv.Ball((0, 0, 0), 1.0)
    # u = z: energy is the volume
    whole = lv.case(ball, {}, lv.fields.affine((0, 0, 1)), quantities={"e": energy_of_solution()})
    assert abs(one(whole).value - 4 * math.pi / 3) <= one(whole).radius <= 1e-11


@pytest.mark.parametrize(
    ("spec", "message"),
    [
        pytest.param(lv.flux_through("tob"), "no piece is named 'tob'; did you mean 'top'", id="piece"),
        pytest.param(lv.value_at((2, 2)), "lies outside", id="outside"),
        pytest.param(lv.value_at(0.5), "must have 2 coordinates", id="dimension"),
        pytest.param(1.0, r"must be flux_through\(\.\.\.\)", id="number"),
        pytest.param(lv.flux_through("top", exact="one"), "exact must be a number", id="text"),
        pytest.param(lv.flux_through("top", exact=math.inf), "exact must be finite", id="inf"),
    ],
)
def test_bad_quantities_are_refused_by_name(square, spec, message) -> None:
    with pytest.raises(lv.ProblemError, match=f"quantity 'heat'.*{message}"):
        lv.case(square, {}, lv.fields.affine((1, 1)), quantities={"heat": spec})


def test_value_at_needs_numbers() -> None:
    with pytest.raises(lv.ProblemError, match="value_at needs the coordinates"):
        lv.value_at("centre")


def test_a_value_on_the_boundary_and_of_an_opaque_field(square) -> None:
    field = lv.field(lambda x, y: np.exp(x) * np.cos(y))
    case = lv.case(square, {}, field, quantities={"corner": lv.value_at((1, 0))})
    assert abs(one(case).value - math.e) <= one(case).radius <= 1e-13
