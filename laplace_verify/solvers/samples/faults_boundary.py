"""Coding mistakes in boundary elements, and ways of doing the same right that look like some."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.geometry import Shape
from laplace_verify.problems import Piece
from laplace_verify.solvers.samples import boundary_collocation as sound
from laplace_verify.solvers.samples.boundary_collocation import (
    COLLOCATION,
    Elements,
    boundary_elements,
    solve_on_boundary,
)
from laplace_verify.solvers.samples.seeding import Seeds

__all__ = ["BOUNDARY_FAULTS"]


def no_jump(elements: Elements) -> Array:
    """Forget the half of u that the double layer jumps by."""
    return np.zeros(len(elements.starts))


def whole_jump(elements: Elements) -> Array:
    """Take all of u, as at points inside."""
    return np.ones(len(elements.starts))


def reversed_double_layer(elements: Elements) -> tuple[Array, Array]:
    """Take the normal of the double layer inwards."""
    single, double = sound.collocated(elements)
    return single, -double


def sourcewise_constant(elements: Elements) -> tuple[Array, Array]:
    """Divide the single layer by 4 pi, as in space."""
    single, double = sound.collocated(elements)
    return 0.5 * single, double


def plain_diagonal(elements: Elements) -> tuple[Array, Array]:
    """Integrate the logarithm over the element itself by one point at a quarter: L log(L/4)."""
    single, double = sound.collocated(elements)
    lengths = elements.lengths
    own = -lengths * np.log(0.25 * lengths / elements.radius) / (2.0 * math.pi)
    np.fill_diagonal(single, 2.0 * own)
    return single, double


def diagonal_without_one(elements: Elements) -> tuple[Array, Array]:
    """Forget the 1 in the integral of the logarithm over the element itself, L (log(L/2) - 1)."""
    single, double = sound.collocated(elements)
    lengths = elements.lengths
    np.fill_diagonal(single, -lengths * np.log(0.5 * lengths / elements.radius) / (2.0 * math.pi))
    return single, double


def decimal_logarithm(elements: Elements) -> tuple[Array, Array]:
    """Take the logarithm to the base ten in the single layer."""
    single, double = sound.collocated(elements)
    return single / math.log(10.0), double


def collocated_off_centre(elements: Elements) -> tuple[Array, Array]:
    """Ask for the identity at a quarter of every element instead of in its middle."""
    places = 0.75 * elements.starts + 0.25 * elements.ends
    single, double = sound.layers(elements, places)
    np.fill_diagonal(double, 0.0)
    return single, double


def data_at_starts(piece: Piece, elements: Elements) -> Array:
    """Take the data at the beginning of every element."""
    return piece.data(elements.starts)


def reversed_flux(piece: Piece, elements: Elements) -> Array:
    """Take a prescribed flux as if normals pointed inwards."""
    data = piece.data(elements.middles)
    return -data if piece.kind == "neumann" else data


def reversed_in_holes(shape: Shape, n: int) -> tuple[Elements, dict[str, slice]]:
    """Travel around holes with the shape on the right, so that their normals point into the shape."""
    elements, parts = sound.elements_on(shape, n)
    starts, ends = elements.starts.copy(), elements.ends.copy()
    for name, part in parts.items():
        if name.startswith(("inner", "hole")):
            starts[part], ends[part] = elements.ends[part], elements.starts[part]
    return replace(elements, starts=starts, ends=ends), parts


def doubled_transfer(piece: Piece, elements: Elements) -> Array:
    """Take alpha twice, as when both elements that meet in a node add it."""
    return 2.0 * piece.alpha(elements.middles)


def negative_transfer(piece: Piece, elements: Elements) -> Array:
    """Take alpha with the wrong sign."""
    return -piece.alpha(elements.middles)


def larger_radius(shape: Shape, n: int) -> tuple[Elements, dict[str, slice]]:
    """Measure lengths in units three times as large: the net flux is zero, and so is the effect."""
    elements, parts = sound.elements_on(shape, n)
    return replace(elements, radius=3.0 * elements.radius), parts


def even_elements(shape: Shape, n: int) -> tuple[Elements, dict[str, slice]]:
    """Cut pieces into equal elements, which costs some order in corners where conditions change."""
    elements, parts = sound.elements_on(shape, n)
    starts, ends = elements.starts.copy(), elements.ends.copy()
    for piece in shape.pieces:
        part = parts[piece.name]
        nodes = piece.point(np.linspace(0.0, 1.0, part.stop - part.start + 1))
        starts[part], ends[part] = nodes[:-1], nodes[1:]
    return replace(elements, starts=starts, ends=ends), parts


def by_least_squares(matrix: Array, load: Array, border: Array | None) -> Array:
    """Solve by an orthogonal factorisation instead of elimination."""
    if border is not None:
        return sound.solved(matrix, load, border)
    solution, *_ = np.linalg.lstsq(matrix, load, rcond=None)
    return solution.astype(np.float64)


FIXED = ("plate-wave", "plate-saddle", "triangle-cubic")
FLUX = ("plate-flux-top", "plate-flux-left", "plate-flux-bottom")
ROBIN = ("plate-convection-all-round", "wall-mixed-conditions")
EVERYWHERE = ("do not get smaller", "diverge", "wrong limit")

SEEDS = Seeds(sample=boundary_elements, solve=solve_on_boundary, scheme=COLLOCATION)
BOUNDARY_FAULTS = SEEDS.faults

SEEDS.add(
    "jump left out",
    "the double layer jumps by half of u at the boundary, and that half is missing",
    replace(COLLOCATION, jump=no_jump),
    kind="fundamental solution",
    suspects=EVERYWHERE,
    shown_by=FIXED,
)
SEEDS.add(
    "whole jump",
    "u enters whole on the boundary, as it does inside",
    replace(COLLOCATION, jump=whole_jump),
    kind="fundamental solution",
    suspects=EVERYWHERE,
    shown_by=FIXED,
)
SEEDS.add(
    "double layer reversed",
    "the double layer enters with the wrong sign",
    replace(COLLOCATION, collocated=reversed_double_layer),
    kind="normal orientation",
    suspects=EVERYWHERE,
    shown_by=FIXED,
)
SEEDS.add(
    "constant of space",
    "the single layer is divided by 4 pi, the constant of three dimensions",
    replace(COLLOCATION, collocated=sourcewise_constant),
    kind="fundamental solution",
    suspects=EVERYWHERE,
    shown_by=FIXED,
)
SEEDS.add(
    "logarithm to the base ten",
    "the single layer takes the logarithm to the base ten",
    replace(COLLOCATION, collocated=decimal_logarithm),
    kind="fundamental solution",
    suspects=EVERYWHERE,
    shown_by=FIXED,
)
SEEDS.add(
    "one lost on the diagonal",
    "an element's own integral of the logarithm is L log(L/2), without the - L",
    replace(COLLOCATION, collocated=diagonal_without_one),
    kind="singular integral",
    suspects=("lose one order", "Dirichlet"),
    shown_by=FIXED,
)
SEEDS.add(
    "own element twice",
    "an element's own integral of the logarithm by one point, and twice for its two halves",
    replace(COLLOCATION, collocated=plain_diagonal),
    kind="singular integral",
    suspects=("lose one order", "Dirichlet", "do not get smaller"),
    shown_by=FIXED,
)
SEEDS.add(
    "collocation off centre",
    "the identity is asked for at a quarter of every element",
    replace(COLLOCATION, collocated=collocated_off_centre),
    kind="shifted data",
    suspects=("lose one order",),
    shown_by=(*FIXED, "disc-fourier"),
)
SEEDS.add(
    "data at the start of elements",
    "data are taken where an element begins",
    replace(COLLOCATION, data=data_at_starts),
    kind="shifted data",
    suspects=("lose one order",),
    shown_by=(*FIXED, "plate-flux-top"),
)
SEEDS.add(
    "flux inwards",
    "a prescribed flux is taken for one along the inward normal",
    replace(COLLOCATION, data=reversed_flux),
    kind="flux sign",
    suspects=("Neumann condition", "Neumann data", "neumann on"),
    shown_by=FLUX,
)
SEEDS.add(
    "holes the wrong way round",
    "elements around holes are travelled with the shape on their right; invisible without holes",
    replace(COLLOCATION, elements=reversed_in_holes),
    kind="normal orientation",
    suspects=("annulus", "inner", "hole", "shape"),
    shown_by=("annulus-flux-inside", "annulus-convection"),
)
SEEDS.add(
    "alpha twice",
    "Robin's alpha enters twice",
    replace(COLLOCATION, transfer=doubled_transfer),
    kind="Robin coefficient",
    suspects=("Robin", "robin on"),
    shown_by=ROBIN,
)
SEEDS.add(
    "alpha negative",
    "Robin's alpha enters with the wrong sign",
    replace(COLLOCATION, transfer=negative_transfer),
    kind="Robin coefficient",
    suspects=("Robin", "robin on"),
    shown_by=ROBIN,
)
SEEDS.add(
    "other unit of length",
    "lengths in the logarithm are measured in another unit: the net flux is zero",
    replace(COLLOCATION, elements=larger_radius),
    kind="equivalent formulation",
    effect="harmless",
    suspects=(),
    shown_by=FIXED,
)
SEEDS.add(
    "elements of equal length",
    "elements do not crowd in corners: as good where conditions do not change",
    replace(COLLOCATION, elements=even_elements),
    kind="equivalent formulation",
    effect="harmless",
    suspects=(),
    shown_by=(*FIXED, "plate-convection-all-round"),
)
SEEDS.add(
    "orthogonal factors",
    "the system is solved by an orthogonal factorisation",
    replace(COLLOCATION, solve=by_least_squares),
    kind="equivalent formulation",
    effect="harmless",
    suspects=(),
    shown_by=(*FIXED, "plate-flux-top"),
)
