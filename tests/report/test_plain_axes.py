"""Plain axes say what matplotlib's own would say, at the same places, and stay inside the figure."""

import numpy as np
import pytest

from laplace_verify.report.figures import convergence_figure, order_figure
from laplace_verify.report.maps import error_figure
from laplace_verify.report.plain_axes import plain_axes
from laplace_verify.report.shape_figures import case_figure
from laplace_verify.report.style import drawing, new_figure
from laplace_verify.report.summary_figures import summary_figure


def drawn_texts(figure):
    """Return text -> lower left corner in parts of the figure, of all that is drawn."""
    with drawing():
        figure.canvas.draw()
        renderer = figure.canvas.get_renderer()
        found = {}
        for axes in figure.axes:
            texts = list(axes.texts)
            if axes.axison:
                for axis in (axes.xaxis, axes.yaxis):
                    low, high = sorted(axis.get_view_interval())
                    ticks = [t for t in axis.get_major_ticks() if low - 1e-9 <= t.get_loc() <= high + 1e-9]
                    texts += [axis.get_label(), *(tick.label1 for tick in ticks)]
            for text in texts:
                if text.get_text() and text.get_visible():
                    box = text.get_window_extent(renderer)
                    found.setdefault(text.get_text(), []).append(np.array([box.x0, box.y0]))
    return {text: np.array(sorted(map(tuple, places))) for text, places in found.items()}


def test_plain_axes_have_the_same_words_at_the_same_places(whole_record):
    study = whole_record.studies[0]
    for draw in (convergence_figure, order_figure):
        own, plain = draw(study), draw(study)
        plain_axes(plain)
        expected, found = drawn_texts(own), drawn_texts(plain)
        assert set(found) == set(expected)
        for text, places in expected.items():
            # 12 pixels at 100 dpi: labels of axes stand where matplotlib would, within a line of type.
            np.testing.assert_allclose(found[text], places, rtol=0, atol=12, err_msg=text)


def test_nothing_is_cut_off_at_the_edge_of_a_figure(whole_record):
    study, info = whole_record.studies[0], whole_record.cases[0]
    solid = replace_points(study.error_map, 3)
    figures = [
        convergence_figure(study),
        order_figure(study),
        summary_figure(whole_record),
        case_figure(info),
        error_figure(study.error_map, info),
        error_figure(solid, None),
    ]
    for figure in figures:
        plain_axes(figure)
        assert cut_off(figure) == []


def test_a_label_beyond_the_edge_would_be_noticed():
    figure = new_figure(2.0, 2.0)
    figure.add_subplot().text(-0.6, 0.5, "sluice gate")
    plain_axes(figure)
    assert cut_off(figure) == ["sluice gate"]


def replace_points(field, dim):
    """Return an error map with as many points of another dimension."""
    points = np.random.default_rng(11).uniform(-1.0, 1.0, (len(field.errors), dim))
    return type(field)(size=field.size, points=points.tolist(), errors=field.errors)


def cut_off(figure):
    """Return the texts that reach over the edge of a figure, legends included."""
    with drawing():
        figure.canvas.draw()
        renderer = figure.canvas.get_renderer()
        width, height = figure.get_size_inches() * figure.dpi
        texts = [text for axes in figure.axes for text in axes.texts]
        texts += [t for axes in figure.axes if axes.get_legend() for t in axes.get_legend().get_texts()]
        boxes = [(text.get_text(), text.get_window_extent(renderer)) for text in texts]
    return [
        text
        for text, box in boxes
        if text and (box.x0 < -0.5 or box.y0 < -0.5 or box.x1 > width + 0.5 or box.y1 > height + 0.5)
    ]


@pytest.mark.parametrize("projection", ["3d", "polar"])
def test_axes_that_are_not_plane_are_left_alone(projection):
    figure = new_figure(2.0, 2.0)
    axes = figure.add_subplot(projection=projection)
    before = axes.get_children()
    plain_axes(figure)
    assert axes.get_children() == before
