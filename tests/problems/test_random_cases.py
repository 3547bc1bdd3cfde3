from __future__ import annotations

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.problems import case_to_json, random_case


@pytest.mark.parametrize("dim", [1, 2, 3])
def test_same_seed_same_bytes_and_other_seed_other_case(dim) -> None:
    first, again, other = (case_to_json(random_case(seed, dim)) for seed in (417, 417, 418))
    assert first == again
    assert first != other


@pytest.mark.parametrize("seed", range(11, 23))
def test_random_cases_are_smooth_and_fix_u(seed) -> None:
    case = random_case(seed, tensor=bool(seed % 2))
    assert "dirichlet" in case.conditions
    assert case.regularity.singular_points.shape == (0, 2)
    assert (case.problem.tensor.tolist() == np.eye(2).tolist()) == (seed % 2 == 0)
    assert case.problem.constant is None


def test_a_random_case_keeps_to_shapes_and_conditions() -> None:
    kinds, conditions = set(), set()
    for seed in range(30, 50):
        case = random_case(seed, shapes={"disc", "rectangle"}, conditions={"robin", "neumann"})
        kinds.add(case.problem.shape.kind)
        conditions |= case.conditions
        assert "robin" in case.conditions
    assert kinds == {"disc", "rectangle"}
    assert conditions == {"robin", "neumann"}


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        ({"seed": -1}, "seed must be a whole number"),
        ({"seed": 1.5}, "seed must be a whole number"),
        ({"seed": 1, "dim": 4}, "dim must be 1, 2 or 3"),
        ({"seed": 1, "shapes": {"disk"}}, "did you mean 'disc'"),
        ({"seed": 1, "shapes": set()}, "at least one kind"),
        ({"seed": 1, "dim": 3, "shapes": {"disc"}}, "no random 3-D shape of kind 'disc'"),
        ({"seed": 1, "conditions": {"neumann"}}, "needs 'dirichlet' or 'robin'"),
        ({"seed": 1, "conditions": {"dirichlet", "cauchy"}}, "unknown kind of condition 'cauchy'"),
    ],
)
def test_impossible_requests_are_refused(arguments, message) -> None:
    with pytest.raises(lv.ProblemError, match=message):
        random_case(**arguments)


@pytest.mark.slow
def test_many_random_cases_in_every_dimension() -> None:
    for dim in (1, 2, 3):
        for seed in range(60):
            random_case(seed, dim, tensor=dim > 1 and seed % 3 == 0)
