"""All families of cases, in the order of the catalogue."""

from __future__ import annotations

from laplace_verify.cases import corners, plates_conditions, plates_smooth, rods, solids
from laplace_verify.cases.definition import joined

__all__ = ["FAMILIES"]

FAMILIES = joined(
    rods.family, plates_smooth.family, plates_conditions.family, corners.family, solids.family
)
