"""Ways in which a sound solver is failed, or a wrong one passed, by a careless order test; none is ours."""

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.measure.running import Runner
from laplace_verify.solvers.samples import five_point, p1_element

SQUARE = lv.case(lv.Rectangle((0, 0), (1, 1)), {}, lv.fields.exp_trig(2, "cos"))


def grid_answer(n, order, with_cells):
    """Exact values plus an error of the given order at the nodes of a grid, with bilinear cells or bare."""
    x = np.linspace(0.0, 1.0, n + 1)
    points = np.stack(np.meshgrid(x, x, indexing="ij"), axis=-1).reshape(-1, 2)
    values = SQUARE.exact.value(points) + n ** -float(order) * np.sin(np.pi * points[:, 0]) * points[:, 1]
    first = (np.arange(n)[:, None] * (n + 1) + np.arange(n)).ravel()
    cells = {"quad": np.stack([first, first + n + 1, first + n + 2, first + 1], axis=1)}
    return lv.Answer(points, values, cells=cells if with_cells else None, h=1 / n)


def high_order(with_cells):
    """A scheme of order six at its nodes."""
    return lv.adapt(
        lambda problem, n: grid_answer(n, 6, with_cells), name="nine points", kind="finite difference",
        order=6, sizes=(4, 8, 16, 32),
    )  # fmt: skip


def test_interpolation_between_nodes_does_not_cap_a_scheme_that_hands_back_bare_points():
    bare = lv.study(high_order(with_cells=False), SQUARE)
    assert bare.verdict is lv.Verdict.PASS, bare.reasons
    assert bare.orders["max"].observed == pytest.approx(6.0, abs=0.3)


def test_a_scheme_capped_by_its_own_cells_is_told_so():
    capped = lv.study(high_order(with_cells=True), SQUARE)
    assert capped.verdict is lv.Verdict.FAIL
    said = "at the solver's own points the error falls at order 6.0, between them (L2) at 2.0"
    assert any(said in remark for remark in capped.remarks)


def test_linear_elements_are_no_order_faster_at_their_nodes():
    found = lv.study(p1_element, lv.catalogue["hexagon-mixed"])
    assert not any("own points" in remark for remark in found.remarks)


@pytest.mark.parametrize("case_id", ["l-shape-corner", "plate-condition-change", "wedge-full-turn-insulated"])
def test_corner_problems_are_not_held_to_the_smooth_order(case_id):
    # Laasonen 1957; Bramble, Hubbard & Zlamal 1968: far below the formal order 2, and right.
    solver = five_point if five_point.refuses(lv.catalogue[case_id].problem) is None else p1_element
    found = lv.study(solver, lv.catalogue[case_id])
    assert found.verdict is lv.Verdict.PASS, found.reasons
    decisive = found.orders[found.deciding[0]]
    assert decisive.observed < 1.5
    assert decisive.formal - decisive.observed > 0.3


def test_superconvergence_is_not_punished():
    def solve(_, n):
        return lv.Answer(evaluate=lambda x: SQUARE.exact.value(x) * (1 + n**-4.0), h=1 / n)

    found = lv.study(lv.adapt(solve, name="super", kind="finite difference", order=2), SQUARE)
    assert found.verdict is lv.Verdict.PASS


def test_sample_points_differ_from_level_to_level_and_with_the_seed():
    # Fixed points near a singularity see an error that falls with the distance in widths: a false order.
    corner = lv.catalogue["l-shape-corner"]

    def asked(seed):
        seen = []

        def solve(problem, n):
            del problem

            def values(x):
                seen[-1].append(x.copy())
                return corner.exact.value(x)

            seen.append([])
            return lv.Answer(evaluate=values, h=1 / n)

        runner = Runner(lv.adapt(solve, name="asked", kind="other", order=2), corner, seed, 2000)
        for size in (8, 16):
            runner.run(size)
        return [np.concatenate(level) for level in seen]

    # The graded nodes of the integrals stay; those of the maximum are drawn anew for every size and seed.
    coarse, fine = asked(0)
    other = asked(1)[0]
    np.testing.assert_array_equal(coarse, asked(0)[0])
    fixed = {tuple(row) for row in coarse.tolist()} & {tuple(row) for row in fine.tolist()}
    for points in (coarse, fine, other):
        drawn = [row for row in points.tolist() if tuple(row) not in fixed]
        assert len(drawn) >= 2000


def test_quadratic_nodes_read_as_linear_triangles_are_second_order_and_told_so():
    def solve(_, n):
        answer = grid_answer(n, 3, with_cells=False)
        first = (np.arange(n)[:, None] * (n + 1) + np.arange(n)).ravel()
        triangles = np.concatenate(
            [
                np.stack([first, first + n + 1, first + n + 2], 1),
                np.stack([first, first + n + 2, first + 1], 1),
            ]
        )
        return lv.Answer(answer.points, answer.values, cells={"triangle": triangles}, h=2 / n)

    solver = lv.adapt(
        solve,
        name="vertices only",
        kind="finite element",
        order={"L2": 3, "H1-semi": 2},
        sizes=(8, 16, 32, 64),
    )
    found = lv.study(solver, SQUARE)
    assert found.verdict is lv.Verdict.FAIL
    assert any("the shape functions of the cells limit it" in remark for remark in found.remarks)
