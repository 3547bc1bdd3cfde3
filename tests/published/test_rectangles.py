"""Rectangles and cubes against published values, and values computed for published problems.

"From memory": the printed source was not at hand when the figure was written down. Where a figure has more
digits than any print, it was computed for the published problem by other programs (mpmath, 20 to 130 digits),
from the geometry up and without this package.
"""

import mpmath
import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.solvers.samples import five_point, seven_point

# Bornemann, Laurie, Wagon & Waldvogel 2004, The SIAM 100-Digit Challenge, ch. 10 (problem: Trefethen 2002,
# SIAM News): 10 x 1 rectangle, u = 1 on the short sides, u(centre). 100 digits printed; the longer figure
# computed independently.
ENDS_OF_A_TEN_TO_ONE_RECTANGLE = (
    "0.00000038375879792512261034071331862048391007930055940725095690300227"
    "991734366068527432765008428456472699101535338728"
)
# The same problem for other lengths, same book (from memory: the method, singular moduli); 28 digits
# computed.
ENDS_OF_OTHER_RECTANGLES = {
    "1": "0.5",  # exact, by symmetry
    "2": "0.109769799414207073805781716426",
    "3": "0.0228733015013343300333673260616",
    "5": "0.000988551142629728507418516696436",
}
# Carslaw & Jaeger 1959, Conduction of Heat in Solids, ch. V; from memory, 22 to 24 digits computed; 1/4 exact
# by symmetry.
HOT_SIDE_OF_A_SQUARE = {
    ("1/2", "1/2"): "0.25",
    ("1/2", "1/4"): "0.09541411796661341192741546",
    ("1/2", "3/4"): "0.5405292182595098750245246",
    ("1/4", "1/4"): "0.06797166811306164347597003",
}


def ends_hot(length):
    """u = 1 on the sides x = 0 and x = length, 0 on y = 0 and y = 1."""
    corners = (0, 0), (length, 1)
    return lv.fields.rectangle_series(*corners, 1, side="left") + lv.fields.rectangle_series(
        *corners, 1, side="right"
    )


def test_leaving_a_ten_to_one_rectangle_through_its_ends():
    found = ends_hot(10).enclosure((5, "1/2"), digits=106)
    with mpmath.workdps(130):
        expected = mpmath.mpf(ENDS_OF_A_TEN_TO_ONE_RECTANGLE)
        assert abs(found.value - expected) < mpmath.mpf("1e-105") * expected
        assert found.radius < mpmath.mpf("1e-105") * expected
    assert found.basis == "tail bound"


def test_ten_to_one_rectangle_in_float64():
    found = ends_hot(10).value([[5.0, 0.5]])[0]
    assert found == pytest.approx(3.837587979251226e-07, rel=1e-14, abs=0)  # every digit a float64 has


@pytest.mark.parametrize(("length", "expected"), ENDS_OF_OTHER_RECTANGLES.items())
def test_leaving_other_rectangles_through_their_ends(length, expected):
    found = ends_hot(int(length)).at((f"{length}/2", "1/2"), digits=32)
    with mpmath.workdps(40):
        assert abs(found - mpmath.mpf(expected)) < mpmath.mpf("1e-27")  # 28 digits are given


def test_leaving_a_root_three_rectangle_is_one_sixth():
    # Bornemann et al. 2004, ch. 10, from memory: exactly 1/6; sqrt(3) is given to 40 digits.
    found = ends_hot("1.7320508075688772935274463415058723669428").at(
        ("0.8660254037844386467637231707529361834714", "1/2"), digits=36
    )
    with mpmath.workdps(40):
        assert abs(found - mpmath.mpf(1) / 6) < mpmath.mpf("1e-34")


@pytest.mark.parametrize(("point", "expected"), HOT_SIDE_OF_A_SQUARE.items())
def test_square_with_one_hot_side(point, expected):
    u = lv.fields.rectangle_series((0, 0), (1, 1), 1)
    with mpmath.workdps(40):
        assert abs(u.at(point, digits=30) - mpmath.mpf(expected)) < mpmath.mpf("1e-24")


def test_square_with_one_hot_side_differs_by_a_quarter():
    # u(1/4, 3/4) - u(1/4, 1/2) = 1/4 exactly (same source).
    u = lv.fields.rectangle_series((0, 0), (1, 1), 1)
    upper, middle = u.at(("1/4", "3/4"), digits=30), u.at(("1/4", "1/2"), digits=30)
    with mpmath.workdps(40):
        assert abs(upper - middle - mpmath.mpf("0.25")) < mpmath.mpf("1e-29")
        assert abs(upper - mpmath.mpf("0.43202833188693835652403")) < mpmath.mpf(
            "1e-22"
        )  # 22 digits computed


def test_two_to_one_rectangle_with_one_hot_side():
    # Symmetry argument (the four sides together give 1); Carslaw & Jaeger 1959, from memory; 24 digits
    # computed.
    with mpmath.workdps(40):
        long_side = lv.fields.rectangle_series((0, 0), (2, 1), 1).at((1, "1/2"), digits=30)
        short_side = lv.fields.rectangle_series((0, 0), (2, 1), 1, side="left").at((1, "1/2"), digits=30)
        assert abs(long_side - mpmath.mpf("0.4451151002928964630971091")) < mpmath.mpf("1e-24")
        assert abs(short_side - mpmath.mpf("0.05488489970710353690289086")) < mpmath.mpf("1e-25")
        assert abs(2 * (long_side + short_side) - 1) < mpmath.mpf("1e-28")


def test_square_with_all_sides_hot():
    # The same symmetry with all four sides in one field: u = 1, and the mean of the data in the centre.
    with mpmath.workdps(40):
        hot = lv.fields.rectangle_sides((0, 0), (1, 1), left=1, right=1, bottom=1, top=1)
        assert hot.at(("1/3", "1/7"), digits=30) == 1
        three = lv.fields.rectangle_sides((0, 0), (1, 1), left=1, right=1, bottom=1)
        for (x, y), cold in HOT_SIDE_OF_A_SQUARE.items():
            assert abs(three.at((x, y), digits=30) - (1 - mpmath.mpf(cold))) < mpmath.mpf("1e-24")


def test_single_sine_mode_on_the_square():
    # Liu & Belytschko 1984, Int. J. Numer. Meth. Engng 20, 931-948 (problem); 24 digits computed.
    u = lv.fields.exp_trig(1, "sin", "sinh", centre=(0, 1), level=0, times_pi=True)
    with mpmath.workdps(40):
        for point, expected in {
            ("1/2", "1/2"): "0.1992684076691933402168113",
            ("1/2", "1/4"): "0.4526876711779204243852067",
        }.items():
            assert abs(u.at(point, digits=30) - mpmath.mpf(expected)) < mpmath.mpf("1e-24")


@pytest.mark.parametrize(
    ("point", "expected"),
    [
        (("1/2", "1/2"), "0.25"),  # exact: u(x, y) + u(1 - x, y) = y
        (("0", "1/2"), "0.1688286208283919028994397"),
        (("1", "1/2"), "0.3311713791716080971005603"),
        (("1/4", "3/4"), "0.2484863230155341368794"),
    ],
)
def test_square_between_insulated_sides_with_a_ramp_on_top(point, expected):
    # Exercise in Churchill & Brown and in Haberman, from memory; 20 to 22 digits computed.
    u = lv.fields.rectangle_series((0, 0), (1, 1), lv.fields.ramp(0, 1), neighbours="insulated")
    with mpmath.workdps(40):
        assert abs(u.at(point, digits=30) - mpmath.mpf(expected)) < mpmath.mpf("1e-20")


def test_semi_infinite_strip_with_a_hot_end():
    # u = (2/pi) arctan(sin pi x / sinh pi y): Churchill & Brown, from memory; 20 digits computed. A rectangle
    # 24 deep differs by 4/pi exp(-47.5 pi) = 2e-65 at this point.
    u = lv.fields.rectangle_series((0, 0), (1, 24), 1, side="bottom")
    with mpmath.workdps(40):
        found = u.at(("1/2", "1/2"), digits=30)
        assert abs(found - mpmath.mpf("0.26096377285431270164")) < mpmath.mpf("1e-20")


def test_semi_infinite_strip_by_its_closed_form():
    # The same problem and source; the formula itself.
    u = lv.fields.field("2/pi*atan(sin(pi*x)/sinh(pi*y))")
    with mpmath.workdps(40):
        found = u.at(("1/2", "1/2"), digits=30)
        assert abs(found - mpmath.mpf("0.26096377285431270164")) < mpmath.mpf("1e-20")


@pytest.mark.parametrize(
    ("formula", "point", "expected"),
    [
        # u = 1 for x < 0 and 0 for x > 0 on y = 0; u = 1 on |x| < 1 only: Poisson's integral, any text on
        # complex variables, from memory; both values exact
        ("atan2(y, x)/pi", (1, 1), "0.25"),
        ("(atan((x + 1)/y) - atan((x - 1)/y))/pi", (0, 1), "0.5"),
    ],
)
def test_half_plane_with_a_step_and_with_a_strip(formula, point, expected):
    u = lv.fields.field(formula)
    with mpmath.workdps(40):
        assert abs(u.at(point, digits=30) - mpmath.mpf(expected)) < mpmath.mpf("1e-30")
    # the half-plane as the inside of a very large rectangle, by its series: data differ beyond x = +-2000
    step = lv.fields.rectangle_series(
        (-2000, 0), (2000, 2000), lv.fields.step(), side="bottom", neighbours="insulated"
    )
    strip = lv.fields.piecewise((-2000, -1, 1, 2000), ((0,), (1,), (0,)))
    hot = lv.fields.rectangle_series((-2000, 0), (2000, 2000), strip, side="bottom")
    other = step if "atan2" in formula else hot
    assert other.value([[float(c) for c in point]])[0] == pytest.approx(float(expected), abs=2e-3)  # 1/1000


# -- plate with convection on two sides (NAFEMS) -----------------------------------------------------------

# NAFEMS, The Standard NAFEMS Benchmarks 1990, test T4: target 18.25 C; problem data seen, target from memory;
# the longer figures computed independently. 0.6 m x 1 m, k = 52, T = 100 on y = 0, insulated on x = 0, h =
# 750 to 0 C on x = 0.6 and y = 1.
CONVECTION_ON_TWO_SIDES = {
    ("3/5", "1/5"): "18.253756537134219654",
    ("0", "1/5"): "70.060663088215041299",
    ("3/10", "1/2"): "28.319959743477987554",
    ("0", "1"): "3.3677693469246551568",
    ("3/5", "1"): "0.55412985744187970112",
}


def convection_series(terms):
    """Return T = sum c cos(l x) [l cosh l(1-y) + H sinh l(1-y)]/[l cosh l + H sinh l].

    l tan(0.6 l) = H = 750/52, c = 200 sin(0.6 l)/(l (0.6 + sin(1.2 l)/(2 l))); derived by separation.
    """
    with mpmath.workdps(50):
        width, big = mpmath.mpf(6) / 10, mpmath.mpf(750) / 52
        total = None
        for n in range(terms):
            low, high = n * mpmath.pi / width, (n + mpmath.mpf(1) / 2) * mpmath.pi / width
            rate = mpmath.findroot(
                lambda s: s * mpmath.sin(s * width) - big * mpmath.cos(s * width),
                (low, high),
                solver="anderson",
            )
            strength = (
                200 * mpmath.sin(width * rate) / (rate * (width + mpmath.sin(2 * width * rate) / (2 * rate)))
            )
            even, odd = rate * mpmath.cosh(rate), big * mpmath.sinh(rate)
            wave = {"centre": (0, 1), "level": 0}
            mode = lv.fields.exp_trig(rate, "cos", "cosh", **wave) * (strength * even / (even + odd))
            mode += lv.fields.exp_trig(rate, "cos", "sinh", **wave) * (strength * odd / (even + odd))
            total = mode if total is None else total + mode
        return total


def test_plate_with_convection_on_two_sides_by_its_series():
    u = convection_series(40)  # at y = 1/5 the terms fall like exp(-n pi/3): 40 leave 1e-17
    with mpmath.workdps(30):
        for point, expected in CONVECTION_ON_TWO_SIDES.items():
            assert abs(u.at(point, digits=25) - mpmath.mpf(expected)) < mpmath.mpf("2e-16"), point


def test_plate_with_convection_on_two_sides_by_differences():
    plate = lv.problem(
        lv.Rectangle((0, 0), (0.6, 1.0)),
        {
            "bottom": lv.dirichlet(100),
            "left": lv.neumann(0),
            "right": lv.robin(750, 0),
            "top": lv.robin(750, 0),
        },
        conductivity=52,
    )
    sizes = (40, 80, 160)
    values = [five_point.solve(plate, n).value_at(np.array([[0.6, 0.2]]))[0] for n in sizes]
    found = lv.grid_convergence(values[::-1], [1 / n for n in reversed(sizes)])
    assert found.order == pytest.approx(2.0, abs=0.2)
    assert found.extrapolated == pytest.approx(18.253756537134219654, abs=2e-3)  # a tenth of the last change


# -- cubes -------------------------------------------------------------------------------------------------


def hot_face(n):
    """u = 1 on the top of the unit cube, 0 on the other faces, by seven-point differences."""
    faces = dict.fromkeys(("left", "right", "front", "back", "bottom"), lv.dirichlet(0))
    cube = lv.problem(lv.Box((0, 0, 0), (1, 1, 1)), {**faces, "top": lv.dirichlet(1)})
    return seven_point.solve(cube, n)


def test_cube_with_one_hot_face():
    # Exactly 1/6 in the centre: the six rotations add up to 1, for the differences as well as for the
    # solution (Carslaw & Jaeger 1959, ch. VI, from memory). Two opposite hot faces: 1/3 (Jackson, problem
    # 2.23, from memory).
    centre = hot_face(6).value_at(np.array([[0.5, 0.5, 0.5]]))[0]
    assert centre == pytest.approx(1 / 6, rel=1e-9, abs=0)  # the sample solves iteratively
    assert 2 * centre == pytest.approx(1 / 3, rel=1e-9, abs=0)


@pytest.mark.slow
def test_cube_with_one_hot_face_off_its_centre():
    # Carslaw & Jaeger 1959, ch. VI, from memory; 18 and more digits computed.
    points = np.array([[0.5, 0.5, 0.25], [0.5, 0.5, 0.75], [0.25, 0.25, 0.25]])
    expected = [0.05101640474159350603, 0.45808681458067311152, 0.02612771009446531371]
    coarse, fine = (hot_face(n).value_at(points) for n in (12, 24))
    assert fine + (fine - coarse) / 3 == pytest.approx(expected, abs=2e-4)  # next term h^4, h = 1/12


def test_hollow_cube_first_term_of_its_series():
    # Jackson, problem 2.23: the first term of the double series gives 0.347546 (from memory; 0.3475458487
    # computed).
    mode = lv.fields.exp_trig((1, 1), "sin", "cosh", centre=(0, 0, "1/2"), level=0, times_pi=True)
    first = 16 / np.pi**2 * mode.value([[0.5, 0.5, 0.5]])[0]
    assert first == pytest.approx(0.3475458487, abs=1e-10)


def test_sine_mode_in_the_cube():
    # Separation of variables, any text, common practice; 24 digits computed.
    u = lv.fields.exp_trig((1, 1), "sin", "sinh", level=1, times_pi=True)
    with mpmath.workdps(40):
        found = u.at(("1/2", "1/2", "1/2"), digits=30)
        assert abs(found - mpmath.mpf("0.1071918761737940023477995")) < mpmath.mpf("1e-24")


@pytest.mark.parametrize("sides", [3, 6])
def test_regular_polygon_with_one_hot_side(sides):
    # Exactly 1/n in the centre, by symmetry and uniqueness (common practice).
    from laplace_verify.solvers.samples import p1_element

    angles = 2 * np.pi * np.arange(sides) / sides
    corners = [(float(x), float(y)) for x, y in zip(np.cos(angles), np.sin(angles), strict=True)]
    data = {f"side-{k}": lv.dirichlet(float(k == 1)) for k in range(1, sides + 1)}
    answer = p1_element.solve(lv.problem(lv.Polygon(corners), data), 32)
    assert answer.value_at(np.array([[1e-9, 0.0]]))[0] == pytest.approx(
        1 / sides, abs=2e-3
    )  # O(h^2), h = 1/32
