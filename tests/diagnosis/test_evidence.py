"""Local orders, remarks, polynomials and laws as evidence, each with a twin that must say nothing."""

from dataclasses import replace

import pytest

from laplace_verify.campaign.record import record_from_json, record_to_json
from laplace_verify.cases import catalogue
from laplace_verify.diagnosis import diagnose
from laplace_verify.diagnosis.found_degree import found_degree
from laplace_verify.diagnosis.signs import MEANINGS
from laplace_verify.errors import RecordError
from laplace_verify.measure.floors import floor_kind
from laplace_verify.measure.study import study as run_study
from laplace_verify.measure.verdict import Verdict
from laplace_verify.principles import LAWS, Check, check_principle
from laplace_verify.solvers.samples import FAULTS, five_point

PASS, FAIL, OPEN = Verdict.PASS, Verdict.FAIL, Verdict.INCONCLUSIVE


def falling(start, order):
    return [start * 2.0 ** (-order * k) for k in range(4)]


def local(**orders):
    """Errors near the sides and inside that end at the sizes given, falling at the orders given."""
    return {place: [e * 8.0**order for e in falling(last, order)] for place, (last, order) in orders.items()}


def suspects(record, *studies, **facts):
    return [suspect.text for suspect in diagnose(record(studies, **facts))]


def test_a_slow_and_largest_error_next_to_a_condition_is_a_place(study, record):
    near_top = local(top=(0.1, 1.0), left=(0.01, 2.0), interior=(0.08, 1.9))
    texts = suspects(
        record,
        *(study(f"f{k}", FAIL, {}, observed=1.6, local=near_top) for k in range(3)),
        study("p", PASS, {}),
    )
    assert texts[0] == (
        "The largest error lies next to pieces with a Robin condition in all 3 failing cases and falls at "
        "order 1.0 there, at 1.9 inside, at 2.0 next to other pieces"
    )


def test_a_mistake_in_the_equation_inside_is_told_from_one_at_the_boundary(study, record):
    inside = local(top=(0.05, 1.0), left=(0.04, 1.0), interior=(0.1, 1.0))
    texts = suspects(
        record,
        *(study(f"f{k}", FAIL, {}, observed=1.0, local=inside) for k in range(3)),
        study("p", PASS, {}),
    )
    (place,) = [text for text in texts if text.startswith("The largest error")]
    assert "lies inside, away from all pieces in all 3 failing cases" in place
    assert place.endswith("look at the equation inside, or at what every case uses")


def test_places_whose_error_falls_as_it_should_are_none(study, record):
    sound = local(top=(0.1, 2.0), left=(0.01, 3.0), interior=(0.08, 2.0))
    texts = suspects(
        record, *(study(f"f{k}", FAIL, {}, observed=1.6, local=sound) for k in range(3)), study("p", PASS, {})
    )
    assert not [text for text in texts if text.startswith("The largest error")]


def test_nothing_is_said_of_places_where_only_the_inside_is_measured_or_errors_grow(study, record):
    passing = study("p", PASS, {})
    for errors in (local(interior=(0.1, 1.0)), local(top=(0.9, -3.0), interior=(0.1, -3.0))):
        failing = [study(f"f{k}", FAIL, {}, observed=1.0, local=errors) for k in range(3)]
        assert not [text for text in suspects(record, *failing, passing) if "largest error lies" in text]


def test_neumann_and_robin_pieces_count_together_where_each_shows_in_some_cases(study, record):
    at_top, at_side = (
        local(**{place: (0.1, 1.0)}, interior=(0.05, 0.9)) for place in ("top", "right")
    )  # Robin at the top, Neumann on the right
    failing = [study(f"f{k}", FAIL, {}, observed=1.0, local=(at_top, at_side)[k % 2]) for k in range(4)]
    texts = suspects(record, *failing, study("p", PASS, {}), conditions={"right": "neumann"})
    places = [text for text in texts if text.startswith("The largest error")]
    assert "next to pieces with a Neumann or Robin condition in all 4 failing cases" in places[0]
    alone = [study(f"f{k}", FAIL, {}, observed=1.0, local=at_top) for k in range(4)]
    assert not [text for text in suspects(record, *alone, study("p", PASS, {})) if "Neumann or" in text]


def polynomial(degree, **features):
    flags = {name.replace("_", " "): value for name, value in features.items()}
    return {"harmonic polynomial": float(degree), **flags}


def test_the_degree_that_comes_out_exact_is_found(study):
    dirichlet = {"only Dirichlet conditions": True}
    studies = [
        study(f"d{k}", PASS, polynomial(k) | dirichlet, nodal=1e-15 if k < 4 else 1e-4, local=local())
        for k in range(1, 6)
    ]
    assert found_degree(studies) == 3
    assert found_degree(studies[3:]) is None
    assert found_degree([]) is None


@pytest.mark.parametrize(
    ("feature", "miss", "named"),
    [
        ("Neumann condition", 1e-5, True),
        ("Neumann condition", 1e-15, False),
        ("Robin condition", 1e-5, False),  # sound schemes may integrate alpha u by a rule that is not exact
        ("curved boundary", 1e-5, False),
    ],
)
def test_a_polynomial_missed_under_another_condition_is_a_suspect_though_all_pass(
    study, record, feature, miss, named
):
    exact = [
        study(f"d{k}", PASS, polynomial(1) | {"only Dirichlet conditions": True}, nodal=1e-15)
        for k in range(2)
    ]
    texts = suspects(record, *exact, study("n", PASS, polynomial(1) | {feature: True}, nodal=miss))
    words = (
        "Harmonic polynomials of degree up to 1 come out to round-off with Dirichlet data, but not in 1 case"
    )
    assert any(text.startswith(words) and feature in text for text in texts) == named


def test_higher_degrees_are_hints_where_something_fails(study, record):
    dirichlet = study("d", PASS, polynomial(3) | {"only Dirichlet conditions": True}, nodal=1e-15)
    flux = polynomial(3) | {"Neumann condition": True}
    assert suspects(record, dirichlet, study("n", PASS, flux, nodal=1e-4)) == []
    texts = suspects(record, dirichlet, study("n", FAIL, flux, nodal=1e-4, observed=1.6))
    assert any("not in 1 case with other data" in text for text in texts)


@pytest.mark.parametrize("relative", [1e-7, 1e-5, 1e-14])
def test_every_named_floor_is_a_sign(study, record, relative):
    found = suspects(record, study("o", OPEN, {}, signs=[floor_kind(relative)]), study("p", PASS, {}))
    assert "no case fails, remarked in 1 of the 2 cases" in found[0]


def test_a_remark_where_nothing_fails_names_what_the_remarked_cases_share(study, record):
    signs = ["large error constant"]
    remarked = [study(f"r{k}", PASS, {"Robin condition": True}, signs=signs) for k in range(3)]
    first = suspects(record, *remarked, *(study(f"p{k}", PASS, {}) for k in range(6)))[0]
    assert first.startswith("The error constant is far above that of interpolation")
    assert first.endswith("Robin condition: all 3 remarked cases have it, none of the 6 others")
    # two of three could be chance
    assert "Robin" not in suspects(record, *remarked[:2], study("p", PASS, {}))[0]
    assert suspects(record, study("q", PASS, {}, remarks=["the planned sizes left the verdict open"])) == []


def test_an_iteration_that_stops_early_is_weighed_beside_failing_cases(study, record):
    failing = [study(f"f{k}", FAIL, {}, observed=0.0, signs=["early stop"]) for k in range(2)]
    assert suspects(record, *failing, study("p", PASS, {}))[0].startswith("The iteration stops early")
    assert not any(meaning.cause for meaning in MEANINGS if "large error constant" in meaning.kinds)


def test_a_cause_that_open_cases_name_counts_beside_failing_ones(study, record):
    open_ = [study(f"o{k}", OPEN, {}, signs=["single-precision floor"]) for k in range(3)]
    failing, passing = study("f", FAIL, {}, observed=0.0), study("p", PASS, {})
    first = suspects(record, failing, *open_, passing)[0]
    assert first.startswith("The error stops at the size of single precision")
    assert "(3 of the 4 failing or open cases)" in first
    assert "single precision" not in suspects(record, failing, study("o", OPEN, {}), passing)[0]


def test_nodes_that_converge_faster_than_what_lies_between_point_to_the_evaluation(study, record):
    failing = [study(f"f{k}", FAIL, {}, observed=1.0, signs=["limited between nodes"]) for k in range(2)]
    assert "how values are evaluated between points" in suspects(record, *failing, study("p", PASS, {}))[0]
    assert suspects(record, study("p", PASS, {}, signs=["limited between nodes"])) == []


def test_floors_of_one_solver_are_named_by_the_kind_that_most_have(study, record):
    single = [study(f"s{k}", OPEN, {}, signs=["single-precision floor"]) for k in range(2)]
    loose = study("l", OPEN, {}, signs=["loose floor"])
    found = suspects(record, *single, loose, study("p", PASS, {}))
    assert "single precision" in found[0]
    assert "remarked in 3 of the 4 cases" in found[0]
    assert not [text for text in found if "loose tolerance" in text]


def test_cases_that_pass_by_a_mere_decrease_are_no_contrast(study, record):
    failing = [study(f"f{k}", FAIL, {"slit": True}, observed=1.0) for k in range(5)]
    singular = study("p", PASS, {})
    assert any("slit" in text for text in suspects(record, *failing, singular))
    lenient = replace(
        singular, orders={"max": replace(singular.orders["max"], expected="decrease", observed=1.0)}
    )
    texts = suspects(record, *failing, lenient)
    assert not any("slit:" in text for text in texts)
    assert any(text.startswith("None of the cases is passing to compare with") for text in texts)


def test_cases_that_pass_at_a_reduced_order_are_a_contrast_only_where_one_of_them_fails(study, record):
    def reduced(name, verdict):
        found = study(name, verdict, {"singular solution": True}, observed=0.7)
        return replace(found, orders={"max": replace(found.orders["max"], expected=2 / 3)})

    failing = [study(f"f{k}", FAIL, {"slit": True}, observed=1.0) for k in range(5)]
    passing = reduced("p", PASS)
    assert not any("slit:" in text for text in suspects(record, *failing, passing))
    texts = suspects(record, *failing, reduced("g", FAIL), passing, study("q", PASS, {}))
    assert any("slit:" in text for text in texts)


def test_smoothness_of_the_solution_is_no_cause(study, record):
    failing = [study(f"f{k}", FAIL, {"tag smooth": True, "slit": True}, observed=1.0) for k in range(5)]
    texts = suspects(record, *failing, study("p", PASS, {}))
    assert any("slit" in text for text in texts)
    assert not any("smooth" in text for text in texts)


def test_what_open_cases_share_is_said_where_nothing_fails(study, record):
    open_ = [study(f"o{k}", OPEN, {"slit": True}) for k in range(2)]
    found = suspects(record, *open_, study("p", PASS, {"slit": False}))
    assert found == ["slit: both open cases have it, none of the passing"]


def test_a_law_says_what_its_simplest_problem_needs(study, record):
    check = check_principle(FAULTS["flux for gradient"].adapter, "affine fields reproduced")
    (text,) = suspects(record, study("p", PASS, {}), checks=[check])
    assert "the simplest problem that shows it has Neumann condition, conductivity other than 1" in text
    kept = check_principle(five_point, "affine fields reproduced")
    assert suspects(record, study("p", PASS, {}), checks=[kept]) == []


@pytest.mark.parametrize("law", LAWS)
def test_every_law_says_what_breaking_it_is_typical_of(record, law):
    (suspect,) = diagnose(record([], checks=[Check(law=law, verdict=FAIL, reason="broken")]))
    assert "typical of" in suspect.text


def test_a_law_without_a_case_has_none(record):
    broken = Check(law="mean value", verdict=FAIL, reason="broken")
    (suspect,) = diagnose(record([], checks=[broken]))
    assert suspect.case_id == ""
    assert suspect.text == "The law 'mean value' is broken; typical of the equation inside"


def test_a_record_keeps_the_kind_of_its_remarks_and_one_without_kinds_is_read(study, record):
    failing = study("f", FAIL, {}, observed=0.0, signs=["early stop"])
    written = record_to_json(record([failing], checks=[Check(law="mean value", verdict=FAIL)]))
    assert record_from_json(written).studies[0].signs == failing.signs
    older = written.replace(b'"signs"', b'"unknown"').replace(b'"features"', b'"unknown"')
    assert record_from_json(older).studies[0].signs == []
    with pytest.raises(RecordError, match=r"studies\[.*\]\.signs\[.*\]\.kind"):
        record_from_json(written.replace(b'"early stop"', b'"early bird"', 1))


def test_remarks_of_a_study_have_a_kind():
    found = run_study(FAULTS["values in single precision"].adapter, catalogue["rod-two-temperatures"])
    (sign,) = [sign for sign in found.signs if sign.kind == "single-precision floor"][:1]
    assert sign.text in [*found.reasons, *found.remarks]
    assert run_study(five_point, catalogue["rod-two-temperatures"]).signs == []
