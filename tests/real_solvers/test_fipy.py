"""FiPy (cell-centred finite volumes, independent of this project) passes what it can do.

The adapter is the README's; it is read from there, so that the example is the one tested.
"""

import re
from pathlib import Path

import pytest

import laplace_verify as lv

README = Path(__file__).parents[2] / "README.md"
# A uniform grid misses the end of the crack, or the step, by up to half a cell, each size by another part.
OFF_THE_GRID = {"cracked-bar", "tall-plate-step"}
QUICK = {"plate-wave", "plate-flux-top", "plate-hot-side"}


@pytest.fixture(scope="module")
def fipy_solve():
    pytest.importorskip("fipy")
    blocks = re.findall(r"^```python\n(.*?)^```", README.read_text(encoding="utf-8"), re.S | re.M)
    (source,) = [block for block in blocks if "import fipy" in block]
    namespace = {"lv": lv, "np": pytest.importorskip("numpy")}
    exec(compile(source, "README.md", "exec"), namespace)
    return namespace["fipy_solve"]


def can_do(case):
    return (
        case.problem.shape.kind == "rectangle"
        and case.problem.ill_posed is None
        and case.conditions <= {"dirichlet", "neumann"}
        and "tensor" not in case.tags
    )


CASES = [
    pytest.param(id_, id=id_, marks=[] if id_ in QUICK else [pytest.mark.slow])
    for id_ in lv.catalogue
    if id_ not in OFF_THE_GRID and can_do(lv.catalogue[id_])
]


@pytest.mark.parametrize("case_id", CASES)
def test_cell_centred_finite_volumes_pass(fipy_solve, case_id):
    study = lv.study(fipy_solve, lv.catalogue[case_id])
    assert study.verdict in (lv.Verdict.PASS, lv.Verdict.NOT_APPLICABLE), f"{study}\n{study.table()}"


@pytest.mark.parametrize("case_id", sorted(OFF_THE_GRID))
def test_a_change_of_condition_off_the_grid_is_no_pass(fipy_solve, case_id):
    study = lv.study(fipy_solve, lv.catalogue[case_id])
    assert study.verdict in (lv.Verdict.INCONCLUSIVE, lv.Verdict.FAIL), str(study)


def test_cell_values_taken_one_cell_too_far_fail(fipy_solve):
    def shifted(problem, n):
        answer = fipy_solve(problem, n)
        width = (problem.shape.upper[0] - problem.shape.lower[0]) / n
        points = answer.points.copy()
        points[:, 0] = problem.shape.lower[0] + (points[:, 0] - problem.shape.lower[0]) * (1 - width / 10)
        return lv.Answer(points, answer.values, weights=answer.weights, location="cell")

    wrong = lv.adapt(
        shifted,
        name="shifted",
        kind="finite volume",
        order=2,
        dims={2},
        shapes={"rectangle"},
        conditions={"dirichlet"},
    )
    assert lv.study(wrong, lv.catalogue["plate-saddle"]).verdict == lv.Verdict.FAIL
