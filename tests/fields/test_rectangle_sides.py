"""Rectangles with data on all four sides: polynomials traced on them, symmetry, corners, digits."""

import itertools
import math
from fractions import Fraction

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError

RECTANGLES = {
    "plate": (("1/10", "-1/5"), ("17/10", "7/10")),
    "sliver": ((0, 0), (1000, 1)),
    "chimney": ((0, 0), ("1/1000", 1)),
}


def traced(polynomial, lower, upper):
    """The four sides' data of a polynomial {(i, j): c} in x and y, as pieces; two pieces on top."""
    (x0, y0), (x1, y1) = ([Fraction(c) for c in corner] for corner in (lower, upper))

    def along(axis, other, start, stop):
        row = [Fraction(0)] * 5
        for (i, j), c in polynomial.items():
            power, rest = (i, j) if axis == 0 else (j, i)
            for k in range(power + 1):  # (start + t)^power
                row[k] += Fraction(c) * other**rest * math.comb(power, k) * start ** (power - k)
        return (start, stop), row

    def pieces(*parts):
        places = [parts[0][0][0], *(part[0][1] for part in parts)]
        return fields.piecewise(places, [part[1] for part in parts])

    middle = x0 + (x1 - x0) / 3
    return {
        "left": pieces(along(1, x0, y0, y1)),
        "right": pieces(along(1, x1, y0, y1)),
        "bottom": pieces(along(0, y0, x0, x1)),
        "top": pieces(along(0, y1, x0, middle), along(0, y1, middle, x1)),
    }


# x^4 - 6 x^2 y^2 + y^4 + x^3 y - x y^3 + 3 x^2 - 3 y^2 - x y + 2: harmonic, written out
QUARTIC = {
    (4, 0): 1, (2, 2): -6, (0, 4): 1, (3, 1): 1, (1, 3): -1, (2, 0): 3, (0, 2): -3, (1, 1): -1, (0, 0): 2,
}  # fmt: skip


def assert_polynomial(polynomial, lower, upper):
    """The field has the polynomial's values, and no singular point."""
    u = fields.rectangle_sides(lower, upper, **traced(polynomial, lower, upper))
    low, high = (np.array([float(Fraction(c)) for c in corner]) for corner in (lower, upper))
    points = low + (high - low) * np.random.default_rng(5).uniform(size=(60, 2))
    x, y = points.T
    value = sum(c * x**i * y**j for (i, j), c in polynomial.items())
    slope = np.column_stack(
        [
            sum(c * i * x ** max(i - 1, 0) * y**j for (i, j), c in polynomial.items()),
            sum(c * j * x**i * y ** max(j - 1, 0) for (i, j), c in polynomial.items()),
        ]
    )
    size = np.abs(value).max()
    assert np.abs(u.value(points) - value).max() <= 4e-15 * size  # five fields of that size are added
    assert np.abs(u.gradient(points) - slope).max() <= 2e-14 * size / (high - low).min()
    assert u.singularities == ()


@pytest.mark.parametrize("name", ["plate", "chimney"])
def test_data_of_a_harmonic_polynomial_give_that_polynomial(name):
    assert_polynomial(QUARTIC, *RECTANGLES[name])


def test_the_check_by_polynomials_can_fail():
    with pytest.raises(AssertionError):
        assert_polynomial({**QUARTIC, (0, 4): 2}, *RECTANGLES["plate"])  # not harmonic


def test_constant_sides_give_the_mean_in_the_centre_of_a_square():
    # by symmetry and uniqueness
    u = fields.rectangle_sides((0, 0), (1, 1), left=3, right="-1/2", bottom=1, top=2)
    with mpmath.workdps(40):
        assert abs(u.at(("1/2", "1/2"), digits=30) - mpmath.mpf("5.5") / 4) <= mpmath.mpf("1e-28")
    assert u.basis == "tail bound"


def test_the_sides_keep_their_data_and_the_corner_takes_them_where_they_agree():
    u = fields.rectangle_sides(
        (0, 0), (2, 1), left=1, bottom=fields.ramp(1, 3), right=fields.parabola(), top=fields.tent("1/4", 5)
    )
    points = [[0.0, 0.3], [0.5, 0.0], [2.0, 0.25], [0.5, 1.0], [1.25, 1.0], [0.0, 0.0], [2.0, 1.0]]
    want = [1, 1.5, 0.75, 5, 2.5, 1, 0]
    assert np.abs(u.value(points) - want).max() <= 2e-15


def test_corners_say_how_well_the_data_fit():
    u = fields.rectangle_sides(
        (0, 0), (2, 1), left=1, bottom=fields.ramp(1, 3), right=fields.parabola(), top=fields.tent("1/4", 5)
    )
    assert {(s.point, s.exponent, s.kind) for s in u.singularities} == {
        ((0.5, 1.0), 1, "power"),  # ridge
        ((2.0, 0.0), 0, "jump"),  # 3 and 0
        ((0.0, 1.0), 0, "jump"),  # 1 and 0
        ((2.0, 1.0), 2, "power"),  # second derivatives -8 and 0
    }
    with pytest.raises(FieldError, match="jumps at point 0"):
        u.value([[2.0, 0.0]])


def test_second_derivatives_that_cancel_leave_no_logarithm():
    # x^2 - y^2 has second derivatives 2 and -2 in the corner; x^2 + y^2 has not, and r^2 log r stays
    square = {
        side: fields.piecewise((0, 1), [row]) for side, row in (("bottom", (0, 0, 1)), ("right", (1, 0, -1)))
    }
    fitting = fields.rectangle_sides(
        (0, 0), (1, 1), **square,
        left=fields.piecewise((0, 1), [(0, 0, -1)]), top=fields.piecewise((0, 1), [(-1, 0, 1)]),
    )  # fmt: skip
    other = fields.rectangle_sides(
        (0, 0), (1, 1), **square,
        left=fields.piecewise((0, 1), [(0, 0, 1)]), top=fields.piecewise((0, 1), [(1, 0, -1)]),
    )  # fmt: skip
    assert fitting.singularities == ()
    assert ((0.0, 0.0), 2.0) in {(s.point, s.exponent) for s in other.singularities}


def hard_points(lower, upper):
    """Points 1e-3, 1e-6, 1e-12 and 0 of the size from sides and corners."""
    low, high = (np.array([float(Fraction(c)) for c in corner]) for corner in (lower, upper))
    shares = [1e-12, 1e-6, 1e-3, 0.31, 0.74, 1 - 1e-6]
    sides = [(t, 0.0) for t in shares[3:5]] + [(0.0, t) for t in shares[3:5]]
    return low + (high - low) * np.array([*itertools.product(shares, shares[1:5]), *sides])


@pytest.mark.parametrize("name", RECTANGLES)
def test_float64_agrees_with_forty_digits_on_the_closed_rectangle(name):
    lower, upper = RECTANGLES[name]
    u = fields.rectangle_sides(
        lower, upper, left="1/2", bottom=fields.ramp("1/2", 1), right=fields.step("1/3", 1, "-1"),
        top=fields.tent("2/5"),
    )  # fmt: skip
    points = hard_points(lower, upper)
    values, gradients = u.value(points), u.gradient(points[::3])
    exact = np.array([float(u.at(p, digits=40)) for p in points.tolist()])
    slopes = np.array([[float(g) for g in u.gradient_at(p, digits=30)] for p in points[::3].tolist()])
    sizes = np.linalg.norm(slopes, axis=1)
    length = min(float(Fraction(b) - Fraction(a)) for a, b in zip(lower, upper, strict=True))
    assert np.abs(values - exact).max() <= 1e-15  # max |u| = 1
    assert (np.linalg.norm(gradients - slopes, axis=1) <= 2e-13 * np.maximum(sizes, 0.01 / length)).all()


def test_a_specification_gives_the_same_field_back():
    u = fields.rectangle_sides(("1/10", 0), (2.5, "7/3"), left=fields.step("1/4", 2), top=fields.parabola())
    again = fields.from_spec(u.spec())
    assert again == u
    assert again.formula == u.formula
    assert "steps between" in u.formula


@pytest.mark.parametrize(
    ("message", "build"),
    [
        ("lower must lie below and left", lambda: fields.rectangle_sides((0, 0), (0, 1), top=1)),
        ("top must be a real number", lambda: fields.rectangle_sides((0, 0), (1, 1), top=None)),
        (
            "breaks must run from 0 to 2",
            lambda: fields.rectangle_sides((0, 0), (2, 1), top=fields.piecewise((0, 1), [(1,)])),
        ),
        ("not defined at point 0", lambda: fields.rectangle_sides((0, 0), (1, 1)).value([[0.5, 1.1]])),
        (
            "data must be given on left, right, bottom, top",
            lambda: fields.from_spec({**fields.rectangle_sides((0, 0), (1, 1)).spec(), "breaks": [[0, 1]]}),
        ),
    ],
)
def test_bad_descriptions_are_refused(message, build):
    with pytest.raises(FieldError, match=message):
        build()
