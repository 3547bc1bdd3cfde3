"""Coordinates of problems with a symmetry: fewer dimensions to solve in than those of space.

    coordinates        points   div(K grad u)                              space per (r, z) or r
    cartesian          x        sum of d/dx_i (K grad u)_i                 1
    axisymmetric       (r, z)   (1/r) d/dr(r (K grad u)_r) + d/dz (...)_z   2 pi r   (ring)
    radial-cylinder    r        (1/r) d/dr(r K du/dr)                      2 pi r   (per unit length)
    radial-sphere      r        (1/r^2) d/dr(r^2 K du/dr)                  4 pi r^2

r >= 0 is the distance from the axis (from the centre for a sphere). Norms, fluxes, means and energies are
those of space: integrals carry the weight of the last column. Where the shape touches r = 0 there is no
boundary in space: that piece is called "axis", has the kind "axis" and carries no condition.

Where another piece meets the axis at the angle w, the body has a cone tip, and solutions behave like rho^nu
P_nu(cos t) with the smallest nu > 0 for which P_nu(cos w) = 0 (Dirichlet) or P_nu'(cos w) = 0 (flux). For w =
pi/2 the surface is flat there and u is smooth (Hobson 1931, Spherical and Ellipsoidal Harmonics, ch. IX, from
memory, unchecked). Edges away from the axis count like corners of the plane.
"""

from __future__ import annotations

import math
from typing import Any, Literal, TypeAlias, get_args

import numpy as np
from scipy.optimize import brentq
from scipy.special import hyp2f1

from laplace_verify.arrays import Array
from laplace_verify.errors import ProblemError, nearest_names
from laplace_verify.geometry import Boundary, Shape

__all__ = [
    "AXIS",
    "COORDINATES",
    "Coordinates",
    "axis_names",
    "cone_exponent",
    "curvature_terms",
    "in_coordinates",
    "metric",
    "space_dim",
    "straightened",
]

Coordinates: TypeAlias = Literal["cartesian", "axisymmetric", "radial-cylinder", "radial-sphere"]
COORDINATES: tuple[Coordinates, ...] = get_args(Coordinates)
AXIS = "axis"
DIMS = {"axisymmetric": (2, 3), "radial-cylinder": (1, 2), "radial-sphere": (1, 3)}  # of points, of space
ON_AXIS = 1e-12  # of the extent
FLAT = 1e-9  # angle between a piece and the normal plane of the axis


def in_coordinates(shape: Shape, coordinates: Any) -> Shape:
    """Return the shape with its pieces on r = 0 called "axis" ("axis-1" ... if there are several).

    Raises
    ------
    ProblemError
        If the coordinates are unknown, the shape has not their number of dimensions, or reaches into r < 0.

    Examples
    --------
    >>> from laplace_verify.geometry import Rectangle
    >>> in_coordinates(Rectangle((0, 0), (1, 2)), "axisymmetric").pieces.names
    ('axis', 'right', 'bottom', 'top')
    """
    if coordinates not in COORDINATES:
        known = nearest_names(str(coordinates), COORDINATES)
        raise ProblemError(f"unknown coordinates {coordinates!r}; {known}")
    if coordinates == "cartesian":
        return shape
    dim = DIMS[coordinates][0]
    if shape.dim != dim:
        what = "(r, z) need a shape of the plane" if dim == 2 else "r needs an Interval"
        raise ProblemError(f"{coordinates} coordinates {what}, got {shape!r}")
    if not shape.bounded:
        raise ProblemError(f"{coordinates} problems need a bounded shape, got {shape!r}; pose it in space")
    lowest = float(shape.bounding_box[0][0])
    if lowest < -ON_AXIS * shape.extent:
        raise ProblemError(
            f"{coordinates} coordinates have r >= 0, but {shape!r} reaches down to r = {lowest:g}; "
            "draw one half of the section, with its axis on r = 0"
        )
    whole = [piece.name for piece in shape.pieces if _on_axis(piece, shape.extent)]
    if not whole or any(name.split("-")[0] == AXIS for name in whole):
        return shape
    uncut = list(dict.fromkeys(_uncut(shape, name) for name in whole))
    new = [AXIS] if len(uncut) == 1 else [f"{AXIS}-{k}" for k in range(1, len(uncut) + 1)]
    return shape.renamed(**dict(zip(uncut, new, strict=True)))


def axis_names(shape: Shape, coordinates: Coordinates) -> frozenset[str]:
    """Return the names of the pieces that lie on the axis r = 0; none in Cartesian coordinates."""
    if coordinates == "cartesian":
        return frozenset()
    return frozenset(piece.name for piece in shape.pieces if _on_axis(piece, shape.extent))


def metric(coordinates: Coordinates, points: Array) -> Array:
    """Return the measure of space per measure of the shape or its boundary, shape (n,): 1, 2 pi r, 4 pi r^2.

    >>> metric("axisymmetric", np.array([[0.5, 3.0]])).tolist() == [np.pi]
    True
    """
    if coordinates == "cartesian":
        return np.ones(len(points))
    r = np.abs(points[:, 0])
    weight: Array = 4.0 * math.pi * r**2 if coordinates == "radial-sphere" else 2.0 * math.pi * r
    return weight


def space_dim(coordinates: Coordinates, dim: int) -> int:
    """Return the dimension of the space whose symmetry leaves points of `dim` coordinates."""
    return dim if coordinates == "cartesian" else DIMS[coordinates][1]


def curvature_terms(coordinates: Coordinates) -> int:
    """Return how many times (K grad u)_r / r enters div(K grad u) besides the second derivatives."""
    return {"cartesian": 0, "axisymmetric": 1, "radial-cylinder": 1, "radial-sphere": 2}[coordinates]


def straightened(coordinates: Coordinates, r: Array) -> Array:
    """Return the coordinate in which one-dimensional solutions are affine: r, log r, -1/r; -inf at r = 0."""
    with np.errstate(divide="ignore"):
        if coordinates == "radial-cylinder":
            return np.log(r)
        if coordinates == "radial-sphere":
            return -1.0 / r
    return r


def cone_exponent(opening: float, kind: str) -> float:
    """Return the smallest exponent at a cone tip of half angle `opening`, inf where the surface is flat.

    Parameters
    ----------
    opening
        Angle between the axis and the piece, inside the body, in radians.
    kind
        Condition on the piece; all but "dirichlet" count as flux conditions.

    Examples
    --------
    >>> round(cone_exponent(math.pi / 4, "dirichlet"), 4), cone_exponent(math.pi / 2, "dirichlet")
    (2.5479, inf)
    """
    if abs(opening - math.pi / 2.0) < FLAT:
        return math.inf
    t = math.sin(opening / 2.0) ** 2  # (1 - cos w)/2

    def legendre(nu: float) -> float:
        if kind == "dirichlet":
            return float(hyp2f1(-nu, nu + 1.0, 1.0, t))
        return float(hyp2f1(1.0 - nu, nu + 2.0, 2.0, t))  # P_nu' over nu (nu + 1)/2

    grid = np.linspace(1e-3, 2.0 + 4.0 * math.pi / opening, 4000)
    values = np.array([legendre(float(nu)) for nu in grid])
    change = np.flatnonzero(np.sign(values[1:]) != np.sign(values[:-1]))
    if not len(change):  # needle-shaped outside of the body: the exponent tends to 0 resp. 1
        return 0.0 if kind == "dirichlet" else 1.0
    first = int(change[0])
    return float(brentq(legendre, float(grid[first]), float(grid[first + 1]), xtol=1e-14))


def _on_axis(piece: Boundary, extent: float) -> bool:
    """Return whether a piece lies on r = 0."""
    points = piece.sample(3)[0]
    return bool((np.abs(points[:, 0]) <= ON_AXIS * extent).all())


def _uncut(shape: Shape, name: str) -> str:
    """Return the name of the piece before it was split."""
    for whole, _ in shape.splits:
        if name.startswith(f"{whole}-"):
            return whole
    return name
