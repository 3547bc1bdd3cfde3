"""Quantities in the words of seepage: uplift, discharge across a section, exit gradient.

u is the head, a length; K the permeability, a length per time. The pressure head at a place is the head less
its elevation, `value_at` asks for it; times the unit weight of water it is the pore pressure.
"""

from __future__ import annotations

from collections.abc import Sequence

from laplace_verify.problems.quantities import Exact, QuantitySpec, as_place

__all__ = ["discharge_across", "exit_gradient_at", "uplift_on"]


def uplift_on(piece: str, *, unit: str = "", exact: Exact | None = None) -> QuantitySpec:
    """Ask for the uplift on a piece, the integral of u over it; arguments as in `flux_through`.

    With u the head above the piece and gamma the unit weight of water, the force is gamma times this.
    """
    return QuantitySpec(kind="uplift", where=piece, unit=unit, exact=exact)


def discharge_across(
    start: Sequence[float], stop: Sequence[float], *, unit: str = "", exact: Exact | None = None
) -> QuantitySpec:
    """Ask for the discharge -K grad u that crosses a straight section of a plane shape from left to right.

    Left and right are those of the way from `start` to `stop`; other arguments as in `flux_through`.

    >>> discharge_across((0, -1), (0, 0)).where
    (0.0, -1.0, 0.0, 0.0)
    """
    where = as_place("discharge_across", start) + as_place("discharge_across", stop)
    return QuantitySpec(kind="discharge", where=where, unit=unit, exact=exact)


def exit_gradient_at(
    piece: str, point: Sequence[float], *, unit: str = "", exact: Exact | None = None
) -> QuantitySpec:
    """Ask for the exit gradient -n . grad u at a point of a piece, positive where water leaves.

    At an end of the piece it is the limit along it; other arguments as in `flux_through`.
    """
    place = as_place("exit_gradient_at", point)
    return QuantitySpec(kind="exit gradient", where=piece, place=place, unit=unit, exact=exact)
