"""The record goes to JSON and comes back the same; a damaged file names the field at fault."""

import json
import math
import os

import pytest

import laplace_verify as lv
from laplace_verify.campaign.record import (
    FORMAT_VERSION,
    CaseInfo,
    Environment,
    PieceInfo,
    Record,
    RegularityInfo,
    Settings,
    SolverIdentity,
    record_from_json,
    record_to_json,
)
from laplace_verify.errors import RecordError
from laplace_verify.measure.results import ErrorMap, Level, Order, Study
from laplace_verify.measure.verdict import Verdict
from laplace_verify.principles.results import Check


@pytest.fixture
def record():
    levels = [
        Level(
            size=n, h=1 / n, unknowns=n * n, seconds=0.1, errors={"max": 1 / n**2}, relative={"max": math.nan}
        )
        for n in (8, 16, 32)
    ]
    order = Order(
        observed=2.0, low=1.9, high=2.1, formal="exponential", expected=None, decides=True, pairs=[2.0, None]
    )
    study = Study(
        solver="pool model",
        case_id="plate",
        case_title="Plate",
        verdict=Verdict.PASS,
        sizes=[8, 16, 32],
        seed=3,
        levels=levels,
        orders={"max": order},
        features={"tensor": False, "dim": 2.0, "shape": "disc", "none": None},
        error_map=ErrorMap(
            size=32, points=[[0.25, 0.5], [0.1, 0.2], [1 / 3, 0.1]], errors=[1e-3, -1e-300, 0.1]
        ),
    )
    check = Check(
        law="mean value", verdict=Verdict.FAIL, violation=math.inf, tolerance=1e-6, points=((0.1, 0.2),)
    )
    case = CaseInfo(
        id="plate",
        title="Plate",
        dim=2,
        shape="rectangle",
        pieces=(PieceInfo(name="top", condition="neumann", outline=((0.0, 1.0), (1.0, 1.0))),),
        regularity=RegularityInfo(solution=math.inf, domain=2.0, scale=1.0),
    )
    return Record(
        package_version="0.1.0",
        solver=SolverIdentity(name="pool model", kind="finite difference", order="2"),
        environment=Environment(python="3.12", numpy="2.0", scipy="1.12", platform="Linux", cpus=2),
        settings=Settings(seed=3, sizes=(8, 16, 32)),
        studies=(study,),
        checks=(check,),
        cases=(case,),
    )


def changed(record, change):
    """Return the JSON of the record after `change` was applied to the plain data."""
    plain = json.loads(record_to_json(record))
    change(plain)
    return json.dumps(plain).encode()


def test_record_reads_back_the_same(record, tmp_path):
    path = tmp_path / "new folder" / "record.json"
    data = record_to_json(record, path)
    assert path.read_bytes() == data
    back = record_from_json(path)
    assert record_to_json(back) == data
    assert back.studies[0].verdict is Verdict.PASS
    assert back.studies[0].error_map.errors == [1e-3, -1e-300, 0.1]  # to the last bit
    assert math.isnan(back.studies[0].levels[0].relative["max"])
    assert back.checks[0].violation == math.inf
    assert back.cases[0].regularity.solution == math.inf
    assert back.studies[0].orders["max"].pairs == [2.0, None]
    assert back.case("plate").title == "Plate"
    assert back.case("dam") is None


def test_json_is_standard_json_with_format_and_version(record):
    plain = json.loads(record_to_json(record), parse_constant=pytest.fail)  # NaN and Infinity are not JSON
    assert plain["format"] == "laplace-verify record"
    assert plain["format_version"] == FORMAT_VERSION
    assert plain["cases"][0]["regularity"]["solution"] == {"number": "inf"}


def test_no_temporary_file_is_left_behind(record, tmp_path):
    record_to_json(record, tmp_path / "record.json")
    assert os.listdir(tmp_path) == ["record.json"]


def test_words_that_look_like_numbers_stay_words(record):
    data = changed(record, lambda plain: plain["solver"].update(name="nan"))
    assert record_from_json(data).solver.name == "nan"


@pytest.mark.parametrize(
    ("change", "message"),
    [
        (lambda p: p.update(format="something else"), "field 'format' must be 'laplace-verify record'"),
        (lambda p: p.pop("format"), "not a record"),
        (lambda p: p.update(format_version=FORMAT_VERSION + 1), "update laplace-verify"),
        (lambda p: p.update(format_version="1"), "'format_version' must be a positive integer, got '1'"),
        (lambda p: p["settings"].update(seed="three"), r"field 'settings\.seed': Expected `int`, got `str`"),
        (lambda p: p["studies"][0].update(verdict="MAYBE"), r"field 'studies\[0\]\.verdict'"),
        (lambda p: p["studies"][0]["levels"][1].pop("h"), r"field 'studies\[0\]\.levels\[1\]': .*`h`"),
        (lambda p: p.pop("solver"), "missing required field `solver`"),
    ],
)
def test_damaged_record_names_the_field(record, change, message):
    with pytest.raises(RecordError, match=message):
        record_from_json(changed(record, change))


@pytest.mark.parametrize("data", [b"", b"{", b"\xff\xfe", b"[1, 2]", b"3"])
def test_what_is_no_record_is_refused(data):
    with pytest.raises(RecordError, match=r"record: not (valid JSON|a record)"):
        record_from_json(data)


def test_missing_file_and_unwritable_folder_are_named(record, tmp_path):
    with pytest.raises(RecordError, match=r"cannot read .*absent\.json"):
        record_from_json(tmp_path / "absent.json")
    (tmp_path / "file").write_text("in the way")
    with pytest.raises(RecordError, match=r"cannot write .*record\.json.*choose a folder"):
        record_to_json(record, tmp_path / "file" / "record.json")


def test_what_is_no_plain_data_is_refused(record):
    record.solver.capabilities["shapes"] = object()
    with pytest.raises(RecordError, match="not plain data"):
        record_to_json(record)


@pytest.mark.parametrize("use", [lv.diagnose, lambda what: lv.write_report(what, "nowhere")])
def test_what_is_no_record_is_refused_by_name(use):
    with pytest.raises(lv.RecordError, match="a Record is needed, as `verify` returns it, got int"):
        use(3)
