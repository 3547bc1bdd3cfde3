"""Fields about edges and cone tips: what they vanish on, other routes to their values, refusals, motions."""

import json
import math

import mpmath
import numpy as np
import pytest
from scipy.integrate import quad

from laplace_verify import fields
from laplace_verify.errors import FieldError
from laplace_verify.fields import Fan, Line

CARRIED = fields.along_z(fields.wedge("2/3"), slope="1/2")
WAVE = fields.edge_wave("2/3", 3)
CORNER = fields.half_edge("2/3", (1, 1, 1))
NOTCH = fields.cone("3/4")


def test_edge_fields_vanish_on_both_faces_of_the_edge():
    r = np.array([1e-9, 0.3, 2.0])
    for angle in (0.0, 1.5 * math.pi):
        points = np.stack([r * math.cos(angle), r * math.sin(angle), np.array([-1.0, 0.5, 3.0])], axis=1)
        assert np.abs(CARRIED.value(points)).max() <= 1e-15 * 4
        assert np.abs(WAVE.value(points)).max() <= 1e-15 * np.abs(WAVE.value([[-2.0, 0.0, 0.0]]))[0]
    assert abs(CARRIED.value([[-1.0, 0.0, 0.0]])[0]) > 0.5  # the twin: not zero everywhere


def test_wave_is_the_sum_of_its_power_series():
    """I_a(x) = sum (x/2)^(2m+a)/(m! Gamma(m+a+1)) (Abramowitz & Stegun 9.6.10, from memory)."""
    with mpmath.workdps(40):
        a, k, r, z = mpmath.mpf(2) / 3, 3, mpmath.mpf("0.7"), mpmath.mpf("0.3")

        def series(x):
            terms = (
                (x / 2) ** (2 * m + a) / (mpmath.factorial(m) * mpmath.gamma(m + a + 1)) for m in range(40)
            )
            return mpmath.fsum(terms)

        expected = series(k * r) / series(mpmath.mpf(k)) * mpmath.sin(a * mpmath.pi / 2) * mpmath.cos(k * z)
        assert abs(WAVE.at((0, "7/10", "3/10"), 30) - expected) <= mpmath.mpf("1e-30")


def test_wave_does_not_overflow():
    steep = fields.edge_wave("2/3", 2000, radius=3)
    assert np.isfinite(steep.value([[-3.0, 0.1, 0.0], [-1e-9, 0.0, 1.0], [-0.25, 0.0, 0.0]])).all()
    with mpmath.workdps(30):
        exact = float(steep.at((-2.99, 0.1, 0.0), 20))
    assert steep.value([[-2.99, 0.1, 0.0]])[0] == pytest.approx(exact, rel=1e-12, abs=0)


def test_half_edge_is_homogeneous_and_like_a_power_at_its_edge():
    points = np.array([[-0.4, 0.3, 0.2], [0.5, -0.2, -0.6], [-0.1, -0.2, 0.9]])
    np.testing.assert_allclose(CORNER.value(3 * points), 3 * CORNER.value(points), rtol=1e-14, atol=0)
    assert CORNER.value([[0.0, 0.0, 0.0]])[0] == 0.0
    near, nearer = (np.array([[-e, -2 * e, 0.8]]) for e in (1e-6, 1e-9))
    ratio = CORNER.value(near)[0] / CORNER.value(nearer)[0]
    assert math.log10(ratio) / 3 == pytest.approx(2 / 3, abs=1e-5)
    below = CORNER.gradient([[1e-9, 0.0, -0.8], [0.0, 0.0, -0.8]])  # smooth on the other half of the axis
    np.testing.assert_allclose(below[0], below[1], rtol=0, atol=1e-8)


def test_half_edge_solves_on_the_whole_solid_by_its_mean_values():
    """Mean over spheres (Gauss's theorem), by quadrature, also around points beside the edge."""
    x, w = np.polynomial.legendre.leggauss(60)
    angle = 2 * math.pi * np.arange(120) / 120
    c, p = np.meshgrid(x, angle, indexing="ij")
    s = np.sqrt(1 - c * c)
    unit = np.stack([s * np.cos(p), s * np.sin(p), c], axis=-1).reshape(-1, 3)
    weights = np.repeat(w, 120) / 240
    for axis in "xyz":
        field = fields.half_edge("2/3", (1, 1, 1), axis)
        for centre in ([-0.5, -0.4, 0.3], [0.6, 0.1, -0.5], [-0.2, 0.9, -0.3]):
            mean = weights @ field.value(np.array(centre) + 0.15 * unit)
            assert mean == pytest.approx(field.value([centre])[0], rel=1e-12, abs=1e-13)


def test_sides_of_the_sheet_continue_from_both_sides():
    """On the plane between edge and ray, side +1 is where the sheet's normal points."""
    odd = fields.half_edge("2/3", (1, 1, 1), part="im")  # the other part is the same on both sides
    (sheet,) = odd.sheets
    on = np.array([[0.1, 0.1, 0.5], [0.05, 0.05, 1.0]])
    assert sheet.meets(on).all()
    with pytest.raises(FieldError, match="has two values"):
        odd.value(on)
    for side in (1, -1):
        beside = on + side * 1e-9 * np.array(sheet.normal)
        np.testing.assert_allclose(odd.value(on, side=side), odd.value(beside), rtol=0, atol=1e-7)
        np.testing.assert_allclose(odd.gradient(on, side=side), odd.gradient(beside), rtol=0, atol=1e-6)
    assert np.abs(odd.value(on, side=1) - odd.value(on, side=-1)).max() > 0.1


def legendre(nu, angle):
    """P_nu(cos t) by Mehler's integral (NIST DLMF 14.12.1, from memory)."""

    def integrand(s):  # substituted v = t - s^2: the root at the end cancels
        v = angle - s * s
        gap = 2 * math.sin((angle + v) / 2) * math.sin((angle - v) / 2)
        return (
            math.cos((nu + 0.5) * v) * 2 * s / math.sqrt(2 * gap) if s else 2 / math.sqrt(2 * math.sin(angle))
        )

    return 2 / math.pi * quad(integrand, 0, math.sqrt(angle), epsabs=1e-13, epsrel=1e-13)[0]


@pytest.mark.parametrize("field", [NOTCH, fields.cone("1/4"), fields.cone("9/10", "neumann")])
def test_cone_field_is_legendres_function_by_mehlers_integral(field):
    for angle in np.array([0.2, 0.5, 0.8, 0.999]) * float(field.share) * math.pi:
        value = field.value([[0.6 * math.sin(angle), 0.8 * math.sin(angle), math.cos(angle)]])[0]
        assert value == pytest.approx(legendre(field.exponent, angle), rel=0, abs=1e-11)


@pytest.mark.parametrize("share", ["1/6", "1/3", "2/3", "9/10"])
def test_conditions_hold_on_the_cone_and_inside_it_u_is_positive(share):
    field, insulated = fields.cone(share), fields.cone(share, "neumann")
    angle = float(field.share) * math.pi
    e = np.array([math.sin(angle), 0.0, math.cos(angle)])
    across = np.array([math.cos(angle), 0.0, -math.sin(angle)])
    points = np.outer([0.2, 1.0, 1.5], e)
    assert np.abs(field.value(points)).max() <= 2e-14
    slopes = np.abs(insulated.gradient(points) @ across)
    assert (slopes <= 1e-13 * np.linalg.norm(insulated.gradient(points), axis=1)).all()
    assert (np.abs(field.gradient(points) @ across) > 0.01).all()  # the twin
    inside = np.linspace(0.0, 0.999, 60) * angle
    rays = np.stack([np.sin(inside), 0 * inside, np.cos(inside)], axis=1)
    assert (field.value(rays) > 0).all()  # the first eigenfunction keeps its sign
    assert (np.diff(insulated.value(rays)) < 0).all()  # the first with one node falls all the way


def test_exponents_of_known_cones():
    """P_1 = c, P_2 = (3 c^2 - 1)/2 vanish at 90 and 54.7356 degrees: shares close to those, by continuity."""
    assert float(fields.cone_exponent("49/100").value) == pytest.approx(1.0, abs=0.05)
    share = math.acos(1 / math.sqrt(3)) / math.pi
    value, radius, basis = fields.cone_exponent(share)
    assert float(value) == pytest.approx(2.0, abs=1e-15)
    assert radius < 1e-30
    assert basis == "tail bound"
    few, many = fields.cone_exponent("2/3", digits=20), fields.cone_exponent("2/3", digits=60)
    with mpmath.workdps(80):
        assert abs(few.value - many.value) <= few.radius + many.radius
        assert few.radius <= mpmath.mpf("1e-20")


def test_singular_lines_are_declared_move_and_are_refused():
    (line,) = CARRIED.edges
    assert line == Line(point=(0.0, 0.0, 0.0), direction=(0.0, 0.0, 1.0), exponent=2 / 3)
    assert CARRIED.value([[0.0, 0.0, 0.4]]).tolist() == [0.0]
    with pytest.raises(FieldError, match=r"infinite at point 0 .* on an edge"):
        CARRIED.gradient([[0.0, 0.0, 0.4]])
    moved = CARRIED.shifted((1, 2, 0)).rotated(math.pi / 2, (1, 0, 0))
    np.testing.assert_allclose(moved.edges[0].direction, (0, -1, 0), rtol=0, atol=1e-15)
    assert moved.edges[0].distance(np.array([[1.0, 5.0, 2.0]]))[0] <= 1e-15
    (fan,) = moved.sheets
    assert fan.meets(moved.sheets[0].at(np.array([1.0, 2.0]), np.array([0.4, 3.0]))).all()
    assert len((CORNER + fields.half_edge("2/3", (1, 1, 1), "x")).edges) == 2
    for place in ((0.0, 0.0, -0.5), (0.0, 0.0, -1e-300)):
        with pytest.raises(FieldError, match=r"not defined|jumps"):
            NOTCH.value([place])
    with pytest.raises(FieldError, match="not defined"):
        CORNER.value([[0.5, 0.5, 0.5]], side=1)


def test_lines_within_boxes():
    low, high = np.array([-1.0, 0.0, 0.0]), np.array([1.0, 2.0, 3.0])
    line = Line(point=(0.0, 0.0, -5.0), direction=(0.0, 0.0, 1.0), exponent=0.5)
    assert line.within(low, high).start == (0.0, 0.0, 0.0)
    assert line.within(low, high).end == (0.0, 0.0, 3.0)
    assert (
        Line(point=(0.0, 0.0, 5.0), direction=(0.0, 0.0, 1.0), exponent=0.5, ray=True).within(low, high)
        is None
    )
    assert Line(point=(0.0, -1.0, 0.0), direction=(0.0, 0.0, 1.0), exponent=0.5).within(low, high) is None


def test_a_fan_keeps_its_points_under_a_stretch():
    fan = Fan(start=(0.1, 0.0, 0.2), first=(0.0, 0.0, 1.0), second=(0.6, 0.8, 0.0), opening=0.9)
    matrix, vector = np.array([[2.0, 0.5, 0.0], [0.0, 1.0, 0.3], [0.0, 0.0, 0.7]]), np.array([1.0, 0.0, -1.0])
    s, t = np.array([0.5, 1.0, 3.0]), np.array([0.1, 0.6, 0.899])
    image = fan.moved(matrix, vector)
    points = fan.at(s, t) @ matrix.T + vector
    away = (points - image.start) @ np.array(image.normal)
    assert np.abs(away).max() <= 1e-14
    angles = np.arctan2((points - image.start) @ image.second, (points - image.start) @ image.first)
    assert ((angles > 0) & (angles < image.opening)).all()
    beyond = fan.at(s, t + 0.9) @ matrix.T + vector - image.start
    assert (np.arctan2(beyond @ image.second, beyond @ image.first) > image.opening).all()


@pytest.mark.parametrize("field", [CARRIED, WAVE, CORNER, NOTCH, fields.axisymmetric(NOTCH)])
def test_specifications_survive_json(field):
    assert fields.from_spec(json.loads(json.dumps(field.spec()))) == field


@pytest.mark.parametrize(
    ("call", "message"),
    [
        (lambda: fields.along_z(fields.affine((1, 0, 0))), "a field of the plane was expected"),
        (lambda: fields.along_z("wedge"), "a plane field was expected"),
        (lambda: fields.along_z(fields.log_source((0, 0))), "would be a charged line"),
        (lambda: fields.along_z(fields.polynomial(2), 0, 0), "must not both be 0"),
        (lambda: fields.edge_wave(0, 1), "alpha must be positive"),
        (lambda: fields.edge_wave("2/3", -1), "k must be positive"),
        (lambda: fields.edge_wave("2/3", 1, "tan"), "part must be"),
        (lambda: fields.edge_wave("2/3", 1, "sin", "tan"), "wave must be"),
        (lambda: fields.half_edge(-1, (1, 1, 1)), "alpha must be positive"),
        (lambda: fields.half_edge("2/3", (0, 0, 1)), "must not be parallel"),
        (lambda: fields.half_edge("2/3", (1, 0, 0), "w"), "axis must be"),
        (lambda: fields.half_edge("2/3", (1, 0, 0), part="abs"), "part must be"),
        (lambda: fields.cone("1/2"), "is a plane"),
        (lambda: fields.cone(1), "must lie between"),
        (lambda: fields.cone("1/4", "robin"), "condition must be"),
    ],
)
def test_impossible_fields_are_refused(call, message):
    with pytest.raises(FieldError, match=message):
        call()
