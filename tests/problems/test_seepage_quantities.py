"""Uplift, discharge across a section and exit gradient, of fields integrated by hand."""

from __future__ import annotations

import math

import pytest

import laplace_verify as lv
from laplace_verify.errors import ProblemError
from laplace_verify.problems import case_from_json, case_to_json

SQUARE = lv.Rectangle((0, 0), (1, 1))
WANTED = {
    "uplift": lv.uplift_on("bottom"),
    "discharge": lv.discharge_across((0.5, 0), (0.5, 1)),
    "oblique": lv.discharge_across((0, 0), (1, 1)),
    "exit": lv.exit_gradient_at("top", (0.25, 1)),
    "corner": lv.exit_gradient_at("right", (1, 1)),
}
# u = x^2 - y^2 + x, K = 3, see the first test
BY_HAND = {"uplift": 5 / 6, "discharge": -6.0, "oblique": -9.0, "exit": 2.0, "corner": -3.0}


@pytest.fixture(scope="module")
def wall():
    field = lv.fields.polynomial(2) + lv.fields.affine((1, 0))
    return lv.case(SQUARE, {"top": "neumann"}, field, 3.0, quantities=WANTED)


def test_quantities_of_a_hand_computed_field(wall) -> None:
    # uplift int_0^1 x^2 + x dx; up the line x = 1/2 right is +x: -K u_x = -3 (2 x + 1) = -6; up the diagonal
    # right is (1, -1)/sqrt 2 and K (u_x - u_y) = 3 (4 x + 1), whose mean is 9; on top -u_y = 2, on the
    # right -u_x = -3
    for name, exact in BY_HAND.items():
        quantity = wall.quantities[name]
        assert abs(quantity.value - exact) <= quantity.radius <= 1e-12, name
    assert wall.quantities["exit"].place == (0.25, 1.0)
    assert wall.quantities["discharge"].where == (0.5, 0.0, 0.5, 1.0)


def test_twin_in_metres(wall) -> None:
    twin = wall.scaled(length=(20.0, "m"), value=(5.0, "m"), conductivity=(1e-4, "m/s"))
    factors = {"uplift": 100.0, "discharge": 5e-4, "oblique": 5e-4, "exit": 0.25, "corner": 0.25}
    units = {"uplift": "m^2", "discharge": "m^2/s", "oblique": "m^2/s", "exit": "", "corner": ""}
    for name, factor in factors.items():
        found = twin.quantities[name]
        assert found.value == pytest.approx(factor * BY_HAND[name], rel=1e-12)
        assert found.unit == units[name]
    assert twin.quantities["exit"].place == (5.0, 20.0)
    assert twin.quantities["discharge"].where == (10.0, 0.0, 10.0, 20.0)


def test_files_bring_them_back(wall) -> None:
    again = case_from_json(case_to_json(wall), "wall.json")
    assert again.quantities == wall.quantities


def test_discharge_through_layers_is_that_of_their_side() -> None:
    beds = lv.layers((0, 1), ["1/4"], {"clay": 1, "sand": 10})
    field = lv.fields.by_region(beds, {"clay": lv.fields.affine((2, 0)), "sand": lv.fields.affine((2, 0))})
    wanted = {"inside": lv.discharge_across((0.5, 1), (0.5, 0)), "side": lv.flux_through("right")}
    found = lv.case(SQUARE, {}, field, beds, quantities=wanted).quantities
    assert found["inside"].value == pytest.approx(2 * (0.25 + 7.5), rel=1e-12)
    assert found["inside"].value == pytest.approx(found["side"].value, rel=1e-12)


@pytest.mark.parametrize(
    ("make", "right"),
    [
        (lambda exact: lv.uplift_on("bottom", exact=exact), 1.0),
        (lambda exact: lv.exit_gradient_at("top", (0.5, 1), exact=exact), 2.0),
        (lambda exact: lv.discharge_across((0, 0.5), (1, 0.5), exact=exact), -2.0),
    ],
)
def test_a_closed_form_is_checked(make, right) -> None:
    field = lv.fields.affine((0, -2), 1)
    assert lv.case(SQUARE, {}, field, quantities={"q": make(right)}).quantities["q"].value == right
    with pytest.raises(ProblemError, match="disagrees"):
        lv.case(SQUARE, {}, field, quantities={"q": make(right + 0.01)})


@pytest.mark.parametrize(
    ("spec", "reason"),
    [
        (lv.uplift_on("base"), "no piece is named 'base'"),
        (lv.exit_gradient_at("base", (0, 0)), "no piece is named 'base'"),
        (lv.exit_gradient_at("top", (0.5, 0.5)), "does not lie on piece 'top'"),
        (lv.discharge_across((0, 0), (2, 1)), "leaves"),
        (lv.discharge_across((0, 0), (0, 0)), "has no length"),
        (lv.discharge_across((0, 0, 0), (1, 1, 1)), "between two points of a plane shape"),
    ],
)
def test_what_makes_no_sense_is_refused(spec, reason) -> None:
    with pytest.raises(ProblemError, match=reason):
        lv.case(SQUARE, {}, lv.fields.affine((1, 0)), quantities={"q": spec})


def test_an_infinite_exit_gradient_is_refused() -> None:
    shape = lv.Rectangle((-2, -1), (2, 0)).split(top=[0.25, 0.75])
    wanted = {"exit": lv.exit_gradient_at("top-3", (1, 0))}
    with pytest.raises(ProblemError, match="no finite limit"):
        lv.case(
            shape, {"top-2": "neumann", "bottom": "neumann"}, lv.fields.dam_seepage(2, 1), quantities=wanted
        )


def test_discharge_past_a_tip_has_an_honest_radius() -> None:
    # a pile to the middle of the layer lets pass exactly half of k h; the flux at its tip is infinite
    shape = lv.Polygon([(-2, -1), (2, -1), (2, 0), (0, 0), (0, -0.5), (0, 0), (-2, 0)])
    wanted = {"q": lv.discharge_across((0, -1), (0, -0.5))}
    field = lv.fields.dam_seepage(0, 1, "1/2")
    tight = dict.fromkeys(("side-1", "side-4", "side-5"), "neumann")
    quantity = lv.case(shape, tight, field, quantities=wanted).quantities["q"]
    assert abs(quantity.value - 0.5) <= quantity.radius <= 1e-6
    assert math.isclose(quantity.value, 0.5, rel_tol=1e-7)
