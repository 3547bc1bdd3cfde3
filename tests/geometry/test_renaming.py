"""Pieces called otherwise: names, junctions, splits and plain data keep up."""

import math

import pytest

from laplace_verify import geometry as geo
from laplace_verify.errors import GeometryError

PLATE = geo.Rectangle((0.0, 0.0), (1.0, 2.0))


def test_renamed_piece_keeps_its_place_and_geometry():
    shape = PLATE.renamed(left="axis")
    assert shape.pieces.names == ("axis", "right", "bottom", "top")
    assert shape.kind == "rectangle"
    assert shape.pieces["axis"].measure == PLATE.pieces["left"].measure
    assert {"axis"} & {name for junction in shape.junctions for name in junction.pieces}
    assert not {"left"} & {name for junction in shape.junctions for name in junction.pieces}
    assert shape != PLATE


def test_parts_of_a_split_piece_are_renamed_with_it():
    shape = PLATE.split(left=[0.25]).renamed(left="axis")
    assert shape.pieces.names[:2] == ("axis-1", "axis-2")
    assert shape.pieces["axis-1"].measure == 0.5


def test_names_survive_plain_data_and_repr():
    shape = PLATE.split(left=[0.25]).renamed(left="axis", top="lid")
    assert geo.shape_from_spec(geo.shape_to_spec(shape)) == shape
    assert "axis" in repr(shape)
    assert "names" not in geo.shape_to_spec(PLATE)


@pytest.mark.parametrize(
    ("names", "message"),
    [
        ({"letf": "axis"}, "cannot rename 'letf'"),
        ({"left": "right"}, "one name"),
        ({"left": ""}, "must be a word"),
        ({"left": 3}, "must be a word"),
    ],
)
def test_impossible_names_are_refused(names, message):
    with pytest.raises(GeometryError, match=message):
        PLATE.renamed(**names)


def test_names_in_plain_data_must_be_a_table():
    with pytest.raises(GeometryError, match="names must be a table"):
        geo.shape_from_spec({**geo.shape_to_spec(PLATE), "names": ["axis"]})


@pytest.mark.parametrize("radius", [0.0, -1.0, math.inf])
def test_half_disc_needs_a_radius(radius):
    with pytest.raises(GeometryError, match="radius"):
        geo.HalfDisc((0, 0), radius)


def test_half_annulus_needs_room_between_its_circles():
    with pytest.raises(GeometryError, match="inner must be smaller"):
        geo.HalfAnnulus((0, 0), 1.0, 1.0)


def test_half_annulus_has_its_moment_about_the_straight_side():
    """The integral of x is 2/3 (b^3 - a^3); times 2 pi it is the volume of the shell (Pappus)."""
    points, weights = geo.HalfAnnulus((0.0, 0.7), 0.5, 1.3).quadrature(8)
    assert weights @ points[:, 0] == pytest.approx(2 / 3 * (1.3**3 - 0.5**3), rel=1e-13)
