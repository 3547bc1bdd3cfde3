"""The seeded-fault exercise: what counts as caught, and a part of it that is run."""

import csv
import io

import pytest

from laplace_verify.cli import main
from laplace_verify.diagnosis import Outcome, chosen_faults, exercise
from laplace_verify.diagnosis.exercise import contrast_for
from laplace_verify.errors import AdapterError
from laplace_verify.measure import Verdict
from laplace_verify.report.exercise import exercise_csv, exercise_markdown, exercise_summary
from laplace_verify.solvers.samples import FAULTS, Fault, five_point

PASS, FAIL, OPEN = Verdict.PASS, Verdict.FAIL, Verdict.INCONCLUSIVE


def outcome(
    effect,
    cases=(PASS,),
    laws=(PASS,),
    remarks=(),
    suspect="Neumann condition: all 3 failing cases",
    sound=(),
):
    fault = Fault(
        description="a flux enters twice", adapter=five_point, sample=five_point.name, kind="flux sign",
        effect=effect, suspects=("neumann condition",), shown_by=("plate-flux-top",),
    )  # fmt: skip
    return Outcome(
        name="twice", fault=fault, cases={f"case-{k}": v for k, v in enumerate(cases)},
        laws={f"law-{k}": v for k, v in enumerate(laws)}, remarks=remarks, suspect=suspect,
        sound={f"case-{k}": v for k, v in enumerate(sound)},
    )  # fmt: skip


@pytest.mark.parametrize(
    ("effect", "found", "caught"),
    [
        ("order", {"cases": (PASS, FAIL)}, True),
        ("order", {"laws": (FAIL,)}, True),
        ("order", {"cases": (OPEN,), "remarks": ("case-0: odd",)}, False),
        ("accuracy", {"remarks": ("case-0: odd",)}, True),
        ("accuracy", {"cases": (OPEN,)}, True),
        ("accuracy", {}, False),
        ("harmless", {}, True),
        ("harmless", {"cases": (OPEN,)}, False),
        ("harmless", {"cases": (FAIL,)}, False),
    ],
)
def test_what_counts_as_caught(effect, found, caught):
    assert outcome(effect, **found).caught is caught


def test_the_first_suspect_is_right_if_it_has_one_of_the_words():
    assert outcome("order").suspected
    assert not outcome("order", suspect="curved boundary: both failing cases").suspected


def test_the_summary_counts_rates_by_effect():
    outcomes = [outcome("order", (FAIL,)), outcome("order", (PASS,)), outcome("harmless")]
    text = exercise_summary(outcomes)
    assert "order: 1 of 2 FAIL" in text
    assert "harmless: 1 of 1 pass" in text
    assert "first suspect right: 1 of 1 (100 %)" in text
    assert "first suspect right (order): 1 of 1 (100 %)" in text
    assert "first suspect right (accuracy)" not in text


def test_the_summary_counts_what_laws_alone_catch():
    outcomes = [outcome("order", laws=(PASS, FAIL)), outcome("accuracy"), outcome("harmless")]
    assert [found.law for found in outcomes] == ["law-1", "none", "none"]
    text = exercise_summary(outcomes)
    assert "of the faults that change answers, caught by the laws alone: 1 of 2 (50 %)" in text
    assert "laws alone" not in exercise_summary([outcome("order", laws=())])


def test_the_summary_counts_false_alarms_once_a_case():
    quiet = [outcome("order", sound=(PASS, PASS)), outcome("harmless", sound=(PASS,))]
    assert "sound solvers: of 2 cases over 1 samples 0 FAIL, 0 stay open" in exercise_summary(quiet)
    loud = exercise_summary([outcome("order", sound=(FAIL, OPEN, PASS))])
    assert "1 FAIL (case-0 (five-point finite differences)), 1 stay open (case-1" in loud


def test_the_report_holds_every_fault_and_reads_back_as_csv():
    outcomes = [outcome("order", (FAIL,) * 5), outcome("accuracy", remarks=("case-0: odd",))]
    assert "case-0, case-1, case-2 and 2 more" in exercise_markdown(outcomes, "laplace-verify seeded-faults")
    rows = list(csv.DictReader(io.StringIO(exercise_csv(outcomes))))
    assert rows[0]["caught by"] == "case-0, case-1, case-2, case-3, case-4"
    assert rows[1]["caught by"] == "remark on case-0"


def test_contrasting_cases_are_others_that_the_solver_can_do():
    found = contrast_for(five_point, ("plate-saddle",))
    assert 4 <= len(found) <= 8
    assert "plate-saddle" not in found
    assert "disc-fourier" not in found


def test_an_unknown_fault_names_the_nearest():
    with pytest.raises(AdapterError, match="did you mean 'flux sign'"):
        chosen_faults(["flux sgn"])


def test_a_flux_of_the_wrong_sign_is_caught_and_the_flux_condition_suspected():
    (found,) = exercise({"flux sign": FAULTS["flux sign"]}, principles=False)
    assert found.caught
    assert found.suspected, found.suspect
    assert set(FAULTS["flux sign"].shown_by) <= set(found.failing)
    assert "plate-saddle" not in found.failing


ONE_OF_A_KIND = (
    "robin coefficient", "arithmetic mean of conductivities", "radius of the outer node", "seam shifted",
    "reported fluxes one-sided", "values in single precision",
)  # fmt: skip


@pytest.mark.long
@pytest.mark.parametrize("name", ONE_OF_A_KIND)
def test_one_fault_of_a_kind_is_caught_and_suspected_first(name):
    (found,) = exercise({name: FAULTS[name]}, principles=False)
    assert found.caught, (found.fault.effect, found.cases, found.remarks)
    assert found.suspected, found.suspect


@pytest.mark.long
@pytest.mark.parametrize("name", FAULTS)
def test_every_seeded_fault_has_the_effect_it_is_classed_by(name):
    (found,) = exercise({name: FAULTS[name]}, principles=False)
    assert found.caught, (found.fault.effect, found.cases, found.remarks)


@pytest.mark.long
def test_four_in_five_first_suspects_are_right_and_sound_samples_raise_no_alarm():
    mistakes = [name for name, fault in FAULTS.items() if fault.effect != "harmless"][::6]
    outcomes = list(exercise({name: FAULTS[name] for name in mistakes}, principles=False))
    wrong = {found.name: found.suspect for found in outcomes if not found.suspected}
    assert len(wrong) <= 0.2 * len(outcomes), wrong
    assert "0 FAIL, 0 stay open" in exercise_summary(outcomes)


def test_the_command_lists_the_faults_and_refuses_unknown_ones(capsys):
    assert main(["seeded-faults", "--list"]) == 0
    printed = capsys.readouterr().out
    assert all(name in printed for name in FAULTS)
    assert main(["seeded-faults", "--faults", "flux sgn"]) == 2
    assert "did you mean" in capsys.readouterr().err
