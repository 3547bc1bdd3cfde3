"""Tables of boxes, cylinders and balls in float64, against the sums and integrals that they stand for."""

import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.contexts import FLOAT
from laplace_verify.fields.box_kernel import Rule, _far_rule, _near_rule
from laplace_verify.fields.cylinder_kernel import _form, lid_slopes, lid_value
from laplace_verify.fields.hemispheres import _upper_half
from laplace_verify.fields.parity_tables import products

RNG = np.random.default_rng(7)
DRAWN = RNG.uniform(0, 1, (3, 300))


@pytest.mark.parametrize("extents", [(1.0, 1.0, 1.0), (2.0, 1.0, 1.0), (1.0, 3.0, 0.5)])
@pytest.mark.parametrize("made", [_near_rule, _far_rule])
def test_box_tables_give_the_integrals_over_time(extents, made):
    rule, (a, b, c) = made(extents), extents
    half = min(extents) / 2
    d = half * DRAWN[2] if made is _near_rule else half + (c - half) * DRAWN[2]
    place = (a / 2 * DRAWN[0], b / 2 * DRAWN[1], d, c - d)
    assert rule.tables
    tabled = rule.rows(*place, True)
    summed = Rule(rule.weight, rule.factors, (), rule.opposite).rows(*place, True)
    for f, g, k in ((0, 0, 0), (1, 0, 0), (0, 1, 0), (0, 0, 1)):
        found, expected = (products(x[f] * y[g], z[k]) for x, y, z in (tabled, summed))
        # Terms up to 1 (4 for slopes, more in the flat box), 80 to 140 of them, each rounded.
        assert np.abs(found - expected).max() < 1e-14


def test_long_boxes_have_no_tables():
    assert not _near_rule((40.0, 3.0, 1.0)).tables


@pytest.mark.parametrize("height", [0.5, 1.0, 5.0])
@pytest.mark.parametrize("form", [0, 1])
def test_cylinder_tables_give_the_sums_over_modes(height, form):
    cut = min(height, 1.0)
    d = 0.3 + (height - 0.3) * DRAWN[0] if form == 0 else 0.3 * DRAWN[0]
    gap = DRAWN[1] if form == 0 else cut / 4 + (1 - cut / 4) * DRAWN[1]
    expected = _form(FLOAT, form, (1 - gap, gap, d), height, cut, 1)
    found = (lid_value(FLOAT, 1 - gap, gap, d, height), *lid_slopes(FLOAT, 1 - gap, gap, d, height))
    for part, other, size in zip(found, expected, (1.0, 5.0, 5.0), strict=True):
        assert np.abs(part - other).max() < 2e-15 * size  # dozens of terms, slopes up to 5


def test_ball_tables_give_the_elliptic_integrals():
    direction = DRAWN - 0.5
    points = 0.69 * np.maximum(DRAWN[0], 0.4) * direction / np.linalg.norm(direction, axis=0)
    place = (*points, 1 - np.hypot(points[0], points[1]))
    found = fields.hemispheres((0, 0, 0), 1).value(points.T)
    assert np.abs(found - _upper_half(FLOAT, place)).max() < 3e-15  # near the centre 1/rho is taken off


def test_a_wrong_direction_is_noticed():
    points = np.array([[0.1, 0.2, 0.3], [0.3, 0.1, 0.2]])
    u = fields.hemispheres((0, 0, 0), 1)
    assert np.abs(u.value(points) - u.value(-points)).min() > 0.1
