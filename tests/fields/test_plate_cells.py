"""Cells of polynomials and logarithms against the sums that they replace, and against 40 digits elsewhere."""

import dataclasses
from fractions import Fraction

import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.contexts import FLOAT
from laplace_verify.fields import plate
from laplace_verify.fields.plate_cells import cells_gradient, cells_value
from laplace_verify.fields.small_least_squares import least_squares

EPS = np.finfo(np.float64).eps
CLOSE = fields.piecewise((0, "1/1000", "1/2", "501/1000", 1), ((1, 2), (0,), (3, -2, 1), (1,)))


def series(upper, data, neighbours="zero", side="top", far="zero", lower=(0, 0)):
    return fields.rectangle_series(lower, upper, data, neighbours, side, far)


PLATES = {
    "ramp": series((1, 1), fields.ramp(0, 1), "insulated"),
    "step from the left": series((1, "1/7"), fields.step("1/3"), side="left"),
    "flat": series((40, 1), fields.tent("1/3"), "insulated", "bottom", "insulated"),
    "deep": series((1, 30), fields.parabola(), side="bottom"),
    "off the origin": series(("0.7", 2), fields.step("1/3", 2, -1), side="right", lower=("-0.1", "0.3")),
    "places close together": series((1, 1), CLOSE),
    "exponential": series((2, 1), fields.exponential(3), "insulated", "left", "insulated"),
    "smooth": series((1, 1), "exp(cos(3*y))", side="right"),
    "convection": fields.rectangle_convection((0, 0), (2, 1), fields.step("1/4"), 3),
}


def inside(u, count=4000, seed=1):
    """Points of a rectangle, half of them crowded towards its sides."""
    low, high = (np.array([float(Fraction(c)) for c in corner]) for corner in (u.lower, u.upper))
    t = np.random.default_rng(seed).uniform(size=(count, 2))
    t[::2] = np.where(t[::2] < 0.5, 0.5 * (2 * t[::2]) ** 6, 1 - 0.5 * (2 - 2 * t[::2]) ** 6)
    return np.ascontiguousarray((low + t * (high - low)).T)


def gaps(u, table, x, y):
    """Largest difference of values, and of gradients relative to them, between cells and sums."""
    value, left_out = cells_value(table, x, y)
    slopes, _ = cells_gradient(table, x, y)
    kept = np.ones(len(x), dtype=bool)
    kept[left_out] = False
    assert kept.mean() > 0.3  # of a deep rectangle most is left to the sums
    exact, gradient = u._value_by_sums(FLOAT, (x, y)), np.stack(u._gradient_by_sums(FLOAT, (x, y)))
    size = np.linalg.norm(gradient, axis=0)
    least = 0.01 * np.abs(exact).max() / (np.ptp(np.stack([x, y]), axis=1).min())
    apart = np.linalg.norm(slopes - gradient, axis=0) / np.maximum(size, least)
    return np.abs(value - exact)[kept].max() / np.abs(exact).max(), apart[kept].max()


# Of the sums: between close places terms of size 100 cancel; smooth data lose two digits at their ends, where
# the cells, made from sums away from there, do not (see below).
LOSSES = {"places close together": (8 * EPS, 5e-13), "smooth": (5e-14, 5e-12)}


@pytest.mark.parametrize("name", PLATES)
def test_cells_agree_with_sums(name):
    u = PLATES[name]
    value, slope = gaps(u, plate._cells(u), *inside(u))
    most = LOSSES.get(name, (8 * EPS, 1e-13))
    assert value <= most[0]
    assert slope <= most[1]


def test_smooth_data_agree_with_twenty_digits_at_their_ends():
    u = PLATES["smooth"]
    points = [(1 - 2e-5, 1.7e-3), (1 - 1e-6, 2.4e-3), (1 - 1e-3, 1 - 1e-3), (0.7, 1e-9)]
    exact = np.array([float(u.at(p, digits=20)) for p in points])
    assert np.abs(u.value(points) - exact).max() <= 8 * EPS * np.e


def test_the_comparison_notices_one_coefficient_in_the_last_digits():
    u = PLATES["ramp"]
    table = plate._cells(u)
    off = table.value.copy()
    off[1, 40] *= 1 + 1e-13  # of one cell among 121
    assert not gaps(u, dataclasses.replace(table, value=off), *inside(u))[0] <= 8 * EPS
    jump = table.places.jump * (1 + 1e-13)
    moved = dataclasses.replace(table, places=dataclasses.replace(table.places, jump=jump))
    assert not gaps(u, moved, *inside(u))[0] <= 8 * EPS


@pytest.mark.parametrize("name", ["places close together", "off the origin"])
def test_next_to_places_and_sides_cells_agree_with_forty_digits(name):
    u = PLATES[name]
    low, high = (np.array([float(Fraction(c)) for c in corner]) for corner in (u.lower, u.upper))
    axis = 0 if u.side in ("top", "bottom") else 1
    hot = (high if u.side in ("top", "right") else low)[1 - axis]
    inward = np.sign((low + high)[1 - axis] / 2 - hot)
    points = []
    for place in u.continuation.places:
        for distance in (1e-3, 1e-6, 1e-12):
            point = np.zeros(2)
            point[axis] = np.clip(float(place) + distance / 3, low[axis] + 1e-13, high[axis] - 1e-13)
            point[1 - axis] = hot + inward * distance
            points.append(point)
    values = u.value(points)
    exact = np.array([float(u.at(p.tolist(), digits=40)) for p in points])
    assert np.abs(values - exact).max() <= 8 * EPS * np.abs(exact).max()


def test_where_data_jump_there_is_no_value():
    x, y = np.full(9, 0.5), np.linspace(0.2, 1, 9)
    step, kink = (series((1, 1), data, "insulated") for data in (fields.step(), fields.tent()))
    with np.errstate(all="ignore"):
        assert np.isnan(step._value(FLOAT, (x, y), None)).tolist() == [False] * 8 + [True]
        assert np.isfinite(kink._value(FLOAT, (x, y), None)).all()  # jumps in its gradient only
        for u in (step, kink):
            assert np.isfinite(np.stack(u._gradient(FLOAT, (x, y), None))).all(axis=0).tolist() == [
                True
            ] * 8 + [False]


def test_sides_are_left_to_the_sums():
    table = plate._cells(PLATES["ramp"])
    x, y = np.array([0.0, 0.5, 1.0, 0.3, 0.3]), np.array([0.5, 0.0, 0.2, 1.0, 0.9])
    assert cells_value(table, x, y)[1].tolist() == [0, 1, 2, 3]


def test_many_places_in_one_cell_are_left_to_the_sums():
    breaks = [Fraction(k, 200) for k in range(21)]
    teeth = fields.piecewise((*breaks, 1), [(k % 2,) for k in range(21)])
    u = series((1, 1), teeth)
    x, y = inside(u)
    x, y = np.clip(x, 1e-9, 1 - 1e-9), np.clip(y, 1e-9, 1 - 1e-9)  # off the sides
    left_out = cells_value(plate._cells(u), x, y)[1]
    assert 0 < len(left_out) < len(x) / 2
    assert (np.hypot(x[left_out] - 0.05, y[left_out] - 1) < 0.6).all()
    want = u._value_by_sums(FLOAT, (x, y))
    assert np.abs(u.value(np.column_stack([x, y])) - want).max() <= 8 * EPS


def test_steep_data_are_summed():
    waves = series((1, 1), "cos(40*x)", "insulated")
    assert plate._cells(waves) is None
    assert abs(waves.value([[0.5, 0.999]])[0]) < 1


@pytest.mark.parametrize("upper", [("1e-5", 1), ("1e-9", "1e-9")])
def test_slender_and_tiny_rectangles_are_summed(upper):
    u = series(upper, 1)
    assert plate._cells(u) is None
    middle = [[float(Fraction(c)) / 2 for c in upper]]
    assert 0 <= u.value(middle)[0] <= 0.25 + EPS


def test_least_squares_agrees_with_the_library():
    draw = np.random.default_rng(3).normal
    problems = [(draw(size=(m, n)), draw(size=(m, 2))) for m, n in ((9, 4), (30, 12), (9, 4))]
    for (a, b), x in zip(problems, least_squares(problems), strict=True):
        want = np.linalg.lstsq(a, b, rcond=None)[0]
        assert np.abs(x - want).max() <= 1e-13 * np.abs(want).max() * np.linalg.cond(a)
        assert not np.abs(x * (1 + 1e-9) - want).max() <= 1e-13 * np.abs(want).max() * np.linalg.cond(a)
