"""Coding mistakes put into the sample solvers, each a change of one small function.

A verification is worth what it catches. `FAULTS` maps a name to what is wrong and to an adapter that declares
itself as sound as the sample it was made from.
"""

from __future__ import annotations

from laplace_verify.solvers.samples.fault import Fault
from laplace_verify.solvers.samples.faults_boundary import BOUNDARY_FAULTS
from laplace_verify.solvers.samples.faults_elements import ELEMENT_FAULTS
from laplace_verify.solvers.samples.faults_grid import GRID_FAULTS
from laplace_verify.solvers.samples.faults_quadratic import QUADRATIC_FAULTS
from laplace_verify.solvers.samples.faults_sources import SOURCE_FAULTS
from laplace_verify.solvers.samples.faults_space import SPACE_FAULTS
from laplace_verify.solvers.samples.faults_spectral import SPECTRAL_FAULTS
from laplace_verify.solvers.samples.faults_volume import VOLUME_FAULTS
from laplace_verify.solvers.samples.faults_walks import WALK_FAULTS

__all__ = ["FAULTS", "Fault"]

FAULTS: dict[str, Fault] = {
    **GRID_FAULTS,
    **SPACE_FAULTS,
    **VOLUME_FAULTS,
    **ELEMENT_FAULTS,
    **QUADRATIC_FAULTS,
    **BOUNDARY_FAULTS,
    **SPECTRAL_FAULTS,
    **SOURCE_FAULTS,
    **WALK_FAULTS,
}
