"""Which lists of vertices are polygons, which points are inside, and how the pieces are named."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

import laplace_verify as lv
from laplace_verify.geometry.polygon_checks import signed_area
from laplace_verify.geometry.polygons import trapezoids


def test_sides_are_numbered_from_the_first_vertex(square):
    plate = lv.Polygon(
        square, holes=[[(0.25, 0.25), (0.25, 0.5), (0.5, 0.5)], [(0.75, 0.5), (0.75, 0.75), (0.9, 0.6)]]
    )
    assert plate.pieces.names[:5] == ("side-1", "side-2", "side-3", "side-4", "hole-1-side-1")
    assert plate.pieces.names[-1] == "hole-2-side-3"
    assert plate.pieces["side-1"].ends.tolist() == [[0, 0], [1, 0]]
    assert plate.pieces["hole-1-side-1"].ends.tolist() == [[0.25, 0.25], [0.25, 0.5]]


def test_holes_in_either_orientation_become_clockwise_from_the_same_vertex(square):
    hole = [(0.25, 0.25), (0.5, 0.25), (0.5, 0.5), (0.25, 0.5)]
    one = lv.Polygon(square, [hole])
    other = lv.Polygon(square, [[hole[0], *hole[:0:-1]]])
    assert one == other
    assert one.holes[0][0] == hole[0]
    assert signed_area(one.holes[0]) < 0
    normal = one.pieces["hole-1-side-1"].normals([(0.25, 0.3)])
    assert normal.tolist() == [[1.0, 0.0]]  # into the hole, away from the plate


def test_contains_by_hand(square):
    plate = lv.Polygon(square, [[(0.25, 0.25), (0.75, 0.25), (0.75, 0.75), (0.25, 0.75)]])
    points = [
        (0.1, 0.5),
        (0.5, 0.5),
        (0.25, 0.5),
        (0.3, 0.25),
        (1.0, 1.0),
        (0.0, 0.25),
        (-0.1, 0.25),
        (1.1, 0.75),
    ]
    assert plate.contains(points).tolist() == [True, False, True, True, True, True, False, False]


def test_distance_by_hand(square):
    plate = lv.Polygon(square, [[(0.25, 0.25), (0.75, 0.25), (0.75, 0.75), (0.25, 0.75)]])
    points = [(0.1, 0.5), (0.5, 0.5), (2.0, 2.0), (0.2, 0.2)]
    assert plate.distance(points) == pytest.approx([0.1, 0.25, 2**0.5, 0.05 * 2**0.5], rel=1e-14)


def test_a_comb_of_two_hundred_teeth():
    # many sides at once: area, points between the teeth and in them
    teeth, top = 200, []
    for k in range(teeth, 0, -1):
        top += [(k, 1.0), (k - 0.5, 1.0), (k - 0.5, 0.5), (k - 1.0, 0.5)]
    comb = lv.Polygon([(0.0, 0.0), (float(teeth), 0.0), *top])
    assert comb.measure == pytest.approx(0.75 * teeth)
    assert comb.quadrature(1)[1].sum() == pytest.approx(0.75 * teeth, rel=1e-13)
    x = np.arange(teeth)
    assert comb.contains(np.stack([x + 0.75, np.full(teeth, 0.9)], axis=1)).all()
    assert not comb.contains(np.stack([x + 0.25, np.full(teeth, 0.9)], axis=1)).any()
    assert comb.contains(comb.sample(500, seed=7)).all()


def test_far_from_the_origin_nothing_is_lost(square):
    there = lv.Polygon([(x + 1e6, y - 1e6) for x, y in square])
    assert there.measure == pytest.approx(1.0, rel=1e-9)
    assert there.quadrature(2)[1].sum() == pytest.approx(1.0, rel=1e-9)


def test_slits_attached_to_holes_and_branching_slits_are_accepted(square):
    hole = [(0.4, 0.4), (0.4, 0.6), (0.2, 0.6), (0.4, 0.6), (0.6, 0.6), (0.6, 0.4)]
    assert lv.Polygon(square, [hole]).measure == pytest.approx(0.96)
    tree = [
        (0, 0),
        (0.5, 0),
        (0.5, 0.25),
        (0.25, 0.5),
        (0.5, 0.25),
        (0.75, 0.5),
        (0.5, 0.25),
        (0.5, 0),
        (1, 0),
        (1, 1),
        (0, 1),
    ]
    plate = lv.Polygon(tree)
    assert plate.measure == pytest.approx(1.0)
    assert sum(j.opening == pytest.approx(2 * np.pi) for j in plate.junctions) == 2
    assert plate.quadrature(3)[1].sum() == pytest.approx(1.0, rel=1e-14)


def test_trapezoids_of_an_l_shape():
    corners, areas = trapezoids((lv.LShape(1.0).vertices,))
    assert corners.tolist() == [[[-1, -1, 0], [0, -1, 0]], [[0, -1, 1], [1, -1, 1]]]
    assert areas.tolist() == [1.0, 2.0]


BAD = {
    "two vertices": ([(0, 0), (1, 0)], (), "vertices must have at least 3 vertices, got 2"),
    "no list": (5, (), r"vertices must be a list of \(x, y\) pairs"),
    "three coordinates": ([(0, 0, 0), (1, 0, 0), (0, 1, 0)], (), "vertex 1 of vertices must be 2 numbers"),
    "not a number": ([(0, 0), (1, float("nan")), (0, 1)], (), "vertex 2 of vertices must be finite"),
    "clockwise": ([(0, 0), (0, 1), (1, 1), (1, 0)], (), "run clockwise, .* reverse the order"),
    "side without length": ([(0, 0), (1, 0), (1, 0), (0, 1)], (), r"side 2 of vertices has no length"),
    "closed by hand": ([(0, 0), (1, 0), (0, 1), (0, 0)], (), r"side 4 of vertices has no length"),
    "bow tie": ([(0, 0), (1, 1), (1, 0), (0, 1)], (), "sides 1 and 3 of vertices cross or touch"),
    "touching a side": ([(0, 0), (1, 0), (1, 1), (0.5, 0), (0, 1)], (), "cross or touch"),
    "slit without a vertex at its foot": (
        [(0, 0), (1, 0), (0.5, 0), (0.5, 1), (0, 1)], (),
        "cross or touch; a boundary may meet itself only in a slit",
    ),
    "collinear": ([(0, 0), (1, 0), (2, 0), (1, 0)], (), "enclose no area"),
    "there and back": ([(0, 0), (1, 1), (2, 2)], (), "cross or touch"),
    "pinch": ([(0, 0), (1, 0), (1, 1), (2, 1), (2, 2), (1, 2), (1, 1), (0, 1)], (),
        "more than one region: a pinch"),
    "slit that cuts through": (
        [(0, 0), (1, 0), (1, 1), (1, 0), (2, 0), (2, 1), (1, 1), (0, 1)], (), "a slit that cuts through",
    ),
    "outward spike": ([(0, 0), (1, 0), (1, -1), (1, 0), (2, 0), (2, 1), (0, 1)], (),
        "spike outside the region"),
    "side walked twice": ([(0, 0), (1, 0), (1, 1)] * 2, (), "walked twice in the same direction"),
    "hole outside": (None, [[(2, 2), (3, 2), (3, 3)]], "hole 1 is not inside the outer boundary"),
    "hole across": (None, [[(0.5, 0.5), (1.5, 0.5), (0.5, 0.75)]], "hole 1 is not inside"),
    "hole touching": (None, [[(0.5, 0.5), (1.0, 0.5), (0.5, 0.75)]], "hole 1 is not inside"),
    "hole at a corner": (None, [[(0, 0), (0.5, 0.25), (0.25, 0.5)]], "hole 1 is not inside"),
    "hole as large as the plate": (None, [[(0, 0), (1, 0), (1, 1), (0, 1)]], "hole 1 is not inside"),
    "hole in a hole": (
        None, [[(0.1, 0.1), (0.9, 0.1), (0.5, 0.9)], [(0.4, 0.2), (0.6, 0.2), (0.5, 0.3)]],
        "holes 1 and 2 overlap",
    ),
    "holes that touch": (
        None, [[(0.1, 0.1), (0.5, 0.5), (0.1, 0.5)], [(0.5, 0.5), (0.9, 0.5), (0.9, 0.9)]],
        "holes 1 and 2 overlap or touch",
    ),
    "short hole": (None, [[(0.1, 0.1), (0.5, 0.5)]], "hole 1 must have at least 3 vertices"),
    "slit into a hole": (
        None, [[(0.2, 0.2), (0.2, 0.8), (0.5, 0.5), (0.2, 0.8), (0.8, 0.8), (0.8, 0.2)]],
        "hole 1 have a spike",
    ),
    "too thin": ([(0, 0), (1, 0), (1, 1e-10), (0, 1e-10)], (), "side 2 of vertices has no length"),
}  # fmt: skip


@pytest.mark.parametrize(("vertices", "holes", "message"), BAD.values(), ids=BAD.keys())
def test_what_is_no_polygon_is_refused(vertices, holes, message, square):
    with pytest.raises(lv.GeometryError, match=message):
        lv.Polygon(square if vertices is None else vertices, holes)


@given(
    radii=st.lists(st.floats(0.2, 1.0), min_size=3, max_size=12),
    shift=st.tuples(st.floats(-5, 5), st.floats(-5, 5)),
)
def test_star_shaped_polygons_of_any_form(radii, shift):
    # Radii at equal angles make a simple polygon; its area is a sum of triangles at the centre.
    count = len(radii)
    angle = 2 * np.pi * np.arange(count) / count
    vertices = np.array(shift) + np.array(radii)[:, None] * np.stack([np.cos(angle), np.sin(angle)], axis=1)
    star = lv.Polygon(vertices)
    area = np.sum(np.array(radii) * np.roll(radii, -1)) * np.sin(2 * np.pi / count) / 2
    assert star.measure == pytest.approx(area, rel=1e-10)
    points, weights = star.quadrature(2)
    assert weights.sum() == pytest.approx(area, rel=1e-10)
    assert star.contains(points).all()
    rules = star.boundary_quadrature(1).values()
    assert sum((w * (p * n).sum(axis=1)).sum() for p, n, w in rules) == pytest.approx(2 * area, rel=1e-10)
    assert sum(j.opening for j in star.junctions) == pytest.approx((count - 2) * np.pi, rel=1e-10)
    assert star.contains(star.sample(20, seed=1)).all()
    assert star.contains([shift]).all()
    with pytest.raises(lv.GeometryError, match="reverse the order"):
        lv.Polygon(vertices[::-1])
