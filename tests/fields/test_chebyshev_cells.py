"""Chebyshev sums in cells against the functions they stand for."""

import numpy as np
import pytest

from laplace_verify.fields.chebyshev_cells import chebyshev_cells


def functions(a, b):
    return [np.sin(3 * a) * np.exp(b), 1 / (3 - a - b), 0 * a + 2]


CELLS = chebyshev_cells(functions, (0, 0.4, 1), (-1, 0, 0.3, 1), 30)


def points(count=3000):
    return np.random.default_rng(2).uniform((0, -1), (1, 1), (count, 2)).T


def test_every_function_in_every_cell():
    a, b = points()
    inside = np.ones(len(a), dtype=bool)
    found, left_out = CELLS.values(a, b, (2, 0, 1), inside)
    assert not left_out.size
    for got, number in zip(found, (2, 0, 1), strict=True):
        want = functions(a, b)[number]
        assert np.abs(got - want).max() <= 1e-15 * np.abs(want).max()
        assert not np.abs(got * (1 + 1e-14) - want).max() <= 1e-15 * np.abs(want).max()


def test_points_left_out_are_named_and_zero():
    a, b = points()
    inside = a < 0.7
    (found,), left_out = CELLS.values(a, b, (2,), inside)
    assert sorted(left_out) == np.flatnonzero(~inside).tolist()
    assert not found[left_out].any()
    assert np.abs(found[inside] - 2).max() <= 1e-15


def test_a_function_with_a_kink_is_refused():
    with pytest.raises(ValueError, match="30 polynomials do not give"):
        chebyshev_cells(lambda a, b: [np.abs(a - 0.3) + b], (0, 1), (0, 1), 30)
