"""Linear triangular elements for div(K grad u) = 0 on planar shapes.

On a triangle with corners x_1, x_2, x_3 (counter-clockwise) and area T, the hat function of corner i has the
gradient g_i = rot(x_k - x_j) / (2 T), rot(a, b) = (-b, a), with (i, j, k) in cyclic order. Hence the element
matrix T g_i . K g_j, exact because gradients are constant. Boundary integrals of data use the two-point Gauss
rule on each edge, with the data of the true boundary (`piece.data` moves the points onto it). Corners that
lie on a Dirichlet piece are held at its data.

In coordinates (r, z) all integrals carry the weight 2 pi r: exact on elements, at the Gauss points on edges.

Errors are O(h^2) in L2 and in the maximum norm (up to a logarithm), O(h) in the H1 seminorm; straight edges
under curved boundaries cost no more than that.

References
----------
Strang & Fix, An Analysis of the Finite Element Method, 1973, sections 1.9 and 4.4 (from memory, unchecked).
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from functools import partial
from typing import Any

import numpy as np
import scipy.sparse as sp

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.geometry import Shape
from laplace_verify.geometry.meshes import Mesh, triangulate
from laplace_verify.problems import Piece, Problem
from laplace_verify.problems.coordinates import Coordinates, metric
from laplace_verify.solvers.adapter import adapt
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.samples.levels import level_shift
from laplace_verify.solvers.samples.linear_systems import direct

__all__ = ["LINEAR", "PLANAR", "Scheme", "p1_element", "solve_with_elements"]

HAIR = 1e-8  # of an edge: far more than rounding, far less than any error of discretisation
GAUSS = ((0.5 - 3**-0.5 / 2, 0.5), (0.5 + 3**-0.5 / 2, 0.5))  # place along the edge, weight


def hat_gradients(mesh: Mesh) -> Array:
    """Return the gradients of the three hat functions on every triangle, shape (m, 3, 2)."""
    corners = mesh.points[mesh.triangles]
    opposite = np.roll(corners, 1, axis=1) - np.roll(corners, -1, axis=1)  # x_k - x_j for corner i
    turned = np.stack([-opposite[..., 1], opposite[..., 0]], axis=-1)
    return turned / (2.0 * mesh.areas[:, np.newaxis, np.newaxis])


def stiffness(mesh: Mesh, tensor: Array, coordinates: Coordinates = "cartesian") -> sp.csr_array:
    """Assemble the integrals of grad phi_i . K grad phi_j over space: the weight 2 pi r is linear."""
    gradients = hat_gradients(mesh)
    volumes = mesh.areas * metric(coordinates, mesh.points[mesh.triangles].mean(axis=1))
    elements = volumes[:, np.newaxis, np.newaxis] * (gradients @ tensor @ gradients.transpose(0, 2, 1))
    return assembled(elements, mesh.triangles, len(mesh.points))


def assembled(elements: Array, nodes: IntArray, count: int) -> sp.csr_array:
    """Add element matrices (m, k, k) at the nodes (m, k)."""
    rows = np.repeat(nodes, nodes.shape[1], axis=1).ravel()
    columns = np.tile(nodes, nodes.shape[1]).ravel()
    return sp.csr_array((elements.ravel(), (rows, columns)), shape=(count, count))


def gauss_points(mesh: Mesh, edges: IntArray) -> Iterator[tuple[Array, Array, Array]]:
    """Yield points on the edges, the two hat functions there, and weights with the edge length in them."""
    start, end = mesh.points[edges[:, 0]], mesh.points[edges[:, 1]]
    length = np.linalg.norm(end - start, axis=1)
    for place, weight in GAUSS:
        yield (1.0 - place) * start + place * end, np.array([1.0 - place, place]), weight * length


def boundary_load(mesh: Mesh, piece: Piece, coordinates: Coordinates = "cartesian") -> Array:
    """Assemble the integrals of g phi_i over a piece."""
    edges = mesh.boundary[piece.name]
    load = np.zeros(len(mesh.points))
    for points, hats, weights in gauss_points(mesh, edges):
        densities = metric(coordinates, points) * piece.data(points)
        np.add.at(load, edges, np.outer(weights * densities, hats))
    return load


def boundary_mass(mesh: Mesh, piece: Piece, coordinates: Coordinates = "cartesian") -> sp.csr_array:
    """Assemble the integrals of alpha phi_i phi_j over a piece."""
    edges = mesh.boundary[piece.name]
    elements = np.zeros((len(edges), 2, 2))
    for points, hats, weights in gauss_points(mesh, edges):
        densities = metric(coordinates, points) * piece.alpha(points)
        elements += (weights * densities)[:, np.newaxis, np.newaxis] * np.outer(hats, hats)
    return assembled(elements, edges, len(mesh.points))


def held_values(mesh: Mesh, problem: Problem) -> tuple[BoolArray, Array]:
    """Return which nodes lie on Dirichlet pieces and their values; in a corner the later piece's."""
    held, values = np.zeros(len(mesh.points), np.bool_), np.zeros(len(mesh.points))
    for piece in problem.pieces:
        if piece.kind == "dirichlet":
            nodes = np.unique(mesh.boundary[piece.name])
            held[nodes], values[nodes] = True, piece.data(asked_at(mesh, piece, nodes))
    return held, values


def asked_at(mesh: Mesh, piece: Piece, nodes: IntArray) -> Array:
    """Return where to ask for data at nodes of a piece: there, but a hair inside at two ends in one place.

    The arc of a sector of 360 degrees ends where it starts; the place alone does not tell which limit is due.
    """
    points = mesh.points[nodes].copy()
    edges = mesh.boundary[piece.name]
    first, last = edges[0, :2], edges[-1, 1::-1]
    gap = np.linalg.norm(mesh.points[first[0]] - mesh.points[last[0]])
    if first[0] != last[0] and gap < HAIR * piece.measure:
        for end, neighbour in (first, last):
            points[nodes == end] += HAIR * (mesh.points[neighbour] - mesh.points[end])
    return points


def masses(mesh: Mesh, coordinates: Coordinates = "cartesian") -> Array:
    """Return the integrals of the hat functions; with a linear weight w they are T (w_i + sum w) / 12."""
    weight = metric(coordinates, mesh.points)[mesh.triangles]
    shares = mesh.areas[:, np.newaxis] * (weight + weight.sum(axis=1, keepdims=True)) / 12.0
    return np.bincount(mesh.triangles.ravel(), shares.ravel(), len(mesh.points)).astype(np.float64)


def solved(matrix: sp.csr_array, load: Array, held: BoolArray, values: Array, weights: Array | None) -> Array:
    """Return the nodal values; `weights` says that the constant is free."""
    free = ~held
    carried = load[free] - matrix[free][:, held] @ values[held]
    values = values.copy()
    values[free], _ = direct(matrix[free][:, free].tocsc(), carried, weights)
    return values


def interpolated(mesh: Mesh, values: Array, points: Array) -> Array:
    """Return the values at a few points: the barycentric coordinates in the triangle that fits best."""
    first, gradients = mesh.points[mesh.triangles[:, 0]], hat_gradients(mesh)
    result = np.empty(len(points))
    for k, point in enumerate(points):
        shares = np.einsum("mij,mj->mi", gradients, point - first)
        shares[:, 0] += 1.0
        best = int(np.argmax(shares.min(axis=1)))
        result[k] = shares[best] @ values[mesh.triangles[best]]
    return result


def on_triangles(mesh: Mesh, values: Array) -> dict[str, Any]:
    """Return what is handed back: the nodal values and the triangles between them."""
    return {"points": mesh.points, "values": values, "cells": {"triangle": mesh.triangles}}


# ---- putting it together -------------------------------------------------------------------------


@dataclass(frozen=True, slots=True, kw_only=True)
class Scheme:
    """The decisions that make a solver with nodal finite elements."""

    mesh: Callable[[Shape, int], Mesh] = triangulate
    stiffness: Callable[[Mesh, Array, Coordinates], sp.csr_array] = stiffness
    neumann: Callable[[Mesh, Piece, Coordinates], Array] = boundary_load
    robin: Callable[[Mesh, Piece, Coordinates], sp.csr_array] = boundary_mass
    dirichlet: Callable[[Mesh, Problem], tuple[BoolArray, Array]] = held_values
    masses: Callable[[Mesh, Coordinates], Array] = masses
    solve: Callable[[sp.csr_array, Array, BoolArray, Array, Array | None], Array] = solved
    value_at: Callable[[Mesh, Array, Array], Array] = interpolated
    answer: Callable[[Mesh, Array], Mapping[str, Any]] = on_triangles


LINEAR = Scheme()


def solve_with_elements(problem: Problem, n: int, scheme: Scheme = LINEAR) -> Answer:
    """Solve div(K grad u) = 0 on a planar shape with n cells along every side."""
    mesh = scheme.mesh(problem.shape, n)
    matrix = scheme.stiffness(mesh, problem.tensor, problem.coordinates)
    load = np.zeros(len(mesh.points))
    transfer = sp.csr_array(matrix.shape)
    for piece in problem.pieces:
        if piece.kind in ("neumann", "robin"):
            load += scheme.neumann(mesh, piece, problem.coordinates)
        if piece.kind == "robin":
            transfer = transfer + scheme.robin(mesh, piece, problem.coordinates)
    held, values = scheme.dirichlet(mesh, problem)
    fixed = bool(held.any() or transfer.diagonal().any())
    shares = scheme.masses(mesh, problem.coordinates)
    values = scheme.solve(matrix + transfer, load, held, values, None if fixed else shares)
    if not fixed:
        mean = float(np.average(values, weights=shares))
        values = values + level_shift(problem, mean, partial(scheme.value_at, mesh, values))
    return Answer(h=mesh.h, unknowns=int(np.count_nonzero(~held)), **scheme.answer(mesh, values))


PLANAR = frozenset(
    {
        "polygon",
        "disc",
        "ellipse",
        "annulus",
        "elliptic-ring",
        "sector",
        "half-disc",
        "half-annulus",
        "confocal-parabolas",
        "cone-section",
    }
)


@adapt(
    name="linear finite elements",
    kind="finite element",
    order={"max": 2, "L1": 2, "L2": 2, "H1-semi": 1, "energy": 1},
    dims={2},
    shapes=PLANAR,
    conditions={"dirichlet", "neumann", "robin"},
    conductivity={"scalar", "tensor"},
    coordinates={"cartesian", "axisymmetric"},
    error_floor=1e-11,
    reproduces_degree=1,
)
def p1_element(problem: Problem, n: int) -> Answer:
    """Solve by linear triangular elements."""
    return solve_with_elements(problem, n)
