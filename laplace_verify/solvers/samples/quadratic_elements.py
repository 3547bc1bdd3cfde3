"""Quadratic triangular elements with curved sides for div(K grad u) = 0 on planar shapes.

A triangle of the linear mesh gets a node in the middle of every side. Where the side stands for a piece of a
curved boundary the node is moved to the nearest point of the piece, and the triangle is bent by its own shape
functions (isoparametric elements), which leaves a gap of O(h^3) to the boundary. Integrals over triangles
use a Gauss rule of degree `DEGREE`, exact where sides are straight; integrals of data over sides one of
degree `ON_SIDES`, with the data of the true boundary (`piece.data` moves points onto it). Nodes on a
Dirichlet piece are held at its data.

In coordinates (r, z) all integrals carry the weight 2 pi r.

Errors are O(h^3) in L2, O(h^2) in the H1 seminorm. With straight sides under curved boundaries O(h^2) and
O(h^(3/2)) would be left.

References
----------
Ciarlet & Raviart 1972, "Interpolation theory over curved elements", Comput. Methods Appl. Mech. Eng. 1,
217-249; Strang & Fix, An Analysis of the Finite Element Method, 1973, section 4.4 (from memory, unchecked).
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

import numpy as np
import scipy.sparse as sp

from laplace_verify.arrays import Array, IntArray, frozen
from laplace_verify.geometry import Shape
from laplace_verify.geometry.meshes import Mesh, triangulate
from laplace_verify.problems import Piece, Problem
from laplace_verify.problems.coordinates import Coordinates, metric
from laplace_verify.solvers.adapter import adapt
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.elements import element
from laplace_verify.solvers.samples.linear_elements import PLANAR, Scheme, assembled, solve_with_elements

__all__ = ["QUADRATIC", "QuadraticMesh", "Samples", "p2_element"]

DEGREE = 5
ON_SIDES = 5
TRIANGLE, SIDE = element("triangle6"), element("line3")
SIDES = ((0, 1), (1, 2), (2, 0))


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class QuadraticMesh(Mesh):
    """A mesh with `triangles` (m, 6), corners first, and `boundary` of (k, 3): both ends, then the middle."""

    @property
    def h(self) -> float:
        """The longest chord of a side."""
        corners = self.points[self.triangles[:, :3]]
        return float(np.max(np.linalg.norm(corners - np.roll(corners, 1, axis=1), axis=2)))

    @property
    def areas(self) -> Array:
        """The areas of the bent triangles, shape (m,)."""
        areas: Array = samples(self, DEGREE).weights.sum(axis=1)
        return areas


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Samples:
    """Quadrature points on all triangles (m, q, 2), weights (m, q), and the shape functions there.

    `shapes` is (q, 6), `gradients` in x and y (m, q, 6, 2).
    """

    points: Array
    weights: Array
    shapes: Array
    gradients: Array


def samples(mesh: Mesh, degree: int) -> Samples:
    """Return the quadrature of a degree on all triangles."""
    at, weights = TRIANGLE.quadrature(degree)
    shapes, slopes = TRIANGLE.shape(at), TRIANGLE.shape_gradient(at)
    nodes = mesh.points[mesh.triangles]
    jacobians = np.einsum("mia,qib->mqab", nodes, slopes)
    return Samples(
        points=np.einsum("qi,mia->mqa", shapes, nodes),
        weights=weights * np.linalg.det(jacobians),
        shapes=shapes,
        gradients=slopes @ np.linalg.inv(jacobians),
    )


def bent(shape: Shape, n: int) -> QuadraticMesh:
    """Return the mesh with n/2 cells along every side, so that nodes are as many as in a linear mesh.

    The nodes in the middle of curved sides are moved onto them.
    """
    mesh = with_middles(triangulate(shape, max(1, n // 2)))
    points = mesh.points.copy()
    for piece in shape.pieces:
        if piece.curved:
            middle = mesh.boundary[piece.name][:, 2]
            points[middle] = piece.project(points[middle])
    return QuadraticMesh(points=frozen(points), triangles=mesh.triangles, boundary=mesh.boundary)


def with_middles(mesh: Mesh) -> QuadraticMesh:
    """Return the mesh with a node in the middle of every side; a side that two triangles share has one."""
    sides = np.concatenate([mesh.triangles[:, pair] for pair in SIDES])
    base, first = len(mesh.points), np.sort(sides, axis=1) @ [len(mesh.points), 1]
    codes, numbers = np.unique(first, return_inverse=True)
    ends = np.stack([codes // base, codes % base], axis=1)
    middles = base + numbers.reshape(3, -1).T

    def three(edges: IntArray) -> IntArray:
        found = base + np.searchsorted(codes, np.sort(edges, axis=1) @ [base, 1])
        return np.concatenate([edges, found[:, np.newaxis]], axis=1)

    return QuadraticMesh(
        points=frozen(np.concatenate([mesh.points, mesh.points[ends].mean(axis=1)])),
        triangles=np.concatenate([mesh.triangles, middles], axis=1),
        boundary={name: three(edges) for name, edges in mesh.boundary.items()},
    )


def stiffness(
    mesh: Mesh, tensor: Array, coordinates: Coordinates = "cartesian", degree: int = DEGREE
) -> sp.csr_array:
    """Assemble the integrals of grad phi_i . K grad phi_j over space."""
    rule = samples(mesh, degree)
    weights = rule.weights * weighted(rule.points, coordinates)
    flows = rule.gradients @ tensor
    elements = np.einsum("mq,mqia,mqja->mij", weights, rule.gradients, flows, optimize=True)
    return assembled(elements, mesh.triangles, len(mesh.points))


def weighted(points: Array, coordinates: Coordinates) -> Array:
    """Return the weight of the coordinates at points (..., 2), shape (...)."""
    return metric(coordinates, points.reshape(-1, 2)).reshape(points.shape[:-1])


def along_sides(mesh: Mesh, sides: IntArray, degree: int) -> Iterator[tuple[Array, Array, Array]]:
    """Yield points on the sides, the three shape functions there, and weights with the length in them."""
    at, weights = SIDE.quadrature(degree)
    nodes = mesh.points[sides]
    shapes, slopes = SIDE.shape(at), SIDE.shape_gradient(at)[..., 0]
    for shape, slope, weight in zip(shapes, slopes, weights, strict=True):
        speed = np.linalg.norm(np.einsum("i,kia->ka", slope, nodes), axis=1)
        yield np.einsum("i,kia->ka", shape, nodes), shape, weight * speed


def boundary_load(
    mesh: Mesh, piece: Piece, coordinates: Coordinates = "cartesian", degree: int = ON_SIDES
) -> Array:
    """Assemble the integrals of g phi_i over a piece."""
    sides = mesh.boundary[piece.name]
    load = np.zeros(len(mesh.points))
    for points, shapes, weights in along_sides(mesh, sides, degree):
        densities = metric(coordinates, points) * piece.data(points)
        np.add.at(load, sides, np.outer(weights * densities, shapes))
    return load


def boundary_mass(
    mesh: Mesh, piece: Piece, coordinates: Coordinates = "cartesian", degree: int = ON_SIDES
) -> sp.csr_array:
    """Assemble the integrals of alpha phi_i phi_j over a piece."""
    sides = mesh.boundary[piece.name]
    elements = np.zeros((len(sides), 3, 3))
    for points, shapes, weights in along_sides(mesh, sides, degree):
        densities = metric(coordinates, points) * piece.alpha(points)
        elements += (weights * densities)[:, np.newaxis, np.newaxis] * np.outer(shapes, shapes)
    return assembled(elements, sides, len(mesh.points))


def masses(mesh: Mesh, coordinates: Coordinates = "cartesian") -> Array:
    """Return the integrals of the shape functions."""
    rule = samples(mesh, DEGREE)
    shares = (rule.weights * weighted(rule.points, coordinates)) @ rule.shapes
    return np.bincount(mesh.triangles.ravel(), shares.ravel(), len(mesh.points)).astype(np.float64)


def value_at(mesh: Mesh, values: Array, points: Array) -> Array:
    """Return the values at a few points."""
    return Answer(**on_triangles(mesh, values)).value_at(points)


def on_triangles(mesh: Mesh, values: Array) -> dict[str, Any]:
    """Return what is handed back: the nodal values and the triangles of six nodes between them."""
    return {"points": mesh.points, "values": values, "cells": {"triangle6": mesh.triangles}}


QUADRATIC = Scheme(
    mesh=bent,
    stiffness=stiffness,
    neumann=boundary_load,
    robin=boundary_mass,
    masses=masses,
    value_at=value_at,
    answer=on_triangles,
)


@adapt(
    name="quadratic finite elements",
    kind="finite element",
    order={"max": 3, "L1": 3, "L2": 3, "H1-semi": 2, "energy": 2},
    dims={2},
    shapes=PLANAR,
    conditions={"dirichlet", "neumann", "robin"},
    conductivity={"scalar", "tensor"},
    coordinates={"cartesian", "axisymmetric"},
    error_floor=1e-11,
    reproduces_degree=2,
)
def p2_element(problem: Problem, n: int) -> Answer:
    """Solve by quadratic triangular elements with n/2 cells, n + 1 nodes along every side."""
    return solve_with_elements(problem, n, QUADRATIC)
