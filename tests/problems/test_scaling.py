from __future__ import annotations

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.problems import energy_of_solution
from laplace_verify.problems.units import Units, unit_product

L, U, K = 0.2, 50.0, 16.0


@pytest.fixture
def wall():
    shape = lv.Rectangle((0, 0), (2, 1)).split(top=[0.25])
    conditions = {"left": "neumann", "top-1": lv.robin(3), "top-2": lv.robin("1 + x")}
    wanted = {
        "heat": lv.flux_through("bottom"),
        "energy": energy_of_solution(),
        "spot": lv.value_at((1.5, 0.5)),
    }
    return lv.case(shape, conditions, lv.fields.exp_trig(1) + lv.fields.log_source((3, 3)), quantities=wanted)


@pytest.fixture
def twin(wall):
    return wall.scaled(length=(L, "m"), value=(U, "K"), conductivity=(K, "W/(m K)"))


def test_data_of_the_twin_follow_the_dimensions(wall, twin) -> None:
    # by hand: u scales by U, fluxes by K U / L, alpha by K / L
    places = np.array([[0.7, 1.0], [1.2, 1.0], [2.0, 1.0]])
    for name, factor in (("right", U), ("left", K * U / L), ("top-2", K * U / L)):
        piece = wall.problem.pieces[name]
        points = piece.sample(3)[0]
        expected = factor * piece.data(points)
        np.testing.assert_allclose(
            twin.problem.pieces[name].data(L * points), expected, rtol=1e-12, atol=1e-9
        )
    np.testing.assert_allclose(
        twin.problem.pieces["top-2"].alpha(L * places), K / L * (1 + places[:, 0]), rtol=1e-12, atol=0
    )
    assert twin.problem.pieces["top-1"].alpha([[0.05, L]]) == pytest.approx(3 * K / L, rel=1e-12)


def test_the_twin_solves_its_own_problem(twin) -> None:
    # an independent route: the scaled field and shape make a case with the same boundary data
    problem = twin.problem
    again = lv.case(problem.shape, {"left": "neumann"}, twin.exact, problem.conductivity)
    points = problem.pieces["left"].sample(5)[0]
    assert again.problem.pieces["left"].data(points).tolist() == problem.pieces["left"].data(points).tolist()
    assert again.regularity.scale == pytest.approx(twin.regularity.scale, rel=1e-9)


def test_quantities_and_units_of_the_twin(wall, twin) -> None:
    factors = {"heat": K * U, "energy": K * U * U, "spot": U}  # d = 2
    units = {"heat": "W/m", "energy": "W K/m", "spot": "K"}
    for name, factor in factors.items():
        assert twin.quantities[name].value == pytest.approx(factor * wall.quantities[name].value, rel=1e-12)
        assert twin.quantities[name].unit == units[name]
        assert twin.quantities[name].radius >= factor * wall.quantities[name].radius
    assert twin.quantities["spot"].where == pytest.approx((0.3, 0.1))
    assert twin.units == Units(length="m", value="K", conductivity="W/(m K)")
    assert twin.problem.conductivity == K


def test_shape_and_split_are_scaled(twin) -> None:
    assert twin.problem.shape.upper == pytest.approx((0.4, 0.2))
    assert twin.problem.pieces["top-1"].measure == pytest.approx(0.1)


def test_scaling_twice_is_scaling_by_the_product(wall) -> None:
    once = wall.scaled(length=6).quantities["energy"].value
    twice = wall.scaled(length=2).scaled(length=3).quantities["energy"].value
    assert once == pytest.approx(twice, rel=1e-14)


@pytest.mark.parametrize(
    "shape",
    [
        lv.Disc((1, 0), 0.5),
        lv.Ellipse((1, 0), (0.5, 0.25)),
        lv.Annulus((1, 0), 0.25, 0.5, (1.125, 0)),
        lv.Sector(1.0, 2.0),
        lv.LShape(1.0),
        lv.Polygon([(0, 0), (4, 0), (0, 4)], holes=[[(1, 1), (1, 1.5), (1.5, 1)]]),
        lv.Ball((1, 0, 0), 0.5),
        lv.SphericalShell((1, 0, 0), 0.25, 0.5),
        lv.Cylinder(0.5, -1, 2),
        lv.Box((0, 0, 0), (1, 2, 3)),
        lv.Interval(-1, 2),
    ],
    ids=lambda shape: shape.kind,
)
def test_every_shape_scales(shape) -> None:
    field = lv.fields.affine((1.0, 2.0, 3.0)[: shape.dim])
    twin = lv.case(shape, {}, field).scaled(length=2)
    assert twin.problem.shape.measure == pytest.approx(2.0**shape.dim * shape.measure, rel=1e-13)
    lower, upper = twin.problem.shape.bounding_box
    np.testing.assert_allclose((lower, upper), 2 * np.array(shape.bounding_box), rtol=1e-13, atol=1e-15)


def test_singular_points_and_the_constant_are_scaled() -> None:
    shape = lv.LShape(1.0)
    kinds = dict.fromkeys(shape.pieces.names, "neumann")
    case = lv.case(shape, kinds, lv.fields.wedge("2/3", "cos", apex=(0, 0)), constant=("point", (0, 0), 0))
    twin = case.scaled(length=3, value=2)
    assert twin.problem.constant == ("point", (0.0, 0.0), 0.0)
    mean = lv.case(shape, kinds, lv.fields.affine((0, 0), 5)).scaled(value=2).problem.constant
    assert mean == ("mean", pytest.approx(10, rel=1e-12))


@pytest.mark.parametrize("bad", [0, -1, float("nan"), float("inf"), "2", (2, 3), True, ("m", 2)])
def test_factors_must_be_positive_numbers(wall, bad) -> None:
    with pytest.raises(lv.ProblemError, match="length must be a positive number"):
        wall.scaled(length=bad)


@pytest.mark.parametrize(
    ("factors", "expected"),
    [
        ([("W/(m K)", 1), ("K", 1), ("m", 0)], "W/m"),
        ([("m^2/s", 1), ("Pa", 1)], "m^2 Pa/s"),
        ([("1/s", 2)], "1/s^2"),
        ([("m", 1), ("m", -1)], ""),
        ([("S/m", 1), ("V", 1), ("m", 1)], "S V"),
        ([("kg m^2/s^3", 1), ("", 1)], "kg m^2/s^3"),
    ],
)
def test_units_multiply(factors, expected) -> None:
    assert unit_product(*factors) == expected


@pytest.mark.parametrize("bad", ["W/m/K", "W+m", "W (m"])
def test_units_that_cannot_be_read_are_refused(bad) -> None:
    with pytest.raises(lv.ProblemError, match=r"unit .*write"):
        unit_product((bad, 1))
