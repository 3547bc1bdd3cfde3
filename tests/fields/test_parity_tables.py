"""Tables of odd and even functions: values, derivatives, zeros, and functions that are too steep for one."""

import numpy as np
import pytest

from laplace_verify.fields.parity_tables import parity_table

RATES = np.array([0.5, 3.0, 9.0])[:, None]
PLACES = np.concatenate([[0.0, 1e-300, 1e-9, 2.0], np.random.default_rng(3).uniform(0, 2, 200)])


def waves(s):
    return np.sin(RATES * s), RATES * np.cos(RATES * s)


def test_values_and_derivatives_are_those_of_the_functions():
    table = parity_table(waves, 2.0, np.ones(3))
    value, slope = table.odd_rows(PLACES), table.even_rows(PLACES)
    # Half a dozen polynomials of degree up to 40, each rounded to degree * 1e-16; derivatives are up to 9.
    assert np.abs(value - waves(PLACES)[0]).max() < 4e-15
    assert np.abs(slope - waves(PLACES)[1]).max() < 1e-13
    assert (value[:, 0] == 0).all()  # exactly, and in proportion next to it
    assert value[:, 1] == pytest.approx(RATES[:, 0] * 1e-300, rel=1e-12)


def test_an_even_function_is_missed():
    table = parity_table(lambda s: (np.cos(s)[None], -np.sin(s)[None]), 2.0, np.ones(1))
    assert table is None or np.abs(table.odd_rows(PLACES) - np.cos(PLACES)).max() > 1e-3


def test_weights_scale_values_and_derivatives():
    weight = np.array([2.0, -1.0, 0.25])
    table = parity_table(waves, 2.0, np.ones(3))
    scaled = table.times(weight)
    for weighted, plain in ((scaled.odd_rows, table.odd_rows), (scaled.even_rows, table.even_rows)):
        assert np.abs(weighted(PLACES) - weight[:, None] * plain(PLACES)).max() < 1e-14


@pytest.mark.parametrize(("rate", "found"), [(10.0, True), (1000.0, False)])
def test_too_many_oscillations_get_no_table(rate, found):
    table = parity_table(lambda s: (np.sin(rate * s)[None], rate * np.cos(rate * s)[None]), 1.0, np.ones(1))
    assert (table is not None) is found
