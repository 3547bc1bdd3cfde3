"""Corner powers against closed forms, 40-digit values, differences, and what must be refused."""

import json
import math

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError
from laplace_verify.fields import CornerSeries, Expansion, LocalSum, PolynomialPart, corner_powers

EPS = np.finfo(np.float64).eps
L_CORNER = CornerSeries(
    apex=(0, 0), start=(1, 0), stop=(0, -1), sides="dd", scale="3/2", coefficients=("1.25", "-0.5", "0.1")
)
SLIT = CornerSeries(apex=("0.1", 0), start=(1, 0), stop=(1, 0), sides="dd", coefficients=("1", "0", "0.25"))
OBLIQUE = CornerSeries(
    apex=("0.2", "-0.3"), start=(3, 1), stop=(-2, 5), sides="nd", coefficients=("1", "0.5"), logs=()
)
RIGHT = CornerSeries(apex=(0, 0), start=(1, 0), stop=(0, 1), sides="dd", logs=((2, "0.75"),))
STRAIGHT = CornerSeries(
    apex=(0, 0), start=(1, 0), stop=(-1, 0), sides="nn", coefficients=("2", "-1"), logs=((1, "0.5"),)
)
QUADRATIC = PolynomialPart(re=("1", "0", "0.5"), im=("0", "-1", "0.25"), centre=("0.1", 0), scale=2)

# field, angles (in radians about the apex) of the region, apex
TABLE = {
    "l-corner": (corner_powers((L_CORNER,), QUADRATIC), (0.0, 1.5 * math.pi), (0, 0)),
    "slit": (corner_powers((SLIT,)), (0.0, 2 * math.pi), ("1/10", 0)),
    "oblique": (
        corner_powers((OBLIQUE,)),
        (math.atan2(1, 3), math.atan2(5, -2)),
        ("1/5", "-3/10"),
    ),
    "right": (corner_powers((RIGHT,), QUADRATIC), (0.0, 0.5 * math.pi), (0, 0)),
    "straight": (corner_powers((STRAIGHT,)), (0.0, math.pi), (0, 0)),
}
rows = pytest.mark.parametrize("name", TABLE)


def places(name, count=24, seed=5):
    """Points of the region at distances 1 to 1e-6 from the apex."""
    _, (low, high), apex = TABLE[name]
    generator = np.random.default_rng(seed)
    r = 10.0 ** generator.uniform(-6, 0, count)
    angle = generator.uniform(low + 1e-3, high - 1e-3, count)
    origin = [float(mpmath.mpf(fields.exact.exact(c, "c").numerator) / fields.exact.exact(c, "c").denominator)
              for c in apex]  # fmt: skip
    return np.array(origin) + np.column_stack((r * np.cos(angle), r * np.sin(angle)))


@rows
def test_float64_agrees_with_40_digits(name):
    field = TABLE[name][0]
    points = places(name)
    values, gradients = field.value(points), field.gradient(points)
    for point, value, gradient in zip(points.tolist(), values, gradients, strict=True):
        assert abs(value - float(field.at(point, 40))) <= 16 * EPS * 3  # |u| <= 3 there
        exact = np.array([float(g) for g in field.gradient_at(point, 40)])
        assert np.abs(gradient - exact).max() <= 64 * EPS * (np.abs(exact).max() + 1)


@rows
def test_field_is_harmonic_and_its_gradient_the_derivative(name):
    field = TABLE[name][0]
    with mpmath.workdps(60):
        h = mpmath.mpf(10) ** -15
        x, y = (mpmath.mpf(c) for c in places(name)[0].tolist())

        def u(i, j):
            return field.at((x + i * h, y + j * h), 50)

        laplacian = (u(1, 0) + u(-1, 0) + u(0, 1) + u(0, -1) - 4 * u(0, 0)) / h**2
        slopes = ((u(1, 0) - u(-1, 0)) / (2 * h), (u(0, 1) - u(0, -1)) / (2 * h))
        gradient = field.gradient_at((x, y), 50)
        distance = min(abs(mpmath.mpc(x, y)), 1)
        assert abs(laplacian) <= mpmath.mpf(10) ** -12 / distance**4
        assert all(
            abs(a - b) <= mpmath.mpf(10) ** -20 / distance**3 for a, b in zip(slopes, gradient, strict=True)
        )


def test_check_of_the_laplacian_can_fail(monkeypatch):
    wrong = (fields.field("x**2 + 0*y"), *TABLE["right"][1:])
    monkeypatch.setitem(TABLE, "right", wrong)
    with pytest.raises(AssertionError):
        test_field_is_harmonic_and_its_gradient_the_derivative("right")


@pytest.mark.parametrize("name", ["l-corner", "slit", "oblique", "right", "straight"])
def test_powers_satisfy_the_homogeneous_conditions(name):
    """d: u = 0, n: the normal derivative is 0, on both sides; a logarithm leaves a polynomial, here r^n."""
    corner = TABLE[name][0].precise.corners[0]
    field = corner_powers((corner._replace(logs=()),))
    (low, high), n = TABLE[name][1], len(corner.coefficients)
    assert n or name == "right"
    for angle, kind, lip in ((low, corner.sides[0], 1), (high, corner.sides[1], -1)):
        point = np.array([[float(fields.exact.exact(c, "c")) for c in corner.apex]])
        point = point + 0.37 * np.array([[math.cos(angle), math.sin(angle)]])
        side = lip if name == "slit" else None
        if kind == "d":
            assert abs(field.value(point, side=side)[0]) <= 32 * EPS
        else:
            normal = np.array([-math.sin(angle), math.cos(angle)])
            assert abs(field.gradient(point, side=side)[0] @ normal) <= 64 * EPS


def test_two_thirds_power_is_the_wedge():
    corner = CornerSeries(apex=(0, 0), start=(1, 0), stop=(0, -1), sides="dd", coefficients=("1",))
    points = places("l-corner")
    np.testing.assert_allclose(
        corner_powers((corner,)).value(points), fields.wedge("2/3").value(points), rtol=1e-14, atol=1e-16
    )


def test_polynomial_part_is_the_polynomial():
    part = corner_powers((), PolynomialPart(re=("0", "0", "0", "2"), im=("0", "3")))
    same = 2 * fields.polynomial(3) + 3 * fields.polynomial(1, "im")
    points = places("l-corner")
    np.testing.assert_allclose(part.value(points), same.value(points), rtol=1e-14, atol=1e-15)
    np.testing.assert_allclose(part.gradient(points), same.gradient(points), rtol=1e-14, atol=1e-15)


def test_logarithmic_term_is_the_formula():
    """r^2 (log r sin 2t + t cos 2t)."""
    field = corner_powers((RIGHT._replace(logs=((2, "1"),)),))
    formula = fields.field("r**2*(log(r)*sin(2*atan2(y,x)) + atan2(y,x)*cos(2*atan2(y,x)))")
    points = places("right")
    np.testing.assert_allclose(field.value(points), formula.value(points), rtol=1e-13, atol=1e-18)


def test_lips_of_a_slit_are_told_apart():
    cosine = SLIT._replace(apex=(0, 0), sides="nn", coefficients=("1",))
    field = corner_powers((cosine,))
    point = [[0.25, 0.0]]
    assert field.value(point, side=1)[0] == 0.5
    assert field.value(point, side=-1)[0] == pytest.approx(-0.5, abs=1e-15)
    with pytest.raises(FieldError, match="on its branch cut"):
        field.value(point)
    assert float(field.at(("0.25", "0"), 30, side=-1)) == -0.5


def test_value_at_the_apex_is_the_limit_and_the_gradient_is_refused_where_infinite():
    field = corner_powers((L_CORNER,), PolynomialPart(re=("0.5",)))
    assert field.value([[0.0, 0.0]])[0] == 0.5
    assert float(field.at((0, 0), 30)) == 0.5
    with pytest.raises(FieldError, match=r"gradient of .* is infinite"):
        field.gradient([[0.0, 0.0]])
    assert corner_powers((RIGHT,)).gradient([[0.0, 0.0]]).tolist() == [[0.0, 0.0]]


def test_singularities_tell_the_first_exponent_that_is_not_whole():
    assert corner_powers((L_CORNER,)).singularities[0].exponent == pytest.approx(2 / 3)
    late = L_CORNER._replace(coefficients=("0", "1"))
    assert corner_powers((late,)).singularities[0].exponent == pytest.approx(4 / 3)
    assert corner_powers((RIGHT,)).singularities[0].exponent == 2
    smooth = RIGHT._replace(coefficients=("1", "2"), logs=())
    assert corner_powers((smooth,)).singularities == ()
    assert corner_powers((smooth,)).cuts == ()


def test_cut_is_the_bisector_of_the_exterior_angle():
    (cut,) = corner_powers((L_CORNER,)).cuts
    assert cut.direction == pytest.approx((math.sqrt(0.5), -math.sqrt(0.5)), abs=1e-15)
    (cut,) = corner_powers((STRAIGHT,)).cuts
    assert cut.direction == (0.0, -1.0)


@rows
def test_specification_through_json_gives_the_same_field(name):
    field = TABLE[name][0]
    again = fields.from_spec(json.loads(json.dumps(field.spec())))
    assert again == field
    assert again.value(places(name)).tobytes() == field.value(places(name)).tobytes()


@rows
def test_conjugate_satisfies_cauchy_riemann(name):
    field = TABLE[name][0]
    points = places(name)
    u, v = field.gradient(points), field.conjugate().gradient(points)
    size = np.abs(u).max(axis=1) + 1
    assert (np.abs(v[:, 0] + u[:, 1]) <= 64 * EPS * size).all()
    assert (np.abs(v[:, 1] - u[:, 0]) <= 64 * EPS * size).all()


SQUARE = ((0, 0), (1, 0), (1, 1), (0, 1))


def fit(radius="1e-20"):
    return corner_powers(
        (), PolynomialPart(re=("0", "1")), vertices=SQUARE, radius=radius, trust="maximum-principle bound"
    )


def test_fitted_field_gives_its_radius_and_refuses_more_digits():
    field = fit()
    value, radius, basis = field.enclosure(("0.5", "0.5"), 19)
    assert (float(value), basis) == (0.5, "maximum-principle bound")
    assert mpmath.mpf("1e-20") <= radius <= mpmath.mpf("1.1e-19")
    assert field.most_digits == 19
    with pytest.raises(FieldError, match=r"20 digits were asked for, .* leaves 19"):
        field.at(("0.5", "0.5"), 20)


def test_sums_and_motions_keep_the_radius():
    field = (3 * fit() + fields.affine((0, 1))).shifted((1, 0))
    assert mpmath.mpf("3e-20") <= field.enclosure(("1.5", "0.5"), 19).radius
    assert field.basis == "maximum-principle bound"
    with pytest.raises(FieldError, match="leaves 19"):
        field.at(("1.5", "0.5"), 30)
    assert fit().conjugate().basis == "uncertified"


def test_gradient_error_is_that_of_cauchy_and_infinite_on_the_boundary():
    field = fit()
    expected = 4 * mpmath.mpf("1e-20") / (mpmath.pi * 0.25)
    assert field.gradient_error(("0.5", "0.25")) == pytest.approx(float(expected), rel=1e-12)
    assert field.gradient_error((0, "0.25")) == math.inf
    assert (2 * field).gradient_error(("0.5", "0.25")) == pytest.approx(2 * float(expected), rel=1e-12)


def test_points_outside_the_polygon_are_refused():
    with pytest.raises(FieldError, match=r"is not defined at point 1 = \(1.5, 0.5\)"):
        fit().value([[0.5, 0.5], [1.5, 0.5]])


def constant(number):
    return Expansion((), PolynomialPart(re=(number,)))


def test_local_sums_serve_float64_only_each_where_it_is_nearest():
    whole, right, up = ((1, 0), (1, 0)), ((0, -1), (0, 1)), ((1, 0), (-1, 0))
    swift = (
        LocalSum((0, 0), 1, *whole, constant("7")),
        LocalSum((1, 0), "1/2", *right, constant("8")),
        LocalSum((1, 0), "1/2", *up, constant("9")),
    )
    field = corner_powers((), PolynomialPart(re=("3",)), swift=swift)
    assert field.value([[0.1, 0.2], [1.4, -0.2], [0.9, 0.3], [0.9, -0.1]]).tolist() == [7, 8, 9, 7]
    assert field.at((0, 0), 20) == 3
    assert fields.from_spec(field.spec()) == field


def test_local_sums_tell_the_lips_of_a_slit_apart():
    slit = CornerSeries(apex=(0, 0), start=(1, 0), stop=(1, 0), sides="dd", coefficients=("1",))
    upper, lower = ((1, 0), (-1, 0)), ((-1, 0), (1, 0))
    swift = (
        LocalSum((0, 0), "1/4", (1, 0), (1, 0), Expansion((slit,))),
        LocalSum((1, 0), "1/2", *lower, constant("-1")),
        LocalSum((1, 0), "1/2", *upper, constant("1")),
    )
    field = corner_powers((slit,), swift=swift)
    assert field.value([[1.0, 0.0], [1.0, 0.0]], side=[1, -1]).tolist() == [1, -1]
    assert field.value([[1.0, 1e-13], [1.0, -1e-13]]).tolist() == [1, -1]
    assert field.gradient([[0.04, 0.0], [0.04, 0.0]], side=[1, -1])[:, 1].round(12).tolist() == [2.5, -2.5]
    with pytest.raises(FieldError, match="two values"):
        field.value([[1.0, 0.0]])


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"reach": 0}, "reach must be positive"),
        ({"start": (0, 0)}, r"swift\[0\].start must be a direction"),
        ({"series": 3}, r"swift\[0\].series must be an Expansion"),
    ],
)
def test_bad_local_sums_are_refused(change, message):
    part = LocalSum((0, 0), 1, (1, 0), (1, 0), constant("1"))
    with pytest.raises(FieldError, match=message):
        corner_powers((), swift=(part._replace(**change),))
    with pytest.raises(FieldError, match="must be a LocalSum"):
        corner_powers((), swift=(3,))


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"start": (0, 0)}, "must be a direction"),
        ({"sides": "dx"}, "must be one of dd, nn, dn, nd"),
        ({"scale": 0}, "scale must be positive"),
        ({"coefficients": (1.5,)}, "must be decimal strings"),
        ({"coefficients": ("1/3",)}, "must be decimal strings"),
        ({"logs": ((0, "1"),)}, "from 1 to 100"),
    ],
)
def test_bad_corners_are_refused(change, message):
    with pytest.raises(FieldError, match=message):
        corner_powers((L_CORNER._replace(**change),))


def test_bad_fits_are_refused():
    with pytest.raises(FieldError, match="radius must be >= 0"):
        corner_powers((), radius="-1")
    with pytest.raises(FieldError, match="at least 1e-300"):
        corner_powers((), radius="1e-320")
    with pytest.raises(FieldError, match="trust must be one of"):
        corner_powers((), trust="hearsay")
    with pytest.raises(FieldError, match="vertices must be those of a polygon"):
        corner_powers((), vertices=((0, 0), (1, 1), (1, 0), (0, 1)))
