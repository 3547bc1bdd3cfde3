"""Coding mistakes in the method of fundamental solutions, and ways of doing the same right."""

from __future__ import annotations

import math
from dataclasses import replace
from functools import partial

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.geometry import Shape
from laplace_verify.problems import Piece, Problem
from laplace_verify.solvers.samples import source_points as sound
from laplace_verify.solvers.samples.seeding import Seeds
from laplace_verify.solvers.samples.source_points import (
    CONFOCAL,
    FarField,
    Sources,
    fundamental_solutions,
    solve_by_sources,
)

__all__ = ["SOURCE_FAULTS"]


def decimal_logarithms(points: Array, sources: Array) -> Array:
    """Return the logarithm to the base ten of the distances."""
    return sound.logarithms(points, sources) / math.log(10.0)


def inverse_of_distance(points: Array, sources: Array) -> Array:
    """Return 1/|x - s|, the fundamental solution of space."""
    return np.exp(-sound.logarithms(points, sources))


def inward_in_holes(
    piece: Piece, problem: Problem, curves: list[Array], n: int, far: FarField
) -> tuple[Array, Array]:
    """Take the normal on inner circles towards the shape."""
    rows, load = sound.condition_rows(piece, problem, curves, n, far)
    return (rows, -load) if sound.in_hole(piece) and piece.kind == "neumann" else (rows, load)


def equal_weights(
    piece: Piece, problem: Problem, curves: list[Array], n: int, far: FarField
) -> tuple[Array, Array]:
    """Leave the weights of the least squares out: another norm to minimise."""
    rows, load = sound.condition_rows(piece, problem, curves, n, far)
    count = len(load)
    return rows / math.sqrt(piece.measure / count), load / math.sqrt(piece.measure / count)


def halved_data(
    piece: Piece, problem: Problem, curves: list[Array], n: int, far: FarField
) -> tuple[Array, Array]:
    """Take half of a prescribed flux, as if half went outwards."""
    rows, load = sound.condition_rows(piece, problem, curves, n, far)
    return (rows, 0.5 * load) if piece.kind == "neumann" else (rows, load)


def half_of_constant(
    piece: Piece, problem: Problem, curves: list[Array], n: int, far: FarField
) -> tuple[Array, Array]:
    """Take half of the constant in alpha u."""
    rows, load = sound.condition_rows(piece, problem, curves, n, far)
    if piece.kind == "robin":
        rows[:, -1] *= 0.5
    return rows, load


def only_outside(shape: Shape, n: int) -> list[Array]:
    """Put all sources around the shape and none into its hole."""
    curves = sound.source_curves(shape, n)
    if len(curves) == 1:
        return curves
    return [curves[0], sound.confocal(np.zeros(2), (4.0 * shape.extent, 4.0 * shape.extent), 1.0, n)]


def no_far_charge(problem: Problem) -> FarField:
    """Forget the charge that grows at infinity."""
    return replace(FarField.of(problem), charge=0.0)


def no_far_flow(problem: Problem) -> FarField:
    """Forget the flow at infinity."""
    return replace(FarField.of(problem), vector=np.zeros(2))


def reversed_gradient(solution: Sources, points: Array) -> Array:
    """Hand back the flow down the gradient."""
    return -solution.gradient(points)


def gradient_of_unit_charges(solution: Sources, points: Array) -> Array:
    """Divide by the 2 pi of the fundamental solution, which the strengths contain."""
    return solution.gradient(points) / (2.0 * math.pi)


def single_precision(rows: Array, load: Array) -> Array:
    """Solve in 32 bits."""
    found = sound.truncated_least_squares(rows.astype(np.float32), load.astype(np.float32), 1e-7)
    return found.astype(np.float64)


FIXED = ("disc-fourier", "annulus-logarithm", "disc-source-near")
EVERYWHERE = ("do not get smaller", "diverge", "wrong limit")

SEEDS = Seeds(sample=fundamental_solutions, solve=solve_by_sources, scheme=CONFOCAL)
SOURCE_FAULTS = SEEDS.faults

SEEDS.add(
    "sources in space",
    "conditions on u are put on sums of 1/r, the fundamental solution of space",
    replace(CONFOCAL, rows=partial(sound.condition_rows, kernel=inverse_of_distance)),
    kind="fundamental solution",
    suspects=(*EVERYWHERE, "Dirichlet"),
    shown_by=FIXED,
)
SEEDS.add(
    "two logarithms",
    "conditions on u use the logarithm to the base ten, fluxes and results the natural one",
    replace(CONFOCAL, rows=partial(sound.condition_rows, kernel=decimal_logarithms)),
    kind="fundamental solution",
    suspects=(*EVERYWHERE, "Dirichlet"),
    shown_by=(*FIXED, "disc-convection"),
)
SEEDS.add(
    "normals of holes",
    "normals on inner circles point into the shape; invisible without a flux in a hole",
    replace(CONFOCAL, rows=inward_in_holes),
    kind="normal orientation",
    suspects=("neumann on inner", "Neumann condition", "Neumann data"),
    shown_by=("annulus-flux-inside",),
)
SEEDS.add(
    "half the flux",
    "half of a prescribed flux is taken",
    replace(CONFOCAL, rows=halved_data),
    kind="half-cell factor",
    suspects=("Neumann condition", "Neumann data", "neumann on", "second normal derivative"),
    shown_by=("disc-flux", "annulus-flux-inside", "bar-elliptic-twisted"),
)
SEEDS.add(
    "constant in alpha u",
    "alpha u takes half of the constant",
    replace(CONFOCAL, rows=half_of_constant),
    kind="Robin coefficient",
    suspects=("Robin", "robin on"),
    shown_by=("disc-convection", "ellipse-convection"),
)
SEEDS.add(
    "no sources in the hole",
    "all sources lie around the shape: what a hole radiates cannot be made; invisible without holes",
    replace(CONFOCAL, curves=only_outside),
    kind="fundamental solution",
    suspects=("annulus", "inner"),
    shown_by=("annulus-logarithm", "annulus-convection", "annulus-flux-inside"),
)
SEEDS.add(
    "charge at infinity",
    "the net charge that is asked for at infinity is forgotten",
    replace(CONFOCAL, far=no_far_charge),
    kind="behaviour at infinity",
    suspects=("infinity", "unbounded", "exterior", "tag"),
    shown_by=("ellipse-of-unit-capacity", "pile-with-circulation"),
)
SEEDS.add(
    "flow at infinity",
    "the uniform flow that is asked for at infinity is forgotten",
    replace(CONFOCAL, far=no_far_flow),
    kind="behaviour at infinity",
    suspects=("infinity", "unbounded", "exterior", "tag"),
    shown_by=("pile-in-tidal-stream", "hull-stream-function", "hull-potential"),
)
SEEDS.add(
    "gradients reversed",
    "gradients are handed back with the sign of a flux",
    replace(CONFOCAL, gradient=reversed_gradient),
    kind="gradient recovery",
    effect="accuracy",
    suspects=("gradient",),
    shown_by=("disc-fourier", "annulus-logarithm", "disc-flux"),
)
SEEDS.add(
    "gradients of unit charges",
    "gradients are handed back for the fundamental solution with its 2 pi, values for that without",
    replace(CONFOCAL, gradient=gradient_of_unit_charges),
    kind="gradient recovery",
    effect="accuracy",
    suspects=("gradient",),
    shown_by=("disc-fourier", "annulus-logarithm", "disc-flux"),
)
SEEDS.add(
    "strengths in single precision",
    "the least squares are solved in 32 bits",
    replace(CONFOCAL, solve=single_precision),
    kind="reduced precision",
    effect="accuracy",
    suspects=("single precision",),
    shown_by=("disc-fourier", "annulus-logarithm", "disc-convection"),
)
SEEDS.add(
    "loose truncation",
    "singular values below 1e-4 of the largest are left out",
    replace(CONFOCAL, solve=partial(sound.truncated_least_squares, cut=1e-4)),
    kind="early stopping",
    effect="accuracy",
    suspects=("tolerance", "constant"),
    shown_by=("disc-source-near",),
)
SEEDS.add(
    "unweighted least squares",
    "least squares without weights: another norm",
    replace(CONFOCAL, rows=equal_weights),
    kind="equivalent formulation",
    effect="harmless",
    suspects=(),
    shown_by=(*FIXED, "annulus-convection"),
)
SEEDS.add(
    "sources farther out",
    "sources on curves three times as wide instead of twice",
    replace(CONFOCAL, curves=partial(sound.source_curves, dilation=3.0)),
    kind="equivalent formulation",
    effect="harmless",
    suspects=(),
    shown_by=("disc-fourier", "disc-convection", "annulus-logarithm"),
)
