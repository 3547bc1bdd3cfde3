"""The folder of reference cases: the same bytes again, and what is committed is what the sources say."""

import json

import pytest

import laplace_verify as lv
from laplace_verify.cases import regenerate_cases
from laplace_verify.problems import case_from_json
from laplace_verify.references import reference_folder


@pytest.fixture(scope="module")
def folder(tmp_path_factory):
    """A folder with all cases, written once."""
    path = tmp_path_factory.mktemp("cases")
    (path / "stray.json").write_text("{}")
    notes = []
    written = regenerate_cases(path, notes.append)
    return path, written, notes


def contents(path):
    return {file.name: file.read_bytes() for file in path.iterdir()}


def test_one_file_a_case_an_index_and_the_versions(folder):
    path, written, notes = folder
    assert [file.name for file in written] == [
        *(f"{id_}.json" for id_ in lv.catalogue),
        "README.md",
        "PROVENANCE.json",
    ]
    assert notes[0].startswith("stray.json is no case")
    assert notes[-1].startswith(f"{len(lv.catalogue)} cases written")
    assert (path / "stray.json").exists()


def test_second_run_writes_the_same_bytes(folder):
    path, _, _ = folder
    before = contents(path)
    regenerate_cases(path)
    assert contents(path) == before


def test_index_lists_every_case(folder):
    path, _, _ = folder
    index = (path / "README.md").read_text()
    for id_, case in lv.catalogue.items():
        assert f"[{id_}]({id_}.json)" in index
        assert case.title in index


def test_case_files_hold_no_versions_and_provenance_does(folder):
    path, _, _ = folder
    made_by = json.loads((path / "PROVENANCE.json").read_text())["made_by"]
    assert set(made_by) == {"laplace-verify", "python", "numpy", "scipy", "mpmath", "msgspec"}
    assert lv.__version__ not in (path / "plate-saddle.json").read_text()


def test_committed_files_are_those_of_the_sources(folder):
    """Words and structure alike; numbers may differ by rounding between machines."""
    _, written, _ = folder
    committed = reference_folder()
    assert {file.name for file in committed.glob("*-*.json")} == {f.name for f in written if "-" in f.name}
    for file in written[:-2]:
        mine, theirs = (json.loads(p.read_text()) for p in (file, committed / file.name))
        for numbers in (mine, theirs):
            for quantity in numbers["quantities"].values():
                quantity.update(value=round(float(quantity["value"]), 8), radius=None)
            if numbers["constant"]:
                numbers["constant"]["value"] = round(numbers["constant"]["value"], 8)
        assert mine == theirs, file.name


def test_reference_files_read_back(folder):
    path, _, _ = folder
    again = case_from_json((path / "plate-hot-side.json").read_bytes())
    assert again.stored[0].point == ("0.8", "0.45")
    assert len(again.stored[0].value) >= 40


def test_unwritable_folder_is_named(tmp_path):
    (tmp_path / "file").write_text("in the way")
    with pytest.raises(lv.RecordError, match="cannot be made"):
        regenerate_cases(tmp_path / "file" / "cases")
