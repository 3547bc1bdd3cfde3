"""Studies of ill-posed problems: refusing passes, answering fails, anything else is an error."""

import pickle

import pytest

import laplace_verify as lv

ROD = lv.Interval(0.0, 1.0)
FLUXES = {"left": lv.neumann(1), "right": lv.neumann(2)}
ILL = lv.problem(ROD, FLUXES, name="rod", ill_posed="heat enters at both ends")
WELL = lv.case(ROD, {"left": "neumann"}, lv.fields.affine((2,)))


def solver(solve, **declared):
    return lv.adapt(solve, name="s", kind="other", order=2, **{"checks_well_posedness": True, **declared})


def refuses(_problem, _n):
    raise lv.Refused("does not balance")


def declines(_problem, _n):
    raise lv.Refused("no rods here", beyond=True)


def answers(_problem, n):
    return lv.Answer(evaluate=lambda x: x[:, 0], h=1 / n)


def wavers(problem, n):
    return answers(problem, n) if n > 16 else refuses(problem, n)


def breaks(_problem, _n):
    raise ZeroDivisionError("singular")


@pytest.mark.parametrize(
    ("solve", "verdict", "words"),
    [
        (refuses, lv.Verdict.PASS, "refused at every size, as it must be: does not balance"),
        (answers, lv.Verdict.FAIL, "size 8: the solver answered an ill-posed problem"),
        (wavers, lv.Verdict.FAIL, "size 32: the solver answered an ill-posed problem"),
        (breaks, lv.Verdict.ERROR, "size 8: the solver raised ZeroDivisionError: singular"),
        (lambda _problem, _n: None, lv.Verdict.ERROR, "returned None"),
        (declines, lv.Verdict.NOT_APPLICABLE, "the solver declined: no rods here"),
    ],
    ids=["refuses", "answers", "wavers", "breaks", "none", "declines"],
)
def test_only_a_refusal_at_every_size_passes(solve, verdict, words):
    study = lv.study(solver(solve), ILL)
    assert study.verdict is verdict
    assert words in study.reasons[0]
    assert not study.levels
    assert study.case_id == "rod"
    assert study.table().split()[:2] == ["size", "h"]
    assert bool(study.crash) == (verdict is lv.Verdict.ERROR)


def test_the_solver_is_not_told():
    told = []

    def listens(problem, _n):
        told.append(problem.ill_posed)
        raise lv.Refused("does not balance")

    assert lv.study(solver(listens), ILL).verdict is lv.Verdict.PASS
    assert set(told) == {None}


def test_who_does_not_claim_to_check_is_not_judged():
    study = lv.study(solver(answers, checks_well_posedness=False), ILL)
    assert study.verdict is lv.Verdict.NOT_APPLICABLE
    assert "checks_well_posedness" in study.reasons[0]


@pytest.mark.parametrize(
    ("solve", "claims", "verdict"),
    [
        (refuses, True, lv.Verdict.FAIL),  # it takes a sound problem for an ill-posed one
        (refuses, False, lv.Verdict.NOT_APPLICABLE),
        (declines, True, lv.Verdict.NOT_APPLICABLE),
    ],
)
def test_refusing_a_sound_problem_fails_a_solver_that_claims_to_check(solve, claims, verdict):
    study = lv.study(solver(solve, checks_well_posedness=claims), WELL)
    assert study.verdict is verdict
    if verdict is lv.Verdict.FAIL:
        assert "refused this one, which has a solution: does not balance" in study.reasons[0]


def test_a_refusal_travels_between_processes():
    again = pickle.loads(pickle.dumps(lv.Refused("why", beyond=True)))
    assert (str(again), again.reason, again.beyond) == ("why", "why", True)


def test_a_known_deviation_is_kept():
    study = lv.study(solver(answers, known={"rod": "solves by least squares"}), ILL)
    assert study.known == "solves by least squares"
    assert "known deviation" in study.remarks[0]


def test_a_well_posed_problem_without_solution_cannot_be_judged():
    well = lv.problem(ROD, {"left": lv.dirichlet(1), "right": lv.neumann(2)})
    with pytest.raises(lv.ProblemError, match="comes without its exact solution"):
        lv.study(solver(answers), well)
    with pytest.raises(lv.ProblemError, match="case must be a Case"):
        lv.study(solver(answers), 3)


def test_campaigns_take_ill_posed_problems():
    record = lv.verify(solver(refuses), [ILL], principles=False)
    assert [str(study.verdict) for study in record.studies] == ["PASS"]
    assert record.solver.capabilities["checks"] == "refuses ill-posed problems"
