"""Fields outside a square against the map in closed form, integrals of its slope, and what defines them.

The package inverts the map by power series; here the map itself, w -> z, is a hypergeometric function or an
integral.
"""

import math

import mpmath
import numpy as np
import pytest
from scipy.integrate import quad

from laplace_verify import fields
from laplace_verify.errors import FieldError

TURNS = (0.3, 1.1, 2.7, 4.0, 5.9)
DISTANCES = ("1e-12", "1e-6", "1e-2", "0.4", "9")


def capacity(side):
    """Gamma(1/4)^2/(4 pi^(3/2)) side (Landkof 1972, table of capacities)."""
    return mpmath.gamma(mpmath.mpf(1) / 4) ** 2 / (4 * mpmath.pi**1.5) * side


def image(w, side=2):
    """The map: c times the integral of sqrt(1 + w^-4), term by term a hypergeometric function."""
    return capacity(side) * w * mpmath.hyp2f1(-0.5, -0.25, 0.75, -(w**-4))


@pytest.mark.parametrize("turn", TURNS)
@pytest.mark.parametrize("distance", DISTANCES)
def test_multipoles_are_powers_of_the_inverse_map(turn, distance):
    with mpmath.workdps(60):
        w = (1 + mpmath.mpf(distance)) * mpmath.expj(mpmath.mpf(str(turn)))
        z = image(w)
        place = (z.real, z.imag)
        assert abs(fields.square_multipole(0, side=2).at(place, 30) - mpmath.log(abs(w))) <= 1e-29
        for n in (1, 2, 5):
            assert abs(fields.square_multipole(n, side=2).at(place, 30) - (w**-n).real) <= 1e-29
            assert abs(fields.square_multipole(n, "im", side=2).at(place, 30) - (w**-n).imag) <= 1e-29
        wrong = image(w * (1 + mpmath.mpf(10) ** -20))  # the twin
        assert abs(fields.square_multipole(1, side=2).at((wrong.real, wrong.imag), 30) - (1 / w).real) > 1e-29


@pytest.mark.parametrize("turn", TURNS)
def test_the_hypergeometric_map_is_the_integral_of_its_slope(turn):
    with mpmath.workdps(25):
        start, stop = 2 * mpmath.expj(mpmath.mpf(str(turn))), 5 * mpmath.expj(mpmath.mpf(str(turn)))
        along = mpmath.quad(lambda w: capacity(2) * mpmath.sqrt(1 + w**-4), [start, stop])
        assert abs(image(stop) - image(start) - along) <= 1e-22


@pytest.mark.parametrize(
    "field",
    [
        fields.square_multipole(0, side=2),
        fields.square_multipole(2, "im", side=2),
        fields.flow_past_square(2, (1, 0.5), 2, part="stream"),
    ],
)
def test_float64_is_right_to_a_few_units_wherever_the_series_change(field):
    turns, reach = np.random.default_rng(6).uniform(0, 2 * math.pi, 60), np.linspace(1.42, 2.4, 60)
    points = np.stack([reach * np.cos(turns), reach * np.sin(turns)], axis=1)
    exact = np.array([float(field.at(tuple(point), 30)) for point in points])
    assert np.abs(field.value(points) - exact).max() <= 8 * np.finfo(np.float64).eps * np.abs(exact).max()


def test_sides_of_the_square_go_onto_the_unit_circle():
    t = np.linspace(-1, 1, 41)
    sides = np.concatenate([np.stack([t, 1 + 0 * t], 1), np.stack([-1 + 0 * t, t], 1)])
    assert np.abs(fields.square_multipole(0, side=2).value(sides)).max() <= 1e-15
    re, im = (fields.square_multipole(1, part, side=2).value(sides) for part in ("re", "im"))
    assert np.abs(np.hypot(re, im) - 1).max() <= 1e-15
    corners = fields.square_multipole(1, side=2).value([[1, 1], [-1, 1], [1, -1]])
    assert corners == pytest.approx(np.array([1, -1, 1]) / math.sqrt(2), rel=1e-15)


def test_next_to_a_corner_the_charge_grows_as_r_to_the_two_thirds():
    u = fields.square_multipole(0, side=2)
    r = np.array([1e-4, 1e-8, 1e-12])
    values = u.value(1 + np.column_stack([r, r]) / math.sqrt(2))
    assert np.log(values[:-1] / values[1:]) / math.log(1e4) == pytest.approx(2 / 3, abs=1e-4)


def test_no_flow_passes_the_square_and_its_stream_function_vanishes_on_it():
    t = np.linspace(-0.999, 0.999, 40)
    right, top = np.stack([1 + 0 * t, t], 1), np.stack([t, 1 + 0 * t], 1)
    flow, stream = (fields.flow_past_square(2, (1, 0.5), part=part) for part in ("potential", "stream"))
    assert np.abs(flow.gradient(right)[:, 0]).max() <= 1e-13
    assert np.abs(flow.gradient(top)[:, 1]).max() <= 1e-13
    assert np.abs(flow.gradient(top)[:, 0]).max() > 1  # the twin
    assert np.abs(stream.value(np.concatenate([right, top]))).max() <= 4e-15


def test_circulation_and_charge_by_quadrature():
    def through(field, normal, turned):
        def density(t):
            slope = field.gradient([[3 * math.cos(t), 3 * math.sin(t)]])[0]
            across = slope @ [math.cos(t), math.sin(t)]
            along = slope @ [-math.sin(t), math.cos(t)]
            return 3 * (normal * across + turned * along)

        return quad(density, 0, 2 * math.pi, epsabs=1e-11, limit=200)[0]

    charge = fields.square_multipole(0, side=2)
    assert through(charge, 1, 0) == pytest.approx(2 * math.pi, rel=1e-10)
    stream = fields.flow_past_square(2, (1, 0.5), "1.75", part="stream")
    assert through(stream, -1, 0) == pytest.approx(1.75, rel=1e-10)  # velocity = (d/dy, -d/dx) of it


def test_conjugates_satisfy_cauchy_and_riemann():
    points = np.random.default_rng(3).uniform(1.1, 4, (20, 2)) * [1, -1]
    for u in (fields.square_multipole(3, "im", side=2), fields.flow_past_square(2, (1, 0.5))):
        a, b = u.gradient(points), u.conjugate().gradient(points)
        assert np.abs(b - np.stack([-a[:, 1], a[:, 0]], axis=1)).max() <= 1e-14 * np.abs(a).max()


@pytest.mark.parametrize(
    ("make", "message"),
    [
        (lambda: fields.square_multipole(0, side=0), "side must be > 0"),
        (lambda: fields.square_multipole(0, "im", side=1), 'part must be "re" or "im"'),
        (lambda: fields.square_multipole(0, side=1).conjugate(), "grows by 2 pi with every turn"),
        (lambda: fields.square_multipole(1, side=2).value([[0.5, 0.0]]), "is not defined at"),
        (lambda: fields.square_multipole(1, side=2).gradient([[1.0, 1.0]]), "is infinite at"),
        (lambda: fields.flow_past_square(1, (1, 0), 2), "potential of a flow with circulation"),
    ],
)
def test_bad_arguments_and_points_are_refused(make, message):
    with pytest.raises(FieldError, match=message):
        make()
