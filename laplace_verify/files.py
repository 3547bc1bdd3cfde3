"""Files: no reader ever sees half of one that we write; broken JSON is named by file."""

from __future__ import annotations

import contextlib
import os
from pathlib import Path
from typing import Any

import msgspec

from laplace_verify.errors import RecordError

__all__ = ["json_content", "write_atomically"]


def json_content(data: bytes, name: str) -> Any:
    """Return what the JSON in `data` says, as dicts, lists, texts and numbers.

    Raises
    ------
    RecordError
        If it is truncated, malformed, or nested too deeply; `name` says which file it is.

    Examples
    --------
    >>> json_content(b'{"a": [1', "plate.json")
    Traceback (most recent call last):
    ...
    laplace_verify.errors.RecordError: plate.json: not valid JSON: Input data was truncated
    """
    try:
        return msgspec.json.decode(data)
    except (msgspec.DecodeError, UnicodeDecodeError) as cause:
        raise RecordError(f"{name}: not valid JSON: {cause}") from cause
    except RecursionError as cause:
        raise RecordError(f"{name}: nested too deeply") from cause


def write_atomically(path: Path, data: bytes) -> None:
    """Write `data` to a temporary neighbour of `path` and move it there; missing folders are made.

    Raises
    ------
    RecordError
        If folder or file cannot be written.
    """
    temporary = path.with_name(f".{path.name}.{os.getpid()}.part")
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        temporary.write_bytes(data)
        os.replace(temporary, path)
    except OSError as cause:
        with contextlib.suppress(OSError):
            temporary.unlink(missing_ok=True)
        raise RecordError(
            f"cannot write {path}: {cause.strerror or cause}; choose a folder you may write to"
        ) from cause
