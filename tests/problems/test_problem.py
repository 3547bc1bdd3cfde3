from __future__ import annotations

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.problems import Region


def insulated(shape, **other):
    return {name: other.get(name, lv.neumann(0)) for name in shape.pieces.names}


def test_every_piece_must_be_named(square) -> None:
    with pytest.raises(lv.ProblemError, match="missing: right, bottom"):
        lv.problem(square, {"left": lv.dirichlet(0), "top": lv.dirichlet(1)})


def test_unknown_pieces_are_refused_with_the_nearest_names(square) -> None:
    with pytest.raises(lv.ProblemError, match="unknown piece 'botom' of 'rectangle'; did you mean 'bottom'"):
        lv.problem(square, {"botom": lv.dirichlet(0)})


def test_the_name_of_a_split_piece_stands_for_its_parts(square) -> None:
    parts = square.split(top=[0.4])
    problem = lv.problem(parts, insulated(square, top=lv.dirichlet(1)))
    assert [p.kind for p in problem.pieces if p.name.startswith("top")] == ["dirichlet", "dirichlet"]


def test_whole_and_part_named_together_conflict(square) -> None:
    conditions = insulated(square) | {"top": lv.dirichlet(1), "top-2": lv.neumann(0)}
    with pytest.raises(lv.ProblemError, match="conflicting conditions on piece 'top-2'"):
        lv.problem(square.split(top=[0.4]), conditions)


@pytest.mark.parametrize(
    ("condition", "message"),
    [
        pytest.param("dirichlet", "has no data", id="kind without data"),
        pytest.param(lv.robin(1), r"has no data: give robin\(alpha, g\)", id="robin without g"),
        pytest.param("robin", r"write robin\(alpha\)", id="robin by name"),
        pytest.param("dirichlett", "did you mean 'dirichlet'", id="misspelt"),
        pytest.param(1.0, "must be dirichlet, neumann or robin", id="number"),
    ],
)
def test_conditions_need_kind_and_data(square, condition, message) -> None:
    with pytest.raises(lv.ProblemError, match=message):
        lv.problem(square, insulated(square, top=condition))


@pytest.mark.parametrize(
    ("conductivity", "message"),
    [
        pytest.param(0.0, "must be > 0", id="zero"),
        pytest.param(-1.0, "must be > 0", id="negative"),
        pytest.param(float("nan"), "must be finite", id="nan"),
        pytest.param("1", "positive number or a matrix", id="text"),
        pytest.param(True, "positive number or a matrix", id="bool"),
        pytest.param(np.eye(3), r"shape \(2, 2\), got \(3, 3\)", id="wrong shape"),
        pytest.param([[1, 0.5], [0, 1]], "must be symmetric", id="not symmetric"),
        pytest.param([[1, 2], [2, 1]], "positive definite.*eigenvalues", id="indefinite"),
        pytest.param([[1, 1], [1, 1]], "positive definite", id="singular"),
        pytest.param([[1, 0], [0]], "positive number or a", id="ragged"),
    ],
)
def test_bad_conductivities_are_refused(square, conductivity, message) -> None:
    with pytest.raises(lv.ProblemError, match=message):
        lv.problem(square, insulated(square, top=lv.dirichlet(0)), conductivity)


def test_conductivity_comes_per_point_and_as_a_matrix(square) -> None:
    conditions = insulated(square, top=lv.dirichlet(0))
    places = [[0.1, 0.2], [0.3, 0.4], [0.5, 0.6]]
    scalar = lv.problem(square, conditions, 2)
    assert scalar.conductivity_at(places).tolist() == [2.0, 2.0, 2.0]
    assert scalar.tensor.tolist() == [[2.0, 0.0], [0.0, 2.0]]
    k = [[2.0, 0.5], [0.5, 1.0]]
    tensor = lv.problem(square, conditions, k)
    assert tensor.conductivity_at(places, region="body").shape == (3, 2, 2)
    assert tensor.tensor.tolist() == k
    with pytest.raises(ValueError, match="read-only"):
        tensor.tensor[0, 0] = 9.0
    with pytest.raises(lv.ProblemError, match="no region is named 'bodi'; did you mean 'body'"):
        scalar.conductivity_at(places, region="bodi")


def test_a_homogeneous_problem_has_one_region(square) -> None:
    (region,) = lv.problem(square, insulated(square, top=lv.dirichlet(0)), 2).regions
    assert isinstance(region, Region)
    assert (region.name, region.conductivity) == ("body", 2.0)
    assert region.contains([[0.5, 0.5], [2.0, 0.5]]).tolist() == [True, False]
    assert set(region.outline(5)) == {"left", "right", "bottom", "top"}


def test_pure_neumann_data_must_balance(square) -> None:
    with pytest.raises(lv.ProblemError, match=r"zero net flux, but their integral over the boundary is 0\.5"):
        lv.problem(square, insulated(square, top=lv.neumann("x")))
    balanced = lv.problem(square, insulated(square, top=lv.neumann("x - 0.5")))
    assert balanced.constant == ("mean", 0.0)
    # Robin with alpha = 0 fixes nothing either
    with pytest.raises(lv.ProblemError, match="zero net flux"):
        lv.problem(square, insulated(square, top=lv.robin(0, 1)))


def test_balance_is_checked_on_curved_boundaries_too() -> None:
    rim = lv.Disc((2.0, 0.0), 1.0)
    assert lv.problem(rim, {"rim": lv.neumann("(x - 2)*y")}).constant == ("mean", 0.0)
    with pytest.raises(lv.ProblemError, match="zero net flux"):
        lv.problem(rim, {"rim": lv.neumann("(x - 2)*y + 0.001")})


@pytest.mark.parametrize(
    ("constant", "message"),
    [
        pytest.param(3.0, "constant must be", id="number"),
        pytest.param(("median", 3.0), "constant must be", id="unknown"),
        pytest.param(("mean",), "constant must be", id="no value"),
        pytest.param(("mean", "warm"), "constant must be", id="text"),
        pytest.param(("point", (2.0, 0.5), 1.0), "must lie in the shape", id="outside"),
        pytest.param(("point", (0.5,), 1.0), "one row per point", id="dimension"),
    ],
)
def test_bad_constants_are_refused(square, constant, message) -> None:
    with pytest.raises(lv.ProblemError, match=message):
        lv.problem(square, insulated(square), constant=constant)


def test_a_constant_is_for_pure_neumann_only(square) -> None:
    with pytest.raises(lv.ProblemError, match="for pure Neumann problems only"):
        lv.problem(square, insulated(square, top=lv.dirichlet(0)), constant=("mean", 0))
    point = lv.problem(square, insulated(square), constant=("point", (0.5, 0.25), 3))
    assert point.constant == ("point", (0.5, 0.25), 3.0)


def test_what_is_no_shape_or_no_dict_is_refused(square) -> None:
    with pytest.raises(lv.ProblemError, match="shape must be a shape"):
        lv.problem("square", {})
    with pytest.raises(lv.ProblemError, match="conditions must be a dict"):
        lv.problem(square, ["dirichlet"])


def reachable(thing, depth=0, seen=None):
    """Everything that public attributes lead to."""
    seen = {} if seen is None else seen
    if id(thing) in seen or depth > 6 or isinstance(thing, str | int | float | np.ndarray | type(None)):
        return seen
    seen[id(thing)] = thing
    parts = list(thing) if isinstance(thing, tuple | list) else []
    parts += [getattr(thing, name) for name in dir(thing) if not name.startswith("_")]
    for part in parts:
        if not callable(part):
            reachable(part, depth + 1, seen)
    return seen


def test_the_exact_field_is_out_of_reach_and_out_of_sight(square) -> None:
    case = lv.case(square, {"top": lv.robin(2)}, lv.fields.exp_trig(3, "sin"), id="hidden")
    found = reachable(case.problem).values()
    assert len(found) > 20
    assert not any(isinstance(thing, lv.Field) for thing in found)
    assert any(isinstance(thing, lv.Field) for thing in reachable(case).values())  # the twin: a case shows it
    text = repr(case.problem) + repr(case.problem.pieces) + str(case.problem.pieces["top"].data)
    assert "exp" not in text
    assert "hidden" in repr(case.problem)
