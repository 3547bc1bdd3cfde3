"""Coding mistakes in finite differences, each a change of one small function of the five-point scheme."""

from __future__ import annotations

from laplace_verify.solvers.samples.fault import Fault
from laplace_verify.solvers.samples.faults_grid_fixed import FIXED_FAULTS
from laplace_verify.solvers.samples.faults_grid_fluxes import FLUX_FAULTS
from laplace_verify.solvers.samples.faults_grid_interior import INTERIOR_FAULTS
from laplace_verify.solvers.samples.faults_grid_output import OUTPUT_FAULTS
from laplace_verify.solvers.samples.faults_grid_systems import SYSTEM_FAULTS

__all__ = ["GRID_FAULTS"]

GRID_FAULTS: dict[str, Fault] = {
    **FLUX_FAULTS,
    **FIXED_FAULTS,
    **INTERIOR_FAULTS,
    **SYSTEM_FAULTS,
    **OUTPUT_FAULTS,
}
