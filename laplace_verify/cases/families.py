"""All families of cases, in the order of the catalogue."""

from __future__ import annotations

from laplace_verify.cases import (
    boxes,
    boxes_faces,
    corners,
    corners_fitted,
    discs,
    exteriors,
    exteriors_space,
    ill_posed,
    materials,
    plates_flux,
    plates_mixed,
    plates_series,
    plates_smooth,
    polygons,
    radial,
    rings,
    rods,
    round_faces,
    round_sections,
    round_solids,
    sectors,
    seepage,
    wedges,
)
from laplace_verify.cases.definition import joined

__all__ = ["FAMILIES"]

FAMILIES = joined(
    rods.family,
    plates_smooth.family,
    plates_flux.family,
    plates_mixed.family,
    plates_series.family,
    corners.family,
    corners_fitted.family,
    polygons.family,
    discs.family,
    rings.family,
    sectors.family,
    wedges.family,
    seepage.family,
    exteriors.family,
    boxes.family,
    round_solids.family,
    boxes_faces.family,
    round_faces.family,
    exteriors_space.family,
    radial.family,
    round_sections.family,
    materials.family,
    ill_posed.family,
)
