"""Boxes, cylinders and balls with values face by face: other series, precise numbers, refusals, motions."""

import json
import math

import mpmath
import numpy as np
import pytest
from scipy.integrate import quad

from laplace_verify import fields
from laplace_verify.contexts import FLOAT, Precise
from laplace_verify.errors import FieldError
from laplace_verify.fields import Edge, Ring
from laplace_verify.fields.box_axes import flow, nearest_images, survival
from laplace_verify.fields.box_kernel import face_value
from laplace_verify.fields.complete_elliptic import cel
from laplace_verify.fields.cylinder_kernel import _form
from laplace_verify.fields.rim import rim_gap

BOX = fields.box_faces((0, 0, 0), ("6/5", "9/10", "7/10"), top=1)
MIXED = fields.box_faces((-1, 0, 0), (1, "1/2", "3/4"), top=1, left=1, back="-2/5")
SLAB = fields.box_faces((0, 0, 0), (30, 20, "1/10"), top=1)
LID = fields.cylinder_faces("4/5", 0, 1, top=1, side="1/3", bottom=-1)
TALL = fields.cylinder_faces(1, 0, 40, top=1)
HALVES = fields.hemispheres((0, 0, 0), 1)
SIDES = {"x": ("insulated", 2), "y": ("1/2", "zero"), "bottom": 3}
MODE = fields.box_mode((0, 0, 0), ("6/5", 1, "7/10"), (1, 2), **SIDES)
SHELL = fields.shell_zonal((0, 0, 0), "1/2", 1, (1, 2, 0, "1/3"), (0, 0, 1, 0, 5))

PLACES = {  # inside, next to faces, next to edges and corners
    "box": (BOX, [(0.6, 0.4, 0.3), (1e-6, 0.2, 0.69), (0.3, 1e-12, 0.7 - 1e-12), (0, 0.3, 0.2)]),
    "box-mixed": (MIXED, [(-1 + 1e-9, 0.2, 0.75 - 2e-9), (0.2, 0.5 - 1e-7, 0.75 - 1e-8), (-0.9, 0.3, 0.4)]),
    "slab": (SLAB, [(0.02, 0.03, 0.07), (14.0, 9.0, 0.05), (1e-8, 1e-9, 0.1 - 1e-9)]),
    "cylinder": (LID, [(0.1, 0.2, 0.3), (0.48, 0.63, 0.999), (0.8 - 1e-12, 0.0, 1 - 1e-12), (0.0, 0.0, 1.0)]),
    "cylinder-tall": (TALL, [(0.1, 0.2, 39.9), (0.0, -0.9, 38.9), (0.0, 1 - 1e-6, 40 - 1e-6)]),
    "halves": (HALVES, [(0.1, 0.2, 0.3), (0.6, 0.8 - 1e-12, 1e-12), (0.0, 0.0, -0.9), (0.7, 0.5, 0.0)]),
    "mode": (MODE, [(0.1, 0.2, 0.3), (1.2, 1.0, 0.7), (0.0, 0.5, 0.0)]),
    "shell": (SHELL, [(0.4, 0.3, 0.1), (0.0, 0.6, 0.8), (0.0, 0.0, -0.7)]),
}  # fmt: skip
every = pytest.mark.parametrize(("field", "places"), [pytest.param(*v, id=k) for k, v in PLACES.items()])


@every
def test_float64_agrees_with_25_digits_everywhere(field, places):
    values, gradients = field.value(places), field.gradient(places)
    size = max(1.0, float(np.abs(values).max()))
    for place, value, gradient in zip(places, values, gradients, strict=True):
        assert abs(float(field.at(place, 25)) - value) <= 4e-15 * size  # a few dozen terms of size 1
        exact = np.array([float(g) for g in field.gradient_at(place, 20)])
        assert np.abs(gradient - exact).max() <= 1e-13 * (np.abs(exact).max() + size)


@every
def test_field_is_harmonic_with_its_own_gradient(field, places):
    with mpmath.workdps(50):
        h, place = mpmath.mpf(10) ** -10, [mpmath.mpf(c) for c in places[0]]
        second, sizes = mpmath.mpf(0), mpmath.mpf(0)
        gradient = field.gradient_at(place, 30)
        for axis in range(3):
            up, down = ([c + s * h * (k == axis) for k, c in enumerate(place)] for s in (1, -1))
            change = (field.gradient_at(up, 30)[axis] - field.gradient_at(down, 30)[axis]) / (2 * h)
            slope = (field.at(up, 30) - field.at(down, 30)) / (2 * h)
            assert abs(slope - gradient[axis]) <= mpmath.mpf("1e-14") * max(abs(g) for g in gradient)
            second, sizes = second + change, sizes + abs(change)
        assert abs(second) <= mpmath.mpf("1e-14") * sizes


@every
def test_specification_brings_the_field_back(field, places):
    again = fields.from_spec(json.loads(json.dumps(field.spec())))
    assert again == field
    assert again.value(places).tobytes() == field.value(places).tobytes()
    assert field.formula.isprintable()


def test_box_agrees_with_its_double_series():
    """sum 16/(pi^2 m n) sin sin sinh/sinh, in 20 digits at a point far from the hot face."""
    with mpmath.workdps(30):
        a, b, c, x, y, z = (mpmath.mpf(v) for v in ("1.2", "0.9", "0.7", "0.35", "0.2", "0.3"))
        total = mpmath.mpf(0)
        for m in range(1, 60, 2):
            for n in range(1, 60, 2):
                g = mpmath.pi * mpmath.sqrt((m / a) ** 2 + (n / b) ** 2)
                wave = mpmath.sin(m * mpmath.pi * x / a) * mpmath.sin(n * mpmath.pi * y / b)
                total += 16 / (mpmath.pi**2 * m * n) * wave * mpmath.sinh(g * z) / mpmath.sinh(g * c)
        # the first term left out: exp(-61 pi 0.4 / 1.2) = 2e-28
        assert abs(BOX.at(("0.35", "0.2", "0.3"), 20) - total) <= mpmath.mpf("1e-20")


@pytest.mark.parametrize("extents", [(1.0, 1.0, 1.0), (1e3, 1.0, 1.0), (1.0, 1.0, 1e-3), (1.0, 0.02, 5.0)])
def test_faces_of_a_box_add_up_to_one(extents):
    """Six hot faces, each by its own integral: no symmetry is used."""
    points = np.random.default_rng(3).uniform(0.0, extents, (200, 3))
    points[::3] *= 1e-5
    total = np.zeros(len(points))
    for face in ("left", "right", "front", "back", "bottom", "top"):
        total += fields.box_faces((0, 0, 0), extents, {face: 1}).value(points)
    assert np.abs(total - 1.0).max() <= 2e-14


def test_sum_of_faces_notices_a_wrong_face():
    points = np.array([[0.4, 0.3, 0.2]])
    faces = ("left", "right", "front", "back", "bottom")
    total = sum(fields.box_faces((0, 0, 0), (1, 1, 1), {f: 1}).value(points) for f in faces)
    assert abs(total[0] - 1.0) > 0.01


def test_both_forms_of_survival_and_flow_agree():
    """Sines and images, where both are complete."""
    x, t = np.linspace(0.0, 0.5, 7), np.array([0.0145])
    images = nearest_images(x, 1.0, 1 / np.sqrt(t), True)
    for sines, other in zip(survival(x, 1.0, t, True), images, strict=True):
        np.testing.assert_allclose(sines, other, rtol=0, atol=2e-14)
    d = np.linspace(0.0, 1.0, 9)
    early, late = (flow(d, 1 - d, 1.0, np.array([s]), False)[0] for s in (0.05 - 1e-15, 0.05))
    np.testing.assert_allclose(early, late, rtol=0, atol=2e-13)


def test_near_and_far_forms_of_the_box_join():
    x = np.full(2, 0.37)
    d = np.array([0.5, 0.5 + 1e-15])
    values = face_value(x, x * 0.9, d, 1 - d, (1.0, 1.0, 1.0))
    assert abs(values[0] - values[1]) <= 2e-15


def test_three_forms_of_the_cylinder_agree_to_all_digits():
    ctx = Precise(25)
    place = tuple(ctx.mpf(c) for c in ("0.85", "0.15", "0.1"))
    forms = [_form(ctx, zone, place, ctx.mpf("0.8"), ctx.mpf("0.8"), 1) for zone in (0, 1, 2)]
    for other in forms[1:]:
        for a, b in zip(forms[0], other, strict=True):
            assert abs(a - b) <= ctx.mpf(10) ** -35


def test_hemispheres_agree_with_the_legendre_series():
    with mpmath.workdps(30):
        x, y, z = mpmath.mpf("0.3"), mpmath.mpf("0.1"), mpmath.mpf("0.4")
        rho, total = mpmath.sqrt(x * x + y * y + z * z), mpmath.mpf(1) / 2
        for n in range(1, 240, 2):
            step = (mpmath.legendre(n - 1, 0) - mpmath.legendre(n + 1, 0)) / 2
            total += step * rho**n * mpmath.legendre(n, z / rho)
        assert abs(HALVES.at(("0.3", "0.1", "0.4"), 25) - total) <= mpmath.mpf("1e-25")


@pytest.mark.parametrize(
    ("k", "p", "a", "b"), [(0.3, 0.7, 1.0, 1.0), (0.9, 40.0, 1.0, -2.0), (1.0, 1e-3, 2.0, 1.0)]
)
def test_elliptic_integral_is_its_quadrature(k, p, a, b):
    def integrand(t):
        c, s = math.cos(t) ** 2, math.sin(t) ** 2
        return (a * c + b * s) / ((c + p * s) * math.sqrt(c + k * k * s))

    expected = quad(integrand, 0, math.pi / 2, epsabs=1e-13, epsrel=1e-13, limit=200)[0]
    assert cel(FLOAT, np.array([k]), p, a, b)[0] == pytest.approx(expected, rel=1e-11)


def test_rim_gap_keeps_relative_accuracy():
    x, y = np.array([0.6]), np.array([0.8 - 1e-13])
    with mpmath.workdps(40):
        exact = 1 - mpmath.hypot(mpmath.mpf(float(x[0])), mpmath.mpf(float(y[0])))
        assert abs(rim_gap(FLOAT, x, y, 1)[1][0] / exact - 1) <= 1e-15


def test_faces_carry_their_values_and_edges_are_refused():
    assert MIXED.value([[0.0, 0.2, 0.75], [-1.0, 0.2, 0.3], [0.3, 0.5, 0.2], [0.3, 0.0, 0.2]]).tolist() == [
        1,
        1,
        -0.4,
        0,
    ]
    assert MIXED.value([[-1.0, 0.2, 0.75]])[0] == 1.0  # both faces at 1: no jump
    assert np.abs(MIXED.gradient([[-1.0, 0.2, 0.75]])).max() <= 1e-13  # u - 1 vanishes on both faces
    for field, place in ((BOX, (0.3, 0.9, 0.7)), (LID, (0.48, 0.64, 1.0)), (HALVES, (0.6, -0.8, 0.0))):
        for call in (field.value, field.gradient):
            with pytest.raises(FieldError, match=r"jumps at point 0 .* on an edge"):
                call([place])
    with pytest.raises(FieldError, match="jumps at point"):
        BOX.at(("3/10", "9/10", "7/10"))
    with pytest.raises(FieldError, match="not defined"):
        BOX.value([[0.3, 0.2, 0.8]])


def test_edges_move_with_the_field_and_are_kept_by_sums():
    moved = 2 * BOX.shifted((1, 0, 0)).scaled(2) + fields.affine((1, 0, 0))
    assert len(moved.edges) == 4
    assert Edge(start=(2.0, 0.0, 1.4), end=(4.4, 0.0, 1.4)) in moved.edges
    assert isinstance(HALVES.rotated("0.3", (1, 0, 0)).edges[0], Ring)
    with pytest.raises(FieldError, match="would become an ellipse"):
        _ = fields.stretched(HALVES, [[4, 0, 0], [0, 1, 0], [0, 0, 1]]).edges
    with pytest.raises(FieldError, match="jumps along edges"):
        BOX.inverted((3, 0, 0), 1)


@pytest.mark.parametrize(
    ("call", "message"),
    [
        (lambda: fields.box_faces((0, 0, 0), (1, 1, 0), top=1), "must be below"),
        (lambda: fields.box_faces((0, 0, 0), (1, 1, 1), roof=1), "no face is called 'roof'"),
        (lambda: fields.box_faces((0, 0), (1, 1), top=1), "3 coordinates"),
        (lambda: fields.cylinder_faces(0, 0, 1), "radius must be positive"),
        (lambda: fields.cylinder_faces(1, 1, 0), "z0 must be below z1"),
        (lambda: fields.hemispheres((0, 0, 0), -1), "radius must be positive"),
        (lambda: fields.ball_zonal((0, 0, 0), 1, ()), "1 to 501"),
        (lambda: fields.shell_zonal((0, 0, 0), 2, 1, (1,), (0,)), "inner < outer"),
        (lambda: fields.shell_zonal((0, 0, 0), 0, 1, (1,), (0,)), "inner must be positive"),
        (lambda: fields.box_mode((0, 0, 0), (1, 1, 1), (0, 0), x=("cold", "zero")), "insulated"),
        (lambda: fields.box_mode((0, 0, 0), (1, 1, 1), (0, -1)), "whole number"),
        (lambda: fields.box_mode((0, 0, 0), (1, 1, 1), (0, 0), bottom=-1), "must be positive"),
    ],
)
def test_bad_parameters_are_refused(call, message):
    with pytest.raises(FieldError, match=message):
        call()


@pytest.mark.parametrize(
    ("field", "edge", "beside"),
    [
        (BOX, ("0.3", "0", "0.7"), ("0.3", "0", "0")),
        (BOX, ("0", "0", "0.7"), ("0", "0", "0")),
        (BOX, ("6/5", "2/5", "7/10"), ("6/5", "2/5", "1/10")),
        (LID, ("0.48", "0.64", 1), ("0.48", "0.64", "1/2")),  # 0.48^2 + 0.64^2 = 0.8^2
        (LID, ("-4/5", 0, 0), ("-4/5", 0, "1/2")),
    ],
)
def test_precise_values_are_refused_on_an_edge_where_data_jump_and_nowhere_else(field, edge, beside):
    for asked in (field.at, field.gradient_at):
        with pytest.raises(FieldError, match=r"jumps at point .*, on an edge: it has no single value there"):
            asked(edge)
        asked(beside)
