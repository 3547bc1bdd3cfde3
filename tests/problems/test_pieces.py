from __future__ import annotations

import math
import pickle

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.fields.piecewise import ramp
from laplace_verify.fields.rectangle_series import rectangle_series
from laplace_verify.problems import MoveLog, Piece, Pieces

TINY = 1e-12  # data are values of smooth functions of order one: some thousand roundings at most


def test_data_of_every_kind_agree_with_hand_derivatives() -> None:
    # u = x^2 - y^2 on [0, 2] x [0, 1], K = 3; at (2, y): u_x = 4, at (x, 1): u_y = -2
    shape = lv.Rectangle((0, 0), (2, 1))
    plate = lv.case(
        shape, {"right": "neumann", "top": lv.robin("1 + x")}, lv.fields.polynomial(2), 3.0
    ).problem
    y = np.array([0.1, 0.5, 0.75])
    right = np.stack([np.full(3, 2.0), y], axis=1)
    np.testing.assert_allclose(plate.pieces["right"].data(right), 12.0, rtol=TINY, atol=0)
    top = np.array([[0.5, 1.0], [2.0, 1.0]])
    expected = -6.0 + (1 + top[:, 0]) * (top[:, 0] ** 2 - 1)
    np.testing.assert_allclose(plate.pieces["top"].data(top), expected, rtol=TINY, atol=TINY)
    np.testing.assert_allclose(plate.pieces["top"].alpha(top), [1.5, 3.0], rtol=TINY, atol=0)
    np.testing.assert_allclose(plate.pieces["bottom"].data([[1.5, 0.0]]), 2.25, rtol=TINY, atol=0)


def test_neumann_data_use_the_tensor() -> None:
    # u = x + 2 y, K = [[2, 1], [1, 3]]: K grad u = (4, 7)
    k = [[2.0, 1.0], [1.0, 3.0]]
    shape = lv.Rectangle((0, 0), (1, 1))
    plate = lv.case(shape, {"left": "neumann", "top": "neumann"}, lv.fields.affine((1, 2)), k).problem
    assert plate.pieces["left"].data([[0.0, 0.5]]).tolist() == [-4.0]
    assert plate.pieces["top"].data([[0.5, 1.0]]).tolist() == [7.0]


def test_points_are_moved_onto_curved_pieces_and_data_taken_there() -> None:
    disc = lv.case(lv.Disc((0, 0), 0.5), {}, lv.fields.polynomial(2)).problem  # size 1
    phi = np.array([0.3, 1.1, 4.0])
    inside = 0.45 * np.stack([np.cos(phi), np.sin(phi)], axis=1)  # moved by 0.05
    np.testing.assert_allclose(disc.pieces["rim"].data(inside), 0.25 * np.cos(2 * phi), rtol=0, atol=TINY)
    with pytest.raises(lv.ProblemError, match=r"point 1 = .*not on piece 'rim': it lies 0\.2 away"):
        disc.pieces["rim"].data([[0.5, 0.0], [0.0, 0.3]])


def test_flat_pieces_refuse_a_move_beyond_round_off(square) -> None:
    top = lv.case(square, {}, lv.fields.affine((1, 1))).problem.pieces["top"]
    np.testing.assert_allclose(top.data([[0.5, 1.0 + 5e-10]]), 1.5, rtol=0, atol=1e-15)
    with pytest.raises(lv.ProblemError, match=r"point 0 = \(0\.5, 0\.99\).*piece 'top'.*0\.01 away"):
        top.data([[0.5, 0.99]])


def test_given_data_are_moved_too() -> None:
    rim = lv.problem(lv.Disc((0, 0), 1.0), {"rim": lv.dirichlet("x")}).pieces["rim"]
    np.testing.assert_allclose(rim.data([[0.9, 0.0]]), 1.0, rtol=0, atol=1e-15)


def test_moves_are_logged_per_piece_on_the_watched_twin_only() -> None:
    problem = lv.case(lv.Disc((0, 0), 1.0), {"rim": lv.robin(1)}, lv.fields.polynomial(1)).problem
    twin, log = problem.watched()
    assert isinstance(log, MoveLog)
    twin.pieces["rim"].data([[0.99, 0.0], [0.0, 0.97]])
    twin.pieces["rim"].alpha([[0.98, 0.0]])
    problem.pieces["rim"].data([[0.95, 0.0]])
    assert log.largest == {"rim": pytest.approx(0.03, rel=1e-12)}


def test_each_piece_gives_its_own_limit_where_data_jump(square, angle) -> None:
    # the angle is 0 along the bottom and pi/2 along the left side
    problem = lv.case(square, {}, angle).problem
    corner = np.array([[0.0, 0.0], [0.0, 1e-13]])
    assert problem.pieces["bottom"].data(corner[:1]).tolist() == [0.0]
    np.testing.assert_allclose(problem.pieces["left"].data(corner), math.pi / 2, rtol=0, atol=1e-13)


def test_a_jump_limit_is_extrapolated_linearly(square, angle) -> None:
    # theta + x + 3 y along the left side: pi/2 + 3 y
    problem = lv.case(square, {}, angle + lv.fields.affine((1, 3), constant=5)).problem
    found = problem.pieces["left"].data([[0.0, 0.0]])
    np.testing.assert_allclose(found, math.pi / 2 + 5, rtol=0, atol=1e-13)  # delta alone would leave 3e-7


def test_a_jump_in_the_middle_of_a_piece_gives_the_mean(angle) -> None:
    strip = lv.Rectangle((-1, 0), (1, 1))
    bottom = lv.case(strip, {}, angle).problem.pieces["bottom"]
    np.testing.assert_allclose(bottom.data([[0.0, 0.0]]), math.pi / 2, rtol=0, atol=1e-12)


def test_an_infinite_flux_is_refused_and_a_vanishing_one_is_its_limit() -> None:
    corner = lv.fields.wedge("2/3", "sin")
    insulated = lv.case(lv.LShape(1.0), {"side-1": "neumann"}, corner).problem.pieces["side-1"]
    with pytest.raises(lv.ProblemError, match=r"flux .* on piece 'side-1' has no finite limit at point 1"):
        insulated.data([[0.5, 0.0], [0.0, 0.0]])
    even = lv.fields.wedge("2/3", "cos")
    smooth = lv.case(lv.LShape(1.0), {"side-1": "neumann"}, even).problem.pieces["side-1"]
    np.testing.assert_allclose(smooth.data([[0.0, 0.0]]), 0.0, rtol=0, atol=1e-10)


def test_a_flux_with_a_weaker_singular_part_is_no_limit() -> None:
    # r^(2/3) cos is insulated along side-1, but r^(4/3) sin adds a flux r^(1/3): no linear extrapolation
    mixed = lv.fields.wedge("2/3", "cos") + lv.fields.wedge("4/3", "sin")
    side = lv.case(lv.LShape(1.0), {"side-1": "neumann"}, mixed).problem.pieces["side-1"]
    with pytest.raises(lv.ProblemError, match="no finite limit"):
        side.data([[0.0, 0.0]])


def test_the_value_at_a_power_singularity_is_finite() -> None:
    side = lv.case(lv.LShape(1.0), {}, lv.fields.wedge("2/3")).problem.pieces["side-6"]
    np.testing.assert_allclose(side.data([[0.0, 0.0], [0.0, -1.0]]), 0.0, rtol=0, atol=1e-15)


def test_the_lips_of_a_slit_have_their_own_data(slit_disc) -> None:
    # r^(1/2) cos(theta/2): sqrt(r) on the lip theta = 0, -sqrt(r) on the lip theta = 2 pi
    field = lv.fields.wedge("1/2", "cos", cut=2 * math.pi)
    problem = lv.case(slit_disc, {}, field).problem
    places = np.array([[0.25, 0.0], [0.81, 0.0], [1.0, 0.0]])
    np.testing.assert_allclose(problem.pieces["start"].data(places), [0.5, 0.9, 1.0], rtol=TINY, atol=0)
    np.testing.assert_allclose(problem.pieces["end"].data(places), [-0.5, -0.9, -1.0], rtol=TINY, atol=0)


def test_the_ends_of_an_arc_at_a_slit_belong_to_different_lips(slit_disc) -> None:
    field = lv.fields.wedge("1/2", "cos", cut=2 * math.pi)
    halves = slit_disc.split(arc=[0.5])
    problem = lv.case(halves, {}, field).problem
    np.testing.assert_allclose(problem.pieces["arc-1"].data([[1.0, 0.0]]), 1.0, rtol=TINY, atol=0)
    np.testing.assert_allclose(problem.pieces["arc-2"].data([[1.0, 0.0]]), -1.0, rtol=TINY, atol=0)


def test_fluxes_on_the_lips_have_opposite_normals(slit_disc) -> None:
    # r^(1/2) sin(theta/2) has u_y = 1/(2 sqrt r) on the upper lip (n = -e_y), -1/(2 sqrt r) on the lower one
    field = lv.fields.wedge("1/2", "sin", cut=2 * math.pi)
    problem = lv.case(slit_disc, {"start": "neumann", "end": "neumann"}, field).problem
    for name in ("start", "end"):
        np.testing.assert_allclose(problem.pieces[name].data([[0.25, 0.0]]), -1.0, rtol=TINY, atol=0)


def test_alpha_belongs_to_robin_and_is_never_negative(square) -> None:
    conditions = {"top": lv.robin("x - 0.02"), "right": "neumann"}
    plate = lv.case(square, conditions, lv.fields.affine((1, 1))).problem
    assert plate.pieces["right"].alpha([[1.0, 0.5]]).tolist() == [0.0]
    assert plate.pieces["top"].alpha([[1.0, 1.0]]).tolist() == [0.98]
    with pytest.raises(lv.ProblemError, match=r"alpha of piece 'top' must be >= 0, but it is -0\.01 at"):
        plate.pieces["top"].alpha([[0.01, 1.0], [0.9, 1.0]])
    with pytest.raises(lv.ProblemError, match="'left' has a dirichlet condition"):
        plate.pieces["left"].alpha([[0.0, 0.5]])


def test_bad_data_and_coefficients_show_when_the_problem_is_posed(square) -> None:
    """Not in the middle of a solver's run, where they would look like its error."""
    fixed = {name: lv.dirichlet(0) for name in ("left", "right", "bottom")}
    for alpha in ("x - 0.5", lambda x, _y: -x):
        with pytest.raises(lv.ProblemError, match="alpha of piece 'top' must be >= 0"):
            lv.problem(square, {**fixed, "top": lv.robin(alpha, 0)})
        with pytest.raises(lv.ProblemError, match="alpha of piece 'top' must be >= 0"):
            lv.case(square, {"top": lv.robin(alpha)}, lv.fields.affine((1, 1)))
    with pytest.raises(lv.ProblemError, match="data of piece 'top' raised ZeroDivisionError"):
        lv.problem(square, {**fixed, "top": lv.neumann(lambda _x, _y: 1 / 0)})
    # a singular point in the middle of a side is no reason to refuse
    lv.problem(square, {**fixed, "top": lv.neumann("1/sqrt((x - 0.5)**2)")})


def test_pieces_are_found_by_name_and_position(square) -> None:
    pieces = lv.case(square, {}, lv.fields.affine((1, 1))).problem.pieces
    assert isinstance(pieces, Pieces)
    assert isinstance(pieces["top"], Piece)
    assert pieces[0].name == pieces.names[0] == "left"
    assert (pieces["top"].partner, pieces["top"].shift) == (None, None)
    with pytest.raises(lv.ProblemError, match="did you mean 'bottom'"):
        pieces["botom"]


def test_a_piece_shows_the_geometry_of_its_boundary(square) -> None:
    top = lv.case(square, {}, lv.fields.affine((1, 1))).problem.pieces["top"]
    points, normals, weights = top.sample(4)
    assert points.shape == normals.shape == (4, 2)
    assert weights.sum() == pytest.approx(top.measure, rel=1e-15)
    assert top.contains(points).all()
    assert not top.contains(points - [0, 0.5]).any()
    assert top.normals(points).tolist() == [[0.0, 1.0]] * 4
    assert top.project([[0.5, 2.0]]).tolist() == [[0.5, 1.0]]
    assert top.point([0.5]).tolist() == [[0.5, 1.0]]
    assert top.ends.shape == (2, 2)
    assert top.quadrature(3)[2].sum() == pytest.approx(1.0, rel=1e-15)


def test_no_points_give_no_data(square) -> None:
    problem = lv.case(square, {"top": lv.robin(1)}, lv.fields.affine((1, 1))).problem
    assert problem.pieces["top"].data(np.zeros((0, 2))).shape == (0,)
    given = lv.problem(square, dict.fromkeys(square.pieces.names, lv.dirichlet("x"))).pieces["top"]
    assert given.data(np.zeros((0, 2))).shape == (0,)


def test_a_problem_survives_the_journey_between_processes(square) -> None:
    problem = lv.case(square, {"top": lv.robin("x")}, lv.fields.exp_trig(1)).problem
    twin = pickle.loads(pickle.dumps(problem))
    places = np.array([[0.1, 1.0], [0.7, 1.0], [1.0, 1.0]])
    assert twin.pieces["top"].data(places).tolist() == problem.pieces["top"].data(places).tolist()


def test_the_hot_side_of_a_plate_keeps_its_own_corner_values(square) -> None:
    # u = 1 on top and 0 elsewhere: each piece has its own limit in the corners
    plate = lv.case(square, {}, rectangle_series((0, 0), (1, 1), 1)).problem
    corner = [[0.0, 1.0]]
    np.testing.assert_allclose(plate.pieces["top"].data(corner), 1.0, rtol=0, atol=1e-13)
    np.testing.assert_allclose(plate.pieces["left"].data(corner), 0.0, rtol=0, atol=1e-13)


def test_an_insulated_side_has_no_flux_up_to_the_singular_corner(square) -> None:
    # u = x on top makes u ~ r log r in the corners: the gradient is infinite there, the side's own flux is 0
    plate = rectangle_series((0, 0), (1, 1), ramp(0, 1), neighbours="insulated")
    conditions = {"left": "neumann", "right": "neumann"}
    case = lv.case(square, conditions, plate, quantities={"top": lv.flux_through("top")})
    np.testing.assert_allclose(case.problem.pieces["left"].data([[0.0, 1.0]]), 0.0, rtol=0, atol=1e-12)
    # by symmetry about the middle the mean of u on any level is y/2: the flux through every level is 1/2
    assert abs(case.quantities["top"].value - 0.5) <= case.quantities["top"].radius <= 1e-11
    hot = lv.case(square, {"top": "neumann"} | conditions, plate).problem.pieces["top"]
    with pytest.raises(lv.ProblemError, match="no finite limit"):
        hot.data([[0.0, 1.0]])
