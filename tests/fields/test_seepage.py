"""Seepage under dams: the map by elliptic functions inverted, boundary conditions, deep layers."""

import json
import math
from fractions import Fraction

import flint
import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.contexts import FLOAT
from laplace_verify.errors import FieldError
from laplace_verify.fields.elliptic_first import first_kind

EPS = np.finfo(np.float64).eps
FORMS = {
    "dam": (2, 1, 0),
    "pile": (0, 1, "1/2"),
    "dam with pile": ("3/2", "4/5", "0.3"),
    "narrow": ("0.002", 1, 0),
    "wide": (12, 1, 0),
    "short pile": ("0.5", 3, "0.001"),
    "long pile": (0, 2, "1.8"),
}
forms = pytest.mark.parametrize("form", FORMS.values(), ids=FORMS)


def lengths(form):
    """b, T, s as floats."""
    base, depth, pile = (float(mpmath.mpf(str(mpmath.mpmathify(v)))) for v in form)
    return base / 2, depth, pile


def points_of(form, count=12, seed=5):
    """Inside, on bed and bottom, beside heel, toe, tip and pile, below the tip."""
    b, T, s = lengths(form)
    rng = np.random.default_rng(seed)
    x, d = rng.uniform(-2 * (b + T), 2 * (b + T), count), T * rng.random(count)
    found = [np.column_stack([x, -d]), np.column_stack([x, 0 * d]), np.column_stack([x, 0 * d - T])]
    angles, radii = rng.uniform(0.05, 3.09, 6), np.repeat([1e-12, 1e-9, 1e-4], 2)
    circle = radii[:, None] * np.column_stack([np.cos(angles), -np.sin(angles)])
    found += [np.array([p, 0.0]) + circle for p in (b, -b) if b]
    if s:
        found += [np.array([0.0, -s]) + circle, np.column_stack([np.full(5, 1e-12), -s * rng.random(5)])]
        found.append(np.column_stack([np.zeros(5), -s - (T - s) * rng.random(5)]))
    return np.vstack(found)


def assert_map(form, head):
    """sn(V) = cos-like of the map: 2 K (head + i stream) inverted by theta functions, at points x > 0."""
    b, T, s = lengths(form)
    with mpmath.workdps(30):
        stream = fields.dam_seepage(*form, part="stream")
        B, t = mpmath.pi * mpmath.mpf(b) / (2 * T), mpmath.pi * mpmath.mpf(s) / (2 * T)
        D = mpmath.sinh(B) ** 2 + mpmath.sin(t) ** 2
        m = D / mpmath.cosh(B) ** 2
        for x, y in ((0.3 * (b + T), -0.4 * T), (b + T, -0.7 * T), (0.05 * T, -0.95 * T)):
            f = mpmath.mpc(head.at((x, y), 25), stream.at((x, y), 25))
            S = mpmath.pi * mpmath.mpc(x, y) / (2 * T)
            left = mpmath.ellipfun("sn", 2 * mpmath.ellipk(m) * f, m=m) ** 2
            right = (mpmath.sinh(B) ** 2 - mpmath.sinh(S) ** 2) / D
            # the lengths are floats here, decimals in the field
            assert abs(left - right) <= 1e-13 * abs(right), (x, y)


@forms
def test_head_and_stream_function_invert_the_map(form):
    assert_map(form, fields.dam_seepage(*form))


def test_check_of_the_map_can_fail():
    with pytest.raises(AssertionError):
        assert_map(FORMS["dam"], fields.dam_seepage(2, 1, "1/1000"))


@forms
def test_float64_agrees_with_30_digits(form):
    points = points_of(form)
    for part in ("head", "stream"):
        u = fields.dam_seepage(*form, part=part)
        values, gradients = u.value(points), u.gradient(points)
        exact = np.array([float(u.at(tuple(p), 30)) for p in points.tolist()])
        slopes = np.array([[float(g) for g in u.gradient_at(tuple(p), 30)] for p in points.tolist()])
        # the sum behind the integral holds a dozen roundings; a wide base or narrow gap adds those of B, t
        assert np.max(np.abs(values - exact)) <= 32 * EPS * np.max(np.abs(exact))
        sizes = np.linalg.norm(slopes, axis=1)
        assert np.all(np.linalg.norm(gradients - slopes, axis=1) <= 64 * EPS * sizes)


@forms
def test_boundary_conditions(form):
    """1 and 0 on the bed, no flux through base, pile and bottom, in 30 digits at seeded points."""
    u = fields.dam_seepage(*form)
    b, _, s = lengths(form)
    bottom = -u.depth
    for t in np.random.default_rng(3).uniform(0.02, 0.98, 4):
        assert abs(u.at((-b - 1.001 * t, 0), 30) - 1) < 1e-30
        assert abs(u.at((b + 1.001 * t, 0), 30)) < 1e-30
        assert abs(u.gradient_at((t, bottom), 30)[1]) < 1e-28
        if b:
            assert abs(u.gradient_at((0.999 * b * t, 0), 30)[1]) < 1e-28
        for side in (1, -1) if s else ():
            gradient = u.gradient_at((0, -0.999 * s * t), 30, side=side)
            assert abs(gradient[0]) < 1e-28 * abs(gradient[1])


def ball_of_head(form, x, y):
    """F(asin(sn V), m^2)/(2 K) + i stream in ball arithmetic, x > 0: Legendre's integral, not Carlson's."""
    base, depth, pile, x, d = (
        flint.arb(flint.fmpq(*Fraction(str(v)).as_integer_ratio())) for v in (*form, x, -y)
    )
    unit = flint.arb.pi() / (2 * depth)
    across, below = (unit * base / 2).sinh() ** 2, (unit * pile).sin() ** 2
    m = (across + below) / (unit * base / 2).cosh() ** 2
    square = (across - flint.acb(unit * x, -unit * d).sinh() ** 2) / (across + below)
    sine = square.sqrt()
    return flint.acb.elliptic_f(sine.asin(), flint.acb(m)) / (2 * flint.acb.elliptic_k(flint.acb(m)))


def assert_balls(form, head, stream):
    b, T, s = lengths(form)
    rng = np.random.default_rng(12)
    places = [(round(x, 6), round(-y, 6)) for x, y in rng.uniform((0.01, 0.01), (b + T, 0.99 * T), (6, 2))]
    places += [(round(b + 1e-6, 9), -1e-9), (1e-9, round(-s - 1e-9, 12))]
    with flint.ctx.workprec(260):
        for place in places:
            point = tuple(Fraction(str(c)) for c in place)
            ball = ball_of_head(form, *place)
            for found, part in ((head.at(point, 48), ball.real), (stream.at(point, 48), ball.imag)):
                gap = abs(flint.arb(mpmath.nstr(found, 50)) - part)
                assert gap < flint.arb("1e-45"), (place, gap)


@forms
def test_45_digits_by_ball_arithmetic(form):
    assert_balls(form, *(fields.dam_seepage(*form, part=part) for part in ("head", "stream")))


def test_check_by_ball_arithmetic_can_fail():
    slip = fields.affine((0, "1e-44"))
    with pytest.raises(AssertionError):
        assert_balls((2, 1, 0), fields.dam_seepage(2, 1) + slip, fields.dam_seepage(2, 1, part="stream"))


def test_pile_parts_the_heads():
    u = fields.dam_seepage(0, 1, "1/2")
    upstream, downstream = u.value([[0.0, -0.2], [0.0, -0.2]], side=[1, -1])
    assert upstream > 0.6
    assert math.isclose(upstream + downstream, 1.0)
    with pytest.raises(FieldError, match="two values"):
        u.value([[0.0, -0.2]])
    assert np.allclose(u.value([[0.0, -0.5], [0.0, -0.8]]), 0.5, rtol=4 * EPS, atol=0)


@forms
def test_conjugate_and_discharge(form):
    """Cauchy-Riemann, and the stream function rises from 0 on the base to the form factor at the bottom."""
    u = fields.dam_seepage(*form)
    v = u.conjugate()
    points = points_of(form)
    du, dv = u.gradient(points), v.gradient(points)
    size = np.linalg.norm(du, axis=1)
    assert np.all(np.abs(dv[:, 0] + du[:, 1]) <= 8 * EPS * size)
    assert np.all(np.abs(dv[:, 1] - du[:, 0]) <= 8 * EPS * size)
    T = lengths(form)[1]
    assert np.allclose(v.value([[-0.3, -T], [2.0, -T]]), float(fields.form_factor(u)), rtol=1e-13, atol=0)
    assert v.conjugate() == -u


def test_on_a_deep_layer_the_base_feels_an_arc_cosine():
    """(1/pi) arccos(x/b) on half-space: a layer 1000 times as deep is off by the square of 1/1000."""
    x = np.linspace(-0.95, 0.95, 9)
    u = fields.dam_seepage(2, 1000)
    found = u.value(np.column_stack([x, 0 * x]))
    assert np.abs(found - np.arccos(x) / np.pi).max() < 1e-6
    assert np.abs(fields.dam_seepage(2, 2).value(np.column_stack([x, 0 * x])) - found).max() > 1e-3


def test_below_a_pile_to_the_middle_the_squares_have_mean_zero():
    """cn^2, dn^2 and 1 are -1, 0 and 1 at the bottom below the tip."""
    assert abs(fields.dam_seepage(0, 1, "1/2", part="stream").at((0, -1), 40) - mpmath.mpf("0.5")) < 1e-39


def test_far_away_the_head_is_that_of_the_bed():
    u = fields.dam_seepage(2, 1)
    assert np.allclose(
        u.value([[-1e6, -0.5], [1e6, -0.5], [0.0, -1.0]]), [1.0, 0.0, 0.5], rtol=0, atol=4 * EPS
    )
    assert np.isfinite(u.gradient([[1e6, -0.5]])).all()


def test_specification_and_formula():
    for form in FORMS.values():
        u = fields.dam_seepage(*form)
        assert fields.from_spec(json.loads(json.dumps(u.spec()))) == u
        assert "head under a" in u.formula


@pytest.mark.parametrize(
    ("arguments", "reason"),
    [
        ((2, 0), "depth, the thickness"),
        ((-1, 1), "base must be from 0"),
        ((101, 1), "base must be from 0"),
        ((0, 1, 1), "so that water passes under it"),
        ((0, 1), "must not both be 0"),
    ],
)
def test_bad_lengths_are_refused(arguments, reason):
    with pytest.raises(FieldError, match=reason):
        fields.dam_seepage(*arguments)


def test_bad_part_and_points_are_refused():
    with pytest.raises(FieldError, match='"head" or "stream"'):
        fields.dam_seepage(2, 1, part="potential")
    with pytest.raises(FieldError, match="not defined"):
        fields.dam_seepage(2, 1).value([[0.0, 0.1]])
    with pytest.raises(FieldError, match=r"gradient .* infinite"):
        fields.dam_seepage(2, 1).gradient([[1.0, 0.0]])


def assert_first_kind(function):
    """Against python-flint's ball arithmetic, for squares from 1e-12 to 1e12 off its branch cut."""
    rng = np.random.default_rng(8)
    roots = 10.0 ** rng.uniform(-6, 6, (3, 40)) * np.exp(1j * rng.uniform(-1.5, 1.5, (3, 40)))
    roots[0, :5] = 0
    found = function(FLOAT, *roots)
    with flint.ctx.workprec(160):
        for k in range(roots.shape[1]):
            a, b, c = (flint.acb(z.real, z.imag) for z in roots[:, k].tolist())
            middle = complex(flint.acb.elliptic_rf(a * a, b * b, c * c))
            assert abs(found[k] - middle) <= 16 * EPS * abs(middle), k


def test_integral_of_the_first_kind():
    assert_first_kind(first_kind)


def test_check_of_the_integral_can_fail():
    with pytest.raises(AssertionError):
        assert_first_kind(lambda ctx, a, b, c: first_kind(ctx, a, b, c) * (1 + 1e-14))
