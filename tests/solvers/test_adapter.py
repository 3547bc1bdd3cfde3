"""Calling a solver through its adapter."""

import dataclasses
import pickle
import re
import sys

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.solvers.adapter import as_answer

NODES = np.array([[0, 0], [1, 0], [1, 1], [0, 1], [0.5, 0.25]])


def problem_on(shape, conductivity=1.0, **kinds):
    """Return a problem with u = 1 all round but for the conditions given."""
    conditions = {piece.name: kinds.get(piece.name, lv.dirichlet(1.0)) for piece in shape.pieces}
    return lv.problem(shape, conditions, conductivity=conductivity, name="warm pool")


@pytest.fixture(scope="module")
def square():
    """Return a problem on the unit square."""
    return problem_on(lv.Rectangle((0, 0), (1, 1)))


@lv.adapt(kind="finite difference", order=2, dims={2})
def ones(_problem, n):
    """Return u = 1 at five points."""
    return lv.Answer(NODES, np.ones(5), h=1 / n)


def adapted(function, **changed):
    """Adapt a function with plain declarations."""
    return lv.adapt(function, **{"name": "tide gauge", "kind": "other", "order": 1, **changed})


def test_decorator_and_function_make_the_same_adapter(square):
    twin = lv.adapt(ones.function, kind="finite difference", order=2, dims={2})
    assert isinstance(ones, lv.Adapter)
    assert twin.describe() == ones.describe()
    assert ones(square, 4).h == ones.solve(square, 4).h == 0.25


def test_an_adapter_travels_by_name():
    assert pickle.loads(pickle.dumps(ones)) is ones


def test_a_renamed_adapter_travels_by_its_attributes():
    renamed = lv.adapt(np.hypot, kind="other", order=1, sizes=(1, 2, 3))
    again = pickle.loads(pickle.dumps(renamed))
    assert again.describe() == renamed.describe()
    assert again.function is np.hypot


def test_a_changed_adapter_travels_with_its_changes():
    changed = dataclasses.replace(ones, sizes=(3, 5, 7))
    again = pickle.loads(pickle.dumps(changed))
    assert again.function is ones.function
    assert again.sizes == (3, 5, 7)
    assert again.describe() == changed.describe()


def test_an_adapter_that_is_gone_in_the_other_process_is_missed_by_name(monkeypatch):
    blob = pickle.dumps(ones)
    monkeypatch.delattr(sys.modules[__name__], "ones")
    with pytest.raises(lv.AdapterError, match=r"has no adapter 'ones' in this process"):
        pickle.loads(blob)


def capable(**declared):
    """Return an adapter with the given capabilities."""
    return adapted(ones.function, **declared)


ROBIN_TOP = {"top": lv.robin(2.0, 1.0)}
BENT = np.array([[2.0, 0.5], [0.5, 1.0]])


@pytest.mark.parametrize(
    ("adapter", "problem", "reason"),
    [
        (capable(dims={1, 3}), problem_on(lv.LShape(1)), r"declared for dim 1, 3; the problem has 2"),
        (
            capable(shapes={"disc"}),
            problem_on(lv.LShape(1)),
            r"declared for shapes disc; the problem has l-shape",
        ),
        (
            capable(shapes={"rectangle"}),
            problem_on(lv.LShape(1)),
            r"shapes rectangle; the problem has l-shape",
        ),
        (capable(shapes={"polygon"}), problem_on(lv.LShape(1)), None),
        (capable(shapes={"polygon"}), problem_on(lv.Rectangle((0, 0), (1, 1))), None),
        (
            capable(shapes={"polygon"}),
            problem_on(lv.Disc((0, 0), 1)),
            r"shapes polygon; the problem has disc",
        ),
        (
            capable(conditions={"dirichlet", "neumann"}),
            problem_on(lv.Rectangle((0, 0), (1, 1)), **ROBIN_TOP),
            r"declared for conditions dirichlet, neumann; the problem has robin",
        ),
        (
            capable(conditions={"dirichlet", "robin"}),
            problem_on(lv.Rectangle((0, 0), (1, 1)), **ROBIN_TOP),
            None,
        ),
        (
            capable(),
            problem_on(lv.Rectangle((0, 0), (1, 1)), BENT),
            r"declared for conductivity scalar; the problem has tensor",
        ),
        (capable(conductivity={"scalar", "tensor"}), problem_on(lv.Rectangle((0, 0), (1, 1)), BENT), None),
        (
            capable(coordinates={"axisymmetric"}),
            problem_on(lv.LShape(1)),
            r"coordinates axisymmetric; .* cartesian",
        ),
        (capable(), problem_on(lv.Interval(0, 1)), None),
    ],
)
def test_problems_beyond_the_declared_capabilities_are_refused_with_the_reason(adapter, problem, reason):
    refusal = adapter.refuses(problem)
    if reason is None:
        assert refusal is None
    else:
        assert re.search(reason, refusal)
        assert refusal.startswith("tide gauge is declared for")


@pytest.mark.parametrize(
    ("returned", "message"),
    [
        (None, r"returned None: end it with `return lv\.Answer\(points, values\)`"),
        (np.ones(5), r"must return an Answer, got ndarray; an array of shape \(5,\) .* `return lv\.Answer"),
        ((NODES, np.ones(5)), r"got tuple; the tuple can be wrapped: `return lv\.Answer\(points, values\)`"),
        (np.sin, r"a function can be wrapped: `return lv\.Answer\(evaluate=f\)`"),
        ({"u": 1}, r"got dict; write `return lv\.Answer"),
        (lv.Refused("no"), r"returned Refused\(\.\.\.\): raise it instead"),
    ],
)
def test_what_is_no_answer_is_refused_and_the_message_shows_how_to_wrap_it(square, returned, message):
    with pytest.raises(lv.AnswerError, match=message):
        as_answer(returned)
    with pytest.raises(lv.AnswerError, match=r"tide gauge on warm pool, n = 8: .*" + message):
        adapted(lambda _problem, _n: returned).solve(square, 8)


def test_bad_answers_name_solver_problem_and_size(square):
    def broken(_problem, _n):
        values = np.ones(5)
        values[4] = np.nan
        return lv.Answer(NODES, values)

    with pytest.raises(
        lv.AnswerError, match=r"tide gauge on warm pool, n = 16: values must be finite, but 1 of 5"
    ):
        adapted(broken).solve(square, 16)
    with pytest.raises(lv.AnswerError, match=r"tide gauge on warm pool, n = 8: points must lie in the shape"):
        adapted(lambda _problem, _n: lv.Answer(NODES + 1, np.ones(5))).solve(square, 8)


def test_the_solvers_own_exceptions_pass_through(square):
    def diverges(_problem, _n):
        raise ArithmeticError("did not converge")

    def declines(_problem, _n):
        raise lv.Refused("flux data do not balance")

    with pytest.raises(ArithmeticError, match="did not converge"):
        adapted(diverges).solve(square, 8)
    with pytest.raises(lv.Refused, match="flux data do not balance") as caught:
        adapted(declines).solve(square, 8)
    assert caught.value.reason == "flux data do not balance"


def test_prints_of_a_solver_go_to_stderr(square, capsys):
    def chatty(_problem, _n):
        print("iteration 1")
        return lv.Answer(NODES, np.ones(5))

    adapted(chatty).solve(square, 8)
    captured = capsys.readouterr()
    assert captured.out == ""
    assert captured.err == "iteration 1\n"


def test_keywords_reach_the_function_only_if_its_signature_has_them(square):
    seen = {}

    def stochastic(_problem, _n, *, seed=0, wanted=None):
        seen.update(seed=seed, wanted=wanted)
        return lv.Answer(NODES, np.ones(5))

    points = np.full((3, 2), 0.5)
    adapted(stochastic).solve(square, 8, points, tolerance=1e-9, initial=None, seed=11)
    adapted(lambda _problem, _n, wanted, seed: stochastic(_problem, _n, wanted=wanted, seed=seed)).solve(
        square, 8, points, seed=11
    )
    assert seen["seed"] == 11
    assert seen["wanted"] is points
    assert ones.solve(square, 8, points, tolerance=1e-9, seed=11).h == 0.125
