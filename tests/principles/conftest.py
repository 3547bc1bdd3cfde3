"""Twins of the five-point sample, each with one thing wrong, and solvers of other makes."""

from dataclasses import replace

import numpy as np
import pytest

from laplace_verify.solvers import Adapter, Answer, Refused, adapt
from laplace_verify.solvers.samples import chebyshev, five_point
from laplace_verify.solvers.samples.finite_difference import SCHEME, box_stencil, five_point_with


def changed(change, name="twin", **declared) -> Adapter:
    """Return the five-point solver with `change(problem, n, answer)` in place of its answer."""

    def solve(problem, n):
        return change(problem, n, five_point(problem, n))

    return replace(five_point, function=solve, name=name, **declared)


def with_values(answer, values):
    return Answer(answer.points, values, cells=answer.cells, h=answer.h)


@pytest.fixture(scope="session")
def twins():
    """Solvers that are wrong, by name."""
    rng = np.random.default_rng(11)

    def nan_in_one_node(_problem, _n, answer):
        values = answer.values.copy()
        values[len(values) // 2] = np.nan
        return with_values(answer, values)

    def overshoots(_problem, _n, answer):
        middle = np.mean(answer.values)
        return with_values(answer, middle + 1.2 * (answer.values - middle))

    def raises_on_neumann(problem, _n, answer):
        if any(piece.kind == "neumann" for piece in problem.pieces):
            raise RuntimeError("no flux file was found")
        return answer

    def declines(_problem, _n, _answer):
        raise Refused("the pump is switched off")

    def screened(grid, tensor):  # solves div grad u = u: the stencil is no longer that of Laplace's equation
        balance = box_stencil(grid, tensor).tolil()
        balance.setdiag(balance.diagonal() + grid.node_volumes())
        return balance.tocsr()

    return {
        "adds a constant": changed(lambda p, n, a: with_values(a, a.values + 0.01)),
        "overshoots": changed(overshoots),
        "nan": changed(nan_in_one_node),
        "raises on some": changed(raises_on_neumann),
        "declines": changed(declines),
        "not repeatable": changed(
            lambda p, n, a: with_values(a, a.values + 0.01 * rng.standard_normal(len(a.values)))
        ),
        "clips": changed(lambda p, n, a: with_values(a, np.maximum(a.values, 0.0))),
        "cuts off": changed(lambda p, n, a: with_values(a, np.where(np.abs(a.values) < 0.01, 0.0, a.values))),
        "drifts": changed(lambda p, n, a: with_values(a, a.values + 0.1 * a.points[:, 0])),
        "bulges": changed(lambda p, n, a: with_values(a, a.values + 0.1 * a.points[:, 0] ** 2)),
        "screened": five_point_with(replace(SCHEME, stencil=screened), "screened"),
        "infinite": replace(chebyshev, function=_infinite, name="infinite"),
    }


def _infinite(problem, n):
    answer = chebyshev(problem, n)
    return Answer(evaluate=lambda x: np.where(x[:, 0] > 0.5, np.nan, answer.value_at(x)))


@pytest.fixture(scope="session")
def cloud():
    """The five-point solver without cells: values at nodes only."""
    return changed(lambda p, n, a: Answer(a.points, a.values, h=a.h), name="cloud")


@adapt(
    name="walks",
    kind="stochastic",
    order=0.5,
    dims={2},
    shapes={"rectangle"},
    conditions={"dirichlet"},
)
def noisy(problem, n, seed=0):
    """Return the five-point answer with noise that it reports honestly."""
    answer = five_point(problem, 12)
    error = 0.05 * np.max(np.abs(answer.values)) / n
    noise = np.random.default_rng([seed, n]).normal(scale=error, size=len(answer.values))
    return Answer(answer.points, answer.values + noise, cells=answer.cells, samples=n, standard_error=error)


@pytest.fixture(scope="session")
def walks():
    """A stochastic solver that reports its standard error."""
    return noisy
