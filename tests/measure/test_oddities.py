"""What is odd about levels besides their errors."""

import pytest

from laplace_verify.measure import Level
from laplace_verify.measure.oddities import oddities


def level(size, h, unknowns, error=1e-3, residual=None):
    return Level(size=size, h=h, unknowns=unknowns, seconds=0.0, errors={"L2": error}, relative={"L2": error},
                 residual=residual)  # fmt: skip


def test_uniform_refinement_counted_in_nodes_is_not_remarked():
    levels = [level(n, 1 / n, (n + 1) ** 2) for n in (8, 16, 32)]
    assert oddities(levels, 2, "finite element") == ([], [])
    assert oddities([level(n, 1 / n, 4 * n) for n in (8, 16, 32)], 2, "boundary element") == ([], [])


def test_unknowns_that_grow_slower_than_h_falls_are_remarked():
    levels = [level(n, 1 / n, 10 * n) for n in (8, 16, 32)]  # graded in one direction only
    _, remarks = oddities(levels, 2, "finite element")
    assert "from size 8 to 16 h falls by 2, the unknowns say 1.41" in remarks[0].text
    assert remarks[0].kind == "uneven refinement"


@pytest.mark.parametrize(
    ("residual", "remarked"), [(1e-8, False), (9e-5, False), (2e-4, True), (None, False)]
)
def test_residuals_not_well_below_the_error_are_remarked(residual, remarked):
    levels = [level(n, 1 / n, n * n, error=1e-3, residual=residual) for n in (8, 16)]
    _, remarks = oddities(levels)
    assert bool(remarks) is remarked
    if remarked:
        assert "reported residual 2.0e-04 is not well below" in remarks[0].text
        assert remarks[0].kind == "large residual"


@pytest.mark.parametrize(("size", "remarked"), [(1e-15, False), (1e-8, True)])
def test_a_residual_at_round_off_is_no_remark_where_the_answer_is_exact(size, remarked):
    levels = [level(n, 1 / n, n * n, error=size, residual=size) for n in (8, 16)]
    assert bool(oddities(levels)[1]) == remarked
