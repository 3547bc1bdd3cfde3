"""Corner fits: the bound is true and not far from the error, digits do not depend on tools, bad input."""

import mpmath
import numpy as np
import pytest

from laplace_verify.errors import ProblemError
from laplace_verify.geometry import Polygon
from laplace_verify.references import CornerFit, CornerTerms, SideData, fit_corners
from laplace_verify.references import _whole_numbers as whole_numbers
from laplace_verify.references._corner_rows import Rows, chebyshev
from laplace_verify.references.corner_bound import comparison, error_bound
from laplace_verify.references.corner_fit import _terms
from laplace_verify.references.corner_flux_bound import flux_bound

COLD, INSULATED = SideData(), SideData(kind="neumann")
L_VERTICES = (("0", "0"), ("1", "0"), ("1", "1"), ("-1", "1"), ("-1", "-1"), ("0", "-1"))


def l_shape(powers=24, degree=30, digits=10, data="x**2", density=60):
    return CornerFit(
        vertices=L_VERTICES,
        sides=(SideData(data=data),) * 6,
        corners=(
            CornerTerms(vertex=0, powers=powers, logs=(2,)),
            *(CornerTerms(vertex=k, logs=(2,)) for k in range(1, 6)),
        ),
        degree=degree,
        centre=("-0.25", "0.25"),
        digits=digits,
        density=density,
    )


def change_fit(powers=20, degree=20, top="x**2 + 1"):
    """A rectangle, insulated on the left half of its bottom."""
    given = SideData(data=top)
    return CornerFit(
        vertices=(("-1", "0"), ("0", "0"), ("1", "0"), ("1", "1"), ("-1", "1")),
        sides=(INSULATED, given, given, given, given),
        corners=(
            CornerTerms(vertex=1, powers=powers),
            *(CornerTerms(vertex=k, logs=(2,)) for k in (2, 3, 4)),
        ),
        degree=degree,
        centre=("0", "0.4"),
        digits=14,
        density=60,
    )


@pytest.mark.slow
def test_bound_holds_and_is_near_the_error_between_a_coarse_and_a_fine_fit():
    coarse, fine = fit_corners(l_shape(16, 20)), fit_corners(l_shape(44, 70, digits=22, density=140))
    points = Polygon([(float(x), float(y)) for x, y in L_VERTICES]).sample(60, seed=3).tolist()
    with mpmath.workdps(30):
        errors = [abs(coarse.at(p, coarse.most_digits) - fine.at(p, 14)) for p in points]
        assert max(errors) <= coarse.fit_error + fine.fit_error
        assert max(errors) >= coarse.fit_error / 1000  # interior errors fall with depth
        assert fine.fit_error < mpmath.mpf("1e-14")


def test_bound_holds_where_the_solution_is_known():
    """u = x^3 - 3 x y^2 + y: with a polynomial of degree 2 the fit must miss it, by no more than it says."""
    fit = fit_corners(l_shape(0, 2, data="x**3 - 3*x*y**2 + y"))
    points = Polygon([(float(x), float(y)) for x, y in L_VERTICES]).sample(200, seed=5)
    x, y = points.T
    error = np.abs(fit.value(points) - (x**3 - 3 * x * y**2 + y)).max()
    assert 0.05 < error <= float(fit.fit_error) < 10 * error


def test_polynomial_solution_is_found_to_the_last_digit():
    fit = fit_corners(l_shape(0, 3, digits=30, data="x**3 - 3*x*y**2 + y"))
    with mpmath.workdps(40):
        x, y = mpmath.mpf("0.3"), mpmath.mpf("0.7")
        assert abs(fit.at(("0.3", "0.7"), 28) - (x**3 - 3 * x * y**2 + y)) <= fit.fit_error
    assert fit.fit_error < mpmath.mpf("1e-29")


def test_bound_with_an_insulated_side_holds_where_the_solution_is_known():
    """u = x^2 - y^2 - 1 has no flux through y = 0; data of the next solution are those of a cubic."""
    fit = fit_corners(change_fit(0, 1, top="x**2 - y**2 - 1"))
    points = np.random.default_rng(2).uniform((-1, 0), (1, 1), (200, 2))
    error = np.abs(fit.value(points) - (points[:, 0] ** 2 - points[:, 1] ** 2 - 1)).max()
    assert 0.02 < error <= float(fit.fit_error) < 60 * error


def test_a_spoilt_coefficient_shows_in_the_bound():
    """The twin of the bound: 1e-3 on one coefficient is seen in full."""
    fit = l_shape(24, 30)
    terms = _terms(fit)
    rows = Rows(terms, 400)
    good = fit_corners(fit)
    flat = [c for k, o in zip(good.precise.corners, terms.orders, strict=True)
            for c in [*(k.coefficients[j - 1] if j <= len(k.coefficients) else "0" for j in o),
                      *(text for _, text in k.logs)]]  # fmt: skip
    part = good.precise.polynomial
    for n in range(fit.degree + 1):
        flat.append(part.re[n] if n < len(part.re) else "0")
        if n:
            flat.append(part.im[n] if n < len(part.im) else "0")
    again = error_bound(rows, terms, flat, 1e-10)
    assert float(again.radius) == pytest.approx(float(good.fit_error), rel=0.05)  # rounded up to two digits
    spoilt = [*flat[:-1], str(float(flat[-1]) + 1e-3)]
    wrong = error_bound(rows, terms, spoilt, 1e-10)
    assert 1e-5 < float(wrong.radius) < 1e-2
    assert float(flux_bound(terms, spoilt, wrong)) > 100 * float(good.flux_radius)


def test_bound_is_not_below_a_dense_sample_of_the_residual():
    fit = fit_corners(l_shape(16, 20))
    corners = np.array([[float(x), float(y)] for x, y in L_VERTICES])
    t = np.linspace(0, 1, 3001)[1:-1, None]
    worst = 0.0
    for a, b in zip(corners, np.roll(corners, -1, axis=0), strict=True):
        points = a + (b - a) * t
        worst = max(worst, np.abs(fit.value(points) - points[:, 0] ** 2).max())
    assert worst <= float(fit.fit_error) <= 2.5 * worst


def fluxes(fit, sides):
    """Fluxes of a fit through sides, as rises of its stream function."""
    stream = fit.conjugate()
    ends = [(fit.vertices[k], fit.vertices[(k + 1) % len(fit.vertices)]) for k in sides]
    return [float(stream.formula_at(b, 20) - stream.formula_at(a, 20)) for a, b in ends]


def test_bound_of_the_fluxes_holds_where_the_solution_is_known():
    """u = x^3 - 3 x y^2 + y, stream function 3 x^2 y - y^3 - x; a fit of degree 2 misses its fluxes."""
    fit = fit_corners(l_shape(0, 2, data="x**3 - 3*x*y**2 + y"))
    stream = [3 * x**2 * y - y**3 - x for x, y in fit.vertices]
    exact = np.diff([*stream, stream[0]])
    errors = np.abs(np.array(fluxes(fit, range(6))) - exact.astype(float))
    assert 0.1 < errors.max() <= float(fit.flux_radius) < 100 * errors.max()


def test_bound_of_the_fluxes_holds_beside_an_insulated_side():
    """u = x^2 - y^2 - 1, stream function 2 x y: no flux through the left half of the bottom."""
    fit = fit_corners(change_fit(0, 1, top="x**2 - y**2 - 1"))
    exact = np.diff([float(2 * x * y) for x, y in (*fit.vertices, fit.vertices[0])])
    errors = np.abs(np.array(fluxes(fit, range(5))) - exact)
    assert 0.05 < errors.max() <= float(fit.flux_radius) < 200 * errors.max()


def test_fluxes_of_a_fit_whose_data_jump_have_no_bound():
    fit = CornerFit(
        vertices=L_VERTICES,
        sides=(COLD, COLD, SideData(data="1"), COLD, COLD, COLD),
        corners=(CornerTerms(vertex=0, powers=8),),
        degree=8,
        digits=6,
        density=20,
    )
    found = fit_corners(fit)
    assert found.fit_error > 0.4
    assert found.flux_radius == ""


@pytest.mark.slow
def test_local_sums_agree_with_the_expansion_and_its_conjugate():
    fit = fit_corners(l_shape(44, 70, digits=22, density=140))
    assert fit.swift
    points = Polygon([(float(x), float(y)) for x, y in L_VERTICES]).sample(30, seed=8)
    for field in (fit, fit.conjugate()):
        exact = [float(field.formula_at(p, 25)) for p in points.tolist()]
        # |u| <= 1 and the terms of a local sum fall like 2^-n: a few roundings, and twice the radius
        assert np.abs(field.value(points) - exact).max() <= 1e-15 + 2 * float(fit.fit_error)


def test_a_coarse_fit_is_evaluated_as_it_stands():
    fit = fit_corners(l_shape(10, 12))
    assert not fit.swift
    points = Polygon([(float(x), float(y)) for x, y in L_VERTICES]).sample(30, seed=8)
    exact = [float(fit.formula_at(p, 25)) for p in points.tolist()]
    assert np.abs(fit.value(points) - exact).max() <= 1e-3 * float(fit.fit_error)


def test_digits_do_not_depend_on_python_flint(monkeypatch):
    quick = fit_corners(l_shape(10, 12))
    monkeypatch.setattr(whole_numbers, "_product_by_flint", lambda _: None)
    assert fit_corners(l_shape(10, 12)) == quick


def test_least_squares_agree_with_numpy():
    generator = np.random.default_rng(4)
    a, b = generator.normal(size=(30, 6)), generator.normal(size=30)
    bits = 200
    rows = [[round(x * 2**80) << (bits - 80) for x in row] for row in a.tolist()]
    products = whole_numbers.gram(rows, [round(x * 2**80) << (bits - 80) for x in b.tolist()], bits)
    found = whole_numbers.least_squares(products, 90, bits)
    expected = np.linalg.lstsq(a, b, rcond=None)[0]
    np.testing.assert_allclose([float(c) / 2**bits for c in found], expected, rtol=1e-13, atol=1e-14)


def test_chebyshev_points_are_those_of_the_cosine():
    assert [float(t) for t in chebyshev(3)] == pytest.approx([(2 + 3**0.5) / 4, 0.5, (2 - 3**0.5) / 4])


def test_comparison_function_of_a_rectangle():
    """Bottom insulated: psi = 1 - y would do with range 1; the margin and control points add some."""
    assert 1 <= comparison(_terms(change_fit()), [0]) <= 1.2


def test_no_comparison_function_no_bound():
    """Both lips of a slit insulated: the normals oppose each other and no quadratic serves."""
    vertices = (("-1", "-1"), ("1", "-1"), ("1", "0"), ("0", "0"), ("1", "0"), ("1", "1"), ("-1", "1"))
    given = SideData(data="x")
    fit = CornerFit(
        vertices=vertices,
        sides=(given, given, INSULATED, INSULATED, given, given, given),
        corners=(CornerTerms(vertex=3, powers=4),),
        degree=3,
        digits=6,
        density=20,
    )
    with pytest.raises(ProblemError, match="no quadratic comparison function"):
        fit_corners(fit)


@pytest.mark.parametrize(
    ("make", "message"),
    [
        (lambda: l_shape(data="exp(x)"), "must be polynomials of degree at most 12"),
        (lambda: l_shape(data="x**13"), "must be polynomials of degree at most 12"),
        (lambda: l_shape(data="x +"), "corner fit: "),
        (
            lambda: CornerFit(
                vertices=L_VERTICES, sides=(COLD,) * 6, corners=(CornerTerms(vertex=1, logs=(3,)),)
            ),
            r"z\^3 log z does not fit vertex 1",
        ),
        (lambda: CornerFit(vertices=L_VERTICES, sides=(COLD,) * 5, corners=()), "needs as many sides, got 5"),
        (lambda: CornerFit(vertices=L_VERTICES, sides=(INSULATED,) * 6, corners=()), "needs u on some side"),
        (
            lambda: CornerFit(vertices=L_VERTICES, sides=(COLD,) * 6, corners=(CornerTerms(vertex=6),)),
            "there is no vertex 6",
        ),
    ],
)
def test_bad_fits_are_refused(make, message):
    with pytest.raises(ProblemError, match=message):
        fit_corners(make())
