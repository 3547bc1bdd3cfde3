"""Shapes as plain data and back."""

import json

import pytest

import laplace_verify as lv
from laplace_verify.geometry import shape_from_spec, shape_to_spec


def test_every_shape_survives_json(shape):
    text = json.dumps(shape_to_spec(shape))
    again = shape_from_spec(json.loads(text))
    assert again == shape
    assert type(again) is type(shape)
    assert again.pieces.names == shape.pieces.names


def test_numbers_survive_exactly():
    odd = lv.Disc((0.1 + 0.2, 1e-17), 1 / 3)
    assert shape_from_spec(json.loads(json.dumps(shape_to_spec(odd)))) == odd


def test_a_spec_reads_like_the_call():
    assert shape_to_spec(lv.LShape(2)) == {"kind": "l-shape", "size": 2.0}
    assert shape_to_spec(lv.Annulus((0, 0), 1, 2)) == {
        "kind": "annulus", "centre": [0.0, 0.0], "inner": 1.0, "outer": 2.0,
    }  # fmt: skip


@pytest.mark.parametrize(
    ("spec", "message"),
    [
        ("disc", "a shape must be a table with the field 'kind', got str"),
        ({}, "kind None is no shape; known:"),
        ({"kind": "dics"}, "kind 'dics' is no shape; did you mean 'disc'"),
        ({"kind": ["disc"]}, "is no shape"),
        ({"kind": "disc", "centre": [0, 0]}, "a disc needs the field 'radius'"),
        ({"kind": "disc", "centre": [0, 0], "radius": 1, "radios": 2},
         "a disc has no field 'radios'; did you mean 'radius'"),
        ({"kind": "disc", "centre": [0, 0], "radius": -1}, "radius must be > 0, got -1"),
        ({"kind": "disc", "centre": [0, 0], "radius": "one"}, "radius must be a number, got 'one'"),
        ({"kind": "disc", "centre": None, "radius": 1}, "centre must be 2 numbers"),
        ({"kind": "disc", "centre": [0, 0], "radius": 1, "splits": []}, "a disc has no field 'splits'"),
        ({"kind": "disc", "centre": [0, 0], "radius": 1, "split": [0.5]}, "split must be a table"),
        ({"kind": "disc", "centre": [0, 0], "radius": 1, "split": {"rim": [2]}},
         "fractions of 'rim' must rise"),
        ({"kind": "polygon", "vertices": [[0, 0], [1, 0], [0, 1]], "holes": 3}, "holes must be a list"),
    ],
)  # fmt: skip
def test_specs_that_are_wrong_name_the_field(spec, message):
    with pytest.raises(lv.GeometryError, match=message):
        shape_from_spec(spec)


def test_foreign_shapes_are_refused():
    class Mine(lv.Rectangle):
        pass

    with pytest.raises(
        lv.GeometryError, match="only the shapes of this package can be written down, got Mine"
    ):
        shape_to_spec(Mine((0, 0), (1, 1)))
