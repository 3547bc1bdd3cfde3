"""What strategies draw is valid, within what was asked for, and shrinks to small problems."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import HealthCheck, find, given, settings
from hypothesis import strategies as st
from hypothesis.errors import InvalidArgument

from laplace_verify.geometry import Disc, Rectangle
from laplace_verify.principles import strategies
from laplace_verify.principles.posed import Posed
from laplace_verify.problems import Problem
from laplace_verify.solvers.samples import ALL, five_point, p1_element

CHECKED = settings(
    max_examples=25, deadline=None, database=None, derandomize=True, suppress_health_check=list(HealthCheck)
)
SHRUNK = settings(
    max_examples=200, deadline=None, database=None, derandomize=True, suppress_health_check=list(HealthCheck)
)


@CHECKED
@given(st.data())
def test_fields_are_harmonic_by_differences(data):
    dim = data.draw(st.integers(1, 3))
    field = data.draw(strategies.harmonic_fields(dim, degree=5))
    assert field.dim == dim
    points = np.random.default_rng(17).uniform(-1.0, 1.0, (7, dim))
    h = 1e-3
    steps = h * np.eye(dim)
    second = sum(field.value(points + s) + field.value(points - s) for s in steps) - 2 * dim * field.value(
        points
    )
    # h^2/12 times fourth derivatives (below 1e4 for these coefficients) and rounding eps |u| / h^2
    assert np.max(np.abs(second / h**2)) < 1e-2


@CHECKED
@given(strategies.shapes())
def test_shapes_have_room_inside_and_an_area(shape):
    points = shape.sample(5, seed=2)
    assert shape.contains(points).all()
    assert shape.measure > 0.0


@CHECKED
@given(strategies.shapes(dim=2, kinds={"polygon"}))
def test_a_kind_of_shape_includes_its_special_cases_and_no_other(shape):
    assert shape.is_a("polygon")


@CHECKED
@given(strategies.shapes(dim=2).flatmap(lambda s: st.tuples(st.just(s), strategies.conditions(s))))
def test_conditions_name_pieces_and_fix_the_constant(drawn):
    shape, conditions = drawn
    assert set(conditions) <= set(shape.pieces.names)
    kinds = [conditions.get(name, "dirichlet") for name in shape.pieces.names]
    assert "dirichlet" in kinds
    assert all(kind in ("dirichlet", "neumann") or kind >= 1 for kind in kinds)


@pytest.mark.parametrize("solver", ALL, ids=lambda solver: solver.name.replace(" ", "-"))
def test_cases_for_a_solver_are_within_its_declaration(solver):
    @settings(CHECKED, max_examples=8)
    @given(strategies.cases_for(solver))
    def within(case):
        assert solver.refuses(case.problem) is None

    within()


def test_problems_for_a_solver_carry_no_exact_solution():
    @settings(CHECKED, max_examples=2)
    @given(strategies.problems_for(five_point))
    def bare(problem):
        assert isinstance(problem, Problem)

    bare()


@CHECKED
@given(strategies.posed((1, 2, 3), None, None, ("scalar", "tensor")))
def test_the_code_of_a_problem_makes_the_same_problem(posed):
    space = {}
    exec("import laplace_verify as lv\n" + posed.code(), space)  # our own text
    made, meant = space["problem"], posed.problem()
    assert repr(made) == repr(meant).replace("drawn-problem", "case")
    for one, other in zip(made.pieces, meant.pieces, strict=True):
        points = one.sample(9)[0]
        assert np.array_equal(one.data(points), other.data(points))


def test_the_code_of_rough_data_makes_the_same_data():
    posed = Posed(
        shape=Rectangle((0, 0), (2, 1)), conditions={}, data="1 + sqrt((x - 0.5)**2)", conductivity=2.0
    )
    space = {}
    exec("import laplace_verify as lv\n" + posed.code(), space)  # our own text
    assert space["problem"].conductivity == 2.0
    assert space["problem"].pieces["top"].data([[2.0, 1.0]]).tolist() == [2.5]
    with pytest.raises(TypeError, match="no exact solution"):
        posed.case()


@pytest.mark.slow
def test_cases_shrink_to_the_unit_square_with_a_quadratic():
    every = strategies.posed((2, 3), None, None, ("scalar", "tensor"))
    posed = find(every, lambda _: True, settings=SHRUNK)
    assert posed.shape == Rectangle((0, 0), (1, 1))
    assert posed.conditions == {}
    assert posed.conductivity == 1.0
    assert posed.field.degree == 2


@pytest.mark.slow
def test_cases_shrink_to_the_simplest_shape_and_conditions_that_are_asked_for():
    every = strategies.posed((2, 3), None, None, ("scalar", "tensor"))
    flux = find(every, lambda p: "neumann" in p.conditions.values(), settings=SHRUNK)
    assert list(flux.conditions.values()) == ["neumann"]
    assert flux.shape == Rectangle((0, 0), (1, 1))
    round_one = find(every, lambda p: p.shape.is_a("disc"), settings=SHRUNK)
    assert round_one.shape == Disc((0, 0), 1)


@pytest.mark.parametrize("kinds", [{"neumann"}, {"robin"}, {"neumann", "robin"}])
def test_solvers_of_derivative_conditions_alone_get_what_they_declare(kinds):
    solver = replace(five_point, conditions=frozenset(kinds))

    @settings(CHECKED, max_examples=5)
    @given(strategies.cases_for(solver))
    def within(case):
        assert solver.refuses(case.problem) is None

    within()


@pytest.mark.parametrize(
    ("ask", "message"),
    [
        (lambda: strategies.shapes(dim=4), "dim must be 1, 2 or 3, got 4"),
        (lambda: strategies.shapes(kinds={"dics"}), "unknown kind of shape 'dics'; did you mean 'disc'"),
        (lambda: strategies.shapes(dim=3, kinds={"disc"}), "no 3-D shape can be drawn of the kinds disc"),
        (lambda: strategies.shapes(kinds=set()), "no kind of shape is given"),
        (
            lambda: strategies.harmonic_fields(2, degree=1),
            "degree must be a whole number from 2 to 99, got 1",
        ),
        (lambda: strategies.affine_fields(0), "dim must be 1, 2 or 3, got 0"),
        (lambda: strategies.conductivities(2, {"tensr"}), "did you mean 'tensor'"),
        (lambda: strategies.conductivities(2, {"regions"}), "unknown kind of conductivity 'regions'"),
        (lambda: strategies.conditions(Rectangle((0, 0), (1, 1)), {"robbin"}), "did you mean 'robin'"),
        (lambda: strategies.cases(dim=1, shapes={"ball"}), "no shape can be drawn"),
        (
            lambda: strategies.cases_for(replace(p1_element, conductivity=frozenset({"regions"}))),
            "declared for conductivity regions",
        ),
        (
            lambda: strategies.problems_for(replace(p1_element, shapes=frozenset({"strip"}))),
            "shapes that are not drawn: strip",
        ),
    ],
)
def test_impossible_requests_are_refused_when_the_strategy_is_made(ask, message):
    with pytest.raises(InvalidArgument, match=message):
        ask()
