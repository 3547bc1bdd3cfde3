"""Walk on spheres: the Dirichlet problem solved at single points by random walks.

u(x) is the mean of the boundary data over the exit points of Brownian motion started at x (Kakutani 1944). In
one leap the motion leaves the largest disc or ball about x that fits into the shape, at a point distributed
evenly over its boundary. A walk that comes within `SHELL` of the boundary takes the data at the nearest
boundary point, which biases u by O(SHELL), far below any statistical error. n is the number of walks a point.

References
----------
Muller 1956, "Some continuous Monte Carlo methods for the Dirichlet problem", Ann. Math. Statist. 27, 569-589
(from memory, unchecked).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from laplace_verify.arrays import Array, blocks
from laplace_verify.problems import Problem
from laplace_verify.solvers.adapter import adapt
from laplace_verify.solvers.answer import Answer

__all__ = ["SPHERES", "Walk", "solve_by_walks", "walk_on_spheres"]

SHELL = 1e-7  # of the shape's extent
MOST_POINTS = 100
WALKERS = 25_000  # at a time
MOST_LEAPS = 10_000  # the mean number is about log(1/SHELL): a walk that is longer is lost


def exit_values(
    problem: Problem, starts: Array, generator: np.random.Generator, walk: Walk | None = None
) -> Array:
    """Return the boundary data where walks from the points (m, d) leave the shape, shape (m,)."""
    walk, shape = walk or SPHERES, problem.shape
    reach = walk.shell * shape.extent
    places, walking = starts.copy(), np.arange(len(starts))
    for _ in range(MOST_LEAPS):
        radii = shape.distance(places[walking])
        going = radii > reach
        walking, radii = walking[going], radii[going]
        if not len(walking):
            break
        places[walking] += walk.leaps(radii, shape.dim, generator)
    return walk.data(problem, places)


def leaps_onto_spheres(radii: Array, dim: int, generator: np.random.Generator) -> Array:
    """Return vectors (m, d) of these lengths, evenly distributed over all directions."""
    leaps = generator.standard_normal((len(radii), dim))
    leaps *= (radii / np.sqrt((leaps**2).sum(axis=1)))[:, np.newaxis]
    return leaps


def data_nearest(problem: Problem, places: Array) -> Array:
    """Return the data at the boundary point nearest to each of the places (m, d), shape (m,)."""
    feet = np.stack([piece.project(places) for piece in problem.shape.pieces])
    nearest = ((feet - places) ** 2).sum(axis=2).argmin(axis=0)
    values = np.empty(len(places))
    for k, piece in enumerate(problem.shape.pieces):
        chosen = nearest == k
        if chosen.any():
            values[chosen] = problem.pieces[piece.name].data(feet[k][chosen])
    return values


def standard_errors(variance: Array, n: int) -> Array:
    """Return the standard errors of means of n values."""
    errors: Array = np.sqrt(variance / n)
    return errors


@dataclass(frozen=True, slots=True, kw_only=True)
class Walk:
    """The decisions that make a solver with walks."""

    shell: float = SHELL
    leaps: Callable[[Array, int, np.random.Generator], Array] = leaps_onto_spheres
    data: Callable[[Problem, Array], Array] = data_nearest
    errors: Callable[[Array, int], Array] = standard_errors


SPHERES = Walk()


def solve_by_walks(problem: Problem, n: int, wanted: Array, seed: int, scheme: Walk = SPHERES) -> Answer:
    """Solve with n walks from each of the wanted points, at most 100."""
    points = wanted[:MOST_POINTS]
    generator = np.random.default_rng([seed, n])
    total, squares = np.zeros(len(points)), np.zeros(len(points))
    for part in blocks(n, max(WALKERS // len(points), 1)):
        walks = part.stop - part.start
        starts = np.repeat(points, walks, axis=0)
        found = exit_values(problem, starts, generator, scheme).reshape(len(points), walks)
        total += found.sum(axis=1)
        squares += (found**2).sum(axis=1)
    mean = total / n
    variance = np.maximum(squares / n - mean**2, 0.0) * n / max(n - 1, 1)
    bias = SHELL * float(np.max(np.abs(mean), initial=1.0))  # all that is left where the data are constant
    errors = scheme.errors(variance, n) + bias
    return Answer(points, mean, samples=n, standard_error=errors, unknowns=n * len(points))


@adapt(
    name="walk on spheres",
    kind="stochastic",
    order=0.5,
    dims={2, 3},
    conditions={"dirichlet"},
    sizes=(50, 200, 800, 3200),
)
def walk_on_spheres(problem: Problem, n: int, wanted: Array, seed: int) -> Answer:
    """Solve with n walks from each of the wanted points, at most 100."""
    return solve_by_walks(problem, n, wanted, seed)
