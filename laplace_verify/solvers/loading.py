"""Find a solver by what a user types: ``module:object`` or ``path/to/file.py:object``."""

from __future__ import annotations

import contextlib
import importlib
import sys
import traceback
from pathlib import Path
from types import ModuleType

from laplace_verify.errors import AdapterError, nearest_names
from laplace_verify.solvers._imports import module_from_file, search_also
from laplace_verify.solvers.adapter import Adapter

__all__ = ["load_solver"]

DECORATOR = '@lv.adapt(kind="finite difference", order=2, dims={2})'


def load_solver(solver: str | Adapter) -> Adapter:
    """Return the adapter that ``module:object`` or ``path/to/file.py:object`` names.

    Modules are searched as Python does, then in the current folder; the folder of a file is searched too, so
    that neighbouring files can be imported. An `Adapter` is returned as it is.

    Raises
    ------
    AdapterError
        If the file or object is missing, the import fails (the original error is shown), or the object is not
        adapted.

    Examples
    --------
    >>> load_solver("tidal_pool.py:solve")
    Traceback (most recent call last):
    ...
    laplace_verify.errors.AdapterError: there is no file tidal_pool.py (solver 'tidal_pool.py:solve')
    """
    if isinstance(solver, Adapter):
        return solver
    if not isinstance(solver, str):
        raise AdapterError(
            f"solver must be an adapter, 'module:object' or 'path/to/file.py:object', got "
            f"{type(solver).__name__}; "
            f"put {DECORATOR} above a solve function"
        )
    place, colon, name = solver.rpartition(":")
    if not colon or not place or not name or "/" in name or "\\" in name:
        raise AdapterError(
            f"solver must be given as 'module:object' or 'path/to/file.py:object', got {solver!r}; the part "
            f"after the "
            "colon names the adapter"
        )
    module = _module(place, solver)
    found: object = module
    for part in name.split("."):
        if not hasattr(found, part):
            raise AdapterError(f"{place} has no object {name!r}; {_suggest(module, name)}")
        found = getattr(found, part)
    return _adapted(found, name, solver)


def _module(place: str, solver: str) -> ModuleType:
    """Import a module by name or by file."""
    is_file = place.endswith(".py") or "/" in place or "\\" in place
    if is_file and not Path(place).is_file():
        raise AdapterError(f"there is no file {place} (solver {solver!r})")
    if is_file and not place.endswith(".py"):
        raise AdapterError(f"{place} is no Python file: its name must end in .py (solver {solver!r})")
    try:
        if is_file:
            return module_from_file(place)
        search_also(Path.cwd())
        with contextlib.redirect_stdout(sys.stderr):
            return importlib.import_module(place)
    except (Exception, SystemExit) as cause:
        raise AdapterError(f"cannot import {place}: {_told(cause)} (solver {solver!r})") from cause


def _told(cause: BaseException) -> str:
    """Return an exception in one line, with the last line of code it came from."""
    if isinstance(cause, SyntaxError):
        return f"SyntaxError: {cause.msg}, {cause.filename} line {cause.lineno}"
    # The user's own code is meant, not the import machinery nor this package.
    here = str(Path(__file__).parent)
    frames = traceback.extract_tb(cause.__traceback__)
    theirs = [f for f in frames if "importlib" not in f.filename and not f.filename.startswith(here)]
    where = f", {theirs[-1].filename} line {theirs[-1].lineno}" if theirs else ""
    return f"{type(cause).__name__}: {cause}{where}"


def _suggest(module: ModuleType, name: str) -> str:
    """Name the adapters in a module, or the objects most like the one asked for."""
    adapters = [key for key, value in vars(module).items() if isinstance(value, Adapter)]
    if adapters:
        return f"its adapters are {', '.join(adapters)}"
    public = [key for key in vars(module) if not key.startswith("_")]
    return nearest_names(name, public) if public else "it is empty"


def _adapted(found: object, name: str, solver: str) -> Adapter:
    """Return the object if it is an adapter; else say how to make it one."""
    if isinstance(found, Adapter):
        return found
    if callable(found):
        raise AdapterError(
            f"{name} (solver {solver!r}) is not adapted; put {DECORATOR} above it, with what it can really do"
        )
    raise AdapterError(
        f"{name} (solver {solver!r}) is not callable but {type(found).__name__}; name a solve function"
    )
