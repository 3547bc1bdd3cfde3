"""Exceptions: what was given, what was expected, how to mend it.

Every class derives from `LaplaceVerifyError` and from the built-in exception that a caller would expect, so
``except ValueError`` keeps working.
"""

from __future__ import annotations

import traceback
from collections.abc import Iterable
from difflib import get_close_matches

__all__ = [
    "AdapterError",
    "AnswerError",
    "FieldError",
    "GeometryError",
    "LaplaceVerifyError",
    "ProblemError",
    "RecordError",
    "UnknownCaseError",
    "history",
    "nearest_names",
    "told",
]


class LaplaceVerifyError(Exception):
    """Base of every error this package raises on purpose."""


class GeometryError(LaplaceVerifyError, ValueError):
    """A shape, piece or point is not what the geometry needs."""


class FieldError(LaplaceVerifyError, ValueError):
    """A harmonic function is asked for outside its domain of validity, or cannot be built as described."""


class ProblemError(LaplaceVerifyError, ValueError):
    """Shape, conditions, conductivity and field do not make a boundary value problem."""


class UnknownCaseError(ProblemError, KeyError):
    """No case in the catalogue has this id."""

    __str__ = Exception.__str__  # KeyError would show the message in quotes


class AdapterError(LaplaceVerifyError, ValueError):
    """A solver cannot be loaded or declares capabilities that make no sense."""


class AnswerError(LaplaceVerifyError, ValueError):
    """A solver gave back something that cannot be measured."""


class RecordError(LaplaceVerifyError, ValueError):
    """A file of results cannot be read or written."""


def nearest_names(given: str, known: Iterable[str], count: int = 3) -> str:
    """Return a phrase that names the `known` strings most like `given`, or all of them if few.

    >>> nearest_names("dics", ["disc", "box", "ball"])
    "did you mean 'disc'?"
    """
    names = list(known)
    close = get_close_matches(given, names, n=count, cutoff=0.5)
    if close:
        return "did you mean " + " or ".join(repr(name) for name in close) + "?"
    shown = ", ".join(sorted(names)[:12])
    return f"known: {shown}{', ...' if len(names) > 12 else ''}"


def told(cause: BaseException) -> str:
    """Return what an exception of a solver says, with its type unless it is one of ours.

    Safe whatever the solver raises: an exception that cannot print itself, letters that no file can hold.

    >>> told(MemoryError()), told(RuntimeError("pump stopped")), told(AnswerError("h must be positive"))
    ('MemoryError', 'RuntimeError: pump stopped', 'h must be positive')
    """
    if isinstance(cause, LaplaceVerifyError):
        return str(cause)
    return _printable("".join(traceback.format_exception_only(cause)).strip())


def history(cause: BaseException) -> str:
    """Return the traceback of an exception as text that every file can hold."""
    return _printable("".join(traceback.format_exception(cause)))


def _printable(text: str) -> str:
    """Replace what UTF-8 cannot encode (lone surrogates, as in undecodable file names) by its number."""
    return text.encode("utf-8", "backslashreplace").decode("utf-8")
