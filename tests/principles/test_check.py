"""A check of a law passes sound solvers, fails wrong ones, and hands back a problem that shows it."""

import multiprocessing
import subprocess
import sys
from dataclasses import replace

import numpy as np
import pytest

from laplace_verify.errors import AdapterError, ProblemError
from laplace_verify.measure.verdict import Verdict
from laplace_verify.principles import LAWS, check_principle
from laplace_verify.principles.driving import CALLS, EXAMPLES
from laplace_verify.solvers import Answer, adapt
from laplace_verify.solvers.samples import (
    FAULTS,
    chebyshev,
    five_point,
    fundamental_solutions,
    p1_element,
    seven_point,
)

NOT_FOR_ALL = (  # they ask for kinds of solver
    "resistances in series",
    "Dirichlet principle",
    "tighter tolerance",
    "steady state",
)
SOUND = {"five": five_point, "p1": p1_element, "chebyshev": chebyshev, "sources": fundamental_solutions}

CONSTANTS, AFFINE, SERIES, *_ = LAWS

# Which law is the first to catch which fault of finite differences, or why none can.
FIRST = [
    (CONSTANTS, "weights that do not add up, systems that are not solved", (
        "robin coefficient", "robin sign", "robin coefficient times conductivity", "robin edge length lost",
        "robin only on high sides", "dirichlet side not carried", "dirichlet carried with the wrong sign",
        "level not restored", "loose tolerance", "increment instead of residual", "cap on iterations",
        "factors in single precision",
    )),
    (AFFINE, "data of a constant are zero, or the same everywhere", (
        "flux sign", "normal of the low sides", "flux for gradient", "gradient for flux", "half-cell factor",
        "whole edge in corners", "edge length of the other axis", "flux spacing from the number of nodes",
        "flux on the opposite side", "flux lost", "robin at the inner neighbour",
        "dirichlet data of the next node", "data of top and left reversed", "corners left to the flux",
        "dirichlet by a weak penalty", "spacings exchanged", "spacing along x from the number of nodes",
        "interior weight", "mixed derivative missing", "mixed derivative sign", "pinned twice", "regularised",
        "value of the nearest node", "constant next to the boundary", "output exchanged",
        "corners filled by means", "coordinates off by one",
    )),
    (SERIES, "one material, even grids, Cartesian coordinates and small whole numbers hide them", (
        "flux of cell centres", "equal spacings taken for granted", "arithmetic mean of conductivities",
        "conductivity of the lower neighbour", "metric factor missing", "metric factor doubled",
        "reciprocal metric factor", "values in single precision",
    )),
    ("flux balance", "the values are right", (
        "tensor exchanged", "gradient exchanged", "reported fluxes of low sides", "reported fluxes one-sided",
    )),
    ("conductivity scaling", "values and balance are right", ("reported fluxes without conductivity",)),
    (None, "the error vanishes in the limit, as one of first order", (
        "first-order flux", "radius of the outer node",
    )),
    (None, "problems drawn are well posed and have no periodic sides", (
        "ill-posed input accepted", "seam shifted", "seam reversed",
    )),
    (None, "a common factor of all slopes, or of all fluxes about an axis, keeps the laws", (
        "gradient halved", "pi with four decimals",
    )),
    (None, "harmless", (
        "second-order one-sided flux", "dirichlet by rows of the unit matrix", "other corner owner",
        "corner rows missing", "pinned with unbalanced data", "balanced, then pinned",
        "conjugate gradients in the plane", "red and black unknowns", "equations scaled",
    )),
]  # fmt: skip
CAUGHT = {name: law for law, _, names in FIRST for name in names}
GRID_FAULTS = {name: fault for name, fault in FAULTS.items() if fault.sample == five_point.name}
ONE_OF_EACH = (
    "robin sign", "whole edge in corners", "arithmetic mean of conductivities", "reported fluxes one-sided",
    "reported fluxes without conductivity",
)  # fmt: skip


def violation_of(check, solver):
    """Run the code a check hands back and return the violation it computes."""
    space = {}
    exec(check.example, space)  # our own text
    return space["violation"](solver)


def test_every_fault_has_its_line():
    assert set(CAUGHT) == set(GRID_FAULTS)


def test_laws_come_in_a_fixed_order():
    assert list(LAWS) == [
        "constants reproduced",
        "affine fields reproduced",
        "resistances in series",
        "maximum principle",
        "no interior extremum",
        "mean value",
        "superposition",
        "comparison",
        "symmetry",
        "conductivity scaling",
        "flux balance",
        "repeatability",
        "reciprocity",
        "largest gradient on the boundary",
        "slope at a boundary extremum",
        "Dirichlet principle",
        "tighter tolerance",
        "steady state",
    ]
    assert all(law.name == name and law.statement for name, law in LAWS.items())


@pytest.mark.parametrize("law", LAWS)
@pytest.mark.parametrize("name", SOUND)
def test_sound_solvers_keep_every_law(name, law):
    check = check_principle(SOUND[name], law, seed=5)
    if check.verdict is Verdict.NOT_APPLICABLE:
        assert law in NOT_FOR_ALL
        return
    assert check.verdict is Verdict.PASS, check.reason
    assert 0.0 <= check.violation <= check.tolerance
    assert check.example == ""
    assert check.points == ()


@pytest.mark.long
@pytest.mark.parametrize("seed", range(20))
@pytest.mark.parametrize("name", SOUND)
def test_sound_solvers_raise_no_false_alarm_on_any_seed(name, seed):
    for law in LAWS:
        check = check_principle(SOUND[name], law, seed=seed)
        assert check.verdict is Verdict.PASS or law in NOT_FOR_ALL, check.reason
        assert check.verdict in (Verdict.PASS, Verdict.NOT_APPLICABLE), check.reason


@pytest.mark.long
@pytest.mark.parametrize("law", LAWS)
@pytest.mark.parametrize("seed", range(4))
def test_the_seven_point_sample_keeps_every_law(law, seed):
    check = check_principle(seven_point, law, seed=seed)
    assert check.verdict is (Verdict.NOT_APPLICABLE if law in NOT_FOR_ALL else Verdict.PASS), check.reason


def test_the_laws_alone_catch_most_faults_that_change_answers():
    changing = [name for name, fault in GRID_FAULTS.items() if fault.effect != "harmless"]
    caught = [name for name in changing if CAUGHT[name] is not None]
    assert len(caught) >= 0.7 * len(changing)
    assert all(fault.effect != "harmless" or CAUGHT[name] is None for name, fault in GRID_FAULTS.items())


def assert_caught(fault):
    """The law of the table fails; its code shows that again, and nothing on the sound sample."""
    solver = FAULTS[fault].adapter
    check = check_principle(solver, CAUGHT[fault])
    assert check.verdict is Verdict.FAIL, check.reason
    assert violation_of(check, solver) == pytest.approx(check.violation, rel=1e-9)  # the same solve again
    assert violation_of(check, five_point) < check.tolerance  # the problem itself is sound


@pytest.mark.slow
@pytest.mark.parametrize("fault", ONE_OF_EACH)
def test_one_fault_for_each_law_is_caught(fault):
    assert_caught(fault)


@pytest.mark.long
@pytest.mark.parametrize("fault", [name for name, law in CAUGHT.items() if law is not None])
def test_every_fault_is_caught_by_the_law_that_can_see_it(fault):
    assert_caught(fault)


@pytest.mark.long
@pytest.mark.parametrize("law", LAWS)
@pytest.mark.parametrize("fault", [name for name, law in CAUGHT.items() if law is None])
def test_no_law_catches_what_none_can_see(fault, law):
    check = check_principle(FAULTS[fault].adapter, law)
    assert check.verdict in (Verdict.PASS, Verdict.NOT_APPLICABLE), check.reason


@pytest.mark.slow
def test_a_flux_of_the_wrong_sign_breaks_affine_fields_on_the_unit_square():
    solver = FAULTS["flux sign"].adapter
    check = check_principle(solver, "affine fields reproduced")
    assert check.verdict is Verdict.FAIL
    assert "round-off" in check.reason
    assert "lv.Rectangle((0.0, 0.0), (1.0, 1.0))" in check.example or "lv.Interval(0.0, 1.0)" in check.example
    assert violation_of(check, solver) == pytest.approx(check.violation, rel=1e-9)  # the same solve again
    assert violation_of(check, five_point) < 1e-9  # direct solver: round-off only


def test_a_lost_dirichlet_side_breaks_constants_with_a_point_inside():
    check = check_principle(FAULTS["dirichlet side not carried"].adapter, "constants reproduced")
    assert check.verdict is Verdict.FAIL
    assert len(check.points) == 1
    assert "all Dirichlet" in check.reason


@pytest.mark.parametrize(
    ("twin", "law"),
    [
        ("adds a constant", "constants reproduced"),
        ("adds a constant", "affine fields reproduced"),
        pytest.param("overshoots", "maximum principle", marks=pytest.mark.slow),
        ("screened", "constants reproduced"),
        ("screened", "mean value"),
    ],
)
def test_wrong_twins_break_the_law_and_the_code_shows_it(twins, twin, law):
    check = check_principle(twins[twin], law)
    assert check.verdict is Verdict.FAIL, check.reason
    assert check.violation > check.tolerance
    assert check.points
    assert violation_of(check, twins[twin]) == pytest.approx(
        check.violation, rel=1e-9
    )  # the same solve again
    assert violation_of(check, five_point) < check.tolerance


@pytest.mark.slow
def test_the_mean_value_does_not_see_a_constant_added(twins):
    assert check_principle(twins["adds a constant"], "mean value").verdict is Verdict.PASS


def test_nan_is_an_error_of_the_solver_not_a_broken_law(twins):
    check = check_principle(twins["nan"], "constants reproduced")
    assert check.verdict is Verdict.ERROR
    assert "nan" in check.reason


def test_nan_of_a_function_inside_the_shape_is_an_error(twins):
    check = check_principle(twins["infinite"], "mean value")
    assert check.verdict is Verdict.ERROR
    assert "NaN" in check.reason


def test_a_solver_that_raises_on_some_draws_shows_the_simplest_of_them(twins):
    check = check_principle(twins["raises on some"], "constants reproduced")
    assert check.verdict is Verdict.ERROR
    assert "RuntimeError: no flux file was found" in check.reason
    assert check.reason.count(" neumann") == 1  # one Neumann piece is enough
    with pytest.raises(RuntimeError, match="no flux file"):
        violation_of(check, twins["raises on some"])


def test_a_solver_that_is_not_repeatable_is_named_so(twins):
    for law in ("constants reproduced", "maximum principle"):
        check = check_principle(twins["not repeatable"], law)
        assert check.verdict is Verdict.ERROR
        assert "not repeatable" in check.reason
        assert violation_of(check, twins["not repeatable"]) > 1e-4  # noise of 0.01


def test_a_solver_that_declines_everything_is_not_applicable(twins):
    check = check_principle(twins["declines"], "constants reproduced")
    assert check.verdict is Verdict.NOT_APPLICABLE
    assert "the pump is switched off" in check.reason


def test_a_bare_cloud_has_no_mean_values_but_keeps_other_laws(cloud):
    check = check_principle(cloud, "mean value")
    assert check.verdict is Verdict.NOT_APPLICABLE
    assert check.reason == "values between nodes are not available"
    for law in list(LAWS)[:2]:
        assert check_principle(cloud, law).verdict is Verdict.PASS


@pytest.mark.slow
def test_a_stochastic_solver_is_judged_by_its_own_standard_error(walks):
    for law in LAWS:
        assert check_principle(walks, law).verdict is Verdict.PASS
    silent = replace(walks, function=five_point.function)
    check = check_principle(silent, "constants reproduced")
    assert check.verdict is Verdict.NOT_APPLICABLE
    assert "standard_error" in check.reason
    shifted = replace(walks, function=lambda problem, n, seed=0: _shifted(walks(problem, n, seed)))
    assert check_principle(shifted, "constants reproduced").verdict is Verdict.FAIL


def _shifted(answer):
    return Answer(
        answer.points,
        answer.values + 2 * np.max(np.abs(answer.values)),
        cells=answer.cells,
        samples=answer.samples,
        standard_error=answer.standard_error,
    )


@pytest.mark.parametrize(
    ("declared", "law", "reason"),
    [
        ({"conditions": frozenset({"neumann"})}, "maximum principle", "Dirichlet conditions"),
        ({"conductivity": frozenset({"tensor"})}, "mean value", "conductivity is a number"),
        ({"conductivity": frozenset({"tensor"})}, "maximum principle", "conductivity is a number"),
        ({"conductivity": frozenset({"regions"})}, "constants reproduced", "conductivity regions"),
        ({"conditions": frozenset({"periodic"})}, "constants reproduced", "conditions periodic"),
        ({"coordinates": frozenset({"axisymmetric"})}, "mean value", "coordinates axisymmetric"),
        ({"shapes": frozenset({"half-space"})}, "constants reproduced", "half-space"),
    ],
)
def test_what_is_beyond_declared_capabilities_is_not_applicable(declared, law, reason):
    check = check_principle(replace(five_point, **declared), law)
    assert check.verdict is Verdict.NOT_APPLICABLE
    assert reason in check.reason


def test_pure_neumann_solvers_are_judged_up_to_a_constant():
    only_flux = replace(five_point, conditions=frozenset({"neumann"}))
    for law in ("constants reproduced", "affine fields reproduced"):
        assert check_principle(only_flux, law).verdict is Verdict.PASS
    wrong = replace(FAULTS["half-cell factor"].adapter, conditions=frozenset({"neumann"}))
    check = check_principle(wrong, "affine fields reproduced")
    assert check.verdict is Verdict.FAIL
    assert violation_of(check, wrong) == pytest.approx(check.violation, rel=1e-9)  # the same solve again


def test_a_declared_discrete_law_is_held_to_round_off():
    law = "maximum principle"
    assert check_principle(replace(five_point, discrete_laws=frozenset({law})), law).verdict is Verdict.PASS

    def rough(problem, n):  # an overshoot that vanishes like h^2: allowed in the limit only
        answer = five_point(problem, n)
        return Answer(answer.points, answer.values * (1 + answer.h**2), cells=answer.cells, h=answer.h)

    sound = replace(five_point, function=rough)
    assert check_principle(sound, law).verdict is Verdict.PASS
    strict = check_principle(replace(sound, discrete_laws=frozenset({law})), law)
    assert strict.verdict is Verdict.FAIL
    assert "round-off" in strict.reason


def test_the_same_seed_gives_the_same_check_and_another_seed_other_problems():
    solver, law = FAULTS["dirichlet side not carried"].adapter, "constants reproduced"
    assert check_principle(solver, law, seed=3) == check_principle(solver, law, seed=3)
    first, again, other = (check_principle(chebyshev, "mean value", seed=seed) for seed in (3, 3, 4))
    assert first == again
    assert first.violation != other.violation


@pytest.mark.slow
def test_the_number_of_solver_calls_is_bounded(twins):
    calls = []

    def counted(problem, n):
        calls.append(n)
        return twins["adds a constant"](problem, n)

    check = check_principle(replace(twins["adds a constant"], function=counted), "maximum principle")
    assert check.verdict is Verdict.FAIL
    assert "the data lie between" in check.reason
    assert len(calls) <= CALLS * EXAMPLES + 2  # two more to see whether it repeats itself


def _check_in_child(queue):
    queue.put(check_principle(five_point, "constants reproduced", seed=1))


def test_a_check_runs_in_a_forked_child_and_says_the_same():
    context = multiprocessing.get_context("fork")
    queue = context.Queue()
    child = context.Process(target=_check_in_child, args=(queue,))
    child.start()
    found = queue.get(timeout=60)
    child.join(timeout=60)
    assert found == check_principle(five_point, "constants reproduced", seed=1)


def test_no_folder_is_written_and_the_example_runs_in_a_fresh_session(tmp_path):
    (tmp_path / "pool_solver.py").write_text(
        "import laplace_verify as lv\n"
        "from laplace_verify.solvers.samples import FAULTS\n"
        "@lv.adapt(kind='finite difference', order=2, dims={2}, shapes={'rectangle'})\n"
        "def solve(problem, n):\n"
        "    return FAULTS['half-cell factor'].adapter(problem, n)\n"
    )
    first = (
        "import pool_solver\n"
        "from laplace_verify.principles import check_principle\n"
        "check = check_principle(pool_solver.solve, 'affine fields reproduced')\n"
        "print(check.violation)\n"
        "open('again.py', 'w').write(check.example)\n"
    )
    run = [sys.executable, "-W", "error"]
    said = subprocess.run([*run, "-c", first], cwd=tmp_path, capture_output=True, text=True, check=True)
    again = subprocess.run([*run, "again.py"], cwd=tmp_path, capture_output=True, text=True, check=True)
    assert float(again.stdout) == pytest.approx(float(said.stdout), rel=1e-9)  # the same solve again
    assert float(again.stdout) > 0.01
    assert not (tmp_path / ".hypothesis").exists()


def test_bad_requests_are_refused_by_name():
    with pytest.raises(ProblemError, match="did you mean 'maximum principle'"):
        check_principle(five_point, "maximum principel")
    with pytest.raises(AdapterError, match="solver must be an adapter, got function"):
        check_principle(five_point.function, "mean value")
    with pytest.raises(ProblemError, match="seed must be a whole number"):
        check_principle(five_point, "mean value", seed=-1)
    unknown = adapt(
        five_point.function, kind="finite difference", order=2, discrete_laws={"maximum principel"}
    )
    with pytest.raises(AdapterError, match=r"discrete_laws.*did you mean 'maximum principle'"):
        check_principle(unknown, "mean value")


def test_a_small_constant_violation_asks_for_the_iteration_tolerance():
    def stopped_early(problem, n):
        answer = five_point(problem, n)
        return Answer(answer.points, answer.values + 1e-7, cells=answer.cells)

    solver = adapt(
        stopped_early,
        kind="finite difference",
        order=2,
        dims={2},
        shapes={"rectangle"},
        conditions={"dirichlet"},
    )
    check = check_principle(solver, "constants reproduced")
    assert check.verdict == Verdict.FAIL
    assert "declare it as error_floor" in check.reason


def test_another_quadrature_under_a_curved_robin_piece_breaks_no_law_of_constants():
    solver = FAULTS["more quadrature points"].adapter  # misses constants by 4e-9 there, as any sound twin may
    check = check_principle(solver, "constants reproduced")
    assert check.verdict is Verdict.PASS, check.reason
