"""Singular points and branch cuts."""

import math

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError
from laplace_verify.fields.singular import weakest_basis


def test_distance_from_a_ray_and_from_a_segment():
    ray = fields.Cut(start=(1, 1), direction=(0, 1))
    segment = fields.Cut(start=(1, 1), direction=(0, 1), length=2)
    points = np.array([[1, 9], [4, 5], [1, -1], [1, 1]])
    assert ray.distance(points).tolist() == [0, 3, 2, 0]
    assert segment.distance(points).tolist() == [6, pytest.approx(math.hypot(3, 2)), 2, 0]


def test_the_start_of_a_cut_is_not_on_it():
    cut = fields.Cut(start=(0.5, 0), direction=(1, 0), length=1)
    points = np.array([[0.5, 0], [0.6, 0], [1.5, 0], [1.6, 0], [0.4, 0], [0.6, 1e-12]])
    assert cut.meets(points).tolist() == [False, True, True, False, False, False]
    mp = mpmath.mpf
    assert cut.meets_exactly(mp("0.6"), mp(0))
    assert not cut.meets_exactly(mp("0.6"), mp("1e-40"))
    assert not cut.meets_exactly(mp("0.5"), mp(0))


def test_weakest_basis():
    assert weakest_basis("closed form", "uncertified", "tail bound") == "uncertified"
    assert weakest_basis() == "closed form"


@pytest.mark.parametrize(
    ("arguments", "reason"),
    [
        ({"point": (0, 0), "exponent": 1, "kind": "corner"}, "kind of a singularity must be one of power"),
        ({"point": (0, math.nan), "exponent": 1, "kind": "power"}, "singular point must be finite"),
        ({"point": (0, 0), "exponent": math.nan, "kind": "power"}, "singular point must be finite"),
        ({"point": 3, "exponent": 1, "kind": "power"}, "must be a tuple of numbers"),
        ({"point": ("a", 0), "exponent": 1, "kind": "power"}, "must be a tuple of numbers"),
    ],
)
def test_bad_singularities(arguments, reason):
    with pytest.raises(FieldError, match=reason):
        fields.Singularity(**arguments)


def test_a_corner_given_as_a_fraction_has_no_gradient():
    """-2/5 is no float: the place that is meant counts, and one beside it has its gradient."""
    u = fields.wedge("2/3", apex=("-2/5", "1/3"))
    for corner in (("-2/5", "1/3"), (-0.4, 1 / 3), ("-0.4", "1/3")):
        with pytest.raises(FieldError, match="infinite"):
            u.gradient_at(corner, 20)
    assert abs(u.gradient_at(("-0.39999999999999999999", "1/3"), 20)[1]) > 1e6


def test_where_the_gradient_depends_on_the_direction_there_is_none():
    with pytest.raises(FieldError, match="has no limit"):
        fields.half_edge("2/3", (1, 1, 1)).gradient_at((0, 0, 0), 20)
