"""Grid studies read from CSV files."""

import pytest

from laplace_verify.errors import RecordError
from laplace_verify.measure.grid_table import read_grids


def test_reads_numbers_of_cells_in_any_order(tmp_path):
    path = tmp_path / "flow.csv"
    path.write_text(
        "N,discharge,uplift\n4500,5.863,1.0\n18000,6.063,1.2\n\n8000,5.972,1.1\n", encoding="utf-8"
    )
    grids = read_grids(path, dim=2)
    assert grids.cells == (18000.0, 8000.0, 4500.0)
    assert grids.columns == {"discharge": (6.063, 5.972, 5.863), "uplift": (1.2, 1.1, 1.0)}
    assert grids.h[1] / grids.h[0] == pytest.approx(1.5, rel=1e-15)
    assert read_grids(path, dim=3).h[0] == pytest.approx(18000 ** (-1 / 3), rel=1e-15)


def test_reads_spacings_and_a_byte_order_mark(tmp_path):
    path = tmp_path / "flow.csv"
    path.write_text("h, q\n0.2,1.1\n0.1,1.0\n", encoding="utf-8-sig")
    grids = read_grids(path)
    assert (grids.h, grids.cells, grids.columns) == ((0.1, 0.2), None, {"q": (1.0, 1.1)})


@pytest.mark.parametrize(
    ("text", "match"),
    [
        ("", "header"),
        ("size,q\n1,2\n", "header"),
        ("h\n1\n", "header"),
        ("h,q,q\n1,2,3\n", "header"),
        ("h,q\n0.1,one\n", r"row 2, column 'q': a number was expected, got 'one'"),
        ("h,q\n0.1,nan\n", "row 2, column 'q'"),
        ("h,q\n0.1\n", "row 2: 2 cells expected, got 1"),
        ("h,q\n-0.1,1\n", "must be positive"),
    ],
)
def test_refuses_what_is_no_grid_study(tmp_path, text, match):
    path = tmp_path / "flow.csv"
    path.write_text(text, encoding="utf-8")
    with pytest.raises(RecordError, match=match):
        read_grids(path)


def test_refuses_a_file_that_is_not_there(tmp_path):
    with pytest.raises(RecordError, match="cannot read"):
        read_grids(tmp_path / "missing.csv")
