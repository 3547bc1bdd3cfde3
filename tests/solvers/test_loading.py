"""Finding a solver by module or file."""

import pickle
import sys

import pytest

import laplace_verify as lv
from laplace_verify.solvers import load_solver

SOUND = """
import numpy as np
import laplace_verify as lv
from pool_tools import DEPTH

print("importing")

@lv.adapt(kind="finite difference", order=2, dims={2})
def pool(problem, n):
    return lv.Answer([[0, 0], [1, 0], [1, 1], [0, 1]], np.full(4, DEPTH))

def bare(problem, n):
    return None

class Shelf:
    inner = pool

NUMBER = 3
"""


@pytest.fixture
def folder(tmp_path, monkeypatch):
    """Return a folder with a solver file and a neighbour it imports; sys.path is restored."""
    monkeypatch.setattr(sys, "path", list(sys.path))
    monkeypatch.setattr(sys, "modules", dict(sys.modules))
    (tmp_path / "pool_solver.py").write_text(SOUND)
    (tmp_path / "pool_tools.py").write_text("DEPTH = 2.5\n")
    (tmp_path / "broken.py").write_text("import numpy\n\nvalue = 1 / 0\n")
    (tmp_path / "unfinished.py").write_text("def solve(problem, n:\n")
    (tmp_path / "leaving.py").write_text("raise SystemExit(2)\n")
    (tmp_path / "wrong.py").write_text(SOUND.replace("finite difference", "finite differnce"))
    (tmp_path / "notes.txt").write_text("no solver\n")
    (tmp_path / "needy.py").write_text("import no_such_solver_library\n")
    monkeypatch.chdir(tmp_path)
    return tmp_path


@pytest.mark.parametrize("text", ["pool_solver.py:pool", "./pool_solver.py:pool", "pool_solver:pool"])
@pytest.mark.usefixtures("folder")
def test_a_solver_is_found_by_file_or_module_with_its_neighbours(text, capsys):
    adapter = load_solver(text)
    assert isinstance(adapter, lv.Adapter)
    assert adapter.name == "pool"
    assert capsys.readouterr().out == ""


def test_dotted_objects_and_absolute_paths_are_found(folder):
    assert load_solver(f"{folder / 'pool_solver.py'}:Shelf.inner").name == "pool"


@pytest.mark.usefixtures("folder")
def test_an_adapter_is_returned_as_it_is():
    adapter = load_solver("pool_solver.py:pool")
    assert load_solver(adapter) is adapter


@pytest.mark.usefixtures("folder")
def test_a_loaded_solver_travels_to_a_process_that_never_loaded_its_file(monkeypatch):
    adapter = load_solver("pool_solver.py:pool")
    blob = pickle.dumps(adapter)
    assert pickle.loads(blob) is adapter
    monkeypatch.delitem(sys.modules, adapter.function.__module__)
    assert pickle.loads(blob).describe() == adapter.describe()


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("nowhere.py:pool", r"there is no file nowhere\.py"),
        (
            "no_such_module:pool",
            r"cannot import no_such_module: ModuleNotFoundError: No module named 'no_such_module'",
        ),
        ("pool_solver.py:pol", r"pool_solver\.py has no object 'pol'; its adapters are pool"),
        ("pool_solver.py:Shelf.outer", r"pool_solver\.py has no object 'Shelf\.outer'"),
        ("pool_tools.py:DEPHT", r"has no object 'DEPHT'; did you mean 'DEPTH'"),
        ("pool_solver.py:bare", r"bare .* is not adapted; put @lv\.adapt\(kind=.* above it"),
        ("pool_solver.py:NUMBER", r"NUMBER .* is not callable but int"),
        ("pool_solver.py", r"solver must be given as 'module:object' or 'path/to/file\.py:object'"),
        (":pool", r"solver must be given as"),
        ("pool_solver.py:", r"solver must be given as"),
        (
            "broken.py:solve",
            r"cannot import broken\.py: ZeroDivisionError: division by zero, .*broken\.py line 3",
        ),
        ("broken:solve", r"cannot import broken: ZeroDivisionError: division by zero, .*broken\.py line 3"),
        ("unfinished.py:solve", r"cannot import unfinished\.py: SyntaxError: .* line 1"),
        ("leaving.py:solve", r"cannot import leaving\.py: SystemExit: 2"),
        (
            "needy.py:solve",
            r"ModuleNotFoundError: No module named 'no_such_solver_library', .*needy\.py line 1",
        ),
        (3, r"solver must be an adapter, 'module:object' or 'path/to/file\.py:object', got int"),
    ],
)
@pytest.mark.usefixtures("folder")
def test_what_cannot_be_loaded_is_refused_with_the_reason(text, message):
    with pytest.raises(lv.AdapterError, match=message):
        load_solver(text)


@pytest.mark.usefixtures("folder")
def test_a_file_that_fails_leaves_no_module_behind():
    before = set(sys.modules)
    with pytest.raises(lv.AdapterError, match="division by zero"):
        load_solver("broken.py:solve")
    assert {name for name in set(sys.modules) - before if name.startswith("broken")} == set()


def test_two_files_of_one_name_do_not_meet(folder):
    (folder / "other").mkdir()
    (folder / "other" / "pool_solver.py").write_text(
        SOUND.replace("def pool", "def pond").replace("= pool", "= pond")
    )
    assert load_solver("pool_solver.py:pool").name == "pool"
    assert load_solver("other/pool_solver.py:pond").name == "pond"
