"""Exceptions derive from the built-in that a caller expects; unknown names get the nearest known ones."""

import pytest

from laplace_verify import errors


@pytest.mark.parametrize(
    ("name", "builtin"),
    [
        ("GeometryError", ValueError),
        ("FieldError", ValueError),
        ("ProblemError", ValueError),
        ("UnknownCaseError", KeyError),
        ("AdapterError", ValueError),
        ("AnswerError", ValueError),
        ("RecordError", ValueError),
    ],
)
def test_errors_derive_from_the_matching_builtin(name, builtin):
    kind = getattr(errors, name)
    assert issubclass(kind, builtin)
    assert issubclass(kind, errors.LaplaceVerifyError)
    assert str(kind("a message")) == "a message"


def test_near_names_are_suggested_and_far_ones_listed():
    assert errors.nearest_names("bottm", ["top", "bottom"]) == "did you mean 'bottom'?"
    assert errors.nearest_names("zzz", ["top", "bottom"]) == "known: bottom, top"
