"""Rectangles with data by coefficients or functions; what a field says about itself; what it refuses."""

from fractions import Fraction

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError

CONDITIONS = ("zero", "insulated")


# -- coefficient rules and smooth functions ------------------------------------------------------------------


def test_a_single_sine_mode_has_its_published_values():
    # Liu & Belytschko 1984, Int. J. Numer. Meth. Engng 20, 931-948: sin(pi x) on y = 0.
    u = fields.rectangle_series((0, 0), (1, 1), fields.modes([1]), side="bottom")
    with mpmath.workdps(40):
        for y, digits in (("1/2", "0.1992684076691933402168113"), ("1/4", "0.4526876711779204243852067")):
            assert abs(u.at(("1/2", y), digits=30) - mpmath.mpf(digits)) <= mpmath.mpf("1e-24")


@pytest.mark.parametrize("upper", [(1, 1), (1, "0.001"), ("0.001", 1)])
@pytest.mark.parametrize("neighbours", CONDITIONS)
def test_a_geometric_rule_has_its_closed_form_on_the_side(upper, neighbours):
    # sum_{n>=1} 2^-n sin(n t) = 2 sin t / (5 - 4 cos t), sum_{n>=0} 2^-n cos(n t) = (4 - 2 cos t) / same
    u = fields.rectangle_series((0, 0), upper, fields.coefficient_rule("2**(-n)", ratio="1/2"), neighbours)
    t = np.pi * np.array([0.25, 0.5, 0.875])
    points = np.column_stack([t / np.pi * float(Fraction(upper[0])), np.full(3, float(Fraction(upper[1])))])
    top = 2 * np.sin(t) if neighbours == "zero" else 4 - 2 * np.cos(t)
    assert np.abs(u.value(points) - top / (5 - 4 * np.cos(t))).max() <= 1e-15
    assert u.basis == "tail bound"
    assert u.singularities == ()


def test_a_rule_and_pieces_give_the_same_field():
    """The ramp by its coefficients: A_0 = 1/2, A_n = -4 / (n pi)^2 for odd n."""

    def rule(n):
        return 0.5 if n == 0 else (-4 / (n * np.pi) ** 2 if n % 2 else 0)

    data = fields.coefficient_rule(rule, power=2, bound="0.41")
    by_rule = fields.rectangle_series((0, 0), (1, 1), data, "insulated")
    by_pieces = fields.rectangle_series((0, 0), (1, 1), fields.ramp(0, 1), "insulated")
    points = np.random.default_rng(5).uniform((0, 0), (1, 0.99), size=(40, 2))
    assert np.abs(by_rule.value(points) - by_pieces.value(points)).max() <= 1e-15
    assert np.abs(by_rule.gradient(points) - by_pieces.gradient(points)).max() <= 1e-14
    with pytest.raises(FieldError, match="a function cannot be written to a file"):
        by_rule.spec()


@pytest.mark.parametrize("neighbours", CONDITIONS)
@pytest.mark.parametrize("upper", [(1, 1), (1, "0.05"), (1, 6)])
def test_smooth_data_agree_with_the_polynomial_they_are(neighbours, upper):
    smooth = fields.rectangle_series((0, 0), upper, "1 + 2*x - 3*x**2", neighbours)
    pieces = fields.rectangle_series((0, 0), upper, fields.piecewise((0, 1), [(1, 2, -3)]), neighbours)
    points = np.random.default_rng(6).uniform(size=(40, 2)) * [float(Fraction(c)) for c in upper]
    assert np.abs(smooth.value(points) - pieces.value(points)).max() <= 2e-15
    assert (
        np.abs(smooth.gradient(points) - pieces.gradient(points)).max() <= 1e-11
    )  # 1 / distance to a corner
    assert (smooth.basis, pieces.basis) == ("uncertified", "tail bound")
    assert [(s.point, s.exponent) for s in smooth.singularities] == [
        (s.point, s.exponent) for s in pieces.singularities
    ]


def test_smooth_data_without_corner_trouble_are_a_product():
    # sin(pi x) sinh(pi y) / sinh(pi), whose odd continuation is smooth
    u = fields.rectangle_series((0, 0), (1, 1), "sin(pi*x)")
    points = np.random.default_rng(7).uniform(size=(40, 2))
    want = np.sin(np.pi * points[:, 0]) * np.sinh(np.pi * points[:, 1]) / np.sinh(np.pi)
    assert np.abs(u.value(points) - want).max() <= 1e-15
    assert u.singularities == ()


def test_a_function_over_numpy_serves_float64_and_many_digits():
    u = fields.rectangle_series((0, 0), (1, 1), lambda x: np.exp(x), "insulated")
    v = fields.rectangle_series((0, 0), (1, 1), "exp(x)", "insulated")
    points = np.array([[0.25, 0.75], [0.5, 0.999], [0.9, 0.1]])
    assert np.abs(u.value(points) - v.value(points)).max() <= 1e-15
    assert abs(float(u.at(points[0].tolist(), digits=20)) - u.value(points[:1])[0]) <= 1e-15


# -- what the field says about itself ------------------------------------------------------------------------


def declared(*arguments):
    u = fields.rectangle_series((0, 0), (2, 1), *arguments)
    return {(s.point, s.exponent, s.kind) for s in u.singularities}


def test_singular_points_are_where_the_continuation_jumps():
    assert declared(1, "zero") == {((0, 1), 0, "jump"), ((2, 1), 0, "jump")}
    assert declared(1, "insulated") == set()
    assert declared(fields.ramp(0, 1), "zero") == {((2, 1), 0, "jump")}
    assert declared(fields.ramp(0, 1), "insulated") == {((0, 1), 1, "power"), ((2, 1), 1, "power")}
    assert declared(fields.step("1/4"), "insulated") == {((0.5, 1), 0, "jump")}
    assert declared(fields.tent(), "zero") == {((1, 1), 1, "power")}
    assert declared(fields.parabola(), "zero") == {((0, 1), 2, "power"), ((2, 1), 2, "power")}
    assert declared(fields.modes([1, 2]), "zero") == set()
    assert declared("x*(2-x)", "zero") == declared(fields.parabola(), "zero")


def test_the_basis_is_stated():
    assert fields.rectangle_series((0, 0), (1, 1), 1, "insulated").basis == "closed form"
    assert fields.rectangle_series((0, 0), (1, 1), 1).basis == "tail bound"
    assert fields.rectangle_series((0, 0), (1, 1), fields.modes([1])).basis == "closed form"
    value, radius, basis = fields.rectangle_series((0, 0), (1, 1), 1).enclosure(("1/2", "1/2"))
    assert abs(value - mpmath.mpf("0.25")) <= radius <= mpmath.mpf("1e-29")
    assert basis == "tail bound"


@pytest.mark.parametrize(
    "data",
    [1, fields.step("1/3", 2, "0.1"), fields.tent("2/7"), fields.modes([1, 0, "1/3"]),
     fields.coefficient_rule("1/(1+n)**4", power=4), "exp(x)"],
    ids=["number", "step", "tent", "modes", "rule", "formula"],
)  # fmt: skip
def test_a_specification_gives_the_same_field_back(data):
    u = fields.rectangle_series(("0.1", 0), ("5/3", 2.5), data, "insulated", "bottom", "insulated")
    again = fields.from_spec(u.spec())
    assert again == u
    assert again.formula == u.formula
    assert "on bottom, neighbours insulated, opposite insulated" in u.formula


# -- refusals ------------------------------------------------------------------------------------------------


def test_points_where_u_has_no_value_are_refused():
    u = fields.rectangle_series((0, 0), (1, 1), fields.step("1/4"))
    for point in ((0.25, 1.0), (0.0, 1.0)):
        with pytest.raises(FieldError, match="jumps at point 1"):
            u.value([[0.5, 0.5], point])
        with pytest.raises(FieldError, match="jumps at"):
            u.at(point)
    third = fields.rectangle_series((0, 0), (1, 1), fields.step("1/3"))
    with pytest.raises(FieldError, match=r"jumps at point \(1/3, 1\)"):
        third.at(("1/3", 1))
    with pytest.raises(FieldError, match="not a finite float64"):  # moved onto the jump from 1e-13 outside
        u.value([[0.25, 1 + 1e-13]])
    assert third.value([[0.0, 0.999], [1.0, 1.0]]).tolist() == [0, 0]


def test_a_kink_has_a_value_but_no_gradient():
    u = fields.rectangle_series((0, 0), (1, 1), fields.tent())
    assert u.value([[0.5, 1.0]])[0] == 1
    assert u.at(("1/2", 1)) == 1
    with pytest.raises(FieldError, match="has no limit at point 0"):
        u.gradient([[0.5, 1.0]])
    with pytest.raises(FieldError, match="no limit"):
        u.gradient_at(("1/2", 1))


def test_points_outside_the_rectangle_are_refused():
    u = fields.rectangle_series((0, 0), (1, 1), fields.tent())
    with pytest.raises(FieldError, match=r"not defined at point 1 = \(0.5, 1.001\)"):
        u.value([[0.5, 0.5], [0.5, 1.001]])
    with pytest.raises(FieldError, match="not defined at point 0"):
        u.gradient([[-1e-9, 0.5]])
    with pytest.raises(FieldError, match="not defined"):
        u.at((2, "1/2"))
    assert u.value([[0.5, 1 + 1e-14]])[0] == 1  # outside by rounding only


def test_slow_coefficients_are_refused_next_to_the_side_only():
    rule = fields.coefficient_rule("2/(n*pi)", power=1)
    u = fields.rectangle_series((0, 0), (1, 1), rule)
    assert u.value([[0.5, 0.99]])[0] == pytest.approx(0.5, abs=0.02)  # 1 - x on the side
    with pytest.raises(FieldError, match=r"needs more than 20000 terms.*polynomial pieces"):
        u.value([[0.5, 1.0]])


def test_a_coefficient_above_its_bound_is_refused():
    u = fields.rectangle_series((0, 0), (1, 1), fields.coefficient_rule("2/n", power=2))
    with pytest.raises(FieldError, match="coefficient A_1 has size 2, above the stated bound"):
        u.value([[0.5, 0.5]])


@pytest.mark.parametrize(
    ("message", "arguments"),
    [
        ("lower must lie below and left of upper", ((0, 0), (1, 0), 1)),
        ("lower must lie below and left of upper", ((2, 0), (1, 1), fields.tent())),
        ("side must be one of left, right, bottom, top, got 'topp'", ((0, 0), (1, 1), 1, "zero", "topp")),
        ("neighbours must be one of zero, insulated, got 'open'", ((0, 0), (1, 1), 1, "open")),
        ("far must be one of zero, insulated", ((0, 0), (1, 1), 1, "zero", "top", "cold")),
        ("breaks must run from 0 to 2", ((0, 0), (2, 1), fields.piecewise((0, 1), [(1,)]))),
        ("unknown name 'y'", ((0, 0), (1, 1), "x*y")),
        ("lower must be a tuple of 2 numbers, got 0", (0, (1, 1), 1)),
        ("data must be a real number, got NoneType", ((0, 0), (1, 1), None)),
        ("have no value at x = 0.0", ((0, 0), (1, 1), "1/x")),
        ("have not decayed after 8192 samples", ((0, 0), (1, 1), "sqrt((x-1/3)**2)")),
        ("must be a real number|must be numbers", ((0, 0), (1, 1), None)),
    ],
)
def test_bad_descriptions_are_refused(message, arguments):
    with pytest.raises(FieldError, match=message):
        fields.rectangle_series(*arguments)


@pytest.mark.parametrize(
    ("message", "build"),
    [
        ("breaks must rise, got 0, 1, 1", lambda: fields.piecewise((0, 1, 1), [(1,), (2,)])),
        ("2 rows of coefficients need 3 breaks", lambda: fields.piecewise((0, 1), [(1,), (2,)])),
        ("must have 1 to 13 entries, got 14", lambda: fields.piecewise((0, 1), [range(14)])),
        ("a list of numbers, lowest power first", lambda: fields.piecewise((0, 1), ["12"])),
        ("at must lie between 0 and 1", lambda: fields.tent(2)),
        ("state how the coefficients decay", lambda: fields.coefficient_rule("1/n")),
        (r"ratio must lie in \(0, 1\], got 2", lambda: fields.coefficient_rule("1/n", ratio=2)),
        ("bound must be > 0", lambda: fields.coefficient_rule("1/n", power=1, bound=0)),
        ("unknown name 'm'", lambda: fields.coefficient_rule("1/m", power=1)),
        ("for a formula use coefficient_rule", lambda: fields.modes("1/n")),
        ("1 to 20000 entries, got 0", lambda: fields.modes([])),
    ],
)
def test_bad_data_are_refused(message, build):
    with pytest.raises(FieldError, match=message):
        build()
