"""What an answer accepts, refuses, and says at a point."""

import pickle

import numpy as np
import pytest

import laplace_verify as lv

NAN = float("nan")


def hot_plate(shape, **kinds):
    """Return a problem with u = 1 on every piece, or the conditions given by piece."""
    return lv.problem(shape, {piece.name: kinds.get(piece.name, lv.dirichlet(1.0)) for piece in shape.pieces})


@pytest.fixture(scope="module")
def plate():
    """Return a problem on a 2 x 1 plate."""
    return hot_plate(lv.Rectangle((0, 0), (2, 1)))


@pytest.fixture(scope="module")
def disc():
    """Return a problem on the unit disc."""
    return hot_plate(lv.Disc((0, 0), 1))


def grid(nx=4, ny=3):
    """Return the nodes of a grid on the plate, more in x than in y."""
    x, y = np.meshgrid(np.linspace(0, 2, nx), np.linspace(0, 1, ny), indexing="ij")
    return np.column_stack([x.ravel(), y.ravel()])


GRID = grid()
VALUES = GRID @ [1.0, 2.0]


def replaced(values, row, value):
    """Return a copy with one entry replaced."""
    result = np.array(values, dtype=float)
    result[row] = value
    return result


class TestConstruction:
    """Arguments that no problem could accept are refused when the answer is made."""

    @pytest.mark.parametrize(
        ("arguments", "message"),
        [
            ({}, r"points and values, or evaluate, must be given, got neither"),
            ({"gradient": np.sin}, r"points and values, or evaluate, must be given, got gradient only"),
            ({"points": GRID}, r"values must be given too"),
            ({"values": VALUES}, r"points must be given too"),
            ({"evaluate": 3.0}, r"evaluate must be a function of points \(n, d\), got float"),
            ({"evaluate": np.sin, "gradient": VALUES}, r"gradient must be a function .* got ndarray"),
            ({"evaluate": np.sin, "weights": VALUES}, r"weights must come with points and values"),
            ({"evaluate": np.sin, "cells": {"line": [[0, 1]]}}, r"cells must come with points and values"),
            ({"points": GRID.T, "values": VALUES}, r"points must have shape .* looks transposed"),
            ({"points": GRID[:, :, None], "values": VALUES}, r"points must have shape \(n, d\)"),
            ({"points": np.ones((12, 4)), "values": VALUES}, r"points must have 1, 2 or 3 coordinates"),
            ({"points": np.empty((0, 2)), "values": []}, r"points must hold at least one point"),
            ({"points": replaced(GRID, (5, 1), NAN), "values": VALUES}, r"points must be finite, but row 5"),
            ({"points": GRID + 0j, "values": VALUES}, r"points must be real, got complex128"),
            ({"points": [["a", "b"]], "values": [1.0]}, r"points must be real numbers, got list of"),
            ({"points": GRID, "values": VALUES[:-1]}, r"values must have shape \(12,\), .* got \(11,\)"),
            ({"points": GRID, "values": VALUES.reshape(4, 3)}, r"values must have shape \(12,\)"),
            ({"points": GRID, "values": 1.0}, r"values must be an array, one value per point, got 1.0"),
            ({"points": GRID, "values": VALUES + 0j}, r"values must be real, got complex128"),
            ({"points": GRID, "values": ["a"] * 12}, r"values must be real numbers"),
            (
                {"points": GRID, "values": replaced(VALUES, 7, NAN)},
                r"values must be finite, but 1 of 12 are not; values\[7\] is nan at point \[1\.33.*, 0\.5\]",
            ),
            (
                {"points": GRID, "values": replaced(VALUES, [3, 4], np.inf)},
                r"values must be finite, but 2 of 12 are not; values\[3\] is inf",
            ),
            (
                {"points": GRID, "values": np.ma.masked_less(VALUES, 0.5)},
                r"values must not be masked, but 1 of 12",
            ),
            ({"points": GRID, "values": VALUES, "weights": VALUES[:3]}, r"weights must have shape \(12,\)"),
            ({"points": GRID, "values": VALUES, "weights": 1.0}, r"weights must have shape \(12,\)"),
            (
                {"points": GRID, "values": VALUES, "weights": VALUES},
                r"weights must be positive .* weights\[0\] is 0",
            ),
            (
                {"points": GRID, "values": VALUES, "weights": replaced(VALUES + 1, 2, NAN)},
                r"weights must be positive and finite, but 1 of 12 are not; weights\[2\] is nan",
            ),
            ({"points": GRID, "values": VALUES, "location": "node"}, r'location must be "point" or "cell"'),
            ({"points": GRID, "values": VALUES, "cells": {"tri": [[0, 1, 2]]}}, r"cells: 'tri' is no cell"),
            (
                {"points": GRID, "values": VALUES, "cells": {"triangle": [[0, 3, 1]]}, "location": "cell"},
                r"values must have shape \(1,\), one value per cell, got \(12,\)",
            ),
        ],
    )
    def test_arrays_that_do_not_fit_are_refused_by_name(self, arguments, message):
        with pytest.raises(lv.AnswerError, match=message):
            lv.Answer(**arguments)

    @pytest.mark.parametrize(
        ("arguments", "message"),
        [
            ({"h": 0.0}, r"h must be positive, got 0"),
            ({"h": -0.1}, r"h must be positive, got -0.1"),
            ({"h": NAN}, r"h must be finite, got nan"),
            ({"h": "0.1"}, r"h must be a real number, got '0.1'"),
            ({"h_min": np.inf}, r"h_min must be finite"),
            ({"h_min": 0.2, "h_max": 0.1}, r"h_min must be at most h_max"),
            ({"unknowns": 0}, r"unknowns must be a whole number of at least 1, got 0"),
            ({"unknowns": 12.5}, r"unknowns must be a whole number"),
            ({"unknowns": True}, r"unknowns must be a whole number"),
            ({"samples": -3}, r"samples must be a whole number of at least 1"),
            ({"iterations": -1}, r"iterations must be a whole number of at least 0"),
            ({"residual": NAN}, r"residual must be finite"),
            ({"residual": -1.0}, r"residual must be at least 0"),
            ({"standard_error": -1.0}, r"standard_error must be at least 0"),
            ({"standard_error": [0.1, 0.2]}, r"standard_error must have shape \(12,\)"),
            ({"standard_error": replaced(VALUES, 3, NAN)}, r"standard_error must be finite"),
            ({"fluxes": [1.0]}, r"fluxes must be a dict of names and numbers, got list"),
            ({"fluxes": {0: 1.0}}, r"fluxes must have names \(str\) as keys, got 0"),
            ({"fluxes": {"top": NAN}}, r"fluxes\['top'\] must be finite"),
            ({"fluxes": {"top": None}}, r"fluxes\['top'\] must be a real number, got None"),
            ({"quantities": {"discharge": 1j}}, r"quantities\['discharge'\] must be a real number"),
        ],
    )
    def test_numbers_that_make_no_sense_are_refused_by_name(self, arguments, message):
        with pytest.raises(lv.AnswerError, match=message):
            lv.Answer(GRID, VALUES, **arguments)

    def test_everything_sound_is_kept(self):
        answer = lv.Answer(
            GRID,
            VALUES[:, np.newaxis],
            weights=np.full(12, 1 / 6),
            h=np.float32(0.5),
            unknowns=np.int64(12),
            fluxes={"top": np.float64(1.2)},
            residual=0,
            iterations=0,
            standard_error=0.1,
        )
        assert answer.kind == "cloud"
        assert answer.values.shape == (12,)
        assert (answer.h, answer.unknowns, answer.fluxes) == (0.5, 12, {"top": 1.2})
        assert isinstance(answer.h, float)

    def test_the_answer_keeps_copies_that_cannot_be_written_to(self):
        values = VALUES.copy()
        answer = lv.Answer(GRID, values)
        values[0] = 99
        assert answer.values[0] == VALUES[0]
        with pytest.raises(ValueError, match="read-only"):
            answer.values[0] = 1

    def test_coordinates_may_be_a_plain_list_in_one_dimension(self):
        assert lv.Answer([0, 0.5, 1], [1, 2, 3]).points.shape == (3, 1)

    def test_answers_on_cells_travel_between_processes(self):
        answer = lv.Answer([0, 0.5, 1], [1, 2, 3], cells={"line": [[0, 1], [1, 2]]})
        again = pickle.loads(pickle.dumps(answer))
        assert again.value_at([[0.25]]) == pytest.approx([1.5], rel=1e-15, abs=0)

    def test_it_shows_its_kind_and_size_in_one_line(self):
        assert repr(lv.Answer(GRID, VALUES, h=0.25)) == "Answer(cloud, 12 values, h=0.25)"
        assert repr(lv.Answer(evaluate=np.sin)) == "Answer(callable)"


class TestValidation:
    """Arguments that do not fit the problem are refused by `validated`."""

    def test_a_sound_answer_is_returned_as_it_is(self, plate):
        answer = lv.Answer(GRID, VALUES, fluxes={"top": 1.0})
        assert answer.validated(plate) is answer
        assert answer.remarks(plate) == ()

    @pytest.mark.parametrize(
        ("answer", "message"),
        [
            (lv.Answer(GRID[:, :1], VALUES), r"points must have 2 coordinates each for this problem, got 1"),
            (lv.Answer(GRID[:3], VALUES[:3]), r"too few points, at least 4 are needed in 2-D, got 3"),
            (lv.Answer(GRID * [1, 1.001], VALUES), r"points must lie in the shape, but 4 of 12 lie outside"),
            (
                lv.Answer(GRID[:, ::-1], VALUES),
                r"points must lie in the shape, .* the first is points\[6\] = \[0.0, 1.33",
            ),
            (lv.Answer(GRID, VALUES, fluxes={"tpo": 1.0}), r"fluxes: no piece .* 'tpo'; did you mean 'top'"),
            (
                lv.Answer(GRID, VALUES, cells={"quad": [[0, 3, 4, 1]]}),
                r"cells must fill the shape once, but they cover 0\.167",
            ),
        ],
    )
    def test_what_does_not_fit_the_plate_is_refused(self, plate, answer, message):
        with pytest.raises(lv.AnswerError, match=message):
            answer.validated(plate)

    def test_two_points_are_too_few_on_a_line(self):
        rod = hot_plate(lv.Interval(0, 1))
        with pytest.raises(lv.AnswerError, match=r"too few points, at least 3 are needed in 1-D, got 2"):
            lv.Answer([0, 1], [1, 1]).validated(rod)
        lv.Answer([0, 0.5, 1], [1, 1, 1]).validated(rod)

    def test_four_points_are_too_few_in_a_box(self):
        box = hot_plate(lv.Box((0, 0, 0), (1, 1, 1)))
        points = np.random.default_rng(3).random((5, 3))
        with pytest.raises(lv.AnswerError, match=r"too few points, at least 5 are needed in 3-D, got 4"):
            lv.Answer(points[:4], np.ones(4)).validated(box)
        lv.Answer(points, np.ones(5)).validated(box)

    def test_rounding_of_a_mesh_file_is_forgiven(self, plate):
        lv.Answer(GRID * (1 + 1e-7), VALUES).validated(plate)

    def test_points_may_miss_a_curve_by_h_and_no_more(self, disc):
        ring = np.linspace(0, 2 * np.pi, 13)[:-1]
        points = np.column_stack([np.cos(ring), np.sin(ring)])
        lv.Answer(1.05 * points, np.ones(12), h=0.1).validated(disc)
        with pytest.raises(lv.AnswerError, match=r"points must lie in the shape, but 12 of 12"):
            lv.Answer(1.05 * points, np.ones(12), h=0.04).validated(disc)

    def test_the_flat_sides_of_a_sector_forgive_nothing_but_rounding(self):
        slice_ = hot_plate(lv.Sector(1.0, np.pi / 2))
        points = np.array([[0.2, 0.2], [0.3, 0.3], [0.2, 0.4], [0.6, 0.3], [0.72, 0.72]])
        lv.Answer(points, np.ones(5), h=0.1).validated(slice_)
        with pytest.raises(lv.AnswerError, match=r"points must lie in the shape, but 1 of 5"):
            lv.Answer(replaced(points, (0, 1), -0.01), np.ones(5), h=0.1).validated(slice_)

    def test_an_answer_that_is_only_a_function_is_sound(self, plate):
        lv.Answer(evaluate=lambda points: points[:, 0], h=0.1).validated(plate)


class TestRemarks:
    """What is odd without spoiling the answer is said."""

    @pytest.mark.parametrize(
        ("answer", "message"),
        [
            (lv.Answer(GRID, VALUES.astype(np.float32)), "values came as float32: an error floor near 1e-07"),
            (
                lv.Answer(GRID, VALUES, weights=np.full(12, 0.1)),
                "the weights add up to 0.6 of the shape's measure",
            ),
        ],
    )
    def test_clouds(self, plate, answer, message):
        assert message in answer.remarks(plate)[0]

    def test_cells(self, plate):
        nodes = np.array([[0, 0], [2, 0], [2, 0.9], [0, 1], [1, 1]])
        clockwise = {"triangle": [[0, 2, 1], [0, 2, 3]]}
        answer = lv.Answer(nodes, np.ones(5), cells=clockwise, weights=np.ones(5)).validated(plate)
        remarks = " | ".join(answer.remarks(plate))
        assert "1 of 5 nodes belong to no cell" in remarks
        assert "the cells cover 0.95 of the shape's measure" in remarks
        assert "weights are not used" in remarks


class TestEvaluation:
    """An answer is measured as its user would evaluate it."""

    def test_a_callable_gets_all_points_and_may_return_columns(self):
        answer = lv.Answer(
            evaluate=lambda p: (p @ [1.0, 2.0])[:, None], gradient=lambda p: np.tile([1, 2], (len(p), 1))
        )
        points = np.random.default_rng(4).random((20001, 2))
        np.testing.assert_array_equal(answer.value_at(points), points @ [1.0, 2.0])
        assert answer.gradient_at(points).tolist()[-1] == [1.0, 2.0]
        assert answer.kind == "callable"
        assert answer.has_gradient

    def test_a_callable_may_say_nan_but_not_inf(self):
        answer = lv.Answer(evaluate=lambda p: np.where(p[:, 0] > 1, NAN, p[:, 0]))
        assert np.isnan(answer.value_at([[1.5, 0], [0.5, 0]])).tolist() == [True, False]
        with pytest.raises(
            lv.AnswerError, match=r"evaluate must return finite numbers .* got inf at point \[0.5, 0.0\]"
        ):
            lv.Answer(evaluate=lambda p: np.full(len(p), np.inf)).value_at([[0.5, 0]])

    @pytest.mark.parametrize(
        ("returned", "message"),
        [
            (np.ones(2), r"evaluate must have shape \(3,\)"),
            (np.ones((3, 3)), r"evaluate must have shape \(3,\)"),
            (np.ones(3) * 1j, r"evaluate must be real"),
            (None, r"evaluate must be real numbers, got None"),
            ([1.0, None, 2.0], r"evaluate must be real numbers, got None"),
            (["1.5", "2", "3"], r"evaluate must be real numbers, got list of"),
            ([[1.0], [1.0, 2.0]], r"evaluate must be a rectangular array of numbers"),
            ("warm", r"evaluate must be real numbers"),
            (np.ma.masked_equal([1.0, 2.0, 3.0], 2.0), r"evaluate must not be masked"),
        ],
    )
    def test_what_a_callable_returns_is_checked(self, returned, message):
        with pytest.raises(lv.AnswerError, match=message):
            lv.Answer(evaluate=lambda _: returned).value_at(np.zeros((3, 2)))

    @pytest.mark.parametrize(
        ("returned", "message"),
        [
            (np.ones((2, 3)), r"gradient must return shape \(3, 2\), got \(2, 3\); it looks transposed"),
            (np.ones(3), r"gradient must return shape \(3, 2\), got \(3,\)"),
            (np.full((3, 2), 1j), r"gradient must return real numbers"),
            (np.full((3, 2), np.inf), r"gradient must return finite numbers"),
        ],
    )
    def test_what_a_gradient_returns_is_checked(self, returned, message):
        with pytest.raises(lv.AnswerError, match=message):
            lv.Answer(evaluate=np.sin, gradient=lambda _: returned).gradient_at(np.zeros((3, 2)))

    def test_a_solver_that_writes_into_its_points_does_no_harm(self):
        def greedy(points):
            points *= 0
            return points[:, 0]

        asked = np.ones((3, 2))
        lv.Answer(evaluate=greedy).value_at(asked)
        assert (asked == 1).all()

    def test_a_cloud_speaks_at_its_nodes_only(self):
        answer = lv.Answer(GRID, VALUES)
        asked = np.array([GRID[5] + 1e-12, [0.123, 0.5]])
        value = answer.value_at(asked)
        assert value[0] == VALUES[5]
        assert np.isnan(value[1])
        assert answer.gradient_at(asked) is None
        assert not answer.has_gradient
        with pytest.raises(lv.AnswerError, match="cells: this answer has none"):
            answer.element_quadrature(2)

    def test_cells_speak_everywhere_inside(self, make_mesh):
        points, cells = make_mesh("triangle6", n=3)
        values = points[:, 0] ** 2 - points[:, 1] ** 2
        answer = lv.Answer(points, values, cells=cells)
        asked = np.random.default_rng(6).random((40, 2))
        np.testing.assert_allclose(
            answer.value_at(asked), asked[:, 0] ** 2 - asked[:, 1] ** 2, rtol=0, atol=1e-13
        )
        np.testing.assert_allclose(answer.gradient_at(asked), asked * [2, -2], rtol=0, atol=1e-12)
        assert np.isnan(answer.value_at([[1.2, 0.3]])).all()
        assert np.isnan(answer.gradient_at([[1.2, 0.3]])).all()

    def test_linear_cells_do_not_reproduce_a_quadratic(self, make_mesh):
        points, cells = make_mesh("triangle", n=3)
        answer = lv.Answer(points, points[:, 0] ** 2, cells=cells)
        asked = np.random.default_rng(6).random((40, 2))
        assert np.abs(answer.value_at(asked) - asked[:, 0] ** 2).max() > 1e-2

    def test_a_mesh_of_two_kinds_speaks_on_both(self):
        nodes = np.array([[0, 0], [1, 0], [2, 0], [0, 1], [1, 1.0]])
        answer = lv.Answer(nodes, nodes @ [1.0, 3.0], cells={"quad": [[0, 1, 4, 3]], "triangle": [[1, 2, 4]]})
        assert answer.value_at([[1.2, 0.3], [0.2, 0.7]]) == pytest.approx([2.1, 2.3], rel=1e-14, abs=0)

    def test_values_per_cell_are_constant_there(self):
        answer = lv.Answer([0, 0.5, 1], [3, 4], cells={"line": [[0, 1], [1, 2]]}, location="cell")
        assert answer.value_at([[0.1], [0.9]]).tolist() == [3, 4]
        assert answer.gradient_at([[0.1]]) is None
        assert answer.element_quadrature(2).gradients is None
        assert answer.degrees_of_freedom == 2

    def test_element_quadrature_integrates_the_solution_of_cells(self, make_mesh):
        points, cells = make_mesh("quad", n=3)
        answer = lv.Answer(points, points[:, 0] * points[:, 1], cells=cells)
        samples = answer.element_quadrature(2)
        # Integral of xy over the unit square.
        assert samples.weights @ samples.values == pytest.approx(0.25, rel=1e-14, abs=0)
        # Integral of |grad xy|^2 = x^2 + y^2.
        assert samples.weights @ (samples.gradients**2).sum(axis=1) == pytest.approx(2 / 3, rel=1e-14, abs=0)

    def test_the_solvers_own_gradient_takes_the_place_of_the_cells(self, make_mesh):
        points, cells = make_mesh("quad", n=2)
        answer = lv.Answer(
            points, points[:, 0], cells=cells, gradient=lambda p: np.tile([7.0, 8.0], (len(p), 1))
        )
        assert answer.gradient_at([[0.3, 0.3]]).tolist() == [[7, 8]]
        assert answer.element_quadrature(1).gradients[0].tolist() == [7, 8]
        assert answer.random_points(1, 2).gradients[0].tolist() == [7, 8]

    def test_points_of_another_dimension_are_refused(self):
        with pytest.raises(lv.AnswerError, match=r"points must have shape \(n, 2\)"):
            lv.Answer(GRID, VALUES).value_at(np.zeros((3, 3)))
