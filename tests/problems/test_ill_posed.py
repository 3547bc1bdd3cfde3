"""Ill-posed problems: one of three flaws is let through if the reason is given, and only then."""

import json
import math

import pytest

import laplace_verify as lv
from laplace_verify.errors import RecordError
from laplace_verify.problems import case_from_json, case_to_json, ill_posed_case

PLATE = lv.Rectangle((0, 0), (2, 1))
FIXED = {name: lv.dirichlet(0) for name in ("left", "right", "bottom", "top")}
FLUXES = {name: lv.neumann(1) for name in FIXED}
FLAWS = {
    "unbalanced": FLUXES,
    "negative alpha": {**FIXED, "top": lv.robin(-math.pi / 2, 1)},
    "negative alpha in places": {**FIXED, "top": lv.robin("x - 1", 1)},
    "missing": {name: FIXED[name] for name in ("left", "bottom", "top")},
}


@pytest.mark.parametrize("flaw", FLAWS)
def test_a_flaw_passes_with_its_reason_and_is_refused_without(flaw):
    posed = lv.problem(PLATE, FLAWS[flaw], ill_posed="on purpose")
    assert posed.ill_posed == "on purpose"
    refusals = r"zero net flux|must be >= 0|needs a condition; missing: right"
    with pytest.raises(lv.ProblemError, match=refusals):
        lv.problem(PLATE, FLAWS[flaw])


def test_what_the_solver_sees():
    missing = lv.problem(PLATE, FLAWS["missing"], ill_posed="on purpose")
    assert set(missing.shape.pieces.names) - set(missing.pieces.names) == {"right"}
    negative = lv.problem(PLATE, FLAWS["negative alpha"], ill_posed="on purpose")
    assert negative.pieces["top"].alpha([[1.0, 1.0]]).tolist() == [-math.pi / 2]
    assert negative.constant is None
    assert lv.problem(PLATE, FLUXES, ill_posed="on purpose").constant == ("mean", 0.0)
    assert lv.problem(PLATE, FIXED).ill_posed is None


@pytest.mark.parametrize(
    ("shape", "conditions", "why", "message"),
    [
        (PLATE, FIXED, "it is not", "every piece has a condition"),
        (PLATE, {name: lv.neumann(0) for name in FIXED}, "it is not", "the flux balances"),
        (PLATE, FLUXES, "  ", "must say in words"),
        (PLATE, FLUXES, True, "must say in words"),
        (lv.Exterior(lv.Disc((0, 0), 1)), {}, "nothing given", "posed on bounded shapes"),
    ],
    ids=["sound", "balanced", "blank", "no text", "unbounded"],
)
def test_the_claim_is_checked(shape, conditions, why, message):
    with pytest.raises(lv.ProblemError, match=message):
        lv.problem(shape, conditions, ill_posed=why, at_infinity=None if shape.bounded else "decay")


def test_a_case_with_a_solution_is_never_ill_posed():
    with pytest.raises(lv.ProblemError, match=r"alpha must be >= 0, got -1\.0"):
        lv.case(PLATE, {"top": lv.robin(-1.0)}, lv.fields.affine((1, 0)))
    with pytest.raises(lv.ProblemError, match="well posed"):
        ill_posed_case(lv.problem(PLATE, FIXED))


@pytest.mark.parametrize(
    ("field", "value", "message"),
    [
        ("ill_posed", "  ", "must say in words"),
        ("exact", {"formula": "x", "basis": "closed form", "field": {}}, "exact must be null"),
        ("conditions", {"left": {"kind": "dirichlet"}}, "has no data"),
    ],
)
def test_a_file_of_an_ill_posed_case_is_checked(field, value, message):
    content = json.loads(case_to_json(ill_posed_case(lv.problem(PLATE, FLUXES, ill_posed="on purpose"))))
    text = json.dumps({**content, field: value}).encode()
    with pytest.raises(RecordError, match=message):
        case_from_json(text)


def test_a_file_without_a_solution_must_say_that_it_is_ill_posed():
    content = json.loads(case_to_json(ill_posed_case(lv.problem(PLATE, FLUXES, ill_posed="on purpose"))))
    del content["ill_posed"]
    with pytest.raises(RecordError, match="exact is null, which it may be in ill-posed problems only"):
        case_from_json(json.dumps(content).encode())


def test_data_that_are_functions_cannot_be_written():
    posed = lv.problem(PLATE, {"left": lv.dirichlet(lambda x, y: x + y)}, ill_posed="on purpose")
    with pytest.raises(RecordError, match="data of piece 'left' are a function"):
        case_to_json(ill_posed_case(posed))
