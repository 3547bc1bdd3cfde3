from __future__ import annotations

import dataclasses
import json

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.problems import StoredValue, case_from_json, case_to_json, energy_of_solution


@pytest.fixture
def case():
    made = lv.case(
        lv.LShape(1.0).split(**{"side-3": [0.25]}),
        {"side-2": "neumann", "side-3-1": lv.robin(1.5), "side-4": lv.robin("2 + x")},
        lv.fields.wedge("2/3") + "0.1" * lv.fields.polynomial(2),
        id="hall-corner",
        title="Re-entrant corner",
        statement="A hall of the Marram Bay works with a re-entrant corner.",
        reading="Seepage potential under the dam's heel.",
        tags=("corner", "mixed"),
        sources=("derived here",),
        quantities={
            "flux": lv.flux_through("side-1"),
            "spot": lv.value_at((-0.5, 0.5)),
            "energy": energy_of_solution(),
        },
    )
    value = StoredValue(
        point=("-0.5", "0.5"), value="0.7937", gradient=("0.1", "-2e-3"), radius="1e-4", basis="closed form",
        gradient_radius="2e-3", place="inside",
    )  # fmt: skip
    return dataclasses.replace(made, stored=(value,))


@pytest.fixture
def content(case):
    return json.loads(case_to_json(case))


def read(content):
    return case_from_json(json.dumps(content).encode(), "hall.json")


def test_the_round_trip_keeps_every_byte(case) -> None:
    text = case_to_json(case)
    again = case_from_json(text)
    assert case_to_json(again) == text
    assert text.endswith(b"}\n")
    assert text == case_to_json(case)


def test_the_round_trip_keeps_data_quantities_and_words(case) -> None:
    again = case_from_json(case_to_json(case))
    for piece in case.problem.pieces:
        points = piece.sample(3)[0]
        assert again.problem.pieces[piece.name].data(points).tolist() == piece.data(points).tolist()
    assert dict(again.quantities) == dict(case.quantities)
    assert (again.id, again.title, again.tags, again.sources) == (
        case.id,
        case.title,
        case.tags,
        case.sources,
    )
    assert again.stored == case.stored
    assert again.problem.pieces["side-4"].alpha([[-1.0, 0.5]]).tolist() == [1.0]


@pytest.mark.parametrize(
    "make",
    [
        pytest.param(lambda: lv.case(lv.Interval(0, 1), {}, lv.fields.affine((2,)), 3.0), id="1-D"),
        pytest.param(
            lambda: lv.case(
                lv.Disc((0, 0), 1.0),
                {"rim": "neumann"},
                lv.fields.polynomial(2),
                constant=("point", (0, 0), 0),
            ),
            id="pure Neumann, point",
        ),
        pytest.param(
            lambda: lv.case(lv.Ball((0, 0, 0), 1.0), {"surface": "neumann"}, lv.fields.affine((1, 0, 0), 2)),
            id="pure Neumann, mean",
        ),
        pytest.param(
            lambda: lv.case(
                lv.Rectangle((0, 0), (1, 1)),
                {},
                lv.field("x**2 - 2*y**2"),
                np.array([[2.0, 0.0], [0.0, 1.0]]),
            ),
            id="tensor and formula",
        ),
        pytest.param(
            lambda: lv.case(
                lv.Rectangle((0, 0), (1, 1)),
                {"top": lv.robin(2)},
                lv.fields.exp_trig(2),
                quantities={"q": lv.flux_through("top")},
            ).scaled(length=(0.3, "m"), value=(40, "K"), conductivity=(16, "W/(m K)")),
            id="dimensional twin",
        ),
    ],
)
def test_every_form_of_case_survives(make) -> None:
    text = case_to_json(make())
    assert case_to_json(case_from_json(text)) == text


def test_smooth_exponents_are_null_and_singular_ones_numbers(content) -> None:
    assert content["regularity"]["solution"] == pytest.approx(2 / 3, abs=1e-12)
    smooth = json.loads(case_to_json(lv.case(lv.Disc((0, 0), 1.0), {}, lv.fields.polynomial(1))))
    assert smooth["regularity"]["solution"] is None


def test_a_file_of_version_one_has_one_radius_for_value_and_gradient(content) -> None:
    content["format_version"] = 1
    del content["stored"][0]["gradient_radius"], content["stored"][0]["place"]
    stored = read(content).stored[0]
    assert (stored.radius, stored.gradient_radius, stored.place) == ("1e-4", "1e-4", "")


def test_quantities_are_decimal_strings_with_a_radius(content) -> None:
    flux = content["quantities"]["flux"]
    assert abs(float(flux["value"]) - -1.0) <= float(flux["radius"]) < 1e-8


@pytest.mark.parametrize(
    ("path", "value", "message"),
    [
        (("format",), "other", "not a case file"),
        (("format_version",), 3, "format_version 3 cannot be read, only 1 and 2"),
        (("id",), 3, r"Expected `str`, got `int` - at `\$\.id`"),
        (("colour",), "red", "unknown field `colour`"),
        (("dim",), 3, "dim is 3, but the shape has dimension 2"),
        (("shape", "size"), -1.0, "shape: .*size"),
        (("shape", "kind"), "l-shap", "shape: .*did you mean 'l-shape'"),
        (("conductivity",), -1.0, "problem: conductivity must be > 0"),
        (("conductivity",), "1", r"conductivity"),
        (("conditions", "side-2", "kind"), "insulated", r"Invalid enum value 'insulated'.*conditions"),
        (("conditions", "side-3-1", "alpha"), -1.5, "conditions: Robin's alpha must be >= 0"),
        (("conditions", "side-9"), {"kind": "neumann"}, "problem: conditions name an unknown piece 'side-9'"),
        (("exact", "field", "kind"), "wegde", "exact.field: .*"),
        (("exact", "field"), {"kind": "polynomial", "degree": 2}, "exact.field"),
        (("regularity", "solution"), 1.5, "regularity.solution is 1.5, but shape and exact field give 0.66"),
        (("regularity", "domain"), None, "regularity.domain is None"),
        (("regularity", "singular_points"), [], r"regularity.singular_points is \[\]"),
        (("quantities", "flux", "value"), "-1.1", "quantities.flux: value is -1.1"),
        (("quantities", "flux", "value"), "one", "quantities.flux: value and radius must be decimal"),
        (("quantities", "flux", "radius"), "-1", "quantities.flux"),
        (("quantities", "flux", "where"), "side-7", "quantity 'flux': no piece"),
        (("stored", 0, "basis"), "hope", "stored: unknown basis 'hope'"),
        (("stored", 0, "value"), 0.79, r"Expected `str`, got `float` - at `\$\.stored\[0\]\.value`"),
        (("stored", 0, "value"), "nan", "stored: value of a stored value must be a decimal"),
        (("stored", 0, "radius"), "-1", "stored: radius of a stored value must be >= 0"),
        (
            ("stored", 0, "gradient_radius"),
            "nan",
            "stored: gradient_radius of a stored value must be a decimal",
        ),
        (("stored", 0, "gradient_radius"), "-1", "stored: gradient_radius of a stored value must be >= 0"),
        (("stored", 0, "value"), "0.7939", "stored: value at .* is 0.7939 .*, the exact field gives 0.7937"),
        (("stored", 0, "point"), ["-1.5", "0.5"], "stored: the point .* lies outside the shape"),
        (("stored", 0, "point"), ["0.5"], "stored: .*needs 1 derivatives"),
        (("stored", 0, "gradient"), ["1"], "stored: .* needs 2 derivatives"),
    ],
)
def test_a_spoilt_file_is_refused_by_file_and_field(content, path, value, message) -> None:
    target = content
    for key in path[:-1]:
        target = target[key]
    target[path[-1]] = value
    with pytest.raises(lv.RecordError, match=f"hall.json: .*{message}|hall.json: {message}"):
        read(content)


def test_a_missing_field_is_named(content) -> None:
    del content["exact"]["field"]
    with pytest.raises(lv.RecordError, match=r"hall\.json: .*missing required field `field`.*exact"):
        read(content)


@pytest.mark.parametrize("data", [b"", b"{", b"[1]", b"\xff\xfe", b"3", b"[" * 100000])
def test_what_is_no_json_object_is_refused(data) -> None:
    with pytest.raises(lv.RecordError, match=r"hall\.json: "):
        case_from_json(data, "hall.json")


def test_functions_cannot_be_written(square) -> None:
    opaque = lv.case(square, {}, lv.field(lambda x, y: x * y))
    with pytest.raises(lv.RecordError, match=r"case 'case': exact: .*give a formula string"):
        case_to_json(opaque)
    robin = lv.case(square, {"top": lv.robin(lambda x, _y: 1 + x)}, lv.fields.polynomial(2))
    with pytest.raises(lv.RecordError, match="alpha of piece 'top' is a function"):
        case_to_json(robin)
