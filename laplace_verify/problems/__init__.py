"""Boundary value problems, and cases with exact solutions."""

from laplace_verify.problems.case import Case, case
from laplace_verify.problems.conditions import Condition, dirichlet, neumann, robin
from laplace_verify.problems.ill_posed import NoSolution, as_case, ill_posed_case
from laplace_verify.problems.materials import Materials, inclusion, layers, sectors
from laplace_verify.problems.pieces import MoveLog, Piece, Pieces
from laplace_verify.problems.problem import Problem, problem
from laplace_verify.problems.quantities import (
    Quantity,
    QuantitySpec,
    added_mass,
    capacitance_coefficient,
    conductance_between,
    energy_of_solution,
    flux_density_at,
    flux_through,
    resistance_between,
    shape_factor_between,
    torsion_constant,
    value_at,
)
from laplace_verify.problems.random_cases import random_case
from laplace_verify.problems.regions import Interface, Region
from laplace_verify.problems.regularity import Regularity
from laplace_verify.problems.schema import case_from_json, case_to_json
from laplace_verify.problems.seepage_quantities import discharge_across, exit_gradient_at, uplift_on
from laplace_verify.problems.stored import StoredNumber, StoredValue
from laplace_verify.problems.transmission import transmission_exponent
from laplace_verify.problems.units import Units

__all__ = [
    "Case",
    "Condition",
    "Interface",
    "Materials",
    "MoveLog",
    "NoSolution",
    "Piece",
    "Pieces",
    "Problem",
    "Quantity",
    "QuantitySpec",
    "Region",
    "Regularity",
    "StoredNumber",
    "StoredValue",
    "Units",
    "added_mass",
    "as_case",
    "capacitance_coefficient",
    "case",
    "case_from_json",
    "case_to_json",
    "conductance_between",
    "dirichlet",
    "discharge_across",
    "energy_of_solution",
    "exit_gradient_at",
    "flux_density_at",
    "flux_through",
    "ill_posed_case",
    "inclusion",
    "layers",
    "neumann",
    "problem",
    "random_case",
    "resistance_between",
    "robin",
    "sectors",
    "shape_factor_between",
    "torsion_constant",
    "transmission_exponent",
    "uplift_on",
    "value_at",
]
