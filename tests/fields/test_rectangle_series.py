"""Rectangles with data on one side against plain series, theta functions, published values and themselves."""

import itertools
import time
from fractions import Fraction

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.fields.piecewise import Piecewise

RECTANGLES = {
    "square": ((0, 0), (1, 1)),
    "shallow": ((0, 0), (1, "0.1")),
    "deep": (("-1/2", 2), ("1/2", 6)),
    "sliver": ((0, 0), (1000, 1)),
    "chimney": ((0, 0), ("0.001", 1)),
}
DATA = {
    "one": 1,
    "ramp": fields.ramp(0, 1),
    "step": fields.step("1/3", 1, 0),
    "tent": fields.tent("1/4"),
    "parabola": fields.parabola(),
}
CONDITIONS = ("zero", "insulated")
SIDES = ("top", "bottom", "left", "right")


# -- the other route: Fourier coefficients by quadrature, modes summed one by one ----------------------------


def values_on(data, length):
    """The data as a function of s = distance along the side, and its breaks."""
    pieces = (
        data
        if isinstance(data, Piecewise)
        else Piecewise(breaks=(0, 1), coefficients=((data,),), fraction=True)
    )
    breaks, rows = pieces.on(Fraction(0), Fraction(length))

    def f(s):
        i = max(k for k, b in enumerate(breaks[:-1]) if s >= mpmath.mpf(b.numerator) / b.denominator)
        t = s - mpmath.mpf(breaks[i].numerator) / breaks[i].denominator
        return sum(mpmath.mpf(c.numerator) / c.denominator * t**k for k, c in enumerate(rows[i]))

    return f, [mpmath.mpf(b.numerator) / b.denominator for b in breaks]


def plain_series(data, length, height, s, d, neighbours, far, modes):
    """u by quadrature of every coefficient and sinh or cosh of every mode, 30 digits."""
    f, breaks = values_on(data, length)
    s, d, a, b = mpmath.mpf(s), mpmath.mpf(d), mpmath.mpf(length), mpmath.mpf(height)
    trig = mpmath.sin if neighbours == "zero" else mpmath.cos
    profile = mpmath.sinh if far == "zero" else mpmath.cosh
    total = mpmath.mpf(0)
    if neighbours == "insulated":
        total = mpmath.quad(f, breaks) / a * ((b - d) / b if far == "zero" else 1)
    for n in range(1, modes + 1):
        k = n * mpmath.pi / a
        knots = sorted({*breaks, *(a * j / n for j in range(n + 1))})
        coefficient = 2 / a * mpmath.quad(lambda t, k=k: f(t) * trig(k * t), knots)
        total += coefficient * trig(k * s) * profile(k * (b - d)) / profile(k * b)
    return total


@pytest.mark.parametrize(
    ("name", "neighbours", "far"),
    [
        (name, neighbours, CONDITIONS[(i + j) % 2])
        for i, name in enumerate(DATA)
        for j, neighbours in enumerate(CONDITIONS)
    ],
)
def test_the_interior_agrees_with_the_series_summed_mode_by_mode(name, neighbours, far):
    # 14 modes at depth 0.9 of a 1 x 1.5 rectangle: what is left out is below e^{-15 * 0.9 pi} = 4e-19.
    u = fields.rectangle_series((0, 0), (1, "3/2"), DATA[name], neighbours, "top", far)
    with mpmath.workdps(30):
        want = plain_series(DATA[name], 1, "1.5", "0.3", "0.9", neighbours, far, 14)
        got = u.at(("0.3", "0.6"), digits=25)
        assert abs(got - want) <= mpmath.mpf("1e-18")
        assert not abs(got * (1 + mpmath.mpf("1e-15")) - want) <= mpmath.mpf("1e-18") or got == 0  # twin


def theta_step(c, b, s, d):
    """Step 1 for s < c on an insulated strip of length 1: the theta function centred on the jump, 40 digits.

    u = c h/b - c - [arg T(t+) + arg T(t-)]/pi, T = sum (-1)^n q^{(n+1/2)^2-1/4} sinh((2n+1) t),
    q = e^{-pi b}, t+- = (pi/2)(d - i (c +- s)). Whittaker & Watson ch. 21, DLMF 20.2 (from memory).
    """
    q = mpmath.exp(-mpmath.pi * b)

    def angle(shift):
        t = mpmath.pi / 2 * mpmath.mpc(d, -shift)
        terms = ((-1) ** n * q ** (n * n + n) * mpmath.sinh((2 * n + 1) * t) for n in range(12))
        return mpmath.arg(mpmath.fsum(terms))

    return c * (b - d) / b - c - (angle(c + s) + angle(c - s)) / mpmath.pi


@pytest.mark.parametrize("d", ["0.7", "1e-3", "1e-6", "1e-12"])
@pytest.mark.parametrize("s", ["0.1", "0.499999", "0.500000000001", "0.93"])
@pytest.mark.parametrize("b", ["0.8", "1", "2.5"])
def test_a_step_agrees_with_its_theta_function(s, d, b):
    u = fields.rectangle_series((0, 0), (1, b), fields.step("1/2"), "insulated", "bottom")
    with mpmath.workdps(60):
        want = theta_step(mpmath.mpf("0.5"), mpmath.mpf(b), mpmath.mpf(s), mpmath.mpf(d))
        assert abs(u.at((s, d), digits=35) - want) <= mpmath.mpf("1e-33")


# Published values: Carslaw & Jaeger, Conduction of heat in solids, 2nd ed. 1959, ch. V, and textbook cosine
# series; digits beyond the published ones from series summed independently at 50 digits. Centre: by symmetry.
HOT_SIDE = {
    ("1/2", "1/2"): "0.25",
    ("1/2", "1/4"): "0.09541411796661341192741546",
    ("1/2", "3/4"): "0.5405292182595098750245246",
    ("1/4", "1/4"): "0.06797166811306164347597003",
    ("1/4", "1/2"): "0.18202833188693835652403",
    ("1/4", "3/4"): "0.43202833188693835652403",
}
RAMP = {
    ("1/2", "1/2"): "0.25",
    (0, "1/2"): "0.1688286208283919028994397",
    (1, "1/2"): "0.3311713791716080971005603",
    ("1/4", "3/4"): "0.2484863230155341368794",
}


def assert_digits(u, point, digits, tolerance):
    """Compare with a published decimal, as precise and as float64 number."""
    with mpmath.workdps(40):
        assert abs(u.at(point, digits=30) - mpmath.mpf(digits)) <= mpmath.mpf(tolerance)
    place = [[float(Fraction(c)) for c in point]]
    assert u.value(place)[0] == pytest.approx(float(digits), rel=0, abs=3e-16)


@pytest.mark.parametrize("point", HOT_SIDE)
def test_published_values_of_the_square_with_one_hot_side(point):
    u = fields.rectangle_series((0, 0), (1, 1), 1)
    assert_digits(u, point, HOT_SIDE[point], "1e-23")


@pytest.mark.parametrize("point", RAMP)
def test_published_values_of_the_ramp_between_insulated_sides(point):
    u = fields.rectangle_series((0, 0), (1, 1), fields.ramp(0, 1), "insulated")
    assert_digits(u, point, RAMP[point], "1e-19")


def test_published_values_of_the_two_by_one_rectangle():
    # Carslaw & Jaeger 1959; twice the sum of both is exactly 1.
    long = fields.rectangle_series((0, 0), (2, 1), 1)
    short = fields.rectangle_series((0, 0), (2, 1), 1, side="left")
    assert_digits(long, (1, "1/2"), "0.4451151002928964630971091", "1e-24")
    assert_digits(short, (1, "1/2"), "0.05488489970710353690289086", "1e-24")
    assert_digits(2 * (long + short), (1, "1/2"), "1", "1e-28")


def test_four_hot_sides_add_up_to_one():
    lower, upper = (0, "0.3"), ("0.7", 2)
    first, *others = (fields.rectangle_series(lower, upper, 1, side=side) for side in SIDES)
    total = sum(others, start=first)
    points = np.array([0.0, 0.3]) + np.array([0.7, 1.7]) * np.random.default_rng(3).uniform(size=(50, 2))
    assert np.abs(total.value(points) - 1).max() <= 1e-15
    assert np.abs(total.gradient(points)).max() <= 1e-13  # of terms up to 1 / distance


# -- float64 against 40 digits at the same binary points -----------------------------------------------------


def hard_points(lower, upper, side):
    """Points at 1e-3, 1e-6, 1e-12 and 0 of the size from the side with data, and from the corners."""
    low = np.array([float(Fraction(c)) for c in lower])
    high = np.array([float(Fraction(c)) for c in upper])
    axis = 0 if side in ("top", "bottom") else 1
    near, far = (high, low) if side in ("top", "right") else (low, high)
    points = []
    length, depth = (high - low)[axis], (far - near)[1 - axis]
    small = min(length, abs(depth))
    for distance, along in itertools.product((1e-3, 1e-6, 1e-12, 0.0), (1e-12, 1e-6, 0.26, 0.61, 1 - 1e-3)):
        point = np.zeros(2)
        point[axis] = low[axis] + along * length
        point[1 - axis] = near[1 - axis] + np.sign(depth) * distance * small
        points.append(point)
    points += [low + (high - low) * t for t in (0.11, 0.5, 0.83)]
    return np.clip(np.array(points), low, high)


SAMPLE = [
    (rectangle, data, neighbours, far, side)
    for i, (rectangle, data, neighbours, far) in enumerate(
        itertools.product(RECTANGLES, DATA, CONDITIONS, CONDITIONS)
    )
    for side in (SIDES[i % 4],)
]


def compare(u, points, precise, length=1.0):
    """Largest error of values, and of gradients relative to |grad u| at the point.

    In a quiet corner of a deep rectangle |grad u| is small by cancellation; below 1/100 of max|u| / length
    the error counts relative to that.
    """
    values, gradients = u.value(points), u.gradient(points)
    worst = slope = 0.0
    for point, v, g in zip(points.tolist(), values, gradients, strict=True):
        worst = max(worst, abs(float(precise.at(point, digits=40) - mpmath.mpf(float(v)))))
        exact = np.array([float(c) for c in precise.gradient_at(point, digits=30)])
        slope = max(slope, float(np.linalg.norm(g - exact) / max(np.linalg.norm(exact), 0.01 / length)))
    return worst, slope


@pytest.mark.slow
@pytest.mark.parametrize(("rectangle", "data", "neighbours", "far", "side"), SAMPLE)
def test_float64_agrees_with_forty_digits_on_the_closed_rectangle(rectangle, data, neighbours, far, side):
    u = fields.rectangle_series(*RECTANGLES[rectangle], DATA[data], neighbours, side, far)
    points = hard_points(*RECTANGLES[rectangle], side)[::3]
    length = min(float(Fraction(b) - Fraction(a)) for a, b in zip(*RECTANGLES[rectangle], strict=True))
    worst, slope = compare(u, points, u, length)
    assert worst <= 8e-16  # max |u| = 1: three roundings
    assert slope <= 2e-13  # exponents up to 700 cost three digits of 2e-16


@pytest.mark.parametrize("rectangle", ["square", "deep", "sliver"])
def test_float64_agrees_with_forty_digits_next_to_jumps_and_corners(rectangle):
    u = fields.rectangle_series(*RECTANGLES[rectangle], fields.step("1/3"), "zero", "top")
    points = hard_points(*RECTANGLES[rectangle], "top")[::4]
    worst, slope = compare(u, points, u)
    assert worst <= 5e-16
    assert slope <= 1e-13


def test_the_comparison_notices_an_error_in_the_last_digits():
    """Twins: another jump by 1e-12, and the first 100 terms of the series."""
    points = np.array([[0.3333, 0.9999], [0.25, 0.5]])
    u = fields.rectangle_series((0, 0), (1, 1), fields.step("1/3"))
    moved = fields.rectangle_series((0, 0), (1, 1), fields.step("0.333333333334"))
    assert not compare(moved, points, u)[0] <= 5e-16
    assert not compare(1.0000000000001 * u, points, u)[0] <= 5e-16
    ramp = fields.rectangle_series((0, 0), (1, 1), fields.ramp(0, 1), "insulated")
    n = np.arange(1, 100, 2)
    naive = 0.5 - np.sum(4 / (n * np.pi) ** 2)  # the series at (0, 1), where u = 0
    assert ramp.value([[0.0, 1.0]])[0] == 0
    assert abs(naive) > 1e-3


@pytest.mark.parametrize("rectangle", RECTANGLES)
@pytest.mark.parametrize("name", ["ramp", "step", "tent", "parabola"])
def test_the_side_itself_has_exactly_the_data(rectangle, name):
    lower, upper = RECTANGLES[rectangle]
    start, stop = Fraction(lower[0]), Fraction(upper[0])
    fraction = np.array([0.125, 0.375, 0.75])
    x = float(start) + fraction * float(stop - start)
    want = {
        "ramp": fraction,
        "step": np.array([1.0, 0, 0]),
        "tent": np.array([0.5, 5 / 6, 1 / 3]),
        "parabola": 4 * fraction * (1 - fraction),
    }[name]
    for far in CONDITIONS:
        u = fields.rectangle_series(lower, upper, DATA[name], "insulated", "top", far)
        got = u.value(np.column_stack([x, np.full(3, float(Fraction(upper[1])))]))
        assert np.abs(got - want).max() <= 3e-16  # the rounding of x itself


def test_zero_sides_are_exactly_zero():
    u = fields.rectangle_series((0, 0), (2, 1), fields.tent(), "zero", "top")
    sides = np.array([[0.0, 0.3], [2.0, 0.999], [0.7, 0.0], [1.3, 0.0], [0.0, 1.0]])
    assert u.value(sides).tolist() == [0, 0, 0, 0, 0]
    insulated = fields.rectangle_series((0, 0), (2, 1), fields.ramp(0, 1), "insulated", "top", "insulated")
    assert np.abs(insulated.gradient(sides[:2])[:, 0]).max() <= 3e-16
    assert insulated.gradient(sides[2:4])[:, 1].tolist() == [0, 0]


@pytest.mark.parametrize("side", SIDES)
def test_the_four_sides_are_rotations_of_one_another(side):
    data = fields.step("1/4", 2, -1)
    top = fields.rectangle_series((0, 0), (2, 1), data, "insulated", "top")
    size = {"top": (2, 1), "bottom": (2, 1), "left": (1, 2), "right": (1, 2)}[side]
    u = fields.rectangle_series((0, 0), size, data, "insulated", side)
    x, y = np.array([0.3, 0.51, 1.7, 1.2]), np.array([0.2, 0.99, 0.6, 0.5])
    there = {"top": (x, y), "bottom": (x, 1 - y), "left": (1 - y, x), "right": (y, x)}[side]
    assert np.abs(u.value(np.column_stack(there)) - top.value(np.column_stack([x, y]))).max() <= 1e-15
    ux, uy = top.gradient(np.column_stack([x, y])).T
    want = {"top": (ux, uy), "bottom": (ux, -uy), "left": (-uy, ux), "right": (uy, ux)}[side]
    assert np.abs(u.gradient(np.column_stack(there)) - np.column_stack(want)).max() <= 1e-13


def second_differences(u, point):
    """Laplacian and gradient by central differences with h = 1e-10 in 60 digits."""
    with mpmath.workdps(70):
        h = mpmath.mpf("1e-10")
        x, y = (mpmath.mpf(c) for c in point)
        centre, east, west, north, south = (
            u.at(p, digits=60) for p in ((x, y), (x + h, y), (x - h, y), (x, y + h), (x, y - h))
        )
        laplacian = (east + west + north + south - 4 * centre) / h**2
        return laplacian, ((east - west) / (2 * h), (north - south) / (2 * h))


@pytest.mark.parametrize(
    "u",
    [
        fields.rectangle_series((0, 0), (1, 1), fields.step("1/3"), "zero", "top"),
        fields.rectangle_series((0, 0), (1, 3), fields.parabola(), "insulated", "bottom", "insulated"),
        fields.rectangle_series((0, 0), (8, 1), fields.tent(), "zero", "left"),
    ],
    ids=["step", "parabola", "tent"],
)
def test_the_field_is_harmonic_and_its_gradient_is_its_derivative(u):
    point = ("0.4", "0.7")
    laplacian, gradient = second_differences(u, point)
    assert abs(laplacian) <= 1e-15  # h^2 / 12 times fourth derivatives
    for got, want in zip(u.gradient_at(point, digits=30), gradient, strict=True):
        assert abs(got - want) <= 1e-16


def test_the_check_of_harmonicity_notices_what_is_not_harmonic():
    """Twin."""
    u = fields.rectangle_series((0, 0), (1, 1), 1) + fields.field("1e-6*x**2", dim=2)
    assert not abs(second_differences(u, ("0.4", "0.7"))[0]) <= 1e-15


@pytest.mark.parametrize("upper", [(1, 1), (1, "0.001"), (1, 1000)])
def test_a_hundred_thousand_points_take_bounded_time(upper):
    u = fields.rectangle_series((0, 0), upper, fields.tent("1/3"), "insulated")
    points = np.random.default_rng(8).uniform(size=(100000, 2)) * [float(Fraction(c)) for c in upper]
    start = time.perf_counter()
    values, gradients = u.value(points), u.gradient(points)
    assert time.perf_counter() - start < 5  # 0.1 s alone on one thread
    assert values.shape == (100000,)
    assert gradients.shape == (100000, 2)
    assert 0 <= values.min() <= values.max() <= 1
