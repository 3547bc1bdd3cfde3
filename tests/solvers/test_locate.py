"""Finding the cell that holds a point."""

import numpy as np
import pytest

from laplace_verify.solvers.cells import CellMesh, connectivity
from laplace_verify.solvers.elements import ELEMENTS
from laplace_verify.solvers.locate import Locator

NAMES = sorted(ELEMENTS)


def build(points, cells):
    """Return mesh and locator."""
    mesh = CellMesh(points, connectivity(cells, len(points)))
    return mesh, Locator(mesh)


@pytest.mark.parametrize("name", NAMES)
def test_random_points_of_cells_are_found_where_they_came_from(name, make_mesh, bend):
    points, cells = make_mesh(name, bend=bend)
    mesh, locator = build(points, cells)
    samples = mesh.random(21, 6, np.zeros(len(points)))
    found, at = locator.find(samples.points)
    assert np.array_equal(found, samples.cells)
    block = mesh.blocks[0]
    images = block.pick(found).points(at[:, np.newaxis])[:, 0]
    np.testing.assert_allclose(images, samples.points, rtol=0, atol=1e-12)


@pytest.mark.parametrize("name", NAMES)
def test_nodes_are_found_and_points_outside_are_not(name, make_mesh, bend):
    points, cells = make_mesh(name, bend=bend)
    _, locator = build(points, cells)
    found, _ = locator.find(points)
    assert (found >= 0).all()
    found, at = locator.find(points + 3.0)
    assert (found == -1).all()
    assert np.isnan(at).all()


def test_points_just_outside_a_curved_edge_are_outside():
    """The quarter disc as one triangle6: its edge bulges out of the box of its corners only a little."""
    half = np.sqrt(0.5)
    points = np.array([[0, 0], [1, 0], [0, 1], [0.5, 0], [half, half], [0, 0.5]])
    _, locator = build(points, {"triangle6": [[0, 1, 2, 3, 4, 5]]})
    found, _ = locator.find(np.array([[half, half], [half - 1e-3, half - 1e-3], [half + 1e-3, half + 1e-3]]))
    assert found.tolist() == [0, 0, -1]


def test_cells_that_bulge_beyond_all_their_nodes_still_hold_their_points():
    """The right side is a parabola through x = 2, 2.1 and 1.6: its farthest point is no node."""
    points = np.array([[0, 0], [2, 0], [1.6, 2], [0, 2], [1, 0], [2.1, 1], [0.8, 2], [0, 1]])
    mesh, locator = build(points, {"quad8": [[0, 1, 2, 3, 4, 5, 6, 7]]})
    samples = mesh.random(4, 4000, np.zeros(8))
    assert samples.points[:, 0].max() > 2.1
    assert (locator.find(samples.points)[0] == 0).all()


def test_quarter_point_cells_are_no_folded_cells():
    """Edge nodes a quarter of the way along give r^(1/2) at corner 0; det J vanishes there only."""
    points = np.array([[0, 0], [1, 0], [0, 1], [0.25, 0], [0.5, 0.5], [0, 0.25]])
    mesh, locator = build(points, {"triangle6": [[0, 1, 2, 3, 4, 5]]})
    assert mesh.volumes().sum() == pytest.approx(0.5, rel=1e-13, abs=0)
    samples = mesh.random(4, 50, np.zeros(6))
    assert (locator.find(samples.points)[0] == 0).all()


def test_rounding_on_the_rim_is_forgiven():
    points = np.array([[0, 0], [1, 0], [0, 1], [1, 1.0]])
    _, locator = build(points, {"triangle": [[0, 1, 2], [1, 3, 2]]})
    found, _ = locator.find(np.array([[1 + 1e-12, 0.5], [1 + 1e-6, 0.5]]))
    assert found.tolist() == [1, -1]


def test_graded_meshes_are_searched_exactly():
    """Cells shrink by 2 towards the origin: the largest is 2^30 times the smallest."""
    x = np.concatenate([[0.0], 0.5 ** np.arange(30, -1, -1)])
    axes = np.meshgrid(x, x, indexing="ij")
    points = np.column_stack([axis.ravel() for axis in axes])
    index = np.arange(len(points)).reshape(len(x), len(x))
    quads = np.stack([index[:-1, :-1], index[1:, :-1], index[1:, 1:], index[:-1, 1:]], axis=-1).reshape(-1, 4)
    mesh, locator = build(points, {"quad": quads})
    samples = mesh.random(9, 2, np.zeros(len(points)))
    assert np.array_equal(locator.find(samples.points)[0], samples.cells)


def test_a_mesh_far_from_the_origin_is_searched_to_rounding():
    points = np.array([[0, 0], [1, 0], [1.2, 1], [0, 0.9]]) * 1e-2 + 1e3
    mesh, locator = build(points, {"quad": [[0, 1, 2, 3]]})
    samples = mesh.random(9, 20, np.zeros(4))
    assert (locator.find(samples.points)[0] == 0).all()


def test_many_points_are_handled_in_portions(make_mesh, monkeypatch):
    monkeypatch.setattr("laplace_verify.solvers.locate.PAIRS", 7)
    points, cells = make_mesh("quad", n=4)
    mesh, locator = build(points, cells)
    samples = mesh.random(2, 3, np.zeros(len(points)))
    assert np.array_equal(locator.find(samples.points)[0], samples.cells)
    assert locator.find(np.empty((0, 2)))[0].shape == (0,)
