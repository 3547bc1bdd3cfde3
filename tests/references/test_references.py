"""Stored digits: that they are those of the fields, by recomputation and by routes of their own."""

import json
import subprocess
import sys
from dataclasses import replace
from pathlib import Path

import mpmath
import pytest

import laplace_verify as lv
from laplace_verify.errors import UnknownCaseError
from laplace_verify.references import (
    StoredReference,
    check_reference,
    load_reference,
    reference_folder,
    stored_values,
)

FILES = {id_: json.loads((reference_folder() / f"{id_}.json").read_text()) for id_ in lv.catalogue}
STORED = [id_ for id_, content in FILES.items() if content["stored"]]


def stored(id_, point):
    """Value, gradient and the larger of their radii stored for a point, as numbers of 60 digits."""
    found = next(value for value in load_reference(id_).values if value.point == point)
    radius = max(mpmath.mpf(found.radius), mpmath.mpf(found.gradient_radius))
    return mpmath.mpf(found.value), [mpmath.mpf(g) for g in found.gradient], radius


@pytest.fixture
def sixty_digits():
    """60 digits during a test."""
    with mpmath.workdps(60):
        yield


def test_at_least_eight_cases_hold_proven_digits():
    assert len(STORED) >= 8
    for id_ in STORED:
        for value in load_reference(id_).values:
            assert value.basis in ("closed form", "tail bound", "maximum-principle bound")
            numbers = [mpmath.mpf(value.value), *map(mpmath.mpf, value.gradient)]
            assert mpmath.mpf(value.radius) <= max(map(abs, numbers)) * mpmath.mpf("1e-30")


@pytest.mark.parametrize("id_", STORED)
def test_stored_values_are_recomputed_within_their_radii(id_):
    checks = check_reference(lv.catalogue[id_], load_reference(id_))
    assert checks
    assert all(check.agrees for check in checks), checks


def test_a_wrong_digit_is_seen():
    reference = load_reference("plate-hot-side")
    first = reference.values[0]
    changed = "7" if first.value[-4] != "7" else "3"
    wrong = replace(first, value=first.value[:-4] + changed + first.value[-3:])
    assert [check.agrees for check in check_reference(lv.catalogue["plate-hot-side"], [wrong])] == [False]
    bent = replace(first, gradient=(first.gradient[1], first.gradient[0]))
    assert not check_reference(lv.catalogue["plate-hot-side"], [bent])[0].agrees


# -- other routes ------------------------------------------------------------------------------------------


@pytest.mark.usefixtures("sixty_digits")
def test_hot_side_by_the_cosine_series_across_the_plate():
    """u of one hot side as 1 minus an expansion in y: sum over the modes sin(n pi y / b) of the other sides.

    The four sides hot give u = 1. The hot bottom is the mirror image of the hot top, and hot left and right
    sides have the series 4/pi sum over odd n of sin(n pi y/b) cosh(n pi (x - a/2)/b) / (n cosh(n pi a/(2b))).
    At mid-height top and bottom agree, so u = (1 - series)/2 there (derived here).
    """
    a, b = mpmath.mpf(16) / 10, mpmath.mpf(9) / 10
    value, _, radius = stored("plate-hot-side", ("0.8", "0.45"))
    series = mpmath.nsum(
        lambda k: (-1) ** int(k) / (2 * k + 1) / mpmath.cosh((2 * k + 1) * mpmath.pi * a / (2 * b)),
        [0, 60],
    )
    assert abs(value - (1 - 4 / mpmath.pi * series) / 2) <= radius + mpmath.mpf("1e-45")


@pytest.mark.usefixtures("sixty_digits")
def test_hot_side_near_its_corner_by_images():
    """The method of images: no series in n, so that points next to the corner cost no more than others.

    S(x, d) = (2/pi) atan(sin(pi x/a)/sinh(pi d/a)) is harmonic in the half-strip 0 < x < a, d > 0, with S = 1
    on d = 0 and S = 0 on the long sides (Carslaw & Jaeger 1959, ch. V, from memory). With d the distance
    from the hot side, u = sum over k >= 0 of S(x, d + 2 k b) - S(x, 2 (k + 1) b - d): the terms cancel in
    pairs at d = b, and at d = 0 all do but the first (derived here).
    """
    a, b = mpmath.mpf(16) / 10, mpmath.mpf(9) / 10
    for point in [("1.599999", "0.899999"), ("0.8", "0.45")]:
        x, y = map(mpmath.mpf, point)
        d = b - y

        def strip(depth, x=x):
            return (
                2
                / mpmath.pi
                * mpmath.atan(mpmath.sin(mpmath.pi * x / a) / mpmath.sinh(mpmath.pi * depth / a))
            )

        total = sum(strip(d + 2 * k * b) - strip(2 * (k + 1) * b - d) for k in range(60))
        value, _, radius = stored("plate-hot-side", point)
        assert abs(value - total) <= radius + mpmath.mpf("1e-40")


@pytest.mark.usefixtures("sixty_digits")
def test_ramp_at_mid_height_by_its_cosine_series():
    """Insulated sides: u = y/b - 8/pi^2 sum over odd n of cos(n pi x/a) sinh(n pi y/a)/(n^2 sinh(n pi b/a)).

    Term by term in mpmath; at y = 0.3 the terms fall like exp(-n pi 0.6/1.6), 160 of them leave 1e-80.
    """
    a, b = mpmath.mpf(16) / 10, mpmath.mpf(9) / 10
    x, y = mpmath.mpf(16) / 10, mpmath.mpf(3) / 10
    total = y / b - 8 / mpmath.pi**2 * sum(
        mpmath.cos(n * mpmath.pi * x / a)
        * mpmath.sinh(n * mpmath.pi * y / a)
        / (n**2 * mpmath.sinh(n * mpmath.pi * b / a))
        for n in range(1, 160, 2)
    )
    value, gradient, radius = stored("plate-insulated-ramp", ("1.6", "0.3"))
    assert abs(value - total) <= radius
    assert abs(gradient[0]) <= radius  # insulated side


@pytest.mark.usefixtures("sixty_digits")
def test_disc_step_by_quadrature_of_the_poisson_kernel():
    """u(p) = (1 - rho^2)/(2 pi) times the integral over the hot arc of 1/|p/R - e^{i t}|^2 dt."""
    for point in [("0.3", "0.4"), ("0", "-0.89")]:
        x, y = (mpmath.mpf(c) / (mpmath.mpf(9) / 10) for c in point)
        gap = 1 - x * x - y * y

        def kernel(t, x=x, y=y, gap=gap):
            return gap / ((x - mpmath.cos(t)) ** 2 + (y - mpmath.sin(t)) ** 2)

        ends = [3 * mpmath.pi / 4 * k / 6 for k in range(7)]
        total = mpmath.quad(kernel, ends) / (2 * mpmath.pi)
        value, _, radius = stored("disc-step", point)
        assert abs(value - total) <= radius + mpmath.mpf("1e-38")


@pytest.mark.usefixtures("sixty_digits")
def test_corner_powers_by_complex_powers():
    """r^(2/3) sin(2/3 theta) = Im z^(2/3) on the branch 0 <= theta <= 3 pi/2; gradient (2/3) z^(-1/3)."""
    for point in [("0.5", "0.5"), ("-1", "0.25")]:
        z = mpmath.mpc(*map(mpmath.mpf, point))
        power = z ** (mpmath.mpf(2) / 3)  # principal branch, these points lie in the upper half plane
        slope = mpmath.mpf(2) / 3 * z ** (-mpmath.mpf(1) / 3)
        value, gradient, radius = stored("l-shape-corner", point)
        assert abs(value - power.imag) <= radius
        assert abs(gradient[0] - slope.imag) <= radius
        assert abs(gradient[1] - slope.real) <= radius


@pytest.mark.usefixtures("sixty_digits")
def test_wave_and_sources_by_their_formulas():
    x, y = mpmath.mpf(2) / 10, mpmath.mpf(7) / 10
    value, gradient, radius = stored("plate-wave", ("0.2", "0.7"))
    decay = mpmath.exp(3 * (y - mpmath.mpf(11) / 10))
    assert abs(value - mpmath.cos(3 * (x - mpmath.mpf(1) / 5)) * decay) <= radius
    assert abs(gradient[1] - 3 * decay) <= radius
    value, gradient, radius = stored("plate-source-near", ("0.549999", "0.100001"))
    dx, dy = mpmath.mpf("0.549999") - mpmath.mpf("0.6"), mpmath.mpf("0.100001") - mpmath.mpf("0.1")
    assert abs(value - mpmath.log(dx * dx + dy * dy) / 2) <= radius
    assert abs(gradient[0] - dx / (dx * dx + dy * dy)) <= radius


def test_ball_arithmetic_encloses_the_stored_values():
    """python-flint as an independent referee: rigorous balls for four cases."""
    flint = pytest.importorskip("flint")
    before = flint.ctx.dps
    flint.ctx.dps = 60
    try:
        arb, fmpq = flint.arb, flint.fmpq
        x, y = arb(fmpq(31, 100)) - arb(fmpq(3, 10)), arb(fmpq(1, 5)) - arb(fmpq(1, 5))
        balls = {
            ("plate-degree-six", ("0.31", "0.2")): (flint.acb(x, y) ** 6).real,
            ("wall-mixed-conditions", ("0.4", "0.45")): (arb(2) * fmpq(45, 100)).exp(),
            ("annulus-logarithm", ("0.1", "0.9")): 1 - 3 * arb(fmpq(7, 10)).log(),
            ("box-source-near", ("0.3", "0.25", "0.2")): 1
            / (arb(fmpq(1, 100)) + arb(fmpq(1, 100)) + arb(fmpq(4, 100))).sqrt(),
            ("disc-source-near", ("-0.2", "0.1")): (
                arb(fmpq(48, 100)) ** 2 + arb(fmpq(11, 100)) ** 2
            ).log() / 2,
        }  # fmt: skip
        for (id_, point), ball in balls.items():
            found = next(v for v in load_reference(id_).values if v.point == point)
            gap = arb(found.value) - ball
            assert abs(gap) <= arb(found.radius), (id_, gap)
    finally:
        flint.ctx.dps = before


# -- bad input ---------------------------------------------------------------------------------------------


def test_values_of_another_case_are_refused():
    reference = load_reference("plate-saddle")
    with pytest.raises(lv.ProblemError, match="values of 'plate-saddle', the case is 'plate-wave'"):
        check_reference(lv.catalogue["plate-wave"], reference)


def test_unknown_reference_names_the_nearest():
    with pytest.raises(UnknownCaseError, match="'plate-saddle'"):
        load_reference("plate-sadle")
    with pytest.raises(UnknownCaseError, match="no reference case"):
        load_reference("../README")


def test_case_without_stored_values_is_empty():
    id_ = "rod-unbalanced-flux"  # it has no solution
    assert load_reference(id_) == StoredReference(case_id=id_, values=())


def test_points_outside_and_uncertified_fields_are_refused():
    with pytest.raises(lv.ProblemError, match="is no point of Rectangle"):
        stored_values(lv.catalogue["plate-saddle"], [("2", "0")])
    own = lv.case(lv.Disc((0, 0), 1), {}, lv.field(lambda x, y: x * y))
    with pytest.raises(lv.ProblemError, match="rest on nothing proven"):
        stored_values(own, [("0", "0")])
    with pytest.raises(lv.ProblemError, match="digits must be"):
        stored_values(lv.catalogue["plate-saddle"], [("0", "0")], digits=0)


def test_folder_holds_the_index():
    assert (reference_folder() / "README.md").is_file()


def test_a_file_is_read_in_a_session_that_has_made_no_field_yet():
    code = "from laplace_verify.references import load_reference; load_reference('float-losing-heat')"
    subprocess.run([sys.executable, "-c", code], check=True, cwd=Path(__file__).parents[2])
