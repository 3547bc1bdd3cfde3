"""The folder of reference cases: the same bytes again, and what is committed is what the sources say."""

import json

import pytest

import laplace_verify as lv
from laplace_verify.cases import case_file, regenerate_cases
from laplace_verify.cases import regenerate as module
from laplace_verify.problems import case_from_json
from laplace_verify.references import reference_folder

FEW = ("rod-pure-flux", "plate-saddle", "plate-hot-side", "disc-step", "plate-unbalanced-flux", "ball-solid")


@pytest.fixture
def few(monkeypatch):
    """A catalogue of a few cases, whose values are quickly computed."""
    monkeypatch.setattr(module, "catalogue", {id_: lv.catalogue[id_] for id_ in FEW})


def contents(path):
    return {file.name: file.read_bytes() for file in path.iterdir()}


@pytest.mark.usefixtures("few")
def test_one_file_a_case_an_index_and_the_versions(tmp_path):
    (tmp_path / "stray.json").write_text("{}")
    notes, done = [], []
    written = regenerate_cases(tmp_path, notes.append, workers=1, progress=done.append)
    assert [file.name for file in written] == [*(f"{i}.json" for i in FEW), "README.md", "PROVENANCE.json"]
    assert done == list(FEW)
    assert notes[0].startswith("stray.json is no case")
    assert notes[-1].startswith(f"{len(FEW)} cases written")
    assert (tmp_path / "stray.json").exists()


@pytest.mark.usefixtures("few")
def test_bytes_depend_neither_on_the_run_nor_on_the_number_of_processes(tmp_path):
    for name, workers in (("one", 1), ("again", 1), ("two", 2)):
        regenerate_cases(tmp_path / name, workers=workers)
    assert contents(tmp_path / "one") == contents(tmp_path / "again") == contents(tmp_path / "two")


@pytest.mark.usefixtures("few")
def test_index_lists_every_case_with_picture_points_and_routes(tmp_path):
    regenerate_cases(tmp_path, workers=1)
    rows = [r for r in (tmp_path / "README.md").read_text().splitlines() if "pictures/" in r]
    assert len(rows) == len(FEW)
    for id_, row in zip(FEW, rows, strict=True):
        case = lv.catalogue[id_]
        stored = json.loads((tmp_path / f"{id_}.json").read_text())["stored"]
        assert f'src="pictures/{id_}.svg"' in row
        assert f"[{id_}]({id_}.json)" in row
        assert case.title in row
        assert f"| {len(stored)} " in row
        assert len(stored) >= 12 if case.problem.ill_posed is None else not stored


@pytest.mark.usefixtures("few")
def test_case_files_hold_no_versions_and_provenance_does(tmp_path):
    regenerate_cases(tmp_path, workers=1)
    made_by = json.loads((tmp_path / "PROVENANCE.json").read_text())["made_by"]
    assert set(made_by) == {"laplace-verify", "python", "numpy", "scipy", "mpmath", "msgspec"}
    assert lv.__version__ not in (tmp_path / "plate-saddle.json").read_text()


def test_the_folder_holds_the_cases_of_the_catalogue_and_their_pictures():
    folder = reference_folder()
    assert {file.stem for file in folder.glob("*-*.json")} == set(lv.catalogue)
    assert {file.stem for file in (folder / "pictures").glob("*.svg")} == set(lv.catalogue)


@pytest.mark.slow
@pytest.mark.parametrize("id_", list(lv.catalogue))
def test_committed_files_are_those_of_the_sources(id_):
    """Words, structure and digits alike; float64 quantities may differ by rounding between machines."""
    mine = json.loads(case_file(id_))
    theirs = json.loads((reference_folder() / f"{id_}.json").read_bytes())
    for content in (mine, theirs):
        for quantity in content["quantities"].values():
            quantity.update(value=round(float(quantity["value"]), 8), radius=None)
        if content["constant"]:
            content["constant"]["value"] = round(content["constant"]["value"], 8)
    assert mine == theirs


def test_reference_files_read_back():
    again = case_from_json(case_file("plate-hot-side"))
    assert again.stored[0].point == ("0.8", "0.45")
    assert len(again.stored[0].value) >= 50
    assert [value.place for value in again.stored][:4] == ["chosen", "chosen", "chosen", "inside"]


def test_unwritable_folder_is_named(tmp_path):
    (tmp_path / "file").write_text("in the way")
    with pytest.raises(lv.RecordError, match="cannot be made"):
        regenerate_cases(tmp_path / "file" / "cases")
