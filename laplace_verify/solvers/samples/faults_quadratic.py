"""Coding mistakes in quadratic finite elements, and ways of doing the same right that look like some."""

from __future__ import annotations

from dataclasses import replace
from functools import partial
from typing import Any

import numpy as np
import scipy.sparse as sp

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.geometry import Shape
from laplace_verify.geometry.meshes import Mesh, triangulate
from laplace_verify.problems import Piece, Problem
from laplace_verify.problems.coordinates import Coordinates
from laplace_verify.solvers.samples import linear_elements
from laplace_verify.solvers.samples import quadratic_elements as sound
from laplace_verify.solvers.samples.linear_elements import solve_with_elements
from laplace_verify.solvers.samples.quadratic_elements import QUADRATIC, QuadraticMesh, p2_element
from laplace_verify.solvers.samples.seeding import Seeds

__all__ = ["QUADRATIC_FAULTS"]


def straight(shape: Shape, n: int) -> QuadraticMesh:
    """Leave the nodes in the middle of sides on their chords."""
    return sound.with_middles(triangulate(shape, max(1, n // 2)))


def permuted_sides(mesh: Mesh, tensor: Array, coordinates: Coordinates) -> sp.csr_array:
    """Take the nodes in the middle of sides in the order of the opposite corners."""
    triangles = mesh.triangles[:, [0, 1, 2, 4, 5, 3]]
    return sound.stiffness(replace(mesh, triangles=triangles), tensor, coordinates)


def interpolated_middles(mesh: Mesh, problem: Problem) -> tuple[BoolArray, Array]:
    """Hold nodes in the middle of sides at the mean of both ends."""
    held, values = linear_elements.held_values(mesh, problem)
    for piece in problem.pieces:
        if piece.kind == "dirichlet":
            sides = mesh.boundary[piece.name]
            values[sides[:, 2]] = piece.data(mesh.points[sides[:, :2]].reshape(-1, 2)).reshape(-1, 2).mean(1)
    return held, values


def interpolated_influx(mesh: Mesh, piece: Piece, coordinates: Coordinates) -> Array:
    """Integrate the quadratic through the data at the nodes of every side: of the same order."""
    sides = mesh.boundary[piece.name]
    load = np.zeros(len(mesh.points))
    data = piece.data(mesh.points[sides].reshape(-1, 2)).reshape(sides.shape)
    for points, shapes, weights in sound.along_sides(mesh, sides, sound.ON_SIDES):
        densities = sound.weighted(points, coordinates) * (data @ shapes)
        np.add.at(load, sides, np.outer(weights * densities, shapes))
    return load


def corners_only(mesh: Mesh, values: Array) -> dict[str, Any]:
    """Hand back the corners alone: linear interpolation of quadratic elements."""
    used, corners = np.unique(mesh.triangles[:, :3], return_inverse=True)
    cells = {"triangle": corners.reshape(-1, 3)}
    return {"points": mesh.points[used], "values": values[used], "cells": cells}


FLUX = ("plate-flux-top", "plate-flux-left", "plate-flux-bottom")
ROUND = ("disc-fourier", "disc-convection", "annulus-convection")
FIXED = ("plate-wave", "plate-cubic", "disc-fourier")

SEEDS = Seeds(sample=p2_element, solve=solve_with_elements, scheme=QUADRATIC)
QUADRATIC_FAULTS = SEEDS.faults

SEEDS.add(
    "straight sides",
    "sides under curved boundaries stay straight",
    replace(QUADRATIC, mesh=straight),
    kind="curved boundary",
    suspects=("curved boundary",),
    shown_by=ROUND,
)
SEEDS.add(
    "one point on a side",
    "prescribed flux by the one-point rule, too few points for quadratic elements",
    replace(QUADRATIC, neumann=partial(sound.boundary_load, degree=1)),
    kind="under-integration",
    suspects=("Neumann condition", "Neumann data", "neumann on", "second normal derivative", "Robin"),
    shown_by=FLUX,
)
SEEDS.add(
    "one point for alpha",
    "Robin's alpha u by the one-point rule, too few points for quadratic elements",
    replace(QUADRATIC, robin=partial(sound.boundary_mass, degree=1)),
    kind="under-integration",
    suspects=("Robin", "robin on"),
    shown_by=("plate-convection-all-round", "wall-mixed-conditions", "disc-convection"),
)
SEEDS.add(
    "one point in a triangle",
    "element matrices by the one-point rule, too few points for quadratic elements",
    replace(QUADRATIC, stiffness=partial(sound.stiffness, degree=1)),
    kind="under-integration",
    suspects=("do not get smaller", "lose one order", "every"),
    shown_by=("plate-wave", "plate-cubic"),
)
SEEDS.add(
    "middles permuted",
    "nodes in the middle of sides are numbered as if each lay opposite its corner",
    replace(QUADRATIC, stiffness=permuted_sides),
    kind="node numbering",
    suspects=("do not get smaller", "diverge"),
    shown_by=FIXED,
)
SEEDS.add(
    "middles interpolated",
    "Dirichlet data in the middle of sides are the means of both ends",
    replace(QUADRATIC, dirichlet=interpolated_middles),
    kind="Dirichlet enforcement",
    suspects=("Dirichlet", "lose one order"),
    shown_by=FIXED,
)
SEEDS.add(
    "corners only",
    "values at corners are handed back, between them linear interpolation",
    replace(QUADRATIC, answer=corners_only),
    kind="evaluation",
    suspects=("lose one order", "between"),
    shown_by=FIXED,
)
SEEDS.add(
    "more quadrature points",
    "integrals by Gauss rules of degree 8: as accurate as before",
    replace(
        QUADRATIC,
        stiffness=partial(sound.stiffness, degree=8),
        neumann=partial(sound.boundary_load, degree=8),
    ),
    kind="under-integration",
    effect="harmless",
    suspects=(),
    shown_by=(*FLUX, "disc-convection"),
)
SEEDS.add(
    "fewest quadrature points",
    "element matrices by a rule of degree 2, exact on straight sides and enough on bent ones",
    replace(QUADRATIC, stiffness=partial(sound.stiffness, degree=2)),
    kind="under-integration",
    effect="harmless",
    suspects=(),
    shown_by=(*ROUND, "plate-tensor-oblique-fixed"),
)
SEEDS.add(
    "flux interpolated",
    "prescribed flux replaced by its quadratic interpolation on every side: of the same order",
    replace(QUADRATIC, neumann=interpolated_influx),
    kind="under-integration",
    effect="harmless",
    suspects=(),
    shown_by=(*FLUX, "disc-convection"),
)
