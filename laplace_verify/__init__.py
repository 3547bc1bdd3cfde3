"""Code verification for solvers of Laplace's equation.

``import laplace_verify as lv`` is all a user needs. Names are imported from their rooms on first use, so that
the import itself stays cheap.
"""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any

from laplace_verify.version import __version__

if TYPE_CHECKING:
    from laplace_verify import fields as fields
    from laplace_verify.campaign import Record as Record
    from laplace_verify.campaign.verify import verify as verify
    from laplace_verify.cases.catalogue import catalogue as catalogue
    from laplace_verify.cases.saving import save_case as save_case
    from laplace_verify.diagnosis import diagnose as diagnose
    from laplace_verify.errors import AdapterError as AdapterError
    from laplace_verify.errors import AnswerError as AnswerError
    from laplace_verify.errors import FieldError as FieldError
    from laplace_verify.errors import GeometryError as GeometryError
    from laplace_verify.errors import LaplaceVerifyError as LaplaceVerifyError
    from laplace_verify.errors import ProblemError as ProblemError
    from laplace_verify.errors import RecordError as RecordError
    from laplace_verify.fields import Field as Field
    from laplace_verify.fields import field as field
    from laplace_verify.geometry import Annulus as Annulus
    from laplace_verify.geometry import Ball as Ball
    from laplace_verify.geometry import Box as Box
    from laplace_verify.geometry import ConeSection as ConeSection
    from laplace_verify.geometry import ConfocalParabolas as ConfocalParabolas
    from laplace_verify.geometry import Cylinder as Cylinder
    from laplace_verify.geometry import Disc as Disc
    from laplace_verify.geometry import Ellipse as Ellipse
    from laplace_verify.geometry import EllipticRing as EllipticRing
    from laplace_verify.geometry import Exterior as Exterior
    from laplace_verify.geometry import HalfAnnulus as HalfAnnulus
    from laplace_verify.geometry import HalfDisc as HalfDisc
    from laplace_verify.geometry import HalfSpace as HalfSpace
    from laplace_verify.geometry import Interval as Interval
    from laplace_verify.geometry import LShape as LShape
    from laplace_verify.geometry import NotchedCube as NotchedCube
    from laplace_verify.geometry import PairShell as PairShell
    from laplace_verify.geometry import Polygon as Polygon
    from laplace_verify.geometry import Prism as Prism
    from laplace_verify.geometry import Rectangle as Rectangle
    from laplace_verify.geometry import RoundPlate as RoundPlate
    from laplace_verify.geometry import Screen as Screen
    from laplace_verify.geometry import Sector as Sector
    from laplace_verify.geometry import SphericalShell as SphericalShell
    from laplace_verify.geometry import Spheroid as Spheroid
    from laplace_verify.geometry import SpheroidalShell as SpheroidalShell
    from laplace_verify.geometry import Strip as Strip
    from laplace_verify.measure import Study as Study
    from laplace_verify.measure import Verdict as Verdict
    from laplace_verify.measure.grid_convergence import grid_convergence as grid_convergence
    from laplace_verify.measure.study import study as study
    from laplace_verify.principles import Check as Check
    from laplace_verify.principles import check_principle as check_principle
    from laplace_verify.principles import strategies as strategies
    from laplace_verify.problems import Case as Case
    from laplace_verify.problems import Problem as Problem
    from laplace_verify.problems import Quantity as Quantity
    from laplace_verify.problems import Regularity as Regularity
    from laplace_verify.problems import added_mass as added_mass
    from laplace_verify.problems import capacitance_coefficient as capacitance_coefficient
    from laplace_verify.problems import conductance_between as conductance_between
    from laplace_verify.problems import dirichlet as dirichlet
    from laplace_verify.problems import discharge_across as discharge_across
    from laplace_verify.problems import energy_of_solution as energy_of_solution
    from laplace_verify.problems import exit_gradient_at as exit_gradient_at
    from laplace_verify.problems import flux_density_at as flux_density_at
    from laplace_verify.problems import flux_through as flux_through
    from laplace_verify.problems import inclusion as inclusion
    from laplace_verify.problems import layers as layers
    from laplace_verify.problems import neumann as neumann
    from laplace_verify.problems import resistance_between as resistance_between
    from laplace_verify.problems import robin as robin
    from laplace_verify.problems import sectors as sectors
    from laplace_verify.problems import shape_factor_between as shape_factor_between
    from laplace_verify.problems import torsion_constant as torsion_constant
    from laplace_verify.problems import uplift_on as uplift_on
    from laplace_verify.problems import value_at as value_at
    from laplace_verify.problems.case import case as case
    from laplace_verify.problems.problem import problem as problem
    from laplace_verify.pytest_plugin import order_tests as order_tests
    from laplace_verify.pytest_plugin import principle_tests as principle_tests
    from laplace_verify.report import plot as plot
    from laplace_verify.report import write_report as write_report
    from laplace_verify.solvers import Adapter as Adapter
    from laplace_verify.solvers import Answer as Answer
    from laplace_verify.solvers import Refused as Refused
    from laplace_verify.solvers import adapt as adapt

_MODULES = {"fields": "fields", "strategies": "principles.strategies"}
_ROOMS = {
    "campaign": "Record verify",
    "cases": "catalogue save_case",
    "diagnosis": "diagnose",
    "errors": "AdapterError AnswerError FieldError GeometryError LaplaceVerifyError ProblemError RecordError",
    "fields": "Field field",
    "geometry": (
        "Annulus Ball Box ConeSection ConfocalParabolas Cylinder Disc Ellipse EllipticRing Exterior "
        "HalfAnnulus HalfDisc HalfSpace Interval LShape NotchedCube PairShell Polygon Prism Rectangle "
        "RoundPlate Screen Sector SphericalShell Spheroid SpheroidalShell Strip"
    ),
    "measure": "Study Verdict grid_convergence study",
    "principles": "Check check_principle",
    "problems": (
        "Case Problem Quantity Regularity added_mass capacitance_coefficient case conductance_between "
        "dirichlet discharge_across energy_of_solution exit_gradient_at flux_density_at flux_through "
        "inclusion layers neumann problem resistance_between robin sectors shape_factor_between "
        "torsion_constant uplift_on value_at"
    ),
    "pytest_plugin": "order_tests principle_tests",
    "report": "plot write_report",
    "solvers": "Adapter Answer Refused adapt",
}
_HOME = {name: room for room, names in _ROOMS.items() for name in names.split()}

__all__ = ["__version__", *sorted(_HOME), *_MODULES]


def __getattr__(name: str) -> Any:
    """Import a public name from its room (PEP 562)."""
    if name in _MODULES:
        return importlib.import_module(f"{__name__}.{_MODULES[name]}")
    if name in _HOME:
        value = getattr(importlib.import_module(f"{__name__}.{_HOME[name]}"), name)
        globals()[name] = value
        return value
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")


def __dir__() -> list[str]:
    """List the public names."""
    return sorted(__all__)
