"""Which sizes are added to the default ones."""

import math

import pytest

from laplace_verify.measure import Level
from laplace_verify.measure.levels import default_sizes, further_sizes


def ladder(sizes, scale, dim=2, unknowns=1.0):
    return [
        Level(size=n, h=1 / n, unknowns=round(unknowns * n**dim), seconds=0.0, errors={}, relative={},
              judged=1 / n <= scale / 2)
        for n in sizes
    ]  # fmt: skip


def test_defaults_are_four_halvings_and_five_steps_in_space():
    assert default_sizes(1) == default_sizes(2) == (8, 16, 32, 64)
    assert default_sizes(3) == (6, 9, 13, 19, 28)


@pytest.mark.parametrize(
    ("rounds", "scale", "dim", "sizes", "added"),
    [
        (0, math.inf, 2, (8, 16, 32, 64), [128]),
        (1, 1.0, 2, (8, 16, 32, 64, 128), [256]),
        (2, 1.0, 2, (8, 16, 32, 64, 128, 256), [512]),
        (3, 1.0, 2, (8, 16, 32, 64, 128, 256, 512), []),
        (0, 0.05, 2, (8, 16, 32, 64), [40, 80, 160, 320]),  # 1/40 = 0.05/2 is the coarsest to be judged
        (0, 0.045, 2, (8, 16, 32, 64), [48, 96, 192, 384]),  # 1/44.4, at a multiple of eight
        (0, 0.024, 2, (8, 16, 32, 64), [88, 176, 352, 544]),  # 704^2 unknowns are too many
        (0, 0.01, 2, (8, 16, 32, 64), [200, 400]),
        (0, 1.0, 3, (6, 9, 13, 19, 28), [41]),
        (1, 1.0, 3, (6, 9, 13, 19, 28, 41), []),  # 59^3 unknowns are too many
    ],
)
def test_added_sizes(rounds, scale, dim, sizes, added):
    assert further_sizes(ladder(sizes, scale, dim), dim, rounds, scale) == added


def test_work_is_bounded_by_unknowns_not_by_the_clock():
    assert further_sizes(ladder((8, 16, 32, 64), math.inf, unknowns=50.0), 2, 0, math.inf) == []
