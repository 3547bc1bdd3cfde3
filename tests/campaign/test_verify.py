"""A campaign: one record of everything, whatever single studies do, the same with any number of workers."""

import os
import signal
from concurrent.futures import ThreadPoolExecutor
from dataclasses import replace

import pytest

import laplace_verify as lv
from laplace_verify.campaign import merged_record, partial_record, record_from_json, record_to_json
from laplace_verify.solvers.samples import five_point

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
    assert {str(check.verdict) for check in record.checks} == {"PASS"}


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
