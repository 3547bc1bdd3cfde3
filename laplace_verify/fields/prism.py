"""The Newtonian potential of a homogeneous rectangular prism: u(x) = integral over the prism of dV/|x - xi|.

With X_0, X_1 the offsets to the ends of an axis, and S_i the potential of a uniform layer on the face there,

    u    =  sum over the axes of (X_1 S_1 - X_0 S_0)/2,     u_x = S_0 - S_1
    S    =  sum over the two axes of the face of (Y_1 l_1 - Y_0 l_0) - |X| W

with l the potential of an edge (`_end_gaps`), Y its distance in the plane of the face, and W the solid angle
of the face (Gauss's theorem, and d u/d(size) = 2 u for homogeneous bodies; collected over the edges these are
the corner terms of MacMillan 1930, The Theory of the Potential, section 43, and Nagy 1966, The gravitational
attraction of a right rectangular prism, Geophysics 31, 362-371; both from memory, unchecked).

Times G and the density, u is the potential of gravity, and grad u the attraction. Outside u is harmonic;
inside its Laplacian is -4 pi, so that points inside are refused. Far away the terms cancel: in float64 the
axes that a point is far from are integrated by Gauss's rule instead (`_prism_far`).
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
from laplace_verify.fields._end_gaps import gaps_to
from laplace_verify.fields._prism_far import by_distance
from laplace_verify.fields._prism_near import solid
from laplace_verify.fields.base import Field
from laplace_verify.fields.edges import Edge
from laplace_verify.fields.exact import Exact, exact_point
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

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        return self._sums(ctx, x)[0]

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002
        return self._sums(ctx, x)[1]

    def _sums(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, tuple[Any, ...]]:
        """Return u and grad u."""
        gaps = [gaps_to(ctx, *ends) for ends in zip(x, self.lower, self.upper, strict=True)]
        return by_distance(gaps) if ctx is FLOAT else solid(ctx, gaps)


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
