"""Coding mistakes in linear finite elements, and ways of doing the same right that look like some."""

from __future__ import annotations

from dataclasses import replace
from functools import partial
from typing import Any

import numpy as np
import scipy.sparse as sp
from scipy.sparse.linalg import splu

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.geometry import Shape
from laplace_verify.geometry.meshes import Mesh, triangulate
from laplace_verify.problems import Piece, Problem
from laplace_verify.problems.coordinates import Coordinates, metric
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.samples import linear_elements as sound
from laplace_verify.solvers.samples.linear_elements import LINEAR, p1_element, solve_with_elements
from laplace_verify.solvers.samples.seeding import Seeds

__all__ = ["ELEMENT_FAULTS"]

COARSE = 4  # cells along a side of the mesh that is refined


def halved_influx(mesh: Mesh, piece: Piece, coordinates: Coordinates) -> Array:
    """Take half of every edge, as when each of its two nodes gets a half of half of it."""
    return 0.5 * sound.boundary_load(mesh, piece, coordinates)


def influx_at_starts(mesh: Mesh, piece: Piece, coordinates: Coordinates) -> Array:
    """Take the data at the first node of every edge for the whole edge."""
    edges = mesh.boundary[piece.name]
    starts = mesh.points[edges[:, 0]]
    density = metric(coordinates, starts) * piece.data(starts)
    lengths = np.linalg.norm(mesh.points[edges[:, 1]] - starts, axis=1)
    load = np.zeros(len(mesh.points))
    np.add.at(load, edges, np.repeat((0.5 * density * lengths)[:, np.newaxis], 2, axis=1))
    return load


def influx_by_midpoints(mesh: Mesh, piece: Piece, coordinates: Coordinates) -> Array:
    """Take the data in the middle of every edge: exact enough for linear elements."""
    edges = mesh.boundary[piece.name]
    middles = mesh.points[edges].mean(axis=1)
    density = metric(coordinates, middles) * piece.data(middles)
    lengths = np.linalg.norm(mesh.points[edges[:, 1]] - mesh.points[edges[:, 0]], axis=1)
    load = np.zeros(len(mesh.points))
    np.add.at(load, edges, np.repeat((0.5 * density * lengths)[:, np.newaxis], 2, axis=1))
    return load


def influx_without_first_edge(mesh: Mesh, piece: Piece, coordinates: Coordinates) -> Array:
    """Begin the loop over the edges at 1."""
    boundary = mesh.boundary | {piece.name: mesh.boundary[piece.name][1:]}
    return sound.boundary_load(replace(mesh, boundary=boundary), piece, coordinates)


def diagonal_only(mesh: Mesh, tensor: Array, coordinates: Coordinates) -> sp.csr_array:
    """Leave out what flows across a slope: K_xy = 0."""
    return sound.stiffness(mesh, np.diag(np.diag(tensor)), coordinates)


def transposed(mesh: Mesh, tensor: Array, coordinates: Coordinates) -> sp.csr_array:
    """Take the transposed conductivity, which is the conductivity."""
    return sound.stiffness(mesh, tensor.T, coordinates)


def exchanged_axes(mesh: Mesh, tensor: Array, coordinates: Coordinates) -> sp.csr_array:
    """Exchange K_xx and K_yy."""
    return sound.stiffness(mesh, tensor[::-1, ::-1], coordinates)


def without_weight(mesh: Mesh, tensor: Array, coordinates: Coordinates) -> sp.csr_array:
    """Leave 2 pi r out of the element matrices."""
    del coordinates
    return sound.stiffness(mesh, tensor)


def weight_of_outer_corner(mesh: Mesh, tensor: Array, coordinates: Coordinates) -> sp.csr_array:
    """Take r at the largest radius of a triangle instead of at its centre."""
    gradients = sound.hat_gradients(mesh)
    weights = metric(coordinates, mesh.points)[mesh.triangles].max(axis=1)
    volumes = mesh.areas * weights
    elements = volumes[:, np.newaxis, np.newaxis] * (gradients @ tensor @ gradients.transpose(0, 2, 1))
    return sound.assembled(elements, mesh.triangles, len(mesh.points))


def mean_area(mesh: Mesh, tensor: Array, coordinates: Coordinates) -> sp.csr_array:
    """Give all triangles the same area, as on a uniform grid."""
    gradients = sound.hat_gradients(mesh)
    volumes = mesh.areas.mean() * metric(coordinates, mesh.points[mesh.triangles].mean(axis=1))
    elements = volumes[:, np.newaxis, np.newaxis] * (gradients @ tensor @ gradients.transpose(0, 2, 1))
    return sound.assembled(elements, mesh.triangles, len(mesh.points))


def no_transfer(mesh: Mesh, piece: Piece, coordinates: Coordinates) -> sp.csr_array:
    """Keep the data of a Robin condition and forget alpha u, all but a rest that keeps the matrix regular."""
    return 1e-6 * sound.boundary_mass(mesh, piece, coordinates)


def reversed_transfer(mesh: Mesh, piece: Piece, coordinates: Coordinates) -> sp.csr_array:
    """Take alpha u to the wrong side of the equation."""
    return -sound.boundary_mass(mesh, piece, coordinates)


def lumped_transfer(mesh: Mesh, piece: Piece, coordinates: Coordinates) -> sp.csr_array:
    """Integrate alpha phi_i phi_j by the trapezoidal rule."""
    mass = sound.boundary_mass(mesh, piece, coordinates)
    return sp.diags_array(mass.sum(axis=1)).tocsr()


def neighbours_values(mesh: Mesh, problem: Problem) -> tuple[BoolArray, Array]:
    """Give every held node on a piece the data of the next one."""
    held, values = sound.held_values(mesh, problem)
    for piece in problem.pieces:
        if piece.kind == "dirichlet":
            edges = mesh.boundary[piece.name]
            values[edges[:, 0]] = piece.data(mesh.points[edges[:, 1]])
    return held, values


def penalised(
    matrix: sp.csr_array, load: Array, held: BoolArray, values: Array, weights: Array | None, factor: float
) -> Array:
    """Pull the held nodes to their values by springs of a fixed strength instead of holding them."""
    if not held.any():
        return sound.solved(matrix, load, held, values, weights)
    return splu((matrix + factor * sp.diags_array(held * 1.0)).tocsc()).solve(load + factor * held * values)


def refined_penalty(
    matrix: sp.csr_array, load: Array, held: BoolArray, values: Array, weights: Array | None
) -> Array:
    """Pull by springs that stiffen like 1/h, which keeps the order, but are far too soft."""
    return penalised(matrix, load, held, values, weights, 0.05 * float(np.sqrt(len(load))))


def in_single_precision(
    matrix: sp.csr_array, load: Array, held: BoolArray, values: Array, weights: Array | None
) -> Array:
    """Keep the nodal values in 32 bits."""
    return sound.solved(matrix, load, held, values, weights).astype(np.float32)


def renumbered(shape: Shape, n: int) -> Mesh:
    """Count the nodes backwards."""
    mesh = triangulate(shape, n)
    last = len(mesh.points) - 1
    boundary = {name: last - edges for name, edges in mesh.boundary.items()}
    return Mesh(points=mesh.points[::-1], triangles=last - mesh.triangles, boundary=boundary)


def refined_along_chords(shape: Shape, n: int) -> Mesh:
    """Halve the edges of a coarse mesh and leave the new boundary nodes on its chords."""
    halvings = max(int(np.log2(n / COARSE)), 0)
    mesh = triangulate(shape, n // 2**halvings)
    for _ in range(halvings):
        mesh = halved(mesh)
    return mesh


def halved(mesh: Mesh) -> Mesh:
    """Cut every triangle into four at the middles of its edges."""
    a, b, c = mesh.triangles.T
    sides = np.sort(np.concatenate([[a, b], [b, c], [c, a]], axis=1).T, axis=1)
    edges, number = np.unique(sides, axis=0, return_inverse=True)
    ab, bc, ca = (len(mesh.points) + number.ravel()).reshape(3, -1)
    middle_of = {(int(i), int(j)): len(mesh.points) + k for k, (i, j) in enumerate(edges)}
    boundary = {}
    for name, ends in mesh.boundary.items():
        middles = np.array([middle_of[min(i, j), max(i, j)] for i, j in ends.tolist()])
        boundary[name] = np.stack([ends[:, 0], middles, middles, ends[:, 1]], axis=1).reshape(-1, 2)
    return Mesh(
        points=np.concatenate([mesh.points, mesh.points[edges].mean(axis=1)]),
        triangles=np.stack([a, ab, ca, ab, b, bc, ca, bc, c, ab, bc, ca], axis=1).reshape(-1, 3),
        boundary=boundary,
    )


def doubled_slopes(mesh: Mesh, values: Array) -> dict[str, Any]:
    """Divide by the area instead of twice the area when gradients are handed back."""
    given = sound.on_triangles(mesh, values)
    answer = Answer(**given)

    def gradient(points: Array) -> Array:
        found = answer.gradient_at(points)
        return np.full(points.shape, np.nan) if found is None else 2.0 * found

    return given | {"gradient": gradient}


FLUX = ("plate-flux-top", "plate-flux-left", "annulus-flux-inside")
FLUX_SUSPECTS = ("Neumann condition", "Neumann data", "neumann on", "second normal derivative")
ROBIN = ("plate-convection-all-round", "wall-mixed-conditions", "disc-convection")
ROBIN_SUSPECTS = ("Robin", "robin on")
TENSOR = ("plate-tensor-oblique-fixed", "plate-tensor-oblique", "ellipse-tensor")
TENSOR_SUSPECTS = ("tensor conductivity", "off-diagonal conductivity")
MERIDIAN = ("pillar-section", "ball-section", "sleeve-section-mixed")
MERIDIAN_SUSPECTS = ("coordinates with a symmetry", "axis")
FIXED = ("plate-saddle", "plate-wave", "disc-fourier")

SEEDS = Seeds(sample=p1_element, solve=solve_with_elements, scheme=LINEAR)
ELEMENT_FAULTS = SEEDS.faults

SEEDS.add(
    "half the edge",
    "prescribed flux enters over half of every edge",
    replace(LINEAR, neumann=halved_influx),
    kind="half-cell factor",
    suspects=(*FLUX_SUSPECTS, *ROBIN_SUSPECTS),
    shown_by=FLUX,
)
SEEDS.add(
    "flux at the first node",
    "prescribed flux of a whole edge is that at its first node",
    replace(LINEAR, neumann=influx_at_starts),
    kind="shifted data",
    suspects=(*FLUX_SUSPECTS, *ROBIN_SUSPECTS),
    shown_by=FLUX,
)
SEEDS.add(
    "first edge left out",
    "the loop over the edges of a flux condition begins at the second",
    replace(LINEAR, neumann=influx_without_first_edge),
    kind="off by one",
    suspects=(*FLUX_SUSPECTS, *ROBIN_SUSPECTS),
    shown_by=("annulus-flux-inside", "disc-convection", "disc-flux"),
)
SEEDS.add(
    "off-diagonal conductivity ignored",
    "element matrices know K_xx and K_yy only",
    replace(LINEAR, stiffness=diagonal_only),
    kind="exchanged axes",
    suspects=TENSOR_SUSPECTS,
    shown_by=TENSOR,
)
SEEDS.add(
    "conductivities exchanged",
    "K_xx and K_yy are exchanged",
    replace(LINEAR, stiffness=exchanged_axes),
    kind="exchanged axes",
    suspects=TENSOR_SUSPECTS,
    shown_by=(*TENSOR, "plate-tensor-diagonal"),
)
SEEDS.add(
    "weight left out",
    "2 pi r is missing in the element matrices; invisible in Cartesian coordinates",
    replace(LINEAR, stiffness=without_weight),
    kind="curvilinear factor",
    suspects=MERIDIAN_SUSPECTS,
    shown_by=MERIDIAN,
)
SEEDS.add(
    "radius of the outer corner",
    "2 pi r is taken at the outermost corner of every triangle; invisible in Cartesian coordinates",
    replace(LINEAR, stiffness=weight_of_outer_corner),
    kind="curvilinear factor",
    suspects=MERIDIAN_SUSPECTS,
    shown_by=MERIDIAN,
)
SEEDS.add(
    "one area for all",
    "all triangles get the mean area; hidden on uniform meshes and nearly so on discs",
    replace(LINEAR, stiffness=mean_area),
    kind="element volume",
    suspects=("curved boundary", "sides off the axes"),
    shown_by=("annulus-logarithm", "annulus-flux-inside", "annulus-convection"),
)
SEEDS.add(
    "alpha left out",
    "Robin's alpha u is forgotten and its data are kept",
    replace(LINEAR, robin=no_transfer),
    kind="Robin coefficient",
    suspects=ROBIN_SUSPECTS,
    shown_by=ROBIN,
)
SEEDS.add(
    "alpha of the wrong sign",
    "Robin's alpha u enters with the wrong sign",
    replace(LINEAR, robin=reversed_transfer),
    kind="Robin coefficient",
    suspects=ROBIN_SUSPECTS,
    shown_by=ROBIN,
)
SEEDS.add(
    "values of the next node",
    "held nodes take the data of their neighbours",
    replace(LINEAR, dirichlet=neighbours_values),
    kind="shifted data",
    suspects=("Dirichlet",),
    shown_by=FIXED,
)
SEEDS.add(
    "springs of fixed strength",
    "Dirichlet data by a penalty that does not grow as the mesh is refined",
    replace(LINEAR, solve=partial(penalised, factor=3.0)),
    kind="Dirichlet enforcement",
    suspects=("Dirichlet",),
    shown_by=FIXED,
)
SEEDS.add(
    "springs too soft",
    "Dirichlet data by a penalty that grows as it must and is far too small",
    replace(LINEAR, solve=refined_penalty),
    kind="Dirichlet enforcement",
    effect="accuracy",
    suspects=("Dirichlet",),
    shown_by=FIXED,
)
SEEDS.add(
    "nodal values in 32 bits",
    "nodal values are kept in 32 bits",
    replace(LINEAR, solve=in_single_precision),
    kind="reduced precision",
    effect="accuracy",
    suspects=("single precision",),
    shown_by=("plate-saddle", "plate-wave", "plate-flux-top"),
)
SEEDS.add(
    "new nodes on chords",
    "a coarse mesh is refined without moving new boundary nodes onto the curve",
    replace(LINEAR, mesh=refined_along_chords),
    kind="curved boundary",
    suspects=("curved boundary", "do not follow the curve"),
    shown_by=("disc-fourier", "disc-convection", "annulus-convection"),
)
SEEDS.add(
    "gradients doubled",
    "gradients handed back are twice as large as they are",
    replace(LINEAR, answer=doubled_slopes),
    kind="gradient recovery",
    suspects=("gradient",),
    shown_by=("plate-saddle", "plate-flux-top", "disc-fourier"),
)
SEEDS.add(
    "flux by midpoints",
    "prescribed flux by the midpoint rule: the order stays, affine fields are lost where data vary",
    replace(LINEAR, neumann=influx_by_midpoints),
    kind="under-integration",
    effect="accuracy",
    suspects=("polynomial", "Robin"),
    shown_by=("plate-affine", *FLUX, "wall-mixed-conditions", "sleeve-section-mixed"),
)
SEEDS.add(
    "lumped transfer",
    "Robin's alpha u by the trapezoidal rule: the order stays, affine fields are lost where data vary",
    replace(LINEAR, robin=lumped_transfer),
    kind="under-integration",
    effect="accuracy",
    suspects=("polynomial", "Robin"),
    shown_by=("plate-affine", *ROBIN, "ball-section-convection"),
)
SEEDS.add(
    "conductivity transposed",
    "the transposed conductivity, which is the same",
    replace(LINEAR, stiffness=transposed),
    kind="exchanged axes",
    effect="harmless",
    suspects=(),
    shown_by=TENSOR,
)
SEEDS.add(
    "nodes numbered backwards",
    "nodes in another order",
    replace(LINEAR, mesh=renumbered),
    kind="other numbering",
    effect="harmless",
    suspects=(),
    shown_by=("plate-flux-top", "disc-convection", "annulus-flux-inside", "l-shape-corner"),
)
