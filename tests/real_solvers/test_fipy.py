"""FiPy (cell-centred finite volumes, independent of this project) passes what it can do.

The adapter is the README's; it is read from there, so that the example is the one tested.
"""

import re
from pathlib import Path

import numpy as np
import pytest

import laplace_verify as lv

README = Path(__file__).parents[2] / "README.md"
# A uniform grid misses the crack's end, the step or the toe, at every size by another part of a cell.
OFF_THE_GRID = ("cracked-bar", "tall-plate-step", "half-of-a-dam")
QUICK = {"plate-wave", "plate-flux-top", "plate-hot-side"}


@pytest.fixture(scope="module")
def readme():
    """What the README's block defines."""
    pytest.importorskip("fipy")
    blocks = re.findall(r"^```python\n(.*?)^```", README.read_text(encoding="utf-8"), re.S | re.M)
    (source,) = [block for block in blocks if "import fipy" in block]
    namespace = {"lv": lv, "np": pytest.importorskip("numpy")}
    exec(compile(source, "README.md", "exec"), namespace)
    return namespace


@pytest.fixture
def fipy_solve(readme):
    return readme["fipy_solve"]


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
    if can_do(lv.catalogue[id_])
]


@pytest.mark.parametrize("case_id", CASES)
def test_cell_centred_finite_volumes_pass(fipy_solve, case_id):
    study = lv.study(fipy_solve, lv.catalogue[case_id])
    assert study.verdict in (lv.Verdict.PASS, lv.Verdict.NOT_APPLICABLE), f"{study}\n{study.table()}"


@pytest.mark.parametrize("case_id", OFF_THE_GRID)
def test_a_change_of_condition_off_the_grid_is_neither_pass_nor_fail(readme, monkeypatch, case_id):
    def uniform(problem, axis, n):
        return np.full(n, (problem.shape.upper[axis] - problem.shape.lower[axis]) / n)

    monkeypatch.setitem(readme, "widths", uniform)
    study = lv.study(readme["fipy_solve"], lv.catalogue[case_id])
    assert study.verdict is lv.Verdict.INCONCLUSIVE, str(study)


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
