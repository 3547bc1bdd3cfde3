"""What is special about the data of a case: which are zero, constant, symmetric, or straight at the boundary.

A mistake shows only where the data it touches are not zero; data that do not vary hide one in where they are
taken, symmetric ones an exchange of axes, and a zero second derivative along the normal hides a one-sided
closure.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.measure.results import Feature

if TYPE_CHECKING:
    from laplace_verify.measure.exact import Exact
    from laplace_verify.problems import Case, Piece

__all__ = ["data_features"]

SAMPLED = 16  # points of a piece, and of the inside
FEWEST = 4  # points from which symmetry is concluded
SMALL = 1e-9
STEP = 1e-3  # of the extent: step of the second derivative along the normal
CURVED = 1e-6  # of the gradient: change of slope that counts


def data_features(case: Case, exact: Exact) -> dict[str, Feature]:
    """Return name -> True or False for what the data do on their pieces."""
    extent = case.problem.shape.extent
    found: dict[str, Feature] = {}
    for kind in ("dirichlet", "neumann", "robin"):
        pieces = [piece for piece in case.problem.pieces if piece.kind == kind]
        data = [piece.data(piece.sample(SAMPLED)[0]) for piece in pieces]
        name = kind.capitalize()
        found[f"nonzero {name} data"] = any(_any(values) for values in data)
        found[f"{name} data that vary along a piece"] = any(_varies(values) for values in data)
        if len(pieces) > 1:
            found[f"nonzero data on the first {name} piece"] = _any(data[0])
            found[f"nonzero data on the last {name} piece"] = _any(data[-1])
    neumann = [piece for piece in case.problem.pieces if piece.kind == "neumann"]
    transfers = [p.alpha(p.sample(SAMPLED)[0]) for p in case.problem.pieces if p.kind == "robin"]
    found["second normal derivative on a Neumann piece"] = any(_bends(p, exact, extent) for p in neumann)
    found["Robin coefficient other than 1"] = any(_any(alpha - 1.0) for alpha in transfers)
    found["Robin coefficient that varies along a piece"] = any(_varies(alpha) for alpha in transfers)
    found["solution that an exchange of x and y changes"] = _asymmetric(case, exact)
    return found


def _any(values: Array) -> bool:
    """Return whether one of the values differs from zero."""
    return bool(np.any(np.abs(values) > SMALL))


def _varies(values: Array) -> bool:
    """Return whether values differ by more than round-off."""
    return bool(len(values)) and bool(np.ptp(values) > SMALL * max(float(np.abs(values).max()), SMALL))


def _bends(piece: Piece, exact: Exact, extent: float) -> bool:
    """Return whether d^2 u/dn^2 differs from zero: where it is zero a one-sided closure cannot be seen."""
    points, normals, _ = piece.sample(SAMPLED)
    step = STEP * extent
    slopes = [
        (exact.gradients(points - k * step * normals) * normals).sum(axis=1) for k in (1.0, 2.0)
    ]  # inside, where the field holds
    change = np.abs(slopes[1] - slopes[0]) / STEP
    size = float(np.nanmax(np.abs(exact.gradients(points - step * normals)), initial=0.0))
    return bool(np.nanmax(change, initial=0.0) > CURVED * size)


def _asymmetric(case: Case, exact: Exact) -> bool | None:
    """Return whether u differs between (x, y) and the place across the diagonal of the bounding box.

    None in one dimension, for what has no end, and where too few such places lie in the shape.
    """
    shape = case.problem.shape
    lower, upper = shape.bounding_box
    if shape.dim == 1 or not np.isfinite(upper - lower).all():
        return None
    points = shape.sample(2 * SAMPLED, seed=0)
    swapped = (points - lower) / (upper - lower)
    swapped[:, :2] = swapped[:, 1::-1]
    swapped = lower + swapped * (upper - lower)
    inside = shape.contains(swapped)
    values, others = exact.values(points[inside]), exact.values(swapped[inside])
    known = np.isfinite(values) & np.isfinite(others)
    if np.count_nonzero(known) < FEWEST:
        return None
    return _any((values - others)[known] / max(float(np.abs(values[known]).max()), SMALL))
