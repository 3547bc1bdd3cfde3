"""Depth of a rectangle and what stands opposite the data: zero, or a mirror.

An insulated opposite side is the mirror plane of a rectangle twice as deep with the same data on both of its
sides: u(d) = U(d) + U(2b - d). The part of U that is a polynomial in d is folded by hand, so that nothing
cancels.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Any

__all__ = ["Depth"]


@dataclass(frozen=True, slots=True)
class Depth:
    """Extent b of a rectangle across the side with data, and whether the opposite side is insulated."""

    extent: Fraction
    mirrored: bool

    @property
    def width(self) -> Fraction:
        """Depth of the rectangle with zero opposite: b or 2b."""
        return 2 * self.extent if self.mirrored else self.extent

    def images(self, ctx: Any, d: Any, h: Any) -> list[tuple[Any, Any, int]]:
        """Return (d, width - d, sign of the derivative in d) of the point and of its mirror image, if any."""
        if not self.mirrored:
            return [(d, h, 1)]
        beyond = ctx.number(self.extent) + h
        return [(d, beyond, 1), (beyond, d, -1)]

    def linear(self, ctx: Any, h: Any) -> Any:
        """Return the solution of constant data 1 with insulated neighbours: h / b, or 1."""
        return 1 + 0 * h if self.mirrored else h / ctx.number(self.extent)

    def slope(self, ctx: Any) -> Any:
        """Return the derivative of `linear` in d."""
        return ctx.number(0) if self.mirrored else -1 / ctx.number(self.extent)
