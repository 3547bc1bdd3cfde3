"""Float64 values and gradients of every case against 60 digits: on the closed shape, at edges and corners.

Both sides get the same float64 point, so that the rounding of a coordinate is no error. Errors are counted in
units in the last place of the largest |u| and |grad u|; where the gradient is larger than anywhere away from
singular points, in those of the gradient at the point. No value may miss by more than 8 units or, if that is
more, 2 + kappa/2, kappa the degree or k L of the highest term, by which the rounding of a phase grows. All
cases keep the 8.
"""

import zlib

import mpmath
import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.cases.corner_fits import FITS
from laplace_verify.errors import FieldError
from laplace_verify.measure.windows import through_window

IDS = [case.id for case in lv.catalogue.select(ill_posed=False)]
DEPTHS = (1e-3, 1e-6, 1e-12, 0.0)  # of the extent
APART = 0.02  # of the extent: what is farther from all singular points counts for the largest gradient
UNITS = 8
# Cases whose precise values take from a tenth of a second to a second: only in the slow test.
DEAR = {
    "square-plate-exponential", "square-footing-losing-heat", "plate-four-sides-jumping", "long-plate-tent",
    "plate-hot-floor-windy-top", "plate-cold-sides-windy-top", "plate-four-sides-fitting", *FITS,
}  # fmt: skip
# Cases whose precise values take seconds: there fewer points and 30 digits, which still are twice float64's.
DEAREST = {"box-hot-top", "cylinder-hot-top", "cylinder-hot-side", "cylinder-three-temperatures"}


def near_boundary(case, count, rng):
    """Points of every piece, at `count` places and at its ends, moved inwards by each depth."""
    problem = through_window(case).problem
    extent = problem.shape.extent
    found = []
    for piece in problem.pieces:
        if case.dim == 1:
            feet = piece.point(np.zeros(1))
        else:
            t = rng.uniform(0, 1, (count, case.dim - 1))
            ends = np.abs(rng.integers(0, 2, (len(DEPTHS), case.dim - 1)) - np.array(DEPTHS)[:, None])
            t = np.vstack([t, ends])
            feet = piece.point(t[:, 0] if case.dim == 2 else t)
        normals = piece.normals(feet)
        found += [feet - depth * extent * normals for depth in DEPTHS]
    points = np.vstack(found)
    return points[np.isfinite(points).all(axis=1) & problem.shape.contains(points, tol=1e-15)]


def places(case, inner, count):
    """Seeded points of the shape and near its boundary."""
    seed = zlib.crc32(case.id.encode())
    shape = through_window(case).problem.shape
    rng = np.random.default_rng(seed)
    return np.vstack([shape.sample(inner, seed=seed), near_boundary(case, count, rng)])


def errors_at(exact, point, digits):
    """u, grad u and the errors of both at one point; None where the field refuses it in float64 too."""
    try:
        value = exact.value(point[None])[0]
    except FieldError:
        return None
    with mpmath.workdps(digits + 10):
        better = exact.formula_at(tuple(point), digits)
        try:
            slopes = exact.gradient(point[None])[0]
            steeper = exact.gradient_at(tuple(point), min(digits, exact.most_digits))
        except FieldError:
            slopes, steeper = np.zeros(len(point)), (mpmath.mpf(0),) * len(point)
        wrong = [float(mpmath.mpf(float(a)) - b) for a, b in zip(slopes, steeper, strict=True)]
        return float(better), [float(g) for g in steeper], float(mpmath.mpf(float(value)) - better), wrong


def worst(case, exact, points, digits):
    """Largest errors of value and gradient in units in the last place."""
    known = [(p, e) for p in points if (e := errors_at(exact, p, digits)) is not None]
    assert len(known) >= len(points) / 2
    singular = case.regularity.singular_points
    points = np.array([p for p, _ in known])
    values = np.array([e[0] for _, e in known])
    slopes = np.array([e[1] for _, e in known])
    away = np.full(len(points), np.inf)
    if len(singular):
        away = np.sqrt(((points[:, None, :] - singular) ** 2).sum(axis=2)).min(axis=1)
    steep = np.linalg.norm(slopes, axis=1)
    general = steep[away > APART * case.problem.shape.extent].max(initial=0.0)
    value_errors = np.abs([e[2] for _, e in known]) / np.spacing(np.abs(values).max())
    slope_errors = np.abs([e[3] for _, e in known]).max(axis=1)
    return value_errors.max(), (
        slope_errors / np.spacing(np.maximum(np.maximum(steep, general), 1e-300))
    ).max()


def check(id_, inner, count, digits, exact=None):
    case = lv.catalogue[id_]
    value, gradient = worst(case, exact or case.exact, places(case, inner, count), digits)
    assert value <= UNITS, f"value: {value} units in the last place"
    assert gradient <= UNITS, f"gradient: {gradient} units in the last place"


@pytest.mark.parametrize("id_", [id_ for id_ in IDS if id_ not in DEAR | DEAREST])
def test_a_few_points(id_):
    check(id_, inner=4, count=1, digits=30)


@pytest.mark.long
@pytest.mark.parametrize("id_", IDS)
def test_two_hundred_points(id_):
    if id_ in DEAREST:
        check(id_, inner=30, count=1, digits=30)
    else:
        check(id_, inner=200, count=6, digits=60)


@pytest.mark.parametrize("id_", ["plate-wave", "l-shape-corner", "annulus-past-pile"])
def test_check_can_fail(id_):
    """The twin: 1e-14 of the largest value too much is seen, in value and gradient."""
    exact = lv.catalogue[id_].exact

    class Spoilt:
        most_digits, formula_at, gradient_at = exact.most_digits, exact.formula_at, exact.gradient_at

        def __init__(self, value, gradient):
            self.value = lambda p: exact.value(p) + value
            self.gradient = lambda p: exact.gradient(p) + gradient

    size = np.abs(exact.value(lv.catalogue[id_].problem.shape.sample(20, seed=1))).max()
    with pytest.raises(AssertionError, match="value"):
        check(id_, 4, 1, 30, Spoilt(1e-14 * size, 0))
    with pytest.raises(AssertionError, match="gradient"):
        check(id_, 4, 1, 30, Spoilt(0, 1e-13 * size))
