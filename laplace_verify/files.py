"""Write a file so that no reader ever sees half of it."""

from __future__ import annotations

import contextlib
import os
from pathlib import Path

from laplace_verify.errors import RecordError

__all__ = ["write_atomically"]


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
