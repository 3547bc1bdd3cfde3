"""The public names: each can be had, each is listed for type checkers, the import itself stays light."""

import ast
import subprocess
import sys
from pathlib import Path

import pytest

import laplace_verify as lv

SOURCE = Path(lv.__file__).read_text(encoding="utf-8")


@pytest.mark.parametrize("name", [name for name in lv.__all__ if name != "__version__"])
def test_every_public_name_can_be_imported(name):
    assert getattr(lv, name) is not None


def test_type_checkers_see_the_same_names():
    guard = next(node for node in ast.parse(SOURCE).body if isinstance(node, ast.If))
    listed = {alias.asname or alias.name for node in guard.body for alias in node.names}
    assert listed == set(lv.__all__) - {"__version__"}


def test_no_room_imports_from_the_facade():
    # A way round the layers: `from laplace_verify import verify` in a lower room would escape import-linter.
    package = Path(lv.__file__).parent
    for file in set(package.rglob("*.py")) - {package / "__init__.py"}:
        for node in ast.walk(ast.parse(file.read_text(encoding="utf-8"))):
            if isinstance(node, ast.ImportFrom) and node.module == "laplace_verify":
                rooms = {path.stem for path in package.iterdir()}
                assert {alias.name for alias in node.names} <= rooms, file.relative_to(package)
            if isinstance(node, ast.Import):
                assert all(alias.name != "laplace_verify" for alias in node.names), file.relative_to(package)


def test_unknown_names_raise_attribute_error():
    with pytest.raises(AttributeError, match="no attribute 'solve_everything'"):
        _ = lv.solve_everything


def test_import_loads_neither_numpy_nor_matplotlib():
    code = "import sys, laplace_verify; print(sorted({'numpy', 'scipy', 'matplotlib'} & set(sys.modules)))"
    shown = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout
    assert shown.strip() == "[]"
