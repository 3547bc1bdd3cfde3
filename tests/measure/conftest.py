"""Solvers whose answers are the exact solution plus a known error, of every form an answer can take."""

import math

import numpy as np
import pytest

import laplace_verify as lv


@pytest.fixture(scope="session")
def plate():
    """e^y cos x, moved off the origin, on a 2 x 1 plate: smooth."""
    field = lv.fields.exp_trig(1).shifted(("0.3", "-0.2"))
    return lv.case(lv.Rectangle((0, 0), (2, 1)), {"left": "neumann"}, field, id="plate")


@pytest.fixture(scope="session")
def rim():
    """e^y cos x on the unit disc."""
    return lv.case(lv.Disc((0, 0), 1), {}, lv.fields.exp_trig(1), id="rim")


def ripple(points):
    """A smooth error that vanishes nowhere on average."""
    return 1.5 + np.sin(2 * points[:, 0]) * np.cos(points[:, -1])


def grid_points(n):
    """(2 n + 1) x (n + 1) nodes of the 2 x 1 plate."""
    x, y = np.meshgrid(np.linspace(0, 2, 2 * n + 1), np.linspace(0, 1, n + 1), indexing="ij")
    return np.column_stack([x.ravel(), y.ravel()])


def grid_cells(n):
    """Its quadrilaterals, counter-clockwise."""
    node = np.arange((2 * n + 1) * (n + 1)).reshape(2 * n + 1, n + 1)
    corners = (node[:-1, :-1], node[1:, :-1], node[1:, 1:], node[:-1, 1:])
    return np.column_stack([corner.ravel() for corner in corners])


@pytest.fixture(scope="session")
def perturbed():
    """Make an adapter whose answer to `case` is u + error(n) ripple, as "callable", "cells" or "cloud"."""

    def make(case, error, form="callable", *, spoil=None, kind="finite difference", order=2, **declared):
        def values(points, n):
            return case.exact.value(points) + error(n) * ripple(points)

        def solve(_problem, n):
            if form == "callable":
                answer = lv.Answer(evaluate=lambda points: values(points, n), h=1 / n, unknowns=2 * n * n)
            else:
                points = grid_points(n)
                nodal = values(points, n)
                if spoil is not None:
                    spoil(nodal, n)
                cells = {"quad": grid_cells(n)} if form == "cells" else None
                answer = lv.Answer(points, nodal, cells, h=1 / n)
            return answer

        return lv.adapt(solve, name="perturbed", kind=kind, order=order, **declared)

    return make


@pytest.fixture(scope="session")
def power():
    """error(n) = 0.1 n^-p."""
    return lambda p: lambda n: 0.1 * math.pow(n, -p)
