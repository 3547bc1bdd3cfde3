"""A case kept in a folder comes back the same, and nothing is overwritten."""

import pytest

import laplace_verify as lv
from laplace_verify.errors import ProblemError, RecordError


@pytest.fixture
def plate():
    return lv.case(lv.Rectangle((0, 0), (1, 1)), {"top": "neumann"}, lv.fields.polynomial(2), id="my-plate")


def test_a_saved_case_comes_back_with_its_own_id_or_a_new_one(plate, tmp_path):
    assert lv.save_case(plate, tmp_path / "mine").name == "my-plate.json"
    lv.save_case(plate, tmp_path / "mine", "other-plate", title="Another plate")
    found = lv.catalogue.with_folder(tmp_path / "mine")
    assert len(found) == len(lv.catalogue) + 2
    assert found["other-plate"].title == "Another plate"
    points = plate.problem.shape.sample(9, seed=3)
    assert (found["my-plate"].exact.value(points) == plate.exact.value(points)).all()
    assert found["my-plate"].problem.pieces["top"].kind == "neumann"


def test_the_same_case_may_be_saved_twice_but_no_other_under_its_id(plate, tmp_path):
    assert lv.save_case(plate, tmp_path) == lv.save_case(plate, tmp_path)
    other = lv.case(plate.problem.shape, {}, lv.fields.polynomial(3), id="my-plate")
    with pytest.raises(ProblemError, match="holds another case"):
        lv.save_case(other, tmp_path)


@pytest.mark.parametrize(
    ("id_", "error", "message"),
    [
        ("plate-saddle", ProblemError, "taken by the catalogue"),
        ("../up", ProblemError, "id must be lower-case words"),
    ],
)
def test_bad_ids_are_refused(plate, tmp_path, id_, error, message):
    with pytest.raises(error, match=message):
        lv.save_case(plate, tmp_path, id_)
    assert not list(tmp_path.iterdir())


def test_what_is_no_path_or_cannot_be_written_down_is_refused(plate, tmp_path):
    with pytest.raises(RecordError, match="named by a path"):
        lv.save_case(plate, 7)
    own = lv.case(plate.problem.shape, {}, lv.field(lambda x, y: x + 0 * y), id="own-function")
    with pytest.raises(RecordError):
        lv.save_case(own, tmp_path)
