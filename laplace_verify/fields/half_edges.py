"""Fields singular along a half-line only: an edge that ends in a re-entrant vertex.

On the unit sphere a harmonic function that does not depend on r is Re G(w), w = (x + i y)/(R + z) the
stereographic image and G analytic. From it follows one that grows like R (Donkin's solution of degree 1,
derived here by inserting cos t F + dF/d(log tan(t/2)), t the polar angle, into Laplace's equation):

    u = Re [ z G(w) + R w G'(w) ].

With G = q^a, q = w/(w - b), b the image of a ray: w G' = a (1 - q) q^a, hence

    u = Re or Im of  [z + a R (1 - q)] q^a.

Where w = 0, on the positive z axis, q ~ -w/b and u ~ r^a; towards z < 0 q tends to 1 and u is smooth. The
principal power is cut where q < 0: on the plane sector between the z axis and the ray, on which u is
infinite. Both must lie outside the solid. At the vertex u is homogeneous of degree 1: the value is 0 and the
gradient depends on the direction.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any, Literal

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.edges import Line
from laplace_verify.fields.exact import Exact, exact, exact_point, show
from laplace_verify.fields.motions import show_point
from laplace_verify.fields.sheets import Fan
from laplace_verify.fields.singular import Singularity
from laplace_verify.fields.specs import registered

__all__ = ["HalfEdge", "half_edge"]

AXES = ("x", "y", "z")
LIP = 1e-12  # relative distance of q from the negative axis at which a given side decides


@registered("half-edge")
@dataclass(frozen=True, slots=True, kw_only=True)
class HalfEdge(Field):
    """Re or Im of [z + a R (1 - q)] q^a, coordinates renamed so that z is `axis`; `half_edge` makes one."""

    alpha: Exact
    ray: tuple[Exact, ...]
    axis: Literal["x", "y", "z"] = "z"
    part: Literal["re", "im"] = "re"

    def __post_init__(self) -> None:
        """Check every parameter."""
        object.__setattr__(self, "alpha", exact(self.alpha, "alpha"))
        object.__setattr__(self, "ray", exact_point(self.ray, "ray", (3,)))
        if not self.alpha > 0:
            raise FieldError(f"alpha must be positive, got {show(self.alpha)}")
        if self.axis not in AXES:
            raise FieldError(f'axis must be "x", "y" or "z", got {self.axis!r}')
        if self.part not in ("re", "im"):
            raise FieldError(f'part must be "re" or "im", got {self.part!r}')
        if not any(self._turned(self.ray)[:2]):
            raise FieldError(f"ray must not be parallel to the {self.axis} axis, got {show_point(self.ray)}")

    def _turned(self, x: Any) -> tuple[Any, Any, Any]:
        """Return coordinates in cyclic order, so that the edge is the last of them."""
        first = (AXES.index(self.axis) + 1) % 3
        return x[first], x[(first + 1) % 3], x[(first + 2) % 3]

    def _back(self, x: Any) -> tuple[Any, Any, Any]:
        """Undo `_turned`."""
        first = (AXES.index(self.axis) + 1) % 3
        return x[-first % 3], x[(1 - first) % 3], x[(2 - first) % 3]

    @property
    def dim(self) -> int:
        """Three."""
        return 3

    @property
    def formula(self) -> str:
        """Name part, exponent, edge and ray."""
        what = "Re" if self.part == "re" else "Im"
        a = show(self.alpha)
        return (
            f"{what} [{self.axis} + {a} R (1 - q)] q^({a}), q = w/(w - b), w the stereographic image about "
            f"the {self.axis} axis, b that of {show_point(self.ray)}"
        )

    @property
    def growth(self) -> float:
        """Homogeneous of degree 1."""
        return 1.0

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The vertex, where the gradient depends on the direction."""
        return (Singularity(point=(0.0, 0.0, 0.0), exponent=1.0, kind="power"),)

    @property
    def edges(self) -> tuple[Line, ...]:
        """The edge, u ~ r^alpha; the ray, where u is infinite, bounds the sheet."""
        way = self._back((0.0, 0.0, 1.0))
        return (Line(point=(0.0, 0.0, 0.0), direction=way, exponent=float(self.alpha), ray=True),)

    @property
    def sheets(self) -> tuple[Fan, ...]:
        """The plane sector between the edge and the ray."""
        x, y, z = (float(c) for c in self._turned(self.ray))
        flat = math.hypot(x, y)
        return (
            Fan(
                start=(0.0, 0.0, 0.0),
                first=self._back((0.0, 0.0, 1.0)),
                second=self._back((x / flat, y / flat, 0.0)),
                opening=math.atan2(flat, z),
            ),
        )

    def _parts(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, ...]:
        """Return R (1 where it vanishes), t, q, dq/dt; t = w above, 1/w below, where no difference cancels.

        w = (x + i y)/(R + z) and q = t/(t - b) for z > 0, 1/w = (x - i y)/(R - z) and q = 1/(1 - b t) else.
        """
        bx, by, bz = (ctx.number(c) for c in self._turned(self.ray))
        length = ctx.sqrt(bx * bx + by * by + bz * bz)
        b = (bx + 1j * by) / (length + bz) if bz >= 0 else (length - bz) / (bx - 1j * by)
        far = ctx.sqrt(x[0] * x[0] + x[1] * x[1] + x[2] * x[2])
        far = ctx.where(far > 0, far, 1 + 0 * far)
        above = x[2] > 0
        t = (x[0] + 1j * ctx.where(above, x[1], -x[1])) / (far + abs(x[2]))
        below = ctx.where(above, t - b, 1 - b * t)
        return far, t, ctx.where(above, t, 1 + 0 * t) / below, ctx.where(above, -b, b) / below**2

    def _power(self, ctx: Any, q: Any, exponent: Any, side: Any) -> Any:
        """Return q^exponent; on the cut that of the side (+1: below the negative axis)."""
        power = q**exponent
        if side is None:
            return power
        on = (abs(q.imag) <= LIP * abs(q)) & (q.real < 0) & (side != 0)
        turn = ctx.pi * exponent
        return ctx.where(on, abs(q) ** exponent * (ctx.cos(turn) - 1j * side * ctx.sin(turn)), power)

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        x = self._turned(x)
        far, _, q, _ = self._parts(ctx, x)
        a = ctx.number(self.alpha)
        found = (x[2] + a * far * (1 - q)) * self._power(ctx, q, a, side)
        return found.real if self.part == "re" else found.imag

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        """Differentiate q^a (z + a R (1 - q)) by way of t.

        For z > 0 grad t = ((1, i, 0) - t (x, y, R + z)/R) / (R + z), else ((1, -i, 0) - t (x, y, z - R)/R) /
        (R - z).
        """
        x = self._turned(x)
        far, t, q, slope = self._parts(ctx, x)
        a = ctx.number(self.alpha)
        sign = ctx.where(x[2] > 0, 1 + 0 * x[2], -1 + 0 * x[2])
        depth = far + abs(x[2])
        flow = (
            slope * (1 - t * x[0] / far) / depth,
            slope * (1j * sign - t * x[1] / far) / depth,
            slope * (-t * sign / far),
        )
        power, below = self._power(ctx, q, a, side), self._power(ctx, q, a - 1, side)
        inner = a * below * (x[2] + a * far * (1 - q)) - a * far * power
        found = [inner * f + power * a * (1 - q) * c / far for f, c in zip(flow, x, strict=True)]
        found[2] = found[2] + power
        return self._back(tuple(g.real if self.part == "re" else g.imag for g in found))

    def _valid(self, points: Array) -> BoolArray:
        """Everywhere but on the ray, where u is infinite."""
        ray = np.array([float(c) for c in self.ray])
        x, y, z = (ray / math.sqrt(float(ray @ ray))).tolist()
        on = Line(point=(0.0, 0.0, 0.0), direction=(x, y, z), exponent=0.0, ray=True).meets(points)
        valid: BoolArray = ~on | (points == 0.0).all(axis=1)
        return valid


def half_edge(
    alpha: Number,
    ray: Iterable[Number],
    axis: Literal["x", "y", "z"] = "z",
    part: Literal["re", "im"] = "re",
) -> HalfEdge:
    """Return a field that is singular like r^alpha along the positive half of an axis, and linear in size.

    Parameters
    ----------
    alpha : number
        Exponent at the edge, positive; 2/3 for three quarters of space about it.
    ray : tuple of three numbers
        Direction of a ray from the origin where the field is infinite. Ray and edge, and the plane sector
        between them, must lie outside the solid or on its boundary.
    axis : {"x", "y", "z"}
        The edge is its positive half.
    part : {"re", "im"}

    Examples
    --------
    >>> u = half_edge("2/3", (1, 1, 1))
    >>> u.value([[0.0, 0.0, -2.0], [0.0, 0.0, 1.0]]).tolist()
    [-2.0, 0.0]

    Raises
    ------
    FieldError
        If a parameter is out of range.
    """
    return HalfEdge(alpha=alpha, ray=tuple(ray), axis=axis, part=part)  # type: ignore[arg-type]
