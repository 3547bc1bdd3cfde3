"""Triangulations: they fill the shape, tag its whole boundary, keep their quality and refine evenly."""

from __future__ import annotations

import math

import numpy as np
import pytest

from laplace_verify.errors import GeometryError
from laplace_verify.geometry import (
    Annulus,
    Box,
    ConfocalParabolas,
    Disc,
    Ellipse,
    EllipticRing,
    LShape,
    Polygon,
    Rectangle,
    Sector,
)
from laplace_verify.geometry.meshes import Mesh, subdivide, triangulate

SQUARE = ((0, 0), (4, 0), (4, 4), (0, 4))
HOLES = (((1, 1), (1, 2), (2, 2), (2, 1)), ((3, 3), (3, 3.5), (3.5, 3.5), (3.5, 3)))
SLIT = Polygon(((0, 0), (1, 0), (1, 1), (0, 1), (0, 0.5), (0.5, 0.5), (0, 0.5)))
FLAT = [
    pytest.param(Rectangle((0, 0), (2, 1)), id="rectangle"),
    pytest.param(Rectangle((0, 0), (2, 1)).split(top=[0.4], bottom=[0.4, 0.9]), id="rectangle split"),
    pytest.param(LShape(1.5), id="l-shape"),
    pytest.param(Polygon(((0, 0), (2, 0), (2, 1), (1, 2), (0, 1))), id="pentagon"),
    pytest.param(Polygon(((0, 0), (5, 0), (5, 5), (3, 5), (3, 2), (2, 2), (2, 5), (0, 5))), id="u-shape"),
    pytest.param(Polygon(SQUARE, holes=HOLES), id="two holes"),
    pytest.param(Polygon(SQUARE).split(**{"side-1": [0.5]}), id="square split"),
    pytest.param(SLIT, id="slit"),
]
CURVED = [
    pytest.param(Disc((1, 2), 0.5), id="disc"),
    pytest.param(Disc((0, 0), 1.0).split(rim=[0.3]), id="disc split"),
    pytest.param(Ellipse((0, 0), (2, 1)).split(rim=[0.1, 0.35]), id="ellipse split"),
    pytest.param(Annulus((0, 0), 0.5, 1.0).split(inner=[0.3], outer=[0.2, 0.9]), id="annulus split"),
    pytest.param(Annulus((0, 0), 0.4, 1.0, (0.2, 0.0)), id="eccentric annulus"),
    pytest.param(EllipticRing((0, 1), (1.0, 0.8), (1.56, 1.44)), id="elliptic ring"),
    pytest.param(EllipticRing((0, 1), (0.5, 1), (1.5, 2)).split(inner=[0.3], outer=[0.2]), id="ring split"),
    pytest.param(Sector(1.0, math.pi / 2), id="quarter disc"),
    pytest.param(Sector(1.0, 1.5 * math.pi).split(arc=[0.3], start=[0.6]), id="sector split"),
    pytest.param(Sector(2.0, 2 * math.pi), id="slit disc"),
    pytest.param(ConfocalParabolas((0.2, -0.1), 0.4, 1.1), id="parabolas"),
    pytest.param(ConfocalParabolas((0, 0), 1, 1).split(right=[0.371]), id="parabolas split"),
]


def lengths(mesh: Mesh, name: str) -> np.ndarray:
    """Return the lengths of the boundary edges of a piece."""
    start, end = np.moveaxis(mesh.points[mesh.boundary[name]], 1, 0)
    return np.linalg.norm(end - start, axis=1)


def quality(mesh: Mesh) -> float:
    """Return the smallest 4 sqrt(3) area / (sum of squared edges): 1 for equilateral triangles."""
    corners = mesh.points[mesh.triangles]
    edges = np.linalg.norm(corners - np.roll(corners, 1, axis=1), axis=2)
    return float(np.min(4 * math.sqrt(3) * mesh.areas / np.sum(edges**2, axis=1)))


@pytest.mark.parametrize("shape", FLAT)
@pytest.mark.parametrize("n", [1, 3, 6])
def test_triangles_fill_a_polygon_exactly(shape, n):
    mesh = triangulate(shape, n)
    assert np.all(mesh.areas > 0)
    assert mesh.areas.sum() == pytest.approx(shape.measure, rel=1e-13)
    for piece in shape.pieces:
        assert lengths(mesh, piece.name).sum() == pytest.approx(piece.measure, rel=1e-13)


@pytest.mark.parametrize("shape", CURVED)
def test_triangles_fill_a_curved_shape_to_second_order(shape):
    missing = []
    for n in (8, 16):
        mesh = triangulate(shape, n)
        assert np.all(mesh.areas > 0)
        missing.append([shape.measure - mesh.areas.sum()])
        missing[-1] += [
            piece.measure - lengths(mesh, piece.name).sum() for piece in shape.pieces if piece.curved
        ]
    ratio = np.array(missing[0]) / np.array(missing[1])
    # Chords miss h^2 of an arc: a ratio of four; split arcs get cells of slightly different length.
    assert np.all(ratio > 3.5)
    assert np.all(ratio < 4.6)


@pytest.mark.parametrize("shape", FLAT + CURVED)
def test_the_tagged_edges_are_the_whole_boundary_once_with_the_domain_on_their_left(shape):
    mesh = triangulate(shape, 4)
    assert tuple(sorted(mesh.boundary)) == tuple(sorted(shape.pieces.names))
    edges = np.concatenate([mesh.triangles[:, [k, (k + 1) % 3]] for k in range(3)])
    directed = {tuple(edge) for edge in edges.tolist()}
    assert len(directed) == len(edges)  # no two triangles overlap
    tagged = [tuple(edge) for piece in mesh.boundary.values() for edge in piece.tolist()]
    outer = {edge for edge in directed if edge[::-1] not in directed}
    assert len(tagged) == len(set(tagged))
    assert outer == set(tagged)


@pytest.mark.parametrize("shape", FLAT + CURVED)
def test_boundary_nodes_lie_on_their_piece_and_its_ends_are_nodes(shape):
    mesh = triangulate(shape, 6)
    for piece in shape.pieces:
        nodes = mesh.points[np.unique(mesh.boundary[piece.name])]
        assert piece.contains(nodes).all()
        for end in piece.ends:
            assert np.min(np.linalg.norm(nodes - end, axis=1)) < 1e-12 * shape.size


@pytest.mark.parametrize("shape", FLAT + CURVED)
def test_quality_does_not_sink_and_h_halves_with_refinement(shape):
    coarse, fine = triangulate(shape, 6), triangulate(shape, 24)
    assert quality(fine) > 0.25
    assert quality(fine) > 0.85 * quality(coarse)
    assert coarse.h / fine.h == pytest.approx(4.0, rel=0.15)


@pytest.mark.parametrize("shape", [Polygon(SQUARE, holes=HOLES), LShape(1.0), Disc((0, 0), 1.0)])
def test_meshes_with_n_and_two_n_cells_are_nested(shape):
    coarse, fine = triangulate(shape, 3), triangulate(shape, 6)
    gaps = np.linalg.norm(coarse.points[:, np.newaxis] - fine.points, axis=2).min(axis=1)
    assert gaps.max() < 1e-12


def test_the_lips_of_a_slit_share_places_but_no_nodes_except_the_tip():
    mesh = triangulate(SLIT, 4)
    upper, lower = (set(np.unique(mesh.boundary[name]).tolist()) for name in ("side-5", "side-6"))
    assert len(upper & lower) == 1
    np.testing.assert_allclose(mesh.points[(upper & lower).pop()], [0.5, 0.5], rtol=0, atol=1e-15)
    places = [{tuple(np.round(mesh.points[k], 12)) for k in lip} for lip in (upper, lower)]
    assert places[0] == places[1]


def test_diagonals_are_flipped_until_opposite_angles_sum_to_at_most_pi():
    corners = [(math.cos(t), math.sin(t)) for t in (0, 0.4, 1.1, 2.2, 3.0, 4.1, 5.2)]
    mesh = triangulate(Polygon(corners), 1)
    opposite = {}
    for triangle in mesh.triangles.tolist():
        for k in range(3):
            opposite[triangle[k], triangle[(k + 1) % 3]] = triangle[(k + 2) % 3]
    inner = [(a, b) for a, b in opposite if (b, a) in opposite]
    assert inner
    for a, b in inner:
        total = 0.0
        for c in (opposite[a, b], opposite[b, a]):
            p, q = mesh.points[a] - mesh.points[c], mesh.points[b] - mesh.points[c]
            total += math.acos(p @ q / np.linalg.norm(p) / np.linalg.norm(q))
        assert total <= math.pi + 1e-7


def test_subdivide_keeps_every_break_and_about_n_cells():
    marks = subdivide([0.0, 2.0, 0.6, 0.6 + 1e-12], 10)
    assert len(marks) == 11
    assert np.min(np.abs(marks - 0.6)) < 1e-11
    assert np.all(np.diff(marks) > 0.19)
    assert len(subdivide([0.0, 0.01, 0.02, 1.0], 2)) == 4  # more breaks than cells: one cell each


@pytest.mark.parametrize("n", [0, -2, 1.5, True, "8"])
def test_n_must_be_a_positive_integer(n):
    with pytest.raises(GeometryError, match="n, the cells along every side"):
        triangulate(Rectangle((0, 0), (1, 1)), n)


def test_a_solid_cannot_be_triangulated():
    with pytest.raises(GeometryError, match="'box'"):
        triangulate(Box((0, 0, 0), (1, 1, 1)), 2)


def test_too_few_cells_for_the_split_pieces_are_refused():
    with pytest.raises(GeometryError, match="n is too small"):
        triangulate(Sector(1.0, 0.5).split(arc=[0.3, 0.6]), 1)


def test_a_ring_around_a_screen_is_refused():
    with pytest.raises(GeometryError, match="the inner semi-axes must be > 0"):
        triangulate(EllipticRing((0, 0), (1, 0), (2, 1)), 4)
