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


def test_what_an_exception_says_can_be_written_to_any_file():
    cause = RuntimeError("no file \udcff.dat")
    assert errors.told(cause) == "RuntimeError: no file \\udcff.dat"
    assert errors.history(cause).encode("utf-8").endswith(b"\\udcff.dat\n")
    assert errors.told(errors.AnswerError("h must be positive")) == "h must be positive"
    assert errors.told(MemoryError()) == "MemoryError"
