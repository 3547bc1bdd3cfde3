"""Aspect ratios from 1e-3 to 1e3, degree 200, and many points: no overflow, no warning, bounded memory.

Where a maximum principle holds it is the check: u lies between its values on the boundary. That the sums are
right is checked elsewhere; here nothing may overflow or be refused.
"""

import tracemalloc
from fractions import Fraction

import numpy as np
import pytest

from laplace_verify import fields

EPS = np.finfo(np.float64).eps
ASPECTS = ("1/1000", "1/30", "30", "1000")
quiet = pytest.mark.filterwarnings("error")


def inside(lower, upper, count=200, seed=5):
    """Seeded points of a box, half of them crowded towards its faces."""
    lower, upper = (np.array([float(Fraction(c)) for c in corner]) for corner in (lower, upper))
    t = np.random.default_rng(seed).uniform(0, 1, (count, len(lower)))
    t[::2] = np.where(t[::2] < 0.5, t[::2] ** 8, 1 - (1 - t[::2]) ** 8)
    return lower + t * (upper - lower)


def outside(semi_axes, count=200, seed=3):
    """Seeded points from 1e-9 of a spheroid's size off it to a thousand sizes away."""
    rays = np.random.default_rng(seed).normal(size=(count, 3))
    rays *= (1 + np.logspace(-9, 3, count))[:, None] / np.linalg.norm(rays, axis=1)[:, None]
    return rays * [float(Fraction(c)) for c in semi_axes]


def assert_between(field, points, low, high):
    """Fail unless values lie between two bounds, to rounding, and gradients are finite."""
    values = field.value(points)
    slack = 200 * EPS * max(abs(low), abs(high))
    assert (values >= low - slack).all()
    assert (values <= high + slack).all()
    assert np.isfinite(field.gradient(points)).all()


@quiet
@pytest.mark.parametrize("aspect", ASPECTS)
@pytest.mark.parametrize("face", ["top", "left"])
def test_boxes_of_any_proportion(aspect, face):
    for upper in ((1, 1, aspect), (aspect, 1, 1)):
        field = fields.box_faces((0, 0, 0), upper, {face: 1})
        assert_between(field, inside((0, 0, 0), upper, 40), 0, 1)


@quiet
@pytest.mark.parametrize("aspect", ASPECTS)
def test_cylinders_of_any_proportion(aspect):
    field = fields.cylinder_faces(1, 0, aspect, bottom=-1, side=1, top=2)
    assert_between(field, inside(("-0.7", "-0.7", 0), ("0.7", "0.7", aspect), 100), -1, 2)


@quiet
@pytest.mark.parametrize("gap", ["1/1000", "1", "1000"])
def test_two_spheres_with_any_gap(gap):
    field = fields.sphere_pair(1, gap)
    reach = 1 + float(Fraction(gap)) / 2
    centres = np.array([[0, 0, reach], [0, 0, -reach]])
    points = np.concatenate([outside((1, 1, 1)) + centre for centre in centres])
    apart = np.linalg.norm(points[:, None] - centres, axis=2).min(axis=1)
    assert_between(field, points[apart > 1 + 1e-9], 0, 1)


@quiet
@pytest.mark.parametrize("axes", [(1, "1/1000"), (1, 1000), (1, "1001/1000"), (1000, 1)])
def test_spheroids_of_any_proportion(axes):
    points = outside((axes[0], axes[0], axes[1]))
    assert_between(fields.spheroid_potential(axes), points, 0, 1)
    for axis, size in (("x", axes[0]), ("z", axes[1])):
        bound = float(Fraction(size))
        assert_between(fields.spheroid_data(axis, axes), points, -bound, bound)
        assert np.isfinite(fields.spheroid_flow(axis, axes).gradient(points)).all()


@quiet
@pytest.mark.parametrize("inner", ["1/1000", "1/2", "999/1000"])
def test_zonal_data_of_degree_200_in_any_shell(inner):
    highest = (0,) * 200 + (1,)
    points = outside((1, 1, 1), 300)
    r = np.linalg.norm(points, axis=1, keepdims=True)
    ball = points / r * np.linspace(0, 1, 300)[:, None]
    assert_between(fields.ball_zonal((0, 0, 0), 1, highest), ball, -1, 1)
    low = float(Fraction(inner))
    shell = points / r * np.linspace(low * (1 + EPS), 1 - EPS, 300)[:, None]
    field = fields.shell_zonal((0, 0, 0), inner, 1, highest, (0,) * 200 + (-1,))
    assert_between(field, shell, -1, 1)


@quiet
@pytest.mark.parametrize("minor", ["1/1000", "1/2", "999/1000", 1])
@pytest.mark.parametrize("n", [1, 200])
def test_multipoles_about_any_ellipse(minor, n):
    axes = (1, minor)
    points = outside((1, minor, 1))
    points = points[:, :2] / np.linalg.norm(points / [1, float(Fraction(minor)), 1], axis=1)[:, None]
    points *= (1 + np.logspace(-9, 3, len(points)))[:, None] / np.linalg.norm(
        points / [1, float(Fraction(minor))], axis=1
    )[:, None]
    assert_between(fields.elliptic_multipole(n, semi_axes=axes), points, -1, 1)
    assert np.isfinite(fields.flow_past(axes, (1, 1)).gradient(points)).all()


HIGH = {
    "polynomial": (fields.polynomial(200), (-0.7, -0.7), (0.7, 0.7)),
    "polynomial far out": (fields.polynomial(200, scale=30), (-20, -20), (20, 20)),
    "wedge": (fields.wedge("401/2"), (-0.7, 0), (0.7, 0.7)),
    "solid": (fields.solid(200, 0), (-0.5,) * 3, (0.5,) * 3),
    "sectoral solid": (fields.solid(200, 200), (-0.5,) * 3, (0.5,) * 3),
    "wave": (fields.exp_trig(200, "sin", "sinh", level=1, times_pi=True), (0, 0), (1, 1)),
    "wave of space": (fields.exp_trig((200, 200), "sin", "sinh", level=1, times_pi=True), (0,) * 3, (1,) * 3),
    "box mode": (fields.box_mode((0, 0, 0), (1, 1, 1), (200, 200)), (0,) * 3, (1,) * 3),
    "flat box mode": (fields.box_mode((0, 0, 0), (1, 1, "1/1000"), (200, 1)), (0,) * 3, (1, 1, "1/1000")),
    "tall box mode": (fields.box_mode((0, 0, 0), (1, 1, 1000), (200, 200)), (0,) * 3, (1, 1, 1000)),
    "disc": (
        fields.poisson_disc((0, 0), 1, fields.fourier((0,) * 200 + (1,))), (-0.7, -0.7), (0.7, 0.7),
    ),
}  # fmt: skip


@quiet
@pytest.mark.parametrize("name", HIGH)
def test_degree_200(name):
    field, lower, upper = HIGH[name]
    assert_between(field, inside(lower, upper), -1, 1)


def test_check_of_bounds_can_fail():
    field, lower, upper = HIGH["wave"]
    with pytest.raises(AssertionError):
        assert_between(2 * field, inside(lower, upper, 2000), -1, 1)


# One field of every way of evaluation, in a box of points where it is defined.
KINDS = {
    "polynomial": (fields.polynomial(9), (-1, -1), (1, 1)),
    "wave": (fields.exp_trig(3), (-1, -1), (1, 1)),
    "wedge": (fields.wedge("2/3"), (-1, 0), (1, 1)),
    "sum": (2 * fields.polynomial(3) + fields.log_source((0, -1)), (-1, 0), (1, 1)),
    "formula": (fields.field("exp(x)*cos(y)"), (-1, -1), (1, 1)),
    "motions": (fields.solid(5, 2).rotated(0.3, axis=(1, 0, 0)).shifted((1, 0, 0)), (-1,) * 3, (1,) * 3),
    "rectangle": (fields.rectangle_series((0, 0), (1, 1), fields.ramp(0, 1)), (0, 0), (1, 1)),
    "disc": (fields.poisson_disc((0, 0), 1, fields.fourier((0, 1))), (-0.7, -0.7), (0.7, 0.7)),
    "ball": (fields.hemispheres((0, 0, 0), 1), (-0.5,) * 3, (0.5,) * 3),
    "spheres": (fields.sphere_pair(1, 1), (-1, -1, 3), (1, 1, 5)),
    "box": (fields.box_faces((0, 0, 0), (1, 1, 1), top=1), (0,) * 3, (1,) * 3),
    "cylinder": (fields.cylinder_faces(1, 0, 1, top=1), (-0.7, -0.7, 0), (0.7, 0.7, 1)),
    "regions": (fields.checkerboard("1/4"), (-1, -1), (1, 1)),
    "square": (fields.flow_past_square(1, (1, 0)), (2, 2), (3, 3)),
}


def peak(call, count, kind):
    """Largest memory a call needs beyond its points and its result, in bytes."""
    field, lower, upper = kind
    points = np.random.default_rng(1).uniform(lower, upper, (count, len(lower)))
    getattr(field, call)(points[:9000])  # tables are made once
    tracemalloc.start()
    result = getattr(field, call)(points)
    kept, highest = tracemalloc.get_traced_memory()
    tracemalloc.stop()
    assert len(result) == count
    return highest - kept


@pytest.mark.parametrize("call", ["value", "gradient"])
@pytest.mark.parametrize("name", KINDS)
def test_memory_does_not_grow_with_the_points(name, call):
    """Four times the points need the same temporaries: those of one block, here of 16000 points."""
    few, many = (peak(call, count, KINDS[name]) for count in (32000, 128000))
    assert many <= 1.1 * few + 65536


def test_check_of_memory_can_fail():
    class Whole:
        def value(self, points):
            return np.sin(np.exp(points).sum(axis=1))

    few, many = (peak("value", count, (Whole(), (0, 0), (1, 1))) for count in (32000, 128000))
    assert many > 1.1 * few + 65536


MANY = 10_000_000
BOUND = 64 * 2**20  # bytes


@pytest.mark.slow
@pytest.mark.parametrize("name", ["wave", "rectangle", "spheres"])  # closed form, table of a series, series
def test_ten_million_points_need_less_than_64_mebibytes(name):
    """Beyond the points, 160 or 240 MB, and the values, 80 MB."""
    assert peak("value", MANY, KINDS[name]) <= BOUND


def test_ten_million_points_at_once_would_need_more():
    """A tenth of them: one temporary of all points is beyond a tenth of the bound."""

    class Whole:
        def value(self, points):
            return np.exp(points).sum(axis=1)

    assert not peak("value", MANY // 10, (Whole(), (0, 0), (1, 1))) <= BOUND / 10
