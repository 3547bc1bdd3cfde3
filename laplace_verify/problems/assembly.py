"""Which condition holds on which piece, and the conductivity: what `problem` and `case` have in common."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from typing import Any, TypeAlias

import numpy as np

from laplace_verify.arrays import Array, frozen
from laplace_verify.errors import ProblemError, nearest_names
from laplace_verify.geometry import Shape
from laplace_verify.problems.conditions import EVERY_KIND, Condition
from laplace_verify.problems.coordinates import Coordinates
from laplace_verify.problems.data import PointFunction
from laplace_verify.problems.materials import Materials

__all__ = ["Conductivity", "alpha_of", "as_conductivity", "as_tensor", "by_piece", "is_shape"]

Conductivity: TypeAlias = float | Array | Materials

SYMMETRY = 1e-12  # relative
LARGEST_RATIO = 1e12  # of eigenvalues: beyond it K is singular in float64


def is_shape(shape: Any) -> Shape:
    """Return `shape` if it is one, bounded or not.

    Raises
    ------
    ProblemError
        If it is not, or has no inside.
    """
    if not isinstance(shape, Shape):
        raise ProblemError(f"shape must be a shape such as Rectangle((0, 0), (1, 1)), got {shape!r}")
    if not shape.measure > 0.0:
        raise ProblemError(f"{shape!r} has no inside; a problem around it is posed on Exterior({shape!r})")
    return shape


def as_conductivity(conductivity: Any, dim: int, coordinates: Coordinates = "cartesian") -> Conductivity:
    """Return a positive number as float, a symmetric positive definite (d, d) matrix as a frozen array.

    What `layers`, `inclusion` or `sectors` made is returned as it is.

    Raises
    ------
    ProblemError
        If it is neither.

    Examples
    --------
    >>> as_conductivity(2, dim=3)
    2.0
    """
    if conductivity is None or isinstance(conductivity, bool | str):
        raise ProblemError(f"conductivity must be a positive number or a matrix, got {conductivity!r}")
    if isinstance(conductivity, Mapping):
        raise ProblemError(
            "a conductivity that differs from region to region is made by layers(...), inclusion(...) or "
            f"sectors(...), which know where each region lies; got a table {dict(conductivity)!r}"
        )
    if isinstance(conductivity, Materials):
        if conductivity.partition.dim != dim:
            raise ProblemError(
                f"the regions are {conductivity.partition.dim}-D, the shape is {dim}-D; give direction, "
                f"centre or apex {dim} coordinates"
            )
        return conductivity
    try:
        array = np.asarray(conductivity, dtype=np.float64)
    except (TypeError, ValueError) as cause:
        raise ProblemError(
            f"conductivity must be a positive number or a ({dim}, {dim}) matrix, got {conductivity!r}"
        ) from cause
    if not np.isfinite(array).all():
        raise ProblemError(f"conductivity must be finite, got {array.tolist()}")
    if array.ndim == 0:
        if not array > 0.0:
            raise ProblemError(f"conductivity must be > 0, got {float(array)!r}")
        return float(array)
    if array.shape != (dim, dim):
        raise ProblemError(f"a conductivity tensor must have shape ({dim}, {dim}), got {array.shape}")
    if not np.abs(array - array.T).max() <= SYMMETRY * np.abs(array).max():
        raise ProblemError(f"a conductivity tensor must be symmetric, got {array.tolist()}")
    array = (array + array.T) / 2.0
    eigenvalues = np.linalg.eigvalsh(array)
    if not (eigenvalues[0] > 0.0 and eigenvalues[-1] <= LARGEST_RATIO * eigenvalues[0]):
        raise ProblemError(
            f"a conductivity tensor must be positive definite, got {array.tolist()} with eigenvalues "
            f"{eigenvalues.tolist()}"
        )
    if coordinates != "cartesian" and np.any(array != np.diag(np.diag(array))):
        raise ProblemError(
            f"in {coordinates} coordinates a conductivity tensor must be diagonal, diag(K_rr, K_zz): a mixed "
            f"entry would have no direction on the axis; got {array.tolist()}"
        )
    return frozen(array)


def as_tensor(conductivity: Conductivity, dim: int) -> Array:
    """Return the conductivity as a matrix (d, d).

    Raises
    ------
    ProblemError
        If it differs from region to region.
    """
    if isinstance(conductivity, Materials):
        raise ProblemError(
            f"the conductivity differs between the regions {', '.join(conductivity.names)}, so there is no "
            "single tensor; ask conductivity_at(points) or the regions"
        )
    if isinstance(conductivity, float):
        return frozen(conductivity * np.eye(dim))
    return conductivity


def by_piece(shape: Shape, conditions: Mapping[str, Any], axis: Collection[str] = ()) -> dict[str, Condition]:
    """Return the condition of each piece that `conditions` speaks of, in the order of the shape's pieces.

    The name of a piece that was split stands for all its parts, if none of them is named too. Pieces of the
    `axis` take no condition.

    Raises
    ------
    ProblemError
        If a name is unknown or that of the axis, names conflict, or a condition is neither a `Condition` nor
        the name of a kind.
    """
    if not isinstance(conditions, Mapping):
        raise ProblemError(f"conditions must be a dict {{piece: condition}}, got {type(conditions).__name__}")
    names = [piece.name for piece in shape.pieces]
    parts = {name: [f"{name}-{k + 1}" for k in range(len(cuts) + 1)] for name, cuts in shape.splits}
    found: dict[str, Condition] = {}
    origin: dict[str, str] = {}
    for given, condition in conditions.items():
        targets = [given] if given in names else parts.get(given, [])
        if not targets:
            known = nearest_names(str(given), [*names, *parts])
            raise ProblemError(f"conditions name an unknown piece {given!r} of {shape.kind!r}; {known}")
        for target in targets:
            if target in axis:
                raise ProblemError(
                    f"piece {target!r} is the axis r = 0: it is no boundary of the body and takes no "
                    "condition; leave it out"
                )
            if target in found:
                raise ProblemError(
                    f"conflicting conditions on piece {target!r}: it is named by {origin[target]!r} and by "
                    f"{given!r}; name the whole piece or its parts, not both"
                )
            found[target], origin[target] = _condition(given, condition), given
    return {name: found[name] for name in names if name in found}


def _condition(piece: str, condition: Any) -> Condition:
    """Return a condition given as such or by the name of its kind."""
    if isinstance(condition, Condition):
        return condition
    if condition == "robin":
        raise ProblemError(
            f"the Robin condition of piece {piece!r} needs its coefficient: write robin(alpha)"
        )
    if isinstance(condition, str) and condition in EVERY_KIND:
        return Condition(kind=condition)
    known = nearest_names(str(condition), EVERY_KIND)
    raise ProblemError(
        f"the condition of piece {piece!r} must be dirichlet, neumann or robin, or periodic on a pair, "
        f"got {condition!r}; {known}"
    )


def alpha_of(piece: str, condition: Condition, dim: int) -> PointFunction | None:
    """Return Robin's coefficient as a function of points, None for other kinds."""
    if condition.alpha is None:
        return None
    return PointFunction(condition.alpha, dim, f"Robin's alpha of piece {piece!r}")
