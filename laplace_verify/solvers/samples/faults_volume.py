"""Coding mistakes in cell-centred finite volumes, each a change of one small function of the scheme."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np
import scipy.sparse as sp
from scipy.sparse.linalg import cg

from laplace_verify.arrays import Array
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.samples.cell_centred import (
    FLUX_SCHEME,
    Faces,
    cell_answer,
    cell_centred,
    fixed_inflow,
    half_conductance,
    prescribed_inflow,
    solve_on_cells,
)
from laplace_verify.solvers.samples.linear_systems import direct
from laplace_verify.solvers.samples.rectilinear import Grid
from laplace_verify.solvers.samples.seeding import Seeds

__all__ = ["VOLUME_FAULTS"]

SEEDS = Seeds(sample=cell_centred, solve=solve_on_cells, scheme=FLUX_SCHEME)
VOLUME_FAULTS = SEEDS.faults

FIXED = ("plate-saddle", "plate-cubic", "plate-wave")
WITH_FLUX = ("plate-flux-top", "plate-flux-left", "wall-mixed-conditions")
WITH_TRANSFER = ("plate-convection-all-round", "wall-mixed-conditions", "plate-degree-nine")
LAYERED = ("plate-layers-across", "plate-two-layers-wave", "rod-two-layers")
HELD = ("Dirichlet", "dirichlet on")
FLUX = ("Neumann condition", "Neumann data", "neumann on", "Neumann piece")
TRANSFER = ("Robin condition", "Robin coefficient", "robin on")
LAYERS = ("interface", "conductivity jump")
STOPPED = ("do not get smaller errors", "does not get smaller errors", "iteration")
LOOSE = 1e-3


# ---- boundary faces ------------------------------------------------------------------------------


@SEEDS.into(
    "dirichlet",
    "volumes: whole-cell distance at the boundary",
    "Dirichlet faces taken a whole cell away from the centre instead of half a one",
    kind="half-cell factor",
    suspects=HELD,
    shown_by=(*FIXED, "rod-two-temperatures"),
)
def distant_inflow(faces: Faces) -> tuple[Array, Array]:
    """Divide by the width of the cell."""
    return fixed_inflow(replace(faces, conductance=faces.conductance / 2.0))


@SEEDS.into(
    "robin",
    "volumes: cell value for face value",
    "Robin's alpha multiplies the value in the cell, half a cell from the surface",
    kind="low-order closure",
    suspects=TRANSFER,
    shown_by=WITH_TRANSFER,
)
def transfer_from_the_cell(faces: Faces) -> tuple[Array, Array]:
    """Leave out the resistance of the half cell."""
    return faces.areas * faces.piece.alpha(faces.middles), faces.areas * faces.piece.data(faces.middles)


@SEEDS.into(
    "robin",
    "volumes: conductances added",
    "Robin's surface and the half cell behind it combined side by side instead of in a row",
    kind="Robin coefficient",
    suspects=TRANSFER,
    shown_by=WITH_TRANSFER,
)
def transfer_side_by_side(faces: Faces) -> tuple[Array, Array]:
    """Add the conductances."""
    surface = faces.areas * faces.piece.alpha(faces.middles)
    return surface + faces.conductance, faces.areas * faces.piece.data(faces.middles)


@SEEDS.into(
    "robin",
    "volumes: alpha over conductivity",
    "alpha divided by the conductivity, as for the condition du/dn + alpha u / K; invisible where K = 1",
    kind="Robin coefficient",
    suspects=(*TRANSFER, "conductivity other than 1"),
    shown_by=WITH_TRANSFER,
)
def transfer_over_conductivity(faces: Faces) -> tuple[Array, Array]:
    """Put alpha / K beside a half cell of conductivity K."""
    surface = faces.areas * faces.piece.alpha(faces.middles) / faces.conductivity
    share = faces.conductance / (faces.conductance + surface)
    return share * surface, share * faces.areas * faces.piece.data(faces.middles)


@SEEDS.into(
    "neumann",
    "volumes: flux sign",
    "prescribed flux enters with the wrong sign",
    kind="flux sign",
    suspects=FLUX,
    shown_by=(*WITH_FLUX, "rod-fixed-and-flux"),
)
def reversed_inflow(faces: Faces) -> tuple[Array, Array]:
    """Let the flux out."""
    outflow, inflow = prescribed_inflow(faces)
    return outflow, -inflow


@SEEDS.into(
    "neumann",
    "volumes: normal of the low sides",
    "left and bottom take the flux along +x and +y for that along their outward normal",
    kind="normal orientation",
    suspects=("neumann on left", "neumann on bottom", *FLUX),
    shown_by=("plate-flux-left", "plate-flux-bottom", "plate-degree-seven"),
)
def inflow_along_axes(faces: Faces) -> tuple[Array, Array]:
    """Change the sign on the low sides."""
    outflow, inflow = prescribed_inflow(faces)
    return outflow, inflow if faces.patch.side else -inflow


@SEEDS.into(
    "neumann",
    "volumes: face area lost",
    "prescribed flux not multiplied by the area of the face; invisible in one dimension",
    kind="half-cell factor",
    suspects=(*FLUX, "dimension"),
    shown_by=WITH_FLUX,
)
def inflow_without_area(faces: Faces) -> tuple[Array, Array]:
    """Take every face for one of area 1."""
    return prescribed_inflow(replace(faces, areas=np.ones(len(faces.cells))))


@SEEDS.into(
    "neumann",
    "volumes: flux for gradient",
    "flux condition multiplied by the conductivity once more; invisible where K = 1",
    kind="flux or gradient",
    suspects=("conductivity other than 1", *FLUX),
    shown_by=WITH_FLUX,
)
def inflow_of_the_gradient(faces: Faces) -> tuple[Array, Array]:
    """Take g for the normal derivative."""
    return prescribed_inflow(replace(faces, areas=faces.areas * faces.conductivity))


@SEEDS.into(
    "dirichlet",
    "volumes: data of the face's first corner",
    "Dirichlet data sampled at the lower corner of every face instead of its middle",
    kind="shifted data",
    suspects=HELD,
    shown_by=FIXED,
)
def inflow_from_corners(faces: Faces) -> tuple[Array, Array]:
    """Sample half a face further down."""
    middles = faces.middles.copy()
    for axis in range(middles.shape[1]):
        if axis != faces.patch.axis:
            middles[:, axis] -= faces.areas / 2.0
    return fixed_inflow(replace(faces, middles=middles))


@SEEDS.into(
    "dirichlet",
    "volumes: weak penalty",
    "Dirichlet faces closed by the fixed conductance 1e3 per area instead of that of the half cell alone",
    kind="Dirichlet enforcement",
    suspects=HELD,
    shown_by=(*FIXED, "rod-two-temperatures"),
    effect="accuracy",
)
def penalised_inflow(faces: Faces) -> tuple[Array, Array]:
    """Put a resistance between the surface and the prescribed value."""
    weak = 1e3 * faces.areas
    return fixed_inflow(replace(faces, conductance=faces.conductance * weak / (faces.conductance + weak)))


# ---- inner faces ---------------------------------------------------------------------------------


@SEEDS.into(
    "average",
    "volumes: arithmetic mean of conductivities",
    "arithmetic mean of two half cells' conductances where the harmonic one belongs; invisible elsewhere",
    kind="material average",
    suspects=LAYERS,
    shown_by=LAYERED,
)
def side_by_side(left: Array, right: Array) -> Array:
    """Return half the mean."""
    return (left + right) / 4.0


@SEEDS.into(
    "average",
    "volumes: one-sided conductivity",
    "a face takes the conductivity of the cell on its left; invisible where both are equal",
    kind="material average",
    suspects=LAYERS,
    shown_by=LAYERED,
)
def of_the_left(left: Array, right: Array) -> Array:
    """Return half the conductance of the left half cell."""
    del right
    return left / 2.0


@SEEDS.into(
    "half",
    "volumes: areas and distances exchanged",
    "fluxes multiplied by the distance and divided by the area of a face; invisible on square cells",
    kind="exchanged axes",
    suspects=("unequal extents", "ratio of the sides", "dimension", "do not get smaller errors"),
    shown_by=(*FIXED, "plate-flux-top"),
)
def upended(areas: Array, conductivity: Array, widths: Array) -> Array:
    """Return w K / (A / 2) in plates."""
    if np.ptp(areas) == 0.0 and areas[0] == 1.0:  # a rod
        return half_conductance(areas, conductivity, widths)
    return half_conductance(widths, conductivity, areas)


# ---- solving and handing back --------------------------------------------------------------------


@SEEDS.into(
    "solve",
    "volumes: loose tolerance",
    f"conjugate gradients stop at a relative residual of {LOOSE:g}, whatever the grid",
    kind="early stopping",
    suspects=STOPPED,
    shown_by=("plate-saddle", "plate-wave", "plate-flux-top", "wall-mixed-conditions"),
    effect="accuracy",
)
def loose(matrix: sp.csc_array, load: Array, weights: Array | None) -> tuple[Array, int | None]:
    """Iterate until the residual has fallen by the same factor on every grid."""
    if weights is not None:
        return direct(matrix, load, weights)
    return cg(matrix, load, rtol=LOOSE, atol=0.0)[0], None


@SEEDS.into(
    "answer",
    "volumes: values of the next cell",
    "the array of values handed back one cell further along x: a row of ghost cells counted in",
    kind="off by one",
    suspects=("dimension", "shape", "lose one order", "loses one order"),
    shown_by=(*FIXED, "rod-two-temperatures"),
)
def shifted_answer(grid: Grid, values: Array, **facts: Any) -> Answer:
    """Give every cell the value of its left neighbour, the first its own."""
    number = np.zeros([len(axis) - 1 for axis in grid.axes], dtype=np.int64)
    number[tuple(grid.index.T)] = np.arange(len(values))
    before = grid.index.copy()
    before[:, 0] = np.maximum(before[:, 0] - 1, 0)
    return cell_answer(grid, values[number[tuple(before.T)]], **facts)


@SEEDS.into(
    "answer",
    "volumes: fluxes reported outward",
    "reported fluxes are -n . K grad u, what flows out, where n . K grad u is asked for",
    kind="flux sign",
    suspects=("fall short in gradient or flux only", "falls short in gradient or flux only", "flux"),
    shown_by=("rod-two-temperatures", "rod-two-layers"),
)
def outward_fluxes(grid: Grid, values: Array, **facts: Any) -> Answer:
    """Change the sign of all reported fluxes."""
    fluxes = {name: -flux for name, flux in facts["fluxes"].items()}
    return cell_answer(grid, values, **{**facts, "fluxes": fluxes})


@SEEDS.into(
    "dirichlet",
    "volumes: ghost cells",
    "Dirichlet values enforced through ghost cells, u_ghost = 2 g - u, across two half cells in a row",
    kind="Dirichlet enforcement",
    suspects=(),
    shown_by=(*FIXED, "rod-two-temperatures"),
    effect="harmless",
)
def ghost_inflow(faces: Faces) -> tuple[Array, Array]:
    """Return c/2 (u_ghost - u) = c/2 (2 g - u - u)."""
    through = faces.conductance / 2.0
    return 2.0 * through, through * (2.0 * faces.piece.data(faces.middles))


@SEEDS.into(
    "neumann",
    "volumes: face averages of the data",
    "flux data averaged over every face by two Gauss points instead of taken in its middle",
    kind="under-integration",
    suspects=(),
    shown_by=(*WITH_FLUX, "plate-pure-flux"),
    effect="harmless",
)
def averaged_inflow(faces: Faces) -> tuple[Array, Array]:
    """Integrate the flux over the face."""
    inflow = np.zeros(len(faces.cells))
    for place in (-0.5, 0.5):
        points = faces.middles.copy()
        for axis in range(points.shape[1]):
            if axis != faces.patch.axis:
                points[:, axis] += place * faces.areas / np.sqrt(3.0)
        inflow += 0.5 * faces.areas * faces.piece.data(points)
    return np.zeros(len(faces.cells)), inflow
