from __future__ import annotations

import math

import pytest

import laplace_verify as lv
from laplace_verify.problems import Condition


def test_numbers_become_floats_and_functions_stay() -> None:
    assert lv.dirichlet(3).data == 3.0
    assert lv.robin(2, g="x").alpha == 2.0
    function = abs
    assert lv.neumann(function).data is function


@pytest.mark.parametrize(
    ("make", "message"),
    [
        pytest.param(lambda: lv.robin(-1.0), r"alpha must be >= 0, got -1\.0", id="negative"),
        pytest.param(lambda: lv.robin(math.nan), "alpha of a condition must be finite", id="nan"),
        pytest.param(lambda: lv.robin(True), "must be a number", id="bool"),
        pytest.param(lambda: lv.dirichlet(None), "dirichlet needs its data", id="no data"),
        pytest.param(lambda: lv.neumann([1, 2]), "got list", id="list"),
        pytest.param(lambda: Condition(kind="robbin", alpha=1), "did you mean 'robin'", id="misspelt"),
        pytest.param(lambda: Condition(kind="neumann", alpha=1), "has no alpha", id="misplaced alpha"),
        pytest.param(lambda: Condition(kind="robin"), "needs alpha", id="robin without alpha"),
    ],
)
def test_bad_conditions_are_refused(make, message) -> None:
    with pytest.raises(lv.ProblemError, match=message):
        make()
