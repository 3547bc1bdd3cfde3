"""Pictures for the index of the reference cases: whole SVG files, the same bytes again."""

from xml.etree import ElementTree

import pytest

import laplace_verify as lv
from laplace_verify.report import case_pictures, draw_cases

FEW = ("rod-pure-flux", "plate-hot-side", "ball-solid", "pile-dipole")


@pytest.fixture
def few(monkeypatch):
    monkeypatch.setattr(case_pictures, "catalogue", {id_: lv.catalogue[id_] for id_ in FEW})


@pytest.mark.usefixtures("few")
def test_every_case_has_a_picture_that_stands_alone(tmp_path):
    done = []
    written = draw_cases(tmp_path / "pictures", done.append)
    assert [path.name for path in written] == [f"{id_}.svg" for id_ in FEW]
    assert done == list(FEW)
    for path, id_ in zip(written, FEW, strict=True):
        root = ElementTree.fromstring(path.read_bytes())
        assert root.tag == "{http://www.w3.org/2000/svg}svg"
        assert root.find("{http://www.w3.org/2000/svg}title").text == lv.catalogue[id_].title
        assert float(root.get("width").removesuffix("pt")) > 100
        assert path.stat().st_size < 80_000


@pytest.mark.usefixtures("few")
def test_pictures_are_drawn_the_same_again(tmp_path):
    first, again = ([p.read_bytes() for p in draw_cases(tmp_path / name)] for name in ("first", "again"))
    assert first == again
    assert len(set(first)) == len(FEW)
