"""What every case of the catalogue must keep, by routes other than those that made it."""

import math
import re
from functools import cache

import mpmath
import numpy as np
import pytest
from scipy.integrate import quad

import laplace_verify as lv
from laplace_verify.fields import Field
from laplace_verify.measure.windows import through_window
from laplace_verify.problems import case_from_json, case_to_json

IDS = [case.id for case in lv.catalogue.select(ill_posed=False)]
EVERY = pytest.mark.parametrize("id_", IDS)
DIGITS = 30
TURNING = {"cartesian": 0, "axisymmetric": 1, "radial-cylinder": 1, "radial-sphere": 2}


def interior(case, count, seed=7):
    """The deepest of a few seeded points."""
    shape = through_window(case).problem.shape
    points = shape.sample(4 * count, seed=seed)
    return points[np.argsort(-shape.distance(points), kind="stable")[:count]]


def boundary_points(case, piece, count, seed=11):
    """Seeded points of a piece with their normals, away from singular points."""
    generator = np.random.default_rng(seed)
    columns = 1 if case.dim < 3 else 2
    t = generator.uniform(0.02, 0.98, (4 * count, columns))
    points = piece.point(t[:, 0] if columns == 1 else t)[: 4 * count]
    singular = case.regularity.singular_points
    size = case.problem.shape.extent
    if len(singular):
        away = np.sqrt(((points[:, None, :] - singular) ** 2).sum(axis=2)).min(axis=1)
        points = points[away > 0.02 * size]
    points = points[:count]
    return points, piece.normals(points)


@cache
def scale(id_):
    """Largest |u| at interior points, for tolerances."""
    case = lv.catalogue[id_]
    return float(np.abs(case.exact.value(interior(case, 16))).max())


def bounding(case):
    """The pieces that bound the body in space: no axis, no periodic ones; infinite ones within the window."""
    return [piece for piece in through_window(case).problem.pieces if piece.has_data]


def ring(case, points):
    """Measure of space per measure of a meridian section, written out once more."""
    r = points[:, 0]
    return {
        "cartesian": np.ones(len(r)),
        "axisymmetric": 2 * math.pi * r,
        "radial-cylinder": 2 * math.pi * r,
        "radial-sphere": 4 * math.pi * r**2,
    }[case.problem.coordinates]


def tensor_at(case, point):
    """K as a matrix at one point, whatever its form."""
    k = case.problem.conductivity_at(np.array([point]))[0]
    return k * np.eye(case.dim) if np.ndim(k) == 0 else k


def precise_inside(case, point, normal):
    """u and grad u in 30 digits a hair inside the boundary: no lip of a cut, no rounding off a curve."""
    with mpmath.workdps(50):
        depth = mpmath.mpf(10) ** -13 * case.problem.shape.extent
        place = tuple(
            mpmath.mpf(float(c)) - depth * mpmath.mpf(float(n)) for c, n in zip(point, normal, strict=True)
        )
    gradient = np.array([float(g) for g in case.exact.gradient_at(place, DIGITS)])
    return float(case.exact.at(place, DIGITS)), gradient


@EVERY
def test_solution_satisfies_the_equation_and_its_gradient_is_the_derivative(id_):
    """div(K grad u) = 0 by differences of the gradient, grad u by differences of u, in 30 digits."""
    case = lv.catalogue[id_]
    d = case.dim
    for point in interior(case, 2):
        tensor, turning = tensor_at(case, point), TURNING[case.problem.coordinates]
        with mpmath.workdps(DIGITS + 20):
            h = mpmath.mpf(10) ** -10 * case.problem.shape.extent
            place = [mpmath.mpf(float(c)) for c in point]
            second, first, largest = mpmath.mpf(0), [], mpmath.mpf(0)
            for axis in range(d):
                ahead = tuple(c + h * (k == axis) for k, c in enumerate(place))
                behind = tuple(c - h * (k == axis) for k, c in enumerate(place))
                front, back = (case.exact.gradient_at(p, DIGITS) for p in (ahead, behind))
                change = [(a - b) / (2 * h) for a, b in zip(front, back, strict=True)]
                flow = [mpmath.mpf(float(tensor[axis, k])) * change[k] for k in range(d)]
                second += sum(flow)
                largest = max(largest, *(abs(f) for f in flow))
                first.append((case.exact.at(ahead, DIGITS) - case.exact.at(behind, DIGITS)) / (2 * h))
            gradient = case.exact.gradient_at(tuple(place), DIGITS)
            if turning:  # (K grad u)_r / r, once in (r, z) and about a line, twice about a point
                second += turning * mpmath.mpf(float(tensor[0, 0])) * gradient[0] / place[0]
            size = max(abs(g) for g in gradient)
            # a step of 1e-10 leaves about 1e-20 (third derivatives) + 1e-20 (digits / step)
            assert abs(second) <= mpmath.mpf("1e-15") * (largest + size), point
            assert all(abs(a - b) <= mpmath.mpf("1e-15") * size for a, b in zip(first, gradient, strict=True))


@EVERY
def test_boundary_data_are_those_of_the_exact_solution(id_):
    """f, n . K grad u and n . K grad u + alpha u by high precision a hair inside."""
    case = lv.catalogue[id_]
    for piece in bounding(case):
        points, normals = boundary_points(case, piece, 2)
        data = piece.data(points)
        alphas = piece.alpha(points) if piece.kind == "robin" else np.zeros(len(points))
        assert len(points)
        for point, normal, given, alpha in zip(points, normals, data, alphas, strict=True):
            value, gradient = precise_inside(case, point, normal)
            tensor = tensor_at(case, point)
            flux = float(normal @ tensor @ gradient)
            expected = value if piece.kind == "dirichlet" else flux + alpha * value
            steep = float(np.linalg.norm(tensor @ gradient)) + abs(value)
            # 1e-13 of the extent inside: u changes by that times the gradient, the flux by that
            # times the second derivative, at most 1/0.05 times as large beside a source
            assert abs(given - expected) <= 1e-10 * (steep + scale(id_)), (piece.name, point)


@EVERY
def test_values_on_the_boundary_are_the_limits_from_inside(id_):
    """On the boundary itself, both lips of a slit included, Dirichlet data are u a hair inside."""
    case = lv.catalogue[id_]
    for piece in bounding(case):
        if piece.kind != "dirichlet":
            continue
        points, normals = boundary_points(case, piece, 3, seed=29)
        inside = case.exact.value(points - 1e-9 * case.problem.shape.extent * normals)
        steep = np.linalg.norm(
            case.exact.gradient(points - 1e-9 * case.problem.shape.extent * normals), axis=1
        )
        moved = 1e-9 * case.problem.shape.extent * steep
        assert (np.abs(piece.data(points) - inside) <= 2 * moved + 1e-12 * scale(id_)).all()


@EVERY
def test_json_brings_the_case_back(id_):
    """Same bytes, same exact values, same regularity after a round trip."""
    case = lv.catalogue[id_]
    text = case_to_json(case)
    again = case_from_json(text, f"{id_}.json")
    assert case_to_json(again) == text
    points = interior(case, 5)
    assert (again.exact.value(points) == case.exact.value(points)).all()
    assert again.conditions == case.conditions
    assert again.regularity.solution == case.regularity.solution
    assert again.quantities.keys() == case.quantities.keys()


@EVERY
def test_words_are_there_and_the_id_is_plain(id_):
    """Title, statement, reading, sources, tags, quantities; an id of words without digits."""
    case = lv.catalogue[id_]
    assert case.id == id_
    assert re.fullmatch(r"[a-z]+(-[a-z]+)+", id_)
    assert case.title
    assert case.statement.startswith("div")
    assert case.statement.endswith(".")
    assert case.reading.endswith(".")
    assert case.sources
    assert all(case.sources)
    assert {"smooth", "singular"} & case.tags
    assert case.quantities
    assert case.exact.basis in ("closed form", "tail bound", "maximum-principle bound")
    assert case.problem.name == id_


def flux_density(case, piece, points):
    """n . K grad u at points of a piece."""
    if case.window is not None:  # off the two sides of a screen or plate
        points = points - 1e-13 * case.problem.shape.extent * piece.normals(points)
    tensors = np.array([tensor_at(case, point) for point in points])
    flow = np.einsum("nij,nj->ni", tensors, case.exact.gradient(points))
    return ring(case, points) * (piece.normals(points) * flow).sum(axis=1)


def rule(piece, axis):
    """Nodes and weights on [0, 1] along one parameter of a surface: trapezium if it closes, else Gauss."""
    ends = np.full((2, 2), 0.3)
    ends[:, axis] = 0.0, 1.0
    first, last = piece.point(ends)
    if np.allclose(first, last, rtol=0, atol=1e-12):
        return (np.arange(48) + 0.5) / 48, np.full(48, 1 / 48)
    nodes, weights = np.polynomial.legendre.leggauss(120 if piece.curved and axis == 0 else 40)
    v = (nodes + 1) / 2
    return v * (2 - v), weights * (1 - v)  # flat at the end, where the rim of a plate carries 1/sqrt(1 - u)


def integral_of_flux(case, piece):
    """The flux by another quadrature: adaptive on curves, products of simple rules on surfaces."""
    if case.dim == 1:
        return float(flux_density(case, piece, piece.point([0.0]))[0])
    if case.dim == 2:

        def density(s):
            t = s**4 * (35 - 84 * s + 70 * s**2 - 20 * s**3)  # flat at both ends, where corners are
            weight = 140 * s**3 * (1 - s) ** 3
            return weight * float(flux_density(case, piece, piece.point([min(t, 1.0)]))[0])

        # beside a screen the flux at a tip hangs on the last bits of the distance from it
        goal = 1e-10 if case.window is None else 1e-8
        return piece.measure * quad(density, 0.0, 1.0, epsabs=goal, epsrel=goal, limit=200)[0]
    (x, a), (y, b) = rule(piece, 0), rule(piece, 1)
    u, v = np.meshgrid(x, y, indexing="ij")
    points = piece.point(np.column_stack([u.ravel(), v.ravel()]))
    return piece.measure * float(np.outer(a, b).ravel() @ flux_density(case, piece, points))


def uplift(case, quantity):
    """The integral of u along a piece by an adaptive rule, and what that reaches."""
    piece = case.problem.pieces[quantity.where]

    def head(t):
        place = piece.point([t]) - 1e-13 * case.problem.shape.extent * piece.normals(piece.point([t]))
        return float(case.exact.value(place)[0])

    return piece.measure * quad(head, 0.0, 1.0, epsabs=1e-11, limit=200)[0], 1e-10


def discharge(case, quantity):
    """K times the fall of the stream function along the section, in 30 digits."""
    stream = case.exact.conjugate()
    start, stop = (float(stream.at(tuple(point), DIGITS)) for point in np.reshape(quantity.where, (2, 2)))
    return case.problem.conductivity * (start - stop), 1e-14


def exit_gradient(case, quantity):
    """-n . grad u in 30 digits a hair inside the piece and its end."""
    piece = case.problem.pieces[quantity.where]
    place, middle = np.array(quantity.place), piece.point([0.5])[0]
    beside = place + 1e-10 * (middle - place)
    normal = piece.normals(beside[None])[0]
    return -float(normal @ precise_inside(case, beside, normal)[1]), 1e-8


def level(case, piece):
    """u in the middle of a piece, in 30 digits."""
    if piece == "infinity":
        return 0.0
    boundary = case.problem.pieces[piece]
    place = boundary.point([0.3] if case.dim < 3 else [[0.3, 0.4]])
    return float(precise_inside(case, place[0], boundary.normals(place)[0])[0])


def ratio(case, quantity):
    """Flux by another quadrature over the difference of levels, or the like."""
    piece, other = quantity.where
    flux = integral_of_flux(case, case.problem.pieces[piece])
    if quantity.kind == "capacitance":
        return flux / level(case, other), 1e-7
    found = flux / (level(case, piece) - level(case, other))
    if quantity.kind == "shape factor":
        found /= case.problem.conductivity
    return (1 / found if quantity.kind == "resistance" else found), 1e-7


def density_at(case, quantity):
    """e . K grad u in 30 digits at the decimals that the point is written with."""
    inward = np.array(quantity.direction) if case.problem.regions[1:] else np.zeros(case.dim)
    place = np.array(quantity.where) - 1e-12 * inward
    gradient = np.array([float(g) for g in case.exact.gradient_at([repr(float(c)) for c in place], DIGITS)])
    return float(np.array(quantity.direction) @ (tensor_at(case, place) @ gradient)), 1e-10


def torsion(case, _):
    """The integral over the section itself, the twist by Green's formula from two more."""
    points, weights = case.problem.shape.quadrature(20)
    x, y = points.T
    along, across = case.exact.gradient(points).T
    twisted = float(weights @ (x * across - y * along))
    energy = float(weights @ (along**2 + across**2))
    twist = -energy / twisted  # the integral of |grad w|^2 is that of y w_x - x w_y
    return float(weights @ (x * x + y * y)) + twisted / twist, 1e-12


def added_mass(case, quantity):
    """From the dipole far away: (1 + k) volume = 2 pi or 4 pi moment/speed (Taylor 1928, from memory)."""
    assert quantity.drive == tuple(-float(v) for v in case.problem.at_infinity[1])
    with mpmath.workdps(60):
        velocity = [mpmath.mpf(repr(float(v))) for v in case.problem.at_infinity[1]]
        speed = mpmath.norm(velocity)
        far = mpmath.mpf(10) ** 9
        lower, upper = case.problem.shape.body.bounding_box
        middle = [mpmath.mpf(str(round(float(a + b) / 2, 9))) for a, b in zip(lower, upper, strict=True)]
        # by symmetry the constant falls out of the difference of both sides
        ahead, behind = (
            case.exact.at([m + s * far * v / speed for m, v in zip(middle, velocity, strict=True)], 50)
            for s in (1, -1)
        )
        moment = ((ahead - behind) / 2 - speed * far) * far ** (case.dim - 1)
        whole = 2 * (case.dim - 1) * mpmath.pi * moment / speed
        return case.problem.conductivity * (float(whole) - case.problem.shape.body.measure), 1e-8


OTHERS = {
    "uplift": uplift, "discharge": discharge, "exit gradient": exit_gradient, "conductance": ratio,
    "resistance": ratio, "shape factor": ratio, "capacitance": ratio, "flux density": density_at,
    "torsion constant": torsion, "added mass": added_mass,
}  # fmt: skip


def beyond(case):
    """Energy outside the window of an unbounded case: minus the integral of u n . K grad u over its rim."""
    if case.window is None:
        return 0.0
    total = 0.0
    for piece in case.window.pieces:
        if piece.name == "outer" or piece.name.startswith("side"):
            points, normals, weights = piece.quadrature(30, cell=case.window.extent / 8)
            flow = (normals * (case.exact.gradient(points) @ case.problem.tensor)).sum(axis=1)
            total -= float(weights @ (case.exact.value(points) * flow))
    return total


@EVERY
def test_quantities_are_confirmed_by_another_quadrature(id_):
    """Fluxes by an adaptive rule, energies by the volume integral, values by 40 digits."""
    case = lv.catalogue[id_]
    for name, quantity in case.quantities.items():
        if quantity.kind == "flux":
            piece = case.problem.pieces[quantity.where]
            found = sum(integral_of_flux(case, part) for part in piece.parts or (piece,))
            allowed = 1e-7  # what the adaptive rule reaches at a corner r^(1/3)
        elif quantity.kind == "energy":
            seen = through_window(case).problem
            cell = None if case.window is None else seen.shape.extent / 3
            points, weights = seen.quadrature(20, case.regularity.singular_points, cell)
            gradients = case.exact.gradient(points)
            tensors = np.array([tensor_at(case, point) for point in points])
            weights = weights * ring(case, points)
            found = float(weights @ np.einsum("ni,nij,nj->n", gradients, tensors, gradients))
            found += beyond(case)
            allowed = 1e-10
        elif quantity.kind == "value":
            found = float(case.exact.at(tuple(quantity.where), min(40, case.exact.most_digits)))
            allowed = 1e-15
        else:
            found, allowed = OTHERS[quantity.kind](case, quantity)
        assert abs(found - quantity.value) <= quantity.radius + allowed * (1 + abs(quantity.value)), name
        assert 0 <= quantity.radius <= 1e-6 * (1 + abs(quantity.value))
        assert quantity.unit == ""
        if quantity.digits is not None:
            assert abs(float(quantity.digits.value) - quantity.value) <= quantity.radius


def test_a_wrong_case_does_not_pass(monkeypatch):
    """The twin: a field that is off by a thousandth breaks the check of boundary data."""
    case = lv.catalogue["plate-saddle"]
    wrong = case.exact + lv.fields.affine((0.001, 0))
    monkeypatch.setattr(Field, "at", lambda _, point, digits: wrong.enclosure(point, digits).value)
    with pytest.raises(AssertionError):
        test_boundary_data_are_those_of_the_exact_solution("plate-saddle")


def test_catalogue_covers_what_it_promises():
    """Dimensions, shapes, conditions and difficulties, each by several cases."""
    cases = [lv.catalogue[id_] for id_ in IDS]
    assert len(cases) >= 55
    kinds = {case.problem.shape.kind for case in cases}
    assert kinds >= {
        "interval", "rectangle", "box", "disc", "ellipse", "annulus", "sector", "l-shape", "polygon",
        "ball", "spherical-shell", "cylinder",
    }  # fmt: skip
    for tag, least in {
        "dirichlet": 40, "neumann": 25, "robin": 12, "mixed": 25, "pure-neumann": 5, "tensor": 6,
        "regions": 10, "smooth": 40, "singular": 10, "jump": 3, "curved": 15, "near-source": 4,
        "re-entrant": 6, "slit": 3, "hole": 6, "condition-change": 2, "high-aspect": 1, "exactness": 8,
        "axisymmetric": 10, "radial": 8,
    }.items():  # fmt: skip
        assert sum(tag in case.tags for case in cases) >= least, tag
    plain = [np.allclose(tensor_at(case, interior(case, 1)[0]), np.eye(case.dim)) for case in cases]
    assert sum(plain) < len(cases) / 2
    assert {case.dim for case in cases} == {1, 2, 3}
    finite = (case.regularity.solution for case in cases if math.isfinite(case.regularity.solution))
    exponents = {round(exponent, 3) for exponent in finite}
    assert {0.0, 0.25, 0.333, 0.5, 0.667, 1.0, 2.0} <= exponents
