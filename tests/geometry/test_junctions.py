"""Interior angles between neighbouring pieces, worked out by hand."""

import math

import numpy as np
import pytest

import laplace_verify as lv


def angles(shape):
    return {j.pieces: j.opening for j in shape.junctions}


def test_rectangle_has_four_right_angles():
    assert angles(lv.Rectangle((0, 0), (2, 1))) == pytest.approx(
        dict.fromkeys(
            [("bottom", "right"), ("right", "top"), ("top", "left"), ("left", "bottom")], math.pi / 2
        )
    )


def test_l_shape_has_one_re_entrant_corner_at_the_origin():
    found = [j for j in lv.LShape(2.0).junctions if j.opening > math.pi]
    assert len(found) == 1
    assert found[0].pieces == ("side-6", "side-1")
    assert found[0].opening == pytest.approx(1.5 * math.pi, rel=1e-15)
    assert (found[0].points == 0.0).all()


def test_angles_of_a_polygon_add_up():
    # (n - 2) pi inside the outer loop; the corners of a hole, seen from outside it, (n + 2) pi
    plate = lv.Polygon(
        [(0, 0), (3, -0.5), (3.5, 2), (1, 1.25), (0, 2)], holes=[[(1, 0.25), (1.5, 0.25), (1.25, 0.75)]]
    )
    outer = [j.opening for j in plate.junctions if j.pieces[0].startswith("side")]
    hole = [j.opening for j in plate.junctions if j.pieces[0].startswith("hole")]
    assert (len(outer), len(hole)) == (5, 3)
    assert sum(outer) == pytest.approx(3 * math.pi, rel=1e-14)
    assert sum(hole) == pytest.approx(5 * math.pi, rel=1e-14)


@pytest.mark.parametrize("opening", [0.3, math.pi / 2, math.pi, 4.0, 1.5 * math.pi, 2 * math.pi])
def test_apex_of_a_sector_has_its_opening(opening):
    found = angles(lv.Sector(2.0, opening))
    assert found["end", "start"] == pytest.approx(opening, rel=1e-14)
    assert found["start", "arc"] == pytest.approx(math.pi / 2, rel=1e-14)
    assert found["arc", "end"] == pytest.approx(math.pi / 2, rel=1e-14)


def test_tip_of_a_slit_has_a_full_turn():
    plate = lv.Polygon([(0, 0), (1, 0), (1, 0.5), (1, 0), (2, 0), (2, 1), (0, 1)])
    tip = [j for j in plate.junctions if j.pieces == ("side-2", "side-3")]
    assert tip[0].opening == 2.0 * math.pi
    assert tip[0].points.tolist() == [[1.0, 0.5]]


def test_smooth_curves_and_straight_sides_split_in_two_meet_at_pi():
    for shape, pieces in [
        (lv.Rectangle((0, 0), (1, 1)).split(top=[0.4]), ("top-2", "top-1")),  # travelled from right to left
        (lv.Disc((0, 0), 1).split(rim=[0.25]), ("rim-1", "rim-2")),
        (lv.Annulus((0, 0), 1, 2).split(inner=[0.25]), ("inner-2", "inner-1")),
    ]:
        assert angles(shape)[pieces] == pytest.approx(math.pi, rel=1e-14)
    assert len(lv.Disc((0, 0), 1).split(rim=[0.25]).junctions) == 2
    assert lv.Disc((0, 0), 1).junctions == ()


def test_edges_of_solids():
    box = lv.Box((0, 0, 0), (1, 2, 3))
    assert len(box.junctions) == 12
    length = sum(np.linalg.norm(j.points[1] - j.points[0]) for j in box.junctions)
    assert length == pytest.approx(4 * (1 + 2 + 3))
    for junction in (*box.junctions, *lv.Cylinder(1, 0, 2).junctions):
        assert junction.opening == pytest.approx(math.pi / 2)
        shape = box if junction in box.junctions else lv.Cylinder(1, 0, 2)
        for name in junction.pieces:
            assert shape.pieces[name].contains(junction.points).all()
    assert lv.Ball((0, 0, 0), 1).junctions == ()
    for shape, count, re_entrant in (
        (lv.Prism(lv.LShape(2), -1, 1), 6 + 12, 1),
        (lv.NotchedCube(2), 12 + 3 + 6, 3),
    ):
        assert len(shape.junctions) == count
        openings = [junction.opening for junction in shape.junctions]
        assert sum(o == pytest.approx(1.5 * math.pi) for o in openings) == re_entrant
        assert sum(o == pytest.approx(0.5 * math.pi) for o in openings) == count - re_entrant
        for junction in shape.junctions:
            for name in junction.pieces:
                assert shape.pieces[name].contains(junction.points).all()


def test_edges_of_a_renamed_solid_bear_the_new_names():
    block = lv.Prism(lv.LShape(1), 0, 1).renamed(**{"side-1": "wall", "top": "deck"})
    assert ("deck", "wall") in {junction.pieces for junction in block.junctions}
    cube = lv.NotchedCube(1).renamed(**{"notch-x": "recess"})
    assert cube.sharp_vertices[0].pieces == ("recess", "notch-y", "notch-z")
    assert lv.Interval(0, 1).junctions == ()


def test_points_of_a_junction_cannot_be_written_to():
    with pytest.raises(ValueError, match="read-only"):
        lv.LShape(1).junctions[0].points[0] = 7.0
