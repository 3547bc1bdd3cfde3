"""Fields pieced together from one smooth field per region, for a conductivity that is constant per region.

    div(K grad u) = 0 with K = K_i in region i    <=>    u = u_i harmonic in region i, and on an interface
                                                        u_i = u_j,   K_i n . grad u_i = K_j n . grad u_j

The pieces carry the solution; the conductivities belong to the problem, which checks both conditions. On an
interface the value is common, the gradient jumps and needs the name of a region. Singular points of a piece
count only where they lie in its own closed region: the dipole that stands for a disc has its pole inside the
disc, where another piece holds.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import FLOAT
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.partitions import Partition
from laplace_verify.fields.singular import Basis, Cut, Singularity, weakest_basis
from laplace_verify.fields.specs import registered

__all__ = ["RegionField", "by_region"]

ALONG = np.geomspace(1e-6, 1e6, 97)  # where a cut is looked up in the partition, relative to its size


@registered("regions")
@dataclass(frozen=True, slots=True, kw_only=True)
class RegionField(Field):
    """u = parts[k] in region k of a partition; `by_region` makes one."""

    partition: Partition
    parts: tuple[Field, ...]

    def __post_init__(self) -> None:
        """Check that there is one field of the right dimension per region."""
        if not isinstance(self.partition, Partition):
            raise FieldError(f"a partition was expected, got {type(self.partition).__name__}")
        count, given = len(self.partition.names), len(self.parts)
        if count != given or not all(isinstance(part, Field) for part in self.parts):
            raise FieldError(f"{count} regions need as many fields, got {given}: one per region")
        for name, part in zip(self.partition.names, self.parts, strict=True):
            if part.dim != self.partition.dim:
                raise FieldError(
                    f"the field of region {name!r} has dimension {part.dim}, "
                    f"the partition {self.partition.dim}"
                )
            if part.regions:
                raise FieldError(f"the field of region {name!r} is itself made of regions")

    @property
    def dim(self) -> int:
        """As the partition."""
        return self.partition.dim

    @property
    def regions(self) -> tuple[str, ...]:
        """Names of the regions."""
        return self.partition.names

    @property
    def formula(self) -> str:
        """The formula of each region."""
        pairs = zip(self.partition.names, self.parts, strict=True)
        return "{" + "; ".join(f"{part.formula} in {name}" for name, part in pairs) + "}"

    @property
    def basis(self) -> Basis:
        """The weakest of the parts."""
        return weakest_basis(*(part.basis for part in self.parts))

    @property
    def opaque(self) -> bool:
        """Whether one of the parts is."""
        return any(part.opaque for part in self.parts)

    @property
    def growth(self) -> float:
        """The largest growth of the parts."""
        return max(part.growth for part in self.parts)

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """Those of each part in its own closed region, each once."""
        own = [
            singularity
            for k, part in enumerate(self.parts)
            for singularity in part.singularities
            if self.partition.contains([singularity.point], k).all()
        ]
        return tuple(dict.fromkeys(own))

    @property
    def cuts(self) -> tuple[Cut, ...]:
        """Those of each part that run through the inside of its own region, each once."""
        own = [cut for k, part in enumerate(self.parts) for cut in part.cuts if self._crossed(k, cut)]
        return tuple(dict.fromkeys(own))

    def _crossed(self, k: int, cut: Cut) -> bool:
        """Return whether a cut has points strictly inside region k."""
        reach = max(wall.size for wall in self.partition.walls) or 1.0
        along = np.append(ALONG * reach, min(cut.length, reach))
        points = np.array(cut.start) + along[along <= cut.length, None] * np.array(cut.direction)
        inside = (self.partition.locate(points) == k) & ~self.partition.on_interface(points)
        return bool(inside.any())

    def on_interface(self, points: Array, place: tuple[Any, ...] | None = None) -> BoolArray:
        """Return which points lie on an interface, to rounding; a precise place is compared to 50 digits."""
        return self.partition.on_interface(points, place)

    def restricted(self, region: str) -> Field:
        """Return the part of a region."""
        return self.parts[self.partition.number(region)]

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        return self._chosen(ctx, x, side, lambda part, y, lip: (part._value(ctx, y, lip),))[0]

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        return self._chosen(ctx, x, side, lambda part, y, lip: part._gradient(ctx, y, lip))

    def _chosen(self, ctx: Any, x: tuple[Any, ...], side: Any, evaluate: Any) -> tuple[Any, ...]:
        """Return what `evaluate` makes of each point's own part."""
        number = self.partition.index(ctx, x)
        if ctx is not FLOAT:
            results: tuple[Any, ...] = evaluate(self.parts[int(number)], x, side)
            return results
        rows: tuple[Any, ...] = ()
        for k, part in enumerate(self.parts):
            mask = number == k
            if not mask.any():
                continue
            found = evaluate(part, tuple(c[mask] for c in x), None if side is None else side[mask])
            rows = rows or tuple(np.empty(len(mask)) for _ in found)
            for row, values in zip(rows, found, strict=True):
                row[mask] = values
        return rows or evaluate(self.parts[0], x, side)

    def _valid(self, points: Array) -> BoolArray:
        number = self.partition.locate(points)
        valid = np.ones(len(points), dtype=bool)
        for k, part in enumerate(self.parts):
            mask = number == k
            if mask.any():
                valid[mask] = part._valid(points[mask])
        return valid


def by_region(partition: Any, parts: Mapping[str, Field] | Iterable[Field]) -> RegionField:
    """Return the field that is `parts[name]` in the region of that name.

    Parameters
    ----------
    partition
        What `layers`, `inclusion` or `sectors` made (their partition is used), or a bare partition.
    parts
        Region name -> field, or one field per region in the order of the names.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> from laplace_verify.fields.partitions import Layers
    >>> wall = Layers(direction=(1,), positions=(1,), names=("brick", "felt"))
    >>> u = by_region(wall, {"brick": fields.affine((1,)), "felt": fields.affine((5,), -4)})
    >>> u.value([0.5, 1.0, 2.0]).tolist(), u.gradient([1.0], region="felt").tolist()
    ([0.5, 1.0, 6.0], [[5.0]])

    Raises
    ------
    FieldError
        If names or dimensions do not fit.
    """
    bare = getattr(partition, "partition", partition)
    if not isinstance(bare, Partition):
        raise FieldError(f"partition must come from layers, inclusion or sectors, got {partition!r}")
    if isinstance(parts, Mapping):
        if set(parts) != set(bare.names):
            raise FieldError(f"fields are needed for the regions {bare.names!r}, got {tuple(parts)!r}")
        parts = [parts[name] for name in bare.names]
    return RegionField(partition=bare, parts=tuple(parts))
