"""The catalogue as a mapping: lazy, ordered, selective; folders of users' cases."""

import json
import shutil
import subprocess
import sys

import pytest

import laplace_verify as lv
from laplace_verify.cases import Catalogue
from laplace_verify.cases.definition import Family, joined
from laplace_verify.errors import UnknownCaseError
from laplace_verify.problems import case_to_json


def own_case(id_="my-plate"):
    """A user's case."""
    return lv.case(
        lv.Rectangle((0, 0), (2, 1)), {"left": "neumann"}, lv.fields.polynomial(2), id=id_, title="T"
    )


@pytest.fixture
def folder(tmp_path):
    """A folder with one case file."""
    (tmp_path / "mine.json").write_bytes(case_to_json(own_case()))
    return tmp_path


def test_nothing_is_built_on_import():
    code = (
        "from laplace_verify.cases import catalogue; "
        "print(len(catalogue._built), len(list(catalogue)) == len(catalogue) > 55)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.split() == ["0", "True"]


def test_each_case_is_built_once():
    calls = []

    def build():
        calls.append(1)
        return own_case()

    own = Catalogue({"my-plate": build})
    assert "my-plate" in own
    assert not calls
    assert own["my-plate"] is own["my-plate"]
    assert len(calls) == 1


def test_unknown_id_names_the_nearest():
    with pytest.raises(UnknownCaseError, match="'plate-saddle'"):
        lv.catalogue["plate-sadle"]
    with pytest.raises(lv.LaplaceVerifyError, match="no case is called 'xyz'"):
        lv.catalogue["xyz"]
    assert lv.catalogue.get("xyz") is None


def test_conditions_are_those_a_solver_can_do():
    found = lv.catalogue.select(dim=2, conditions={"dirichlet", "neumann"})
    assert found
    assert all(case.conditions <= {"dirichlet", "neumann"} for case in found)
    assert "plate-saddle" in [case.id for case in found]  # uses fewer than all of them
    assert "wall-mixed-conditions" not in [case.id for case in found]


def test_all_tags_are_wanted():
    found = [case.id for case in lv.catalogue.select(tags={"tensor", "robin"}, coordinates="cartesian")]
    assert found == ["plate-tensor-diagonal", "plate-tensor-oblique", "box-tensor-diagonal"]


def test_cases_of_other_coordinates_can_be_told_apart():
    wanted = ("cartesian", "axisymmetric", "radial-cylinder", "radial-sphere")
    parts = [lv.catalogue.select(coordinates=name) for name in wanted]
    assert sum(map(len, parts)) == len(lv.catalogue)
    assert all(len(part) >= 3 for part in parts)
    assert {case.dim for case in parts[1]} == {2}
    with pytest.raises(lv.ProblemError, match="'radial-sphere'"):
        lv.catalogue.select(coordinates="radial-spheres")


def test_shape_matches_special_cases_too():
    polygons = {case.problem.shape.kind for case in lv.catalogue.select(shape="polygon")}
    assert polygons == {"polygon", "rectangle", "l-shape"}
    assert {case.problem.shape.kind for case in lv.catalogue.select(shape="rectangle")} == {"rectangle"}


def test_selection_keeps_the_order_of_the_catalogue():
    order = list(lv.catalogue)
    places = [order.index(case.id) for case in lv.catalogue.select(dim=2)]
    assert places == sorted(places)
    assert len(lv.catalogue.select()) == len(order)


@pytest.mark.parametrize("argument", ["conditions", "tags"])
def test_a_string_is_no_set_of_words(argument):
    with pytest.raises(lv.ProblemError, match=f"{argument} must be a set of words"):
        lv.catalogue.select(**{argument: "dirichlet"})


def test_random_cases_repeat():
    first, again = (lv.catalogue.random(5, dim=2) for _ in range(2))
    assert case_to_json(first) == case_to_json(again)
    assert first.dim == 2


def test_folder_adds_cases_after_the_catalogue(folder):
    wider = lv.catalogue.with_folder(folder)
    assert len(wider) == len(lv.catalogue) + 1
    assert list(wider)[-1] == "my-plate"
    assert wider["my-plate"].title == "T"
    assert wider["plate-saddle"].exact.formula == lv.catalogue["plate-saddle"].exact.formula
    assert "my-plate" not in lv.catalogue


def test_taken_id_is_refused(folder):
    shutil.copy(folder / "mine.json", folder / "twice.json")
    with pytest.raises(lv.ProblemError, match=r"twice.json: the id 'my-plate' is taken by mine.json"):
        lv.catalogue.with_folder(folder)
    (folder / "twice.json").write_bytes(case_to_json(own_case("plate-saddle")))
    with pytest.raises(lv.ProblemError, match=r"taken by the catalogue"):
        lv.catalogue.with_folder(folder)


@pytest.mark.parametrize(
    ("change", "said"),
    [
        (lambda c: c.pop("shape"), r"mine.json: .*shape"),
        (lambda c: c["shape"].update(upper=[-1, 1]), r"mine.json: shape: "),
        (lambda c: c["exact"]["field"].update(kind="nonsense"), r"mine.json: exact.field: "),
        (lambda c: c.update(conductivity="warm"), r"mine.json: .*conductivity"),
        (lambda c: c["conditions"]["left"].update(kind="periodical"), r"mine.json: .*conditions"),
        (lambda c: c.update(colour="red"), r"mine.json: .*colour"),
        (lambda c: c["regularity"].update(solution=0.5), r"mine.json: regularity.solution"),
        (lambda c: c.update(format_version=99), r"mine.json: format_version 99"),
    ],
)
def test_corrupted_file_is_named_with_its_field(folder, change, said):
    content = json.loads((folder / "mine.json").read_text())
    change(content)
    (folder / "mine.json").write_text(json.dumps(content))
    with pytest.raises(lv.RecordError, match=said):
        lv.catalogue.with_folder(folder)


def test_half_a_file_is_no_json(folder):
    text = (folder / "mine.json").read_bytes()
    (folder / "mine.json").write_bytes(text[: len(text) // 2])
    with pytest.raises(lv.RecordError, match=r"mine.json: not valid JSON"):
        lv.catalogue.with_folder(folder)


def test_folder_without_cases_is_refused(tmp_path):
    with pytest.raises(lv.RecordError, match="there is no such folder"):
        lv.catalogue.with_folder(tmp_path / "nowhere")
    with pytest.raises(lv.RecordError, match="holds no file"):
        lv.catalogue.with_folder(tmp_path)


def test_ids_are_unique_within_and_across_families():
    family, other = Family(), Family()

    def _warm_plate():
        raise AssertionError

    family(_warm_plate)
    other(_warm_plate)
    with pytest.raises(lv.ProblemError, match="two cases are called 'warm-plate'"):
        family(_warm_plate)
    with pytest.raises(lv.ProblemError, match="two cases are called 'warm-plate'"):
        joined(family, other)


@pytest.mark.parametrize(
    ("wanted", "message"),
    [
        ({"shape": "rectangel"}, "there is no shape 'rectangel'; did you mean 'rectangle'"),
        ({"conditions": {"dirichelt"}}, "there is no condition 'dirichelt'; did you mean 'dirichlet'"),
        ({"tags": {"smoth"}}, "there is no tag 'smoth'; did you mean 'smooth'"),
        ({"dim": "2"}, "dim must be 1, 2 or 3, got '2'"),
    ],
)
def test_a_slip_of_the_pen_does_not_select_nothing(wanted, message):
    with pytest.raises(lv.ProblemError, match=message):
        lv.catalogue.select(**wanted)


def test_a_folder_must_be_a_path():
    with pytest.raises(lv.RecordError, match="named by a path, got 3"):
        lv.catalogue.with_folder(3)
