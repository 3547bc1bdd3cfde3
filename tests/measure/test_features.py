"""What is said of a case in words: each feature on a case that has it and on one that lacks it."""

import pytest

from laplace_verify import fields
from laplace_verify.cases import catalogue
from laplace_verify.geometry import Annulus, Disc, Rectangle
from laplace_verify.measure.exact import Exact
from laplace_verify.measure.features import features
from laplace_verify.measure.windows import through_window
from laplace_verify.problems import case, robin

SQUARE = Rectangle((0, 0), (1, 1))
SADDLE = fields.affine((2.0, -1.0))


def of(shape, kinds, field):
    found = case(shape, kinds, field)
    return features(found, Exact(found))


def stored(id_):
    return features(catalogue[id_], Exact(catalogue[id_]))


@pytest.mark.parametrize(
    ("corner", "words"),
    [((1, 1), "1"), ((1.5, 1), "below 2"), ((1, 3), "2 to 5"), ((1, 0.2), "5 or more")],
)
def test_the_ratio_of_the_sides_is_a_word(corner, words):
    found = of(Rectangle((0, 0), corner), {}, SADDLE)
    assert found["aspect ratio"] == words
    assert found["unequal extents"] is (words != "1")


@pytest.mark.parametrize(
    ("side", "end"), [("left", "low"), ("bottom", "low"), ("right", "high"), ("top", "high")]
)
def test_conditions_are_told_apart_by_the_end_of_the_axis(side, end):
    found = of(SQUARE, {side: "neumann"}, SADDLE)
    ends = {"low": "low end of an axis (left, bottom)", "high": "high end of an axis (right, top)"}
    assert [where for where, words in ends.items() if found.get(f"Neumann condition at the {words}")] == [end]


def test_unbounded_domains_and_what_is_asked_for_at_infinity_are_named():
    case_ = catalogue["pile-in-tidal-stream"]
    found = features(through_window(case_), Exact(through_window(case_)))
    assert (found["unbounded domain"], found["behaviour at infinity"]) == (True, "flow")
    assert found["shape"] == case_.problem.shape.kind
    bounded = of(SQUARE, {}, SADDLE)
    assert (bounded["unbounded domain"], bounded["behaviour at infinity"]) == (False, None)


def test_neumann_and_robin_conditions_have_a_name_together():
    assert of(SQUARE, {"left": "neumann"}, SADDLE)["Neumann or Robin condition"] is True
    assert of(SQUARE, {"left": robin(1.0)}, SADDLE)["Neumann or Robin condition"] is True
    assert of(SQUARE, {}, SADDLE)["Neumann or Robin condition"] is False


def test_conditions_on_curves_are_told_from_those_on_sides():
    assert of(Disc((0, 0), 1), {}, SADDLE)["Dirichlet condition on a curved piece"] is True
    assert "Dirichlet condition on a curved piece" not in of(SQUARE, {}, SADDLE)


@pytest.mark.parametrize(
    ("feature", "having", "lacking"),
    [
        ("inner boundary", Annulus((0, 0), 1, 2), Disc((0, 0), 2)),
        ("corner", SQUARE, Disc((0, 0), 2)),
        ("boundary across the lines of a rectangular grid", Disc((0, 0), 2), SQUARE),
    ],
)
def test_shapes_are_told_apart(feature, having, lacking):
    assert of(having, {}, SADDLE)[feature] is True
    assert of(lacking, {}, SADDLE)[feature] is False


def test_slits_have_their_feature():
    assert stored("slit-plate-smooth-data")["slit"] is True
    assert stored("l-shape-smooth")["slit"] is False


@pytest.mark.parametrize(
    ("slopes", "changes"), [((1.0, 1.0), False), ((2.0, -1.0), True)], ids=["x + y", "2 x - y"]
)
def test_what_an_exchange_of_axes_changes(slopes, changes):
    found = of(SQUARE, {}, fields.affine(slopes))
    assert found["solution that an exchange of x and y changes"] is changes


def test_in_one_dimension_nothing_is_said_of_an_exchange_or_a_ratio():
    found = stored("rod-two-temperatures")
    assert found["solution that an exchange of x and y changes"] is None
    assert found["aspect ratio"] is None


@pytest.mark.parametrize(("slopes", "last"), [((0.0, 1.0), True), ((1.0, 0.0), False)])
def test_data_are_told_to_vanish_side_by_side(slopes, last):
    found = of(SQUARE, {"bottom": "neumann", "top": "neumann"}, fields.affine(slopes))
    assert found["nonzero data on the last Neumann piece"] is last
    assert found["nonzero Neumann data"] is last
    assert found["Neumann data that vary along a piece"] is False
    assert found["second normal derivative on a Neumann piece"] is False


def test_varying_data_and_a_bent_solution_on_a_flux_piece_are_seen():
    found = of(SQUARE, {"top": "neumann"}, fields.polynomial(3))
    assert found["Neumann data that vary along a piece"] is True
    assert found["second normal derivative on a Neumann piece"] is True
