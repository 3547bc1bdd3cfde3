"""Probes: that every case has them inside, next to each piece, and next to each corner."""

import math

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.measure.windows import through_window
from laplace_verify.references import probes_of

IDS = [case.id for case in lv.catalogue.select(ill_posed=False)]
BOTH = ("1e-3 of the extent from", "1e-6 of the extent from")


def numbers(probes):
    return np.array([[float(c) for c in probe.point] for probe in probes])


@pytest.mark.parametrize("id_", IDS)
def test_probes_lie_strictly_inside_where_they_say(id_):
    case = lv.catalogue[id_]
    shape, probes = through_window(case).problem.shape, probes_of(case)
    points = numbers(probes)
    assert len(probes) >= 12
    assert len({probe.point for probe in probes}) == len(probes)
    assert shape.contains(points).all()
    depth = shape.distance(points) / shape.extent
    for probe, point, deep in zip(probes, points, depth, strict=True):
        words = probe.place.split(" of the extent from ")
        if len(words) == 1:
            assert probe.place == "inside"
            assert deep > 1e-3
            continue
        away, what = float(words[0]), words[1]
        if what.startswith("the "):  # a corner, an edge, a singular point: its coordinates follow, six digits
            place = np.array([float(c) for c in what[what.index("(") + 1 : -1].split(",")])
            assert np.sqrt(((point - place) ** 2).sum()) / shape.extent <= 1.01 * away + 1e-5
            assert 0.1 * away < deep < 1.01 * away or deep > away  # a meeting of regions lies inside
        else:
            assert deep == pytest.approx(away, rel=1e-3)
            foot = shape.pieces[what].project(point[None, :])[0]
            assert math.dist(foot, point) == pytest.approx(away * shape.extent, rel=1e-3)


@pytest.mark.parametrize("id_", ["plate-hot-side", "slit-plate", "disc-step", "cylinder-hot-side"])
def test_every_piece_and_singular_point_has_a_neighbour(id_):
    case = lv.catalogue[id_]
    places = [probe.place for probe in probes_of(case)]
    for piece in case.problem.shape.pieces:
        assert any(place.endswith(f"extent from {piece.name}") for place in places)
    for x, y in case.regularity.singular_points if case.dim == 2 else ():
        at = f"the singular point ({x + 0.0:.6g}, {y + 0.0:.6g})"
        assert sum(place.endswith(at) for place in places) >= 1
    assert all(any(place.startswith(away) for place in places) for away in BOTH)


def test_probes_repeat_and_differ_from_case_to_case():
    first, again = (probes_of(lv.catalogue["plate-saddle"]) for _ in range(2))
    other = probes_of(lv.catalogue["plate-cubic"])  # on the same plate
    assert first == again
    assert first[0].point != other[0].point
