"""Ill-posed cases are what they claim to be, and go all the way: words, files, studies, records, reports."""

import math

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.campaign import record_from_json, record_to_json
from laplace_verify.cases import describe
from laplace_verify.problems import case_from_json, case_to_json
from laplace_verify.solvers.samples import FAULTS, five_point, p1_element, seven_point

CASES = {case.id: case for case in lv.catalogue.select(ill_posed=True)}
EVERY = pytest.mark.parametrize("id_", CASES)
CHECKED = [id_ for id_, case in CASES.items() if case.problem.shape.kind != "disc"]
# The solutions of the homogeneous conditions, in formulas of their own.
KERNELS = {
    "rod-amplifying-end": "x - 0.5",
    "plate-amplifying-top": "cos(pi*x/2)*(exp(pi*y/2) - exp(-pi*y/2))/2",
    "disc-amplifying-rim": "x",
}


def flaw(case):
    """Which of the three flaws the case is about, by its id."""
    return case.id.split("-", 1)[1].rsplit("-", 1)[0].split("-")[0]


def test_every_flaw_has_cases_in_several_dimensions():
    assert {"unbalanced", "amplifying"} < {flaw(case) for case in CASES.values()}
    assert {case.dim for case in CASES.values()} == {1, 2, 3}
    assert {len(c.problem.pieces) < len(c.problem.shape.pieces) for c in CASES.values()} == {True, False}


@pytest.mark.parametrize("id_", [id_ for id_ in CASES if "unbalanced" in id_])
def test_fluxes_do_not_add_up_to_zero(id_):
    """No solution by the divergence theorem; the integral by midpoints."""
    total = size = 0.0
    for piece in CASES[id_].problem.pieces:
        points, _, weights = piece.sample(4000)
        total += weights @ piece.data(points)
        size += weights @ np.abs(piece.data(points))
    assert abs(total) > 0.05 * size


@pytest.mark.parametrize("id_", KERNELS)
def test_an_amplifying_surface_sits_at_its_eigenvalue(id_):
    """Some u != 0 satisfies all conditions without data, and the data are not orthogonal to it (Fredholm)."""
    problem = CASES[id_].problem
    kernel = lv.field(KERNELS[id_], dim=problem.dim)
    work = 0.0
    for piece in problem.pieces:
        points, normals, weights = piece.sample(2000)
        u = kernel.value(points)
        if piece.kind == "dirichlet":
            assert np.abs(u).max() < 1e-14
            assert not piece.data(points).any()
            continue
        flux = (normals * (kernel.gradient(points) @ problem.tensor)).sum(axis=1)
        rest = flux + piece.alpha(points) * u
        assert np.abs(rest).max() <= 1e-12 * max(1.0, np.abs(flux).max())  # rounding
        work += weights @ (piece.data(points) * u)
    assert abs(work) > 0.1


@EVERY
def test_there_is_no_exact_solution_and_it_says_so(id_):
    case = CASES[id_]
    for ask in (case.exact.value, case.exact.gradient):
        with pytest.raises(
            lv.FieldError, match="no exact solution to evaluate: the problem is ill-posed, for"
        ):
            ask(case.problem.shape.sample(3, seed=1))
    with pytest.raises(lv.FieldError, match="problem is ill-posed"):
        case.exact.at(tuple(case.problem.shape.sample(1, seed=1)[0]), 30)
    with pytest.raises(lv.ProblemError, match="is ill-posed"):
        case.scaled(length=2)
    assert math.isnan(case.regularity.solution)
    assert not case.quantities


@EVERY
def test_words_say_why(id_):
    case = CASES[id_]
    assert case.statement.startswith("div")
    assert case.statement.endswith(f"Ill-posed: {case.problem.ill_posed}.")
    assert "ill-posed" in case.tags
    assert not {"smooth", "singular"} & case.tags
    text = " ".join(describe(case).split())
    for part in (case.title, case.reading, case.problem.ill_posed, *case.sources):
        assert part in text


@EVERY
def test_json_brings_the_case_back(id_):
    text = case_to_json(CASES[id_])
    again = case_from_json(text, f"{id_}.json")
    assert case_to_json(again) == text
    assert again.problem.ill_posed == CASES[id_].problem.ill_posed
    for piece, twin in zip(CASES[id_].problem.pieces, again.problem.pieces, strict=True):
        points = piece.sample(5)[0]
        np.testing.assert_array_equal(piece.data(points), twin.data(points))


@pytest.mark.parametrize("id_", CHECKED)
def test_samples_that_check_refuse_and_pass(id_):
    solver = seven_point if CASES[id_].dim == 3 else five_point
    study = lv.study(solver, CASES[id_])
    assert study.verdict is lv.Verdict.PASS, str(study)
    assert study.reasons[0].startswith("refused at every size")


@pytest.mark.parametrize("id_", [id_ for id_ in CHECKED if CASES[id_].dim < 3])
def test_the_twin_that_solves_on_regardless_does_not_pass(id_):
    """In 1-D the matrix at the eigenvalue is exactly singular, and the solver breaks over it: an ERROR."""
    study = lv.study(FAULTS["ill-posed input accepted"].adapter, CASES[id_])
    wanted = lv.Verdict.ERROR if id_ == "rod-amplifying-end" else lv.Verdict.FAIL
    assert study.verdict is wanted, str(study)


@EVERY
def test_a_solver_that_does_not_claim_to_check_is_not_judged(id_):
    study = lv.study(p1_element, CASES[id_])
    assert study.verdict is lv.Verdict.NOT_APPLICABLE
    if CASES[id_].dim == 2:
        assert "does not declare that it checks" in study.reasons[0]


def test_selection_tells_them_apart():
    assert {case.id for case in lv.catalogue.select(tags={"ill-posed"})} == set(CASES)
    assert len(lv.catalogue.select(ill_posed=False)) + len(CASES) == len(lv.catalogue)


@pytest.fixture(scope="module")
def record():
    chosen = ["plate-unbalanced-flux", "plate-side-left-open", "plate-saddle"]
    return lv.verify(FAULTS["ill-posed input accepted"].adapter, chosen, principles=False)


def test_record_keeps_why_and_which_piece_lacks_its_condition(record):
    again = record_from_json(record_to_json(record))
    assert again == record
    info = again.case("plate-side-left-open")
    assert "nothing is prescribed" in info.ill_posed
    assert {piece.name: piece.condition for piece in info.pieces}["right"] == "missing"
    assert info.regularity is None
    assert [str(study.verdict) for study in again.studies] == ["FAIL", "FAIL", "PASS"]


@pytest.mark.parametrize("file", ["html", "md", "tex", "csv", "junit"])
def test_every_form_of_report_holds_the_ill_posed_cases(record, tmp_path, file):
    text = lv.write_report(record, tmp_path, formats=(file,))[file].read_text()
    if file != "csv":  # a row a level and norm, of which a refusal has none
        assert "plate-side-left-open" in text
        assert "answered an ill-posed problem" in text
