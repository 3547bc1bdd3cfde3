"""What every family of fields must do, checked over a table of all of them by routes the code does not use.

Derivatives are central differences in 40 digits, float64 values are compared with 40-digit ones, and each law
has a twin that breaks it.
"""

import json
import math
from dataclasses import dataclass
from fractions import Fraction

import mpmath
import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError

EPS = np.finfo(np.float64).eps
ULPS = 8  # the float64 error allowed, in units of eps max|u|
SHEAR = [[2, "1/2"], ["1/2", 1]]
SPATIAL = [[2, 0.5, 0], [0.5, 1, 0.25], [0, 0.25, 3]]


@dataclass(frozen=True)
class Row:
    """A field, a box to draw points from, and K."""

    field: fields.Field
    lower: tuple
    upper: tuple
    K: tuple | None = None
    curved: bool = True  # False: affine, second derivatives are zero
    near: bool = True  # False: 1e-12 from the singular point the field is not defined, or no float64 is exact


def plane(field, lower=(0.2, 0.15), upper=(1.0, 0.9), K=None, curved=True, near=True):
    return Row(field, lower, upper, K, curved, near)


def space(field, lower=(0.2, 0.15, 0.1), upper=(0.7, 0.8, 0.9), K=None, curved=True):
    return Row(field, lower, upper, K, curved)


def cosine(x, y):
    return np.exp(x) * np.cos(y)


TABLE = {
    "affine-1d": Row(fields.affine((3,), "1/3"), (0.0,), (2.0,), curved=False),
    "affine-2d": plane(fields.affine((2, -1), 0.5), curved=False),
    "affine-3d": space(fields.affine((2, -1, "0.1"), 1), curved=False),
    "polynomial-2-re": plane(fields.polynomial(2)),
    "polynomial-7-im": plane(fields.polynomial(7, "im", centre=("0.1", -0.2), scale="3/2")),
    "polynomial-60": plane(fields.polynomial(60, scale=1.4)),
    "solid-2-0": space(fields.solid(2, 0)),
    "solid-5-3": space(fields.solid(5, 3)),
    "solid-5-minus-1": space(fields.solid(5, -1)),
    "solid-4-4": space(fields.solid(4, 4)),
    "solid-60-17": space(fields.solid(60, -17)),
    "exp-cos": plane(fields.exp_trig(3, level=1)),
    "exp-sin-decay": plane(fields.exp_trig("7/2", "sin", "decay", centre=(0.3, 0.1))),
    "cosh-cos-pi": plane(fields.exp_trig(4, "cos", "cosh", level=1, times_pi=True)),
    "sinh-sin-pi": plane(fields.exp_trig(4, "sin", "sinh", level=1, times_pi=True)),
    "sinh-below": plane(fields.exp_trig(2, "sin", "sinh", centre=(0, 0.5), level=0)),
    "exp-cos-sin-3d": space(fields.exp_trig((3, 4), ("cos", "sin"), level=1)),
    "sinh-sin-sin-3d": space(
        fields.exp_trig((1, 2), "sin", "sinh", level=1, centre=(0, 0, "0.05"), times_pi=True)
    ),
    "log-source": plane(fields.log_source(("0.1", 0), 2)),
    "point-source": space(fields.point_source((0, 0, -0.25), -1)),
    "dipole-2d": plane(fields.dipole((0.1, 0), (1, 2))),
    "dipole-3d": space(fields.dipole((0, "0.1", 0), (1, 2, -1))),
    "dam": plane(fields.dam_seepage(2, "3/2"), lower=(-2, -1.4), upper=(2, -0.1), near=False),
    "dam-with-pile": plane(
        fields.dam_seepage(1, 2, "0.7") * 3, lower=(-2, -1.9), upper=(2, -0.1), near=False
    ),
    "wedge-2-3-sin": plane(fields.wedge("2/3"), lower=(-1, 0.01), upper=(1, 1)),
    "wedge-1-2-cos": plane(fields.wedge(0.5, "cos", apex=(0.4, 0)), lower=(-1, 0.01), upper=(1, 1)),
    "wedge-far-turn": plane(fields.wedge("2/3", "sin", cut=math.pi), lower=(-1, -1), upper=(1, -0.01)),
    "wedge-4-3": plane(fields.wedge("4/3", "cos"), lower=(-1, 0.01), upper=(1, 1)),
    "wedge-whole": plane(fields.wedge(3)),
    "wedge-pole": plane(fields.wedge(-2, "cos")),
    "wedge-minus-1-2": plane(fields.wedge(-0.5, "cos")),
    "formula": plane(fields.field("exp(pi*y)*sin(pi*x) + 0.1*atan2(y, x)")),
    "formula-polar": plane(fields.field("r**(2/3)*sin(2*theta/3)")),
    "formula-3d": space(fields.field("1/r + x*y*z")),
    "callable": plane(fields.field(cosine)),
    "callable-gradient": plane(fields.field(cosine, lambda x, y: (cosine(x, y), -np.exp(x) * np.sin(y)))),
    "sum": plane(2 * fields.polynomial(3) - fields.log_source((0, 0)) + fields.affine((1, 1))),
    "shifted": plane(fields.wedge("2/3").shifted(("0.1", -0.2))),
    "rotated": plane(fields.polynomial(3).rotated("0.3")),
    "rotated-quarter": plane(fields.exp_trig(2).rotated(math.pi / 2)),
    "rotated-3d": space(fields.solid(3, 1).rotated(0.4, axis=(1, 2, 2))),
    "scaled": plane(fields.polynomial(3).scaled("2/3")),
    "inverted-2d": plane(fields.polynomial(2, "im").inverted((0, 0), 1)),
    "inverted-wedge": plane(fields.wedge("2/3").inverted((0, 0), 2)),
    "inverted-3d": space(fields.solid(2, 1).inverted((0, 0.1, 0), "1/2")),
    "along-z": space(fields.along_z(fields.wedge("2/3"), slope="1/2")),
    "along-z-polynomial": space(fields.along_z(fields.polynomial(3), 0, 2)),
    "edge-wave": space(fields.edge_wave("2/3", 3)),
    "edge-wave-cos": space(fields.edge_wave("3/4", "5/2", "cos", "sin", radius=2)),
    "half-edge": space(fields.half_edge("2/3", (1, 1, 1)), lower=(-0.7, -0.6, -0.5), upper=(-0.1, 0.8, 0.9)),
    "half-edge-x": space(fields.half_edge("3/4", (1, 2, 1), "x", "im"), lower=(-0.7, -0.6, -0.5)),
    "cone": space(fields.cone("3/4")),
    "cone-below": space(fields.cone("5/6"), lower=(0.3, 0.2, -0.3), upper=(0.7, 0.8, -0.1)),
    "cone-neumann": space(fields.cone("1/3", "neumann")),
    "stretched-2d": plane(fields.stretched(fields.exp_trig(2), SHEAR), K=SHEAR),
    "stretched-3d": space(fields.stretched(fields.solid(3, 2), SPATIAL), K=SPATIAL),
    "stretched-wedge": plane(fields.stretched(fields.wedge("2/3"), [[4, 0], [0, 1]]), K=[[4, 0], [0, 1]]),
    "regions": plane(
        fields.by_region(
            fields.partitions.Layers(direction=(3, 4), positions=(4,), names=("near", "far")),
            [fields.polynomial(3), 2 * fields.exp_trig(2)],
        ),
    ),
    "checkerboard": plane(fields.checkerboard("1/4"), lower=(-1, -1), upper=(1, 1)),
    "quarter-wave": plane(fields.checkerboard("3/2", ("1/4", 0)).restricted("second"), lower=(-1, 0.01)),
    "rectangle-exponential": plane(
        fields.rectangle_series((0, 0), (1.25, 1), fields.exponential(1), "insulated"), near=False
    ),
    "rectangle-sides": plane(
        fields.rectangle_sides((0, 0), (1.25, 1), left=1, bottom=fields.ramp(1, 2), top=fields.tent()),
        near=False,
    ),
    "rectangle-convection": plane(
        fields.rectangle_convection((0, 0), (1.25, 1), fields.step("1/3", 1, 2), 4), near=False
    ),
    "nested": plane(
        (2 * (fields.wedge("2/3") + fields.polynomial(1)).rotated(0.2).shifted((0, "0.1"))).scaled(3) * "1/3",
        near=False,
    ),
}

rows = pytest.mark.parametrize("row", [pytest.param(row, id=name) for name, row in TABLE.items()])


def points_of(row, count, seed=11):
    return np.random.default_rng(seed).uniform(row.lower, row.upper, (count, len(row.lower)))


def moved(point, axis, step):
    return tuple(c + step if i == axis else c for i, c in enumerate(point))


def precise_point(row, seed):
    return tuple(mpmath.mpf(c) for c in points_of(row, 1, seed)[0].tolist())


def divergence(field, point, K, h):
    """Return div(K grad u) and the size of its terms, from central differences of the 40-digit gradient."""
    d = len(point)
    up = [field.gradient_at(moved(point, i, h), 40) for i in range(d)]
    down = [field.gradient_at(moved(point, i, -h), 40) for i in range(d)]
    hessian = [[(up[i][j] - down[i][j]) / (2 * h) for j in range(d)] for i in range(d)]
    tensor = [[mpmath.mpf(1 if i == j else 0) for j in range(d)] for i in range(d)]
    if K is not None:
        tensor = [[mpmath.mpf(float(Fraction(a))) for a in line] for line in K]
    terms = [tensor[i][j] * hessian[i][j] for i in range(d) for j in range(d)]
    return mpmath.fsum(terms), mpmath.fsum(abs(t) for t in terms), hessian


def assert_solves(row):
    """Fail unless div(K grad u) = 0 and the second derivatives are symmetric, at two points."""
    with mpmath.workdps(40):
        h = mpmath.mpf(10) ** -10
        for seed in (3, 4):
            point = precise_point(row, seed)
            total, size, hessian = divergence(row.field, point, row.K, h)
            if row.curved:
                assert size > 1e-30
            # h^2 = 1e-20 times a fourth derivative, which is up to degree^2 larger than the second
            assert abs(total) <= 1e-14 * size + mpmath.mpf(10) ** -25
            d = len(point)
            for i in range(d):
                for j in range(i):
                    assert abs(hessian[i][j] - hessian[j][i]) <= 1e-14 * size + mpmath.mpf(10) ** -25


@rows
def test_field_solves_its_equation(row):
    assert_solves(row)


@pytest.mark.parametrize(
    "row",
    [
        pytest.param(plane(fields.field("x**2 + y**2")), id="not-harmonic"),
        pytest.param(plane(fields.stretched(fields.polynomial(2), SHEAR)), id="wrong-tensor"),
        pytest.param(plane(fields.field(cosine, lambda x, y: (y + 0 * x, -x))), id="gradient-with-curl"),
    ],
)
def test_check_of_the_equation_can_fail(row):
    with pytest.raises(AssertionError):
        assert_solves(row)


def assert_gradient_is_derivative(row):
    with mpmath.workdps(40):
        h = mpmath.mpf(10) ** -10
        point = precise_point(row, 5)
        gradient = row.field.gradient_at(point, 40)
        size = max(abs(g) for g in gradient)
        for axis, g in enumerate(gradient):
            up, down = (row.field.at(moved(point, axis, s * h), 40) for s in (1, -1))
            assert abs((up - down) / (2 * h) - g) <= 1e-14 * size


@rows
def test_gradient_is_the_derivative_of_the_value(row):
    assert_gradient_is_derivative(row)


def test_check_of_the_gradient_can_fail():
    with pytest.raises(AssertionError):
        assert_gradient_is_derivative(plane(fields.field(cosine, lambda x, y: (x, y))))


def near_singular_points(field):
    rng = np.random.default_rng(7)
    found = []
    for s in field.singularities:
        if s.kind in ("power", "log"):
            angles = rng.uniform(0.1, 3.0, 3)
            ways = np.column_stack((np.cos(angles), np.sin(angles), np.full(3, 0.4)))
            found.extend(np.array(s.point) + 1e-12 * ways[:, : field.dim])
    return np.array(found).reshape(-1, field.dim)


@rows
def test_float64_values_agree_with_40_digits(row):
    points = points_of(row, 40)
    if row.near:
        points = np.vstack((points, near_singular_points(row.field)))
    values, gradients = row.field.value(points), row.field.gradient(points)
    assert values.shape == (len(points),)
    assert gradients.shape == points.shape
    exact = np.array([float(row.field.at(p, 40)) for p in points.tolist()])
    slopes = np.array([[float(g) for g in row.field.gradient_at(p, 40)] for p in points[::8].tolist()])
    assert np.max(np.abs(values - exact)) <= ULPS * EPS * np.max(np.abs(exact))
    # one more rounding or two in each component; a difference quotient of sixth order loses two digits
    loss = 1e4 if isinstance(row.field, fields.user.UserField) and row.field.slope is None else 2
    sizes = np.max(np.abs(slopes), axis=1, keepdims=True)
    assert np.all(np.abs(gradients[::8] - slopes) <= loss * ULPS * EPS * np.maximum(sizes, 1))


@rows
def test_digits_asked_for_are_correct(row):
    point = precise_point(row, 9)
    few, many = row.field.at(point, 25), row.field.at(point, 90)
    with mpmath.workdps(100):
        assert abs(few - many) <= mpmath.mpf(10) ** -25 * abs(many)
        value, radius, basis = row.field.enclosure(point, 25)
        assert abs(value - many) <= radius <= mpmath.mpf(10) ** -24 * abs(many)
        assert basis == row.field.basis
        assert (basis == "uncertified") == isinstance(row.field, fields.user.UserField)


PLAIN = {name: row for name, row in TABLE.items() if not name.startswith("callable")}


@pytest.mark.parametrize("row", [pytest.param(row, id=name) for name, row in PLAIN.items()])
def test_specification_through_json_gives_the_same_field(row):
    again = fields.from_spec(json.loads(json.dumps(row.field.spec())))
    assert again == row.field
    points = points_of(row, 5)
    assert again.value(points).tobytes() == row.field.value(points).tobytes()
    assert again.formula == row.field.formula


@pytest.mark.parametrize("name", ["callable", "callable-gradient"])
def test_functions_cannot_be_written_to_a_file(name):
    with pytest.raises(FieldError, match="cannot be written to a file; give a formula string"):
        (TABLE[name].field + fields.affine((1, 0))).spec()


CONJUGATES = [
    "affine-2d", "polynomial-2-re", "polynomial-7-im", "exp-cos", "exp-sin-decay", "cosh-cos-pi", "dipole-2d",
    "sinh-sin-pi", "sinh-below", "wedge-2-3-sin", "wedge-1-2-cos", "wedge-far-turn", "wedge-pole", "shifted",
    "rotated", "rotated-quarter", "scaled", "inverted-2d", "inverted-wedge", "nested",
    "dam", "dam-with-pile",
]  # fmt: skip


def assert_conjugate(field, other, points):
    u, v = field.gradient(points), other.gradient(points)
    size = np.max(np.abs(u))
    assert np.max(np.abs(v[:, 0] + u[:, 1])) <= 64 * EPS * size  # v_x = -u_y
    assert np.max(np.abs(v[:, 1] - u[:, 0])) <= 64 * EPS * size  # v_y = u_x


@pytest.mark.parametrize("name", CONJUGATES)
def test_conjugate_satisfies_cauchy_riemann(name):
    row = TABLE[name]
    assert_conjugate(row.field, row.field.conjugate(), points_of(row, 17))


def test_check_of_conjugates_can_fail():
    u = fields.polynomial(3)
    with pytest.raises(AssertionError):
        assert_conjugate(u, -u.conjugate(), points_of(plane(u), 17))


@pytest.mark.parametrize(
    ("name", "reason"),
    [
        ("log-source", "grows by 2 pi with every turn"),
        ("sum", "grows by 2 pi with every turn"),
        ("solid-2-0", "this field is 3-D"),
        ("exp-cos-sin-3d", "is 3-D"),
        ("affine-3d", "is 3-D"),
        ("dipole-3d", "is 3-D"),
        ("stretched-2d", "is not harmonic"),
        ("formula", "give the conjugate as a formula too"),
        ("callable", "no conjugate in closed form"),
    ],
)
def test_missing_conjugate_says_why(name, reason):
    with pytest.raises(FieldError, match=reason):
        TABLE[name].field.conjugate()


@rows
def test_formula_is_one_readable_line(row):
    assert row.field.formula
    assert row.field.formula.isprintable()


@rows
def test_one_point_and_many_blocks_give_the_same_bytes(row):
    points = np.tile(points_of(row, 3), (3000, 1))  # 9000 points, two blocks
    values = row.field.value(points)
    assert values[:3].tobytes() == values[-3:].tobytes()
    np.testing.assert_allclose(row.field.value(points[1:2]), values[1:2], rtol=4e-15, atol=4e-15)
    assert row.field.value(points[:0]).shape == (0,)
    assert row.field.gradient(points[:0]).shape == (0, row.field.dim)


@rows
def test_bad_points_are_refused(row):
    d = row.field.dim
    with pytest.raises(FieldError, match=r"points must have shape"):
        row.field.value(np.zeros((4, d + 1)))
    with pytest.raises(FieldError, match=r"row 1 is"):
        row.field.gradient(np.vstack((points_of(row, 1), np.full((1, d), np.nan))))
    with pytest.raises(FieldError, match="coordinate"):
        row.field.at((0.5,) * (d + 1), 20)
    for digits in (0, 401, 2.5, True):
        with pytest.raises(FieldError, match="digits must be a whole number from 1 to 200"):
            row.field.at((0.5,) * d, digits)
