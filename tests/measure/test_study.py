"""The whole path from a solver to its verdict."""

import pickle
from dataclasses import replace

import msgspec
import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.measure import Study, study


@pytest.mark.parametrize("form", ["callable", "cells", "cloud"])
def test_an_answer_of_order_two_passes_in_every_form(form, perturbed, plate, power):
    found = study(perturbed(plate, power(2), form), plate)
    assert found.verdict is lv.Verdict.PASS, found
    assert found.orders["L2"].observed == pytest.approx(2.0, rel=0, abs=0.05)
    assert found.deciding == ["max", "L1", "L2"]
    assert [level.size for level in found.levels] == [8, 16, 32, 64]


@pytest.mark.parametrize("form", ["callable", "cells", "cloud"])
def test_one_order_too_low_fails_in_every_form(form, perturbed, plate, power):
    found = study(perturbed(plate, power(1), form), plate)
    assert found.verdict is lv.Verdict.FAIL
    assert any("formal order 2, observed 1.0" in reason for reason in found.reasons)


@pytest.mark.parametrize("form", ["callable", "cells", "cloud"])
def test_a_wrong_limit_fails(form, perturbed, plate):
    found = study(perturbed(plate, lambda n: 0.3, form), plate)
    assert found.verdict is lv.Verdict.FAIL
    assert any("does not converge: the error stays at" in reason for reason in found.reasons)


def test_a_formal_order_one_too_high_fails_and_says_so(perturbed, plate, power):
    found = study(perturbed(plate, power(2), order=3), plate)
    assert found.verdict is lv.Verdict.FAIL
    assert "formal order 3, observed 2.0" in found.reasons[0]


def test_round_off_passes_as_exact_even_with_three_sizes(perturbed, plate):
    found = study(perturbed(plate, lambda n: 0.0), plate, sizes=(4, 8, 12))
    assert found.verdict is lv.Verdict.PASS
    assert "exact to round-off" in found.reasons[0]


def test_three_sizes_give_orders_but_no_pass(perturbed, plate, power):
    found = study(perturbed(plate, power(2)), plate, sizes=(8, 16, 32))
    assert found.verdict is lv.Verdict.INCONCLUSIVE
    assert found.orders["max"].observed == pytest.approx(2.0, rel=0, abs=0.05)
    assert "run a finer size, 64" in found.reasons[0]


def test_a_declared_floor_is_honoured_and_its_levels_stay_visible(perturbed, plate):
    solver = perturbed(plate, lambda n: 0.1 * n**-4.0 + 2e-8, order=4, error_floor=1e-7)
    found = study(solver, plate)
    assert found.verdict is lv.Verdict.PASS, found
    assert "floor" in found.orders["max"].left_out["64"]
    assert len(found.levels) == 4
    assert (
        study(perturbed(plate, lambda n: 0.1 * n**-4.0 + 2e-6, order=4), plate).verdict is not lv.Verdict.PASS
    )


def test_a_nan_in_one_node_is_an_error_that_names_it(perturbed, plate, power):
    def spoil(values, n):
        if n == 32:
            values[7] = np.nan

    found = study(perturbed(plate, power(2), "cells", spoil=spoil), plate)
    assert found.verdict is lv.Verdict.ERROR
    assert "n = 32" in found.reasons[0]
    assert "values[7] is nan" in found.reasons[0]
    assert [level.size for level in found.levels] == [8, 16]
    assert "Traceback" in found.crash


@pytest.mark.parametrize(
    ("fault", "words"),
    [
        (lambda points: 1 / 0, "raised ZeroDivisionError: division by zero"),
        (lambda points: points, "values|evaluate"),
        (lambda points: np.full(len(points), np.nan), "evaluate must return numbers in the shape"),
    ],
)
def test_whatever_a_solver_does_wrong_ends_in_error(fault, words, plate):
    broken = lv.adapt(
        lambda problem, n: lv.Answer(evaluate=fault, h=1 / n), name="broken", kind="other", order=2
    )
    found = study(broken, plate)
    assert found.verdict is lv.Verdict.ERROR
    assert words.split("|")[-1] in found.reasons[0]
    assert found.crash


def test_a_solver_that_exits_is_an_error_and_one_that_declines_is_not_applicable(plate):
    def leaves(_problem, _n):
        raise SystemExit(3)

    def declines(_problem, _n):
        raise lv.Refused("not today")

    def wavers(_problem, n):
        if n > 8:
            raise lv.Refused("too fine")
        return lv.Answer(evaluate=plate.exact.value, h=1 / n)

    for solve, verdict, words in (
        (leaves, lv.Verdict.ERROR, "SystemExit"),
        (declines, lv.Verdict.NOT_APPLICABLE, "the solver declined: not today"),
        (wavers, lv.Verdict.ERROR, "solved at other sizes: too fine"),
    ):
        found = study(lv.adapt(solve, name="s", kind="other", order=2), plate)
        assert found.verdict is verdict
        assert words in found.reasons[0]


def test_a_spacing_that_does_not_fall_is_an_error(plate):
    solver = lv.adapt(
        lambda problem, n: lv.Answer(evaluate=plate.exact.value, h=0.1), name="s", kind="other", order=2
    )
    found = study(solver, plate)
    assert found.verdict is lv.Verdict.ERROR
    assert "h must fall from size to size" in found.reasons[0]


def test_beyond_declared_capabilities_is_not_applicable(perturbed, plate, power):
    found = study(perturbed(plate, power(2), dims={3}), plate)
    assert found.verdict is lv.Verdict.NOT_APPLICABLE
    assert "dim" in found.reasons[0]
    assert found.levels == []


@pytest.mark.parametrize(
    ("sizes", "match"),
    [
        ((8, 16), "at least three sizes"),
        ((8, 32, 16), "increase from coarse to fine"),
        ((8, 8, 16), "increase from coarse to fine"),
        ((0, 8, 16), "positive integers"),
        ((8.5, 9, 10), "positive integers"),
        (8, "sequence"),
    ],
)
def test_sizes_that_make_no_sequence_are_refused(sizes, match, perturbed, plate, power):
    with pytest.raises(lv.AdapterError, match=match):
        study(perturbed(plate, power(2)), plate, sizes=sizes)


def test_arguments_that_are_no_adapter_or_no_case_are_refused(perturbed, plate, power):
    with pytest.raises(lv.AdapterError, match="wrap the function first"):
        study(lambda problem, n: None, plate)
    with pytest.raises(lv.ProblemError, match=r"lv\.catalogue"):
        study(perturbed(plate, power(2)), "plate")


def test_same_seed_same_numbers_and_another_seed_other_points(perturbed, plate, power):
    def numbers(seed):
        found = study(perturbed(plate, power(2)), plate, seed=seed)
        return replace(found, levels=[replace(level, seconds=0.0) for level in found.levels])

    assert msgspec.json.encode(numbers(3)) == msgspec.json.encode(numbers(3))
    assert numbers(3).error_map != numbers(4).error_map


def test_a_study_travels_by_pickle_and_json(perturbed, plate, power):
    found = study(perturbed(plate, power(2)), plate)
    assert pickle.loads(pickle.dumps(found)) == found
    assert msgspec.json.decode(msgspec.json.encode(found), type=Study) == found


def test_tables_show_every_level_and_the_fit(perturbed, plate, power):
    found = study(perturbed(plate, power(2)), plate)
    for fmt, mark in (("text", "---"), ("markdown", "|"), ("latex", r"\toprule")):
        table = found.table(fmt)
        assert mark in table
        assert all(str(level.size) in table for level in found.levels)
        assert "expected 2" in table
    with pytest.raises(lv.RecordError, match="'text', 'markdown' or 'latex'"):
        found.table("html")
    with pytest.raises(lv.RecordError, match="no norm 'maxx'"):
        found.table(norms=["maxx"])


def test_places_tell_where_a_local_error_sits(plate):
    def solve(_problem, n):
        def evaluate(points):
            near = points[:, 0] > 2 - 1 / n
            return plate.exact.value(points) + np.where(near, 0.3 / n, 1e-3 / n**2)

        return lv.Answer(evaluate=evaluate, h=1 / n)

    found = study(lv.adapt(solve, name="s", kind="finite difference", order=2), plate)
    assert found.verdict is lv.Verdict.FAIL
    last = {place: errors[-1] for place, errors in found.local.items()}
    assert last["right"] == pytest.approx(0.3 / 64, rel=1e-6, abs=0)
    assert last["interior"] < 1e-6
    assert last["corner bottom/right"] > 1e-3
    assert 900 <= len(found.error_map.points) <= 1000
    numbers = [*found.error_map.errors, *np.ravel(found.error_map.points).tolist()]
    assert all(float(f"{x:.6g}") == x for x in numbers)
    assert max(np.abs(found.error_map.errors)) == pytest.approx(0.3 / 64, rel=1e-6, abs=0)


def test_a_pure_neumann_answer_is_aligned_and_its_level_judged_if_claimed():
    pieces = dict.fromkeys(("left", "right", "bottom", "top"), "neumann")
    case = lv.case(lv.Rectangle((0, 0), (2, 1)), pieces, lv.fields.exp_trig(1), id="insulated")

    def solve(_problem, n):
        return lv.Answer(evaluate=lambda x: case.exact.value(x) + 5.0 + 0.1 * np.sin(x[:, 0]) / n**2, h=1 / n)

    free = lv.adapt(solve, name="s", kind="finite difference", order=2)
    found = study(free, case)
    assert found.verdict is lv.Verdict.PASS, found
    assert found.levels[-1].errors["quantity:level"] == pytest.approx(5.0, rel=1e-4, abs=0)
    claims = lv.adapt(solve, name="s", kind="finite difference", order=2, fixes_constant=True)
    assert study(claims, case).verdict is lv.Verdict.FAIL


def test_levels_coarser_than_the_smallest_length_are_shown_and_finer_ones_added(perturbed, power):
    case = lv.case(lv.Rectangle((0, 0), (1, 1)), {}, lv.fields.log_source((-0.1, 0.4)), id="near")
    found = study(perturbed(case, power(2)), case)
    assert found.verdict is lv.Verdict.PASS, found
    assert [level.judged for level in found.levels][:2] == [False, False]
    assert "too coarse" in found.levels[0].note
    assert any("added: 24, 48, 96, 192" in remark for remark in found.remarks)
    held = study(perturbed(case, power(2)), case, sizes=(8, 16, 32, 64))
    assert held.verdict is lv.Verdict.INCONCLUSIVE
    assert [level.size for level in held.levels] == [8, 16, 32, 64]


def test_nan_outside_an_inscribed_mesh_is_left_out_and_its_share_reported(rim):
    def solve(_problem, n, shrink=0.5):
        def evaluate(points):
            inside = np.hypot(*points.T) < 1 - shrink / n
            return np.where(inside, rim.exact.value(points) + 0.1 / n**2, np.nan)

        return lv.Answer(evaluate=evaluate, h=1 / n)

    found = study(lv.adapt(solve, name="s", kind="finite difference", order=2), rim)
    assert found.verdict is lv.Verdict.PASS, found
    assert 0 < found.levels[-1].left_out < found.levels[0].left_out < 0.15

    def hole(problem, n):
        return solve(problem, n, shrink=0.4 * n)

    broken = study(lv.adapt(hole, name="s", kind="finite difference", order=2), rim)
    assert broken.verdict is lv.Verdict.ERROR
    assert "not within h" in broken.reasons[0]


def test_moves_onto_a_curve_that_shrink_too_slowly_are_remarked(rim):
    def solve(rate):
        def inner(problem, n):
            t = np.linspace(0, 2 * np.pi, n, endpoint=False)
            circle = np.column_stack([np.cos(t), np.sin(t)])
            problem.pieces["rim"].data((1 - 0.3 / n**rate) * circle)
            return lv.Answer(evaluate=lambda x: rim.exact.value(x) + 0.1 / n**2, h=1 / n)

        return lv.adapt(inner, name="s", kind="finite difference", order=2)

    slow, fast = study(solve(1), rim), study(solve(2), rim)
    assert any("does not follow the curve" in remark for remark in slow.remarks)
    assert not any("does not follow the curve" in remark for remark in fast.remarks)
    assert fast.levels[-1].moves["rim"] == pytest.approx(0.3 / 64**2, rel=1e-9, abs=0)


def test_reported_fluxes_and_quantities_are_measured_against_exact_ones():
    case = lv.case(
        lv.Rectangle((0, 0), (2, 1)), {}, lv.fields.affine((0, 3)), 2.0, id="flux",
        quantities={"middle": lv.value_at((1, 0.5)), "heat": lv.flux_through("top")},
    )  # fmt: skip

    def solve(sign, n):
        e = 0.1 / n**2
        return lv.Answer(
            evaluate=lambda x: case.exact.value(x) + e, h=1 / n,
            fluxes={"top": sign * 12.0 + e}, quantities={"middle": 1.5 + e},
        )  # fmt: skip

    order = {"max": 2, "L2": 2, "flux": 2, "quantity": 2}

    def judged(sign):
        return study(
            lv.adapt(lambda _, n: solve(sign, n), name="s", kind="finite difference", order=order), case
        )

    good, wrong = judged(1.0), judged(-1.0)
    assert good.verdict is lv.Verdict.PASS, good
    assert good.levels[0].errors["flux:top"] == pytest.approx(0.1 / 64, rel=1e-9, abs=0)
    assert good.levels[0].errors["quantity:middle"] == pytest.approx(0.1 / 64, rel=1e-9, abs=0)
    assert good.levels[0].errors["probe:0"] == pytest.approx(0.1 / 64, rel=1e-9, abs=0)
    assert "flux:top" in good.deciding
    assert wrong.verdict is lv.Verdict.FAIL
    assert any(reason.startswith("flux:top") and "does not converge" in reason for reason in wrong.reasons)


def test_points_inside_the_clearance_do_not_decide(plate):
    def solve(problem, n):
        def evaluate(points):
            near = problem.shape.distance(points) < 0.05
            return plate.exact.value(points) + np.where(near, 0.2, 0.1 / n**2)

        return lv.Answer(evaluate=evaluate, h=1 / n)

    kept = study(lv.adapt(solve, name="s", kind="finite difference", order=2, clearance=0.05), plate)
    assert kept.verdict is lv.Verdict.PASS, kept
    assert any("declared clearance" in remark for remark in kept.remarks)
    assert (
        study(lv.adapt(solve, name="s", kind="finite difference", order=2), plate).verdict is lv.Verdict.FAIL
    )


def test_a_known_deviation_is_said_and_changes_no_verdict(perturbed, plate, power):
    found = study(perturbed(plate, power(1), known={"plate": "first-order outlet"}), plate)
    assert found.verdict is lv.Verdict.FAIL
    assert found.known == "first-order outlet"
    assert "first-order outlet" in found.remarks[0]


def test_an_order_claimed_by_the_author_takes_the_place_of_theory_and_is_said_to_be_claimed(
    perturbed, plate, power
):
    claims = dict.fromkeys(("max", "L1", "L2"), (1, "first-order outlet"))
    found = study(perturbed(plate, power(1), expected=claims), plate)
    assert found.verdict is lv.Verdict.PASS, found
    assert found.orders["max"].formal == 2.0
    assert found.orders["max"].expected == 1.0
    assert found.orders["max"].basis == "claimed by the author of the solver: first-order outlet"
    assert "expected 1 (claimed by its author)" in found.reasons[0]


def test_a_claim_that_does_not_hold_fails_and_one_norm_leaves_the_others_to_theory(perturbed, plate, power):
    found = study(perturbed(plate, power(2), expected={"L2": (4, "superconvergent")}), plate)
    assert found.verdict is lv.Verdict.FAIL
    assert found.orders["max"].expected == 2.0
    assert "expected 4 (claimed by its author), observed 2.0" in found.reasons[2]


def test_a_norm_that_theory_leaves_open_decides_once_it_is_claimed(perturbed, plate, power):
    found = study(perturbed(plate, power(2), expected={"trace": (2, "nodes on the wall")}), plate)
    assert found.orders["trace:left"].decides
    assert not study(perturbed(plate, power(2)), plate).orders["trace:left"].decides


def averages(case, n, size):
    """Averages of u over n x n cells of the 2 x 1 plate, by Gauss points, and the cells; error size h^2."""
    x, y = np.meshgrid(np.linspace(0, 2, n + 1), np.linspace(0, 1, n + 1), indexing="ij")
    number = np.arange((n + 1) ** 2).reshape(n + 1, n + 1)
    cells = np.stack([number[:-1, :-1], number[1:, :-1], number[1:, 1:], number[:-1, 1:]], -1).reshape(-1, 4)
    nodes = np.column_stack([x.ravel(), y.ravel()])
    gauss, weights = np.polynomial.legendre.leggauss(4)
    low, high = nodes[cells[:, 0]], nodes[cells[:, 2]]
    values = np.zeros(len(cells))
    for s, ws in zip(gauss, weights, strict=True):
        for t, wt in zip(gauss, weights, strict=True):
            points = (low + high) / 2 + (high - low) / 2 * np.array([s, t])
            values += ws * wt / 4 * case.exact.value(points)
    return nodes, values + size, {"quad": cells}


@pytest.mark.parametrize(("order", "verdict"), [(2, "PASS"), (4, "PASS"), (1, "FAIL")])
def test_values_of_cells_are_judged_as_averages_not_as_steps(plate, order, verdict):
    # A step function through exact averages is off by order 1 between the centres: no fault of the method.
    def solve(_problem, n):
        return lv.Answer(*averages(plate, n, n**-order), location="cell", h=1 / n)

    formal = max(order, 2)
    found = study(lv.adapt(solve, name="volumes", kind="finite volume", order=formal), plate)
    assert str(found.verdict) == verdict, found
    assert found.orders["L2"].observed == pytest.approx(order, rel=0, abs=0.05)


def test_a_solver_that_explodes_fails_without_overflow(perturbed, plate):
    for form in ("callable", "cells", "cloud"):
        found = study(perturbed(plate, lambda n: 1e200 * n, form), plate)
        assert found.verdict is lv.Verdict.FAIL
        assert "diverges" in found.reasons[0]


def test_a_tolerance_left_alone_by_an_exact_scheme_is_open_not_a_failure(perturbed, plate):
    # What a loosely iterated solver leaves where the scheme itself is exact: small, and not falling.
    found = study(perturbed(plate, lambda n: 1e-7 * n**0.5, form="cloud"), plate)
    assert found.verdict is lv.Verdict.INCONCLUSIVE
    assert "declare error_floor" in found.reasons[0]
    assert study(perturbed(plate, lambda n: 1e-4 * n**0.5), plate).verdict is lv.Verdict.FAIL


def test_an_exception_that_cannot_print_itself_is_reported(plate):
    class SilentError(Exception):
        def __str__(self):
            raise ValueError("no words")

    def solve(_problem, _n):
        raise SilentError

    found = study(lv.adapt(solve, name="silent", kind="other", order=2), plate)
    assert found.verdict is lv.Verdict.ERROR
    assert "SilentError" in found.reasons[0]


def test_a_quantity_that_the_case_does_not_have_is_remarked(plate):
    def solve(_problem, n):
        return lv.Answer(evaluate=plate.exact.value, h=1 / n, quantities={"head": 1.0})

    found = study(lv.adapt(solve, name="s", kind="other", order=2), plate)
    assert any("the case has no 'head', so it is not judged" in remark for remark in found.remarks)


def test_random_walks_that_report_no_samples_are_judged_in_n(plate):
    def solve(_problem, n, wanted):
        return lv.Answer(wanted[:50], plate.exact.value(wanted[:50]) + n**-0.5, standard_error=n**-0.5)

    found = study(lv.adapt(solve, name="walks", kind="stochastic", order=0.5), plate)
    assert found.verdict is lv.Verdict.PASS, found
    assert [level.h for level in found.levels[:4]] == [1 / 8, 1 / 16, 1 / 32, 1 / 64]


def test_levels_too_coarse_are_named_where_too_few_are_left(perturbed, power):
    near = lv.case(lv.Rectangle((0, 0), (2, 1)), {}, lv.fields.log_source((-0.1, 0.5)), id="near")
    found = study(perturbed(near, power(2)), near, sizes=(5, 10, 20, 40))
    assert found.verdict is lv.Verdict.INCONCLUSIVE
    assert "2 levels can be judged, too few for an order (without 5, 10: too coarse" in found.reasons[0]
    assert "run finer sizes, 80, 160" in found.reasons[0]


def test_features_describe_the_case(perturbed, plate, power):
    found = study(perturbed(plate, power(2)), plate, sizes=(4, 6, 8)).features
    assert found["Neumann condition"] is True
    assert found["nonzero Neumann data"] is True
    assert found["second normal derivative on a Neumann piece"] is True
    assert found["unequal extents"] is True
    assert found["neumann on left"] is True
    assert found["curved boundary"] is False
    assert found["shape"] == "rectangle"
