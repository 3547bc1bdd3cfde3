"""Coding mistakes in the walk on spheres, and ways of doing the same right that look like some."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.problems import Problem
from laplace_verify.solvers.samples.seeding import Seeds
from laplace_verify.solvers.samples.walk_on_spheres import (
    SPHERES,
    leaps_onto_spheres,
    solve_by_walks,
    standard_errors,
    walk_on_spheres,
)

__all__ = ["WALK_FAULTS"]


def drifting_leaps(radii: Array, dim: int, generator: np.random.Generator) -> Array:
    """Leap to the right along the first axis in 55 of 100 leaps."""
    leaps = leaps_onto_spheres(radii, dim, generator)
    leaps[:, 0] = np.abs(leaps[:, 0]) * np.where(generator.random(len(leaps)) < 0.55, 1.0, -1.0)
    return leaps


def leaps_from_a_cube(radii: Array, dim: int, generator: np.random.Generator) -> Array:
    """Normalise points of a cube that reaches further to one side."""
    leaps = generator.uniform(-1.0, 1.2, (len(radii), dim))
    leaps *= (radii / np.sqrt((leaps**2).sum(axis=1)))[:, np.newaxis]
    return leaps


def reversed_leaps(radii: Array, dim: int, generator: np.random.Generator) -> Array:
    """Leap in the opposite direction, evenly distributed as before."""
    return -leaps_onto_spheres(radii, dim, generator)


def first_piece_only(problem: Problem, places: Array) -> Array:
    """Take the data of the first piece wherever a walk leaves."""
    piece = next(iter(problem.pieces))
    feet = problem.shape.pieces[piece.name].project(places)
    return piece.data(feet)


def deviations(variance: Array, n: int) -> Array:
    """State the deviation of one walk, not of their mean."""
    del n
    return np.sqrt(variance)


def errors_of_squares(variance: Array, n: int) -> Array:
    """Divide by n what belongs under the root."""
    errors: Array = np.sqrt(variance) / n
    return errors


def quarter_of_errors(variance: Array, n: int) -> Array:
    """State a quarter of the standard error."""
    return 0.25 * standard_errors(variance, n)


FIXED = ("plate-saddle", "plate-wave", "disc-fourier")
BIASED = ("do not get smaller", "diverge", "standard error", "biased", "wrong limit")

SEEDS = Seeds(sample=walk_on_spheres, solve=solve_by_walks, scheme=SPHERES)
WALK_FAULTS = SEEDS.faults

SEEDS.add(
    "thick shell",
    "walks end within a tenth of the shape's size of the boundary",
    replace(SPHERES, shell=0.1),
    kind="early stopping",
    suspects=BIASED,
    shown_by=FIXED,
)
SEEDS.add(
    "drift",
    "leaps go to one side along the first axis more often than to the other",
    replace(SPHERES, leaps=drifting_leaps),
    kind="distribution",
    suspects=BIASED,
    shown_by=FIXED,
)
SEEDS.add(
    "lopsided cube",
    "directions are normalised points of a cube that is not centred",
    replace(SPHERES, leaps=leaps_from_a_cube),
    kind="distribution",
    suspects=BIASED,
    shown_by=FIXED,
)
SEEDS.add(
    "data of the first piece",
    "all walks take the data of the first piece",
    replace(SPHERES, data=first_piece_only),
    kind="wrong side",
    suspects=BIASED,
    shown_by=("plate-saddle", "plate-wave", "annulus-logarithm"),
)
SEEDS.add(
    "standard errors over n",
    "standard errors are s/n instead of s/sqrt(n)",
    replace(SPHERES, errors=errors_of_squares),
    kind="standard error",
    suspects=BIASED,
    shown_by=FIXED,
)
SEEDS.add(
    "quarter of the standard error",
    "standard errors are four times too small",
    replace(SPHERES, errors=quarter_of_errors),
    kind="standard error",
    suspects=BIASED,
    shown_by=FIXED,
)
SEEDS.add(
    "deviation for error",
    "the deviation of one walk is stated for the standard error of their mean",
    replace(SPHERES, errors=deviations),
    kind="standard error",
    effect="accuracy",
    suspects=("standard error",),
    shown_by=FIXED,
)
SEEDS.add(
    "leaps reversed",
    "leaps in the opposite direction: other walks of the same law",
    replace(SPHERES, leaps=reversed_leaps),
    kind="equivalent formulation",
    effect="harmless",
    suspects=(),
    shown_by=("plate-saddle", "disc-fourier"),
)
