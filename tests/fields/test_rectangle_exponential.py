"""Rectangles with an exponential on one side: quadrature mode by mode, samples, the data, digits."""

from fractions import Fraction

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError

CONDITIONS = ("zero", "insulated")


def plain_series(rate, length, depth, s, d, neighbours, far, modes=14):
    """u by quadrature of every coefficient of e^(rate s / length), and sinh or cosh of every mode."""
    a, b, s, d = (mpmath.mpf(c) for c in (length, depth, s, d))
    trig = mpmath.sin if neighbours == "zero" else mpmath.cos
    profile = mpmath.sinh if far == "zero" else mpmath.cosh

    def f(t):
        return mpmath.exp(mpmath.mpf(rate) * t / a)

    total = mpmath.mpf(0)
    if neighbours == "insulated":
        total = mpmath.quad(f, [0, a]) / a * ((b - d) / b if far == "zero" else 1)
    for n in range(1, modes + 1):
        k = n * mpmath.pi / a
        coefficient = (
            2 / a * mpmath.quad(lambda t, k=k: f(t) * trig(k * t), [a * j / n for j in range(n + 1)])
        )
        total += coefficient * trig(k * s) * profile(k * (b - d)) / profile(k * b)
    return total


@pytest.mark.parametrize(
    ("rate", "neighbours", "far"),
    [("1/2", "zero", "insulated"), ("-3", "insulated", "zero"), ("3", "zero", "zero")],
)
def test_the_interior_agrees_with_the_series_summed_mode_by_mode(rate, neighbours, far):
    # 14 modes at depth 0.9: what is left out is below 2 e^{-15 * 0.9 pi} = 8e-19
    u = fields.rectangle_series((0, 0), (1, "3/2"), fields.exponential(rate), neighbours, "top", far)
    with mpmath.workdps(30):
        want = plain_series(float(Fraction(rate)), 1, "1.5", "0.3", "0.9", neighbours, far)
        assert abs(u.at(("0.3", "0.6"), digits=25) - want) <= mpmath.mpf("2e-18")
        other = fields.rectangle_series(
            (0, 0), (1, "3/2"), fields.exponential("0.501"), neighbours, "top", far
        )
        assert not abs(other.at(("0.3", "0.6"), digits=25) - want) <= mpmath.mpf("2e-18")  # twin


@pytest.mark.parametrize("neighbours", CONDITIONS)
def test_a_rate_and_a_formula_give_the_same_field(neighbours):
    u = fields.rectangle_series((0, 0), (2, 1), fields.exponential(2, 3), neighbours, "bottom")
    v = fields.rectangle_series((0, 0), (2, 1), "3*exp(x)", neighbours, "bottom")
    points = np.random.default_rng(2).uniform((0, 0), (2, 1), size=(50, 2))
    assert np.abs(u.value(points) - v.value(points)).max() <= 1e-15 * 3 * np.e**2
    assert np.abs(u.gradient(points) - v.gradient(points)).max() <= 1e-11  # 1 / distance to a corner
    assert (u.basis, v.basis) == ("tail bound", "uncertified")
    assert [(s.point, s.exponent, s.kind) for s in u.singularities] == [
        (s.point, s.exponent, s.kind) for s in v.singularities
    ]
    assert [s.exponent for s in u.singularities] == [0 if neighbours == "zero" else 1] * 2


@pytest.mark.parametrize("rate", [-3, 1])
@pytest.mark.parametrize("upper", [(1, 1), (1, "0.001"), ("0.3", 2.1), (1, 1000)])
def test_the_side_itself_has_the_data_and_the_others_their_condition(rate, upper):
    u = fields.rectangle_series((0, 0), upper, fields.exponential(rate), "insulated")
    width, height = (float(Fraction(c)) for c in upper)
    t = np.array([0.0, 1e-12, 0.3, 0.77, 1.0])
    top = np.column_stack([t * width, np.full(5, height)])
    assert np.abs(u.value(top) - np.exp(rate * t)).max() <= 1e-15 * max(1, np.exp(rate))
    sides = np.column_stack([np.tile([0.0, width], 3), np.repeat([0.1, 0.6, 0.9], 2) * height])
    assert np.abs(u.gradient(sides)[:, 0]).max() <= 1e-13 * max(1, np.exp(rate)) / min(width, height)
    assert (u.value(top * [1, 0]) == 0).all()


@pytest.mark.slow
@pytest.mark.parametrize("upper", [(1, 1), ("0.3", 2.1), (1, "0.001")])
@pytest.mark.parametrize("neighbours", CONDITIONS)
def test_float64_agrees_with_forty_digits_on_the_closed_rectangle(upper, neighbours):
    u = fields.rectangle_series((0, 0), upper, fields.exponential(1), neighbours)
    size = np.array([float(Fraction(c)) for c in upper])
    points = size * [[0.2, 0.3], [0.7, 1 - 1e-3], [1e-6, 1.0], [1 - 1e-12, 1 - 1e-6], [0.6, 1 - 1e-12]]
    values, gradients = u.value(points), u.gradient(points)
    exact = np.array([float(u.at(p, digits=40)) for p in points.tolist()])
    slopes = np.array([[float(g) for g in u.gradient_at(p, digits=20)] for p in points.tolist()])
    assert np.abs(values - exact).max() <= 1e-15 * np.e
    sizes = np.maximum(np.linalg.norm(slopes, axis=1), 0.01 / size.min())
    assert (np.linalg.norm(gradients - slopes, axis=1) <= 1e-13 * sizes).all()


def test_a_specification_gives_the_same_field_back():
    u = fields.rectangle_series((0, 0), (2, "1/3"), fields.exponential("-3/2", 2), "insulated", "left")
    assert fields.from_spec(u.spec()) == u
    assert "2 exp(-3/2 t), t the fraction of the side, on left" in u.formula


@pytest.mark.parametrize(
    ("message", "build"),
    [
        ("rate must be between -3 and 3 and not 0, got 0", lambda: fields.exponential(0)),
        ("rate must be between -3 and 3 and not 0, got 5", lambda: fields.exponential(5)),
        ("height must not be 0", lambda: fields.exponential(1, 0)),
        ("rate must be a real number", lambda: fields.exponential(None)),
    ],
)
def test_bad_data_are_refused(message, build):
    with pytest.raises(FieldError, match=message):
        build()
