"""Who was verified, where, and on what: the parts of a record that are known before anything runs."""

from __future__ import annotations

import hashlib
import inspect
import os
import platform
from importlib import metadata
from pathlib import Path

import numpy as np
import scipy

from laplace_verify.campaign.record import (
    CaseInfo,
    Environment,
    QuantityInfo,
    RegularityInfo,
    SolverIdentity,
)
from laplace_verify.problems import Case, Materials
from laplace_verify.problems.drawing import drawn_pieces
from laplace_verify.solvers import Adapter

__all__ = ["case_info", "environment", "solver_identity"]

LISTED = ("mpmath", "matplotlib", "hypothesis", "scikit-fem", "FiPy", "python-flint")
CAPABILITIES = ("dims", "shapes", "conditions", "conductivity", "coordinates", "claims")


def solver_identity(solver: Adapter, source: str = "") -> SolverIdentity:
    """Return name, declaration and the hash of the source file of a solver; `source` is how it was named."""
    declared = solver.describe()
    shown = {
        name: ", ".join(str(item) for item in declared[name]) for name in CAPABILITIES if declared.get(name)
    }
    shown.setdefault("shapes", "any bounded shape")
    if solver.checks_well_posedness:
        shown["checks"] = "refuses ill-posed problems"
    return SolverIdentity(
        name=solver.name,
        kind=solver.kind,
        order=_order_text(declared["order"]),
        capabilities=shown,
        module=source or getattr(solver.function, "__module__", ""),
        source_sha256=_source_hash(solver),
        known=dict(solver.known),
    )


def environment() -> Environment:
    """Return versions of Python and of the packages that matter, and the machine."""
    packages = {}
    for name in LISTED:
        try:
            packages[name] = metadata.version(name)
        except metadata.PackageNotFoundError:
            continue
    return Environment(
        python=platform.python_version(),
        numpy=np.__version__,
        scipy=scipy.__version__,
        platform=platform.platform(),
        cpus=os.cpu_count() or 1,
        packages=packages,
    )


def case_info(case: Case) -> CaseInfo:
    """Return what a report tells about a case: words, conditions, regularity, a drawing of the outline."""
    problem, regularity = case.problem, case.regularity
    return CaseInfo(
        id=case.id,
        title=case.title,
        dim=case.dim,
        shape=problem.shape.kind,
        statement=case.statement,
        reading=case.reading,
        formula=case.exact.formula,
        conductivity=_conductivity_text(problem.conductivity),
        pieces=drawn_pieces(problem),
        ill_posed=problem.ill_posed or "",
        regularity=None
        if problem.ill_posed is not None
        else RegularityInfo(
            solution=regularity.solution,
            domain=regularity.domain,
            scale=regularity.scale,
            singular_points=tuple(tuple(row) for row in regularity.singular_points.tolist()),
            jumps=tuple(tuple(row) for row in regularity.jumps.tolist()),
        ),
        quantities=tuple(
            QuantityInfo(name=name, value=quantity.value, unit=quantity.unit, radius=quantity.radius)
            for name, quantity in case.quantities.items()
        ),
        tags=tuple(sorted(case.tags)),
        sources=tuple(case.sources),
    )


def _order_text(order: object) -> str:
    """Return a declared order in words: "2", "max 2, H1-semi 1", "exponential"."""
    if isinstance(order, dict):
        return ", ".join(f"{norm} {_order_text(value)}" for norm, value in order.items())
    return f"{order:g}" if isinstance(order, int | float) else str(order)


def _conductivity_text(conductivity: object) -> str:
    """Return a number as it is, a tensor row by row, regions by name."""
    if isinstance(conductivity, Materials):
        pairs = zip(conductivity.names, conductivity.conductivities, strict=True)
        return ", ".join(f"{name} {k:g}" for name, k in pairs)
    array = np.asarray(conductivity)
    return f"{float(array):g}" if array.ndim == 0 else str(array.tolist())


def _source_hash(solver: Adapter) -> str | None:
    """Return the SHA-256 of the file that holds the solve function; None for compiled or typed-in ones."""
    try:
        file = inspect.getsourcefile(solver.function)
        return hashlib.sha256(Path(file).read_bytes()).hexdigest() if file else None
    except (OSError, TypeError):
        return None
