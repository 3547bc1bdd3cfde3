"""Import a Python file by its path, as running it as a script would find its neighbours."""

from __future__ import annotations

import contextlib
import hashlib
import importlib.util
import sys
from pathlib import Path
from types import ModuleType

from laplace_verify.errors import AdapterError


def search_also(folder: Path) -> None:
    """Let modules of this folder be imported, after everything else."""
    if str(folder) not in sys.path:
        sys.path.append(str(folder))


def module_from_file(file: str | Path) -> ModuleType:
    """Execute a Python file as a module of its own and return it; its prints go to stderr.

    The module's name is made from the full path, so that two files called solver.py do not meet. Neighbouring
    files can be imported, then and later, because the folder is appended to `sys.path`.
    """
    path = Path(file).resolve()
    name = f"{path.stem}_{hashlib.sha256(str(path).encode()).hexdigest()[:12]}"
    spec = importlib.util.spec_from_file_location(name, path)
    if spec is None or spec.loader is None:
        raise AdapterError(f"{path} is no Python file: its name must end in .py")
    search_also(path.parent)
    module = importlib.util.module_from_spec(spec)
    sys.modules[name] = module  # dataclasses and pickling look their module up by name
    try:
        with contextlib.redirect_stdout(sys.stderr):
            spec.loader.exec_module(module)
    except BaseException:
        del sys.modules[name]
        raise
    return module
