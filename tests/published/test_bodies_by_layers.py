"""Published potentials of a cube as layers of loaded squares, and capacities by images and of a disc."""

import math

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify import fields

TURN = 2 * math.pi


def column(lower, upper, place, derivative=False):
    """Potential (or slope along x) at `place` of the unit-density prism between two corners.

    Layers of the prism are uniform: the field of a loaded rectangle at each height difference, by Gauss's
    rule on both sides of the place's own height, graded towards it.
    """
    layer = fields.loaded_rectangle(lower[:2], upper[:2], "inflow")
    nodes, weights = np.polynomial.legendre.leggauss(60)
    t, w = (nodes + 1) / 2, weights / 2
    total = 0.0
    for reach in (place[2] - lower[2], upper[2] - place[2]):
        if reach <= 0:
            continue
        depth, step = reach * t**3, reach * 3 * t**2 * w
        points = np.column_stack([np.full(60, place[0]), np.full(60, place[1]), depth])
        found = layer.gradient(points)[:, 0] if derivative else layer.value(points)
        total += TURN * float(step @ found)
    return total


# MacMillan 1930, The Theory of the Potential; Nagy 1966, Geophysics 31 (both from memory, unchecked); 19
# digits computed from the closed form of the prism. The corner is also the box integral B_3(-1) of Bailey,
# Borwein & Crandall 2007, 1.190038681989777.
@pytest.mark.parametrize(
    ("place", "value"),
    [
        pytest.param((0.0, 0.0, 0.0), 1.190038681989776753322, id="corner"),
        pytest.param((0.5, 0.5, 0.5), 2.380077363979553506644, id="centre"),
        pytest.param((0.5, 0.5, 0.0), 1.792810243178774555, id="face"),
        pytest.param((0.5, 0.0, 0.0), 1.4272601797003582391, id="edge"),
    ],
)
def test_potential_of_the_homogeneous_unit_cube(place, value):
    assert column((0, 0, 0), (1, 1, 1), place) == pytest.approx(value, rel=1e-12)


@pytest.mark.parametrize(
    ("place", "value"),
    [
        pytest.param((0.0, 0.5, 0.5), 2.5968965782583650588, id="face"),
        pytest.param((0.0, 0.0, 0.0), 0.96938805271256821492, id="corner"),
    ],
)
def test_attraction_of_the_homogeneous_unit_cube(place, value):
    assert column((0, 0, 0), (1, 1, 1), place, derivative=True) == pytest.approx(value, rel=1e-8)


def test_mean_potential_of_the_unit_square_on_itself():
    """Delta_2(-1) = 2.973209598247378702528 (Bailey, Borwein & Crandall 2007)."""
    square = fields.loaded_rectangle((0, 0), (1, 1), "inflow")
    nodes, weights = np.polynomial.legendre.leggauss(60)
    t = (nodes + 1) / 2
    s, w = t * t * (3 - 2 * t) / 2, weights / 2 * 3 * t * (1 - t)  # half a side, flat at both ends
    x, y = np.meshgrid(s, s, indexing="ij")
    points = np.stack([x.ravel(), y.ravel(), 0 * x.ravel()], axis=1)
    mean = 4 * TURN * float(np.outer(w, w).ravel() @ square.value(points))
    assert mean == pytest.approx(2.973209598247378702528, rel=1e-9)


def test_two_spheres_that_cross_at_right_angles():
    """Capacity a (2 - 1/sqrt 2) = 1.2928932188134524756 by three images (Landkof 1972; from memory)."""
    half = math.sqrt(0.5)
    u = (
        fields.point_source((0, 0, half))
        + fields.point_source((0, 0, -half))
        - fields.point_source((0, 0, 0)) * half
    )
    generator = np.random.default_rng(5)
    unit = generator.normal(size=(200, 3))
    unit /= np.linalg.norm(unit, axis=1, keepdims=True)
    for centre in (half, -half):
        surface = unit + np.array([0, 0, centre])
        outside = np.sign(centre) * surface[:, 2] > 1e-3  # the part of the sphere that bounds the body
        np.testing.assert_allclose(u.value(surface[outside]), 1.0, rtol=0, atol=1e-13)
        without = fields.point_source((0, 0, half)) + fields.point_source((0, 0, -half))
        assert np.abs(without.value(surface[outside]) - 1.0).max() > 0.1  # the twin: the third image missing
    points, normals, weights = lv.Ball((0, 0, 0), 3.0).pieces["surface"].quadrature(40)
    charge = -float(weights @ (normals * u.gradient(points)).sum(axis=1)) / (4 * math.pi)
    assert charge == pytest.approx(1.2928932188134524756, rel=1e-12)
    assert charge == pytest.approx(2 - math.sqrt(0.5), rel=1e-12)


def test_dimensionless_rate_of_a_disc():
    """q* = C sqrt(4 pi/A), A both faces: 0.900 printed (Incropera & DeWitt, table 4.1), 0.900316316157."""
    far = 1e6
    capacity = far * fields.spheroid_potential((1, 0)).value([[far, 0.0, 0.0]])[0]
    rate = capacity * math.sqrt(4 * math.pi / (2 * math.pi))
    assert rate == pytest.approx(0.900316316157, abs=1e-11)
    assert rate == pytest.approx(0.900, abs=5e-4)
