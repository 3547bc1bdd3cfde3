"""A reference value kept in a file: decimal digits with an error radius and its basis."""

from __future__ import annotations

from dataclasses import dataclass

__all__ = ["StoredValue"]


@dataclass(frozen=True, slots=True, kw_only=True)
class StoredValue:
    """u and grad u at a point, as decimal strings: |true value - value| <= radius.

    Attributes
    ----------
    point
        Coordinates as decimal strings, exact.
    value, gradient
        u and the components of grad u.
    radius
        Error radius of the value and of every component of the gradient.
    basis
        "closed form", "tail bound" (proven) or "two routes" (confirmed by agreement, not proven).
    """

    point: tuple[str, ...]
    value: str
    gradient: tuple[str, ...]
    radius: str
    basis: str
