"""Fields outside ellipses, spheroids, spheres and on half-spaces: harmonic, precise, right on the surface.

Derivatives are central differences in 40 digits; float64 is compared with 40 digits at the same floats,
next to and on the surface; boundary values and fluxes are those that define the field. Every check has a
twin.
"""

import json
import math

import mpmath
import numpy as np
import pytest
from scipy.integrate import dblquad

from laplace_verify import fields
from laplace_verify.errors import FieldError

EPS = np.finfo(np.float64).eps
DEPTHS = np.repeat([0.0, 1e-12, 1e-6, 1e-3, 0.3, 20.0], 4)
AXES = {"wide": (2, 1), "high": (1, 2), "disc": (1.5, 1.5), "screen": (1, 0), "upright screen": (0, "0.7")}
SOLIDS = {
    "oblate": (2, 1),
    "prolate": (1, 2),
    "ball": (1.5, 1.5),
    "flat": ("1", "1/1000"),
    "needle": ("1/100", 1),
}


def around_ellipse(axes, centre, seed=4):
    a, b = (float(mpmath.mpf(str(v)) if isinstance(v, str) else v) for v in axes)
    t = np.random.default_rng(seed).uniform(0, 2 * math.pi, len(DEPTHS))
    normal = np.stack([max(b, 1e-3) * np.cos(t), max(a, 1e-3) * np.sin(t)], axis=1)
    normal /= np.linalg.norm(normal, axis=1)[:, None]
    points = np.asarray(centre) + np.stack([a * np.cos(t), b * np.sin(t)], axis=1) + DEPTHS[:, None] * normal
    return points[4:] if min(a, b) == 0 else points  # on a screen a side is needed


def around_square(half, centre, seed=4):
    """Points beside the sides, some of them next to a corner."""
    turns = np.random.default_rng(seed).integers(0, 4, len(DEPTHS)) * math.pi / 2
    along = np.tile([half + 1e-12, 1e-3 - half, 0.3 * half, half], 6)
    c, s, depth = np.cos(turns).round(), np.sin(turns).round(), half + DEPTHS
    return np.asarray(centre) + np.stack([c * depth - s * along, s * depth + c * along], axis=1)


def around_spheroid(axes, centre, seed=4):
    a, c = (
        float(mpmath.mpf(1) / 1000) if v == "1/1000" else 0.01 if v == "1/100" else float(v) for v in axes
    )
    rng = np.random.default_rng(seed)
    cosine, phi = rng.uniform(-1, 1, len(DEPTHS)), rng.uniform(0, 2 * math.pi, len(DEPTHS))
    sine = np.sqrt(1 - cosine**2)
    unit = np.stack([sine * np.cos(phi), sine * np.sin(phi), cosine], axis=1)
    normal = unit * [c, c, a]
    normal /= np.linalg.norm(normal, axis=1)[:, None]
    return np.asarray(centre) + unit * [a, a, c] + DEPTHS[:, None] * normal


def over_plane(edge, seed=4):
    rng = np.random.default_rng(seed)
    t = rng.uniform(0, 2 * math.pi, 24)
    r = edge + np.tile([1e-12, -1e-6, 1e-3, 0.4], 6)
    height = np.repeat([0.0, 1e-12, 1e-6, 1e-3, 0.3, 10.0], 4)
    return np.stack([0.25 + r * np.cos(t), -0.5 + r * np.sin(t), height], axis=1)


def beside_rectangle(seed=4):
    rng = np.random.default_rng(seed)
    height = np.repeat([0.0, 1e-12, 1e-6, 1e-3, 0.3, 10.0], 4)
    x = 1 + np.tile([1e-12, -1e-6, 1e-3, 0.0], 6)
    return np.stack([x, np.where(x == 1, 1.75, rng.uniform(-2, 2, 24)), height], axis=1)


def pair_points(gap, seed=4):
    rng = np.random.default_rng(seed)
    unit = rng.normal(size=(12, 3))
    unit /= np.linalg.norm(unit, axis=1)[:, None]
    middle = np.where(rng.random((12, 1)) > 0.5, 1, -1) * [0, 0, 1 + gap / 2]
    return middle + (1 + np.repeat([1e-15, 1e-12, 1e-3, 2.0], 3)[:, None]) * unit


TABLE = {}
for label, axes in AXES.items():
    spot = (0.25, -0.5)
    for n, part in ((0, "re"), (1, "im"), (3, "re")):
        made = fields.elliptic_multipole(n, part, semi_axes=axes, centre=spot)
        TABLE[f"{label} multipole {n}"] = (made, around_ellipse(axes, spot))
    TABLE[f"{label} potential"] = (fields.flow_past(axes, (1, 0.5), centre=spot), around_ellipse(axes, spot))
    TABLE[f"{label} stream"] = (
        fields.flow_past(axes, (1, 0.5), 2, part="stream", centre=spot), around_ellipse(axes, spot)
    )  # fmt: skip
for label, axes in {k: AXES[k] for k in ("wide", "screen")}.items():
    made = fields.elliptic_multipole(-3, "im", semi_axes=axes, centre=(0.25, -0.5))
    TABLE[f"{label} multipole -3"] = (made, around_ellipse(axes, (0.25, -0.5)))
for label, half in {"square": 1.0, "great square": 1.25}.items():
    body, points = {"side": 2 * half, "centre": (0.25, -0.5)}, around_square(half, (0.25, -0.5))
    for n, part in ((0, "re"), (1, "im"), (3, "re")):
        TABLE[f"{label} multipole {n}"] = (fields.square_multipole(n, part, **body), points[1:])
    TABLE[f"{label} potential"] = (fields.flow_past_square(velocity=(1, 0.5), **body), points[1:])
    stream = fields.flow_past_square(velocity=(1, 0.5), circulation=2, part="stream", **body)
    TABLE[f"{label} stream"] = (stream, points[1:])
for label, axes in SOLIDS.items():
    spot = (0.25, -0.5, 0.125)
    points = around_spheroid(axes, spot)
    TABLE[f"{label} potential"] = (fields.spheroid_potential(axes, spot), points)
    for axis in "xz":
        TABLE[f"{label} data {axis}"] = (fields.spheroid_data(axis, axes, spot), points)
        TABLE[f"{label} flow {axis}"] = (fields.spheroid_flow(axis, axes, spot), points)
TABLE["plate potential"] = (fields.spheroid_potential((1.5, 0), (0.25, -0.5, 0)), over_plane(1.5)[4:])
TABLE["plate flow"] = (fields.spheroid_flow("z", (1.5, 0), (0.25, -0.5, 0)), over_plane(1.5)[4:])
for given in ("value", "inflow"):
    TABLE[f"disc of {given}"] = (fields.loaded_disc(1.5, given, (0.25, -0.5)), over_plane(1.5))
    TABLE[f"rectangle of {given}"] = (fields.loaded_rectangle((-1, -0.5), (1, 1), given), beside_rectangle())
for gap in ("1", "0.1"):
    TABLE[f"spheres {gap} apart"] = (fields.sphere_pair(1, gap, (1, "-1/3")), pair_points(float(gap)))

rows = pytest.mark.parametrize(("field", "points"), TABLE.values(), ids=TABLE.keys())
# single factors are large: far above a patch 1 - z/R cancels, on a sphere image charges do
ULPS = 64


def shifted(place, axis, step):
    return tuple(c + step * (k == axis) for k, c in enumerate(place))


def assert_harmonic(field, point):
    """Fail unless the divergence of the gradient vanishes and the gradient is the derivative of the value."""
    with mpmath.workdps(40):
        h = mpmath.mpf(10) ** -10
        place = tuple(mpmath.mpf(c) for c in point.tolist())
        gradient = field.gradient_at(place, 40)
        size = max(abs(g) for g in gradient)
        total, largest = mpmath.mpf(0), mpmath.mpf(0)
        for axis in range(field.dim):
            up, down = shifted(place, axis, h), shifted(place, axis, -h)
            change = (field.gradient_at(up, 40)[axis] - field.gradient_at(down, 40)[axis]) / (2 * h)
            total, largest = total + change, max(largest, abs(change))
            slope = (field.at(up, 40) - field.at(down, 40)) / (2 * h)
            assert abs(slope - gradient[axis]) <= mpmath.mpf("1e-14") * (size + largest)
        assert abs(total) <= mpmath.mpf("1e-14") * (largest + size)


@rows
def test_fields_are_harmonic(field, points):
    assert_harmonic(field, points[-6])


def test_check_of_harmonicity_can_fail():
    with pytest.raises(AssertionError):
        assert_harmonic(fields.field("x**2 + y**2"), np.array([0.5, 0.25]))


@rows
def test_float64_keeps_its_digits_up_to_the_surface(field, points):
    points = points[:: 3 if field.basis == "tail bound" else 1]  # sums of images take long in 30 digits
    values, gradients = field.value(points), field.gradient(points)
    for point, value, gradient in zip(points, values, gradients, strict=True):
        better = np.array([float(g) for g in field.gradient_at(tuple(point), 30)])
        assert np.abs(gradient - better).max() <= 10 * ULPS * EPS * np.abs(better).max(), point
        exact = float(field.at(tuple(point), 30))
        assert abs(value - exact) <= ULPS * EPS * max(1.0, abs(exact)), point


@rows
def test_specification_through_json_gives_the_same_field(field, points):
    again = fields.from_spec(json.loads(json.dumps(field.spec())))
    assert again == field
    assert again.value(points).tobytes() == field.value(points).tobytes()
    assert field.formula.isprintable()


@rows
def test_digits_asked_for_are_correct(field, points):
    few, many = field.at(tuple(points[-3]), 30), field.at(tuple(points[-3]), 90)
    with mpmath.workdps(100):
        assert abs(few - many) <= mpmath.mpf(10) ** -29 * (abs(many) + 1)
        value, radius, basis = field.enclosure(tuple(points[-3]), 30)
        assert abs(value - many) <= radius
    by_series = "spheres" in field.formula or "square" in field.formula
    assert basis == ("tail bound" if by_series else "closed form")


@rows
def test_growth_is_what_is_declared(field, points):  # noqa: ARG001
    way = np.array([0.6, 0.64, 0.48][: field.dim]) / (1 if field.dim == 3 else np.hypot(0.6, 0.64))
    near, far = (abs(float(field.at(tuple((size * way).tolist()), 20))) for size in (1e6, 1e8))
    if field.growth == 0:
        assert far - near == pytest.approx(math.log(100), rel=1e-4)
    else:
        assert math.log(far / near) / math.log(100) == pytest.approx(field.growth, abs=1e-3)


@pytest.mark.parametrize("axes", AXES.values(), ids=AXES.keys())
def test_multipoles_on_the_ellipse_are_cosines(axes):
    t = np.linspace(0.1, 6.2, 13)
    a, b = float(fields.exact.exact(axes[0], "")), float(fields.exact.exact(axes[1], ""))
    points = np.stack([a * np.cos(t), b * np.sin(t)], axis=1)
    side = None
    if min(a, b) == 0:
        points[np.abs(points) < 1e-300] = 0.0
        side = np.where(np.sin(t) > 0, 1, -1) if b == 0 else np.where(np.cos(t) < 0, 1, -1)
    for n in (1, 2, 5):
        u = fields.elliptic_multipole(n, semi_axes=axes)
        assert np.abs(u.value(points, side) - np.cos(n * t)).max() <= 1e-12
        v = fields.elliptic_multipole(n, "im", semi_axes=axes)
        assert np.abs(v.value(points, side) + np.sin(n * t)).max() <= 1e-12
    log = fields.elliptic_multipole(0, semi_axes=axes)
    assert np.abs(log.value(points, side)).max() <= 1e-14


@pytest.mark.parametrize("n", [1, 2, 5])
@pytest.mark.parametrize(("mu", "nu"), [("0.4", "0.3"), ("0.9", "2.5"), ("1.7", "-1.1")])
def test_between_confocal_ellipses_pairs_are_waves_of_elliptic_coordinates(n, mu, nu):
    """x + i y = c cosh(mu + i nu): cosh(n mu) cos(n nu), sinh(n mu) sin(n nu), and mu itself."""
    with mpmath.workdps(40):
        a, b, mu, nu = mpmath.mpf(5), mpmath.mpf(3), mpmath.mpf(mu), mpmath.mpf(nu)
        start = mpmath.atanh(b / a)  # mu on the ellipse
        z = 4 * mpmath.cosh(start + mu + 1j * nu)
        waves = {"re": mpmath.cosh, "im": mpmath.sinh}
        for part, trig in (("re", mpmath.cos), ("im", mpmath.sin)):
            up, down = (fields.elliptic_multipole(k, part, semi_axes=(5, 3)) for k in (-n, n))
            both = [f.at((z.real, z.imag), 35) for f in (up, down)]
            grown = mpmath.exp(n * start) * both[0] + mpmath.exp(-n * start) * both[1]
            assert abs(grown / 2 - waves[part](n * (start + mu)) * trig(n * nu)) <= mpmath.mpf("1e-30")
        log = fields.elliptic_multipole(0, semi_axes=(5, 3)).at((z.real, z.imag), 35)
        assert abs(log - mu) <= mpmath.mpf("1e-33")
        assert abs(log - start) > 1e-3  # the twin


@pytest.mark.parametrize("axes", AXES.values(), ids=AXES.keys())
def test_no_flow_passes_the_ellipse(axes):
    t = np.linspace(0.1, 6.2, 13)
    a, b = float(fields.exact.exact(axes[0], "")), float(fields.exact.exact(axes[1], ""))
    points = np.stack([a * np.cos(t), b * np.sin(t)], axis=1)
    side, normal = None, np.stack([b * np.cos(t), a * np.sin(t)], axis=1)
    if min(a, b) == 0:
        side = np.where(np.sin(t) > 0, 1, -1) if b == 0 else np.where(np.cos(t) < 0, 1, -1)
    potential, stream = fields.flow_past(axes, (1, 0.5)), fields.flow_past(axes, (1, 0.5), part="stream")
    assert np.abs((potential.gradient(points, side) * normal).sum(axis=1)).max() <= 1e-13
    assert np.abs(stream.value(points, side)).max() <= 1e-14
    undisturbed = fields.affine((1, "0.5")).gradient(points)  # the twin
    assert np.abs((undisturbed * normal).sum(axis=1)).max() > 0.1


def test_stream_function_is_the_conjugate_and_circulation_is_that_asked_for():
    u = fields.flow_past((2, 1), (1, 0.5))
    v, points = u.conjugate(), around_ellipse((2, 1), (0, 0))
    a, b = u.gradient(points), v.gradient(points)
    assert np.abs(b - np.stack([-a[:, 1], a[:, 0]], axis=1)).max() <= 1e-13 * np.abs(a).max()
    turning = fields.flow_past((2, 1), (1, 0.5), "1.75", part="stream")
    t = 2 * math.pi * (np.arange(400) + 0.5) / 400
    circle = 5 * np.stack([np.cos(t), np.sin(t)], axis=1)
    g = turning.gradient(circle)
    velocity = np.stack([g[:, 1], -g[:, 0]], axis=1)
    tangent = np.stack([-np.sin(t), np.cos(t)], axis=1)
    assert (velocity * tangent).sum() * 2 * math.pi * 5 / 400 == pytest.approx(1.75, rel=1e-13)


@pytest.mark.parametrize("axes", SOLIDS.values(), ids=SOLIDS.keys())
def test_spheroid_fields_take_their_values_on_the_spheroid(axes):
    points = around_spheroid(axes, (0, 0, 0))[:4]
    a, c = (float(fields.exact.exact(v, "")) for v in axes)
    assert np.abs(fields.spheroid_potential(axes).value(points) - 1).max() <= 1e-13
    normal = points / [a * a, a * a, c * c]
    normal /= np.linalg.norm(normal, axis=1)[:, None]
    for k, axis in enumerate("xyz"):
        u, flow = fields.spheroid_data(axis, axes), fields.spheroid_flow(axis, axes)
        assert np.abs(u.value(points) - points[:, k]).max() <= 1e-12 * max(a, c)
        through = (flow.gradient(points) * normal).sum(axis=1)
        steep = np.abs(flow.gradient(points)).max()
        # a point that is rounded off a flat spheroid (c = a/1000) turns its normal by eps a/c^2
        assert np.abs(through).max() <= (1e-9 if c < 0.01 else 1e-13) * steep
        assert np.abs((u.gradient(points) * normal).sum(axis=1)).max() > 1e-3  # the twin


def test_the_plate_is_the_limit_of_flat_spheroids_and_has_two_sides():
    plate, flat = fields.spheroid_potential((1, 0)), fields.spheroid_potential((1, "1e-9"))
    points = over_plane(1.0)[8:]
    assert np.abs(plate.value(points) - flat.value(points)).max() <= 1e-8
    on = [[0.5, 0.25, 0.0]] * 2
    up, down = plate.gradient(on, side=[1, -1])
    # surface charge of both faces of a disc: (2/pi)/sqrt(a^2 - r^2) per unit potential (Smythe 1968, memory)
    assert up[2] == pytest.approx(-2 / math.pi / math.sqrt(1 - 0.3125), rel=1e-15)
    assert down.tolist() == pytest.approx([-0.0, -0.0, -up[2]])
    with pytest.raises(FieldError, match=r"the gradient of .* has two values at point 0"):
        plate.gradient(on)
    assert plate.value(on).tolist() == [1.0, 1.0]
    flow = fields.spheroid_flow("z", (1, 0))
    with pytest.raises(FieldError, match=r"side=\+1 \(where the sheet's normal"):
        flow.value(on)
    # potential on a disc moving broadside: (2/pi) sqrt(a^2 - r^2) (Lamb 1932, art. 102, from memory)
    jump = 2 / math.pi * math.sqrt(0.6875)
    assert flow.value(on, side=[1, -1]).tolist() == pytest.approx([jump, -jump], rel=1e-15)
    moved = plate.shifted((0, 0, 1))
    assert moved.gradient([[0.5, 0.25, 1.0]], side=1)[0, 2] == pytest.approx(up[2], rel=1e-12)
    with pytest.raises(FieldError, match=r"infinite at point 0 .* on an edge"):
        plate.gradient([[1.0, 0.0, 0.0]])
    assert plate.value([[1.0, 0.0, 0.0]]).tolist() == [1.0]


def test_two_spheres_take_their_potentials():
    for gap in ("2", "0.1", "0.001"):
        half = 1 + float(gap) / 2
        rng = np.random.default_rng(2)
        unit = rng.normal(size=(30, 3))
        unit /= np.linalg.norm(unit, axis=1)[:, None]
        u = fields.sphere_pair(1, gap, ("1.5", "-0.5"))
        assert np.abs(u.value(unit + np.array([0, 0, half])) - 1.5).max() <= 1e-13
        assert np.abs(u.value(unit - np.array([0, 0, half])) + 0.5).max() <= 1e-13
    with mpmath.workdps(60):
        top = mpmath.mpf(2) + mpmath.mpf("0.05")
        assert abs(fields.sphere_pair(1, "0.1").at((0, 0, top), 50) - 1) <= mpmath.mpf(10) ** -50


@pytest.mark.parametrize("point", [(0.3, 0.2, 0.5), (2.0, -1.0, 0.7), (1.0, 0.0, 2.0)])
@pytest.mark.parametrize("patch", ["disc", "rectangle"])
def test_loaded_patches_are_integrals_over_the_patch(patch, point):
    """By adaptive quadrature: W = integral of z/R^3, V = integral of 1/R (Kellogg 1929, ch. III)."""
    x, y, z = point
    if patch == "disc":

        def kernel(t, r, power):
            square = (x - r * math.cos(t)) ** 2 + (y - r * math.sin(t)) ** 2 + z * z
            return r * square ** (-power / 2)

        limits = (0, 1.25, 0, 2 * math.pi)
        value, inflow = (fields.loaded_disc(1.25, given) for given in ("value", "inflow"))
    else:

        def kernel(b, a, power):
            return ((x - a) ** 2 + (y - b) ** 2 + z * z) ** (-power / 2)

        limits = (-1, 1, -0.5, 1)
        value, inflow = (fields.loaded_rectangle((-1, -0.5), (1, 1), given) for given in ("value", "inflow"))
    angle = z * dblquad(kernel, *limits, args=(3,), epsabs=1e-11)[0]
    layer = dblquad(kernel, *limits, args=(1,), epsabs=1e-11)[0]
    assert value.value([point])[0] == pytest.approx(angle / (2 * math.pi), abs=1e-10)
    assert inflow.value([point])[0] == pytest.approx(layer / (2 * math.pi), abs=1e-10)
    assert inflow.gradient([point])[0, 2] == pytest.approx(-angle / (2 * math.pi), abs=1e-10)


def test_data_of_loaded_patches_on_the_plane():
    disc = fields.loaded_disc(1)
    assert disc.value([[0.5, 0.5, 0.0], [1.0, 0.5, 0.0], [0.0, 0.0, 0.0]]).tolist() == [1.0, 0.0, 1.0]
    square = fields.loaded_rectangle((0, 0), (2, 1))
    assert square.value([[0.5, 0.5, 0.0], [2.5, 0.5, 0.0], [2.0, 1.5, 0.0]]).tolist() == [1.0, 0.0, 0.0]
    for field, edge in ((disc, (0.0, 1.0, 0.0)), (square, (2.0, 0.5, 0.0))):
        with pytest.raises(FieldError, match="on an edge: it has no single value there"):
            field.value([edge])
    inflow = fields.loaded_rectangle((0, 0), (2, 1), "inflow")
    assert math.isfinite(inflow.value([[2.0, 1.0, 0.0]])[0])
    with pytest.raises(FieldError, match=r"the gradient of .* is infinite at point 0"):
        inflow.gradient([[2.0, 0.5, 0.0]])


@pytest.mark.parametrize(
    ("make", "message"),
    [
        (lambda: fields.elliptic_multipole(-201, semi_axes=(1, 1)), "n must be a whole number from -200"),
        (lambda: fields.elliptic_multipole(0, "im", semi_axes=(1, 1)), 'part must be "re" or "im"'),
        (lambda: fields.elliptic_multipole(1, semi_axes=(0, 0)), "semi_axes must be >= 0 and not both zero"),
        (lambda: fields.elliptic_multipole(0, semi_axes=(1, 1)).conjugate(), "grows by 2 pi with every turn"),
        (lambda: fields.elliptic_multipole(1, semi_axes=(2, 1)).value([[0.5, 0.0]]), "has two values at"),
        (lambda: fields.flow_past((1, 1), (1, 0), 2), "potential of a flow with circulation"),
        (lambda: fields.flow_past((1, 1), (1, 0), part="speed"), 'part must be "potential" or "stream"'),
        (lambda: fields.spheroid_potential((1, 2, 3)), r"semi_axes must be \(a, c\)"),
        (lambda: fields.spheroid_data("w", (1, 2)), "what must be charge, x"),
        (lambda: fields.spheroid_data("z", (1, 0)), "does not feel 'z'"),
        (lambda: fields.spheroid_potential((1, 2)).value([[0.0, 0.0, 1.0]]), "is not defined at point 0"),
        (lambda: fields.sphere_pair(1, 0), "gap must be at least"),
        (lambda: fields.sphere_pair(0, 1), "radius must be > 0"),
        (lambda: fields.sphere_pair(1, 1).value([[0.0, 0.0, 1.0]]), "is not defined at point 0"),
        (lambda: fields.loaded_disc(1, "flux"), 'given must be "value" or "inflow"'),
        (lambda: fields.loaded_disc(-1), "radius must be > 0"),
        (lambda: fields.loaded_rectangle((0, 0), (1, 0)), "lower must be below upper"),
        (lambda: fields.loaded_disc(1).value([[0.0, 0.0, -0.5]]), "is not defined at point 0"),
    ],
)
def test_bad_arguments_and_points_are_refused(make, message):
    with pytest.raises(FieldError, match=message):
        make()
