"""Where errors sit, and how fast they fall there."""

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.measure.orders import line_order
from laplace_verify.solvers.samples import FAULTS, five_point

PLATE = lv.catalogue["plate-flux-top"]


def test_a_closure_of_first_order_shows_next_to_its_piece():
    found = lv.study(FAULTS["first-order flux"].adapter, PLATE)
    finest = {place: errors[-1] for place, errors in found.local.items()}
    assert max(finest, key=lambda place: finest[place] or 0.0) in (
        "top",
        "corner top/left",
        "corner right/top",
    )
    assert found.local_orders["top"] == pytest.approx(1.0, abs=0.2)
    assert lv.study(five_point, PLATE).local_orders["top"] == pytest.approx(2.0, abs=0.3)


def test_an_interface_and_an_axis_are_places_of_their_own():
    layers = lv.study(five_point, lv.catalogue["plate-two-layers-wave"], sizes=(8, 16, 32))
    assert any(place.startswith("interface ") for place in layers.local)
    solid = lv.study(five_point, lv.catalogue["pillar-section"], sizes=(8, 16, 32))
    assert solid.local_orders["axis"] == pytest.approx(2.0, abs=0.3)


def error_at(place):
    """A second-order solver with a first-order error within 2h of one corner."""

    def solve(_, n):
        def values(x):
            near = np.hypot(*(x - place).T) < 2.0 * 1.6 / n
            return PLATE.exact.value(x) + near / n + 1e-3 * x[:, 0] / n**2

        return lv.Answer(evaluate=values, h=1.6 / n)

    return lv.adapt(solve, name="corner", kind="finite difference", order=2)


def test_a_corner_is_told_from_its_sides():
    corner = PLATE.problem.shape.bounding_box[0]
    found = lv.study(error_at(corner), PLATE)
    orders = found.local_orders
    assert orders["corner left/bottom"] == pytest.approx(1.0, abs=0.15)
    assert orders["interior"] > 1.5
    assert orders["corner right/top"] > 1.5


def test_the_order_of_a_line_needs_two_positive_errors():
    assert line_order([1.0, 0.5], [0.4, 0.1]) == pytest.approx(2.0)
    assert line_order([1.0, 0.5], [0.4, None]) is None
    assert line_order([1.0, 0.5], [0.4, 0.0]) is None
    assert line_order([np.nan, 0.5, 0.25], [9.0, 0.4, 0.1]) == pytest.approx(2.0)
