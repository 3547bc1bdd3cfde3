"""The diagnosis names what sets failing cases apart, and names nothing where nothing does."""

import math
from dataclasses import replace

import numpy as np
import pytest

from laplace_verify.diagnosis import diagnose
from laplace_verify.measure.results import ErrorMap
from laplace_verify.measure.verdict import Verdict


def test_nothing_is_suspected_where_nothing_fails(study, record):
    passing = [study(f"p{k}", Verdict.PASS, {"Neumann condition": True}) for k in range(3)]
    undecided = study("u", Verdict.INCONCLUSIVE, {"tensor": True})
    assert diagnose(record([*passing, undecided])) == []
    assert diagnose(record([])) == []


def test_a_condition_that_only_failing_cases_have_comes_first_with_its_counts(study, record):
    failing = [
        study(
            f"f{k}", Verdict.FAIL, {"Neumann condition": True, "shape": "disc" if k else "box"}, observed=1.6
        )
        for k in range(6)
    ]
    passing = [
        study(f"p{k}", Verdict.PASS, {"Neumann condition": False, "shape": "disc" if k % 2 else "box"})
        for k in range(14)
    ]
    first, *others = diagnose(record(failing + passing))
    assert first.text == "Neumann condition: all 6 failing cases have it, none of the 14 passing"
    assert first.score == 1.0
    # Fisher's exact test by hand: one table of C(20, 6) = 38760 is as uneven.
    assert f"{1 / math.comb(20, 6):.2g}" in first.evidence
    assert all(
        "shape: box" not in other.text for other in others
    )  # one failing case in six, half of the passing


def test_a_feature_that_passing_cases_have_as_often_is_no_suspect(study, record):
    failing = [study(f"f{k}", Verdict.FAIL, {"smooth": True}, observed=1.6) for k in range(3)]
    passing = [study(f"p{k}", Verdict.PASS, {"smooth": True}) for k in range(3)]
    assert all("smooth" not in suspect.text for suspect in diagnose(record(failing + passing)))


def test_features_of_the_same_cases_are_named_together_general_one_first(study, record):
    failing = [study(f"f{k}", Verdict.FAIL, {"tensor": True, "a tag": True}, observed=1.6) for k in range(2)]
    passing = [study(f"p{k}", Verdict.PASS, {"tensor": False}) for k in range(2)]
    first = diagnose(record(failing + passing))[0]
    assert first.text.startswith("tensor: both failing cases have it")
    assert "a tag: these cases cannot tell them apart" in first.text


def test_two_features_are_named_together_when_neither_explains_alone(study, record):
    both = {"Neumann condition": True, "tensor": True}
    failing = [study(f"f{k}", Verdict.FAIL, both, observed=1.6) for k in range(3)]
    passing = [study(f"n{k}", Verdict.PASS, {"Neumann condition": True}) for k in range(3)]
    passing += [study(f"t{k}", Verdict.PASS, {"tensor": True}) for k in range(3)]
    first = diagnose(record(failing + passing))[0]
    assert first.text.startswith(
        "Neumann condition together with tensor: all 3 failing cases have it, none of the 6"
    )


def test_known_deviations_are_not_explained(study, record):
    known = study("old", Verdict.FAIL, {"tensor": True}, observed=1.0, known="first order by design")
    assert diagnose(record([known, study("p", Verdict.PASS, {})])) == []


def test_smallest_case_has_lowest_dimension_then_fewest_unknowns(study, record):
    failing = [
        study("solid", Verdict.FAIL, {"x": True}, unknowns=5),
        study("large", Verdict.FAIL, {"x": True}, unknowns=90),
        study("small", Verdict.FAIL, {"x": True}, unknowns=10),
    ]
    found = diagnose(record([*failing, study("p", Verdict.PASS, {})], dims={"solid": 3}))
    assert {suspect.case_id for suspect in found} == {"small"}


def test_what_all_failing_cases_have_comes_before_what_no_passing_case_has(study, record):
    failing = [study(f"f{k}", Verdict.FAIL, {"often": True, "seldom": k < 6}) for k in range(9)]
    passing = [study(f"p{k}", Verdict.PASS, {"often": k < 2, "seldom": False}) for k in range(5)]
    assert diagnose(record(failing + passing))[0].text.startswith("often")


def test_where_most_cases_fail_and_no_feature_stands_out_the_suspect_is_what_all_use(study, record):
    failing = [study(f"f{k}", Verdict.FAIL, {"odd": k % 2 == 1}) for k in range(8)]
    passing = [study(f"p{k}", Verdict.PASS, {"odd": k % 2 == 1}) for k in range(3)]
    assert any("what every case uses" in suspect.text for suspect in diagnose(record(failing + passing)))
    assert not any("every case" in suspect.text for suspect in diagnose(record(failing[:2] + passing)))


@pytest.mark.parametrize(
    ("observed", "norm", "words"),
    [
        (1.02, "max", "lose one order"),
        (0.01, "max", "wrong limit"),
        (1.5, "H1-semi", "gradient or flux only"),
    ],
)
def test_manner_of_failing_is_named(study, record, observed, norm, words):
    failing = [study(f"f{k}", Verdict.FAIL, {}, observed=observed, norm=norm) for k in range(3)]
    found = diagnose(record([*failing, study("p", Verdict.PASS, {})]))
    assert words in found[0].text


@pytest.mark.parametrize(
    ("pairs", "words"),
    [([None, 0.1, 0.0], "wrong limit"), ([5.0, 2.1, 1.9], "like a power of h only")],
)
def test_manner_of_failing_is_told_from_levels_where_a_rate_is_declared(study, record, pairs, words):
    def exponential(name):
        found = study(name, Verdict.FAIL, {}, observed=0.4)
        order = replace(found.orders["max"], expected="exponential", observed=None, pairs=pairs)
        return replace(found, orders={"max": order})

    found = diagnose(record([*(exponential(f"f{k}") for k in range(3)), study("p", Verdict.PASS, {})]))
    assert words in found[0].text


@pytest.mark.parametrize(
    ("relative", "named"),
    [
        ([4e-3, 2e-3, 4e-3, 1e-2], True),
        ([4e-3, 1e-3, 3e-4, 3e-4], False),  # a floor
        ([0.5, 0.5, 0.5, 0.5], False),  # a wrong limit
        ([0.4, 0.8, 1.6, 3.2], False),  # unstable from the start
        ([1e-15, 2e-15, 4e-15, 8e-15], False),  # round-off
    ],
)
def test_errors_that_fall_and_grow_again_point_to_the_iteration(study, record, relative, named):
    failing = [
        study(f"f{k}", Verdict.FAIL, {"wide": True}, observed=0.0, relative=relative) for k in range(5)
    ]
    easy = [study("e", Verdict.FAIL, {"wide": True}, observed=0.0, relative=[4e-3, 1e-3, 3e-4, 1e-4])]
    found = diagnose(record([*failing, *easy, *(study(f"p{k}", Verdict.PASS, {}) for k in range(9))]))
    assert any("the iteration stops early (its tolerance" in suspect.text for suspect in found) == named


def test_a_single_failing_case_is_spoken_of_in_the_singular(study, record):
    found = diagnose(record([study("f", Verdict.FAIL, {}, observed=0.0), study("p", Verdict.PASS, {})]))
    assert found[0].text.startswith("The only failing case does not get smaller errors by refinement: it")


@pytest.mark.parametrize(("decay", "named"), [(8.0, True), (0.0, False)])
def test_errors_crowded_at_a_condition_are_located_and_even_ones_are_not(study, record, decay, named):
    points = np.random.default_rng(11).uniform(0.0, 1.0, (600, 2))
    errors = np.exp(decay * (points[:, 1] - 1)) * (1 + 0.1 * np.sin(37 * points[:, 0]))
    crowded = ErrorMap(size=8, points=points.tolist(), errors=errors.tolist())
    failing = [study(f"f{k}", Verdict.FAIL, {}, observed=1.5, error_map=crowded) for k in range(2)]
    texts = [suspect.text for suspect in diagnose(record([*failing, study("p", Verdict.PASS, {})]))]
    assert any("next to pieces with a Robin condition" in text for text in texts) == named


def test_without_a_passing_case_the_common_ground_is_suspected(study, record):
    found = diagnose(record([study(f"f{k}", Verdict.FAIL, {"x": True}, observed=1.6) for k in range(2)]))
    assert found[0].text.startswith("None of the cases is passing to compare with")


def test_broken_cases_are_explained_apart_from_failing_ones(study, record):
    broken = [study(f"b{k}", Verdict.ERROR, {"shape": "disc"}) for k in range(2)]
    others = [
        study("p", Verdict.PASS, {"shape": "box"}),
        study("f", Verdict.FAIL, {"tensor": True}, observed=1.6),
    ]
    texts = [suspect.text for suspect in diagnose(record([*broken, *others]))]
    assert "shape: disc: both broken cases have it, none of the 2 completed" in texts
    assert any(text.startswith("tensor: ") for text in texts)


def test_same_record_same_suspects(study, record):
    failing = [study(f"f{k}", Verdict.FAIL, {"a": True, "b": True, "c": "x"}, observed=1.0) for k in range(3)]
    one = record([*failing, study("p", Verdict.PASS, {"b": True})])
    assert diagnose(one) == diagnose(one)
