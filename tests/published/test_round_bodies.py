"""Round bodies against values from outside: log and 1/r formulas of handbooks, and the same bodies in space.

Formulas without a source beside them are common practice in heat-transfer handbooks (no single source).
"""

import math

import mpmath
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.problems import energy_of_solution
from laplace_verify.solvers.samples import five_point


def pipe(inner, outer, at_inner, at_outer, k=1.0, **quantities):
    """The pipe wall between two temperatures."""
    b = (at_outer - at_inner) / math.log(outer / inner)
    field = fields.radial("cylinder", repr(at_inner - b * math.log(inner)), repr(b))
    return lv.case(
        lv.Interval(inner, outer), {}, field, k, coordinates="radial-cylinder", quantities=quantities
    )


def test_annulus_between_zero_and_one():
    """ln r/ln 2 at r = 1.5: 0.58496250072115618145 (any text; 20 digits by mpmath 1.4.1)."""
    exact = pipe(1, 2, 0, 1).exact
    assert exact.value([1.5])[0] == pytest.approx(0.58496250072115618145, rel=0, abs=2e-16)
    with mpmath.workdps(30):
        slope = mpmath.mpf(1) / mpmath.log(2)
        value = fields.radial("cylinder", 0, slope).at(("3/2",), 20)
        assert abs(value - mpmath.mpf("0.58496250072115618145")) < mpmath.mpf("1e-20")
    section = fields.axisymmetric(fields.radial("cylinder", 0, 1 / math.log(2)))
    assert section.value([[1.5, 0.7]])[0] == pytest.approx(0.58496250072115618145, rel=0, abs=3e-16)


def test_shell_between_one_and_zero():
    """2/r - 1 at r = 1.5: exactly 1/3 (any text)."""
    with mpmath.workdps(40):
        value = fields.radial("sphere", -1, 2).at(("3/2",), 30)
        assert abs(value - mpmath.mpf(1) / 3) < mpmath.mpf("1e-30")
    section = fields.axisymmetric(fields.point_source((0, 0, 0), 2) + fields.affine((0, 0, 0), -1))
    assert section.value([[0.9, 1.2]])[0] == pytest.approx(1 / 3, rel=0, abs=2e-16)


def test_shape_factor_of_a_pipe_wall():
    """Heat per unit length 2 pi K (T_1 - T_2)/log(r_2/r_1), handbooks; here 2 pi 16.3 60/log(1.25)."""
    wall = pipe(0.04, 0.05, 80, 20, 16.3, out=lv.flux_through("right"))
    assert -wall.quantities["out"].value == pytest.approx(2 * math.pi * 16.3 * 60 / math.log(1.25), rel=1e-12)


def test_shape_factor_of_a_spherical_shell():
    """Heat 4 pi K (T_1 - T_2)/(1/r_1 - 1/r_2), handbooks; capacitance of the shell for K = T_1 - T_2 = 1."""
    field = fields.radial("sphere", -2, "3")  # 1 at r = 1, 0 at r = 1.5
    shell = lv.case(
        lv.Interval(1, 1.5), {}, field, coordinates="radial-sphere",
        quantities={"out": lv.flux_through("right"), "energy": energy_of_solution()},
    )  # fmt: skip
    expected = 4 * math.pi / (1 - 1 / 1.5)
    assert -shell.quantities["out"].value == pytest.approx(expected, rel=1e-13)
    assert shell.quantities["energy"].value == pytest.approx(expected, rel=1e-13)


def test_thermal_resistance_with_films_on_both_sides():
    """1/(2 pi r_1 h_1) + log(r_2/r_1)/(2 pi K) + 1/(2 pi r_2 h_2), handbooks, found by the sample solver.

    Fluid of 90 inside and 10 outside; the data g = h T_fluid do not come from an exact field.
    """
    r1, r2, h1, h2, k = 0.3, 0.5, 4.0, 1.5, 0.8
    given = {"left": lv.robin(h1, h1 * 90), "right": lv.robin(h2, h2 * 10)}
    posed = lv.problem(lv.Interval(r1, r2), given, k, coordinates="radial-cylinder")
    resistance = (
        1 / (2 * math.pi * r1 * h1) + math.log(r2 / r1) / (2 * math.pi * k) + 1 / (2 * math.pi * r2 * h2)
    )
    answer = five_point.solve(posed, 200)
    assert -answer.fluxes["right"] == pytest.approx(80 / resistance, rel=1e-5)
    flat = five_point.solve(lv.problem(lv.Interval(r1, r2), given, k), 200)  # the twin: a flat wall
    assert abs(flat.fluxes["right"] * 2 * math.pi * r2 + 80 / resistance) > 0.01 * 80 / resistance


def test_critical_radius_of_insulation():
    """The heat loss of a lagged pipe is largest at the outer radius K/h (handbooks): here 0.12."""

    def loss(outer):
        given = {"left": lv.dirichlet(1), "right": lv.robin(2.5, 0)}
        posed = lv.problem(lv.Interval(0.05, outer), given, 0.3, coordinates="radial-cylinder")
        return -five_point.solve(posed, 256).fluxes["right"]

    assert loss(0.12) > loss(0.11)
    assert loss(0.12) > loss(0.13)
    assert loss(0.12) == pytest.approx(2 * math.pi / (math.log(2.4) / 0.3 + 1 / 0.3), rel=1e-4)


def test_hollow_sphere_with_a_film_has_its_critical_radius_at_twice_k_over_h():
    """2 K/h for a sphere (handbooks): here 0.24."""

    def loss(outer):
        given = {"left": lv.dirichlet(1), "right": lv.robin(2.5, 0)}
        posed = lv.problem(lv.Interval(0.05, outer), given, 0.3, coordinates="radial-sphere")
        return -five_point.solve(posed, 512).fluxes["right"]

    assert loss(0.24) > loss(0.23)
    assert loss(0.24) > loss(0.25)


def test_mean_over_a_ball_is_the_value_at_its_centre():
    """Gauss' mean value theorem in space, with the metric of the section."""
    ball = lv.HalfDisc((0.0, 0.3), 0.8)
    u = fields.axisymmetric(fields.solid(4, 0) + fields.point_source((0, 0, 2)))
    points, weights = ball.quadrature(30)
    volume = weights * 2 * math.pi * points[:, 0]
    assert volume.sum() == pytest.approx(4 / 3 * math.pi * 0.8**3, rel=1e-13)
    assert volume @ u.value(points) / volume.sum() == pytest.approx(u.value([[0.0, 0.3]])[0], rel=1e-12)


@pytest.mark.parametrize(
    ("flat", "solid", "piece", "other"),
    [
        ("shell-section-mixed", "shell-mixed", "outer", "outer"),
        ("shell-section-mixed", "shell-mixed", "inner", "inner"),
    ],
)
def test_sections_have_the_fluxes_of_the_bodies(flat, solid, piece, other):
    """The same shell by quadrature over circles of rings and over spheres."""
    section, body = lv.catalogue[flat], lv.catalogue[solid]
    found = []
    for case, name in ((section, piece), (body, other)):
        points, normals, weights = case.problem.pieces[name].quadrature(20)
        density = case.problem.conductivity * (case.exact.gradient(points) * normals).sum(axis=1)
        found.append(float((weights * case.problem.metric(points)) @ density))
    assert found[0] == pytest.approx(found[1], rel=1e-12)
