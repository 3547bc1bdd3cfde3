"""Rectangles with convection opposite the data: modes one by one, the condition itself, the simple wall."""

from fractions import Fraction

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError

SIDES = ("bottom", "top", "left", "right")


def plain_series(f, breaks, length, depth, transfer, s, d, neighbours, modes=16):
    """u by quadrature of every coefficient; profile (k cosh kh + H sinh kh) / (k cosh kb + H sinh kb)."""
    a, b, big, s, h = (mpmath.mpf(c) for c in (length, depth, transfer, s, mpmath.mpf(depth) - mpmath.mpf(d)))
    trig = mpmath.sin if neighbours == "zero" else mpmath.cos
    total = mpmath.mpf(0)
    if neighbours == "insulated":
        total = mpmath.quad(f, breaks) / a * (1 + big * h) / (1 + big * b)
    for n in range(1, modes + 1):
        k = n * mpmath.pi / a
        knots = sorted({*breaks, *(a * j / n for j in range(n + 1))})
        coefficient = 2 / a * mpmath.quad(lambda t, k=k: f(t) * trig(k * t), knots)
        above = k * mpmath.cosh(k * h) + big * mpmath.sinh(k * h)
        total += coefficient * trig(k * s) * above / (k * mpmath.cosh(k * b) + big * mpmath.sinh(k * b))
    return total


@pytest.mark.parametrize("transfer", ["0.3", "7"])
@pytest.mark.parametrize("neighbours", ["zero", "insulated"])
def test_the_interior_agrees_with_the_series_summed_mode_by_mode(neighbours, transfer):
    # 16 modes at depth 0.9: what is left out is below e^{-17 * 0.9 pi} = 2e-21
    u = fields.rectangle_convection((0, 0), (1, "3/2"), fields.step("1/4", 2, -1), transfer, neighbours)
    with mpmath.workdps(30):
        breaks = [mpmath.mpf(0), mpmath.mpf("0.25"), mpmath.mpf(1)]
        want = plain_series(
            lambda t: 2 if t < mpmath.mpf("0.25") else -1,
            breaks,
            1,
            "1.5",
            transfer,
            "0.3",
            "0.9",
            neighbours,
        )
        got = u.at(("0.3", "0.9"), digits=25)
        assert abs(got - want) <= mpmath.mpf("1e-19")
        insulated = fields.rectangle_series(
            (0, 0), (1, "3/2"), fields.step("1/4", 2, -1), neighbours, "bottom", "insulated"
        )
        assert not abs(insulated.at(("0.3", "0.9"), digits=25) - want) <= mpmath.mpf("1e-19")  # twin


@pytest.mark.parametrize("side", SIDES)
@pytest.mark.parametrize("neighbours", ["zero", "insulated"])
def test_every_side_keeps_its_condition(side, neighbours):
    lower, upper = np.array([0.0, 0.5]), np.array([2.0, 1.75])
    u = fields.rectangle_convection((0, "1/2"), (2, "7/4"), fields.tent("1/3", 3), "5/2", neighbours, side)
    t = np.linspace(0.05, 0.95, 7)
    ends = {
        "bottom": (0, 0), "top": (0, 1), "left": (1, 0), "right": (1, 1),
    }  # fmt: skip  # axis along the side, low or high
    for name, (axis, high) in ends.items():
        points = np.empty((7, 2))
        points[:, axis] = lower[axis] + t * (upper - lower)[axis]
        points[:, 1 - axis] = (lower, upper)[high][1 - axis]
        value, gradient = u.value(points), u.gradient(points)
        outward = (2 * high - 1) * gradient[:, 1 - axis]
        if name == side:
            assert np.abs(value - np.where(t < 1 / 3, 9 * t, 4.5 * (1 - t))).max() <= 4e-15
        elif axis == ends[side][0]:  # the opposite side
            assert np.abs(outward + 2.5 * value).max() <= 1e-14
            assert np.abs(value).max() > 0.01
        else:
            assert np.abs(value if neighbours == "zero" else outward).max() <= 1e-14


@pytest.mark.slow
def test_a_flat_wall_is_a_wall_away_from_the_step():
    # 1 to 1000: u = f (1 + H h) / (1 + H b), 100 depths away from the step to e^{-100}
    u = fields.rectangle_convection((0, 0), (1, "1/1000"), fields.step("1/3", 2, 1), 500, "insulated")
    points = np.array([[0.1, 0.0004], [0.2, 0.001], [0.5, 0.001], [0.9, 0.0]])
    h = 0.001 - points[:, 1]
    want = np.where(points[:, 0] < 1 / 3, 2, 1) * (1 + 500 * h) / 1.5
    assert np.abs(u.value(points) - want).max() <= 2e-15
    assert np.abs(u.gradient(points)[:, 1] / (np.array([-2, -2, -1, -1]) * 500 / 1.5) - 1).max() <= 1e-13


@pytest.mark.parametrize("upper", [(1, 1), (1, "1/30"), (1, 40), ("1/1000", 1)])
@pytest.mark.parametrize("neighbours", ["zero", "insulated"])
def test_float64_agrees_with_forty_digits_on_the_closed_rectangle(upper, neighbours):
    u = fields.rectangle_convection((0, 0), upper, fields.step("1/3", 1, "1/2"), 3, neighbours)
    size = np.array([float(Fraction(c)) for c in upper])
    shares = [
        [0.2, 0.3],
        [0.7, 1.0],
        [0.6, 1 - 1e-12],
        [0.33, 1e-3],
        [1e-6, 1.0],
        [0.5, 1e-6],
        [1 - 1e-12, 1e-6],
    ]
    points = np.array(shares) * size
    values, gradients = u.value(points), u.gradient(points)
    exact = np.array([float(u.at(p, digits=40)) for p in points.tolist()])
    slopes = np.array([[float(g) for g in u.gradient_at(p, digits=30)] for p in points.tolist()])
    assert np.abs(values - exact).max() <= 8e-16  # max |u| = 1
    sizes = np.maximum(np.linalg.norm(slopes, axis=1), 0.01 / size.min())
    assert (np.linalg.norm(gradients - slopes, axis=1) <= 1e-13 * sizes).all()


def test_what_the_field_says_about_itself():
    u = fields.rectangle_convection((0, 0), (2, 1), fields.ramp(1, 2), "1/3", "zero", "top")
    assert {(s.point, s.exponent) for s in u.singularities} == {((0, 1), 0), ((2, 1), 0)}
    assert u.basis == "tail bound"
    assert u.formula.endswith("on top, neighbours zero, opposite d_n u + 1/3 u = 0]")
    assert fields.from_spec(u.spec()) == u


@pytest.mark.parametrize(
    ("message", "build"),
    [
        ("transfer must be > 0, got 0", lambda: fields.rectangle_convection((0, 0), (1, 1), 1, 0)),
        ("transfer must be > 0, got -1", lambda: fields.rectangle_convection((0, 0), (1, 1), 1, -1)),
        ("neighbours must be one of", lambda: fields.rectangle_convection((0, 0), (1, 1), 1, 1, "open")),
        ("lower must lie below", lambda: fields.rectangle_convection((0, 0), (1, 0), 1, 1)),
        (
            'far must be "insulated"',
            lambda: fields.from_spec(
                {**fields.rectangle_convection((0, 0), (1, 1), 1, 1).spec(), "far": "zero"}
            ),
        ),
        (
            "needs more than 20000 modes on its convecting side",
            lambda: fields.rectangle_convection((0, 0), (1, "1e-5"), 1, 1).value([[0.5, 1e-5]]),
        ),
    ],
)
def test_bad_descriptions_are_refused(message, build):
    with pytest.raises(FieldError, match=message):
        build()
