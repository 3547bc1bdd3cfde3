"""Quantities of a case: single numbers an engineer asks for, with an error radius.

    value              u at a point
    flux density       e . K grad u at a point for a direction e; with the outward normal of a conductor's
                       surface it is the surface charge density, in a potential of gravity the attraction
    flux               integral over a piece of n . K grad u ds (outward; a heat flow or discharge out is its
                       negative): the charge of a conductor, K being the permittivity
    energy             integral over the shape of grad u . K grad u dx = integral over the boundary of
                       u n . K grad u ds: Dirichlet's integral, twice the stored energy
    conductance        flux through a piece at the level a over a - b, b the level of another piece (or 0, of
                       "infinity"): of heat or current; the capacitance where K is the permittivity
    resistance         its inverse
    shape factor       conductance / K
    capacitance        entry C_ij of the capacitance matrix: flux through piece i over the level of piece j
                       where every other piece is at level 0
    torsion constant   integral over the section of x^2 + y^2 + x w_y - y w_x, w = u / twist the warping
                       function: n . grad u = twist (y n_x - x n_y)
    added mass         integral over the bodies of K phi n . v ds / v^2, phi the potential of the motion v of
                       the bodies in fluid at rest, n . grad phi = n . v, K the density of the fluid

and, in the words of seepage, where u is the head (`seepage_quantities` has what asks for them):

    uplift             integral over a piece of u ds: times the unit weight of water the force of the head
    discharge          - integral of n . K grad u ds over a straight section, n to the right of start -> stop
    exit gradient      - n . grad u at a point of a piece, positive where water leaves

With coordinates (r, z) or r the integrals are those of space, with the weight `coordinates.metric`; in
"radial-cylinder" they are per unit length of the cylinder. Coordinates and lengths are meant as the decimals
they are written with: 0.2 is one fifth.

References
----------
Smythe 1968, Static and Dynamic Electricity, 3rd ed., ch. II (capacitance matrix); Love 1927, Mathematical
Theory of Elasticity, 4th ed., ch. XIV (torsion); Lamb 1932, Hydrodynamics, 6th ed., ch. VI (added mass). All
from memory, unchecked.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Literal, TypeAlias

import numpy as np

from laplace_verify.errors import ProblemError
from laplace_verify.problems.stored import StoredNumber

__all__ = [
    "Exact",
    "Quantity",
    "QuantityKind",
    "QuantitySpec",
    "Where",
    "added_mass",
    "as_place",
    "capacitance_coefficient",
    "conductance_between",
    "energy_of_solution",
    "flux_density_at",
    "flux_through",
    "resistance_between",
    "shape_factor_between",
    "torsion_constant",
    "value_at",
]

QuantityKind: TypeAlias = Literal[
    "value",
    "flux density",
    "flux",
    "energy",
    "conductance",
    "resistance",
    "shape factor",
    "capacitance",
    "torsion constant",
    "added mass",
    "uplift",
    "discharge",
    "exit gradient",
]
Where: TypeAlias = str | tuple[str, str] | tuple[float, ...] | None
Exact: TypeAlias = float | int | str | Fraction


@dataclass(frozen=True, slots=True, kw_only=True)
class Quantity:
    """An exact quantity: |true value - value| <= radius.

    Attributes
    ----------
    value, radius
        The number and its error radius, in `unit`.
    unit
        "" if dimensionless.
    kind
        See the table of the module.
    where
        The piece of a flux, uplift or exit gradient, the point of a value or flux density, the two pieces of
        a conductance and its kin and of a capacitance, start and stop of the section of a discharge as (x, y,
        x, y), None for what belongs to the whole boundary.
    place
        The point of an exit gradient, else None.
    direction
        Of a flux density, a unit vector; else ().
    drive
        What the problem is driven by: (a - b,) of a conductance and its kin, (level of j,) of a
        capacitance, (twist,) of a torsion constant, the motion v of an added mass; else ().
    digits
        The number with as many digits as are known, its radius and basis; None where it is known in float64
        only.
    """

    value: float
    unit: str
    radius: float
    kind: QuantityKind
    where: Where
    place: tuple[float, ...] | None = None
    direction: tuple[float, ...] = ()
    drive: tuple[float, ...] = ()
    digits: StoredNumber | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class QuantitySpec:
    """Which quantity is wanted, for the argument `quantities` of `case`."""

    kind: QuantityKind
    where: Where = None
    unit: str = ""
    exact: Exact | None = None
    direction: str | tuple[float, ...] = ()
    place: tuple[float, ...] | None = None


def flux_through(piece: str, *, unit: str = "", exact: Exact | None = None) -> QuantitySpec:
    """Ask for the flux through a piece, the integral of n . K grad u with the outward normal n.

    Parameters
    ----------
    piece
        Name of the piece.
    unit
        Its unit, "" if dimensionless.
    exact
        The value in closed form: a number, a fraction such as "1/4" or a formula such as "12*pi/log(3)"; it
        is checked against the exact field and gives the quantity 50 digits unless it is a float.
    """
    return QuantitySpec(kind="flux", where=piece, unit=unit, exact=exact)


def value_at(point: float | Sequence[float], *, unit: str = "", exact: Exact | None = None) -> QuantitySpec:
    """Ask for u at a point of the closed shape; arguments as in `flux_through`.

    >>> value_at((0.5, 0.25)).where
    (0.5, 0.25)
    """
    return QuantitySpec(kind="value", where=as_place("value_at", point), unit=unit, exact=exact)


def flux_density_at(
    point: float | Sequence[float],
    direction: str | Sequence[float],
    *,
    unit: str = "",
    exact: Exact | None = None,
) -> QuantitySpec:
    """Ask for e . K grad u at a point: surface charge density, heat flux, exit gradient, attraction.

    Parameters
    ----------
    point
        A point of the closed shape.
    direction
        A unit vector e, or the name of a piece through the point, whose outward normal is meant.
    unit, exact
        As in `flux_through`.

    >>> flux_density_at((0.0, 0.0, 1.0), (0, 0, -1)).direction
    (0.0, 0.0, -1.0)
    """
    way = direction if isinstance(direction, str) else as_place("flux_density_at", direction)
    where = as_place("flux_density_at", point)
    return QuantitySpec(kind="flux density", where=where, direction=way, unit=unit, exact=exact)


def energy_of_solution(*, unit: str = "", exact: Exact | None = None) -> QuantitySpec:
    """Ask for Dirichlet's integral of grad u . K grad u over the shape; arguments as in `flux_through`."""
    return QuantitySpec(kind="energy", unit=unit, exact=exact)


def conductance_between(
    piece: str, other: str, *, unit: str = "", exact: Exact | None = None
) -> QuantitySpec:
    """Ask for the flux through `piece` over its level less that of `other`.

    It is the capacitance (per unit length, in the plane) where K is the permittivity.

    Parameters
    ----------
    piece, other
        Two pieces on each of which u is constant; `other` may be "infinity", where u decays to 0.
    unit, exact
        As in `flux_through`.
    """
    return QuantitySpec(kind="conductance", where=(piece, other), unit=unit, exact=exact)


def resistance_between(piece: str, other: str, *, unit: str = "", exact: Exact | None = None) -> QuantitySpec:
    """Ask for the inverse of the conductance; arguments as in `conductance_between`."""
    return QuantitySpec(kind="resistance", where=(piece, other), unit=unit, exact=exact)


def shape_factor_between(
    piece: str, other: str, *, unit: str = "", exact: Exact | None = None
) -> QuantitySpec:
    """Ask for the conductance over K, which is the shape's alone; arguments as in `conductance_between`."""
    return QuantitySpec(kind="shape factor", where=(piece, other), unit=unit, exact=exact)


def capacitance_coefficient(
    piece: str, driven: str, *, unit: str = "", exact: Exact | None = None
) -> QuantitySpec:
    """Ask for an entry of the capacitance matrix: the flux through `piece` over the level of `driven`.

    Every piece but `driven` must be at level 0.

    Parameters
    ----------
    piece, driven
        Two pieces, or the same one twice.
    unit, exact
        As in `flux_through`.
    """
    return QuantitySpec(kind="capacitance", where=(piece, driven), unit=unit, exact=exact)


def torsion_constant(*, unit: str = "", exact: Exact | None = None) -> QuantitySpec:
    """Ask for the torsion constant of the section; arguments as in `flux_through`.

    u must be a multiple of the warping function about the origin: n . grad u = twist (y n_x - x n_y) all
    round.
    """
    return QuantitySpec(kind="torsion constant", unit=unit, exact=exact)


def added_mass(*, unit: str = "", exact: Exact | None = None) -> QuantitySpec:
    """Ask for the added mass of the bodies in the direction they move in; arguments as in `flux_through`.

    u must be the potential of a stream past bodies at rest, or of rigid bodies that move all alike in fluid
    at rest.
    """
    return QuantitySpec(kind="added mass", unit=unit, exact=exact)


def as_place(asked: str, point: float | Sequence[float]) -> tuple[float, ...]:
    """Return the coordinates of a point, as floats."""
    try:
        return tuple(float(c) for c in np.atleast_1d(np.asarray(point, dtype=np.float64)))
    except (TypeError, ValueError) as cause:
        raise ProblemError(f"{asked} needs the coordinates of a point, got {point!r}") from cause
