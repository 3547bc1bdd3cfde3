"""Array checks at the public boundary."""

import numpy as np
import pytest

from laplace_verify.arrays import as_points, as_values, blocks, frozen
from laplace_verify.errors import GeometryError


def test_points_come_back_as_float64_rows():
    points = as_points([[0, 1], [2, 3], [4, 5]], 2, error=GeometryError)
    assert points.shape == (3, 2)
    assert points.dtype == np.float64


def test_a_plain_list_will_do_in_one_dimension():
    assert as_points([0.0, 0.5, 1.0], 1, error=GeometryError).shape == (3, 1)


@pytest.mark.parametrize(
    ("points", "message"),
    [
        ([[0.0, 1.0, 2.0]], r"must have shape \(n, 2\).*got \(1, 3\)"),
        ([0.0, 1.0], r"must have shape \(n, 2\).*got \(2,\)"),
        ([[0.0, 1.0], [np.nan, 0.0]], "row 1 is"),
        ([["a", "b"]], "must be numbers"),
    ],
)
def test_bad_points_are_refused(points, message):
    with pytest.raises(GeometryError, match=message):
        as_points(points, 2, error=GeometryError)


def test_one_value_is_repeated_and_a_column_flattened():
    assert as_values(2.0, 3, error=GeometryError).tolist() == [2.0, 2.0, 2.0]
    assert as_values([[1.0], [2.0]], 2, error=GeometryError).tolist() == [1.0, 2.0]


@pytest.mark.parametrize(
    ("values", "message"),
    [
        ([1.0, 2.0], r"must have shape \(3,\)"),
        ([1j, 2j, 3j], "must be real"),
        (["a", "b", "c"], "must be real numbers"),
    ],
)
def test_bad_values_are_refused(values, message):
    with pytest.raises(GeometryError, match=message):
        as_values(values, 3, error=GeometryError)


def test_frozen_copies_cannot_be_written_to():
    source = np.zeros(3)
    copy = frozen(source)
    source[0] = 1.0
    assert copy[0] == 0.0
    with pytest.raises(ValueError, match="read-only"):
        copy[0] = 2.0


def test_blocks_cover_every_row_once():
    rows = np.concatenate([np.arange(10)[block] for block in blocks(10, 4)])
    assert rows.tolist() == list(range(10))
