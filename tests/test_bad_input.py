"""Tables of bad calls: each raises one of our errors, which says what is wrong and how to mend it."""

import json
import math
from functools import partial

import pytest

import laplace_verify as lv
from laplace_verify.campaign import record_from_json, record_to_json
from laplace_verify.cli import main
from laplace_verify.errors import UnknownCaseError
from laplace_verify.problems import case_from_json, case_to_json
from laplace_verify.references import folder as reference_files
from laplace_verify.references import load_reference

SOURCE = lv.fields.log_source((0, 0))
WEDGE = lv.fields.wedge("1/2", cut=math.pi)
PLATE = lv.catalogue["plate-saddle"]
FIT = lv.catalogue["l-basin-smooth-data"]  # most digits 49
LAYERED = lv.catalogue["plate-layers-across"]
ILL_POSED = lv.catalogue["plate-unbalanced-flux"]
TOO_MANY = FIT.exact.most_digits + 1

POINTS = {
    "wrong dimension": (
        [[1.0, 2.0, 3.0]],
        r"points must have shape \(n, 2\), one row per point, got \(1, 3\)",
    ),
    "one flat point": ([1.0, 2.0], r"must have shape \(n, 2\), one row per point, got \(2,\)"),
    "not a number": ([[0.3, math.nan]], r"points must be finite, but row 0 is \[0.3, nan\]"),
    "infinite": ([[0.3, 0.2], [math.inf, 0.1]], r"points must be finite, but row 1 is \[inf, 0.1\]"),
    "text": ([["a", "b"]], r"points must be numbers of shape \(n, 2\), got list"),
    "complex": ([[1j, 2]], r"points must be numbers of shape \(n, 2\), got list \[\[1j, 2\]\]"),
    "ragged": ([[1.0, 2.0], [3.0]], "points must be numbers"),
}
PRECISE = {
    "wrong dimension": (("1",), "point must have 2 coordinates, got 1"),
    "not a number": ((math.nan, 0), r"point\[0\] must be finite"),
    "no number": (
        ("a", 0),
        r'point\[0\] must be a decimal such as "0.25" or a fraction such as "2/3", got \'a\'',
    ),
    "divided by zero": ((0, "1/0"), r"point\[1\] is no number: '1/0'"),
    "nothing": (None, r"point\[0\] must be a real number, got NoneType"),
}
DIGITS = (0, -3, 201, 10**6, 1.5, True, "30", None, math.nan)


@pytest.mark.parametrize(
    "field", [SOURCE, PLATE.exact, FIT.exact, LAYERED.exact], ids=lambda f: f.formula[:20]
)
@pytest.mark.parametrize("name", POINTS)
def test_points_no_field_can_be_evaluated_at(field, name):
    points, message = POINTS[name]
    for ask in (field.value, field.gradient):
        with pytest.raises(lv.FieldError, match=message):
            ask(points)


@pytest.mark.parametrize("name", PRECISE)
def test_precise_points_no_field_can_be_evaluated_at(name):
    point, message = PRECISE[name]
    for ask in (PLATE.exact.at, PLATE.exact.gradient_at, PLATE.exact.enclosure):
        with pytest.raises(lv.FieldError, match=message):
            ask(point)


@pytest.mark.parametrize("digits", DIGITS)
def test_digits_out_of_range(digits):
    for ask in (PLATE.exact.at, PLATE.exact.gradient_at, PLATE.exact.enclosure):
        with pytest.raises(lv.FieldError, match="digits must be a whole number from 1 to 200, got"):
            ask((1, 2), digits)


def test_two_hundred_digits_are_given_and_one_is():
    assert float(SOURCE.at(("1/3", 0), 200)) == pytest.approx(-math.log(3), rel=1e-15)
    assert float(SOURCE.at(("1/3", 0), 1)) == pytest.approx(-math.log(3), rel=0.1)


AT_A_PLACE = {
    "pole": (
        partial(SOURCE.value, [[1, 0], [0, 0]]),
        r"is infinite at point 1 = \(0.0, 0.0\); leave this point",
    ),
    "pole, precise": (partial(SOURCE.at, ("0", "0")), r"is infinite at point \(0, 0\); leave this point out"),
    "infinite gradient": (partial(WEDGE.gradient, [[0, 0]]), "gradient of .* is infinite at point 0"),
    "cut without a side": (partial(WEDGE.value, [[-1, 0]]), r"has two values at point 0 .* side=\+1"),
    "cut, precise": (partial(WEDGE.at, ("-1", 0)), r"has two values at point \(-1, 0\).*say side=\+1"),
    "no side": (partial(WEDGE.value, [[-1, 0]], side=2), r"side must be None, \+1 or -1"),
    "side in words": (partial(WEDGE.value, [[-1, 0]], side="left"), "side must be None, .* got 'left'"),
    "unknown region": (partial(LAYERED.exact.gradient, [[0, 0]], region="lair"), "no region is named 'lair'"),
    "beyond the fit's digits": (
        partial(FIT.exact.at, ("0.5", "0.3"), TOO_MANY),
        rf"{TOO_MANY} digits were asked for, but the field is a fit whose error bound leaves {TOO_MANY - 1}",
    ),
    "outside a fit": (partial(FIT.exact.value, [[50, 50]]), "is not defined at point 0"),
    "ill-posed": (partial(ILL_POSED.exact.at, ("0.5", "0.5")), "there is no exact solution to evaluate"),
}


@pytest.mark.parametrize("name", AT_A_PLACE)
def test_places_where_a_field_has_no_value(name):
    call, message = AT_A_PLACE[name]
    with pytest.raises(lv.FieldError, match=message) as caught:
        call()
    assert len(str(caught.value)) < 400  # the formula of a fit is longer than that


SQUARE = lv.Rectangle((0, 0), (1, 1))
NAMES = {
    "misspelt case": (lambda: lv.catalogue["plate-sadle"], UnknownCaseError, "did you mean 'plate-saddle'"),
    "number for a case": (lambda: lv.catalogue[3], UnknownCaseError, "asked for by its id, a text"),
    "list for a case": (
        lambda: lv.catalogue[["plate-saddle"]],
        UnknownCaseError,
        "asked for by its id, a text",
    ),
    "misspelt reference": (lambda: load_reference("plate-sadle"), UnknownCaseError, "'plate-saddle'"),
    "misspelt piece": (lambda: PLATE.problem.pieces["lft"], lv.ProblemError, "did you mean 'left'"),
    "point off a piece": (
        lambda: PLATE.problem.pieces["left"].data([[0.5, 0.5]]),
        lv.ProblemError,
        "not on piece 'left'",
    ),
    "quantity outside": (
        lambda: lv.case(SQUARE, {}, lv.fields.affine((1, 0)), quantities={"u": lv.value_at((3, 3))}),
        lv.ProblemError,
        r"quantity 'u': the point \(3.0, 3.0\) lies outside",
    ),
    "level outside": (
        lambda: lv.problem(
            SQUARE, {name: lv.neumann(0) for name in SQUARE.pieces.names}, constant=("point", (3, 3), 1)
        ),
        lv.ProblemError,
        r"point of constant must lie in the shape, got \[3.0, 3.0\]",
    ),
    "misspelt choice": (
        lambda: lv.catalogue.select(ill_posed="yes"),
        lv.ProblemError,
        "must be True, False or",
    ),
}


@pytest.mark.parametrize("name", NAMES)
def test_names_and_places_that_do_not_exist(name):
    call, error, message = NAMES[name]
    with pytest.raises(error, match=message):
        call()


# -- files: truncated, corrupted, of the wrong kind ------------------------------------------------------

CASE = case_to_json(PLATE)
RECORD = record_to_json(
    lv.verify("laplace_verify.solvers.samples:five_point", ["plate-affine"], principles=False)
)
READERS = {
    "case": (CASE, lambda data: case_from_json(data, "mine.json"), r"^mine\.json: "),
    "record": (RECORD, record_from_json, "^record: "),
}
BROKEN = {
    "empty": lambda data: b"",
    "truncated": lambda data: data[: len(data) // 2],
    "no JSON": lambda data: b"plate: 3",
    "bytes": lambda data: b"\xff\xfe\x00",
    "too deep": lambda data: b"[" * 100_000,
    "a list": lambda data: b"[]",
    "another format": lambda data: data.replace(b'"laplace-verify ', b'"other ', 1),
    "a newer version": lambda data: data.replace(b'"format_version": ', b'"format_version": 9', 1),
}


@pytest.mark.parametrize("reader", READERS)
@pytest.mark.parametrize("fault", BROKEN)
def test_a_file_that_is_broken_is_named(reader, fault):
    data, read, name = READERS[reader]
    read(data)
    with pytest.raises(lv.RecordError, match=name):
        read(BROKEN[fault](data))


@pytest.mark.parametrize(
    ("reader", "field"), [(r, f) for r, row in READERS.items() for f in json.loads(row[0])]
)
def test_a_field_of_the_wrong_type_is_named(reader, field):
    data, read, name = READERS[reader]
    content = json.loads(data)
    content[field] = 7 if isinstance(content[field], dict | list | str | None) else "seven"
    with pytest.raises(lv.RecordError, match=rf"{name}.*{field}"):
        read(json.dumps(content).encode())


@pytest.mark.parametrize("field", [f for f in json.loads(CASE) if f != "format"])
def test_a_field_that_is_missing_from_a_case_is_named(field):
    content = json.loads(CASE)
    del content[field]
    with pytest.raises(lv.RecordError, match=rf"^mine\.json: .*{field}"):
        case_from_json(json.dumps(content).encode(), "mine.json")


def test_a_fault_deep_inside_is_named_with_its_place():
    content = json.loads(RECORD)
    content["studies"][0]["levels"][0]["h"] = "wide"
    with pytest.raises(
        lv.RecordError, match=r"field 'studies\[0\]\.levels\[0\]\.h': Expected `float`, got `str`"
    ):
        record_from_json(json.dumps(content).encode())


@pytest.mark.parametrize("source", [3, None, ["a"]])
def test_a_record_is_read_from_a_path_or_bytes(source):
    with pytest.raises(lv.RecordError, match="read from a path or from bytes, got"):
        record_from_json(source)


def test_files_that_are_not_there(tmp_path):
    with pytest.raises(lv.RecordError, match=r"cannot read .*record.json: No such file"):
        record_from_json(tmp_path / "record.json")
    with pytest.raises(lv.RecordError, match="there is no such folder"):
        lv.catalogue.with_folder(tmp_path / "cases")


def test_a_truncated_reference_file_is_named(tmp_path, monkeypatch):
    (tmp_path / "plate-saddle.json").write_bytes(CASE[:300])
    monkeypatch.setattr(reference_files, "PLACES", (tmp_path,))
    with pytest.raises(lv.RecordError, match=r"^plate-saddle\.json: not valid JSON: .*truncated"):
        load_reference("plate-saddle")


# -- the command line ------------------------------------------------------------------------------------

COMMANDS = {
    "value plate-saddle 50 0.5": "the point (50, 0.5) lies outside the rectangle",
    "value plate-saddle 0.5": "point must have 2 coordinates, got 1",
    "value plate-saddle 0.5 nan": "point[1] must be a decimal",
    "value plate-saddle 1/0 0.5": "point[0] is no number: '1/0'",
    "value plate-saddle 0.5 0.5 --digits 0": "digits must be a whole number from 1 to 200, got 0",
    "value plate-saddle 0.5 0.5 --digits 500": "digits must be a whole number from 1 to 200, got 500",
    f"value l-basin-smooth-data 0.5 0.3 --digits {TOO_MANY}": "is a fit whose error bound leaves",
    "value plate-sadle 0.5 0.5": "did you mean 'plate-saddle'",
    "value plate-unbalanced-flux 0.5 0.5": "there is no exact solution to evaluate: the problem is ill-posed",
    "show plate-sadle": "did you mean 'plate-saddle'",
    "run laplace_verify.solvers.samples:five_point --cases plate-sadle": "did you mean 'plate-saddle'",
    "report no-such-record.json": "cannot read no-such-record.json",
}


@pytest.mark.parametrize("command", COMMANDS)
def test_a_request_that_cannot_be_understood_is_status_2(command, capsys):
    assert main(command.split()) == 2
    shown = capsys.readouterr()
    assert COMMANDS[command] in shown.err
    assert shown.out == ""
    assert "Traceback" not in shown.err


def test_digits_that_are_no_number_are_status_2(capsys):
    with pytest.raises(SystemExit) as left:
        main(["value", "plate-saddle", "0.5", "0.5", "--digits", "many"])
    assert left.value.code == 2
    assert "invalid int value: 'many'" in capsys.readouterr().err
