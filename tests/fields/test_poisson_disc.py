"""Discs with data on the rim against quadrature of Poisson's kernel, closed forms and published values."""

import time
from fractions import Fraction

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError

HALF = fields.arcs((0, "1/2"), (1, 0))
UNEVEN = fields.arcs(("1/8", "0.3", "4/5"), (1, 0, "-5/2"))


def poisson(f, breaks, z):
    """1/(2 pi) int f(phi) (1 - |z|^2) / |e^{i phi} - z|^2 d phi by quadrature between the breaks."""

    def integrand(phi):
        return f(phi) * (1 - abs(z) ** 2) / abs(mpmath.expj(phi) - z) ** 2

    knots = sorted([*breaks, *(mpmath.arg(z) % (2 * mpmath.pi) + k * mpmath.pi / 2 for k in range(-4, 5))])
    inside = [k for k in knots if breaks[0] <= k <= breaks[-1]]
    return mpmath.quad(integrand, inside) / (2 * mpmath.pi)


def steps(phi):
    """The values of UNEVEN at the angle phi, in 2 pi times [1/8, 9/8]."""
    turn = phi / (2 * mpmath.pi)
    return 1 if turn < mpmath.mpf("0.3") else (0 if turn < mpmath.mpf("0.8") else mpmath.mpf("-2.5"))


@pytest.mark.parametrize("place", [("0.1", "-0.2"), ("-0.35", "0.55"), ("0.6", "0.59")])
def test_arcs_agree_with_quadrature_of_the_poisson_kernel(place):
    u = fields.poisson_disc((0, 0), 1, UNEVEN)
    with mpmath.workdps(30):
        breaks = [2 * mpmath.pi * mpmath.mpf(t) for t in ("0.125", "0.3", "0.8", "1.125")]
        want = poisson(steps, breaks, mpmath.mpc(*place))
        got = u.at(place, digits=25)
        assert abs(got - want) <= mpmath.mpf("1e-20")
        assert not abs(got + mpmath.mpf("1e-15") - want) <= mpmath.mpf("1e-20")  # twin


@pytest.mark.parametrize("data", ["exp(sin(theta))", "1/(2+cos(3*theta))"])
def test_smooth_data_agree_with_quadrature_of_the_poisson_kernel(data):
    u = fields.poisson_disc((1, "-1/2"), 2, data)
    functions = {
        "exp(sin(theta))": lambda t: mpmath.exp(mpmath.sin(t)),
        "1/(2+cos(3*theta))": lambda t: 1 / (2 + mpmath.cos(3 * t)),
    }
    with mpmath.workdps(30):
        want = poisson(functions[data], [mpmath.mpf(0), 2 * mpmath.pi], mpmath.mpc("0.3", "0.25"))
        assert abs(u.at(("1.6", 0), digits=22) - want) <= mpmath.mpf("1e-20")
    assert u.value([[1.6, 0.0]])[0] == pytest.approx(float(want), rel=0, abs=1e-15)
    assert u.basis == "uncertified"


def test_published_value_of_half_a_rim():
    # Jackson, Classical electrodynamics, problem 2.13: 1/2 + atan(2y/(1 - r^2))/pi; +-1 data give 2u - 1.
    u = fields.poisson_disc((0, 0), 1, HALF)
    both = fields.poisson_disc((0, 0), 1, fields.arcs((0, "1/2"), (1, -1)))
    with mpmath.workdps(30):
        assert abs(u.at((0, "1/2"), digits=25) - mpmath.mpf("0.79516723530086654835")) <= mpmath.mpf("1e-19")
        assert abs(both.at((0, "1/2"), digits=25) - mpmath.mpf("0.5903344706017330967")) <= mpmath.mpf(
            "1e-18"
        )
    x, y = np.array([0.3, -0.8, 0.0, 0.6]), np.array([0.4, 0.1, -0.9, -0.3])
    want = 0.5 + np.arctan2(2 * y, (1 - x) * (1 + x) - y * y) / np.pi
    assert np.abs(u.value(np.column_stack([x, y])) - want).max() <= 3e-16


def test_the_centre_has_the_mean_of_the_rim():
    u = fields.poisson_disc(("0.1", 2), "1/3", UNEVEN)
    mean = Fraction(7, 40) - Fraction(5, 2) * Fraction(13, 40)
    assert abs(u.at(("0.1", 2), digits=30) - mpmath.mpf(mean.numerator) / mean.denominator) <= 1e-15
    assert fields.poisson_disc((0, 0), 5, "3").value([[1.0, 2.0], [5.0, 0.0]]).tolist() == [3, 3]


@pytest.mark.parametrize("turn", [0.05, 0.2, 0.55, 0.95])
def test_the_rim_has_the_value_of_its_arc(turn):
    u = fields.poisson_disc((0, 0), 2, UNEVEN)
    rim = 2 * np.array([[np.cos(2 * np.pi * turn), np.sin(2 * np.pi * turn)]])
    want = {0.05: -2.5, 0.2: 1, 0.55: 0, 0.95: -2.5}[turn]
    assert u.value(rim)[0] == pytest.approx(want, rel=0, abs=1e-15)  # the point itself is rounded


def test_points_exactly_on_the_rim_have_exactly_its_value():
    u = fields.poisson_disc((0, 0), 5, UNEVEN)
    assert u.value([[3.0, 4.0], [-3.0, 4.0], [-3.0, -4.0], [5.0, 0.0]]).tolist() == [1, 0, 0, -2.5]


def near_jumps(centre, radius, turns):
    """Points at 1e-3, 1e-6 and 1e-12 of the radius from the rim and from the ends of arcs."""
    points = []
    for turn in turns:
        for distance in (1e-3, 1e-6, 1e-12):
            for shift in (0.3, 1e-6, -1e-12):
                angle = 2 * np.pi * float(turn) + shift
                points.append([(1 - distance) * np.cos(angle), (1 - distance) * np.sin(angle)])
    return np.array(centre) + radius * np.array(points)


def compare(u, precise, points):
    """Largest error of values, and of gradients relative to |grad u| at the point."""
    worst = slope = 0.0
    for point, v, g in zip(points.tolist(), u.value(points), u.gradient(points), strict=True):
        worst = max(worst, abs(float(precise.at(point, digits=40) - mpmath.mpf(float(v)))))
        exact = np.array([float(c) for c in precise.gradient_at(point, digits=30)])
        slope = max(slope, float(np.linalg.norm(g - exact) / np.linalg.norm(exact)))
    return worst, slope


@pytest.mark.parametrize(
    ("centre", "radius", "data"), [((0, 0), 1, HALF), ((0, 0), 1, UNEVEN), (("0.1", 2), "1/3", UNEVEN)]
)
def test_float64_agrees_with_forty_digits_next_to_jumps(centre, radius, data):
    u = fields.poisson_disc(centre, radius, data)
    points = near_jumps(
        [float(Fraction(c)) for c in centre], float(Fraction(radius)), [Fraction(t) for t in data.turns]
    )
    worst, slope = compare(u, u, points)
    assert worst <= 2e-15  # values up to 2.5
    assert slope <= 1e-13
    moved = fields.poisson_disc(centre, radius, fields.arcs(("1e-13", *data.turns[1:]), data.values))
    if data is HALF:  # twin: a jump in a place 6e-13 away is noticed
        assert not compare(u, moved, points)[0] <= 2e-15


def test_finite_fourier_data_are_a_harmonic_polynomial():
    u = fields.poisson_disc((0, 0), 2, fields.fourier(("1/2", 0, 3), (1, 0, -4)))
    v = fields.field("1/2 + 3/4*(x**2 - y**2) + y/2 - (3*x**2*y - y**3)/2")
    points = near_jumps((0, 0), 1.5, [0.1, 0.4, 0.77])
    assert np.abs(u.value(points) - v.value(points)).max() <= 4e-15  # terms up to 9
    assert np.abs(u.gradient(points) - v.gradient(points)).max() <= 1e-14
    assert (u.degree, u.basis, u.singularities) == (3, "closed form", ())
    theta = np.array([0.3, 2.0, 4.4])
    rim = 0.5 + 3 * np.cos(2 * theta) + np.sin(theta) - 4 * np.sin(3 * theta)
    got = u.value(2 * np.column_stack([np.cos(theta), np.sin(theta)]))
    assert np.abs(got - rim).max() <= 4e-15


def test_the_conjugate_has_the_turned_gradient():
    u = fields.poisson_disc((1, 0), 2, fields.fourier((5, 1, 3), (2, 0, -4)))
    v = u.conjugate()
    points = np.array([[1.3, 0.4], [0.0, -0.7], [2.5, 0.1]])
    ux, uy = u.gradient(points).T
    assert np.abs(v.gradient(points) - np.column_stack([-uy, ux])).max() <= 1e-14
    with pytest.raises(FieldError, match="no conjugate"):
        fields.poisson_disc((0, 0), 1, HALF).conjugate()


@pytest.mark.parametrize("data", [UNEVEN, fields.fourier((1, 2), (0, 3)), "exp(cos(theta))"])
def test_the_field_is_harmonic_and_its_gradient_is_its_derivative(data):
    u = fields.poisson_disc(("0.1", 0), "3/2", data)
    with mpmath.workdps(60):
        h, x, y = mpmath.mpf("1e-10"), mpmath.mpf("0.4"), mpmath.mpf("0.6")
        places = ((x, y), (x + h, y), (x - h, y), (x, y + h), (x, y - h))
        centre, east, west, north, south = (u.at(p, digits=50) for p in places)
        assert abs((east + west + north + south - 4 * centre) / h**2) <= 1e-15
        ux, uy = u.gradient_at((x, y), digits=30)
        assert abs((east - west) / (2 * h) - ux) <= 1e-15
        assert abs((north - south) / (2 * h) - uy) <= 1e-15
        assert not abs((north - south) / (2 * h) + uy) <= 1e-15  # twin: the wrong sign


@pytest.mark.parametrize("data", [HALF, UNEVEN, fields.fourier((), ("1/3",)), "exp(cos(theta))"])
def test_a_specification_gives_the_same_field_back(data):
    u = fields.poisson_disc(("0.1", -3), "5/7", data)
    assert fields.from_spec(u.spec()) == u
    assert "on the rim" in u.formula


def test_jumps_are_declared_and_refused():
    u = fields.poisson_disc((0, 0), 1, HALF)
    assert {(s.point, s.exponent, s.kind) for s in u.singularities} == {
        ((1, 0), 0, "jump"),
        ((-1, 0), 0, "jump"),
    }
    equal = fields.poisson_disc((0, 0), 1, fields.arcs((0, "1/4", "1/2"), (1, 1, 0)))
    assert len(equal.singularities) == 2
    with pytest.raises(FieldError, match="jumps at point 1"):
        u.value([[0.0, 0.0], [1.0, 0.0]])
    with pytest.raises(FieldError, match="jumps at point"):
        u.gradient_at((-1, 0))
    third = fields.poisson_disc(("1/3", 0), 1, HALF)  # the jump at (4/3, 0) is no float64 point
    with pytest.raises(FieldError, match=r"jumps at point \(4/3, 0\)"):
        third.at(("4/3", 0))


def test_points_outside_the_disc_are_refused():
    u = fields.poisson_disc((1, 0), 2, "exp(cos(theta))")
    with pytest.raises(FieldError, match="not defined at point 1"):
        u.value([[1.0, 0.0], [3.001, 0.0]])
    with pytest.raises(FieldError, match="not defined"):
        u.gradient_at((1, "2.0001"))


@pytest.mark.parametrize(
    ("message", "build"),
    [
        ("radius must be > 0, got 0", lambda: fields.poisson_disc((0, 0), 0, 1)),
        ("centre must have 2 coordinates, got 3", lambda: fields.poisson_disc((0, 0, 0), 1, 1)),
        ("turns must rise and stay within one turn", lambda: fields.arcs((0, "1.5"), (1, 2))),
        ("got 2 places and 1 values", lambda: fields.arcs((0, "1/2"), (1,))),
        ("at least one coefficient", lambda: fields.fourier()),
        ("cosines must be a list of numbers", lambda: fields.fourier("12")),
        ("unknown name 'x'", lambda: fields.poisson_disc((0, 0), 1, "x")),
        ("have not decayed after 16384 samples", lambda: fields.poisson_disc((0, 0), 1, "theta")),
        ("data must be finite", lambda: fields.poisson_disc((0, 0), 1, "log(sin(theta)**2)")),
        ("must be a real number", lambda: fields.poisson_disc((0, 0), 1, None)),
    ],
)
def test_bad_descriptions_are_refused(message, build):
    with pytest.raises(FieldError, match=message):
        build()


def test_a_hundred_thousand_points_take_bounded_time():
    rng = np.random.default_rng(9)
    angle, radius = rng.uniform(0, 2 * np.pi, 100000), np.sqrt(rng.uniform(size=100000))
    points = np.column_stack([radius * np.cos(angle), radius * np.sin(angle)])
    start = time.perf_counter()
    for data in (UNEVEN, "exp(cos(theta))"):
        u = fields.poisson_disc((0, 0), 1, data)
        assert u.value(points).shape == (100000,)
        assert u.gradient(points).shape == (100000, 2)
    assert time.perf_counter() - start < 5  # 0.15 s alone on one thread
