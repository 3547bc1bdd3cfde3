from __future__ import annotations

import numpy as np
import pytest

import laplace_verify as lv

PLACES = np.array([[0.25, 0.0], [0.5, 0.0], [0.75, 0.0]])  # n = 3 points, d = 2


def bottom_data(square, f):
    fill = dict.fromkeys(("left", "right", "top"), lv.dirichlet(0))
    return lv.problem(square, {**fill, "bottom": lv.dirichlet(f)}).pieces["bottom"].data(PLACES)


@pytest.mark.parametrize(
    "f",
    [
        pytest.param("x**2 - y", id="formula"),
        pytest.param(lambda x, y: x**2 - y, id="coordinates"),
        pytest.param(lambda p: p[:, 0] ** 2 - p[:, 1], id="array"),
        pytest.param(lambda x, y, power=2: x**power - y, id="default argument"),
        pytest.param(lambda *p: p[0] ** 2 - p[1], id="star"),
        pytest.param(lv.fields.polynomial(2), id="field"),
    ],
)
def test_every_form_of_data_gives_the_same_values(square, f) -> None:
    # x^2 at 1/4, 1/2, 3/4: exact in binary
    assert bottom_data(square, f).tolist() == [0.0625, 0.25, 0.5625]


def test_a_number_and_a_ufunc_are_data() -> None:
    duct = lv.problem(lv.Interval(0, 2), {"left": lv.dirichlet(np.square), "right": lv.dirichlet(7)})
    assert duct.pieces["right"].data([2.0]).tolist() == [7.0]
    assert duct.pieces["left"].data([0.0]).tolist() == [0.0]


@pytest.mark.parametrize(
    ("f", "message"),
    [
        pytest.param("x + z", "uses z, the shape is 2-D", id="z in the plane"),
        pytest.param("x +", "data of piece 'bottom'", id="syntax"),
        pytest.param("__import__('os')", "data of piece 'bottom'", id="code"),
        pytest.param(lambda x, _y, _z: x, "function of 3 arguments", id="three arguments"),
        pytest.param(lambda _x, _y: 1 / 0, "raised ZeroDivisionError", id="raises"),
        pytest.param(lambda x, _y: np.log(x - 0.5), r"is nan at \(0.03125, 0.0\)", id="nan"),
        pytest.param(lambda x, _y: x[:2], "one value per point", id="too few"),
        pytest.param(lv.fields.affine((1,)), "field of dimension 1", id="field of 1-D"),
    ],
)
def test_bad_data_are_refused_by_name(square, f, message) -> None:
    with pytest.raises(lv.ProblemError, match=message):
        bottom_data(square, f)
