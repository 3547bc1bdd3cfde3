"""The cover of a polygon by sectors and discs: nothing is left out, nothing reaches beyond the polygon."""

from fractions import Fraction

import numpy as np
import pytest

from laplace_verify.cases.corner_fits import FITS
from laplace_verify.geometry import Polygon
from laplace_verify.references.local_cover import Spot, cover

SHAPES = {
    **{name: fit.vertices for name, fit in FITS.items()},
    "acute": (("0", "0"), ("3", "0.2"), ("1", "2")),
    "notched": (("0", "0"), ("2", "0"), ("2", "1"), ("1.1", "1"), ("1", "0.2"), ("0.9", "1"), ("0", "1")),
    "far off": (("1000", "5"), ("1000.02", "5"), ("1000.02", "5.01"), ("1000", "5.01")),
}


def made(name):
    vertices = tuple((Fraction(x), Fraction(y)) for x, y in SHAPES[name])
    polygon = Polygon([(float(x), float(y)) for x, y in vertices])
    return polygon, cover(vertices)


def worst_ratio(polygon, spots):
    """Largest distance of a seeded point from its spot's apex, in units of the reach; sectors ignored."""
    points = polygon.sample(3000, seed=2)
    apexes = np.array([[float(c) for c in s.apex] for s in spots])
    reaches = np.array([float(s.reach) for s in spots])
    away = np.sqrt(((points[:, None] - apexes) ** 2).sum(axis=2))
    return (away / reaches).min(axis=1).max()


@pytest.mark.parametrize("name", SHAPES)
def test_every_point_has_a_spot_and_no_spot_reaches_beyond_the_polygon(name):
    polygon, spots = made(name)
    assert len(spots) < 120
    assert worst_ratio(polygon, spots) <= 1.1
    corners = np.array([[float(x), float(y)] for x, y in SHAPES[name]])
    for spot in spots:
        apex, reach = np.array([float(c) for c in spot.apex]), float(spot.reach)
        to_corners = np.sqrt(((corners - apex) ** 2).sum(axis=1))
        assert reach <= 0.5001 * to_corners[to_corners > 1e-9].min()
        if spot.sides is None:
            assert reach <= polygon.distance(apex[None])[0] * (1 + 1e-9)


def test_check_of_the_cover_can_fail():
    polygon, spots = made("l-basin-two-levels")
    assert worst_ratio(polygon, [s for s in spots if s.sides is not None]) > 1.1
    assert worst_ratio(polygon, [Spot(apex=s.apex, reach=s.reach / 2) for s in spots]) > 1.1
