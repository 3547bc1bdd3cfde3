"""Figures show what was measured, say so when there is nothing, and leave matplotlib as it was."""

import math
import subprocess
import sys
from dataclasses import replace

import numpy as np
import pytest

from laplace_verify.campaign.record import CaseInfo
from laplace_verify.errors import RecordError
from laplace_verify.fields import field
from laplace_verify.geometry import Box, Interval, Rectangle
from laplace_verify.measure.results import ErrorMap
from laplace_verify.principles import check_principle
from laplace_verify.problems import case
from laplace_verify.report import plot
from laplace_verify.report.figures import convergence_figure, order_figure
from laplace_verify.report.maps import error_figure, inside_outline
from laplace_verify.report.shape_figures import law_figure
from laplace_verify.report.svg import figure_to_svg
from laplace_verify.solvers.samples import FAULTS


def texts(figure):
    """Return every text of a figure."""
    figure.canvas.draw()
    found = []
    for axes in figure.axes:
        legend = axes.get_legend()
        found += [text.get_text() for text in axes.texts]
        found += [text.get_text() for text in legend.get_texts()] if legend else []
    return found + [text.get_text() for text in figure.texts]


def test_convergence_shows_every_error_and_the_expected_slope(whole_record):
    study = whole_record.studies[0]
    figure = convergence_figure(study)
    axes = figure.axes[0]
    curve = next(line for line in axes.lines if line.get_label() == "max")
    np.testing.assert_array_equal(curve.get_ydata(), [level.errors["max"] for level in study.levels])
    np.testing.assert_array_equal(curve.get_xdata(), [level.h for level in study.levels])
    assert "slope 2.00" in texts(figure)
    assert "H1-semi" in texts(figure)
    guide = next(line for line in axes.lines if line.get_color() == "#1d2b33")
    (x0, x1), (y0, y1) = guide.get_xdata(), guide.get_ydata()
    assert math.log(y0 / y1) / math.log(x0 / x1) == pytest.approx(2.0, rel=1e-12, abs=0)


def test_levels_out_of_the_fit_are_hollow(whole_record):
    study = whole_record.studies[6]
    hollow = [
        line for line in convergence_figure(study).axes[0].lines if line.get_markerfacecolor() == "white"
    ]
    assert [list(line.get_xdata()) for line in hollow[:2]] == [[1 / 8], [1 / 8]]


def test_orders_stand_between_their_levels_beside_the_expected_one(whole_record):
    study = whole_record.studies[0]
    figure = order_figure(study)
    curve = next(line for line in figure.axes[0].lines if line.get_label() == "max")
    np.testing.assert_array_equal(curve.get_ydata(), study.orders["max"].pairs)
    np.testing.assert_allclose(
        curve.get_xdata(), [math.sqrt(0.5) / n for n in (8, 16, 32)], rtol=1e-12, atol=0
    )
    assert "expected 2.00" in texts(figure)


def test_a_study_without_levels_says_so_in_its_figures(whole_record):
    study = whole_record.studies[7]
    assert "no level was measured" in texts(convergence_figure(study))
    assert "fewer than two errors: no order" in texts(order_figure(study))


def test_zero_and_absent_errors_have_no_place_on_a_logarithmic_axis(record):
    study = record.studies[0]
    study.levels[1].errors["max"] = 0.0
    study.levels[2].errors["max"] = math.nan
    curve = next(line for line in convergence_figure(study).axes[0].lines if line.get_label() == "max")
    assert len(curve.get_ydata()) == 2


@pytest.mark.parametrize("dim", [1, 2, 3])
def test_error_maps_of_every_dimension_are_drawn(dim):
    points = np.random.default_rng(3).uniform(-1.0, 1.0, (300, dim))
    errors = np.sin(3 * points[:, 0])
    field = ErrorMap(size=8, points=points.tolist(), errors=errors.tolist())
    svg = figure_to_svg(error_figure(field, None), key="map", title="a < b", alt="x & y")
    assert svg.startswith("<svg viewBox=")
    assert '<title id="map-title">a &lt; b</title>' in svg
    assert svg.count("http") == 0


def test_error_map_of_no_errors_or_no_points_is_drawn():
    for points, errors in ([[0.1, 0.2], [0.4, 0.3]], [0.0, 0.0]), ([], []):
        figure_to_svg(
            error_figure(ErrorMap(size=8, points=points, errors=errors), None), key="m", title="", alt=""
        )


def test_pixels_inside_the_outline_follow_the_even_odd_rule():
    square = [np.array([[0.0, 0.0], [4.0, 0.0], [4.0, 4.0], [0.0, 4.0], [0.0, 0.0]])]
    hole = [np.array([[1.0, 1.0], [1.0, 3.0], [3.0, 3.0], [3.0, 1.0], [1.0, 1.0]])]
    slit = [np.array([[0.0, 0.5], [1.0, 0.5]]), np.array([[1.0, 0.5], [0.0, 0.5]])]
    points = np.array([[0.5, 0.7], [2.0, 2.0], [5.0, 2.0], [-1.0, 2.0], [3.5, 3.5]])
    assert inside_outline(points, square + hole + slit).tolist() == [True, False, False, False, True]
    assert inside_outline(points, square).tolist() == [True, True, False, False, True]


def test_a_record_is_plotted_with_one_row_a_case(whole_record):
    figure = plot(whole_record)
    labels = [label.get_text() for label in figure.axes[0].get_yticklabels()]
    ran = [s.case_id for s in whole_record.studies if s.verdict.value not in ("NOT_APPLICABLE", "NOT_RUN")]
    assert labels == ran


@pytest.mark.parametrize(
    ("shape", "exact"),
    [
        (Interval(0.2, 1.7), "3 - 2*x"),
        (Rectangle((0.0, 0.0), (1.6, 0.9)), "x*y"),
        (Box((0.0, 0.0, 0.0), (1.0, 2.0, 3.0)), "x*y*z"),
    ],
)
def test_a_case_is_plotted_with_its_conditions(shape, exact):
    figure = plot(case(shape, {"right": "neumann"}, field(exact)))
    found = texts(figure)
    assert "dirichlet" in found
    assert "neumann" in found
    if shape.dim < 3:
        assert "right" in found


def test_a_broken_law_shows_its_problem_and_where():
    solver = FAULTS["flux sign"].adapter
    figure = law_figure(check_principle(solver, "affine fields reproduced"))
    assert {"left", "right", "neumann", "broken here"} <= set(texts(figure))
    (marks,) = [line for line in figure.axes[0].lines if line.get_label() == "broken here"]
    np.testing.assert_array_equal(marks.get_xydata(), [[1.0, 0.5]])  # where the flux enters


def test_what_cannot_be_plotted_is_refused():
    with pytest.raises(RecordError, match="only a case, a study or a record can be plotted, got int"):
        plot(3)
    with pytest.raises(RecordError, match="got CaseInfo"):
        plot(CaseInfo(id="a", title="", dim=1, shape="interval"))


def test_a_name_in_a_figure_is_escaped_once(whole_record):
    study = replace(whole_record.studies[7], case_id="<b>&")
    svg = figure_to_svg(plot(replace(whole_record, studies=(study,))), key="a/b c", title="", alt="")
    assert "&lt;b&gt;&amp;" in svg
    assert 'id="a-b-c-title"' in svg


def test_drawing_never_imports_pyplot():
    code = (
        "import sys, laplace_verify.report as r, laplace_verify.report.maps as m;"
        "from laplace_verify.measure.results import ErrorMap;"
        "before = 'matplotlib' in sys.modules;"
        "m.error_figure(ErrorMap(size=1, points=[[0.0, 0.0], [1.0, 1.0]], errors=[1.0, 2.0]), None);"
        "print(before, 'matplotlib.pyplot' in sys.modules)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.split() == ["False", "False"]
