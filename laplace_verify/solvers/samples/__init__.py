"""Sample solvers: how a solver is wired in, and what a sound one and a faulty one get for a verdict.

`five_point` is the one to read first: `finite_difference` says what it solves, `rectilinear` how the grid
works.
"""

from __future__ import annotations

from laplace_verify.solvers.samples.boundary_collocation import boundary_elements
from laplace_verify.solvers.samples.cell_centred import cell_centred
from laplace_verify.solvers.samples.chebyshev_collocation import chebyshev
from laplace_verify.solvers.samples.faults import FAULTS, Fault
from laplace_verify.solvers.samples.finite_difference import five_point, seven_point
from laplace_verify.solvers.samples.linear_elements import p1_element
from laplace_verify.solvers.samples.quadratic_elements import p2_element
from laplace_verify.solvers.samples.source_points import fundamental_solutions
from laplace_verify.solvers.samples.trilinear_elements import q1_element
from laplace_verify.solvers.samples.walk_on_spheres import walk_on_spheres

__all__ = [
    "ALL",
    "FAULTS",
    "Fault",
    "boundary_elements",
    "cell_centred",
    "chebyshev",
    "five_point",
    "fundamental_solutions",
    "p1_element",
    "p2_element",
    "q1_element",
    "seven_point",
    "walk_on_spheres",
]

ALL = (
    five_point,
    seven_point,
    cell_centred,
    p1_element,
    p2_element,
    boundary_elements,
    chebyshev,
    fundamental_solutions,
    walk_on_spheres,
)
