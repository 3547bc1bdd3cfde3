"""The laws, in the order in which they are reported."""

from __future__ import annotations

from laplace_verify.principles.affine_fields import AFFINE_FIELDS
from laplace_verify.principles.boundary_slope import BOUNDARY_SLOPE
from laplace_verify.principles.comparison import COMPARISON
from laplace_verify.principles.conductivity_scaling import CONDUCTIVITY_SCALING
from laplace_verify.principles.constants import CONSTANTS
from laplace_verify.principles.dirichlet_principle import DIRICHLET_PRINCIPLE
from laplace_verify.principles.flux_balance import FLUX_BALANCE
from laplace_verify.principles.largest_gradient import LARGEST_GRADIENT
from laplace_verify.principles.law import Law
from laplace_verify.principles.maximum_principle import MAXIMUM_PRINCIPLE
from laplace_verify.principles.mean_value import MEAN_VALUE
from laplace_verify.principles.no_interior_extremum import NO_INTERIOR_EXTREMUM
from laplace_verify.principles.reciprocity import RECIPROCITY
from laplace_verify.principles.repeatability import REPEATABILITY
from laplace_verify.principles.series_resistance import SERIES_RESISTANCE
from laplace_verify.principles.steady_state import STEADY_STATE
from laplace_verify.principles.superposition import SUPERPOSITION
from laplace_verify.principles.symmetry import SYMMETRY
from laplace_verify.principles.tighter_tolerance import TIGHTER_TOLERANCE

__all__ = ["LAWS"]

LAWS: dict[str, Law] = {
    law.name: law
    for law in (
        CONSTANTS,
        AFFINE_FIELDS,
        SERIES_RESISTANCE,
        MAXIMUM_PRINCIPLE,
        NO_INTERIOR_EXTREMUM,
        MEAN_VALUE,
        SUPERPOSITION,
        COMPARISON,
        SYMMETRY,
        CONDUCTIVITY_SCALING,
        FLUX_BALANCE,
        REPEATABILITY,
        RECIPROCITY,
        LARGEST_GRADIENT,
        BOUNDARY_SLOPE,
        DIRICHLET_PRINCIPLE,
        TIGHTER_TOLERANCE,
        STEADY_STATE,
    )
}
