"""A campaign: one record of everything, whatever single studies do, the same with any number of workers."""

import os
import signal
from concurrent.futures import ProcessPoolExecutor, ThreadPoolExecutor
from dataclasses import replace

import pytest

import laplace_verify as lv
from laplace_verify.campaign import merged_record, partial_record, record_from_json, record_to_json
from laplace_verify.solvers.samples import five_point

GRID = {
    "kind": "finite difference",
    "order": 2,
    "dims": {2},
    "shapes": {"rectangle"},
    "conditions": {"dirichlet"},
}
CASES = ["rod-fixed-and-flux", "plate-saddle", "disc-fourier"]


def timeless(record):
    """Return the record without what may differ from run to run."""
    studies = tuple(
        replace(study, levels=[replace(level, seconds=0.0) for level in study.levels])
        for study in record.studies
    )
    return replace(record, studies=studies, started="", finished="")


def test_a_record_holds_a_study_for_every_case_and_words_for_every_study():
    record = lv.verify(five_point, CASES, principles=False)
    assert [study.case_id for study in record.studies] == CASES
    assert [str(study.verdict) for study in record.studies] == ["PASS", "PASS", "NOT_APPLICABLE"]
    assert [info.id for info in record.cases] == CASES
    assert record.solver.source_sha256 is not None
    assert record.checks == ()


def test_workers_and_executors_change_nothing_but_times():
    one = timeless(lv.verify(five_point, CASES, principles=False))
    assert timeless(lv.verify(five_point, CASES, principles=False, workers=3)) == one
    with ThreadPoolExecutor(2) as executor:
        assert timeless(lv.verify(five_point, CASES, principles=False, executor=executor)) == one


def test_another_seed_draws_other_points():
    one, other = (lv.verify(five_point, ["plate-wave"], principles=False, seed=seed) for seed in (0, 1))
    assert one.studies[0].error_map != other.studies[0].error_map


def test_a_solver_that_kills_its_process_harms_one_study_only():
    def solve(problem, n):
        if problem.name == "plate-saddle":
            os.kill(os.getpid(), signal.SIGKILL)
        return five_point(problem, n)

    fragile = lv.adapt(
        solve,
        name="fragile",
        kind="finite difference",
        order=2,
        dims={1, 2},
        shapes={"interval", "rectangle"},
    )
    record = lv.verify(fragile, ["plate-saddle", "plate-wave"], principles=False)
    assert [str(study.verdict) for study in record.studies] == ["ERROR", "PASS"]
    assert "SIGKILL" in record.studies[0].reasons[0]


def test_progress_is_told_of_every_result():
    seen = []
    lv.verify(five_point, CASES, principles=False, progress=seen.append)
    assert sorted(study.case_id for study in seen) == sorted(CASES)


def test_laws_are_checked_too():
    record = lv.verify(five_point, ["rod-fixed-and-flux"])
    assert {str(check.verdict) for check in record.checks} == {"PASS", "NOT_APPLICABLE"}


def test_unknown_cases_workers_and_solvers_are_refused():
    with pytest.raises(KeyError, match="did you mean 'plate-saddle'"):
        lv.verify(five_point, ["plate-sadle"])
    with pytest.raises(lv.AdapterError, match="workers must be 1 or more"):
        lv.verify(five_point, CASES, workers=0)
    with pytest.raises(lv.AdapterError, match="at least three sizes"):
        lv.verify(five_point, CASES, sizes=(8, 16))
    with pytest.raises(lv.AdapterError, match="there is no file"):
        lv.verify("nowhere.py:solve", CASES)


def test_parts_merge_into_the_record_of_the_whole_in_any_order():
    whole = lv.verify(five_point, CASES, principles=False)
    parts = [
        partial_record(five_point, 0, lv.catalogue[study.case_id], study) for study in reversed(whole.studies)
    ]
    merged = merged_record(parts, "pytest")
    assert merged.studies == whole.studies
    assert merged.cases == whole.cases
    with pytest.raises(lv.RecordError, match="no results to gather"):
        merged_record([])


def test_a_record_reads_back_as_it_was():
    record = lv.verify(five_point, CASES, principles=False)
    assert record_from_json(record_to_json(record)) == record


def test_what_cannot_travel_to_an_executor_runs_in_a_process_of_our_own():
    untravelled = lv.adapt(lambda problem, n: five_point.function(problem, n), name="lambda", **GRID)
    with ProcessPoolExecutor(1) as executor:
        record = lv.verify(untravelled, ["plate-saddle"], principles=False, executor=executor)
    assert [str(study.verdict) for study in record.studies] == ["PASS"]


def kill_on_saddle(problem, n):
    if problem.name == "plate-saddle":
        os.kill(os.getpid(), signal.SIGKILL)
    return five_point.function(problem, n)


def test_a_solver_that_kills_a_worker_of_an_executor_harms_one_study_only():
    killer = lv.adapt(kill_on_saddle, **GRID)
    with ProcessPoolExecutor(1) as executor:
        record = lv.verify(killer, ["plate-saddle", "plate-cubic"], principles=False, executor=executor)
    assert [str(study.verdict) for study in record.studies] == ["ERROR", "PASS"]
    assert "SIGKILL" in record.studies[0].reasons[0]


def test_what_ends_a_child_is_told_whatever_it_is():
    class Unusual(BaseException):
        pass

    def solve(_problem, _n):
        raise Unusual("no mesh for file \udcff.msh")

    record = lv.verify(lv.adapt(solve, **GRID), ["plate-saddle"], principles=False)
    assert "Unusual: no mesh for file \\udcff.msh" in record.studies[0].reasons[0]
    assert record_from_json(record_to_json(record)).studies[0].verdict == "ERROR"


def test_a_case_named_twice_is_studied_once_and_two_of_one_name_are_refused():
    record = lv.verify(five_point, ["plate-saddle", "plate-saddle"], principles=False)
    assert len(record.studies) == 1
    one, other = (
        lv.case(lv.Rectangle((0, 0), (1, a)), {}, lv.fields.affine((1, 2)), id="pool") for a in (1, 2)
    )
    with pytest.raises(lv.ProblemError, match="two different cases are called 'pool'"):
        lv.verify(five_point, [one, other], principles=False)


@pytest.mark.parametrize(
    ("given", "message"),
    [
        ({"time_limit": 0}, "time_limit must be a positive number of seconds, got 0"),
        ({"time_limit": float("nan")}, "time_limit must be a positive number of seconds, got nan"),
        ({"seed": -1}, "seed must be a whole number of at least 0, got -1"),
        ({"seed": 0.5}, "seed must be a whole number of at least 0, got 0.5"),
        ({"workers": 0}, "workers must be 1 or more, got 0"),
        ({"executor": 4}, r"executor must be one of concurrent.futures, .* got 4"),
        ({"sizes": (8, 16)}, "an order needs at least three sizes"),
    ],
)
def test_settings_that_make_no_sense_are_refused_before_anything_runs(given, message):
    with pytest.raises(lv.AdapterError, match=message):
        lv.verify(five_point, ["plate-saddle"], principles=False, **given)
