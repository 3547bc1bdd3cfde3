"""Checks that a field is a solution of div(K grad u) = 0 in a shape.

There are two, and they see different things:

1. The equation at seeded interior points, by second differences in high precision along the eigenvectors
   q_i of K = sum lambda_i q_i q_i': sum_i lambda_i d^2 u(p + t q_i) / dt^2, with truncation far below the
   tolerance; a user's gradient is compared with central differences on the same points.
2. Green's third identity at seeded interior points p, with the fundamental solution G of div(K grad G) =
   -delta:

       u(p) = integral over the boundary of ( G n . K grad u - u n . K grad G ) ds.

   With rho^2 = (x-p)' K^{-1} (x-p) and D = sqrt(det K): G = -log(rho) / (2 pi D) in the plane and 1 / (4 pi
   D rho) in space; since K K^{-1} = 1, n . K grad G = -n . (x-p) / (2 pi D rho^2) and -n . (x-p) / (4 pi D
   rho^3). In (r, z) G is integrated over a ring (`rings`), and ds carries the factor r. A pole or a jump
   inside, however far from p, breaks the identity; the equation at points is blind
   to it.

References: Kellogg 1929, Foundations of Potential Theory, ch. VIII (Green's identities), from memory,
unchecked; the form for a tensor follows from the substitution x -> K^{-1/2} x (derived here).
"""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any, TypeAlias

import mpmath
import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.errors import FieldError, ProblemError
from laplace_verify.fields import Field
from laplace_verify.geometry import Shape
from laplace_verify.problems.boundary_values import BoundaryField
from laplace_verify.problems.coordinates import Coordinates, axis_names, curvature_terms, straightened
from laplace_verify.problems.rings import ring_source

__all__ = ["check_at", "check_equation", "check_green"]

SEED = 20411  # of the interior points
EQUATION = 1e-8  # largest residual, relative to its own terms
# Digits and step of the differences, the step relative to the nearest length: fourth-order differences are
# good to step^4 and lose digits by rounding as 1 / step^2. Series cost by the digit, so fields of our own
# families take fewer; how fast a user's function turns is unknown, so its steps are tiny.
USER, KNOWN = (40, 1e-9), (22, 1e-5)
COARSE = 1e-4  # the same, for functions that can be had in float64 only
GREEN = 1e-7  # largest mismatch, relative to the size of u
UNSETTLED = 1e-5  # largest change at the last refinement that still counts as settled
REFINEMENTS = {2: 6, 3: 4}
GREEN_POINTS = 4
LINE_POINTS = 256  # in 1-D, where the identity says that u is linear between the ends

Evaluate: TypeAlias = Callable[[Any, list[float]], Any]


def check_equation(shape: Shape, field: Field, tensor: Array, coordinates: Coordinates = "cartesian") -> None:
    """Refuse a field with div(K grad u) != 0 at one of a few seeded interior points.

    Raises
    ------
    ProblemError
        With the point, the residual and the size of its terms; or if a user's gradient is not that of u.
    """
    # Families of ours are harmonic by construction: one point tells whether K is the one they were made for.
    count = 8 if field.opaque else 1
    lambdas, vectors = np.linalg.eigh(tensor)
    for point in _interior(shape, count):
        try:
            check_at(field, point, tensor, (lambdas, vectors), shape.size, coordinates)
        except FieldError as cause:
            raise ProblemError(f"{field.formula} cannot be evaluated inside {shape!r}: {cause}") from cause


def check_at(
    field: Field,
    point: Array,
    tensor: Array,
    modes: tuple[Array, Array],
    size: float,
    coordinates: Coordinates = "cartesian",
) -> None:
    """Check the equation, and a user's gradient, at one point; `modes` are eigenvalues and eigenvectors of K.

    Raises
    ------
    ProblemError
        With the point, the residual and the size of its terms.
    """
    lambdas, vectors = modes
    digits, step = USER if field.opaque else KNOWN
    tolerance = EQUATION
    curved = curvature_terms(coordinates)
    near = min(size, float(point[0])) if curved else size  # steps must stay within r > 0
    near = min([near, *(float(np.linalg.norm(point - s.point)) for s in field.singularities)])
    try:
        second, first, value = _differences(_precise(field, point, digits), vectors, step * near, digits)
    except FieldError:
        if not field.opaque:
            raise
        # a user's function that takes floats only: coarse differences in float64, Green's identity does the
        # rest
        tolerance = COARSE
        second, first, value = _differences(_rough(field, point), vectors, 2.0**-7 * near, 16)
    terms = [float(k) * d for k, d in zip(lambdas, second, strict=True)]
    if curved:  # (K grad u)_r / r, once in (r, z) and about a line, twice about a point
        flow = ((vectors * lambdas) @ np.array(first))[0]
        terms.append(curved * float(flow) / float(point[0]))
    scale = sum(abs(t) for t in terms) + float(lambdas.max()) * abs(value) / size**2
    if not abs(sum(terms)) <= tolerance * scale:
        raise ProblemError(
            f"{field.formula} is no solution: div(K grad u) = {sum(terms):.6g} at {tuple(point.tolist())}, "
            f"with single terms up to {max(abs(t) for t in terms):.3g}; it must vanish for K = "
            f"{tensor.tolist()}"
        )
    if field.opaque:
        gradient = field.gradient(point[None, :])[0]
        numeric = vectors @ np.array(first)
        if not np.abs(gradient - numeric).max() <= tolerance * (np.abs(numeric).max() + abs(value) / size):
            raise ProblemError(
                f"the gradient of {field.formula} is wrong: {gradient.tolist()} at {tuple(point.tolist())}, "
                f"differences of the value give {numeric.tolist()}; give the right gradient=, or a formula "
                "string, which differentiates itself"
            )


def _precise(field: Field, point: Array, digits: int) -> Evaluate:
    """Return t, q -> u(point + t q) in high precision."""

    def evaluate(t: Any, q: list[float]) -> Any:
        place = tuple(mpmath.mpf(c) + t * mpmath.mpf(e) for c, e in zip(point.tolist(), q, strict=True))
        return field.formula_at(place, digits=digits)

    return evaluate


def _rough(field: Field, point: Array) -> Evaluate:
    """Return t, q -> u(point + t q) in float64."""
    return lambda t, q: mpmath.mpf(float(field.value([point + float(t) * np.array(q)])[0]))


def _differences(
    evaluate: Evaluate, vectors: Array, step: float, digits: int
) -> tuple[list[float], list[float], float]:
    """Return second and first differences of fourth order along the columns of `vectors`, and the value."""
    with mpmath.workdps(digits + 15):
        h = mpmath.mpf(step)
        second, first = [], []
        middle = evaluate(mpmath.mpf(0), vectors[:, 0].tolist())
        for q in vectors.T.tolist():
            near = [evaluate(sign * h, q) for sign in (1, -1)]
            far = [evaluate(2 * sign * h, q) for sign in (1, -1)]
            second.append(float((16 * sum(near) - sum(far) - 30 * middle) / (12 * h**2)))
            first.append(float((8 * (near[0] - near[1]) - (far[0] - far[1])) / (12 * h)))
    return second, first, float(middle)


def check_green(
    shape: Shape,
    field: Field,
    tensor: Array,
    singular: Array,
    coordinates: Coordinates = "cartesian",
) -> None:
    """Refuse a field that breaks Green's third identity at one of a few seeded interior points.

    Parameters
    ----------
    shape, field, tensor
        The shape, the field, and K as a matrix (d, d).
    singular
        Points (m, d) of the boundary towards which the quadrature is graded.

    Raises
    ------
    ProblemError
        With the point and the mismatch, or if the boundary integral does not settle.
    """
    points = _deepest(shape, GREEN_POINTS) if shape.dim > 1 else shape.sample(LINE_POINTS, seed=SEED)
    expected = field.value(points)
    if shape.dim == 1:
        ends = np.sort(np.concatenate([piece.point([0.0]) for piece in shape.pieces])[:, 0])
        values = field.value(ends[:, None])
        inner, outer = (straightened(coordinates, r) for r in (points[:, 0], ends))
        found = _between_ends(inner, outer, values)
        scale = float(np.abs(values).max())
        _compare(field, points, expected, found, np.zeros(len(points)), scale)
        return
    # in a thin shape no point is far from the boundary: the integrand peaks next to it
    graded = np.concatenate([singular, points])
    cell, previous = shape.size / 4.0, None
    change = np.full(len(points), math.inf)
    for _ in range(REFINEMENTS[shape.dim]):
        found, scale = _green(shape, field, tensor, points, graded, cell, coordinates)
        change = change if previous is None else np.abs(found - previous)
        if previous is not None and change.max() <= GREEN / 10.0 * scale:
            break
        previous, cell = found, cell / 2.0
    if not change.max() <= UNSETTLED * scale:
        row = int(np.argmax(change))
        raise ProblemError(
            f"{field.formula} cannot be checked in {shape!r}: the boundary integral of Green's identity "
            f"for the point {tuple(points[row].tolist())} still changes by {change[row]:.3g}; declare its "
            "singular points, those just outside the shape too"
        )
    _compare(field, points, expected, found, change, scale)


def _between_ends(places: Array, ends: Array, values: Array) -> Array:
    """Return the affine function of the straightened coordinate; a constant if r = 0 belongs to the body."""
    if not np.isfinite(ends[0]):
        return np.full(len(places), values[1])
    found: Array = np.interp(places, ends, values)
    return found


def _compare(field: Field, points: Array, expected: Array, found: Array, change: Array, scale: float) -> None:
    """Refuse a mismatch between the value inside and the boundary integral."""
    mismatch = np.abs(found - expected)
    allowed = np.maximum(GREEN * max(scale, float(np.abs(expected).max())), 5.0 * change)
    if not (mismatch <= allowed).all():
        row = int(np.argmax(mismatch - allowed))
        raise ProblemError(
            f"{field.formula} is no solution: Green's third identity misses its value at "
            f"{tuple(points[row].tolist())} by {mismatch[row]:.6g} ({found[row]:.6g} instead of "
            f"{expected[row]:.6g}); there is a singular point or a jump inside the shape"
        )


def _green(
    shape: Shape,
    field: Field,
    tensor: Array,
    points: Array,
    graded: Array,
    cell: float,
    coordinates: Coordinates,
) -> tuple[Array, float]:
    """Return the boundary integral for each of the points, and the largest |u| met on the boundary.

    The quadrature is graded towards the points `graded` (m, d).
    """
    total, largest = np.zeros(len(points)), 0.0
    axis = axis_names(shape, coordinates)
    root = math.sqrt(float(np.linalg.det(tensor)))
    inverse = np.linalg.inv(tensor)
    for piece in shape.pieces:
        if piece.name in axis:
            continue  # no boundary of space
        x, normals, weights = piece.quadrature(11, singular=graded, cell=cell)
        u, flux = BoundaryField(field, piece, tensor, shape.size).densities(x)
        largest = max(largest, float(np.abs(u).max()))
        for row, point in enumerate(points):
            if coordinates == "axisymmetric":
                g, slopes = ring_source(x, point, np.diag(tensor))
                dg = ((normals @ tensor) * slopes).sum(axis=1)
                total[row] += float((weights * x[:, 0]) @ (g * flux - u * dg))
                continue
            offset = x - point
            rho = np.sqrt(((offset @ inverse) * offset).sum(axis=1))
            normal_part = (normals * offset).sum(axis=1)
            if shape.dim == 2:
                g = -np.log(rho) / (2.0 * math.pi * root)
                dg = -normal_part / (2.0 * math.pi * root * rho**2)
            else:
                g = 1.0 / (4.0 * math.pi * root * rho)
                dg = -normal_part / (4.0 * math.pi * root * rho**3)
            total[row] += float(weights @ (g * flux - u * dg))
    return total, largest


def _interior(shape: Shape, count: int) -> Array:
    """Return seeded points not too near the boundary: the deeper half of twice as many."""
    points = shape.sample(2 * count, seed=SEED)
    return points[np.argsort(-shape.distance(points), kind="stable")[:count]]


def _deepest(shape: Shape, count: int) -> Array:
    """Return the deepest of many seeded points: there the integrand is smoothest."""
    points = shape.sample(16 * count, seed=SEED + 1)
    return points[np.argsort(-shape.distance(points), kind="stable")[:count]]
