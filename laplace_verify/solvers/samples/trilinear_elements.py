"""Trilinear hexahedral elements for div(K grad u) = 0 on solids.

On a cell with the map x(xi) from the unit cube and shape functions phi_i that are products of xi_k or 1 -
xi_k, the element matrix is the integral of grad phi_i . K grad phi_j, grad = J^-T grad_xi, by two Gauss
points in each direction; boundary integrals take two in each direction of a face, with the data of the true
boundary (`piece.data` moves the points onto it). Nodes on a Dirichlet piece are held at its data.

Errors are O(h^2) in L2, O(h) in the H1 seminorm; flat faces under curved boundaries cost no more than that.

References
----------
Strang & Fix, An Analysis of the Finite Element Method, 1973, sections 3.3 and 4.4 (from memory, unchecked).
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping

import numpy as np
import scipy.sparse as sp

from laplace_verify.arrays import Array, BoolArray, IntArray
from laplace_verify.problems import Piece, Problem
from laplace_verify.solvers.adapter import adapt
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.cells import CellMesh, determinant, inverse
from laplace_verify.solvers.elements import element
from laplace_verify.solvers.samples.hexahedral_meshes import Hexahedra, hexahedra
from laplace_verify.solvers.samples.levels import level_shift
from laplace_verify.solvers.samples.linear_elements import assembled
from laplace_verify.solvers.samples.linear_systems import conjugate_gradients

__all__ = ["q1_element"]

ORDER = 3  # of Gauss's rule: two points in each direction


@adapt(
    name="trilinear finite elements",
    kind="finite element",
    order={"max": 2, "L1": 2, "L2": 2, "H1-semi": 1, "energy": 1},
    dims={3},
    shapes={"box", "prism-l-shape", "notched-cube", "ball", "spheroid", "spherical-shell", "cylinder"},
    conditions={"dirichlet", "neumann", "robin"},
    conductivity={"scalar", "tensor"},
    error_floor=1e-10,
)
def q1_element(problem: Problem, n: int) -> Answer:
    """Solve on a box, with or without a notch, a ball, spheroid, spherical shell or cylinder."""
    mesh = hexahedra(problem.shape, n)
    count = len(mesh.points)
    matrix, shares = stiffness(mesh, problem.tensor)
    terms = {piece.name: boundary_terms(mesh, piece) for piece in problem.pieces if piece.kind != "dirichlet"}
    load = sum((given for given, _ in terms.values()), start=np.zeros(count))
    transfer = sum((exchange for _, exchange in terms.values()), start=sp.csr_array((count, count)))
    held, values = held_values(mesh, problem)
    fixed, free = bool(held.any() or transfer.diagonal().any()), ~held
    system = matrix + transfer
    carried = load[free] - system[free][:, held] @ values[held]
    values[free], steps = conjugate_gradients(
        system[free][:, free].tocsc(), carried, None if fixed else shares
    )
    if not fixed:
        plain = Answer(mesh.points, values, cells={"hexahedron": mesh.cells})
        values = values + level_shift(problem, float(np.average(values, weights=shares)), plain.value_at)
    return Answer(
        mesh.points,
        values,
        cells={"hexahedron": mesh.cells},
        h=mesh.h,
        unknowns=int(np.count_nonzero(free)),
        fluxes=fluxes(mesh, problem, terms, matrix @ values, values),
        iterations=steps,
    )


def stiffness(mesh: Hexahedra, tensor: Array) -> tuple[sp.csr_array, Array]:
    """Assemble the integrals of grad phi_i . K grad phi_j and of phi_i."""
    count = len(mesh.points)
    matrix, shares = sp.csr_array((count, count)), np.zeros(count)
    block = CellMesh(mesh.points, {"hexahedron": mesh.cells}).blocks[0]
    at, weights = block.element.quadrature(ORDER)
    slopes, hats = block.element.shape_gradient(at), block.element.shape(at)
    for _, part in block.portions(len(at)):
        jacobian = part.jacobian(at)
        volumes = weights * np.abs(determinant(jacobian))
        gradients = slopes @ inverse(jacobian)
        elements = np.einsum("mq,mqia,ab,mqjb->mij", volumes, gradients, tensor, gradients, optimize=True)
        matrix = matrix + assembled(elements, part.nodes, count)
        np.add.at(shares, part.nodes, volumes @ hats)
    return matrix, shares


def gauss_points(mesh: Hexahedra, faces: IntArray) -> Iterator[tuple[Array, Array, Array]]:
    """Yield points on the faces, the four shape functions there, and weights with the area in them."""
    kind, corners = element("quad"), mesh.points[faces]
    at, weights = kind.quadrature(ORDER)
    slopes = kind.shape_gradient(at)
    for hats, slope, weight in zip(kind.shape(at), slopes, weights, strict=True):
        along = np.einsum("mkd,kj->mdj", corners, slope)
        areas = np.sqrt((np.cross(along[..., 0], along[..., 1]) ** 2).sum(axis=1))
        yield np.einsum("k,mkd->md", hats, corners), hats, weight * areas


def boundary_terms(mesh: Hexahedra, piece: Piece) -> tuple[Array, sp.csr_array]:
    """Assemble the integrals of g phi_i and of alpha phi_i phi_j over a piece."""
    faces, count = mesh.boundary[piece.name], len(mesh.points)
    load, elements = np.zeros(count), np.zeros((len(faces), 4, 4))
    for points, hats, weights in gauss_points(mesh, faces):
        np.add.at(load, faces, np.outer(weights * piece.data(points), hats))
        if piece.kind == "robin":
            elements += (weights * piece.alpha(points))[:, None, None] * np.outer(hats, hats)
    return load, assembled(elements, faces, count)


def held_values(mesh: Hexahedra, problem: Problem) -> tuple[BoolArray, Array]:
    """Return which nodes lie on Dirichlet pieces and their values; on an edge the later piece's."""
    held, values = np.zeros(len(mesh.points), np.bool_), np.zeros(len(mesh.points))
    for piece in problem.pieces:
        if piece.kind == "dirichlet":
            nodes = np.unique(mesh.boundary[piece.name])
            held[nodes], values[nodes] = True, piece.data(mesh.points[nodes])
    return held, values


def fluxes(
    mesh: Hexahedra,
    problem: Problem,
    terms: Mapping[str, tuple[Array, sp.csr_array]],
    balance: Array,
    values: Array,
) -> dict[str, float]:
    """Return the integrals of n . K grad u over the pieces: given ones, and what Dirichlet nodes lack.

    What a node on the edge of two Dirichlet pieces lacks cannot be told apart; there the density of each
    piece is the mean of that at the other nodes of its faces.
    """
    entering = {name: given - exchange @ values for name, (given, exchange) in terms.items()}
    lacking = balance - sum(entering.values(), start=np.zeros(len(values)))
    areas = {piece.name: areas_of(mesh, piece) for piece in problem.pieces if piece.kind == "dirichlet"}
    shared = sum((owned > 0.0 for owned in areas.values()), start=np.zeros(len(values), np.int64)) > 1
    found = {name: float(np.sum(part)) for name, part in entering.items()}
    for name, owned in areas.items():
        faces, own = mesh.boundary[name], (owned > 0.0) & ~shared
        density = np.where(own, lacking / np.where(owned > 0.0, owned, 1.0), 0.0)
        known = own[faces].sum(axis=1)
        whole = float(np.mean(density[own])) if own.any() else 0.0
        means = np.where(known > 0, density[faces].sum(axis=1) / np.maximum(known, 1), whole)
        around, count = np.zeros(len(values)), np.zeros(len(values))
        np.add.at(around, faces, np.repeat(means[:, None], 4, axis=1))
        np.add.at(count, faces, 1.0)
        density = np.where(own, density, around / np.maximum(count, 1.0))
        found[name] = float(owned @ density)
    return found


def areas_of(mesh: Hexahedra, piece: Piece) -> Array:
    """Return the integrals of the shape functions over a piece."""
    faces, owned = mesh.boundary[piece.name], np.zeros(len(mesh.points))
    for _, hats, weights in gauss_points(mesh, faces):
        np.add.at(owned, faces, np.outer(weights, hats))
    return owned
