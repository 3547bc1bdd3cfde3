"""A disc with data on its rim: the part that does not depend on how the data are given."""

from __future__ import annotations

from abc import abstractmethod
from dataclasses import dataclass
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, show

__all__ = ["DiscField"]

OUTSIDE = 1e-12  # of the radius: how far outside a point may be put by rounding


@dataclass(frozen=True, slots=True, kw_only=True)
class DiscField(Field):
    """Harmonic in the disc |x - centre| < radius, with data on the rim; see `poisson_disc`."""

    centre: tuple[Exact, ...]
    radius: Exact

    def __post_init__(self) -> None:
        """Make the parameters exact.

        Raises
        ------
        FieldError
            If the centre is no point of the plane or the radius is not positive.
        """
        object.__setattr__(self, "centre", exact_point(self.centre, "centre", (2,)))
        object.__setattr__(self, "radius", exact(self.radius, "radius"))
        if not self.radius > 0:
            raise FieldError(f"radius must be > 0, got {show(self.radius)}")

    @property
    def dim(self) -> int:
        """2."""
        return 2

    @property
    def formula(self) -> str:
        """The problem in one line."""
        centre = ", ".join(show(c) for c in self.centre)
        return f"[disc about ({centre}), radius {show(self.radius)}: {self._data_text()} on the rim]"

    @abstractmethod
    def _data_text(self) -> str:
        """Return the data in words or as a formula."""

    def _scaled(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, Any]:
        """Return (x - centre) / radius."""
        radius = ctx.number(self.radius)
        return offset(ctx, x[0], self.centre[0]) / radius, offset(ctx, x[1], self.centre[1]) / radius

    def _valid(self, points: Array) -> BoolArray:
        """Return which points lie in the closed disc, to rounding."""
        radius = float(self.radius)
        x, y = (column - float(c) if c else column for column, c in zip(points.T, self.centre, strict=True))
        slack = OUTSIDE * radius + 4 * np.finfo(np.float64).eps * float(np.abs(self._floats()).max())
        inside: BoolArray = x * x + y * y <= (radius + slack) ** 2
        return inside

    def _floats(self) -> Array:
        """Return the centre in float64."""
        return np.array([float(c) for c in self.centre])
