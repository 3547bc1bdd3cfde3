"""A conductivity that is constant per region: layers, inclusions, sectors.

    K(x) = K_i for x in region i of a partition (`fields.partitions`)

A partition tiles all of space, so the regions tile every shape it is laid over.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, as_points
from laplace_verify.contexts import Number
from laplace_verify.errors import FieldError, ProblemError, nearest_names
from laplace_verify.fields.partitions import Layers, Partition, Sectors, Shells, partition_from_spec

__all__ = ["Materials", "inclusion", "layers", "sectors"]

LARGEST_RATIO = 1e12  # of conductivities: beyond it the smallest is lost in float64

Conductivities = Iterable[float] | Mapping[str, float]


@dataclass(frozen=True, slots=True, kw_only=True)
class Materials:
    """One positive conductivity per region of a partition; `layers`, `inclusion` and `sectors` make one.

    Attributes
    ----------
    partition
        The regions with their names.
    conductivities
        K of each, in the order of the names.
    """

    partition: Partition
    conductivities: tuple[float, ...]

    def __post_init__(self) -> None:
        """Refuse numbers that are not positive, too different, or too few."""
        names, given = self.partition.names, self.conductivities
        if len(given) != len(names):
            raise ProblemError(f"{len(names)} regions need as many conductivities, got {len(given)}")
        for name, k in zip(names, given, strict=True):
            plain = isinstance(k, int | float | np.integer | np.floating) and not isinstance(k, bool)
            if not plain or not 0.0 < k < math.inf:
                raise ProblemError(
                    f"the conductivity of region {name!r} must be a positive number, got {k!r}; tensors are "
                    "taken for homogeneous problems only"
                )
        if not max(given) <= LARGEST_RATIO * min(given):
            raise ProblemError(
                f"conductivities must differ by less than {LARGEST_RATIO:g}, got {list(given)}"
            )
        object.__setattr__(self, "conductivities", tuple(float(k) for k in given))

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the regions."""
        return self.partition.names

    @property
    def ratio(self) -> float:
        """Largest over smallest conductivity."""
        return max(self.conductivities) / min(self.conductivities)

    def of(self, region: str) -> float:
        """Return K of a region.

        Raises
        ------
        ProblemError
            If no region bears the name.
        """
        if region not in self.names:
            raise ProblemError(f"no region is named {region!r}; {nearest_names(str(region), self.names)}")
        return self.conductivities[self.names.index(region)]

    def at(self, points: npt.ArrayLike, region: str | None = None) -> Array:
        """Return K (n,) at points (n, d); on an interface that of `region`, else of one of its two sides."""
        array = as_points(points, self.partition.dim, error=ProblemError)
        found = np.asarray(self.conductivities)[self.partition.locate(array)]
        if region is None:
            return found
        k, number = self.of(region), self.names.index(region)
        size = float(np.abs(array).max(initial=0.0))
        away = ~self.partition.contains(array, number, tol=1e-9 * size)
        if away.any():
            row = int(np.flatnonzero(away)[0])
            raise ProblemError(
                f"point {row} = {tuple(array[row].tolist())} does not lie in region {region!r}; "
                "region= only chooses between the two sides of an interface"
            )
        return np.full(len(array), k)

    def scaled(self, length: float, conductivity: float) -> Materials:
        """Return the materials of a dimensional twin."""
        return Materials(
            partition=self.partition if length == 1.0 else self.partition.scaled(length),
            conductivities=tuple(k * conductivity for k in self.conductivities),
        )

    def spec(self) -> dict[str, Any]:
        """Return the materials as plain data."""
        return {
            "regions": self.partition.spec(),
            "values": dict(zip(self.names, self.conductivities, strict=True)),
        }

    @staticmethod
    def from_spec(spec: Mapping[str, Any]) -> Materials:
        """Return the materials that `spec` described.

        Raises
        ------
        ProblemError
            If regions or values are missing or do not fit.
        """
        if set(spec) != {"regions", "values"} or not all(isinstance(v, dict) for v in spec.values()):
            raise ProblemError(
                f"conductivity must be a number, a matrix or a table of regions and values, got {spec!r}"
            )
        return _made(lambda: partition_from_spec(dict(spec["regions"])), spec["values"])


def layers(
    direction: Iterable[Number],
    positions: Iterable[Number],
    conductivities: Conductivities,
) -> Materials:
    """Return layers between the planes direction . x = position, each with its own conductivity.

    Parameters
    ----------
    direction
        Vector across the layers: (1,) for a rod, (0, 1) for layers one above the other, (3, 4) oblique.
    positions
        Rising values of direction . x at the interfaces; decimals and fractions in strings are exact.
    conductivities
        One more than positions, in the direction: numbers, or region name -> number.

    Examples
    --------
    >>> wall = layers((1,), [0.3, 0.5], {"brick": 0.7, "felt": 0.04, "plaster": 0.4})
    >>> wall.at([[0.1], [0.4]]).tolist(), wall.at([[0.3]], region="felt").tolist()
    ([0.7, 0.04], [0.04])

    Raises
    ------
    ProblemError
        If positions do not rise, numbers do not fit, or a conductivity is not positive.
    """
    return _made(lambda: Layers(direction=direction, positions=positions, names=_names(conductivities)),  # type: ignore[arg-type]  # made exact there
                 conductivities)  # fmt: skip


def inclusion(
    centre: Iterable[Number], radii: Iterable[Number] | Number, conductivities: Conductivities
) -> Materials:
    """Return a disc or ball, with or without coats, in surroundings of another conductivity.

    Parameters
    ----------
    centre
        Centre in the plane or in space.
    radii
        Its radius, or rising radii of core and coats.
    conductivities
        From the inside outwards, one more than radii: numbers, or region name -> number.

    Examples
    --------
    >>> pipe = inclusion((0, 0), [0.2, 0.25], {"water": 0.6, "wall": 15, "soil": 1.1})
    >>> pipe.names, pipe.of("wall")
    (('water', 'wall', 'soil'), 15.0)

    Raises
    ------
    ProblemError
        If radii do not rise, numbers do not fit, or a conductivity is not positive.
    """
    single = isinstance(radii, str) or not isinstance(radii, Iterable)
    rings = (radii,) if single else radii
    return _made(lambda: Shells(centre=centre, radii=rings, names=_names(conductivities)),  # type: ignore[arg-type]
                 conductivities)  # fmt: skip


def sectors(
    apex: Iterable[Number], rays: Iterable[Iterable[Number]], conductivities: Conductivities
) -> Materials:
    """Return sectors of the plane about an apex, each from its ray counter-clockwise to the next.

    Parameters
    ----------
    apex
        Where they meet.
    rays
        Direction vectors of the interfaces, counter-clockwise, at least two.
    conductivities
        One per ray: numbers, or region name -> number.

    Examples
    --------
    >>> board = sectors((0, 0), [(1, 0), (0, 1), (-1, 0), (0, -1)], [5, 1, 5, 1])
    >>> board.at([(1, 1), (-1, 1)]).tolist()
    [5.0, 1.0]

    Raises
    ------
    ProblemError
        If rays do not run once round, numbers do not fit, or a conductivity is not positive.
    """
    return _made(lambda: Sectors(apex=apex, rays=tuple(rays), names=_names(conductivities)),  # type: ignore[arg-type]
                 conductivities)  # fmt: skip


def _names(conductivities: Conductivities) -> tuple[str, ...]:
    """Return the names, if conductivities are given by name."""
    return tuple(conductivities) if isinstance(conductivities, Mapping) else ()


def _made(partition: Any, conductivities: Conductivities) -> Materials:
    """Return the materials, with an error of this room if the partition cannot be made."""
    try:
        made: Partition = partition()
    except FieldError as cause:
        raise ProblemError(f"regions of different conductivity: {cause}") from cause
    values = conductivities.values() if isinstance(conductivities, Mapping) else conductivities
    if isinstance(conductivities, Mapping) and set(conductivities) != set(made.names):
        raise ProblemError(f"conductivities are needed for {made.names!r}, got {tuple(conductivities)!r}")
    if isinstance(conductivities, Mapping):
        values = [conductivities[name] for name in made.names]
    return Materials(partition=made, conductivities=tuple(values))
