"""Laws on what must not show (tolerance, time marched) and on the least energy; a twin breaks each."""

from dataclasses import replace

import numpy as np
import pytest

from laplace_verify.measure.verdict import Verdict
from laplace_verify.principles import check_principle
from laplace_verify.solvers import Answer, adapt
from laplace_verify.solvers.samples import FAULTS, five_point, p1_element, p2_element

FEW = 3  # problems drawn
RECTANGLES = {
    "kind": "finite difference",
    "order": 2,
    "dims": {2},
    "shapes": {"rectangle"},
    "conditions": {"dirichlet"},
}


def grid_of(problem, n):
    """Return axes, nodes (n + 1, n + 1, 2) and values with the data on the sides, zero inside."""
    lower, upper = problem.shape.bounding_box
    axes = [np.linspace(a, b, n + 1) for a, b in zip(lower, upper, strict=True)]
    nodes = np.stack(np.meshgrid(*axes, indexing="ij"), axis=-1)
    values = np.zeros(nodes.shape[:2])
    for name, side in {
        "left": np.s_[0, :],
        "right": np.s_[-1, :],
        "bottom": np.s_[:, 0],
        "top": np.s_[:, -1],
    }.items():
        values[side] = problem.pieces[name].data(nodes[side])
    return axes, nodes, values


def answer_on(nodes, values):
    n = len(nodes) - 1
    number = np.arange((n + 1) ** 2).reshape(n + 1, n + 1)
    quads = np.stack([number[:-1, :-1], number[1:, :-1], number[1:, 1:], number[:-1, 1:]], axis=-1)
    return Answer(nodes.reshape(-1, 2), values.ravel(), cells={"quad": quads.reshape(-1, 4)})


def second_differences(u, axes):
    hx, hy = (axis[1] - axis[0] for axis in axes)
    along_x = (u[2:, 1:-1] - 2 * u[1:-1, 1:-1] + u[:-2, 1:-1]) / hx**2
    return along_x + (u[1:-1, 2:] - 2 * u[1:-1, 1:-1] + u[1:-1, :-2]) / hy**2


def marched(problem, n, duration):
    """Explicit Euler for u_t = div grad u, from zero, in units of the square of the shape's extent."""
    axes, nodes, u = grid_of(problem, n)
    step = 0.2 * min(axis[1] - axis[0] for axis in axes) ** 2
    for _ in range(int(duration * problem.shape.extent**2 / step)):
        u[1:-1, 1:-1] += step * second_differences(u, axes)
    return answer_on(nodes, u)


def relaxed(problem, n, tolerance):
    """Jacobi's iteration until the largest change is less than the tolerance times the largest value."""
    axes, nodes, u = grid_of(problem, n)
    diagonal = sum(2.0 / (axis[1] - axis[0]) ** 2 for axis in axes)
    for _ in range(100_000):
        change = second_differences(u, axes) / diagonal
        u[1:-1, 1:-1] += change
        if np.max(np.abs(change)) <= tolerance * np.max(np.abs(u)):
            break
    return answer_on(nodes, u)


def solver_with(function, keyword, default):
    """Return a solver whose function has one more parameter, with that default."""
    if keyword == "duration":
        return adapt(lambda problem, n, duration=default: function(problem, n, duration), name="marching",
                     **RECTANGLES)  # fmt: skip
    return adapt(lambda problem, n, tolerance=default: function(problem, n, tolerance), name="relaxing",
                 **RECTANGLES)  # fmt: skip


@pytest.mark.slow
@pytest.mark.parametrize(
    ("function", "keyword", "law", "enough", "too_little", "says"),
    [
        (marched, "duration", "steady state", 1.0, 0.02, "after the time 0.04 in place of 0.02"),
        (relaxed, "tolerance", "tighter tolerance", 1e-8, 1e-3, "with the tolerance 1e-05 in place of 0.001"),
    ],
)
def test_a_setting_that_ends_the_work_must_not_show(function, keyword, law, enough, too_little, says):
    kept = check_principle(solver_with(function, keyword, enough), law, examples=FEW)
    assert kept.verdict is Verdict.PASS, kept.reason
    early = solver_with(function, keyword, too_little)
    check = check_principle(early, law, examples=FEW)
    assert check.verdict is Verdict.FAIL, check.reason
    assert says in check.reason
    assert "less than the discretisation error" in check.reason
    space = {}
    exec(check.example, space)  # our own text
    assert space["violation"](early) == pytest.approx(check.violation, rel=1e-9)  # the same solve again


@pytest.mark.parametrize(
    ("law", "reason"),
    [("tighter tolerance", "no parameter tolerance"), ("steady state", "no parameter duration")],
)
def test_solvers_without_the_setting_are_not_asked(law, reason):
    check = check_principle(five_point, law)
    assert check.verdict is Verdict.NOT_APPLICABLE
    assert reason in check.reason


def test_settings_need_a_curved_solution_and_no_chance():
    line = adapt(lambda problem, n, tolerance=1e-3: five_point(problem, n), kind="finite difference", order=2,
                 dims={1})  # fmt: skip
    assert "on a line only" in check_principle(line, "tighter tolerance").reason
    walk = replace(line, kind="stochastic", dims=frozenset({2}))
    assert "chance hides" in check_principle(walk, "tighter tolerance").reason


def with_values(solver, change):
    def solve(problem, n):
        answer = solver(problem, n)
        return Answer(answer.points, change(problem, answer), cells=answer.cells, h=answer.h)

    return replace(solver, function=solve, name="twin")


@pytest.mark.parametrize("solver", [p1_element, p2_element], ids=["linear", "quadratic"])
def test_sound_elements_have_the_least_energy(solver):
    check = check_principle(solver, "Dirichlet principle", examples=FEW)
    assert check.verdict is Verdict.PASS, check.reason


def pulled(problem, answer):
    """Interior values a hundredth off: no longer the least energy."""
    inside = problem.shape.distance(answer.points) > 1e-9
    return np.where(inside, 1.01 * answer.values, answer.values)


def lowered(_problem, answer):
    """Values on the boundary drawn towards their mean: less energy than there can be."""
    return answer.values.mean() + 0.9 * (answer.values - answer.values.mean())


@pytest.mark.slow
@pytest.mark.parametrize(
    ("change", "says"),
    [(pulled, "is not the least"), (lowered, "less than|the data")],
    ids=["pulled", "lowered"],
)
def test_an_answer_of_more_or_of_impossible_energy_breaks_the_law(change, says):
    twin = with_values(p1_element, change)
    check = check_principle(twin, "Dirichlet principle", examples=FEW)
    assert check.verdict is Verdict.FAIL, check.reason
    assert any(part in check.reason for part in says.split("|"))
    space = {}
    exec(check.example, space)  # our own text
    assert space["violation"](twin) == pytest.approx(check.violation, rel=1e-9)  # the same solve again
    assert space["violation"](p1_element) < check.tolerance  # the problem itself is sound


@pytest.mark.parametrize(
    ("twin", "reason"),
    [
        (five_point, "is no finite element method"),
        (replace(p1_element, shapes=frozenset({"disc"})), "rectangles, L-shapes or boxes"),
        (replace(p1_element, conditions=frozenset({"neumann"})), "Dirichlet conditions"),
        (with_values(p1_element, lambda problem, answer: answer.values), ""),
        (replace(p1_element, function=lambda p, n: five_point_nodes(p, n)), "no function on cells"),
        (replace(p1_element, function=lambda p, n: p1_element(p, n if n == 8 else 13)), "not nested"),
        (replace(p1_element, function=lambda p, n: p1_element(p, n + 1)), "do not hold|not nested"),
    ],
    ids=["grid", "disc", "flux", "sound", "cloud", "unlike", "odd"],
)
def test_where_the_principle_proves_nothing_the_reason_is_given(twin, reason):
    check = check_principle(twin, "Dirichlet principle", examples=FEW)
    if not reason:
        assert check.verdict is Verdict.PASS
        return
    assert check.verdict is Verdict.NOT_APPLICABLE, check.reason
    assert any(part in check.reason for part in reason.split("|"))


def five_point_nodes(problem, n):
    answer = p1_element(problem, n)
    return Answer(answer.points, answer.values)


@pytest.mark.slow
def test_a_seeded_fault_inside_has_not_the_least_energy():
    inside = [name for name, fault in FAULTS.items() if fault.sample == p1_element.name]
    found = [
        name
        for name in inside
        if check_principle(FAULTS[name].adapter, "Dirichlet principle", examples=FEW).verdict is Verdict.FAIL
    ]
    assert found
