"""Specifications from strangers: refused with a reason, never executed."""

import json

import pytest

from laplace_verify import fields
from laplace_verify.errors import FieldError

AFFINE = {"kind": "affine", "coefficients": [1, 2], "constant": 0}


def nested(levels):
    spec = AFFINE
    for _ in range(levels):
        spec = {"kind": "scaled", "field": spec, "factor": 2}
    return spec


@pytest.mark.parametrize(
    ("spec", "reason"),
    [
        (None, 'must be a dict with a "kind"'),
        ([], 'must be a dict with a "kind"'),
        ({}, 'must be a dict with a "kind"'),
        ({"kind": 3}, 'must be a dict with a "kind"'),
        ({"kind": "afine"}, "unknown kind of field 'afine'; did you mean 'affine'"),
        ({"kind": "Field"}, "unknown kind of field"),
        ({"kind": "affine"}, "cannot be made of"),
        ({**AFFINE, "colour": 1}, "cannot be made of"),
        ({**AFFINE, "coefficients": 3}, "coefficients must be a tuple"),
        ({**AFFINE, "constant": "__import__('os')"}, "constant must be a decimal"),
        ({**AFFINE, "constant": float("nan")}, "constant must be finite"),
        ({**AFFINE, "constant": True}, "constant must be a number"),
        ({"kind": "formula", "text": "x", "dim": 9}, "dim must be a whole number from 1 to 3"),
        ({"kind": "formula", "text": ["x"], "dim": 1}, "a formula must be a string"),
        ({"kind": "shifted", "field": 3, "vector": [1, 2]}, "a field was expected"),
        (
            {"kind": "shifted", "field": {"kind": "nothing"}, "vector": [1, 2]},
            "unknown kind of field 'nothing'",
        ),
        ({"kind": "sum", "factors": [1], "terms": []}, "one factor per term"),
        ({"kind": "sum", "factors": [1], "terms": [3]}, "must be fields"),
        ({"kind": "sum", "factors": [1, 1], "terms": [AFFINE]}, "one factor per term"),
        ({"kind": "polynomial", "degree": 10**9}, "degree must be a whole number"),
        (nested(60), "nested 40 levels deep"),
        ({**AFFINE, "constant": [[[[1]]]]}, "constant must be a real number"),
    ],
)
def test_bad_specifications(spec, reason):
    with pytest.raises(FieldError, match=reason):
        fields.from_spec(spec)


def test_lists_nested_without_end_are_refused():
    lists = 1
    for _ in range(900):
        lists = [lists]
    with pytest.raises(FieldError, match="nested 40 levels deep"):
        fields.from_spec({**AFFINE, "coefficients": lists})


def test_thirty_levels_are_read():
    assert fields.from_spec(nested(30)).value([[2.0**30, 0]]).tolist() == [1]


def test_fractions_and_singular_points_survive():
    points = [fields.Singularity(point=(0, 0), exponent=2 / 3, kind="power"), (1, 2)]
    u = fields.field("r**(2/3)*sin(2*theta/3)", singular=points) * "1/3"
    spec = json.loads(json.dumps(u.spec()))
    assert spec["factors"] == ["1/3"]
    assert fields.from_spec(spec) == u
    assert fields.from_spec(spec).singularities == u.singularities


def test_infinite_numbers_are_not_written():
    pole = fields.Singularity(point=(0, 0), exponent=-float("inf"), kind="pole")
    with pytest.raises(FieldError, match="-inf cannot be written to a file"):
        fields.field("x*y", singular=[pole]).spec()


def test_floats_keep_their_binary_value():
    u = fields.affine((0.1, 1e-300), 1 / 3)
    again = fields.from_spec(json.loads(json.dumps(u.spec())))
    assert again.coefficients == (0.1, 1e-300)
    assert again.constant == 1 / 3
