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

import numpy as np

from laplace_verify.arrays import Array, blocks
from laplace_verify.problems import Problem
from laplace_verify.solvers.adapter import adapt
from laplace_verify.solvers.answer import Answer

__all__ = ["walk_on_spheres"]

SHELL = 1e-7  # of the shape's extent
MOST_POINTS = 100
WALKERS = 25_000  # at a time
MOST_LEAPS = 10_000  # the mean number is about log(1/SHELL): a walk that is longer is lost


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
    points = wanted[:MOST_POINTS]
    generator = np.random.default_rng([seed, n])
    total, squares = np.zeros(len(points)), np.zeros(len(points))
    for part in blocks(n, max(WALKERS // len(points), 1)):
        walks = part.stop - part.start
        found = exit_values(problem, np.repeat(points, walks, axis=0), generator).reshape(len(points), walks)
        total += found.sum(axis=1)
        squares += (found**2).sum(axis=1)
    mean = total / n
    variance = np.maximum(squares / n - mean**2, 0.0) * n / max(n - 1, 1)
    bias = SHELL * float(np.max(np.abs(mean), initial=1.0))  # all that is left where the data are constant
    return Answer(
        points, mean, samples=n, standard_error=np.sqrt(variance / n) + bias, unknowns=n * len(points)
    )


def exit_values(problem: Problem, starts: Array, generator: np.random.Generator) -> Array:
    """Return the boundary data where walks from the points (m, d) leave the shape, shape (m,)."""
    shape = problem.shape
    reach = SHELL * shape.extent
    places, walking = starts.copy(), np.arange(len(starts))
    for _ in range(MOST_LEAPS):
        radii = shape.distance(places[walking])
        going = radii > reach
        walking, radii = walking[going], radii[going]
        if not len(walking):
            break
        leaps = generator.standard_normal((len(walking), shape.dim))
        leaps *= (radii / np.sqrt((leaps**2).sum(axis=1)))[:, np.newaxis]
        places[walking] += leaps
    return data_nearest(problem, places)


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
