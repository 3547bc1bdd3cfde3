"""What drives a problem: a difference of levels, a twist, a motion, found from the exact field itself.

A conductance is a flux divided by a difference of potential, a torsion constant belongs to twist 1, an added
mass to a body of speed 1. Each driving amount is read off the field, so a case whose levels vary over a
conductor, or whose flux is not that of a twist or a motion, is refused.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.errors import ProblemError, nearest_names
from laplace_verify.fields import Field
from laplace_verify.geometry import Shape
from laplace_verify.problems.boundary_values import BoundaryField
from laplace_verify.problems.coordinates import Coordinates, axis_names
from laplace_verify.problems.infinity import AtInfinity
from laplace_verify.problems.materials import Materials
from laplace_verify.problems.quantities import QuantityKind, QuantitySpec
from laplace_verify.problems.regularity import Regularity

__all__ = [
    "INFINITY",
    "OF_VALUES",
    "RATIOS",
    "Setting",
    "boundary_density",
    "drive_of",
    "ratio",
    "scalar",
    "stream",
]

INFINITY = "infinity"
OF_VALUES = ("uplift", "torsion constant", "added mass")  # u is bounded, and a panel is 1e-13 of a piece
RATIOS = ("conductance", "resistance", "shape factor", "capacitance")
LEVEL = 1e-10  # of the largest |u|: how far the values on one conductor may differ
ORDER = 7


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Setting:
    """An exact field in its problem: all that a quantity depends on."""

    shape: Shape
    field: Field
    tensor: Array | Materials
    regularity: Regularity
    coordinates: Coordinates
    at_infinity: AtInfinity

    def seen(self, piece: str) -> BoundaryField:
        """Return the field seen from a piece."""
        return BoundaryField(self.field, self.shape.pieces[piece], self.tensor, self.shape.size)

    @property
    def pieces(self) -> list[str]:
        """Names of the pieces that bound the body; the axis of symmetry does not."""
        axis = axis_names(self.shape, self.coordinates)
        return [piece.name for piece in self.shape.pieces if piece.name not in axis]


def drive_of(name: str, spec: QuantitySpec, setting: Setting) -> tuple[float, ...]:
    """Return the driving amount of a quantity, () if its kind has none.

    Raises
    ------
    ProblemError
        If the field is not driven in the way that the quantity supposes.
    """
    if spec.kind == "capacitance":
        return _driven_level(name, spec, setting)
    if spec.kind in RATIOS:
        first, second = (_level(name, piece, setting) for piece in _pair(name, spec))
        if not abs(first - second) > LEVEL * max(abs(first), abs(second)):
            raise ProblemError(f"quantity {name!r}: both pieces are at the level {first:g}")
        return (first - second,)
    if spec.kind == "torsion constant":
        return (_twist(name, setting),)
    return _motion(name, setting) if spec.kind == "added mass" else ()


def ratio(kind: QuantityKind, flux: float, drive: tuple[float, ...], conductivity: float) -> float:
    """Return a quantity of one of the kinds `RATIOS` from the flux; a flux is itself."""
    if kind == "flux":
        return flux
    if kind == "resistance":
        return drive[0] / flux if flux else float("inf")
    return flux / drive[0] / (conductivity if kind == "shape factor" else 1.0)


def boundary_density(
    kind: QuantityKind, points: Array, normals: Array, value: Array, flux: Array, drive: Sequence[float]
) -> Array:
    """Return what is integrated over the boundary, shape (n,), for a quantity of a kind.

    Energy: u n . K grad u. Torsion: by Gauss' theorem the integral of x^2 + y^2 is that of r^2 (x . n)/4,
    and that of x w_y - y w_x is that of w (x n_y - y n_x). Added mass: u n . v / v^2, which misses K and the
    stream. Else the flux.
    """
    if kind == "energy":
        return value * flux
    if kind == "uplift":
        return value
    if kind == "discharge":
        return -flux
    if kind == "torsion constant":
        x, y, p, q = *points.T, *normals.T
        section: Array = (x * x + y * y) * (x * p + y * q) / 4.0 + value / drive[0] * (x * q - y * p)
        return section
    if kind == "added mass":
        motion = np.asarray(drive)
        pushed: Array = value * (normals @ motion) / (motion @ motion)
        return pushed
    return flux


def stream(at_infinity: AtInfinity, points: Array) -> Array:
    """Return V . x, the potential of the stream far away, (n,); zeros if there is none."""
    if isinstance(at_infinity, tuple) and at_infinity[0] == "flow":
        undisturbed: Array = points @ np.asarray(at_infinity[1])
        return undisturbed
    return np.zeros(len(points))


def scalar(name: str, kind: QuantityKind, tensor: Array | Materials) -> float:
    """Return K as a number.

    Raises
    ------
    ProblemError
        If it is a tensor or differs by region.
    """
    if isinstance(tensor, Materials) or not np.array_equal(tensor, tensor[0, 0] * np.eye(len(tensor))):
        raise ProblemError(f"quantity {name!r}: a {kind} supposes one number as conductivity")
    return float(tensor[0, 0])


def _pair(name: str, spec: QuantitySpec) -> tuple[str, str]:
    """Return the two pieces of a ratio."""
    where = spec.where
    if not isinstance(where, tuple) or len(where) != 2 or not all(isinstance(w, str) for w in where):
        raise ProblemError(f"quantity {name!r}: a {spec.kind} needs the names of two pieces, got {where!r}")
    return str(where[0]), str(where[1])


def _level(name: str, piece: str, setting: Setting) -> float:
    """Return the constant value of u on a piece."""
    if piece == INFINITY:
        if setting.at_infinity != "decay":
            raise ProblemError(f'quantity {name!r}: "infinity" is a conductor only where u decays to 0 there')
        return 0.0
    if piece not in setting.pieces:
        raise ProblemError(
            f"quantity {name!r}: no piece is named {piece!r}; {nearest_names(piece, setting.pieces)}"
        )
    points, _, _ = setting.shape.pieces[piece].quadrature(ORDER)
    values = setting.seen(piece).value(points)
    level = float(np.median(values))
    scale = max(abs(level), float(np.abs(setting.field.value(setting.shape.sample(16, seed=1))).max()))
    if not float(np.abs(values - level).max()) <= LEVEL * scale:
        raise ProblemError(
            f"quantity {name!r}: u varies over the piece {piece!r}, from {values.min():.6g} to "
            f"{values.max():.6g}; a conductor has one level"
        )
    return level


def _driven_level(name: str, spec: QuantitySpec, setting: Setting) -> tuple[float, ...]:
    """Return the level of the one conductor that is not at zero."""
    piece, driven = _pair(name, spec)
    levels = {other: _level(name, other, setting) for other in {*setting.pieces, piece, driven}}
    top = levels.pop(driven)
    lifted = [other for other, level in levels.items() if not abs(level) <= LEVEL * abs(top)]
    if lifted or setting.at_infinity not in (None, "decay"):
        where = f"{sorted(lifted)[0]!r} is at {levels[sorted(lifted)[0]]:g}" if lifted else "infinity is not"
        raise ProblemError(f"quantity {name!r}: all pieces but {driven!r} must be at level 0; {where}")
    return (top,)


def _slopes(setting: Setting) -> tuple[Array, Array, Array]:
    """Return points, normals and n . grad u on the whole boundary, away from its corners."""
    parts = []
    for piece in setting.pieces:
        points, normals, _ = setting.shape.pieces[piece].quadrature(ORDER)
        parts.append((points, normals, setting.seen(piece).flux(points)))
    points, normals, flux = (np.concatenate(part) for part in zip(*parts, strict=True))
    return points, normals, flux


def _fitted(name: str, what: str, columns: Array, slopes: Array) -> Array:
    """Return the coefficients of the columns that make up the slopes exactly."""
    found, *_ = np.linalg.lstsq(columns, slopes, rcond=None)
    size = float(np.abs(slopes).max())
    if not (size > 0.0 and float(np.abs(columns @ found - slopes).max()) <= 1e-9 * size):
        raise ProblemError(f"quantity {name!r}: the flux is not that of {what}")
    return np.asarray(found, dtype=np.float64)


def _twist(name: str, setting: Setting) -> float:
    """Return the twist t of n . grad u = t (y n_x - x n_y)."""
    if setting.shape.dim != 2 or setting.coordinates != "cartesian" or setting.at_infinity is not None:
        raise ProblemError(f"quantity {name!r}: a torsion constant belongs to a bounded section of the plane")
    points, normals, flux = _slopes(setting)
    turning = points[:, 1] * normals[:, 0] - points[:, 0] * normals[:, 1]
    flux = flux / scalar(name, "torsion constant", setting.tensor)
    words = "a twist, n . grad u = twist (y n_x - x n_y)"
    return float(_fitted(name, words, turning[:, None], flux)[0])


def _motion(name: str, setting: Setting) -> tuple[float, ...]:
    """Return the velocity of the bodies relative to the fluid far away."""
    if setting.at_infinity is None or setting.coordinates != "cartesian":
        raise ProblemError(f"quantity {name!r}: an added mass belongs to bodies in unbounded fluid")
    _, normals, flux = _slopes(setting)
    k = scalar(name, "added mass", setting.tensor)
    if isinstance(setting.at_infinity, tuple) and setting.at_infinity[0] == "flow":
        velocity = np.asarray(setting.at_infinity[1])
        if setting.at_infinity[2] or not np.abs(flux).max() <= 1e-9 * k * np.abs(velocity).max():
            raise ProblemError(
                f"quantity {name!r}: the stream must pass bodies of no flux, without circulation"
            )
        return tuple(float(-v) for v in velocity)
    if setting.at_infinity != "decay" and not (setting.at_infinity == "bounded" and setting.shape.dim == 2):
        raise ProblemError(f"quantity {name!r}: the fluid far away must be at rest or a uniform stream")
    words = "rigid bodies that move all alike, n . grad u = n . v"
    return tuple(float(v) for v in _fitted(name, words, normals, flux / k))
