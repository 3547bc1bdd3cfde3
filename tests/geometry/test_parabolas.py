"""Confocal parabolas: by hand, by the map z = w^2, and what makes no sense."""

import math

import numpy as np
import pytest
from scipy.integrate import quad

from laplace_verify import geometry as geo
from laplace_verify.errors import GeometryError
from laplace_verify.problems.scaling import scaled_shape

SHAPE = geo.ConfocalParabolas((0.5, -1.0), 0.36, 1.21)


def test_points_of_the_pieces_are_at_the_distances_that_define_parabolas():
    """Distance from the focus = distance from the directrix x = 2 p on the right, x = -2 q on the left."""
    for name, directrix in (("right", 0.72), ("left", -2.42)):
        points = SHAPE.pieces[name].outline(33) - [0.5, -1.0]
        assert np.hypot(*points.T) == pytest.approx(np.abs(points[:, 0] - directrix), rel=1e-14)


def test_pieces_meet_at_right_angles_and_the_axis_is_straight():
    openings = {junction.pieces: junction.opening for junction in SHAPE.junctions}
    assert openings.pop(("axis-left", "axis-right")) == pytest.approx(math.pi, abs=1e-14)
    assert list(openings.values()) == pytest.approx([math.pi / 2] * 3, abs=1e-12)
    corner = SHAPE.pieces["right"].ends[1]
    assert corner == pytest.approx([0.5 + 0.36 - 1.21, -1 + 2 * 0.6 * 1.1], abs=1e-14)


def test_length_by_adaptive_quadrature():
    found = quad(lambda y: math.hypot(1.0, y / 0.72), 0.0, 1.32, epsabs=1e-13)[0]
    assert SHAPE.pieces["right"].measure == pytest.approx(found, rel=1e-12)
    parts = SHAPE.split(right=[0.25, 0.6]).pieces
    shares = [parts[f"right-{k}"].measure / found for k in (1, 2, 3)]
    assert shares == pytest.approx([0.25, 0.35, 0.4], rel=1e-12)


def test_harmonic_polynomials_are_integrated_exactly():
    """int x^2 - y^2 and x over the shape about the focus, by hand in w: the Jacobian is 4 |w|^2."""
    points, weights = SHAPE.quadrature(2)
    x, y = (points - [0.5, -1.0]).T
    a, c = 0.6, 1.1
    # x = xi^2 - eta^2: 4 int xi^4 - eta^4 = 4 (a^5 c - a c^5)/5
    assert weights @ x == pytest.approx(0.8 * (a**5 * c - a * c**5), rel=1e-13)
    # y^2 = 4 xi^2 eta^2: 16 int xi^4 eta^2 + xi^2 eta^4
    assert weights @ y**2 == pytest.approx(16 / 15 * (a**5 * c**3 + a**3 * c**5), rel=1e-13)


def test_round_trips():
    split = SHAPE.split(left=[0.5]).renamed(right="free-surface")
    assert geo.shape_from_spec(geo.shape_to_spec(split)) == split
    assert scaled_shape(SHAPE, 2.0) == geo.ConfocalParabolas((1.0, -2.0), 0.72, 2.42)


@pytest.mark.parametrize(
    ("arguments", "reason"),
    [
        (((0, 0), 0.0, 1.0), "right must"),
        (((0, 0), 1.0, -1.0), "left must"),
        (((0, 0), 1.0, 2000.0), "must differ by less than a factor 1000"),
        (((0, 0, 0), 1.0, 1.0), "focus"),
    ],
)
def test_bad_parabolas_are_refused(arguments, reason):
    with pytest.raises(GeometryError, match=reason):
        geo.ConfocalParabolas(*arguments)
