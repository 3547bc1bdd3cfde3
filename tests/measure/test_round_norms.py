"""Norms, fluxes and verdicts in (r, z) and r are those of space."""

import math

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify import fields

FIELD = fields.solid(2, 0) + fields.affine((0, 0, 1), 2)
SECTION = lv.case(
    lv.Rectangle((0.0, 0.0), (0.8, 1.1)),
    {"right": "neumann"},
    fields.axisymmetric(FIELD),
    coordinates="axisymmetric",
    quantities={"top": lv.flux_through("top")},
)
BODY = lv.case(
    lv.Cylinder(0.8, 0.0, 1.1), {"side": "neumann"}, FIELD, quantities={"top": lv.flux_through("top")}
)
PIPE = lv.case(lv.Interval(0.5, 2.0), {}, fields.radial("cylinder", 0, 1), coordinates="radial-cylinder")
TANK = lv.case(lv.Interval(0.5, 2.0), {}, fields.radial("sphere", 0, 1), coordinates="radial-sphere")


def off_by(case, amount, dims, coordinates):
    """A solver whose error is `amount` everywhere, by functions of points."""

    @lv.adapt(
        name="off", kind="other", order=2, dims=dims, coordinates=coordinates,
        conditions={"dirichlet", "neumann"},
    )  # fmt: skip
    def solve(_problem, n):
        return lv.Answer(
            evaluate=lambda points: case.exact.value(points) + amount / n**2,
            gradient=case.exact.gradient,
            h=1 / n,
        )

    return solve


@pytest.mark.parametrize(
    ("case", "volume"),
    [
        (SECTION, math.pi * 0.64 * 1.1),
        (PIPE, math.pi * (4 - 0.25)),
        (TANK, 4 / 3 * math.pi * (8 - 0.125)),
    ],
    ids=["cylinder", "pipe", "tank"],
)
def test_a_constant_error_has_the_norms_of_the_volume(case, volume):
    solver = off_by(case, 0.5, {case.dim}, {case.problem.coordinates})
    level = lv.study(solver, case, sizes=(8, 16, 32, 64)).levels[0]
    error = 0.5 / 64
    assert level.errors["max"] == pytest.approx(error, rel=1e-10)
    assert level.errors["L1"] == pytest.approx(error * volume, rel=1e-9)
    assert level.errors["L2"] == pytest.approx(error * math.sqrt(volume), rel=1e-9)


def test_relative_norms_agree_with_those_of_the_body_in_space():
    flat = lv.study(off_by(SECTION, 0.5, {2}, {"axisymmetric"}), SECTION, sizes=(8, 16, 32, 64)).levels[1]
    solid = lv.study(off_by(BODY, 0.5, {3}, {"cartesian"}), BODY, sizes=(8, 16, 32, 64)).levels[1]
    for norm in ("L1", "L2"):
        assert flat.relative[norm] == pytest.approx(solid.relative[norm], rel=1e-6), norm
    assert flat.errors["trace:top"] == pytest.approx(solid.errors["trace:top"], rel=1e-6)
    assert flat.errors["trace:right"] == pytest.approx(solid.errors["trace:side"], rel=1e-6)


def test_the_axis_has_no_trace_and_no_flux():
    level = lv.study(off_by(SECTION, 0.5, {2}, {"axisymmetric"}), SECTION, sizes=(8, 16, 32)).levels[0]
    assert not [norm for norm in level.errors if norm.endswith(":axis")]


def test_reported_fluxes_are_compared_with_those_of_space():
    exact = SECTION.quantities["top"].value
    assert exact == pytest.approx(BODY.quantities["top"].value, rel=1e-12)

    @lv.adapt(
        name="flux",
        kind="other",
        order=2,
        dims={2},
        coordinates={"axisymmetric"},
        conditions={"dirichlet", "neumann"},
    )
    def solve(_problem, n):
        return lv.Answer(
            evaluate=lambda points: SECTION.exact.value(points) + 1 / n**2,
            h=1 / n,
            fluxes={"top": exact + 1 / n**2, "axis": 0.0},
        )

    study = lv.study(solve, SECTION, sizes=(8, 16, 32, 64))
    assert study.levels[0].errors["flux:top"] == pytest.approx(1 / 64, rel=1e-9)
    assert "flux:axis" not in study.levels[0].errors


def test_a_cloud_without_weights_is_weighted_by_the_metric():
    """Equal weights in the section times 2 pi r: the mean of |e| = r over space is 2/3 of the radius."""
    r, z = (a.ravel() for a in np.meshgrid((np.arange(40) + 0.5) / 50, (np.arange(40) + 0.5) * 1.1 / 40))
    points = np.stack([r, z], axis=1)

    @lv.adapt(
        name="cloud", kind="other", order=2, dims={2}, coordinates={"axisymmetric"},
        conditions={"dirichlet", "neumann"},
    )  # fmt: skip
    def solve(_problem, n):
        return lv.Answer(points, SECTION.exact.value(points) + points[:, 0] / n**2, h=1 / n)

    level = lv.study(solve, SECTION, sizes=(8, 16, 32)).levels[0]
    volume = math.pi * 0.64 * 1.1
    assert level.errors["L1"] == pytest.approx(2 / 3 * 0.8 / 64 * volume, rel=1e-3)  # midpoint rule


def test_a_solver_of_the_plane_fails_in_the_section():
    """The five-point formula without metric factors, declared for (r, z): no order at all."""
    from laplace_verify.solvers.samples import five_point

    @lv.adapt(
        name="plane", kind="finite difference", order=2, dims={2}, shapes={"rectangle"},
        coordinates={"axisymmetric"}, conditions={"dirichlet"},
    )  # fmt: skip
    def plane(problem, n):
        given = {p.name: lv.dirichlet(p.data) for p in problem.pieces}
        return five_point(lv.problem(problem.shape, given), n)

    case = lv.case(
        lv.Rectangle((0.3, 0.0), (0.9, 1.1)), {}, fields.axisymmetric(FIELD), coordinates="axisymmetric"
    )
    assert lv.study(plane, case).verdict is lv.Verdict.FAIL
    assert lv.study(five_point, case).verdict is lv.Verdict.PASS


def test_expected_orders_name_the_source_for_weighted_norms():
    from laplace_verify.measure.criteria import expectations
    from laplace_verify.solvers.samples import five_point

    found = expectations(five_point, SECTION)
    assert found["L2"].expected == 2.0
    assert "Mercier & Raugel 1982" in found["L2"].basis
    assert "flux:axis" not in found
    flat = lv.case(SECTION.problem.shape, {}, fields.polynomial(2))
    assert "Mercier" not in expectations(five_point, flat)["L2"].basis
