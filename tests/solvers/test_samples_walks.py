"""The walk on spheres: repeatable, unbiased, and within its statistical error of known values."""

import numpy as np

import laplace_verify as lv
from laplace_verify.solvers.samples import walk_on_spheres
from laplace_verify.solvers.samples.walk_on_spheres import exit_values

POINTS = np.array([[0.5, 0.5], [0.5, 0.25], [0.25, 0.5], [0.75, 0.5]])  # a solver is asked for four or more


def square():
    """Top of the unit square at 1, the rest at 0: 1/4 in the centre, because the four rotations add to 1."""
    sides = {name: lv.dirichlet(float(name == "top")) for name in ("left", "right", "bottom", "top")}
    return lv.problem(lv.Rectangle((0, 0), (1, 1)), sides)


def test_a_square_with_one_hot_side_comes_out_within_four_standard_errors():
    # The second value: sine series summed with mpmath 1.4.1 at 30 and at 50 digits.
    answer = walk_on_spheres.solve(square(), 4000, POINTS, seed=1)
    errors = np.abs(answer.values[:2] - [0.25, 0.0954141179666134])
    assert (errors < 4 * answer.standard_error[:2]).all()
    assert answer.standard_error[0] < 0.008  # sqrt(3/16/4000)


def test_the_same_seed_gives_the_same_bytes_and_another_seed_another_answer():
    first, again, other = (
        walk_on_spheres.solve(square(), 50, POINTS, seed=seed).values for seed in (3, 3, 4)
    )
    assert first.tobytes() == again.tobytes()
    assert first.tobytes() != other.tobytes()


def test_a_walk_from_the_boundary_takes_the_data_there():
    top = np.array([[0.3, 1.0]])
    assert exit_values(square(), top, np.random.default_rng(0)).tolist() == [1.0]
