"""Statements, descriptions and tags say what the cases are."""

import re

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.cases import describe
from laplace_verify.cases.statement import conditions_in_words, region_in_words, statement_of
from laplace_verify.cases.tags import derived_tags
from laplace_verify.problems import Condition, robin


@pytest.mark.parametrize("id_", [case.id for case in lv.catalogue.select(ill_posed=False)])
def test_description_holds_everything_a_reader_needs(id_):
    case = lv.catalogue[id_]
    text = " ".join(describe(case).split())
    for needed in [
        case.id, case.title, case.statement, case.reading, case.exact.formula,
        *case.sources, *case.quantities, *case.problem.pieces.names, *sorted(case.tags),
    ]:  # fmt: skip
        assert " ".join(needed.split()) in text


def test_description_wraps_its_lines():
    assert max(map(len, describe(lv.catalogue["wall-mixed-conditions"]).splitlines())) <= 110


def test_statement_names_equation_region_conditions_solution():
    assert lv.catalogue["wall-mixed-conditions"].statement == (
        "div(K grad u) = 0 with K = 2.5 in the rectangle 0 < x < 1.6, 0 < y < 0.9; n . K grad u given on "
        "left; u given on right, bottom; n . K grad u + 3 u given on top. Solution u = cos(2 x - 4/5) "
        "e^(2 y)."
    )


def test_statement_of_a_pure_flux_problem_names_the_level():
    assert "; the mean of u given." in lv.catalogue["plate-pure-flux"].statement


@pytest.mark.parametrize(
    ("shape", "words"),
    [
        (lv.Annulus((0, 0), 1, 3, (0.5, 0)), "the disc of radius 3 about (0, 0) without the disc of radius 1 "
         "about (0.5, 0)"),
        (lv.Sector(1, np.pi / 2), "the sector 0 < r < 1, 0 < theta < 90 degrees"),
        (lv.LShape(2), "the L-shape (-2, 2)^2 without its quadrant x > 0, y < 0"),
        (lv.Cylinder(2, -1, 1), "the cylinder x^2 + y^2 < 2^2, -1 < z < 1"),
        (lv.Polygon([(0, 0), (1, 0), (0, 1)]), "the polygon with corners (0, 0), (1, 0), (0, 1)"),
    ],
)  # fmt: skip
def test_regions_read_well(shape, words):
    assert region_in_words(shape) == words


def test_function_as_coefficient_is_called_alpha():
    assert conditions_in_words({"top": robin(lambda x, y: x + y), "left": Condition(kind="neumann")}) == [
        "n . K grad u + alpha u given on top",
        "n . K grad u given on left",
    ]


def test_solutions_written_in_words_are_the_exact_fields():
    """Formulas of the statements in plain arithmetic, evaluated, against the fields they describe."""
    checked = 0
    for case in lv.catalogue.select(ill_posed=False):
        formula = case.statement.partition("Solution u = ")[2].partition(". ")[0].rstrip(".")
        if case.problem.coordinates != "cartesian":  # r and z are the first and second coordinate
            formula = re.sub(r"\bz\b", "y", re.sub(r"\br\b", "x", formula))
        plain = _arithmetic(formula)
        if plain is None:
            continue
        points = (case.window or case.problem.shape).sample(5, seed=3)
        found = lv.field(plain, dim=case.dim).value(points)
        assert np.allclose(found, case.exact.value(points), rtol=1e-12, atol=1e-12), case.id
        checked += 1
    assert checked >= 25


def _arithmetic(formula):
    """Return a formula of a statement for the formula reader, None if it is not plain arithmetic."""
    words = (
        r"Re |Im | in |K|sum|series|theta|about|harmonic|H\d|X|layer|on the|solution|P_|angle|\|w|/t\b|"
        r"\b[psgV]\b|, "
    )
    if re.search(words, formula):
        return None
    text = formula.replace("e^(", "exp(").replace("^", "**")
    text = re.sub(r"(\d|\)) (?=[a-z(])", r"\1*", text)  # 2 x, (...) (...)
    text = re.sub(r"\bpi (?=[a-z(])", "pi*", text)  # 2 pi x
    text = re.sub(r"\b([xyz]|\d|[xyz]\*\*\d) (?=[a-z(])", r"\1*", text)
    text = re.sub(r"\b(cos|sin|cosh|log|sqrt) (\w+)", r"\1(\2)", text)
    return re.sub(r"(\*\*\d|\)) (?=[xyz(])", r"\1*", text)


def test_tags_are_facts():
    lying = lv.case(lv.LShape(1.0), {"side-1": "neumann"}, lv.fields.polynomial(2), tags=("singular",))
    assert derived_tags(lying) == {"dirichlet", "neumann", "mixed", "smooth", "re-entrant"}


def test_statement_of_a_users_own_case():
    case = lv.case(lv.Disc((0, 0), 2), {}, lv.fields.polynomial(2))
    assert statement_of(case, "x^2 - y^2", "Well.") == (
        "div grad u = 0 in the disc of radius 2 about (0, 0); u given on rim. Solution u = x^2 - y^2. Well."
    )
