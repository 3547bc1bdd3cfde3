"""LaTeX reports compile, and no table or line runs out of its place."""

import re
import shutil
import subprocess

import pytest

from laplace_verify.report import write_report
from laplace_verify.report.content import Cell, Column, Table
from laplace_verify.report.latex_table import table_to_latex

PDFLATEX = shutil.which("pdflatex")
OVERFULL = 2.0  # points a line may be too long: less than a letter, unseen on paper


def overfull(log):
    """Return how many points each overfull line of a log of TeX is too long or too high."""
    return [float(width) for width in re.findall(r"Overfull \\[hv]box \(([\d.]+)pt too", log)]


def compiled(folder):
    """Compile report.tex in a folder once; return the log, unwrapped."""
    done = subprocess.run(
        [PDFLATEX, "-interaction=nonstopmode", "-halt-on-error", "-no-shell-escape", "report.tex"],
        cwd=folder, capture_output=True, text=True, errors="replace", timeout=120, check=False,
    )  # fmt: skip
    assert done.returncode == 0, done.stdout[-2000:]
    return (folder / "report.log").read_text(encoding="utf-8", errors="replace")


@pytest.mark.slow
@pytest.mark.skipif(PDFLATEX is None, reason="pdflatex is not installed")
def test_latex_compiles_and_nothing_runs_out_of_its_place(whole_record, tmp_path):
    write_report(whole_record, tmp_path, ["tex"])
    compiled(tmp_path)
    log = compiled(tmp_path)  # the second run has contents and page numbers
    widths = overfull(log)
    assert max(widths, default=0.0) <= OVERFULL, widths
    assert "undefined references" not in log


@pytest.mark.slow
@pytest.mark.skipif(PDFLATEX is None, reason="pdflatex is not installed")
def test_a_table_that_is_too_wide_would_be_noticed(whole_record, tmp_path):
    text = write_report(whole_record, tmp_path, ["tex"])["tex"].read_text(encoding="utf-8")
    wider = re.sub(r"p\{(\d+)\.\dpt\}", lambda width: f"p{{{2 * int(width.group(1))}pt}}", text)
    assert wider != text
    (tmp_path / "report.tex").write_text(wider, encoding="utf-8")
    assert max(overfull(compiled(tmp_path))) > OVERFULL


def column_widths(text):
    return [float(width) for width in re.findall(r"\\arraybackslash\}p\{([\d.]+)pt\}", text)]


def wide_table(columns, words):
    return Table(
        caption="Sensors of the pool",
        columns=tuple(Column(title=f"c{k}") for k in range(columns)),
        rows=(tuple(Cell(text=" ".join(["seepage"] * words)) for _ in range(columns)),) * 3,
    )


def test_columns_are_as_wide_as_their_content_if_it_fits():
    short, long = (column_widths(table_to_latex(wide_table(3, words))) for words in (1, 3))
    assert sum(short) < 0.5 * sum(long) < 0.5 * 480


def test_columns_share_the_page_if_their_content_does_not_fit():
    text = table_to_latex(wide_table(4, 40))
    assert 430 < sum(column_widths(text)) < 480
    assert "landscape" not in text
    assert "longtable" in text


def test_only_a_table_whose_words_do_not_fit_is_turned():
    assert "landscape" not in table_to_latex(wide_table(10, 2))
    assert r"\begin{landscape}" in table_to_latex(wide_table(16, 2))


def test_a_short_table_is_kept_in_one_piece():
    assert "longtable" not in table_to_latex(wide_table(3, 2))
    rows = wide_table(3, 2).rows * 9
    assert "longtable" in table_to_latex(Table(caption="", columns=wide_table(3, 2).columns, rows=rows))
