"""The Newtonian potential of a homogeneous rectangular prism: u(x) = integral over the prism of dV/|x - xi|.

With X_i = x_i - x and so on from the point to the corners, R = |(X, Y, Z)| and the sign +1 for the corner of
three upper ends, turned with every lower end,

    u    =  sum +- [ X Y ln(Z + R) + Y Z ln(X + R) + Z X ln(Y + R)
                     - X^2/2 atan(Y Z/(X R)) - Y^2/2 atan(Z X/(Y R)) - Z^2/2 atan(X Y/(Z R)) ]
    u_x  = -sum +- [ Y ln(Z + R) + Z ln(Y + R) - X atan(Y Z/(X R)) ]

(MacMillan 1930, The Theory of the Potential, section 43; Nagy 1966, The gravitational attraction of a right
rectangular prism, Geophysics 31, 362-371; both from memory, unchecked). Times G and the density it is the
potential of gravity, and grad u the attraction. Outside u is harmonic; inside its Laplacian is -4 pi, so that
points inside are refused. The logarithms are taken in differences over the two ends of an edge, which are
finite on the prolongations of the edge. Far away the terms cancel: at a distance of n lengths the last n^3
units are lost.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from itertools import product
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields._end_gaps import logarithm_between
from laplace_verify.fields.base import Field
from laplace_verify.fields.edges import Edge
from laplace_verify.fields.exact import Exact, exact_point, offset
from laplace_verify.fields.motions import show_point
from laplace_verify.fields.specs import registered

__all__ = ["Prism", "prism"]

ENDS = (0, 1)


@registered("prism")
@dataclass(frozen=True, slots=True, kw_only=True)
class Prism(Field):
    """u of a homogeneous prism; `prism` makes one."""

    lower: tuple[Exact, ...]
    upper: tuple[Exact, ...]

    def __post_init__(self) -> None:
        """Check the prism."""
        object.__setattr__(self, "lower", exact_point(self.lower, "lower", (3,)))
        object.__setattr__(self, "upper", exact_point(self.upper, "upper", (3,)))
        if not all(a < b for a, b in zip(self.lower, self.upper, strict=True)):
            raise FieldError(
                f"lower must be below upper, got {show_point(self.lower)} and {show_point(self.upper)}"
            )

    @property
    def dim(self) -> int:
        """Three."""
        return 3

    @property
    def formula(self) -> str:
        """The field in words."""
        return f"[potential of the prism from {show_point(self.lower)} to {show_point(self.upper)}]"

    @property
    def growth(self) -> float:
        """Decays like 1/r."""
        return -1.0

    @property
    def edges(self) -> tuple[Edge, ...]:
        """The twelve edges, where second derivatives are infinite like log r."""
        ends = [tuple(float(c) for c in pair) for pair in zip(self.lower, self.upper, strict=True)]
        found = []
        for axis in range(3):
            across = [k for k in range(3) if k != axis]
            for first, second in product(ENDS, ENDS):
                start = [0.0, 0.0, 0.0]
                start[across[0]], start[across[1]] = ends[across[0]][first], ends[across[1]][second]
                stop = list(start)
                start[axis], stop[axis] = ends[axis]
                found.append(Edge(start=tuple(start), end=tuple(stop), exponent=2.0))  # type: ignore[arg-type]
        return tuple(found)

    def _valid(self, points: Array) -> BoolArray:
        """Return which points are not inside."""
        low, high = (np.array([float(c) for c in corner]) for corner in (self.lower, self.upper))
        return np.asarray(((points <= low) | (points >= high)).any(axis=1), dtype=np.bool_)

    def _gaps(self, ctx: Any, x: tuple[Any, ...]) -> tuple[list[list[Any]], dict[tuple[int, ...], Any]]:
        """Return the offsets of the ends along each axis, and the distances of the corners."""
        gaps = [[-offset(ctx, x[k], end) for end in (self.lower[k], self.upper[k])] for k in range(3)]
        distances = {
            corner: ctx.hypot(ctx.hypot(gaps[0][corner[0]], gaps[1][corner[1]]), gaps[2][corner[2]])
            for corner in product(ENDS, repeat=3)
        }
        return gaps, distances

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        gaps, distances = self._gaps(ctx, x)
        total = 0
        for axis in range(3):
            first, second = (axis + 1) % 3, (axis + 2) % 3
            for i, j in product(ENDS, ENDS):
                sign = 1 if i == j else -1
                lines = self._line(ctx, axis, (i, j), gaps, distances)
                total = total + sign * gaps[first][i] * gaps[second][j] * lines
            total = total - self._angles(ctx, axis, 1, gaps, distances) / 2
        return total

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002
        gaps, distances = self._gaps(ctx, x)
        slopes = []
        for axis in range(3):
            first, second = (axis + 1) % 3, (axis + 2) % 3
            total = -self._angles(ctx, axis, 0, gaps, distances)
            for i, j in product(ENDS, ENDS):  # i counts the ends along `axis`
                sign = 1 if i == j else -1
                total = total + sign * gaps[first][j] * self._line(ctx, second, (i, j), gaps, distances)
                total = total + sign * gaps[second][j] * self._line(ctx, first, (j, i), gaps, distances)
            slopes.append(-total)
        return tuple(slopes)

    def _line(
        self, ctx: Any, axis: int, ends: tuple[int, int], gaps: list[list[Any]], distances: dict[Any, Any]
    ) -> Any:
        """Return ln(Z + R) over the two ends along `axis`, at given ends of the next two axes."""
        first, second = (axis + 1) % 3, (axis + 2) % 3
        corner = [0, 0, 0]
        corner[first], corner[second] = ends
        r = []
        for end in ENDS:
            corner[axis] = end
            r.append(distances[tuple(corner)])
        return logarithm_between(ctx, gaps[first][ends[0]], gaps[second][ends[1]], gaps[axis], r)

    def _angles(
        self, ctx: Any, axis: int, power: int, gaps: list[list[Any]], distances: dict[Any, Any]
    ) -> Any:
        """Return sum +- X^(1 + power) atan(Y Z/(X R)) over the corners, X along `axis`."""
        first, second = (axis + 1) % 3, (axis + 2) % 3
        total = 0
        for corner, r in distances.items():
            sign = 1 if sum(corner) % 2 else -1
            near, y, z = (gaps[k][corner[k]] for k in (axis, first, second))
            size = np.abs(near) if ctx is FLOAT else abs(near)
            total = total + sign * size * near**power * ctx.atan2(y * z, size * r)
        return total


def prism(lower: Iterable[Number], upper: Iterable[Number]) -> Prism:
    """Return the potential of a homogeneous prism of density 1, harmonic outside it and continuous on it.

    Parameters
    ----------
    lower, upper
        Opposite corners (x, y, z).

    Raises
    ------
    FieldError
        If the prism is empty.

    Examples
    --------
    >>> prism((0, 0, 0), (1, 1, 1)).value([[0.0, 0.0, 0.0]]).round(12).tolist()
    [1.19003868199]
    """
    return Prism(lower=lower, upper=upper)  # type: ignore[arg-type]  # made exact
