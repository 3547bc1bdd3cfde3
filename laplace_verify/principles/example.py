"""The Python that shows a finding again in a fresh session."""

from __future__ import annotations

import sys
from importlib.machinery import PathFinder

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.principles.law import Trial
from laplace_verify.principles.motions import Motion
from laplace_verify.principles.reading import deep_points, inside_points
from laplace_verify.solvers import Adapter

__all__ = ["example_code"]

KEEP = '# lv.save_case(case, "my_cases", "its-name") keeps the case for lv.catalogue.with_folder("my_cases")'
HELPERS = {
    "deep_points": "laplace_verify.principles.reading",
    "inside_points": "laplace_verify.principles.reading",
    "slope_of_energy": "laplace_verify.principles.dirichlet_principle",
    "ball": "laplace_verify.principles.spheres",
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
    solves = _solves(trial, size)
    text = "\n".join([*solves, *body])
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
        *(f"    {line}" for line in solves),
        *(f"    {step}" for step in steps),
        f"    return {last}",
        "",
        "",
        call,
        *([KEEP] if trial.posed.field is not None else []),
        "",
    ]
    return "\n".join(lines)


def _solves(trial: Trial, size: int) -> list[str]:
    """Return the lines that solve the problem and those beside it."""
    lines = []
    for name, one in {"": trial, **trial.companions}.items():
        suffix = f"_{name}" if name else ""
        if trial.solver.takes("wanted") and size in one.asked:
            lines.append(f"wanted{suffix} = {_points_code(trial, one.asked[size])}")
        lines.append(f"{name or 'answer'} = {one.call(f'problem{suffix}', wanted=f'wanted{suffix}')}")
    return lines


def _points_code(trial: Trial, points: Array) -> str:
    """Return Python for points that were handed to the solver: drawn ones by how they were drawn."""
    for draw in (inside_points, deep_points):
        if np.array_equal(points, draw(trial.problem.shape, trial.seed)):
            return f"{draw.__name__}(problem.shape, {trial.seed})"
    motion, deep = trial.posed.drawn, deep_points(trial.problem.shape, trial.seed)
    if isinstance(motion, Motion) and np.array_equal(points, motion.points(deep)):
        dim = trial.problem.dim
        turned = f"wanted @ np.array({motion.matrix(dim).T.tolist()})"
        return f"{turned} + np.array({motion.shift[:dim]})"
    return f"np.array({points.tolist()})"


def _importable(solver: Adapter) -> tuple[str, str] | None:
    """Return module and name if the adapter can be imported by them."""
    module, name = getattr(solver.function, "__module__", None), getattr(solver.function, "__qualname__", "")
    if not module or module == "__main__" or "." in name:
        return None
    if getattr(sys.modules.get(module), name, None) is not solver:
        return None
    # a module made from a file path stands in sys.modules under a name that no import finds
    return (module, name) if PathFinder.find_spec(module.partition(".")[0]) is not None else None
