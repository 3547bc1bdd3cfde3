"""The Python that shows a finding again in a fresh session."""

from __future__ import annotations

import sys
from importlib.machinery import PathFinder

from laplace_verify.principles.law import Trial
from laplace_verify.solvers import Adapter

__all__ = ["example_code"]

HELPERS = {
    "slope_of_energy": "laplace_verify.principles.dirichlet_principle",
    "sphere": "laplace_verify.principles.spheres",
}


def example_code(trial: Trial, size: int, body: tuple[str, ...]) -> str:
    """Return code that makes the problem and a function ``violation(solver)``.

    Parameters
    ----------
    trial : the problem and the solver
    size : resolution number
    body : lines that use `problem`, `answer` and, if there is one, `exact`, and the answers of problems
        beside it by their names; the last is the value to return

    The solver is imported and the function called if it stands in a module under its function's name;
    otherwise the last line says what to call it with.
    """
    *steps, last = body
    text = "\n".join(body)
    imports = ["import numpy as np", ""] if "np." in text else []
    imports.append("import laplace_verify as lv")
    imports += [f"from {module} import {name}" for name, module in HELPERS.items() if f"{name}(" in text]
    place = _importable(trial.solver)
    if place is None:
        call = f"# print(violation(...)) with the adapter {trial.solver.name!r}"
    else:
        imports.append(f"from {place[0]} import {place[1]} as this_solver")
        call = "print(violation(this_solver))"
    lines = [
        *imports,
        "",
        trial.posed.code(),
        "",
        "",
        "def violation(solver):",
        f"    n = {size}",
        f"    answer = solver.solve(problem, n, seed={trial.seed})",
        *(f"    {name} = solver.solve(problem_{name}, n, seed={trial.seed})" for name in trial.companions),
        *(f"    {step}" for step in steps),
        f"    return {last}",
        "",
        "",
        call,
        "",
    ]
    return "\n".join(lines)


def _importable(solver: Adapter) -> tuple[str, str] | None:
    """Return module and name if the adapter can be imported by them."""
    module, name = getattr(solver.function, "__module__", None), getattr(solver.function, "__qualname__", "")
    if not module or module == "__main__" or "." in name:
        return None
    if getattr(sys.modules.get(module), name, None) is not solver:
        return None
    # a module made from a file path stands in sys.modules under a name that no import finds
    return (module, name) if PathFinder.find_spec(module.partition(".")[0]) is not None else None
