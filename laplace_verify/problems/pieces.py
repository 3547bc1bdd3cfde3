"""Pieces of the boundary as a solver sees them: geometry, kind of condition, data on the true boundary."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass, field, replace
from typing import SupportsIndex, overload

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, BoolArray, as_points
from laplace_verify.errors import ProblemError, nearest_names
from laplace_verify.geometry import Boundary
from laplace_verify.problems.conditions import PERIODIC, PieceKind
from laplace_verify.problems.data import PointFunction

__all__ = ["MoveLog", "Piece", "Pieces"]

FLAT_MOVE = 1e-9  # of the shape's size: round-off of a mesh file
PROBES = 16  # even, in both directions of a face too: the middle, a favourite singular point, is left out
CURVED_MOVE = 0.1  # of the shape's size: a coarse mesh cuts corners off a curve


class MoveLog:
    """The largest distance by which points had to be moved onto each piece, a length."""

    __slots__ = ("largest",)

    def __init__(self) -> None:
        self.largest: dict[str, float] = {}

    def record(self, piece: str, move: float) -> None:
        """Keep `move` if it is the largest so far."""
        self.largest[piece] = max(move, self.largest.get(piece, 0.0))

    def __repr__(self) -> str:
        """Show the largest moves."""
        return f"MoveLog({self.largest})"


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Piece:
    """A named piece of the boundary with its condition.

    Attributes
    ----------
    boundary
        Its geometry.
    kind
        "dirichlet" (u = f), "neumann" (n . K grad u = g), "robin" (n . K grad u + alpha u = g); without
        data: "periodic" (u and its flux continue on the partner) or "axis" (no boundary of space at all).
    partner, shift
        Of a periodic piece the name of the piece it is joined to, and the vector s from x on this one to
        x + s on that one; else None.
    parts
        Its parts between the interfaces of regions that cross it; () if none does.
    """

    boundary: Boundary
    kind: PieceKind
    shape_size: float
    partner: str | None = None
    shift: tuple[float, ...] | None = None
    parts: tuple[Boundary, ...] = ()
    _data: Callable[[Array], Array] = field(repr=False)
    _alpha: PointFunction | None = field(default=None, repr=False)
    _alpha_may_be_negative: bool = field(default=False, repr=False)  # in ill-posed problems
    _log: MoveLog | None = field(default=None, repr=False)

    @property
    def name(self) -> str:
        """Name of the piece."""
        return self.boundary.name

    @property
    def has_data(self) -> bool:
        """Whether something is prescribed: not on the axis, not on periodic pieces."""
        return self.kind not in ("axis", PERIODIC)

    @property
    def measure(self) -> float:
        """Length or area; 1 for an end point in 1-D."""
        return self.boundary.measure

    @property
    def curved(self) -> bool:
        """Whether the piece is not flat."""
        return self.boundary.curved

    @property
    def ends(self) -> Array:
        """End points (2, d) of a curve; (0, d) for closed curves and surfaces."""
        return self.boundary.ends

    def data(self, points: npt.ArrayLike, *, region: str | None = None) -> Array:
        """Return the boundary data (n,) at points (n, d): u, n . K grad u, or n . K grad u + alpha u.

        Points are first moved onto the piece, so that the data are always those of the true boundary: by at
        most 1e-9 of the shape's size on flat pieces and 0.1 of it on curved ones. Where data jump, at an
        end of the piece, the value is the limit along this piece. Where an interface between regions of
        different conductivity meets the piece, a flux has two limits: `region` names the one that is meant,
        without it their mean is returned.

        Raises
        ------
        ProblemError
            If a point is farther off the piece than that (piece, point and distance are named), or the data
            are infinite there.
        """
        self._has("data")
        if region is None:
            return self._data(self._moved(points))
        by_region = getattr(self._data, "by_region", None)
        moved = self._moved(points)
        return self._data(moved) if by_region is None else by_region(moved, region)

    def alpha(self, points: npt.ArrayLike) -> Array:
        """Return Robin's alpha, shape (n,), at points (n, d), moved onto the piece as in `data`.

        It is >= 0 but in ill-posed problems. A Neumann piece is a Robin piece with alpha = 0.

        Raises
        ------
        ProblemError
            If the piece is a Dirichlet piece, a point is off the piece, or alpha is negative there.
        """
        self._has("alpha")
        if self.kind == "dirichlet":
            raise ProblemError(f"piece {self.name!r} has a dirichlet condition; alpha belongs to Robin's")
        moved = self._moved(points)
        if self._alpha is None:
            return np.zeros(len(moved))
        return self._alpha(moved) if self._alpha_may_be_negative else checked_alpha(self._alpha, moved)

    def contains(
        self, points: npt.ArrayLike, tol: float = 1e-9, normals: npt.ArrayLike | None = None
    ) -> BoolArray:
        """Return which points lie on the piece, see `geometry.Boundary.contains`."""
        return self.boundary.contains(points, tol, normals)

    def project(self, points: npt.ArrayLike) -> Array:
        """Return the nearest points (n, d) of the piece."""
        return self.boundary.project(points)

    def normals(self, points: npt.ArrayLike) -> Array:
        """Return outward unit normals (n, d) at the projections of points (n, d)."""
        return self.boundary.normals(points)

    def point(self, t: npt.ArrayLike) -> Array:
        """Return points (n, d) at fractions t of length (n,) or area (n, 2), in [0, 1]."""
        return self.boundary.point(t)

    def sample(self, n: int) -> tuple[Array, Array, Array]:
        """Return about n midpoint-rule points (n, d), outward unit normals (n, d) and weights (n,)."""
        return self.boundary.sample(n)

    def quadrature(
        self, order: int, singular: npt.ArrayLike = (), cell: float | None = None
    ) -> tuple[Array, Array, Array]:
        """Return points, outward unit normals and weights, see `geometry.Boundary.quadrature`.

        Panels end where an interface crosses the piece.
        """
        if not self.parts:
            return self.boundary.quadrature(order, singular, cell)
        rules = [part.quadrature(order, singular, cell) for part in self.parts]
        points, normals, weights = (np.concatenate(column) for column in zip(*rules, strict=True))
        return points, normals, weights

    def probe(self, part: Boundary | None = None) -> None:
        """Evaluate data and alpha at a few points, so that bad ones show when a problem is posed.

        `part` is the bounded part of the piece to look at; None: the whole of it.

        Raises
        ------
        ProblemError
            As `data` and `alpha`.
        """
        points = (part or self.boundary).sample(PROBES)[0]
        self.data(points)
        if self.kind == "robin":
            self.alpha(points)

    def watched(self, log: MoveLog) -> Piece:
        """Return the same piece, with every move recorded in `log`."""
        return replace(self, _log=log)

    def _has(self, what: str) -> None:
        """Refuse to speak of data on the axis and on periodic pieces."""
        if self.kind == PERIODIC:
            raise ProblemError(
                f"piece {self.name!r} is periodic and has no {what}: u and its flux continue on piece "
                f"{self.partner!r}, where x + {self.shift} is the same place as x here"
            )
        if self.kind == "axis":
            raise ProblemError(
                f"piece {self.name!r} is the axis r = 0: it is no boundary of the body and has no {what}; "
                "there du/dr = 0 by symmetry, and r times the flux vanishes. Pass over pieces of kind 'axis'"
            )

    def _moved(self, points: npt.ArrayLike) -> Array:
        """Return the points moved onto the piece."""
        given = as_points(points, self.boundary.dim, error=ProblemError)
        if not len(given):
            return given
        moved = self.boundary.project(given)
        distance = np.sqrt(((moved - given) ** 2).sum(axis=1))
        allowed = (CURVED_MOVE if self.curved else FLAT_MOVE) * self.shape_size
        worst = int(np.argmax(distance))
        if not distance[worst] <= allowed:
            raise ProblemError(
                f"point {worst} = {tuple(given[worst].tolist())} is not on piece {self.name!r}: it lies "
                f"{distance[worst]:.3g} away and at most {allowed:.3g} is moved onto a "
                f"{'curved' if self.curved else 'flat'} piece; ask the piece that the point belongs to"
            )
        if self._log is not None:
            self._log.record(self.name, float(distance[worst]))
        return moved


class Pieces(tuple[Piece, ...]):
    """The pieces of a problem's boundary, by position or by name."""

    __slots__ = ()

    def __new__(cls, pieces: Iterable[Piece]) -> Pieces:
        """Make the tuple."""
        return super().__new__(cls, tuple(pieces))

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the pieces, in order."""
        return tuple(piece.name for piece in self)

    @overload
    def __getitem__(self, key: str | SupportsIndex) -> Piece: ...
    @overload
    def __getitem__(self, key: slice) -> tuple[Piece, ...]: ...
    def __getitem__(self, key: str | SupportsIndex | slice) -> Piece | tuple[Piece, ...]:
        """Return the piece at a position or of a name; ProblemError lists the nearest names."""
        if not isinstance(key, str):
            return super().__getitem__(key)
        for piece in self:
            if piece.name == key:
                return piece
        raise ProblemError(f"no piece is named {key!r}; {nearest_names(key, self.names)}")


def no_data(points: Array) -> Array:
    """Stand in for the data of the axis and of periodic pieces, which have none."""
    raise ProblemError(f"this piece has no data, not at any of {len(points)} points")


def checked_alpha(alpha: PointFunction, points: Array) -> Array:
    """Return alpha (n,) at points on the piece, refusing negative values."""
    values = alpha(points)
    if not (values >= 0.0).all():
        row = int(np.argmin(values))
        raise ProblemError(
            f"{alpha.name} must be >= 0, but it is {values[row]:.6g} at {tuple(points[row].tolist())}"
        )
    return values
