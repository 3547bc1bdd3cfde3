"""Pieces cut at fractions of their length."""

import dataclasses
import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

import laplace_verify as lv


@pytest.mark.parametrize("name", ["left", "right", "bottom", "top"])
def test_fractions_of_straight_sides_rise_in_x_else_in_y(name):
    plate = lv.Rectangle((1.0, 2.0), (3.0, 6.0)).split(**{name: [0.25]})
    axis = 1 if name in {"left", "right"} else 0
    low, high = (np.sort(plate.pieces[f"{name}-{k}"].ends[:, axis]).tolist() for k in (1, 2))
    start, length = (2.0, 4.0) if axis else (1.0, 2.0)
    assert low == [start, start + 0.25 * length]
    assert high == [start + 0.25 * length, start + length]
    assert plate.pieces[f"{name}-2"].normals([(2, 4)]) == pytest.approx(
        lv.Rectangle((1, 2), (3, 6)).pieces[name].normals([(2, 4)])
    )


def test_curves_are_cut_counter_clockwise_from_angle_zero():
    disc = lv.Disc((0, 0), 1).split(rim=[0.25])
    quarter, rest = disc.pieces
    assert quarter.ends == pytest.approx(np.array([[1, 0], [0, 1]]), abs=1e-15)
    assert rest.measure == pytest.approx(1.5 * math.pi)
    hole = lv.Annulus((0, 0), 1, 2).split(inner=[0.25]).pieces["inner-1"]
    assert hole.ends == pytest.approx(np.array([[0, 1], [1, 0]]), abs=1e-15)  # travelled clockwise
    assert hole.contains([(math.sqrt(0.5), math.sqrt(0.5))]).all()


def test_sides_of_a_sector_are_cut_in_the_direction_of_x():
    sector = lv.Sector(2.0, math.pi).split(start=[0.25], end=[0.25])
    assert sector.pieces.names == ("start-1", "start-2", "end-1", "end-2", "arc")
    assert sector.pieces["start-1"].ends.tolist() == [[0, 0], [0.5, 0]]
    assert sector.pieces["end-1"].ends.tolist() == [[-2, 0], [-1.5, 0]]


def test_both_lips_of_a_slit_can_be_cut():
    disc = lv.Sector(1.0, 2 * math.pi).split(start=[0.5], end=[0.5])
    points, normals, _ = disc.pieces["end-1"].sample(5)
    assert disc.pieces["start-1"].contains(points).all()
    assert not disc.pieces["start-1"].contains(points, normals=normals).any()


def test_splitting_keeps_measure_kind_and_everything_inside(plane_shape):
    whole = dataclasses.replace(plane_shape, splits=())
    name = whole.pieces[0].name
    cut = whole.split(**{name: [0.2, 0.7]})
    parts = [p for p in cut.pieces if p.name.startswith(f"{name}-") and p.name not in whole.pieces.names]
    assert [p.measure / whole.pieces[0].measure for p in parts] == pytest.approx([0.2, 0.5, 0.3], rel=1e-12)
    assert cut.kind == whole.kind
    assert cut.measure == whole.measure
    assert len(cut.junctions) == len(whole.junctions) + (
        2 if whole.junctions and len(whole.pieces[0].ends) else 3
    )
    assert (cut.sample(5, seed=1) == whole.sample(5, seed=1)).all()
    points, normals, _ = whole.pieces[0].sample(50)
    owners = sum(p.contains(points, normals=normals).astype(int) for p in parts)
    assert (owners >= 1).all()
    assert cut != whole


def test_splitting_again_adds_to_the_first():
    plate = lv.Rectangle((0, 0), (1, 1)).split(top=[0.4]).split(left=[0.5])
    assert plate == lv.Rectangle((0, 0), (1, 1)).split(left=[0.5], top=[0.4])
    assert plate.pieces.names == ("left-1", "left-2", "right", "bottom", "top-1", "top-2")
    with pytest.raises(lv.GeometryError, match=r"'top' is already split at \[0.4\]; give all in one call"):
        plate.split(top=[0.6])


@given(st.lists(st.integers(1, 99), min_size=1, max_size=5, unique=True))
def test_parts_of_an_elliptic_rim_have_the_lengths_asked_for(percents):
    fractions = [p / 100 for p in sorted(percents)]
    rim = lv.Ellipse((0, 0), (2, 1)).pieces["rim"]
    parts = lv.Ellipse((0, 0), (2, 1)).split(rim=fractions).pieces
    wanted = np.diff([0.0, *fractions, 1.0]) * rim.measure
    assert [p.measure for p in parts] == pytest.approx(wanted, rel=1e-10)
    assert [p.quadrature(2)[2].sum() for p in parts] == pytest.approx(wanted, rel=1e-10)


@pytest.mark.parametrize(
    ("shape", "fractions", "message"),
    [
        (lv.Rectangle((0, 0), (1, 1)), {"topp": [0.5]},
         "cannot split 'topp': no such piece; did you mean 'top'"),
        (lv.Rectangle((0, 0), (1, 1)), {"top": [0.0, 0.5]}, r"must rise strictly inside \(0, 1\)"),
        (lv.Rectangle((0, 0), (1, 1)), {"top": [0.5, 1.0]}, r"must rise strictly inside \(0, 1\)"),
        (lv.Rectangle((0, 0), (1, 1)), {"top": [0.6, 0.4]}, r"got \[0.6, 0.4\]"),
        (lv.Rectangle((0, 0), (1, 1)), {"top": [0.5, 0.5]}, "must rise strictly"),
        (lv.Rectangle((0, 0), (1, 1)), {"top": []}, "must rise strictly"),
        (lv.Rectangle((0, 0), (1, 1)), {"top": [float("nan")]}, "must rise strictly"),
        (lv.Rectangle((0, 0), (1, 1)), {"top": 0.5}, "must be a list of numbers, got 0.5"),
        (lv.Rectangle((0, 0), (1, 1)), {"top": ["half"]}, "must be a list of numbers"),
        (lv.Interval(0, 1), {"left": [0.5]}, "only curves and straight sides in 2-D"),
        (lv.Ball((0, 0, 0), 1), {"surface": [0.5]}, "only curves and straight sides in 2-D"),
    ],
)  # fmt: skip
def test_impossible_splits_are_refused(shape, fractions, message):
    with pytest.raises(lv.GeometryError, match=message):
        shape.split(**fractions)
