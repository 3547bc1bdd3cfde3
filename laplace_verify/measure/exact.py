"""The exact solution at sample points: evaluated once per point set, NaN where it has no single value.

Points on a branch cut (the lips of a slit), at a jump or pole, on an edge where data jump, or off the shape
where the field does not hold, carry no error; the norms leave them out and report their share.
"""

from __future__ import annotations

from collections import OrderedDict
from collections.abc import Callable
from hashlib import blake2b
from typing import TYPE_CHECKING

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.errors import FieldError

if TYPE_CHECKING:
    from laplace_verify.problems import Case

__all__ = ["Exact"]

KEPT = 6  # point sets remembered: those of one level
NEAR = 1e-12  # of the shape's extent


class Exact:
    """u and grad u of a case at points, with a small memory of the last point sets."""

    def __init__(self, case: Case) -> None:
        self.field = case.exact
        self.shape = case.problem.shape
        self._memory: OrderedDict[tuple[str, bytes], Array] = OrderedDict()

    def values(self, points: Array) -> Array:
        """Return u (n,) at points (n, d); NaN where it has no single value."""
        return self._remembered("value", points, self.field.value)

    def gradients(self, points: Array) -> Array:
        """Return grad u (n, d) at points (n, d); NaN rows where it has none."""
        return self._remembered("gradient", points, self.field.gradient)

    def on_a_cut(self, points: Array) -> BoolArray:
        """Return which points (n, d) lie on a branch cut."""
        found = np.zeros(len(points), dtype=bool)
        for cut in self.field.cuts:
            found |= cut.meets(points)
        return found

    def _remembered(self, what: str, points: Array, function: Callable[[Array], Array]) -> Array:
        key = (what, blake2b(np.ascontiguousarray(points).tobytes(), digest_size=16).digest())
        if key in self._memory:
            self._memory.move_to_end(key)
            return self._memory[key]
        result = self._evaluated(points, function)
        self._memory[key] = result
        while len(self._memory) > KEPT:
            self._memory.popitem(last=False)
        return result

    def _evaluated(self, points: Array, function: Callable[[Array], Array]) -> Array:
        """Call the field; if it refuses, call it again without the points it has to refuse."""
        try:
            return function(points)
        except FieldError:
            usable = ~self.on_a_cut(points)
            for singularity in self.field.singularities:
                offset = points - np.asarray(singularity.point, dtype=np.float64)
                usable &= np.sqrt((offset**2).sum(axis=1)) > NEAR * self.shape.extent
            for edge in self.field.edges:
                usable &= edge.distance(points) > NEAR * self.shape.extent
            usable &= self.shape.contains(points)
            shape: tuple[int, ...] = (len(points),)
            if function == self.field.gradient:
                shape = points.shape
                usable &= ~self.field.on_interface(points)  # two gradients meet there
            result = np.full(shape, np.nan)
            if usable.any():
                result[usable] = function(points[usable])
            return result
